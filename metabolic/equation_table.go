package metabolic

import (
	_ "embed"
	"encoding/csv"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
	"sync"
)

//go:embed data/equations.csv
var equationsCSV string

// equationColumns is the head of data/equations.csv.
var equationColumns = []string{
	"id", "animals", "applies_to", "thermy", "kind", "form", "a", "b", "c", "mass_unit", "rate_unit",
	"t0_c", "t_low_c", "t_high_c", "mass_low_kg", "mass_high_kg", "n", "residual_sd_log10", "level",
	"default_for", "low_confidence", "citation", "verified", "note",
}

// equations is the table, read when it is first asked for: a draft by group
// constants starts without it.
var equations = sync.OnceValue(func() []*Equation {
	table, err := readEquations(strings.NewReader(equationsCSV))
	if err != nil {
		panic("metabolic: data/equations.csv: " + err.Error()) // embedded: a test reads it before it ships
	}
	return table
})

// Equations gives every published line, in the order of the table. The lines
// are shared and must not be changed.
func Equations() []*Equation { return slices.Clone(equations()) }

// FindEquation gives the line with an id. It reads that row alone, since most
// drafts need one or two of the table.
func FindEquation(id string) (*Equation, bool) {
	if e, ok := equationRows.Load(id); ok {
		return e.(*Equation), true
	}
	if strings.ContainsAny(id, ",\"\n") {
		return nil, false
	}
	_, rest, ok := strings.Cut(equationsCSV, "\n"+id+",")
	if !ok {
		return nil, false
	}
	row, _, _ := strings.Cut(rest, "\n")
	record, err := csv.NewReader(strings.NewReader(id + "," + row)).Read()
	if err != nil || len(record) != len(equationColumns) {
		panic("metabolic: data/equations.csv: " + id) // embedded: a test reads every row before it ships
	}
	e, err := equationRow(record)
	if err != nil {
		panic("metabolic: data/equations.csv: " + err.Error())
	}
	kept, _ := equationRows.LoadOrStore(id, e)
	return kept.(*Equation), true
}

var equationRows sync.Map // id → *Equation, of the rows that were asked for

// defaultEquations are the ids of the column default_for, held by a test
// against the table.
var defaultEquations = map[string]string{
	"placental mammal":         "kleiber1947",
	"marsupial":                "dawsonhulbert1970",
	"passerine bird":           "ap1970_pass_rest",
	"non-passerine bird":       "ap1970_nonpass_rest",
	"squamate":                 "ap1985_standard",
	"chelonian":                "bd1976_turtle20",
	"crocodilian":              "bd1976_reptile20",
	"tuatara":                  "bd1976_reptile20",
	"frog":                     "gillooly2001_amphibian",
	"salamander":               "gillooly2001_amphibian",
	"caecilian":                "gillooly2001_amphibian",
	"Zaglossus":                "monotreme_zaglossus", // the genus
	"Tachyglossus aculeatus":   "monotreme_tachyglossus",
	"Ornithorhynchus anatinus": "monotreme_ornithorhynchus",
}

// DefaultEquation gives the published line that is used for an animal when
// none is named: for a group of [Groups], or, since each monotreme has its own
// line only, for a monotreme's scientific name.
func DefaultEquation(group string) (*Equation, bool) {
	id, ok := defaultEquations[group]
	if !ok {
		genus, _, _ := strings.Cut(group, " ")
		if id, ok = defaultEquations[genus]; !ok {
			return nil, false
		}
	}
	return FindEquation(id)
}

func readEquations(r io.Reader) ([]*Equation, error) {
	reader := csv.NewReader(r)
	reader.FieldsPerRecord = len(equationColumns)
	head, err := reader.Read()
	if err != nil {
		return nil, err
	}
	if !slices.Equal(head, equationColumns) {
		return nil, fmt.Errorf("the columns are %q, not %q", head, equationColumns)
	}
	var table []*Equation
	for {
		record, err := reader.Read()
		if err == io.EOF {
			return table, nil
		}
		if err != nil {
			return nil, err
		}
		e, err := equationRow(record)
		if err != nil {
			return nil, fmt.Errorf("%s: %w", record[0], err)
		}
		table = append(table, e)
	}
}

// equationColumn is where a column stands.
var equationColumn = sync.OnceValue(func() map[string]int {
	at := make(map[string]int, len(equationColumns))
	for i, c := range equationColumns {
		at[c] = i
	}
	return at
})

func equationRow(record []string) (*Equation, error) {
	columns := equationColumn()
	cell := func(column string) string { return record[columns[column]] }
	var failed error
	number := func(column string) float64 {
		if cell(column) == "" {
			return 0
		}
		x, err := strconv.ParseFloat(cell(column), 64)
		if err != nil || math.IsNaN(x) || math.IsInf(x, 0) {
			failed = fmt.Errorf("%s: %q is no number", column, cell(column))
		}
		return x
	}
	flag := func(column, no, yes string) bool {
		if cell(column) != no && cell(column) != yes {
			failed = fmt.Errorf("%s: %q is neither %q nor %q", column, cell(column), no, yes)
		}
		return cell(column) == yes
	}
	list := func(column string) []string {
		if cell(column) == "" {
			return nil
		}
		return strings.Split(cell(column), "; ")
	}
	e := &Equation{
		ID: cell("id"), Animals: cell("animals"), AppliesTo: list("applies_to"),
		Kind: cell("kind"), Form: cell("form"), A: number("a"), B: number("b"), C: number("c"),
		MassUnit: cell("mass_unit"), RateUnit: cell("rate_unit"),
		T0: Celsius(number("t0_c")), HasT0: cell("t0_c") != "",
		TLow: Celsius(number("t_low_c")), THigh: Celsius(number("t_high_c")),
		MassLow: Mass(number("mass_low_kg")), MassHigh: Mass(number("mass_high_kg")),
		N: int(number("n")), ResidualSDln: number("residual_sd_log10") * math.Ln10, Level: cell("level"),
		Citation: cell("citation"), Verified: cell("verified"), Note: cell("note"),
		DefaultFor: list("default_for"), LowConfidence: flag("low_confidence", "", "yes"),
		ectotherm: flag("thermy", "endotherm", "ectotherm"),
	}
	return e, failed
}

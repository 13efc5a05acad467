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

// FindEquation gives the line with an id.
func FindEquation(id string) (*Equation, bool) {
	for _, e := range equations() {
		if e.ID == id {
			return e, true
		}
	}
	return nil, false
}

// DefaultEquation gives the published line that is used for an animal when
// none is named: for a group of [Groups], or, since each monotreme has its own
// line only, for a monotreme's scientific name.
func DefaultEquation(group string) (*Equation, bool) {
	for _, e := range equations() {
		if covers(e.DefaultFor, group, group) {
			return e, true
		}
	}
	return nil, false
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

func equationRow(record []string) (*Equation, error) {
	cell := func(column string) string { return record[slices.Index(equationColumns, column)] }
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

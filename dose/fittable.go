package dose

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"strings"
	"unicode/utf8"

	"tayra/metabolic"
)

// Parameter is a quantity that a line can be fitted to.
type Parameter string

// Parameters, in the order in which one is chosen where a table has several.
const (
	Clearance Parameter = "clearance"
	Volume    Parameter = "volume"
	HalfLife  Parameter = "half_life"
	DoseGiven Parameter = "dose"
)

// Parameters lists them in that order.
func Parameters() []Parameter { return []Parameter{Clearance, Volume, HalfLife, DoseGiven} }

// usualExponent is the exponent that each parameter is held against: clearance
// and dose follow metabolic rate, volume follows mass, half-life their ratio.
func (p Parameter) usualExponent() float64 {
	switch p {
	case Volume:
		return 1
	case HalfLife:
		return 0.25
	}
	return 0.75
}

// unit is the unit, per animal, that values of a parameter are kept in.
func (p Parameter) unit() string {
	switch p {
	case Clearance:
		return "L/h"
	case Volume:
		return "L"
	case HalfLife:
		return "h"
	}
	return "mg"
}

// FitInput is a table of the user's own data as typed: what a record keeps of
// a fit, enough to make it again.
type FitInput struct {
	File      string        `json:"file,omitempty"`
	Parameter Parameter     `json:"parameter"`
	KeepAll   bool          `json:"keep_repeated,omitempty"` // repeated species are kept, not averaged
	Rows      []FitRowInput `json:"rows"`
}

// FitRowInput is one row. A parameter that the table lacks is not given; a
// unit that stands in the heading is joined to every cell.
type FitRowInput struct {
	Species   Entry `json:"species"`
	Mass      Entry `json:"mass"`
	Clearance Entry `json:"clearance,omitzero"`
	Volume    Entry `json:"volume,omitzero"`
	HalfLife  Entry `json:"half_life,omitzero"`
	Dose      Entry `json:"dose,omitzero"`
	Source    Entry `json:"source,omitzero"`
}

func (r *FitRowInput) value(p Parameter) *Entry {
	switch p {
	case Clearance:
		return &r.Clearance
	case Volume:
		return &r.Volume
	case HalfLife:
		return &r.HalfLife
	}
	return &r.Dose
}

// fitRow is a row read: mass in kg, values per animal in the parameter's unit.
type fitRow struct {
	name   string
	mass   float64
	values map[Parameter]float64
}

const (
	maxFitBytes = 1 << 20
	maxFitRows  = 2000 // whose record stays within what can be read back
)

// ReadFitTable reads a table of species data: RFC 4180 with commas, semicolons
// or tabs (found in the heading), UTF-8 with or without a byte-order mark. The
// columns are species, mass, one or more of clearance, volume, half_life and
// dose, and optionally source; a unit stands in the cells or, in brackets, in
// the heading: "mass (kg)" or "mass [kg]". Other columns are left alone. A decimal comma is
// read in semicolon tables only. The error is an [InputErrors] with file, line
// and column.
func ReadFitTable(file string, data []byte) (*FitInput, error) {
	fault := func(line, col int, field, problem, remedy string) *InputError {
		return &InputError{File: file, Line: line, Column: col, Field: field, Problem: problem, Remedy: remedy}
	}
	if len(data) > maxFitBytes {
		return nil, InputErrors{fault(0, 0, "", fmt.Sprintf("%d bytes", len(data)), "a table of species data has at most 1 MB")}
	}
	data = bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))
	if !utf8.Valid(data) {
		return nil, InputErrors{fault(0, 0, "", "not valid UTF-8", "save the table as CSV UTF-8")}
	}
	if bytes.IndexByte(data, 0) >= 0 {
		return nil, InputErrors{fault(0, 0, "", "holds a NUL byte", "save the table as CSV, not as a workbook")}
	}
	comma, named := namedSeparator(data)
	if named {
		// An empty line in its place keeps the numbers of the others.
		data = data[bytes.IndexByte(data, '\n'):]
	} else {
		comma = delimiter(data)
	}
	r := csv.NewReader(bytes.NewReader(data))
	r.Comma, r.FieldsPerRecord = comma, -1
	head, err := r.Read()
	if err != nil {
		if errors.Is(err, io.EOF) {
			return nil, InputErrors{fault(1, 0, "", "the table is empty", "write a heading: species, mass, clearance")}
		}
		return nil, InputErrors{csvFault(file, err)}
	}
	cols, units, errs := fitHeading(file, head, r.FieldPos)
	if len(errs) > 0 {
		return nil, errs
	}
	in := &FitInput{File: file}
	for {
		rec, err := r.Read()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			return nil, append(errs, csvFault(file, err))
		}
		if blank(rec) {
			continue
		}
		line, _ := r.FieldPos(0)
		if len(rec) != len(head) {
			_, column := r.FieldPos(min(len(rec)-1, len(head)))
			errs = append(errs, fault(line, column, "", fmt.Sprintf("%d cells, where the heading has %d", len(rec), len(head)), "give every row the columns of the heading; quote a cell that holds the separator"))
			continue
		}
		if len(in.Rows) == maxFitRows {
			return nil, append(errs, fault(line, 0, "", "too many rows", fmt.Sprintf("a table of species data has at most %d", maxFitRows)))
		}
		row := FitRowInput{}
		for i := range rec {
			e := fitCell(&row, cols[i])
			if e == nil {
				continue
			}
			l, c := r.FieldPos(i)
			text := strings.TrimSpace(rec[i])
			if cols[i] != "species" && cols[i] != "source" && text != "" {
				if text[0] > '9' { // "n/a", "not given"
					errs = append(errs, fault(l, c, cols[i], fmt.Sprintf("%q is no number", text), "leave the cell empty where nothing was measured"))
					continue
				}
				if comma == ';' {
					text = strings.Replace(text, ",", ".", 1)
				}
				switch unit := unitOf(text); {
				case units[i] == "" || strings.EqualFold(unit, unitOf(units[i])):
				case unit == "", unit[0] == ',': // a decimal comma is a fault of its own
					text += " " + units[i]
				default:
					errs = append(errs, fault(l, c, cols[i], fmt.Sprintf("%q, where the heading says %q", text, units[i]), "write the unit in one of the two"))
					continue
				}
			}
			if text == "" && cols[i] != "species" && cols[i] != "mass" {
				continue // was not measured here
			}
			*e = Entry{Text: text, Line: l, Column: c}
		}
		in.Rows = append(in.Rows, row)
	}
	if len(errs) > 0 {
		return nil, errs
	}
	for _, p := range Parameters() {
		for i := range in.Rows {
			if in.Rows[i].value(p).Given() && in.Parameter == "" {
				in.Parameter = p
			}
		}
	}
	if in.Parameter == "" {
		return nil, InputErrors{fault(1, 0, "", "no row with a value", "fill in clearance, volume, half_life or dose")}
	}
	return in, nil
}

// namedSeparator reads the line "sep=;" with which some tables begin.
func namedSeparator(data []byte) (rune, bool) {
	line, _, more := bytes.Cut(data, []byte("\n"))
	line = bytes.TrimRight(line, "\r")
	if !more || len(line) != len("sep=;") || !bytes.EqualFold(line[:4], []byte("sep=")) || !bytes.ContainsAny(line[4:], ",;\t") {
		return 0, false
	}
	return rune(line[4]), true
}

func blank(rec []string) bool {
	for _, c := range rec {
		if strings.TrimSpace(c) != "" {
			return false
		}
	}
	return true
}

// delimiter is the separator of the heading line: the one of comma, semicolon
// and tab that stands there most, a comma in doubt.
func delimiter(data []byte) rune {
	line, _, _ := bytes.Cut(data, []byte("\n"))
	best, most := ',', bytes.Count(line, []byte(","))
	for _, d := range []rune{';', '\t'} {
		if n := bytes.Count(line, []byte(string(d))); n > most {
			best, most = d, n
		}
	}
	return best
}

// csvFault rewords what encoding/csv says.
func csvFault(file string, err error) *InputError {
	var p *csv.ParseError
	if !errors.As(err, &p) {
		return &InputError{File: file, Problem: err.Error(), Remedy: "save the table as CSV UTF-8"}
	}
	e := &InputError{File: file, Line: p.Line, Column: p.Column, Problem: "a quotation mark out of place", Remedy: `put the whole cell in quotation marks and double those inside: "say ""one"""`}
	if p.StartLine < p.Line { // found where the table ends
		e.Line, e.Column, e.Problem = p.StartLine, 0, "a cell that begins with a quotation mark in this row does not end"
	}
	return e
}

// fitHeading says which column is which, and the unit in its heading. place gives
// line and column of a cell.
func fitHeading(file string, head []string, place func(int) (int, int)) (cols, units []string, errs InputErrors) {
	line, _ := place(0)
	cols, units = make([]string, len(head)), make([]string, len(head))
	seen := map[string]int{}
	for i, h := range head {
		name, unit := strings.TrimSpace(h), ""
		for _, brackets := range []string{"()", "[]"} {
			if a := strings.IndexByte(name, brackets[0]); a >= 0 && strings.HasSuffix(name, brackets[1:]) {
				name, unit = name[:a], strings.TrimSpace(name[a+1:len(name)-1])
			}
		}
		name = strings.ReplaceAll(strings.ReplaceAll(strings.ToLower(strings.TrimSpace(name)), " ", "_"), "-", "_")
		switch name {
		case "species", "animal":
			name = "species"
		case "mass", "body_mass", "weight", "body_weight":
			name = "mass"
		case "clearance", "cl":
			name = string(Clearance)
		case "volume", "volume_of_distribution", "vss", "vd":
			name = string(Volume)
		case "half_life":
			name = string(HalfLife)
		case "dose", "source":
		default:
			continue
		}
		if at, ok := seen[name]; ok {
			_, column := place(i)
			errs = append(errs, &InputError{File: file, Line: line, Column: column, Field: name, Problem: fmt.Sprintf("two columns of this name, %d and %d", at+1, i+1), Remedy: "rename or remove one"})
		}
		seen[name] = i
		cols[i], units[i] = name, unit
	}
	missing := func(name, remedy string) {
		errs = append(errs, &InputError{File: file, Line: line, Field: name, Problem: "no column of this name in the heading", Remedy: remedy})
	}
	if _, ok := seen["species"]; !ok {
		missing("species", "write a heading such as: species,mass (kg),clearance (mL/min)")
	}
	if _, ok := seen["mass"]; !ok {
		missing("mass", "write a heading such as: species,mass (kg),clearance (mL/min)")
	}
	any := false
	for _, p := range Parameters() {
		_, ok := seen[string(p)]
		any = any || ok
	}
	if !any {
		missing("clearance", "name a column clearance, volume, half_life or dose")
	}
	return cols, units, errs
}

func fitCell(r *FitRowInput, col string) *Entry {
	switch col {
	case "species":
		return &r.Species
	case "mass":
		return &r.Mass
	case "source":
		return &r.Source
	case "":
		return nil
	}
	return r.value(Parameter(col))
}

// unitOf is the text behind the number of an entry, to compare units by.
func unitOf(text string) string {
	i := strings.IndexFunc(text, func(r rune) bool { return !strings.ContainsRune("0123456789.+-eE  \t", r) })
	if i < 0 {
		return ""
	}
	return strings.Join(strings.Fields(text[i:]), "")
}

// check reads the rows: masses in kg, values per animal. Every column must be
// in one unit from top to bottom: a per-kg value among per-animal ones is the
// slip that such a table hides best.
func (in *FitInput) check() ([]fitRow, error) {
	if len(in.Rows) > maxFitRows {
		return nil, InputErrors{{File: in.File, Problem: "too many rows", Remedy: fmt.Sprintf("a table of species data has at most %d", maxFitRows)}}
	}
	k := &checker{file: in.File}
	var rows []fitRow
	first := map[string]struct {
		unit string
		line int
	}{}
	sameUnit := func(col string, e Entry, unit string) {
		f, ok := first[col]
		if !ok {
			first[col] = struct {
				unit string
				line int
			}{unit, e.Line}
			return
		}
		if !strings.EqualFold(f.unit, unit) { // "ml" is "mL"
			problem := fmt.Sprintf("in %s, where row %d has %s", unit, f.line, f.unit)
			if strings.HasSuffix(f.unit, "/kg") != strings.HasSuffix(unit, "/kg") {
				problem += ": per kg beside per animal"
			}
			k.fail(e, col, problem, "write the whole column in one unit")
		}
	}
	for i := range in.Rows {
		r := &in.Rows[i]
		out := fitRow{name: k.text(r.Species, "species"), values: map[Parameter]float64{}}
		if out.name == "" {
			k.fail(r.Species, "species", "missing", "name the animal: the row is labelled by it")
		}
		k.text(r.Source, "source") // kept in the record
		m, ok := need(k, r.Mass, r.Species, "mass", "write the body mass with its unit, such as 18 kg", metabolic.ParseBodyMass)
		if ok {
			out.mass = float64(m.Middle)
		}
		for _, p := range Parameters() {
			e := *r.value(p)
			if !e.Given() {
				continue
			}
			v, perKg, ok := readParameter(k, e, p)
			if !ok {
				continue
			}
			sameUnit(string(p), e, unitOf(e.Text))
			if perKg {
				v *= out.mass
			}
			out.values[p] = v
		}
		rows = append(rows, out)
	}
	if len(k.errs) > 0 {
		return nil, k.errs
	}
	return rows, nil
}

// readParameter reads one value: per animal in the parameter's unit, or per kg.
func readParameter(k *checker, e Entry, p Parameter) (v float64, perKg, ok bool) {
	field := string(p)
	switch p {
	case Clearance:
		v, perKg, err := metabolic.ParseClearance(e.Text)
		if err != nil {
			k.quantity(e, field, err)
			return 0, false, false
		}
		return v, perKg, true
	case HalfLife:
		h, ok := read(k, e, field, metabolic.ParseDuration)
		return float64(h), false, ok
	case Volume:
		if strings.HasSuffix(unitOf(e.Text), "/kg") {
			v, ok := read(k, e, field, metabolic.ParseVolumePerKg)
			return v, true, ok
		}
		ml, ok := read(k, e, field, metabolic.ParseLiquid)
		return ml / 1000, false, ok
	}
	d, ok := read(k, e, field, metabolic.ParseDose)
	if !ok {
		return 0, false, false
	}
	if d.Low != d.High || d.Unit != metabolic.Milligram || d.Per != metabolic.PerKg && d.Per != metabolic.PerAnimal {
		k.fail(e, field, "not a single dose in mg, per kg or per animal", "write one value a row, such as 5 mg/kg")
		return 0, false, false
	}
	return d.High, d.Per == metabolic.PerKg, true
}

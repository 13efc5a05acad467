// A row of a table is the same case as a case file with one model would give:
// Batch.CaseInput says which. A million rows are worked out without writing
// that case down for each of them:
//
//   - A row is read in five parts (who it is, species, mass and temperature,
//     drug and state, model), each by the methods that read a case file. What
//     a part's cells were read as, faults included, is remembered, since rows
//     of one table mostly differ in the animal's mass alone.
//   - compute then gives the numbers and the slugs of the cautions, and no
//     text is made.
//
// A test holds both ways equal on every example and on random rows.

package dose

import (
	"bytes"
	"encoding/binary"
	"slices"
	"strings"

	"tayra/metabolic"
	"tayra/species"
)

// Column is a column of a table of animals.
type Column uint8

// The columns that a table of animals may have, in the order in which they are
// named to a reader.
const (
	ColumnCase Column = iota
	ColumnAnimal
	ColumnSpecies
	ColumnMass
	ColumnTemperature
	ColumnStage
	ColumnDrug
	ColumnClass
	ColumnElimination
	ColumnMargin
	ColumnModelSpecies
	ColumnModelMass
	ColumnModelTemperature
	ColumnDose
	ColumnInterval
	ColumnRoute
	ColumnSource
	// What follows is seldom needed, but each of these can raise a caution.
	ColumnCondition
	ColumnFoodProducing
	ColumnFormulation
	ColumnActivity
	ColumnExtraction
	ColumnProteinBinding
	ColumnControlled
	ColumnHalfLife

	columnCount
)

// columns are the columns, by Column: the heading, the place in a case file,
// and the entry there.
var columns = [columnCount]struct {
	name, field        string
	required, quantity bool
	entry              func(in *CaseInput) *Entry // nil for the conditions, which are a list
}{
	ColumnCase:             {name: "case", field: "case", entry: func(in *CaseInput) *Entry { return &in.Case }},
	ColumnAnimal:           {name: "animal", field: "patient.name", entry: func(in *CaseInput) *Entry { return &in.Patient.Name }},
	ColumnSpecies:          {name: "species", field: "patient.species", required: true, entry: func(in *CaseInput) *Entry { return &in.Patient.Species }},
	ColumnMass:             {name: "mass", field: "patient.mass", required: true, quantity: true, entry: func(in *CaseInput) *Entry { return &in.Patient.Mass }},
	ColumnTemperature:      {name: "temperature", field: "patient.temperature", quantity: true, entry: func(in *CaseInput) *Entry { return &in.Patient.Temperature }},
	ColumnStage:            {name: "stage", field: "patient.stage", entry: func(in *CaseInput) *Entry { return &in.Patient.Stage }},
	ColumnDrug:             {name: "drug", field: "drug.name", entry: func(in *CaseInput) *Entry { return &in.Drug.Name }},
	ColumnClass:            {name: "class", field: "drug.class", entry: func(in *CaseInput) *Entry { return &in.Drug.Class }},
	ColumnElimination:      {name: "elimination", field: "drug.elimination", entry: func(in *CaseInput) *Entry { return &in.Drug.Elimination }},
	ColumnMargin:           {name: "margin", field: "drug.margin", entry: func(in *CaseInput) *Entry { return &in.Drug.Margin }},
	ColumnModelSpecies:     {name: "model_species", field: "models[0].species", required: true, entry: func(in *CaseInput) *Entry { return &in.Models[0].Species }},
	ColumnModelMass:        {name: "model_mass", field: "models[0].mass", required: true, quantity: true, entry: func(in *CaseInput) *Entry { return &in.Models[0].Mass }},
	ColumnModelTemperature: {name: "model_temperature", field: "models[0].temperature", quantity: true, entry: func(in *CaseInput) *Entry { return &in.Models[0].Temperature }},
	ColumnDose:             {name: "dose", field: "models[0].dose", required: true, quantity: true, entry: func(in *CaseInput) *Entry { return &in.Models[0].Dose }},
	ColumnInterval:         {name: "interval", field: "models[0].interval", required: true, quantity: true, entry: func(in *CaseInput) *Entry { return &in.Models[0].Interval }},
	ColumnRoute:            {name: "route", field: "models[0].route", entry: func(in *CaseInput) *Entry { return &in.Models[0].Route }},
	ColumnSource:           {name: "source", field: "models[0].source", required: true, entry: func(in *CaseInput) *Entry { return &in.Models[0].Source }},
	ColumnCondition:        {name: "condition", field: "patient.condition"},
	ColumnFoodProducing:    {name: "food_producing", field: "patient.food_producing", entry: func(in *CaseInput) *Entry { return &in.Patient.FoodProducing }},
	ColumnFormulation:      {name: "formulation", field: "drug.formulation", entry: func(in *CaseInput) *Entry { return &in.Drug.Formulation }},
	ColumnActivity:         {name: "activity", field: "drug.activity", entry: func(in *CaseInput) *Entry { return &in.Drug.Activity }},
	ColumnExtraction:       {name: "extraction", field: "drug.extraction", entry: func(in *CaseInput) *Entry { return &in.Drug.Extraction }},
	ColumnProteinBinding:   {name: "protein_binding", field: "drug.protein_binding", quantity: true, entry: func(in *CaseInput) *Entry { return &in.Drug.ProteinBinding }},
	ColumnControlled:       {name: "controlled", field: "drug.controlled", entry: func(in *CaseInput) *Entry { return &in.Drug.Controlled }},
	ColumnHalfLife:         {name: "half_life", field: "models[0].half_life", quantity: true, entry: func(in *CaseInput) *Entry { return &in.Models[0].HalfLife }},
}

// The columns of a row that are read together: those of the drug and of the
// patient's state, and those of the model.
var (
	settingColumns = []Column{ColumnStage, ColumnDrug, ColumnClass, ColumnElimination, ColumnMargin, ColumnCondition, ColumnFoodProducing,
		ColumnFormulation, ColumnActivity, ColumnExtraction, ColumnProteinBinding, ColumnControlled}
	modelColumns = []Column{ColumnModelSpecies, ColumnModelMass, ColumnModelTemperature, ColumnDose, ColumnInterval, ColumnRoute, ColumnSource, ColumnHalfLife}
)

// Columns lists every column.
func Columns() []Column {
	out := make([]Column, columnCount)
	for i := range out {
		out[i] = Column(i)
	}
	return out
}

// FindColumn gives the column of a heading as [Column.String] writes it.
func FindColumn(name string) (Column, bool) {
	for i := range columns {
		if columns[i].name == name {
			return Column(i), true
		}
	}
	return 0, false
}

// String is the column's heading.
func (c Column) String() string { return columns[c].name }

// Required says whether every table needs the column.
func (c Column) Required() bool { return columns[c].required }

// Quantity says whether the cells are numbers with units.
func (c Column) Quantity() bool { return columns[c].quantity }

// Row is the cells of one row by [Column], as typed. A blank cell and one that
// the table does not have are both "not given".
type Row [columnCount][]byte

// UnnamedDrug stands for the drug of a row that names none. Hazards, which are
// looked up by the name, cannot be found for it; DrugNotNamed says so.
const UnnamedDrug = "not named"

// Batch works out the rows of a table, which share a date and a method.
type Batch struct {
	input CaseInput // what the rows share
	first Case      // the same, read
}

// NewBatch reads what the rows of a table share: Date, PreparedBy and Method of
// the input; the rest of it is not looked at. The error is an [InputErrors].
func NewBatch(shared *CaseInput) (*Batch, error) {
	b := &Batch{input: CaseInput{File: shared.File, Date: shared.Date, PreparedBy: shared.PreparedBy, Method: shared.Method}}
	k := &checker{file: shared.File}
	b.first.Date, _ = need(k, shared.Date, Entry{}, "date", "write the date of the worksheets, such as 2026-11-30", parseDate)
	b.first.PreparedBy = k.text(shared.PreparedBy, "prepared_by")
	k.method(&b.input, &b.first)
	if len(k.errs) > 0 {
		return nil, k.errs
	}
	b.first.Input = &b.input
	return b, nil
}

// CaseInput is a row as the case that it stands for, as a case file with one
// model would give it. Conditions may stand in one cell with blanks, commas or
// semicolons between them.
func (b *Batch) CaseInput(row *Row) *CaseInput {
	in := b.input
	in.Models = make([]ModelInput, 1)
	for c := range columnCount {
		row.enter(c, &in)
	}
	if !in.Drug.Name.Given() {
		in.Drug.Name = E(UnnamedDrug)
	}
	return &in
}

// enter puts a cell at its place in a case.
func (row *Row) enter(c Column, in *CaseInput) {
	e := row.entry(c)
	switch {
	case !e.Given():
	case c == ColumnCondition:
		for _, w := range strings.FieldsFunc(e.Text, func(r rune) bool { return r == ' ' || r == ',' || r == ';' || r == '\u00a0' }) {
			in.Patient.Condition = append(in.Patient.Condition, E(w))
		}
	default:
		*columns[c].entry(in) = e
	}
}

// entry is a cell as the entry of a case; a blank one is none.
func (row *Row) entry(c Column) Entry {
	if len(bytes.TrimSpace(row[c])) == 0 {
		return Entry{}
	}
	return E(string(row[c]))
}

// Worksheet drafts a row with its steps, texts and sources. The error is an
// [InputErrors] whose fields are headings of the table.
func (b *Batch) Worksheet(row *Row) (*Worksheet, error) {
	c, err := b.CaseInput(row).Check()
	if err != nil {
		return nil, byColumn(err)
	}
	w, err := Draft(c)
	if err != nil {
		return nil, byColumn(err)
	}
	return w, nil
}

// byColumn names faults by the column instead of the place in a case file.
func byColumn(err error) error {
	faults, ok := err.(InputErrors)
	if !ok {
		return err
	}
	out := make(InputErrors, len(faults))
	for i, f := range faults {
		renamed := *f
		renamed.Field = columnField(f.Field)
		out[i] = &renamed
	}
	return out
}

func columnField(field string) string {
	if strings.HasPrefix(field, "patient.condition") {
		return ColumnCondition.String()
	}
	for i := range columns {
		if columns[i].field == field {
			return columns[i].name
		}
	}
	return strings.TrimPrefix(field, "method.")
}

// RowDraft is a row worked out: what [Draft] gives of it in numbers.
type RowDraft struct {
	Stopped          bool // a stop was raised: only Cautions is set
	Plan             PlanName
	DosePerKg        Pair // of an infusion per kg and hour
	Amount           Pair // per administration, of an infusion per hour
	Unit             metabolic.AmountUnit
	Infusion         bool
	IntervalH        float64 // 0 for once and infusion
	Range50, Range90 DoseRange
	Cautions         []RowCaution // stops first, each once; good until the next row
}

// RowCaution is a caution of a row.
type RowCaution struct {
	Slug  string
	Level Level
}

// RowDrafter drafts the rows of a batch one after the other. It remembers what
// cells were read as; each goroutine has its own.
type RowDrafter struct {
	batch *Batch
	c     Case
	n     numbers

	animals      memo[*part[*species.Animal]]
	masses       memo[*part[metabolic.BodyMass]]
	temperatures memo[*part[metabolic.Celsius]]
	settings     memo[*part[setting]]
	models       memo[*part[knownModel]]
	hazards      hazardMemo
	key          []byte
}

// part is what some cells were read as, or their faults.
type part[T any] struct {
	value T
	given bool
	errs  InputErrors
}

// knownModel is a model and its metabolic rates.
type knownModel struct {
	Model
	rates *modelRates
}

// setting is the drug and the state of the patient.
type setting struct {
	drug          Drug
	traits        *drugTraits
	stage         Stage
	conditions    Condition
	foodProducing Answer
}

// Drafter makes a drafter for one goroutine.
func (b *Batch) Drafter() *RowDrafter {
	d := &RowDrafter{batch: b, c: b.first}
	d.c.Models = make([]Model, 1)
	d.n.recall.hazards = d.hazards.match
	return d
}

// Draft works out a row. The error is an [InputErrors] whose fields are
// headings of the table; out is then not to be used.
func (d *RowDrafter) Draft(row *Row, out *RowDraft) error {
	if errs := d.read(row); len(errs) > 0 {
		return errs
	}
	c, n := &d.c, &d.n
	if err := compute(c, n); err != nil {
		return byColumn(err)
	}
	cautions := out.Cautions[:0]
	for i := range n.raised {
		k := RowCaution{n.raised[i].name(), n.raised[i].level}
		if !slices.Contains(cautions, k) {
			cautions = append(cautions, k)
		}
	}
	*out = RowDraft{Stopped: n.stopped, Cautions: cautions}
	if n.stopped {
		return nil
	}
	mn, r := &n.models[0], &c.Models[0].Regimen
	p := mn.plan()
	out.Plan, out.DosePerKg, out.Amount, out.IntervalH = p.name, p.dose, scale(p.dose, float64(c.Patient.Mass.Middle)), p.interval
	out.Unit, out.Infusion = r.Unit, r.Interval.Kind == metabolic.Infusion
	out.Range50, out.Range90 = mn.range50, mn.range90
	return nil
}

// read turns the cells of a row into d.c.
func (d *RowDrafter) read(row *Row) InputErrors {
	c := &d.c
	who := d.who(row)
	animal := d.animals.get(row[ColumnSpecies], func() *part[*species.Animal] {
		k := &checker{}
		a := k.patientAnimal(row.entry(ColumnSpecies), Entry{}, columns[ColumnSpecies].field)
		return &part[*species.Animal]{a, a != nil, k.faults()}
	})
	mass := d.masses.get(row[ColumnMass], func() *part[metabolic.BodyMass] {
		k := &checker{}
		m, ok := need(k, row.entry(ColumnMass), Entry{}, columns[ColumnMass].field, massRemedy, metabolic.ParseBodyMass)
		return &part[metabolic.BodyMass]{m, ok, k.faults()}
	})
	temperature := d.temperatures.get(row[ColumnTemperature], func() *part[metabolic.Celsius] {
		k := &checker{}
		t, ok := read(k, row.entry(ColumnTemperature), columns[ColumnTemperature].field, metabolic.ParseTemperature)
		return &part[metabolic.Celsius]{t, ok, k.faults()}
	})
	set := d.settings.get(d.join(row, settingColumns), func() *part[setting] { return d.batch.readSetting(row) })
	model := d.models.get(d.join(row, modelColumns), func() *part[knownModel] { return d.batch.readModel(row) })

	c.Patient = Patient{Animal: animal.value, Mass: mass.value, Temperature: temperature.value, HasTemperature: temperature.given,
		Stage: set.value.stage, Conditions: set.value.conditions, FoodProducing: set.value.foodProducing}
	c.Drug, d.n.recall.drug = set.value.drug, set.value.traits
	c.Models[0], d.n.recall.model = model.value.Model, model.value.rates
	errs := who
	for _, e := range [...]InputErrors{animal.errs, mass.errs, temperature.errs, set.errs, model.errs} {
		if len(e) > 0 {
			errs = append(errs[:len(errs):len(errs)], e...)
		}
	}
	if t := float64(temperature.value); animal.given && (!animal.value.Endotherm() || temperature.given && (t < 0 || t > 50)) {
		// Seldom a fault; the whole check makes the words.
		k := &checker{}
		k.temperatures(d.batch.partly(row, ColumnTemperature), &Case{Patient: c.Patient})
		errs = append(errs[:len(errs):len(errs)], k.faults()...)
	}
	return errs
}

// who reads the texts by which a row is known. They change nothing in the
// numbers, but a letter that cannot be printed is a fault of the row.
func (d *RowDrafter) who(row *Row) InputErrors {
	if plain(row[ColumnCase]) && plain(row[ColumnAnimal]) {
		return nil
	}
	k := &checker{}
	k.text(row.entry(ColumnCase), columns[ColumnCase].field)
	k.text(row.entry(ColumnAnimal), columns[ColumnAnimal].field)
	return k.faults()
}

// plain says whether a text is such that checker.text has nothing to say.
func plain(text []byte) bool {
	for _, b := range text {
		if b < ' ' || b > '~' {
			return false
		}
	}
	return len(text) <= maxEntryBytes
}

// partly is a case of some of a row's cells.
func (b *Batch) partly(row *Row, cells ...Column) *CaseInput {
	in := &CaseInput{Models: make([]ModelInput, 1)}
	for _, c := range cells {
		row.enter(c, in)
	}
	return in
}

func (b *Batch) readSetting(row *Row) *part[setting] {
	in, k, c := b.partly(row, settingColumns...), &checker{}, &Case{}
	if !in.Drug.Name.Given() {
		in.Drug.Name = E(UnnamedDrug)
	}
	k.state(&in.Patient, c)
	k.drug(in, c)
	return &part[setting]{setting{c.Drug, traitsOf(&c.Drug), c.Patient.Stage, c.Patient.Conditions, c.Patient.FoodProducing}, true, k.faults()}
}

func (b *Batch) readModel(row *Row) *part[knownModel] {
	in, k, c := b.partly(row, modelColumns...), &checker{}, &Case{}
	k.models(in, c)
	k.temperatures(in, c)
	return &part[knownModel]{knownModel{c.Models[0], &modelRates{}}, true, k.faults()}
}

// faults are the faults found, by column, without spare room: what is appended
// to them elsewhere must not be seen by the next row.
func (k *checker) faults() InputErrors {
	if len(k.errs) == 0 {
		return nil
	}
	return slices.Clip(byColumn(k.errs).(InputErrors))
}

// join makes the key of cells that are read together: each with its length
// behind it, so that no two rows share a key by chance or by design.
func (d *RowDrafter) join(row *Row, cells []Column) []byte {
	d.key = d.key[:0]
	for _, c := range cells {
		d.key = append(d.key, row[c]...)
		d.key = binary.LittleEndian.AppendUint32(d.key, uint32(len(row[c])))
	}
	return d.key
}

// memo remembers what was made of a text. It is emptied when it is full, so
// that its size does not grow with the table, and takes no long texts.
type memo[T any] struct{ known map[string]T }

const (
	memoEntries = 4096
	memoLongest = 1024 // bytes of a text
)

func (m *memo[T]) get(key []byte, make func() T) T {
	if v, ok := m.known[string(key)]; ok {
		return v
	}
	v := make()
	m.put(string(key), v)
	return v
}

func (m *memo[T]) put(key string, v T) {
	if len(key) > memoLongest {
		return
	}
	if m.known == nil || len(m.known) >= memoEntries {
		m.known = make(map[string]T)
	}
	m.known[key] = v
}

// hazardMemo remembers the hazards that concern a drug in an animal.
type hazardMemo struct {
	known map[hazardKey][]species.HazardMatch
}

type hazardKey struct{ drug, class, animal, route string }

func (h *hazardMemo) match(drug, class string, a *species.Animal, route string) []species.HazardMatch {
	key := hazardKey{drug, class, a.Name, route}
	if found, ok := h.known[key]; ok {
		return found
	}
	found := species.MatchHazards(drug, class, a, route)
	if len(drug)+len(class)+len(route) <= memoLongest {
		if h.known == nil || len(h.known) >= memoEntries {
			h.known = make(map[hazardKey][]species.HazardMatch)
		}
		h.known[key] = found
	}
	return found
}

package dose

import (
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tayra/metabolic"
)

// rowOf makes a row of "column", "cell" pairs.
func rowOf(cells ...string) *Row {
	var row Row
	for i := 0; i < len(cells); i += 2 {
		c, ok := FindColumn(cells[i])
		if !ok {
			panic("no column " + cells[i])
		}
		row[c] = []byte(cells[i+1])
	}
	return &row
}

func newBatch(t interface {
	Helper()
	Fatal(...any)
}, method MethodInput) *Batch {
	t.Helper()
	b, err := NewBatch(&CaseInput{Date: E("2026-11-30"), Method: method})
	if err != nil {
		t.Fatal(err)
	}
	return b
}

type fataler interface {
	Helper()
	Fatalf(string, ...any)
}

// sameAsDraft holds a drafter to what the whole way, a case that is checked and
// drafted, gives for the row.
func sameAsDraft(t fataler, b *Batch, d *RowDrafter, row *Row) (drafted bool) {
	t.Helper()
	var got RowDraft
	errGot := d.Draft(row, &got)
	w, errWant := b.Worksheet(row)
	if errGot != nil || errWant != nil {
		if sortedFaults(errGot) != sortedFaults(errWant) {
			t.Fatalf("row %q:\nby the table: %v\nby a case:    %v", row, errGot, errWant)
		}
		return false
	}
	var cautions []RowCaution
	for _, k := range w.Cautions {
		if c := (RowCaution{k.Slug, k.Level}); !slices.Contains(cautions, c) {
			cautions = append(cautions, c)
		}
	}
	if !slices.Equal(got.Cautions, cautions) {
		t.Fatalf("row %q: cautions\n%v, want\n%v", row, got.Cautions, cautions)
	}
	if got.Stopped != (w.Drafted == nil) {
		t.Fatalf("row %q: stopped is %v", row, got.Stopped)
	}
	if got.Stopped {
		if got.DosePerKg != (Pair{}) || got.Plan != "" || got.Range90 != (DoseRange{}) {
			t.Fatalf("row %q: a stop beside %+v", row, got)
		}
		return true
	}
	interval := 0.0
	if w.Drafted.IntervalH != nil {
		interval = *w.Drafted.IntervalH
	}
	unit := got.Unit.String() + "/kg"
	if got.Infusion {
		unit += "/h"
	}
	if string(got.Plan) != w.Drafted.Plan || got.DosePerKg != w.Drafted.DosePerKg || got.Amount != w.Drafted.PerAdministration ||
		unit != w.Drafted.Unit || got.IntervalH != interval || got.Range50 != w.Drafted.Range50 || got.Range90 != w.Drafted.Range90 {
		t.Fatalf("row %q: %+v, want %+v", row, got, w.Drafted)
	}
	return true
}

func sortedFaults(err error) string {
	if err == nil {
		return "none"
	}
	faults := strings.Split(err.Error(), "\n")
	slices.Sort(faults)
	return strings.Join(faults, "\n")
}

// Every example with one model and without what only a case file can say goes
// through a row and gives the numbers of its worksheet.
func TestExamplesAsRows(t *testing.T) {
	files, err := filepath.Glob("../testdata/*.yaml")
	if err != nil || len(files) < 5 {
		t.Fatalf("%d examples, %v", len(files), err)
	}
	for _, f := range files {
		data, err := os.ReadFile(f)
		if err != nil {
			t.Fatal(err)
		}
		in, _, err := ReadCase(f, data)
		if err != nil {
			t.Fatal(err)
		}
		for i := range in.Models {
			one := *in
			one.Models = in.Models[i : i+1]
			one.Published, one.Product, one.Target, one.Proposed, one.Overrides = nil, ProductEntry{}, TargetInput{}, ProposedInput{}, nil
			one.Models[0].Tolerated = ToleratedInput{}
			c, err := one.Check()
			if err != nil {
				t.Fatalf("%s: %v", f, err)
			}
			w, err := Draft(c)
			if err != nil {
				t.Fatalf("%s: %v", f, err)
			}
			var row Row
			for k := range columnCount {
				if k != ColumnCondition {
					row[k] = []byte(columns[k].entry(&one).Text)
				}
			}
			for _, e := range one.Patient.Condition {
				row[ColumnCondition] = append(row[ColumnCondition], e.Text+"; "...)
			}
			b := newBatch(t, one.Method)
			var got RowDraft
			if err := b.Drafter().Draft(&row, &got); err != nil {
				t.Fatalf("%s: %v", f, err)
			}
			if got.Stopped != (w.Drafted == nil) || !got.Stopped && (got.DosePerKg != w.Drafted.DosePerKg || got.Range90 != w.Drafted.Range90) {
				t.Errorf("%s: %+v, want %+v", f, got, w.Drafted)
			}
			sameAsDraft(t, b, b.Drafter(), &row)
		}
	}
}

// The anteater by hand: 70·W^0.75 on both sides leaves S = (41/18)^-0.25, the
// interval stays since S < 1, the range is exp(±1.645·1.25).
func TestRowByHand(t *testing.T) {
	d := newBatch(t, MethodInput{}).Drafter()
	var got RowDraft
	if err := d.Draft(rowOf("species", "giant anteater", "mass", "41 kg", "model_species", "dog", "model_mass", "18 kg", "dose", "10 mg/kg", "interval", "q12h", "source", "invented"), &got); err != nil {
		t.Fatal(err)
	}
	const s = 0.8139958 // (41/18)^-0.25, by Python
	if relative(got.DosePerKg[0], 10*s) > 1e-6 || relative(got.Amount[1], 410*s) > 1e-6 || got.IntervalH != 12 || got.Plan != PlanSameInterval ||
		relative(got.Range90.Low, 10*s*0.127933) > 1e-5 { // exp(-2.05625), by Python
		t.Errorf("%+v", got)
	}
	if got.Cautions[0] != (RowCaution{"basis-disagrees", Warn}) || !slices.Contains(got.Cautions, RowCaution{"drug-not-named", Warn}) {
		t.Errorf("%v", got.Cautions)
	}
}

// The kinds of regimen that a row must not flatten.
func TestRowKinds(t *testing.T) {
	d := newBatch(t, MethodInput{}).Drafter()
	base := []string{"species", "capybara", "mass", "48 kg", "drug", "examplicillin", "model_species", "dog", "model_mass", "20 kg", "source", "invented"}
	for _, k := range []struct {
		name, dose, interval string
		check                func(*RowDraft) bool
	}{
		{"a range keeps both ends", "5-10 mg/kg", "q12h", func(r *RowDraft) bool {
			return relative(r.DosePerKg[1], 2*r.DosePerKg[0]) < 1e-12 && r.Range90.Low < r.DosePerKg[0] && r.Range90.High > r.DosePerKg[1]
		}},
		{"once is a bracket without an interval", "10 mg/kg", "once", func(r *RowDraft) bool {
			return r.IntervalH == 0 && r.Plan == PlanOnce && r.DosePerKg[0] < 10 && r.DosePerKg[1] == 10
		}},
		{"units stay units", "20000 IU/kg", "q12h", func(r *RowDraft) bool { return r.Unit == metabolic.InternationalUnit && !r.Infusion }},
		{"an infusion has no interval", "2 mg/kg/h", "infusion", func(r *RowDraft) bool { return r.Infusion && r.IntervalH == 0 && r.Plan == PlanInfusion }},
	} {
		var got RowDraft
		if err := d.Draft(rowOf(append(base, "dose", k.dose, "interval", k.interval)...), &got); err != nil || got.Stopped || !k.check(&got) {
			t.Errorf("%s: %+v, %v", k.name, got, err)
		}
	}
}

func TestRowFaultsNameTheColumn(t *testing.T) {
	d := newBatch(t, MethodInput{}).Drafter()
	good := []string{"species", "capybara", "mass", "48 kg", "drug", "examplicillin", "model_species", "dog", "model_mass", "20 kg", "dose", "5 mg/kg", "interval", "q12h", "source", "invented"}
	for _, k := range []struct{ column, cell, says string }{
		{"mass", "48", `mass: "48" has no unit`},
		{"mass", "", "mass: missing"},
		{"mass", "4,8 kg", `mass: "4,8 kg" has a comma`},
		{"model_mass", "0 kg", `model_mass: "0 kg" is zero`},
		{"species", "capibara", "did you mean capybara"},
		{"model_species", "corn snake", "model_temperature: missing"},
		{"temperature", "41", "temperature: "},
		{"species", "ball python", "temperature: missing"},
		{"dose", "5 mg/kg/h", "dose: a rate per hour"},
		{"interval", "BID", "interval: "},
		{"stage", "old", `stage: "old"`},
		{"condition", "dehydrated limping", `condition: "limping"`},
		{"case", "a\u202eb", "case: "},
		{"source", "\t", "source: missing"},
		{"half_life", "2", "half_life: "},
		{"drug", "ex\u0430mplicillin", "drug: mixes letters"},
	} {
		row := rowOf(append(slices.Clone(good), k.column, k.cell)...)
		var got RowDraft
		for range 2 { // read, then remembered
			if err := d.Draft(row, &got); err == nil || !strings.Contains(err.Error(), k.says) {
				t.Errorf("%s %q: %v, want %q", k.column, k.cell, err, k.says)
			}
		}
		if err := d.Draft(rowOf(good...), &got); err != nil {
			t.Errorf("the good row after %s %q: %v", k.column, k.cell, err)
		}
	}
}

func TestBatchNeedsADate(t *testing.T) {
	_, err := NewBatch(&CaseInput{Method: MethodInput{Basis: E("mesured")}})
	if err == nil || !strings.Contains(err.Error(), "date: missing") || !strings.Contains(err.Error(), "method.basis") {
		t.Errorf("%v", err)
	}
	b := newBatch(t, MethodInput{Basis: E("measured")})
	var got RowDraft
	err = b.Drafter().Draft(rowOf("species", "okapi", "mass", "250 kg", "model_species", "dog", "model_mass", "400 kg", "dose", "5 mg/kg", "interval", "q12h", "source", "x"), &got)
	if err == nil || !strings.HasPrefix(err.Error(), "basis: ") {
		t.Errorf("a basis that the animals lack: %v", err)
	}
}

// randomRow draws cells that are mostly right, from few values, so that what is
// remembered of one row meets the next.
func randomRow(r *rapid.T) *Row {
	var row Row
	put := func(c Column, cells ...string) { row[c] = []byte(rapid.SampledFrom(cells).Draw(r, c.String())) }
	put(ColumnSpecies, "giant anteater", "Myrmecophaga tridactyla", "red panda", "capybara", "dog", "blue-and-yellow macaw", "ostrich", "ball python",
		"Hermann's tortoise", "cane toad", "echidna", "meerkat", "African elephant", "human", "dik-dik", "bear", "")
	put(ColumnMass, "41 kg", "4.5 kg", "480 g", "36-46 kg", "41 kg ± 10 %", "3000 kg", "0.02 kg", "12", "", "1e9 kg")
	put(ColumnTemperature, "", "", "30 °C", "33C", "38.5 °C", "5 °C", "45 °C", "55 °C", "warm")
	put(ColumnStage, "", "", "adult", "juvenile", "neonate", "Adult", "old")
	put(ColumnDrug, "examplicillin", "demoxacin", "samplazole", "", "ivermectin", "enrofloxacin + etorphine", "diclofenac", "ex\u0430mpl")
	put(ColumnClass, "", "", "penicillin", "opioid", "quinolone", "immobilising agent")
	put(ColumnElimination, "", "renal", "hepatic", "mixed", "biliary", "unknown", "kidney")
	put(ColumnMargin, "", "wide", "narrow", "unknown", "slim")
	put(ColumnModelSpecies, "dog", "dog", "horse", "domestic pigeon", "green iguana", "cat", "giant anteater", "unicorn")
	put(ColumnModelMass, "18 kg", "350 g", "500 kg", "3-5 kg", "4 kg")
	put(ColumnModelTemperature, "", "", "33 °C", "9 °C")
	put(ColumnDose, "10 mg/kg", "5-10 mg/kg", "250 mg", "20 mg/kg/day", "2 mg/kg/h", "20000 IU/kg", "30 mg/m2", "10 mg", "10")
	put(ColumnInterval, "q12h", "24 h", "once", "infusion", "q8h", "2 d", "BID", "q12-24h")
	put(ColumnRoute, "", "SC", "PO", "IV", "s.c.", "by mouth")
	put(ColumnSource, "invented", "invented", "practice protocol 7", "")
	put(ColumnCase, "", "LW-1", "  ", "Ñ 3", "a\tb", "a\u200bb")
	put(ColumnAnimal, "", "Marisol", "Zoë")
	put(ColumnCondition, "", "", "dehydrated", "renal, hepatic", "obese;gravid", "torpid", "tired")
	put(ColumnFoodProducing, "", "true", "no", "perhaps")
	put(ColumnFormulation, "", "", "solution", "depot")
	put(ColumnActivity, "", "time", "concentration")
	put(ColumnHalfLife, "", "", "1.3 h", "30 h")
	return &row
}

func TestRandomRowsAsCases(t *testing.T) {
	methods := []MethodInput{{}, {Basis: E("relatives")}, {Basis: E("measured")}, {Basis: E("equation")}, {Plan: E("both-adjusted"), Q10: E("2")}}
	rapid.Check(t, func(r *rapid.T) {
		b := newBatch(r, rapid.SampledFrom(methods).Draw(r, "method"))
		d := b.Drafter()
		for range 20 {
			sameAsDraft(r, b, d, randomRow(r))
		}
	})
}

// Rows without a fault are rare among the random ones; here only the animals
// and masses vary.
func TestRandomAnimalsAsCases(t *testing.T) {
	b := newBatch(t, MethodInput{})
	d := b.Drafter()
	drafted := 0
	rapid.Check(t, func(r *rapid.T) {
		for range 20 {
			row := rowOf("species", rapid.SampledFrom([]string{"giant anteater", "red panda", "capybara", "meerkat", "tiger", "red kangaroo"}).Draw(r, "species"),
				"mass", metabolic.Significant(rapid.Float64Range(0.3, 300).Draw(r, "mass"), 3)+" kg", "drug", "examplicillin",
				"model_species", rapid.SampledFrom([]string{"dog", "cat", "horse"}).Draw(r, "model"), "model_mass", "20 kg", "dose", "5 mg/kg", "interval", "q12h", "source", "invented")
			if sameAsDraft(r, b, d, row) {
				drafted++
			}
		}
	})
	if drafted == 0 {
		t.Error("not one row was drafted")
	}
}

// What is remembered is bounded, whatever the table.
func TestMemoIsBounded(t *testing.T) {
	var m memo[int]
	for i := range 3 * memoEntries {
		key := []byte(metabolic.Significant(float64(i), 9))
		if got := m.get(key, func() int { return i }); got != i {
			t.Fatalf("%d: %d", i, got)
		}
		if got := m.get(key, func() int { return -1 }); got != i {
			t.Fatalf("%d: not remembered", i)
		}
	}
	if len(m.known) > memoEntries {
		t.Errorf("%d entries", len(m.known))
	}
	long := []byte(strings.Repeat("x", memoLongest+1))
	m.get(long, func() int { return 1 })
	if got := m.get(long, func() int { return 2 }); got != 2 {
		t.Error("a long text was remembered")
	}
}

// Columns name every column once, and each has a place in a case.
func TestColumns(t *testing.T) {
	seen := map[string]bool{}
	for _, c := range Columns() {
		if c.String() == "" || seen[c.String()] || columns[c].field == "" || columns[c].entry == nil && c != ColumnCondition {
			t.Errorf("column %d %q", c, c)
		}
		seen[c.String()] = true
		if back, ok := FindColumn(c.String()); !ok || back != c {
			t.Errorf("%s is found as %v", c, back)
		}
		if got := columnField(columns[c].field); got != c.String() {
			t.Errorf("faults of %s are named %s", c, got)
		}
	}
	n := 2 // case and animal are read by who; species, mass and temperature by themselves
	n += 3 + len(settingColumns) + len(modelColumns)
	if n != int(columnCount) {
		t.Errorf("%d columns are read, there are %d", n, columnCount)
	}
}

func BenchmarkRow(b *testing.B) {
	batch := newBatch(b, MethodInput{})
	rows := make([]*Row, 1000)
	for i := range rows {
		species := []string{"giant anteater", "red panda", "capybara", "maned wolf", "meerkat"}[i%5]
		rows[i] = rowOf("species", species, "mass", metabolic.Significant([]float64{33, 4.5, 48, 24, 0.75}[i%5]*(0.8+0.0004*float64(i)), 4)+" kg",
			"model_species", "dog", "model_mass", "20 kg", "dose", []string{"2 mg/kg", "5 mg/kg", "12.5 mg/kg"}[i%3], "interval", []string{"8 h", "12 h", "24 h"}[i%3], "source", "invented")
	}
	d := batch.Drafter()
	var out RowDraft
	b.ReportAllocs()
	for i := 0; b.Loop(); i++ {
		if err := d.Draft(rows[i%len(rows)], &out); err != nil {
			b.Fatal(err)
		}
	}
}

package dose

import (
	"strings"
	"testing"
)

// Everything that would go into the animal is held against the tolerated
// maximum: the dose as measured out, the loading dose, and each in the
// lightest animal that an estimated mass allows.
func TestToleratedOfWhatIsGiven(t *testing.T) {
	base := func(tolerated string) *CaseInput {
		in := caseOf("giant anteater", "41 kg", "dog", "18 kg", "10 mg/kg", "q12h") // drafts 8.14 mg/kg, 334 mg
		in.Models[0].Tolerated = ToleratedInput{Dose: E(tolerated), Source: E("invented for this test")}
		return in
	}
	for _, k := range []struct {
		name      string
		tolerated string
		change    func(*CaseInput)
		stop      bool
	}{
		{"drafted", "8.2 mg/kg", func(*CaseInput) {}, false},
		{"one and a half tablets, 375 mg", "9.1 mg/kg", func(in *CaseInput) {
			in.Product = ProductEntry{Strength: E("250 mg per tablet"), Divisible: E("halves")}
		}, true},
		{"one and a half tablets, 375 mg", "9.2 mg/kg", func(in *CaseInput) {
			in.Product = ProductEntry{Strength: E("250 mg per tablet"), Divisible: E("halves")}
		}, false},
		{"loading dose", "15 mg/kg", func(in *CaseInput) { in.Models[0].LoadingDose = E("16 mg/kg") }, true},
		{"loading dose", "17 mg/kg", func(in *CaseInput) { in.Models[0].LoadingDose = E("16 mg/kg") }, false},
		{"334 mg in 36 kg", "9.2 mg/kg", func(in *CaseInput) { in.Patient.Mass = E("36-46.7 kg") }, true},
		{"334 mg in 36 kg", "9.3 mg/kg", func(in *CaseInput) { in.Patient.Mass = E("36-46.7 kg") }, false},
	} {
		in := base(k.tolerated)
		k.change(in)
		w := draftOf(t, in)
		if got := has(w, "above-tolerated"); (got != nil) != k.stop {
			t.Errorf("%s against %s: %+v", k.name, k.tolerated, got)
		}
	}
}

// What a case may not ask for.
func TestRefusedPlansAndPatients(t *testing.T) {
	for _, k := range []struct {
		name, want string
		change     func(*CaseInput)
	}{
		{"time-dependent, stretched", "method.plan: same-dose stretches the interval", func(in *CaseInput) {
			in.Drug.Activity, in.Method.Plan = E("time"), E("same-dose")
		}},
		{"time-dependent, both adjusted", "method.plan: both-adjusted stretches the interval", func(in *CaseInput) {
			in.Drug.Activity, in.Method.Plan = E("time"), E("both-adjusted")
		}},
		{"depot, scaled", "method.plan: a depot form keeps the model's interval", func(in *CaseInput) {
			in.Drug.Formulation, in.Method.Plan = E("depot"), E("same-dose")
		}},
		{"man as the patient", "patient.species: man may be a model, never the patient", func(in *CaseInput) {
			in.Patient.Species, in.Patient.Mass = E("human"), E("70 kg")
		}},
	} {
		in := caseOf("giant anteater", "41 kg", "dog", "18 kg", "10 mg/kg", "q12h")
		k.change(in)
		c, err := in.Check()
		if err == nil {
			_, err = Draft(c)
		}
		if err == nil || !strings.Contains(err.Error(), k.want) {
			t.Errorf("%s: %v, want %q", k.name, err, k.want)
		}
	}
	// A shorter interval is no stretch.
	in := caseOf("rabbit", "3 kg", "dog", "18 kg", "10 mg/kg", "q12h")
	in.Drug.Name, in.Drug.Activity, in.Method.Plan = E("inventamol"), E("time"), E("same-dose")
	if w := draftOf(t, in); w.Drafted.Plan != "same-dose" || *w.Drafted.IntervalH >= 12 {
		t.Errorf("%+v", w.Drafted)
	}
}

// A proposed range is judged at both its ends; a single dose is not held
// against a repeated one's range; stops of the proposal come first.
func TestProposedEnds(t *testing.T) {
	propose := func(dose, interval string) *Proposed {
		in := caseOf("giant anteater", "41 kg", "dog", "18 kg", "10 mg/kg", "q12h")
		in.Proposed = ProposedInput{Dose: E(dose), Interval: E(interval)}
		in.Product = ProductEntry{Strength: E("50 mg/mL"), Step: E("0.1 mL")}
		return draftOf(t, in).Proposed
	}
	// Nine in ten is 1.04 to 63.6 mg/kg at 12 h.
	if p := propose("2-200 mg/kg", "q12h"); !p.OutsideRange || !p.RaisesStop || !strings.HasPrefix(p.Verdict[0], "STOP") {
		t.Errorf("%+v", p)
	}
	if p := propose("2-60 mg/kg", "q12h"); p.OutsideRange {
		t.Errorf("%+v", p)
	}
	// 50 mg/kg every 6 hours is 100 mg/kg every 12.
	if p := propose("50 mg/kg", "q6h"); !p.OutsideRange || !p.Differs {
		t.Errorf("%+v", p)
	}
	if p := propose("8 mg/kg", "once"); !p.Differs || !p.OutsideRange || p.Ratios.Daily != 0 {
		t.Errorf("%+v", p)
	}
	if p := propose("8.14 mg/kg", "q12h"); p.Differs || p.OutsideRange || p.RaisesStop || len(p.Measured) != 1 || relative(p.PerAdministration[0], 8.14*41) > 1e-12 {
		t.Errorf("%+v", p)
	}
}

// The line of the basis used is the drafted dose itself, whatever the plan.
func TestBasesAtTheDraftedInterval(t *testing.T) {
	for _, interval := range []string{"q12h", "q24h", "once", "q3d"} {
		in := caseOf("rabbit", "3 kg", "dog", "18 kg", "10 mg/kg", interval)
		in.Drug.Name = E("inventamol")
		w := draftOf(t, in)
		for _, b := range w.Bases {
			if b.Drafted && interval != "once" && relative(b.DosePerKg[0], w.Drafted.DosePerKg[0]) > 1e-12 {
				t.Errorf("%s: %v by the basis used, drafted %v", interval, b.DosePerKg, w.Drafted.DosePerKg)
			}
		}
		for _, e := range w.Exponents {
			if e.Exponent == 0.75 && interval != "once" && relative(e.DosePerKg[1], w.Drafted.DosePerKg[1]) > 1e-12 {
				t.Errorf("%s: %v at 0.75, drafted %v", interval, e.DosePerKg, w.Drafted.DosePerKg)
			}
		}
	}
}

// A threshold that is loosened warns and gives both numbers.
func TestChangedThresholds(t *testing.T) {
	in := caseOf("giant anteater", "41 kg", "dog", "18 kg", "10 mg/kg", "q12h")
	in.Method.Thresholds = []NamedEntry{{Name: E("basis-disagrees"), Value: E("4")}}
	k := has(draftOf(t, in), "threshold-changed")
	if k == nil || k.Level != Warn || !strings.Contains(k.Text, "basis-disagrees 4 (default 2)") {
		t.Errorf("%+v", k)
	}
	in.Method.Thresholds[0].Value = E("1.2")
	if k := has(draftOf(t, in), "threshold-changed"); k == nil || k.Level != Note {
		t.Errorf("%+v", k)
	}
	in.Method.Thresholds = []NamedEntry{{Name: E("interval-short"), Value: E("2 h")}}
	if _, err := in.Check(); err == nil {
		t.Error("a threshold with a unit was read")
	}
	in.Method.Thresholds[0].Value = E("2")
	if k := has(draftOf(t, in), "threshold-changed"); k == nil || k.Level != Warn {
		t.Errorf("%+v", k)
	}
}

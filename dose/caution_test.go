package dose

import (
	"strings"
	"testing"
)

// Each caution of the method: a case that raises it, at its level, and the same
// case with one thing changed that does not.
func TestCautions(t *testing.T) {
	base := func() *CaseInput { return caseOf("giant anteater", "41 kg", "dog", "18 kg", "10 mg/kg", "q12h") }
	with := func(in *CaseInput, change func(*CaseInput)) *CaseInput { change(in); return in }
	type change = func(*CaseInput)
	for _, k := range []struct {
		slug      Slug
		level     Level
		yes, no   *CaseInput
		raise     change
		calm      change
		onlyLevel bool // the calm case raises it at another level
	}{
		{slug: SameSpecies, level: Stop, raise: func(in *CaseInput) { in.Patient.Species, in.Patient.Mass = E("grey wolf"), E("40 kg") },
			calm: func(in *CaseInput) { in.Patient.Species, in.Patient.Mass = E("coyote"), E("14 kg") }},
		{slug: ImplausibleMass, level: Stop, raise: func(in *CaseInput) { in.Patient.Mass = E("41 g") }, calm: func(in *CaseInput) { in.Patient.Mass = E("20 kg") }},
		{slug: ImplausibleMass, level: Stop, raise: func(in *CaseInput) { in.Patient.Mass = E("181 kg") }, calm: func(in *CaseInput) { in.Patient.Mass = E("179 kg") }},
		{slug: ImplausibleMass, level: Stop, raise: func(in *CaseInput) { in.Models[0].Mass = E("18 g") }, calm: func(in *CaseInput) {}},
		{slug: ImplausibleMass, level: Stop, raise: func(in *CaseInput) { in.Patient.Mass = E("200 g") }, calm: func(in *CaseInput) { in.Patient.Mass, in.Patient.Stage = E("200 g"), E("neonate") }},
		{slug: NarrowMargin, level: Stop, raise: func(in *CaseInput) { in.Drug.Margin = E("narrow") }, calm: func(in *CaseInput) { in.Drug.Margin = E("unknown") }},
		{slug: CrossClass, level: Stop, raise: func(in *CaseInput) { in.Patient.Species, in.Patient.Mass = E("blue-and-yellow macaw"), E("1 kg") },
			calm: func(in *CaseInput) {}},
		{slug: CrossClass, level: Warn, onlyLevel: true, raise: func(in *CaseInput) {
			in.Patient.Species, in.Patient.Mass, in.Drug.Margin = E("blue-and-yellow macaw"), E("1 kg"), E("wide")
		}, calm: func(in *CaseInput) { in.Patient.Species, in.Patient.Mass = E("blue-and-yellow macaw"), E("1 kg") }},
		{slug: CrossThermy, level: Stop, raise: func(in *CaseInput) {
			in.Patient.Species, in.Patient.Mass, in.Patient.Temperature = E("ball python"), E("1.4 kg"), E("30 °C")
		}, calm: func(in *CaseInput) { in.Patient.Species, in.Patient.Mass = E("blue-and-yellow macaw"), E("1 kg") }},
		{slug: TorpidPatient, level: Stop, raise: func(in *CaseInput) { in.Patient.Condition = []Entry{E("torpid")} }, calm: func(in *CaseInput) { in.Patient.Condition = []Entry{E("pregnant")} }},
		{slug: NeonatePatient, level: Stop, raise: func(in *CaseInput) { in.Patient.Stage = E("neonate") }, calm: func(in *CaseInput) { in.Patient.Stage = E("juvenile") }},
		{slug: JuvenilePatient, level: Warn, raise: func(in *CaseInput) { in.Patient.Stage = E("juvenile") }, calm: func(in *CaseInput) { in.Patient.Stage = E("adult") }},
		{slug: ClearingOrgan, level: Stop, raise: func(in *CaseInput) {
			in.Patient.Condition, in.Drug.Elimination = []Entry{E("renal")}, E("renal")
		},
			calm: func(in *CaseInput) { in.Patient.Condition, in.Drug.Elimination = []Entry{E("renal")}, E("hepatic") }},
		{slug: ClearingOrgan, level: Stop, raise: func(in *CaseInput) {
			in.Patient.Condition, in.Drug.Elimination = []Entry{E("hepatic")}, E("hepatic")
		},
			calm: func(in *CaseInput) { in.Patient.Condition, in.Drug.Elimination = []Entry{E("hepatic")}, E("renal") }},
		{slug: DepotForm, level: Stop, raise: func(in *CaseInput) { in.Drug.Formulation = E("depot") }, calm: func(in *CaseInput) { in.Drug.Formulation = E("solution") }},
		{slug: AboveTolerated, level: Stop, raise: func(in *CaseInput) {
			in.Models[0].Tolerated = ToleratedInput{Dose: E("8 mg/kg"), Source: E("invented")}
		},
			calm: func(in *CaseInput) {
				in.Models[0].Tolerated = ToleratedInput{Dose: E("9 mg/kg"), Source: E("invented")}
			}},
		{slug: Peak, level: Stop, raise: func(in *CaseInput) { // 24 h to a clock of 6 h keeps d'; same-interval does not
			in.Patient.Species, in.Patient.Mass, in.Method.Plan = E("house mouse"), E("20 g"), E("same-interval")
		}, calm: func(in *CaseInput) {
			in.Patient.Species, in.Patient.Mass, in.Models[0].Interval = E("house mouse"), E("20 g"), E("q24h")
		}},
		{slug: Peak, level: Warn, onlyLevel: true, raise: func(in *CaseInput) {
			in.Patient.Species, in.Patient.Mass, in.Method.Plan, in.Drug.Margin = E("house mouse"), E("20 g"), E("same-interval"), E("wide")
		}, calm: func(in *CaseInput) {
			in.Patient.Species, in.Patient.Mass, in.Method.Plan = E("house mouse"), E("20 g"), E("same-interval")
		}},
		{slug: MassRatio, level: Warn, raise: func(in *CaseInput) { in.Models[0].Mass = E("2 kg") }, calm: func(in *CaseInput) { in.Models[0].Mass = E("2.1 kg") }},
		{slug: MassRatioExtreme, level: Warn, raise: func(in *CaseInput) {
			in.Patient.Species, in.Patient.Mass = E("house mouse"), E("20 g")
		}, calm: func(in *CaseInput) { in.Models[0].Mass = E("2 kg") }},
		{slug: BasisDisagrees, level: Warn, raise: func(in *CaseInput) {}, calm: func(in *CaseInput) { in.Patient.Species = E("red kangaroo"); in.Patient.Mass = E("30 kg") }},
		{slug: LargeChange, level: Warn, raise: func(in *CaseInput) { in.Patient.Species, in.Patient.Mass = E("house mouse"), E("20 g") }, calm: func(in *CaseInput) {}},
		{slug: Compounded, level: Warn, raise: func(in *CaseInput) { in.Method.Plan, in.Models[0].Mass = E("both-adjusted"), E("10 kg") },
			calm: func(in *CaseInput) { in.Method.Plan = E("both-adjusted") }},
		{slug: Impractical, level: Warn, raise: func(in *CaseInput) { in.Patient.Species, in.Patient.Mass = E("house mouse"), E("20 g") }, calm: func(in *CaseInput) {}},
		{slug: HumanModel, level: Warn, raise: func(in *CaseInput) { in.Models[0].Species, in.Models[0].Mass = E("human"), E("70 kg") }, calm: func(in *CaseInput) {}},
		{slug: PublishedExists, level: Warn, raise: func(in *CaseInput) {
			in.Published = []PublishedInput{{Species: E("giant anteater"), Dose: E("9 mg/kg"), Interval: E("q12h"), Source: E("invented")}}
		}, calm: func(in *CaseInput) {}},
		{slug: PublishedExists, level: Note, raise: func(in *CaseInput) {
			in.Published = []PublishedInput{{Species: E("southern tamandua"), Dose: E("9 mg/kg"), Interval: E("q12h"), Source: E("invented")}}
		}, calm: func(in *CaseInput) {}},
		{slug: FoodAnimal, level: Warn, raise: func(in *CaseInput) { in.Patient.FoodProducing = E("true") }, calm: func(in *CaseInput) { in.Patient.FoodProducing = E("false") }},
		{slug: ControlledDrug, level: Warn, raise: func(in *CaseInput) { in.Drug.Controlled = E("true") }, calm: func(in *CaseInput) { in.Drug.Controlled = E("false") }},
		{slug: PatientCondition, level: Warn, raise: func(in *CaseInput) { in.Patient.Condition = []Entry{E("dehydrated")} }, calm: func(in *CaseInput) {}},
		{slug: RoundingError, level: Warn, raise: func(in *CaseInput) { in.Product = ProductEntry{Strength: E("400 mg/mL"), Step: E("0.5 mL")} },
			calm: func(in *CaseInput) { in.Product = ProductEntry{Strength: E("50 mg/mL"), Step: E("0.1 mL")} }},
		{slug: BelowStep, level: Stop, raise: func(in *CaseInput) { in.Product = ProductEntry{Strength: E("400 mg/mL"), Step: E("1 mL")} },
			calm: func(in *CaseInput) { in.Product = ProductEntry{Strength: E("400 mg/mL"), Step: E("0.5 mL")} }},
		{slug: EstimatedMass, level: Note, raise: func(in *CaseInput) { in.Patient.Mass = E("36-46 kg") }, calm: func(in *CaseInput) {}},
		{slug: EstimatedMass, level: Warn, raise: func(in *CaseInput) { in.Patient.Mass = E("30-50 kg") }, calm: func(in *CaseInput) {}},
		{slug: OneModel, level: Note, raise: func(in *CaseInput) {}, calm: func(in *CaseInput) {
			in.Models = append(in.Models, in.Models[0])
			in.Models[1].Species, in.Models[1].Mass = E("horse"), E("500 kg")
		}},
		{slug: GroupConstant, level: Note, raise: func(in *CaseInput) {}, calm: func(in *CaseInput) { in.Method.Basis = E("measured") }},
		{slug: NoHalfLife, level: Note, raise: func(in *CaseInput) {}, calm: func(in *CaseInput) { in.Models[0].HalfLife = E("2 h") }},
		{slug: MassNotBody, level: Note, raise: func(in *CaseInput) {
			in.Patient.Species, in.Patient.Mass, in.Patient.Temperature = E("Hermann's tortoise"), E("1 kg"), E("28 °C")
		}, calm: func(in *CaseInput) {}},
		{slug: BodyTemperature, level: Warn, raise: func(in *CaseInput) { in.Patient.Temperature = E("25 °C") }, calm: func(in *CaseInput) { in.Patient.Temperature = E("33 °C") }},
		{slug: EffectDriven, level: Warn, raise: func(in *CaseInput) { in.Drug.Class = E("alpha-2 agonist") }, calm: func(in *CaseInput) { in.Drug.Class = E("penicillin") }},
		{slug: EffectDriven, level: Stop, raise: func(in *CaseInput) { in.Drug.Class = E("ultra-potent opioid immobiliser") }, calm: func(in *CaseInput) {}},
		{slug: Suitability, level: Warn, raise: func(in *CaseInput) { in.Drug.ProteinBinding = E("95 %") }, calm: func(in *CaseInput) { in.Drug.ProteinBinding = E("20 %") }},
		{slug: RouteDiffers, level: Warn, raise: func(in *CaseInput) { in.Models[0].Route, in.Drug.Route = E("IV"), E("PO") },
			calm: func(in *CaseInput) { in.Models[0].Route, in.Drug.Route = E("oral"), E("PO") }},
		{slug: GutType, level: Warn, raise: func(in *CaseInput) {
			in.Models[0].Route, in.Models[0].Species, in.Models[0].Mass = E("PO"), E("cattle"), E("500 kg")
		}, calm: func(in *CaseInput) {
			in.Models[0].Route, in.Models[0].Species, in.Models[0].Mass = E("SC"), E("cattle"), E("500 kg")
		}},
		{slug: Accumulation, level: Warn, raise: func(in *CaseInput) { in.Models[0].HalfLife = E("30 d") }, calm: func(in *CaseInput) { in.Models[0].HalfLife = E("3 h") }},
		{slug: FlipFlop, level: Warn, raise: func(in *CaseInput) { in.Models[0].HalfLife, in.Models[0].AbsorptionHalfLife = E("2 h"), E("3 h") },
			calm: func(in *CaseInput) { in.Models[0].HalfLife, in.Models[0].AbsorptionHalfLife = E("2 h"), E("1 h") }},
	} {
		yes, err := Draft(checked(t, with(base(), k.raise)))
		if err != nil {
			t.Errorf("%s: %v", k.slug, err)
			continue
		}
		got := has(yes, string(k.slug))
		if got == nil || got.Level != k.level {
			t.Errorf("%s is not raised as %s: %+v", k.slug, k.level, got)
			continue
		}
		if strings.Contains(got.Text, "%!") || len(got.Text) < 20 || strings.Contains(got.Text, "  ") {
			t.Errorf("%s: text %q", k.slug, got.Text)
		}
		if k.level == Stop && yes.Drafted != nil {
			t.Errorf("%s: a stop and a draft", k.slug)
		}
		no, err := Draft(checked(t, with(base(), k.calm)))
		if err != nil {
			t.Errorf("%s: %v", k.slug, err)
			continue
		}
		if got := has(no, string(k.slug)); got != nil && (!k.onlyLevel || got.Level == k.level) {
			t.Errorf("%s is raised without cause: %+v", k.slug, got)
		}
	}
}

// A stop leaves no number of a dose anywhere in the record; a written reason
// brings the draft back and stands beside it; a reason for a stop that was not
// raised, or for one that cannot be overridden, is an error of the input.
func TestStopAndOverride(t *testing.T) {
	in := caseOf("blue-and-yellow macaw", "1 kg", "dog", "18 kg", "10 mg/kg", "q12h")
	in.Drug.Margin = E("narrow")
	in.Product = ProductEntry{Strength: E("50 mg/mL"), Step: E("0.01 mL")}
	w := draftOf(t, in)
	if w.Drafted != nil || w.Product != nil || len(w.Exponents) > 0 || len(w.Curves) > 0 || w.Loading != nil {
		t.Errorf("a dose in spite of the stops: %+v", w)
	}
	for _, d := range w.Drafts {
		if len(d.Plans) > 0 || d.Range90 != nil || d.Range50 != nil || len(d.Parts) > 0 || d.Plan != "" {
			t.Errorf("numbers in the draft: %+v", d)
		}
		for _, s := range d.Steps {
			if strings.Contains(s.Unit, "mg") {
				t.Errorf("a dose in the steps: %+v", s)
			}
		}
	}
	for _, b := range w.Bases {
		if b.DosePerKg != nil {
			t.Errorf("a dose in the bases: %+v", b)
		}
	}
	in.Overrides = []NamedEntry{{Name: E("narrow-margin"), Value: E("serum levels will be measured")}}
	if w := draftOf(t, in); w.Drafted != nil {
		t.Error("one of two stops was enough")
	}
	in.Overrides = append(in.Overrides, NamedEntry{Name: E("cross-class"), Value: E("no bird was ever studied with this drug")})
	w = draftOf(t, in)
	if w.Drafted == nil || w.Overrides["cross-class"] == "" {
		t.Fatal("both stops overridden, and still no draft")
	}
	if k := has(w, "narrow-margin"); !k.Overridden || k.Reason != "serum levels will be measured" {
		t.Errorf("%+v", k)
	}
	for _, bad := range []struct{ slug, reason, want string }{
		{"neonate", "it is not one any more", "no stop of this name is raised"},
		{"same-species", "they are not the same", "cannot be overridden"},
		{"narrow-margin", "ok", "too short"},
	} {
		in.Overrides = []NamedEntry{{Name: E(bad.slug), Value: E(bad.reason)}}
		c, err := in.Check()
		if err == nil {
			_, err = Draft(c)
		}
		if err == nil || !strings.Contains(err.Error(), bad.want) {
			t.Errorf("override %s: %v, want %q", bad.slug, err, bad.want)
		}
	}
}

// A same-species case prints the model's dose as published.
func TestSameSpecies(t *testing.T) {
	in := caseOf("grey wolf", "40 kg", "dog", "18 kg", "10 mg/kg", "q12h")
	w := draftOf(t, in)
	if w.Drafted != nil || len(w.Published) != 1 || w.Published[0].DosePerKg[0] != 10 || w.Published[0].Relation != "species" {
		t.Errorf("%+v", w.Published)
	}
}

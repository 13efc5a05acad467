package dose

import (
	"math"
	"testing"
)

// twoModels is an anteater drafted from a dog and a horse, each with a dose
// range, so that every number of the summary can be worked out by hand.
func twoModels() *CaseInput {
	in := caseOf("giant anteater", "41 kg", "dog", "18 kg", "10-20 mg/kg", "q12h")
	in.Models = append(in.Models, ModelInput{Species: E("horse"), Mass: E("500 kg"), Dose: E("4 mg/kg"), Interval: E("q24h"), Source: E("invented for this test")})
	return in
}

// The summary of two models by hand: group constants on both sides, so that
// the ratio of rates per kg is (W/W')^-0.25. All figures are worked out here.
func TestTwoModelsByHand(t *testing.T) {
	w := draftOf(t, twoModels())
	s := w.Several
	if s == nil {
		t.Fatal("no summary")
	}
	sDog, sHorse := math.Pow(41.0/18, -0.25), math.Pow(41.0/500, -0.25)
	dog := math.Sqrt(10*20) * 2 * sDog // daily, geometric middle of the range
	horse := 4 * sHorse
	if relative(s.Models[0].DraftedDaily, dog) > 1e-12 || relative(s.Models[1].DraftedDaily, horse) > 1e-12 {
		t.Errorf("drafted daily %v and %v, want %v and %v", s.Models[0].DraftedDaily, s.Models[1].DraftedDaily, dog, horse)
	}
	near(t, "mean", s.MeanDailyPerKg, math.Sqrt(dog*horse), 1e-9)
	near(t, "fold spread", s.FoldSpread, math.Max(dog/horse, horse/dog), 1e-9)
	d := math.Log(dog / horse)
	near(t, "variance between", s.VarBetween, d*d/2, 1e-12)
	near(t, "sd", s.SD, math.Sqrt(1.25*1.25+d*d/2), 1e-12)
	near(t, "range 90", s.Range90.High, s.MeanDailyPerKg*math.Exp(1.645*s.SD), 1e-9)
	near(t, "range 50", s.Range50.Low, s.MeanDailyPerKg*math.Exp(-0.674*s.SD), 1e-9)
	// Each model's own dose, predicted from the other.
	fromHorse := 4 * math.Pow(18.0/500, -0.25)
	fromDog := math.Sqrt(10*20) * 2 * math.Pow(500.0/18, -0.25)
	near(t, "dog from horse", s.Models[0].PredictedDaily, fromHorse, 1e-9)
	near(t, "horse from dog", s.Models[1].PredictedDaily, fromDog, 1e-9)
	near(t, "fold error of the dog", s.Models[0].FoldError, fromHorse/(math.Sqrt(10*20)*2), 1e-9)
}

// The draft is taken from the nearest kin, then from the nearest mass on a log
// scale, wherever the model stands in the case.
func TestDraftedFrom(t *testing.T) {
	model := func(species, mass string) ModelInput {
		return ModelInput{Species: E(species), Mass: E(mass), Dose: E("10 mg/kg"), Interval: E("q12h"), Source: E("invented for this test")}
	}
	for _, k := range []struct {
		patient, mass string
		models        []ModelInput
		want          int
	}{
		{"red fox", "6 kg", []ModelInput{model("horse", "500 kg"), model("cat", "4 kg"), model("dog", "40 kg")}, 2},            // family before order before class
		{"red fox", "6 kg", []ModelInput{model("cat", "6 kg"), model("dog", "60 kg")}, 1},                                      // kin before mass
		{"giant anteater", "41 kg", []ModelInput{model("rabbit", "3 kg"), model("horse", "500 kg"), model("dog", "18 kg")}, 2}, // mass
		{"giant anteater", "41 kg", []ModelInput{model("dog", "10 kg"), model("sheep", "90 kg")}, 1},                           // 4.1-fold against 2.2-fold, though 31 kg against 49
	} {
		in := caseOf(k.patient, k.mass, "dog", "18 kg", "10 mg/kg", "q12h")
		in.Models = k.models
		if w := draftOf(t, in); w.DraftedFrom.Index != k.want {
			t.Errorf("%s from %s, want model %d", k.patient, w.DraftedFrom.Model, k.want)
		}
	}
}

// Cautions that only several models raise.
func TestSeveralCautions(t *testing.T) {
	in := twoModels()
	in.Models[1].Dose = E("40 mg/kg")
	if k := has(draftOf(t, in), "models-disagree"); k == nil || k.Level != Warn {
		t.Errorf("models-disagree: %+v", k)
	}
	in.Models[1].Dose = E("12 mg/kg")
	if k := has(draftOf(t, in), "models-disagree"); k != nil {
		t.Errorf("models-disagree without cause: %+v", k)
	}
	in.Models[1].Species, in.Models[1].Mass = E("cat"), E("4 kg")
	if k := has(draftOf(t, in), "models-of-one-order"); k == nil || k.Level != Note {
		t.Errorf("models-of-one-order: %+v", k)
	}
}

// Cautions about the animals and their bases.
func TestAnimalCautions(t *testing.T) {
	for _, k := range []struct {
		slug  string
		level Level
		in    *CaseInput
		basis string
	}{
		{"adult-mass", Note, caseOf("giant anteater", "70 kg", "dog", "18 kg", "10 mg/kg", "q12h"), ""},
		{"adult-mass", Warn, caseOf("giant anteater", "100 kg", "dog", "18 kg", "10 mg/kg", "q12h"), ""},
		{"adult-mass", Warn, caseOf("giant anteater", "11 kg", "dog", "18 kg", "10 mg/kg", "q12h"), ""},
		{"mass-unjudged", Note, caseOf("Acomys russatus", "50 g", "rat", "250 g", "10 mg/kg", "q12h"), ""},
		{"outside-data", Warn, caseOf("red kangaroo", "60 kg", "dog", "18 kg", "10 mg/kg", "q12h"), ""},
		{"basis-stands-in", Warn, caseOf("platypus", "1.3 kg", "dog", "18 kg", "10 mg/kg", "q12h"), ""},
	} {
		k.in.Drug.Name = E("inventamol")
		if got := has(draftOf(t, k.in), k.slug); got == nil || got.Level != k.level {
			t.Errorf("%s in %s: %+v, want %s", k.slug, k.in.Patient.Species.Text, got, k.level)
		}
	}
}

// A fitted dose goes with the mass by the line's exponent, and so does its
// spread; beside a fitted line there is no summary of scaled models.
func TestFittedEstimatedMass(t *testing.T) {
	table, err := ReadFitTable("drug.csv", []byte("species,mass (kg),clearance (mL/min)\nrat,0.25,2\nrabbit,3,12\ndog,10,30\nhorse,500,600\n"))
	if err != nil {
		t.Fatal(err)
	}
	in := twoModels()
	in.Models[1].Dose = E("12 mg/kg")
	in.Patient.Mass = E("25-67 kg")
	in.Fit = &FitCase{Table: *table, Average: E("2 mg/L"), Source: E("invented for this test")}
	w := draftOf(t, in)
	if w.Several != nil {
		t.Error("a summary of unlike drafts")
	}
	h, b := 0.5*math.Log(67.0/25)/1.645, w.Fit.B
	sd := math.Log(2.64) / 0.798
	near(t, "sd of the dose per kg", w.Drafted.Range90.SD, math.Hypot(sd, (b-1)*h), 1e-3)
	near(t, "sd of the amount", w.Drafted.Range90Amount.SD, math.Hypot(sd, b*h), 1e-3)
	near(t, "amount at 25 kg", w.Drafted.AtLowMass[0]/w.Drafted.PerAdministration[0], math.Pow(25/math.Sqrt(25*67), b), 1e-9)
}

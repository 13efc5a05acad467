package dose

import (
	"math"
	"testing"
)

// The record is chosen by the two animals, and the standard deviation put
// together as the method says; every expected figure is worked out here from
// the method's constants, not from the code's.
func TestSpread(t *testing.T) {
	for _, k := range []struct {
		name                string
		patient, mass       string
		model, modelMass    string
		temp, modelTemp     string
		kappaS              float64
		temperature, perKgM float64
	}{
		{name: "two mammals", patient: "giant anteater", mass: "41 kg", model: "dog", modelMass: "18 kg", kappaS: 1.25},
		{name: "one order", patient: "lion", mass: "150 kg", model: "dog", modelMass: "18 kg", kappaS: 0.8 * 1.25},
		{name: "man", patient: "giant anteater", mass: "41 kg", model: "human", modelMass: "70 kg", kappaS: 1.41},
		{name: "man and a primate", patient: "rhesus macaque", mass: "6 kg", model: "human", modelMass: "70 kg", kappaS: 0.8 * 1.41},
		{name: "two birds", patient: "blue-and-yellow macaw", mass: "1 kg", model: "chicken", modelMass: "2 kg", kappaS: 1.46},
		{name: "an ostrich", patient: "ostrich", mass: "100 kg", model: "chicken", modelMass: "2 kg", kappaS: 2.70},
		{name: "mammal and bird", patient: "blue-and-yellow macaw", mass: "1 kg", model: "dog", modelMass: "18 kg", kappaS: 1.46},
		{name: "two reptiles", patient: "ball python", mass: "1.4 kg", temp: "30 °C", model: "corn snake", modelMass: "0.8 kg", modelTemp: "27 °C", kappaS: 1.46,
			temperature: math.Hypot(0.15*0.7, 0.15*1)},
		{name: "reptile and mammal", patient: "ball python", mass: "1.4 kg", temp: "37 °C", model: "dog", modelMass: "18 kg", kappaS: 2},
	} {
		in := caseOf(k.patient, k.mass, k.model, k.modelMass, "10 mg/kg", "q24h")
		in.Patient.Temperature, in.Models[0].Temperature = E(k.temp), E(k.modelTemp)
		c := checked(t, in)
		var n numbers
		if err := compute(c, &n); err != nil {
			t.Fatal(err)
		}
		sp := n.models[0].spread
		if relative(sp.floor, k.kappaS) > 1e-12 {
			t.Errorf("%s: κ·s %v, want %v", k.name, sp.floor, k.kappaS)
		}
		lnM := math.Log(float64(c.Patient.Mass.Middle / c.Models[0].Mass.Middle))
		rest := math.Sqrt(0.16*0.16*lnM*lnM + sp.model*sp.model + sp.target*sp.target)
		if want := math.Hypot(math.Max(k.kappaS, rest), k.temperature); relative(sp.perKg, want) > 1e-12 || sp.perKg != sp.amount {
			t.Errorf("%s: sd %v and %v, want %v", k.name, sp.perKg, sp.amount, want)
		}
	}
}

// Estimated masses: 0.25·h/1.645 of mg/kg, 0.75·h/1.645 of the amount for the
// patient's; a model's dose per animal takes its mass in once more.
func TestSpreadOfEstimatedMasses(t *testing.T) {
	h := 0.5 * math.Log(46.0/36)
	in := caseOf("giant anteater", "36-46 kg", "dog", "18 kg", "10 mg/kg", "q12h")
	w := draftOf(t, in)
	base := 1.25
	if got, want := w.Drafted.Range90.SD, math.Hypot(base, 0.25*h/1.645); relative(got, want) > 1e-12 {
		t.Errorf("of mg/kg: %v, want %v", got, want)
	}
	if got, want := w.Drafted.Range90Amount.SD, math.Hypot(base, 0.75*h/1.645); relative(got, want) > 1e-12 {
		t.Errorf("of the amount: %v, want %v", got, want)
	}
	// At the ends D = d·(W/Wm)^0.75·Wm.
	if got, want := w.Drafted.AtLowMass[0], 10*18*math.Pow(36.0/18, 0.75); relative(got, want) > 1e-12 {
		t.Errorf("amount at 36 kg: %v, want %v", got, want)
	}
	if got, want := w.Drafted.AtHighMass[1], 10*18*math.Pow(46.0/18, 0.75); relative(got, want) > 1e-12 {
		t.Errorf("amount at 46 kg: %v, want %v", got, want)
	}
	if got := w.Patient.MassKg; relative(got, math.Sqrt(36*46)) > 1e-12 {
		t.Errorf("middle %v", got)
	}
	in = caseOf("giant anteater", "41 kg", "dog", "18 kg ± 20 %", "180 mg per animal", "q12h")
	hm := 0.5 * math.Log(1.2*1.2)
	if got, want := draftOf(t, in).Drafted.Range90.SD, math.Hypot(base, 0.75*hm/1.645); relative(got, want) > 1e-12 {
		t.Errorf("dose per animal: %v, want %v", got, want)
	}
}

// A single dose takes its range on d·S, and its by-volume end one of its own.
func TestRangeOfOnce(t *testing.T) {
	w := draftOf(t, caseOf("giant anteater", "41 kg", "dog", "18 kg", "5-10 mg/kg", "once"))
	s := w.Drafts[0].Ratios.Specific
	if relative(w.Drafted.Range90.Low, 5*s*math.Exp(-1.645*1.25)) > 1e-12 || relative(w.Drafted.Range90.High, 10*s*math.Exp(1.645*1.25)) > 1e-12 {
		t.Errorf("range %+v", w.Drafted.Range90)
	}
	if v := w.Drafts[0].VolumeRange90; relative(v.Low, 5*math.Exp(-1.645*1.1)) > 1e-12 || relative(v.High, 10*math.Exp(1.645*1.1)) > 1e-12 {
		t.Errorf("by volume %+v", v)
	}
	if d := w.Drafted.DosePerKg; relative(d[0], 5*s) > 1e-12 || d[1] != 10 {
		t.Errorf("bracket %v", d)
	}
}

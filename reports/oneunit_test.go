package reports

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tayra/dose"
	"tayra/metabolic"
)

func TestOneUnit(t *testing.T) {
	for _, k := range []struct{ got, want string }{
		{amountPair(dose.Pair{0.774, 97.9}, "mg/kg"), "0.774 to 97.9 mg"},
		{amountPair(dose.Pair{42.7, 2610}, "mg/kg"), "42.7 to 2,610 mg"},
		{amountPair(dose.Pair{0.824, 22.1}, "mg/kg/h"), "0.824 to 22.1 mg/h"},
		{amountPair(dose.Pair{0.5, 1200}, "mg/kg"), "0.5 to 1,200 mg"},
		{amountPair(dose.Pair{0.085, 0.9}, "mg/kg"), "85 to 900 mcg"}, // one unit by itself
		{amountPair(dose.Pair{1500, 2610}, "mg/kg"), "1.5 to 2.61 g"},
		{amountPair(dose.Pair{0.9996, 0.9997}, "mg/kg"), "1 mg"},
		{amountPair(dose.Pair{1, 3}, "IU/kg"), "1 to 3 units"}, // and not 1 unit to 3 units
		{amountPair(dose.Pair{1, 1}, "IU/kg"), "1 unit"},
		{massRange(0.9, 1.2), "0.9 to 1.2 kg"},
		{massRange(0.35, 0.45), "350 to 450 g"},
		{massRange(800, 4500), "800 to 4,500 kg"},
		{massWords(1.0392, 0.9, 1.2), "1.04 kg (estimated, 0.9 to 1.2 kg)"},
		{massWords(0.9798, 0.8, 1.2), "0.98 kg (estimated, 0.8 to 1.2 kg)"},
		{massWords(0.3969, 0.35, 0.45), "397 g (estimated, 350 to 450 g)"},
		{massWords(4.275, 4.275, 4.275), "4.275 kg"},
		{massWords(0.35, 0.35, 0.35), "350 g"},
	} {
		if k.got != k.want {
			t.Errorf("%q, want %q", k.got, k.want)
		}
	}
	d := &dose.Drafted{Unit: "mg/kg", Range50Amount: dose.DoseRange{Low: 144, High: 775}, Range90Amount: dose.DoseRange{Low: 42.7, High: 2610}}
	if even, ninety := amountRanges(d); even != "144 to 775 mg" || ninety != "42.7 to 2,610 mg" {
		t.Errorf("%q above %q", even, ninety)
	}
	m := &dose.ModelDraft{Unit: "mg/kg", Plans: []dose.Plan{{PerAdministration: dose.Pair{1.04, 1.04}}, {PerAdministration: dose.Pair{0.521, 0.521}}}}
	if say := planAmounts(m); say(m.Plans[1].PerAdministration) != "0.521 mg" {
		t.Errorf("%q beside 1.04 mg", say(m.Plans[1].PerAdministration))
	}
}

// Two ends of whatever size are printed in one unit, once, and each is the
// amount that it is, to 3 figures.
func TestOneUnitLaws(t *testing.T) {
	scale := map[string]float64{"mcg": 0.001, "mg": 1, "g": 1000, "unit": 1, "units": 1}
	rapid.Check(t, func(t *rapid.T) {
		draw := func(name string) float64 { return math.Exp(rapid.Float64Range(-12, 14).Draw(t, name)) }
		p := dose.Pair{draw("a"), draw("b")}
		if p[0] > p[1] {
			p[0], p[1] = p[1], p[0]
		}
		unit := rapid.SampledFrom([]string{"mg/kg", "IU/kg"}).Draw(t, "unit")
		s := amountPair(p, unit)
		words := strings.Fields(s)
		name := words[len(words)-1]
		if scale[name] == 0 || len(words) != 2 && (len(words) != 4 || words[1] != "to") {
			t.Fatalf("%v is %q", p, s)
		}
		for i, at := range []int{0, len(words) - 2} {
			if want := metabolic.Significant(p[i]/scale[name], 3); words[at] != want && len(words) == 4 {
				t.Fatalf("%v is %q: %s, want %s", p, s, words[at], want)
			}
		}
	})
}

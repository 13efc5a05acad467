package species

import (
	"math"
	"testing"

	"tayra/metabolic"
)

// The figures by group, computed in R 4.2.2 from the measured table:
// sqrt(mean(log(rate/(k*mass^0.75))^2)) over unflagged rows, squamates moved
// from 37 °C by a Q10 of 2.5.
func TestScatterAgainstR(t *testing.T) {
	for group, want := range map[string]float64{
		"placental mammal": 0.416, "marsupial": 0.187, "non-passerine bird": 0.331, "passerine bird": 0.236, "squamate": 0.477,
	} {
		s := ScatterOf("group", "", group)
		if math.Abs(s.SDln-want) > 0.0005 || s.Assumed {
			t.Errorf("%s: %+v, want %v", group, s, want)
		}
	}
}

// The same once more, straight from the tables and without the equations of
// package metabolic.
func TestScatterFromTheTable(t *testing.T) {
	kcalPerDay := 4184.0 / 86400
	for group, k := range map[string]float64{"placental mammal": 70, "marsupial": 49, "non-passerine bird": 78, "passerine bird": 129, "squamate": 10} {
		var sum, low, high float64
		n := 0
		for _, r := range table(t, "measured-rates.csv") {
			if r["group"] != group || r["flag"] != "" {
				continue
			}
			mass := number(r["mass_kg"])
			rate := k * kcalPerDay * math.Pow(mass, 0.75)
			if group == "squamate" {
				rate *= math.Pow(2.5, (number(r["temperature_c"])-37)/10)
			}
			d := math.Log(number(r["rate_w"]) / rate)
			sum += d * d
			if n++; n == 1 || mass < low {
				low = mass
			}
			high = max(high, mass)
		}
		s := ScatterOf("group", "", group)
		if want := math.Sqrt(sum / float64(n)); math.Abs(s.SDln-want) > 1e-9 || s.N != n || math.Abs(float64(s.MassLow)-low) > 1e-9 || math.Abs(float64(s.MassHigh)-high) > 1e-9 {
			t.Errorf("%s: %+v, want %v of %d from %v to %v kg", group, s, want, n, low, high)
		}
	}
}

func TestScatterOf(t *testing.T) {
	for _, group := range []string{"chelonian", "crocodilian", "tuatara"} {
		if s := ScatterOf("group", "", group); s.SDln != 0.5 || !s.Assumed || s.N == 0 || s.N >= 8 || !(s.MassLow > 0) {
			t.Errorf("%s: %+v", group, s)
		}
	}
	for _, args := range [][3]string{{"group", "", "frog"}, {"group", "", "monotreme"}, {"equation", "nobody1900", "frog"}, {"", "", ""}, {"group", "", "placental"}} {
		if s := ScatterOf(args[0], args[1], args[2]); s != (Scatter{SDln: 0.5, Assumed: true}) {
			t.Errorf("%q: %+v", args, s)
		}
	}
	// A group constant is a line of the table too, with the same scatter.
	if a, b := ScatterOf("group", "", "marsupial"), ScatterOf("equation", "group_marsupial", "marsupial"); a != b {
		t.Errorf("%+v, %+v", a, b)
	}
	// Every usable line has a scatter in every group that it is the default of.
	for _, group := range metabolic.Groups {
		e, ok := metabolic.DefaultEquation(group)
		if !ok {
			continue
		}
		if s := ScatterOf("equation", e.ID, group); s.N == 0 || !(s.SDln > 0) {
			t.Errorf("%s in %s: %+v", e.ID, group, s)
		}
	}
}

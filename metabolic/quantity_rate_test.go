package metabolic

import (
	"testing"

	"pgregory.net/rapid"
)

func TestParseRate(t *testing.T) {
	cases := []struct {
		input string
		watts float64
	}{
		{"54.9 W", 54.9},
		{"250 mW", 0.25},
		{"86.4 kJ/day", 1},
		{"86.4 kJ/d", 1},
		{"70 kcal/day", 70 * 4184. / 86400},
		{"70 kcal per day", 70 * 4184. / 86400},
		{"3600 J/h", 1},
		{"3.6 kJ/h", 1},
		{"100 mL O2/h", 100 * 20.1 / 3600},
		{"100 mL O₂/h", 100 * 20.1 / 3600},
		{"100 ml O2/h", 100 * 20.1 / 3600},
		{"100 mL O2/min", 100 * 20.1 / 60},
	}
	for _, c := range cases {
		p, err := ParseRate(c.input)
		if err != nil {
			t.Errorf("%q: %v", c.input, err)
			continue
		}
		near(t, c.input, float64(p), c.watts, 1e-15)
	}
	for input, says := range map[string]string{
		"70 kcal": "write W, kcal/day", "70 Cal/day": "write W, kcal/day", "70 mL/h": "write W, kcal/day", "70 Kcal/day": "capitals", "70 w": "capitals", "70 MW": "capitals",
	} {
		_, err := ParseRate(input)
		refused(t, input, err, says)
	}
}

// A rate comes back from each of the units in which it is printed.
func TestRateUnitsInvert(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		p := Power(rapid.Float64Range(1e-4, 1e5).Draw(r, "watts"))
		for _, input := range []string{
			decimal(float64(p)) + " W", decimal(p.KcalPerDay()) + " kcal/day", decimal(p.KJPerDay()) + " kJ/day", decimal(p.MLO2PerHour()) + " mL O2/h",
		} {
			got, err := ParseRate(input)
			if err != nil {
				r.Fatalf("%q: %v", input, err)
			}
			if ratio := float64(got / p); ratio < 1-1e-12 || ratio > 1+1e-12 {
				r.Fatalf("%q is %v, want %v", input, got, p)
			}
		}
	})
}

func FuzzParseRate(f *testing.F) {
	f.Add("1130 kcal/day")
	f.Add("9830 mL O2/h")
	f.Fuzz(func(t *testing.T, s string) {
		p, err := ParseRate(s)
		if err != nil {
			refused(t, s, err)
		} else if !(p >= smallestQuantity && p <= largestQuantity) {
			t.Fatalf("%q: %v", s, p)
		}
	})
}

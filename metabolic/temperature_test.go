package metabolic

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestParseTemperature(t *testing.T) {
	for input, want := range map[string]float64{
		"33 °C": 33, "33 C": 33, "33°C": 33, "33C": 33, "33 ºC": 33, "33 ℃": 33, "37.5 °C": 37.5, "33 ° C": 33,
		"98.6 °F": 37, "98.6 F": 37, "98.6°F": 37, "104 ℉": 40, "60 °C": 60,
	} {
		got, err := ParseTemperature(input)
		if err != nil {
			t.Errorf("%q: %v", input, err)
		}
		near(t, input, float64(got), want, 1e-14)
	}
	for input, says := range map[string]string{
		"33": "no unit", "33 °": "write °C or °F", "306 K": "write °C or °F", "98 °C": `"98 °F"`, "32 °F": "freezing", "20 °F": "freezing", "-5 °C": "minus", "33 °c": "capitals", "20-25 °C": "write °C or °F",
	} {
		_, err := ParseTemperature(input)
		refused(t, input, err, says)
	}
}

// Q10 chains: from t0 to t and from t to u is from t0 to u; back again is 1;
// the definition itself at 10 degrees.
func TestQ10Laws(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		q10 := rapid.Float64Range(Q10Low, Q10High).Draw(r, "q10")
		degree := func(name string) Celsius { return Celsius(rapid.Float64Range(0, 45).Draw(r, name)) }
		a, b, c := degree("a"), degree("b"), degree("c")
		chained := Q10Factor(q10, b, a) * Q10Factor(q10, c, b)
		if direct := Q10Factor(q10, c, a); math.Abs(chained/direct-1) > 1e-12 {
			r.Fatalf("chained %v, direct %v", chained, direct)
		}
		if f := Q10Factor(q10, a, a); f != 1 {
			r.Fatalf("no change gives %v", f)
		}
		if f := Q10Factor(q10, a+10, a); math.Abs(f/q10-1) > 1e-12 {
			r.Fatalf("ten degrees give %v, Q10 is %v", f, q10)
		}
	})
}

func TestTemperatureLimits(t *testing.T) {
	for _, c := range []Celsius{10, 25, 40} {
		if err := CheckEctotherm(c); err != nil {
			t.Error(err)
		}
	}
	for _, c := range []Celsius{9.99, 40.01, 0, -1, Celsius(math.NaN()), Celsius(math.Inf(1))} {
		if CheckEctotherm(c) == nil {
			t.Errorf("%v °C is taken for an ectotherm", float64(c))
		}
	}
	for _, q := range []float64{1.5, 2.5, 4} {
		if err := CheckQ10(q); err != nil {
			t.Error(err)
		}
	}
	for _, q := range []float64{1.49, 4.01, 0, -2, math.NaN(), math.Inf(1)} {
		if CheckQ10(q) == nil {
			t.Errorf("a Q10 of %v is taken", q)
		}
	}
	if err := CheckEctotherm(45); err.Error() != "a body temperature of 45 °C is outside 10 to 40 °C" {
		t.Error(err)
	}
	if err := CheckQ10(5); err.Error() != "a Q10 of 5 is outside 1.5 to 4" {
		t.Error(err)
	}
}

func FuzzParseTemperature(f *testing.F) {
	f.Add("33 °C")
	f.Add("98.6 °F")
	f.Fuzz(func(t *testing.T, s string) {
		c, err := ParseTemperature(s)
		if err != nil {
			refused(t, s, err)
			return
		}
		if !(c > 0 && c <= highestBodyTemperature) {
			t.Fatalf("%q: %v", s, c)
		}
		if c >= 0.1 {
			again, err := ParseTemperature(FormatCelsius(c))
			if err != nil {
				t.Fatalf("%q prints as %q: %v", s, FormatCelsius(c), err)
			}
			within(t, s, float64(again), float64(c), 0.0501)
		}
	})
}

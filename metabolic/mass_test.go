package metabolic

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestParseBodyMass(t *testing.T) {
	const lb = 0.45359237
	cases := []struct {
		input             string
		low, middle, high float64
	}{
		{"41 kg", 41, 41, 41},
		{"41kg", 41, 41, 41},
		{"41 Kg", 41, 41, 41},
		{"41 KG", 41, 41, 41},
		{"41 kilograms", 41, 41, 41},
		{"350 g", 0.35, 0.35, 0.35},
		{"2 lb", 2 * lb, 2 * lb, 2 * lb},
		{"2 lbs", 2 * lb, 2 * lb, 2 * lb},
		{"3 oz", 3 * lb / 16, 3 * lb / 16, 3 * lb / 16},
		{"16 ounces", lb, lb, lb},
		{"36-46 kg", 36, math.Sqrt(36 * 46), 46},
		{"36 - 46 kg", 36, math.Sqrt(36 * 46), 46},
		{"36 to 46 kg", 36, math.Sqrt(36 * 46), 46},
		{"36–46 kg", 36, math.Sqrt(36 * 46), 46},
		{"36 kg to 46 kg", 36, math.Sqrt(36 * 46), 46},
		{"350-450g", 0.35, math.Sqrt(0.35 * 0.45), 0.45},
		{"900 g to 1.1 kg", 0.9, math.Sqrt(0.9 * 1.1), 1.1},
		{"1e-2-2e-2 kg", 0.01, math.Sqrt(0.01 * 0.02), 0.02},
		{"9e-3-9e-2 kg", 0.009, math.Sqrt(0.009 * 0.09), 0.09},
		{"1e12 kg", 1e12, 1e12, 1e12},
		{"1e-12 kg", 1e-12, 1e-12, 1e-12},
		{"41 kg ± 10 %", 41 / 1.1, 41, 41 * 1.1},
		{"41 kg +- 10 %", 41 / 1.1, 41, 41 * 1.1},
		{"41 kg +/- 10%", 41 / 1.1, 41, 41 * 1.1},
		{"41kg±10%", 41 / 1.1, 41, 41 * 1.1},
		{"20 kg ± 100 %", 10, 20, 40},
	}
	for _, c := range cases {
		b, err := ParseBodyMass(c.input)
		if err != nil {
			t.Errorf("%q: %v", c.input, err)
			continue
		}
		near(t, c.input+" low", float64(b.Low), c.low, 1e-14)
		near(t, c.input+" middle", float64(b.Middle), c.middle, 1e-14)
		near(t, c.input+" high", float64(b.High), c.high, 1e-14)
		if b.Estimated() != (c.low < c.high) {
			t.Errorf("%q: Estimated is %v", c.input, b.Estimated())
		}
	}
}

func TestParseBodyMassRefuses(t *testing.T) {
	for _, c := range []struct{ input, says string }{
		{"46-36 kg", "larger end first"},
		{"40-40 kg", "equal ends"},
		{"36 lb - 46 g", "larger end first"},
		{"36-46", "no unit"},
		{"36-41-46 kg", "more than one range"},
		{"36--46 kg", "more than one range"},
		{"36- kg", "number"},
		{"- 46 kg", "minus"},
		{"41 ± 4 kg", "no unit"},
		{"41 kg ± 4 kg", "percent"},
		{"41 kg ± 10", "percent"},
		{"41 kg ±", "number"},
		{"41 kg ± 120 %", "more than 100 %"},
		{"41 kg ± 1e-15 %", "too small"},
		{"36-46 kg ± 5 %", "unit"},
		{"5 lb 3 oz", "unit"},
		{"3 stone", "write g, kg, lb or oz"},
		{"4,2-5,1 kg", `"4.2-5.1 kg" or "42-51 kg"`},
	} {
		_, err := ParseBodyMass(c.input)
		refused(t, c.input, err, c.says)
	}
}

func TestHalfWidth(t *testing.T) {
	b, _ := ParseBodyMass("41 kg ± 10 %")
	near(t, "half width of ± 10 %", b.HalfWidth(), math.Log(1.1), 1e-12)
	b, _ = ParseBodyMass("36-46 kg")
	near(t, "half width of 36-46 kg", b.HalfWidth(), 0.12256125, 1e-6) // ½·ln(46/36), by calculator
	b, _ = ParseBodyMass("41 kg")
	if b.HalfWidth() != 0 || b.Estimated() || (BodyMass{}).HalfWidth() != 0 {
		t.Error("a weighed mass has a width")
	}
}

// The middle of a range lies as far from both ends on the log scale, and ends
// h away from it: Low = Middle·e^−h, High = Middle·e^h.
func TestBodyMassIsSymmetricOnLogs(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		low := rapid.Float64Range(0.001, 5000).Draw(r, "low")
		high := low * rapid.Float64Range(1.01, 10).Draw(r, "fold")
		unit := rapid.SampledFrom([]string{"kg", "g", "lb", "oz"}).Draw(r, "unit")
		for _, input := range []string{
			decimal(low) + "-" + decimal(high) + " " + unit,
			decimal(low) + " " + unit + " ± " + decimal(math.Min(99, 100*(high/low-1))) + " %",
		} {
			b, err := ParseBodyMass(input)
			if err != nil {
				r.Fatalf("%q: %v", input, err)
			}
			h := b.HalfWidth()
			if d := math.Abs(math.Log(float64(b.High/b.Middle)) - h); d > 1e-9 {
				r.Fatalf("%q: upper end off by %g", input, d)
			}
			if d := math.Abs(math.Log(float64(b.Middle/b.Low)) - h); d > 1e-9 {
				r.Fatalf("%q: lower end off by %g", input, d)
			}
		}
	})
}

func FuzzParseBodyMass(f *testing.F) {
	for _, s := range []string{"41 kg", "350 g", "36-46 kg", "36 to 46 kg", "41 kg ± 10 %", "2 lb +- 5 %", "1e-3–2e-3 oz", "4,2 kg", "46-36 kg"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		b, err := ParseBodyMass(s)
		if err != nil {
			refused(t, s, err)
			return
		}
		if !(b.Low > 0 && b.Low <= b.Middle && b.Middle <= b.High) || math.IsInf(float64(b.High), 0) || math.IsNaN(b.HalfWidth()) {
			t.Fatalf("%q: %+v", s, b)
		}
		FormatBodyMass(b)
		// A weighed mass that is printed and read again is itself to the
		// digits printed.
		if m := b.Middle; m >= 1e-9 && m < 1 {
			again, err := ParseBodyMass(FormatMass(m))
			if err != nil {
				t.Fatalf("%q prints as %q: %v", s, FormatMass(m), err)
			}
			near(t, s, float64(again.Middle), float64(m), 0.5e-4)
		}
	})
}

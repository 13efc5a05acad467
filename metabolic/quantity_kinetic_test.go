package metabolic

import (
	"testing"

	"pgregory.net/rapid"
)

func TestParseConcentration(t *testing.T) {
	for input, want := range map[string]Concentration{
		"2 mg/L": {2, Milligram}, "2 mg/l": {2, Milligram}, "0.5 mcg/mL": {0.5, Milligram}, "0.5 µg/ml": {0.5, Milligram}, "500 ng/mL": {0.5, Milligram},
		"50 mg/mL": {50000, Milligram}, "1 g/L": {1000, Milligram}, "1 IU/mL": {1000, InternationalUnit}, "40 units/mL": {40000, InternationalUnit}, "2 mg per L": {2, Milligram},
	} {
		got, err := ParseConcentration(input)
		if err != nil || got != want {
			t.Errorf("ParseConcentration(%q) = %+v, %v; want %+v", input, got, err, want)
		}
	}
	for input, says := range map[string]string{
		"2 mg": "after the stroke", "2 mg/kg": "write mg", "5 %": "10 mg/mL", "2 L": "write mg", "2 mg/mL/h": "write mg", "2 MG/L": "capitals", "2 mg/ML": "capitals",
	} {
		_, err := ParseConcentration(input)
		refused(t, input, err, says)
	}
}

func TestParseVolumePerKg(t *testing.T) {
	for input, want := range map[string]float64{"0.3 L/kg": 0.3, "300 mL/kg": 0.3, "0.3 l/kg": 0.3, "300 ml per kg": 0.3} {
		got, err := ParseVolumePerKg(input)
		if err != nil || got != want {
			t.Errorf("ParseVolumePerKg(%q) = %v, %v; want %v", input, got, err, want)
		}
	}
	for input, says := range map[string]string{"0.3 L": "after the stroke", "0.3 mg/kg": "write L/kg", "0.3 L/lb": "write L/kg", "0.3 L/KG": "capitals"} {
		_, err := ParseVolumePerKg(input)
		refused(t, input, err, says)
	}
}

func TestParseLiquid(t *testing.T) {
	for input, want := range map[string]float64{"0.1 mL": 0.1, "0.1 ml": 0.1, "1 L": 1000, "0.05mL": 0.05, "0.007 mL": 0.007} {
		got, err := ParseLiquid(input)
		if err != nil || got != want {
			t.Errorf("ParseLiquid(%q) = %v, %v; want %v", input, got, err, want)
		}
	}
	for input, says := range map[string]string{"1 cc": "write mL", "50 mcL": "write mL or L", "50 µL": "write mL or L", "1 mg": "write mL or L"} {
		_, err := ParseLiquid(input)
		refused(t, input, err, says)
	}
}

func TestParseFraction(t *testing.T) {
	for input, want := range map[string]float64{"80 %": 0.8, "80%": 0.8, "100 %": 1, "0.5 %": 0.005, "20 percent": 0.2} {
		got, err := ParseFraction(input)
		if err != nil || got != want {
			t.Errorf("ParseFraction(%q) = %v, %v; want %v", input, got, err, want)
		}
	}
	for input, says := range map[string]string{"101 %": "more than 100 %", "0.8": "no unit", "8/10": "write %", "0 %": "zero"} {
		_, err := ParseFraction(input)
		refused(t, input, err, says)
	}
}

func TestParseClearance(t *testing.T) {
	cases := []struct {
		input string
		value float64
		perKg bool
	}{
		{"3 L/h", 3, false}, {"3 l/hr", 3, false}, {"10 mL/min", 0.6, false}, {"500 mL/h", 0.5, false}, {"24 L/day", 1, false},
		{"3 L/h/kg", 3, true}, {"10 mL/min/kg", 0.6, true}, {"10 mL/kg/min", 0.6, true}, {"24 L/day/kg", 1, true}, {"103.72 mL/h/kg", 0.10372, true},
	}
	for _, c := range cases {
		value, perKg, err := ParseClearance(c.input)
		if err != nil || perKg != c.perKg {
			t.Errorf("ParseClearance(%q) = %v, %v, %v", c.input, value, perKg, err)
		}
		near(t, c.input, value, c.value, 1e-15)
	}
	for input, says := range map[string]string{
		"3 L": "after the stroke", "3 L/kg": "write L or mL", "3 mg/h": "write L or mL", "3 L/h/lb": "write L or mL", "3 L/h/kg/kg": "write L or mL", "3 L/H": "capitals",
	} {
		_, _, err := ParseClearance(input)
		refused(t, input, err, says)
	}
}

// mL/min/kg times 0.06 is L/h/kg, at every size.
func TestClearanceUnits(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		x := decimal(rapid.Float64Range(1e-4, 1e4).Draw(r, "x"))
		perMinute, _, err1 := ParseClearance(x + " mL/min/kg")
		perHour, _, err2 := ParseClearance(x + " L/h/kg")
		if err1 != nil || err2 != nil {
			r.Fatal(err1, err2)
		}
		if ratio := perMinute / perHour; ratio < 0.06*(1-1e-14) || ratio > 0.06*(1+1e-14) {
			r.Fatalf("ratio %v", ratio)
		}
	})
}

func FuzzParseConcentration(f *testing.F) {
	f.Add("2 mg/L")
	f.Add("0.5 mcg/mL")
	f.Add("1 IU/mL")
	f.Fuzz(func(t *testing.T, s string) {
		c, err := ParseConcentration(s)
		if err != nil {
			refused(t, s, err)
			return
		}
		if !(c.Value >= smallestQuantity && c.Value <= largestQuantity) {
			t.Fatalf("%q: %+v", s, c)
		}
		if c.Value >= 1e-6 && c.Value < 999 {
			again, err := ParseConcentration(FormatConcentration(c))
			if err != nil || again.Unit != c.Unit {
				t.Fatalf("%q prints as %q: %v", s, FormatConcentration(c), err)
			}
			near(t, s, again.Value, c.Value, 0.5e-2)
		}
	})
}

func FuzzParseClearance(f *testing.F) {
	f.Add("4 mL/min/kg")
	f.Add("3 L/h")
	f.Fuzz(func(t *testing.T, s string) {
		value, _, err := ParseClearance(s)
		if err != nil {
			refused(t, s, err)
		} else if !(value >= smallestQuantity && value <= largestQuantity) {
			t.Fatalf("%q: %v", s, value)
		}
	})
}

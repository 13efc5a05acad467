package metabolic

import (
	"strconv"
	"testing"

	"pgregory.net/rapid"
)

// decimal writes x in the fewest plain digits that give it back.
func decimal(x float64) string { return strconv.FormatFloat(x, 'f', -1, 64) }

func TestParseDose(t *testing.T) {
	cases := []struct {
		input string
		want  Dose
	}{
		{"10 mg/kg", Dose{10, 10, Milligram, PerKg}},
		{"10mg/kg", Dose{10, 10, Milligram, PerKg}},
		{"10 mg / kg", Dose{10, 10, Milligram, PerKg}},
		{"10 mg per kg", Dose{10, 10, Milligram, PerKg}},
		{"10 mg/kg/dose", Dose{10, 10, Milligram, PerKg}},
		{"10-15 mg/kg", Dose{10, 15, Milligram, PerKg}},
		{"10–15 mg/kg", Dose{10, 15, Milligram, PerKg}},
		{"10 to 15 mg/kg", Dose{10, 15, Milligram, PerKg}},
		{"10 mg/kg to 15 mg/kg", Dose{10, 15, Milligram, PerKg}},
		{"750 mcg/kg to 1.5 mg/kg", Dose{0.75, 1.5, Milligram, PerKg}},
		{"85 mcg/kg", Dose{0.085, 0.085, Milligram, PerKg}},
		{"85 µg/kg", Dose{0.085, 0.085, Milligram, PerKg}},
		{"85 μg/kg", Dose{0.085, 0.085, Milligram, PerKg}},
		{"85 ug/kg", Dose{0.085, 0.085, Milligram, PerKg}},
		{"500 ng/kg", Dose{0.0005, 0.0005, Milligram, PerKg}},
		{"1.5 g", Dose{1500, 1500, Milligram, PerAnimal}},
		{"20000 IU/kg", Dose{20000, 20000, InternationalUnit, PerKg}},
		{"20000 units/kg", Dose{20000, 20000, InternationalUnit, PerKg}},
		{"1 unit", Dose{1, 1, InternationalUnit, PerAnimal}},
		{"250 mg", Dose{250, 250, Milligram, PerAnimal}},
		{"250 mg per animal", Dose{250, 250, Milligram, PerAnimal}},
		{"250 mg/animal", Dose{250, 250, Milligram, PerAnimal}},
		{"20 mg/kg/day", Dose{20, 20, Milligram, PerKgDay}},
		{"20 mg/kg/d", Dose{20, 20, Milligram, PerKgDay}},
		{"20 mg/kg per day", Dose{20, 20, Milligram, PerKgDay}},
		{"2 mg/kg/h", Dose{2, 2, Milligram, PerKgHour}},
		{"2 mg/kg/hr", Dose{2, 2, Milligram, PerKgHour}},
		{"5 mcg/kg/min", Dose{0.3, 0.3, Milligram, PerKgHour}}, // 5·60/1000
		{"2-4 mcg/kg/min", Dose{0.12, 0.24, Milligram, PerKgHour}},
		{"3 IU/kg/min", Dose{180, 180, InternationalUnit, PerKgHour}},
		{"30 mg/m2", Dose{30, 30, Milligram, PerSquareMetre}},
		{"30 mg/m²", Dose{30, 30, Milligram, PerSquareMetre}},
		{"30 mg/m^2", Dose{30, 30, Milligram, PerSquareMetre}},
	}
	for _, c := range cases {
		got, err := ParseDose(c.input)
		if err != nil || got != c.want {
			t.Errorf("ParseDose(%q) = %+v, %v; want %+v", c.input, got, err, c.want)
		}
	}
}

func TestParseDoseRefuses(t *testing.T) {
	for _, c := range []struct{ input, says string }{
		{"15-10 mg/kg", "larger end first"},
		{"10-10 mg/kg", "equal ends"},
		{"10-", "number"},
		{"10-15", "no unit"},
		{"10 mg/kg - 15 mg", "two kinds of dose"},
		{"10 mg/kg - 15 IU/kg", "two kinds of dose"},
		{"2 g/kg - 3 mg/kg", "larger end first"},
		{"20000 U/kg", "write IU"},
		{"20000 u", "write IU"},
		{"5 mg/lb", "per kg"},
		{"0.5 mL/kg", "volume times strength"},
		{"10 mg/kg q12h", "dose alone"},
		{"10 mg/kg SC", "dose alone"},
		{"250 mg BID", "dose alone"},
		{"10 mg/", "write"},
		{"10 mg/kg/week", `"per kg/week"`},
		{"10 mg/h", `"per h"`},
		{"10 /kg", "no unit"},
		{"10 tablets", "write mcg"},
		{"10,000 IU/kg", `"10 IU/kg" or "10000 IU/kg"`},
		{"10 mg/KG", `"per KG"`},
	} {
		got, err := ParseDose(c.input)
		refused(t, c.input, err, c.says)
		if got != (Dose{}) {
			t.Errorf("%q: an error beside the value %+v", c.input, got)
		}
	}
}

// A dose is the same whatever unit it is written in.
func TestDoseInAnyUnit(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		mcg := float64(rapid.IntRange(1, 1e9).Draw(r, "mcg"))
		per := rapid.SampledFrom([]string{"/kg", "", "/kg/day", "/kg/h", "/m2"}).Draw(r, "per")
		inMcg, err1 := ParseDose(decimal(mcg) + " mcg" + per)
		inMg, err2 := ParseDose(decimal(mcg/1e3) + " mg" + per)
		inG, err3 := ParseDose(decimal(mcg/1e6) + " g" + per)
		if err1 != nil || err2 != nil || err3 != nil {
			r.Fatal(err1, err2, err3)
		}
		if inMcg != inMg || !(inG.High/inMg.High-1 < 1e-15 && inMg.High/inG.High-1 < 1e-15) {
			r.Fatalf("%v, %v and %v differ", inMcg, inMg, inG)
		}
	})
}

func FuzzParseDose(f *testing.F) {
	for _, s := range []string{"10 mg/kg", "10-15 mg/kg", "85 µg/kg", "1.5 g", "20000 IU/kg", "250 mg per animal", "5 mcg/kg/min", "30 mg/m²", "10 mg/kg q12h", "1e-3-2 mg"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		d, err := ParseDose(s)
		if err != nil {
			refused(t, s, err)
			return
		}
		if !(d.Low >= smallestQuantity && d.Low <= d.High && d.High <= largestQuantity) || d.Per > PerSquareMetre || d.Unit > InternationalUnit {
			t.Fatalf("%q: %+v", s, d)
		}
		FormatDosePerKg(d.Low, d.Unit, d.Per == PerKgHour)
		if d.Low >= 1e-6 && d.High < 999 { // printed without a comma
			again, err := ParseDose(FormatAmount(d.High, d.Unit))
			if err != nil || again.Unit != d.Unit {
				t.Fatalf("%q prints as %q: %+v, %v", s, FormatAmount(d.High, d.Unit), again, err)
			}
			near(t, s, again.High, d.High, 0.5e-2)
		}
	})
}

func BenchmarkParseDose(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		if _, err := ParseDose("10-15 mg/kg"); err != nil {
			b.Fatal(err)
		}
	}
}

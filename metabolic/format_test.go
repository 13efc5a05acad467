package metabolic

import (
	"fmt"
	"math"
	"math/big"
	"regexp"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestSignificant(t *testing.T) {
	cases := []struct {
		x      float64
		digits int
		want   string
	}{
		{8.1396, 3, "8.14"},
		{0.5, 3, "0.5"},
		{5, 3, "5"},
		{5.0000001, 3, "5"},
		{1234567, 3, "1,230,000"},
		{1234567, 9, "1,234,567"},
		{1e9, 3, "1,000,000,000"},
		{123456789.5, 12, "123,456,789.5"},
		{999.5, 3, "1,000"},
		{999.4, 3, "999"},
		{0.0009995, 3, "0.001"},
		{1e-6, 3, "0.000001"},
		{1.2345e-6, 3, "0.00000123"},
		{2.675, 3, "2.68"},               // held as 2.67499999999999982…
		{1.005, 3, "1.01"},               // held as 1.00499999999999989…
		{0.145, 2, "0.15"},               // half away from zero, not to even
		{0.125, 2, "0.13"},               // the same where binary is exact
		{2.5, 1, "3"},                    // the same
		{-2.5, 1, "-3"},                  // away from zero below it
		{0.1, 17, "0.10000000000000001"}, // all digits asked for: the noise is shown
		{0.30000000000000004, 12, "0.3"},
		{121.00000000000001, 12, "121"},
		{0, 3, "0"},
		{math.Copysign(0, -1), 3, "0"},
		{7, 0, "7"},
		{100, 1, "100"},
		{1000, 1, "1,000"},
		{math.NaN(), 3, "NaN"},
		{math.Inf(1), 3, "Inf"},
		{math.Inf(-1), 3, "-Inf"},
	}
	for _, c := range cases {
		if got := Significant(c.x, c.digits); got != c.want {
			t.Errorf("Significant(%v, %d) = %q, want %q", c.x, c.digits, got, c.want)
		}
	}
}

var paperNumber = regexp.MustCompile(`^-?(0|[1-9]\d{0,2}(,\d{3})*)(\.\d*[1-9])?$`)

// What is printed has the form of a number on paper, holds no more digits than
// asked for, and is the nearest such number: within half a unit of the last
// digit, and the noise.
func TestSignificantLaws(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		x := rapid.Float64Range(1, 10).Draw(r, "mantissa") * math.Pow(10, float64(rapid.IntRange(-7, 9).Draw(r, "power")))
		digits := rapid.IntRange(1, 10).Draw(r, "digits")
		s := Significant(x, digits)
		if !paperNumber.MatchString(s) {
			r.Fatalf("%v prints as %q", x, s)
		}
		plain := strings.ReplaceAll(s, ",", "")
		figures := strings.TrimLeft(strings.Replace(plain, ".", "", 1), "0")
		if n := len(strings.TrimRight(figures, "0")); n > digits {
			r.Fatalf("%v to %d digits prints as %q", x, digits, s)
		}
		got, ok := new(big.Float).SetPrec(200).SetString(plain)
		if !ok {
			r.Fatalf("%q is no number", s)
		}
		off, _ := new(big.Float).Sub(got, new(big.Float).SetPrec(200).SetFloat64(x)).Float64()
		half := 0.5 * math.Pow(10, math.Floor(math.Log10(x))-float64(digits-1))
		if math.Abs(off) > half*(1+1e-9)+x*1e-11 {
			r.Fatalf("%v to %d digits prints as %q, off by %g", x, digits, s, off)
		}
		if again := Significant(rounded(x, digits), digits); again != s {
			r.Fatalf("%q printed again is %q", s, again)
		}
		if minus := Significant(-x, digits); minus != "-"+s {
			r.Fatalf("%v is %q, its negative %q", x, s, minus)
		}
	})
}

func TestFormats(t *testing.T) {
	mass := func(s string) BodyMass {
		b, err := ParseBodyMass(s)
		if err != nil {
			t.Fatal(err)
		}
		return b
	}
	mg := func(x float64) string { return FormatAmount(x, Milligram) }
	perKg := func(x float64) string { return FormatDosePerKg(x, Milligram, false) }
	cases := []struct{ got, want string }{
		{FormatMass(41), "41 kg"},
		{FormatMass(4.275), "4.275 kg"},
		{FormatMass(0.35), "350 g"},
		{FormatMass(1), "1 kg"},
		{FormatMass(0.9999999), "1 kg"},
		{FormatMass(0.0035), "3.5 g"},
		{FormatMass(2970), "2,970 kg"},
		{FormatMass(0), "0 kg"},
		{mg(0), "0 mg"},
		{FormatBodyMass(mass("41 kg")), "41 kg"},
		{FormatBodyMass(mass("36-46 kg")), "40.7 kg (estimated, 36 to 46 kg)"},
		{FormatBodyMass(mass("41 kg ± 10 %")), "41 kg (estimated, 37.3 to 45.1 kg)"},
		{FormatBodyMass(mass("350-450 g")), "397 g (estimated, 350 to 450 g)"},
		{FormatBodyMass(mass("900 g to 1.2 kg")), "1.04 kg (estimated, 900 g to 1.2 kg)"},
		{mg(333.7), "334 mg"},
		{mg(0.085), "85 mcg"},
		{mg(0.9996), "1 mg"},
		{mg(0.9994), "999 mcg"},
		{mg(999.6), "1 g"},
		{mg(1500), "1.5 g"},
		{mg(0.0005), "0.5 mcg"},
		{mg(2.5e6), "2,500 g"},
		{FormatAmount(3000, InternationalUnit), "3,000 units"},
		{FormatAmount(1, InternationalUnit), "1 unit"},
		{FormatAmount(0.5, InternationalUnit), "0.5 units"},
		{perKg(8.1396), "8.14 mg/kg"},
		{perKg(0.085), "0.085 mg/kg"},
		{perKg(1500), "1,500 mg/kg"},
		{FormatDosePerKg(2, Milligram, true), "2 mg/kg/h"},
		{FormatDosePerKg(3000, InternationalUnit, false), "3,000 units/kg"},
		{FormatDosePerKg(3000, InternationalUnit, true), "3,000 units/kg/h"},
		{FormatRange(10, 15, perKg), "10 to 15 mg/kg"},
		{FormatRange(10, 10.001, perKg), "10 mg/kg"},
		{FormatRange(0.75, 1.5, mg), "750 mcg to 1.5 mg"},
		{FormatRange(2, 3, FormatRatio), "2 to 3"},
		{FormatInterval(Interval{Repeated, 12}), "every 12 hours"},
		{FormatInterval(Interval{Repeated, 1}), "every 1 hour"},
		{FormatInterval(Interval{Repeated, 1.5}), "every 1.5 hours"},
		{FormatInterval(Interval{Repeated, 14.742}), "every 14.7 hours"},
		{FormatInterval(Interval{Repeated, 48}), "every 48 hours"},
		{FormatInterval(Interval{Repeated, 72}), "every 72 hours (3 days)"},
		{FormatInterval(Interval{Repeated, 50.3}), "every 50.3 hours (2.1 days)"},
		{FormatInterval(Interval{Repeated, 1344}), "every 1,344 hours (56 days)"},
		{FormatInterval(Interval{Kind: Once}), "once"},
		{FormatInterval(Interval{Kind: Infusion}), "continuous infusion"},
		{FormatShortInterval(Interval{Repeated, 12}), "q12h"},
		{FormatShortInterval(Interval{Repeated, 1344}), "q1344h"},
		{FormatShortInterval(Interval{Kind: Once}), "once"},
		{FormatShortInterval(Interval{Kind: Infusion}), "infusion"},
		{FormatDuration(1.3), "1.3 hours"},
		{FormatDuration(1. / 3), "20 minutes"},
		{FormatDuration(1. / 60), "1 minute"},
		{FormatDuration(0.9999999), "1 hour"},
		{FormatDuration(72), "72 hours (3 days)"},
		{FormatPower(54.9), "1,130 kcal/day (54.9 W)"},
		{FormatCelsius(33), "33 °C"},
		{FormatCelsius(37.25), "37.3 °C"},
		{FormatCelsius(91.4 - 32), "59.4 °C"},
		{FormatCelsius(0), "0 °C"},
		{FormatRatio(0.81400001), "0.814"},
		{FormatRatio(2.27777), "2.278"},
		{FormatPercent(0.8), "80 %"},
		{FormatLiquid(6.7), "6.7 mL"},
		{FormatConcentration(Concentration{2, Milligram}), "2 mg/L"},
		{FormatConcentration(Concentration{1000, InternationalUnit}), "1,000 units/L"},
	}
	for _, c := range cases {
		if c.got != c.want {
			t.Errorf("prints %q, want %q", c.got, c.want)
		}
	}
}

// Whatever is printed has a number in the form for paper, one space, and a
// unit that a line breaker knows; the amount that it says is the one given.
func TestFormatsOnPaper(t *testing.T) {
	back := map[string]float64{"mcg": 0.001, "mg": 1, "g": 1000, "kg": 1e6}
	rapid.Check(t, func(r *rapid.T) {
		x := rapid.Float64Range(1, 10).Draw(r, "mantissa") * math.Pow(10, float64(rapid.IntRange(-5, 6).Draw(r, "power")))
		for _, s := range []string{
			FormatMass(Mass(x)), FormatAmount(x, Milligram), FormatAmount(x, InternationalUnit),
			FormatDosePerKg(x, Milligram, false), FormatDosePerKg(x, InternationalUnit, true),
			FormatCelsius(Celsius(x)), FormatPercent(x), FormatLiquid(x), FormatConcentration(Concentration{x, Milligram}),
			strings.TrimPrefix(FormatInterval(Interval{Repeated, Hours(min(x, 48))}), "every "),
		} {
			number, unit, _ := strings.Cut(s, " ")
			if !paperNumber.MatchString(number) || !slices.Contains(Units, unit) || strings.ContainsAny(s, "µUe+") && !strings.Contains(s, "unit") && !strings.Contains(s, "minute") {
				r.Fatalf("%v prints as %q", x, s)
			}
		}
		number, unit, _ := strings.Cut(FormatAmount(x, Milligram), " ")
		var said float64
		if _, err := fmt.Sscan(strings.ReplaceAll(number, ",", ""), &said); err != nil {
			r.Fatal(err)
		}
		if said *= back[unit]; math.Abs(said/x-1) > 0.00501 {
			r.Fatalf("%v mg prints as %s %s", x, number, unit)
		}
		if unit == "mcg" && said >= 1 || unit == "mg" && (said < 1 || said >= 1000) || unit == "g" && said < 1000 {
			r.Fatalf("%v mg prints as %s %s", x, number, unit)
		}
	})
}

func FuzzSignificant(f *testing.F) {
	f.Add(2.675, 3)
	f.Add(-1e308, 17)
	f.Add(5e-324, 1)
	f.Fuzz(func(t *testing.T, x float64, digits int) {
		s := Significant(x, digits)
		if !math.IsNaN(x) && !math.IsInf(x, 0) && !paperNumber.MatchString(s) {
			t.Fatalf("Significant(%v, %d) = %q", x, digits, s)
		}
	})
}

func BenchmarkSignificant(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		Significant(1234.5678, 3)
	}
}

package metabolic

import (
	"errors"
	"math"
	"strings"
	"testing"
)

// near holds got to want within a relative tolerance.
func near(t *testing.T, what string, got, want, relative float64) {
	t.Helper()
	if !(math.Abs(got-want) <= relative*math.Abs(want)) {
		t.Errorf("%s: got %.12g, want %.12g within %g relative", what, got, want, relative)
	}
}

// within holds got to want within half a unit of the last printed digit.
func within(t *testing.T, what string, got, want, absolute float64) {
	t.Helper()
	if !(math.Abs(got-want) <= absolute) {
		t.Errorf("%s: got %.12g, want %.12g ± %g", what, got, want, absolute)
	}
}

// refused holds a parse error to what it must say.
func refused(t *testing.T, input string, err error, says ...string) {
	t.Helper()
	var q *QuantityError
	if !errors.As(err, &q) {
		t.Errorf("%q: error is %v, want a QuantityError", input, err)
		return
	}
	if q.Input != input {
		t.Errorf("%q: the error carries the input %q", input, q.Input)
	}
	if q.Problem == "" || q.Remedy == "" || q.Error() != q.Problem+"; "+q.Remedy {
		t.Errorf("%q: the error %q lacks a problem or a remedy", input, q.Error())
	}
	for _, want := range says {
		if !strings.Contains(q.Error(), want) {
			t.Errorf("%q: the error %q does not say %q", input, q.Error(), want)
		}
	}
}

// The factors follow from the definitions of the units: thermochemical calorie
// 4.184 J, day 86,400 s, 20.1 J per mL O2.
func TestUnitMethods(t *testing.T) {
	near(t, "W in kcal/day", Power(1).KcalPerDay(), 20.6501, 1e-5)
	near(t, "kcal/day of 1 mL O2/h", Power(JoulePerMLO2/3600).KcalPerDay(), 0.115296, 1e-5)
	near(t, "W in kJ/day", Power(1).KJPerDay(), 86.4, 1e-15)
	near(t, "W in mL O2/h", Power(1).MLO2PerHour(), 179.104478, 1e-8)
	near(t, "kg in g", Mass(0.0215).Grams(), 21.5, 1e-15)
	near(t, "37 °C in kelvin", Celsius(37).Kelvin(), 310.15, 1e-15)
	if Milligram.String() != "mg" || InternationalUnit.String() != "IU" {
		t.Errorf("units print as %q and %q", Milligram, InternationalUnit)
	}
}

// Every parser, each with a number and unit it reads, for laws that hold for
// all of them. Value is the result as one number.
var parsers = []struct {
	name  string
	unit  string // follows a number
	parse func(string) (value float64, err error)
}{
	{"ParseBodyMass", " kg", func(s string) (float64, error) { b, err := ParseBodyMass(s); return float64(b.Middle), err }},
	{"ParseDose", " mg/kg", func(s string) (float64, error) { d, err := ParseDose(s); return d.High, err }},
	{"ParseInterval", " h", func(s string) (float64, error) { i, err := ParseInterval(s); return float64(i.Hours), err }},
	{"ParseTemperature", " °C", func(s string) (float64, error) { c, err := ParseTemperature(s); return float64(c), err }},
	{"ParseDuration", " h", func(s string) (float64, error) { h, err := ParseDuration(s); return float64(h), err }},
	{"ParseVolumePerKg", " L/kg", ParseVolumePerKg},
	{"ParseFraction", " %", ParseFraction},
	{"ParseConcentration", " mg/L", func(s string) (float64, error) { c, err := ParseConcentration(s); return c.Value, err }},
	{"ParseLiquid", " mL", ParseLiquid},
	{"ParseClearance", " L/h", func(s string) (float64, error) { v, _, err := ParseClearance(s); return v, err }},
	{"ParseRate", " W", func(s string) (float64, error) { p, err := ParseRate(s); return float64(p), err }},
}

func TestEveryParserRefuses(t *testing.T) {
	cases := []struct {
		number string
		says   string
	}{
		{"", "number"},
		{"abc", "number"},
		{"0", "zero"},
		{"0.000", "zero"},
		{"-5", "minus"},
		{"−5", "minus"},
		{"+5", "plus"},
		{".5", "0.5, not .5"},
		{"5.", "after the decimal point"},
		{"5.x", "after the decimal point"},
		{"NaN", "number"},
		{"Inf", "number"},
		{"0x1F", "plain decimal digits"},
		{"0x1p-2", "plain decimal digits"},
		{"1_000", "unit"},
		{"1e400", "beyond all use"},
		{"1e300", "too large"},
		{"1e-300", "too small"},
		{"1e-400", "zero"},
		{"5 000", "two numbers"},
		{"5 000", "two numbers"},
		{"5'000", "two numbers"},
		{"5.1.2", "two numbers"},
		{"4,2", `"4.2`},
		{"4,2", `"42`},
		{"1,200", `"1.2`},
		{"1,200", `"1200`},
		{"9,9", `"9.9`},
		{"9,9", `"99`},
		{"4，2", `"4.2`},
		{"1,200.5", `"1200.5`},
		{"1.200,5", `"1200.5`},
		{"1,234,567", `"1234567`},
		{",5", "comma"},
		{"5,", "comma"},
		{"4\t", "control"},
		{"4\x00", "control"},
		{"4\u200b", "invisible"},
		{"\u202e4", "invisible"},
		{"\ufeff4", "invisible"},
		{"4\n", "control"},
		{"4\u2028", "invisible"},
		{"4\xff", "UTF-8"},
		{strings.Repeat("1", 201), "200 bytes"},
		{"٣", "number"},
	}
	for _, p := range parsers {
		t.Run(p.name, func(t *testing.T) {
			for _, c := range cases {
				input := c.number + p.unit
				value, err := p.parse(input)
				says := c.says
				if p.name == "ParseTemperature" && says == "too large" {
					says = "hotter"
				}
				if p.name == "ParseTemperature" && says == "too small" {
					says = "freezing"
				}
				refused(t, input, err, says)
				if err != nil && value != 0 {
					t.Errorf("%q: an error beside the value %v", input, value)
				}
			}
			for _, input := range []string{"5", "5 "} {
				_, err := p.parse(input)
				refused(t, input, err, "no unit", "write the number with its unit")
			}
			for _, input := range []string{"5e", "5e+", "5e" + p.unit, "5e-" + p.unit} {
				_, err := p.parse(input)
				refused(t, input, err)
			}
			for _, input := range []string{"5 furlongs", "5" + p.unit + " daily", "5" + p.unit + p.unit, "5" + p.unit + ";"} {
				_, err := p.parse(input)
				refused(t, input, err)
			}
			_, err := p.parse("")
			refused(t, "", err, "nothing is written")
			_, err = p.parse(" ") // a no-break space alone
			refused(t, " ", err, "nothing is written")
		})
	}
}

// What word processors and foreign keyboards do to a space changes nothing.
func TestEveryParserTakesUnicodeSpaces(t *testing.T) {
	for _, p := range parsers {
		want, err := p.parse("12.5" + p.unit)
		if err != nil || want == 0 {
			t.Errorf("%s: %v, %v", p.name, want, err)
		}
		for _, space := range []string{"", "  ", " ", " ", " ", " ", "　"} {
			input := space + "12.5" + strings.Replace(p.unit, " ", space, 1) + space
			got, err := p.parse(input)
			if err != nil || got != want {
				t.Errorf("%s(%q) = %v, %v; want %v", p.name, input, got, err, want)
			}
		}
		// "041" is forty-one, not octal thirty-three; "1.10" is 1.1.
		for input, same := range map[string]string{"041": "41", "1.10": "1.1", "5e-1": "0.5", "1E+1": "10"} {
			a, errA := p.parse(input + p.unit)
			b, errB := p.parse(same + p.unit)
			if errA != nil || errB != nil || a != b {
				t.Errorf("%s: %q is %v (%v), %q is %v (%v)", p.name, input, a, errA, same, b, errB)
			}
		}
	}
}

func TestCapitalsAreToldApart(t *testing.T) {
	for input, want := range map[string]string{"10 Mg/kg": "write mg", "10 MG": "write mg", "10 MCG/kg": "write mcg", "10 G": "write g"} {
		_, err := ParseDose(input)
		refused(t, input, err, "capitals change a unit", want)
	}
	_, err := ParseBodyMass("41 KGS")
	refused(t, "41 KGS", err, "write g, kg, lb or oz")
	_, err = ParseLiquid("1 ML")
	refused(t, "1 ML", err, "write mL")
	_, err = ParseRate("1 mw")
	refused(t, "1 mw", err, "capitals")
}

func FuzzParseEverything(f *testing.F) {
	for _, s := range []string{"41 kg", "36–46 kg", "10 mg/kg", "q12h", "33 °C", "80 %", "1e-3 L/h", "4,2 kg", "\xff", "1e308 kcal/day"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		for _, p := range parsers {
			value, err := p.parse(s)
			if err != nil {
				refused(t, s, err)
				continue
			}
			once := p.name == "ParseInterval" && value == 0
			if !once && !(value > 0 && value <= largestQuantity) {
				t.Errorf("%s(%q) = %v", p.name, s, value)
			}
		}
	})
}

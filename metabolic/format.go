// How every number of the program is printed. The rules are those that
// medication-safety bodies publish for handwritten and printed orders: a zero
// before a bare point, none after the last digit, a space before the unit, a
// comma in thousands, "mcg" and "units" in letters, the interval in words.

package metabolic

import (
	"math"
	"strconv"
	"strings"
)

// doseDigits is how many significant digits a dose, an amount or a rate is
// printed with; massDigits, a mass as weighed; ratioDigits, a ratio in a step,
// where a pocket calculator must end at the printed result.
const (
	doseDigits  = 3
	massDigits  = 5
	ratioDigits = 4
)

// noiseDigits is where the decimal value of a number is taken to end and the
// noise of binary arithmetic to begin: 2.675 is held as
// 2.67499999999999982… and must still round to 2.68.
const noiseDigits = 12

// Significant prints x to the given number of significant digits (1 to 17),
// half away from zero, in plain decimals: a comma in thousands, a zero before
// the point, no trailing zeros, never an exponent. Digits beyond the twelfth
// are taken for binary noise and rounded away first, unless more are asked
// for. What is no number prints as "NaN", what is without bound as "Inf".
func Significant(x float64, digits int) string {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return strings.TrimPrefix(strconv.FormatFloat(x, 'g', -1, 64), "+")
	}
	negative, figures, exponent := roundSignificant(x, digits)
	if figures == "" {
		return "0"
	}
	var whole, fraction string
	switch {
	case exponent < 0:
		whole, fraction = "0", strings.Repeat("0", -exponent-1)+figures
	case exponent+1 >= len(figures):
		whole = figures + strings.Repeat("0", exponent+1-len(figures))
	default:
		whole, fraction = figures[:exponent+1], figures[exponent+1:]
	}
	var b strings.Builder
	if negative {
		b.WriteByte('-')
	}
	for i, c := range whole {
		if i > 0 && (len(whole)-i)%3 == 0 {
			b.WriteByte(',')
		}
		b.WriteRune(c)
	}
	if fraction != "" {
		b.WriteByte('.')
		b.WriteString(fraction)
	}
	return b.String()
}

// roundSignificant gives the rounded figures of x without trailing zeros and
// the power of ten of the first one; no figures for zero.
func roundSignificant(x float64, digits int) (negative bool, figures string, exponent int) {
	if x == 0 {
		return false, "", 0
	}
	digits = min(max(digits, 1), 17)
	carried := max(digits, noiseDigits)
	s := strconv.FormatFloat(math.Abs(x), 'e', carried-1, 64)
	mantissa, power, _ := strings.Cut(s, "e")
	exponent, _ = strconv.Atoi(power)
	f := []byte(strings.Replace(mantissa, ".", "", 1))
	up := digits < len(f) && f[digits] >= '5'
	f = f[:digits]
	for i := digits - 1; up && i >= 0; i-- {
		if f[i] < '9' {
			f[i]++
			up = false
		} else {
			f[i] = '0'
		}
	}
	if up { // all nines
		f = append([]byte{'1'}, f...)
		exponent++
	}
	return x < 0, strings.TrimRight(string(f), "0"), exponent
}

// rounded gives x as Significant prints it, so that the unit is chosen by the
// number that will stand on paper: 999.7 mg is 1 g.
func rounded(x float64, digits int) float64 {
	r, err := strconv.ParseFloat(strings.ReplaceAll(Significant(x, digits), ",", ""), 64)
	if err != nil {
		return x
	}
	return r
}

func massText(m Mass, digits int) string {
	if m != 0 && rounded(float64(m), digits) < 1 {
		return Significant(m.Grams(), digits) + " g"
	}
	return Significant(float64(m), digits) + " kg"
}

// FormatMass prints a mass in kg, or in g below 1 kg: "41 kg", "350 g". It
// carries 5 digits, to give back what was read from the scales.
func FormatMass(m Mass) string { return massText(m, massDigits) }

// FormatBodyMass prints a weighed mass as [FormatMass] does, and an estimated
// one with its ends: "40.7 kg (estimated, 36 to 46 kg)".
func FormatBodyMass(b BodyMass) string {
	if !b.Estimated() {
		return FormatMass(b.Middle)
	}
	ends := FormatRange(float64(b.Low), float64(b.High), func(kg float64) string { return massText(Mass(kg), doseDigits) })
	return massText(b.Middle, doseDigits) + " (estimated, " + ends + ")"
}

// FormatAmount prints an amount of drug, v in mg or IU as unit says, to 3
// digits: "85 mcg" below 1 mg, "334 mg", "1.5 g" from 1,000 mg,
// "3,000 units".
func FormatAmount(v float64, unit AmountUnit) string {
	if unit == InternationalUnit {
		s := Significant(v, doseDigits)
		if s == "1" {
			return s + " unit"
		}
		return s + " units"
	}
	switch r := rounded(v, doseDigits); {
	case r < 1 && r != 0:
		return Significant(v*1000, doseDigits) + " mcg"
	case r >= 1000:
		return Significant(v/1000, doseDigits) + " g"
	}
	return Significant(v, doseDigits) + " mg"
}

// FormatDosePerKg prints a dose per kg of body mass, v in mg or IU as unit
// says, to 3 digits: "8.14 mg/kg", "3,000 units/kg", with perHour
// "2 mg/kg/h". It stays in mg whatever the size, so that doses that stand side
// by side compare by their digits.
func FormatDosePerKg(v float64, unit AmountUnit, perHour bool) string {
	s := Significant(v, doseDigits) + " mg/kg"
	if unit == InternationalUnit {
		s = Significant(v, doseDigits) + " units/kg"
	}
	if perHour {
		s += "/h"
	}
	return s
}

// FormatRange prints two values, each as format does, as "10 to 15 mg/kg",
// with the unit once where both share it ("750 mcg to 1.5 mg" where they do
// not), and as one value where both print alike.
func FormatRange(low, high float64, format func(float64) string) string {
	a, b := format(low), format(high)
	if a == b {
		return a
	}
	numberA, unitA, _ := strings.Cut(a, " ")
	_, unitB, _ := strings.Cut(b, " ")
	if unitA == unitB {
		a = numberA
	}
	return a + " to " + b
}

// hoursText prints whole hours whole, others to 3 digits.
func hoursText(x float64) string {
	if x == math.Trunc(x) && math.Abs(x) < 1e15 {
		return Significant(x, 15)
	}
	return Significant(x, doseDigits)
}

// FormatInterval prints an interval in words: "every 12 hours",
// "every 72 hours (3 days)" over 48 hours, "once", "continuous infusion".
func FormatInterval(i Interval) string {
	switch i.Kind {
	case Once:
		return "once"
	case Infusion:
		return "continuous infusion"
	}
	return "every " + hoursAndDays(i.Hours)
}

// hoursAndDays gives "12 hours", "72 hours (3 days)".
func hoursAndDays(h Hours) string {
	s := counted(hoursText(float64(h)), "hour")
	if h > 48 {
		s += " (" + counted(hoursText(float64(h)/24), "day") + ")"
	}
	return s
}

// counted gives "1 hour" and "12 hours".
func counted(number, word string) string {
	if number == "1" {
		return number + " " + word
	}
	return number + " " + word + "s"
}

// FormatShortInterval prints an interval as [ParseInterval] reads it: "q12h",
// "once", "infusion". On paper it stands only beside the words.
func FormatShortInterval(i Interval) string {
	switch i.Kind {
	case Once:
		return "once"
	case Infusion:
		return "infusion"
	}
	return "q" + strings.ReplaceAll(hoursText(float64(i.Hours)), ",", "") + "h"
}

// FormatDuration prints a span of time to 3 digits, in minutes below 1 hour
// and in days too over 48 hours: "20 minutes", "1.3 hours",
// "72 hours (3 days)".
func FormatDuration(h Hours) string {
	if rounded(float64(h), doseDigits) < 1 {
		return counted(Significant(float64(h)*60, doseDigits), "minute")
	}
	return hoursAndDays(h)
}

// FormatPower prints a metabolic rate to 3 digits: "1,130 kcal/day (54.9 W)".
func FormatPower(p Power) string {
	return Significant(p.KcalPerDay(), doseDigits) + " kcal/day (" + Significant(float64(p), doseDigits) + " W)"
}

// FormatCelsius prints a temperature to a tenth of a degree: "33 °C",
// "37.3 °C".
func FormatCelsius(c Celsius) string {
	tenths := Celsius(math.Round(rounded(float64(c)*10, noiseDigits)))
	return Significant(float64(tenths)/10, noiseDigits) + " °C"
}

// FormatRatio prints a ratio to 4 digits: "0.814".
func FormatRatio(r float64) string { return Significant(r, ratioDigits) }

// FormatPercent prints a fraction of 1 in percent, to 3 digits: "80 %".
func FormatPercent(fraction float64) string { return Significant(fraction*100, doseDigits) + " %" }

// FormatLiquid prints a volume in mL, to 3 digits: "6.7 mL".
func FormatLiquid(ml float64) string { return Significant(ml, doseDigits) + " mL" }

// FormatConcentration prints a concentration to 3 digits: "2 mg/L",
// "1,000 units/L".
func FormatConcentration(c Concentration) string {
	if c.Unit == InternationalUnit {
		return Significant(c.Value, doseDigits) + " units/L"
	}
	return Significant(c.Value, doseDigits) + " mg/L"
}

// Units holds the words that follow a number on paper. A line is never broken
// between a number and one of them.
var Units = []string{
	"kg", "g", "mg", "mcg", "unit", "units", "IU",
	"mg/kg", "units/kg", "mg/kg/h", "units/kg/h", "mg/kg/day", "units/kg/day", "mg/m²",
	"mL", "L", "mL/kg", "L/kg", "mg/L", "units/L", "mg/mL", "units/mL", "L/h", "L/h/kg",
	"W", "kcal/day", "kJ/day", "J/h", "mL O2/h", "mL O2/min",
	"hour", "hours", "h", "day", "days", "minute", "minutes", "min", "week", "weeks",
	"°C", "%", "m²", "kcal", "kJ",
}

package metabolic

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
)

// The forms that a published line takes. W is body mass in the line's own mass
// unit, T the body temperature in °C, TK the same in kelvin.
const (
	FormPower     = "power"      // B = A·W^B; ectotherms by Q10 from T0
	FormLogLinear = "log-linear" // B = A·W^B·10^(C·T)
	FormBoltzmann = "boltzmann"  // B = A·W^B·e^(−C/TK)
	FormLinear    = "linear"     // B = A·W^B·(T − C)
	FormQuadratic = "quadratic"  // B = A·W^(B + C·log10 W)
)

// What a line was fitted over.
const (
	LevelInterspecific = "inter-specific"
	LevelIntraspecific = "intra-specific"
	LevelSingleSpecies = "single species"
)

// Equation is one published line of metabolic rate on body mass, in its own
// units, with its source.
type Equation struct {
	ID        string
	Animals   string   // as the source names them
	AppliesTo []string // groups of [Groups], or a species or genus by its scientific name

	Kind     string // BMR, SMR (basal, standard); RMR, FMR (resting or active, field)
	Form     string // one of the Form constants
	A, B, C  float64
	MassUnit string // "g" or "kg"
	RateUnit string // "W", "kcal/day", "kJ/day", "J/h" or "mL O2/h"

	// T0 is the body temperature to which the line belongs, if HasT0. An
	// ectotherm's power line is moved from it by Q10. For an endotherm it is
	// the measured body temperature and changes nothing, but for a line with
	// a temperature term, which is taken at it.
	T0    Celsius
	HasT0 bool
	// TLow and THigh bound the body temperatures of the fit, if not both zero.
	TLow, THigh Celsius

	MassLow, MassHigh Mass    // the masses of the fit, in kg; 0 where not known
	N                 int     // species in the fit (animals, within a species); 0 where not known
	ResidualSDln      float64 // residual standard deviation of ln rate; 0 where not known
	Level             string  // one of the Level constants

	Citation      string
	Verified      string // how the figures were seen: "read: …" or "memory …"
	Note          string
	DefaultFor    []string // the groups, or the species or genus, whose default line this is
	LowConfidence bool

	ectotherm bool
}

// Usable reports whether a dose may be scaled by the line: it is of basal or
// standard rates, and runs between species or is the one of a single species
// (an echidna) that no line between species covers. Slopes within one species
// are lower than between species, and resting, active and field rates are of
// another kind; such rows are for display.
func (e *Equation) Usable() bool {
	return (e.Kind == "BMR" || e.Kind == "SMR") && e.Level != LevelIntraspecific
}

// Interspecific reports whether the line was fitted over species.
func (e *Equation) Interspecific() bool { return e.Level == LevelInterspecific }

// Ectotherm reports whether the line is of animals whose rate follows their
// body temperature.
func (e *Equation) Ectotherm() bool { return e.ectotherm }

// HasTemperatureTerm reports whether the line holds the body temperature
// itself, so that no Q10 is applied to it.
func (e *Equation) HasTemperatureTerm() bool {
	return e.Form == FormLogLinear || e.Form == FormBoltzmann || e.Form == FormLinear
}

// NeedsTemperature reports whether [Equation.Rate] depends on its temperature:
// the animals are ectotherms and the line has a temperature to start from or a
// term for it.
func (e *Equation) NeedsTemperature() bool {
	return e.ectotherm && (e.HasT0 || e.HasTemperatureTerm())
}

// Memory reports whether a or b, or a constant that they round, was recalled
// rather than read, by the mark in Verified. What else of a row was recalled
// stands in Note.
func (e *Equation) Memory() bool { return strings.Contains(e.Verified, "memory") }

// Applies reports whether the line covers a species: by its group, or by its
// scientific name or the genus in it where the line names those.
func (e *Equation) Applies(group, species string) bool { return covers(e.AppliesTo, group, species) }

func covers(list []string, group, species string) bool {
	genus, _, _ := strings.Cut(species, " ")
	return slices.ContainsFunc(list, func(name string) bool {
		return name != "" && (name == group || name == species || name == genus)
	})
}

// Rate gives the whole-animal rate of an animal of mass m at the body
// temperature t, by the line's form (W in the line's mass unit, result turned
// to watts):
//
//	power       A·W^B, for an ectotherm times q10^((t − T0)/10)
//	log-linear  A·W^B·10^(C·t)
//	boltzmann   A·W^B·e^(−C/(t + 273.15))
//	linear      A·W^B·(t − C)
//	quadratic   A·W^(B + C·log10 W)
//
// For an endotherm, t and q10 are ignored: a term is taken at T0. So are they
// for an ectotherm's line without a temperature (field rates), and q10 for a
// line with a temperature term. Where they count, a t outside [EctothermLow]
// to [EctothermHigh] or outside the temperatures of the fit, and a q10 outside
// [Q10Low] to [Q10High], are errors, as is a mass that is not above zero. The
// masses of the fit do not bound m.
func (e *Equation) Rate(m Mass, t Celsius, q10 float64) (Power, error) {
	if !(m > 0) || math.IsInf(float64(m), 0) {
		return 0, fmt.Errorf("equation %s: a mass of %s kg has no rate", e.ID, Significant(float64(m), massDigits))
	}
	massUnit, ok := findUnit(massUnits, e.MassUnit)
	if !ok {
		return 0, fmt.Errorf("equation %s: unknown mass unit %q", e.ID, e.MassUnit)
	}
	rateUnit, ok := findUnit(rateUnits, e.RateUnit)
	if !ok {
		return 0, fmt.Errorf("equation %s: unknown rate unit %q", e.ID, e.RateUnit)
	}
	factor, err := e.temperatureFactor(t, q10)
	if err != nil {
		return 0, fmt.Errorf("equation %s: %w", e.ID, err)
	}
	w := float64(m) * massUnit.by / massUnit.times
	exponent := e.B
	if e.Form == FormQuadratic {
		exponent += e.C * math.Log10(w)
	}
	p := rateUnit.canonical(e.A * math.Pow(w, exponent) * factor)
	if !(p > 0) || math.IsInf(p, 0) {
		return 0, fmt.Errorf("equation %s: no rate comes out for %s", e.ID, FormatMass(m))
	}
	return Power(p), nil
}

// temperatureFactor gives the factor of Rate that holds the temperature.
func (e *Equation) temperatureFactor(t Celsius, q10 float64) (float64, error) {
	switch {
	case e.NeedsTemperature():
		if err := CheckEctotherm(t); err != nil {
			return 0, err
		}
		if e.THigh > 0 && (t < e.TLow || t > e.THigh) {
			return 0, fmt.Errorf("a body temperature of %s is outside the %s to %s of the fit", FormatCelsius(t), Significant(float64(e.TLow), 3), FormatCelsius(e.THigh))
		}
	case e.HasTemperatureTerm() && !e.HasT0:
		return 0, fmt.Errorf("a temperature term needs a temperature")
	default:
		t = e.T0
	}
	switch e.Form {
	case FormPower:
		if !e.NeedsTemperature() {
			return 1, nil
		}
		if err := CheckQ10(q10); err != nil {
			return 0, err
		}
		return Q10Factor(q10, t, e.T0), nil
	case FormLogLinear:
		return math.Pow(10, e.C*float64(t)), nil
	case FormBoltzmann:
		return math.Exp(-e.C / t.Kelvin()), nil
	case FormLinear:
		return float64(t) - e.C, nil
	case FormQuadratic:
		return 1, nil
	}
	return 0, fmt.Errorf("unknown form %q", e.Form)
}

// Convert gives the coefficient and the exponent of the line in other units,
//
//	a' = a·(rate unit/rate unit')·(mass unit'/mass unit)^b,   b' = b
//
// Since the mass is raised to b, so is its unit: 63.6 J/h per g^0.76 is
// 69.5 kcal/day per kg^0.76, not 63.6 times one factor. The temperature term
// is unchanged. A quadratic line has no single exponent and is an error, as is
// a unit that [ParseBodyMass] or [ParseRate] does not know.
func (e *Equation) Convert(massUnit, rateUnit string) (a, b float64, err error) {
	if e.Form == FormQuadratic {
		return 0, 0, fmt.Errorf("equation %s: a quadratic line is not converted by its exponent", e.ID)
	}
	fromMass, ok1 := findUnit(massUnits, e.MassUnit)
	fromRate, ok2 := findUnit(rateUnits, e.RateUnit)
	if !ok1 || !ok2 {
		return 0, 0, fmt.Errorf("equation %s: unknown unit %q or %q", e.ID, e.MassUnit, e.RateUnit)
	}
	toMass, ok := findUnit(massUnits, massUnit)
	if !ok {
		return 0, 0, fmt.Errorf("%q is no unit of mass; use %s", massUnit, massesAccepted)
	}
	toRate, ok := findUnit(rateUnits, rateUnit)
	if !ok {
		return 0, 0, fmt.Errorf("%q is no unit of metabolic rate; use %s", rateUnit, ratesAccepted)
	}
	mass := (toMass.times * fromMass.by) / (toMass.by * fromMass.times)
	rate := (fromRate.times * toRate.by) / (fromRate.by * toRate.times)
	return e.A * rate * math.Pow(mass, e.B), e.B, nil
}

// Formula gives the line in symbols with its own units:
// "B = 70·W^0.75 kcal/day, W in kg". A rate in watts is spelt "watt", since W
// is the mass.
func (e *Equation) Formula() string {
	rate, where := e.RateUnit, ", W in "+e.MassUnit
	if rate == "W" {
		rate = "watt"
	}
	line := "B = " + coefficient(e.A) + "·W^" + coefficient(e.B)
	switch e.Form {
	case FormLogLinear:
		line += "·10^(" + coefficient(e.C) + "·T)"
		where += ", T in °C"
	case FormBoltzmann:
		line += "·e^(−" + coefficient(e.C) + "/T)"
		where += ", T in kelvin"
	case FormLinear:
		line += "·(T − " + coefficient(e.C) + ")"
		where += ", T in °C"
	case FormQuadratic:
		line = "B = " + coefficient(e.A) + "·W^(" + coefficient(e.B) + " + " + coefficient(e.C) + "·log10 W)"
	}
	switch {
	case e.Form == FormPower && e.NeedsTemperature():
		where += ", at " + FormatCelsius(e.T0)
	case e.HasTemperatureTerm() && !e.ectotherm:
		where += ", taken at " + FormatCelsius(e.T0)
	}
	return line + " " + rate + where
}

// coefficient prints a coefficient in full, with a power of ten where plain
// decimals would be all noughts.
func coefficient(x float64) string {
	if math.Abs(x) < 1e9 {
		return Significant(x, noiseDigits)
	}
	mantissa, power, _ := strings.Cut(strconv.FormatFloat(x, 'e', -1, 64), "e+")
	return mantissa + "×10^" + strings.TrimLeft(power, "0")
}

package metabolic

import (
	"fmt"
	"math"
	"strings"
)

// The factor by which a metabolic rate rises over 10 °C. Published values over
// many species are 2.4 (squamates: Andrews RM & Pough FH 1985 Physiol Zool
// 58:214-231), 2.61 and 2.65 (boas and pythons: Chappell MA & Ellis TM 1987
// J Comp Physiol B 157:227-235) and about 2.5 (monitors: Thompson GG & Withers
// PC 1997 Physiol Zool 70:307-323). The limits are assumed.
const (
	Q10Default = 2.5
	Q10Low     = 1.5
	Q10High    = 4.0
)

// The body temperatures between which an ectotherm's rate is computed.
// Assumed: outside them the lines have no data and the animal is cold-stunned
// or dying.
const (
	EctothermLow  Celsius = 10
	EctothermHigh Celsius = 40
)

// highestBodyTemperature is where a number in °C is surely one in °F.
const highestBodyTemperature Celsius = 60

// Q10Factor gives q10^((t − t0)/10): by how much a rate known at the body
// temperature t0 is larger at t. It is 1 at t = t0.
func Q10Factor(q10 float64, t, t0 Celsius) float64 {
	return math.Pow(q10, float64(t-t0)/10)
}

// CheckQ10 refuses a Q10 outside [Q10Low] to [Q10High].
func CheckQ10(q10 float64) error {
	if q10 >= Q10Low && q10 <= Q10High {
		return nil
	}
	return fmt.Errorf("a Q10 of %s is outside %s to %s", Significant(q10, 4), Significant(Q10Low, 3), Significant(Q10High, 3))
}

// CheckEctotherm refuses a body temperature at which an ectotherm's rate is
// not computed: outside [EctothermLow] to [EctothermHigh].
func CheckEctotherm(t Celsius) error {
	if t >= EctothermLow && t <= EctothermHigh {
		return nil
	}
	return fmt.Errorf("a body temperature of %s is outside %s to %s", FormatCelsius(t), Significant(float64(EctothermLow), 3), FormatCelsius(EctothermHigh))
}

// ParseTemperature reads a body temperature: "33 °C", "33 C", "91.4 °F",
// "91.4 F" (°C = (°F − 32)/1.8). The result is above 0 and at most 60 °C. The
// error is a [*QuantityError].
func ParseTemperature(s string) (Celsius, error) {
	t, problem := newText(s, "a body temperature", "33 °C")
	if problem != nil {
		return 0, problem
	}
	number, rest, problem := t.number(t.body)
	if problem != nil {
		return 0, problem
	}
	value := number
	switch strings.TrimPrefix(strings.TrimPrefix(rest, "°"), " ") {
	case "C":
	case "F":
		value = (number - 32) / 1.8
	default:
		return 0, t.unitError(rest, "°C or °F", []unit{{name: "°C"}, {name: "°F"}, {name: "C"}, {name: "F"}})
	}
	c := Celsius(value)
	switch {
	case c > highestBodyTemperature:
		return 0, t.fail(quoted(t.input)+" is hotter than any living body", `check the scale; 98 degrees Fahrenheit are written "98 °F"`)
	case !(value >= smallestQuantity):
		return 0, t.fail(quoted(t.input)+" is at or below freezing", "write the body temperature of the animal, like "+quoted(t.like))
	}
	return c, nil
}

package metabolic

import (
	"math"
	"strings"
)

// BodyMass is a body mass as weighed, where Low, Middle and High are equal, or
// as estimated, where the true mass is thought to lie between Low and High.
type BodyMass struct {
	Low, Middle, High Mass
}

// HalfWidth gives h = ½·ln(High/Low), 0 for a weighed mass: the uncertainty of
// an estimate on the scale on which doses are scaled. "41 kg ± 10 %" has
// h = ln 1.1.
func (b BodyMass) HalfWidth() float64 {
	if !b.Estimated() {
		return 0
	}
	return 0.5 * math.Log(float64(b.High)/float64(b.Low))
}

// Estimated reports whether the mass is an estimate with two ends.
func (b BodyMass) Estimated() bool { return b.Low < b.High }

const massesAccepted = "g, kg, lb or oz"

// ParseBodyMass reads a body mass.
//
//	41 kg    41kg    350 g    2 lb    3 oz         weighed
//	36-46 kg    36 to 46 kg    36–46 kg            estimated: Middle is the geometric mean √(36·46)
//	41 kg ± 10 %    41 kg +- 10 %                  estimated: Middle 41, ends 41/1.1 and 41·1.1
//
// Units are g, kg (also Kg, KG), lb (0.45359237 kg) and oz (lb/16), and their
// full words. Both ends of a range may carry their own unit. The error is a
// [*QuantityError]: no unit, a comma, zero, a minus, ends that are equal or
// upside down, more than ± 100 %.
func ParseBodyMass(s string) (BodyMass, error) {
	t, problem := newText(s, "a body mass", "41 kg")
	if problem != nil {
		return BodyMass{}, problem
	}
	body := strings.ReplaceAll(strings.ReplaceAll(t.body, "+/-", "±"), "+-", "±")
	if mass, spread, ok := strings.Cut(body, "±"); ok {
		return t.massWithSpread(strings.TrimSpace(mass), strings.TrimSpace(spread))
	}
	lowText, highText, isRange, problem := t.splitRange()
	if problem != nil {
		return BodyMass{}, problem
	}
	high, problem := t.simple(highText, massesAccepted, massUnits)
	if problem != nil {
		return BodyMass{}, problem
	}
	if !isRange {
		return BodyMass{Mass(high), Mass(high), Mass(high)}, nil
	}
	low, problem := t.simple(t.withUnitOf(lowText, highText), massesAccepted, massUnits)
	if problem != nil {
		return BodyMass{}, problem
	}
	if problem := t.ordered(low, high); problem != nil {
		return BodyMass{}, problem
	}
	return BodyMass{Mass(low), Mass(math.Sqrt(low) * math.Sqrt(high)), Mass(high)}, nil
}

func (t text) massWithSpread(massText, spreadText string) (BodyMass, error) {
	middle, problem := t.simple(massText, massesAccepted, massUnits)
	if problem != nil {
		return BodyMass{}, problem
	}
	number, rest, problem := t.number(spreadText)
	if problem != nil {
		return BodyMass{}, problem
	}
	u, ok := findUnit(percentUnits, rest)
	if !ok {
		return BodyMass{}, t.fail(quoted(t.input)+" has a spread that is not in percent", `write "41 kg ± 10 %", or both ends: "37-45 kg"`)
	}
	spread := u.canonical(number)
	if spread > 1 {
		return BodyMass{}, t.fail(quoted(t.input)+" has a spread of more than 100 %", `write both ends: "20-80 kg"`)
	}
	b := BodyMass{Mass(middle / (1 + spread)), Mass(middle), Mass(middle * (1 + spread))}
	if !b.Estimated() {
		return BodyMass{}, t.fail(quoted(t.input)+" has a spread too small to matter", "leave the spread out")
	}
	return b, nil
}

// withUnitOf gives the lower end of a range the unit of the upper one, if it
// has none of its own.
func (t text) withUnitOf(low, high string) string {
	if _, rest, problem := t.number(low); problem != nil || rest != "" {
		return low
	}
	_, rest, _ := t.number(high)
	return low + " " + rest
}

// ordered refuses a range whose lower end is not the lower.
func (t text) ordered(low, high float64) *QuantityError {
	switch {
	case low > high:
		return t.fail(quoted(t.input)+" is a range with its larger end first", "write the smaller end first")
	case low == high:
		return t.fail(quoted(t.input)+" is a range with equal ends", "write the one value, like "+quoted(t.like))
	}
	return nil
}

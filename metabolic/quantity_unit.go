package metabolic

import (
	"strconv"
	"strings"
)

// unit is one spelling of a unit: value in the canonical unit =
// number·times/by. Two whole factors keep decimal inputs exact where one
// rounded factor would not (85 mcg is 0.085 mg, not 0.08500000000000001).
type unit struct {
	name      string
	times, by float64
}

func (u unit) canonical(number float64) float64 { return number * u.times / u.by }

var massUnits = []unit{ // kg
	{"g", 1, 1000}, {"gram", 1, 1000}, {"grams", 1, 1000},
	{"kg", 1, 1}, {"Kg", 1, 1}, {"KG", 1, 1}, {"kilogram", 1, 1}, {"kilograms", 1, 1},
	{"lb", KilogramPerPound, 1}, {"lbs", KilogramPerPound, 1}, {"pound", KilogramPerPound, 1}, {"pounds", KilogramPerPound, 1},
	{"oz", KilogramPerPound, 16}, {"ounce", KilogramPerPound, 16}, {"ounces", KilogramPerPound, 16},
}

var milligramUnits = []unit{ // mg
	{"mg", 1, 1}, {"g", 1000, 1}, {"mcg", 1, 1000}, {"µg", 1, 1000}, {"ug", 1, 1000}, {"ng", 1, 1e6},
}

var internationalUnits = []unit{ // IU
	{"IU", 1, 1}, {"iu", 1, 1}, {"units", 1, 1}, {"unit", 1, 1}, {"international units", 1, 1},
}

var timeUnits = []unit{ // h
	{"h", 1, 1}, {"hr", 1, 1}, {"hrs", 1, 1}, {"hour", 1, 1}, {"hours", 1, 1},
	{"min", 1, 60}, {"mins", 1, 60}, {"minute", 1, 60}, {"minutes", 1, 60},
	{"d", 24, 1}, {"day", 24, 1}, {"days", 24, 1},
	{"week", 168, 1}, {"weeks", 168, 1},
}

var volumeUnits = []unit{ // L
	{"L", 1, 1}, {"l", 1, 1}, {"mL", 1, 1000}, {"ml", 1, 1000},
}

var rateUnits = []unit{ // W
	{"W", 1, 1}, {"mW", 1, 1000},
	{"kcal/day", 1000 * JoulePerCalorie, secondsPerDay}, {"kcal/d", 1000 * JoulePerCalorie, secondsPerDay},
	{"kJ/day", 1000, secondsPerDay}, {"kJ/d", 1000, secondsPerDay},
	{"J/h", 1, secondsPerHour}, {"kJ/h", 1000, secondsPerHour},
	{"mL O2/h", JoulePerMLO2, secondsPerHour}, {"ml O2/h", JoulePerMLO2, secondsPerHour}, {"mLO2/h", JoulePerMLO2, secondsPerHour},
	{"mL O2/min", JoulePerMLO2, 60}, {"ml O2/min", JoulePerMLO2, 60}, {"mLO2/min", JoulePerMLO2, 60},
}

var percentUnits = []unit{{"%", 1, 100}, {"percent", 1, 100}}

func findUnit(table []unit, name string) (unit, bool) {
	for _, u := range table {
		if u.name == name {
			return u, true
		}
	}
	return unit{}, false
}

// findAmountUnit looks a unit of drug up among those of mass and the
// international units.
func findAmountUnit(name string) (unit, AmountUnit, bool) {
	if u, ok := findUnit(milligramUnits, name); ok {
		return u, Milligram, true
	}
	u, ok := findUnit(internationalUnits, name)
	return u, InternationalUnit, ok
}

// unitText evens out the ways of writing "per": "mg per kg", "mg / kg" and
// "mg/kg" are one. "m^2" becomes "m2".
func unitText(s string) string {
	s = strings.ReplaceAll(s, " per ", "/")
	s = strings.ReplaceAll(s, " /", "/")
	s = strings.ReplaceAll(s, "/ ", "/")
	return strings.ReplaceAll(s, "m^2", "m2")
}

// unitError is the error for a unit that is missing or unknown. Accepted names
// what is accepted, in the words of the message; spellings are the accepted
// ones, so that a mistake of capitals can be told apart from another unit.
func (t text) unitError(got, accepted string, spellings ...[]unit) *QuantityError {
	if got == "" {
		return t.fail(quoted(t.input)+" has no unit", "write the number with its unit, like "+strconv.Quote(t.like))
	}
	for _, table := range spellings {
		for _, u := range table {
			if strings.EqualFold(u.name, got) {
				return t.fail(quoted(got)+" in "+quoted(t.input)+" is not "+quoted(u.name)+": capitals change a unit", "write "+u.name+" if that is meant")
			}
		}
	}
	return t.fail(quoted(got)+" in "+quoted(t.input)+" is no unit of "+t.kind+" that is read here", "write "+accepted)
}

// simple reads one number and one unit of a table.
func (t text) simple(s, accepted string, table []unit) (float64, *QuantityError) {
	number, rest, problem := t.number(s)
	if problem != nil {
		return 0, problem
	}
	name := unitText(rest)
	u, ok := findUnit(table, name)
	if !ok {
		return 0, t.unitError(name, accepted, table)
	}
	value := u.canonical(number)
	if problem := t.inBounds(value); problem != nil {
		return 0, problem
	}
	return value, nil
}

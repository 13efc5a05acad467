package metabolic

import (
	"strconv"
	"strings"
)

// DosePer says to what the amount of a dose is related.
type DosePer uint8

// The ways in which doses are printed.
const (
	PerKg          DosePer = iota // amount per kg of body mass at each administration
	PerAnimal                     // amount per animal at each administration
	PerKgDay                      // amount per kg and day, to be divided by the interval
	PerKgHour                     // amount per kg and hour, an infusion
	PerSquareMetre                // amount per m² of body surface at each administration
)

// Dose is a dose as published: Low and High are the ends of its range, equal
// for a single figure, in mg or IU as Unit says, per kg, animal, kg and day,
// kg and hour, or m² as Per says.
type Dose struct {
	Low, High float64
	Unit      AmountUnit
	Per       DosePer
}

const dosesAccepted = "mcg, mg, g or IU, per kg, per animal, per kg/day, per kg/h, per kg/min or per m2"

// ParseDose reads a dose, single or a range with the smaller end first.
//
//	10 mg/kg    10-15 mg/kg    85 mcg/kg    20000 IU/kg    10 mg/kg/dose
//	250 mg    250 mg per animal    250 mg/animal
//	20 mg/kg/day    2 mg/kg/h    5 mcg/kg/min    30 mg/m2    30 mg/m²
//
// Amounts are in mcg (also µg, ug), ng, mg, g, IU (also iu, units). An amount
// a minute is given as one an hour. "U" for units is refused, since by hand it
// is read as a nought. The error is a [*QuantityError].
func ParseDose(s string) (Dose, error) {
	t, problem := newText(s, "a dose", "10 mg/kg")
	if problem != nil {
		return Dose{}, problem
	}
	lowText, highText, isRange, problem := t.splitRange()
	if problem != nil {
		return Dose{}, problem
	}
	high, unit, per, problem := t.dose(highText)
	if problem != nil {
		return Dose{}, problem
	}
	if !isRange {
		return Dose{high, high, unit, per}, nil
	}
	low, lowUnit, lowPer, problem := t.dose(t.withUnitOf(lowText, highText))
	if problem != nil {
		return Dose{}, problem
	}
	if lowUnit != unit || lowPer != per {
		return Dose{}, t.fail(quoted(t.input)+" is a range between two kinds of dose", "write both ends in one unit, like "+quoted("10-15 mg/kg"))
	}
	if problem := t.ordered(low, high); problem != nil {
		return Dose{}, problem
	}
	return Dose{low, high, unit, per}, nil
}

func (t text) dose(s string) (value float64, unit AmountUnit, per DosePer, problem *QuantityError) {
	number, rest, problem := t.number(s)
	if problem != nil {
		return 0, 0, 0, problem
	}
	name := unitText(rest)
	amountName, perName, _ := strings.Cut(name, "/")
	u, unit, ok := findAmountUnit(amountName)
	if !ok {
		return 0, 0, 0, t.doseUnitError(amountName, name)
	}
	value = u.canonical(number)
	switch perName {
	case "":
		if strings.HasSuffix(name, "/") {
			return 0, 0, 0, t.doseUnitError(amountName, name)
		}
		per = PerAnimal
	case "animal":
		per = PerAnimal
	case "kg", "kg/dose":
		per = PerKg
	case "m2":
		per = PerSquareMetre
	default:
		time, found := strings.CutPrefix(perName, "kg/")
		span, known := findUnit(timeUnits, time)
		switch {
		case found && known && span.canonical(1) == 24:
			per = PerKgDay
		case found && known && span.canonical(1) <= 1:
			per = PerKgHour
			value = number * u.times * span.by / (u.by * span.times)
		default:
			return 0, 0, 0, t.doseUnitError(amountName, name)
		}
	}
	if problem := t.inBounds(value); problem != nil {
		return 0, 0, 0, problem
	}
	return value, unit, per, nil
}

// doseUnitError tells apart the ways in which the unit of a dose goes wrong
// that need their own advice.
func (t text) doseUnitError(amount, whole string) *QuantityError {
	first, _, more := strings.Cut(whole, " ")
	firstAmount, _, _ := strings.Cut(first, "/")
	_, _, firstKnown := findAmountUnit(firstAmount)
	switch {
	case amount == "U" || amount == "u":
		return t.fail(quoted(t.input)+" has U for units, which is read as a nought when written by hand", `write IU, like "20000 IU/kg"`)
	case strings.HasSuffix(whole, "/lb"):
		return t.fail(quoted(t.input)+" is a dose per pound", "write it per kg (1 mg/lb is 2.2046 mg/kg)")
	case strings.HasPrefix(whole, "mL") || strings.HasPrefix(whole, "ml"):
		return t.fail(quoted(t.input)+" is a volume, not an amount of drug", "write mg/kg: volume times strength")
	case more && firstKnown:
		return t.fail(quoted(t.input)+" says more than a dose", "write the dose alone, like "+strconv.Quote(t.like)+"; interval and route have their own fields")
	}
	if _, known, found := strings.Cut(whole, "/"); found && known != "" {
		if _, _, ok := findAmountUnit(amount); ok {
			return t.fail(quoted("per "+known)+" in "+quoted(t.input)+" is no way of giving a dose that is read here", "write "+dosesAccepted)
		}
	}
	return t.unitError(amount, dosesAccepted, milligramUnits, internationalUnits)
}

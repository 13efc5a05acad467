package reports

import (
	"strings"

	"tayra/dose"
	"tayra/metabolic"
)

// An amount by itself takes the unit that suits its size: 85 mcg, 334 mg,
// 1.5 g. Amounts that are read side by side share one: in "774 mcg to 97.9 mg"
// the eye sees 774 to 98. Where theirs would differ all are in mg.

const (
	massDigits     = 5 // of a mass as weighed
	estimateDigits = 3
)

// amountsIn gives how the ends of some amounts are printed together.
func amountsIn(unit string, pairs ...dose.Pair) func(dose.Pair) string {
	amount, perHour := unitOf(unit)
	format := func(v float64) string { return metabolic.FormatAmount(v, amount) }
	first, mixed := "", false
	for _, p := range pairs {
		for _, v := range p {
			_, u, _ := strings.Cut(format(v), " ")
			if first == "" {
				first = u
			}
			mixed = mixed || u != first
		}
	}
	if mixed {
		const digits = 3
		name := amountName(unit)
		format = func(v float64) string { return metabolic.Significant(v, digits) + " " + name }
	}
	return func(p dose.Pair) string {
		return metabolic.FormatRange(p[0], p[1], func(v float64) string {
			if perHour {
				return format(v) + "/h"
			}
			return format(v)
		})
	}
}

// amountPair says both ends of an amount, or the one amount.
func amountPair(p dose.Pair, unit string) string { return amountsIn(unit, p)(p) }

// amountRange says an interval about an amount.
func amountRange(r dose.DoseRange, unit string) string {
	return amountPair(dose.Pair{r.Low, r.High}, unit)
}

// amountRanges says both intervals about the drafted amount, which stand below
// each other.
func amountRanges(d *dose.Drafted) (even, ninety string) {
	a, b := dose.Pair{d.Range50Amount.Low, d.Range50Amount.High}, dose.Pair{d.Range90Amount.Low, d.Range90Amount.High}
	say := amountsIn(d.Unit, a, b)
	return say(a), say(b)
}

// planAmounts says the amounts of a draft's plans, which stand side by side.
func planAmounts(m *dose.ModelDraft) func(dose.Pair) string {
	var all []dose.Pair
	for i := range m.Plans {
		all = append(all, m.Plans[i].PerAdministration)
	}
	return amountsIn(m.Unit, all...)
}

// temperatureAmounts says the amounts at several body temperatures.
func temperatureAmounts(lines []dose.TemperatureLine, unit string) func(dose.Pair) string {
	var all []dose.Pair
	for i := range lines {
		all = append(all, lines[i].Amount)
	}
	return amountsIn(unit, all...)
}

// massesIn gives how some masses in kg are printed together, in g only where
// all are under 1 kg.
func massesIn(digits int, kg ...float64) func(float64) string {
	inGrams := true
	for _, m := range kg {
		inGrams = inGrams && strings.HasSuffix(metabolic.FormatMass(metabolic.Mass(m)), " g")
	}
	return func(m float64) string {
		if inGrams {
			return metabolic.Significant(metabolic.Mass(m).Grams(), digits) + " g"
		}
		return metabolic.Significant(m, digits) + " kg"
	}
}

// massRange says the two ends of a range of masses in kg.
func massRange(low, high float64) string {
	return metabolic.FormatRange(low, high, massesIn(massDigits, low, high))
}

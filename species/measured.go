package species

import (
	"tayra/metabolic"
	"tayra/species/internal/fold"
)

// Measured is a species' own measured metabolic rate: one chosen row a
// species, at the body mass of the animals that were measured.
type Measured struct {
	Mass           metabolic.Mass
	Rate           metabolic.Power
	Temperature    metabolic.Celsius // of the animals; of an ectotherm that at which the rate holds
	HasTemperature bool
	Kind           string // "BMR" or "SMR"
	Grade          string // "accepted", "listed", "ungraded" or "not basal"
	Flag           string // "", or why the row is not used for other animals: "young", "torpid", "doubtful"
	Source         string // id, see Sources
	Notes          string
}

// MeasuredRate returns the measured row of an animal, if the table has one.
// The row is for that name alone: a domestic form does not borrow its wild
// form's, nor the other way round.
func MeasuredRate(a *Animal) (*Measured, bool) {
	m := a.measured
	if m == nil {
		// An animal that was not made by Find may still be in the table.
		folded, err := fold.Words(a.Name)
		if err != nil {
			return nil, false
		}
		l, ok := line(animalsIndex, fold.Key(folded))
		if !ok {
			return nil, false
		}
		if m = parseAnimal(l).measured; m == nil {
			return nil, false
		}
	}
	own := *m
	return &own, true
}

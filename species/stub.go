package species

import "tayra/metabolic"

// NotFoundError says that no row of the animal table has the name.
type NotFoundError struct {
	Words string
	Near  []string // the nearest names, at most five
}

func (e *NotFoundError) Error() string { return "no animal " + e.Words }

// AmbiguousError says that the words fit several animals.
type AmbiguousError struct {
	Words string
	Names []string // "common name (Scientific name)"
}

func (e *AmbiguousError) Error() string { return e.Words + " is ambiguous" }

// NameError says that the words contain letters that no name has.
type NameError struct{ Words, Problem string }

func (e *NameError) Error() string { return e.Problem }

// UnavailableError says that an animal has no such basis of metabolic rate.
type UnavailableError struct{ Basis, Why string }

func (e *UnavailableError) Error() string { return e.Basis + ": " + e.Why }

func Find(words string) (*Animal, error) { return nil, &NotFoundError{Words: words} }
func All() []*Animal                     { return nil }
func Search(words string) []*Animal      { return nil }
func SameSpecies(a, b *Animal) bool      { return a.SpeciesWords() == b.SpeciesWords() }
func Kinship(a, b *Animal) string        { return "" }

type Measured struct {
	Mass              metabolic.Mass
	Rate              metabolic.Power
	Temperature       metabolic.Celsius
	HasTemperature    bool
	Kind, Grade, Flag string // BMR or SMR; accepted, listed, ungraded, not basal; "", young, torpid, doubtful
	Source, Notes     string
}

func MeasuredRate(a *Animal) (*Measured, bool) { return nil, false }

type Prediction struct {
	Rate   metabolic.Power
	SDln   float64
	Levels []string // "genus Myrmecophaga", ... measured relatives that it leans on
	N      int      // measured species in the nearest level
	ClassN int      // measured species of the class
	Own    bool     // its own row is among them
}

func Relatives(a *Animal, m metabolic.Mass, t metabolic.Celsius) (*Prediction, error) {
	return nil, &UnavailableError{"relatives", "not built yet"}
}

type Scatter struct {
	SDln              float64
	N                 int
	Assumed           bool
	MassLow, MassHigh metabolic.Mass
}

func ScatterOf(basis, id, group string) Scatter { return Scatter{SDln: 0.5, Assumed: true} }

func Sources(id string) (citation string, ok bool) { return "", false }

type Hazard struct {
	ID, Drug, DrugClass, Rank, Taxon, Route string
	Severity                                string // contraindicated, reduced margin, caution
	WhatHappens, Why, Citation, Verified    string
	Condition                               string // completes "Is this patient ...?"; "" for none
	Operator                                bool   // the danger is to the person who handles the drug
	Regulatory                              bool   // the reason is a law on residues
}

// Question returns the condition as a question, or "".
func (h *Hazard) Question() string {
	if h.Condition == "" {
		return ""
	}
	return "Is this patient " + h.Condition + "?"
}

type HazardMatch struct {
	Hazard
	Relation     string // "direct" or "relative"
	RelativeRank string // relative: "family", "order", or "drug class" (same animal, sister drug)
	Via          string // "drug name", "synonym X", "class X", "near spelling"
	Meant        string // near spelling: the drug or class it is near to
}

type Coverage struct {
	Rows                 int
	Drugs, Classes, Taxa []string
}

func Hazards() []Hazard                                                      { return nil }
func MatchHazards(drug, class string, a *Animal, route string) []HazardMatch { return nil }
func HazardCoverage() Coverage                                               { return Coverage{} }

func GutType(a *Animal) string               { return "" }
func RenalPortal(a *Animal) bool             { return false }
func MassNotBody(a *Animal) string           { return "" }
func CommonlyEaten(a *Animal) (bool, string) { return false, "" }
func AmphibianSkin(a *Animal) bool           { return a.Amphibian() }

// AnatomyBasis is the mark that goes beside every statement of the anatomy table.
const AnatomyBasis = "from memory"

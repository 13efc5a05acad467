package species

import "tayra/metabolic"

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

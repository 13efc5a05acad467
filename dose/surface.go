package dose

import (
	"math"

	"tayra/metabolic"
	"tayra/species"
)

// areaConstants are Meeh constants K of body surface, in
//
//	m² = K·g^(2/3)·1e-4
//
// for the only model species in which a dose per m² is read.
var areaConstants = []struct {
	genus, words string // species words
	k            float64
	source       string
	memory       bool
}{
	{"Canis", "Canis lupus", 10.1, "veterinary oncology handbook conversion table, K 10.1", false},
	{"Felis", "Felis catus", 10.0, "veterinary oncology handbook conversion table, K 10.0", true},
	{"Oryctolagus", "Oryctolagus cuniculus", 11.0, "computed tomography of 72 New Zealand White rabbits, PMC6219877", false},
}

// manKm is Km = W/BSA of an adult man in kg/m²: US FDA guidance on the maximum
// safe starting dose, July 2005, table 1. mg/kg = mg/m² / Km.
const manKm = 37

// perKgFromArea is the factor from a dose per m² to a dose per kg at a mass;
// false for an animal without a published constant.
//
//	m²/kg = K·(1000·W)^(2/3)·1e-4 / W
func perKgFromArea(a *species.Animal, w metabolic.Mass) (float64, bool) {
	if a.Human() {
		return 1.0 / manKm, true
	}
	k, _, ok := areaConstant(a)
	if !ok {
		return 0, false
	}
	return k * math.Pow(w.Grams(), 2.0/3) * 1e-4 / float64(w), true
}

func areaConstant(a *species.Animal) (k float64, source string, ok bool) {
	for i := range areaConstants {
		x := &areaConstants[i]
		if a.SpeciesWords() == x.words && (x.genus != "Canis" || a.Name != "Canis lupus") {
			source = x.source
			if x.memory {
				source += " (from memory)"
			}
			return x.k, source, true
		}
	}
	return 0, "", false
}

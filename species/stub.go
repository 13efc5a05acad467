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

func GutType(a *Animal) string               { return "" }
func RenalPortal(a *Animal) bool             { return false }
func MassNotBody(a *Animal) string           { return "" }
func CommonlyEaten(a *Animal) (bool, string) { return false, "" }
func AmphibianSkin(a *Animal) bool           { return a.Amphibian() }

// AnatomyBasis is the mark that goes beside every statement of the anatomy table.
const AnatomyBasis = "from memory"

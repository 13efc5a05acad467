package species

import (
	_ "embed"
	"sync"
)

//go:embed data/anatomy.csv
var anatomyTable string

// AnatomyBasis is the mark that stands beside every statement of the anatomy
// table: none of it was read from a source.
const AnatomyBasis = "from memory"

// Anatomy is one statement about the body of an animal.
type Anatomy struct {
	Value string // "" if the table says nothing
	Why   string
	Taxon string // whose statement it is: "family Bovidae"
}

// The values of GutType.
const (
	GutRuminant = "ruminant"
	GutForegut  = "foregut fermenter"
	GutHindgut  = "hindgut fermenter"
	GutSimple   = "simple"
	GutBird     = "bird" // crop and gizzard
)

// GutType returns the type of gut, on which the oral availability of a drug
// depends: "ruminant", "foregut fermenter", "hindgut fermenter", "simple" or
// "bird"; "" if the class is unknown.
func GutType(a *Animal) string { return Gut(a).Value }

// Gut returns the type of gut and why it is so.
func Gut(a *Animal) Anatomy { return anatomyOf("gut", a) }

// RenalPortal reports whether blood from the hind body may reach the kidneys
// before the heart: birds, reptiles, amphibians.
func RenalPortal(a *Animal) bool { return anatomyOf("renal portal", a).Value == "yes" }

// MassNotBody names what is in the mass and burns next to nothing: "shell",
// "gut fill" or "blubber"; "" for none.
func MassNotBody(a *Animal) string { return anatomyOf("mass not body", a).Value }

// CommonlyEaten reports whether people eat the animal or its products, so
// that residues matter, and how. A false is no statement that nobody does.
func CommonlyEaten(a *Animal) (eaten bool, how string) {
	s := anatomyOf("eaten", a)
	return s.Value == "yes", s.Why
}

// AmphibianSkin reports whether drugs and chemicals pass the animal's skin
// both ways, so that what is put on it is dosed.
func AmphibianSkin(a *Animal) bool { return anatomyOf("permeable skin", a).Value == "yes" }

type anatomyKey struct{ trait, rank, taxon string }

var anatomy = sync.OnceValue(func() map[anatomyKey]Anatomy {
	out := make(map[anatomyKey]Anatomy, 200)
	for r := range records(anatomyTable) {
		out[anatomyKey{r[0], r[1], r[2]}] = Anatomy{Value: r[3], Why: r[4], Taxon: r[1] + " " + r[2]}
	}
	return out
})

// anatomyOf returns the statement of the lowest rank that has one.
func anatomyOf(trait string, a *Animal) Anatomy {
	table := anatomy()
	for _, at := range []anatomyKey{
		{trait, "species", a.SpeciesWords()}, {trait, "genus", a.Genus()}, {trait, "family", a.Family},
		{trait, "order", a.Order}, {trait, "class", a.Class},
	} {
		if s, ok := table[at]; ok {
			return s
		}
	}
	return Anatomy{}
}

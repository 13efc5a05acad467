package species

import (
	_ "embed"
	"strings"
	"sync"
)

//go:embed data/domestic-forms.csv
var domesticFormsTable string

// domesticForms maps "Genus species" to the form under which wild and
// domestic animals of different scientific names are one species. Forms that
// differ by a third word only (dog and wolf, pig and wild boar) need no row.
var domesticForms = sync.OnceValue(func() map[string]string {
	out := make(map[string]string)
	for r := range records(domesticFormsTable) {
		out[r[1]] = r[0]
	}
	return out
})

// SameSpecies reports whether two animals are one species: equal genus and
// species words, or a wild and a domestic form of one (horse and
// Przewalski's horse). Between them nothing is scaled.
func SameSpecies(a, b *Animal) bool {
	if a == nil || b == nil {
		return false
	}
	return sameSpeciesWords(a.SpeciesWords(), b.SpeciesWords())
}

func sameSpeciesWords(a, b string) bool {
	if strings.EqualFold(a, b) {
		return a != ""
	}
	form, ok := domesticForms()[a]
	return ok && form == domesticForms()[b]
}

// Kinship returns the nearest rank that two animals share: "species",
// "genus", "family", "order", "class", or "" for none of them.
func Kinship(a, b *Animal) string {
	switch {
	case a == nil || b == nil:
		return ""
	case SameSpecies(a, b):
		return "species"
	case a.Genus() != "" && a.Genus() == b.Genus():
		return "genus"
	case a.Family != "" && a.Family == b.Family:
		return "family"
	case a.Order != "" && a.Order == b.Order:
		return "order"
	case a.Class != "" && a.Class == b.Class:
		return "class"
	}
	return ""
}

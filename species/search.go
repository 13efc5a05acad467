package species

import (
	_ "embed"
	"slices"
	"sort"
	"strings"
	"sync"

	"tayra/species/internal/fold"
)

//go:embed data/taxon-names.csv
var taxonNamesTable string

var whole = sync.OnceValue(func() []*Animal {
	out := make([]*Animal, 0, 2400)
	for l := range lines(animalsIndex) {
		out = append(out, parseAnimal(l))
	}
	sort.SliceStable(out, func(i, j int) bool { return out[i].Name < out[j].Name })
	return out
})

// All returns the whole table by scientific name. The slice is the caller's
// own, the animals are shared: they are not to be changed.
func All() []*Animal { return append([]*Animal(nil), whole()...) }

// Search returns the animals that have every one of the words, whole or as
// the beginning of a word, in their names (scientific, common, former) or in
// their class, group, order or family, English names of these included
// ("bats"); a plural s does not matter. An exact name comes first, then names
// that end with the words ("Asian elephant"), that have them whole, that have
// them as beginnings of words ("zebrata"), and last those that have them in a
// taxon only; each by scientific name. Words that no name could have find
// nothing; no words find the whole table.
func Search(words string) []*Animal {
	folded, err := fold.Words(words)
	if err != nil {
		return nil
	}
	parts := strings.Fields(folded)
	if len(parts) == 0 {
		return All()
	}
	key := fold.Key(folded)
	others, taxa := otherNames(), taxonNames()
	const (
		exact = iota
		atEnd
		wholeInName
		inName
		inTaxon
		no
	)
	var found [no][]*Animal
	for _, a := range whole() {
		names := append(append([]string{a.Name}, a.CommonNames...), others[a.Name]...)
		rank := no
		var all []string
		for _, n := range names {
			w, err := fold.Words(n)
			if err != nil {
				continue
			}
			all = append(all, w)
			switch {
			case fold.Key(w) == key:
				rank = exact
			case rank > atEnd && (strings.HasSuffix(w, " "+folded) || strings.HasSuffix(w, " "+strings.TrimSuffix(folded, "s"))):
				rank = atEnd
			case rank > wholeInName && hasWhole(w, parts):
				rank = wholeInName
			case rank > inName && hasAll(w, parts):
				rank = inName
			}
		}
		if rank == no {
			for _, t := range []string{a.Class, a.Group, a.Order, a.Family} {
				w, err := fold.Words(t)
				if err == nil {
					all = append(all, w, taxa[t])
				}
			}
			if hasAll(strings.Join(all, " "), parts) {
				rank = inTaxon
			}
		}
		if rank < no {
			found[rank] = append(found[rank], a)
		}
	}
	return slices.Concat(found[:]...)
}

// hasWhole reports whether every part is a word of the folded text, or the
// plural of one.
func hasWhole(text string, parts []string) bool {
	text = " " + text + " "
	for _, p := range parts {
		if !strings.Contains(text, " "+p+" ") && !strings.Contains(text, " "+strings.TrimSuffix(p, "s")+" ") {
			return false
		}
	}
	return true
}

// hasAll reports whether every part begins a word of the folded text, or is
// the plural of one.
func hasAll(text string, parts []string) bool {
	text = " " + text + " "
	for _, p := range parts {
		singular := strings.TrimSuffix(p, "s")
		if !strings.Contains(text, " "+p) && !(singular != p && len(singular) > 2 && strings.Contains(text, " "+singular+" ")) {
			return false
		}
	}
	return true
}

// otherNames maps a scientific name to the names that only the name index has.
var otherNames = sync.OnceValue(func() map[string][]string {
	out := make(map[string][]string)
	for l := range lines(namesIndex) {
		n := parseName(l)
		for _, s := range n.scientific {
			out[s] = append(out[s], n.written)
		}
	}
	return out
})

// taxonNames maps a class, order or family to its folded English names.
var taxonNames = sync.OnceValue(func() map[string]string {
	out := make(map[string]string)
	for r := range records(taxonNamesTable) {
		if w, err := fold.Words(r[2]); err == nil {
			out[r[1]] = w
		}
	}
	return out
})

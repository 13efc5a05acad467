package species

import (
	"fmt"
	"sort"
	"strconv"
	"strings"

	"tayra/metabolic"
	"tayra/species/internal/fold"
)

// Find returns the animal of a scientific or common name. Case, spaces,
// hyphens, apostrophes and diacritics do not matter; "giant anteater
// (Myrmecophaga tridactyla)" is read as well. A subspecies or breed that has
// no row is read as its species and a former scientific name as its present
// one: the animal then says so in MatchedAs.
//
// Nothing is guessed: a name that fits several animals is an
// *AmbiguousError, one that fits none a *NotFoundError with the nearest
// names, and one with control characters or letters of another script a
// *NameError.
//
// The animal is the caller's own.
func Find(words string) (*Animal, error) {
	folded, a, err := find(words)
	if a != nil || err != nil {
		return a, err
	}
	for _, open := range []string{" sp", " spp"} {
		folded = strings.TrimSuffix(folded, open) // "Ursus sp." asks which bear
	}
	if several := loosely(folded); len(several) > 1 {
		return nil, &AmbiguousError{Words: words, Names: several}
	}
	return nil, &NotFoundError{Words: words, Near: near(folded)}
}

// Known is [Find] for a name that may well be none: it does not look for the
// nearest names, which takes a thousand times as long. ok is false where Find
// gives an error.
func Known(words string) (a *Animal, ok bool) {
	_, a, err := find(words)
	return a, a != nil && err == nil
}

// find looks for exactly what the words say; both results nil is "no such name".
func find(words string) (folded string, a *Animal, err error) {
	folded, err = fold.Words(words)
	if err != nil {
		return "", nil, &NameError{Words: words, Problem: err.Error()}
	}
	if folded == "" {
		return "", nil, &NameError{Words: words, Problem: "no name of an animal"}
	}
	if a, err = named(words, folded); a == nil && err == nil {
		a, err = bracketed(words)
	}
	if a == nil && err == nil {
		a, err = subspecies(folded)
	}
	return folded, a, err
}

// named looks the whole name up; both results nil is "no such name".
func named(words, folded string) (*Animal, error) {
	key := fold.Key(folded)
	if l, ok := line(animalsIndex, key); ok {
		return parseAnimal(l), nil
	}
	l, ok := line(namesIndex, key)
	if !ok {
		return nil, nil
	}
	n := parseName(l)
	if len(n.scientific) > 1 {
		var several []string
		for _, s := range n.scientific {
			several = append(several, label(scientific(s)))
		}
		return nil, &AmbiguousError{Words: words, Names: several}
	}
	a := scientific(n.scientific[0])
	switch {
	case n.former:
		a.MatchedAs = fmt.Sprintf("%s stands in the table under %s", n.written, a.Name)
	case n.form:
		a.MatchedAs = fmt.Sprintf("%s has no row of its own and is read as %s", n.written, label(a))
	}
	return a, nil
}

// bracketed reads "name (other name)": both must be of one animal.
func bracketed(words string) (*Animal, error) {
	before, rest, ok := strings.Cut(words, "(")
	inside, after, closed := strings.Cut(rest, ")")
	if !ok || !closed {
		return nil, nil
	}
	var found *Animal
	for _, part := range []string{before + " " + after, inside} {
		folded, err := fold.Words(part)
		if err != nil || folded == "" {
			return nil, nil
		}
		a, err := named(part, folded)
		if err != nil {
			continue // ambiguous alone; the other half decides
		}
		if a == nil {
			return nil, nil
		}
		if found != nil && found.Name != a.Name {
			return nil, &AmbiguousError{Words: words, Names: []string{label(found), label(a)}}
		}
		found = a
	}
	return found, nil
}

// subspecies reads "Genus species subspecies" as "Genus species". Open
// nomenclature ("cf.", "aff.", "sp.", a hybrid sign) names no subspecies.
func subspecies(folded string) (*Animal, error) {
	parts := strings.Fields(folded)
	if len(parts) < 3 {
		return nil, nil
	}
	for _, p := range parts {
		switch p {
		case "cf", "aff", "sp", "spp", "x", "hybrid":
			return nil, nil
		}
	}
	species := parts[0] + parts[1]
	var a *Animal
	if l, ok := line(animalsIndex, species); ok {
		a = parseAnimal(l)
	} else if l, ok := line(namesIndex, species); ok {
		if n := parseName(l); n.former && len(n.scientific) == 1 {
			a = scientific(n.scientific[0])
		}
	}
	// Common names of two words ("giant anteater") are no genus and species.
	if a == nil {
		return nil, nil
	}
	written := strings.ToUpper(parts[0][:1]) + strings.Join(parts, " ")[1:]
	a.MatchedAs = fmt.Sprintf("%s has no row of its own and is read as its species, %s", written, a.Name)
	return a, nil
}

// loosely lists the animals whose genus, family or order the words are, or
// whose common name ends with them ("tortoise").
func loosely(folded string) []string {
	var out []string
	for l := range lines(animalsIndex) {
		c := strings.SplitN(l, "\t", 8)
		genus, _, _ := strings.Cut(c[1], " ")
		if equalFoldASCII(genus, folded) || equalFoldASCII(c[5], folded) || equalFoldASCII(c[6], folded) || endsWith(c[2], folded) {
			out = append(out, label(parseAnimal(l)))
		}
	}
	sort.Strings(out)
	return out
}

func equalFoldASCII(s, lower string) bool { return len(s) == len(lower) && strings.EqualFold(s, lower) }

// endsWith reports whether one of the common names ends with the words.
func endsWith(commonNames, folded string) bool {
	for _, n := range strings.Split(commonNames, ";") {
		if w, err := fold.Words(n); err == nil && strings.HasSuffix(w, " "+folded) {
			return true
		}
	}
	return false
}

// label is how lists name an animal, in words that Find takes.
func label(a *Animal) string {
	if common := a.CommonName(); common != "" {
		return common + " (" + a.Name + ")"
	}
	return a.Name
}

// scientific returns the animal of a scientific name that is known to be in
// the table.
func scientific(name string) *Animal {
	folded, _ := fold.Words(name)
	l, _ := line(animalsIndex, fold.Key(folded))
	return parseAnimal(l)
}

type nameLine struct {
	written    string
	former     bool
	form       bool // a subspecies or breed
	scientific []string
}

func parseName(l string) nameLine {
	c := strings.Split(l, "\t")
	return nameLine{written: c[1], former: c[2] == "former", form: c[2] == "form", scientific: strings.Split(c[3], ";")}
}

func parseAnimal(l string) *Animal {
	var c [21]string
	for i := range c {
		c[i], l, _ = strings.Cut(l, "\t")
	}
	a := &Animal{
		Name: c[1], Class: c[3], Group: c[4], Order: c[5], Family: c[6],
		AdultLow: metabolic.Mass(number(c[7])), AdultHigh: metabolic.Mass(number(c[8])), AdultBasis: c[9],
		HasTemperature: c[10] != "", BodyTemperature: metabolic.Celsius(number(c[10])), TemperatureBasis: c[11],
		Notes: c[12],
	}
	if c[2] != "" {
		a.CommonNames = strings.Split(c[2], "; ")
	}
	if c[13] != "" {
		a.measured = &Measured{
			Mass: metabolic.Mass(number(c[13])), Rate: metabolic.Power(number(c[14])),
			HasTemperature: c[15] != "", Temperature: metabolic.Celsius(number(c[15])),
			Kind: c[16], Grade: c[17], Flag: c[18], Source: c[19], Notes: c[20],
		}
	}
	return a
}

// number reads a cell of a generated index; an empty one is 0.
func number(s string) float64 {
	x, _ := strconv.ParseFloat(s, 64)
	return x
}

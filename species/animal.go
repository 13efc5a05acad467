package species

import (
	"strings"

	"tayra/metabolic"
)

// Animal is a row of the animal table: one species (or one domestic form with
// a trinomial of its own), where it stands among animals, and how heavy and
// how warm its adults are.
//
// The table is the union of the adult-mass table (601 animals) and of the
// measured metabolic rates (2,094 animals): 2,323 in all.
type Animal struct {
	Name        string   // scientific name, such as "Myrmecophaga tridactyla"
	CommonNames []string // first is the one to print; may be empty
	Class       string   // such as "Mammalia"
	Group       string   // metabolic group, such as "placental mammal"
	Order       string
	Family      string

	// AdultLow and AdultHigh are the usual range of an adult's body mass;
	// 0 is unknown (an animal that only the measured rates list), and then a
	// mass cannot be judged.
	AdultLow, AdultHigh metabolic.Mass
	AdultBasis          string // source id, "memory" where it was not read from a source; "" if unknown

	// BodyTemperature is the usual temperature of the body: of an ectotherm
	// the preferred one, which is not the temperature of the animal at hand.
	BodyTemperature  metabolic.Celsius
	HasTemperature   bool
	TemperatureBasis string // source id, "memory" where it was not read from a source

	Notes string

	// MatchedAs is set by Find when the words were not a name of this row: it
	// says in words what they were taken for (a subspecies that has no row,
	// a former name). It is to be printed.
	MatchedAs string

	measured *Measured // nil if unmeasured, or not made by Find
}

// Genus returns the first word of the scientific name.
func (a *Animal) Genus() string {
	genus, _, _ := strings.Cut(a.Name, " ")
	return genus
}

// SpeciesWords returns the first two words of the scientific name: the
// species to which a domestic form or subspecies belongs.
func (a *Animal) SpeciesWords() string {
	first := strings.IndexByte(a.Name, ' ')
	if first < 0 {
		return a.Name
	}
	if second := strings.IndexByte(a.Name[first+1:], ' '); second >= 0 {
		return a.Name[:first+1+second]
	}
	return a.Name
}

// CommonName returns the first common name, or "" if the table has none.
func (a *Animal) CommonName() string {
	if len(a.CommonNames) == 0 {
		return ""
	}
	return a.CommonNames[0]
}

// Mammal reports whether the animal is of the class Mammalia.
func (a *Animal) Mammal() bool { return a.Class == "Mammalia" }

// Bird reports whether the animal is of the class Aves.
func (a *Animal) Bird() bool { return a.Class == "Aves" }

// Reptile reports whether the animal is of the class Reptilia.
func (a *Animal) Reptile() bool { return a.Class == "Reptilia" }

// Amphibian reports whether the animal is of the class Amphibia.
func (a *Animal) Amphibian() bool { return a.Class == "Amphibia" }

// Endotherm reports whether the animal makes its own body heat: mammals and birds.
func (a *Animal) Endotherm() bool { return a.Mammal() || a.Bird() }

// Ratite reports whether the animal is of the orders of the ostrich, the
// rheas, and the emu and cassowaries: the birds whose drug clearances the
// published record shows to lie farthest from those of other birds.
func (a *Animal) Ratite() bool {
	switch a.Order {
	case "Struthioniformes", "Rheiformes", "Casuariiformes":
		return true
	}
	return false
}

// Human reports whether the animal is man, who is often the outlier.
func (a *Animal) Human() bool { return a.SpeciesWords() == "Homo sapiens" }

package species

import (
	_ "embed"
	"slices"
	"strings"
	"sync"

	"tayra/species/internal/fold"
)

//go:embed data/drug-class-traits.csv
var drugClassTraitsTable string

// Trait is what a class of drugs is, beside its place in the hazard table.
type Trait string

// Traits of the classes; general pharmacology, from memory.
const (
	// EffectDriven: what such a drug does differs between species because
	// receptors do, and not because clearance does.
	EffectDriven Trait = "effect-driven"
	// Immobiliser: a scratch can kill the person who handles it.
	Immobiliser Trait = "immobiliser"
	// Antibacterial: by mouth it also kills what ferments food in a gut.
	Antibacterial Trait = "antibacterial"
	// Controlled: the law of many countries controls most drugs of the class.
	Controlled Trait = "controlled"
)

// DrugTrait is a trait of a drug and how it came to be found.
type DrugTrait struct {
	Trait Trait
	Word  string // what such a drug is called, "" where nothing is to be said
	Class string
	Via   string // as HazardMatch.Via
	Meant string // as HazardMatch.Meant
}

// DrugReading is what the lists of names make of a drug and its class. It only
// ever adds something to be looked at; it never decides what a drug is.
type DrugReading struct {
	Drugs   []string    // the drugs that the name is read as, under their names in the lists; near spellings left out
	Classes []string    // the classes, of the drugs and as given; near spellings left out
	Traits  []DrugTrait // one a trait and word, the surest
	// Unread are the parts of the name (halves of a combination, words in
	// brackets) that neither the lists nor a stem explain, in plain letters. A
	// brand name is one.
	Unread []string
	Near   []string // names that an unread part is near to
	// LongActing is the word of the name that says that the form is a depot
	// ("LA", "benzathine"), or "".
	LongActing string
}

// Named reports whether anything of the name itself was read.
func (r *DrugReading) Named() bool { return len(r.Drugs) > 0 }

// Known reports whether the drug or a class of it was read, near spellings
// left out: else no hazard could be looked up.
func (r *DrugReading) Known() bool { return len(r.Drugs) > 0 || len(r.Classes) > 0 }

// Has returns the surest trait of the kind.
func (r *DrugReading) Has(t Trait) (DrugTrait, bool) {
	for _, d := range r.Traits {
		if d.Trait == t {
			return d, true
		}
	}
	return DrugTrait{}, false
}

// ReadDrug reads a drug's name and class as [MatchHazards] does: by name, by
// synonym and spelling of other pharmacopoeias, without its salt, in each half
// of a combination, by the stem of an international nonproprietary name, and
// within two slips or by ear. The result is shared: it is not to be changed.
func ReadDrug(drug, class string) *DrugReading { return remember(drug, class).reading }

func newReading(drug string, read []reading, unread []string) *DrugReading {
	out := &DrugReading{Unread: unread, LongActing: longActing(drug)}
	put := func(list *[]string, s string) {
		if s != "" && !slices.Contains(*list, s) {
			*list = append(*list, s)
		}
	}
	read = slices.Clone(read)
	slices.SortStableFunc(read, func(x, y reading) int { return int(x.how) - int(y.how) })
	for _, r := range read {
		switch {
		case r.how == bySpelling:
			put(&out.Near, r.meant)
		case r.asClass && r.drug != "": // a word that is both, such as penicillin
		default:
			put(&out.Drugs, r.drug)
			put(&out.Classes, r.class)
		}
		for _, t := range traitsOfClass()[r.class] {
			if !slices.ContainsFunc(out.Traits, func(o DrugTrait) bool { return o.Trait == t.Trait && o.Word == t.Word }) {
				t.Via, t.Meant = r.via, r.meant
				out.Traits = append(out.Traits, t)
			}
		}
	}
	return out
}

// longActingWords are words in the name of a depot or slow form: of how it
// releases the drug, and salts and esters made to dissolve slowly. From memory.
var longActingWords = setOf(`la depot longacting slowrelease sustainedrelease extendedrelease prolongedrelease controlledrelease modifiedrelease
	sr er xr xl cr mr implant implants microspheres benzathine decanoate enanthate enantate undecylenate undecanoate cypionate cipionate caproate
	ccfa crystallinefreeacid repository`)

// longActing finds such a word.
func longActing(drug string) string {
	tokens := fold.Tokens(drug)
	for i := range tokens {
		for n := 1; n <= 3 && i+n <= len(tokens); n++ {
			if longActingWords[strings.Join(tokens[i:i+n], "")] && !slices.Contains(tokens[i:i+n], fold.Boundary) {
				return strings.Join(tokens[i:i+n], " ")
			}
		}
	}
	return ""
}

var traitsOfClass = sync.OnceValue(func() map[string][]DrugTrait {
	out := make(map[string][]DrugTrait)
	for c := range records(drugClassTraitsTable) {
		class := strings.Clone(c[0])
		out[class] = append(out[class], DrugTrait{Trait: Trait(c[1]), Word: c[2], Class: class})
	}
	return out
})

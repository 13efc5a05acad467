package species

import (
	_ "embed"
	"slices"
	"strings"
	"sync"

	"tayra/species/internal/fold"
)

//go:embed data/hazards.csv
var hazardsTable string

// Hazard is one known harm that no scaling by metabolic rate would have
// foreseen: a drug or class, the animals, the route, and what happened.
type Hazard struct {
	ID          string // such as "h033"
	Drug        string // "" for the whole class
	DrugClass   string
	AlsoDrugs   []string // others that the row's own text names
	AlsoClasses []string
	Rank        string // "species", "genus", "family", "order", "class", or "any"
	Taxon       string // "any" for every animal
	Route       string // "any", "oral", "parenteral", "intravenous", "topical", "inhaled", "rectal"
	Severity    string // "contraindicated", "reduced margin", "caution"

	WhatHappens string
	Why         string // why scaling misses it
	Citation    string
	Verified    string // how the citation was read; "memory" where it was not

	// Condition narrows the row to some of its animals (a breed, a stage, a
	// food animal) and completes "Is this patient ...?"; "" for none.
	Condition     string
	ConditionKind string // "breed", "state", "food animal", "other drug", ""
	// Operator says that the danger is to whoever handles the drug.
	Operator bool
	// Regulatory says that the reason is a law on residues, not the animal.
	Regulatory bool

	class, order, family string // where the taxon stands
	speciesWords         string // the first two words of the taxon
	operatorToo          bool   // an animal's hazard of which the handler is warned as well
}

// Question returns the condition as a question to the veterinarian, or "".
func (h *Hazard) Question() string {
	if h.Condition == "" {
		return ""
	}
	return "Is this patient " + h.Condition + "?"
}

// hazardBook is the table with its lookups.
type hazardBook struct {
	rows    []Hazard
	byDrug  map[string][]int    // canonical drug: rows about it
	byClass map[string][]int    // class: rows about the whole class
	ofClass map[string][]sister // class: rows about one drug of it
}

// sister is a row that speaks of a drug, to which another of its class leads.
type sister struct {
	row  int
	drug string
}

var hazards = sync.OnceValue(readHazards)

func readHazards() *hazardBook {
	b := &hazardBook{byDrug: make(map[string][]int), byClass: make(map[string][]int), ofClass: make(map[string][]sister)}
	for c := range records(hazardsTable) {
		h := Hazard{
			ID: c[0], Drug: c[1], DrugClass: c[2], AlsoDrugs: cell(c[3]), AlsoClasses: cell(c[4]),
			Rank: c[5], Taxon: c[6], class: c[7], order: c[8], family: c[9],
			Route: c[10], Severity: c[11], WhatHappens: c[12], Why: c[13],
			Condition: c[14], ConditionKind: c[15], Operator: c[16] == "only", operatorToo: c[16] == "also", Regulatory: c[17] == "yes",
			Citation: c[18], Verified: c[19],
		}
		h.speciesWords = (&Animal{Name: h.Taxon}).SpeciesWords()
		i := len(b.rows)
		b.rows = append(b.rows, h)
		if h.Drug == "" {
			b.byClass[h.DrugClass] = append(b.byClass[h.DrugClass], i)
		} else {
			drug := canonicalDrug(h.Drug)
			b.byDrug[drug] = append(b.byDrug[drug], i)
			b.ofClass[h.DrugClass] = append(b.ofClass[h.DrugClass], sister{i, h.Drug})
		}
		for _, d := range h.AlsoDrugs {
			d = canonicalDrug(d)
			b.byDrug[d] = append(b.byDrug[d], i)
			for _, class := range classesOf(d) {
				if class != h.DrugClass && !slices.Contains(h.AlsoClasses, class) {
					b.ofClass[class] = append(b.ofClass[class], sister{i, d})
				}
			}
		}
		for _, class := range h.AlsoClasses {
			b.byClass[class] = append(b.byClass[class], i)
		}
	}
	return b
}

// cell splits a cell that holds several values.
func cell(s string) []string {
	if s == "" {
		return nil
	}
	return strings.Split(s, "; ")
}

// canonicalDrug is the name under which drugs.index files a drug.
func canonicalDrug(name string) string {
	words, err := fold.Words(name)
	if err != nil {
		return name
	}
	if l, ok := line(drugsIndex, fold.Key(words)); ok {
		return parseDrug(l).drugs[0]
	}
	return name
}

// classesOf are the classes of a drug of the lists.
func classesOf(drug string) []string {
	words, err := fold.Words(drug)
	if err != nil {
		return nil
	}
	if l, ok := line(drugsIndex, fold.Key(words)); ok {
		return parseDrug(l).classes
	}
	return nil
}

// Hazards returns the whole table. The slice is the caller's own.
func Hazards() []Hazard { return slices.Clone(hazards().rows) }

// Coverage says what the hazard table covers: everything else it is silent
// about, and that silence says nothing.
type Coverage struct {
	Rows     int
	Drugs    []string // drugs that rows name
	Classes  []string // classes that rows are about as a whole
	Taxa     []string // "genus Gyps", ...
	Severity map[string]int
	Memory   int // rows whose citation was not read
}

// HazardCoverage sums the hazard table up.
func HazardCoverage() Coverage {
	c := Coverage{Severity: make(map[string]int)}
	for _, h := range hazards().rows {
		c.Rows++
		c.Severity[h.Severity]++
		if h.Verified == "memory" {
			c.Memory++
		}
		if h.Drug == "" {
			c.Classes = append(c.Classes, h.DrugClass)
		} else {
			c.Drugs = append(c.Drugs, h.Drug)
		}
		c.Drugs = append(c.Drugs, h.AlsoDrugs...)
		c.Classes = append(c.Classes, h.AlsoClasses...)
		if h.Rank == "any" {
			c.Taxa = append(c.Taxa, "any animal")
		} else {
			c.Taxa = append(c.Taxa, h.Rank+" "+h.Taxon)
		}
	}
	for _, s := range []*[]string{&c.Drugs, &c.Classes, &c.Taxa} {
		slices.Sort(*s)
		*s = slices.Compact(*s)
	}
	return c
}

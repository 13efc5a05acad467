package species

import (
	"cmp"
	"slices"
	"strings"
	"sync"
)

// HazardMatch is a hazard that concerns a patient and a drug, and how it
// came to be found.
type HazardMatch struct {
	Hazard
	// Relation is "direct" (the row's drug or class, and the row's animals)
	// or "relative" (one step aside, see RelativeRank). Operator rows are
	// direct for every patient and carry Operator.
	Relation string
	// RelativeRank of a relative match: "family" or "order" (the row's drug,
	// known in another animal of that), "drug class" (the row's animals, known
	// for another drug of the class, and nothing in the table about this one),
	// or "food animal" (a law on residues: it concerns any animal that is eaten).
	RelativeRank string
	Sister       string // of a match by drug class: the drug that the row speaks of
	// Via is "drug name", "synonym X", "X, which yields Y" (X is turned into Y,
	// or is a form of it), "class X", "class X, by the ending -y" (or "by the
	// beginning y-"), or "near spelling": then the name is not known and may be
	// meant for Meant, and the match is a question.
	Via   string
	Meant string
}

// MatchHazards returns the hazards that concern a drug in an animal, worst
// first: contraindicated, reduced margin, caution; direct before relative;
// then by id.
//
// The drug is matched by name, by synonym and spelling of other
// pharmacopoeias, without its salt, in each half of a combination; its class
// by the class given and by the class that the drug is known to have,
// whatever was given. An unknown name within two slips of one that the table
// is about, or that sounds like it, matches as "near spelling".
//
// A row concerns the animal at its own rank (species, wild and domestic forms
// being one, genus, family, order, class, or any). A row about a species,
// genus or family concerns others of the family and order as "relative"; so do
// rows about another drug of the class in the animal itself. Rows about a
// breed's gene concern nobody's relatives; rows of law on residues concern every
// animal, since any may be eaten: the caller knows whether this one is. Operator
// rows concern every patient. A relative's condition is not asked of the
// patient. A route that is missing or not understood rules nothing out.
//
// No match says nothing: see HazardCoverage.
func MatchHazards(drug, class string, a *Animal, route string) []HazardMatch {
	found := remember(drug, class).rows
	if len(found) == 0 {
		return nil
	}
	if a == nil {
		a = &Animal{}
	}
	var out []HazardMatch
	given := ReadRoute(route)
	rows := hazards().rows
	for _, c := range found {
		h := &rows[c.row]
		if !given.admits(h.Route) {
			continue
		}
		// Most rows concern another animal: they are told from the rest before
		// anything is copied.
		relation, rank := relationOf(h, a)
		if relation == "" && !h.operatorToo || c.sister != "" && (relation != "direct" || h.Regulatory || h.Operator) {
			continue
		}
		m := HazardMatch{Hazard: *h, Relation: relation, RelativeRank: rank, Via: c.via, Meant: c.meant}
		switch {
		case c.sister != "":
			m.Relation, m.RelativeRank, m.Sister = "relative", "drug class", c.sister
		case h.operatorToo && m.Relation != "direct":
			m.Relation, m.RelativeRank, m.Operator = "direct", "", true
		case m.Relation == "relative" && !h.Regulatory:
			m.Condition, m.ConditionKind = "", "" // a relative is no adult turkey
		}
		out = append(out, m)
	}
	out = dropSisters(out)
	slices.SortStableFunc(out, compareMatches)
	return out
}

// HazardsOf returns the rows of the hazard table that concern an animal,
// whatever the drug, in the order of [MatchHazards]: its own as "direct", those
// of its relatives as "relative". Rows about the person who handles the drug and
// rows of law in other animals are left out, since they concern every animal.
func HazardsOf(a *Animal) []HazardMatch {
	var out []HazardMatch
	for i := range hazards().rows {
		h := &hazards().rows[i]
		m := HazardMatch{Hazard: *h}
		m.Relation, m.RelativeRank = relationOf(h, a)
		if m.Relation == "" || h.Operator || m.RelativeRank == "food animal" {
			continue
		}
		if m.Relation == "relative" {
			m.Condition, m.ConditionKind = "", ""
		}
		out = append(out, m)
	}
	slices.SortStableFunc(out, compareMatches)
	return out
}

// compareMatches puts the worst first, the animal's own before its relatives'.
func compareMatches(x, y HazardMatch) int {
	return cmp.Or(severityRank(x.Severity)-severityRank(y.Severity),
		strings.Compare(x.Relation, y.Relation), // "direct" before "relative"
		strings.Compare(x.ID, y.ID))
}

// dropSisters lets off what is known of other drugs of a class where the table
// speaks of the drug itself in the animal itself.
func dropSisters(matches []HazardMatch) []HazardMatch {
	return slices.DeleteFunc(matches, func(m HazardMatch) bool {
		return m.RelativeRank == "drug class" && slices.ContainsFunc(matches, func(own HazardMatch) bool {
			return own.Relation == "direct" && own.Drug != "" && own.DrugClass == m.DrugClass && own.Meant == "" && !own.Operator
		})
	})
}

func severityRank(s string) int {
	switch s {
	case "contraindicated":
		return 0
	case "reduced margin":
		return 1
	}
	return 2
}

// relationOf says how a row's animals are related to an animal: "direct",
// "relative" with the rank they share, or "".
func relationOf(h *Hazard, a *Animal) (relation, rank string) {
	if h.Operator {
		return "direct", ""
	}
	direct := false
	switch h.Rank {
	case "any":
		direct = true
	case "species":
		direct = sameSpeciesWords(a.SpeciesWords(), h.speciesWords)
	case "genus":
		direct = a.Genus() == h.Taxon
	case "family":
		direct = a.Family == h.Taxon
	case "order":
		direct = a.Order == h.Taxon
	case "class":
		direct = a.Class == h.Taxon
	}
	switch {
	case direct:
		return "direct", ""
	case h.Regulatory:
		return "relative", "food animal"
	case h.ConditionKind == "breed":
		return "", ""
	case h.Rank != "species" && h.Rank != "genus" && h.Rank != "family":
		return "", ""
	case h.family != "" && a.Family == h.family:
		return "relative", "family"
	case h.order != "" && a.Order == h.order:
		return "relative", "order"
	}
	return "", ""
}

// candidate is a row that a drug's name or class leads to.
type candidate struct {
	row    int
	how    certainty
	via    string
	meant  string
	sister string // the row is about this other drug of the class
}

// What a drug and class lead to is kept: a batch asks for the same few drugs
// again and again.
var remembered struct {
	sync.RWMutex
	found map[[2]string]*drugFound
}

// drugFound is what a drug and its class lead to.
type drugFound struct {
	rows    []candidate
	reading *DrugReading
}

const (
	rememberAtMost  = 512 // drug names; then all are forgotten
	rememberLongest = 256 // bytes of a name and class
)

func remember(drug, class string) *drugFound {
	key := [2]string{drug, class}
	remembered.RLock()
	found, ok := remembered.found[key]
	remembered.RUnlock()
	if ok {
		return found
	}
	read, unread := readDrug(drug, class)
	found = &drugFound{findCandidates(read), newReading(drug, read, unread)}
	if len(drug)+len(class) <= rememberLongest {
		remembered.Lock()
		if remembered.found == nil || len(remembered.found) >= rememberAtMost {
			remembered.found = make(map[[2]string]*drugFound)
		}
		remembered.found[[2]string{strings.Clone(drug), strings.Clone(class)}] = found
		remembered.Unlock()
	}
	return found
}

func findCandidates(read []reading) []candidate {
	if len(read) == 0 {
		return nil
	}
	b := hazards()
	best := make(map[int]candidate)
	put := func(row int, r reading, sister string) {
		old, ok := best[row]
		if ok && (old.sister == "" && sister != "" || (old.sister == "") == (sister == "") && old.how <= r.how) {
			return
		}
		best[row] = candidate{row, r.how, r.via, r.meant, sister}
	}
	for _, r := range read {
		rows := b.byDrug[r.drug]
		if r.drug == "" {
			rows = b.byClass[r.class]
		}
		for _, row := range rows {
			put(row, r, "")
		}
	}
	for _, r := range read {
		// What is known of other drugs of a class is told for a class that is
		// misspelt, but not for that of a drug which may have been meant.
		if r.class != "" && (r.how != bySpelling || r.misspelt) {
			for _, s := range b.ofClass[r.class] {
				put(s.row, r, s.drug)
			}
		}
	}
	out := make([]candidate, 0, len(best))
	for _, c := range best {
		out = append(out, c)
	}
	slices.SortFunc(out, func(x, y candidate) int { return x.row - y.row })
	return out
}

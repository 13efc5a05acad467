package species

import (
	"slices"
	"testing"
)

func TestAnatomy(t *testing.T) {
	for _, tt := range []struct {
		words, gut, notBody string
		portal, eaten, skin bool
	}{
		{"cattle", "ruminant", "gut fill", false, true, false},
		{"giraffe", "ruminant", "gut fill", false, false, false},
		{"red deer", "ruminant", "gut fill", false, true, false},
		{"dromedary", "foregut fermenter", "gut fill", false, true, false},
		{"hippopotamus", "foregut fermenter", "gut fill", false, false, false},
		{"red kangaroo", "foregut fermenter", "gut fill", false, true, false},
		{"Hoffmann's two-toed sloth", "foregut fermenter", "gut fill", false, false, false},
		{"guereza", "foregut fermenter", "gut fill", false, false, false},
		{"horse", "hindgut fermenter", "", false, true, false},
		{"rabbit", "hindgut fermenter", "", false, true, false},
		{"guinea pig", "hindgut fermenter", "", false, true, false},
		{"koala", "hindgut fermenter", "", false, false, false},
		{"Asian elephant", "hindgut fermenter", "", false, false, false},
		{"West Indian manatee", "hindgut fermenter", "blubber", false, false, false},
		{"dog", "simple", "", false, false, false},
		{"pig", "simple", "", false, true, false},
		{"wild boar", "simple", "", false, true, false},
		{"giant anteater", "simple", "", false, false, false},
		{"harbor seal", "simple", "blubber", false, false, false},
		{"walrus", "simple", "blubber", false, false, false},
		{"beluga", "simple", "blubber", false, false, false},
		{"chicken", "bird", "", true, true, false},
		{"red junglefowl", "bird", "", true, true, false},
		{"ostrich", "hindgut fermenter", "", true, true, false},
		{"Opisthocomus hoazin", "foregut fermenter", "gut fill", true, false, false},
		{"red-tailed hawk", "bird", "", true, false, false},
		{"Hermann's tortoise", "hindgut fermenter", "shell", true, false, false},
		{"painted turtle", "simple", "shell", true, false, false},
		{"green iguana", "hindgut fermenter", "", true, true, false},
		{"corn snake", "simple", "", true, false, false},
		{"axolotl", "simple", "", true, false, true},
		{"American bullfrog", "simple", "", true, true, true},
	} {
		a := found(t, tt.words)
		eaten, how := CommonlyEaten(a)
		if GutType(a) != tt.gut || MassNotBody(a) != tt.notBody || RenalPortal(a) != tt.portal || eaten != tt.eaten || AmphibianSkin(a) != tt.skin {
			t.Errorf("%s: gut %q, not body %q, portal %v, eaten %v, skin %v", tt.words, GutType(a), MassNotBody(a), RenalPortal(a), eaten, AmphibianSkin(a))
		}
		if eaten != (how != "") || Gut(a).Why == "" || Gut(a).Taxon == "" {
			t.Errorf("%s: eaten how %q, gut %+v", tt.words, how, Gut(a))
		}
	}
	if g := Gut(&Animal{Name: "Opsanus tau", Class: "Actinopterygii"}); g != (Anatomy{}) {
		t.Errorf("the table speaks of fish: %+v", g)
	}
}

// Every statement is about animals of the table, has a known trait, and is
// marked as what it is.
func TestAnatomyTable(t *testing.T) {
	traits := map[string][]string{
		"gut":            {GutRuminant, GutForegut, GutHindgut, GutSimple, GutBird},
		"renal portal":   {"yes"},
		"mass not body":  {"shell", "gut fill", "blubber"},
		"permeable skin": {"yes"},
		"eaten":          {"yes"},
	}
	known := make(map[string]bool)
	for _, a := range All() {
		for rank, taxon := range map[string]string{"species": a.SpeciesWords(), "genus": a.Genus(), "family": a.Family, "order": a.Order, "class": a.Class} {
			known[rank+" "+taxon] = true
		}
		if GutType(a) == "" {
			t.Errorf("%s has no gut type", a.Name)
		}
	}
	seen := make(map[string]bool)
	for _, r := range table(t, "anatomy.csv") {
		at := r["rank"] + " " + r["taxon"]
		if !known[at] {
			t.Errorf("%s: no animal of %s", r["trait"], at)
		}
		if seen[r["trait"]+at] {
			t.Errorf("%s of %s is there twice", r["trait"], at)
		}
		seen[r["trait"]+at] = true
		if !slices.Contains(traits[r["trait"]], r["value"]) || r["why"] == "" || r["basis"] != "memory" {
			t.Errorf("%v", r)
		}
	}
	for _, r := range table(t, "taxon-names.csv") {
		if !known[r["rank"]+" "+r["taxon"]] {
			t.Errorf("taxon-names.csv: no animal of %s %s", r["rank"], r["taxon"])
		}
	}
}

package dose

import (
	"testing"

	"tayra/species"
)

// What looking up hazards and the drug's name adds to a draft: BenchmarkDraft
// beside the same without them. A drug that is in the lists and hits rows costs
// most, since its texts are written too; those of a drug that hits none show
// the matching alone.
func BenchmarkDraftHazards(b *testing.B) {
	none := &species.DrugReading{Classes: []string{"any"}} // so that no caution says that it is unknown
	for _, k := range []struct{ name, drug, class string }{
		{"none", "examplicillin", "penicillin"}, {"class", "samplavermectin", "avermectin"}, {"row", "levamisole", "imidazothiazole"},
	} {
		in := benchCase(b).Input
		in.Drug.Name, in.Drug.Class = E(k.drug), E(k.class)
		c, err := in.Check()
		if err != nil {
			b.Fatal(err)
		}
		draft := func(b *testing.B) {
			for b.Loop() {
				if _, err := Draft(c); err != nil {
					b.Fatal(err)
				}
			}
		}
		b.Run(k.name+"/with", draft)
		b.Run(k.name+"/without", func(b *testing.B) {
			match, read := matchHazards, readDrug
			defer func() { matchHazards, readDrug = match, read }()
			matchHazards = func(string, string, *species.Animal, string) []species.HazardMatch { return nil }
			readDrug = func(string, string) *species.DrugReading { return none }
			draft(b)
		})
	}
}

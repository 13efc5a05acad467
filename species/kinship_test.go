package species

import (
	"testing"

	"pgregory.net/rapid"
)

func TestSameSpecies(t *testing.T) {
	for _, tt := range []struct {
		a, b string
		want bool
	}{
		{"dog", "wolf", true}, {"horse", "Przewalski's horse", true}, {"ferret", "European polecat", true}, {"cat", "European wildcat", true},
		{"pig", "wild boar", true}, {"chicken", "red junglefowl", true}, {"domestic duck", "mallard", true}, {"domestic goose", "greylag goose", true},
		{"llama", "guanaco", true}, {"pigeon", "rock dove", true}, {"rabbit", "European rabbit", true}, {"dog", "dog", true},
		{"dog", "coyote", false}, {"llama", "alpaca", false}, {"horse", "donkey", false}, {"Muscovy duck", "mallard", false},
		{"cat", "sand cat", false}, {"ferret", "black-footed ferret", false}, {"sheep", "bighorn sheep", false}, {"cattle", "yak", false},
		{"cat", "horse", false}, {"chicken", "turkey", false},
	} {
		a, b := found(t, tt.a), found(t, tt.b)
		if SameSpecies(a, b) != tt.want || SameSpecies(b, a) != tt.want {
			t.Errorf("SameSpecies(%s, %s) = %v, want %v", tt.a, tt.b, !tt.want, tt.want)
		}
	}
	if SameSpecies(nil, nil) || SameSpecies(&Animal{}, &Animal{}) || SameSpecies(found(t, "dog"), nil) {
		t.Error("no animal is of no species")
	}
	// Every listed form is in the table, and each form has two sides or more.
	forms := make(map[string]int)
	for _, r := range table(t, "domestic-forms.csv") {
		found(t, r["scientific_name"])
		forms[r["form"]]++
	}
	for form, n := range forms {
		if n < 2 {
			t.Errorf("%s stands alone", form)
		}
	}
}

func TestKinship(t *testing.T) {
	for _, tt := range []struct{ a, b, want string }{
		{"dog", "wolf", "species"}, {"ferret", "European polecat", "species"}, {"dog", "coyote", "genus"}, {"dog", "red fox", "family"},
		{"giant anteater", "southern tamandua", "family"}, {"giant anteater", "Hoffmann's two-toed sloth", "order"}, {"dog", "cat", "order"},
		{"giant anteater", "dog", "class"}, {"dog", "chicken", ""}, {"corn snake", "bearded dragon", "order"},
	} {
		a, b := found(t, tt.a), found(t, tt.b)
		if got := Kinship(a, b); got != tt.want || Kinship(b, a) != got {
			t.Errorf("Kinship(%s, %s) = %q, want %q", tt.a, tt.b, got, tt.want)
		}
	}
	if got := Kinship(&Animal{Name: "A b"}, &Animal{Name: "C d"}); got != "" {
		t.Errorf("animals without ranks share %q", got)
	}
	if got := Kinship(nil, found(t, "dog")); got != "" {
		t.Errorf("no animal and a dog share %q", got)
	}
}

// Kinship is symmetric, and an animal is of its own species.
func TestKinshipLaws(t *testing.T) {
	all := All()
	rapid.Check(t, func(t *rapid.T) {
		a, b := rapid.SampledFrom(all).Draw(t, "a"), rapid.SampledFrom(all).Draw(t, "b")
		if Kinship(a, b) != Kinship(b, a) || Kinship(a, a) != "species" || (Kinship(a, b) == "species") != SameSpecies(a, b) {
			t.Errorf("%s, %s: %q, %q", a.Name, b.Name, Kinship(a, b), Kinship(b, a))
		}
		if k := Kinship(a, b); (k == "") != (a.Class != b.Class) {
			t.Errorf("%s, %s: %q", a.Name, b.Name, k)
		}
	})
}

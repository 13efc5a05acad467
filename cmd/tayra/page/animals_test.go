package page

import (
	"net/http"
	"strings"
	"testing"

	"tayra/species"
)

func TestAnimalsAreFoundWhileTheyAreTyped(t *testing.T) {
	for _, tt := range []struct {
		typed  string
		animal string // begins so; "" for none yet
		first  string // of the list
		about  string
	}{
		{"giant ant", "", "giant anteater", "Myrmecophaga tridactyla, Pilosa, Myrmecophagidae"},
		{"Giant Anteater", "giant anteater, Myrmecophaga tridactyla; placental mammal; order Pilosa, family Myrmecophagidae; adults weigh 18 to 60 kg", "giant anteater", "Pilosa"},
		{"Myrmecophaga tridactyla", "giant anteater, Myrmecophaga tridactyla", "giant anteater", "Pilosa"},
		{"ball python", "ball python, Python regius; squamate", "ball python", "Squamata"},
		{"Pilosa", "", "", "Pilosa"},
		{"bats", "", "", "Chiroptera"},
		{"xyzzy", "", "", ""},
		{"", "", "", ""},
	} {
		t.Run(tt.typed, func(t *testing.T) {
			got := decode[found](t, post(t, "/animals", tt.typed), http.StatusOK)
			if !strings.HasPrefix(got.Animal, tt.animal) || tt.animal == "" && got.Animal != "" {
				t.Errorf("found %q", got.Animal)
			}
			if len(got.List) > mostChoices || tt.about == "" && tt.typed != "" && len(got.List) > 0 {
				t.Errorf("%d offered", len(got.List))
			}
			if tt.about == "" {
				return
			}
			if len(got.List) == 0 || tt.first != "" && got.List[0].Name != tt.first || !strings.Contains(got.List[0].About, tt.about) {
				t.Errorf("offered %v", got.List)
			}
		})
	}
	if got := decode[found](t, post(t, "/animals", "ball python"), http.StatusOK); !strings.Contains(got.Animal, "its body temperature is needed") {
		t.Error(got.Animal)
	}
	if got := decode[found](t, post(t, "/animals", "Chiroptera"), http.StatusOK); got.More == 0 || got.More+len(got.List) != len(species.Search("Chiroptera")) {
		t.Errorf("%d more", got.More)
	}
}

// What is offered can be taken: the case file finds just that animal by it.
func TestOffersAreNamesOfTheirAnimal(t *testing.T) {
	for _, a := range species.All() {
		name := nameToType(a)
		got, err := species.Find(name)
		if err != nil || got.Name != a.Name {
			t.Errorf("%s is offered as %q: %v", a.Name, name, err)
		}
	}
}

func BenchmarkAnimals(b *testing.B) {
	h := Handler(testHost)
	for b.Loop() {
		h.ServeHTTP(discard{}, request("POST", "/animals", "application/json", []byte(`"giant ant"`)))
	}
}

// discard is an answer that nobody reads.
type discard struct{}

func (discard) Header() http.Header         { return http.Header{} }
func (discard) Write(b []byte) (int, error) { return len(b), nil }
func (discard) WriteHeader(int)             {}

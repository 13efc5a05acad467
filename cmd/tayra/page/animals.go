package page

import (
	"encoding/json"
	"net/http"
	"strings"

	"tayra/metabolic"
	"tayra/species"
)

// found is what the page shows below an animal's name while it is typed.
type found struct {
	Animal string   `json:"animal"` // the one animal of this name, in words; "" for none
	List   []choice `json:"list"`
	More   int      `json:"more"` // animals beyond the list
}

// choice is one animal to choose; Name is what is then typed.
type choice struct {
	Name  string `json:"name"`
	About string `json:"about"`
}

// mostChoices is how many animals are offered at once.
const mostChoices = 8

// animals finds what is being typed.
func (s *server) animals(w http.ResponseWriter, r *http.Request) {
	var words string
	if err := json.NewDecoder(r.Body).Decode(&words); err != nil {
		refuse(w, http.StatusBadRequest, "the words cannot be read: "+err.Error())
		return
	}
	out := found{List: []choice{}}
	all := species.Search(words)
	if len(all) < 2 || isName(words, all[0]) {
		if a, err := species.Find(words); err == nil {
			out.Animal = describe(a)
		}
	}
	for i, a := range all {
		if i == mostChoices {
			out.More = len(all) - mostChoices
			break
		}
		out.List = append(out.List, choice{nameToType(a), a.Name + ", " + a.Order + ", " + a.Family})
	}
	reply(w, http.StatusOK, out)
}

// isName says whether the words are already one of an animal's names. Looking up
// words that are not takes twenty times as long, and every letter typed would
// pay for it.
func isName(words string, a *species.Animal) bool {
	for _, name := range append(a.CommonNames[:len(a.CommonNames):len(a.CommonNames)], a.Name) {
		if strings.EqualFold(strings.TrimSpace(words), name) {
			return true
		}
	}
	return false
}

// nameToType is a name by which the case file finds just this animal.
func nameToType(a *species.Animal) string {
	if c := a.CommonName(); c != "" {
		if same, err := species.Find(c); err == nil && same.Name == a.Name {
			return c
		}
	}
	return a.Name
}

// describe says which animal was found: its names, where it stands among
// animals, how heavy its adults are.
func describe(a *species.Animal) string {
	s := a.Name
	if c := a.CommonName(); c != "" {
		s = c + ", " + s
	}
	s += "; " + a.Group + "; order " + a.Order + ", family " + a.Family
	if a.AdultHigh > 0 {
		s += "; adults weigh " + metabolic.FormatRange(float64(a.AdultLow), float64(a.AdultHigh), massOf)
	}
	if !a.Endotherm() {
		s += "; its body temperature is needed"
	}
	if a.MatchedAs != "" {
		s += "; " + a.MatchedAs
	}
	return s
}

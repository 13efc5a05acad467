package species

import (
	"encoding/csv"
	"errors"
	"os"
	"slices"
	"strings"
	"testing"
	"unicode"

	"pgregory.net/rapid"

	"tayra/metabolic"
)

// table reads a table of the data directory by encoding/csv, past the index.
func table(t testing.TB, name string) []map[string]string {
	t.Helper()
	f, err := os.Open("data/" + name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	records, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var out []map[string]string
	for _, r := range records[1:] {
		row := make(map[string]string)
		for i, c := range records[0] {
			row[c] = r[i]
		}
		out = append(out, row)
	}
	return out
}

func found(t testing.TB, words string) *Animal {
	t.Helper()
	a, err := Find(words)
	if err != nil {
		t.Fatal(err)
	}
	return a
}

func TestFind(t *testing.T) {
	tests := []struct{ words, want string }{
		{"giant anteater", "Myrmecophaga tridactyla"},
		{"Myrmecophaga tridactyla", "Myrmecophaga tridactyla"},
		{"  MYRMECOPHAGA   TRIDACTYLA ", "Myrmecophaga tridactyla"},
		{"giant anteater (Myrmecophaga tridactyla)", "Myrmecophaga tridactyla"},
		{"dog", "Canis lupus familiaris"},
		{"wolf", "Canis lupus"},
		{"cat", "Felis catus"},
		{"Przewalski's horse", "Equus przewalskii"},
		{"przewalskis horse", "Equus przewalskii"},
		{"Przewalski’s Horse", "Equus przewalskii"},
		{"red tailed hawk", "Buteo jamaicensis"},
		{"Red-Tailed Hawk", "Buteo jamaicensis"},
		{"helmeted guinea fowl", "Numida meleagris"},
		{"budgie", "Melopsittacus undulatus"},
		{"Hermann's tortoise", "Testudo hermanni"},
		{"Testudo hermanni", "Testudo hermanni"},
		{"corn snake", "Pantherophis guttatus"},
		{"axolotl", "Ambystoma mexicanum"},
		{"boa constrictor", "Boa constrictor"},
		{"tayassu", ""},
		{"common marmoset", "Callithrix jacchus"},
		{"Linné's two-toed sloth", "Choloepus didactylus"},
		{"sugar glider", "Petaurus breviceps"},
		{"Abrothrix andina", "Abrothrix andina"}, // measured only
		{"black vulture (Aegypius monachus)", "Aegypius monachus"},
		{"rabbit", "Oryctolagus cuniculus"},
		{"domestic chicken", "Gallus gallus domesticus"},
		{"domestic dog", "Canis lupus familiaris"},
		{"domestic turkey", "Meleagris gallopavo"},
		{"African bush elephant", "Loxodonta africana"},
		{"feral pigeon", "Columba livia"},
		{"sulcata", "Centrochelys sulcata"},
	}
	for _, tt := range tests {
		a, err := Find(tt.words)
		if tt.want == "" {
			if err == nil {
				t.Errorf("Find(%q) = %s, want an error", tt.words, a.Name)
			}
			continue
		}
		if err != nil || a.Name != tt.want || a.MatchedAs != "" {
			t.Errorf("Find(%q) = %v, %v; want %s", tt.words, a, err, tt.want)
		}
	}
}

// The giant anteater, field by field, against species-figures as compiled.
func TestFindReadsTheRow(t *testing.T) {
	a := found(t, "giant anteater")
	if a.Class != "Mammalia" || a.Group != "placental mammal" || a.Order != "Pilosa" || a.Family != "Myrmecophagidae" ||
		a.AdultLow != 18 || a.AdultHigh != 60 || a.AdultBasis != "memory" ||
		!a.HasTemperature || a.BodyTemperature != 32.5 || a.TemperatureBasis != "WhitSeym2003" ||
		a.CommonName() != "giant anteater" || a.Genus() != "Myrmecophaga" || a.SpeciesWords() != a.Name {
		t.Errorf("%+v", a)
	}
	m := found(t, "Abrothrix andina")
	if m.AdultLow != 0 || m.AdultHigh != 0 || m.AdultBasis != "" || m.CommonName() != "" || m.BodyTemperature != 37.7 || m.TemperatureBasis != "GenoIsle2018" {
		t.Errorf("%+v", m)
	}
}

func TestFindMatchedAs(t *testing.T) {
	for _, tt := range []struct{ words, want, says string }{
		{"Canis lupus arctos", "Canis lupus", "Canis lupus arctos has no row of its own and is read as its species, Canis lupus"},
		{"canis LUPUS ssp. baileyi", "Canis lupus", "read as its species"},
		{"Trachemys scripta elegans", "Trachemys scripta", "read as its species"},
		{"Felis concolor", "Puma concolor", "Felis concolor stands in the table under Puma concolor"},
		{"Felis concolor coryi", "Puma concolor", "Felis concolor coryi has no row"},
		{"Mustela putorius furo", "Mustela furo", "stands in the table under Mustela furo"},
		{"Sus scrofa domestica", "Sus scrofa domesticus", "stands in the table under"},
		{"Geochelone sulcata", "Centrochelys sulcata", "stands in the table under"},
		{"Bos indicus", "Bos taurus", "stands in the table under"},
		{"greyhound", "Canis lupus familiaris", "greyhound has no row of its own and is read as dog (Canis lupus familiaris)"},
		{"Amur tiger", "Panthera tigris", "read as tiger (Panthera tigris)"},
		{"southern white rhinoceros", "Ceratotherium simum", "read as white rhinoceros"},
	} {
		a, err := Find(tt.words)
		if err != nil || a.Name != tt.want || !strings.Contains(a.MatchedAs, tt.says) {
			t.Errorf("Find(%q) = %v, %v; want %s, %q", tt.words, a, err, tt.want, tt.says)
		}
	}
	// A second look-up does not carry the first one's note.
	if a := found(t, "Canis lupus"); a.MatchedAs != "" {
		t.Errorf("MatchedAs %q is left over", a.MatchedAs)
	}
	// Open nomenclature names no subspecies.
	for _, words := range []string{"Canis lupus cf. arctos", "Canis lupus x latrans"} {
		if a, err := Find(words); err == nil {
			t.Errorf("Find(%q) = %s", words, a.Name)
		}
	}
}

func TestFindAmbiguous(t *testing.T) {
	for words, names := range map[string][]string{
		"elk":           {"wapiti (Cervus canadensis)", "moose (Alces alces)"},
		"black vulture": {"black vulture (Coragyps atratus)", "cinereous vulture (Aegypius monachus)"},
		"Testudo":       {"Hermann's tortoise (Testudo hermanni)", "Greek tortoise (Testudo graeca)"},
		"panda":         {"giant panda (Ailuropoda melanoleuca)", "red panda (Ailurus fulgens)"},
		"tortoise":      {"Hermann's tortoise (Testudo hermanni)"},
		"Ursus sp.":     {"polar bear (Ursus maritimus)"},
		"duck":          {"mallard (Anas platyrhynchos)"},
	} {
		_, err := Find(words)
		var ambiguous *AmbiguousError
		if !errors.As(err, &ambiguous) || ambiguous.Words != words {
			t.Errorf("Find(%q): %v", words, err)
			continue
		}
		for _, n := range names {
			if !slices.Contains(ambiguous.Names, n) {
				t.Errorf("Find(%q) does not list %s but %q", words, n, ambiguous.Names)
			}
		}
		for _, n := range ambiguous.Names {
			if _, err := Find(n); err != nil {
				t.Errorf("Find(%q) lists %q, and %v", words, n, err)
			}
		}
	}
}

func TestFindMisspelt(t *testing.T) {
	for words, want := range map[string]string{
		"giant antaeter":             "giant anteater",
		"giant anteter":              "giant anteater",
		"anteater":                   "giant anteater",
		"Myrmecophaga tridactila":    "Myrmecophaga tridactyla",
		"cheeta":                     "cheetah",
		"axolotel":                   "axolotl",
		"budgerigr":                  "budgerigar",
		"Testudo hermani":            "Testudo hermanni",
		"rabit":                      "rabbit",
		"dogg":                       "dog",
		"ferrett":                    "ferret",
		"Pantherophis gutatus":       "Pantherophis guttatus",
		"iguanna":                    "iguana",
		"green iguanna":              "green iguana",
		"meercat":                    "meerkat",
		"koalla":                     "koala",
		"capibara":                   "capybara",
		"chinchila":                  "chinchilla",
		"cockateil":                  "cockatiel",
		"peregrin falcon":            "peregrine falcon",
		"bearded dragoon":            "bearded dragon",
		"Agapornis rosecollis":       "Agapornis roseicollis",
		"southern tamanduas":         "southern tamandua",
		"burmese pyton":              "Burmese python",
		"black baer":                 "American black bear",
		"blak bear":                  "American black bear",
		"elefant":                    "African elephant",
		"african elefant":            "African elephant",
		"whit rhinocerus":            "white rhinoceros",
		"girafe":                     "giraffe",
		"grayhound":                  "greyhound",
		"polar baer":                 "polar bear",
		"kitten":                     "cat", // the stage is another entry
		"Panthera tigriss altaicaaa": "",    // too far from anything
	} {
		_, err := Find(words)
		var missing *NotFoundError
		if !errors.As(err, &missing) {
			t.Errorf("Find(%q): %v", words, err)
			continue
		}
		if len(missing.Near) > 5 {
			t.Errorf("Find(%q) lists %d names", words, len(missing.Near))
		}
		if want != "" && (len(missing.Near) == 0 || missing.Near[0] != want) {
			t.Errorf("Find(%q): nearest %q, want %s first", words, missing.Near, want)
		}
		if want != "" && !strings.Contains(err.Error(), want) {
			t.Errorf("Find(%q): the message does not name %s: %v", words, want, err)
		}
	}
}

func TestFindRefuses(t *testing.T) {
	for words, says := range map[string]string{
		"C\u0430nis lupus":         `"C\u0430nis lupus": the name contains U+0430, a letter of another script`,
		"giant \u202eretaetna":     `U+202E`,
		"dog\x1b[2J":               `U+001B`,
		"d\u200bog":                `U+200B`,
		"собака":                   `another script`,
		"":                         `no name of an animal`,
		" - ":                      `no name of an animal`,
		"dog\xff":                  `not valid UTF-8`,
		strings.Repeat("dog ", 99): `bytes`,
	} {
		a, err := Find(words)
		var name *NameError
		if !errors.As(err, &name) || !strings.Contains(err.Error(), says) {
			t.Errorf("Find(%+q) = %v, %v; want %q", words, a, err, says)
			continue
		}
		printable(t, err.Error())
	}
}

// printable fails on anything that could act on a terminal or hide in it.
func printable(t interface{ Errorf(string, ...any) }, s string) {
	for _, r := range s {
		if !unicode.IsPrint(r) || unicode.Is(unicode.Bidi_Control, r) {
			t.Errorf("%+q holds %U", s, r)
		}
	}
}

// Whole words before beginnings of words: the elephants before what is only
// called after them.
func TestSearchOrder(t *testing.T) {
	for words, order := range map[string][]string{
		"elephant": {"Elephas maximus", "Loxodonta africana", "Macroscelides proboscideus"},
		"zebra":    {"Equus grevyi", "Equus quagga", "Taeniopygia guttata", "Corucia zebrata"},
		"bear":     {"Ursus maritimus", "Gypaetus barbatus", "Pogona vitticeps"},
	} {
		at := -1
		found := Search(words)
		for _, name := range order {
			next := slices.IndexFunc(found, func(a *Animal) bool { return a.Name == name })
			if next <= at {
				t.Errorf("Search(%q): %s stands at %d, not after %d", words, name, next, at)
			}
			at = next
		}
	}
}

// Every name of the source tables finds its row, or an ambiguity that lists it.
func TestFindEveryName(t *testing.T) {
	check := func(words, name string) {
		a, err := Find(words)
		var ambiguous *AmbiguousError
		switch {
		case errors.As(err, &ambiguous):
			if !slices.ContainsFunc(ambiguous.Names, func(n string) bool { return n == name || strings.HasSuffix(n, "("+name+")") }) {
				t.Errorf("Find(%q) lists %q without %s", words, ambiguous.Names, name)
			}
		case err != nil || a.Name != name:
			t.Errorf("Find(%q) = %v, %v; want %s", words, a, err, name)
		}
	}
	for _, r := range table(t, "animals.csv") {
		check(r["scientific_name"], r["scientific_name"])
		for _, n := range strings.Split(r["common_names"], "; ") {
			check(n, r["scientific_name"])
		}
	}
	for _, r := range table(t, "measured-rates.csv") {
		check(r["scientific_name"], r["scientific_name"])
	}
	for _, r := range table(t, "names.csv") {
		check(r["name"], r["scientific_name"])
	}
}

func TestAll(t *testing.T) {
	all := All()
	adults, measured := table(t, "animals.csv"), table(t, "measured-rates.csv")
	if len(all) != 2323 || len(adults) != 601 || len(measured) != 2094 {
		t.Fatalf("%d animals from %d and %d rows, want 2323 from 601 and 2094", len(all), len(adults), len(measured))
	}
	byName := make(map[string]*Animal)
	for i, a := range all {
		if i > 0 && all[i-1].Name >= a.Name {
			t.Errorf("%s is not before %s", all[i-1].Name, a.Name)
		}
		byName[a.Name] = a
		if !slices.Contains(metabolic.Groups, a.Group) || a.Class == "" || a.Order == "" || a.Family == "" {
			t.Errorf("%s: class %q, group %q, order %q, family %q", a.Name, a.Class, a.Group, a.Order, a.Family)
		}
		if n := btoi(a.Mammal()) + btoi(a.Bird()) + btoi(a.Reptile()) + btoi(a.Amphibian()); n != 1 {
			t.Errorf("%s is of %d classes", a.Name, n)
		}
		if a.AdultLow < 0 || a.AdultLow > a.AdultHigh || (a.AdultHigh > 0) != (a.AdultBasis != "") {
			t.Errorf("%s: adult mass %v to %v, basis %q", a.Name, a.AdultLow, a.AdultHigh, a.AdultBasis)
		}
		if a.HasTemperature != (a.TemperatureBasis != "") || a.HasTemperature && (a.BodyTemperature < 5 || a.BodyTemperature > 45) {
			t.Errorf("%s: body temperature %v, basis %q", a.Name, a.BodyTemperature, a.TemperatureBasis)
		}
		for _, id := range []string{a.AdultBasis, a.TemperatureBasis} {
			if _, ok := Sources(id); id != "" && !ok {
				t.Errorf("%s: no source %q", a.Name, id)
			}
		}
	}
	for _, r := range adults {
		a := byName[r["scientific_name"]]
		if a == nil || strings.Join(a.CommonNames, "; ") != r["common_names"] || float64(a.AdultHigh) != number(r["adult_mass_high_kg"]) ||
			a.Class != r["class"] || a.Order != r["order"] || a.Family != r["family"] || a.Group != r["group"] {
			t.Errorf("%v: %v", r, a)
		}
	}
	// The slice is the caller's own.
	all[0] = nil
	if All()[0] == nil {
		t.Error("All hands out its own slice")
	}
}

func btoi(b bool) int {
	if b {
		return 1
	}
	return 0
}

func TestGroupsOfAnimals(t *testing.T) {
	for words, want := range map[string]string{
		"ostrich": "bird ratite", "emu": "bird ratite", "greater rhea": "bird ratite", "southern cassowary": "bird ratite",
		"North Island brown kiwi": "bird", "chicken": "bird", "human": "mammal human", "dog": "mammal", "corn snake": "reptile", "axolotl": "amphibian",
	} {
		a := found(t, words)
		var got []string
		for _, is := range []struct {
			name string
			is   bool
		}{{"mammal", a.Mammal()}, {"bird", a.Bird()}, {"reptile", a.Reptile()}, {"amphibian", a.Amphibian()}, {"ratite", a.Ratite()}, {"human", a.Human()}} {
			if is.is {
				got = append(got, is.name)
			}
		}
		if strings.Join(got, " ") != want || a.Endotherm() != (a.Mammal() || a.Bird()) {
			t.Errorf("%s is %q, want %s", words, got, want)
		}
	}
}

func TestSearch(t *testing.T) {
	names := func(as []*Animal) (out []string) {
		for _, a := range as {
			out = append(out, a.Name)
		}
		return out
	}
	for _, tt := range []struct {
		words string
		first string
		least int
		all   func(*Animal) bool
	}{
		{"Felidae", "Acinonyx jubatus", 18, func(a *Animal) bool { return a.Family == "Felidae" }},
		{"bats", "Carollia perspicillata", 100, func(a *Animal) bool {
			return a.Order == "Chiroptera" || strings.Contains(strings.Join(a.CommonNames, " "), "bat")
		}},
		{"giant anteater", "Myrmecophaga tridactyla", 1, nil},
		{"dog", "Canis lupus familiaris", 3, nil},
		{"Mammalia Pilosa", "Bradypus variegatus", 5, func(a *Animal) bool { return a.Order == "Pilosa" }},
		{"Felis concolor", "Puma concolor", 1, nil},
		{"anteat", "Myrmecophaga tridactyla", 1, nil},
		{"elephant", "Elephas maximus", 2, nil},
		{"elephants", "Elephas maximus", 2, nil},
		{"zebra", "Equus grevyi", 4, nil},
		{"bear", "Helarctos malayanus", 8, nil},
		{"black bear", "Ursus americanus", 2, nil},
		{"marsupial", "", 80, func(a *Animal) bool { return a.Group == "marsupial" || strings.Contains(a.Name, "marsupial") }},
	} {
		got := Search(tt.words)
		if len(got) < tt.least || tt.first != "" && got[0].Name != tt.first {
			t.Errorf("Search(%q): %d, %q", tt.words, len(got), names(got)[:min(3, len(got))])
		}
		for _, a := range got {
			if tt.all != nil && !tt.all(a) {
				t.Errorf("Search(%q) found %s", tt.words, a.Name)
			}
		}
	}
	if n := len(Search("  ")); n != 2323 {
		t.Errorf("no words find %d", n)
	}
	for _, words := range []string{"zzzz", "\u202e", "C\u0430nis"} {
		if got := Search(words); len(got) != 0 {
			t.Errorf("Search(%+q) found %q", words, names(got))
		}
	}
}

func TestSources(t *testing.T) {
	for id, part := range map[string]string{
		"GenoIsle2018": "Biological Reviews 93:404-438", "WhitSeym2003": "PNAS", "memory": "not read from a source",
	} {
		c, ok := Sources(id)
		if part == "PNAS" {
			part = "Proceedings of the National Academy of Sciences 100:4046"
		}
		if !ok || !strings.Contains(c, part) {
			t.Errorf("Sources(%q) = %q, %v", id, c, ok)
		}
	}
	if c, ok := Sources("Nobody1900"); ok {
		t.Errorf("Sources(Nobody1900) = %q", c)
	}
}

// However a name is cased, spaced and hyphenated, it finds one animal.
func TestFindIgnoresSpelling(t *testing.T) {
	all := All()
	rapid.Check(t, func(t *rapid.T) {
		a := rapid.SampledFrom(all).Draw(t, "animal")
		name := rapid.SampledFrom(append([]string{a.Name}, a.CommonNames...)).Draw(t, "name")
		want, wantErr := Find(name)
		var b strings.Builder
		for _, r := range name {
			switch {
			case r == '\'' && rapid.Bool().Draw(t, "drop"):
			case r == ' ' || r == '-':
				b.WriteString(rapid.SampledFrom([]string{" ", "-", "  ", "\t", "\u00a0", ""}).Draw(t, "gap"))
			case rapid.Bool().Draw(t, "upper"):
				b.WriteRune(unicode.ToUpper(r))
			default:
				b.WriteRune(r)
			}
		}
		got, err := Find(b.String())
		if (err == nil) != (wantErr == nil) || err == nil && got.Name != want.Name {
			t.Errorf("Find(%q) = %v, %v; Find(%q) = %v, %v", b.String(), got, err, name, want, wantErr)
		}
	})
}

func TestEditDistance(t *testing.T) {
	for _, tt := range []struct {
		a, b string
		want int
	}{
		{"", "", 0}, {"a", "", 1}, {"kitten", "sitting", 3}, {"ab", "ba", 1}, {"abcd", "acbd", 1}, {"ca", "abc", 3},
		{"ivermectin", "ivremectin", 1}, {"dog", "dog", 0}, {"flaw", "lawn", 2},
	} {
		if got := editDistance(tt.a, tt.b, 10); got != tt.want {
			t.Errorf("editDistance(%q, %q) = %d, want %d", tt.a, tt.b, got, tt.want)
		}
	}
	word := rapid.StringMatching(`[abc]{0,9}`)
	rapid.Check(t, func(t *rapid.T) {
		a, b := word.Draw(t, "a"), word.Draw(t, "b")
		limit := rapid.IntRange(0, 9).Draw(t, "limit")
		full := plainDistance(a, b)
		if got := editDistance(a, b, limit); got != min(full, limit+1) || editDistance(b, a, limit) != got {
			t.Errorf("editDistance(%q, %q, %d) = %d, want %d", a, b, limit, got, min(full, limit+1))
		}
	})
}

// plainDistance is the same distance without limit or saving of room.
func plainDistance(a, b string) int {
	d := make([][]int, len(a)+1)
	for i := range d {
		d[i] = make([]int, len(b)+1)
		for j := range d[i] {
			switch {
			case i == 0:
				d[i][j] = j
			case j == 0:
				d[i][j] = i
			default:
				cost := 1
				if a[i-1] == b[j-1] {
					cost = 0
				}
				d[i][j] = min(d[i-1][j]+1, d[i][j-1]+1, d[i-1][j-1]+cost)
				if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
					d[i][j] = min(d[i][j], d[i-2][j-2]+1)
				}
			}
		}
	}
	return d[len(a)][len(b)]
}

func FuzzFind(f *testing.F) {
	for _, s := range []string{"dog", "giant anteater (Myrmecophaga tridactyla)", "Canis lupus arctos", "tortoise", "C\u0430nis", "x\x00", "()", "a ( b"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, words string) {
		a, err := Find(words)
		if (a == nil) == (err == nil) {
			t.Fatalf("Find(%q) = %v, %v", words, a, err)
		}
		if err != nil {
			printable(t, err.Error())
			var missing *NotFoundError
			if errors.As(err, &missing) {
				for _, n := range missing.Near {
					var ambiguous *AmbiguousError
					if _, err := Find(n); err != nil && !errors.As(err, &ambiguous) {
						t.Errorf("Find(%q) offers %q, and %v", words, n, err)
					}
				}
			}
			return
		}
		if again, err := Find(a.Name); err != nil || again.Name != a.Name {
			t.Errorf("Find(%q) = %s, which finds %v, %v", words, a.Name, again, err)
		}
	})
}

func BenchmarkFind(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		if _, err := Find("giant anteater"); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkFindMisspelt(b *testing.B) {
	for b.Loop() {
		if _, err := Find("giant antaeter"); err == nil {
			b.Fatal("found")
		}
	}
}

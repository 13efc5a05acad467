package dose

import (
	"bytes"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"reflect"
	"regexp"
	"slices"
	"strings"
	"testing"
	"unicode"

	"pgregory.net/rapid"
)

// smallCase is a case with nothing in it but what every case has.
const smallCase = `case: LW-0500
date: 2026-11-30
patient:
  name: Marisol
  species: giant anteater
  mass: 41 kg
drug:
  name: examplicillin
  elimination: renal
models:
  - species: dog
    mass: 18 kg
    dose: 10 mg/kg
    interval: q12h
    route: SC
    source: invented for this example
`

func ExampleReadCase() {
	c, warnings, err := ReadCase("marisol.yaml", []byte(`
patient:
  name: cage #3
  species: giant anteater
  mass: 041.0 kg
`))
	fmt.Println(err)
	fmt.Println(c.Patient.Mass.Text, "on line", c.Patient.Mass.Line)
	fmt.Println(warnings[0].Field, warnings[0].Text)

	_, _, err = ReadCase("marisol.yaml", []byte("patient:\n  weight: 41 kg\n  nmae: Marisol\n"))
	fmt.Println(err)
	// Output:
	// <nil>
	// 041.0 kg on line 5
	// patient.name read as "cage": # after a space begins a comment; if it is part of the text, put the whole value in double quotes
	// marisol.yaml:2:3: patient: unknown key "weight"; did you mean "mass"?
	// marisol.yaml:3:3: patient: unknown key "nmae"; did you mean "name"?
}

// Each text is one that readers of YAML are known to change. The expected
// letters are those of the file.
func TestReadCaseKeepsTexts(t *testing.T) {
	for _, tt := range []struct{ yaml, want string }{
		{"041", "041"}, {"0412", "0412"}, {"1.10", "1.10"}, {"0x1F", "0x1F"}, {"0o17", "0o17"}, {"0b11", "0b11"},
		{"1_000", "1_000"}, {"1e3", "1e3"}, {"+41", "+41"}, {"-1", "-1"}, {".5", ".5"}, {"5.", "5."},
		{"yes", "yes"}, {"No", "No"}, {"on", "on"}, {"TRUE", "TRUE"}, {"null", "null"}, {"~", "~"}, {"Null", "Null"},
		{".inf", ".inf"}, {".NaN", ".NaN"}, {"2026-11-30", "2026-11-30"}, {"12:30:45", "12:30:45"},
		{"9007199254740993", "9007199254740993"}, {"1.10   # weighed", "1.10"}, {"1.10\t# weighed", "1.10"},
		{`"041"`, "041"}, {`'it''s'`, "it's"}, {`"a\tb\n\"c\" \\ \/ \x41\u00b0\U0001F9A5\_"`, "a\tb\n\"c\" \\ / A°🦥\u00a0"},
		{`"  led by blanks"`, "  led by blanks"}, {`'#3'`, "#3"}, {`"a: b"`, "a: b"}, {`'\n'`, `\n`}, {`"a	b"`, "a\tb"},
		{"a:b", "a:b"}, {"http://x.example/a#b", "http://x.example/a#b"}, {"a, b [c] {d}", "a, b [c] {d}"},
		{"it's", "it's"}, {`say "when"`, `say "when"`}, {"-x", "-x"}, {"?x", "?x"}, {"é ° µ ± ½", "é ° µ ± ½"},
	} {
		c, warnings, err := ReadCase("f", []byte("patient:\n  name: "+tt.yaml+"\n"))
		if err != nil || len(warnings) > 0 {
			t.Errorf("%s: %v %v", tt.yaml, err, warnings)
			continue
		}
		if want := (Entry{tt.want, 2, 9}); c.Patient.Name != want {
			t.Errorf("%s: read as %+v, want %+v", tt.yaml, c.Patient.Name, want)
		}
	}
}

func TestReadCaseProse(t *testing.T) {
	for _, tt := range []struct{ yaml, want string }{
		{"|\n    ward book:\n      page 3 # all of it\n", "ward book:\n  page 3 # all of it"},
		{"|-\n    a\n    b\n", "a\nb"},
		{"|+\n    a\n\n\n", "a"},
		{">\n    a\n    b\n\n    c\n", "a b\nc"},
		{"|2\n     a\n", " a"},
		{"a\n    b\n\n    c\n", "a b\nc"},
		{"\n    on the next line\n", "on the next line"},
	} {
		c, _, err := ReadCase("f", []byte("target:\n  source: "+tt.yaml+"overrides:\n  depot: "+tt.yaml+"proposed:\n  dose: 1 mg/kg\n"))
		if err != nil {
			t.Errorf("%q: %v", tt.yaml, err)
			continue
		}
		if c.Target.Source.Text != tt.want || c.Overrides[0].Value.Text != tt.want {
			t.Errorf("%q: read as %q and %q, want %q", tt.yaml, c.Target.Source.Text, c.Overrides[0].Value.Text, tt.want)
		}
		if c.Proposed.Dose.Text != "1 mg/kg" {
			t.Errorf("%q swallowed what follows", tt.yaml)
		}
	}
}

func TestReadCasePlaces(t *testing.T) {
	c, _, err := ReadCase("f", []byte(`# a remark
patient: {species: dog,
          "mass":   '41 kg'}
models:
- species: cat
  tolerated:
    dose: 4 mg/kg
-   species:	sheep	# behind tabs
published: [{species: goat}]
method: {intervals: [6 h, "8 h"], thresholds: {peak: 2}}
overrides:
  depot: °°° because
`))
	if err != nil {
		t.Fatal(err)
	}
	for _, tt := range []struct {
		got  Entry
		want string
	}{
		{c.Patient.Place, "2:1 "}, {c.Patient.Species, "2:20 dog"}, {c.Patient.Mass, "3:21 41 kg"},
		{c.Models[0].Place, "5:3 "}, {c.Models[0].Species, "5:12 cat"},
		{c.Models[0].Tolerated.Place, "6:3 "}, {c.Models[0].Tolerated.Dose, "7:11 4 mg/kg"},
		{c.Models[1].Place, "8:5 "}, {c.Models[1].Species, "8:14 sheep"},
		{c.Published[0].Place, "9:13 "}, {c.Published[0].Species, "9:23 goat"},
		{c.Method.Intervals[0], "10:22 6 h"}, {c.Method.Intervals[1], "10:27 8 h"},
		{c.Method.Thresholds[0].Name, "10:48 peak"}, {c.Method.Thresholds[0].Value, "10:54 2"},
		{c.Overrides[0].Name, "12:3 depot"}, {c.Overrides[0].Value, "12:10 °°° because"},
	} {
		if got := fmt.Sprintf("%d:%d %s", tt.got.Line, tt.got.Column, tt.got.Text); got != tt.want {
			t.Errorf("got %s, want %s", got, tt.want)
		}
	}
}

// hostileCase is a row of testdata/hostile/cases.tsv.
type hostileCase struct{ file, stage, field, place, expected string }

func hostileCases(t testing.TB) []hostileCase {
	t.Helper()
	index, err := os.ReadFile("../testdata/hostile/cases.tsv")
	if err != nil {
		t.Fatal(err)
	}
	var cases []hostileCase
	for i, row := range strings.Split(strings.TrimSuffix(string(index), "\n"), "\n") {
		f := strings.Split(row, "\t")
		if len(f) != 5 {
			t.Fatalf("cases.tsv, line %d: %d columns", i+1, len(f))
		}
		if i > 0 {
			cases = append(cases, hostileCase{f[0], f[1], f[2], f[3], f[4]})
		}
	}
	return cases
}

func TestReadCaseHostile(t *testing.T) {
	listed := map[string]bool{}
	for _, tt := range hostileCases(t) {
		listed[tt.file] = true
		t.Run(tt.file, func(t *testing.T) {
			data, err := os.ReadFile(filepath.Join("../testdata/hostile", tt.file))
			if err != nil {
				t.Fatal(err)
			}
			c, warnings, err := ReadCase("f.yaml", data)
			switch tt.stage {
			case "read":
				var faults InputErrors
				if !errors.As(err, &faults) || c != nil {
					t.Fatalf("read without an error: %v", err)
				}
				f := faults[0]
				place := ""
				if f.Line > 0 {
					place = fmt.Sprintf("%d:%d", f.Line, f.Column)
				}
				if f.File != "f.yaml" || place != tt.place || f.Field != tt.field || tt.expected == "" ||
					!strings.Contains(f.Error(), tt.expected) {
					t.Errorf("got %v\nwant %s %s: …%s…", err, tt.place, tt.field, tt.expected)
				}
				if f.Remedy == "" {
					t.Error("the message does not say what to do")
				}
				for _, r := range err.Error() {
					if r != '\n' && !unicode.IsPrint(r) {
						t.Errorf("the message holds %U", r)
					}
				}
				if m := regexp.MustCompile(`(?i)goccy|ast\.|token|scalar|mapping|sequence|string|struct|syntax`).FindString(err.Error()); m != "" {
					t.Errorf("the message speaks of %q: %v", m, err)
				}
			case "warn":
				if err != nil || len(warnings) != 1 {
					t.Fatalf("%v %v", err, warnings)
				}
				w := warnings[0]
				if fmt.Sprintf("%d:%d", w.Line, w.Column) != tt.place || w.Field != tt.field || !strings.Contains(w.Text, tt.expected) {
					t.Errorf("got %+v, want %s %s: …%s…", w, tt.place, tt.field, tt.expected)
				}
			case "ok":
				if err != nil || len(warnings) > 0 {
					t.Fatalf("%v %v", err, warnings)
				}
				want, _, err := ReadCase("f.yaml", []byte(smallCase))
				if err != nil || c.Patient.Mass.Text != want.Patient.Mass.Text || len(c.Models) != 1 ||
					c.Models[0].Dose.Text != want.Models[0].Dose.Text || c.Models[0].Source.Text == "" {
					t.Errorf("read as\n%s", WriteCase(c))
				}
			case "check", "draft":
				// Well-formed, and wrong only in what the values mean.
				if err != nil {
					t.Fatal(err)
				}
				checked, err := c.Check()
				if tt.stage == "draft" && err == nil {
					_, err = Draft(checked)
				}
				var faults InputErrors
				var one *InputError
				if errors.As(err, &one) {
					faults = InputErrors{one}
				} else if !errors.As(err, &faults) {
					t.Fatalf("taken without an error: %v", err)
				}
				f := faults[0]
				if !strings.HasPrefix(f.Field, tt.field) || !strings.Contains(f.Error(), tt.expected) || f.Remedy == "" {
					t.Errorf("got %v\nwant %s: …%s…", err, tt.field, tt.expected)
				}
			default:
				t.Errorf("unknown stage %q", tt.stage)
			}
		})
	}
	files, err := filepath.Glob("../testdata/hostile/*.yaml")
	if err != nil || len(files) < 100 {
		t.Fatalf("%d files, %v", len(files), err)
	}
	for _, f := range files {
		if !listed[filepath.Base(f)] {
			t.Errorf("%s is not in cases.tsv", filepath.Base(f))
		}
	}
}

func TestReadCaseReportsEveryFault(t *testing.T) {
	_, _, err := ReadCase("f", []byte(`cse: LW-1
patient:
  nmae: Marisol
  mass:
  stage: [adult]
drug: examplicillin
models:
  - speces: dog
    dose: 10 mg/kg
    dose: 12 mg/kg
  - mass: 4 kg
    tolerated: {does: 1 mg/kg}
method:
  thresholds: many
`))
	var faults InputErrors
	if !errors.As(err, &faults) {
		t.Fatal(err)
	}
	var got []string
	for _, f := range faults {
		got = append(got, fmt.Sprintf("%d:%d %s", f.Line, f.Column, f.Field))
	}
	want := []string{"1:1 ", "3:3 patient", "4:3 patient.mass", "5:10 patient.stage", "6:7 drug", "8:5 models[0]",
		"10:5 models[0].dose", "12:17 models[1].tolerated", "14:15 method.thresholds"}
	if !slices.Equal(got, want) {
		t.Errorf("got\n%s\nwant\n%s\n%v", strings.Join(got, "\n"), strings.Join(want, "\n"), err)
	}
}

func TestReadCaseBounds(t *testing.T) {
	many := func(n int) string { return "models:\n" + strings.Repeat("  - species: dog\n", n) }
	name := func(s string) string { return "patient:\n  name: " + s + "\n" }
	for _, tt := range []struct{ what, yaml, want string }{
		{"1.1 MB", smallCase + strings.Repeat("# "+strings.Repeat("x", 98)+"\n", 11_000), "a case file at most 1048576"},
		{"just under 1 MB", smallCase + strings.Repeat("# "+strings.Repeat("x", 97)+"\n", 10_000), ""},
		{"50 models", many(50), ""},
		{"51 models", many(51), "models: 51 items, and the list may have 50"},
		{"51 intervals", "method:\n  intervals: [" + strings.Repeat("1 h, ", 50) + "1 h]\n", "51 items"},
		{"51 reasons", "overrides:\n" + func() (s string) {
			for i := range 51 {
				s += fmt.Sprintf("  a%d: x\n", i)
			}
			return s
		}(), "51 items"},
		{"4,000 bytes", name(strings.Repeat("x", 4000)), ""},
		{"4,001 bytes", name(strings.Repeat("x", 4001)), "4001 bytes long"},
		{"2,001 letters of two bytes", name(strings.Repeat("é", 2001)), "4002 bytes long"},
		{"a line of 21,000 bytes", "# " + strings.Repeat("x", 21_000) + "\n" + smallCase, "the line has 21002 bytes"},
		{"30,000 lines", strings.Repeat("#\n", 30_000), "the file has 30000 lines"},
		{"empty lines", strings.Repeat("\n", 200) + smallCase, "empty lines in a row"},
		{"tabs", strings.Repeat("#"+strings.Repeat("\t", 999)+"\n", 20) + smallCase, "far more tabs"},
		{"brackets", strings.Repeat("#"+strings.Repeat("[", 9999)+"\n", 20) + smallCase, "far more tabs or punctuation"},
		{"a name of 201 bytes", "overrides:\n  " + strings.Repeat("x", 201) + ": y\n", "not a usable name"},
		{"300 unknown keys", func() (s string) {
			for i := range 300 {
				s += fmt.Sprintf("zzzzzz%d: x\n", i)
			}
			return s
		}(), "200 more faults are not listed"},
	} {
		_, _, err := ReadCase("f", []byte(tt.yaml))
		switch {
		case tt.want == "" && err != nil:
			t.Errorf("%s: %v", tt.what, err)
		case tt.want != "" && (err == nil || !strings.Contains(err.Error(), tt.want)):
			t.Errorf("%s: got %.200v, want …%s…", tt.what, err, tt.want)
		}
	}
}

func TestExampleCasesRead(t *testing.T) {
	files, err := filepath.Glob("../testdata/*.yaml")
	if err != nil || len(files) < 8 {
		t.Fatalf("%d files, %v", len(files), err)
	}
	for _, f := range files {
		data, err := os.ReadFile(f)
		if err != nil {
			t.Fatal(err)
		}
		c, warnings, err := ReadCase(f, data)
		if err != nil || len(warnings) > 0 {
			t.Errorf("%s: %v %v", f, err, warnings)
			continue
		}
		back, _, err := ReadCase(f, WriteCase(c))
		if err != nil || !reflect.DeepEqual(textsOf(back), textsOf(c)) {
			t.Errorf("%s: %v\nwritten as\n%s", f, err, WriteCase(c))
		}
		if c.PreparedBy.Text != "duty veterinarian" || !strings.Contains(string(data), "invented") {
			t.Errorf("%s does not say that it is invented", f)
		}
	}
}

// textsOf gives every text of a case by its path.
func textsOf(c *CaseInput) map[string]string {
	texts := map[string]string{}
	var visit func(path string, keys []caseKey)
	visit = func(path string, keys []caseKey) {
		for _, k := range keys {
			p := joinPath(path, k.name)
			switch k.kind {
			case kindValue, kindProse:
				if k.entry.Given() {
					texts[p] = k.entry.Text
				}
			case kindValues:
				for i, e := range *k.values {
					texts[indexPath(p, i)] = e.Text
				}
			case kindNamed:
				for i, e := range *k.named {
					texts[indexPath(p, i)] = e.Name.Text + "\x00" + e.Value.Text
				}
			case kindSection:
				visit(p, k.keys())
			case kindList:
				for i := range k.count() {
					texts[indexPath(p, i)] = "" // an item counts although it is empty
					visit(indexPath(p, i), k.item(i))
				}
			}
		}
	}
	visit("", c.caseKeys())
	return texts
}

// The keys of the file are the fields of CaseInput under the same names as in
// the record: a field without a key could never be given.
func TestEveryFieldHasAKey(t *testing.T) {
	var fields func(path string, typ reflect.Type) []string
	fields = func(path string, typ reflect.Type) (names []string) {
		for i := range typ.NumField() {
			f := typ.Field(i)
			tag, _, _ := strings.Cut(f.Tag.Get("json"), ",")
			if tag == "-" || tag == "fit" { // the command fit's, in no case file
				continue
			}
			p, inner := joinPath(path, tag), f.Type
			if inner.Kind() == reflect.Slice {
				inner = inner.Elem()
			}
			if inner == reflect.TypeFor[Entry]() || inner == reflect.TypeFor[NamedEntry]() {
				names = append(names, p)
				continue
			}
			names = append(names, fields(p, inner)...)
		}
		return names
	}
	want := fields("", reflect.TypeFor[CaseInput]())
	got := keyPaths(new(CaseInput))
	slices.Sort(want)
	slices.Sort(got)
	if !slices.Equal(got, want) {
		t.Errorf("keys\n%s\nfields\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
}

// keyPaths gives the path of every key that holds texts.
func keyPaths(c *CaseInput) (paths []string) {
	var visit func(path string, keys []caseKey)
	visit = func(path string, keys []caseKey) {
		for _, k := range keys {
			switch p := joinPath(path, k.name); k.kind {
			case kindSection:
				visit(p, k.keys())
			case kindList:
				visit(p, k.add(Entry{}))
			default:
				paths = append(paths, p)
			}
		}
	}
	visit("", c.caseKeys())
	return paths
}

func TestCaseTemplate(t *testing.T) {
	file := CaseTemplate("2026-11-30")
	c, warnings, err := ReadCase("new.yaml", file)
	if err != nil || len(warnings) > 0 {
		t.Fatal(err, warnings)
	}
	if c.Date.Text != "2026-11-30" || c.Patient.Name.Text != "Marisol" || c.Models[0].Species.Text != "dog" || len(c.Overrides) > 0 {
		t.Errorf("read as\n%s", WriteCase(c))
	}

	// With every sleeping key awake it reads too, and then no key is missing.
	awake := regexp.MustCompile(`(?m)^#([a-z]+:| {2})`).ReplaceAll(file, []byte("$1"))
	c, warnings, err = ReadCase("new.yaml", awake)
	if err != nil || len(warnings) > 0 {
		t.Fatal(err, warnings)
	}
	given := map[string]bool{}
	for path := range textsOf(c) {
		given[dropIndexes(path)] = true
	}
	for _, path := range keyPaths(new(CaseInput)) {
		if !given[path] {
			t.Errorf("the template lacks %s", path)
		}
	}
}

// nastyTexts are texts that a careless writer of YAML changes.
var nastyTexts = []string{"041", "1.10", "0x1F", "1e3", "1_000", "yes", "No", "null", "~", "true", "True", ".inf",
	"2026-11-30", "12:30", "a: b", "a:", ": a", "# x", "a #b", "a#b", " a", "a ", "\ta", "a\tb", "a\nb", "\na", "a\n", "a\\nb",
	`"`, `"a"`, "'", "it's", `\`, "- a", "-", "?", "? a", "[a]", "a, b", "{a: b}", "&a", "*a", "!a", "|", ">", ">40", "%", "@a", "`",
	"---", "...", "<<", "=", "é", "°C", "µg", "🦥", "\u00a0", "a\u2028b", "\ufeffa", "\u202eabc", "\u200b", "a\u0301", "𝕏"}

func nastyText() *rapid.Generator[string] {
	return rapid.Custom(func(t *rapid.T) string {
		parts := rapid.SliceOfN(rapid.OneOf(
			rapid.SampledFrom(nastyTexts),
			rapid.StringMatching(`[a-z0-9.:#,'"\\ \n\[\]{}&*!|>%@-]{0,12}`),
			rapid.StringOf(rapid.RuneFrom(nil, unicode.L, unicode.M, unicode.N, unicode.P, unicode.S, unicode.Zs, unicode.Cf)),
		), 1, 3).Draw(t, "parts")
		s := strings.Join(parts, rapid.SampledFrom([]string{"", " ", ": ", " #"}).Draw(t, "joint"))
		if strings.TrimSpace(s) == "" {
			return "x" + s
		}
		return s
	})
}

// fillCase gives every key of a case a text, or leaves it out.
func fillCase(t *rapid.T) *CaseInput {
	c := new(CaseInput)
	text := nastyText()
	some := func() bool { return rapid.Float64().Draw(t, "some") < 0.3 }
	var fill func(keys []caseKey)
	fill = func(keys []caseKey) {
		for _, k := range keys {
			if !some() {
				continue
			}
			switch k.kind {
			case kindValue, kindProse:
				*k.entry = E(text.Draw(t, k.name))
			case kindValues:
				for range rapid.IntRange(1, 3).Draw(t, "n") {
					*k.values = append(*k.values, E(text.Draw(t, k.name)))
				}
			case kindNamed:
				names := rapid.SliceOfNDistinct(rapid.OneOf(rapid.SampledFrom([]string{"depot", "narrow-margin", "null", "1", "a b", "a: b", "#"}),
					rapid.StringMatching(`[a-z0-9:# "'-]{0,10}x`)), 1, 3, rapid.ID[string]).Draw(t, "names")
				for _, n := range names {
					*k.named = append(*k.named, NamedEntry{E(n), E(text.Draw(t, k.name))})
				}
			case kindSection:
				fill(k.keys())
			case kindList:
				for range rapid.IntRange(1, 3).Draw(t, "n") {
					fill(k.add(Entry{}))
				}
			}
		}
	}
	fill(c.caseKeys())
	return c
}

func TestWriteCaseReadsBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := fillCase(t)
		file := WriteCase(c)
		back, warnings, err := ReadCase("f", file)
		if err != nil || len(warnings) > 0 {
			t.Fatalf("%v %v\n%s", err, warnings, file)
		}
		if got, want := textsOf(back), textsOf(c); !reflect.DeepEqual(got, want) {
			t.Fatalf("got\n%q\nwant\n%q\nwritten as\n%s", got, want, file)
		}
		if again := WriteCase(back); !bytes.Equal(again, file) {
			t.Fatalf("written again as\n%s\nfirst\n%s", again, file)
		}
	})
}

// What is read is what stands in the file, or nothing is read: for any text
// typed plainly behind a key.
func TestReadCaseChangesNoText(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		typed := rapid.OneOf(nastyText(), rapid.StringMatching("[0-9a-z\t \"',:#.-]{1,20}")).Draw(t, "typed")
		if strings.ContainsAny(typed, "\n\r\u0085\u2028\u2029") {
			return
		}
		c, warnings, err := ReadCase("f", []byte("patient:\n  name: "+typed+"\n  mass: 41 kg\n"))
		if err != nil {
			return
		}
		got, plain := c.Patient.Name.Text, strings.Trim(typed, " \t")
		if i := regexp.MustCompile(`[ \t]#`).FindStringIndex(plain); i != nil && plain[0] != '"' && plain[0] != '\'' {
			if plain = strings.TrimRight(plain[:i[0]], " \t"); len(warnings) == 0 && got != plain {
				t.Fatalf("%q was read as %q", typed, got)
			}
		}
		switch plain[0] {
		case '"', '\'':
			if !strings.HasPrefix(plain[1:], got) && !strings.ContainsAny(plain, `\'`) {
				t.Fatalf("%q was read as %q", typed, got)
			}
		default:
			if got != plain {
				t.Fatalf("%q was read as %q", typed, got)
			}
		}
		if c.Patient.Mass.Text != "41 kg" {
			t.Fatalf("%q changed the mass to %q", typed, c.Patient.Mass.Text)
		}
	})
}

// A name of the user's own appears in messages: no letter of it may act there.
func TestMessagesAreOneLine(t *testing.T) {
	for _, yaml := range []string{
		"overrides:\n  \"a\\nb\": x\n  \"a\\nb\": y\n",
		"overrides:\n  \"a\\eb\": x\n",
		"\"\\u202ecase\": x\n\"\\u202ecase\": x\n",
		"patient:\n  \"\\n\": {\"\\n\":4}\n",
	} {
		_, _, err := ReadCase("f", []byte(yaml))
		var faults InputErrors
		if !errors.As(err, &faults) {
			t.Fatalf("%s: %v", yaml, err)
		}
		for _, f := range faults {
			if strings.ContainsFunc(f.Error(), func(r rune) bool { return !unicode.IsPrint(r) }) {
				t.Errorf("%q", f.Error())
			}
		}
	}
}

func TestUnknownKeyNearest(t *testing.T) {
	for _, tt := range []struct{ section, key, want string }{
		{"patient", "mas", `did you mean "mass"?`},
		{"patient", "amss", `did you mean "mass"?`},
		{"patient", "tempereture", `did you mean "temperature"?`},
		{"drug", "elimnation", `did you mean "elimination"?`},
		{"drug", "protein binding", `did you mean "protein_binding"? keys`},
		{"", "patients", `did you mean "patient"?`},
		{"", "override", `did you mean "overrides"?`},
		{"", "dose", `"dose" belongs under models or under models, tolerated or under published or under proposed`},
		{"proposed", "route", `"route" belongs under drug or under models or under published`},
		{"target", "x", "the keys here are concentration, source"},
	} {
		keys := new(CaseInput).caseKeys()
		if tt.section != "" {
			keys = keys[slices.IndexFunc(keys, func(k caseKey) bool { return k.name == tt.section })].keys()
		}
		if _, got := unknownKey(tt.key, tt.section, keys); !strings.HasPrefix(got, tt.want) {
			t.Errorf("%s under %q: got %s, want %s", tt.key, tt.section, got, tt.want)
		}
	}
}

func TestEditDistance(t *testing.T) {
	for _, tt := range []struct {
		a, b string
		want int
	}{{"", "", 0}, {"mass", "mass", 0}, {"mas", "mass", 1}, {"amss", "mass", 1}, {"", "abc", 3}, {"kitten", "sitting", 3},
		{"volume", "dose", 4}, {"ö", "o", 1}} {
		if got := editDistance(tt.a, tt.b); got != tt.want || editDistance(tt.b, tt.a) != got {
			t.Errorf("%s to %s: %d, want %d", tt.a, tt.b, got, tt.want)
		}
	}
}

func FuzzReadCase(f *testing.F) {
	f.Add([]byte(smallCase))
	f.Add([]byte("patient: {\"name\": \"x\\u00e9\\n\", 'mass': '41 '' kg'} # c\n"))
	f.Add([]byte("overrides:\n  a-b: |\n    x\n     y\n  c: >-\n    d\n    e\n"))
	f.Add([]byte("\ufeffmethod:\r\n  intervals:\r\n  - 6 h\r\n  - 8\th # 9\r\n"))
	f.Add([]byte("a: &a [x]\nb: *a\n"))
	f.Fuzz(func(t *testing.T, data []byte) {
		c, warnings, err := ReadCase("f", data)
		lines := strings.Split(strings.NewReplacer("\r\n", "\n", "\r", "\n").Replace(string(data)), "\n")
		within := func(line, column int) bool {
			return line >= 0 && column >= 0 && line <= len(lines)+1 &&
				(line == 0 || line > len(lines) || column <= len([]rune(lines[line-1]))+1)
		}
		for _, w := range warnings {
			if !within(w.Line, w.Column) {
				t.Fatalf("%+v lies outside the file", w)
			}
		}
		if err != nil {
			var faults InputErrors
			if !errors.As(err, &faults) || len(faults) == 0 || len(faults) > maxFaults+1 {
				t.Fatalf("%T %v", err, err)
			}
			for _, e := range faults {
				if e.Problem == "" || !within(e.Line, e.Column) || strings.ContainsFunc(e.Error(), unicode.IsControl) {
					t.Fatalf("%q", e)
				}
			}
			return
		}
		file := WriteCase(c)
		back, warnings, err := ReadCase("f", file)
		if err != nil || len(warnings) > 0 || !reflect.DeepEqual(textsOf(back), textsOf(c)) {
			t.Fatalf("%v %v\nwritten as\n%s", err, warnings, file)
		}
	})
}

func BenchmarkReadCase(b *testing.B) {
	data, err := os.ReadFile("../testdata/anteater.yaml")
	if err != nil {
		b.Fatal(err)
	}
	b.SetBytes(int64(len(data)))
	b.ReportAllocs()
	for b.Loop() {
		if _, _, err := ReadCase("anteater.yaml", data); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkWriteCase(b *testing.B) {
	c, _, err := ReadCase("f", []byte(smallCase))
	if err != nil {
		b.Fatal(err)
	}
	b.ReportAllocs()
	for b.Loop() {
		WriteCase(c)
	}
}

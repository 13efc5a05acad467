package reports

import (
	"bytes"
	"encoding/json"
	"flag"
	"io"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"tayra/dose"
)

var update = flag.Bool("update", false, "write the golden files anew")

const goldenDir = "../testdata/golden"

// example is one case file with its worksheet.
type example struct {
	name string
	data []byte
	ws   *dose.Worksheet
}

// examples are the cases of testdata, and those beside the golden files, which
// reach the corners that the others leave out.
func examples(t testing.TB) []example {
	t.Helper()
	var files []string
	for _, pattern := range []string{"../testdata/*.yaml", goldenDir + "/*.yaml"} {
		found, err := filepath.Glob(pattern)
		if err != nil || len(found) == 0 {
			t.Fatalf("%s: %d files, %v", pattern, len(found), err)
		}
		files = append(files, found...)
	}
	var out []example
	seen := map[string]string{}
	for _, f := range files {
		data, err := os.ReadFile(f)
		if err != nil {
			t.Fatal(err)
		}
		e := example{name: strings.TrimSuffix(filepath.Base(f), ".yaml"), data: data}
		if other, twice := seen[e.name]; twice {
			t.Fatalf("%s and %s would have one golden file", other, f)
		}
		seen[e.name] = f
		e.ws = worksheetOf(t, f, data)
		out = append(out, e)
	}
	return out
}

func worksheetOf(t testing.TB, file string, data []byte) *dose.Worksheet {
	t.Helper()
	in, _, err := dose.ReadCase(file, data)
	if err != nil {
		t.Fatal(err)
	}
	c, err := in.Check()
	if err != nil {
		t.Fatal(err)
	}
	ws, err := dose.Draft(c)
	if err != nil {
		t.Fatal(err)
	}
	return ws
}

// exampleNamed drafts one of them anew, to be changed at will.
func exampleNamed(t testing.TB, name string) *dose.Worksheet {
	t.Helper()
	for _, dir := range []string{"../testdata", goldenDir} {
		file := filepath.Join(dir, name+".yaml")
		if data, err := os.ReadFile(file); err == nil {
			return worksheetOf(t, file, data)
		}
	}
	t.Fatalf("no example %s", name)
	return nil
}

// stamp is what the foot says of the tables: their digest changes with every
// one of them, and would hide in each golden file which of them changed in substance.
var stamp = regexp.MustCompile(`tables [0-9a-f]{12}`)

func unstamped(text []byte) []byte {
	return stamp.ReplaceAll(text, []byte("tables ............"))
}

// TestTextGolden holds the whole text of every example, steps included. A
// change that is meant is written by go test ./reports -update and read before
// it is committed.
func TestTextGolden(t *testing.T) {
	for _, e := range examples(t) {
		t.Run(e.name, func(t *testing.T) {
			golden(t, e.name+".txt", unstamped(Text(e.ws, TextOptions{Steps: true})), bytes.Equal)
		})
	}
	stop := exampleNamed(t, "stop")
	t.Run("quiet", func(t *testing.T) {
		golden(t, "stop.quiet.txt", unstamped(Text(stop, TextOptions{Quiet: true, Width: 60})), bytes.Equal)
	})
	t.Run("colour", func(t *testing.T) {
		golden(t, "stop.colour.txt", unstamped(Text(stop, TextOptions{Quiet: true, Colour: true})), bytes.Equal)
	})
}

// TestJSONGolden holds two records: a draft and a stop. Keys, their order and
// all texts must agree exactly, numbers to 1e-12, since a processor that joins
// a product and a sum in one step rounds the last digit otherwise.
func TestJSONGolden(t *testing.T) {
	for _, name := range []string{"anteater", "stop"} {
		t.Run(name, func(t *testing.T) {
			record, err := JSON(exampleNamed(t, name))
			if err != nil {
				t.Fatal(err)
			}
			record = regexp.MustCompile(`"tables": "[0-9a-f]+"`).ReplaceAll(record, []byte(`"tables": "................"`))
			golden(t, name+".json", record, sameJSON)
		})
	}
}

func golden(t *testing.T, name string, got []byte, same func(a, b []byte) bool) {
	t.Helper()
	file := filepath.Join(goldenDir, name)
	if *update {
		if err := os.WriteFile(file, got, 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	want, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	if !same(got, want) {
		t.Errorf("%s: %s\nIf it is meant: go test ./reports -update", name, firstDifference(got, want))
	}
}

func firstDifference(got, want []byte) string {
	g, w := strings.Split(string(got), "\n"), strings.Split(string(want), "\n")
	for i := range g {
		if i >= len(w) || g[i] != w[i] {
			other := "(the end)"
			if i < len(w) {
				other = w[i]
			}
			return "line " + itoa(i+1) + "\n got: " + g[i] + "\nwant: " + other
		}
	}
	return "ends after line " + itoa(len(g))
}

func itoa(n int) string { b, _ := json.Marshal(n); return string(b) }

// sameJSON compares token by token, so that the order of keys counts.
func sameJSON(a, b []byte) bool {
	x, y := json.NewDecoder(bytes.NewReader(a)), json.NewDecoder(bytes.NewReader(b))
	for {
		s, err := x.Token()
		u, err2 := y.Token()
		if err == io.EOF || err2 == io.EOF {
			return err == err2
		}
		if err != nil || err2 != nil {
			return false
		}
		f, isF := s.(float64)
		g, isG := u.(float64)
		if isF && isG {
			if math.Abs(f-g) > 1e-12*math.Max(math.Abs(f), math.Abs(g)) {
				return false
			}
			continue
		}
		if s != u {
			return false
		}
	}
}

func TestSameJSONSeesDifferences(t *testing.T) {
	a := `{"x": [1, 2.5, "mg"], "y": null}`
	if !sameJSON([]byte(a), []byte(`{"x":[1.0000000000000002,2.5,"mg"],"y":null}`)) {
		t.Error("spaces and the last digit make a difference")
	}
	for _, b := range []string{`{"y": null, "x": [1, 2.5, "mg"]}`, `{"x": [1, 2.5001, "mg"], "y": null}`, `{"x": [1, 2.5, "g"], "y": null}`, `{"x": [1, 2.5, "mg"]}`} {
		if sameJSON([]byte(a), []byte(b)) {
			t.Errorf("%s passes for %s", b, a)
		}
	}
}

// penSlips are the slips of a pen that medication-safety bodies publish lists
// of, and those of a program. The published rules are those of the ISMP List of
// Error-Prone Abbreviations, Symbols, and Dose Designations and of the Joint
// Commission's official "Do Not Use" list, both recalled from memory; "ours" are
// the house's. What the user types (a route, a name, a citation) is printed as
// typed and is no slip of the program, but the examples hold none either.
var penSlips = func() (out []penSlip) {
	table, err := os.ReadFile("../testdata/slips.tsv")
	if err != nil {
		panic(err)
	}
	for _, row := range strings.Split(strings.TrimSuffix(string(table), "\n"), "\n")[1:] {
		c := strings.Split(row, "\t")
		out = append(out, penSlip{what: c[0] + " (" + c[1] + ")", pattern: c[2], wrong: c[3]})
	}
	return out
}()

type penSlip struct{ what, pattern, wrong string }

// TestNoSlips reads every text that the examples can become.
func TestNoSlips(t *testing.T) {
	for _, s := range penSlips {
		re := regexp.MustCompile(s.pattern)
		for _, e := range examples(t) {
			for _, o := range []TextOptions{{Steps: true}, {Width: 60, Quiet: true}, {Width: 200, Steps: true}} {
				for _, line := range strings.Split(string(Text(e.ws, o)), "\n") {
					if re.MatchString(line) {
						t.Errorf("%s: %s: %s", e.name, s.what, line)
					}
				}
			}
		}
	}
}

// The scan is worth what it finds: each pattern is shown a slip, and what is
// right and looks like one.
func TestSlipsAreFound(t *testing.T) {
	if len(penSlips) < 20 {
		t.Fatalf("%d patterns", len(penSlips))
	}
	for _, s := range penSlips {
		if !regexp.MustCompile(s.pattern).MatchString(s.wrong) {
			t.Errorf("%s: not found in %q", s.what, s.wrong)
		}
	}
	// A tenfold slip in every dose unit: a point that is not seen, a zero that is.
	for _, unit := range []string{"mg", "mcg", "g", "mg/kg", "mcg/kg", "mL", "L", "units", "units/kg", "kg", "h", "hours", "days", "%"} {
		for _, number := range []string{".5", ".25", "5.0", "0.50", "12.10"} {
			found := false
			for _, s := range penSlips {
				found = found || regexp.MustCompile(s.pattern).MatchString("give "+number+" "+unit)
			}
			if !found {
				t.Errorf("%s %s passes", number, unit)
			}
		}
	}
	right := []string{"give 0.5 mg every 12 hours (q12h)", "10 mg/kg", "1,000 units/kg", "85 mcg", "Physiol Rev 27:511-541 (memory)", "0.75·h/1.645 each", "5 to 10 mg/kg",
		"W^0.75 kcal/day", "case LW-0412  2026-11-30", "53:167-191", "10.1 mL", "within 2-fold", "nine-in-ten", "of 361, 164 fell"}
	for _, text := range right {
		for _, s := range penSlips {
			if regexp.MustCompile(s.pattern).MatchString(text) {
				t.Errorf("%s: found in %q", s.what, text)
			}
		}
	}
}

package species

import (
	"bytes"
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"tayra/species/internal/build"
)

// The generated tables must be those that the source tables make. Indexes of
// text are compared byte by byte; fitted numbers to nine figures, since another
// processor may round a last one otherwise.
func TestGeneratedTablesAreFresh(t *testing.T) {
	want, err := build.All(os.DirFS("data"))
	if err != nil {
		t.Fatal(err)
	}
	if len(want) != 6 {
		t.Errorf("%d generated tables, want 6", len(want))
	}
	for name, content := range want {
		got, err := os.ReadFile(filepath.Join("data", name))
		if err != nil {
			t.Fatal(err)
		}
		fitted := name == "relatives.index" || name == "scatter.index"
		if !fitted && !bytes.Equal(got, content) || fitted && !sameNumbers(string(got), string(content)) {
			t.Errorf("data/%s is stale: run go generate ./species", name)
		}
	}
}

// sameNumbers compares two texts word by word, numbers to 1e-9.
func sameNumbers(a, b string) bool {
	as, bs := strings.FieldsFunc(a, white), strings.FieldsFunc(b, white)
	if len(as) != len(bs) || strings.Count(a, "\n") != strings.Count(b, "\n") {
		return false
	}
	for i := range as {
		x, errX := strconv.ParseFloat(as[i], 64)
		y, errY := strconv.ParseFloat(bs[i], 64)
		if errX != nil || errY != nil {
			if as[i] != bs[i] {
				return false
			}
			continue
		}
		if math.Abs(x-y) > 1e-9*max(1, math.Abs(x)) {
			return false
		}
	}
	return true
}

func white(r rune) bool { return r == ' ' || r == '\t' || r == '\n' }

func TestSameNumbers(t *testing.T) {
	if !sameNumbers("a\t1.0000000000001 2\n", "a\t1 2\n") || sameNumbers("a\t1.00001\n", "a\t1\n") || sameNumbers("a\t1\n", "b\t1\n") || sameNumbers("a 1\n", "a 1 2\n") {
		t.Error("sameNumbers does not tell numbers apart")
	}
}

// Every line of an index is found by its key, and nothing beside it.
func TestLine(t *testing.T) {
	for name, index := range map[string]string{"animals": animalsIndex, "names": namesIndex, "drugs": drugsIndex,
		"classes": drugClassesIndex, "relatives": relativesIndex, "scatter": scatterIndex} {
		before, n := "", 0
		for l := range lines(index) {
			n++
			key, _, _ := strings.Cut(l, "\t")
			if got, ok := line(index, key); !ok || got != l {
				t.Fatalf("%s: line(%q) = %q, %v", name, key, got, ok)
			}
			for _, wrong := range []string{key + "x", key[:len(key)-1], key + "\t", key + "\n", before + "!"} {
				if got, ok := line(index, wrong); ok && !strings.HasPrefix(got, wrong+"\t") {
					t.Fatalf("%s: line(%q) = %q", name, wrong, got)
				}
			}
			if before >= key {
				t.Fatalf("%s: %q is not before %q", name, before, key)
			}
			before = key
		}
		if n == 0 {
			t.Errorf("%s: no lines", name)
		}
		for _, wrong := range []string{"", "\t", "\x00", "~~~~", "\n"} {
			if got, ok := line(index, wrong); ok {
				t.Errorf("%s: line(%q) = %q", name, wrong, got)
			}
		}
	}
	if _, ok := line("", "a"); ok {
		t.Error("an empty index has a line")
	}
}

// records reads the embedded tables as encoding/csv does.
func TestRecords(t *testing.T) {
	tables := map[string]string{
		"taxon-names": taxonNamesTable, "domestic-forms": domesticFormsTable, "animal-sources": animalSourcesTable,
		"measured-sources": measuredSourcesTable, "hazards": hazardsTable, "anatomy": anatomyTable, "drug-stems": drugStemsTable,
		"quotes":  "a,b\n\"x \"\"y\"\" z\",\"1,2\n3\"\n\"\",\"\"\"\"\n",
		"no end":  "a,b\n1,2",
		"empty":   "a,b\n",
		"nothing": "",
	}
	for name, table := range tables {
		want, err := csv.NewReader(strings.NewReader(table)).ReadAll()
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		if len(want) > 0 {
			want = want[1:]
		}
		i := 0
		for got := range records(table) {
			if i >= len(want) || strings.Join(got, "\x00") != strings.Join(want[i], "\x00") {
				t.Fatalf("%s: row %d is %q", name, i+1, got)
			}
			i++
		}
		if i != len(want) {
			t.Errorf("%s: %d rows, want %d", name, i, len(want))
		}
	}
}

package dose

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestCompare(t *testing.T) {
	for _, k := range []struct {
		name, was, now string
		want           []string // path: was → now
	}{
		{"the same", `{"a":1,"b":[1,"x",null,true]}`, `{"b":[1.0,"x",null,true],"a":1e0}`, nil},
		{"a number", `{"a":[8.14,8.14]}`, `{"a":[8.24,8.14]}`, []string{"a[0]: 8.14 → 8.24"}},
		{"a last digit", `{"a":8.14}`, `{"a":8.140000001}`, nil},
		{"more than a last digit", `{"a":8.14}`, `{"a":8.14000001}`, []string{"a: 8.14 → 8.14000001"}},
		{"noise about zero", `{"a":1e-17}`, `{"a":-3e-16}`, nil},
		{"no noise", `{"a":0}`, `{"a":2e-12}`, []string{"a: 0 → 2e-12"}},
		{"another sign", `{"a":1}`, `{"a":-1}`, []string{"a: 1 → -1"}},
		{"beyond the numbers", `{"a":1e999}`, `{"a":2e999}`, []string{"a: 1e999 → 2e999"}},
		{"a text", `{"a":"9.1"}`, `{"a":"9.10"}`, []string{`a: "9.1" → "9.10"`}},
		{"letters as they are", `{"a":"<"}`, `{"a":"\u003c"}`, nil},
		{"a number for a text", `{"a":"1"}`, `{"a":1}`, []string{`a: "1" → 1`}},
		{"nothing for a number", `{"a":{"b":null}}`, `{"a":{"b":0}}`, []string{"a.b: null → 0"}},
		{"a key gone and one new", `{"a":1,"c":2}`, `{"b":1,"c":2}`, []string{"a: 1 → ", "b:  → 1"}},
		{"a longer list", `{"a":[1,2]}`, `{"a":[1,2,3]}`, []string{"a[2]:  → 3"}},
		{"a text put in", `["a","b"]`, `["new","a","b"]`, []string{`[0]:  → "new"`}},
		{"a text changed", `["a","b"]`, `["x","b"]`, []string{`[0]: "a" → "x"`}},
		{"a caution put in", `{"cautions":[{"slug":"peak","n":1},{"slug":"x","n":2}]}`,
			`{"cautions":[{"slug":"depot","n":9},{"slug":"peak","n":1},{"slug":"x","n":3}]}`,
			[]string{`cautions[0]:  → {"slug":"depot","n":9}`, "cautions[1].n: 2 → 3"}},
		{"a caution gone", `{"cautions":[{"slug":"depot"},{"slug":"peak","n":1},{"slug":"peak","n":2}]}`,
			`{"cautions":[{"slug":"peak","n":1},{"slug":"peak","n":3}]}`,
			[]string{`cautions[0]: {"slug":"depot"} → `, "cautions[2].n: 2 → 3"}},
		{"two cautions exchanged", `[{"slug":"a"},{"slug":"b"}]`, `[{"slug":"b"},{"slug":"a"}]`,
			[]string{`[0]: {"slug":"a"} → `, `[1]:  → {"slug":"a"}`}},
	} {
		found, err := Compare([]byte(k.was), []byte(k.now))
		if err != nil {
			t.Errorf("%s: %v", k.name, err)
			continue
		}
		var got []string
		for _, d := range found {
			got = append(got, fmt.Sprintf("%s: %s → %s", d.Path, d.Was, d.Now))
		}
		if !slices.Equal(got, k.want) {
			t.Errorf("%s: %q, want %q", k.name, got, k.want)
		}
	}
	for _, bad := range []string{"", "{", `{"a":}`, `{"a":1} 2`, `[1`, `{"a":1,"a":1}`, `{"a":1,"\u0061":2}`, strings.Repeat("[", 100) + strings.Repeat("]", 100)} {
		if _, err := Compare([]byte(bad), []byte("{}")); err == nil {
			t.Errorf("%q compared", bad)
		}
		if _, err := Compare([]byte("{}"), []byte(bad)); err == nil {
			t.Errorf("%q compared", bad)
		}
	}
}

func TestWithout(t *testing.T) {
	found := []Difference{{Path: "program"}, {Path: "program.version"}, {Path: "programme"}, {Path: "input[0]"}, {Path: "a"}}
	var got []string
	for _, d := range Without(found, "program", "input") {
		got = append(got, d.Path)
	}
	if want := []string{"programme", "a"}; !slices.Equal(got, want) {
		t.Errorf("%q, want %q", got, want)
	}
	if len(found) != 5 || found[4].Path != "a" {
		t.Error("the differences themselves were changed")
	}
}

// exampleRecords are the records of the example cases, each with a fault of
// none.
func exampleRecords(t *testing.T) map[string]*Worksheet {
	t.Helper()
	files, err := filepath.Glob("../testdata/*.yaml")
	if err != nil || len(files) == 0 {
		t.Fatalf("%d example cases, %v", len(files), err)
	}
	out := map[string]*Worksheet{}
	for _, f := range files {
		b, err := os.ReadFile(f)
		if err != nil {
			t.Fatal(err)
		}
		in, _, err := ReadCase(f, b)
		if err != nil {
			t.Fatal(err)
		}
		if !in.Date.Given() {
			in.Date = E("2026-11-30")
		}
		out[filepath.Base(f)] = draftOf(t, in)
	}
	return out
}

func recordOf(t interface {
	Helper()
	Fatalf(string, ...any)
}, w *Worksheet) []byte {
	t.Helper()
	b, err := json.Marshal(w)
	if err != nil {
		t.Fatalf("%v", err)
	}
	return b
}

// throughFile is a worksheet as it comes back from its record.
func throughFile(t interface {
	Helper()
	Fatalf(string, ...any)
}, record []byte) *Worksheet {
	t.Helper()
	w := new(Worksheet)
	if err := json.Unmarshal(record, w); err != nil {
		t.Fatalf("%v", err)
	}
	return w
}

// A record holds all that is needed to make it again: every example, read back
// from its record and worked out again, gives the same bytes.
func TestRecomputeExamples(t *testing.T) {
	for name, w := range exampleRecords(t) {
		record := recordOf(t, w)
		again, err := Recompute(throughFile(t, record))
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if b := recordOf(t, again); !bytes.Equal(b, record) {
			found, err := Compare(record, b)
			t.Errorf("%s: other bytes; %v %v", name, found, err)
		}
	}
}

func TestRecomputeRefuses(t *testing.T) {
	w := draftOf(t, caseOf("giant anteater", "41 kg", "dog", "18 kg", "10 mg/kg", "q12h"))
	none := throughFile(t, recordOf(t, w))
	none.Input = nil
	if _, err := Recompute(none); err == nil || !strings.Contains(err.Error(), "input: ") {
		t.Errorf("without inputs: %v", err)
	}
	changed := throughFile(t, recordOf(t, w))
	changed.Input.Patient.Mass = E("41")
	if _, err := Recompute(changed); err == nil || !strings.Contains(err.Error(), "patient.mass") {
		t.Errorf("a mass without its unit: %v", err)
	}
}

// place is one leaf of a JSON tree, with a way to write another value into it.
type place struct {
	path string
	get  func() any
	set  func(any)
}

func leaves(path string, v any, set func(any), out *[]place) {
	switch v := v.(type) {
	case map[string]any:
		keys := make([]string, 0, len(v))
		for k := range v {
			keys = append(keys, k)
		}
		slices.Sort(keys)
		for _, k := range keys {
			below := k
			if path != "" {
				below = path + "." + k
			}
			leaves(below, v[k], func(x any) { v[k] = x }, out)
		}
	case []any:
		for i := range v {
			leaves(path+"["+strconv.Itoa(i)+"]", v[i], func(x any) { v[i] = x }, out)
		}
	default:
		*out = append(*out, place{path, func() any { return v }, set})
	}
}

// Whatever one value of a record is changed, Compare finds it, at its place and
// nowhere else.
func TestCompareFindsAnyChange(t *testing.T) {
	var records [][]byte
	for _, w := range exampleRecords(t) {
		records = append(records, recordOf(t, w))
	}
	slices.SortFunc(records, bytes.Compare)
	rapid.Check(t, func(t *rapid.T) {
		record := rapid.SampledFrom(records).Draw(t, "record")
		var tree any
		if err := json.Unmarshal(record, &tree); err != nil {
			t.Fatalf("%v", err)
		}
		var all []place
		leaves("", tree, nil, &all)
		p := rapid.SampledFrom(all).Draw(t, "place")
		// What names an item of a list makes it another item.
		isName := false
		for _, n := range naming {
			isName = isName || strings.HasSuffix(p.path, "."+n)
		}
		far := rapid.Float64Range(2*Tolerance, 1).Draw(t, "by")
		switch v := p.get().(type) {
		case float64:
			if v == 0 {
				p.set(far)
			} else {
				p.set(v * (1 + far))
			}
		case string:
			p.set(v + " ")
		case bool:
			p.set(!v)
		default:
			p.set(1)
		}
		changed, err := json.Marshal(tree)
		if err != nil {
			t.Fatalf("%v", err)
		}
		found, err := Compare(record, changed)
		if err != nil {
			t.Fatalf("%v", err)
		}
		switch {
		case isName && len(found) == 0:
			t.Fatalf("%s renamed, and nothing found", p.path)
		case !isName && (len(found) != 1 || found[0].Path != p.path):
			t.Fatalf("%s changed, found %v", p.path, found)
		}
	})
}

// Both directions of a comparison find the same places, and a record never
// differs from itself.
func TestCompareLaws(t *testing.T) {
	node := rapid.Custom(func(t *rapid.T) string {
		return rapid.SampledFrom([]string{`1`, `2`, `"x"`, `null`, `true`, `[1,2]`, `[]`, `{}`, `{"slug":"a","n":1}`, `{"slug":"b"}`, `{"k":[{"name":"p"}]}`}).Draw(t, "node")
	})
	list := func(t *rapid.T, label string) []byte {
		return []byte("[" + strings.Join(rapid.SliceOfN(node, 0, 6).Draw(t, label), ",") + "]")
	}
	rapid.Check(t, func(t *rapid.T) {
		a, b := list(t, "a"), list(t, "b")
		if found, err := Compare(a, a); err != nil || len(found) > 0 {
			t.Fatalf("%s against itself: %v %v", a, found, err)
		}
		there, err1 := Compare(a, b)
		back, err2 := Compare(b, a)
		if err1 != nil || err2 != nil {
			t.Fatalf("%v %v", err1, err2)
		}
		if (len(there) == 0) != (len(back) == 0) {
			t.Fatalf("%s and %s: %v there, %v back", a, b, there, back)
		}
		var x, y any
		if json.Unmarshal(a, &x) != nil || json.Unmarshal(b, &y) != nil {
			t.Fatalf("no JSON")
		}
		if same := fmt.Sprint(x) == fmt.Sprint(y); same != (len(there) == 0) {
			t.Fatalf("%s and %s: same %v, found %v", a, b, same, there)
		}
	})
}

// Two long lists without a name in common take bounded time and room.
func TestCompareLongLists(t *testing.T) {
	list := func(prefix string) []byte {
		var b strings.Builder
		for i := range 20000 {
			fmt.Fprintf(&b, `,{"species":"%s%d"}`, prefix, i)
		}
		return []byte("[" + b.String()[1:] + "]")
	}
	found, err := Compare(list("a"), list("b"))
	if err != nil || len(found) != 20000 {
		t.Errorf("%d differences, %v", len(found), err)
	}
}

// Tolerance lies between what a processor changes and what is printed.
func TestTolerance(t *testing.T) {
	if Tolerance < 1e4*(math.Nextafter(1, 2)-1) || Tolerance > 1e-6 {
		t.Errorf("%v", Tolerance)
	}
}

func FuzzCompare(f *testing.F) {
	f.Add([]byte(`{"a":[1,{"slug":"x"}]}`), []byte(`{"a":[2,{"slug":"y"},null]}`))
	f.Add([]byte(`[1e999,"\ud800"]`), []byte(`[]`))
	f.Fuzz(func(t *testing.T, a, b []byte) {
		found, err := Compare(a, b)
		if err != nil {
			return
		}
		for _, d := range found {
			if len(d.Was) == 0 && len(d.Now) == 0 || len(d.Was) > 0 && !json.Valid(d.Was) || len(d.Now) > 0 && !json.Valid(d.Now) {
				t.Errorf("difference %q: %q → %q", d.Path, d.Was, d.Now)
			}
		}
		if same, err := Compare(a, a); err != nil || len(same) > 0 {
			t.Errorf("against itself: %v %v", same, err)
		}
	})
}

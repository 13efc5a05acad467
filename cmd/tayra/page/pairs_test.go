package page

import (
	"reflect"
	"testing"

	"pgregory.net/rapid"

	"tayra/dose"
)

// bare takes the places in the file out of a case: a form has none.
func bare(v reflect.Value) {
	for i := range v.NumField() {
		f := v.Field(i)
		switch {
		case v.Type().Field(i).Tag.Get("json") == "-":
			f.SetZero()
		case f.Type() == entryType:
			f.Set(reflect.ValueOf(dose.E(f.Interface().(dose.Entry).Text)))
		case f.Type() == listType:
			for k := range f.Len() {
				f.Index(k).Set(reflect.ValueOf(dose.E(f.Index(k).Interface().(dose.Entry).Text)))
			}
		case f.Kind() == reflect.Struct:
			bare(f)
		case f.Kind() == reflect.Slice:
			for k := range f.Len() {
				bare(f.Index(k))
			}
		}
	}
}

// Opening a case file and sending the form again gives the same case.
func TestPairsAreTheCase(t *testing.T) {
	for _, name := range caseNames(t) {
		in, _, err := dose.ReadCase(name, example(t, name))
		if err != nil {
			t.Fatal(err)
		}
		again, err := caseOf(pairsOf(in))
		if err != nil {
			t.Fatal(name, err)
		}
		bare(reflect.ValueOf(in).Elem())
		if !reflect.DeepEqual(in, again) {
			t.Errorf("%s:\n%+v\nbecomes\n%+v", name, in, again)
		}
	}
}

// Whatever is typed in whichever fields, the case holds it, and the form can be
// filled from the case with it again.
func TestPairsComeBack(t *testing.T) {
	leaves := leavesOf(reflect.TypeFor[dose.CaseInput](), "")
	rapid.Check(t, func(t *rapid.T) {
		want := map[string]string{}
		var pairs []pair
		for _, leaf := range leaves {
			if !rapid.Bool().Draw(t, leaf) {
				continue
			}
			switch leaf {
			case "overrides", "method.thresholds":
				leaf += "." + rapid.StringMatching(`[a-z]{1,8}(-[a-z0-9]{1,5})?`).Draw(t, "name")
			}
			for _, place := range []string{"0", "1"} {
				path := leaf
				if i := indexOf(leaf, '#'); i >= 0 {
					path = leaf[:i] + place + leaf[i+1:]
				} else if place == "1" {
					break
				}
				text := rapid.StringMatching(`[!-+\--~é°µ]([ -+\--~é°µ]{0,20}[!-+\--~é°µ])?`).Draw(t, "text")
				pairs = append(pairs, pair{path, text})
				want[path] = text
			}
		}
		in, err := caseOf(pairs)
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range pairsOf(in) {
			if want[p[0]] != p[1] {
				t.Fatalf("%s: %q, want %q", p[0], p[1], want[p[0]])
			}
			delete(want, p[0])
		}
		if len(want) > 0 {
			t.Fatalf("lost: %v", want)
		}
	})
}

func indexOf(s string, c byte) int {
	for i := range len(s) {
		if s[i] == c {
			return i
		}
	}
	return -1
}

func TestPairsAreTrimmedAsAFileIs(t *testing.T) {
	in, err := caseOf([]pair{{"patient.mass", "  41 kg\t"}, {"models[0].source", "one\r\ntwo "}, {"patient.condition", "renal"}, {"patient.condition", "torpid"},
		{"method.intervals", "6 h,8 h , 12 h"}, {"models[1].dose", " "}, {"overrides.peak", ""}})
	if err != nil {
		t.Fatal(err)
	}
	if in.Patient.Mass.Text != "41 kg" || in.Models[0].Source.Text != "one\ntwo" || len(in.Patient.Condition) != 2 ||
		len(in.Method.Intervals) != 3 || in.Method.Intervals[1].Text != "8 h" || len(in.Models) != 2 || len(in.Overrides) != 0 {
		t.Errorf("%+v", in)
	}
}

// No path, however made, does more than set an entry of a case or be refused.
func FuzzPairs(f *testing.F) {
	for _, s := range []string{"case", "patient.mass", "models[0].dose", "models[59].tolerated.dose", "models[].dose", "models[0]", "overrides.", "method.thresholds.peak", "..", "[", "a[0", "date.x", "patient"} {
		f.Add(s, "41 kg")
	}
	f.Fuzz(func(t *testing.T, path, text string) {
		in, err := caseOf([]pair{{path, text}})
		if err != nil {
			return
		}
		if len(in.Models) > maxItems || len(in.Published) > maxItems || in.File != "" || in.Fit != nil {
			t.Errorf("%q made %+v", path, in)
		}
		pairsOf(in)
	})
}

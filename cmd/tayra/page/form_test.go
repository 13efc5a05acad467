package page

import (
	"errors"
	"reflect"
	"slices"
	"strings"
	"testing"

	"tayra/dose"
)

// leavesOf are the paths of all values that a case file may have.
func leavesOf(t reflect.Type, path string) []string {
	var out []string
	for i := range t.NumField() {
		f := t.Field(i)
		key := keyOf(f)
		if key == "" {
			continue
		}
		switch at := path + key; {
		case f.Type == entryType, f.Type == listType, f.Type == namedType:
			out = append(out, at)
		case f.Type.Kind() == reflect.Struct:
			out = append(out, leavesOf(f.Type, at+".")...)
		case f.Type.Kind() == reflect.Slice:
			out = append(out, leavesOf(f.Type.Elem(), at+"[#].")...)
		}
	}
	return out
}

// A case file that is opened may use any key: one without a field on the form
// would be lost.
func TestTheFormHasEveryKeyOfTheCaseFile(t *testing.T) {
	labels := formLabels()
	leaves := leavesOf(reflect.TypeFor[dose.CaseInput](), "")
	if len(leaves) < 50 {
		t.Fatalf("only %d keys: %q", len(leaves), leaves)
	}
	for _, path := range leaves {
		switch path {
		case "overrides": // asked for where the stop stands
		case "method.thresholds":
			for _, name := range thresholdNames(t) {
				if _, ok := labels[path+"."+name]; !ok {
					t.Errorf("no field for the threshold %s", name)
				}
			}
		default:
			if _, ok := labels[path]; !ok {
				t.Errorf("no field for %s", path)
			}
		}
	}
	for path := range labels {
		name, isThreshold := strings.CutPrefix(path, "method.thresholds.")
		if isThreshold && !slices.Contains(thresholdNames(t), name) || !isThreshold && !slices.Contains(leaves, path) {
			t.Errorf("the field %s has no key", path)
		}
	}
	for path, label := range labels {
		if strings.TrimSpace(label) == "" {
			t.Errorf("%s has no label", path)
		}
	}
}

// faultAt is what the check of a case says of one field.
func faultAt(t *testing.T, pairs []pair, path string) *dose.InputError {
	t.Helper()
	in, err := caseOf(pairs)
	if err != nil {
		t.Fatal(err)
	}
	_, err = in.Check()
	var faults dose.InputErrors
	errors.As(err, &faults)
	for _, f := range faults {
		if fieldPath(f.Field) == path {
			return f
		}
	}
	return nil
}

// listed are the words of "write a, b or c".
func listed(remedy string) []string {
	return strings.FieldsFunc(strings.TrimPrefix(remedy, "write "), func(r rune) bool { return r == ',' || r == ' ' })
}

func thresholdNames(t *testing.T) []string {
	t.Helper()
	const path = "method.thresholds.no-such-threshold"
	f := faultAt(t, []pair{{path, "1"}}, path)
	if f == nil {
		t.Fatal("an unknown threshold is taken")
	}
	return slices.DeleteFunc(listed(f.Remedy), func(w string) bool { return w == "or" })
}

// Every word that the form offers is one that the case file knows.
func TestTheFormOffersWordsThatAreKnown(t *testing.T) {
	for _, g := range formGroups() {
		for _, f := range slices.Concat(g.Fields, g.More) {
			path := strings.Replace(f.Path, "#", "0", 1)
			for _, w := range f.Words {
				pairs := []pair{{path, w.Value}}
				if path == "method.equation" {
					pairs = append(pairs, pair{"method.basis", "equation"})
				}
				if path == "product.divisible" {
					pairs = append(pairs, pair{"product.strength", "250 mg per tablet"})
				}
				if fault := faultAt(t, pairs, path); fault != nil {
					t.Errorf("%s: %v", path, fault)
				}
			}
			if len(f.Words) > 0 {
				if faultAt(t, []pair{{path, "nonsense"}}, path) == nil {
					t.Errorf("%s takes any word: should it be a list of words?", path)
				}
			}
		}
	}
}

// Units stand beside the fields in which quantities are typed: a bare number is
// refused there, and nowhere else.
func TestUnitsStandBesideQuantities(t *testing.T) {
	pure := map[string]bool{"product.days": true, "method.q10": true, "date": true, "product.container": true}
	for _, g := range formGroups() {
		for _, f := range slices.Concat(g.Fields, g.More) {
			path := strings.Replace(f.Path, "#", "0", 1)
			if f.Kind != "" || strings.HasPrefix(path, "method.thresholds.") || pure[path] {
				continue
			}
			fault := faultAt(t, []pair{{path, "7"}, {"models[0].half_life", "1 h"}}, path)
			if path == "models[0].half_life" {
				fault = faultAt(t, []pair{{path, "7"}}, path)
			}
			if path == "product.step" || path == "product.largest_per_site" {
				fault = faultAt(t, []pair{{path, "7"}, {"product.strength", "50 mg/mL"}}, path)
			}
			if (fault != nil) != (f.Unit != "") {
				t.Errorf("%s: unit %q, but a bare number: %v", path, f.Unit, fault)
			}
		}
	}
}

func TestIDs(t *testing.T) {
	for path, want := range map[string]string{
		"date": "f-date", "patient.mass": "f-patient-mass", "models[0].tolerated.dose": "f-models-0-tolerated-dose", "overrides.narrow-margin": "f-overrides-narrow-margin",
	} {
		if got := idOf(path); got != want {
			t.Errorf("%s: %s, want %s", path, got, want)
		}
	}
	for path, want := range map[string]string{"patient.condition[2]": "patient.condition", "method.intervals[0]": "method.intervals", "models[1].dose": "models[1].dose"} {
		if got := fieldPath(path); got != want {
			t.Errorf("%s belongs to %s, want %s", path, got, want)
		}
	}
	for path, want := range map[string]bool{"models[12].dose": true, "models": false, "models[1]": false, "": false, "overrides.peak": true, "overrides": false, "patient.weight": false} {
		if _, got := onForm(path); got != want {
			t.Errorf("%q on the form: %v", path, got)
		}
	}
}

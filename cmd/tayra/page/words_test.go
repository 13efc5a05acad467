package page

import (
	"errors"
	"path/filepath"
	"strings"
	"testing"

	"tayra/dose"
	"tayra/metabolic"
)

// hostileRows are the rows of the index of hostile cases: file, stage, field,
// place, a part of the message.
func hostileRows(t *testing.T) [][]string {
	t.Helper()
	var rows [][]string
	for i, line := range strings.Split(strings.TrimSpace(string(example(t, "hostile/cases.tsv"))), "\n") {
		if i > 0 {
			rows = append(rows, strings.Split(line, "\t"))
		}
	}
	if len(rows) < 100 {
		t.Fatalf("%d rows", len(rows))
	}
	return rows
}

// faultsOfFile is what the command would say of a case file.
func faultsOfFile(name string, data []byte) dose.InputErrors {
	in, _, err := dose.ReadCase(name, data)
	var c *dose.Case
	if err == nil {
		c, err = in.Check()
	}
	if err == nil {
		_, err = dose.Draft(c)
	}
	var faults dose.InputErrors
	errors.As(err, &faults)
	return faults
}

// What the case file refuses is refused on the form: the same faults in the
// same words, each with the field that it belongs to.
func TestTheFormRefusesWhatTheFileRefuses(t *testing.T) {
	tried := 0
	// Lists are written otherwise on a form: a comma there is one between items.
	if in, _, err := dose.ReadCase("x", []byte("method: {intervals: ['6 h, 8 h']}")); err != nil || len(unplaceable(in)) != 1 {
		t.Error("a list written as one item is filled in", err)
	}
	for _, row := range hostileRows(t) {
		name, stage := row[0], row[1]
		if stage != "check" && stage != "draft" {
			continue
		}
		t.Run(name, func(t *testing.T) {
			data := example(t, filepath.Join("hostile", name))
			want := faultsOfFile(name, data)
			in, _, err := dose.ReadCase(name, data)
			if err != nil || len(want) == 0 {
				t.Fatal(err, want)
			}
			pairs := pairsOf(in)
			if len(in.Models) == 0 { // the form always has one
				pairs = append(pairs, pair{"models[0].species", ""})
			}
			a := draftOf(t, pairs)
			if a.State != "faults" || strings.Contains(a.Top+a.Rest, "mg/kg every") {
				t.Fatalf("state %s", a.State)
			}
			said := map[string]string{}
			for _, f := range a.Faults {
				said[f.Text] = f.Path
			}
			for _, e := range want {
				text := e.Problem
				if e.Remedy != "" {
					text += "; " + e.Remedy
				}
				path, ok := said[text]
				if !ok && e.Field == "models" { // there, each field of the model is asked for
					continue
				}
				if !ok {
					t.Errorf("the form does not say %q; it says %q", text, said)
					continue
				}
				if label, on := onForm(fieldPath(e.Field)); on && (path != fieldPath(e.Field) || label == "") {
					t.Errorf("%q belongs to %q, not to %q", text, e.Field, path)
				}
			}
		})
		tried++
	}
	if tried < 60 {
		t.Errorf("only %d cases were tried", tried)
	}
}

// A value that the reader of the file refuses before its meaning is looked at
// is refused in the reader's words, however it gets into a field.
func TestTheFormRefusesLettersThatTheFileRefuses(t *testing.T) {
	pairs := pairsOfCase(t, "anteater.yaml")
	for _, tt := range []struct{ path, text string }{
		{"patient.mass", "41\x00 kg"},
		{"patient.name", "Mari\u202esol"},
		{"models[0].source", "protocol\u200b7"},
		{"drug.name", "exam\x1bplicillin"},
		{"patient.species", "giant\u00adanteater"},
		{"case", strings.Repeat("x", 4001)},
		{"prepared_by", "\xff"},
	} {
		in, err := caseOf(with(pairs, tt.path, tt.text))
		if err != nil {
			t.Fatal(err)
		}
		want := faultsOfFile("", dose.WriteCase(in))
		a := draftOf(t, with(pairs, tt.path, tt.text))
		if tt.text == "\xff" { // JSON, as the browser writes it, has no such letter
			if a.State == "faults" {
				continue
			}
		}
		if len(want) == 0 || a.State != "faults" || a.Faults[0].Path != tt.path || !strings.HasPrefix(a.Faults[0].Text, want[0].Problem) {
			t.Errorf("%s: the file says %v, the form %v", tt.path, want, a.Faults)
		}
	}
}

// A fault's words stand beside the field as they are, with the numbers kept to
// their units, and the list leads to the field.
func TestFaultsLeadToTheirFields(t *testing.T) {
	pairs := with(with(pairsOfCase(t, "anteater.yaml"), "patient.mass", "41"), "models[0].interval", "q12-24h")
	a := draftOf(t, pairs)
	_, massErr := metabolic.ParseBodyMass("41")
	var q *metabolic.QuantityError
	if !errors.As(massErr, &q) {
		t.Fatal(massErr)
	}
	if len(a.Faults) != 2 || a.Faults[0].Text != q.Problem+"; "+q.Remedy || a.Faults[0].ID != "f-patient-mass" || a.Faults[0].Label != "Body mass" ||
		a.Faults[1].ID != "f-models-0-interval" || a.Faults[1].Label != "Interval (model)" {
		t.Errorf("%+v", a.Faults)
	}
	for _, s := range []string{`<a href="#f-patient-mass">Body mass</a>`, `<a href="#f-models-0-interval">Interval (model)</a>`} {
		if !strings.Contains(a.Top, s) {
			t.Errorf("the list lacks %s: %s", s, a.Top)
		}
	}
	if !strings.HasPrefix(a.Say, "No draft: 2 fields are wrong. Body mass: ") {
		t.Errorf("announced: %s", a.Say)
	}
}

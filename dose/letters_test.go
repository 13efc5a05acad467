package dose

import (
	"fmt"
	"reflect"
	"strings"
	"testing"
)

// unseenLetters are letters that are nothing to the eye, or turn or hide those
// around them, each of which a name could be disguised with.
var unseenLetters = []rune{
	0x00, 0x07, 0x1B, 0x7F, 0x85, // control
	0xAD, 0x061C, 0x180E, 0x200B, 0x200C, 0x200D, 0x200E, 0x200F, 0x202A, 0x202E, 0x2060, 0x2066, 0x2069, 0xFEFF, // formatting, bidirectional
	0x2028, 0x2029, 0xFFF9, 0xFE0F, 0xE0100, 0xE0041, // line separators, annotation, variation selectors, tags
	0x034F, 0x115F, 0x1160, 0x3164, 0xFFA0, 0x2800, // blank by definition
	0xE000, 0xFFFD, // without a form
}

// Every text of a case refuses them under its own name, and tells them by
// number only.
func TestUnseenLettersAreRefused(t *testing.T) {
	texts := map[string]func(*CaseInput) *Entry{
		"case":                       func(c *CaseInput) *Entry { return &c.Case },
		"prepared_by":                func(c *CaseInput) *Entry { return &c.PreparedBy },
		"patient.name":               func(c *CaseInput) *Entry { return &c.Patient.Name },
		"patient.species":            func(c *CaseInput) *Entry { return &c.Patient.Species },
		"drug.name":                  func(c *CaseInput) *Entry { return &c.Drug.Name },
		"drug.class":                 func(c *CaseInput) *Entry { return &c.Drug.Class },
		"drug.route":                 func(c *CaseInput) *Entry { return &c.Drug.Route },
		"models[0].species":          func(c *CaseInput) *Entry { return &c.Models[0].Species },
		"models[0].route":            func(c *CaseInput) *Entry { return &c.Models[0].Route },
		"models[0].source":           func(c *CaseInput) *Entry { return &c.Models[0].Source },
		"models[0].tolerated.source": func(c *CaseInput) *Entry { return &c.Models[0].Tolerated.Source },
		"published[0].species":       func(c *CaseInput) *Entry { return &c.Published[0].Species },
		"published[0].route":         func(c *CaseInput) *Entry { return &c.Published[0].Route },
		"published[0].source":        func(c *CaseInput) *Entry { return &c.Published[0].Source },
		"target.source":              func(c *CaseInput) *Entry { return &c.Target.Source },
		"overrides.narrow-margin":    func(c *CaseInput) *Entry { return &c.Overrides[0].Value },
	}
	whole := func() *CaseInput {
		c := caseOf("giant anteater", "41 kg", "dog", "18 kg", "10 mg/kg", "q12h")
		c.Case, c.PreparedBy, c.Patient.Name = E("LW-0412"), E("duty veterinarian"), E("Marisol")
		c.Drug.Class, c.Drug.Route, c.Models[0].Route, c.Drug.Margin = E("penicillin"), E("SC"), E("SC"), E("narrow")
		c.Models[0].Tolerated = ToleratedInput{Dose: E("40 mg/kg"), Source: E("invented for this test")}
		c.Published = []PublishedInput{{Species: E("southern tamandua"), Dose: E("9 mg/kg"), Interval: E("q12h"), Route: E("SC"), Source: E("invented for this test")}}
		c.Target = TargetInput{Concentration: E("2 mg/L"), Source: E("invented for this test")}
		c.Overrides = []NamedEntry{{Name: E("narrow-margin"), Value: E("serum levels will be measured after the second dose")}}
		return c
	}
	if _, err := whole().Check(); err != nil {
		t.Fatal(err)
	}
	for field, at := range texts {
		for _, r := range unseenLetters {
			c := whole()
			e := at(c)
			middle := len(e.Text) / 2
			e.Text = e.Text[:middle] + string(r) + e.Text[middle:]
			_, err := c.Check()
			if err == nil {
				t.Errorf("%s with U+%04X is accepted", field, r)
				continue
			}
			if !strings.Contains(err.Error(), field+": ") || !strings.Contains(err.Error(), fmt.Sprintf("U+%04X", r)) {
				t.Errorf("%s with U+%04X: %v", field, r, err)
			}
			if strings.ContainsRune(err.Error(), r) {
				t.Errorf("%s: the message holds U+%04X itself", field, r)
			}
		}
	}
	// No text of a case is forgotten here: a text is an entry that free text
	// can be written into.
	if n := countTexts(reflect.TypeFor[CaseInput]()); n < len(texts) {
		t.Errorf("%d entries, %d texts", n, len(texts))
	}
}

func countTexts(t reflect.Type) int {
	switch t.Kind() {
	case reflect.Pointer, reflect.Slice:
		return countTexts(t.Elem())
	case reflect.Struct:
		if t == reflect.TypeFor[Entry]() {
			return 1
		}
		n := 0
		for i := range t.NumField() {
			n += countTexts(t.Field(i).Type)
		}
		return n
	}
	return 0
}

// A letter of another alphabet in the midst of a name is refused or shown by its
// number: it only looks like the one that was meant.
func TestLookAlikeLettersInNames(t *testing.T) {
	for _, name := range []string{"p\u0430racetamol", "paracet\u0430mol", "ketoprofen \u0430cetate\u0430b", "di\u0441lofenac", "\u03bdancomycin"} {
		for _, put := range []func(*CaseInput, string){
			func(c *CaseInput, s string) { c.Drug.Name = E(s) }, func(c *CaseInput, s string) { c.Drug.Class = E(s) },
			func(c *CaseInput, s string) { c.Patient.Species = E(s) }, func(c *CaseInput, s string) { c.Models[0].Species = E(s) },
		} {
			c := caseOf("giant anteater", "41 kg", "dog", "18 kg", "10 mg/kg", "q12h")
			put(c, name)
			_, err := c.Check()
			if err == nil {
				t.Errorf("%+q is accepted", name)
				continue
			}
			for _, r := range err.Error() {
				if r > '~' {
					t.Errorf("%+q: the message holds %U itself: %v", name, r, err)
				}
			}
		}
	}
	// Greek letters that stand for themselves are no disguise.
	for _, class := range []string{"β-lactam", "α2-agonist", "α2 agonist"} {
		c := caseOf("giant anteater", "41 kg", "dog", "18 kg", "10 mg/kg", "q12h")
		c.Drug.Class = E(class)
		if _, err := c.Check(); err != nil {
			t.Errorf("%s: %v", class, err)
		}
	}
}

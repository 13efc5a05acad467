package reports

import (
	"fmt"
	"math"
	"reflect"
	"regexp"
	"strings"
	"testing"
	"unicode"

	"pgregory.net/rapid"

	"tayra/dose"
	"tayra/metabolic"
)

// sections of a text, in the order in which they must stand.
var sectionOrder = []string{"THE DRAFT", "CAUTIONS", "PUBLISHED DOSES", "PROPOSED REGIMEN", "FROM ", "THE PLANS", "IF THE BASIS", "AT ANOTHER BODY", "HOW FAR OFF",
	"SYRINGE", "CONCENTRATIONS", "SEVERAL MODELS", "DOES THIS DRUG", "STEPS", "SOURCES", "HOW SUCH PREDICTIONS"}

func TestTextOrder(t *testing.T) {
	found := map[string]bool{}
	for _, e := range examples(t) {
		text := string(Text(e.ws, TextOptions{Steps: true}))
		last := -1
		for _, s := range sectionOrder {
			at := strings.Index(text, "\n"+s)
			if s == "THE DRAFT" {
				at = strings.Index(text, "┏━ ")
			}
			if at < 0 {
				continue
			}
			found[s] = true
			if at < last {
				t.Errorf("%s: %s stands too early", e.name, s)
			}
			last = at
		}
	}
	for _, s := range sectionOrder {
		if !found[s] {
			t.Errorf("no example has the section %s", s)
		}
	}
}

// What the first glance needs stands in the box, and nowhere above it.
func TestDraftBox(t *testing.T) {
	for _, e := range examples(t) {
		d := e.ws.Drafted
		if d == nil {
			continue
		}
		box := boxOf(t, e.ws)
		for _, want := range []string{e.ws.Drug.Name, amountPair(d.PerAdministration, d.Unit), perKgPair(d.DosePerKg, d.Unit), d.Route, intervalWords(d.Plan, d.IntervalH),
			perKgRange(d.Range50, d.Unit), perKgRange(d.Range90, d.Unit), amountRange(d.Range90Amount, d.Unit), d.Meaning, d.Disagreement, outrankedWords(e.ws), giveWords(e.ws.Product, d.Unit), levelWord(e.ws.Cautions[0].Level)} {
			if !strings.Contains(box, oneLine(want)) {
				t.Errorf("%s: the box has no %q:\n%s", e.name, want, box)
			}
		}
	}
}

// With a stop the box names every stop and holds no number.
func TestStopBox(t *testing.T) {
	n := 0
	for _, e := range examples(t) {
		if e.ws.Drafted != nil {
			continue
		}
		n++
		box := boxOf(t, e.ws)
		if strings.ContainsFunc(box, unicode.IsDigit) {
			t.Errorf("%s: a number in the box:\n%s", e.name, box)
		}
		for _, c := range activeStops(e.ws) {
			if !strings.Contains(box, "[STOP] "+stopWords(c)) {
				t.Errorf("%s: the box does not name %s:\n%s", e.name, c.Slug, box)
			}
		}
		for _, section := range []string{"THE PLANS", "HOW FAR OFF", "AT ANOTHER"} {
			if strings.Contains(string(Text(e.ws, TextOptions{Steps: true})), section) {
				t.Errorf("%s: %s after a stop", e.name, section)
			}
		}
	}
	if n < 3 {
		t.Errorf("%d examples stop", n)
	}
}

// boxOf is the text in the box on one line, the edges taken away.
func boxOf(t *testing.T, ws *dose.Worksheet) string {
	t.Helper()
	var lines []string
	for _, l := range strings.Split(string(Text(ws, TextOptions{})), "\n") {
		if inner, ok := strings.CutPrefix(l, "┃ "); ok {
			lines = append(lines, strings.TrimSuffix(inner, " ┃"))
		}
	}
	if len(lines) == 0 {
		t.Fatal("no box")
	}
	return oneLine(strings.Join(lines, " "))
}

func oneLine(s string) string { return strings.Join(strings.Fields(s), " ") }

// No line is wider than asked for, the edges of the box are straight, and no
// line ends in a space.
func TestTextWidth(t *testing.T) {
	for _, e := range examples(t) {
		for _, width := range []int{0, 40, 60, 72, 80, 100, 160} {
			limit := max(width, leastWidth)
			if width == 0 {
				limit = defaultWidth
			}
			for _, l := range strings.Split(string(Text(e.ws, TextOptions{Width: width, Steps: true})), "\n") {
				if n := columns(l); n > limit {
					t.Errorf("%s at %d: %d columns: %s", e.name, width, n, l)
				} else if strings.HasPrefix(l, "┃") && n != limit {
					t.Errorf("%s at %d: the edge of the box is at %d: %s", e.name, width, n, l)
				}
				if strings.TrimRight(l, " ") != l {
					t.Errorf("%s at %d: ends in a space: %q", e.name, width, l)
				}
			}
		}
	}
}

// Colour may help; taking it away loses nothing.
func TestColourTakenAway(t *testing.T) {
	sgr := regexp.MustCompile("\x1b\\[[0-9;]*m")
	for _, e := range examples(t) {
		plain := string(Text(e.ws, TextOptions{Steps: true}))
		coloured := string(Text(e.ws, TextOptions{Steps: true, Colour: true}))
		if coloured == plain {
			t.Errorf("%s: no colour", e.name)
		}
		if got := sgr.ReplaceAllString(coloured, ""); got != plain {
			t.Errorf("%s: without its colours it is another text:\n%s", e.name, firstDifference([]byte(got), []byte(plain)))
		}
		if strings.Contains(plain, "\x1b") {
			t.Errorf("%s: an escape without colour", e.name)
		}
		for _, l := range strings.Split(coloured, "\n") {
			if n := strings.Count(l, endStyle); 2*n != strings.Count(l, "\x1b") {
				t.Errorf("%s: a style is left open: %q", e.name, l)
			}
		}
	}
}

// The quiet text has the draft, the cautions and the verdict, and no more.
func TestQuiet(t *testing.T) {
	ws := exampleNamed(t, "check")
	quiet := string(Text(ws, TextOptions{Quiet: true, Steps: true}))
	for _, want := range []string{"THE DRAFT", "CAUTIONS", "PROPOSED REGIMEN: DIFFERS", "Not a prescription"} {
		if !strings.Contains(quiet, want) {
			t.Errorf("no %q in the quiet text", want)
		}
	}
	for _, not := range []string{"THE PLANS", "STEPS", "SOURCES", "SYRINGE"} {
		if strings.Contains(quiet, not) {
			t.Errorf("%q in the quiet text", not)
		}
	}
}

// Everything on paper is in the record: a worksheet read back from its record
// sets the same text.
func TestTextFromRecord(t *testing.T) {
	for _, e := range examples(t) {
		record, err := JSON(e.ws)
		if err != nil {
			t.Fatal(err)
		}
		again, err := ReadRecord(record)
		if err != nil {
			t.Fatalf("%s: %v", e.name, err)
		}
		a, b := Text(e.ws, TextOptions{Steps: true}), Text(again, TextOptions{Steps: true})
		if string(a) != string(b) {
			t.Errorf("%s: %s", e.name, firstDifference(b, a))
		}
	}
}

// Every step, caution, source and plan of a record stands in its text.
func TestTextIsWhole(t *testing.T) {
	for _, e := range examples(t) {
		text := oneLine(strings.NewReplacer("┃", " ").Replace(string(Text(e.ws, TextOptions{Steps: true}))))
		want := func(what, s string) {
			if s = oneLine(paperUnits(s)); !strings.Contains(text, s) {
				t.Errorf("%s: %s is not in the text: %s", e.name, what, s)
			}
		}
		for _, c := range e.ws.Cautions {
			want("a caution", "["+levelWord(c.Level)+"] "+c.Text)
			want("its name", "["+c.Slug)
			want("its reason", c.Reason)
		}
		for _, d := range e.ws.Drafts {
			want("a source", d.Source)
			for _, s := range d.Steps {
				want("a step", s.Title+" "+s.Formula)
				want("a result", "= "+s.Result)
			}
			if len(e.ws.Drafts) > 1 {
				continue
			}
			for _, p := range d.Plans {
				want("a plan", planWords(p.Name))
				want("its dose", perKgPair(p.DosePerKg, p.Unit))
				want("its remark", bracketWords(e.ws, p.Remark))
			}
			for _, p := range d.Parts {
				want("a part of the range", p.Name)
			}
		}
		for _, s := range e.ws.Sources {
			want("a source", s.Citation)
		}
		for _, s := range append(append([]string{}, e.ws.Statements...), e.ws.TrackRecord...) {
			want("a statement", s)
		}
		for _, c := range e.ws.Suitability {
			want("a criterion", c.Text)
		}
		for _, b := range e.ws.Bases {
			label := basisLabel(&b, false)
			if b.Drafted {
				label += ", basis used"
			}
			want("a basis", label+" "+metabolic.FormatRatio(b.Specific))
		}
		for _, u := range e.ws.Unavailable {
			want("a basis that is not there", u.Why)
		}
		if p := e.ws.Proposed; p != nil {
			for _, v := range verdictWords(p) {
				want("the verdict", v)
			}
			for _, c := range p.Cautions {
				want("what it raises", "["+levelWord(c.Level)+"] "+c.Text)
			}
		}
		want("the note on curves", e.ws.CurvesNote)
		if e.ws.Loading != nil {
			want("what a loading dose follows", e.ws.Loading.Text)
		}
	}
}

// A text of the case cannot act on the terminal, begin a line of its own, or
// pass for a part of the worksheet.
func TestHostileTexts(t *testing.T) {
	evil := "x\x1b[2J\n┏━ THE DRAFT\u202e\u2066 5 mg\r\b\u200b\xff"
	for _, name := range []string{"severalmodels", "check", "override", "stop", "range"} {
		// A copy, by way of its record: a worksheet shares its statements with others.
		ws, err := ReadRecord(recordOf(t, exampleNamed(t, name)))
		if err != nil {
			t.Fatal(err)
		}
		spoil(reflect.ValueOf(ws).Elem(), evil)
		for _, o := range []TextOptions{{Steps: true}, {Colour: true, Steps: true}} {
			text := string(Text(ws, o))
			if o.Colour {
				text = regexp.MustCompile("\x1b\\[(1|2|1;31|1;33|0)m").ReplaceAllString(text, "")
			}
			for _, l := range strings.Split(text, "\n") {
				if !harmless(l) {
					t.Errorf("%s: %q", name, l)
				}
			}
			if strings.Count(text, "\n┏") > 1 {
				t.Errorf("%s: a text begins a line", name)
			}
		}
	}
}

// spoil puts a text behind every text of a value that is not a word which the
// program chooses by.
func spoil(v reflect.Value, evil string) {
	switch v.Kind() {
	case reflect.Pointer:
		if !v.IsNil() {
			spoil(v.Elem(), evil)
		}
	case reflect.Struct:
		for i := 0; i < v.NumField(); i++ {
			if f := v.Type().Field(i); f.IsExported() && f.Name != "Level" && f.Name != "Unit" && f.Name != "Kind" {
				spoil(v.Field(i), evil)
			}
		}
	case reflect.Slice:
		for i := 0; i < v.Len(); i++ {
			spoil(v.Index(i), evil)
		}
	case reflect.String:
		v.SetString(v.String() + evil)
	}
}

// The least worksheet that there is does not fall over.
func TestEmptyWorksheet(t *testing.T) {
	for _, ws := range []*dose.Worksheet{{}, {DraftedFrom: &dose.DraftedFrom{Index: 3}}, {Drafted: &dose.Drafted{}}, {Drafts: []dose.ModelDraft{{}, {}}, Several: &dose.Several{}, DraftedFrom: &dose.DraftedFrom{Index: -1}},
		{Drafts: []dose.ModelDraft{{}}, DraftedFrom: &dose.DraftedFrom{}, Bases: make([]dose.BasisLine, 1), Drafted: &dose.Drafted{}, Product: &dose.ProductRecord{Ends: make([]dose.Administration, 2)}, Curves: make([]dose.Curve, 2), Loading: &dose.Loading{}}} {
		if len(Text(ws, TextOptions{Steps: true})) == 0 {
			t.Error("nothing")
		}
	}
}

// What no example reaches, set into one that comes near.
func TestCorners(t *testing.T) {
	hours := func(h float64) *float64 { return &h }
	for _, k := range []struct {
		example string
		do      func(ws *dose.Worksheet)
		want    []string
	}{
		{"anteater", func(ws *dose.Worksheet) { ws.Drafted.Route = ""; ws.Drafts[0].Route = "" }, []string{"examplicillin 334 mg every 12 hours", "No route is given."}},
		{"anteater", func(ws *dose.Worksheet) { ws.Drug.Extraction, ws.Drug.Controlled = "low", true }, []string{"low extraction", "CONTROLLED"}},
		{"anteater", func(ws *dose.Worksheet) { ws.Drafted.ChosenBy = "case" }, []string{"Drafted: same interval, named in the case."}},
		{"anteater", func(ws *dose.Worksheet) { ws.Cautions = nil }, []string{"CAUTIONS: none raised, which is no evidence of safety", "Cautions: none raised, which is no evidence of safety."}},
		{"anteater", func(ws *dose.Worksheet) {
			ws.Product.Ends[0] = dose.Administration{AmountAsked: 0.001, Unit: "mg", Measure: "mL", Exact: 0.00002, BelowStep: true}
		}, []string{"How to measure it out: see SYRINGE AND COURSE.", "1 mcg is exactly 0.00002 mL: under one step, and no usual dilution can be measured either."}},
		{"infusion", func(ws *dose.Worksheet) {
			ws.Product.Pump[0] = dose.Pump{ExactMLPerH: 0.04, BelowStep: true, DiluteTo: 0.1, DilutePartIn: 10, TotalML: 1.2, Containers: 2,
				Dilution: &dose.Dilution{Factor: 10, Steps: []dose.DilutionStep{{TakeML: 1, AddML: 9, TotalML: 10, AmountPerML: 0.1}}, AmountPerML: 0.1, ExactML: 0.4, DrawML: 0.4, AmountGiven: 0.04}}
		}, []string{"= 0.4 mL/h of the product diluted 1 in 10 (40 mcg/h)", "Exactly 0.04 mL/h, under one step of the pump. Dilute 1 in 10:", "Take 1 mL of the product, add diluent 9 mL: 10 mL of 0.1 mg/mL.",
			"Set the pump to 0.4 mL/h (exactly 0.4 mL/h): 40 mcg/h, exactly as drafted.", "Over 1 day: 1.2 mL of the product, 2 containers."}},
		{"infusion", func(ws *dose.Worksheet) { ws.Product.Pump[0] = dose.Pump{ExactMLPerH: 0.0000001, BelowStep: true} },
			[]string{"How to measure it out: see SYRINGE AND COURSE.", "under one step of the pump, and no usual dilution can be set either."}},
		{"anteater", func(ws *dose.Worksheet) {
			ws.Published = []dose.PublishedDose{
				{CommonName: "southern tamandua", DoseTyped: ".5-1.0 g", Unit: "mg/kg", Relation: "order", Source: "a", IntervalH: hours(72)},
				{Species: "Ara ararauna", DosePerKg: &dose.Pair{2, 2}, Unit: "mg/kg/h", Relation: "other class", Source: "b", Route: "IV"},
				{CommonName: "brown-throated sloth", DosePerKg: &dose.Pair{2, 3}, Unit: "IU/kg", Relation: "", Source: "c"},
			}
		}, []string{"southern tamandua (same order): 0.5 to 1 g every 72 hours (3 days)", "Ara ararauna (of another class): 2 mg/kg/h IV continuous infusion", "brown-throated sloth: 2 to 3 units/kg once"}},
		{"anteater", func(ws *dose.Worksheet) { ws.Loading = &dose.Loading{Unit: "mg/kg", Text: "none is drafted"} }, []string{"No loading dose. none is drafted"}},
		{"anteater", func(ws *dose.Worksheet) { ws.Sources[0].Memory = true }, []string{"invented for this example (from memory)"}},
		{"severalmodels", func(ws *dose.Worksheet) { ws.Drafts[1].Kinship = "" }, []string{"none"}},
		{"check", func(ws *dose.Worksheet) {
			ws.Proposed.IntervalH, ws.Proposed.Ratios.Interval, ws.Proposed.RaisesStop = nil, 0, true
		}, []string{"DIFFERS from the draft, and raises a STOP", "not compared"}},
		{"check", func(ws *dose.Worksheet) { ws.Proposed.Differs = false }, []string{"PROPOSED REGIMEN: does not differ from the draft"}},
	} {
		ws := exampleNamed(t, k.example)
		k.do(ws)
		text := oneLine(strings.ReplaceAll(string(Text(ws, TextOptions{Steps: true})), "┃", " "))
		for _, want := range k.want {
			if !strings.Contains(text, want) {
				t.Errorf("%s: no %q", k.example, want)
			}
		}
	}
}

func TestWrapColumnsLaws(t *testing.T) {
	word := rapid.SampledFrom([]string{"the", "dose", "is", "10", "mg/kg,", "to", "18.9", "every", "12", "hours", "=", "×", "1,134.19", "kcal/day", "犬犬犬", "doi:10.1111/brv.12350-and-so-on-and-on", "a"})
	rapid.Check(t, func(t *rapid.T) {
		words := rapid.SliceOf(word).Draw(t, "words")
		width := rapid.IntRange(4, 60).Draw(t, "width")
		lines := wrapColumns(strings.Join(words, " "), width, width)
		for _, l := range lines {
			if columns(l) > width {
				t.Fatalf("%d columns of %d: %q", columns(l), width, l)
			}
		}
		squeezed := func(s []string) string { return strings.ReplaceAll(strings.Join(s, ""), " ", "") }
		if squeezed(lines) != squeezed(words) {
			t.Fatalf("%q became %q", words, lines)
		}
		// A number is parted from its unit only where both do not fit on a line.
		for i := 1; i < len(lines); i++ {
			before, after := strings.Fields(lines[i-1]), strings.Fields(lines[i])
			if len(before) == 0 || len(after) == 0 {
				continue
			}
			n, u := before[len(before)-1], after[0]
			if bondBetween(n, u) == tight && columns(n)+1+columns(u) <= width {
				t.Fatalf("%q and %q are parted: %q", n, u, lines)
			}
		}
	})
}

func TestWrapColumns(t *testing.T) {
	for _, k := range []struct {
		text  string
		width int
		want  []string
	}{
		{"", 10, []string{""}},
		{"give 10 mg/kg now", 8, []string{"give", "10 mg/kg", "now"}},
		{"nine times in ten 3.27 to 122 mg/kg.", 30, []string{"nine times in ten", "3.27 to 122 mg/kg."}},
		{"from end to end", 8, []string{"from end", "to end"}},
		{"abcdefghij", 4, []string{"abcd", "efgh", "ij"}},
	} {
		if got := wrapColumns(k.text, k.width, k.width); !reflect.DeepEqual(got, k.want) {
			t.Errorf("%q at %d: %q, want %q", k.text, k.width, got, k.want)
		}
	}
}

func TestAlignFigures(t *testing.T) {
	for _, k := range []struct {
		cells, want []string
		right       bool
	}{
		{[]string{"8.14 mg/kg", "10 mg/kg", "", "1,200.5 mg/kg"}, []string{"    8.14 mg/kg", "   10 mg/kg", "", "1,200.5 mg/kg"}, false},
		{[]string{"9.47 to 18.9 mg/kg", "10 mg/kg"}, []string{" 9.47 to 18.9 mg/kg", "10 mg/kg"}, false},
		{[]string{"750 mcg", "1.5 mg"}, []string{"750 mcg", "1.5 mg"}, true}, // never point under point across units
		{[]string{"144 to 775 mg", "42.7 mg to 2.61 g"}, []string{"144 to 775 mg", "42.7 mg to 2.61 g"}, true},
		{[]string{"equal", "0.814 times"}, []string{"equal", "0.814 times"}, false},
		{[]string{"1", "12", "3.5"}, []string{" 1", "12", " 3.5"}, false},
		{[]string{"", ""}, []string{"", ""}, false},
	} {
		got, right := alignFigures(k.cells)
		if !reflect.DeepEqual(got, k.want) || right != k.right {
			t.Errorf("%q: %q %v, want %q %v", k.cells, got, right, k.want, k.right)
		}
	}
}

// Points stand below one another, and nothing but spaces is added.
func TestAlignFiguresLaws(t *testing.T) {
	number := rapid.Custom(func(t *rapid.T) string {
		return metabolic.Significant(math.Exp(rapid.Float64Range(-9, 16).Draw(t, "ln")), 3)
	})
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.SliceOfN(number, 1, 8).Draw(t, "numbers")
		cells := make([]string, len(n))
		for i := range n {
			cells[i] = n[i] + " mg/kg"
			if i%3 == 1 {
				cells[i] = n[i] + " to " + n[0] + " mg/kg"
			}
		}
		got, right := alignFigures(cells)
		if right {
			t.Fatal("set to the right")
		}
		point := -1
		for i := range got {
			if strings.TrimLeft(got[i], " ") != cells[i] {
				t.Fatalf("%q became %q", cells[i], got[i])
			}
			// The point, or where the first number ends.
			at := strings.IndexFunc(strings.TrimLeft(got[i], " "), func(r rune) bool { return r == '.' || r == ' ' }) + len(got[i]) - len(cells[i])
			if point >= 0 && at != point {
				t.Fatalf("points at %d and %d: %q", point, at, got)
			}
			point = at
		}
	})
}

// A table is never wider than its width where its widest column allows, and is
// never broken inside a cell.
func TestTableParts(t *testing.T) {
	tb := &table{head: []string{"", "first", "empty", "second\nhead"}}
	tb.row("label", strings.Repeat("a", 30), "", strings.Repeat("b", 30))
	for _, k := range []struct {
		width int
		want  string
	}{
		{80, "" +
			"                                         second\n" +
			"         first                           head\n" +
			"  label  aaaaaaaaaaaaaaaaaaaaaaaaaaaaaa  bbbbbbbbbbbbbbbbbbbbbbbbbbbbbb\n"},
		{60, "" +
			"         first\n" +
			"  label  aaaaaaaaaaaaaaaaaaaaaaaaaaaaaa\n" +
			"\n" +
			"         second\n" +
			"         head\n" +
			"  label  bbbbbbbbbbbbbbbbbbbbbbbbbbbbbb\n"},
	} {
		term := &terminal{width: k.width}
		term.table(tb)
		if got := term.b.String(); got != k.want {
			t.Errorf("at %d:\n%s", k.width, got)
		}
	}
}

func TestStripLaws(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		v := rapid.SliceOfN(rapid.Custom(func(t *rapid.T) float64 { return math.Exp(rapid.Float64Range(-10, 14).Draw(t, "ln")) }), 2, 12).Draw(t, "values")
		s := newStrip(rapid.IntRange(10, 90).Draw(t, "width"), v...)
		for i := range v {
			for k := range v {
				if v[i] < v[k] && s.at(v[i]) > s.at(v[k]) {
					t.Fatalf("%v stands right of %v", v[i], v[k])
				}
			}
			if row := s.row(v[i], v[i], 'o', '-'); columns(row) != s.at(v[i])+1 || strings.Count(row, "o") != 1 {
				t.Fatalf("one value is %q", row)
			}
		}
		low, high := math.Min(v[0], v[1]), math.Max(v[0], v[1])
		if row := s.row(low, high, 'o', '-'); columns(row) > s.width || strings.Trim(strings.TrimSpace(row), "-o") != "" {
			t.Fatalf("two values are %q", row)
		}
		numbers, ticks := s.axis()
		if columns(numbers) > s.width || columns(ticks) != s.width {
			t.Fatalf("axis\n%q\n%q of %d", numbers, ticks, s.width)
		}
	})
	// Equal ratios are equally long: that is what a log axis is for.
	s := newStrip(81, 1, 100)
	if a, b := s.at(10)-s.at(1), s.at(100)-s.at(10); a-b > 1 || b-a > 1 {
		t.Errorf("1 to 10 is %d wide, 10 to 100 %d", a, b)
	}
	if s := newStrip(40); s.row(1, 2, 'o', '-') != "" {
		t.Error("a strip without values")
	}
	if s := newStrip(40, 0, math.Inf(1), -3); s.width != 0 {
		t.Error("a strip of nothing that is positive")
	}
}

// The strip shows a value where its axis says: the mark of a labelled number
// stands at its tick.
func TestStripAxis(t *testing.T) {
	s := newStrip(60, 1, 1000)
	numbers, ticks := s.axis()
	for _, v := range []float64{1, 10, 100, 1000} {
		label := metabolic.Significant(v, 1)
		at := s.at(v)
		if []rune(ticks)[at] != '┼' {
			t.Errorf("no tick at %v: %s", v, ticks)
		}
		if !regexp.MustCompile(`(^| )` + label + `( |$)`).MatchString(numbers) {
			t.Errorf("no %s in %q", label, numbers)
		}
	}
}

func TestFitText(t *testing.T) {
	table := "species,mass (kg),clearance (mL/min),volume (L)\nrabbit,3,12,1.1\ndog,10,30,3.5\nsheep,20,55,8\n"
	in, err := dose.ReadFitTable("drug.csv", []byte(table))
	if err != nil {
		t.Fatal(err)
	}
	ci, _, err := dose.ReadCase("case.yaml", []byte(`
date: 2026-12-10
patient: {species: giant anteater, mass: 41 kg}
drug: {name: samplazole}
models:
  - {species: dog, mass: 10 kg, dose: 10 mg/kg, interval: q12h, half_life: 1.4 h, volume: 0.35 L/kg, source: invented for this test}
`))
	if err != nil {
		t.Fatal(err)
	}
	ci.Fit = &dose.FitCase{Table: *in}
	c, err := ci.Check()
	if err != nil {
		t.Fatal(err)
	}
	ws, err := dose.Draft(c)
	if err != nil {
		t.Fatal(err)
	}
	f := ws.Fit
	sheet := oneLine(string(Text(ws, TextOptions{Steps: true})))
	alone := oneLine(string(FitText(f, TextOptions{})))
	number := func(v float64) string { return metabolic.Significant(v, 3) + " L/h" }
	for _, want := range []string{
		"over 3 animals", "b = " + metabolic.FormatRatio(f.B), number(f.AtTarget.Value), metabolic.Significant(f.AtTarget.PI95[0], 3) + " to " + number(f.AtTarget.PI95[1]),
		"LINE FITTED TO DATA: VOLUME", "rabbit 3 kg", fmt.Sprintf("b = %s", metabolic.FormatRatio(f.Fixed.Exponent)),
	} {
		if !strings.Contains(sheet, want) {
			t.Errorf("no %q on the worksheet", want)
		}
		if !strings.Contains(alone, want) {
			t.Errorf("no %q in the text of the fit", want)
		}
	}
	if len(f.Cautions) < 2 {
		t.Errorf("%d cautions: the test shows nothing of them", len(f.Cautions))
	}
	for _, c := range f.Cautions {
		if !strings.Contains(alone, oneLine(c.Text)) {
			t.Errorf("no caution %s", c.Slug)
		}
	}
	if !strings.Contains(sheet, "Drafted: fitted line, by the line fitted to data.") {
		t.Error("who chose the plan is not said")
	}
	for _, s := range penSlips {
		for _, l := range strings.Split(string(Text(ws, TextOptions{Steps: true}))+string(FitText(f, TextOptions{})), "\n") {
			if regexp.MustCompile(s.pattern).MatchString(l) {
				t.Errorf("%s: %s", s.what, l)
			}
		}
	}
	if quiet := string(FitText(f, TextOptions{Quiet: true})); strings.Contains(quiet, "THE ANIMALS") {
		t.Error("the quiet text lists the animals")
	}
}

func BenchmarkText(b *testing.B) {
	ws := exampleNamed(b, "severalmodels")
	for b.Loop() {
		Text(ws, TextOptions{Steps: true})
	}
}

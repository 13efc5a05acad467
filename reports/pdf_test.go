package reports

import (
	"bytes"
	"errors"
	"fmt"
	"regexp"
	"slices"
	"strings"
	"testing"

	"github.com/pdfcpu/pdfcpu/pkg/api"
	"github.com/pdfcpu/pdfcpu/pkg/pdfcpu/model"

	"tayra/dose"
)

// stressCases reach for the edges of the page: names and reasons without end,
// dozens of cautions, six models, amounts of eight figures.
var stressCases = map[string]string{
	"long": `
case: LARKMOOR-WILDLIFE-HOSPITAL-2026-000000000412-B-SECOND-VISIT-OF-THE-YEAR
date: 2026-11-30
prepared_by: duty veterinarian of the night, Dr Ana María Fernández-Villalobos, with the student on call
patient:
  name: Marisol Esperanza de la Sierra Nevada y del Río Grande, called Mari by her keepers at Larkmoor
  species: Loxodonta africana
  mass: 3000-4600 kg
  temperature: 39 °C
  stage: juvenile
  condition: [dehydrated, pregnant, lactating, obese]
  food_producing: true
drug:
  name: examplicillin benzathine trihydrate with a very long trade name in seven words
  class: penicillin
  elimination: mixed
  activity: time
  protein_binding: 95 %
  active_secretion: yes
  enterohepatic_recycling: yes
  saturable_kinetics: yes
  margin: wide
  controlled: true
models:
  - {species: dog, mass: 18 kg, dose: 10 mg/kg, interval: q12h, route: PO, half_life: 1.3 h, source: practice protocol 7}
  - {species: cat, mass: 4.2 kg, dose: 11 mg/kg, interval: q12h, route: PO, source: practice protocol 8}
  - {species: sheep, mass: 50-70 kg, dose: 7-9 mg/kg, interval: q12h, route: PO, source: flock plan 2}
  - {species: horse, mass: 480 kg, dose: 5 mg/kg, interval: q24h, route: PO, source: stable book}
  - {species: human, mass: 70 kg, dose: 500 mg, interval: q8h, route: PO, source: "a very long citation that goes on and on over several lines, because the person who wrote it believed that all authors and the whole title and the publisher and the address https://example.org/a/very/long/address/that/has/no/space/in/it/and/must/be/broken/somewhere/or/it/runs/off/the/page are needed"}
  - {species: rat, mass: 250 g, dose: 30 mg/kg, interval: q8h, route: PO, source: rat room}
published:
  - {species: Elephas maximus, dose: 4 mg/kg, interval: q24h, source: invented for this test}
  - {species: horse, dose: 5 mg/kg, interval: q24h, route: PO, source: invented for this test}
proposed: {dose: 8 mg/kg, interval: q24h}
product: {strength: 300 mg/mL, step: 1 mL, largest_per_site: 20 mL, days: 14, container: 100 mL}
`,
	"reasons": `
case: LW-0505
date: 2026-11-30
prepared_by: duty veterinarian
patient: {species: blue-and-yellow macaw, mass: 0.98 kg, stage: neonate, condition: [torpid, renal]}
drug: {name: demoxacin, class: quinolone, elimination: renal, margin: narrow, formulation: depot}
models:
  - {species: dog, mass: 20 kg, dose: 5-8 mg/kg, interval: q24h, route: PO, source: invented for this test}
overrides:
  narrow-margin: there is no other drug, and the animal will be watched day and night by two people who know what to look for, with the antidote drawn up beside it and the telephone number of the university on the door; see the ethics minute of the day
  cross-class: no dose in any bird was found
  neonate: it is four weeks old, and the kidney works
  torpid: it was cold, and is warm again
  clearing-organ: the urea is down again
  depot: the depot form is all there is, and will be given as a single dose
`,
}

// fittedCase is a worksheet whose dose comes from a line fitted to a table of
// n animals.
func fittedCase(t testing.TB, n int) *dose.Worksheet {
	t.Helper()
	table := "species,mass (kg),clearance (mL/min),volume (L)\nrat,0.25,2,0.1\nrabbit,3,12,1.1\ndog,10,30,3.5\nhorse,500,600,160\n"
	for i := 4; i < n; i++ {
		kg := 0.3 + float64(i)
		table += fmt.Sprintf("Speciosus numerus %d,%.4g,%.4g,%.4g\n", i, kg, 6*kg+float64(i%7), 0.35*kg)
	}
	in, err := dose.ReadFitTable("drug.csv", []byte(table))
	if err != nil {
		t.Fatal(err)
	}
	c, _, err := dose.ReadCase("case.yaml", []byte(`
case: LW-0600
date: 2026-12-10
patient: {species: giant anteater, mass: 41 kg}
drug: {name: samplazole}
models:
  - {species: dog, mass: 10 kg, dose: 10 mg/kg, interval: q12h, route: SC, half_life: 1.4 h, volume: 0.35 L/kg, source: invented for this test}
`))
	if err != nil {
		t.Fatal(err)
	}
	c.Fit = &dose.FitCase{Table: *in}
	checked, err := c.Check()
	if err != nil {
		t.Fatal(err)
	}
	ws, err := dose.Draft(checked)
	if err != nil {
		t.Fatal(err)
	}
	return ws
}

// paperExamples are all examples, those of the edges of the page, and a fit.
func paperExamples(t testing.TB) []example {
	t.Helper()
	out := examples(t)
	for name, text := range stressCases {
		out = append(out, example{name: name, data: []byte(text), ws: worksheetOf(t, name+".yaml", []byte(text))})
	}
	out = append(out, example{name: "fit", ws: fittedCase(t, 4)}, example{name: "fit of many", ws: fittedCase(t, 300)})
	slices.SortFunc(out, func(a, b example) int { return strings.Compare(a.name, b.name) })
	return out
}

func digestOf(t testing.TB, ws *dose.Worksheet) string {
	t.Helper()
	record, err := JSON(ws)
	if err != nil {
		t.Fatal(err)
	}
	return Digest(record)
}

// sheetOf lays a worksheet out without drawing it.
func sheetOf(t testing.TB, ws *dose.Worksheet, p Paper) (*sheet, layout) {
	t.Helper()
	s := newSheet(ws, p, digestOf(t, ws))
	s.whole()
	_, height := p.Size()
	l, err := s.doc.layOut(height)
	if err != nil {
		t.Fatal(err)
	}
	return s, l
}

// bandTexts are the texts of bands, a string for each line.
func bandTexts(bands []band) []string {
	var out []string
	for i := range bands {
		if len(bands[i].labels) > 0 {
			out = append(out, strings.Join(pageText([]placing{{band: &bands[i]}}), " "))
		}
	}
	return out
}

// bodyLines are the lines of the body of a page.
func bodyLines(page []placing) []string {
	var out []string
	for _, p := range page {
		if len(p.band.labels) > 0 {
			out = append(out, strings.Join(pageText([]placing{p}), " "))
		}
	}
	return out
}

func TestPDFOfEveryExample(t *testing.T) {
	api.DisableConfigDir()
	for _, e := range paperExamples(t) {
		for _, paper := range []Paper{A4, Letter} {
			b, err := PDF(e.ws, PDFOptions{Paper: paper, Case: e.data})
			if err != nil {
				t.Errorf("%s on %v: %v", e.name, paper, err)
				continue
			}
			ctx := readStrictly(t, b)
			if ctx.PageCount < 3 || ctx.PageCount > 25 {
				t.Errorf("%s on %v: %d pages", e.name, paper, ctx.PageCount)
			}
			if want := "Worksheet " + caseWords(e.ws) + ", " + patientName(&e.ws.Patient); ctx.Title != want {
				t.Errorf("%s: title %q", e.name, ctx.Title)
			}
			again, err := PDF(e.ws, PDFOptions{Paper: paper, Case: e.data})
			if err != nil || !bytes.Equal(again, b) {
				t.Errorf("%s on %v: another run gave other bytes (%v)", e.name, paper, err)
			}
			record, err := JSON(e.ws)
			if err != nil {
				t.Fatal(err)
			}
			want := map[string][]byte{attachedRecord: record, attachedCase: e.data}
			if e.data == nil {
				want[attachedCase] = dose.WriteCase(e.ws.Input)
			}
			got, err := api.ExtractAttachmentsRaw(bytes.NewReader(b), "", nil, model.NewDefaultConfiguration())
			if err != nil {
				t.Fatal(err)
			}
			for _, a := range got {
				var content bytes.Buffer
				if _, err := content.ReadFrom(a); err != nil {
					t.Fatal(err)
				}
				if !bytes.Equal(content.Bytes(), want[a.FileName]) {
					t.Errorf("%s: %s came back as %d bytes, want %d", e.name, a.FileName, content.Len(), len(want[a.FileName]))
				}
				delete(want, a.FileName)
			}
			if len(want) > 0 {
				t.Errorf("%s: %d files are not attached", e.name, len(want))
			}
		}
	}
}

// Every page says what it is, whose, and that it is a draft; nothing lies on
// anything else; and no page ends inside what belongs together: a step and its
// result, a caution, a heading and what follows, the head of a table and its
// first rows.
func TestPDFPages(t *testing.T) {
	for _, e := range paperExamples(t) {
		for _, paper := range []Paper{A4, Letter} {
			s, l := sheetOf(t, e.ws, paper)
			checkPages(t, s.doc, l)
			for i := range l.pages {
				head, foot := strings.Join(bandTexts(l.heads[i]), "\n"), strings.Join(bandTexts(l.feet[i]), "\n")
				mass := massWords(e.ws.Patient.MassKg, e.ws.Patient.MassLowKg, e.ws.Patient.MassHighKg)
				for _, want := range []string{
					fmt.Sprintf("page %d of %d", i+1, len(l.pages)), shortened(caseWords(e.ws), headLetters), animalWords(e.ws.Patient.CommonName, e.ws.Patient.Species), e.ws.Date, mass,
				} {
					if !strings.Contains(strings.ReplaceAll(head, "\n", " "), want) {
						t.Errorf("%s, page %d: no %q in the head: %s", e.name, i+1, want, head)
					}
				}
				for _, want := range []string{"DRAFT for a licensed veterinarian's judgement. Not a prescription.", "Local law on off-label use", "tayra " + dose.Version, "record " + digestOf(t, e.ws)} {
					if !strings.Contains(foot, want) {
						t.Errorf("%s, page %d: no %q in the foot: %s", e.name, i+1, want, foot)
					}
				}
				for _, c := range overridden(e.ws) {
					if !strings.Contains(strings.ReplaceAll(foot, "\n", " "), c.Slug) {
						t.Errorf("%s, page %d: the foot does not name the override of %s", e.name, i+1, c.Slug)
					}
				}
				if last := l.pages[i][len(l.pages[i])-1].band; last.keep {
					t.Errorf("%s on %v: page %d ends inside what belongs together, at %q", e.name, paper, i+1, pageText([]placing{{band: last}}))
				}
			}
		}
	}
}

// The first page alone can be acted on: it has the dose with both ranges, the
// gravest caution in words, and the name of every caution that asks for a
// decision.
func TestPDFFirstPage(t *testing.T) {
	for _, e := range paperExamples(t) {
		_, l := sheetOf(t, e.ws, Letter)
		first := strings.Join(bodyLines(l.pages[0]), " ")
		var want []string
		if d := e.ws.Drafted; d != nil {
			want = append(want, orderWords(e.ws), giveWords(e.ws.Product, d.Unit), perKgPair(d.DosePerKg, d.Unit), perKgRange(d.Range50, d.Unit), perKgRange(d.Range90, d.Unit),
				amountRange(d.Range90Amount, d.Unit), "Worst caution: "+levelWord(e.ws.Cautions[0].Level), outrankedWords(e.ws), d.Disagreement)
			want = append(want, massEnds(e.ws)...)
			order, about := loadingWords(e.ws)
			want = append(want, order, about)
			if m := e.ws.Drafts[e.ws.DraftedFrom.Index]; m.VolumeRange90 != nil {
				want = append(want, perKgRange(*m.VolumeRange90, m.Unit))
				if startLow(e.ws) {
					want = append(want, "Start at the low end.")
				}
			}
		} else {
			want = append(want, "STOP: no dose is drafted")
		}
		for _, c := range e.ws.Cautions {
			if c.Level == dose.Stop || c.Level == dose.Warn && e.ws.Drafted != nil {
				want = append(want, c.Slug)
			}
		}
		for _, w := range want {
			if !strings.Contains(first, w) {
				t.Errorf("%s: no %q on the first page", e.name, w)
			}
		}
	}
}

// Every caution stands with its whole sentence, before the plans, as large as
// the text.
func TestPDFCautions(t *testing.T) {
	for _, e := range paperExamples(t) {
		_, l := sheetOf(t, e.ws, A4)
		var all []string
		for _, page := range l.pages {
			all = append(all, bodyLines(page)...)
		}
		text := strings.Join(all, " ")
		before, _, found := strings.Cut(text, "The case Case")
		if !found {
			t.Fatalf("%s: no part about the case", e.name)
		}
		for i := range e.ws.Cautions {
			c := &e.ws.Cautions[i]
			if !strings.Contains(before, levelWord(c.Level)+" "+c.Slug+": "+onOneLine(paperText(c.Text))) {
				t.Errorf("%s: %s is not in front of the plans", e.name, c.Slug)
			}
			if c.Overridden && !strings.Contains(before, c.Reason) {
				t.Errorf("%s: the reason for %s is not beside it", e.name, c.Slug)
			}
		}
	}
}

// doses matches an amount of drug.
var doses = regexp.MustCompile(`[0-9] ?(mg|mcg|units?|IU|mL)\b`)

// stoppedLines returns the lines of a stopped worksheet that name an amount of
// drug and are neither a dose in print that the case cites nor the sentence of
// a caution.
func stoppedLines(ws *dose.Worksheet, lines []string) []string {
	var out []string
	for _, line := range lines {
		if !doses.MatchString(line) {
			continue
		}
		allowed := false
		for i := range ws.Published {
			if p := ws.Published[i].DosePerKg; p != nil {
				allowed = allowed || strings.Contains(line, perKgPair(*p, ws.Published[i].Unit))
			}
		}
		for i := range ws.Cautions {
			c := strings.Join(strings.Fields(paperText(ws.Cautions[i].Text)), " ")
			words := strings.Fields(line)
			allowed = allowed || len(words) > 4 && strings.Contains(c, strings.Join(words[2:len(words)-1], " "))
		}
		if p := ws.Product; p != nil { // the strength is on the label, not a dose
			for _, own := range append([]string{strengthWords(p, "mg/kg"), strengthWords(p, "IU/kg")}, p.Text...) {
				allowed = allowed || strings.Contains(line, own) || strings.Contains(strings.Join(strings.Fields(own), " "), strings.TrimSpace(line))
			}
		}
		if !allowed {
			out = append(out, line)
		}
	}
	return out
}

// After a stop no number of a dose stands on paper.
func TestPDFAfterAStop(t *testing.T) {
	n := 0
	for _, e := range paperExamples(t) {
		if e.ws.Drafted != nil {
			continue
		}
		n++
		_, l := sheetOf(t, e.ws, A4)
		for i, page := range l.pages {
			for _, line := range stoppedLines(e.ws, bodyLines(page)) {
				t.Errorf("%s, page %d: a dose after a stop: %s", e.name, i+1, line)
			}
		}
		for _, p := range l.pages[0] {
			if p.band.frame != nil && strings.ContainsAny(strings.Join(pageText([]placing{p}), ""), "0123456789") && strings.Contains(strings.Join(pageText([]placing{p}), ""), "kg") {
				t.Errorf("%s: a number in the box: %s", e.name, pageText([]placing{p}))
			}
		}
	}
	if n < 3 {
		t.Errorf("%d examples stop", n)
	}
}

func TestPDFSlips(t *testing.T) {
	for _, e := range paperExamples(t) {
		_, l := sheetOf(t, e.ws, A4)
		var lines []string
		for i, page := range l.pages {
			lines = append(append(append(lines, bodyLines(page)...), bandTexts(l.heads[i])...), bandTexts(l.feet[i])...)
		}
		for _, s := range penSlips {
			re := regexp.MustCompile(s.pattern)
			for _, line := range lines {
				if re.MatchString(line) {
					t.Errorf("%s: %s: %s", e.name, s.what, line)
				}
			}
		}
	}
}

// A text that cannot be printed is named by its key of the case file, with its
// place; one on several lines is set on one.
func TestPDFLetterErrors(t *testing.T) {
	for _, k := range []struct {
		spoil func(*dose.CaseInput)
		want  string
	}{
		{func(c *dose.CaseInput) { c.Patient.Name.Text = "Mimi 🐼" }, "anteater.yaml:6:9: patient.name: letter 6: "},
		{func(c *dose.CaseInput) { c.PreparedBy.Text = "王" }, "anteater.yaml:4:14: prepared_by: letter 1: "},
		{func(c *dose.CaseInput) { c.Models[0].Source = dose.E("ward \u202Ebook") }, "anteater.yaml: models[0].source: letter 6: "},
		{func(c *dose.CaseInput) {
			c.Overrides = []dose.NamedEntry{{Name: dose.E("narrow-margin"), Value: dose.E("ok \x01")}}
		}, "overrides.narrow-margin: letter 4: "},
	} {
		ws := exampleNamed(t, "anteater")
		ws.Input.File = "anteater.yaml"
		k.spoil(ws.Input)
		_, err := PDF(ws, PDFOptions{})
		var letter *LetterError
		if !errors.As(err, &letter) || !strings.Contains(err.Error(), k.want) {
			t.Errorf("%v, want %q", err, k.want)
		}
	}
	ws := exampleNamed(t, "anteater")
	ws.Patient.Name, ws.Input.Patient.Name.Text = "Mari\nsol", "Mari\nsol"
	if _, err := PDF(ws, PDFOptions{}); err != nil {
		t.Error(err)
	}
	ws.Date = "30 November"
	if _, err := PDF(ws, PDFOptions{}); err == nil || !strings.Contains(err.Error(), "30 November") {
		t.Errorf("a date that is none: %v", err)
	}
}

// A record that was read back, of whatever worth, is drawn without its curves
// or refused, and never ends the program.
func TestPDFOfReadRecord(t *testing.T) {
	for _, e := range paperExamples(t) {
		b, err := JSON(e.ws)
		if err != nil {
			t.Fatal(err)
		}
		ws, err := ReadRecord(b)
		if err != nil {
			t.Fatal(err)
		}
		if _, err := PDF(ws, PDFOptions{}); err != nil {
			t.Errorf("%s: %v", e.name, err)
		}
	}
	for _, ws := range []*dose.Worksheet{{}, {Date: "2026-11-30"}, {Date: "2026-11-30", Drafted: &dose.Drafted{}, DraftedFrom: &dose.DraftedFrom{Index: 4}}} {
		PDF(ws, PDFOptions{}) // an error or a sheet; no panic
	}
}

// A line without a case is set with its cautions, and without a dose.
func TestFitPDF(t *testing.T) {
	r := fittedCase(t, 4).Fit
	table := []byte("species,mass\n")
	b, err := FitPDF(r, FitPDFOptions{Date: "2026-12-10", Table: table})
	if err != nil {
		t.Fatal(err)
	}
	readStrictly(t, b)
	again, err := FitPDF(r, FitPDFOptions{Date: "2026-12-10", Table: table})
	if err != nil || !bytes.Equal(again, b) {
		t.Errorf("another run gave other bytes (%v)", err)
	}
	if _, err := FitPDF(r, FitPDFOptions{}); err == nil {
		t.Error("a sheet without a date")
	}
	if other, err := FitPDF(r, FitPDFOptions{Date: "2026-12-10", Paper: Letter}); err != nil || bytes.Equal(other, b) {
		t.Errorf("the paper changes nothing (%v)", err)
	}
}

// Powers are raised and indices lowered, where the fonts have all letters.
func TestPaperFormula(t *testing.T) {
	for in, want := range map[string]string{
		"B = 70·W^0.75 kcal/day":         "B = 70·W⁰·⁷⁵ kcal/day",
		"R = Bt / Bm":                    "R = Bₜ / Bₘ",
		"CL = a·W^b":                     "CL = a·Wᵇ",
		"f = Q10^((T − T0)/10)":          "f = Q₁₀^((T − T₀)/10)",
		"(kg)^(-0.25)":                   "(kg)⁻⁰·²⁵",
		"(W^0.75)":                       "(W⁰·⁷⁵)",
		"K·(W in g)^(2/3)":               "K·(W in g)^(2/3)",
		"√((0.16·ln M)² + σm² + σt²)":    "√((0.16·ln M)² + σₘ² + σₜ²)",
		"2 IU/kg":                        "2 units/kg",
		"Bettongia, Wtx":                 "Bettongia, Wtx",
		"63.6 J/h per g^0.76":            "63.6 J/h per g⁰·⁷⁶",
		"10^5":                           "10⁵",
		"d' = d·S":                       "d' = d·S",
		"Wt = √(low × high)":             "Wₜ = √(low × high)",
		"B0·(W/W0)^0.75, measured at W0": "B₀·(W/W₀)⁰·⁷⁵, measured at W₀",
	} {
		if got := paperFormula(in); got != want {
			t.Errorf("%q, want %q", got, want)
		}
		if _, err := CheckText("formula", want); err != nil {
			t.Error(err)
		}
	}
}

func TestShortened(t *testing.T) {
	for _, k := range []struct {
		text string
		n    int
		want string
	}{
		{"short", 10, "short"},
		{"just as long", 12, "just as long"},
		{"one word too many", 14, "one word too…"},
		{"oneverylongwordwithoutaspace", 10, "oneverylo…"},
		{"ends in a comma, and more", 16, "ends in a comma…"},
	} {
		if got := shortened(k.text, k.n); got != k.want {
			t.Errorf("%q, want %q", got, k.want)
		}
	}
}

// benchSheet is the worksheet of the benchmarks, and its texts by page.
func benchSheet(b *testing.B) (*dose.Worksheet, [][]string) {
	ws := exampleNamed(b, "anteater")
	_, l := sheetOf(b, ws, A4)
	var lines [][]string
	for i, page := range l.pages {
		lines = append(lines, append(append(bandTexts(l.heads[i]), bodyLines(page)...), bandTexts(l.feet[i])...))
	}
	return ws, lines
}

// BenchmarkPDF is a whole worksheet with its figures, digest and attachments;
// BenchmarkPDFSameLines is the library alone with the same fonts, as many
// pages, and the same texts, a call for each line.
func BenchmarkPDF(b *testing.B) {
	ws, _ := benchSheet(b)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := PDF(ws, PDFOptions{}); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkPDFSameLines(b *testing.B) {
	_, lines := benchSheet(b)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := barePDF(lines); err != nil {
			b.Fatal(err)
		}
	}
}

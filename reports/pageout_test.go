package reports

import (
	"bytes"
	"errors"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/jung-kurt/gofpdf"
	"github.com/pdfcpu/pdfcpu/pkg/api"
	"github.com/pdfcpu/pdfcpu/pkg/pdfcpu/model"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

func attachedProperties() properties {
	pr := sampleProperties
	pr.attached = []attachment{
		{name: "record.json", description: "the record of this worksheet, τ½ and all", content: []byte(`{"format": "tayra-worksheet/1"}`)},
		{name: "case.yaml", description: "the case as written", content: []byte("case: LW-0412\n")},
	}
	return pr
}

// readStrictly reads a PDF as the strict mode of pdfcpu does.
func readStrictly(t *testing.T, b []byte) *model.Context {
	t.Helper()
	api.DisableConfigDir() // or it writes a folder into the user's home
	conf := model.NewDefaultConfiguration()
	conf.ValidationMode = model.ValidationStrict
	ctx, err := api.ReadAndValidate(bytes.NewReader(b), conf)
	if err != nil {
		t.Fatal(err)
	}
	return ctx
}

func TestRenderIsValidPDF(t *testing.T) {
	for _, paper := range []Paper{A4, Letter} {
		b, err := sampleDocument(t, paper).render(attachedProperties())
		if err != nil {
			t.Fatal(err)
		}
		if !bytes.HasPrefix(b, []byte("%PDF-1.7\n")) {
			t.Errorf("begins with %q", b[:9])
		}
		ctx := readStrictly(t, b)
		if ctx.PageCount != 5 {
			t.Errorf("%v: %d pages", paper, ctx.PageCount)
		}
		for got, want := range map[string]string{ctx.Title: sampleProperties.title, ctx.Subject: sampleProperties.subject, ctx.Producer: sampleProperties.producer} {
			if got != want {
				t.Errorf("a property reads %q, want %q", got, want)
			}
		}
		if ctx.Author != "" {
			t.Errorf("an author nobody set: %q", ctx.Author)
		}
		if len(ctx.Names["EmbeddedFiles"].Kids)+len(ctx.Names["EmbeddedFiles"].Names) == 0 {
			t.Error("no file is attached")
		}
	}
}

// Files of any bytes, an empty one among them, come back as they were.
func TestAttachmentsComeBack(t *testing.T) {
	api.DisableConfigDir()
	every := make([]byte, 256*300)
	for i := range every {
		every[i] = byte(i)
	}
	pr := sampleProperties
	want := map[string][]byte{"record.json": []byte(`{"name": "Zürich (τ½) \\"}`), "every.bin": every, "empty": {}, "straße τ.txt": []byte("x")}
	for name, content := range want {
		pr.attached = append(pr.attached, attachment{name: name, content: content})
	}
	d := newDocument(A4)
	d.body.para(plain("text"))
	b, err := d.render(pr)
	if err != nil {
		t.Fatal(err)
	}
	readStrictly(t, b)
	got, err := api.ExtractAttachmentsRaw(bytes.NewReader(b), "", nil, model.NewDefaultConfiguration())
	if err != nil {
		t.Fatal(err)
	}
	for _, a := range got {
		var content bytes.Buffer
		if _, err := content.ReadFrom(a); err != nil {
			t.Fatal(err)
		}
		if w, ok := want[a.FileName]; !ok || !bytes.Equal(w, content.Bytes()) {
			t.Errorf("%q came back as %d bytes, want %d", a.FileName, content.Len(), len(w))
		}
		delete(want, a.FileName)
	}
	for name := range want {
		t.Errorf("%q did not come back", name)
	}
}

// The same document gives the same bytes, also when many are drawn at once,
// and another date gives others.
func TestRenderTwiceSameBytes(t *testing.T) {
	draw := func(pr properties) []byte {
		b, err := sampleDocument(t, A4).render(pr)
		if err != nil {
			t.Error(err)
		}
		return b
	}
	first := draw(attachedProperties())
	var wg sync.WaitGroup
	for range 4 {
		wg.Go(func() {
			if !bytes.Equal(draw(attachedProperties()), first) {
				t.Error("another run gave other bytes")
			}
		})
	}
	wg.Wait()
	pr := attachedProperties()
	pr.date = pr.date.Add(24 * time.Hour)
	if bytes.Equal(draw(pr), first) {
		t.Error("the date is not in the file")
	}
	// The same moment in another time zone is the same document.
	pr = attachedProperties()
	pr.date = pr.date.In(time.FixedZone("east", 5*3600))
	if !bytes.Equal(draw(pr), first) {
		t.Error("the time zone is in the file")
	}
}

func TestRenderTwiceOfOneDocument(t *testing.T) {
	d := sampleDocument(t, A4)
	if !bytes.Equal(render(t, d), render(t, d)) {
		t.Error("drawing changed the document")
	}
}

func TestRenderErrors(t *testing.T) {
	simple := func() *document {
		d := newDocument(A4)
		d.body.para(plain("text"))
		return d
	}
	for _, c := range []struct {
		name string
		doc  func(*document)
		pr   func(*properties)
		says []string
	}{
		{"letter in a paragraph", func(d *document) { d.body.heading("Sources"); d.body.para(plain("good "), plain("漢")) }, nil, []string{"Sources", "U+6F22"}},
		{"letter in a cell", func(d *document) {
			d.naming("model.source")
			d.body.table(pageTable{columns: []tableColumn{{head: "a"}}, rows: []tableRow{{cells: cellTexts("\u202e")}}})
		}, nil, []string{"model.source", "U+202E"}},
		{"letter in a table head", func(d *document) { d.body.table(pageTable{columns: []tableColumn{{head: "🐾"}}}) }, nil, []string{"U+1F43E"}},
		{"letter in a step", func(d *document) { d.body.step(slateStep{title: "t", substituted: "a\vb"}) }, nil, []string{"U+000B"}},
		{"letter in an item", func(d *document) { d.body.item(markedItem{text: []run{plain("ok")}, under: []run{plain("\x00")}}) }, nil, []string{"U+0000"}},
		{"letter in a name", func(d *document) { d.body.pairs(1, keyValue{"م", nil}) }, nil, []string{"U+0645"}},
		{"letter under a line to sign", func(d *document) { d.body.signatures(1, "\ue000") }, nil, []string{"U+E000"}},
		{"letter in the head", func(d *document) { d.head = func(f *flow, _, _ int) { f.para(plain("\ufeff")) } }, nil, []string{"page margin", "U+FEFF"}},
		{"letter in a figure", func(d *document) {
			d.body.figure(100, func(c vg.CanvasSizer) {
				p := newPlot()
				p.Title.Text = "漢"
				p.Draw(draw.New(c))
			})
		}, nil, []string{"figure", "U+6F22"}},
		{"letter in the title", nil, func(p *properties) { p.title = "a\u200bb" }, []string{"document title", "U+200B"}},
		{"letter in the author", nil, func(p *properties) { p.author = "\xff" }, []string{"document author", "UTF-8"}},
		{"letter in the keywords", nil, func(p *properties) { p.keywords = "a\nb" }, []string{"document keywords"}},
		{"no date", nil, func(p *properties) { p.date = time.Time{} }, []string{"date"}},
		{"attachment in a folder", nil, func(p *properties) { p.attached = []attachment{{name: "../x"}} }, []string{"../x", "plain file name"}},
		{"attachment without a name", nil, func(p *properties) { p.attached = []attachment{{}} }, []string{"plain file name"}},
		{"attachment's letters", nil, func(p *properties) { p.attached = []attachment{{name: "x", description: "\a"}} }, []string{"description", "U+0007"}},
		{"ten attachments", nil, func(p *properties) {
			for range 10 {
				p.attached = append(p.attached, attachment{name: "x"})
			}
		}, []string{"10 files", "at most 9"}},
	} {
		d, pr := simple(), sampleProperties
		if c.doc != nil {
			c.doc(d)
		}
		if c.pr != nil {
			c.pr(&pr)
		}
		b, err := d.render(pr)
		if err == nil || b != nil {
			t.Errorf("%s: no error", c.name)
			continue
		}
		for _, says := range c.says {
			if !strings.Contains(err.Error(), says) {
				t.Errorf("%s: %q lacks %q", c.name, err, says)
			}
		}
		var letter *LetterError
		if strings.HasPrefix(c.name, "letter") && !errors.As(err, &letter) {
			t.Errorf("%s: %T is no LetterError", c.name, err)
		}
	}
}

// What looks like the mark that the library puts a page number for, or like PDF code,
// is text like any other.
func TestTextIsNotCode(t *testing.T) {
	d := newDocument(A4)
	d.body.para(plain(`{nb} {np} (unbalanced \ ) >> endstream endobj %%EOF`))
	pr := sampleProperties
	pr.title = `{nb} ) >> endobj \`
	b, err := d.render(pr)
	if err != nil {
		t.Fatal(err)
	}
	if ctx := readStrictly(t, b); ctx.Title != pr.title || ctx.PageCount != 1 {
		t.Errorf("title %q, %d pages", ctx.Title, ctx.PageCount)
	}
}

// barePDF is what the library costs alone: three pages with the same fonts,
// the text already broken into lines.
func barePDF(lines [][]string) ([]byte, error) {
	pdf := gofpdf.NewCustom(&gofpdf.InitType{UnitStr: "pt", Size: gofpdf.SizeType{Wd: 595.28, Ht: 841.89}})
	pdf.SetAutoPageBreak(false, 0)
	pdf.SetCatalogSort(true)
	pdf.SetCreationDate(sampleProperties.date)
	pdf.SetModificationDate(sampleProperties.date)
	pdf.AddUTF8FontFromBytes("sans", "", []byte(sansRegular.data))
	pdf.AddUTF8FontFromBytes("sans", "B", []byte(sansBold.data))
	for _, page := range lines {
		pdf.AddPage()
		pdf.SetFont("sans", "B", 10)
		pdf.Text(marginX, 60, page[0])
		pdf.SetFont("sans", "", 9)
		for i, line := range page[1:] {
			pdf.Text(marginX, 80+12*float64(i), line)
		}
	}
	var out bytes.Buffer
	err := pdf.Output(&out)
	return out.Bytes(), err
}

// benchDocument is three pages of text, steps and tables.
func benchDocument() *document {
	d := newDocument(A4)
	d.head = func(f *flow, page, pages int) {
		f.split(paraStyle{size: sizeSmall}, []run{bold("LW-0412"), plain("  Marisol, giant anteater, 41 kg (weighed), 2026-11-30")}, []run{pageOf(page, pages)})
		f.rule(rulerThin)
	}
	d.foot = func(f *flow, page, pages int) {
		f.rule(rulerThin)
		f.paragraph(paraStyle{size: sizeSmall, gap: -1}, bold("Draft; not a prescription."), plain(" For the judgement of a licensed veterinarian. Local law on off-label use, controlled drugs and food animals applies."))
	}
	f := d.body
	f.box(func(f *flow) {
		f.paragraph(paraStyle{size: sizeDraft}, bold("examplicillin 334 mg (6.7 mL) under the skin every 12 hours"))
		f.para(bold("8.14 mg/kg."), plain(" Even odds 3.5 to 18.9 mg/kg; nine in ten 1.04 to 63.6 mg/kg."))
	})
	f.heading("Cautions")
	for range 5 {
		f.item(markedItem{mark: markWarn, tick: true, text: []run{bold("Warn. "), plain("The bases disagree by 2.92 fold; the drafted dose under each basis stands below, with both ranges.")}})
	}
	f.heading("The plans side by side")
	t := pageTable{columns: []tableColumn{{head: "Plan", grow: 1}, {head: "Dose mg/kg", align: alignDecimal}, {head: "Each time", align: alignDecimal}, {head: "Interval"}, {head: "Daily", align: alignRight}}}
	for range 22 {
		t.rows = append(t.rows, tableRow{cells: cellTexts("same interval", "8.14", "334 mg", "12 h", "16.3")})
	}
	f.table(t)
	f.heading("Steps")
	for i := range 12 {
		f.step(slateStep{i + 1, "Ratio of the metabolic rates", "R = (M ÷ M₀)⁰·⁷⁵", "(41 kg ÷ 18 kg)⁰·⁷⁵ = 2.2778⁰·⁷⁵", "1.8541", "group line for placental mammals, row 12"})
	}
	return d
}

// benchLines is the text of benchDocument, a string for each line, by page.
func benchLines(t testing.TB) [][]string {
	var out [][]string
	for _, page := range laidOut(t, benchDocument()).pages {
		var lines []string
		for _, p := range page {
			if len(p.band.labels) > 0 {
				lines = append(lines, strings.Join(pageText([]placing{p}), " "))
			}
		}
		out = append(out, lines)
	}
	return out
}

func TestBenchDocumentsAreAlike(t *testing.T) {
	if n := len(benchLines(t)); n != 3 {
		t.Errorf("%d pages", n)
	}
}

func BenchmarkPDFBare(b *testing.B) {
	lines := benchLines(b)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := barePDF(lines); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkPDFEngine(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		if _, err := benchDocument().render(sampleProperties); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkPDFLayOut(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		laidOut(b, benchDocument())
	}
}

package reports

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"
	"time"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"pgregory.net/rapid"
)

var sampleProperties = properties{
	title: "Draft for Marisol, τ½ 1.3 h", subject: "giant anteater", keywords: "examplicillin, allometry",
	producer: "tayra 1", date: time.Date(2026, 11, 30, 0, 0, 0, 0, time.UTC),
}

// samplePlot is two decaying curves with Greek in the labels and a turned
// axis name.
func samplePlot(t testing.TB) *plot.Plot {
	p := newPlot()
	p.Title.Text = "Concentration over time"
	p.X.Label.Text = "time after the first dose (h)"
	p.Y.Label.Text = "concentration (mg/L), α phase"
	for i, decay := range []float64{0.53, 0.36} {
		xy := make(plotter.XYs, 500)
		for k := range xy {
			x := float64(k) / 499 * 24
			xy[k] = plotter.XY{X: x, Y: 33 * math.Exp(-decay*math.Mod(x, 12))}
		}
		line, err := plotter.NewLine(xy)
		if err != nil {
			t.Fatal(err)
		}
		if i == 1 {
			line.Dashes = []vg.Length{vg.Points(4), vg.Points(2)}
		}
		p.Add(line)
		p.Legend.Add([]string{"model", "drafted, δ"}[i], line)
	}
	points, err := plotter.NewScatter(plotter.XYs{{X: 4, Y: 10}, {X: 8, Y: 20}})
	if err != nil {
		t.Fatal(err)
	}
	points.GlyphStyle.Shape = draw.CircleGlyph{}
	points.GlyphStyle.Radius = vg.Points(4)
	p.Add(points)
	return p
}

// sampleDocument holds every kind of block.
func sampleDocument(t testing.TB, paper Paper) *document {
	d := newDocument(paper)
	d.head = func(f *flow, page, pages int) {
		f.split(paraStyle{size: sizeSmall}, []run{bold("LW-0412"), plain("  Marisol, giant anteater, 41 kg (weighed), 2026-11-30")}, []run{pageOf(page, pages)})
		f.rule(rulerThin)
	}
	d.foot = func(f *flow, page, pages int) {
		f.rule(rulerThin)
		f.paragraph(paraStyle{size: sizeSmall, gap: -1}, bold("Draft; not a prescription."), plain(" For the judgement of a licensed veterinarian. Local law on off-label use, controlled drugs and food animals applies."))
		f.split(paraStyle{size: sizeSmall, gap: -1}, []run{plain("Larkmoor Wildlife Hospital (invented)")}, []run{plain("tayra 1, record 4f9a 2c10")})
	}
	f := d.body
	f.box(func(f *flow) {
		f.paragraph(paraStyle{size: sizeDraft}, bold("examplicillin 334 mg (6.7 mL) under the skin every 12 hours"))
		f.para(bold("8.14 mg/kg."), plain(" As likely as not the model's exposure lies between 3.5 to 18.9 mg/kg, nine times in ten between 1.04 to 63.6 mg/kg. A second sentence runs on so that the paragraph turns over: 10 mg/kg, 20 mg/kg, 30 mg/kg, 40 mg/kg, 50 mg/kg, 60 mg/kg, 70 mg/kg."))
		f.para(bold("Worst caution: warn."))
	})
	f.pairs(2, keyValue{"Species", []run{plain("Myrmecophaga tridactyla")}}, keyValue{"Mass", []run{plain("41 kg, weighed")}},
		keyValue{"Prepared by", []run{plain("duty veterinarian")}}, keyValue{"Condition", []run{plain("dehydrated; a long note on the condition that turns over at the edge of its column and again")}},
		keyValue{"Basis", []run{plain("group")}})
	f.heading("Cautions")
	f.item(markedItem{mark: markStop, tick: true, text: []run{bold("Stop. "), plain("The drug is on the list for this order of animals and no dose is drafted from this model at all, whatever the other cautions say about it, until it is overridden in writing.")}, under: []run{plain("lethal in 4 of 5 reports")}})
	f.item(markedItem{mark: markWarn, tick: true, text: []run{bold("Warn. "), plain("The bases disagree by 2.92 fold.")}, under: []run{plain("ratio 2.92")}})
	f.item(markedItem{mark: markNote, indent: 2 * indentMark, text: []run{bold("Note. "), plain("The model's dose is a range.")}})
	f.item(markedItem{tick: true, text: []run{plain("Second check done")}})
	f.bullet(paraStyle{}, plain("A bullet with text."))
	f.bullet(paraStyle{}, plain("Another bullet, long enough to turn over at the right edge of the page so that its second line hangs under the first and not under the dot itself."))
	f.heading("The plans side by side")
	f.table(pageTable{columns: []tableColumn{{head: "Plan", grow: 1}, {head: "Dose mg/kg", align: alignDecimal}, {head: "Each time", align: alignDecimal}, {head: "Interval"}, {head: "Daily", align: alignRight}},
		rows: []tableRow{
			{cells: [][]run{{bold("same interval (drafted)")}, {bold("8.14")}, {bold("334 mg")}, {plain("12 h")}, {plain("16.3")}}},
			{cells: cellTexts("same dose", "10", "410.5 mg", "14.7 h", "16.3")},
			{cells: cellTexts("clock", "10.25", "1,420 mg", "12 h", "20.5"), rule: true},
			{cells: cellTexts("both adjusted", "0.9", "37 mg", "every 24 hours", "0.9")},
			{cells: cellTexts("no plan", "none", "none", "—", "none"), rule: true},
		}})
	f.table(pageTable{size: sizeSmall, columns: []tableColumn{{head: "Source"}, {head: "What it says, in a column that has to give way to the others and turn over"}, {head: "Note"}},
		rows: []tableRow{
			{cells: cellTexts("kleiber1947", "70 × M⁰·⁷⁵ kcal/day over mammals from 0.02 kg to 600 kg; the constants were fitted with mass in kg and the rate in kcal/day, a long description follows here to fill the cell with more words", "from memory")},
			{cells: cellTexts("https://example.org/a/very/long/address/that/has/no/space/in/it/and/must/be/broken/somewhere/or/it/runs/off/the/page", "plain", "measured at 30 °C, in the thermoneutral zone")},
		}})
	f.heading("Concentrations")
	f.figure(150, func(c vg.CanvasSizer) { samplePlot(t).Draw(draw.New(c)) })
	f.keepNext()
	f.paragraph(paraStyle{size: sizeSmall, center: true}, plain("Solid: model. Dashed: drafted."))
	f.heading("Steps")
	for i := 1; i <= 9; i++ {
		f.step(slateStep{i, "Ratio of the metabolic rates", "R = (M ÷ M₀)⁰·⁷⁵", "(41 kg ÷ 18 kg)⁰·⁷⁵ = 2.2778⁰·⁷⁵", "1.8541", "group line for placental mammals, row 12; the exponent and its spread from the fit over 637 species"})
	}
	f.heading("A long table")
	long := pageTable{columns: []tableColumn{{head: "No.", align: alignRight}, {head: "Time"}, {head: "Concentration", align: alignDecimal, grow: 1}}}
	for i := range 60 {
		long.rows = append(long.rows, tableRow{cells: cellTexts(fmt.Sprint(i+1), fmt.Sprintf("%d h", i), fmt.Sprintf("%.3g mg/L", 33*math.Exp(-float64(i)/7))), rule: i%10 == 0})
	}
	f.table(long)
	f.heading("Signature")
	f.para(plain("What the veterinarian changed, and why:"))
	f.ruled(3)
	f.signatures(2, "Name", "Licence number", "Signature", "Date and time", "Second check")
	return d
}

func render(t testing.TB, d *document) []byte {
	t.Helper()
	b, err := d.render(sampleProperties)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

func laidOut(t testing.TB, d *document) layout {
	t.Helper()
	_, height := d.paper.Size()
	l, err := d.layOut(height)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

// pageText returns the texts of the body of a page, from the top.
func pageText(page []placing) []string {
	var out []string
	for _, p := range page {
		for _, l := range p.band.labels {
			out = append(out, l.text)
		}
	}
	return out
}

// checkPages holds a layout to what must be true of any.
func checkPages(t interface{ Fatalf(string, ...any) }, d *document, l layout) {
	width, _ := d.paper.Size()
	next := 0 // in d.body.bands
	for n, page := range l.pages {
		if len(page) == 0 && len(d.body.bands) > 0 {
			t.Fatalf("page %d is empty", n+1)
		}
		bottom := 0.0
		heads := true
		for _, p := range page {
			if p.y < bottom-1e-6 {
				t.Fatalf("page %d: %q lies on what stands above it", n+1, pageText([]placing{p}))
			}
			bottom = p.y + p.band.height
			if bottom > l.height+1e-6 {
				t.Fatalf("page %d: %q lies below the body", n+1, pageText([]placing{p}))
			}
			for _, label := range p.band.labels {
				right := label.x + points(sans(label.bold).units(label.text), label.size)
				if label.x < marginX-1e-6 || right > width-marginX+1e-6 {
					t.Fatalf("page %d: %q runs from %.1f to %.1f", n+1, label.text, label.x, right)
				}
				if label.size < sizeSmall {
					t.Fatalf("%q is set in %.1f points", label.text, label.size)
				}
				if label.base-label.size > p.band.height || label.base+0.236*label.size > p.band.height+0.1*label.size {
					t.Fatalf("%q hangs out of its band: base %.1f of %.1f", label.text, label.base, p.band.height)
				}
			}
			for i, a := range p.band.labels {
				for _, b := range p.band.labels[i+1:] {
					ar, br := a.x+points(sans(a.bold).units(a.text), a.size), b.x+points(sans(b.bold).units(b.text), b.size)
					if a.x < br-1e-6 && b.x < ar-1e-6 {
						t.Fatalf("%q and %q lie on each other", a.text, b.text)
					}
				}
			}
			// Every band of the body once and in order; repeated heads apart.
			if heads && next < len(d.body.bands) && p.band.isHeadOf(&d.body.bands[next]) {
				continue
			}
			heads = false
			if p.band != &d.body.bands[next] {
				t.Fatalf("page %d: %q is out of order", n+1, pageText([]placing{p}))
			}
			next++
		}
	}
	if next != len(d.body.bands) {
		t.Fatalf("%d of %d bands are on paper", next, len(d.body.bands))
	}
}

func TestSampleOnBothPapers(t *testing.T) {
	for _, paper := range []Paper{A4, Letter} {
		d := sampleDocument(t, paper)
		l := laidOut(t, d)
		checkPages(t, d, l)
		if len(l.pages) != 5 {
			t.Errorf("%v: %d pages", paper, len(l.pages))
		}
		for i := range l.pages {
			head := strings.Join(pageText(stacked(l.heads[i])), " ")
			if want := fmt.Sprintf("page %d of %d", i+1, len(l.pages)); !strings.Contains(head, want) || !strings.Contains(head, "LW-0412") {
				t.Errorf("%v: the head of page %d is %q", paper, i+1, head)
			}
			if foot := strings.Join(pageText(stacked(l.feet[i])), " "); !strings.Contains(foot, "not a prescription") {
				t.Errorf("%v: the foot of page %d is %q", paper, i+1, foot)
			}
		}
	}
}

func stacked(bands []band) []placing {
	var out []placing
	for i := range bands {
		out = append(out, placing{band: &bands[i]})
	}
	return out
}

// Lines of a known height fill pages of a known height.
func TestPageCount(t *testing.T) {
	_, height := A4.Size()
	body := height - 2*marginY - 2*marginA // no head, no foot
	for _, c := range []struct {
		perPage, lines, pages int
	}{
		{40, 0, 1}, {40, 1, 1}, {40, 40, 1}, {40, 41, 2}, {40, 80, 2}, {40, 81, 3}, {7, 50, 8},
	} {
		d := newDocument(A4)
		for range c.lines {
			d.body.bands = append(d.body.bands, band{height: body / float64(c.perPage)})
		}
		l := laidOut(t, d)
		if len(l.pages) != c.pages {
			t.Errorf("%d lines, %d a page: %d pages, want %d", c.lines, c.perPage, len(l.pages), c.pages)
		}
	}
}

func TestGapsAreDroppedAtTheTop(t *testing.T) {
	_, height := A4.Size()
	body := height - 2*marginY - 2*marginA
	d := newDocument(A4)
	for range 4 {
		d.body.bands = append(d.body.bands, band{gap: body / 10, height: body * 0.45})
	}
	l := laidOut(t, d)
	if len(l.pages) != 2 || l.pages[1][0].y != 0 || math.Abs(l.pages[1][1].y-body*0.55) > 1e-6 {
		t.Errorf("%d pages, the second from %v on", len(l.pages), l.pages[1])
	}
}

func TestHeadingStaysWithWhatFollows(t *testing.T) {
	// However far down the page a heading falls, a line of the text, or the
	// head and two rows of the table, under it are on its page.
	for filler := range 60 {
		for _, kind := range []string{"text", "table"} {
			d := newDocument(A4)
			for range filler {
				d.body.para(plain("filler"))
			}
			d.body.heading("The heading")
			if kind == "text" {
				d.body.para(plain(strings.Repeat("first second third ", 40)))
			} else {
				d.body.table(pageTable{columns: []tableColumn{{head: "Head"}}, rows: []tableRow{{cells: cellTexts("first")}, {cells: cellTexts("second")}, {cells: cellTexts("third")}, {cells: cellTexts("fourth")}}})
			}
			l := laidOut(t, d)
			checkPages(t, d, l)
			for _, page := range l.pages {
				text := strings.Join(pageText(page), " ")
				if strings.Contains(text, "The heading") && (!strings.Contains(text, "first") || !strings.Contains(text, "second")) {
					t.Errorf("%s after %d lines: the heading stands alone", kind, filler)
				}
			}
		}
	}
}

func TestParagraphLeavesNoLineAlone(t *testing.T) {
	for filler := range 60 {
		d := newDocument(A4)
		for range filler {
			d.body.para(plain("filler"))
		}
		start := len(d.body.bands)
		d.body.para(plain(strings.Repeat("ten words to fill up a line of the page ", 20)))
		lines := len(d.body.bands) - start
		if lines < 6 {
			t.Fatalf("only %d lines", lines)
		}
		l := laidOut(t, d)
		for _, page := range l.pages {
			n := 0
			for _, p := range page {
				if !slices.ContainsFunc(p.band.labels, func(l placedText) bool { return l.text == "filler" }) {
					n++
				}
			}
			if n == 1 {
				t.Errorf("after %d lines one line of the paragraph stands alone", filler)
			}
		}
	}
}

func TestTogether(t *testing.T) {
	for filler := range 60 {
		d := newDocument(A4)
		for range filler {
			d.body.para(plain("filler"))
		}
		d.body.step(slateStep{7, "Title", "formula of it", strings.Repeat("numbers of it ", 30), "result of it", "source of it"})
		d.body.item(markedItem{mark: markWarn, tick: true, text: []run{plain(strings.Repeat("caution ", 50))}, under: []run{plain("its numbers")}})
		d.body.box(func(f *flow) {
			f.paragraph(paraStyle{size: sizeDraft}, plain("boxed dose"))
			f.para(plain("boxed range"))
		})
		l := laidOut(t, d)
		checkPages(t, d, l)
		for _, pair := range [][2]string{{"Title", "source of it"}, {"caution", "its numbers"}, {"boxed dose", "boxed range"}} {
			for _, page := range l.pages {
				text := strings.Join(pageText(page), "|")
				if strings.Contains(text, pair[0]) != strings.Contains(text, pair[1]) {
					t.Errorf("after %d lines, %q is parted from %q", filler, pair[0], pair[1])
				}
			}
		}
	}
}

// A block that no page can hold is broken and not cut off.
func TestTallerThanThePage(t *testing.T) {
	words := strings.Repeat("a long reason ", 2500)
	d := newDocument(A4)
	d.body.box(func(f *flow) { f.para(plain(words)) })
	d.body.table(pageTable{columns: []tableColumn{{head: "Name"}, {head: "Reason"}}, rows: []tableRow{{cells: cellTexts("x", words)}, {cells: cellTexts("y", "short")}}})
	l := laidOut(t, d)
	checkPages(t, d, l)
	if len(l.pages) < 4 {
		t.Errorf("%d pages", len(l.pages))
	}
	render(t, d)

	d = newDocument(A4)
	d.body.figure(2000, func(vg.CanvasSizer) {})
	if _, err := d.render(sampleProperties); err == nil || !strings.Contains(err.Error(), "2000 points") {
		t.Errorf("a figure taller than the page: %v", err)
	}
	d = newDocument(A4)
	d.foot = func(f *flow, _, _ int) { f.para(plain(words)) }
	if _, err := d.render(sampleProperties); err == nil || !strings.Contains(err.Error(), "shorten") {
		t.Errorf("a foot taller than the page: %v", err)
	}
}

// A head that grows once the number of pages is known gets its room.
func TestHeadThatGrows(t *testing.T) {
	d := newDocument(A4)
	d.head = func(f *flow, page, pages int) {
		for range min(page, 3) + min(pages, 5) {
			f.para(plain("head"))
		}
	}
	for range 200 {
		d.body.para(plain("line"))
	}
	l := laidOut(t, d)
	checkPages(t, d, l)
	for i := range l.heads {
		if stack(l.heads[i]) > l.top-marginY-marginA+1e-6 {
			t.Errorf("the head of page %d is %.1f high and has %.1f", i+1, stack(l.heads[i]), l.top-marginY-marginA)
		}
	}
}

func TestPagesLaws(t *testing.T) {
	texts := []string{"", "10 mg/kg", "a", "none", "1,234.5", "every 12 hours", strings.Repeat("several words ", 12),
		strings.Repeat("x", 200), "ёж τ½", strings.Repeat("long citation, ", 80)}
	rapid.Check(t, func(t *rapid.T) {
		d := newDocument(Paper(rapid.IntRange(0, 1).Draw(t, "paper")))
		word := func() run {
			return run{rapid.SampledFrom(texts).Draw(t, "text"), rapid.Bool().Draw(t, "bold")}
		}
		d.head = func(f *flow, page, pages int) { f.split(paraStyle{}, []run{plain("head")}, []run{pageOf(page, pages)}) }
		f := d.body
		for range rapid.IntRange(0, 25).Draw(t, "blocks") {
			switch rapid.IntRange(0, 9).Draw(t, "kind") {
			case 0:
				f.para(word(), plain(" "), word())
			case 1:
				f.heading("Heading")
			case 2:
				var rows []tableRow
				for range rapid.IntRange(0, 30).Draw(t, "rows") {
					rows = append(rows, tableRow{cells: [][]run{{word()}, {word()}, {word()}}, rule: rapid.Bool().Draw(t, "rule")})
				}
				f.table(pageTable{columns: []tableColumn{{head: "Name"}, {head: "Figure", align: cellAlign(rapid.IntRange(0, 2).Draw(t, "align"))}, {head: "Note", grow: 1}}, rows: rows})
			case 3:
				f.box(func(f *flow) { f.paragraph(paraStyle{size: sizeDraft}, word()); f.para(word()) })
			case 4:
				f.step(slateStep{1, "Title", word().text, word().text, "1.85", word().text})
			case 5:
				f.item(markedItem{mark: mark(rapid.IntRange(0, 3).Draw(t, "mark")), tick: rapid.Bool().Draw(t, "tick"), text: []run{word()}, under: []run{word()}})
			case 6:
				f.figure(rapid.Float64Range(10, 400).Draw(t, "height"), func(vg.CanvasSizer) {})
			case 7:
				f.pairs(rapid.IntRange(1, 3).Draw(t, "columns"), keyValue{"Key", []run{word()}}, keyValue{word().text, []run{word()}}, keyValue{"Key", nil})
			case 8:
				f.ruled(3)
				f.keepNext()
				f.signatures(2, "Name", "Date", word().text)
			case 9:
				f.bullet(paraStyle{}, word())
				f.space(10)
			}
		}
		_, height := d.paper.Size()
		l, err := d.layOut(height)
		if err != nil {
			t.Fatalf("%v", err)
		}
		checkPages(t, d, l)
	})
}

func TestParsePaper(t *testing.T) {
	for name, want := range map[string]Paper{"A4": A4, "a4": A4, "letter": Letter, "Letter": Letter} {
		if got, err := ParsePaper(name); err != nil || got != want {
			t.Errorf("ParsePaper(%q) = %v, %v", name, got, err)
		}
		if got, err := ParsePaper(want.String()); err != nil || got != want {
			t.Errorf("%v does not come back", want)
		}
	}
	if _, err := ParsePaper("A5"); err == nil || !strings.Contains(err.Error(), "A4 or Letter") {
		t.Errorf("A5: %v", err)
	}
	// ISO 216 and ANSI Y14.1: 210 × 297 mm, 8.5 × 11 in.
	for paper, mm := range map[Paper][2]float64{A4: {210, 297}, Letter: {215.9, 279.4}} {
		w, h := paper.Size()
		if math.Abs(w*25.4/72-mm[0]) > 0.01 || math.Abs(h*25.4/72-mm[1]) > 0.01 {
			t.Errorf("%v is %.2f by %.2f mm", paper, w*25.4/72, h*25.4/72)
		}
	}
}

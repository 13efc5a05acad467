package reports

import (
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"tayra/dose"
	"tayra/metabolic"
)

// stripLine is one line of the strip: a dose, or the two ends of one.
type stripLine struct {
	name      string
	low, high float64
	used      bool // the draft follows from it
}

// stripLines are the doses of the drafted model under every basis and exponent.
func stripLines(w *dose.Worksheet) []stripLine {
	var out []stripLine
	for i := range w.Bases {
		b := &w.Bases[i]
		if b.DosePerKg == nil {
			continue
		}
		name := "basis " + basisLabel(b, false)
		if basisUsed(w, b) {
			name = "basis used, " + basisLabel(b, false)
		}
		out = append(out, stripLine{name, b.DosePerKg[0], b.DosePerKg[1], basisUsed(w, b)})
	}
	for _, e := range w.Exponents {
		out = append(out, stripLine{"exponent " + metabolic.Significant(e.Exponent, 3), e.DosePerKg[0], e.DosePerKg[1], false})
	}
	return out
}

// stripHeight is how many points the strip needs on paper.
func stripHeight(w *dose.Worksheet) float64 { return 50 + 13.5*float64(len(stripLines(w))+2) }

// stripWords says what the strip shows.
func stripWords(w *dose.Worksheet) string {
	s := basesDose(w) + ", under every basis that both animals have and under other exponents"
	if fittedDraft(w) {
		return s + ". Broken line and bars: the dose from the fitted line, " + intervalWords("infusion", w.Drafted.IntervalH) + ", with its ranges."
	}
	return s + ", with both ranges of the draft."
}

// stripPlot is the dose per kg under every basis and
// exponent, on a log axis with both ranges of the draft: the eye sees in a
// second whether they agree. Nil where there is no draft.
func stripPlot(w *dose.Worksheet) *plot.Plot {
	lines := stripLines(w)
	d := w.Drafted
	if d == nil || len(lines) == 0 {
		return nil
	}
	range90, range50 := dose.Pair{d.Range90.Low, d.Range90.High}, dose.Pair{d.Range50.Low, d.Range50.High}
	drafted := d.DosePerKg
	low, high := math.Min(range90[0], drafted[0]), math.Max(range90[1], drafted[1])
	for _, l := range lines {
		low, high = math.Min(low, l.low), math.Max(high, l.high)
	}
	p := newPlot()
	logAxis(&p.X, low/1.2, high*1.2)
	p.X.Label.Text = paperUnits(d.Unit) + ", log scale"
	rows := float64(len(lines) + 2)
	labels := []sideLabel{
		{row: rows - 0.5, text: "nine times in ten: " + perKgPair(range90, d.Unit)},
		{row: rows - 1.5, text: "as likely as not: " + perKgPair(range50, d.Unit)},
	}
	for i, l := range lines {
		text := l.name + ": " + perKgPair(dose.Pair{l.low, l.high}, d.Unit)
		labels = append(labels, sideLabel{row: rows - 2.5 - float64(i), text: text, bold: l.used})
	}
	sideLabels(p, rows, labels)
	p.Add(drawing(func(c draw.Canvas, p *plot.Plot) {
		tx, ty := p.Transforms(&c)
		// Nine in ten as an open bar, even odds as a filled one, the drafted
		// dose as a broken line down through all rows.
		for k, v := range drafted {
			if k == 0 || drafted[0] != v {
				c.StrokeLine2(lineStyle(0.6, 1), tx(v), ty(0), tx(v), ty(rows))
			}
		}
		open := bar(ty(rows-0.5), vg.Points(4), tx(range90[0]), tx(range90[1]))
		c.FillPolygon(paperWhite, open)
		c.StrokeLines(lineStyle(0.9, 0), open)
		c.FillPolygon(ink, bar(ty(rows-1.5), vg.Points(4), tx(range50[0]), tx(range50[1])))
		for i, l := range lines {
			y := ty(rows - 2.5 - float64(i))
			if l.high > l.low {
				c.StrokeLine2(lineStyle(1.6, 0), tx(l.low), y, tx(l.high), y)
			}
			r := vg.Points(2.8)
			if l.used {
				r = vg.Points(4)
			}
			diamond(c, vg.Point{X: tx(l.low), Y: y}, r)
			diamond(c, vg.Point{X: tx(l.high), Y: y}, r)
		}
	}))
	return p
}

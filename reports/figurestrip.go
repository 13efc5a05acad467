package reports

import (
	"fmt"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"tayra/dose"
	"tayra/metabolic"
)

// stripLine is one line of the strip: a dose, or the two ends of one.
type stripLine struct {
	name      string
	low, high float64
	drafted   bool
}

// stripLines are the doses of the drafted model under every basis and exponent.
func stripLines(w *dose.Worksheet) []stripLine {
	var out []stripLine
	for _, b := range w.Bases {
		if b.DosePerKg != nil {
			name := "basis " + b.Basis
			out = append(out, stripLine{name, b.DosePerKg[0], b.DosePerKg[1], b.Drafted})
		}
	}
	for _, e := range w.Exponents {
		out = append(out, stripLine{"exponent " + metabolic.Significant(e.Exponent, 3), e.DosePerKg[0], e.DosePerKg[1], false})
	}
	return out
}

// stripHeight is how many points the strip needs on paper.
func stripHeight(w *dose.Worksheet) float64 { return 62 + 14*float64(len(stripLines(w))) }

// toModelInterval carries a dose of the draft to the model's interval, at which
// the doses of the strip are given, by its daily amount: that is what the ranges
// are about. It is 1 where the draft keeps the interval.
func toModelInterval(w *dose.Worksheet) float64 {
	from := &w.Drafts[w.DraftedFrom.Index]
	if w.Drafted.IntervalH == nil || from.IntervalH == nil || *w.Drafted.IntervalH == *from.IntervalH {
		return 1
	}
	return *from.IntervalH / *w.Drafted.IntervalH
}

// stripWords says what the strip shows.
func stripWords(w *dose.Worksheet) string {
	from := draftedModel(w)
	switch {
	case from.Kind == "once":
		return "The dose by clearance, under every basis that both animals have and under other exponents, with both ranges."
	case from.Kind == "infusion":
		return "The rate per kg under every basis that both animals have and under other exponents, with both ranges of the draft."
	case toModelInterval(w) != 1:
		return "The dose per kg " + intervalWords(from.Kind, from.IntervalH) + ", the model's interval, under every basis that both animals have and under other exponents. The draft and its ranges are carried to that interval by the daily amount."
	}
	return "The dose per kg " + intervalWords(from.Kind, from.IntervalH) + " under every basis that both animals have and under other exponents, with both ranges of the draft."
}

// stripPlot is the dose per kg at the model's interval under every basis and
// exponent, on a log axis with both ranges of the draft: the eye sees in a
// second whether they agree. Nil where there is no draft.
func stripPlot(w *dose.Worksheet) *plot.Plot {
	lines := stripLines(w)
	d := w.Drafted
	if d == nil || len(lines) == 0 {
		return nil
	}
	f := toModelInterval(w)
	range90, range50 := [2]float64{d.Range90.Low * f, d.Range90.High * f}, [2]float64{d.Range50.Low * f, d.Range50.High * f}
	drafted := [2]float64{d.DosePerKg[0] * f, d.DosePerKg[1] * f}
	low, high := math.Min(range90[0], drafted[0]), math.Max(range90[1], drafted[1])
	for _, l := range lines {
		low, high = math.Min(low, l.low), math.Max(high, l.high)
	}
	p := newPlot()
	p.HideY()
	logAxis(&p.X, low/1.2, high*1.2)
	p.X.Label.Text = d.Unit + ", log scale"
	rows := float64(len(lines) + 2)
	p.Y.Min, p.Y.Max = 0, rows
	p.Add(drawing(func(c draw.Canvas, p *plot.Plot) {
		tx, ty := p.Transforms(&c)
		box := func(y, half vg.Length, a, b float64) []vg.Point {
			return []vg.Point{{X: tx(a), Y: y - half}, {X: tx(b), Y: y - half}, {X: tx(b), Y: y + half}, {X: tx(a), Y: y + half}, {X: tx(a), Y: y - half}}
		}
		// The ranges, at the top: nine in ten as an open bar, even odds as a
		// filled one inside it, the drafted dose as a cut through both.
		y := ty(rows - 0.8)
		c.StrokeLines(lineStyle(0.8, 0), box(y, vg.Points(6), range90[0], range90[1]))
		c.FillPolygon(ink, box(y, vg.Points(3), range50[0], range50[1]))
		writeText(c, sizeSmall, false, text.XLeft, text.YBottom, vg.Point{X: tx(range90[0]) + 1, Y: y + vg.Points(8)},
			fmt.Sprintf("open bar: nine in ten, %s to %s; filled: even odds, %s to %s; line: drafted", metabolic.Significant(range90[0], 3), metabolic.Significant(range90[1], 3), metabolic.Significant(range50[0], 3), metabolic.Significant(range50[1], 3)))
		for k, v := range drafted {
			if k == 1 && drafted[0] == v {
				break
			}
			st := lineStyle(0.6, 1)
			c.StrokeLine2(st, tx(v), ty(0), tx(v), y-vg.Points(7))
		}
		for i, l := range lines {
			y := ty(rows - 2.1 - float64(i))
			if l.high > l.low {
				c.StrokeLine2(lineStyle(1.6, 0), tx(l.low), y, tx(l.high), y)
			}
			r := vg.Points(2.6)
			if l.drafted {
				r = vg.Points(3.6)
			}
			for _, v := range []float64{l.low, l.high} {
				c.FillPolygon(ink, []vg.Point{{X: tx(v) - r, Y: y}, {X: tx(v), Y: y + r}, {X: tx(v) + r, Y: y}, {X: tx(v), Y: y - r}})
			}
			label := l.name + ": " + metabolic.Significant(l.low, 3)
			if l.high > l.low {
				label += " to " + metabolic.Significant(l.high, 3)
			}
			if l.drafted {
				label += " (drafted)"
			}
			// The text goes to the side with more room.
			at, align := vg.Point{X: tx(l.high) + vg.Points(7), Y: y}, text.XLeft
			if wide := textWidth(sizeSmall, l.drafted, label); at.X+wide > c.Max.X {
				at, align = vg.Point{X: tx(l.low) - vg.Points(7), Y: y}, text.XRight
			}
			writeText(c, sizeSmall, l.drafted, align, text.YCenter, at, label)
		}
	}))
	return p
}

package reports

import (
	"math"
	"strings"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"tayra/dose"
)

// severalHeight is how many points the figure of several models needs.
func severalHeight(w *dose.Worksheet) float64 {
	if w.Several == nil {
		return 0
	}
	return 50 + 13.5*float64(len(w.Several.Models)+2)
}

// severalPlot is the drafted daily amount from each model on a log axis, with
// the mean and the ranges of the summary. Nil for one model.
func severalPlot(w *dose.Worksheet) *plot.Plot {
	s := w.Several
	if s == nil {
		return nil
	}
	unit := strings.TrimSuffix(s.Unit, "/day")
	low, high := math.Min(s.Low, s.Range90.Low), math.Max(s.High, s.Range90.High)
	p := newPlot()
	logAxis(&p.X, low/1.2, high*1.2)
	p.X.Label.Text = "drafted daily amount, " + paperUnits(s.Unit) + ", log scale"
	rows := float64(len(s.Models) + 2)
	labels := []sideLabel{
		{row: rows - 0.5, text: "nine times in ten: " + dailyPair(&dose.Pair{s.Range90.Low, s.Range90.High}, unit)},
		{row: rows - 1.5, text: "as likely as not: " + dailyPair(&dose.Pair{s.Range50.Low, s.Range50.High}, unit)},
	}
	from := draftedModel(w)
	for i, m := range s.Models {
		l := sideLabel{row: rows - 2.5 - float64(i), text: animalWords(m.CommonName, m.Model) + ": " + dailyWords(m.DraftedDaily, unit)}
		if from != nil && from == &w.Drafts[i] {
			l.text, l.bold = "drafted from, "+l.text, true
		}
		labels = append(labels, l)
	}
	sideLabels(p, rows, labels)
	p.Add(drawing(func(c draw.Canvas, p *plot.Plot) {
		tx, ty := p.Transforms(&c)
		mean := tx(s.MeanDailyPerKg)
		c.StrokeLine2(lineStyle(0.6, 1), mean, ty(0), mean, ty(rows))
		open := bar(ty(rows-0.5), vg.Points(4), tx(s.Range90.Low), tx(s.Range90.High))
		c.FillPolygon(paperWhite, open)
		c.StrokeLines(lineStyle(0.9, 0), open)
		c.FillPolygon(ink, bar(ty(rows-1.5), vg.Points(4), tx(s.Range50.Low), tx(s.Range50.High)))
		for i, m := range s.Models {
			r := vg.Points(2.8)
			if from != nil && from == &w.Drafts[i] {
				r = vg.Points(4)
			}
			diamond(c, vg.Point{X: tx(m.DraftedDaily), Y: ty(rows - 2.5 - float64(i))}, r)
		}
	}))
	return p
}

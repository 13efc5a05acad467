package reports

import (
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"tayra/dose"
	"tayra/metabolic"
)

// severalHeight is how many points the figure of several models needs.
func severalHeight(w *dose.Worksheet) float64 {
	if w.Several == nil {
		return 0
	}
	return 58 + 15*float64(len(w.Several.Models))
}

// severalPlot is the drafted daily amount from each model on a log axis, with
// the mean and the nine-in-ten range of the summary. Nil for one model.
func severalPlot(w *dose.Worksheet) *plot.Plot {
	s := w.Several
	if s == nil {
		return nil
	}
	low, high := math.Min(s.Low, s.Range90.Low), math.Max(s.High, s.Range90.High)
	p := newPlot()
	p.HideY()
	logAxis(&p.X, low/1.2, high*1.2)
	p.X.Label.Text = "drafted daily amount, " + s.Unit + ", log scale"
	rows := float64(len(s.Models) + 1)
	p.Y.Min, p.Y.Max = 0, rows
	p.Add(drawing(func(c draw.Canvas, p *plot.Plot) {
		tx, ty := p.Transforms(&c)
		y := ty(rows - 0.5)
		h := vg.Points(5)
		c.StrokeLines(lineStyle(0.8, 0), []vg.Point{{X: tx(s.Range90.Low), Y: y - h}, {X: tx(s.Range90.High), Y: y - h}, {X: tx(s.Range90.High), Y: y + h}, {X: tx(s.Range90.Low), Y: y + h}, {X: tx(s.Range90.Low), Y: y - h}})
		c.StrokeLine2(lineStyle(0.6, 1), tx(s.MeanDailyPerKg), ty(0), tx(s.MeanDailyPerKg), y+h)
		writeText(c, sizeSmall, false, text.XLeft, text.YCenter, vg.Point{X: tx(s.MeanDailyPerKg) + vg.Points(4), Y: y}, "mean "+metabolic.Significant(s.MeanDailyPerKg, 3)+", bar: nine in ten")
		for i, m := range s.Models {
			y := ty(rows - 1.5 - float64(i))
			r := vg.Points(3)
			x := tx(m.DraftedDaily)
			c.FillPolygon(ink, []vg.Point{{X: x - r, Y: y}, {X: x, Y: y + r}, {X: x + r, Y: y}, {X: x, Y: y - r}})
			name := m.CommonName
			if name == "" {
				name = m.Model
			}
			bold := w.DraftedFrom != nil && w.Drafts[w.DraftedFrom.Index].Model == m.Model
			label := name + ": " + metabolic.Significant(m.DraftedDaily, 3)
			if bold {
				label += " (drafted from)"
			}
			at, align := vg.Point{X: x + vg.Points(7), Y: y}, text.XLeft
			if at.X+textWidth(sizeSmall, bold, label) > c.Max.X {
				at, align = vg.Point{X: x - vg.Points(7), Y: y}, text.XRight
			}
			writeText(c, sizeSmall, bold, align, text.YCenter, at, label)
		}
	}))
	return p
}

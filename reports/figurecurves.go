package reports

import (
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"tayra/dose"
	"tayra/metabolic"
)

// curvePoints is how many even points a curve is sampled at.
const curvePoints = 500

// shownCurves are the courses that the figure draws: the model's own regimen,
// the drafted one and the proposed one. The other plans stand in the table;
// five lines over each other would show none.
func shownCurves(w *dose.Worksheet) []*dose.Curve {
	var out []*dose.Curve
	for i := range w.Curves {
		cv := &w.Curves[i]
		switch {
		case cv.Name == "model", cv.Name == "proposed", cv.Name == string(dose.PlanOnce),
			w.Drafted != nil && cv.Name == w.Drafted.Plan:
			out = append(out, cv)
		}
	}
	return out
}

// curvesPlot is concentration over time from the first dose, with the target as
// a line across. Nil where no course can be drawn.
func curvesPlot(w *dose.Worksheet) *plot.Plot {
	curves := shownCurves(w)
	if len(curves) == 0 {
		return nil
	}
	// Long enough for the slowest to come near its steady state, and for at
	// least three doses of each.
	span, longest := 0.0, 0.0
	for _, cv := range curves {
		s := 5 * cv.HalfLifeH
		if cv.IntervalH != nil {
			s = math.Max(s, 3**cv.IntervalH)
			longest = math.Max(longest, *cv.IntervalH)
		}
		span = math.Max(span, s)
	}
	if longest > 0 {
		span = math.Min(span, 12*longest)
		span = math.Ceil(span/longest-1e-9) * longest
	}
	p := newPlot()
	p.X.Label.Text = "hours after the first dose"
	p.Add(axisName("concentration, " + paperUnits(curves[0].Unit)))
	p.X.Tick.Marker, p.Y.Tick.Marker = hourTicks{span}, evenTicks{}
	p.X.Min, p.X.Max = 0, span*1.3 // room for the names at the lines
	top := 0.0
	xys := make([]plotter.XYs, len(curves))
	for i, cv := range curves {
		// The last dose of the span belongs to the time after it.
		for _, q := range cv.Points(0, span*(1-1e-6), curvePoints) {
			xys[i] = append(xys[i], plotter.XY{X: q.H, Y: q.C})
			top = math.Max(top, q.C)
		}
		// A record that was read back has the numbers of a course, not the course.
		if len(xys[i]) == 0 || !(top > 0) {
			return nil
		}
	}
	if w.Target != nil && curves[0].Unit == w.Target.Unit {
		top = math.Max(top, w.Target.PerLitre)
	}
	p.Y.Min, p.Y.Max = 0, top*1.08
	for i := range curves {
		width := 0.9
		if w.Drafted != nil && curves[i].Name == w.Drafted.Plan {
			width = 1.5
		}
		p.Add(curve(xys[i], lineStyle(width, curveDash(curves[i].Name))))
	}
	p.Add(drawing(func(c draw.Canvas, p *plot.Plot) {
		tx, ty := p.Transforms(&c)
		// Names at the ends of the lines, moved apart, with a leader.
		ls := make([]labelled, len(curves))
		for i, cv := range curves {
			last := xys[i][len(xys[i])-1]
			ls[i] = labelled{y: ty(last.Y), from: ty(last.Y), text: curveLabel(w, cv), dash: curveDash(cv.Name), bold: w.Drafted != nil && cv.Name == w.Drafted.Plan}
		}
		if w.Target != nil && curves[0].Unit == w.Target.Unit {
			y := ty(w.Target.PerLitre)
			c.StrokeLine2(lineStyle(0.7, dashTarget), c.Min.X, y, tx(span), y)
			ls = append(ls, labelled{y: y, from: y, text: "target " + metabolic.Significant(w.Target.PerLitre, 3) + " " + paperUnits(w.Target.Unit), dash: dashTarget})
		}
		gap := vg.Points(sizeSmall * 1.35)
		spreadLabels(ls, gap, c.Min.Y+gap/2, c.Max.Y-gap/2)
		for _, l := range ls {
			x := tx(span)
			c.StrokeLine2(lineStyle(0.4, 0), x+1, l.from, x+vg.Points(10), l.y)
			c.StrokeLine2(lineStyle(1, l.dash), x+vg.Points(10), l.y, x+vg.Points(30), l.y)
			writeText(c, sizeSmall, l.bold, text.XLeft, text.YCenter, vg.Point{X: x + vg.Points(34), Y: l.y}, l.text)
		}
	}))
	return p
}

// curveLabel is the short name of a course at its line.
func curveLabel(w *dose.Worksheet, cv *dose.Curve) string {
	switch {
	case cv.Name == "model":
		from := &w.Drafts[w.DraftedFrom.Index]
		name := from.CommonName
		if name == "" {
			name = from.Model
		}
		return "model (" + name + ")"
	case cv.Name == "proposed":
		return "proposed"
	case cv.Name == string(dose.PlanOnce):
		return cv.Label
	}
	return "drafted"
}

// curveDash gives each kind of regimen its own dashes.
func curveDash(name string) int {
	switch name {
	case "model":
		return 1
	case "proposed":
		return 2
	}
	return 0
}

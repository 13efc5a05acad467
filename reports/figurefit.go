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

// fitPlot is the animals of a fitted line with their names, the line, its
// confidence and prediction bands, the line with the usual exponent, and the
// target. The area of a point grows with its leverage.
func fitPlot(f *dose.FitRecord) *plot.Plot {
	line := f.Line()
	if line == nil || len(f.Points) == 0 {
		return nil
	}
	p := newPlot()
	p.X.Label.Text = "body mass, kg"
	p.Add(axisName(parameterWords(f.Parameter) + ", " + paperUnits(f.Unit)))
	lowX, highX := f.AtTarget.MassKg, f.AtTarget.MassKg
	lowY, highY := f.AtTarget.PI95[0], f.AtTarget.PI95[1]
	for _, q := range f.Points {
		lowX, highX = math.Min(lowX, q.MassKg), math.Max(highX, q.MassKg)
		lowY, highY = math.Min(lowY, q.Value), math.Max(highY, q.Value)
	}
	// A target interval of many decades would squeeze the data to a line.
	lowData, highData := math.Inf(1), 0.0
	for _, q := range f.Points {
		lowData, highData = math.Min(lowData, q.Value), math.Max(highData, q.Value)
	}
	lowY, highY = math.Max(lowY, lowData/1e3), math.Min(highY, highData*1e3)
	logAxis(&p.X, lowX/1.6, highX*1.6)
	logAxis(&p.Y, lowY/1.5, highY*1.5)
	const n = 80
	var mid, ciL, ciH, piL, piH, fixed plotter.XYs
	for i := 0; i <= n; i++ {
		x := p.X.Min * math.Pow(p.X.Max/p.X.Min, float64(i)/n)
		e, err := line.At(x)
		if err != nil {
			continue
		}
		mid = append(mid, plotter.XY{X: x, Y: e.Value})
		ciL, ciH = append(ciL, plotter.XY{X: x, Y: e.CI95[0]}), append(ciH, plotter.XY{X: x, Y: e.CI95[1]})
		piL, piH = append(piL, plotter.XY{X: x, Y: e.PI95[0]}), append(piH, plotter.XY{X: x, Y: e.PI95[1]})
		fixed = append(fixed, plotter.XY{X: x, Y: f.Fixed.A * math.Pow(x, f.Fixed.Exponent)})
	}
	var keys []key
	named := func(name string, st draw.LineStyle, xs ...plotter.XYs) {
		for _, x := range xs {
			p.Add(curve(x, st))
		}
		keys = append(keys, key{name, st})
	}
	named("fitted line, exponent "+metabolic.Significant(f.B, 3), lineStyle(1.4, 0), mid)
	named("95 % confidence of the line", lineStyle(0.8, 1), ciL, ciH)
	named("95 % prediction of one animal", lineStyle(0.8, 2), piL, piH)
	named("exponent "+metabolic.Significant(f.Fixed.Exponent, 3)+" through the same animals", lineStyle(0.7, 3), fixed)
	p.Add(keyAt(keys))
	p.Add(drawing(func(c draw.Canvas, p *plot.Plot) {
		tx, ty := p.Transforms(&c)
		for _, q := range f.Points {
			at := vg.Point{X: tx(q.MassKg), Y: ty(q.Value)}
			r := vg.Points(1.8 + 3.5*math.Sqrt(math.Max(0, math.Min(1, q.Leverage))))
			c.DrawGlyph(draw.GlyphStyle{Color: ink, Radius: r, Shape: draw.RingGlyph{}}, at)
			if len(f.Points) > mostNamed {
				continue
			}
			// Below and to the right of its mark a name keeps out of a line
			// that rises; at the right edge it goes to the left, above.
			align, x, y := text.XLeft, at.X+r+vg.Points(3), at.Y-vg.Points(9)
			if x+textWidth(sizeSmall, false, q.Species) > c.Max.X {
				align, x, y = text.XRight, at.X-r-vg.Points(3), at.Y+vg.Points(9)
			}
			groundedText(c, false, align, vg.Point{X: x, Y: y}, q.Species)
		}
		x := tx(f.AtTarget.MassKg)
		y := func(v float64) vg.Length {
			return vg.Length(math.Max(float64(c.Min.Y), math.Min(float64(c.Max.Y), float64(ty(v)))))
		}
		c.StrokeLine2(lineStyle(1.2, 0), x, y(f.AtTarget.PI95[0]), x, y(f.AtTarget.PI95[1]))
		at, r := vg.Point{X: x, Y: y(f.AtTarget.Value)}, vg.Points(4)
		point(c, shapeDiamond, at, r)
		align, lx := text.XRight, x-vg.Points(8)
		if lx-textWidth(sizeSmall, true, "target") < c.Min.X {
			align, lx = text.XLeft, x+vg.Points(8)
		}
		groundedText(c, true, align, vg.Point{X: lx, Y: at.Y + vg.Points(9)}, "target")
	}))
	return p
}

// mostNamed is how many animals have their names in the figure: more would hide
// each other.
const mostNamed = 20

// groundedText sets a text on a ground of paper, which keeps lines out of its
// letters.
func groundedText(c draw.Canvas, heavy bool, x text.XAlignment, at vg.Point, s string) {
	w, left := textWidth(sizeSmall, heavy, s), at.X
	if x == text.XRight {
		left -= w
	}
	c.FillPolygon(paperWhite, bar(at.Y, vg.Points(sizeSmall*0.55), left-1, left+w+1))
	writeText(c, sizeSmall, heavy, x, text.YCenter, at, s)
}

func parameterWords(p dose.Parameter) string {
	switch p {
	case dose.HalfLife:
		return "half-life"
	case dose.Volume:
		return "volume of distribution"
	case dose.DoseGiven:
		return "dose"
	}
	return "clearance"
}

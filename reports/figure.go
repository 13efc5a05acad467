// The figures of a worksheet. They read in black and white after a bad
// photocopy: lines differ by dashes and carry their names at the line, points
// differ by shape, and no colour carries meaning alone. A figure shows what the
// record holds and computes nothing but where to put it.

package reports

import (
	"image/color"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"tayra/metabolic"
)

var (
	ink        = color.Gray{0}
	paperWhite = color.Gray{255}
	grey       = color.Gray{110} // drawn thin: lost in a bad copy, and then nothing is lost
)

// dashes tell lines apart, in the order in which they are needed.
var dashes = [][]vg.Length{
	nil,
	{vg.Points(6), vg.Points(3)},
	{vg.Points(1.5), vg.Points(2)},
	{vg.Points(8), vg.Points(2), vg.Points(1.5), vg.Points(2)},
	{vg.Points(3), vg.Points(1.5)},
	{vg.Points(10), vg.Points(4)},
	{vg.Points(1), vg.Points(3)}, // dashTarget
}

// dashTarget is of a line that is no course.
const dashTarget = 6

func lineStyle(width float64, dash int) draw.LineStyle {
	return draw.LineStyle{Color: ink, Width: vg.Points(width), Dashes: dashes[dash%len(dashes)]}
}

// plainTicks are ticks with plain numbers: 1, 2 and 5 of every decade on a log
// axis that spans few, powers of ten on one that spans many.
type plainTicks struct{}

// Ticks implements plot.Ticker.
func (plainTicks) Ticks(min, max float64) []plot.Tick {
	if !(min > 0) || !(max > min) {
		return nil
	}
	decades := math.Log10(max / min)
	steps := []float64{1, 2, 5}
	label := func(m float64) bool { return true }
	every := 1
	switch {
	case decades > 8:
		every = 2
		fallthrough
	case decades > 4:
		steps = []float64{1}
	case decades > 2.5:
		label = func(m float64) bool { return m == 1 }
		if decades < 3.2 {
			label = func(m float64) bool { return m == 1 || m == 3 }
			steps = []float64{1, 3}
		}
	}
	var out []plot.Tick
	for e := math.Floor(math.Log10(min)); e <= math.Ceil(math.Log10(max)); e++ {
		for _, m := range steps {
			v := m * math.Pow(10, e)
			if v < min*(1-1e-9) || v > max*(1+1e-9) {
				continue
			}
			t := plot.Tick{Value: v}
			if label(m) && int(math.Abs(e))%every == 0 {
				t.Label = metabolic.Significant(v, 3)
			}
			out = append(out, t)
		}
	}
	return out
}

// evenTicks are about five plain numbers on a linear axis.
type evenTicks struct{}

// Ticks implements plot.Ticker.
func (evenTicks) Ticks(min, max float64) []plot.Tick {
	if !(max > min) {
		return nil
	}
	step := math.Pow(10, math.Floor(math.Log10((max-min)/4)))
	for _, m := range []float64{1, 2, 2.5, 5, 10} {
		if (max-min)/(step*m) <= 6 {
			step *= m
			break
		}
	}
	var out []plot.Tick
	for v := math.Ceil(min/step) * step; v <= max+step*1e-9; v += step {
		out = append(out, plot.Tick{Value: v, Label: metabolic.Significant(v, 4)})
	}
	return out
}

// hourTicks are clock times: every 6, 12, 24 hours and so on, up to an end.
type hourTicks struct{ end float64 }

// Ticks implements plot.Ticker.
func (t hourTicks) Ticks(min, max float64) []plot.Tick {
	max = math.Min(max, t.end)
	step := 1.0
	for _, s := range []float64{1, 2, 3, 4, 6, 12, 24, 48, 72, 96, 168, 336, 672, 1344, 2688} {
		step = s
		if (max-min)/s <= 9 {
			break
		}
	}
	var out []plot.Tick
	for v := math.Ceil(min/step) * step; v <= max+1e-9; v += step {
		out = append(out, plot.Tick{Value: v, Label: metabolic.Significant(v, 5)})
	}
	return out
}

// logAxis makes an axis logarithmic with plain numbers.
func logAxis(a *plot.Axis, low, high float64) {
	a.Scale, a.Tick.Marker = plot.LogScale{}, plainTicks{}
	a.Min, a.Max = low, high
}

// drawing is a plotter made of one function: for what the library has no
// plotter, such as bars of a range and texts that keep out of each other's way.
type drawing func(c draw.Canvas, p *plot.Plot)

// Plot implements plot.Plotter.
func (d drawing) Plot(c draw.Canvas, p *plot.Plot) { d(c, p) }

// writeText sets one text of a figure.
func writeText(c draw.Canvas, size float64, heavy bool, x text.XAlignment, y text.YAlignment, at vg.Point, s string) {
	st := plotStyle(size, heavy)
	st.XAlign, st.YAlign = x, y
	c.FillText(st, at, s)
}

func textWidth(size float64, heavy bool, s string) vg.Length { return plotStyle(size, heavy).Width(s) }

// labelled is a text that belongs to a height of the figure.
type labelled struct {
	y    vg.Length // where it goes
	from vg.Length // where it belongs
	text string
	bold bool
	dash int
}

// spreadLabels moves labels apart, keeping their order, so that none stands on
// another: at least gap between neighbours, inside low to high.
func spreadLabels(ls []labelled, gap, low, high vg.Length) {
	for i := 1; i < len(ls); i++ {
		for k := i; k > 0 && ls[k].y < ls[k-1].y; k-- {
			ls[k], ls[k-1] = ls[k-1], ls[k]
		}
	}
	for i := 1; i < len(ls); i++ {
		if ls[i].y < ls[i-1].y+gap {
			ls[i].y = ls[i-1].y + gap
		}
	}
	if n := len(ls); n > 0 && ls[n-1].y > high {
		ls[n-1].y = high
		for i := n - 2; i >= 0 && ls[i].y > ls[i+1].y-gap; i-- {
			ls[i].y = ls[i+1].y - gap
		}
	}
	if len(ls) > 0 && ls[0].y < low {
		ls[0].y = low
		for i := 1; i < len(ls) && ls[i].y < ls[i-1].y+gap; i++ {
			ls[i].y = ls[i-1].y + gap
		}
	}
}

// curve draws a line through points, cut at the edges of the figure.
func curve(xys plotter.XYs, st draw.LineStyle) drawing {
	return func(c draw.Canvas, p *plot.Plot) {
		tx, ty := p.Transforms(&c)
		pts := make([]vg.Point, 0, len(xys))
		for _, q := range xys {
			pts = append(pts, vg.Point{X: tx(q.X), Y: ty(q.Y)})
		}
		c.StrokeLines(st, c.ClipLinesXY(pts)...)
	}
}

// sideLabel is a text left of a row of a figure.
type sideLabel struct {
	row  float64 // on the y axis
	text string
	bold bool
}

// sideLabels turns the y axis of a plot into rows that carry their texts at the
// left, where no mark can run into them.
func sideLabels(p *plot.Plot, rows float64, labels []sideLabel) {
	p.HideY()
	p.Y.Min, p.Y.Max = 0, rows
	const air = 8 // points between a text and the figure
	widest := vg.Length(0)
	for _, l := range labels {
		widest = max(widest, textWidth(sizeSmall, l.bold, l.text))
	}
	p.Y.Padding = widest + vg.Points(air)
	p.Add(drawing(func(c draw.Canvas, p *plot.Plot) {
		_, ty := p.Transforms(&c)
		for _, l := range labels {
			writeText(c, sizeSmall, l.bold, text.XRight, text.YCenter, vg.Point{X: c.Min.X - vg.Points(air), Y: ty(l.row)}, l.text)
		}
	}))
}

// axisName is the name of an upright axis, set level above it: it is read
// without turning the sheet, and the library misplaces a turned one on a log
// axis.
type axisName string

// Plot implements plot.Plotter.
func (n axisName) Plot(c draw.Canvas, p *plot.Plot) {
	writeText(c, sizeSmall, false, text.XLeft, text.YBottom, vg.Point{X: c.Min.X, Y: c.Max.Y + vg.Points(4)}, string(n))
}

// GlyphBoxes implements plot.GlyphBoxer: it asks for room above the figure.
func (n axisName) GlyphBoxes(*plot.Plot) []plot.GlyphBox {
	return []plot.GlyphBox{{X: 0, Y: 1, Rectangle: vg.Rectangle{Max: vg.Point{X: 1, Y: vg.Points(4 + sizeSmall*1.2)}}}}
}

// pointShape is the form of a mark: figures tell marks apart by form, not by
// colour.
type pointShape int

const (
	shapeDiamond pointShape = iota
	shapeSquare
	shapeTriangle
)

// point fills a mark of radius r, with a rim of paper around it that keeps it
// apart from what lies behind.
func point(c draw.Canvas, s pointShape, at vg.Point, r vg.Length) {
	corners := func(r vg.Length) []vg.Point {
		switch s {
		case shapeSquare:
			r *= 0.85
			return []vg.Point{{X: at.X - r, Y: at.Y - r}, {X: at.X - r, Y: at.Y + r}, {X: at.X + r, Y: at.Y + r}, {X: at.X + r, Y: at.Y - r}}
		case shapeTriangle:
			return []vg.Point{{X: at.X - r, Y: at.Y - r*0.8}, {X: at.X, Y: at.Y + r}, {X: at.X + r, Y: at.Y - r*0.8}}
		}
		return []vg.Point{{X: at.X - r, Y: at.Y}, {X: at.X, Y: at.Y + r}, {X: at.X + r, Y: at.Y}, {X: at.X, Y: at.Y - r}}
	}
	c.FillPolygon(paperWhite, corners(r+vg.Points(1.2)))
	c.FillPolygon(ink, corners(r))
}

// diamond fills a mark for one value.
func diamond(c draw.Canvas, at vg.Point, r vg.Length) {
	c.FillPolygon(ink, []vg.Point{{X: at.X - r, Y: at.Y}, {X: at.X, Y: at.Y + r}, {X: at.X + r, Y: at.Y}, {X: at.X, Y: at.Y - r}})
}

// bar returns the corners of a bar from a to b.
func bar(y, half, a, b vg.Length) []vg.Point {
	return []vg.Point{{X: a, Y: y - half}, {X: b, Y: y - half}, {X: b, Y: y + half}, {X: a, Y: y + half}, {X: a, Y: y - half}}
}

// key is one line of the key to a figure.
type key struct {
	name string
	st   draw.LineStyle
}

// keyAt writes the key to a figure into its upper left corner, which is empty
// where what is shown rises to the right.
func keyAt(keys []key) drawing {
	return func(c draw.Canvas, p *plot.Plot) {
		for i, k := range keys {
			y := c.Max.Y - vg.Points(6+float64(i)*sizeSmall*1.45)
			c.StrokeLine2(k.st, c.Min.X+vg.Points(8), y, c.Min.X+vg.Points(36), y)
			writeText(c, sizeSmall, false, text.XLeft, text.YCenter, vg.Point{X: c.Min.X + vg.Points(41), Y: y}, k.name)
		}
	}
}

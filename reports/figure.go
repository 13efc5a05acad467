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
}

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

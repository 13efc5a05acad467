package reports

import (
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"tayra/metabolic"
	"tayra/species"
)

// rateMark is an animal marked in the figure of rates.
type rateMark struct {
	name string
	mass float64 // kg
	watt float64
	bold bool
}

// rateLineDrawn is a line of the figure of rates.
type rateLineDrawn struct {
	name string
	at   func(massKg float64) float64 // W; NaN where it has no value
	dash int
}

// ratePlot is the measured animals of a class on log axes, the lines used and
// the animals in question. Rates of ectotherms are shown as measured, each at
// its own body temperature: the axis says so.
func ratePlot(class string, lines []rateLineDrawn, marks []rateMark) *plot.Plot {
	p := newPlot()
	p.X.Label.Text = "body mass, kg"
	name := "metabolic rate, kcal/day"
	if class == "Reptilia" || class == "Amphibia" {
		name += ", each at the temperature it was measured at"
	}
	kcal := func(w float64) float64 { return metabolic.Power(w).KcalPerDay() }
	lowM, highM, lowB, highB := math.Inf(1), 0.0, math.Inf(1), 0.0
	take := func(m, b float64) {
		lowM, highM = math.Min(lowM, m), math.Max(highM, m)
		lowB, highB = math.Min(lowB, b), math.Max(highB, b)
	}
	var pts plotter.XYs
	for _, a := range species.All() {
		if a.Class != class {
			continue
		}
		if m, ok := species.MeasuredRate(a); ok && m.Flag == "" {
			x, y := float64(m.Mass), kcal(float64(m.Rate))
			pts = append(pts, plotter.XY{X: x, Y: y})
			take(x, y)
		}
	}
	for _, m := range marks {
		take(m.mass, kcal(m.watt))
	}
	if len(pts) == 0 && len(marks) == 0 {
		return nil
	}
	logAxis(&p.X, lowM/1.5, highM*1.5)
	logAxis(&p.Y, lowB/1.5, highB*6) // room for the key
	p.Add(drawing(func(c draw.Canvas, p *plot.Plot) {
		tx, ty := p.Transforms(&c)
		// One path for all: a class has up to a thousand.
		const r = vg.Length(1.1)
		path := make(vg.Path, 0, 5*len(pts))
		for _, q := range pts {
			x, y := tx(q.X), ty(q.Y)
			path.Move(vg.Point{X: x - r, Y: y})
			path.Line(vg.Point{X: x, Y: y + r})
			path.Line(vg.Point{X: x + r, Y: y})
			path.Line(vg.Point{X: x, Y: y - r})
			path.Close()
		}
		c.SetColor(grey)
		c.Fill(path)
	}))
	var keys []key
	for _, l := range lines {
		var xys plotter.XYs
		const n = 60
		for i := 0; i <= n; i++ {
			m := p.X.Min * math.Pow(p.X.Max/p.X.Min, float64(i)/n)
			if b := kcal(l.at(m)); b > 0 && !math.IsInf(b, 0) {
				xys = append(xys, plotter.XY{X: m, Y: b})
			}
		}
		if len(xys) > 1 {
			p.Add(curve(xys, lineStyle(1.1, l.dash)))
			keys = append(keys, key{l.name, lineStyle(1.1, l.dash)})
		}
	}
	p.Add(keyAt(keys), axisName(name))
	// Their key stands in the lower right corner, which rates that rise with
	// mass leave empty. The first mark, the animal in question, lies on top.
	p.Add(drawing(func(c draw.Canvas, p *plot.Plot) {
		tx, ty := p.Transforms(&c)
		widest := vg.Length(0)
		for _, m := range marks {
			widest = max(widest, textWidth(sizeSmall, m.bold, m.name))
		}
		x := c.Max.X - widest - vg.Points(4)
		for i := len(marks) - 1; i >= 0; i-- {
			m := marks[i]
			y := c.Min.Y + vg.Points(8+float64(len(marks)-1-i)*sizeSmall*1.5)
			point(c, pointShape(i), vg.Point{X: tx(m.mass), Y: ty(kcal(m.watt))}, vg.Points(4.5))
			point(c, pointShape(i), vg.Point{X: x - vg.Points(9), Y: y}, vg.Points(4.5))
			writeText(c, sizeSmall, m.bold, text.XLeft, text.YCenter, vg.Point{X: x, Y: y}, m.name)
		}
	}))
	return p
}

// linesOfAnimal are the lines that an animal's group and class are held
// against, at its temperature.
func linesOfAnimal(a *species.Animal, t metabolic.Celsius, q10 float64) []rateLineDrawn {
	var out []rateLineDrawn
	add := func(name string, dash int, at func(m metabolic.Mass) (metabolic.Power, error)) {
		out = append(out, rateLineDrawn{name: name, dash: dash, at: func(kg float64) float64 {
			b, err := at(metabolic.Mass(kg))
			if err != nil {
				return math.NaN()
			}
			return float64(b)
		}})
	}
	where := ""
	if !a.Endotherm() {
		where = " at " + metabolic.FormatCelsius(t)
	}
	if eq, ok := metabolic.GroupConstant(a.Group); ok {
		add("group constant, "+a.Group+where, 0, func(m metabolic.Mass) (metabolic.Power, error) { return eq.Rate(m, t, q10) })
	}
	if eq, ok := metabolic.DefaultEquation(a.Group); ok && eq.Applies(a.Group, a.Name) {
		add("equation "+eq.ID+where, 1, func(m metabolic.Mass) (metabolic.Power, error) { return eq.Rate(m, t, q10) })
	}
	if _, err := species.Relatives(a, 1, t); err == nil {
		add("relatives of this animal"+where, 2, func(m metabolic.Mass) (metabolic.Power, error) {
			p, err := species.Relatives(a, m, t)
			if err != nil {
				return 0, err
			}
			return p.Rate, nil
		})
	}
	return out
}

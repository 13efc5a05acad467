package page

import (
	"math"
	"strconv"
	"strings"

	"tayra/dose"
	"tayra/metabolic"
)

// course is the drawing of the concentrations from the first dose on. Lines are
// drawn in a square of 0 to 100 that the page stretches; the words around them
// are text of the page.
type course struct {
	Lines   []courseLine
	Target  *level
	Hours   []tick // along the foot
	Levels  []tick // up the side
	Unit    string
	Caption string
}

// courseLine is one regimen. Kind names how it is drawn: model, drafted,
// proposed.
type courseLine struct{ Kind, Label, Path string }

// level is a concentration drawn across.
type level struct{ At, Text string }

const coursePoints = 240

// newCourse draws the model's own regimen, the drafted one and the proposed one;
// the other plans stand in the table. It is nil without a half-life, and nil
// after a stop.
func newCourse(ws *dose.Worksheet) *course {
	if ws.Drafted == nil {
		return nil
	}
	var curves []*dose.Curve
	span, longest := 0.0, 0.0
	for i := range ws.Curves {
		c := &ws.Curves[i]
		if courseKind(ws, c) == "" {
			continue
		}
		curves = append(curves, c)
		// Long enough for the slowest to come near its steady state, and for
		// three doses of each.
		of := 5 * c.HalfLifeH
		if c.IntervalH != nil {
			of = math.Max(of, 3**c.IntervalH)
			longest = math.Max(longest, *c.IntervalH)
		}
		span = math.Max(span, of)
	}
	if len(curves) == 0 {
		return nil
	}
	if longest > 0 {
		span = math.Ceil(math.Min(span, 12*longest)/longest-1e-9) * longest
	}
	top := 0.0
	points := make([][]dose.CurvePoint, len(curves))
	for i, c := range curves {
		points[i] = c.Points(0, span, coursePoints)
		for _, q := range points[i] {
			top = math.Max(top, q.C)
		}
	}
	out := &course{Unit: curves[0].Unit}
	t := ws.Target
	drawn := t != nil && t.Unit == out.Unit && t.PerLitre < 20*top
	if drawn {
		top = math.Max(top, t.PerLitre)
	}
	top *= 1.06
	up := func(c float64) float64 { return 100 - 100*c/top }
	for i, c := range curves {
		var path strings.Builder
		for k, q := range points[i] {
			path.WriteByte("ML"[min(k, 1)])
			path.WriteString(strconv.FormatFloat(100*q.H/span, 'f', 2, 64))
			path.WriteByte(' ')
			path.WriteString(strconv.FormatFloat(up(q.C), 'f', 2, 64))
		}
		out.Lines = append(out.Lines, courseLine{courseKind(ws, c), c.Label, path.String()})
	}
	if drawn {
		out.Target = &level{percent(up(t.PerLitre) / 100), "target " + metabolic.Significant(t.PerLitre, 3) + " " + t.Unit}
	}
	step := hourStep(span)
	for h := 0.0; h <= span+1e-9; h += step {
		out.Hours = append(out.Hours, tick{percent(h / span), metabolic.Significant(h, 5)})
	}
	step = levelStep(top)
	for c := 0.0; c <= top; c += step {
		out.Levels = append(out.Levels, tick{percent(up(c) / 100), metabolic.Significant(c, 4)})
	}
	var names []string
	for _, l := range out.Lines {
		names = append(names, l.Label)
	}
	out.Caption = "Concentration over " + metabolic.Significant(span, 5) + " hours from the first dose: " + strings.Join(names, "; ") + ". The figures stand in the table."
	return out
}

// courseKind says how a curve is drawn, "" for one that is not.
func courseKind(ws *dose.Worksheet, c *dose.Curve) string {
	switch c.Name {
	case "model", "proposed":
		return c.Name
	case ws.Drafted.Plan:
		return "drafted"
	}
	return ""
}

// hourStep puts the hours at which doses fall on the axis, few enough for a
// narrow screen.
func hourStep(span float64) float64 {
	for _, s := range []float64{1, 2, 3, 4, 6, 12, 24, 48, 72, 96, 168, 336, 672, 1344, 2688} {
		if span/s <= 6 {
			return s
		}
	}
	return span
}

// levelStep gives about four plain numbers.
func levelStep(top float64) float64 {
	step := math.Pow(10, math.Floor(math.Log10(top/4)))
	for _, m := range []float64{1, 2, 2.5, 5} {
		if top/(step*m) <= 5 {
			return step * m
		}
	}
	return step * 10
}

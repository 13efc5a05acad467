package page

import (
	"math"
	"strconv"

	"tayra/dose"
	"tayra/metabolic"
)

// strip is the dose under every basis and exponent on one log axis, with both
// ranges of the draft, so that the eye sees whether they agree. Each line is a
// picture of its own in a row of a table: the words and numbers beside it stay
// text that wraps and grows.
type strip struct {
	Head  string // what dose the lines hold
	Lines []stripLine
	Ticks []tick
}

// stripLine is one row. From and To are its ends on the axis, in percent of the
// width; both are empty after a stop.
type stripLine struct {
	Name     string
	Specific string
	Dose     string
	Drafted  bool   // the basis that the draft uses
	Range    string // even | ninety for the two ranges, else ""
	From, To string

	low, high float64
}

// tick is a number on the axis, at a percentage of its width.
type tick struct{ At, Text string }

// newStrip is nil where the model has no other bases.
func newStrip(v *sheet) *strip {
	m := v.Model
	if m == nil || len(v.Bases)+len(v.Unavailable) == 0 {
		return nil
	}
	s := &strip{}
	if v.Drafted != nil {
		s.Head = wording[func(*dose.Worksheet) string]("basesHold")(v.Worksheet) + ". S is the ratio of rates per kg."
	}
	perKg := func(p dose.Pair) string { return wording[func(dose.Pair, string) string]("perKgPair")(p, m.Unit) }
	for i := range v.Bases {
		b := &v.Bases[i]
		l := stripLine{Name: wording[func(*dose.BasisLine, bool) string]("basis")(b, false), Specific: metabolic.FormatRatio(b.Specific),
			Drafted: wording[func(*dose.Worksheet, *dose.BasisLine) bool]("basisUsed")(v.Worksheet, b)}
		if b.DosePerKg != nil {
			l.Dose, l.low, l.high = perKg(*b.DosePerKg), b.DosePerKg[0], b.DosePerKg[1]
		}
		s.Lines = append(s.Lines, l)
	}
	for i := range v.Exponents {
		e := &v.Exponents[i]
		s.Lines = append(s.Lines, stripLine{Name: "exponent " + metabolic.FormatRatio(e.Exponent), Specific: metabolic.FormatRatio(e.Specific),
			Dose: perKg(e.DosePerKg), low: e.DosePerKg[0], high: e.DosePerKg[1]})
	}
	if d := v.Drafted; d != nil {
		for _, r := range []struct {
			name, mark string
			of         dose.DoseRange
		}{{"as likely as not", "even", d.Range50}, {"nine in ten", "ninety", d.Range90}} {
			s.Lines = append(s.Lines, stripLine{Name: r.name, Range: r.mark, Dose: perKg(dose.Pair{r.of.Low, r.of.High}), low: r.of.Low, high: r.of.High})
		}
	}
	s.place()
	return s
}

// place finds where each line stands on the axis, and the numbers on it.
func (s *strip) place() {
	low, high := math.Inf(1), math.Inf(-1)
	for _, l := range s.Lines {
		if l.low > 0 {
			low, high = math.Min(low, l.low), math.Max(high, l.high)
		}
	}
	if low > high {
		return
	}
	// Less than a doubling would blow up what does not matter; a little air
	// keeps the marks at the ends whole.
	air := math.Max(1.1, math.Sqrt(math.Max(1, 2*low/high)))
	low, high = low/air, high*air
	at := func(v float64) string { return percent(math.Log(v/low) / math.Log(high/low)) }
	for i := range s.Lines {
		if l := &s.Lines[i]; l.low > 0 {
			l.From, l.To = at(l.low), at(l.high)
		}
	}
	s.Ticks = logTicks(low, high, at)
}

// logTicks are whole decades, and 2 and 5 between them where few decades leave
// room.
func logTicks(low, high float64, at func(float64) string) []tick {
	steps := []float64{1}
	if high/low < 30 {
		steps = []float64{1, 2, 5}
	}
	var out []tick
	for e := math.Floor(math.Log10(low)); e <= math.Ceil(math.Log10(high)); e++ {
		for _, m := range steps {
			if v := m * math.Pow(10, e); v > low && v < high {
				out = append(out, tick{at(v), metabolic.Significant(v, 1)})
			}
		}
	}
	return out
}

// percent is a share of the width as an attribute of a drawing.
func percent(share float64) string { return strconv.FormatFloat(100*share, 'f', 2, 64) + "%" }

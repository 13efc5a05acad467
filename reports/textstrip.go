package reports

import (
	"math"
	"strings"

	"tayra/metabolic"
)

// strip is a log axis drawn in letters, one line a row, so that the eye sees at
// once whether doses agree.
type strip struct {
	low, high float64 // ends of the axis
	width     int
}

// newStrip makes an axis that holds every value given, with a little air at
// both ends. Values must be above 0; without any the strip draws nothing.
func newStrip(width int, values ...float64) strip {
	s := strip{low: math.Inf(1), high: math.Inf(-1), width: width}
	for _, v := range values {
		if v > 0 && !math.IsInf(v, 0) {
			s.low, s.high = math.Min(s.low, v), math.Max(s.high, v)
		}
	}
	if s.low > s.high || width < 8 {
		return strip{}
	}
	// Less than a doubling would blow up what does not matter.
	if air := math.Sqrt(math.Max(1, 2*s.low/s.high)); air > 1 {
		s.low, s.high = s.low/air, s.high*air
	}
	s.low, s.high = s.low/1.05, s.high*1.05
	return s
}

// at is the column of a value.
func (s strip) at(v float64) int {
	x := math.Log(v/s.low) / math.Log(s.high/s.low) * float64(s.width-1)
	return min(max(int(math.Round(x)), 0), s.width-1)
}

// row draws a line from low to high with a mark at each end; one mark where
// the two are equal.
func (s strip) row(low, high float64, mark, line rune) string {
	if s.width == 0 || !(low > 0) || !(high > 0) {
		return ""
	}
	out := []rune(strings.Repeat(" ", s.width))
	a, b := s.at(low), s.at(high)
	for i := a; i <= b; i++ {
		out[i] = line
	}
	out[a], out[b] = mark, mark
	return strings.TrimRight(string(out), " ")
}

// axis gives two lines: the numbers of the axis, and their ticks.
func (s strip) axis() (numbers, ticks string) {
	if s.width == 0 {
		return "", ""
	}
	line, label := []rune(strings.Repeat("─", s.width)), []rune(strings.Repeat(" ", s.width))
	// Whole decades are labelled first, then 2 and 5 between them where there
	// is room.
	put := func(v float64) {
		i := s.at(v)
		text := []rune(metabolic.Significant(v, 1))
		from := max(0, min(i-len(text)/2, s.width-len(text)))
		line[i] = '┼'
		for k := from - 1; k <= from+len(text); k++ {
			if k >= 0 && k < s.width && label[k] != ' ' {
				return
			}
		}
		copy(label[from:], text)
	}
	for _, m := range []float64{1, 2, 5} {
		for e := math.Floor(math.Log10(s.low)); e <= math.Ceil(math.Log10(s.high)); e++ {
			if v := m * math.Pow(10, e); v >= s.low && v <= s.high {
				put(v)
			}
		}
	}
	return strings.TrimRight(string(label), " "), string(line)
}

package build

import (
	"io/fs"
	"math"
	"strconv"
	"strings"

	"tayra/metabolic"
)

// Scatter makes scatter.index: for each group constant, and for each usable
// published line in each group that it covers, the root mean square of
// ln(measured/basis) over the unflagged measured rows, at the animals' own
// temperature (Q10 by default) where they are ectotherms. A line is: basis,
// equation id and group, joined by "/"; the root mean square; the rows; and
// the smallest and largest mass among them.
func Scatter(data fs.FS, out map[string][]byte) error {
	measured, err := Measured(data)
	if err != nil {
		return err
	}
	var text []string
	add := func(key string, e *metabolic.Equation, group string) {
		var sum, low, high float64
		n := 0
		for _, m := range measured {
			if m.Flag != "" || m.Group != group || !e.Applies(m.Group, m.Name) {
				continue
			}
			t := metabolic.Celsius(m.Temperature)
			if math.IsNaN(m.Temperature) {
				t = 0 // an endotherm: not used
			}
			rate, err := e.Rate(metabolic.Mass(m.Mass), t, metabolic.Q10Default)
			if err != nil {
				continue // a temperature at which the line is not used
			}
			d := math.Log(m.Rate / float64(rate))
			sum += d * d
			if n == 0 || m.Mass < low {
				low = m.Mass
			}
			high = max(high, m.Mass)
			n++
		}
		if n > 0 {
			text = append(text, strings.Join([]string{key + "/" + group, numbers(math.Sqrt(sum / float64(n))), strconv.Itoa(n), numbers(low), numbers(high)}, "\t"))
		}
	}
	for _, group := range metabolic.Groups {
		if e, ok := metabolic.GroupConstant(group); ok {
			add("group/", e, group)
		}
		for _, e := range metabolic.Equations() {
			if e.Usable() {
				add("equation/"+e.ID, e, group)
			}
		}
	}
	out["scatter.index"] = sorted(text)
	return nil
}

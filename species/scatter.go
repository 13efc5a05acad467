package species

import (
	_ "embed"
	"strconv"
	"strings"

	"tayra/metabolic"
)

//go:embed data/scatter.index
var scatterIndex string

// AssumedScatter is the standard deviation of ln rate about a basis that is
// taken where fewer than LeastScatter measured species stand behind a basis.
// It is assumed: about the largest that a group with many species has.
const (
	AssumedScatter = 0.5
	LeastScatter   = 8
)

// Scatter is how far species lie from a basis: the root mean square of
//
//	ln(measured rate / rate by the basis at the measured animals' mass and temperature)
//
// over the unflagged measured species of a group.
type Scatter struct {
	SDln    float64
	N       int  // measured species
	Assumed bool // N is under LeastScatter and SDln is AssumedScatter
	// MassLow and MassHigh bound the measured animals; 0 if there are none.
	MassLow, MassHigh metabolic.Mass
}

// ScatterOf returns the scatter of a group's species about its group constant
// (basis "group", id "") or about a published line (basis "equation", id the
// line's). The figures are generated with the tables.
func ScatterOf(basis, id, group string) Scatter {
	s := Scatter{SDln: AssumedScatter, Assumed: true}
	l, ok := line(scatterIndex, basis+"/"+id+"/"+group)
	if !ok {
		return s
	}
	c := strings.Split(l, "\t")
	s.N, _ = strconv.Atoi(c[2])
	s.MassLow, s.MassHigh = metabolic.Mass(number(c[3])), metabolic.Mass(number(c[4]))
	if s.N >= LeastScatter {
		s.SDln, s.Assumed = number(c[1]), false
	}
	return s
}

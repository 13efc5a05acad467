package species

import (
	_ "embed"
	"fmt"
	"math"
	"strconv"
	"strings"

	"tayra/metabolic"
)

//go:embed data/relatives.index
var relativesIndex string

// Prediction is the metabolic rate that measured relatives make likely for an
// animal. The fitted model is one a class,
//
//	ln rate = β₀ + β₁·ln mass (+ β₂·°C for ectotherms) + order + family + genus + residual
//
// with random intercepts by restricted maximum likelihood over the unflagged
// measured species; see metabolic.NestedFit.
type Prediction struct {
	Rate metabolic.Power
	SDln float64 // standard deviation of ln rate about it: levels not shared, residual, line
	// Levels are those that the animal shares with measured species, the
	// nearest first: "genus Myrmecophaga", "family Myrmecophagidae", "order
	// Pilosa". None: the line of the class stands alone.
	Levels []string
	N      int // measured species in the nearest of Levels; of the class if there is none
	ClassN int // measured species of the class
	// Own reports whether the animal's own measured row is among them.
	Own bool
	// MassLow and MassHigh bound the measured animals of the class.
	MassLow, MassHigh metabolic.Mass
}

// Relatives predicts the metabolic rate of an animal of mass m from the
// measured species of its genus, family, order and class. t is the body
// temperature; an endotherm's is not used. The fit was made when the tables
// were generated: here only a few numbers are read.
//
// An *UnavailableError is returned for a class with fewer than 30 measured
// species, and for an ectotherm whose temperature is outside 10 to 40 °C or a
// mass that is not above zero.
//
// In R, for the figures that the tests hold it against:
//
//	nlme::lme(log(rate) ~ log(mass), random = ~1|order/family/genus, method = "REML")
func Relatives(a *Animal, m metabolic.Mass, t metabolic.Celsius) (*Prediction, error) {
	return RelativesOf(a).At(m, t)
}

// RelativesLine is what measured relatives say of one animal, read once and
// then asked at many masses and temperatures. It may be shared and is not
// changed by use.
type RelativesLine struct {
	fit        *metabolic.NestedFit
	animal     *Animal
	prediction Prediction // all of it that does not depend on mass and temperature
	missing    string     // why there is none
}

// RelativesOf reads the line of an animal. An animal without one, for the
// reasons that [Relatives] gives, has a line that says so when it is asked.
func RelativesOf(a *Animal) *RelativesLine {
	r := &RelativesLine{animal: a}
	if !r.read() {
		r.missing = "too few measured species of the class " + or(a.Class, "of this animal")
	}
	return r
}

func (r *RelativesLine) read() bool {
	a := r.animal
	class, ok := line(relativesIndex, a.Class)
	if !ok || !plain(a.Class) {
		return false
	}
	fit, low, high := parseFit(class)
	p := Prediction{N: fit.N, ClassN: fit.N, MassLow: low, MassHigh: high}
	// The nodes from the order down: the fit's own order of them.
	path := a.Class
	ranks, names := [3]string{"order", "family", "genus"}, [3]string{a.Order, a.Family, a.Genus()}
	for i, name := range names {
		if path += "/" + name; !plain(name) {
			break
		}
		l, ok := line(relativesIndex, path)
		if !ok {
			break
		}
		node := parseNode(l)
		switch node.Order = a.Order; i {
		case 2:
			node.Genus = name
			fallthrough
		case 1:
			node.Family = a.Family
		}
		fit.Nodes = append(fit.Nodes, node)
		p.Levels = append([]string{ranks[i] + " " + name}, p.Levels...)
		p.N = node.N
	}
	if own, ok := MeasuredRate(a); ok && own.Flag == "" {
		p.Own = true
	}
	if n := len(fit.Nodes); n > 1 {
		fit.Nodes = fit.Nodes[n-1:] // a prediction leans on the deepest alone, which holds those above it
	}
	r.fit, r.prediction = fit, p
	return true
}

// At is the prediction at a mass and, for an ectotherm, a body temperature;
// its errors are those of [Relatives].
func (r *RelativesLine) At(m metabolic.Mass, t metabolic.Celsius) (*Prediction, error) {
	p := r.prediction
	var err error
	if p.Rate, p.SDln, err = r.Rate(m, t); err != nil {
		return nil, err
	}
	return &p, nil
}

// Kin is all of the prediction that does not depend on mass and temperature:
// Rate and SDln are 0. It is shared and must not be changed.
func (r *RelativesLine) Kin() *Prediction { return &r.prediction }

// Rate is the rate that At predicts, with the standard deviation of its
// logarithm.
func (r *RelativesLine) Rate(m metabolic.Mass, t metabolic.Celsius) (rate metabolic.Power, sdLn float64, err error) {
	unavailable := func(format string, args ...any) (metabolic.Power, float64, error) {
		return 0, 0, &UnavailableError{Basis: "relatives", Why: fmt.Sprintf(format, args...)}
	}
	if !(m > 0) || math.IsInf(float64(m), 1) {
		return unavailable("a mass of %v kg has no rate", float64(m))
	}
	if r.missing != "" {
		return 0, 0, &UnavailableError{Basis: "relatives", Why: r.missing}
	}
	a := r.animal
	room := [2]float64{math.Log(float64(m)), float64(t)}
	covariates := room[:1]
	if !a.Endotherm() {
		if err := metabolic.CheckEctotherm(t); err != nil {
			return unavailable("%v", err)
		}
		covariates = room[:2]
	}
	predicted, err := r.fit.Predict(a.Order, a.Family, a.Genus(), covariates)
	if err != nil {
		return unavailable("%v", err)
	}
	return metabolic.Power(math.Exp(predicted.Mean)), predicted.SD, nil
}

// plain reports whether a rank's name cannot be mistaken for a path of names.
func plain(name string) bool { return name != "" && !strings.ContainsAny(name, "/\t\n") }

func or(s, other string) string {
	if s == "" {
		return other
	}
	return s
}

// parseFit reads a class line; see build.Relatives.
func parseFit(l string) (fit *metabolic.NestedFit, low, high metabolic.Mass) {
	c := strings.Split(l, "\t")
	fit = &metabolic.NestedFit{
		VarOrder: number(c[4]), VarFamily: number(c[5]), VarGenus: number(c[6]), VarResidual: number(c[7]),
		Beta: vector(c[8]),
	}
	fit.N, _ = strconv.Atoi(c[1])
	cov, p := vector(c[9]), len(fit.Beta)
	for i := range p {
		fit.CovBeta = append(fit.CovBeta, cov[i*p:(i+1)*p])
	}
	return fit, metabolic.Mass(number(c[2])), metabolic.Mass(number(c[3]))
}

// parseNode reads a node line; see build.Relatives.
func parseNode(l string) metabolic.NestedNode {
	c := strings.Split(l, "\t")
	n := metabolic.NestedNode{Shared: number(c[2]), Explained: number(c[3]), Loading: vector(c[4])}
	n.N, _ = strconv.Atoi(c[1])
	return n
}

func vector(s string) []float64 {
	var out []float64
	for _, f := range strings.Fields(s) {
		out = append(out, number(f))
	}
	return out
}

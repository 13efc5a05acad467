package dose

import (
	"errors"
	"fmt"
	"math"
	"strings"
	"sync"

	"tayra/metabolic"
	"tayra/species"
)

// Basis is where an animal's metabolic rate is taken from.
type Basis uint8

// Bases, in the order in which a worksheet shows them.
const (
	BasisGroup Basis = iota
	BasisEquation
	BasisMeasured
	BasisRelatives
)

var basisNames = [...]string{"group", "equation", "measured", "relatives"}

// String is the basis as the case file writes it.
func (b Basis) String() string { return basisNames[b] }

// Bases lists every basis in the order in which a worksheet shows them.
func Bases() []Basis { return []Basis{BasisGroup, BasisEquation, BasisMeasured, BasisRelatives} }

// measuredReach is how far from the mass at which it was measured a species'
// own rate is carried: W0/4 to 4·W0, both included.
const measuredReach = 4

// measuredExponent carries a species' own rate to another mass. Within one
// species the slope is nearer 0.67 (Heusner 1982 Respir Physiol 48:1-12), which
// at the limits of measuredReach makes at most 12 % (4^0.08).
const measuredExponent = 0.75

// noBasis says why an animal has no rate on a basis.
type noBasis struct {
	basis Basis
	why   string
	cause error
}

// Unwrap gives what package species said.
func (e *noBasis) Unwrap() error { return e.cause }

func (e *noBasis) Error() string { return e.basis.String() + ": " + e.why }

// reason is why a basis is not there, without its name and with the animal's
// where one of two is to blame.
func reason(err error) string {
	var nb *noBasis
	if !errors.As(err, &nb) {
		return err.Error()
	}
	who, _, _ := strings.Cut(err.Error(), nb.Error())
	why := nb.why
	// A reason that names the basis again, as package species gives it.
	var u *species.UnavailableError
	if errors.As(nb.cause, &u) {
		why = u.Why
	}
	return who + why
}

// beyondMeasured is a mass too far from the one at which a rate was measured.
// It is put into words only when it is printed: most cases ask for every basis
// and then say nothing of those that are missing.
type beyondMeasured struct{ measured, mass metabolic.Mass }

func (e *beyondMeasured) Error() string {
	return fmt.Sprintf("measured at %s; a mass of %s is outside a quarter to four times that",
		metabolic.FormatMass(e.measured), metabolic.FormatMass(e.mass))
}

// kindsDiffer says that the published lines of two animals are not of one kind.
type kindsDiffer struct{ target, model *rateLine }

func (e *kindsDiffer) Error() string {
	return fmt.Sprintf("the lines are of two kinds of rate (%s: %s, %s; %s: %s, %s), which are not compared",
		animalWords(e.target.animal), e.target.equation.ID, e.target.kind, animalWords(e.model.animal), e.model.equation.ID, e.model.kind)
}

// ofAnimal says which of two animals lacks a basis.
type ofAnimal struct {
	animal *species.Animal
	err    error
}

func (e *ofAnimal) Error() string { return animalWords(e.animal) + ": " + e.err.Error() }
func (e *ofAnimal) Unwrap() error { return e.err }

// rateLine is one basis made ready for one animal. It is built once for an
// animal and then asked at many masses and temperatures.
type rateLine struct {
	basis     Basis
	animal    *species.Animal
	equation  *metabolic.Equation    // group and equation
	measured  *species.Measured      // measured
	relatives *species.RelativesLine // relatives
	kind      string                 // BMR, SMR; "resting" for a measured row that is not basal
	scatter   species.Scatter        // group and equation: how far species lie from the line
}

// animalLines is every basis that one animal has, whatever its mass, and what
// its body does to a drug.
type animalLines struct {
	animal     *species.Animal
	group      *rateLine // nil without a group constant
	class      *rateLine // the published line for its group or class
	measured   *rateLine // nil when unmeasured or flagged
	unmeasured error     // why
	relatives  *rateLine
	body       body
}

// body is what the tables of package species say of an animal's body.
type body struct {
	massNotBody                       string
	gut                               string
	eaten, renalPortal, amphibianSkin bool
}

var linesOf sync.Map // scientific name → *animalLines

// lines finds what is known of an animal. The result is kept: at most one
// entry an animal of the table.
func lines(a *species.Animal) *animalLines {
	if l, ok := linesOf.Load(a.Name); ok {
		return l.(*animalLines)
	}
	l := &animalLines{animal: a, unmeasured: &noBasis{basis: BasisMeasured, why: "its rate is not in the measured table"}}
	if eq, ok := metabolic.GroupConstant(a.Group); ok {
		l.group = equationLine(BasisGroup, eq, a)
	}
	if eq, ok := defaultEquation(a); ok {
		l.class = equationLine(BasisEquation, eq, a)
	}
	if m, ok := species.MeasuredRate(a); ok {
		if m.Flag != "" {
			l.unmeasured = &noBasis{basis: BasisMeasured, why: "the measured animal is marked " + m.Flag}
		} else {
			kind := m.Kind
			if m.Grade == "not basal" {
				kind = "resting"
			}
			l.measured = &rateLine{basis: BasisMeasured, animal: a, measured: m, kind: kind}
		}
	}
	l.relatives = &rateLine{basis: BasisRelatives, animal: a, relatives: species.RelativesOf(a), kind: "BMR or SMR"}
	l.body = body{massNotBody: species.MassNotBody(a), gut: species.GutType(a), renalPortal: species.RenalPortal(a), amphibianSkin: species.AmphibianSkin(a)}
	l.body.eaten, _ = species.CommonlyEaten(a)
	actual, _ := linesOf.LoadOrStore(a.Name, l)
	return actual.(*animalLines)
}

// defaultEquation is the default line of the animal's group. Monotremes have
// no line of their group: one constant for the order would be wrong by a
// factor of 2.5, so each takes its own species' line or none.
func defaultEquation(a *species.Animal) (*metabolic.Equation, bool) {
	if eq, ok := metabolic.DefaultEquation(a.Group); ok && eq.Applies(a.Group, a.Name) {
		return eq, true
	}
	for _, eq := range metabolic.Equations() {
		if eq.Level == "single species" && eq.Usable() && eq.Applies(a.Group, a.Name) {
			return eq, true
		}
	}
	return nil, false
}

func equationLine(b Basis, eq *metabolic.Equation, a *species.Animal) *rateLine {
	id := ""
	if b == BasisEquation {
		id = eq.ID
	}
	return &rateLine{basis: b, animal: a, equation: eq, kind: eq.Kind, scatter: species.ScatterOf(b.String(), id, a.Group)}
}

// rate is a metabolic rate with all that a worksheet says of it.
type rate struct {
	line  *rateLine
	watt  float64
	sd    float64 // standard deviation of ln about the truth, as far as the basis knows
	t0    metabolic.Celsius
	hasT0 bool                // the rate was moved by Q10 from t0
	q10   float64             // the factor Q10^((T−T0)/10), 1 when not moved
	pred  *species.Prediction // by relatives: on whom it leans
}

// at is the line's rate at a mass and, for ectotherms, a temperature.
func (l *rateLine) at(m metabolic.Mass, t metabolic.Celsius, q10 float64) (r rate, err error) {
	return r, l.into(&r, m, t, q10)
}

// into is at without the copying: rows of a table ask several million times.
func (l *rateLine) into(r *rate, m metabolic.Mass, t metabolic.Celsius, q10 float64) error {
	*r = rate{line: l, q10: 1}
	switch {
	case l.equation != nil:
		w, err := l.equation.Rate(m, t, q10)
		if err != nil {
			return &noBasis{basis: l.basis, why: err.Error(), cause: err}
		}
		r.watt, r.sd = float64(w), l.scatter.SDln
		if !l.animal.Endotherm() && !l.equation.HasTemperatureTerm() && l.equation.HasT0 {
			r.t0, r.hasT0 = l.equation.T0, true
			r.q10 = metabolic.Q10Factor(q10, t, l.equation.T0)
		}
	case l.measured != nil:
		w0 := l.measured.Mass
		if !l.reaches(m) {
			return &beyondMeasured{w0, m}
		}
		r.watt = float64(l.measured.Rate) * math.Pow(float64(m/w0), measuredExponent)
		if !l.animal.Endotherm() {
			if !l.measured.HasTemperature {
				return &noBasis{basis: BasisMeasured, why: "measured at a body temperature that the table does not give"}
			}
			r.t0, r.hasT0 = l.measured.Temperature, true
			r.q10 = metabolic.Q10Factor(q10, t, l.measured.Temperature)
			r.watt *= r.q10
		}
	default:
		w, sd, err := l.relatives.Rate(m, t)
		if err != nil {
			return &noBasis{basis: BasisRelatives, why: err.Error(), cause: err}
		}
		r.watt, r.sd, r.pred = float64(w), sd, l.relatives.Kin()
	}
	if !(r.watt > 0) || math.IsInf(r.watt, 0) {
		return &noBasis{basis: l.basis, why: "gives no positive rate here"}
	}
	return nil
}

// reaches says whether a measured rate is carried to a mass.
func (l *rateLine) reaches(m metabolic.Mass) bool {
	return m >= l.measured.Mass/measuredReach && m <= l.measured.Mass*measuredReach
}

// massLimits are the measured masses behind the line; ok is false where the
// table knows none.
func (r *rate) massLimits() (low, high metabolic.Mass, ok bool) {
	l := r.line
	switch {
	case l.measured != nil:
		return l.measured.Mass / measuredReach, l.measured.Mass * measuredReach, true
	case r.pred != nil:
		return r.pred.MassLow, r.pred.MassHigh, r.pred.MassHigh > 0
	case l.equation.MassHigh > 0:
		return l.equation.MassLow, l.equation.MassHigh, true
	case l.scatter.MassHigh > 0:
		return l.scatter.MassLow, l.scatter.MassHigh, true
	}
	return 0, 0, false
}

// lowConfidence says that the row itself asks for caution.
func (r *rate) lowConfidence() bool { return r.line.equation != nil && r.line.equation.LowConfidence }

// on puts the animal's rate on a basis into r. An animal without a group constant takes,
// for the group basis, its measured rate, then the published line for its
// class.
func (l *animalLines) on(r *rate, b Basis, eq *metabolic.Equation, m metabolic.Mass, t metabolic.Celsius, q10 float64) error {
	a := l.animal
	switch b {
	case BasisGroup:
		if l.group != nil {
			return l.group.into(r, m, t, q10)
		}
		if l.measured != nil {
			if err := l.measured.into(r, m, t, q10); err == nil {
				return nil
			}
		}
		if l.class != nil {
			return l.class.into(r, m, t, q10)
		}
		return &noBasis{basis: b, why: fmt.Sprintf("no group constant for a %s, no rate measured near this mass and no published line", a.Group)}
	case BasisEquation:
		if eq != nil && eq.Applies(a.Group, a.Name) {
			return equationLine(BasisEquation, eq, a).into(r, m, t, q10)
		}
		if l.class != nil {
			return l.class.into(r, m, t, q10)
		}
		return &noBasis{basis: b, why: fmt.Sprintf("no published line for a %s", a.Group)}
	case BasisMeasured:
		if l.measured == nil {
			return l.unmeasured
		}
		return l.measured.into(r, m, t, q10)
	default:
		return l.relatives.into(r, m, t, q10)
	}
}

// basisRate is an animal's rate on a basis.
func basisRate(b Basis, eq *metabolic.Equation, a *species.Animal, m metabolic.Mass, t metabolic.Celsius, q10 float64) (rate, error) {
	var r rate
	err := lines(a).on(&r, b, eq, m, t, q10)
	return r, err
}

// animalPair is the patient and a model animal, made ready to be asked for their
// rates on one basis after the other.
type animalPair struct {
	c             *Case
	m             *Model
	target, model *animalLines
	known         *modelRates // of the model, as far as they were asked for
}

// pairOf makes a pair. known is what is remembered of the model; nil is nothing
// yet.
func pairOf(c *Case, m *Model, known *modelRates) animalPair {
	if known == nil {
		known = &modelRates{}
	}
	return animalPair{c, m, lines(c.Patient.Animal), lines(m.Animal), known}
}

// rates are the rates of both animals on one basis, the patient's in t; the
// model's is the remembered one and not to be changed. They fail together: a
// ratio of rates from two different bases is not one of the method's, except
// where an animal has no group constant at all.
func (p *animalPair) rates(b Basis, eq *metabolic.Equation, t *rate) (mo *rate, err error) {
	patient := &p.c.Patient
	if err := p.target.on(t, b, eq, patient.Mass.Middle, patient.Temperature, p.c.Method.Q10); err != nil {
		return nil, &ofAnimal{patient.Animal, err}
	}
	if mo, err = p.modelRate(b, eq); err != nil {
		return nil, &ofAnimal{p.m.Animal, err}
	}
	if b == BasisEquation && t.line.kind != mo.line.kind {
		return nil, &kindsDiffer{t.line, mo.line}
	}
	return mo, nil
}

// modelRate is the model's rate, worked out when it is first asked for.
func (p *animalPair) modelRate(b Basis, eq *metabolic.Equation) (*rate, error) {
	m, q10 := p.m, p.c.Method.Q10
	k := &p.known[b]
	if of := (rateOf{m.Animal, m.Mass.Middle, m.Temperature, q10, eq}); k.of != of {
		k.of = of
		k.err = p.model.on(&k.rate, b, eq, m.Mass.Middle, m.Temperature, q10)
	}
	return &k.rate, k.err
}

// pairRates are the rates of the patient and a model animal on one basis.
func pairRates(b Basis, eq *metabolic.Equation, c *Case, m *Model) (t, mo rate, err error) {
	p := pairOf(c, m, nil)
	model, err := p.rates(b, eq, &t)
	if err != nil {
		return t, mo, err
	}
	return t, *model, nil
}

// modelRates remembers a model's rates by basis, since rows of a table that
// share a model ask for the same ones again and again.
type modelRates [4]struct {
	of   rateOf
	rate rate
	err  error
}

// rateOf is all that an animal's rate on a basis depends on.
type rateOf struct {
	animal   *species.Animal
	mass     metabolic.Mass
	t        metabolic.Celsius
	q10      float64
	equation *metabolic.Equation
}

// animalWords is the name by which a text calls an animal.
func animalWords(a *species.Animal) string {
	if n := a.CommonName(); n != "" {
		return n
	}
	return a.Name
}

// parseBasis reads the case file's word.
func parseBasis(s string) (Basis, bool) {
	for i, n := range basisNames {
		if strings.EqualFold(s, n) {
			return Basis(i), true
		}
	}
	return 0, false
}

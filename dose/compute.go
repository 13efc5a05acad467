package dose

import (
	"fmt"
	"math"

	"tayra/metabolic"
	"tayra/species"
)

// numbers is all that compute finds out of a case: numbers and slugs, no texts.
type numbers struct {
	models  []modelNumbers
	from    int // index of the model drafted from
	raised  []raised
	stopped bool // a stop is raised that no override covers
	summary Summary
	several bool
	product productNumbers
	fit     *fitNumbers

	proposedRaised []raised // what a proposed regimen raises of itself

	recall recall
}

// recall is what a table remembers from one row to the next, so that what is
// equal between rows is found once. Outside of a table it is empty, and
// everything is found where it is needed.
type recall struct {
	model   *modelRates // of the only model
	drug    *drugTraits
	hazards func(drug, class string, a *species.Animal, route string) []species.HazardMatch
}

// modelNumbers is the draft from one model.
type modelNumbers struct {
	pair          animalPair
	target, model rate
	m, r, s       float64 // ratios of mass, of metabolic rate, and mass-specific
	plans         []planNumbers
	drafted       int // index into plans
	chosenByCase  bool
	spread        spread
	range90       DoseRange
	range50       DoseRange
	z90, z50      float64 // how many sd the ranges reach
	planBuf       [5]planNumbers
}

func (n *modelNumbers) plan() *planNumbers { return &n.plans[n.drafted] }

// compute works a case out in numbers. The only error is a basis that one of
// the animals lacks: an input error, since the case asked for it.
func compute(c *Case, n *numbers) error {
	n.raised, n.stopped, n.several = n.raised[:0], false, false
	if cap(n.models) < len(c.Models) {
		n.models = make([]modelNumbers, len(c.Models))
	}
	n.models = n.models[:len(c.Models)]
	for i := range c.Models {
		n.models[i].pair = pairOf(c, &c.Models[i], n.recall.model)
		if err := computeModel(c, i, &n.models[i]); err != nil {
			return err
		}
	}
	n.from = nearestModel(c)
	n.fit = nil
	if c.Input != nil && c.Input.Fit != nil {
		if err := computeFit(c, n); err != nil {
			return err
		}
	}
	// Beside a fitted line there is no summary: one model's plan is then the
	// line's, which the others' scaled plans are not comparable with.
	if len(c.Models) > 1 && n.fit == nil {
		n.several = summarise(c, n)
	}
	if err := computeProduct(c, n); err != nil {
		return err
	}
	raise(c, n)
	for i := range n.raised {
		if n.raised[i].level == Stop && !overridden(c, &n.raised[i]) {
			n.stopped = true
		}
	}
	return nil
}

func computeModel(c *Case, i int, n *modelNumbers) error {
	m := &c.Models[i]
	mo, err := n.pair.rates(c.Method.Basis, c.Method.Equation, &n.target)
	if err != nil {
		return basisError(c, i, err)
	}
	n.model = *mo
	n.m = float64(c.Patient.Mass.Middle / m.Mass.Middle)
	n.r = n.target.watt / mo.watt
	n.s = n.r / n.m
	// The same basis, mass and temperature on both sides must leave S exactly
	// 1, whatever the rounding of the powers: S = 1 changes nothing.
	if math.Abs(n.s-1) < 1e-12 {
		n.s = 1
	}
	longest := longestInterval(&m.Regimen, c.Drug.Activity, c.Drug.Depot)
	n.plans = plansFor(&m.Regimen, n.s, c.Method.Intervals, longest, n.planBuf[:0])
	if c.Drug.Depot && m.Regimen.Interval.Kind == metabolic.Repeated {
		n.plans = n.plans[:1] // same interval: no other is scaled
	}
	name := draftedPlan(&m.Regimen, n.s, c.Drug.Activity, c.Drug.Depot)
	n.chosenByCase = false
	if c.Method.Plan != PlanDefault && m.Regimen.Interval.Kind == metabolic.Repeated && !c.Drug.Depot {
		name, n.chosenByCase = c.Method.Plan, true
	}
	if err := planRefused(c, n.plans); err != nil {
		return err
	}
	for k := range n.plans {
		if n.plans[k].name == name {
			n.drafted = k
		}
	}
	n.spread = spreadOf(c, m, &n.target, &n.model)
	n.z90, n.z50 = z90, z50
	about := n.plan().dose
	if name == PlanOnce {
		about = scale(m.Regimen.PerKg, n.s) // the range of a single dose is taken on d·S
	}
	n.range90 = rangeAbout(about, n.spread.perKg, z90)
	n.range50 = rangeAbout(about, n.spread.perKg, z50)
	return nil
}

// planRefused says why the plan that a case names cannot be drafted: it would
// give a time-dependent drug a longer interval than the model's, or scale the
// interval of a depot form.
func planRefused(c *Case, plans []planNumbers) error {
	if c.Method.Plan == PlanDefault {
		return nil
	}
	fail := func(problem, remedy string) error {
		e := c.Input.Method.Plan
		return InputErrors{{File: c.Input.File, Line: e.Line, Column: e.Column, Field: "method.plan", Problem: problem, Remedy: remedy}}
	}
	for k := range plans {
		if plans[k].name != c.Method.Plan {
			continue
		}
		own := plans[0].interval // same interval
		if c.Drug.Activity == TimeDependent && plans[k].interval > own*(1+1e-12) {
			return fail(fmt.Sprintf("%s stretches the interval from %s to %s, which a time-dependent drug does not allow", c.Method.Plan, hoursWords(own), hoursWords(plans[k].interval)),
				"write clock or same-interval, or leave the plan out")
		}
		return nil
	}
	if c.Drug.Depot {
		return fail("a depot form keeps the model's interval", "write same-interval, or leave the plan out")
	}
	return nil
}

// nearestModel is the model to draft from: nearest kin (genus, family, order,
// class), then nearest mass, then the first named.
func nearestModel(c *Case) int {
	best, bestRank, bestOff := 0, 99, math.Inf(1)
	for i := range c.Models {
		rank := kinRank(species.Kinship(c.Patient.Animal, c.Models[i].Animal))
		off := math.Abs(math.Log(float64(c.Patient.Mass.Middle / c.Models[i].Mass.Middle)))
		if rank < bestRank || rank == bestRank && off < bestOff-1e-12 {
			best, bestRank, bestOff = i, rank, off
		}
	}
	return best
}

func kinRank(kinship string) int {
	switch kinship {
	case "species":
		return 0
	case "genus":
		return 1
	case "family":
		return 2
	case "order":
		return 3
	case "class":
		return 4
	}
	return 5
}

// middle is the geometric middle of a dose range.
func middle(p Pair) float64 {
	if p[0] == p[1] {
		return p[0]
	}
	return math.Sqrt(p[0] * p[1])
}

// summarise sums up several models: method, section 9. It is only for
// repeated regimens and infusions in one unit, which have a daily amount.
func summarise(c *Case, n *numbers) bool {
	daily := make([]float64, len(n.models))
	sds := make([]float64, len(n.models))
	for i := range n.models {
		if c.Models[i].Regimen.Interval.Kind == metabolic.Once {
			return false
		}
		daily[i] = middle(n.models[i].plan().daily)
		sds[i] = n.models[i].spread.perKg
	}
	n.summary = Summarise(daily, sds)
	return true
}

// overridden says whether the case goes on past a stop with a written reason.
func overridden(c *Case, r *raised) bool {
	if CannotOverride(string(r.slug)) {
		return false
	}
	for i := range c.Overrides {
		if c.Overrides[i].Slug == r.name() {
			return true
		}
	}
	return false
}

// name is the slug as a case file writes it: a hazard's carries its row.
func (r *raised) name() string {
	if r.hazard != nil {
		return string(HazardOnFile) + "-" + r.hazard.ID
	}
	return string(r.slug)
}

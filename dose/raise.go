package dose

import (
	"math"
	"strings"

	"tayra/metabolic"
	"tayra/species"
)

// raise finds the cautions of a case. It gives slugs and numbers; the words
// are in cautiontext.go.
func raise(c *Case, n *numbers) {
	add := func(s Slug, l Level, model int, num ...float64) *raised {
		r := raised{slug: s, level: l, model: model}
		switch len(num) {
		case 3:
			r.c = num[2]
			fallthrough
		case 2:
			r.b = num[1]
			fallthrough
		case 1:
			r.a = num[0]
		}
		n.raised = append(n.raised, r)
		return &n.raised[len(n.raised)-1]
	}
	raiseAnimal(c, n, add)
	for i := range c.Models {
		raiseModel(c, n, i, add)
	}
	raiseDrug(c, n, add)
	raiseCase(c, n, add)
	raiseProposed(c, n)
	sortRaised(n.raised)
}

type adder = func(Slug, Level, int, ...float64) *raised

// implausible says whether a mass cannot be the animal's: beyond three times
// the adult range's high end or under a fiftieth of its low end (a third of a
// thousandth for the young), which is what grams for kilograms look like.
func implausible(a *species.Animal, m metabolic.Mass, s Stage) bool {
	if a.AdultHigh == 0 {
		return false
	}
	low := a.AdultLow / 50
	if s != Adult {
		low = a.AdultLow / 3000
	}
	return m > 3*a.AdultHigh || m < low
}

// raiseAnimal is what the patient alone raises.
func raiseAnimal(c *Case, n *numbers, add adder) {
	p := &c.Patient
	a := p.Animal
	switch w := p.Mass.Middle; {
	case a.AdultHigh == 0:
		add(MassUnjudged, Note, -1)
	case implausible(a, w, p.Stage):
		add(ImplausibleMass, Stop, -1, float64(w), float64(a.AdultLow), float64(a.AdultHigh))
	case w > a.AdultHigh || w < a.AdultLow && p.Stage == Adult:
		off := math.Max(float64(w/a.AdultHigh), float64(a.AdultLow/w))
		l := Note
		if off >= 1.5 {
			l = Warn
		}
		add(AdultMass, l, -1, float64(w), float64(a.AdultLow), float64(a.AdultHigh))
	}
	if a.MatchedAs != "" {
		add(NameTakenAs, Note, -1)
	}
	if p.Mass.Estimated() {
		l := Note
		if p.Mass.HalfWidth() > math.Log(1.2) {
			l = Warn
		}
		add(EstimatedMass, l, -1, float64(p.Mass.Low), float64(p.Mass.High))
	}
	switch p.Stage {
	case Neonate:
		add(NeonatePatient, Stop, -1)
	case Juvenile:
		add(JuvenilePatient, Warn, -1)
	}
	if p.Conditions&Torpid != 0 {
		add(TorpidPatient, Stop, -1)
	}
	if a.Endotherm() && p.HasTemperature && a.HasTemperature {
		// An endotherm's temperature never scales the rate: it only asks.
		d := float64(p.Temperature - a.BodyTemperature)
		if d < -5 || d > 1.5 {
			add(BodyTemperature, Warn, -1, float64(p.Temperature), float64(a.BodyTemperature))
		}
	}
	for _, cond := range conditionWords {
		switch cond.bit {
		case Torpid:
			continue
		case RenalDisease, HepaticDisease:
			if p.Conditions&cond.bit != 0 && clearingOrgan(cond.bit, c.Drug.Elimination) {
				add(ClearingOrgan, Stop, -1).detail = cond.word
				continue
			}
		}
		if p.Conditions&cond.bit != 0 {
			add(PatientCondition, Warn, -1).detail = cond.word
		}
	}
	body := &n.models[0].pair.target.body
	if what := body.massNotBody; what != "" || p.Conditions&Gravid != 0 {
		if what == "" {
			what = "eggs"
		} else if p.Conditions&Gravid != 0 {
			what += " and eggs"
		}
		add(MassNotBody, Note, -1).detail = what
	}
	switch p.FoodProducing {
	case Yes:
		add(FoodAnimal, Warn, -1, 1)
	case NotSaid:
		if body.eaten {
			add(FoodAnimal, Warn, -1, 0)
		}
	}
}

// clearingOrgan says whether the diseased organ is the one that clears the drug.
func clearingOrgan(disease Condition, e Elimination) bool {
	if disease == RenalDisease {
		return e == Renal || e == Mixed
	}
	return e == Hepatic || e == Biliary || e == Mixed
}

// raiseModel is what one model raises against the patient.
func raiseModel(c *Case, n *numbers, i int, add adder) {
	m, mn := &c.Models[i], &n.models[i]
	a, b := c.Patient.Animal, m.Animal
	plan := mn.plan()
	s := mn.s
	if species.SameSpecies(a, b) {
		add(SameSpecies, Stop, i)
	}
	if implausible(b, m.Mass.Middle, Adult) {
		add(ImplausibleMass, Stop, i, float64(m.Mass.Middle), float64(b.AdultLow), float64(b.AdultHigh))
	}
	if b.MatchedAs != "" {
		add(NameTakenAs, Note, i)
	}
	if what := species.MassNotBody(b); what != "" {
		add(MassNotBody, Note, i).detail = what
	}
	if m.Mass.Estimated() {
		l := Note
		if m.Mass.HalfWidth() > math.Log(1.2) {
			l = Warn
		}
		add(EstimatedMass, l, i, float64(m.Mass.Low), float64(m.Mass.High))
	}
	if a.Class != b.Class {
		l := Stop
		if c.Drug.Margin == Wide {
			l = Warn
		}
		add(CrossClass, l, i)
	}
	if a.Endotherm() != b.Endotherm() {
		add(CrossThermy, Stop, i)
	}
	th := &c.Method.Thresholds
	switch {
	case outside(mn.m, th.MassRatioExtreme):
		add(MassRatioExtreme, Warn, i, mn.m)
	case outside(mn.m, th.MassRatio):
		add(MassRatio, Warn, i, mn.m)
	}
	raiseMassLimits(&mn.target, c.Patient.Mass.Middle, -1, add)
	raiseMassLimits(&mn.model, m.Mass.Middle, i, add)
	if mn.target.lowConfidence() {
		add(LowConfidence, Warn, -1).detail = mn.target.line.equation.ID
	}
	if mn.model.lowConfidence() {
		add(LowConfidence, Warn, i).detail = mn.model.line.equation.ID
	}
	raiseStandIn(c, mn, i, add)
	if mn.target.line.basis == BasisGroup || mn.model.line.basis == BasisGroup {
		add(GroupConstant, Note, i)
	}
	raiseDisagreement(c, mn, i, th, add)
	if outside(s, th.LargeChange) {
		add(LargeChange, Warn, i, s)
	}
	switch {
	case plan.peakRatio > th.PeakStop*(1+1e-12) && c.Drug.Margin != Wide:
		add(Peak, Stop, i, plan.peakRatio, th.PeakStop)
	case plan.peakRatio > th.PeakWarn*(1+1e-12):
		add(Peak, Warn, i, plan.peakRatio, th.PeakWarn)
	}
	if m.Regimen.Interval.Kind == metabolic.Repeated {
		want := float64(m.Regimen.Interval.Hours) / s
		if want < th.IntervalShortH || want > th.IntervalLongH {
			add(Impractical, Warn, i, want)
		}
		if plan.name == PlanBothAdjusted && (s < th.CompoundedLow || s > th.CompoundedHigh) {
			add(Compounded, Warn, i, s)
		}
	}
	if b.Human() || a.Human() {
		add(HumanModel, Warn, i)
	}
	raiseTolerated(c, n, i, add)
	if m.HalfLife == 0 {
		add(NoHalfLife, Note, i)
	} else if m.Regimen.Interval.Kind == metabolic.Repeated {
		raiseKinetics(m, mn, i, th, add)
	}
	route := c.Drug.Route
	if route == "" {
		route = c.Models[n.from].Route
	}
	if route != "" && m.Route != "" && route != m.Route && !sameRoute(route, m.Route) {
		add(RouteDiffers, Warn, i).detail = m.Route
	}
	if oralRoute(route) || oralRoute(m.Route) {
		if g, h := mn.pair.target.body.gut, mn.pair.model.body.gut; g != "" && h != "" && g != h {
			add(GutType, Warn, i)
		}
	}
}

// raiseStandIn says where an animal without a group constant took another
// basis: a note, and a warning where the two animals then stand on two bases.
func raiseStandIn(c *Case, mn *modelNumbers, i int, add adder) {
	if c.Method.Basis != BasisGroup {
		return
	}
	t, m := mn.target.line.basis, mn.model.line.basis
	l := Note
	if t != m {
		l = Warn
	}
	if t != BasisGroup {
		add(StandIn, l, -1).detail = t.String()
	}
	if m != BasisGroup {
		add(StandIn, l, i).detail = m.String()
	}
}

// raiseTolerated holds everything that would go into the animal against the
// tolerated maximum: the drafted dose, the dose as measured out, the loading
// dose, and each of them in the lightest animal that an estimated mass allows.
func raiseTolerated(c *Case, n *numbers, i int, add adder) {
	m := &c.Models[i]
	t := m.Tolerated
	if t == nil || t.Unit != m.Regimen.Unit || m.Regimen.Interval.Kind == metabolic.Infusion {
		return
	}
	w, lightest := float64(c.Patient.Mass.Middle), float64(c.Patient.Mass.Low)
	worst, how := n.models[i].plan().dose[1], ""
	take := func(perKg float64, what string) {
		if perKg > worst*(1+1e-12) {
			worst, how = perKg, what
		}
	}
	measured := worst * w
	if i == n.from && n.product.given {
		measured = 0
		for k := range n.product.ends[:n.product.n] {
			e := &n.product.ends[k]
			amount := e.AmountGiven
			if e.BelowStep && e.Dilution != nil {
				amount = e.Dilution.AmountGiven
			}
			measured = math.Max(measured, amount)
		}
		take(measured/w, "as measured out")
	}
	if m.LoadingPerKg != nil && m.Animal.Class == c.Patient.Animal.Class {
		take(m.LoadingPerKg[1], "the loading dose")
		measured = math.Max(measured, m.LoadingPerKg[1]*w)
	}
	if lightest < w {
		take(measured/lightest, "in an animal of the lowest mass estimated")
	}
	if worst > t.PerKg*(1+1e-9) {
		add(AboveTolerated, Stop, i, worst, t.PerKg).detail = how
	}
}

// outside says whether a ratio lies outside 1/x to x.
func outside(ratio, x float64) bool {
	return ratio > x*(1+1e-12) || ratio < 1/x*(1-1e-12)
}

// raiseMassLimits asks whether the mass lies among the measured ones behind
// the basis. whose is the model whose mass it is, -1 for the patient.
func raiseMassLimits(r *rate, m metabolic.Mass, whose int, add adder) {
	low, high, ok := r.massLimits()
	if ok && (m < low || m > high) {
		x := add(OutsideData, Warn, whose, float64(m), float64(low), float64(high))
		x.detail = r.line.basis.String()
	}
}

// raiseDisagreement holds S against S by every other basis that both animals
// have, and raises the widest disagreement.
func raiseDisagreement(c *Case, mn *modelNumbers, i int, th *Thresholds, add adder) {
	worst, worstBasis := 1.0, BasisGroup
	var t rate
	own := mn.pair.target.measured
	for b := BasisGroup; b <= BasisRelatives; b++ {
		if b == c.Method.Basis {
			continue
		}
		if b == BasisMeasured && (own == nil || !own.reaches(c.Patient.Mass.Middle)) {
			continue // as rates would say, but most animals have none: spare the words
		}
		mo, err := mn.pair.rates(b, nil, &t)
		if err != nil {
			continue
		}
		ratio := t.watt / mo.watt / mn.m / mn.s
		if off := math.Max(ratio, 1/ratio); off > math.Max(worst, 1/worst) {
			worst, worstBasis = ratio, b
		}
	}
	off := math.Max(worst, 1/worst)
	switch {
	case off >= th.BasisWarn:
		add(BasisDisagrees, Warn, i, off, worst).detail = worstBasis.String()
	case off >= th.BasisNote:
		add(BasisDisagrees, Note, i, off, worst).detail = worstBasis.String()
	}
}

// raiseKinetics looks at the half-life against the drafted interval.
func raiseKinetics(m *Model, mn *modelNumbers, i int, th *Thresholds, add adder) {
	half := float64(m.HalfLife) / mn.s // elimination half-life follows 1/S
	if acc := 1 / (1 - math.Exp(-math.Ln2*mn.plan().interval/half)); acc > th.Accumulation {
		add(Accumulation, Warn, i, acc, half)
	}
	// In the patient the half-life is another, and absorption is taken as it is.
	if slower := math.Min(half, float64(m.HalfLife)); float64(m.AbsorptionHalf) > slower {
		add(FlipFlop, Warn, i, float64(m.AbsorptionHalf), slower)
	}
}

// raiseDrug is what the drug raises, whatever the model.
func raiseDrug(c *Case, n *numbers, add adder) {
	d := &c.Drug
	if d.Name == UnnamedDrug {
		add(DrugNotNamed, Warn, -1)
	}
	if d.Margin == Narrow {
		add(NarrowMargin, Stop, -1)
	}
	traits := n.recall.drug
	if traits == nil {
		traits = traitsOf(d)
	}
	switch {
	case d.Name == UnnamedDrug:
	case !traits.reading.Known():
		add(DrugNotRecognised, Warn, -1)
	case len(traits.reading.Unread) > 0:
		add(DrugNotRecognised, Note, -1)
	}
	switch {
	case d.Depot:
		add(DepotForm, Stop, -1)
	case traits.reading.LongActing != "" && !d.FormSaid:
		add(DepotForm, Stop, -1).detail = traits.reading.LongActing
	}
	switch {
	case d.Controlled == Yes:
		add(ControlledDrug, Warn, -1, 1)
	case d.Controlled == NotSaid && traits.controlled:
		add(ControlledDrug, Warn, -1, 0)
	}
	if traits.effect != "" {
		add(EffectDriven, traits.effect, -1).detail = traits.what
	}
	if against := suitabilityAgainst(d); against > 0 {
		add(Suitability, Warn, -1, float64(against))
	}
	raiseHazards(c, n)
	raiseAnatomy(c, n, traits, add)
}

// raiseCase is what the case as a whole raises.
func raiseCase(c *Case, n *numbers, add adder) {
	switch {
	case len(c.Models) == 1 && n.fit == nil:
		add(OneModel, Note, -1)
	case len(c.Models) > 1:
		raiseSeveral(c, n, add)
	}
	for i := range c.Published {
		p := &c.Published[i]
		l, same := Note, 0.0
		if species.SameSpecies(p.Animal, c.Patient.Animal) {
			l, same = Warn, 1
		}
		add(PublishedExists, l, -1, same).detail = p.Animal.Name
	}
	if len(c.Method.Changed) > 0 {
		l := Note
		for _, ch := range c.Method.Changed {
			if ch.Loosened {
				l = Warn
			}
		}
		add(Thresh, l, -1, float64(len(c.Method.Changed)))
	}
	p := &n.product
	if p.given {
		for k := range p.ends[:p.n] {
			if p.ends[k].BelowStep {
				add(BelowStep, Stop, -1, p.ends[k].Exact, p.step)
				return
			}
		}
		worst := 0.0
		for k := range p.ends[:p.n] {
			if e := p.ends[k].ErrorPercent; math.Abs(e) > math.Abs(worst) {
				worst = e
			}
		}
		if math.Abs(worst) > c.Method.Thresholds.RoundingPercent {
			add(RoundingError, Warn, -1, worst)
		}
	}
}

// raiseSeveral looks at several models together.
func raiseSeveral(c *Case, n *numbers, add adder) {
	order := c.Models[0].Animal.Order
	one := true
	for i := range c.Models {
		one = one && c.Models[i].Animal.Order == order
	}
	if one {
		add(OneOrder, Note, -1).detail = order
	}
	if !n.several {
		return
	}
	if n.summary.FoldSpread > c.Method.Thresholds.ModelsFold {
		add(ModelsDisagree, Warn, -1, n.summary.FoldSpread)
	}
	if k := n.summary.DecidedBy; k >= 0 {
		add(OneDecides, Warn, k)
	}
}

// sortRaised puts stops first, keeping the order within a level.
func sortRaised(rs []raised) {
	// An insertion sort: a dozen entries, nearly in order, no allocation.
	for i := 1; i < len(rs); i++ {
		for k := i; k > 0 && levelRank(rs[k].level) < levelRank(rs[k-1].level); k-- {
			rs[k], rs[k-1] = rs[k-1], rs[k]
		}
	}
}

// conditionWords are the conditions and what the case file calls them.
var conditionWords = []struct {
	bit  Condition
	word string
}{
	{Dehydrated, "dehydrated"},
	{RenalDisease, "renal"},
	{HepaticDisease, "hepatic"},
	{Pregnant, "pregnant"},
	{Lactating, "lactating"},
	{Torpid, "torpid"},
	{Obese, "obese"},
	{Gravid, "gravid"},
}

// sameRoute says whether two routes are the same ways into the body; of routes
// that are not understood, whether they are the same words.
func sameRoute(a, b string) bool {
	return strings.EqualFold(strings.TrimSpace(a), strings.TrimSpace(b)) || species.ReadRoute(a).Same(species.ReadRoute(b))
}

func oralRoute(r string) bool { return species.ReadRoute(r).Oral() }

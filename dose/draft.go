package dose

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"

	"tayra/metabolic"
	"tayra/species"
)

// Draft works a case out and writes it down: [Worksheet] is compute plus the
// steps, texts and sources. The error is an [InputErrors]: the case asks for a
// basis that an animal lacks, or for an interval longer than the drug allows.
// Cautions are no errors; a stop is in the worksheet, with no dose.
func Draft(c *Case) (*Worksheet, error) {
	var n numbers
	if err := compute(c, &n); err != nil {
		return nil, err
	}
	if err := checkOverrides(c, &n); err != nil {
		return nil, err
	}
	w := &Worksheet{
		Format:      Format,
		Program:     Program{Name: "tayra", Version: Version, Tables: TablesDigest},
		Case:        c.ID,
		Date:        c.Date,
		PreparedBy:  c.PreparedBy,
		Input:       c.Input,
		Drug:        drugRecord(c, &n),
		Overrides:   map[string]string{},
		TrackRecord: slices.Clone(trackRecord),
		Statements:  slices.Clone(statements),
	}
	w.Patient = patientRecord(c, &n)
	for i := range c.Models {
		w.Drafts = append(w.Drafts, n.modelDraft(c, i))
	}
	w.DraftedFrom = n.draftedFrom(c)
	w.Cautions = n.cautions(c)
	n.fitRecord(c, w)
	for _, o := range c.Overrides {
		w.Overrides[o.Slug] = o.Reason
	}
	w.Published = n.publishedDoses(c)
	w.Bases, w.Unavailable = n.bases(c)
	w.Suitability = suitability(c, n.from)
	if !n.stopped {
		w.Drafted = n.drafted(c, w.Cautions)
		w.Drafted.Disagreement = n.disagreement(c, w.Bases)
		w.Drafted.Outranked = outranked(w.Published)
		w.Loading = n.loading(c)
		w.Exponents = n.exponents(c)
		w.Temperature = n.temperatureTable(c)
	}
	w.Several = n.severalRecord(c)
	n.productRecord(c, w)
	n.concentrations(c, w)
	w.Sources = n.sources(c, w)
	return w, nil
}

// basisError turns a basis that an animal lacks into an error of the input
// that lists what both animals have.
func basisError(c *Case, i int, err error) error {
	var ie InputErrors
	if errors.As(err, &ie) {
		return ie
	}
	var has []string
	for _, b := range Bases() {
		if _, _, e := pairRates(b, nil, c, &c.Models[i]); e == nil {
			has = append(has, b.String())
		}
	}
	remedy := "both animals have no basis in common"
	if len(has) > 0 {
		remedy = fmt.Sprintf("%s and %s both have: %s", animalWords(c.Patient.Animal), animalWords(c.Models[i].Animal), strings.Join(has, ", "))
	}
	e, field := c.Input.Method.Basis, "method.basis"
	if c.Method.Equation != nil {
		e, field = c.Input.Method.Equation, "method.equation"
	}
	return InputErrors{{File: c.Input.File, Line: e.Line, Column: e.Column, Field: field,
		Problem: strings.TrimSuffix(err.Error(), "."), Remedy: remedy}}
}

// checkOverrides refuses an override for a caution that was not raised: it
// would hide a slip of the pen, and a reason without its stop means nothing.
func checkOverrides(c *Case, n *numbers) error {
	var errs InputErrors
	for _, o := range c.Overrides {
		found := false
		var stops []string
		for i := range n.raised {
			r := &n.raised[i]
			if r.level == Stop && !CannotOverride(string(r.slug)) {
				stops = append(stops, r.name())
				found = found || r.name() == o.Slug
			}
		}
		if found {
			continue
		}
		remedy := "leave it out: this case raises no stop that can be overridden"
		if len(stops) > 0 {
			remedy = "the stops raised are " + strings.Join(stops, ", ")
		}
		errs = append(errs, &InputError{File: c.Input.File, Line: o.Entry.Line, Column: o.Entry.Column,
			Field: "overrides." + o.Slug, Problem: "no stop of this name is raised", Remedy: remedy})
	}
	if len(errs) > 0 {
		return errs
	}
	return nil
}

func pointer[T any](v T) *T { return &v }

func patientRecord(c *Case, n *numbers) PatientRecord {
	p := &c.Patient
	a := p.Animal
	r := PatientRecord{
		Name: p.Name, Typed: strings.TrimSpace(c.Input.Patient.Species.Text), Species: a.Name, CommonName: a.CommonName(),
		Class: a.Class, Order: a.Order, Family: a.Family, Group: a.Group,
		MassTyped: strings.TrimSpace(c.Input.Patient.Mass.Text), MassKg: float64(p.Mass.Middle), MassLowKg: float64(p.Mass.Low), MassHighKg: float64(p.Mass.High),
		Estimated: p.Mass.Estimated(), Stage: [...]string{"adult", "juvenile", "neonate"}[p.Stage],
		FoodProducing: [...]string{"", "true", "false"}[p.FoodProducing],
		RateW:         n.models[n.from].target.watt, Basis: n.models[n.from].target.line.basis.String(),
	}
	if a.AdultHigh > 0 {
		r.AdultMassKg = &Pair{float64(a.AdultLow), float64(a.AdultHigh)}
	}
	if p.HasTemperature {
		r.TemperatureC = pointer(float64(p.Temperature))
	}
	for _, w := range conditionWords {
		if p.Conditions&w.bit != 0 {
			r.Condition = append(r.Condition, w.word)
		}
	}
	return r
}

func drugRecord(c *Case, n *numbers) DrugRecord {
	d := &c.Drug
	r := DrugRecord{
		Name: d.Name, Class: d.Class, Route: draftRoute(c, n),
		Elimination: eliminationName(d.Elimination),
		Extraction:  [...]string{"", "low", "medium", "high"}[d.Extraction],
		Activity:    [...]string{"unknown", "time", "concentration"}[d.Activity],
		Margin:      [...]string{"unknown", "wide", "narrow"}[d.Margin],
		Controlled:  d.Controlled == Yes,
	}
	if d.Depot {
		r.Formulation = "depot"
	} else {
		r.Formulation = strings.TrimSpace(c.Input.Drug.Formulation.Text)
	}
	return r
}

func (n *numbers) modelDraft(c *Case, i int) ModelDraft {
	m, mn := &c.Models[i], &n.models[i]
	a, r := m.Animal, &m.Regimen
	d := ModelDraft{
		Model: a.Name, CommonName: a.CommonName(), Class: a.Class, Order: a.Order, Family: a.Family,
		Kinship:   species.Kinship(c.Patient.Animal, a),
		MassTyped: strings.TrimSpace(c.Input.Models[i].Mass.Text), MassKg: float64(m.Mass.Middle), MassLowKg: float64(m.Mass.Low), MassHighKg: float64(m.Mass.High),
		RateW: mn.model.watt, Basis: mn.model.line.basis.String(),
		DoseTyped: r.Typed, IntervalTyped: r.IntervalTyped, DosePerKg: r.PerKg, Unit: perKgUnit(r),
		Kind: [...]string{"repeated", "once", "infusion"}[r.Interval.Kind], Route: m.Route, Source: m.Source,
		Ratios: Ratios{Mass: mn.m, Metabolic: mn.r, Specific: mn.s},
		Plans:  []Plan{},
		Steps:  n.steps(c, i),
	}
	if m.HasTemperature {
		d.TemperatureC = pointer(float64(m.Temperature))
	}
	if r.Interval.Kind == metabolic.Repeated {
		d.IntervalH = pointer(float64(r.Interval.Hours))
		d.DailyPerKg = pointer(scale(r.PerKg, 24/float64(r.Interval.Hours)))
	}
	if m.HalfLife > 0 {
		d.HalfLifeH = pointer(float64(m.HalfLife))
	}
	if n.stopped {
		return d
	}
	for k := range mn.plans {
		d.Plans = append(d.Plans, n.planRecord(c, i, k))
	}
	d.Plan = string(mn.plan().name)
	d.Range90, d.Range50 = pointer(mn.range90), pointer(mn.range50)
	if c.Patient.Mass.Estimated() || m.Mass.Estimated() {
		d.SDAmount = mn.spread.amount
	}
	if r.Interval.Kind == metabolic.Once {
		d.VolumeRange90 = pointer(rangeAbout(r.PerKg, n.volumeSpread(c, i), z90))
	}
	if n.fit != nil && i == n.from {
		d.Parts = []RangePart{{Name: "prediction of the fitted line", SD: mn.spread.perKg, Text: n.fit.rangeSource(n.fit.record)}}
	} else {
		d.Parts = n.rangeParts(c, i)
	}
	return d
}

// volumeSpread is the spread of a dose that follows volume, with what
// estimated masses add where the model's dose was given per animal.
func (n *numbers) volumeSpread(c *Case, i int) float64 {
	sd := volumeSD(c.Patient.Animal, c.Models[i].Animal)
	if c.Models[i].Regimen.PerAnimal {
		sd = math.Hypot(sd, c.Models[i].Mass.HalfWidth()/z90)
	}
	return sd
}

func (n *numbers) planRecord(c *Case, i, k int) Plan {
	mn := &n.models[i]
	p := &mn.plans[k]
	w := &c.Patient.Mass
	out := Plan{
		Name: string(p.name), DosePerKg: p.dose, Unit: perKgUnit(&c.Models[i].Regimen),
		PerAdministration: scale(p.dose, float64(w.Middle)),
		AverageRatio:      p.average, PeakRatio: p.peakRatio,
	}
	if w.Estimated() {
		out.AtLowMass, out.AtHighMass = pointer(n.amountAt(c, i, k, w.Low)), pointer(n.amountAt(c, i, k, w.High))
	}
	if p.interval > 0 {
		out.IntervalH, out.DailyPerKg = pointer(p.interval), pointer(p.daily)
	}
	if p.name == PlanInfusion {
		out.DailyPerKg = pointer(p.daily)
	}
	switch p.name {
	case PlanSameInterval:
		out.Remark = "equal average; peaks and troughs further apart when S is above 1"
	case PlanSameDose:
		out.Remark = "equal average; the same curve on another clock; for animals that every handling harms"
	case PlanBothAdjusted:
		out.Remark = "the energy-cost worksheet: its daily amount departs by the factor " + metabolic.Significant(p.average, 3)
	case PlanClock:
		out.Remark = "equal average at a practical interval"
	case PlanOnce:
		out.Remark = "bracket: by volume (matches the peak) and by clearance (matches the area under the curve); start at the low end"
	case PlanInfusion:
		out.Remark = "equal steady concentration"
	case PlanFitted:
		out.Remark = "from the fitted clearance; average against the one that scaling keeps"
	}
	return out
}

// amountAt is a plan's amount per administration at another mass of the
// patient. The dose per kg moves with the mass too: D = d(W)·W, and the mass-
// specific ratio goes by the metabolic rate at that mass.
func (n *numbers) amountAt(c *Case, i, k int, w metabolic.Mass) Pair {
	mn := &n.models[i]
	p := &mn.plans[k]
	r, err := mn.target.line.at(w, c.Patient.Temperature, c.Method.Q10)
	s := mn.s
	if err == nil {
		s = r.watt / mn.model.watt / float64(w/c.Models[i].Mass.Middle)
	} else {
		s *= math.Pow(float64(w/c.Patient.Mass.Middle), -0.25)
	}
	d := c.Models[i].Regimen.PerKg
	var dose Pair
	switch p.name {
	case PlanOnce:
		dose = Pair{d[0] * math.Min(1, s), d[1] * math.Max(1, s)}
	case PlanSameDose:
		dose = d
	case PlanFitted:
		if at, err := n.fit.record.clearanceLine().At(float64(w)); err == nil {
			dose = scale(p.dose, at.Value/n.fit.clear*float64(c.Patient.Mass.Middle/w))
		}
	case PlanClock:
		dose = scale(d, s*p.interval/float64(c.Models[i].Regimen.Interval.Hours))
	default:
		dose = scale(d, s)
	}
	return scale(dose, float64(w))
}

func (n *numbers) rangeParts(c *Case, i int) []RangePart {
	sp := &n.models[i].spread
	mn := &n.models[i]
	name, text, source := sp.record.text()
	if sp.record.kappa != 1 {
		name += ", one order"
		text += "; times 0.8 for mammals of one order (monkey to man 1.05 against 1.41 in the table)"
	}
	parts := []RangePart{
		{Name: "published record: " + name, SD: sp.floor, Text: text, Source: source},
		{Name: "exponent between drugs", SD: sp.exponent, Text: "0.16 times ln of the mass ratio", Source: "Hu & Hayton 2001, 91 substances (read)"},
	}
	scatter := func(who string, r *rate, sd float64) {
		p := RangePart{Name: "scatter of species, " + who, SD: sd}
		switch {
		case r.pred != nil:
			p.Text = "the prediction's own"
		case r.line.measured != nil:
			p.Text = "0: the species' own measured rate"
		case r.line.scatter.Assumed:
			p.Text = "assumed: fewer than 8 measured species"
		default:
			p.Text = fmt.Sprintf("root mean square of ln(measured/basis) over %d measured species", r.line.scatter.N)
		}
		parts = append(parts, p)
	}
	scatter("model", &mn.model, sp.model)
	scatter("patient", &mn.target, sp.target)
	parts = append(parts, RangePart{Name: "the larger of the record and the rest", SD: math.Max(sp.floor, sp.composed), Text: "the record already holds such scatter, so the two are not added"})
	if sp.temperature > 0 {
		parts = append(parts, RangePart{Name: "body temperature", SD: sp.temperature, Text: "0.15 for each 10 °C from the basis's temperature, assumed"})
	}
	if sp.massPerKg > 0 || sp.massAmount > 0 {
		parts = append(parts,
			RangePart{Name: "estimated masses, of mg/kg", SD: sp.massPerKg, Text: "0.25·h/1.645 each (0.75 for a model's dose per animal)"},
			RangePart{Name: "estimated masses, of the amount", SD: sp.massAmount, Text: "0.75·h/1.645 for the patient's"})
	}
	parts = append(parts, RangePart{Name: "together, of mg/kg", SD: sp.perKg, Text: "in quadrature"})
	if sp.amount != sp.perKg {
		parts = append(parts, RangePart{Name: "together, of the amount", SD: sp.amount, Text: "in quadrature"})
	}
	return parts
}

func (n *numbers) draftedFrom(c *Case) *DraftedFrom {
	m := &c.Models[n.from]
	d := &DraftedFrom{Index: n.from, Model: m.Animal.Name}
	switch k := species.Kinship(c.Patient.Animal, m.Animal); {
	case len(c.Models) == 1:
		d.Why = "the only model"
	case k == "":
		d.Why = "no model is of the patient's class; nearest in mass"
	default:
		d.Why = "nearest kin (same " + k + "), then nearest mass"
	}
	return d
}

// cautions puts every caution into words, stops first, each once.
func (n *numbers) cautions(c *Case) []Caution {
	out := []Caution{}
	seen := map[string]int{}
	for i := range n.raised {
		k := n.caution(c, &n.raised[i])
		key := k.Slug + "\x00" + k.Text
		if at, ok := seen[key]; ok {
			if out[at].Model != k.Model {
				out[at].Model = joinNonEmpty(out[at].Model, k.Model)
			}
			continue
		}
		seen[key] = len(out)
		out = append(out, k)
	}
	return out
}

func joinNonEmpty(a, b string) string {
	switch {
	case a == "":
		return b
	case b == "":
		return a
	}
	return a + ", " + b
}

// drafted is the regimen of the first page.
func (n *numbers) drafted(c *Case, cautions []Caution) *Drafted {
	i := n.from
	m, mn := &c.Models[i], &n.models[i]
	k := mn.drafted
	p := n.planRecord(c, i, k)
	w := float64(c.Patient.Mass.Middle)
	d := &Drafted{
		Plan: p.Name, ChosenBy: "default", DosePerKg: p.DosePerKg, Unit: p.Unit, PerAdministration: p.PerAdministration,
		AtLowMass: p.AtLowMass, AtHighMass: p.AtHighMass, IntervalH: p.IntervalH, DailyPerKg: p.DailyPerKg,
		Route: draftRoute(c, n), Range90: mn.range90, Range50: mn.range50,
		WorstCaution: "none raised, which is no evidence of safety",
	}
	about := p.DosePerKg
	if mn.plan().name == PlanOnce {
		about = scale(m.Regimen.PerKg, mn.s)
	}
	d.Range90Amount = rangeAbout(scale(about, w), mn.spread.amount, mn.z90)
	d.Range50Amount = rangeAbout(scale(about, w), mn.spread.amount, mn.z50)
	if mn.chosenByCase {
		d.ChosenBy = "case"
	}
	if n.fit != nil {
		d.ChosenBy = "fit"
	}
	d.Why = n.planReason(c, i)
	if len(cautions) > 0 {
		d.WorstCaution = string(cautions[0].Level)
	}
	d.Meaning = n.meaning(c, i)
	return d
}

// outranked names the published doses for this very species.
func outranked(published []PublishedDose) string {
	var doses []string
	for _, p := range published {
		if p.Relation == "species" {
			doses = append(doses, fmt.Sprintf("%s, %s (%s)", p.DoseTyped, p.Interval, p.Source))
		}
	}
	if len(doses) == 0 {
		return ""
	}
	return "A dose is published for this species, and outranks this draft: " + strings.Join(doses, "; ") + "."
}

// disagreement names the doses by the other bases where they lie so far apart
// that the first page must say it beside the number.
func (n *numbers) disagreement(c *Case, bases []BasisLine) string {
	raised := false
	for i := range n.raised {
		r := &n.raised[i]
		raised = raised || n.fit == nil && r.slug == BasisDisagrees && r.level == Warn && r.model == n.from
	}
	if !raised {
		return ""
	}
	u := &c.Models[n.from].Regimen
	var others []string
	used := ""
	for _, b := range bases {
		d := metabolic.FormatRange(b.DosePerKg[0], b.DosePerKg[1], func(x float64) string {
			return metabolic.FormatDosePerKg(x, u.Unit, u.Interval.Kind == metabolic.Infusion)
		})
		if b.Drafted {
			used = d + " by " + b.Basis
			if b.StandIn != "" {
				used += " (" + b.StandIn + ")"
			}
		} else {
			others = append(others, d+" by "+b.Basis)
		}
	}
	at := ""
	if u.Interval.Kind == metabolic.Repeated {
		at = " at the drafted interval"
	}
	return fmt.Sprintf("The bases disagree: the dose%s is %s, but %s.", at, used, strings.Join(others, ", "))
}

func (n *numbers) planReason(c *Case, i int) string {
	mn := &n.models[i]
	s := metabolic.Significant(mn.s, 3)
	switch {
	case mn.plan().name == PlanFitted:
		return "from the line fitted to the data of the table, at the model's average concentration or the one given; the scaled plans stand beside it"
	case mn.chosenByCase:
		return "the case names this plan"
	case mn.plan().name == PlanOnce:
		return "a single dose: a bracket, smaller first, no point and no interval; start at the low end"
	case mn.plan().name == PlanInfusion:
		return "an infusion: its rate follows clearance"
	case c.Drug.Depot:
		return "a depot form: no interval is scaled"
	case mn.s >= 1:
		return "S is " + s + ", 1 or above: the daily amount is kept at S times the model's and the interval goes to the nearest practical one"
	case c.Drug.Activity == ConcentrationDependent && mn.plan().interval == float64(c.Models[i].Regimen.Interval.Hours):
		return "S is " + s + ", below 1, and the drug's effect follows its concentration: the interval might be longer, but the nearest practical one is the model's own"
	case c.Drug.Activity == ConcentrationDependent:
		return "S is " + s + ", below 1, and the drug's effect follows its concentration: a longer interval, never beyond twice the model's"
	}
	return "S is " + s + ", below 1: the model's interval is kept, since a single drug's half-life misses the rule by a factor of 3 and a needless stretch can leave hours without drug"
}

// meaning says what the ranges say and what they do not.
func (n *numbers) meaning(c *Case, i int) string {
	mn := &n.models[i]
	u := &c.Models[i].Regimen
	f := func(x float64) string {
		return metabolic.FormatDosePerKg(x, u.Unit, u.Interval.Kind == metabolic.Infusion)
	}
	record := mn.spread.record.short()
	if n.fit != nil && i == n.from {
		record = fmt.Sprintf("the prediction interval of the line fitted to %d animals", n.fit.record.N)
		if n.fit.byRecord {
			record = "the published record of lines over several species, which is wider than this line's own interval"
		}
	}
	level := "average blood level"
	if p := mn.plan(); p.name == PlanBothAdjusted {
		level = metabolic.Significant(p.average, 3) + " times the model's average blood level"
	} else {
		level = "the model's " + level
	}
	at := ""
	if mn.plan().name == PlanOnce {
		level = "the model's area under the curve"
	} else if mn.plan().interval > 0 {
		at = ", at this interval,"
	}
	return fmt.Sprintf("If this animal is otherwise like the model, the dose that gives %s%s is as likely as not between %s and %s, and nine times in ten between %s and %s, judged from %s. An equal blood level is not an equal effect, nor safety. This is not a range to choose from.",
		level, at, f(mn.range50.Low), f(mn.range50.High), f(mn.range90.Low), f(mn.range90.High), record)
}

// loading carries a loading dose: it follows volume, so mg/kg is unchanged,
// and only within a class.
func (n *numbers) loading(c *Case) *Loading {
	m := &c.Models[n.from]
	if m.LoadingPerKg == nil {
		return nil
	}
	l := &Loading{Unit: m.Regimen.Unit.String() + "/kg"}
	if m.Animal.Class != c.Patient.Animal.Class {
		l.Text = "A loading dose follows the volume of distribution, which is carried within a class only: none is drafted."
		return l
	}
	p := *m.LoadingPerKg
	l.DosePerKg, l.PerAdministration = &p, pointer(scale(p, float64(c.Patient.Mass.Middle)))
	sd := volumeSD(c.Patient.Animal, m.Animal)
	if m.LoadingPerHead {
		sd = math.Hypot(sd, m.Mass.HalfWidth()/z90)
	}
	l.Range90 = pointer(rangeAbout(p, sd, z90))
	w := &c.Patient.Mass
	// mg/kg stays, so the amount follows the mass itself.
	l.Range90Amount = pointer(rangeAbout(*l.PerAdministration, math.Hypot(sd, w.HalfWidth()/z90), z90))
	if w.Estimated() {
		l.AtLowMass, l.AtHighMass = pointer(scale(p, float64(w.Low))), pointer(scale(p, float64(w.High)))
	}
	if c.Product != nil && m.Regimen.Interval.Kind != metabolic.Infusion {
		l.Measured = measuredOut(c, *l.PerAdministration)
	}
	l.Text = "A loading dose follows the volume of distribution: mg/kg unchanged. Its range is of volume per kg (218 pairs of rat, dog and monkey; elsewhere assumed)."
	return l
}

// publishedDoses are the doses in print; with same-species the model's own is
// among them, as published.
func (n *numbers) publishedDoses(c *Case) []PublishedDose {
	var out []PublishedDose
	var daily float64
	if mn := &n.models[n.from]; !n.stopped && mn.plan().interval > 0 {
		daily = middle(mn.plan().daily)
	}
	for i := range c.Models {
		m := &c.Models[i]
		if !species.SameSpecies(c.Patient.Animal, m.Animal) {
			continue
		}
		p := PublishedDose{Species: m.Animal.Name, CommonName: m.Animal.CommonName(), DoseTyped: m.Regimen.Typed, DosePerKg: pointer(m.Regimen.PerKg),
			Unit: perKgUnit(&m.Regimen), Interval: m.Regimen.IntervalTyped, Route: m.Route, Source: m.Source, Relation: "species"}
		if m.Regimen.Interval.Kind == metabolic.Repeated {
			p.IntervalH = pointer(float64(m.Regimen.Interval.Hours))
		}
		out = append(out, p)
	}
	for i := range c.Published {
		x := &c.Published[i]
		p := PublishedDose{Species: x.Animal.Name, CommonName: x.Animal.CommonName(), DoseTyped: x.Regimen.Typed, Unit: perKgUnit(&x.Regimen),
			Interval: x.Regimen.IntervalTyped, Route: x.Route, Source: x.Source, Relation: species.Kinship(c.Patient.Animal, x.Animal)}
		if p.Relation == "" {
			p.Relation = "other class"
		}
		if species.SameSpecies(c.Patient.Animal, x.Animal) {
			p.Relation = "species"
		}
		perKg, known := x.Regimen.PerKg, x.HasPerKg
		if !known && x.Regimen.Given.Per == metabolic.PerAnimal && p.Relation == "species" {
			// A dose per animal of this very species is held against the draft
			// at this animal's own mass.
			perKg, known = scale(Pair{x.Regimen.Given.Low, x.Regimen.Given.High}, 1/float64(c.Patient.Mass.Middle)), true
		}
		if known {
			p.DosePerKg = pointer(perKg)
		}
		if x.Regimen.Interval.Kind == metabolic.Repeated {
			p.IntervalH = pointer(float64(x.Regimen.Interval.Hours))
			if known && daily > 0 {
				p.DailyRatio = daily / (middle(perKg) * 24 / float64(x.Regimen.Interval.Hours))
			}
		}
		out = append(out, p)
	}
	return out
}

// bases is the dose at the same interval under every basis that both animals
// have, and why the others are not there.
func (n *numbers) bases(c *Case) (out []BasisLine, missing []UnavailableLine) {
	m, mn := &c.Models[n.from], &n.models[n.from]
	for _, b := range Bases() {
		var eq *metabolic.Equation
		if b == c.Method.Basis {
			eq = c.Method.Equation
		}
		t, mo, err := pairRates(b, eq, c, m)
		if err != nil {
			missing = append(missing, UnavailableLine{Basis: b.String(), Why: reason(err)})
			continue
		}
		s := t.watt / mo.watt / mn.m
		l := BasisLine{Basis: b.String(), PatientW: t.watt, ModelW: mo.watt, Specific: s, Drafted: b == c.Method.Basis, Source: pairSource(&t, &mo)}
		if b == BasisEquation {
			l.ID = t.line.equation.ID
			if mo.line.equation.ID != t.line.equation.ID {
				l.ID += ", " + mo.line.equation.ID
			}
		}
		l.StandIn = standIn(b, &t, &mo)
		if !n.stopped {
			l.DosePerKg = pointer(scale(n.perSpecific(c), s))
		}
		out = append(out, l)
	}
	if lines(c.Patient.Animal).group == nil || lines(m.Animal).group == nil {
		missing = append(missing, UnavailableLine{Basis: "exponents", Why: "they are those of group constants, and one of the animals has none"})
	}
	return out, missing
}

// standIn says which animal stands on another basis than the line's.
func standIn(b Basis, t, m *rate) string {
	var parts []string
	if t.line.basis != b {
		parts = append(parts, "patient: "+t.line.basis.String())
	}
	if m.line.basis != b {
		parts = append(parts, "model: "+m.line.basis.String())
	}
	return strings.Join(parts, ", ")
}

// perSpecific is the dose per kg, at the drafted interval, for S = 1: the
// drafted dose over S. Times another basis's S it is the dose that keeps what
// the drafted one keeps. Beside a fitted line it is the model's own dose, at
// the model's interval.
func (n *numbers) perSpecific(c *Case) Pair {
	mn, r := &n.models[n.from], &c.Models[n.from].Regimen
	switch mn.plan().name {
	case PlanOnce, PlanFitted:
		return r.PerKg
	}
	return scale(mn.plan().dose, 1/mn.s)
}

// pairSource names what the two rates of a basis come from.
func pairSource(t, m *rate) string {
	a, b := rateSource(t), rateSource(m)
	if a == b {
		return a
	}
	return "patient: " + a + "; model: " + b
}

func rateSource(r *rate) string {
	l := r.line
	switch {
	case l.equation != nil:
		s := l.equation.Citation + verifiedMark(l.equation.Verified)
		if l.basis == BasisEquation {
			s = l.equation.ID + ": " + s
		}
		return s
	case l.measured != nil:
		return measuredSource(l.measured.Source)
	}
	return relativesSource(r)
}

func measuredSource(id string) string {
	if s, ok := species.Sources(id); ok {
		return s
	}
	return id
}

func relativesSource(r *rate) string {
	p := r.pred
	s := fmt.Sprintf("mixed model over %d measured species of the class (REML)", p.ClassN)
	if len(p.Levels) > 0 {
		s += ", leaning on " + strings.Join(p.Levels, ", ")
	} else {
		s += ", no measured relative in its order: the class line"
	}
	if p.Own {
		s += ", its own row among them"
	}
	return s
}

// exponentChoices are the exponents that the worksheet compares, and why.
var exponentChoices = []struct {
	b      float64
	remark string
}{
	{0.65, "renal drugs (Hu & Hayton 2001, 21 drugs)"},
	{0.67, "surface law; the exponent of the 2005 starting-dose guidance"},
	{0.70, "between the surface law and Kleiber"},
	{0.75, "Kleiber; the exponent used"},
	{0.80, "above Kleiber, as enrofloxacin over 17 mammals (Hatt et al. 2015)"},
}

// exponents is the dose at the same interval if the group constants stood with
// another exponent:
//
//	S_b = (kt/km)·(temperature factors)·M^(b−1), pivot 1 kg
func (n *numbers) exponents(c *Case) []ExponentLine {
	m, mn := &c.Models[n.from], &n.models[n.from]
	lt, lm := lines(c.Patient.Animal).group, lines(m.Animal).group
	if lt == nil || lm == nil {
		return nil
	}
	t, err1 := lt.at(c.Patient.Mass.Middle, c.Patient.Temperature, c.Method.Q10)
	mo, err2 := lm.at(m.Mass.Middle, m.Temperature, c.Method.Q10)
	if err1 != nil || err2 != nil {
		return nil
	}
	pivot := lt.equation.A * t.q10 / (lm.equation.A * mo.q10)
	var out []ExponentLine
	for _, e := range exponentChoices {
		s := pivot * math.Pow(mn.m, e.b-1)
		out = append(out, ExponentLine{Exponent: e.b, Specific: s, DosePerKg: scale(n.perSpecific(c), s), Remark: e.remark})
	}
	return out
}

// temperatureTable is the draft of an ectotherm at 5 °C less and more.
func (n *numbers) temperatureTable(c *Case) []TemperatureLine {
	p := &c.Patient
	m, mn := &c.Models[n.from], &n.models[n.from]
	if p.Animal.Endotherm() {
		return nil
	}
	var out []TemperatureLine
	for _, d := range []metabolic.Celsius{-5, 0, 5} {
		t := p.Temperature + d
		if t < minBodyTemperature || t > maxBodyTemperature {
			continue
		}
		r, err := mn.target.line.at(p.Mass.Middle, t, c.Method.Q10)
		if err != nil {
			continue
		}
		s := r.watt / mn.model.watt / mn.m
		plans := plansFor(&m.Regimen, s, c.Method.Intervals, longestInterval(&m.Regimen, c.Drug.Activity, c.Drug.Depot), nil)
		name := mn.plan().name
		if !mn.chosenByCase {
			name = draftedPlan(&m.Regimen, s, c.Drug.Activity, c.Drug.Depot)
		}
		for k := range plans {
			if plans[k].name == name {
				l := TemperatureLine{TemperatureC: float64(t), Specific: s, DosePerKg: plans[k].dose, IntervalH: plans[k].interval,
					Amount: scale(plans[k].dose, float64(p.Mass.Middle))}
				if plans[k].daily[1] > 0 {
					l.DailyPerKg = pointer(plans[k].daily)
				}
				out = append(out, l)
			}
		}
	}
	return out
}

// sources lists everything that the worksheet leans on.
func (n *numbers) sources(c *Case, w *Worksheet) []SourceLine {
	var out []SourceLine
	seen := map[string]bool{}
	add := func(what, citation string) {
		if citation == "" || seen[what+citation] {
			return
		}
		seen[what+citation] = true
		out = append(out, SourceLine{What: what, Citation: citation, Memory: strings.Contains(citation, "memory")})
	}
	for i := range c.Models {
		add("known dose, "+animalWords(c.Models[i].Animal), c.Models[i].Source)
		if t := c.Models[i].Tolerated; t != nil {
			add("tolerated maximum, "+animalWords(c.Models[i].Animal), t.Source)
		}
	}
	for i := range c.Published {
		add("published dose, "+animalWords(c.Published[i].Animal), c.Published[i].Source)
	}
	for i := range n.models {
		add("metabolic rate, "+animalWords(c.Patient.Animal), rateSource(&n.models[i].target))
		add("metabolic rate, "+animalWords(c.Models[i].Animal), rateSource(&n.models[i].model))
		_, _, s := n.models[i].spread.record.text()
		add("record of scaling", s)
	}
	for _, b := range w.Bases {
		if !b.Drafted {
			add("basis "+b.Basis, b.Source)
		}
	}
	if s := massSource(c, -1); s != "" {
		add("adult mass, "+animalWords(c.Patient.Animal), strings.TrimPrefix(s, "adult mass range: "))
	}
	for _, k := range w.Cautions {
		if k.Source != "" {
			add("caution "+k.Slug, k.Source)
		}
	}
	if c.Target != nil {
		add("target concentration", c.Target.Source)
	}
	return out
}

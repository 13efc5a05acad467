package dose

import (
	"fmt"
	"math"
	"strings"

	"tayra/metabolic"
)

// curveSet is the regimens whose course is drawn: the model's own, each plan,
// and the proposed one, in the kinetics scaled to the patient.
//
// Elimination half-life follows 1/S; volume per kg, bioavailability and
// absorption are taken to be the model's, which no published record supports
// for absorption: the worksheet says so.
func (n *numbers) concentrations(c *Case, w *Worksheet) {
	m, mn := &c.Models[n.from], &n.models[n.from]
	if c.Target != nil {
		w.Target = &TargetRecord{Typed: c.Target.Typed, PerLitre: c.Target.Concentration.Value, Unit: c.Target.Concentration.Unit.String() + "/L", Source: c.Target.Source}
	}
	if n.stopped {
		return
	}
	if m.HalfLife == 0 {
		w.CurvesNote = "No half-life in the model is given. What can be said: the ratios of dose, of daily amount and of average concentration, which follow from clearance alone. What cannot: peaks, troughs, accumulation, and the time above a concentration."
		w.Proposed = n.proposedRecord(c, nil, nil)
		return
	}
	own := Kinetics{HalfLifeH: float64(m.HalfLife), VolumeLPerKg: m.VolumePerKg, Bioavailability: m.Fraction, AbsorptionHalfLifeH: float64(m.AbsorptionHalf)}
	patient := own
	patient.HalfLifeH /= mn.s
	target := 0.0
	if c.Target != nil && m.VolumePerKg > 0 {
		target = c.Target.Concentration.Value
	}
	unit := m.Regimen.Unit.String() + "/L"
	// Without a volume a concentration means nothing by itself: everything is
	// given in units of the model's average.
	per := 1.0
	if m.VolumePerKg == 0 {
		unit = "times the model's average"
		if p, err := SteadyState(own, dosingOf(&m.Regimen, middle(m.Regimen.PerKg)), 0); err == nil && p.Cavg > 0 {
			per = p.Cavg
		} else if m.Regimen.Interval.Kind == metabolic.Once {
			unit = "times the model's peak"
			per = p.Cmax
		}
	}
	add := func(name, label string, k Kinetics, d Dosing) *Curve {
		p, err := SteadyState(k, d, target)
		if err != nil {
			w.CurvesNote = joinSentences(w.CurvesNote, label+": "+err.Error()+".")
			return nil
		}
		cv := Curve{Name: name, Label: label, HalfLifeH: k.HalfLifeH, DosePerKg: d.DosePerKg, Cmax: p.Cmax / per, TmaxH: p.TmaxH, Cmin: p.Cmin / per, Cavg: p.Cavg / per,
			Unit: unit, Fluctuation: p.Fluctuation, Accumulation: p.Accumulation, DosesTo90: p.DosesTo90, PercentAbove: p.PercentAboveTarget}
		if d.IntervalH > 0 && !d.Once && !d.Infusion {
			cv.IntervalH = pointer(d.IntervalH)
		}
		cv.kinetics, cv.dosing, cv.per = k, d, per
		w.Curves = append(w.Curves, cv)
		return &w.Curves[len(w.Curves)-1]
	}
	add("model", "model: "+animalWords(m.Animal)+", its own regimen", own, dosingOf(&m.Regimen, middle(m.Regimen.PerKg)))
	var drafted *Curve
	for k := range mn.plans {
		p := &mn.plans[k]
		if p.name == PlanOnce {
			for e, label := range []string{"once, low end", "once, high end"} {
				if p.dose[0] == p.dose[1] && e == 1 {
					continue
				}
				add(string(p.name), label, patient, Dosing{DosePerKg: p.dose[e], Once: true})
			}
			continue
		}
		label := string(p.name)
		if k == mn.drafted {
			label += " (drafted)"
		}
		d := Dosing{DosePerKg: middle(p.dose), IntervalH: p.interval, Infusion: p.name == PlanInfusion}
		if cv := add(string(p.name), label, patient, d); k == mn.drafted && cv != nil {
			x := *cv
			drafted = &x
		}
	}
	var proposed *Curve
	if r := c.Proposed; r != nil {
		if cv := add("proposed", "proposed", patient, dosingOf(r, middle(r.PerKg))); cv != nil {
			x := *cv
			proposed = &x
		}
	}
	w.Proposed = n.proposedRecord(c, drafted, proposed)
	note := "One compartment. In the patient the half-life is the model's divided by S; volume per kg"
	if m.AbsorptionHalf > 0 {
		note += ", absorption"
	}
	if m.Fraction > 0 {
		note += ", bioavailability"
	}
	note += " as in the model: assumed. A single drug's half-life misses this rule by a factor of 3."
	if m.VolumePerKg == 0 {
		note += " No volume of distribution is given: concentrations are " + unit + "."
		if c.Target != nil {
			note += " The time above the target cannot be said."
		}
	}
	if m.Regimen.PerKg[0] != m.Regimen.PerKg[1] {
		note += " Dose ranges are drawn at their geometric middle."
	}
	w.CurvesNote = joinSentences(note, w.CurvesNote)
}

func joinSentences(a, b string) string {
	switch {
	case a == "":
		return b
	case b == "":
		return a
	}
	return a + " " + b
}

// dosingOf is a regimen as the concentration formulas take it.
func dosingOf(r *Regimen, perKg float64) Dosing {
	switch r.Interval.Kind {
	case metabolic.Once:
		return Dosing{DosePerKg: perKg, Once: true}
	case metabolic.Infusion:
		return Dosing{DosePerKg: perKg, Infusion: true}
	}
	return Dosing{DosePerKg: perKg, IntervalH: float64(r.Interval.Hours)}
}

// Points samples the curve over a span of hours from the first dose, in the
// curve's unit: n even points and both sides of every dose.
func (cv *Curve) Points(fromH, toH float64, n int) []CurvePoint {
	pts := Sample(cv.kinetics, cv.dosing, fromH, toH, n)
	for i := range pts {
		pts[i].C /= cv.per
	}
	return pts
}

// Limits of a proposed regimen within which it does not differ from the
// drafted one: the daily amount as for bioequivalence, 0.8 to 1.25.
const (
	proposedLow  = 0.8
	proposedHigh = 1.25
)

// proposedRecord holds the proposed regimen against the drafted one.
func (n *numbers) proposedRecord(c *Case, drafted, proposed *Curve) *Proposed {
	r := c.Proposed
	if r == nil {
		return nil
	}
	mn := &n.models[n.from]
	p := mn.plan()
	out := &Proposed{DoseTyped: r.Typed, IntervalTyped: r.IntervalTyped, DosePerKg: r.PerKg, Unit: perKgUnit(r),
		PerAdministration: scale(r.PerKg, float64(c.Patient.Mass.Middle))}
	if c.Product != nil && r.Interval.Kind != metabolic.Infusion {
		out.Measured = measuredOut(c, out.PerAdministration)
	}
	var daily, draftedDaily float64
	dose, draftedDose := middle(r.PerKg), middle(p.dose)
	switch {
	case r.Interval.Kind == metabolic.Repeated:
		h := float64(r.Interval.Hours)
		out.IntervalH = pointer(h)
		out.DailyPerKg = pointer(scale(r.PerKg, 24/h))
		daily = dose * 24 / h
		if p.interval > 0 {
			out.Ratios.Interval = h / p.interval
		}
	case r.Interval.Kind == metabolic.Infusion:
		daily = dose * 24
		out.DailyPerKg = pointer(scale(r.PerKg, 24))
	}
	if p.daily[1] > 0 {
		draftedDaily = middle(p.daily)
	}
	out.Ratios.Dose = dose / draftedDose
	if daily > 0 && draftedDaily > 0 {
		out.Ratios.Daily = daily / draftedDaily
	}
	if drafted != nil && proposed != nil {
		if drafted.Cmax > 0 {
			out.Ratios.Peak = pointer(proposed.Cmax / drafted.Cmax)
		}
		if drafted.Cmin > 0 {
			out.Ratios.Trough = pointer(proposed.Cmin / drafted.Cmin)
		}
	}
	n.judge(c, out, daily, draftedDaily)
	return out
}

// intervalWords is an interval in words: every 12 hours.
func intervalWords(h float64) string {
	return metabolic.FormatInterval(metabolic.Interval{Kind: metabolic.Repeated, Hours: metabolic.Hours(h)})
}

// raiseProposed finds the cautions that a proposed regimen raises of itself,
// against the model that the draft was taken from.
func raiseProposed(c *Case, n *numbers) {
	n.proposedRaised = n.proposedRaised[:0]
	r := c.Proposed
	if r == nil {
		return
	}
	m, th := &c.Models[n.from], &c.Method.Thresholds
	ratio := r.PerKg[1] / m.Regimen.PerKg[1]
	add := func(s Slug, l Level, a, b float64) {
		n.proposedRaised = append(n.proposedRaised, raised{slug: s, level: l, model: n.from, a: a, b: b})
	}
	switch {
	case ratio > th.PeakStop && c.Drug.Margin != Wide:
		add(Peak, Stop, ratio, th.PeakStop)
	case ratio > th.PeakWarn:
		add(Peak, Warn, ratio, th.PeakWarn)
	}
	if t := m.Tolerated; t != nil && t.Unit == r.Unit && r.Interval.Kind != metabolic.Infusion && r.PerKg[1] > t.PerKg*(1+1e-12) {
		add(AboveTolerated, Stop, r.PerKg[1], t.PerKg)
	}
}

// judge says in plain words what differs. It never says that a regimen is
// right: only where it lies against the draft. What the proposal raises of
// itself comes first.
func (n *numbers) judge(c *Case, out *Proposed, daily, draftedDaily float64) {
	mn := &n.models[n.from]
	p := mn.plan()
	r := c.Proposed
	f := func(x float64) string { return metabolic.Significant(x, 3) }
	say := func(format string, args ...any) { out.Verdict = append(out.Verdict, fmt.Sprintf(format, args...)) }
	sortRaised(n.proposedRaised)
	for i := range n.proposedRaised {
		x := n.caution(c, &n.proposedRaised[i])
		out.RaisesStop = out.RaisesStop || x.Level == Stop
		x.Text = strings.Replace(x.Text, "The drafted dose", "The proposed dose", 1)
		out.Cautions = append(out.Cautions, x)
		say("%s, %s: %s", strings.ToUpper(string(x.Level)), x.Slug, x.Text)
	}
	switch {
	case p.name == PlanOnce && r.Interval.Kind == metabolic.Once:
		lo, hi := p.dose[0], p.dose[1]
		out.Differs = r.PerKg[0] < lo*(1-1e-9) || r.PerKg[1] > hi*(1+1e-9)
		if out.Differs {
			say("The proposed single dose lies outside the drafted bracket.")
		} else {
			say("The proposed single dose lies inside the drafted bracket.")
		}
	case (p.name == PlanOnce) != (r.Interval.Kind == metabolic.Once):
		// One is a single dose and the other is not: neither a daily amount
		// nor the range can be compared.
		out.Differs, out.OutsideRange = true, true
		say("One regimen is a single dose and the other is repeated: amounts a day and the range are not comparable, and the dose per kg alone is %s times the drafted one.", f(out.Ratios.Dose))
		return
	case daily > 0 && draftedDaily > 0:
		out.Differs = out.Ratios.Daily < proposedLow || out.Ratios.Daily > proposedHigh
		where := "within"
		if out.Differs {
			where = "outside"
		}
		say("The proposed daily amount is %s times the drafted one, %s 0.8 to 1.25.", f(out.Ratios.Daily), where)
	}
	if p.interval > 0 && out.IntervalH != nil {
		if math.Abs(*out.IntervalH-p.interval) > 1e-9*p.interval {
			out.Differs = true
			say("Proposed is %s, drafted %s.", intervalWords(*out.IntervalH), intervalWords(p.interval))
		} else {
			say("The interval is the drafted one.")
		}
	}
	if x := out.Ratios.Peak; x != nil {
		say("Its peak is %s times the drafted one's.", f(*x))
	}
	if x := out.Ratios.Trough; x != nil {
		say("Its trough is %s times the drafted one's.", f(*x))
	}
	// The range is about the drafted dose at the drafted interval; a regimen at
	// another interval is held against it by its daily amount, each end by
	// itself.
	at := r.PerKg
	if p.interval > 0 && out.IntervalH != nil {
		at = scale(at, p.interval / *out.IntervalH)
	}
	out.OutsideRange = at[0] < mn.range90.Low || at[1] > mn.range90.High
	if out.OutsideRange {
		say("It reaches outside the nine-in-ten range of the draft.")
	} else {
		say("It lies inside the nine-in-ten range of the draft, which says nothing of its effect or its danger.")
	}
}

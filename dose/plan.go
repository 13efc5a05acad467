package dose

import (
	"math"

	"tayra/metabolic"
)

// PlanName names a way to carry a regimen across.
type PlanName string

// Plans. Clearance follows metabolic rate and volume follows mass, so with
// S = (Bt/Bm)/(Wt/Wm) an elimination half-life follows 1/S, and:
//
//	same-interval   dose d·S        interval τ     daily S·d/τ
//	same-dose       dose d          interval τ/S   daily S·d/τ
//	both-adjusted   dose d·S        interval τ/S   daily S²·d/τ
//	clock           dose d·S·τ'/τ   interval τ'    daily S·d/τ
//
// where τ' is the practical interval nearest to τ/S.
const (
	PlanDefault      PlanName = ""
	PlanSameInterval PlanName = "same-interval"
	PlanSameDose     PlanName = "same-dose"
	PlanBothAdjusted PlanName = "both-adjusted"
	PlanClock        PlanName = "clock"
	PlanOnce         PlanName = "once"
	PlanInfusion     PlanName = "infusion"
)

// PracticalIntervals are the intervals, in hours, that a clock plan chooses
// from; the model's own is always among them.
var PracticalIntervals = []metabolic.Hours{6, 8, 12, 24, 48, 72, 96, 120, 168, 240, 336, 504, 672, 720}

// nearestInterval is the practical interval, or the model's own, that is
// nearest to want on a log scale and not longer than limit: the one whose ratio
// to want, larger over smaller, is least. A tie, to 1e-9 of the log, takes the
// shorter.
func nearestInterval(want, own, limit float64, practical []metabolic.Hours) float64 {
	const tie = 1e-9
	best, off := own, math.Max(own/want, want/own)
	for _, h := range practical {
		h := float64(h)
		if h > limit*(1+1e-12) {
			continue
		}
		ratio := math.Max(h/want, want/h)
		if ratio < off*(1-tie) || (ratio < off*(1+tie) && h < best) {
			best, off = h, ratio
		}
	}
	return best
}

// planNumbers is one plan in numbers.
type planNumbers struct {
	name      PlanName
	dose      Pair    // per kg; for an infusion per kg and hour
	interval  float64 // h; 0 for once and infusion
	daily     Pair    // per kg; zero for once
	average   float64 // average concentration over the model's
	peakRatio float64 // dose per kg over the model's
}

// plansFor computes the plans of a regimen for the mass-specific ratio S.
// longest is the longest interval that clock may choose.
func plansFor(r *Regimen, s float64, practical []metabolic.Hours, longest float64, buf []planNumbers) []planNumbers {
	d := r.PerKg
	switch r.Interval.Kind {
	case metabolic.Once:
		// By volume mg/kg is unchanged and matches the peak; by clearance d·S
		// matches the area under the curve. Smaller first, no point between.
		low, high := math.Min(1, s), math.Max(1, s)
		return append(buf, planNumbers{name: PlanOnce, dose: Pair{d[0] * low, d[1] * high}, average: s, peakRatio: high})
	case metabolic.Infusion:
		p := planNumbers{name: PlanInfusion, dose: scale(d, s), average: 1, peakRatio: s}
		p.daily = scale(p.dose, 24)
		return append(buf, p)
	}
	tau := float64(r.Interval.Hours)
	want := tau / s
	clock := nearestInterval(want, tau, longest, practical)
	add := func(name PlanName, doseRatio, interval float64) {
		p := planNumbers{name: name, dose: scale(d, doseRatio), interval: interval, peakRatio: doseRatio}
		p.daily = scale(p.dose, 24/interval)
		p.average = doseRatio * tau / (interval * s)
		buf = append(buf, p)
	}
	add(PlanSameInterval, s, tau)
	add(PlanSameDose, 1, want)
	add(PlanBothAdjusted, s, want)
	add(PlanClock, s*clock/tau, clock)
	return buf
}

func scale(p Pair, f float64) Pair { return Pair{p[0] * f, p[1] * f} }

// draftedPlan is the rule of the method where the case names no plan.
//
//	S ≥ 1: clock.
//	S < 1: same interval, since a needless stretch can leave hours without
//	drug; clock only for a drug whose effect follows its concentration.
func draftedPlan(r *Regimen, s float64, activity Activity, depot bool) PlanName {
	switch r.Interval.Kind {
	case metabolic.Once:
		return PlanOnce
	case metabolic.Infusion:
		return PlanInfusion
	}
	switch {
	case depot:
		return PlanSameInterval // no interval of a depot form is scaled
	case s >= 1, activity == ConcentrationDependent:
		return PlanClock
	}
	return PlanSameInterval
}

// longestInterval is how long an interval clock may choose: never beyond the
// model's own for a time-dependent drug, never beyond twice that for a
// concentration-dependent one, else as long as the list goes.
func longestInterval(r *Regimen, activity Activity, depot bool) float64 {
	tau := float64(r.Interval.Hours)
	switch {
	case activity == TimeDependent, depot:
		return tau
	case activity == ConcentrationDependent:
		return 2 * tau
	}
	return math.Inf(1)
}

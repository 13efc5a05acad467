// The formulas of this file are arranged so that nothing cancels when the rate
// constants of absorption and elimination meet, or when an interval is a tiny
// or a huge part of the half-life: sums of terms of one sign where there are
// any, a series where there are none. The identities stand where they are
// used. No dose is ever added in a loop.

package dose

import (
	"errors"
	"fmt"
	"math"
)

// Kinetics is the one-compartment model of a drug in one animal: elimination
// rate constant ke = ln 2/half-life, absorption rate constant
// ka = ln 2/absorption half-life, clearance CL = ke·V.
type Kinetics struct {
	// HalfLifeH is the elimination half-life in hours; above 0.
	HalfLifeH float64
	// VolumeLPerKg is the volume of distribution in L/kg. 0 means unknown:
	// concentrations then come for a volume of 1 L/kg, and only their ratios
	// mean anything.
	VolumeLPerKg float64
	// Bioavailability is the fraction F of the dose that reaches the blood,
	// 0 < F <= 1; 0 is taken as 1.
	Bioavailability float64
	// AbsorptionHalfLifeH is the half-life of first-order absorption in
	// hours; 0 puts the whole dose into the blood at once.
	AbsorptionHalfLifeH float64
}

// Dosing is what is given, from time 0 on.
type Dosing struct {
	// DosePerKg is the amount per kg and administration, or per kg and hour
	// for an infusion.
	DosePerKg float64
	// IntervalH is the time between doses in hours; not read for an infusion
	// or a single dose.
	IntervalH float64
	// Infusion is a constant rate that begins at time 0 and does not end.
	Infusion bool
	// Once is a single dose.
	Once bool
}

// HighAccumulation is the accumulation ratio above which a one-compartment
// half-life and an interval belong together badly (the interval is under a
// fourteenth of the half-life). Assumed.
const HighAccumulation = 20

// Profile is a one-compartment curve in figures: at steady state for repeated
// doses and infusions, of the only dose for a single one. Concentrations are in
// the unit of the dose over L (mg/kg over L/kg is mg/L).
type Profile struct {
	Cmax   float64 // highest concentration
	TmaxH  float64 // hours from a dose to Cmax; 0 for an infusion
	Cmin   float64 // lowest concentration of the interval; 0 for a single dose
	Cavg   float64 // F·D/(CL·τ); F·rate/CL for an infusion; 0 for a single dose
	AUC    float64 // F·D/CL: of one interval at steady state, and of a single dose to infinity; of one hour for an infusion
	Target float64 // the target held against, 0 for none

	// Fluctuation is (Cmax − Cmin)/Cavg; 0 for an infusion or a single dose.
	Fluctuation float64
	// Accumulation is 1/(1 − e^(−kτ)), with k the slower of ka and ke, which
	// rules the tail; 0 where nothing is repeated.
	Accumulation float64
	// DosesTo90 is max(1, ceil(ln 10/(kτ))): after how many doses the trough
	// stands at 90 % of its steady state; 0 where nothing is repeated.
	DosesTo90 int
	// HoursTo90 is ln 10/k, the time in which an infusion, or the trough of
	// doses at once, comes to 90 % of steady state (absorption adds a little);
	// 0 for a single dose.
	HoursTo90 float64
	// PercentAboveTarget is the share of the interval, 0 to 100, in which
	// the concentration is above the target. Nil without a target, without a
	// volume of distribution, and for a single dose.
	PercentAboveTarget *float64
	// HoursAboveTarget is the same in hours, of one interval or after a
	// single dose. Nil without a target or volume, and for an infusion.
	HoursAboveTarget *float64

	// FlipFlop says that absorption is slower than elimination (ka < ke): the
	// tail of the curve then shows absorption, and a half-life read from
	// such a tail is not the half-life of elimination.
	FlipFlop bool
}

// SteadyState computes the [Profile] of k under d. A target of 0 is none.
//
// With lo and hi the smaller and larger of ke and ka, s the hours since the
// last dose, E = e^(−lo·τ) and G(s) = (e^(−lo·s) − e^(−hi·s))/(hi − lo):
//
//	at once:   C(s) = F·D/V · e^(−ke·s)/(1 − e^(−ke·τ))
//	absorbed:  C(s) = F·D·ka/V · [G(s) + e^(−hi·s)·G(τ)/(1 − e^(−hi·τ))]/(1 − E)
//	infusion:  C    = F·rate/(ke·V)
//
// Source: superposition of the one-compartment model, as in any textbook of
// pharmacokinetics. Unusable kinetics or dosing, and results beyond the range
// of numbers, are errors.
func SteadyState(k Kinetics, d Dosing, target float64) (Profile, error) {
	c, err := newCourse(k, d)
	if err != nil {
		return Profile{}, err
	}
	if math.IsNaN(target) || math.IsInf(target, 0) || target < 0 {
		return Profile{}, fmt.Errorf("target concentration %g is not a number of 0 or more", target)
	}
	p := Profile{AUC: c.input / c.ke, FlipFlop: c.absorbed && c.ka < c.ke, Target: target}
	switch {
	case d.Infusion:
		p.Cavg = p.AUC
		p.Cmax, p.Cmin = p.Cavg, p.Cavg
		p.HoursTo90 = math.Ln10 / c.lo
	case d.Once:
		only := c.after(1)
		p.TmaxH = c.peak(only)
		p.Cmax = c.at(only, p.TmaxH)
	default:
		steady := c.after(math.Inf(1))
		p.TmaxH = c.steadyPeak(steady)
		p.Cmax = c.at(steady, p.TmaxH)
		p.Cmin = c.at(steady, c.tau)
		p.Cavg = p.AUC / c.tau
		p.Fluctuation = c.fluctuation(p.TmaxH)
		p.Accumulation = steady.lo
		p.HoursTo90 = math.Ln10 / c.lo
		p.DosesTo90 = wholeUp(p.HoursTo90 / c.tau)
	}
	for _, x := range []float64{p.Cmax, p.Cavg, p.AUC, p.Accumulation, p.HoursTo90} {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			return Profile{}, errors.New("dose, volume, interval and half-lives are too far apart to compute a concentration")
		}
	}
	if target > 0 && k.VolumeLPerKg > 0 {
		c.holdAgainst(&p)
	}
	return p, nil
}

// ConcentrationAt is the concentration tH hours after the first dose (or after
// the start of the infusion), all doses so far included; a dose due at tH is
// already in. With n doses given, s hours since the last and
// Rn(k) = (1 − e^(−nkτ))/(1 − e^(−kτ)):
//
//	at once:   C = F·D/V · Rn(ke)·e^(−ke·s)
//	absorbed:  C = F·D·ka/V · [Rn(lo)·e^(−lo·s) − Rn(hi)·e^(−hi·s)]/(hi − lo)
//	infusion:  C = F·rate/(ke·V) · (1 − e^(−ke·t)), at once
//
// It is 0 before the first dose and NaN where [SteadyState] gives an error.
func ConcentrationAt(k Kinetics, d Dosing, tH float64) float64 {
	c, err := newCourse(k, d)
	if err != nil || math.IsNaN(tH) || math.IsInf(tH, 0) {
		return math.NaN()
	}
	if tH < 0 {
		return 0
	}
	if c.infusion {
		return c.infused(tH)
	}
	n, s := c.position(tH)
	return c.at(c.after(n), s)
}

// AUCUntil is the area under the curve of one dose from its administration to
// tH hours later:
//
//	at once:   F·D/CL · (1 − e^(−ke·t))
//	absorbed:  F·D/CL · [1 − (ka·e^(−ke·t) − ke·e^(−ka·t))/(ka − ke)]
//
// By superposition the area of the n-th interval of repeated doses is
// AUCUntil(n·τ), and of an interval at steady state F·D/CL, [Profile].AUC. It
// is NaN for an infusion and where [SteadyState] gives an error.
func AUCUntil(k Kinetics, d Dosing, tH float64) float64 {
	c, err := newCourse(k, d)
	if err != nil || d.Infusion || math.IsNaN(tH) {
		return math.NaN()
	}
	// The area of a dose to t is the concentration that one dose an hour,
	// infused for t hours, would come to.
	return c.infused(math.Max(tH, 0))
}

// CurvePoint is one point of a concentration curve.
type CurvePoint struct {
	H float64 // hours after the first dose
	C float64 // concentration
}

// maxSampledDoses bounds the dose times that Sample adds to its even grid.
const maxSampledDoses = 10000

// Sample is the curve from fromH to toH hours after the first dose: n evenly
// spaced points, both ends among them, and for every dose time in that span two
// points at the same hour, just before and just after the dose, and the peak
// between doses where there is one; without these equal peaks would be drawn
// unequal. Points are in order of time; a grid point that falls on a dose time
// is that pair. Over 10,000 dose times only the even points are given. It is
// nil when n < 2, when not 0 <= fromH < toH, and where [SteadyState] gives an
// error.
func Sample(k Kinetics, d Dosing, fromH, toH float64, n int) []CurvePoint {
	c, err := newCourse(k, d)
	if err != nil || n < 2 || !(0 <= fromH && fromH < toH) || math.IsInf(toH, 0) {
		return nil
	}
	grid := func(i int) float64 {
		if i == n-1 {
			return toH // exactly, without the noise of the sum
		}
		return fromH + (toH-fromH)*float64(i)/float64(n-1)
	}
	if c.infusion || (toH-fromH)/c.tau > maxSampledDoses {
		points := make([]CurvePoint, n)
		for i := range points {
			points[i] = CurvePoint{grid(i), ConcentrationAt(k, d, grid(i))}
		}
		return points
	}

	points := make([]CurvePoint, 0, n+3*(2+int((toH-fromH)/c.tau)))
	noise := 0.0
	if !d.Once {
		noise = noiseAt * c.tau
	}
	pinned := func(h float64) float64 { // a dose at an end stands exactly there
		switch {
		case math.Abs(h-fromH) <= noise:
			return fromH
		case math.Abs(h-toH) <= noise:
			return toH
		}
		return h
	}
	i := 0
	doses, since := c.position(fromH)
	if since <= noise { // a dose falls on the first point
		points = append(points, CurvePoint{fromH, c.at(c.after(doses-1), c.tau)})
	}
	for ; ; doses++ {
		given := c.after(doses)
		start := 0.0
		if doses > 1 {
			start = (doses - 1) * c.tau
		}
		end := start + c.tau
		if start >= fromH-noise {
			points = append(points, CurvePoint{pinned(start), c.at(given, 0)})
		}
		peak := start + c.peak(given)
		peaked := !(peak > math.Max(start, fromH)+noise && peak < math.Min(end, toH)-noise)
		for ; i < n && grid(i) < end-noise; i++ {
			t := grid(i)
			if t <= start+noise {
				continue
			}
			if !peaked && t >= peak {
				peaked = true
				if t > peak {
					points = append(points, CurvePoint{peak, c.at(given, peak-start)})
				}
			}
			points = append(points, CurvePoint{t, c.at(given, t-start)})
		}
		if !peaked {
			points = append(points, CurvePoint{peak, c.at(given, peak-start)})
		}
		if end > toH+noise {
			return points
		}
		points = append(points, CurvePoint{pinned(end), c.at(given, c.tau)})
	}
}

// course is a regimen in an animal, made ready to compute.
type course struct {
	input    float64 // F·D/V: what one dose at once adds; per hour for an infusion
	scale    float64 // input, times ka when absorbed
	ke, ka   float64
	lo, hi   float64 // smaller and larger of ke and ka; both ke without absorption
	diff     float64 // hi − lo
	tau      float64 // +Inf for a single dose: it is the first of an endless interval
	absorbed bool
	infusion bool
}

func newCourse(k Kinetics, d Dosing) (course, error) {
	positive := func(x float64) bool { return x > 0 && !math.IsInf(x, 0) }
	f, v := k.Bioavailability, k.VolumeLPerKg
	if f == 0 {
		f = 1
	}
	if v == 0 {
		v = 1
	}
	switch {
	case !positive(k.HalfLifeH):
		return course{}, fmt.Errorf("half-life %g h is not above 0", k.HalfLifeH)
	case !positive(v):
		return course{}, fmt.Errorf("volume of distribution %g L/kg is not above 0", k.VolumeLPerKg)
	case !(f > 0 && f <= 1):
		return course{}, fmt.Errorf("bioavailability %g is not above 0 and at most 1", k.Bioavailability)
	case k.AbsorptionHalfLifeH != 0 && !positive(k.AbsorptionHalfLifeH):
		return course{}, fmt.Errorf("absorption half-life %g h is neither 0 nor above", k.AbsorptionHalfLifeH)
	case !positive(d.DosePerKg):
		return course{}, fmt.Errorf("dose %g per kg is not above 0", d.DosePerKg)
	case d.Infusion && d.Once:
		return course{}, errors.New("a regimen cannot be both an infusion and a single dose")
	case !d.Infusion && !d.Once && !positive(d.IntervalH):
		return course{}, fmt.Errorf("interval %g h is not above 0", d.IntervalH)
	}
	c := course{input: f * d.DosePerKg / v, ke: math.Ln2 / k.HalfLifeH, tau: d.IntervalH, infusion: d.Infusion}
	c.scale, c.lo, c.hi = c.input, c.ke, c.ke
	if d.Once || d.Infusion {
		c.tau = math.Inf(1)
	}
	if k.AbsorptionHalfLifeH > 0 {
		c.absorbed = true
		c.ka = math.Ln2 / k.AbsorptionHalfLifeH
		c.scale *= c.ka
		c.lo, c.hi = math.Min(c.ke, c.ka), math.Max(c.ke, c.ka)
		c.diff = c.hi - c.lo
	}
	for _, x := range []float64{c.scale, c.lo, c.hi, c.lo * c.hi} {
		if !positive(x) {
			return course{}, errors.New("dose, volume and half-lives are too far apart to compute a concentration")
		}
	}
	return c, nil
}

// noiseAt is the binary noise, in units of what is counted, below which a
// quotient is taken for the whole number beside it: 0.3/0.1 is 3.
const noiseAt = 1e-9

// wholeUp is max(1, ceil(x)), the noise of x removed.
func wholeUp(x float64) int {
	n := math.Max(1, math.Ceil(x*(1-noiseAt)))
	if n > math.MaxInt32 {
		return math.MaxInt32
	}
	return int(n)
}

// position counts the doses given by tH, and the hours since the last of them.
func (c *course) position(tH float64) (doses, sinceH float64) {
	before := math.Floor(tH/c.tau + noiseAt)
	if before < 1 {
		return 1, tH
	}
	return before + 1, math.Max(0, tH-before*c.tau)
}

// shrink is (1 − e^(−x))/x, and 1 at 0.
func shrink(x float64) float64 {
	if x == 0 {
		return 1
	}
	return -math.Expm1(-x) / x
}

// logOver is ln(1 + x)/x, and 1 at 0.
func logOver(x float64) float64 {
	if x == 0 {
		return 1
	}
	return math.Log1p(x) / x
}

// gap is G(t) = (e^(−lo·t) − e^(−hi·t))/(hi − lo), as t·e^(−lo·t)·shrink((hi−lo)·t):
// where the constants meet it is t·e^(−k·t).
func (c *course) gap(t float64) float64 {
	if c.lo*t > 745 { // e^−745 is the last number above 0
		return 0
	}
	return t * math.Exp(-c.lo*t) * shrink(c.diff*t)
}

// sums is what n doses leave behind: lo = Rn(lo), hi = Rn(hi), and
// lag = (Rn(lo) − Rn(hi))/(hi − lo) = Σ G(jτ), j from 0 to n−1.
type sums struct{ lo, hi, lag float64 }

// after gives the sums of n doses; n = +Inf is steady state.
func (c *course) after(n float64) sums {
	if n < 1 {
		return sums{}
	}
	oneLo := -math.Expm1(-c.lo * c.tau) // 1 − e^(−lo·τ)
	allLo := -math.Expm1(-n * c.lo * c.tau)
	r := sums{lo: allLo / oneLo}
	if !c.absorbed {
		return r
	}
	oneHi := -math.Expm1(-c.hi * c.tau)
	allHi := -math.Expm1(-n * c.hi * c.tau)
	r.hi = allHi / oneHi
	if small := n * c.hi * c.tau; small < 1e-4 {
		// All n doses lie within a ten-thousandth of a half-life or so: the
		// difference below would cancel. Σ G(jτ) from G's series to t³ leaves
		// an error of small³/15.
		pairs := n * (n - 1) / 2
		h2 := c.lo*c.lo + c.lo*c.hi + c.hi*c.hi
		r.lag = c.tau * pairs * (1 - (c.lo+c.hi)*c.tau*(2*n-1)/6 + h2*c.tau*c.tau*pairs/6)
		return r
	}
	r.lag = math.Max(0, (c.gap(c.tau)*allLo-oneLo*c.gap(n*c.tau))/(oneLo*oneHi))
	return r
}

// at is the concentration s hours after the last of the doses in r:
// [Rn(lo)·e^(−lo·s) − Rn(hi)·e^(−hi·s)]/(hi − lo) = G(s)·Rn(lo) + e^(−hi·s)·lag.
func (c *course) at(r sums, s float64) float64 {
	if !c.absorbed {
		return c.scale * r.lo * math.Exp(-c.lo*s)
	}
	if r.lag == 0 {
		return c.scale * r.lo * c.gap(s)
	}
	return c.scale * (c.gap(s)*r.lo + math.Exp(-c.hi*s)*r.lag)
}

// peak is the hour after the last of the doses in r at which the curve turns,
// were no further dose given: ln(hi·Rn(hi)/(lo·Rn(lo)))/(hi − lo).
func (c *course) peak(r sums) float64 {
	if !c.absorbed {
		return 0
	}
	t := logOver(c.diff/c.lo) / c.lo
	// Rn(hi)/Rn(lo) = 1 − (hi − lo)·lag/Rn(lo)
	if x := r.lag / r.lo; c.diff*x < 0.5 {
		t -= x * logOver(-c.diff*x)
	} else {
		t += math.Log(r.hi/r.lo) / c.diff
	}
	return math.Max(0, t)
}

// steadyPeak is peak at steady state. It is never beyond half the interval:
// it is τ/2 when the interval is nothing beside the half-lives.
func (c *course) steadyPeak(steady sums) float64 {
	if c.absorbed && c.hi*c.tau < 1e-4 {
		return c.tau / 2 * (1 - (c.lo+c.hi)*c.tau/12)
	}
	return math.Min(c.peak(steady), c.tau/2)
}

// fluctuation is (Cmax − Cmin)/Cavg at steady state. With
// Y(k) = (1 − e^(−k·t))/(1 − e^(−k·τ)) at t = tmax, Cmax − Cmin is
// scale·(Y(hi) − Y(lo))/(hi − lo); for doses at once the quotient is just ke·τ.
func (c *course) fluctuation(tmax float64) float64 {
	if !c.absorbed {
		return c.ke * c.tau
	}
	oneLo, oneHi := -math.Expm1(-c.lo*c.tau), -math.Expm1(-c.hi*c.tau)
	var rise float64 // (Y(hi) − Y(lo))/(hi − lo)
	switch {
	case c.hi*c.tau < 1e-4: // Y by its series in k
		x := tmax / c.tau
		rise = c.tau * x * (1 - x) / 2 * (1 + (1-2*x)/6*(c.lo+c.hi)*c.tau)
	case c.diff > c.lo:
		rise = (math.Expm1(-c.lo*tmax)/oneLo - math.Expm1(-c.hi*tmax)/oneHi) / c.diff
	default: // close constants
		rise = (c.gap(tmax) + math.Expm1(-c.hi*tmax)*c.gap(c.tau)/oneHi) / oneLo
	}
	return c.ka * math.Max(0, rise) * c.ke * c.tau
}

// infused is the concentration after t hours of an infusion of one dose an
// hour. Without absorption it is input·(1 − e^(−ke·t))/ke, with it
// input·ka·[(1 − e^(−lo·t)) − lo·G(t)]/(lo·hi).
func (c *course) infused(t float64) float64 {
	if !c.absorbed {
		return -c.input * math.Expm1(-c.ke*t) / c.ke
	}
	if c.hi*t < 1e-4 { // by its series: the difference below would cancel
		return c.scale * t * t / 2 * (1 - (c.lo+c.hi)*t/3)
	}
	// ka·ke = lo·hi, which leaves input/ke
	return c.input / c.ke * (-math.Expm1(-c.lo*t) - c.lo*c.gap(t))
}

// holdAgainst fills in the time above the target.
func (c *course) holdAgainst(p *Profile) {
	var hours, percent float64
	switch {
	case c.infusion:
		if p.Cavg > p.Target {
			percent = 100
		}
		p.PercentAboveTarget = &percent
	case math.IsInf(c.tau, 1):
		hours = c.hoursAbove(c.after(1), p)
		p.HoursAboveTarget = &hours
	default:
		hours = c.hoursAbove(c.after(math.Inf(1)), p)
		percent = math.Min(100, 100*(hours/c.tau)) // the whole interval is 100 exactly
		p.HoursAboveTarget, p.PercentAboveTarget = &hours, &percent
	}
}

// hoursAbove is the time, out of one interval or of all time after a single
// dose, in which C > target. In closed form for doses at once,
// ln(Cmax/target)/ke; otherwise by bisection of the closed curve on either side
// of its peak, down to neighbouring numbers.
func (c *course) hoursAbove(r sums, p *Profile) float64 {
	switch {
	case p.Cmax <= p.Target:
		return 0
	case p.Cmin >= p.Target:
		return c.tau
	case !c.absorbed:
		return math.Log(p.Cmax/p.Target) / c.ke
	}
	rises := c.crossing(r, p.Target, 0, p.TmaxH)
	last := c.tau
	if math.IsInf(last, 1) {
		for last = p.TmaxH + 1/c.lo; c.at(r, last) > p.Target; {
			last *= 2
		}
	}
	return c.crossing(r, p.Target, last, p.TmaxH) - rises
}

// crossing is where the curve meets the target between a time at which it is
// below and one at which it is above.
func (c *course) crossing(r sums, target, below, above float64) float64 {
	for range 200 {
		mid := below + (above-below)/2
		if mid == below || mid == above {
			break
		}
		if c.at(r, mid) > target {
			above = mid
		} else {
			below = mid
		}
	}
	return below + (above-below)/2
}

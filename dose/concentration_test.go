package dose

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// wantNear fails unless got is want to the relative tolerance (or to 1e-300).
func wantNear(t interface {
	Helper()
	Errorf(string, ...any)
}, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol*math.Abs(want)+1e-300) {
		t.Errorf("%s = %.15g, want %.15g to %g", what, got, want, tol)
	}
}

func steadyProfile(t interface {
	Helper()
	Fatalf(string, ...any)
}, k Kinetics, d Dosing, target float64) Profile {
	t.Helper()
	p, err := SteadyState(k, d, target)
	if err != nil {
		t.Fatalf("SteadyState(%+v, %+v): %v", k, d, err)
	}
	return p
}

// Kinetics of every kind: at once, absorbed fast, absorbed slower than
// eliminated, with equal constants, and with constants that differ in the ninth
// digit.
var kineticsKinds = map[string]Kinetics{
	"at once":       {HalfLifeH: 5, VolumeLPerKg: 0.8, Bioavailability: 0.7},
	"absorbed":      {HalfLifeH: 1.3, VolumeLPerKg: 0.3, Bioavailability: 0.8, AbsorptionHalfLifeH: 1. / 3},
	"flip-flop":     {HalfLifeH: 1.3, VolumeLPerKg: 0.3, AbsorptionHalfLifeH: 7},
	"equal":         {HalfLifeH: 4, VolumeLPerKg: 1.7, AbsorptionHalfLifeH: 4},
	"nearly equal":  {HalfLifeH: 4, VolumeLPerKg: 1.7, AbsorptionHalfLifeH: 4 * (1 + 3e-9)},
	"long":          {HalfLifeH: 60, VolumeLPerKg: 12, AbsorptionHalfLifeH: 0.5},
	"short, absorb": {HalfLifeH: 0.4, VolumeLPerKg: 0.2, AbsorptionHalfLifeH: 0.1},
}

// Steady state in half-lives: published-text figures.
func TestPublishedAccumulation(t *testing.T) {
	for _, tt := range []struct {
		halfLives float64
		want, tol float64
	}{
		{1, 2, 1e-15}, // textbook of pharmacology, drug accumulation: exactly 2
		// The rest follow from 1/(1 − 2^(−n)), to four printed digits.
		{0.25, 6.285, 1e-4},
		{0.5, 3.414, 1e-4},
		{2, 1.333, 5e-4},
		{3, 1.143, 5e-4},
	} {
		p := steadyProfile(t, Kinetics{HalfLifeH: 6}, Dosing{DosePerKg: 1, IntervalH: 6 * tt.halfLives}, 0)
		wantNear(t, "accumulation", p.Accumulation, tt.want, tt.tol)
		// Trough over peak 2^(−n): 0.5 and 0.25 at one and two half-lives
		// (geometric series, the same texts).
		wantNear(t, "trough over peak", p.Cmin/p.Cmax, math.Exp2(-tt.halfLives), 1e-14)
		// Loading over maintenance equals the accumulation ratio: the dose
		// that puts the first peak at the steady peak.
		first := ConcentrationAt(Kinetics{HalfLifeH: 6}, Dosing{DosePerKg: 1, Once: true}, 0)
		wantNear(t, "loading over maintenance", p.Cmax/first, p.Accumulation, 1e-14)
	}
	// 1.44·F·D·half-life/(V·τ), the rounded factor of the texts (from memory):
	// 1/ln 2.
	p := steadyProfile(t, Kinetics{HalfLifeH: 5, VolumeLPerKg: 2, Bioavailability: 0.5}, Dosing{DosePerKg: 10, IntervalH: 8}, 0)
	wantNear(t, "Cavg", p.Cavg, 1.44*0.5*10*5/(2*8), 0.005)
}

// Part of steady state reached after n half-lives, exactly 1 − 2^(−n), and
// 3.322 half-lives to 90 % (textbook: 3.32).
func TestPublishedApproachToSteadyState(t *testing.T) {
	k := Kinetics{HalfLifeH: 6, VolumeLPerKg: 0.5}
	d := Dosing{DosePerKg: 2, Infusion: true}
	p := steadyProfile(t, k, d, 0)
	for n, want := range map[float64]float64{1: 0.5, 2: 0.75, 3: 0.875, 4: 0.9375, 5: 0.96875} {
		wantNear(t, "share of steady state", ConcentrationAt(k, d, 6*n)/p.Cavg, want, 1e-14)
	}
	wantNear(t, "half-lives to 90 %", p.HoursTo90/6, 3.322, 5e-4/3.322)
	wantNear(t, "concentration then", ConcentrationAt(k, d, p.HoursTo90)/p.Cavg, 0.9, 1e-14)
}

func TestPublishedClearances(t *testing.T) {
	// Foal, enrofloxacin, 5 mg/kg IV: clearance 103.72 mL/h/kg and AUC
	// 48.54 mg·h/L, Am J Vet Res 2000;61:706. The half-life drops out.
	cl := 0.10372
	k := Kinetics{HalfLifeH: 17, VolumeLPerKg: cl * 17 / math.Ln2}
	wantNear(t, "foal AUC", steadyProfile(t, k, Dosing{DosePerKg: 5, Once: true}, 0).AUC, 48.54, 0.01)

	// Cat, fluconazole: V 1.14 L/kg, clearance 37.7 mL/h/kg, mean residence
	// time 31.0 h, Vaden 1997. Here ∫tC/∫C of the curve.
	k = Kinetics{HalfLifeH: math.Ln2 * 1.14 / 0.0377, VolumeLPerKg: 1.14}
	d := Dosing{DosePerKg: 10, Once: true}
	c := func(h float64) float64 { return ConcentrationAt(k, d, h) }
	moment := simpson(func(h float64) float64 { return h * c(h) }, 0, 1500, 20000)
	mrt := moment / simpson(c, 0, 1500, 20000)
	wantNear(t, "cat mean residence time", mrt, 31.0, 0.03)
	wantNear(t, "cat mean residence time by V/CL", mrt, 1.14/0.0377, 1e-9)
}

func simpson(f func(float64) float64, a, b float64, n int) float64 {
	h := (b - a) / float64(n)
	s := f(a) + f(b)
	for i := 1; i < n; i++ {
		s += f(a+float64(i)*h) * float64(2+2*(i%2))
	}
	return s * h / 3
}

// rungeKutta carries depot and blood (amounts per kg) over span hours by
// steps of fourth order: depot' = −ka·depot, blood' = ka·depot + rate − ke·blood.
func rungeKutta(depot, blood, ka, ke, rate, span float64, steps int) (float64, float64) {
	slope := func(a, b float64) (float64, float64) { return -ka * a, ka*a + rate - ke*b }
	h := span / float64(steps)
	for range steps {
		a1, b1 := slope(depot, blood)
		a2, b2 := slope(depot+h/2*a1, blood+h/2*b1)
		a3, b3 := slope(depot+h/2*a2, blood+h/2*b2)
		a4, b4 := slope(depot+h*a3, blood+h*b3)
		depot += h / 6 * (a1 + 2*a2 + 2*a3 + a4)
		blood += h / 6 * (b1 + 2*b2 + 2*b3 + b4)
	}
	return depot, blood
}

// The closed forms against numerical integration of the differential
// equations: every kind, single, repeated and infused.
func TestConcentrationAgainstRungeKutta(t *testing.T) {
	for name, k := range kineticsKinds {
		ke, ka, f := math.Ln2/k.HalfLifeH, 0.0, k.Bioavailability
		if k.AbsorptionHalfLifeH > 0 {
			ka = math.Ln2 / k.AbsorptionHalfLifeH
		}
		if f == 0 {
			f = 1
		}
		for _, d := range []Dosing{
			{DosePerKg: 10, IntervalH: 12}, {DosePerKg: 10, IntervalH: 1.5},
			{DosePerKg: 10, Once: true}, {DosePerKg: 3, Infusion: true},
		} {
			var depot, blood, rate float64
			give := func() {
				if ka > 0 {
					depot += f * d.DosePerKg
				} else {
					blood += f * d.DosePerKg
				}
			}
			if !d.Infusion {
				give()
			} else if ka == 0 {
				rate = f * d.DosePerKg
			}
			const legs = 8 // pieces of each interval
			leg := 12.0 / legs
			if d.IntervalH > 0 {
				leg = d.IntervalH / legs
			}
			for i := 1; i <= 7*legs; i++ {
				if d.Infusion && ka > 0 {
					// Into the depot at a constant rate: depot = rate/ka·(1 − e^(−ka·t)),
					// stepped here as its own equation.
					depot, blood = infuseDepot(depot, blood, ka, ke, f*d.DosePerKg, leg, 400)
				} else {
					depot, blood = rungeKutta(depot, blood, ka, ke, rate, leg, 400)
				}
				at := float64(i) * leg
				if !d.Infusion && !d.Once && i%legs == 0 {
					give()
				}
				wantNear(t, name, ConcentrationAt(k, d, at), blood/k.VolumeLPerKg, 1e-7)
			}
		}
	}
}

func infuseDepot(depot, blood, ka, ke, rate, span float64, steps int) (float64, float64) {
	// Shift the depot by its own steady state, rate/ka: what is left decays
	// freely, and the blood then has a constant input of that rate.
	shifted, b := rungeKutta(depot-rate/ka, blood, ka, ke, rate, span, steps)
	return shifted + rate/ka, b
}

// The steady state against integration from the first dose until the state no
// longer changes, with extremes, area and time above a target read off the
// integrated curve.
func TestSteadyStateAgainstRungeKutta(t *testing.T) {
	for name, k := range kineticsKinds {
		ke, ka, f := math.Ln2/k.HalfLifeH, 0.0, k.Bioavailability
		if k.AbsorptionHalfLifeH > 0 {
			ka = math.Ln2 / k.AbsorptionHalfLifeH
		}
		if f == 0 {
			f = 1
		}
		for _, tau := range []float64{2, 12, 24} {
			d := Dosing{DosePerKg: 10, IntervalH: tau}
			var depot, blood float64
			give := func() {
				if ka > 0 {
					depot += f * d.DosePerKg
				} else {
					blood += f * d.DosePerKg
				}
			}
			for range 1 + int(40*math.Max(k.HalfLifeH, k.AbsorptionHalfLifeH)/tau) {
				give()
				depot, blood = rungeKutta(depot, blood, ka, ke, 0, tau, 600)
			}
			give()
			const n = 20000
			curve := make([]float64, n+1)
			curve[0] = blood / k.VolumeLPerKg
			for i := 1; i <= n; i++ {
				depot, blood = rungeKutta(depot, blood, ka, ke, 0, tau/n, 1)
				curve[i] = blood / k.VolumeLPerKg
			}
			top, low, area, at := 0.0, math.Inf(1), 0.0, 0
			for i, c := range curve {
				if c > top {
					top, at = c, i
				}
				low = math.Min(low, c)
				w := 2.0 + 2*float64(i%2)
				if i == 0 || i == n {
					w = 1
				}
				area += w * c * tau / n / 3
			}
			if 0 < at && at < n { // the peak lies between points: a parabola through three
				l, m, r := curve[at-1], curve[at], curve[at+1]
				top = m + (r-l)*(r-l)/(8*(2*m-l-r))
			}
			target := low + 0.4*(top-low)
			above := 0
			for _, c := range curve {
				if c > target {
					above++
				}
			}

			p := steadyProfile(t, k, d, target)
			wantNear(t, name+" Cmax", p.Cmax, top, 1e-6)
			wantNear(t, name+" Cmin", p.Cmin, low, 1e-6)
			wantNear(t, name+" AUC", p.AUC, area, 1e-6)
			wantNear(t, name+" Cavg", p.Cavg, area/tau, 1e-6)
			wantNear(t, name+" fluctuation", p.Fluctuation, (top-low)*tau/area, 1e-6)
			if math.Abs(p.TmaxH-float64(at)*tau/n) > 1.01*tau/n {
				t.Errorf("%s: tmax %g, integrated %g", name, p.TmaxH, float64(at)*tau/n)
			}
			if got, want := *p.PercentAboveTarget, 100*float64(above)/n; math.Abs(got-want) > 0.02 {
				t.Errorf("%s every %g h: %g %% above the target, integrated %g %%", name, tau, got, want)
			}
		}
	}
}

func drawKinetics(t *rapid.T) Kinetics {
	k := Kinetics{
		HalfLifeH:       math.Exp(rapid.Float64Range(math.Log(0.2), math.Log(80)).Draw(t, "ln half-life")),
		VolumeLPerKg:    rapid.Float64Range(0.05, 20).Draw(t, "volume"),
		Bioavailability: rapid.Float64Range(0.05, 1).Draw(t, "F"),
	}
	switch rapid.IntRange(0, 2).Draw(t, "kind") {
	case 1:
		k.AbsorptionHalfLifeH = math.Exp(rapid.Float64Range(math.Log(0.05), math.Log(80)).Draw(t, "ln absorption"))
	case 2: // at and around equal constants
		k.AbsorptionHalfLifeH = k.HalfLifeH * (1 + rapid.SampledFrom([]float64{0, 1e-15, -1e-12, 1e-9, -1e-6, 1e-3, 0.1}).Draw(t, "apart"))
	}
	return k
}

// However the doses follow each other, the curve is the sum of the curves of
// single doses.
func TestSuperposition(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := drawKinetics(t)
		d := Dosing{DosePerKg: 7, IntervalH: rapid.Float64Range(0.1, 50).Draw(t, "tau")}
		n := rapid.IntRange(1, 60).Draw(t, "doses")
		since := rapid.Float64Range(0.001, 0.999).Draw(t, "phase") * d.IntervalH
		sum := 0.0
		for j := range n {
			sum += ConcentrationAt(k, Dosing{DosePerKg: 7, Once: true}, float64(j)*d.IntervalH+since)
		}
		wantNear(t, "sum of single doses", ConcentrationAt(k, d, float64(n-1)*d.IntervalH+since), sum, 1e-9)
	})
}

// After many doses the running curve is the steady state that SteadyState
// computes by another formula.
func TestManyDosesComeToSteadyState(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := drawKinetics(t)
		d := Dosing{DosePerKg: 7, IntervalH: rapid.Float64Range(0.1, 50).Draw(t, "tau")}
		p := steadyProfile(t, k, d, 0)
		doses := math.Ceil(60 * math.Max(k.HalfLifeH, k.AbsorptionHalfLifeH) / d.IntervalH)
		last := doses * d.IntervalH
		wantNear(t, "Cmax", ConcentrationAt(k, d, last+p.TmaxH), p.Cmax, 1e-7)
		points := Sample(k, d, last, last+d.IntervalH, 2)
		wantNear(t, "trough", points[0].C, p.Cmin, 1e-9)
	})
}

// The area of an interval at steady state is the area of a single dose, and
// the average is F·D/(CL·τ), for every kind of input. The areas are integrated
// from the curve.
func TestAreaAndAverage(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := drawKinetics(t)
		tau := rapid.Float64Range(0.3, 50).Draw(t, "tau")
		d := Dosing{DosePerKg: 7, IntervalH: tau}
		p := steadyProfile(t, k, d, 0)
		slow := math.Max(k.HalfLifeH, k.AbsorptionHalfLifeH)
		quick := k.HalfLifeH
		if k.AbsorptionHalfLifeH > 0 {
			quick = math.Min(quick, k.AbsorptionHalfLifeH)
		}
		last := math.Ceil(60*slow/tau) * tau
		pieces := 2 * (50 + int(20*tau/quick))
		// The jump of a dose at once stands at the ends: stay inside by a hair.
		hair := 1e-8 * tau
		area := simpson(func(h float64) float64 { return ConcentrationAt(k, d, h) }, last+hair, last+tau-hair, pieces)
		cl := math.Ln2 / k.HalfLifeH * k.VolumeLPerKg
		wantNear(t, "AUC at steady state", area, k.Bioavailability*7/cl, 1e-5)
		wantNear(t, "AUC of the profile", p.AUC, k.Bioavailability*7/cl, 1e-13)
		wantNear(t, "Cavg", p.Cavg, area/tau, 1e-5)
		wantNear(t, "AUC to infinity", AUCUntil(k, Dosing{DosePerKg: 7, Once: true}, math.Inf(1)), p.AUC, 1e-14)

		once := Dosing{DosePerKg: 7, Once: true}
		part := simpson(func(h float64) float64 { return ConcentrationAt(k, once, h) }, 0, tau, pieces)
		wantNear(t, "AUC of a dose to tau", AUCUntil(k, once, tau), part, 1e-5)

		in := steadyProfile(t, k, Dosing{DosePerKg: 7 / tau, Infusion: true}, 0)
		wantNear(t, "an infusion of the same daily amount", in.Cavg, p.Cavg, 1e-13)
		wantNear(t, "the infusion, late", ConcentrationAt(k, Dosing{DosePerKg: 7 / tau, Infusion: true}, 80*slow), p.Cavg, 1e-13)
	})
}

// No jump where the constants meet: a difference of x in ka moves a curve by
// about x. The limit itself is D·k·t·e^(−kt)/V.
func TestEqualConstants(t *testing.T) {
	const k0 = math.Ln2 / 4
	for _, h := range []float64{0.01, 1, 5.8, 30, 200} {
		got := ConcentrationAt(Kinetics{HalfLifeH: 4, VolumeLPerKg: 2, AbsorptionHalfLifeH: 4}, Dosing{DosePerKg: 6, Once: true}, h)
		wantNear(t, "limit form", got, 6*k0*h*math.Exp(-k0*h)/2, 1e-14)
	}
	for _, tau := range []float64{0.5, 8, 60} {
		d := Dosing{DosePerKg: 6, IntervalH: tau}
		even := steadyProfile(t, Kinetics{HalfLifeH: 4, VolumeLPerKg: 2, AbsorptionHalfLifeH: 4}, d, 1)
		for _, x := range []float64{1e-16, 1e-14, 1e-12, 1e-10, 1e-8, 1e-6, 1e-4} {
			for _, sign := range []float64{1, -1} {
				k := Kinetics{HalfLifeH: 4, VolumeLPerKg: 2, AbsorptionHalfLifeH: 4 * (1 + sign*x)}
				p := steadyProfile(t, k, d, 1)
				tol := 2*x + 1e-12
				wantNear(t, "Cmax", p.Cmax, even.Cmax, tol)
				wantNear(t, "Cmin", p.Cmin, even.Cmin, tau/4*tol)
				wantNear(t, "tmax", p.TmaxH, even.TmaxH, tol)
				wantNear(t, "fluctuation", p.Fluctuation, even.Fluctuation, 10*tol)
				wantNear(t, "percent above", *p.PercentAboveTarget, *even.PercentAboveTarget, 100*tol)
				wantNear(t, "running", ConcentrationAt(k, d, 3.3*tau), ConcentrationAt(Kinetics{HalfLifeH: 4, VolumeLPerKg: 2, AbsorptionHalfLifeH: 4}, d, 3.3*tau), tau*tol)
			}
		}
	}
}

// The absorbed curve has no memory of which constant is which but for its
// height: swapping ka and ke leaves the shape, times ke/ka.
func TestFlipFlop(t *testing.T) {
	d := Dosing{DosePerKg: 5, IntervalH: 12}
	usual := Kinetics{HalfLifeH: 9, VolumeLPerKg: 1, AbsorptionHalfLifeH: 2}
	flipped := Kinetics{HalfLifeH: 2, VolumeLPerKg: 1, AbsorptionHalfLifeH: 9}
	a, b := steadyProfile(t, usual, d, 0), steadyProfile(t, flipped, d, 0)
	if a.FlipFlop || !b.FlipFlop {
		t.Errorf("FlipFlop = %v and %v, want false and true", a.FlipFlop, b.FlipFlop)
	}
	wantNear(t, "height", a.Cmax/b.Cmax, 9.0/2, 1e-13)
	wantNear(t, "tmax", a.TmaxH, b.TmaxH, 1e-13)
	wantNear(t, "accumulation follows the slower constant", b.Accumulation, 1/(1-math.Exp2(-12.0/9)), 1e-14)
	if a.DosesTo90 != b.DosesTo90 {
		t.Errorf("doses to 90 %%: %d and %d, want the same", a.DosesTo90, b.DosesTo90)
	}
	even := steadyProfile(t, Kinetics{HalfLifeH: 2, AbsorptionHalfLifeH: 2}, d, 0)
	if even.FlipFlop || steadyProfile(t, Kinetics{HalfLifeH: 2}, d, 0).FlipFlop {
		t.Error("flip-flop without slow absorption")
	}
}

func TestAccumulationIsDetectable(t *testing.T) {
	for _, tt := range []struct {
		halfLives float64 // of one interval
		high      bool
	}{{1, false}, {0.075, false}, {0.073, true}, {0.01, true}} {
		p := steadyProfile(t, Kinetics{HalfLifeH: 10}, Dosing{DosePerKg: 1, IntervalH: 10 * tt.halfLives}, 0)
		if got := p.Accumulation > HighAccumulation; got != tt.high {
			t.Errorf("interval of %g half-lives: accumulation %g", tt.halfLives, p.Accumulation)
		}
	}
}

func TestDosesTo90(t *testing.T) {
	for _, tt := range []struct {
		name          string
		halfLife, tau float64
		want          int
	}{
		{"one half-life: 3.32, so 4", 6, 6, 4},
		{"long interval: never under 1", 1, 24, 1},
		{"a third of ln 10: 3, not 4 for noise", 7.3, 7.3 * math.Log2(10) / 3, 3},
		{"a seventh, likewise", 0.1, 0.1 * math.Log2(10) / 7, 7},
		{"just under a third: 4", 7.3, 7.3 * math.Log2(10) / 3 * (1 - 1e-6), 4},
		{"absurdly short", 1e9, 1e-9, math.MaxInt32},
	} {
		k, d := Kinetics{HalfLifeH: tt.halfLife}, Dosing{DosePerKg: 1, IntervalH: tt.tau}
		p := steadyProfile(t, k, d, 0)
		if p.DosesTo90 != tt.want {
			t.Errorf("%s: %d doses, want %d", tt.name, p.DosesTo90, tt.want)
		}
		if tt.want > 100 {
			continue
		}
		// What the count means: the trough after so many doses, and not after
		// one less, has reached 90 %.
		trough := func(n int) float64 {
			sum := 0.0
			for j := 1; j <= n; j++ {
				sum += ConcentrationAt(k, Dosing{DosePerKg: 1, Once: true}, float64(j)*tt.tau)
			}
			return sum / p.Cmin
		}
		if trough(tt.want) < 0.9*(1-1e-8) || trough(tt.want-1) >= 0.9 {
			t.Errorf("%s: trough at %g after %d doses, %g after one less", tt.name, trough(tt.want), tt.want, trough(tt.want-1))
		}
	}
}

// Intervals from a trillionth to a million half-lives. The references are the
// leading terms of the series in kτ, or the single dose.
func TestTinyAndHugeIntervals(t *testing.T) {
	for _, tau := range []float64{1e-12, 1e-9, 1e-6, 1e-5} {
		d := Dosing{DosePerKg: tau, IntervalH: tau} // the daily amount stays
		for _, ratio := range []float64{0, 1e-6, 0.5, 1 - 1e-9, 1, 1 + 1e-7, 3, 50} {
			k := Kinetics{HalfLifeH: math.Ln2, VolumeLPerKg: 1} // ke = 1
			if ratio > 0 {
				k.AbsorptionHalfLifeH = math.Ln2 / ratio // ka = ratio
			}
			p := steadyProfile(t, k, d, 0)
			wantNear(t, "Cavg", p.Cavg, 1, 1e-13)
			wantNear(t, "Cmax", p.Cmax, 1, 2*tau+1e-12)
			wantNear(t, "Cmin", p.Cmin, 1, 2*tau+1e-12)
			if ratio == 0 {
				wantNear(t, "fluctuation", p.Fluctuation, tau, 1e-12)
				continue
			}
			// C rises from the trough as a parabola of height ka·ke·τ²/8.
			wantNear(t, "fluctuation", p.Fluctuation, ratio*tau*tau/8, (1+ratio)*tau+1e-9)
			wantNear(t, "tmax", p.TmaxH, tau/2, (1+ratio)*tau+1e-12)
			// The first doses pile up in the depot: n doses of τ over a span
			// in which nothing leaves it give ka·τ·Σ jτ.
			for _, n := range []float64{1, 2, 10} {
				got := ConcentrationAt(k, d, (n-0.5)*tau)
				wantNear(t, "running sum", got, ratio*tau*tau*n*n/2, 2*n*(1+ratio)*tau+1e-9)
			}
		}
	}
	for _, ratio := range []float64{0.01, 1, 4} {
		k := Kinetics{HalfLifeH: 1, VolumeLPerKg: 1, AbsorptionHalfLifeH: 1 / ratio}
		d := Dosing{DosePerKg: 1, IntervalH: 1e6}
		p, once := steadyProfile(t, k, d, 0.01), steadyProfile(t, k, Dosing{DosePerKg: 1, Once: true}, 0.01)
		wantNear(t, "Cmax", p.Cmax, once.Cmax, 1e-13)
		wantNear(t, "tmax", p.TmaxH, once.TmaxH, 1e-12)
		wantNear(t, "hours above", *p.HoursAboveTarget, *once.HoursAboveTarget, 1e-10)
		if p.Cmin != 0 {
			t.Errorf("trough %g after a million half-lives", p.Cmin)
		}
	}
}

// Doses that follow each other within a tiny part of the half-life still add up
// to the last digits: each single curve is a product, so that their sum is a
// reference without cancellation.
func TestSuperpositionAtTinyIntervals(t *testing.T) {
	for _, tau := range []float64{1e-9, 1e-7, 1e-6, 4e-6, 3e-5, 1e-3} {
		for _, absorption := range []float64{0.02, 0.99999, 1, 1.5, 30} {
			k := Kinetics{HalfLifeH: 1, VolumeLPerKg: 1, AbsorptionHalfLifeH: absorption}
			for _, n := range []int{1, 2, 3, 19} {
				sum := 0.0
				for j := range n {
					sum += ConcentrationAt(k, Dosing{DosePerKg: 1, Once: true}, (float64(j)+0.5)*tau)
				}
				got := ConcentrationAt(k, Dosing{DosePerKg: 1, IntervalH: tau}, (float64(n)-0.5)*tau)
				wantNear(t, "sum of single doses", got, sum, 1e-11)
			}
		}
	}
}

// Elimination that is nothing beside absorption: with lo → 0 the curve within
// an interval is absorption against a steady loss,
// (Cmax − Cmin)/Cavg = ke·τ·[(1 − e^(−ka·t))/(1 − e^(−ka·τ)) − t/τ] at its
// largest, t = ln(ka·τ/(1 − e^(−ka·τ)))/ka.
func TestVerySlowElimination(t *testing.T) {
	const ka, ke, tau = math.Ln2, math.Ln2 / 1e12, 24.0
	p := steadyProfile(t, Kinetics{HalfLifeH: 1e12, VolumeLPerKg: 1, AbsorptionHalfLifeH: 1}, Dosing{DosePerKg: 1, IntervalH: tau}, 0)
	all := 1 - math.Exp2(-tau)
	at := math.Log(ka*tau/all) / ka
	wantNear(t, "tmax", p.TmaxH, at, 1e-9)
	wantNear(t, "fluctuation", p.Fluctuation, ke*tau*((1-math.Exp2(-at))/all-at/tau), 1e-9)
}

// At tmax the curve is level, and the peak of steady state comes no later than
// a single dose's and never in the second half of the interval.
func TestPeakTime(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := drawKinetics(t)
		if k.AbsorptionHalfLifeH == 0 {
			k.AbsorptionHalfLifeH = 1
		}
		d := Dosing{DosePerKg: 7, IntervalH: rapid.Float64Range(0.01, 90).Draw(t, "tau")}
		p, once := steadyProfile(t, k, d, 0), steadyProfile(t, k, Dosing{DosePerKg: 7, Once: true}, 0)
		if p.TmaxH > once.TmaxH*(1+1e-12) || p.TmaxH > d.IntervalH/2 {
			t.Errorf("tmax %g h, of a single dose %g h, interval %g h", p.TmaxH, once.TmaxH, d.IntervalH)
		}
		if !(p.Cmin <= p.Cavg && p.Cavg <= p.Cmax) {
			t.Errorf("Cmin %g, Cavg %g, Cmax %g are out of order", p.Cmin, p.Cavg, p.Cmax)
		}
		wantNear(t, "fluctuation as defined", p.Fluctuation*p.Cavg+p.Cmin, p.Cmax, 1e-11)
		// The single peak: ln(ka/ke)/(ka − ke), 1/k at the limit.
		ka, ke := math.Ln2/k.AbsorptionHalfLifeH, math.Ln2/k.HalfLifeH
		if math.Abs(ka-ke) > 0.05*ke {
			wantNear(t, "single tmax", once.TmaxH, math.Log(ka/ke)/(ka-ke), 1e-12)
		}
		for _, side := range []float64{0.97, 1.03} {
			if c := ConcentrationAt(k, Dosing{DosePerKg: 7, Once: true}, once.TmaxH*side); c >= once.Cmax {
				t.Errorf("%g at %g of tmax, Cmax %g", c, side, once.Cmax)
			}
		}
	})
}

func TestTimeAboveTarget(t *testing.T) {
	iv := Kinetics{HalfLifeH: 2, VolumeLPerKg: 1}
	slow := Kinetics{HalfLifeH: 2, VolumeLPerKg: 1, AbsorptionHalfLifeH: 1}
	every8 := Dosing{DosePerKg: 15, IntervalH: 8} // IV: peak 16, trough 1
	for _, tt := range []struct {
		name    string
		k       Kinetics
		d       Dosing
		target  float64
		percent float64 // −1: none
		hours   float64
	}{
		// By hand: 16, 8, 4, 2, 1 at 0, 2, 4, 6, 8 h.
		{"half the interval", iv, every8, 4, 50, 4},
		{"a quarter", iv, every8, 8, 25, 2},
		{"at the trough, always", iv, every8, 1, 100, 8},
		{"below the trough, always", iv, every8, 0.3, 100, 8},
		{"at the peak, never", iv, every8, 16, 0, 0},
		{"above the peak, never", iv, every8, 40, 0, 0},
		{"no target", iv, every8, 0, -1, -1},
		{"no volume", Kinetics{HalfLifeH: 2}, every8, 4, -1, -1},
		{"a single dose of 16: 4 after two half-lives", iv, Dosing{DosePerKg: 16, Once: true}, 4, -1, 4},
		{"a single dose that is too small", iv, Dosing{DosePerKg: 3, Once: true}, 4, -1, 0},
		// Absorbed, ka = 2ke: C = 2D(x − x²) with x = e^(−ke·t), so 3/8 of D is
		// passed at x = 3/4 and x = 1/4, 2·log2(3) h apart.
		{"a single dose, absorbed", slow, Dosing{DosePerKg: 16, Once: true}, 6, -1, 2 * math.Log2(3)},
		{"an absorbed dose that is too small", slow, Dosing{DosePerKg: 16, Once: true}, 8.01, -1, 0},
		{"infusion above", iv, Dosing{DosePerKg: 1, Infusion: true}, 2.88, 100, -1},
		{"infusion below", iv, Dosing{DosePerKg: 1, Infusion: true}, 2.89, 0, -1},
	} {
		p := steadyProfile(t, tt.k, tt.d, tt.target)
		check := func(what string, got *float64, want float64) {
			switch {
			case got == nil && want < 0:
			case got == nil || want < 0:
				t.Errorf("%s: %s is %v, want %g", tt.name, what, got, want)
			default:
				wantNear(t, tt.name+" "+what, *got, want, 1e-13)
			}
		}
		check("percent", p.PercentAboveTarget, tt.percent)
		check("hours", p.HoursAboveTarget, tt.hours)
	}
}

// The higher the target the shorter the time above it, within 0 to 100 %, and
// at both crossings of an absorbed curve the concentration is the target.
func TestTimeAboveTargetProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := drawKinetics(t)
		d := Dosing{DosePerKg: 7, IntervalH: rapid.Float64Range(0.1, 50).Draw(t, "tau")}
		p := steadyProfile(t, k, d, 0)
		share := rapid.Float64Range(0.01, 1.2).Draw(t, "share of Cmax")
		lower, upper := steadyProfile(t, k, d, share*p.Cmax), steadyProfile(t, k, d, 1.1*share*p.Cmax)
		l, u := *lower.PercentAboveTarget, *upper.PercentAboveTarget
		if !(0 <= u && u <= l && l <= 100) {
			t.Errorf("%g %% above the lower target, %g %% above the higher", l, u)
		}
		if k.AbsorptionHalfLifeH == 0 || l <= 0 || l >= 100 {
			return
		}
		c, err := newCourse(k, d)
		if err != nil {
			t.Fatal(err)
		}
		r := c.after(math.Inf(1))
		rises := c.crossing(r, share*p.Cmax, 0, p.TmaxH)
		wantNear(t, "concentration where it rises", c.at(r, rises), share*p.Cmax, 1e-11)
		wantNear(t, "concentration where it falls", c.at(r, rises+*lower.HoursAboveTarget), share*p.Cmax, 1e-11)
	})
}

func TestUnknownVolumeGivesRatiosOnly(t *testing.T) {
	d := Dosing{DosePerKg: 8, IntervalH: 12}
	with := steadyProfile(t, Kinetics{HalfLifeH: 5, VolumeLPerKg: 3, AbsorptionHalfLifeH: 1}, d, 0)
	without := steadyProfile(t, Kinetics{HalfLifeH: 5, AbsorptionHalfLifeH: 1}, d, 0)
	wantNear(t, "Cmax over Cavg", without.Cmax/without.Cavg, with.Cmax/with.Cavg, 1e-14)
	wantNear(t, "Cmax as of 1 L/kg", without.Cmax, 3*with.Cmax, 1e-14)
	wantNear(t, "fluctuation", without.Fluctuation, with.Fluctuation, 1e-14)
}

func TestSample(t *testing.T) {
	for name, k := range kineticsKinds {
		d := Dosing{DosePerKg: 10, IntervalH: 12}
		points := Sample(k, d, 0, 60, 100)
		if len(points) < 100 || points[0] != (CurvePoint{0, 0}) || points[len(points)-1].H != 60 {
			t.Fatalf("%s: %d points from %v to %v", name, len(points), points[0], points[len(points)-1])
		}
		pairs := map[float64]int{}
		for i, p := range points {
			if i > 0 && p.H < points[i-1].H {
				t.Errorf("%s: out of order at %g h", name, p.H)
			}
			pairs[p.H]++
			if i > 0 && p.H == points[i-1].H {
				// Doses at once jump by F·D/V, absorbed ones do not jump.
				jump := k.Bioavailability * 10 / k.VolumeLPerKg
				if k.AbsorptionHalfLifeH > 0 {
					jump = 0
				}
				if math.Abs(p.C-points[i-1].C-jump) > 1e-9*(1+p.C) {
					t.Errorf("%s: jump at %g h from %g to %g", name, p.H, points[i-1].C, p.C)
				}
			} else if p.H > 0 && i+1 < len(points) && points[i+1].H != p.H {
				wantNear(t, name, p.C, ConcentrationAt(k, d, p.H), 1e-12)
			}
		}
		for h, n := range pairs {
			atDose := math.Mod(h, 12) == 0
			if atDose != (n == 2) || n > 2 {
				t.Errorf("%s: %d points at %g h", name, n, h)
			}
		}
		for h := 0.0; h <= 60; h += 12 {
			if pairs[h] != 2 {
				t.Errorf("%s: %d points at the dose at %g h", name, pairs[h], h)
			}
		}
	}
}

// At steady state every peak of the sampled curve is Cmax and every trough
// Cmin, wherever the grid falls; 0.1 h intervals are full of binary noise.
func TestSampledPeaksAreEqual(t *testing.T) {
	for _, k := range []Kinetics{
		{HalfLifeH: 0.1, VolumeLPerKg: 1}, {HalfLifeH: 0.1, VolumeLPerKg: 1, AbsorptionHalfLifeH: 0.02},
	} {
		for _, tau := range []float64{0.1, 0.3, 0.7} {
			d := Dosing{DosePerKg: 1, IntervalH: tau}
			p := steadyProfile(t, k, d, 0)
			for first := 60.0; first < 70; first++ {
				for _, n := range []int{2, 7} {
					top, low := 0.0, math.Inf(1)
					for _, pt := range Sample(k, d, first*tau, (first+1)*tau, n) {
						top, low = math.Max(top, pt.C), math.Min(low, pt.C)
					}
					wantNear(t, "sampled peak", top, p.Cmax, 1e-9)
					wantNear(t, "sampled trough", low, p.Cmin, 1e-9)
				}
			}
		}
	}
}

func TestSampleOfOneDoseAndOfInfusion(t *testing.T) {
	k := Kinetics{HalfLifeH: 3, VolumeLPerKg: 1}
	once := Sample(k, Dosing{DosePerKg: 8, Once: true}, 0, 6, 3)
	want := []CurvePoint{{0, 0}, {0, 8}, {3, 4}, {6, 2}}
	infused := Sample(k, Dosing{DosePerKg: math.Ln2 / 3, Infusion: true}, 0, 6, 3)
	wantInfused := []CurvePoint{{0, 0}, {3, 0.5}, {6, 0.75}}
	for _, tt := range []struct{ got, want []CurvePoint }{{once, want}, {infused, wantInfused}} {
		if len(tt.got) != len(tt.want) {
			t.Fatalf("got %v, want %v", tt.got, tt.want)
		}
		for i := range tt.want {
			wantNear(t, "H", tt.got[i].H, tt.want[i].H, 1e-15)
			wantNear(t, "C", tt.got[i].C, tt.want[i].C, 1e-14)
		}
	}
	// The span begins and ends where it was told to, to the last bit.
	for i := 1; i < 60; i++ {
		from := 0.07 * float64(i)
		for _, to := range []float64{from + 1.7, 17.3, 24, 36} {
			for _, d := range []Dosing{{DosePerKg: 8, Once: true}, {DosePerKg: 1, Infusion: true}, {DosePerKg: 1, IntervalH: 0.7}} {
				if points := Sample(k, d, from, to, 50); points[len(points)-1].H != to || points[0].H != from {
					t.Errorf("from %g to %g, asked for %g to %g", points[0].H, points[len(points)-1].H, from, to)
				}
			}
		}
	}
	if later := Sample(k, Dosing{DosePerKg: 8, Once: true}, 3, 6, 2); len(later) != 2 || math.Abs(later[0].C-4) > 1e-12 {
		t.Errorf("from 3 h: %v", later)
	}
	if many := Sample(k, Dosing{DosePerKg: 8, IntervalH: 1e-3}, 0, 1000, 11); len(many) != 11 {
		t.Errorf("%d points for a million doses, want the even 11", len(many))
	}
	for _, bad := range [][]CurvePoint{
		Sample(Kinetics{}, Dosing{DosePerKg: 8, Once: true}, 0, 6, 3),
		Sample(k, Dosing{DosePerKg: 8, Once: true}, 6, 6, 3),
		Sample(k, Dosing{DosePerKg: 8, Once: true}, -1, 6, 3),
		Sample(k, Dosing{DosePerKg: 8, Once: true}, 0, math.Inf(1), 3),
		Sample(k, Dosing{DosePerKg: 8, Once: true}, 0, 6, 1),
	} {
		if bad != nil {
			t.Errorf("got %v, want nil", bad)
		}
	}
}

func TestConcentrationBeforeAndAtDoses(t *testing.T) {
	k, d := Kinetics{HalfLifeH: 12, VolumeLPerKg: 1}, Dosing{DosePerKg: 4, IntervalH: 12}
	for h, want := range map[float64]float64{-1: 0, 0: 4, 12: 6, 24: 7, 36: 7.5} { // 4·(1 + 1/2 + 1/4 …)
		wantNear(t, "at a dose", ConcentrationAt(k, d, h), want, 1e-14)
	}
	// The third dose of 0.1 h intervals is due at 0.1+0.1+0.1, which is not 0.3.
	d.IntervalH = 0.1
	if a, b := ConcentrationAt(k, d, 0.3), ConcentrationAt(k, d, 0.1+0.1+0.1); math.Abs(a-b) > 1e-12 || a < 15 {
		t.Errorf("at the fourth dose %g and %g", a, b)
	}
	if c := ConcentrationAt(k, d, math.Inf(1)); !math.IsNaN(c) {
		t.Errorf("at infinity %g, want NaN", c)
	}
	if c := AUCUntil(k, Dosing{DosePerKg: 1, Infusion: true}, 1); !math.IsNaN(c) {
		t.Errorf("AUC of a dose of an infusion %g, want NaN", c)
	}
}

func TestKineticsErrors(t *testing.T) {
	k, d := Kinetics{HalfLifeH: 5, VolumeLPerKg: 1}, Dosing{DosePerKg: 1, IntervalH: 12}
	if _, err := SteadyState(k, d, 0); err != nil {
		t.Fatal(err)
	}
	nan, inf := math.NaN(), math.Inf(1)
	for _, bad := range []func(k *Kinetics, d *Dosing, target *float64){
		func(k *Kinetics, d *Dosing, _ *float64) { k.HalfLifeH = 0 },
		func(k *Kinetics, d *Dosing, _ *float64) { k.HalfLifeH = -1 },
		func(k *Kinetics, d *Dosing, _ *float64) { k.HalfLifeH = nan },
		func(k *Kinetics, d *Dosing, _ *float64) { k.HalfLifeH = inf },
		func(k *Kinetics, d *Dosing, _ *float64) { k.HalfLifeH = 5e-324 },
		func(k *Kinetics, d *Dosing, _ *float64) { k.VolumeLPerKg = -1 },
		func(k *Kinetics, d *Dosing, _ *float64) { k.VolumeLPerKg = nan },
		func(k *Kinetics, d *Dosing, _ *float64) { k.Bioavailability = 1.01 },
		func(k *Kinetics, d *Dosing, _ *float64) { k.Bioavailability = -0.1 },
		func(k *Kinetics, d *Dosing, _ *float64) { k.AbsorptionHalfLifeH = -1 },
		func(k *Kinetics, d *Dosing, _ *float64) { k.AbsorptionHalfLifeH = inf },
		func(k *Kinetics, d *Dosing, _ *float64) { d.DosePerKg = 0 },
		func(k *Kinetics, d *Dosing, _ *float64) { d.DosePerKg = nan },
		func(k *Kinetics, d *Dosing, _ *float64) { d.IntervalH = 0 },
		func(k *Kinetics, d *Dosing, _ *float64) { d.IntervalH = inf },
		func(k *Kinetics, d *Dosing, _ *float64) { d.Once, d.Infusion = true, true },
		func(k *Kinetics, d *Dosing, _ *float64) { d.DosePerKg, k.HalfLifeH = 1e300, 1e300 },
		func(_ *Kinetics, _ *Dosing, target *float64) { *target = -1 },
		func(_ *Kinetics, _ *Dosing, target *float64) { *target = nan },
	} {
		k, d, target := k, d, 1.0
		bad(&k, &d, &target)
		if p, err := SteadyState(k, d, target); err == nil {
			t.Errorf("SteadyState(%+v, %+v, %g) = %+v, want an error", k, d, target, p)
		}
	}
	if c := ConcentrationAt(Kinetics{}, d, 1); !math.IsNaN(c) {
		t.Errorf("ConcentrationAt without a half-life = %g, want NaN", c)
	}
}

package dose

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tayra/metabolic"
)

// caseOf is a small case in memory: a model and a patient, everything else by
// default.
func caseOf(patient, mass, model, modelMass, dose, interval string) *CaseInput {
	return &CaseInput{
		Date:    E("2026-11-30"),
		Patient: PatientInput{Species: E(patient), Mass: E(mass)},
		Drug:    DrugInput{Name: E("examplicillin")},
		Models: []ModelInput{{Species: E(model), Mass: E(modelMass), Dose: E(dose), Interval: E(interval),
			Source: E("invented for this test")}},
	}
}

// checked reads a case that must be right.
func checked(t interface {
	Helper()
	Fatalf(string, ...any)
}, in *CaseInput) *Case {
	t.Helper()
	c, err := in.Check()
	if err != nil {
		t.Fatalf("Check: %v", err)
	}
	return c
}

func draftOf(t interface {
	Helper()
	Fatalf(string, ...any)
}, in *CaseInput) *Worksheet {
	t.Helper()
	w, err := Draft(checked(t, in))
	if err != nil {
		t.Fatalf("Draft: %v", err)
	}
	return w
}

func has(w *Worksheet, slug string) *Caution {
	for i := range w.Cautions {
		if w.Cautions[i].Slug == slug {
			return &w.Cautions[i]
		}
	}
	return nil
}

func relative(got, want float64) float64 { return math.Abs(got/want - 1) }

// The anteater by hand, common practice, no source for the dose: 70·W^0.75 on
// both sides leaves S = (41/18)^-0.25.
func TestAnteaterByHand(t *testing.T) {
	w := draftOf(t, caseOf("giant anteater", "41 kg", "dog", "18 kg", "10 mg/kg", "q12h"))
	s := math.Pow(41.0/18, -0.25)
	d := w.Drafts[0]
	if relative(d.Ratios.Specific, s) > 1e-12 {
		t.Errorf("S = %v, want %v", d.Ratios.Specific, s)
	}
	if relative(w.Drafted.DosePerKg[0], 10*s) > 1e-12 || relative(w.Drafted.PerAdministration[1], 410*s) > 1e-12 {
		t.Errorf("drafted %v, %v", w.Drafted.DosePerKg, w.Drafted.PerAdministration)
	}
	if w.Drafted.Plan != "same-interval" || *w.Drafted.IntervalH != 12 || w.Drafted.ChosenBy != "default" {
		t.Errorf("drafted %+v", w.Drafted)
	}
	// Mammals of two orders: sd 1.25, so the range is exp(±1.645·1.25).
	if relative(w.Drafted.Range90.Low, 10*s*math.Exp(-1.645*1.25)) > 1e-12 || relative(w.Drafted.Range50.High, 10*s*math.Exp(0.674*1.25)) > 1e-12 {
		t.Errorf("ranges %+v %+v", w.Drafted.Range90, w.Drafted.Range50)
	}
	// The other plans, from the table of the method.
	for _, p := range d.Plans {
		var dose, interval, average float64
		switch p.Name {
		case "same-interval":
			dose, interval, average = 10*s, 12, 1
		case "same-dose":
			dose, interval, average = 10, 12/s, 1
		case "both-adjusted":
			dose, interval, average = 10*s, 12/s, s
		case "clock": // 14.7 h lies nearer to 12 than to 24 on a log scale
			dose, interval, average = 10*s, 12, 1
		}
		if relative(p.DosePerKg[0], dose) > 1e-12 || relative(*p.IntervalH, interval) > 1e-12 || relative(p.AverageRatio, average) > 1e-12 {
			t.Errorf("%s: %v at %v h, average %v", p.Name, p.DosePerKg, *p.IntervalH, p.AverageRatio)
		}
		if relative(p.DailyPerKg[0], dose*24/interval) > 1e-12 {
			t.Errorf("%s: daily %v", p.Name, p.DailyPerKg)
		}
	}
	// The measured anteater burns about a third of its group's line.
	if k := has(w, "basis-disagrees"); k == nil || k.Level != Warn || k.Numbers["ratio"] < 2 {
		t.Errorf("basis-disagrees: %+v", k)
	}
}

// The 2005 US FDA guidance on the maximum safe starting dose carries a dose
// per kg from an animal to man by Km/37, which is exponent 0.67 at the
// guidance's own masses and areas; our 0.67 column must follow (W/60)^0.33.
// Factors: definition, computed.
func TestExponentColumn067(t *testing.T) {
	for _, k := range []struct {
		model, mass string
		factor      float64
	}{
		{"house mouse", "0.02 kg", 0.0712},
		{"brown rat", "0.15 kg", 0.1385},
		{"rabbit", "1.8 kg", 0.3144},
		{"rhesus macaque", "3 kg", 0.3721},
		{"dog", "10 kg", 0.5536},
	} {
		// Man is never a patient here: the way back is the factor's inverse.
		in := caseOf(k.model, k.mass, "Homo sapiens", "60 kg", "1 mg/kg", "q24h")
		in.Drug.Name, in.Drug.Margin = E("inventamol"), E("wide") // no hazard, and no stop for the peak
		w := draftOf(t, in)
		got := 0.0
		for _, e := range w.Exponents {
			if e.Exponent == 0.67 {
				got = 1 / e.Specific
			}
		}
		near(t, k.model+", exponent 0.67", got, k.factor, 5e-5)
	}
}

// Ratio of exponent 0.75 over 0.67 is (60/W)^0.08: published checks, computed.
func TestExponentsDiffer(t *testing.T) {
	w := draftOf(t, caseOf("dog", "10 kg", "Homo sapiens", "60 kg", "1 mg/kg", "q24h"))
	var a, b float64
	for _, e := range w.Exponents {
		switch e.Exponent {
		case 0.75:
			a = e.Specific
		case 0.67:
			b = e.Specific
		}
	}
	near(t, "0.75 over 0.67", b/a, 1.154, 5e-4)
	near(t, "0.75 itself", 1/a, 0.6389, 5e-5)
}

// An elephant and a cat: 0.1 mg/kg in a 2.6 kg cat carried to 2,970 kg by
// mass^0.75 is 51.1 mg, where a dose per kg would be 297 mg. Arithmetic after
// West 1962 and Schmidt-Nielsen 1972.
func TestElephantAndCat(t *testing.T) {
	in := caseOf("Asian elephant", "2970 kg", "domestic cat", "2.6 kg", "0.1 mg/kg", "once")
	w := draftOf(t, in)
	near(t, "by clearance", w.Drafted.PerAdministration[0], 51.1, 0.05)
	near(t, "by volume", w.Drafted.PerAdministration[1], 297, 0.5)
	if w.Drafted.IntervalH != nil || w.Drafted.Plan != "once" {
		t.Errorf("a single dose has no interval: %+v", w.Drafted)
	}
}

// From man: 0.2 mg at 70 kg is 3.32 mg at 2,970 kg by mass^0.75
// (Schmidt-Nielsen 1972 prints 3 mg).
func TestElephantAndMan(t *testing.T) {
	w := draftOf(t, caseOf("Asian elephant", "2970 kg", "Homo sapiens", "70 kg", "0.2 mg per animal", "once"))
	near(t, "by clearance", w.Drafted.PerAdministration[0], 3.32, 0.005)
	near(t, "by volume", w.Drafted.PerAdministration[1], 8.49, 0.005)
}

// Body surface: dog 10.1·g^(2/3)·1e-4 m² (veterinary handbook conversion
// table, values from memory, equal to the formula), man by Km 37 (US FDA 2005).
func TestBodySurface(t *testing.T) {
	for _, k := range []struct{ mass, area float64 }{{1, 0.101}, {5, 0.295}, {10, 0.469}, {20, 0.744}, {30, 0.975}, {40, 1.181}, {50, 1.371}} {
		w := draftOf(t, caseOf("giant anteater", "41 kg", "dog", metabolic.Significant(k.mass, 3)+" kg", "30 mg/m²", "q24h"))
		near(t, "dog", w.Drafts[0].DosePerKg[0]*k.mass/30, k.area, 0.0005)
	}
	for _, k := range []struct{ mass, area float64 }{{1, 0.100}, {2, 0.159}, {3, 0.208}, {4, 0.252}, {5, 0.292}, {8, 0.400}, {10, 0.464}} {
		w := draftOf(t, caseOf("giant anteater", "41 kg", "domestic cat", metabolic.Significant(k.mass, 3)+" kg", "30 mg/m2", "q24h"))
		near(t, "cat", w.Drafts[0].DosePerKg[0]*k.mass/30, k.area, 0.0005)
	}
	w := draftOf(t, caseOf("giant anteater", "41 kg", "Homo sapiens", "70 kg", "3700 mg/m²", "q24h"))
	near(t, "man", w.Drafts[0].DosePerKg[0], 100, 1e-9) // sheet of the US National Cancer Institute, Frederick
	w = draftOf(t, caseOf("giant anteater", "41 kg", "rabbit", "1 kg", "10 mg/m²", "q24h"))
	near(t, "rabbit", w.Drafts[0].DosePerKg[0]/10, 11*math.Pow(1000, 2.0/3)*1e-4, 1e-12)
	if _, err := caseOf("giant anteater", "41 kg", "horse", "500 kg", "30 mg/m²", "q24h").Check(); err == nil || !strings.Contains(err.Error(), "models[0].dose") {
		t.Errorf("a dose per m² of a horse: %v", err)
	}
}

// massText writes a mass so that it can be read back exactly.
func massText(kg float64) string {
	return strings.ReplaceAll(metabolic.Significant(kg, 15), ",", "") + " kg"
}

var mammals = []struct {
	name      string
	low, high float64
}{{"dog", 5, 60}, {"giant anteater", 20, 60}, {"red kangaroo", 20, 85}, {"horse", 200, 900}, {"rabbit", 1, 5}}

// Scaling there and back is the identity, whatever the masses.
func TestThereAndBack(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		a := mammals[rapid.IntRange(0, 2).Draw(rt, "a")]
		b := mammals[rapid.IntRange(3, 4).Draw(rt, "b")]
		wa := rapid.Float64Range(a.low, a.high).Draw(rt, "wa")
		wb := rapid.Float64Range(b.low, b.high).Draw(rt, "wb")
		there := draftOf(rt, caseOf(a.name, massText(wa), b.name, massText(wb), "10 mg/kg", "q24h"))
		back := draftOf(rt, caseOf(b.name, massText(wb), a.name, massText(wa), "10 mg/kg", "q24h"))
		x, y := there.Drafts[0].Ratios, back.Drafts[0].Ratios
		if relative(x.Specific*y.Specific, 1) > 1e-12 || relative(x.Metabolic*y.Metabolic, 1) > 1e-12 || relative(x.Mass*y.Mass, 1) > 1e-12 {
			rt.Fatalf("%+v and back %+v", x, y)
		}
	})
}

// The ratios do not depend on the unit in which a mass is written.
func TestUnitOfMass(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		g := rapid.IntRange(20000, 60000).Draw(rt, "g")
		kg := draftOf(rt, caseOf("giant anteater", massText(float64(g)/1000), "dog", "18 kg", "10 mg/kg", "q12h"))
		gr := draftOf(rt, caseOf("giant anteater", strings.ReplaceAll(metabolic.Significant(float64(g), 9), ",", "")+" g", "dog", "18000 g", "10 mg/kg", "q12h"))
		if relative(kg.Drafts[0].Ratios.Specific, gr.Drafts[0].Ratios.Specific) > 1e-12 {
			rt.Fatalf("%v kg, %v g", kg.Drafts[0].Ratios, gr.Drafts[0].Ratios)
		}
	})
}

// For every S, interval set and dose range: the three plans that promise it
// keep the daily amount, the drafted dose lies inside its own range, the
// interval of a time-dependent drug never grows, and a concentration-dependent
// one's never beyond twice the model's.
func TestPlans(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		s := math.Exp(rapid.Float64Range(-4, 4).Draw(rt, "lnS"))
		tau := rapid.Float64Range(0.5, 400).Draw(rt, "tau")
		lo := math.Exp(rapid.Float64Range(-5, 5).Draw(rt, "lnD"))
		hi := lo * (1 + rapid.Float64Range(0, 3).Draw(rt, "wide"))
		activity := Activity(rapid.IntRange(0, 2).Draw(rt, "activity"))
		n := rapid.IntRange(0, 8).Draw(rt, "n")
		grid := make([]metabolic.Hours, n)
		for i := range grid {
			grid[i] = metabolic.Hours(rapid.Float64Range(1, 800).Draw(rt, "h"))
		}
		r := &Regimen{PerKg: Pair{lo, hi}, Interval: metabolic.Interval{Kind: metabolic.Repeated, Hours: metabolic.Hours(tau)}}
		longest := longestInterval(r, activity, false)
		plans := plansFor(r, s, grid, longest, nil)
		name := draftedPlan(r, s, activity, false)
		for _, p := range plans {
			if p.name != PlanBothAdjusted && (relative(p.daily[0], s*lo*24/tau) > 1e-9 || relative(p.daily[1], s*hi*24/tau) > 1e-9) {
				rt.Fatalf("%s keeps no daily amount: %v", p.name, p.daily)
			}
			if p.name == PlanBothAdjusted && relative(p.daily[0], s*s*lo*24/tau) > 1e-9 {
				rt.Fatalf("both adjusted: %v", p.daily)
			}
			if p.name != name {
				continue
			}
			if activity == TimeDependent && p.interval > tau*(1+1e-12) || activity == ConcentrationDependent && p.interval > 2*tau*(1+1e-12) {
				rt.Fatalf("%v h drafted from %v h, S %v", p.interval, tau, s)
			}
			sd := rapid.Float64Range(0, 3).Draw(rt, "sd")
			x := rangeAbout(p.dose, sd, z90)
			if !(x.Low <= p.dose[0] && p.dose[1] <= x.High) {
				rt.Fatalf("%v outside %v", p.dose, x)
			}
		}
	})
}

// S = 1 changes nothing: same dose, same interval, whatever the list of
// practical intervals.
func TestNothingChangesAtOne(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		tau := rapid.Float64Range(0.5, 400).Draw(rt, "tau")
		r := &Regimen{PerKg: Pair{3, 5}, Interval: metabolic.Interval{Kind: metabolic.Repeated, Hours: metabolic.Hours(tau)}}
		for _, p := range plansFor(r, 1, PracticalIntervals, math.Inf(1), nil) {
			if p.dose != r.PerKg || p.interval != tau || p.average != 1 {
				rt.Fatalf("%+v", p)
			}
		}
	})
}

// Nearest on a log scale; a tie takes the shorter.
func TestNearestInterval(t *testing.T) {
	for _, k := range []struct{ want, own, limit, got float64 }{
		{14.7, 12, math.Inf(1), 12},
		{17, 12, math.Inf(1), 24},
		{math.Sqrt(12 * 24), 12, math.Inf(1), 12}, // a tie
		{math.Sqrt(24 * 48), 48, math.Inf(1), 24}, // a tie, the model's own the longer
		{100, 12, 24, 24},
		{2, 12, math.Inf(1), 6},
		{9.9, 10, math.Inf(1), 10}, // the model's own is always among them
	} {
		if got := nearestInterval(k.want, k.own, k.limit, PracticalIntervals); got != k.got {
			t.Errorf("nearest to %v (own %v, limit %v): %v, want %v", k.want, k.own, k.limit, got, k.got)
		}
	}
}

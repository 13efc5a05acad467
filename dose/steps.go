package dose

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"tayra/metabolic"
)

// stepFigures is how many figures an intermediate result is printed to. The
// reckoning carries full precision; who follows it with the printed figures
// ends at the printed dose to 3 figures.
const stepFigures = 6

func f6(x float64) string { return metabolic.Significant(x, stepFigures) }

// slate collects the steps of one draft.
type slate struct{ steps []Step }

func (s *slate) add(title, formula, substituted string, value float64, unit, source string) {
	result := f6(value)
	if unit != "" {
		result += " " + unit
	}
	s.steps = append(s.steps, Step{Title: title, Formula: formula, Substituted: substituted, Value: value, Unit: unit, Result: result, Source: source})
}

// printed is a step whose result is printed otherwise than to 6 figures.
func (s *slate) printed(title, formula, substituted string, value float64, unit, result, source string) {
	s.steps = append(s.steps, Step{Title: title, Formula: formula, Substituted: substituted, Value: value, Unit: unit, Result: result, Source: source})
}

// steps writes out the reckoning of one model. After a stop it ends at the
// ratios: no dose, no interval and no range is worked out on paper.
func (n *numbers) steps(c *Case, i int) []Step {
	s := &slate{}
	m, mn := &c.Models[i], &n.models[i]
	patient, model := animalWords(c.Patient.Animal), animalWords(m.Animal)
	massStep(s, "Body mass of the patient", "Wt", c.Patient.Mass)
	massStep(s, "Body mass of the model ("+model+")", "Wm", m.Mass)
	rateSteps(s, "model ("+model+")", "m", m.Mass.Middle, m.Temperature, c.Method.Q10, &mn.model)
	rateSteps(s, "patient ("+patient+")", "t", c.Patient.Mass.Middle, c.Patient.Temperature, c.Method.Q10, &mn.target)
	kg := func(w metabolic.Mass) string { return f6(float64(w)) + " kg" }
	definition := "definition"
	s.add("Ratio of masses", "M = Wt / Wm", kg(c.Patient.Mass.Middle)+" / "+kg(m.Mass.Middle), mn.m, "", definition)
	kcal := func(w float64) string { return f6(metabolic.Power(w).KcalPerDay()) + " kcal/day" }
	s.add("Ratio of metabolic rates", "R = Bt / Bm", kcal(mn.target.watt)+" / "+kcal(mn.model.watt), mn.r, "", "clearance is taken to follow metabolic rate")
	s.add("Ratio of rates per kg", "S = R / M", f6(mn.r)+" / "+f6(mn.m), mn.s, "", definition)
	if n.stopped {
		return s.steps
	}
	doseSteps(s, m)
	if n.fit != nil && i == n.from {
		n.fitSteps(s, c)
		return s.steps
	}
	n.planSteps(s, c, i)
	n.rangeSteps(s, c, i)
	return s.steps
}

func massStep(s *slate, title, symbol string, b metabolic.BodyMass) {
	if !b.Estimated() {
		return
	}
	if math.Abs(float64(b.Middle*b.Middle/(b.Low*b.High))-1) < 1e-9 && math.Abs(float64(b.High/b.Middle)-1.1) > 1e-9 {
		s.add(title+", estimated", symbol+" = √(low × high)", "√("+f6(float64(b.Low))+" kg × "+f6(float64(b.High))+" kg)", float64(b.Middle), "kg", "geometric middle of the estimate")
		return
	}
	s.add(title+", estimated", symbol+" from "+f6(float64(b.Low))+" kg to "+f6(float64(b.High))+" kg", "the middle as typed", float64(b.Middle), "kg", "as typed")
}

// rateSteps shows how an animal's metabolic rate was found.
func rateSteps(s *slate, who, sub string, w metabolic.Mass, t metabolic.Celsius, q10 float64, r *rate) {
	b := "B" + sub
	kcal := func(x float64) float64 { return metabolic.Power(x).KcalPerDay() }
	rest := r.watt / r.q10 // before the factor of temperature
	l := r.line
	title := "Metabolic rate of the " + who + basisMark(r)
	switch {
	case l.equation != nil:
		equationSteps(s, title, b, l.equation, w, t, rest)
	case l.measured != nil:
		x := l.measured
		source := measuredSource(x.Source) + "; within a species the slope is nearer 0.67 (at most 12 % at the limits)"
		if x.Grade == "not basal" {
			title = "Resting metabolic rate of the " + who + basisMark(r)
			source += "; the row is graded not basal and is called resting"
		}
		s.add(title, b+" = B0·(W/W0)^0.75, measured at W0",
			fmt.Sprintf("%s kcal/day × (%s kg / %s kg)^0.75", f6(x.Rate.KcalPerDay()), f6(float64(w)), f6(float64(x.Mass))), kcal(rest), "kcal/day", source)
	default:
		// The prediction is a straight line on logs at a fixed temperature:
		// its slope is found from a second mass, so that the step can be followed.
		slope, at1 := relativesLine(r, w, t)
		s.add(title, b+" = a·W^b, W in kg, by relatives", fmt.Sprintf("%s kcal/day × %s^%s", f6(kcal(at1)), f6(float64(w)), f6(slope)), kcal(rest), "kcal/day", relativesSource(r))
	}
	if r.hasT0 {
		s.add("Factor of body temperature, "+who, "f = Q10^((T − T0)/10)",
			fmt.Sprintf("%s^((%s °C − %s °C)/10)", f6(q10), f6(float64(t)), f6(float64(r.t0))), r.q10, "",
			"Q10 2.5 by default; published 2.4 to 2.65 (Andrews & Pough 1985 Physiol Zool 58:214-231; Chappell & Ellis 1987 J Comp Physiol B 157:227-235)")
		s.add("Metabolic rate of the "+who+" at its temperature", b+" = B·f", f6(kcal(rest))+" kcal/day × "+f6(r.q10), kcal(r.watt), "kcal/day", "definition")
	}
}

// equationSteps puts the numbers into a published line, in its own units, and
// then shows the way to kcal/day where they are others.
func equationSteps(s *slate, title, b string, eq *metabolic.Equation, w metabolic.Mass, t metabolic.Celsius, watt float64) {
	source := eq.ID + ": " + eq.Citation + verifiedMark(eq.Verified)
	day := metabolic.Power(watt).KcalPerDay()
	perUnit := kcalPerDayOf(eq.RateUnit)
	if eq.RateUnit == "kcal/day" {
		s.add(title, eq.Formula(), equationSubstitution(eq, w, t)+" kcal/day", day, "kcal/day", source)
		return
	}
	own := day / perUnit
	s.add(title+", as published", eq.Formula(), equationSubstitution(eq, w, t)+" "+eq.RateUnit, own, eq.RateUnit, source)
	s.add(title, b+" in kcal/day = "+b+" in "+eq.RateUnit+" × "+f6(perUnit), f6(own)+" "+eq.RateUnit+" × "+f6(perUnit), day, "kcal/day", "1 cal = 4.184 J; 20.1 J per mL O2")
}

// kcalPerDayOf is one unit of metabolic rate in kcal/day.
func kcalPerDayOf(unit string) float64 {
	switch unit {
	case "W":
		return metabolic.Power(1).KcalPerDay()
	case "kJ/day":
		return 1 / metabolic.JoulePerCalorie
	case "J/h":
		return 24 / (1000 * metabolic.JoulePerCalorie)
	case "mL O2/h":
		return 24 * metabolic.JoulePerMLO2 / (1000 * metabolic.JoulePerCalorie)
	}
	return 1
}

func basisMark(r *rate) string { return ", basis " + r.line.basis.String() }

func verifiedMark(v string) string {
	if v == "" {
		return ""
	}
	return " (" + v + ")"
}

// equationSubstitution puts the numbers into a published line in its own units.
func equationSubstitution(eq *metabolic.Equation, w metabolic.Mass, t metabolic.Celsius) string {
	mass, unit := float64(w), "kg"
	if eq.MassUnit == "g" {
		mass, unit = w.Grams(), "g"
	}
	m := "(" + f6(mass) + " " + unit + ")"
	if eq.Form == metabolic.FormQuadratic {
		return fmt.Sprintf("%s × %s^(%s + %s × log10 %s)", f6(eq.A), m, f6(eq.B), f6(eq.C), f6(mass))
	}
	text := fmt.Sprintf("%s × %s^%s", f6(eq.A), m, f6(eq.B))
	if !eq.Ectotherm() && eq.HasTemperatureTerm() {
		t = eq.T0 // an endotherm's temperature never scales its rate
	}
	switch eq.Form {
	case metabolic.FormLogLinear:
		text += fmt.Sprintf(" × 10^(%s × %s)", f6(eq.C), f6(float64(t)))
	case metabolic.FormBoltzmann:
		text += fmt.Sprintf(" × exp(−%s / (%s + 273.15))", f6(eq.C), f6(float64(t)))
	case metabolic.FormLinear:
		text += fmt.Sprintf(" × (%s − %s)", f6(float64(t)), f6(eq.C))
	}
	return text
}

// relativesLine recovers slope and value at 1 kg (in W) of a relatives
// prediction at a fixed temperature.
func relativesLine(r *rate, w metabolic.Mass, t metabolic.Celsius) (slope, at1 float64) {
	other, err := r.line.at(w*2, t, metabolic.Q10Default)
	if err != nil {
		return 0.75, r.watt
	}
	slope = math.Log(other.watt/r.watt) / math.Ln2
	return slope, r.watt * math.Pow(float64(w), -slope)
}

// doseSteps shows how the model's dose per kg follows from the one typed.
func doseSteps(s *slate, m *Model) {
	r := &m.Regimen
	unit := perKgUnit(r)
	amount := r.Unit.String()
	ends := func(p Pair) string {
		if p[0] == p[1] {
			return f6(p[0])
		}
		return f6(p[0]) + " to " + f6(p[1])
	}
	given := Pair{r.Given.Low, r.Given.High}
	switch r.Given.Per {
	case metabolic.PerAnimal:
		s.printed("Dose of the model per kg", "d = D / Wm", ends(given)+" "+amount+" / "+f6(float64(m.Mass.Middle))+" kg", r.PerKg[1], unit, ends(r.PerKg)+" "+unit, m.Source)
	case metabolic.PerKgDay:
		s.printed("Dose of the model per administration", "d = daily amount × τ / 24 h", ends(given)+" "+amount+"/kg/day × "+f6(float64(r.Interval.Hours))+" h / 24 h", r.PerKg[1], unit, ends(r.PerKg)+" "+unit, m.Source)
	case metabolic.PerSquareMetre:
		if m.Animal.Human() {
			s.printed("Dose of the model per kg", "d = dose per m² / Km", ends(given)+" "+amount+"/m² / 37 kg/m²", r.PerKg[1], unit, ends(r.PerKg)+" "+unit, "Km of an adult man: US FDA guidance on the maximum safe starting dose, July 2005, table 1")
			return
		}
		k, source, _ := areaConstant(m.Animal)
		s.printed("Dose of the model per kg", "d = dose per m² × K·(W in g)^(2/3)·0.0001 / W",
			fmt.Sprintf("%s %s/m² × %s × (%s g)^(2/3) × 0.0001 m² / %s kg", ends(given), amount, f6(k), f6(m.Mass.Middle.Grams()), f6(float64(m.Mass.Middle))),
			r.PerKg[1], unit, ends(r.PerKg)+" "+unit, source)
	}
}

// perKgUnit is mg/kg, IU/kg, mg/kg/h or IU/kg/h.
func perKgUnit(r *Regimen) string {
	u := r.Unit.String() + "/kg"
	if r.Interval.Kind == metabolic.Infusion {
		u += "/h"
	}
	return u
}

// planSteps shows the drafted plan from the ratio S.
func (n *numbers) planSteps(s *slate, c *Case, i int) {
	m, mn := &c.Models[i], &n.models[i]
	r := &m.Regimen
	p := mn.plan()
	unit := perKgUnit(r)
	end := func(name string, k int) string {
		if r.PerKg[0] == r.PerKg[1] {
			return name
		}
		return name + [2]string{", low end", ", high end"}[k]
	}
	ks := []int{1}
	if r.PerKg[0] != r.PerKg[1] {
		ks = []int{0, 1}
	}
	tau := float64(r.Interval.Hours)
	scaling := "clearance is taken to follow metabolic rate"
	switch p.name {
	case PlanOnce:
		for _, k := range ks {
			s.add(end("Single dose by clearance", k), "d·S", f6(r.PerKg[k])+" "+unit+" × "+f6(mn.s), r.PerKg[k]*mn.s, unit, "matches the area under the curve")
			s.add(end("Single dose by volume", k), "d", f6(r.PerKg[k])+" "+unit, r.PerKg[k], unit, "matches the peak; volume per kg is taken to be constant")
		}
	case PlanInfusion:
		for _, k := range ks {
			s.add(end("Infusion rate per kg", k), "rate·S", f6(r.PerKg[k])+" "+unit+" × "+f6(mn.s), p.dose[k], unit, scaling)
		}
	default:
		s.add("Interval that half-lives would have", "τ / S", f6(tau)+" h / "+f6(mn.s), tau/mn.s, "h", "half-life follows V/CL, so M/R = 1/S")
		switch p.name {
		case PlanClock:
			s.add("Practical interval", "τ' = the practical interval nearest to τ / S on a log scale", "nearest to "+f6(tau/mn.s)+" h among "+n.intervalWords(c, i), p.interval, "h", "practical intervals and the model's own; a tie takes the shorter")
			for _, k := range ks {
				s.add(end("Dose per kg", k), "d' = d·S·τ'/τ", fmt.Sprintf("%s %s × %s × %s h / %s h", f6(r.PerKg[k]), unit, f6(mn.s), f6(p.interval), f6(tau)), p.dose[k], unit, scaling)
			}
		case PlanSameDose:
			for _, k := range ks {
				s.add(end("Dose per kg", k), "d' = d", f6(r.PerKg[k])+" "+unit, p.dose[k], unit, "the plan keeps the dose and moves the interval")
			}
		default:
			for _, k := range ks {
				s.add(end("Dose per kg", k), "d' = d·S", f6(r.PerKg[k])+" "+unit+" × "+f6(mn.s), p.dose[k], unit, scaling)
			}
		}
	}
	amount := r.Unit.String()
	perTime := ""
	if p.name == PlanInfusion {
		perTime = "/h"
	}
	w := float64(c.Patient.Mass.Middle)
	pks := ks
	if p.dose[0] != p.dose[1] {
		pks = []int{0, 1}
	}
	for _, k := range pks {
		name := "Amount per administration"
		if p.name == PlanInfusion {
			name = "Amount per hour"
		}
		if p.dose[0] != p.dose[1] {
			name += [2]string{", low end", ", high end"}[k]
		}
		s.add(name, "D = d'·Wt", f6(p.dose[k])+" "+unit+" × "+f6(w)+" kg", p.dose[k]*w, amount+perTime, "definition")
	}
	if p.interval > 0 {
		k := 1
		s.add("Daily amount per kg", "d'·24 h / τ'", f6(p.dose[k])+" "+unit+" × 24 h / "+f6(p.interval)+" h", p.daily[k], amount+"/kg/day", "definition")
		modelDaily := r.PerKg[k] * 24 / tau
		s.add("Average concentration against the model's", "(d'·24 h/τ') / (S·d·24 h/τ)",
			fmt.Sprintf("%s / (%s × %s)", f6(p.daily[k]), f6(mn.s), f6(modelDaily)), p.average, "", "average = F·D/(CL·τ), CL per kg ∝ S")
	}
}

// rangeSteps shows the standard deviation and the range.
func (n *numbers) rangeSteps(s *slate, c *Case, i int) {
	mn := &n.models[i]
	sp := &mn.spread
	_, text, source := sp.record.text()
	if sp.record.kappa != 1 {
		text += "; times 0.8 for mammals of one order"
	}
	s.add("Published record", "κ·s", f6(sp.record.kappa)+" × "+f6(sp.record.s), sp.floor, "", source+": "+text)
	s.add("Exponent and scatter of species", "√((0.16·ln M)² + σm² + σt²)",
		fmt.Sprintf("√((0.16 × ln %s)² + %s² + %s²)", f6(mn.m), f6(sp.model), f6(sp.target)), sp.composed, "",
		"Hu & Hayton 2001 (91 substances); scatter of measured species about the basis")
	m := &c.Models[i]
	if sp.temperature > 0 {
		t0 := func(r *rate) string {
			if r.hasT0 {
				return f6(float64(r.t0))
			}
			return "T"
		}
		diff := func(t metabolic.Celsius, r *rate) string {
			if !r.hasT0 {
				return "0"
			}
			return "(0.15 × |" + f6(float64(t)) + " − " + t0(r) + "| / 10)^2"
		}
		s.add("Body temperatures", "√((0.15·|T − T0|/10)^2 for the patient and for the model)",
			"√("+diff(c.Patient.Temperature, &mn.target)+" + "+diff(m.Temperature, &mn.model)+")", sp.temperature, "", "assumed")
	}
	if sp.massAmount > 0 {
		power := "0.25"
		if m.Regimen.PerAnimal {
			power = "0.75"
		}
		h := func(b metabolic.BodyMass) string {
			if !b.Estimated() {
				return "0"
			}
			return "½·ln(" + f6(float64(b.High)) + " / " + f6(float64(b.Low)) + ")"
		}
		s.add("Estimated masses, for the dose per kg", "√((0.25·ht/1.645)^2 + ("+power+"·hm/1.645)^2), h = ½·ln(high/low)",
			fmt.Sprintf("√((0.25 × %s / 1.645)^2 + (%s × %s / 1.645)^2)", h(c.Patient.Mass), power, h(m.Mass)), sp.massPerKg, "", "dose per kg goes with mass^-0.25")
		s.add("Estimated masses, for the amount", "√((0.75·ht/1.645)^2 + ("+power+"·hm/1.645)^2)",
			fmt.Sprintf("√((0.75 × %s / 1.645)^2 + (%s × %s / 1.645)^2)", h(c.Patient.Mass), power, h(m.Mass)), sp.massAmount, "", "the amount goes with the patient's mass^0.75")
	}
	core := "max(" + f6(sp.floor) + ", " + f6(sp.composed) + ")"
	quadrature := func(mass float64) (formula, numbers string) {
		formula, numbers = "sd = the larger of the two", core
		if sp.temperature > 0 || mass > 0 {
			formula = "sd = √(the larger of the two^2 + temperature^2 + mass^2)"
			numbers = "√(" + core + "^2 + " + f6(sp.temperature) + "^2 + " + f6(mass) + "^2)"
		}
		return formula, numbers
	}
	formula, numbers := quadrature(sp.massPerKg)
	s.add("Standard deviation of ln dose per kg", formula, numbers, sp.perKg, "", "the record already holds the scatter of species, so the two are not added")
	if sp.massAmount > 0 {
		formula, numbers = quadrature(sp.massAmount)
		s.add("Standard deviation of ln amount", formula, numbers, sp.amount, "", "as above, with the masses' part of the amount")
	}
	p := mn.plan()
	about := p.dose
	if p.name == PlanOnce {
		about = scale(c.Models[i].Regimen.PerKg, mn.s)
	}
	unit := perKgUnit(&c.Models[i].Regimen)
	s.add("Nine in ten, low end", "d'·exp(−1.645·sd)", f6(about[0])+" "+unit+" × exp(−1.645 × "+f6(sp.perKg)+")", mn.range90.Low, unit, "normal quantile 0.95")
	s.add("Nine in ten, high end", "d'·exp(1.645·sd)", f6(about[1])+" "+unit+" × exp(1.645 × "+f6(sp.perKg)+")", mn.range90.High, unit, "normal quantile 0.95")
	s.add("Even odds, low end", "d'·exp(−0.674·sd)", f6(about[0])+" "+unit+" × exp(−0.674 × "+f6(sp.perKg)+")", mn.range50.Low, unit, "normal quantile 0.75")
	s.add("Even odds, high end", "d'·exp(0.674·sd)", f6(about[1])+" "+unit+" × exp(0.674 × "+f6(sp.perKg)+")", mn.range50.High, unit, "normal quantile 0.75")
	if sp.massAmount > 0 && i == n.from {
		w, amount := float64(c.Patient.Mass.Middle), c.Models[i].Regimen.Unit.String()
		if p.name == PlanInfusion {
			amount += "/h"
		}
		for _, e := range []struct {
			name, sign string
			z, d       float64
		}{{"Amount, nine in ten, low end", "−", z90, about[0]}, {"Amount, nine in ten, high end", "", z90, about[1]},
			{"Amount, even odds, low end", "−", z50, about[0]}, {"Amount, even odds, high end", "", z50, about[1]}} {
			z := e.z
			if e.sign != "" {
				z = -z
			}
			s.add(e.name, "D·exp("+e.sign+"z·sd of the amount)", fmt.Sprintf("%s %s × exp(%s%s × %s)", f6(e.d*w), amount, e.sign, f6(e.z), f6(sp.amount)), e.d*w*math.Exp(z*sp.amount), amount, "as above")
		}
	}
	if p.name == PlanOnce {
		sd := n.volumeSpread(c, i)
		d := c.Models[i].Regimen.PerKg
		v := rangeAbout(d, sd, z90)
		s.add("By volume, nine in ten, low end", "d·exp(−1.645·sd)", f6(d[0])+" "+unit+" × exp(−1.645 × "+f6(sd)+")", v.Low, unit, "volume per kg: 1.10 within mammals (218 pairs), 1.46 elsewhere, assumed")
		s.add("By volume, nine in ten, high end", "d·exp(1.645·sd)", f6(d[1])+" "+unit+" × exp(1.645 × "+f6(sd)+")", v.High, unit, "as above")
	}
}

// intervalWords lists the intervals that a clock plan chose from.
func (n *numbers) intervalWords(c *Case, i int) string {
	r := &c.Models[i].Regimen
	longest := longestInterval(r, c.Drug.Activity, c.Drug.Depot)
	hs := []float64{float64(r.Interval.Hours)}
	for _, h := range c.Method.Intervals {
		if float64(h) <= longest*(1+1e-12) {
			hs = append(hs, float64(h))
		}
	}
	slices.Sort(hs)
	var words []string
	for _, h := range slices.Compact(hs) {
		words = append(words, f6(h))
	}
	return strings.Join(words, ", ") + " h"
}

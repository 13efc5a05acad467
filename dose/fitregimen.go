package dose

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"tayra/metabolic"
)

// PlanFitted is the plan of a dose that comes from a line fitted to data:
//
//	D = Cavg·CL·τ/F
const PlanFitted PlanName = "fitted-line"

// FitCase ties a table of species data to a case: its patient is the line's
// target, its model gives the regimen whose average concentration is kept.
type FitCase struct {
	Table   FitInput `json:"table"`
	Average Entry    `json:"average,omitzero"` // concentration to reach on average, instead of the model's
	Source  Entry    `json:"average_source,omitzero"`
}

// fitNumbers is the fitted regimen in numbers.
type fitNumbers struct {
	record   *FitRecord
	average  float64 // mg/L or IU/L
	clear    float64 // L/h in the patient
	halfLife float64 // h in the patient; 0 unknown
	fraction float64

	ownSD, ownT90 float64 // of the line's prediction interval
	byRecord      bool    // the published record is wider

	lineSD, exponent float64 // sd before estimated masses; exponent of the line

	averageFormula, averageNumbers string // of the step
}

// recordLines is the standard deviation of ln(predicted/observed) of man's
// clearance predicted by lines over several species: average fold error 2.64
// over 81 small molecules (Huh et al. 2011 Xenobiotica 41:972-987, read in an
// excerpt), taken as 10 to the mean of |log10(predicted/observed)|, so that
// sd = ln 2.64/0.798 under normality.
const recordLines = 1.217

// computeFit fits the case's table and adds the fitted plan to the model that
// the draft is taken from.
func computeFit(c *Case, n *numbers) error {
	mn, m := &n.models[n.from], &c.Models[n.from]
	fail := func(e Entry, field, problem, remedy string) error {
		return InputErrors{{File: c.Input.File, Line: e.Line, Column: e.Column, Field: field, Problem: problem, Remedy: remedy}}
	}
	fc := c.Input.Fit
	if m.Regimen.Interval.Kind == metabolic.Once {
		return fail(c.Input.Models[n.from].Interval, fmt.Sprintf("models[%d].interval", n.from), "a fitted clearance gives a daily amount, which a single dose has not", "write the interval of a repeated regimen")
	}
	rec, err := Fit(&fc.Table, FitTarget{Animal: c.Patient.Animal, Mass: c.Patient.Mass})
	if err != nil {
		return err
	}
	f := &fitNumbers{record: rec, fraction: 1}
	line := rec
	if rec.Parameter != Clearance {
		line = nil
		for i := range rec.Others {
			if rec.Others[i].Parameter == Clearance {
				line = &rec.Others[i]
			}
		}
	}
	if line == nil {
		return InputErrors{{File: fc.Table.File, Field: "clearance", Problem: "no line for clearance", Remedy: "a dose is drafted from a fitted clearance; give the table a column clearance"}}
	}
	f.clear = line.AtTarget.Value
	if m.Fraction > 0 {
		f.fraction = m.Fraction
	}
	r := &FitRegimen{Bioavailable: f.fraction}
	if c.FitAverage != nil {
		if c.FitAverage.Concentration.Unit != m.Regimen.Unit {
			return fail(fc.Average, "average", "is in other units than the dose", "write both in mg or both in IU")
		}
		f.average, r.AverageSource = c.FitAverage.Concentration.Value, "given: "+c.FitAverage.Source
		f.averageFormula, f.averageNumbers = "Cavg, as given", c.FitAverage.Typed
	} else if err := modelAverage(c, n, f, r); err != nil {
		return fail(c.Input.Models[n.from].Dose, fmt.Sprintf("models[%d]", n.from), err.Error(), "give the model's half_life and volume, a row of the table for the model species, or an average concentration to reach")
	}
	r.Average = f.average
	fittedHalfLife(f, rec, line, r)
	r.HalfLifeH = f.halfLife
	rec.Regimen = r
	n.fit = f

	// D per kg and interval; an infusion has no interval.
	perHour := f.average * f.clear / f.fraction / float64(c.Patient.Mass.Middle)
	p := planNumbers{name: PlanFitted}
	tau := float64(m.Regimen.Interval.Hours)
	scaled := middle(m.Regimen.PerKg) * mn.s // per kg at the model's interval, by scaling
	if m.Regimen.Interval.Kind == metabolic.Infusion {
		p.dose = Pair{perHour, perHour}
		p.average = perHour / scaled
	} else {
		p.interval = tau
		if f.halfLife > 0 && m.HalfLife > 0 {
			longest := longestInterval(&m.Regimen, c.Drug.Activity, c.Drug.Depot)
			p.interval = nearestInterval(tau*f.halfLife/float64(m.HalfLife), tau, longest, c.Method.Intervals)
		}
		p.dose = Pair{perHour * p.interval, perHour * p.interval}
		p.average = perHour * tau / scaled
	}
	p.daily = Pair{perHour * 24, perHour * 24}
	p.peakRatio = p.dose[1] / m.Regimen.PerKg[1]
	mn.plans = append(mn.plans, p)
	mn.drafted, mn.chosenByCase = len(mn.plans)-1, false
	// The wider of the line's own prediction interval and the published record
	// of such lines: few animals close to a line give a narrow interval by luck
	// as well.
	sd, t90, t50 := line.estimate.SEPredictionLn, line.line.TQuantile(0.95), line.line.TQuantile(0.75)
	f.ownSD, f.ownT90 = sd, t90
	if recordLines*z90 > sd*t90 {
		sd, t90, t50 = recordLines, z90, z50
		f.byRecord = true
	}
	// An estimated mass moves the fitted amount by W^b and the dose per kg by
	// W^(b−1).
	h := c.Patient.Mass.HalfWidth() / z90
	f.lineSD, f.exponent = sd, line.B
	mn.spread.perKg, mn.spread.amount = math.Hypot(sd, (line.B-1)*h), math.Hypot(sd, line.B*h)
	mn.range90, mn.range50 = rangeAbout(p.dose, mn.spread.perKg, t90), rangeAbout(p.dose, mn.spread.perKg, t50)
	mn.z90, mn.z50 = t90, t50
	return nil
}

// modelAverage is the model's average concentration F·D/(CL·τ), with its
// clearance from half-life and volume, CL = V·ln 2/t½, or from its own row of
// the table.
func modelAverage(c *Case, n *numbers, f *fitNumbers, r *FitRegimen) error {
	m := &c.Models[n.from]
	perHour := modelDaily(&m.Regimen) / 24 // per kg and hour
	if m.HalfLife > 0 && m.VolumePerKg > 0 {
		f.average = f.fraction * perHour / (m.VolumePerKg * math.Ln2 / float64(m.HalfLife))
		f.averageFormula = "Cavg = F·(daily dose per kg / 24 h) / (V·ln 2/t½)"
		f.averageNumbers = fmt.Sprintf("%s × (%s / 24 h) / (%s L/kg × 0.693147 / %s h)", f6(f.fraction), f6(perHour*24), f6(m.VolumePerKg), f6(float64(m.HalfLife)))
		r.AverageSource = "the model's average: its dose, half-life and volume"
		return nil
	}
	for _, q := range f.record.Points {
		if f.record.Parameter == Clearance && (strings.EqualFold(q.Species, m.Animal.Name) || strings.EqualFold(q.Species, m.Animal.CommonName()) ||
			strings.EqualFold(q.Species, strings.TrimSpace(c.Input.Models[n.from].Species.Text))) {
			f.average = f.fraction * perHour / (q.Value / q.MassKg)
			f.averageFormula = "Cavg = F·(daily dose per kg / 24 h) / (CL per kg)"
			f.averageNumbers = fmt.Sprintf("%s × (%s / 24 h) / (%s L/h / %s kg)", f6(f.fraction), f6(perHour*24), f6(q.Value), f6(q.MassKg))
			r.AverageSource = "the model's average: its dose, and the clearance of its row in the table"
			return nil
		}
	}
	return fmt.Errorf("no average concentration to keep: the model's clearance is not known")
}

// fittedHalfLife is the half-life in the patient: from a fitted line of
// half-lives, else ln 2·V/CL from a fitted volume.
func fittedHalfLife(f *fitNumbers, rec, cl *FitRecord, r *FitRegimen) {
	all := append([]FitRecord{*rec}, rec.Others...)
	for i := range all {
		if all[i].Parameter == HalfLife {
			f.halfLife, r.HalfLifeFrom = all[i].AtTarget.Value, "line of half-lives"
			return
		}
	}
	for i := range all {
		if all[i].Parameter == Volume {
			f.halfLife, r.HalfLifeFrom = math.Ln2*all[i].AtTarget.Value/cl.AtTarget.Value, "ln 2 × fitted volume / fitted clearance"
			return
		}
	}
}

// clearanceLine is the fitted line of clearance.
func (f *FitRecord) clearanceLine() *metabolic.PowerFit {
	if f.Parameter == Clearance {
		return f.line
	}
	for i := range f.Others {
		if f.Others[i].Parameter == Clearance {
			return f.Others[i].line
		}
	}
	return f.line
}

// fitRecord puts the fit onto the worksheet with its cautions; after a stop it
// stays without its regimen.
func (n *numbers) fitRecord(c *Case, w *Worksheet) {
	if n.fit == nil {
		return
	}
	rec := *n.fit.record
	if n.stopped {
		rec.Regimen = nil
	} else {
		rec.Notes = append(slices.Clone(rec.Notes), "Published predictions of man from lines over several species missed by a factor of 2.64 on average (81 small molecules; Huh et al. 2011 Xenobiotica 41:972-987, read in an excerpt). The range of the dose is the wider of that record and of the line's own prediction interval.")
	}
	w.Fit = &rec
	w.Cautions = append(w.Cautions, rec.Cautions...)
	sortCautions(w.Cautions)
}

// fitSteps shows the fitted regimen.
func (n *numbers) fitSteps(s *slate, c *Case) {
	f, m, mn := n.fit, &c.Models[n.from], &n.models[n.from]
	p := mn.plan()
	line := f.record
	for i := range f.record.Others {
		if f.record.Parameter != Clearance && f.record.Others[i].Parameter == Clearance {
			line = &f.record.Others[i]
		}
	}
	w := float64(c.Patient.Mass.Middle)
	amount := m.Regimen.Unit.String()
	source := fmt.Sprintf("least squares on logs over %d animals, %s", line.N, tableName(c))
	s.add("Clearance of the patient by the fitted line", "CL = a·W^b", fmt.Sprintf("%s L/h × %s^%s", f6(line.A), f6(w), f6(line.B)), f.clear, "L/h", source)
	s.add("Average concentration to keep", f.averageFormula, f.averageNumbers, f.average, amount+"/L", f.record.Regimen.AverageSource)
	if p.interval > 0 {
		if f.halfLife > 0 && m.HalfLife > 0 {
			s.add("Interval by the fitted half-life", "τ' nearest to τ·t½(patient)/t½(model)", fmt.Sprintf("nearest to %s h × %s h / %s h", f6(float64(m.Regimen.Interval.Hours)), f6(f.halfLife), f6(float64(m.HalfLife))), p.interval, "h", f.record.Regimen.HalfLifeFrom)
		}
		s.add("Amount per administration", "D = Cavg·CL·τ'/F", fmt.Sprintf("%s %s/L × %s L/h × %s h / %s", f6(f.average), amount, f6(f.clear), f6(p.interval), f6(f.fraction)), p.dose[1]*w, amount, "steady state: average = F·D/(CL·τ)")
	} else {
		s.add("Amount per hour", "rate = Cavg·CL/F", fmt.Sprintf("%s %s/L × %s L/h / %s", f6(f.average), amount, f6(f.clear), f6(f.fraction)), p.dose[1]*w, amount+"/h", "steady state: concentration = rate/CL")
	}
	unit := perKgUnit(&m.Regimen)
	s.add("Dose per kg", "d' = D / Wt", fmt.Sprintf("%s %s / %s kg", f6(p.dose[1]*w), amount, f6(w)), p.dose[1], unit, "definition")
	if m := c.Patient.Mass; m.Estimated() {
		ends := fmt.Sprintf("½·ln(%s / %s)", f6(float64(m.High)), f6(float64(m.Low)))
		s.add("Standard deviation of ln dose per kg", "√(sd^2 + ((b − 1)·h/1.645)^2), h = ½·ln(high/low)",
			fmt.Sprintf("√(%s^2 + ((%s − 1) × %s / 1.645)^2)", f6(f.lineSD), f6(f.exponent), ends), mn.spread.perKg, "", f.rangeSource(line))
		s.add("Standard deviation of ln amount", "√(sd^2 + (b·h/1.645)^2)",
			fmt.Sprintf("√(%s^2 + (%s × %s / 1.645)^2)", f6(f.lineSD), f6(f.exponent), ends), mn.spread.amount, "", "the amount goes with the patient's mass^b")
	}
	for _, e := range []struct {
		name  string
		z     float64
		value float64
		sign  string
	}{
		{"Nine in ten, low end", mn.z90, mn.range90.Low, "−"}, {"Nine in ten, high end", mn.z90, mn.range90.High, ""},
		{"Even odds, low end", mn.z50, mn.range50.Low, "−"}, {"Even odds, high end", mn.z50, mn.range50.High, ""},
	} {
		s.add(e.name, "d'·exp("+e.sign+"z·sd)", fmt.Sprintf("%s %s × exp(%s%s × %s)", f6(p.dose[1]), unit, e.sign, f6(e.z), f6(mn.spread.perKg)), e.value, unit, f.rangeSource(line))
	}
}

// rangeSource says which of the two the range was taken from.
func (f *fitNumbers) rangeSource(line *FitRecord) string {
	if f.byRecord {
		return fmt.Sprintf("published record of such lines, sd 1.217 (Huh et al. 2011); wider than the line's prediction interval (standard error %s, Student t %s with %d degrees of freedom)", f6(f.ownSD), f6(f.ownT90), line.N-2)
	}
	return fmt.Sprintf("prediction interval of the line, Student t with %d degrees of freedom; wider than the published record of such lines, sd 1.217 (Huh et al. 2011)", line.N-2)
}

func tableName(c *Case) string {
	if f := c.Input.Fit.Table.File; f != "" {
		return f
	}
	return "the user's table"
}

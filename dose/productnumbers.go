package dose

import (
	"errors"
	"fmt"
	"strconv"
	"strings"

	"tayra/metabolic"
)

// Tablet says whether the product is counted in pieces.
func (s Strength) Tablet() bool { return s.Form.Pieces() }

// productNumbers is the drafted amount in the syringe.
type productNumbers struct {
	given bool // the case has a product
	n     int  // 1 for a single amount, 2 for a range: each end by itself
	ends  [2]Administration
	pump  [2]Pump
	step  float64
}

var divisibleWords = map[string]float64{"no": 1, "whole": 1, "halves": 0.5, "quarters": 0.25}

// readProduct reads the product section.
func (k *checker) readProduct(p *ProductEntry, c *Case) *Product {
	out := &Product{StrengthTyped: strings.TrimSpace(p.Strength.Text)}
	s, ok := need(k, p.Strength, p.Place, "product.strength", "write the strength, such as 50 mg/mL, 5 %, 250 mg per tablet or 1 g powder in 10 mL", ParseStrength)
	out.Input.Strength = s
	out.Input.NarrowMargin = c.Drug.Margin == Narrow
	out.Input.StepML, _ = read(k, p.Step, "product.step", metabolic.ParseLiquid)
	infusion := len(c.Input.Models) > 0 && strings.EqualFold(strings.TrimSpace(c.Input.Models[0].Interval.Text), "infusion")
	if ok && !s.Tablet() && !p.Step.Given() && !infusion {
		k.fail(p.Place, "product.step", "missing", "write the smallest step of the syringe, such as 0.1 mL")
	}
	if ok && s.Tablet() && p.Step.Given() {
		k.fail(p.Step, "product.step", "a step in mL for a tablet", "write divisible: halves or quarters, or leave it out")
	}
	if p.Divisible.Given() {
		out.Input.StepPieces = word(k, p.Divisible, "product.divisible", divisibleWords)
		if ok && !s.Tablet() {
			k.fail(p.Divisible, "product.divisible", "given for a liquid", "write step: 0.1 mL instead")
		}
	}
	out.Input.LargestPerSiteML, _ = read(k, p.LargestPerSite, "product.largest_per_site", metabolic.ParseLiquid)
	if p.Container.Given() {
		k.container(p, s, &out.Input)
	}
	if p.Days.Given() {
		d, err := strconv.ParseFloat(strings.TrimSpace(strings.TrimSuffix(strings.TrimSuffix(strings.TrimSpace(p.Days.Text), "days"), "d")), 64)
		if err != nil || !(d > 0 && d <= 3650) {
			k.fail(p.Days, "product.days", fmt.Sprintf("%q is not a number of days up to 3,650", p.Days.Text), "write a plain number, such as 7")
		}
		out.Input.Days = d
	}
	return out
}

// container reads what one bottle or box holds: mL, or a count of tablets.
func (k *checker) container(p *ProductEntry, s Strength, in *ProductInput) {
	if !s.Tablet() {
		in.ContainerML, _ = read(k, p.Container, "product.container", metabolic.ParseLiquid)
		return
	}
	f := strings.Fields(p.Container.Text)
	if len(f) > 0 {
		if v, err := strconv.ParseUint(f[0], 10, 32); err == nil && v > 0 && (len(f) == 1 || strings.HasPrefix(f[1], "tablet") || strings.HasPrefix(f[1], "capsule")) {
			in.ContainerPieces = float64(v)
			return
		}
	}
	k.fail(p.Container, "product.container", fmt.Sprintf("%q is not a number of tablets", p.Container.Text), "write how many one box holds, such as 30 tablets")
}

// computeProduct measures out the drafted amounts.
func computeProduct(c *Case, n *numbers) error {
	n.product = productNumbers{}
	if c.Product == nil {
		return nil
	}
	mn := &n.models[n.from]
	p := mn.plan()
	in := c.Product.Input
	in.IntervalH = p.interval
	unit := c.Models[n.from].Regimen.Unit
	amounts := scale(p.dose, float64(c.Patient.Mass.Middle))
	out := &n.product
	out.given, out.n = true, 1
	if amounts[0] != amounts[1] {
		out.n = 2
	}
	out.step = in.StepML
	if in.Strength.Tablet() {
		out.step = in.StepPieces
		if out.step == 0 {
			out.step = 1
		}
	}
	for i := 0; i < out.n; i++ {
		var err error
		if p.name == PlanInfusion {
			out.pump[i], err = PumpRate(amounts[i], unit, in)
			out.ends[i] = Administration{BelowStep: out.pump[i].BelowStep, Exact: out.pump[i].ExactMLPerH, ErrorPercent: out.pump[i].ErrorPercent}
			out.step = in.StepMLPerH
			if out.step == 0 {
				out.step = defaultPumpStep
			}
		} else {
			out.ends[i], err = ForSyringe(amounts[i], unit, in)
		}
		if err != nil {
			e := &InputError{File: c.Input.File, Line: c.Input.Product.Place.Line, Column: c.Input.Product.Place.Column, Field: "product", Problem: err.Error()}
			var q *metabolic.QuantityError
			if errors.As(err, &q) {
				e.Problem, e.Remedy = q.Problem, q.Remedy
			}
			return InputErrors{e}
		}
	}
	return nil
}

// productRecord writes the product down. After a stop nothing is measured out;
// where the only stop is that the volume cannot be measured, the dilution is
// named without the volume to draw.
func (n *numbers) productRecord(c *Case, w *Worksheet) {
	p := &n.product
	if !p.given {
		return
	}
	s := c.Product.Input.Strength
	r := &ProductRecord{
		StrengthTyped: c.Product.StrengthTyped, Form: [...]string{"liquid", "powder", "tablet", "capsule"}[s.Form],
		AmountPerML: s.AmountPerML, AmountPerPiece: s.AmountPerPiece, Days: c.Product.Input.Days, Rounding: "nearest",
		LargestPerSiteML: c.Product.Input.LargestPerSiteML,
	}
	if s.Tablet() {
		r.StepPieces = p.step
	} else {
		r.StepML = p.step
	}
	if c.Product.Input.NarrowMargin {
		r.Rounding = "down"
	}
	if n.stopped {
		d, unit := p.ends[0].Dilution, "mL"
		if n.models[n.from].plan().name == PlanInfusion {
			d, unit = p.pump[0].Dilution, "mL/h"
		}
		if d != nil && n.onlyStop(c, BelowStep) {
			r.Text = append(r.Text, fmt.Sprintf("The dose cannot be measured with a step of %s %s. Proposed: dilute 1 part of product in %s parts; override below-step with that as the reason, and the steps are printed.",
				metabolic.Significant(p.step, 3), unit, metabolic.Significant(d.Factor, 5)))
			w.Product = r
		}
		return
	}
	a := p.ends[p.n-1]
	if n.models[n.from].plan().name == PlanInfusion {
		r.PumpMLPerH = pointer(p.pump[p.n-1].MLPerH)
		r.Pump = append(r.Pump, p.pump[:p.n]...)
		r.DoseGiven, r.ErrorPercent = p.pump[p.n-1].AmountPerHour, p.pump[p.n-1].ErrorPercent
		if d := p.pump[p.n-1].Dilution; d != nil {
			r.DoseGiven, r.ErrorPercent = d.AmountGiven, d.ErrorPercent
		}
		w.Product = r
		return
	}
	r.Ends = append(r.Ends, p.ends[:p.n]...)
	if mass := &c.Patient.Mass; mass.Estimated() {
		k := n.models[n.from].drafted
		r.AtLowMass = measuredOut(c, n.amountAt(c, n.from, k, mass.Low))
		r.AtHighMass = measuredOut(c, n.amountAt(c, n.from, k, mass.High))
	}
	if !s.Tablet() {
		r.VolumeML = a.Measured
	} else {
		r.Pieces = a.Measured
	}
	r.DoseGiven, r.ErrorPercent = a.AmountGiven, a.ErrorPercent
	if a.BelowStep && a.Dilution != nil {
		r.DoseGiven, r.ErrorPercent = a.Dilution.AmountGiven, a.Dilution.ErrorPercent
	}
	w.Product = r
}

// measuredOut is an amount in the device of the case, each end by itself, once;
// nil where it cannot be measured out at all.
func measuredOut(c *Case, amount Pair) []Administration {
	in := c.Product.Input
	in.IntervalH, in.Days = 0, 0
	var out []Administration
	for i, x := range amount {
		if i == 1 && amount[0] == amount[1] {
			break
		}
		a, err := ForSyringe(x, c.Models[0].Regimen.Unit, in)
		if err != nil {
			return nil
		}
		out = append(out, a)
	}
	return out
}

// onlyStop says whether one stop alone keeps the dose back.
func (n *numbers) onlyStop(c *Case, slug Slug) bool {
	for i := range n.raised {
		r := &n.raised[i]
		if r.level == Stop && r.slug != slug && !overridden(c, r) {
			return false
		}
	}
	return true
}

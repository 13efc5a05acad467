package dose

import (
	"errors"
	"math"
	"slices"
	"strconv"
	"strings"
	"unicode"

	"tayra/metabolic"
)

// Form is what a product is measured in.
type Form uint8

// Forms of product.
const (
	Liquid  Form = iota // solution or suspension, in mL
	Powder              // powder, in mL once it is made up
	Tablet              // in tablets, whole or divided
	Capsule             // in capsules, never divided
)

// Pieces says whether the form is counted and not measured.
func (f Form) Pieces() bool { return f == Tablet || f == Capsule }

// Strength is the amount of drug in a mL or a piece of a product.
type Strength struct {
	Form           Form
	Unit           metabolic.AmountUnit
	AmountPerML    float64 // mg or IU per mL; of a powder, once made up
	AmountPerPiece float64 // mg or IU per tablet or capsule
	// Of a powder: what one vial holds, and the volume that it is made up
	// to. AmountPerML is their quotient: the volume after dissolving, not the
	// volume of solvent added, which is less by what the powder displaces.
	VialAmount float64
	VialML     float64
}

// densest is the amount, in mg, above which nothing that is injected or
// swallowed as a liquid holds in a mL; more is a slip of units (g for mg).
// Assumed.
const densest = 5000

const strengthRemedy = `write the strength like "50 mg/mL", "5 %", "250 mg per tablet" or "1 g powder in 10 mL"`

// ParseStrength reads the strength of a product.
//
//	50 mg/mL    250 mg per 5 mL    100000 IU/mL
//	5 %         (weight in volume, g per 100 mL: 50 mg/mL)
//	250 mg per tablet    250 mg tablets    50 mg/capsule
//	1 g powder in 10 mL    1 g in 10 mL    (a vial, once made up)
//
// Amounts are in ng, mcg (also µg, ug), mg, g and IU (also units); volumes in
// mL and L. A comma is an error that offers its readings; U for units, a ratio
// (1:1000), a dose per kg and a powder without its volume are errors that say
// what to write. The error is a [*metabolic.QuantityError].
func ParseStrength(s string) (Strength, error) {
	r := strengthText{input: s}
	strength, problem := r.parse()
	if problem != nil {
		return Strength{}, problem
	}
	return strength, nil
}

type strengthText struct{ input string }

func (r strengthText) fail(problem, remedy string) *metabolic.QuantityError {
	return &metabolic.QuantityError{Input: r.input, Problem: problem, Remedy: remedy}
}

// inherit takes over the error of a quantity that is a part of the strength.
// Advice that shows a dose per kg would mislead here.
func (r strengthText) inherit(err error) *metabolic.QuantityError {
	var q *metabolic.QuantityError
	if !errors.As(err, &q) {
		return r.fail(err.Error(), strengthRemedy)
	}
	remedy := q.Remedy
	if strings.Contains(remedy, "/kg") {
		remedy = strengthRemedy
	}
	return r.fail(q.Problem, remedy)
}

// shown is the input as far as it fits in a message.
func (r strengthText) shown() string {
	runes := []rune(strings.ToValidUTF8(r.input, "?"))
	if len(runes) > 60 {
		return strconv.Quote(string(runes[:60]) + "…")
	}
	return strconv.Quote(string(runes))
}

func (r strengthText) parse() (Strength, *metabolic.QuantityError) {
	if strings.ContainsAny(r.input, ",，") || len(r.input) > 200 || strings.ContainsFunc(r.input, hidden) {
		// Commas, hidden letters and length are refused by the rules of
		// every quantity, before the unit is looked at.
		_, err := metabolic.ParseDose(r.input)
		return Strength{}, r.inherit(err)
	}
	body := strings.Join(strings.FieldsFunc(r.input, unicode.IsSpace), " ")
	body = strings.ReplaceAll(body, " per ", "/")
	body = strings.ReplaceAll(strings.ReplaceAll(body, " /", "/"), "/ ", "/")
	switch {
	case body == "":
		return Strength{}, r.fail("nothing is written where a strength belongs", strengthRemedy)
	case strings.Contains(body, ":"):
		return Strength{}, r.fail(r.shown()+" is a ratio, which is misread tenfold", "write it in mg/mL: 1:1000 is 1 mg/mL")
	}

	if number, of, found := strings.Cut(body, "%"); found {
		return r.percent(number, strings.TrimSpace(of))
	}
	if amount, volume, found := strings.Cut(body, " in "); found {
		for _, word := range []string{" powder", " vial"} {
			amount = strings.TrimSuffix(amount, word)
		}
		return r.perVolume(Powder, amount, volume)
	}
	if amount, per, found := strings.Cut(body, "/"); found {
		if form, ok := pieceNames[strings.ToLower(per)]; ok {
			return r.perPiece(form, amount)
		}
		if per == "kg" || strings.HasPrefix(per, "kg/") {
			return Strength{}, r.fail(r.shown()+" is a dose, not a strength", strengthRemedy)
		}
		if per != "" && !strings.ContainsAny(per[:1], "0123456789.+-") {
			per = "1 " + per
		}
		return r.perVolume(Liquid, amount, per)
	}
	last := body[strings.LastIndex(body, " ")+1:]
	if form, ok := pieceNames[strings.ToLower(last)]; ok {
		return r.perPiece(form, strings.TrimSpace(strings.TrimSuffix(body, last)))
	}
	if last == "powder" || last == "vial" {
		return Strength{}, r.fail(r.shown()+" does not say what volume the powder is made up to", `write it like "1 g powder in 10 mL"`)
	}
	if _, _, problem := r.amount(body); problem != nil {
		return Strength{}, problem
	}
	return Strength{}, r.fail(r.shown()+" does not say in what volume or piece", strengthRemedy)
}

// hidden says which letters no quantity may contain.
func hidden(c rune) bool {
	return unicode.IsControl(c) || unicode.Is(unicode.Cf, c) || unicode.Is(unicode.Zl, c) || unicode.Is(unicode.Zp, c) || c == unicode.ReplacementChar
}

var pieceNames = map[string]Form{
	"tablet": Tablet, "tablets": Tablet, "tab": Tablet, "tabs": Tablet,
	"capsule": Capsule, "capsules": Capsule, "cap": Capsule, "caps": Capsule,
}

var amountNames = []string{"mg", "g", "mcg", "µg", "μg", "ug", "ng", "IU", "iu", "units", "unit"}

// amount reads "50 mg".
func (r strengthText) amount(s string) (float64, metabolic.AmountUnit, *metabolic.QuantityError) {
	unit := strings.TrimLeft(s, "0123456789.+- ")
	switch {
	case unit == "" && s != "":
		return 0, 0, r.fail(r.shown()+" has no unit", strengthRemedy)
	case unit == "U" || unit == "u":
		return 0, 0, r.fail(r.shown()+" has U for units, which is read as a nought when written by hand", `write IU, like "100000 IU/mL"`)
	}
	if !slices.Contains(amountNames, unit) {
		for _, name := range amountNames {
			if strings.EqualFold(name, unit) {
				return 0, 0, r.fail(strconv.Quote(unit)+" in "+r.shown()+" is not "+strconv.Quote(name)+": capitals change a unit", "write "+name+" if that is meant")
			}
		}
		return 0, 0, r.fail(r.shown()+" is no strength that is read here", strengthRemedy)
	}
	d, err := metabolic.ParseDose(s)
	if err != nil {
		return 0, 0, r.inherit(err)
	}
	if d.Low != d.High {
		return 0, 0, r.fail(r.shown()+" is a range", "write the strength on the label")
	}
	return d.High, d.Unit, nil
}

func (r strengthText) percent(number, of string) (Strength, *metabolic.QuantityError) {
	switch of {
	case "", "w/v":
	case "w/w", "v/v":
		return Strength{}, r.fail(r.shown()+" is not a weight in volume", "write the strength in mg/mL")
	default:
		return Strength{}, r.fail(r.shown()+" is no strength that is read here", strengthRemedy)
	}
	fraction, err := metabolic.ParseFraction(strings.TrimSpace(number) + " %")
	if err != nil {
		return Strength{}, r.inherit(err)
	}
	return Strength{Form: Liquid, Unit: metabolic.Milligram, AmountPerML: withoutNoise(1000 * fraction)}, nil
}

func (r strengthText) perVolume(form Form, amountText, volumeText string) (Strength, *metabolic.QuantityError) {
	amount, unit, problem := r.amount(amountText)
	if problem != nil {
		return Strength{}, problem
	}
	volume, err := metabolic.ParseLiquid(volumeText)
	if err != nil {
		return Strength{}, r.inherit(err)
	}
	s := Strength{Form: form, Unit: unit, AmountPerML: withoutNoise(amount / volume)}
	if unit == metabolic.Milligram && s.AmountPerML > densest {
		return Strength{}, r.fail(r.shown()+" is more than a mL can hold", "check g against mg")
	}
	if form == Powder {
		s.VialAmount, s.VialML = amount, volume
	}
	return s, nil
}

func (r strengthText) perPiece(form Form, amountText string) (Strength, *metabolic.QuantityError) {
	amount, unit, problem := r.amount(amountText)
	if problem != nil {
		return Strength{}, problem
	}
	return Strength{Form: form, Unit: unit, AmountPerPiece: amount}, nil
}

// ProductInput is the product in the cupboard, the device in the hand and the
// course in mind.
type ProductInput struct {
	Strength Strength
	// StepML is the smallest step of the syringe, mL; needed for a liquid.
	StepML float64
	// StepPieces is the smallest part of a tablet that is given: 1, 1/2 or
	// 1/4; 0 is 1.
	StepPieces float64
	// StepMLPerH is the smallest step of an infusion pump; 0 is 0.1 mL/h
	// (common practice, no source).
	StepMLPerH float64
	// LargestPerSiteML is the most to put in one place; 0 sets no limit.
	LargestPerSiteML float64
	// Days is the length of the course; 0 is not said.
	Days float64
	// IntervalH is the time between doses; 0 is a single dose.
	IntervalH float64
	// ContainerML or ContainerPieces is what one bottle, vial or box holds; 0
	// is not said, and then a powder's vial.
	ContainerML     float64
	ContainerPieces float64
	// NarrowMargin rounds down and not to the nearest step.
	NarrowMargin bool
}

// Administration is one dose measured out, and the course made of it.
// Amounts are in mg or IU as Unit says, what is measured in Measure.
type Administration struct {
	AmountAsked  float64 `json:"amount_asked"`
	Unit         string  `json:"unit"`    // mg | IU
	Measure      string  `json:"measure"` // mL | tablet | capsule
	Step         float64 `json:"step"`
	Exact        float64 `json:"exact"`    // AmountAsked/strength
	Measured     float64 `json:"measured"` // Exact, rounded to Step; 0 when under one step
	AmountGiven  float64 `json:"dose_given"`
	ErrorPercent float64 `json:"error_percent"` // 100·(given − asked)/asked
	// Sites is the volume at each place, in whole steps and as equal as steps
	// allow, none over the largest; nil for pieces.
	Sites []float64 `json:"sites_ml,omitempty"`
	// BelowStep says that the dose is under one step, so that nothing can be
	// measured: Measured and AmountGiven are 0. A Dilution is proposed for a
	// liquid unless it would have to be thinner than 1 in 10,000.
	BelowStep bool      `json:"below_step"`
	Dilution  *Dilution `json:"dilution,omitempty"`
	// The course: ceil(24·days/τ) administrations (0 when its length is not
	// said), what they need of the product in Measure (diluted afresh each
	// time when there is a dilution), and whole containers of it.
	Administrations int     `json:"administrations,omitempty"`
	Total           float64 `json:"total,omitempty"`
	Containers      int     `json:"containers,omitempty"`
}

// Dilution makes a strength of which a small dose can be measured.
type Dilution struct {
	Factor       float64        `json:"factor"` // 1 part of product in Factor parts
	Steps        []DilutionStep `json:"steps"`  // one, or two from 1 in 200 on
	AmountPerML  float64        `json:"amount_per_ml"`
	ExactML      float64        `json:"exact_ml"`
	DrawML       float64        `json:"draw_ml"` // ExactML, rounded to the step
	AmountGiven  float64        `json:"dose_given"`
	ErrorPercent float64        `json:"error_percent"`
}

// DilutionStep is: take TakeML of the product (in a second step, of what the
// first made), add AddML of diluent; this makes TotalML of AmountPerML.
type DilutionStep struct {
	TakeML      float64 `json:"take_ml"`
	AddML       float64 `json:"add_ml"`
	TotalML     float64 `json:"total_ml"`
	AmountPerML float64 `json:"amount_per_ml"`
}

const (
	// mostSteps bounds a volume in steps; more is a slip of units.
	mostSteps = 1e7
	// A dilution is drawn in at least so many steps, with at most so much
	// rounding error in percent, and its parts are measured in at least so
	// many steps, half of which is 5 % too. Assumed.
	leastDrawSteps  = 5
	mostDrawError   = 5
	leastTakeSteps  = 10
	largestOneStep  = 100 // 1 in 100 by one step, thinner by two
	defaultPumpStep = 0.1 // mL/h: common practice, no source
)

// dilutionFactors are easy to work out at the bench.
var dilutionFactors = []float64{10, 20, 50, 100, 200, 500, 1000, 2000, 5000, 10000}

// ForSyringe measures out one dose, an amount per administration in unit. The
// exact volume is amount/strength; it is rounded to the device's step, down
// when the margin is narrow, else to the nearest with ties down, after removing
// binary noise (0.3/0.1 is 3 steps). Each end of a dose range is a dose of its
// own. A dose in IU of a product in mg, or the other way about, is an error, as
// are a missing step and unusable numbers; it is a [*metabolic.QuantityError].
func ForSyringe(amount float64, unit metabolic.AmountUnit, p ProductInput) (Administration, error) {
	perMeasure, step, problem := p.check(amount, unit)
	if problem != nil {
		return Administration{}, problem
	}
	exact := amount / perMeasure
	if exact/step > mostSteps || math.IsInf(exact, 0) {
		return Administration{}, productError(number(exact)+" is far more than can be measured in steps of "+number(step), "check the dose, the strength and the step")
	}
	a := Administration{
		AmountAsked: amount, Unit: unit.String(), Measure: p.Strength.Form.measure(),
		Step: step, Exact: withoutNoise(exact),
	}
	perContainer := p.ContainerML
	if p.Strength.Form.Pieces() {
		perContainer = p.ContainerPieces
	} else if perContainer == 0 {
		perContainer = p.Strength.VialML
	}

	needed := 0.0 // of the product, at each administration
	if steps := wholeSteps(exact/step, p.NarrowMargin); exact/step >= 1-noiseAt {
		a.Measured = withoutNoise(steps * step)
		a.AmountGiven, a.ErrorPercent = given(steps*step*perMeasure, amount)
		if a.Sites, problem = p.sites(steps); problem != nil {
			return Administration{}, problem
		}
		needed = a.Measured
	} else {
		a.BelowStep, a.ErrorPercent = true, -100
		if !p.Strength.Form.Pieces() {
			var draws float64
			if a.Dilution, draws = p.dilution(amount); a.Dilution != nil {
				if a.Sites, problem = p.sites(draws); problem != nil {
					return Administration{}, problem
				}
				needed = a.Dilution.Steps[0].TakeML
			}
		}
	}

	switch {
	case p.IntervalH == 0:
		a.Administrations = 1
	case p.Days > 0:
		a.Administrations = wholeUp(24 * p.Days / p.IntervalH)
	}
	a.Total = withoutNoise(needed * float64(a.Administrations))
	if perContainer > 0 && a.Total > 0 {
		a.Containers = wholeUp(a.Total / perContainer)
	}
	return a, nil
}

// ForSyringeRange measures out both ends of a dose range, each rounded by
// itself; one [Administration] when they are equal.
func ForSyringeRange(amounts Pair, unit metabolic.AmountUnit, p ProductInput) ([]Administration, error) {
	ends := amounts[:]
	if amounts[0] == amounts[1] {
		ends = amounts[:1]
	}
	out := make([]Administration, len(ends))
	for i, amount := range ends {
		var err error
		if out[i], err = ForSyringe(amount, unit, p); err != nil {
			return nil, err
		}
	}
	return out, nil
}

// Pump is an infusion as it is set on the pump.
type Pump struct {
	ExactMLPerH   float64 `json:"exact_ml_per_h"`
	MLPerH        float64 `json:"ml_per_h"` // rounded to the pump's step; 0 when under one step
	AmountPerHour float64 `json:"amount_per_h"`
	ErrorPercent  float64 `json:"error_percent"`
	BelowStep     bool    `json:"below_step"`
	// DiluteTo is the strength, per mL, of the smallest usual dilution at
	// which the rate can be set; 0 unless BelowStep.
	DiluteTo     float64 `json:"dilute_to_per_ml,omitempty"`
	DilutePartIn float64 `json:"dilute_one_part_in,omitempty"`
	// Dilution has its steps; its DrawML is the mL/h to set. Nil unless
	// BelowStep.
	Dilution   *Dilution `json:"dilution,omitempty"`
	TotalML    float64   `json:"total_ml,omitempty"` // of the product, for the course; 0 when its length is not said
	Containers int       `json:"containers,omitempty"`
}

// PumpRate gives the rate of an infusion: amountPerHour/strength mL/h, rounded
// as [ForSyringe] rounds. Errors are as there; pieces cannot be infused.
func PumpRate(amountPerHour float64, unit metabolic.AmountUnit, p ProductInput) (Pump, error) {
	if p.Strength.Form.Pieces() {
		return Pump{}, productError("tablets and capsules cannot be infused", "give the strength of a liquid in mg/mL")
	}
	if p.StepML = p.StepMLPerH; p.StepML == 0 {
		p.StepML = defaultPumpStep
	}
	perML, step, problem := p.check(amountPerHour, unit)
	if problem != nil {
		return Pump{}, problem
	}
	exact := amountPerHour / perML
	if exact/step > mostSteps || math.IsInf(exact, 0) {
		return Pump{}, productError(number(exact)+" mL/h is no rate for a pump", "check the dose and the strength")
	}
	out := Pump{ExactMLPerH: withoutNoise(exact)}
	if exact/step >= 1-noiseAt {
		rate := wholeSteps(exact/step, p.NarrowMargin) * step
		out.MLPerH = withoutNoise(rate)
		out.AmountPerHour, out.ErrorPercent = given(rate*perML, amountPerHour)
		out.TotalML = withoutNoise(rate * 24 * p.Days)
	} else {
		out.BelowStep, out.ErrorPercent = true, -100
		if d, draws := p.dilution(amountPerHour); d != nil {
			out.DiluteTo, out.DilutePartIn, out.Dilution = d.AmountPerML, d.Factor, d
			out.TotalML = withoutNoise(draws * step / d.Factor * 24 * p.Days)
		}
	}
	perContainer := p.ContainerML
	if perContainer == 0 {
		perContainer = p.Strength.VialML
	}
	if perContainer > 0 && out.TotalML > 0 {
		out.Containers = wholeUp(out.TotalML / perContainer)
	}
	return out, nil
}

func productError(problem, remedy string) *metabolic.QuantityError {
	return &metabolic.QuantityError{Problem: problem, Remedy: remedy}
}

func number(x float64) string { return strconv.FormatFloat(x, 'g', 6, 64) }

func (f Form) measure() string {
	switch f {
	case Tablet:
		return "tablet"
	case Capsule:
		return "capsule"
	}
	return "mL"
}

// check gives the amount in one measure and the step, or what is wrong.
func (p *ProductInput) check(amount float64, unit metabolic.AmountUnit) (perMeasure, step float64, problem *metabolic.QuantityError) {
	positive := func(x float64) bool { return x > 0 && !math.IsInf(x, 0) }
	s := p.Strength
	if unit != s.Unit {
		return 0, 0, productError("the dose is in "+unit.String()+" and the strength in "+s.Unit.String()+", which are not converted into each other",
			"write both in "+unit.String()+", as the label gives them")
	}
	if !positive(amount) {
		return 0, 0, productError("the dose "+number(amount)+" "+unit.String()+" is not above 0", "write an amount above 0")
	}
	for _, x := range []float64{p.LargestPerSiteML, p.Days, p.IntervalH, p.ContainerML, p.ContainerPieces, s.VialML} {
		if x != 0 && !positive(x) {
			return 0, 0, productError(number(x)+" is neither 0 nor above", "leave it out, or write a number above 0")
		}
	}
	if s.Form.Pieces() {
		step = p.StepPieces
		if step == 0 {
			step = 1
		}
		switch {
		case step != 1 && step != 0.5 && step != 0.25:
			return 0, 0, productError("a tablet is not divided into parts of "+number(step), "write no, halves or quarters")
		case step != 1 && s.Form == Capsule:
			return 0, 0, productError("a capsule is not divided", "leave the division out, or give the strength of a tablet or a liquid")
		}
		perMeasure = s.AmountPerPiece
	} else {
		perMeasure, step = s.AmountPerML, p.StepML
		if !positive(step) {
			return 0, 0, productError("the smallest step of the syringe is missing or not above 0", `write it like "0.1 mL"`)
		}
	}
	if !positive(perMeasure) {
		return 0, 0, productError("the strength "+number(perMeasure)+" is not above 0", strengthRemedy)
	}
	return perMeasure, step, nil
}

// wholeSteps rounds x steps: down, or to the nearest with ties down. What is
// within binary noise of a whole or of a tie is taken for it.
func wholeSteps(x float64, down bool) float64 {
	noise := noiseAt + 4e-16*x
	if down {
		return math.Floor(x + noise)
	}
	return math.Ceil(x - 0.5 - noise)
}

// given is the amount that what was measured holds, and its error in percent,
// binary noise removed from both.
func given(amount, asked float64) (rounded, percent float64) {
	if math.Abs(amount-asked) <= noiseAt*asked {
		return asked, 0
	}
	return withoutNoise(amount), withoutNoise(100 * (amount - asked) / asked)
}

// withoutNoise rounds to 12 significant digits: 3·0.1 is 0.3.
func withoutNoise(x float64) float64 {
	y, err := strconv.ParseFloat(strconv.FormatFloat(x, 'g', 12, 64), 64)
	if err != nil { // x is infinite or not a number
		return x
	}
	return y
}

// sites shares a number of steps out over as few places as the largest volume
// allows. Each volume is in whole steps, so that every one of them can be
// measured: where the largest is no whole number of steps, more places may be
// needed than volume/largest.
func (p *ProductInput) sites(steps float64) ([]float64, *metabolic.QuantityError) {
	if p.Strength.Form.Pieces() {
		return nil, nil
	}
	places := 1.0
	if p.LargestPerSiteML > 0 {
		most := wholeSteps(p.LargestPerSiteML/p.StepML, true)
		if most < 1 {
			return nil, productError("the largest volume per site, "+number(p.LargestPerSiteML)+" mL, is under the syringe's step, "+number(p.StepML)+" mL", "check both, or use a finer syringe")
		}
		places = math.Ceil(steps / most)
		if places > 1000 {
			return nil, productError("the volume would need "+number(places)+" sites", "check the dose, the strength and the largest volume per site")
		}
	}
	out := make([]float64, int(places))
	each := math.Floor(steps / places)
	extra := int(steps - each*places)
	for i := range out {
		n := each
		if i < extra {
			n++
		}
		out[i] = withoutNoise(n * p.StepML)
	}
	return out, nil
}

// dilution finds the smallest usual dilution in which amount is drawn in at
// least 5 steps with an error of at most 5 %, and how many steps that is. Every
// volume in it is a whole number of steps of the syringe: 10 are taken, so that
// half a step of what is taken is within 5 % too.
func (p *ProductInput) dilution(amount float64) (*Dilution, float64) {
	for _, factor := range dilutionFactors {
		perML := p.Strength.AmountPerML / factor
		exact := amount / perML
		steps := wholeSteps(exact/p.StepML, p.NarrowMargin)
		if steps < leastDrawSteps {
			continue
		}
		amountGiven, errorPercent := given(steps*p.StepML*perML, amount)
		if math.Abs(errorPercent) > mostDrawError {
			continue
		}
		d := &Dilution{
			Factor: factor, AmountPerML: withoutNoise(perML), ExactML: withoutNoise(exact),
			DrawML: withoutNoise(steps * p.StepML), AmountGiven: amountGiven, ErrorPercent: errorPercent,
		}
		stages := []float64{factor}
		if factor > largestOneStep {
			first := math.Max(dilutionFactors[0], factor/largestOneStep)
			stages = []float64{first, factor / first}
		}
		now := p.Strength.AmountPerML
		take := leastTakeSteps * p.StepML
		for _, stage := range stages {
			now /= stage
			d.Steps = append(d.Steps, DilutionStep{
				TakeML: withoutNoise(take), AddML: withoutNoise((stage - 1) * take),
				TotalML: withoutNoise(stage * take), AmountPerML: withoutNoise(now),
			})
		}
		return d, steps
	}
	return nil, 0
}

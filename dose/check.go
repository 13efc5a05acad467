package dose

import (
	"errors"
	"fmt"
	"maps"
	"math"
	"slices"
	"strconv"
	"strings"
	"time"
	"unicode"
	"unicode/utf8"

	"tayra/metabolic"
	"tayra/species"
)

// maxPublished bounds the doses in print of one case.
const maxPublished = 50

// checker reads entries and gathers every fault, so that a form can show them
// all at once.
type checker struct {
	file string
	errs InputErrors
}

func (k *checker) fail(e Entry, field, problem, remedy string) {
	k.errs = append(k.errs, &InputError{File: k.file, Line: e.Line, Column: e.Column, Field: field, Problem: problem, Remedy: remedy})
}

// quantity reports what a parser of package metabolic found wrong.
func (k *checker) quantity(e Entry, field string, err error) {
	var q *metabolic.QuantityError
	if errors.As(err, &q) {
		k.fail(e, field, q.Problem, q.Remedy)
		return
	}
	k.fail(e, field, err.Error(), "")
}

// read parses an entry that may be absent.
func read[T any](k *checker, e Entry, field string, parse func(string) (T, error)) (v T, ok bool) {
	if !e.Given() {
		return v, false
	}
	v, err := parse(e.Text)
	if err != nil {
		k.quantity(e, field, err)
		return v, false
	}
	return v, true
}

// need parses an entry that must be there; where says at which place of the
// file to point when it is not.
func need[T any](k *checker, e, where Entry, field, remedy string, parse func(string) (T, error)) (v T, ok bool) {
	if !e.Given() || strings.TrimSpace(e.Text) == "" {
		k.fail(orPlace(e, where), field, "missing", remedy)
		return v, false
	}
	return read(k, e, field, parse)
}

func orPlace(e, where Entry) Entry {
	if e.Line == 0 {
		e.Line, e.Column = where.Line, where.Column
	}
	return e
}

// text is free text: anything that can be printed on one line.
func (k *checker) text(e Entry, field string) string {
	s := strings.TrimSpace(e.Text)
	if len(s) > maxEntryBytes {
		k.fail(e, field, fmt.Sprintf("%d bytes long", len(s)), fmt.Sprintf("write at most %d", maxEntryBytes))
		return ""
	}
	if !utf8.ValidString(s) {
		k.fail(e, field, "not valid UTF-8", "save the file as UTF-8")
		return ""
	}
	for _, r := range s {
		if r == '\n' || r == '\t' || r == '\r' {
			continue
		}
		if unicode.IsControl(r) || isUnseen(r) || r == utf8.RuneError {
			k.fail(e, field, fmt.Sprintf("holds the invisible character U+%04X", r), "retype the text without it")
			return ""
		}
	}
	return strings.Join(strings.Fields(s), " ")
}

// isUnseen says whether a rune is nothing to the eye, or turns or hides the
// letters around it: formatting and bidirectional marks, tags, variation
// selectors, separators of lines, letters that are blank by definition, and
// those that no standard gives a form.
func isUnseen(r rune) bool {
	switch r {
	case 0x034F, 0x115F, 0x1160, 0x17B4, 0x17B5, 0x3164, 0xFFA0, 0x2800:
		return true
	}
	return unicode.In(r, unicode.Cf, unicode.Zl, unicode.Zp, unicode.Co, unicode.Variation_Selector)
}

// word reads one of a few words.
func word[T any](k *checker, e Entry, field string, words map[string]T) (v T) {
	if !e.Given() {
		return v
	}
	if v, ok := words[strings.ToLower(strings.TrimSpace(e.Text))]; ok {
		return v
	}
	k.fail(e, field, fmt.Sprintf("%q is none of the words known here", e.Text), "write "+orList(slices.Sorted(maps.Keys(words))))
	return v
}

func orList(words []string) string {
	switch len(words) {
	case 0:
		return ""
	case 1:
		return words[0]
	}
	return strings.Join(words[:len(words)-1], ", ") + " or " + words[len(words)-1]
}

var (
	stageWords       = map[string]Stage{"adult": Adult, "juvenile": Juvenile, "neonate": Neonate}
	eliminationWords = map[string]Elimination{"renal": Renal, "hepatic": Hepatic, "mixed": Mixed, "biliary": Biliary, "unknown": EliminationUnknown}
	extractionWords  = map[string]Extraction{"low": LowExtraction, "medium": MediumExtraction, "high": HighExtraction, "unknown": ExtractionUnknown}
	activityWords    = map[string]Activity{"time": TimeDependent, "concentration": ConcentrationDependent, "unknown": ActivityUnknown}
	marginWords      = map[string]Margin{"wide": Wide, "narrow": Narrow, "unknown": MarginUnknown}
	answerWords      = map[string]Answer{"true": Yes, "false": No, "yes": Yes, "no": No, "unknown": NotSaid}
	formWords        = map[string]bool{"solution": false, "suspension": false, "tablet": false, "powder": false, "depot": true, "long-acting": true}
	planWords        = map[string]PlanName{"same-interval": PlanSameInterval, "same-dose": PlanSameDose, "both-adjusted": PlanBothAdjusted, "clock": PlanClock}
)

// Check reads every entry of a case: quantities parsed, animals found. The
// error is an [InputErrors] with all the faults, each with file, line, column,
// field, what is wrong and what to write instead.
func (in *CaseInput) Check() (*Case, error) {
	k := &checker{file: in.File}
	c := &Case{Input: in}
	c.ID = k.text(in.Case, "case")
	if in.Case.Given() && c.ID == "" && len(k.errs) == 0 {
		k.fail(in.Case, "case", "empty", "write the practice's own case number, or leave the line out")
	}
	c.PreparedBy = k.text(in.PreparedBy, "prepared_by")
	c.Date, _ = need(k, in.Date, Entry{}, "date", "write the date of the worksheet, such as 2026-11-30", parseDate)
	k.patient(in, c)
	k.drug(in, c)
	k.method(in, c)
	k.models(in, c)
	k.published(in, c)
	k.product(in, c)
	k.target(in, c)
	k.proposed(in, c)
	k.overrides(in, c)
	k.fitAverage(in, c)
	k.temperatures(in, c)
	if len(k.errs) > 0 {
		return nil, k.errs
	}
	k.together(in, c)
	if len(k.errs) > 0 {
		return nil, k.errs
	}
	return c, nil
}

// parseDate reads an ISO 8601 date and checks that the day exists.
func parseDate(s string) (string, error) {
	s = strings.TrimSpace(s)
	t, err := time.Parse("2006-01-02", s)
	if err != nil {
		return "", &metabolic.QuantityError{Input: s, Problem: fmt.Sprintf("%q is not a date", s), Remedy: "write year, month and day as 2026-11-30"}
	}
	if t.Year() < 1900 || t.Year() > 2200 {
		return "", &metabolic.QuantityError{Input: s, Problem: fmt.Sprintf("the year %d cannot be meant", t.Year()), Remedy: "write year, month and day as 2026-11-30"}
	}
	return s, nil
}

// animal finds a species by any of its names.
func (k *checker) animal(e, where Entry, field string) *species.Animal {
	if !e.Given() || strings.TrimSpace(e.Text) == "" {
		k.fail(orPlace(e, where), field, "missing", "write the animal's common or scientific name")
		return nil
	}
	a, err := species.Find(e.Text)
	if err == nil {
		return a
	}
	var nf *species.NotFoundError
	var am *species.AmbiguousError
	switch {
	case errors.As(err, &nf):
		remedy := "write a common or scientific name that `tayra species` finds"
		if len(nf.Near) > 0 {
			remedy = "did you mean " + orList(nf.Near) + "?"
		}
		k.fail(e, field, fmt.Sprintf("no animal called %s in the table", strconv.QuoteToGraphic(e.Text)), remedy)
	case errors.As(err, &am):
		k.fail(e, field, err.Error(), "write the scientific name")
	default:
		k.fail(e, field, err.Error(), "retype the name")
	}
	return nil
}

// patientAnimal finds the animal to be treated: any but man.
func (k *checker) patientAnimal(e, where Entry, field string) *species.Animal {
	a := k.animal(e, where, field)
	if a != nil && a.Human() {
		k.fail(e, field, "man may be a model, never the patient", "write the animal that is to be treated")
		return nil
	}
	return a
}

func (k *checker) patient(in *CaseInput, c *Case) {
	p := &in.Patient
	c.Patient.Name = k.text(p.Name, "patient.name")
	c.Patient.Animal = k.patientAnimal(p.Species, p.Place, "patient.species")
	c.Patient.Mass, _ = need(k, p.Mass, p.Place, "patient.mass", massRemedy, metabolic.ParseBodyMass)
	c.Patient.Temperature, c.Patient.HasTemperature = read(k, p.Temperature, "patient.temperature", metabolic.ParseTemperature)
	k.state(p, c)
}

const massRemedy = "write the body mass with its unit, such as 41 kg"

// state reads the words that tell what state the patient is in.
func (k *checker) state(p *PatientInput, c *Case) {
	c.Patient.Stage = word(k, p.Stage, "patient.stage", stageWords)
	for i, e := range p.Condition {
		c.Patient.Conditions |= word(k, e, fmt.Sprintf("patient.condition[%d]", i), conditionMap())
	}
	c.Patient.FoodProducing = word(k, p.FoodProducing, "patient.food_producing", answerWords)
}

func conditionMap() map[string]Condition {
	m := make(map[string]Condition, len(conditionWords))
	for _, w := range conditionWords {
		m[w.word] = w.bit
	}
	return m
}

func (k *checker) drug(in *CaseInput, c *Case) {
	d := &in.Drug
	c.Drug.Name = k.text(d.Name, "drug.name")
	if c.Drug.Name == "" && len(strings.TrimSpace(d.Name.Text)) == 0 {
		k.fail(orPlace(d.Name, d.Place), "drug.name", "missing", "write the drug's name: hazards are looked up by it")
	}
	if latinMixed(c.Drug.Name) {
		k.fail(d.Name, "drug.name", "mixes letters of two alphabets that look alike: "+strconv.QuoteToASCII(c.Drug.Name), "retype the name in one alphabet")
	}
	c.Drug.Class = k.text(d.Class, "drug.class")
	if latinMixed(c.Drug.Class) {
		k.fail(d.Class, "drug.class", "mixes letters of two alphabets that look alike: "+strconv.QuoteToASCII(c.Drug.Class), "retype the class in one alphabet")
	}
	c.Drug.Route = k.text(d.Route, "drug.route")
	c.Drug.Elimination = word(k, d.Elimination, "drug.elimination", eliminationWords)
	c.Drug.Extraction = word(k, d.Extraction, "drug.extraction", extractionWords)
	c.Drug.Activity = word(k, d.Activity, "drug.activity", activityWords)
	c.Drug.Depot, c.Drug.FormSaid = word(k, d.Formulation, "drug.formulation", formWords), d.Formulation.Given()
	c.Drug.ProteinBinding, c.Drug.HasBinding = read(k, d.ProteinBinding, "drug.protein_binding", metabolic.ParseFraction)
	c.Drug.ActiveSecretion = word(k, d.ActiveSecretion, "drug.active_secretion", answerWords)
	c.Drug.Recycling = word(k, d.EnterohepaticRecycling, "drug.enterohepatic_recycling", answerWords)
	c.Drug.Saturable = word(k, d.SaturableKinetics, "drug.saturable_kinetics", answerWords)
	c.Drug.Margin = word(k, d.Margin, "drug.margin", marginWords)
	c.Drug.Controlled = word(k, d.Controlled, "drug.controlled", answerWords)
}

// latinMixed says whether Latin letters stand beside Greek or Cyrillic ones in
// one word: a look-alike would slip past the hazard table.
func latinMixed(s string) bool {
	for _, w := range strings.FieldsFunc(s, func(r rune) bool { return !unicode.IsLetter(r) }) {
		latin, other := false, false
		for _, r := range w {
			if unicode.Is(unicode.Latin, r) {
				latin = true
			} else if unicode.Is(unicode.Greek, r) || unicode.Is(unicode.Cyrillic, r) {
				other = true
			}
		}
		if latin && other {
			return true
		}
	}
	return false
}

func (k *checker) method(in *CaseInput, c *Case) {
	m := &in.Method
	c.Method = Method{Q10: metabolic.Q10Default, Intervals: PracticalIntervals, Thresholds: DefaultThresholds()}
	if m.Basis.Given() {
		b, ok := parseBasis(strings.TrimSpace(m.Basis.Text))
		if !ok {
			k.fail(m.Basis, "method.basis", fmt.Sprintf("%q is no basis", m.Basis.Text), "write "+orList(basisNames[:]))
		}
		c.Method.Basis = b
	}
	if m.Equation.Given() {
		eq, ok := metabolic.FindEquation(strings.TrimSpace(m.Equation.Text))
		switch {
		case !ok:
			k.fail(m.Equation, "method.equation", fmt.Sprintf("no published line called %q", m.Equation.Text), "write an id that `tayra equations` lists")
		case c.Method.Basis != BasisEquation:
			k.fail(m.Equation, "method.equation", "named, but the basis is "+c.Method.Basis.String(), "write basis: equation, or leave the equation out")
		case !eq.Usable():
			k.fail(m.Equation, "method.equation", fmt.Sprintf("%s is for display only (%s, %s)", eq.ID, eq.Kind, eq.Level), "write an inter-specific line of basal or standard rates")
		}
		c.Method.Equation = eq
	}
	c.Method.Plan = word(k, m.Plan, "method.plan", planWords)
	if len(m.Intervals) > 0 {
		c.Method.Intervals = make([]metabolic.Hours, 0, len(m.Intervals))
		for i, e := range m.Intervals {
			h, ok := read(k, e, fmt.Sprintf("method.intervals[%d]", i), metabolic.ParseDuration)
			if ok && (h < 1 || h > 8760) {
				k.fail(e, fmt.Sprintf("method.intervals[%d]", i), "an interval of "+e.Text+" is outside 1 h to 365 d", "write intervals in that span")
				ok = false
			}
			if ok {
				c.Method.Intervals = append(c.Method.Intervals, h)
			}
		}
	}
	if m.Q10.Given() {
		q, err := strconv.ParseFloat(strings.TrimSpace(m.Q10.Text), 64)
		if err != nil || !(q >= metabolic.Q10Low && q <= metabolic.Q10High) {
			k.fail(m.Q10, "method.q10", fmt.Sprintf("%q is not a Q10 from 1.5 to 4", m.Q10.Text), "write a plain number; published values run from 2.4 to 2.65, the default is 2.5")
		} else {
			c.Method.Q10 = q
		}
	}
	defaults := DefaultThresholds()
	for _, t := range m.Thresholds {
		field := "method.thresholds." + t.Name.Text
		i := findThreshold(t.Name.Text)
		if i < 0 {
			k.fail(t.Name, field, "no threshold of this name", "write "+orList(thresholdNames()))
			continue
		}
		f := thresholdFields[i]
		v, err := strconv.ParseFloat(strings.TrimSpace(t.Value.Text), 64)
		if err != nil || !(v >= f.min && v <= f.max) {
			k.fail(t.Value, field, fmt.Sprintf("%q is not a number from %s to %s", t.Value.Text, metabolic.Significant(f.min, 4), metabolic.Significant(f.max, 7)),
				"the default is "+metabolic.Significant(*f.of(&defaults), 4))
			continue
		}
		*f.of(&c.Method.Thresholds) = v
		if v != *f.of(&defaults) {
			d := *f.of(&defaults)
			c.Method.Changed = append(c.Method.Changed, ChangedThreshold{Name: f.name, Value: v, Default: d, Loosened: (v > d) != f.below})
		}
	}
}

func findThreshold(name string) int {
	for i := range thresholdFields {
		if thresholdFields[i].name == name {
			return i
		}
	}
	return -1
}

func thresholdNames() []string {
	out := make([]string, len(thresholdFields))
	for i := range thresholdFields {
		out[i] = thresholdFields[i].name
	}
	return out
}

func (k *checker) models(in *CaseInput, c *Case) {
	if len(in.Models) == 0 {
		k.fail(Entry{Line: 0}, "models", "missing", "write at least one model species with its mass, dose, interval and source")
		return
	}
	if len(in.Models) > maxModels {
		k.fail(in.Models[maxModels].Place, "models", fmt.Sprintf("%d models", len(in.Models)), fmt.Sprintf("write at most %d", maxModels))
		return
	}
	c.Models = make([]Model, len(in.Models))
	for i := range in.Models {
		k.model(&in.Models[i], fmt.Sprintf("models[%d].", i), &c.Models[i])
	}
}

func (k *checker) model(in *ModelInput, at string, m *Model) {
	m.Animal = k.animal(in.Species, in.Place, at+"species")
	massOK := false
	m.Mass, massOK = need(k, in.Mass, in.Place, at+"mass", "write the model animal's body mass with its unit, such as 18 kg", metabolic.ParseBodyMass)
	m.Temperature, m.HasTemperature = read(k, in.Temperature, at+"temperature", metabolic.ParseTemperature)
	m.Route = k.text(in.Route, at+"route")
	d, doseOK := need(k, in.Dose, in.Place, at+"dose", "write the known dose with its unit, such as 10 mg/kg", metabolic.ParseDose)
	iv, ivOK := need(k, in.Interval, in.Place, at+"interval", "write the known interval, such as q12h, once or infusion", metabolic.ParseInterval)
	if doseOK && ivOK && massOK && m.Animal != nil {
		k.regimen(in.Dose, in.Interval, at, d, iv, m.Animal, m.Mass, &m.Regimen)
	}
	if ld, ok := read(k, in.LoadingDose, at+"loading_dose", metabolic.ParseDose); ok {
		var r Regimen
		if massOK && m.Animal != nil && k.regimen(in.LoadingDose, in.Interval, at+"loading_dose:", ld, metabolic.Interval{Kind: metabolic.Once}, m.Animal, m.Mass, &r) {
			p := r.PerKg
			m.LoadingPerKg, m.LoadingPerHead = &p, r.PerAnimal
			if doseOK && r.Unit != m.Regimen.Unit {
				k.fail(in.LoadingDose, at+"loading_dose", "is in other units than the dose", "write both in mg or both in IU")
			}
			if ivOK && iv.Kind == metabolic.Once {
				k.fail(in.LoadingDose, at+"loading_dose", "given with interval: once", "leave it out, or write the maintenance interval")
			}
		}
	}
	m.HalfLife, _ = read(k, in.HalfLife, at+"half_life", metabolic.ParseDuration)
	m.VolumePerKg, _ = read(k, in.Volume, at+"volume", metabolic.ParseVolumePerKg)
	m.Fraction, _ = read(k, in.Bioavailability, at+"bioavailability", metabolic.ParseFraction)
	m.AbsorptionHalf, _ = read(k, in.AbsorptionHalfLife, at+"absorption_half_life", metabolic.ParseDuration)
	if m.HalfLife == 0 && !in.HalfLife.Given() {
		for _, x := range []struct {
			e Entry
			n string
		}{{in.Volume, "volume"}, {in.AbsorptionHalfLife, "absorption_half_life"}} {
			if x.e.Given() {
				k.fail(x.e, at+x.n, "given without a half-life", "write half_life too, or leave it out: no concentration follows from it alone")
			}
		}
	}
	if in.Tolerated.Dose.Given() || in.Tolerated.Source.Given() {
		t, ok := need(k, in.Tolerated.Dose, in.Tolerated.Place, at+"tolerated.dose", "write the highest dose that was tolerated, such as 40 mg/kg", metabolic.ParseDose)
		if strings.TrimSpace(in.Tolerated.Source.Text) == "" {
			k.fail(orPlace(in.Tolerated.Source, in.Tolerated.Place), at+"tolerated.source", "missing", "write where the tolerated maximum was read")
		}
		src := k.text(in.Tolerated.Source, at+"tolerated.source")
		if ok {
			if t.Per != metabolic.PerKg || t.Low != t.High {
				k.fail(in.Tolerated.Dose, at+"tolerated.dose", "is not a single dose per kg", "write it as 40 mg/kg")
			} else {
				m.Tolerated = &Tolerated{PerKg: t.High, Unit: t.Unit, Typed: strings.TrimSpace(in.Tolerated.Dose.Text), Source: src}
				if doseOK && t.Unit != d.Unit {
					k.fail(in.Tolerated.Dose, at+"tolerated.dose", "is in other units than the dose", "write both in mg or both in IU")
				}
			}
		}
	}
	m.Source = k.text(in.Source, at+"source")
	if m.Source == "" && strings.TrimSpace(in.Source.Text) == "" {
		k.fail(orPlace(in.Source, in.Place), at+"source", "missing", "write where the known dose was read: a dose without a source is not scaled")
	}
}

// regimen turns a dose and an interval as typed into a dose per kg (for an
// infusion per kg and hour), with the steps that lead there.
func (k *checker) regimen(de, ie Entry, at string, d metabolic.Dose, iv metabolic.Interval, a *species.Animal, mass metabolic.BodyMass, r *Regimen) bool {
	field := at + "dose"
	if strings.HasSuffix(at, ":") {
		field = strings.TrimSuffix(at, ":")
	}
	*r = Regimen{Typed: strings.TrimSpace(de.Text), IntervalTyped: strings.TrimSpace(ie.Text), Given: d, Unit: d.Unit, Interval: iv}
	p := Pair{d.Low, d.High}
	if iv.Kind == metabolic.Repeated && (iv.Hours < 0.25 || iv.Hours > 8760) {
		k.fail(ie, at+"interval", "an interval of "+metabolic.Significant(float64(iv.Hours), 4)+" h is outside 15 min to 365 d", "write intervals in that span")
		return false
	}
	if (iv.Kind == metabolic.Infusion) != (d.Per == metabolic.PerKgHour) {
		if iv.Kind == metabolic.Infusion {
			k.fail(de, field, "an infusion needs a rate", "write it per kg and hour or minute, such as 2 mg/kg/h or 5 mcg/kg/min")
		} else {
			k.fail(de, field, "a rate per hour needs interval: infusion", "write interval: infusion, or a dose such as 10 mg/kg")
		}
		return false
	}
	switch d.Per {
	case metabolic.PerKg, metabolic.PerKgHour:
	case metabolic.PerAnimal:
		r.PerAnimal = true
		p = scale(p, 1/float64(mass.Middle))
	case metabolic.PerKgDay:
		if iv.Kind != metabolic.Repeated {
			k.fail(de, field, "a daily amount needs an interval in hours", "write the interval at which it is divided, such as q12h")
			return false
		}
		p = scale(p, float64(iv.Hours)/24)
	case metabolic.PerSquareMetre:
		f, ok := perKgFromArea(a, mass.Middle)
		if !ok {
			k.fail(de, field, "no published constant of body surface for a "+animalWords(a), "write the dose per kg; dose per m² is read for dog, cat, rabbit and man only")
			return false
		}
		p = scale(p, f)
	}
	if !(p[0] > 0) || math.IsInf(p[1], 0) || p[1] > 1e12 {
		k.fail(de, field, "cannot be carried as a dose per kg", "write a dose that a balance could weigh")
		return false
	}
	r.PerKg = p
	return true
}

func (k *checker) published(in *CaseInput, c *Case) {
	if len(in.Published) > maxPublished {
		k.fail(in.Published[maxPublished].Place, "published", fmt.Sprintf("%d doses", len(in.Published)), fmt.Sprintf("write at most %d", maxPublished))
		return
	}
	for i := range in.Published {
		p := &in.Published[i]
		at := fmt.Sprintf("published[%d].", i)
		out := Published{Animal: k.animal(p.Species, p.Place, at+"species"), Route: k.text(p.Route, at+"route"), Source: k.text(p.Source, at+"source")}
		d, ok := need(k, p.Dose, p.Place, at+"dose", "write the dose in print, such as 9 mg/kg", metabolic.ParseDose)
		iv, ivOK := need(k, p.Interval, p.Place, at+"interval", "write the interval in print, such as q12h or once", metabolic.ParseInterval)
		if strings.TrimSpace(p.Source.Text) == "" {
			k.fail(orPlace(p.Source, p.Place), at+"source", "missing", "write where the dose was read")
		}
		if ok && ivOK && out.Animal != nil {
			r := Regimen{Typed: strings.TrimSpace(p.Dose.Text), IntervalTyped: strings.TrimSpace(p.Interval.Text), Given: d, Unit: d.Unit, Interval: iv}
			switch d.Per {
			case metabolic.PerKg, metabolic.PerKgHour:
				r.PerKg, out.HasPerKg = Pair{d.Low, d.High}, true
			case metabolic.PerKgDay:
				if iv.Kind == metabolic.Repeated {
					r.PerKg, out.HasPerKg = scale(Pair{d.Low, d.High}, float64(iv.Hours)/24), true
				}
			}
			out.Regimen = r
		}
		c.Published = append(c.Published, out)
	}
}

func (k *checker) product(in *CaseInput, c *Case) {
	p := &in.Product
	if p.IsZero() {
		return
	}
	c.Product = k.readProduct(p, c)
}

func (k *checker) target(in *CaseInput, c *Case) {
	t := &in.Target
	if t.IsZero() {
		return
	}
	conc, ok := need(k, t.Concentration, t.Place, "target.concentration", "write a concentration such as 2 mg/L", metabolic.ParseConcentration)
	src := k.text(t.Source, "target.source")
	if strings.TrimSpace(t.Source.Text) == "" {
		k.fail(orPlace(t.Source, t.Place), "target.source", "missing", "write where the target was read")
	}
	if ok {
		c.Target = &Target{Typed: strings.TrimSpace(t.Concentration.Text), Concentration: conc, Source: src}
	}
}

// fitAverage reads the concentration that a fitted dose is to reach.
func (k *checker) fitAverage(in *CaseInput, c *Case) {
	if in.Fit == nil || !in.Fit.Average.Given() {
		return
	}
	if conc, ok := read(k, in.Fit.Average, "average", metabolic.ParseConcentration); ok {
		src := k.text(in.Fit.Source, "average_source")
		if src == "" {
			k.fail(in.Fit.Source, "average_source", "missing", "write where the concentration was read")
		}
		c.FitAverage = &Target{Typed: strings.TrimSpace(in.Fit.Average.Text), Concentration: conc, Source: src}
	}
}

func (k *checker) proposed(in *CaseInput, c *Case) {
	p := &in.Proposed
	if p.IsZero() {
		return
	}
	d, ok := need(k, p.Dose, p.Place, "proposed.dose", "write the proposed dose, such as 8 mg/kg", metabolic.ParseDose)
	iv, ivOK := need(k, p.Interval, p.Place, "proposed.interval", "write the proposed interval, such as q8h", metabolic.ParseInterval)
	if ok && ivOK && c.Patient.Animal != nil && c.Patient.Mass.Middle > 0 {
		var r Regimen
		if k.regimen(p.Dose, p.Interval, "proposed.", d, iv, c.Patient.Animal, c.Patient.Mass, &r) {
			c.Proposed = &r
		}
	}
}

// minReason is how many letters a written reason has at least: a few words.
const minReason = 12

func (k *checker) overrides(in *CaseInput, c *Case) {
	seen := map[string]bool{}
	for _, o := range in.Overrides {
		slug := strings.TrimSpace(o.Name.Text)
		field := "overrides." + slug
		reason := k.text(o.Value, field)
		switch {
		case slug == "":
			k.fail(o.Name, "overrides", "an override without a caution's name", "write the slug of the stop, such as narrow-margin")
		case seen[slug]:
			k.fail(o.Name, field, "named twice", "write one reason")
		case CannotOverride(slug):
			k.fail(o.Name, field, "this stop cannot be overridden", "correct the case instead")
		case utf8.RuneCountInString(reason) < minReason || len(strings.Fields(reason)) < 2:
			k.fail(orPlace(o.Value, o.Name), field, "the reason is too short to mean anything later", "write in a few words why the stop does not hold here")
		default:
			c.Overrides = append(c.Overrides, Override{Slug: slug, Reason: reason, Entry: o.Name})
		}
		seen[slug] = true
	}
}

// Temperatures of the body between which an ectotherm's rate is carried.
const (
	minBodyTemperature = 10
	maxBodyTemperature = 40
)

// temperatures asks for the body temperature of every ectotherm.
func (k *checker) temperatures(in *CaseInput, c *Case) {
	one := func(a *species.Animal, t metabolic.Celsius, has bool, e, where Entry, field string) {
		if a == nil || e.Given() && !has {
			return
		}
		switch {
		case a.Endotherm():
			if has && (t < 0 || t > 50) {
				k.fail(e, field, "a body temperature of "+metabolic.FormatCelsius(t)+" cannot be meant", "write the body temperature in °C, or leave it out")
			}
		case !has:
			remedy := "write the body temperature of this animal, such as 30 °C: the rate doubles about every 8 °C"
			k.fail(orPlace(e, where), field, "missing: a "+animalWords(a)+" has the metabolic rate of its body temperature", remedy)
		case t < minBodyTemperature || t > maxBodyTemperature:
			k.fail(e, field, metabolic.FormatCelsius(t)+" is outside 10 to 40 °C", "the rate is not carried beyond those temperatures")
		}
	}
	one(c.Patient.Animal, c.Patient.Temperature, c.Patient.HasTemperature, in.Patient.Temperature, in.Patient.Place, "patient.temperature")
	for i := range c.Models {
		m := &c.Models[i]
		one(m.Animal, m.Temperature, m.HasTemperature, in.Models[i].Temperature, in.Models[i].Place, fmt.Sprintf("models[%d].temperature", i))
	}
}

// together checks what only several entries show.
func (k *checker) together(in *CaseInput, c *Case) {
	first := &c.Models[0]
	for i := 1; i < len(c.Models); i++ {
		m := &c.Models[i]
		if m.Regimen.Unit != first.Regimen.Unit {
			k.fail(in.Models[i].Dose, fmt.Sprintf("models[%d].dose", i), "is in other units than the first model's", "write all models in mg or all in IU")
		}
		if m.Regimen.Interval.Kind != first.Regimen.Interval.Kind {
			k.fail(in.Models[i].Interval, fmt.Sprintf("models[%d].interval", i), "is another kind of regimen than the first model's", "write all models repeated, all once or all as infusions")
		}
		if m.Route != "" && first.Route != "" && !sameRoute(m.Route, first.Route) {
			k.fail(in.Models[i].Route, fmt.Sprintf("models[%d].route", i), fmt.Sprintf("%s, where the first model has %s", m.Route, first.Route), "several models need one drug and one route; draft the others in a case of their own")
		}
	}
	for i := range c.Models {
		m := &c.Models[i]
		r := &m.Regimen
		if c.Proposed != nil && c.Proposed.Unit != r.Unit {
			k.fail(in.Proposed.Dose, "proposed.dose", "is in other units than the model's dose", "write both in mg or both in IU")
			break
		}
		if c.Proposed != nil && (c.Proposed.Interval.Kind == metabolic.Infusion) != (r.Interval.Kind == metabolic.Infusion) {
			k.fail(in.Proposed.Interval, "proposed.interval", "an infusion is not held against repeated doses", "write the same kind of regimen as the model's")
			break
		}
		if c.Target != nil && c.Target.Concentration.Unit != r.Unit {
			k.fail(in.Target.Concentration, "target.concentration", "is in other units than the dose", "write both in mg or both in IU")
			break
		}
	}
	if p := c.Product; p != nil && p.Input.Strength.Unit != first.Regimen.Unit {
		k.fail(in.Product.Strength, "product.strength", "is in other units than the dose", "write both in mg or both in IU")
	}
	if p := c.Published; len(p) > 0 {
		for i := range p {
			if p[i].Regimen.Unit != first.Regimen.Unit {
				k.fail(in.Published[i].Dose, fmt.Sprintf("published[%d].dose", i), "is in other units than the model's dose", "write both in mg or both in IU")
			}
		}
	}
}

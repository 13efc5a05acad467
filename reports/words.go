package reports

import (
	"fmt"
	"math"
	"regexp"
	"slices"
	"strings"
	"sync"
	"unicode"
	"unicode/utf8"

	"golang.org/x/text/width"

	"tayra/dose"
	"tayra/metabolic"
)

// The wording that the writers share: how a value of the record is said, so
// that the terminal and the paper say it alike. Every number is printed by
// package metabolic; what is decided here is which words stand around it.

// unitOf reads the unit of a dose as the record spells it: mg/kg, IU/kg, with
// /h for an infusion.
func unitOf(unit string) (amount metabolic.AmountUnit, perHour bool) {
	if strings.HasPrefix(unit, "IU") {
		amount = metabolic.InternationalUnit
	}
	return amount, strings.HasSuffix(unit, "/h")
}

// perKgWords says a dose per kg: "8.14 mg/kg", "3,000 units/kg", "2 mg/kg/h".
func perKgWords(v float64, unit string) string {
	amount, perHour := unitOf(unit)
	return metabolic.FormatDosePerKg(v, amount, perHour)
}

// perKgPair says both ends of a dose per kg, or the one dose.
func perKgPair(p dose.Pair, unit string) string {
	return metabolic.FormatRange(p[0], p[1], func(v float64) string { return perKgWords(v, unit) })
}

// perKgRange says an interval about a dose per kg.
func perKgRange(r dose.DoseRange, unit string) string {
	return perKgPair(dose.Pair{r.Low, r.High}, unit)
}

// dailyWords says a daily amount per kg: "16.3 mg/kg/day". The unit is that of
// the dose, without its hour.
func dailyWords(v float64, unit string) string {
	amount, _ := unitOf(unit)
	return metabolic.FormatDosePerKg(v, amount, false) + "/day"
}

// dailyPair says both ends of a daily amount, or nothing where there is none.
func dailyPair(p *dose.Pair, unit string) string {
	if p == nil {
		return ""
	}
	return metabolic.FormatRange(p[0], p[1], func(v float64) string { return dailyWords(v, unit) })
}

// amountWords says an amount per administration, of an infusion per hour.
func amountWords(v float64, unit string) string {
	amount, perHour := unitOf(unit)
	s := metabolic.FormatAmount(v, amount)
	if perHour {
		s += "/h"
	}
	return s
}

// intervalOf gives back the interval that a kind of regimen and its hours name.
func intervalOf(kind string, hours *float64) metabolic.Interval {
	switch {
	case hours != nil:
		return metabolic.Interval{Kind: metabolic.Repeated, Hours: metabolic.Hours(*hours)}
	case kind == "infusion":
		return metabolic.Interval{Kind: metabolic.Infusion}
	}
	return metabolic.Interval{Kind: metabolic.Once}
}

// intervalWords says an interval: "every 12 hours", "once", "continuous
// infusion". kind is that of a model's regimen or the name of a plan.
func intervalWords(kind string, hours *float64) string {
	return metabolic.FormatInterval(intervalOf(kind, hours))
}

// intervalBothWords adds the short form that orders are written in, where it
// says the same: "every 12 hours (q12h)".
func intervalBothWords(kind string, hours *float64) string {
	i := intervalOf(kind, hours)
	s := metabolic.FormatInterval(i)
	if i.Kind == metabolic.Repeated && float64(i.Hours) == math.Trunc(float64(i.Hours)) && i.Hours <= 48 {
		s += " (" + metabolic.FormatShortInterval(i) + ")"
	}
	return s
}

// measuredWords says what a device measured out. It is a whole number of the
// device's steps and printed in full: at 3 digits 12.35 mL in steps of 0.05 mL
// would read 12.4 mL, which that device cannot measure.
func measuredWords(v float64, measure string) string {
	const figures = 7 // as many steps as a device has, and more
	s := metabolic.Significant(v, figures)
	switch {
	case measure == "mL" || measure == "mL/h":
		return s + " " + measure
	case v <= 1:
		return s + " " + measure
	}
	return s + " " + measure + "s"
}

// exactWords says what would have to be measured, before rounding.
func exactWords(v float64, measure string) string {
	s := metabolic.Significant(v, 4) + " " + measure
	if measure != "mL" && v > 1 {
		s += "s"
	}
	return s
}

// amountName is the unit of a strength, which keeps one unit however small it
// is: 0.025 mg/mL stands below 5 mg/mL, and no factor of a thousand hides in a
// change from mg to mcg.
func amountName(unit string) string {
	if amount, _ := unitOf(unit); amount == metabolic.InternationalUnit {
		return "units"
	}
	return "mg"
}

// strengthFigures are as many as a label has, and more.
const strengthFigures = 7

// perMLWords says a strength: "50 mg/mL".
func perMLWords(v float64, unit string) string {
	return metabolic.Significant(v, strengthFigures) + " " + amountName(unit) + "/mL"
}

// strengthWords says the strength of a product: "50 mg/mL", of a tablet or
// capsule "250 mg".
func strengthWords(p *dose.ProductRecord, unit string) string {
	if p.AmountPerPiece > 0 {
		return metabolic.Significant(p.AmountPerPiece, strengthFigures) + " " + amountName(unit)
	}
	return perMLWords(p.AmountPerML, unit)
}

// errorWords says how far a rounded dose is from the one asked for: "0.378 %
// more than drafted".
func errorWords(percent float64) string {
	switch s := metabolic.FormatPercent(math.Abs(percent) / 100); {
	case s == "0 %":
		return "exactly as drafted"
	case percent > 0:
		return s + " more than drafted"
	default:
		return s + " less than drafted"
	}
}

// giveWords says what to measure out for a dose: "6.7 mL of 50 mg/mL
// (335 mg)", both ends for a dose range. It is empty where nothing can be
// measured.
func giveWords(p *dose.ProductRecord, unit string) string {
	if p == nil {
		return ""
	}
	if n := len(p.Pump); n > 0 {
		low, high := &p.Pump[0], &p.Pump[n-1]
		rate, of := dose.Pair{low.MLPerH, high.MLPerH}, strengthWords(p, unit)
		held := dose.Pair{low.AmountPerHour, high.AmountPerHour}
		switch {
		case low.Dilution != nil && high.Dilution != nil && low.Dilution.Factor == high.Dilution.Factor:
			a, b := low.Dilution, high.Dilution
			rate, of, held = dose.Pair{a.DrawML, b.DrawML}, dilutedWords(a.Factor), dose.Pair{a.AmountGiven, b.AmountGiven}
		case low.BelowStep || high.BelowStep:
			return ""
		}
		return measuredPair(rate, "mL/h") + " of " + of + " (" + amountPair(held, unit) + ")"
	}
	n := len(p.Ends)
	if n == 0 {
		return ""
	}
	low, high := &p.Ends[0], &p.Ends[n-1]
	switch {
	case low.Dilution != nil && high.Dilution != nil && low.Dilution.Factor == high.Dilution.Factor:
		return volumeWords(p.Ends) + " (" + amountPair(dose.Pair{low.Dilution.AmountGiven, high.Dilution.AmountGiven}, unit) + ")"
	case low.BelowStep || high.BelowStep:
		return ""
	}
	return volumeWords(p.Ends) + " of " + strengthWords(p, unit) + " (" + amountPair(dose.Pair{low.AmountGiven, high.AmountGiven}, unit) + ")"
}

// measuredPair says both ends of what a device measured out. The word of
// tablets follows the larger: "0.5 to 1.5 tablets".
func measuredPair(p dose.Pair, measure string) string {
	if p[0] == p[1] {
		return measuredWords(p[1], measure)
	}
	number, _, _ := strings.Cut(measuredWords(p[0], measure), " ")
	return number + " to " + measuredWords(p[1], measure)
}

// volumeWords says what a device measured out for a dose, both ends for a dose
// range: "0.8 mL", "0.5 to 1.5 tablets", "0.15 mL of the product diluted 1 in
// 200". Ends that are measured in two ways are said one by one.
func volumeWords(ends []dose.Administration) string {
	one := func(a *dose.Administration) string {
		switch {
		case a.Dilution != nil:
			return measuredWords(a.Dilution.DrawML, "mL") + " of " + dilutedWords(a.Dilution.Factor)
		case a.BelowStep && a.Measure != "mL":
			return "less than the smallest part of a " + a.Measure
		case a.BelowStep:
			return "less than can be measured"
		}
		return measuredWords(a.Measured, a.Measure)
	}
	n := len(ends)
	if n == 0 {
		return ""
	}
	low, high := &ends[0], &ends[n-1]
	switch {
	case n == 1 || one(low) == one(high):
		return one(high)
	case !low.BelowStep && !high.BelowStep:
		return measuredPair(dose.Pair{low.Measured, high.Measured}, high.Measure)
	case low.Dilution != nil && high.Dilution != nil && low.Dilution.Factor == high.Dilution.Factor:
		return measuredPair(dose.Pair{low.Dilution.DrawML, high.Dilution.DrawML}, "mL") + " of " + dilutedWords(low.Dilution.Factor)
	}
	return "low end " + one(low) + ", high end " + one(high)
}

func dilutedWords(factor float64) string { return "the product diluted " + dilutionWords(factor) }

// mixingWords says how a dilution is made, a step each, and last what is drawn
// from it or, perHour, set on the pump.
func mixingWords(d *dose.Dilution, unit string, perHour bool) []string {
	var out []string
	of := "the product"
	for i := range d.Steps {
		x := &d.Steps[i]
		out = append(out, fmt.Sprintf("Take %s of %s, add diluent %s: %s of %s. Label it.",
			measuredWords(x.TakeML, "mL"), of, measuredWords(x.AddML, "mL"), measuredWords(x.TotalML, "mL"), perMLWords(x.AmountPerML, unit)))
		of = "that"
	}
	do, measure, more := "Draw", "mL", ""
	if perHour {
		do, measure, more = "Set the pump to", "mL/h", " To fill a larger syringe or bag, keep the proportions."
	}
	return append(out, fmt.Sprintf("%s %s (exactly %s %s): %s, %s.%s", do, measuredWords(d.DrawML, measure),
		metabolic.Significant(d.ExactML, 4), measure, amountWords(d.AmountGiven, unit), errorWords(d.ErrorPercent), more))
}

// dilutionWords says a dilution: "1 in 20".
func dilutionWords(factor float64) string { return "1 in " + metabolic.Significant(factor, 7) }

// orderWords is the first line of a draft, as an order is written: drug,
// amount, route, interval in words.
func orderWords(ws *dose.Worksheet) string {
	d := ws.Drafted
	s := ws.Drug.Name + " " + amountPair(d.PerAdministration, d.Unit)
	if d.Route != "" {
		s += " " + d.Route
	}
	return s + " " + intervalBothWords(d.Plan, d.IntervalH)
}

// massChoices says the amount at the ends of an estimated mass: "303 mg if it
// weighs 36 kg, 366 mg if 46 kg". It is empty for a weighed mass.
func massChoices(ws *dose.Worksheet, low, high *dose.Pair, unit string) string {
	if low == nil || high == nil {
		return ""
	}
	p := &ws.Patient
	mass, amount := massesIn(massDigits, p.MassLowKg, p.MassHighKg), amountsIn(unit, *low, *high)
	return fmt.Sprintf("%s if it weighs %s, %s if %s", amount(*low), mass(p.MassLowKg), amount(*high), mass(p.MassHighKg))
}

// massEnds says the draft at both ends of an estimated mass, a sentence each:
// "If it weighs 1.2 kg: 7.81 mg, 6.51 mg/kg, 0.8 mL." There are none for a weighed
// mass.
func massEnds(ws *dose.Worksheet) []string {
	d, p := ws.Drafted, &ws.Patient
	if d == nil || d.AtLowMass == nil || d.AtHighMass == nil {
		return nil
	}
	mass, amount := massesIn(massDigits, p.MassLowKg, p.MassHighKg), amountsIn(d.Unit, *d.AtLowMass, *d.AtHighMass)
	end := func(kg float64, at dose.Pair, measured func(*dose.ProductRecord) []dose.Administration) string {
		parts := []string{amount(at)}
		if kg > 0 {
			parts = append(parts, perKgPair(dose.Pair{at[0] / kg, at[1] / kg}, d.Unit))
		}
		if ws.Product != nil {
			if v := volumeWords(measured(ws.Product)); v != "" {
				parts = append(parts, v)
			}
		}
		return "If it weighs " + mass(kg) + ": " + strings.Join(parts, ", ") + "."
	}
	return []string{
		end(p.MassLowKg, *d.AtLowMass, func(r *dose.ProductRecord) []dose.Administration { return r.AtLowMass }),
		end(p.MassHighKg, *d.AtHighMass, func(r *dose.ProductRecord) []dose.Administration { return r.AtHighMass }),
	}
}

// loadingWords says a loading dose: the order, with what to measure out, and
// how far off it may be; the order is empty where none is drafted.
func loadingWords(ws *dose.Worksheet) (order, about string) {
	l := ws.Loading
	if l == nil || l.DosePerKg == nil || l.PerAdministration == nil {
		return "", ""
	}
	order = "Loading dose, once, first: " + amountPair(*l.PerAdministration, l.Unit) + " (" + perKgPair(*l.DosePerKg, l.Unit) + ")"
	if v := volumeWords(l.Measured); v != "" {
		order += " = " + v
		if sites := len(l.Measured[len(l.Measured)-1].Sites); sites > 1 {
			order += fmt.Sprintf(", divided over %d sites", sites)
		}
	}
	order += "."
	var parts []string
	if r := l.Range90; r != nil {
		s := "nine times in ten " + perKgRange(*r, l.Unit)
		if l.Range90Amount != nil {
			s += ", " + amountRange(*l.Range90Amount, l.Unit)
		}
		parts = append(parts, s)
	}
	if s := massChoices(ws, l.AtLowMass, l.AtHighMass, l.Unit); s != "" {
		parts = append(parts, s)
	}
	if len(parts) > 0 {
		about = capital(strings.Join(parts, "; ")) + "."
	}
	return order, about
}

// outrankedWords says that a dose is in print for this very species, each with
// its source; empty where there is none, or no draft for it to outrank.
func outrankedWords(ws *dose.Worksheet) string {
	if ws.Drafted == nil || ws.Drafted.Outranked == "" {
		return ""
	}
	var doses []string
	for i := range ws.Published {
		if p := &ws.Published[i]; p.Relation == "species" {
			doses = append(doses, publishedWords(p)+" ("+p.Source+")")
		}
	}
	if len(doses) == 0 {
		return ws.Drafted.Outranked
	}
	return "A dose is published for this species, and outranks this draft: " + strings.Join(doses, "; ") + "."
}

// publishedWords says a dose in print: "4 mg/kg PO every 24 hours".
func publishedWords(p *dose.PublishedDose) string {
	s := asGiven(p.DoseTyped)
	if p.DosePerKg != nil {
		s = perKgPair(*p.DosePerKg, p.Unit)
		if given := asGiven(p.DoseTyped); !isPerKg(p.DoseTyped) {
			s = given + " (here " + s + ")"
		}
	}
	if p.Route != "" {
		s += " " + p.Route
	}
	kind := "once"
	if strings.HasSuffix(p.Unit, "/h") {
		kind = "infusion"
	}
	return s + " " + intervalWords(kind, p.IntervalH)
}

// animalWords says an animal by its common name, else by its scientific one.
func animalWords(common, scientific string) string {
	if common != "" {
		return common
	}
	return scientific
}

// patientName is the patient by its name and kind: "Marisol, giant anteater".
func patientName(p *dose.PatientRecord) string {
	s := animalWords(p.CommonName, p.Species)
	if p.Name != "" {
		s = p.Name + ", " + s
	}
	return s
}

// typedWords says what was typed for an animal that is called otherwise here:
// ", typed as domestic pigeon". It is empty where one of its names was typed.
func typedWords(typed, common, scientific string) string {
	typed = strings.TrimSpace(typed)
	if typed == "" || strings.EqualFold(typed, common) || strings.EqualFold(typed, scientific) {
		return ""
	}
	return ", typed as " + typed
}

// modelTyped is the same of the model of a draft.
func modelTyped(ws *dose.Worksheet, i int) string {
	if ws.Input == nil || i < 0 || i >= len(ws.Input.Models) || i >= len(ws.Drafts) {
		return ""
	}
	return typedWords(ws.Input.Models[i].Species.Text, ws.Drafts[i].CommonName, ws.Drafts[i].Model)
}

// massWords says a mass as weighed or as estimated, with its ends.
func massWords(middle, low, high float64) string {
	b := metabolic.BodyMass{Middle: metabolic.Mass(middle), Low: metabolic.Mass(low), High: metabolic.Mass(high)}
	if !b.Estimated() {
		return metabolic.FormatBodyMass(b)
	}
	mass := massesIn(estimateDigits, middle, low, high)
	return mass(middle) + " (estimated, " + metabolic.FormatRange(low, high, mass) + ")"
}

// conditionWords says a patient's conditions as the clinic does: kidney disease
// for renal. The record keeps the words of the case file.
func conditionWords(conditions []string) []string {
	out := make([]string, len(conditions))
	for i, c := range conditions {
		switch c {
		case "renal":
			c = "kidney disease"
		case "hepatic":
			c = "liver disease"
		}
		out[i] = c
	}
	return out
}

// modelName is the model of a draft by its common name.
func modelName(d *dose.ModelDraft) string { return animalWords(d.CommonName, d.Model) }

// modelRegimen says a model's own regimen: "10 mg/kg SC every 12 hours".
func modelRegimen(d *dose.ModelDraft) string {
	s := perKgPair(d.DosePerKg, d.Unit)
	if given := asGiven(d.DoseTyped); !isPerKg(d.DoseTyped) {
		s += " (given as " + given + ")"
	}
	if d.Route != "" {
		s += " " + d.Route
	}
	return s + " " + intervalWords(d.Kind, d.IntervalH)
}

// modelWords says a model with its regimen: "dog, 18 kg: 10 mg/kg SC every
// 12 hours".
func modelWords(d *dose.ModelDraft) string {
	s := modelName(d) + ", " + massWords(d.MassKg, d.MassLowKg, d.MassHighKg)
	if d.TemperatureC != nil {
		s += " at " + metabolic.FormatCelsius(metabolic.Celsius(*d.TemperatureC))
	}
	return s + ": " + modelRegimen(d)
}

// fromWords says what the drafted dose was taken from: a model's regimen, or a
// line fitted to data.
func fromWords(ws *dose.Worksheet) string {
	m := draftedModel(ws)
	if m == nil || ws.Drafted == nil {
		return ""
	}
	s := "From " + modelWords(m) + "."
	if f := ws.Fit; f != nil && f.Regimen != nil && fittedDraft(ws) {
		amount, _ := unitOf(m.Unit)
		s = "From the line fitted to " + countWord(float64(f.N), "animal") + ", for an average of " +
			metabolic.FormatConcentration(metabolic.Concentration{Value: f.Regimen.Average, Unit: amount}) + " (" + f.Regimen.AverageSource + "). Model: " + modelWords(m) + "."
	}
	if ws.Drafted.Route == "" {
		s += " No route is given."
	}
	return s
}

// draftedModel is the draft that the worksheet's dose was taken from; nil when
// the record names none.
func draftedModel(ws *dose.Worksheet) *dose.ModelDraft {
	if ws.DraftedFrom == nil || ws.DraftedFrom.Index < 0 || ws.DraftedFrom.Index >= len(ws.Drafts) {
		return nil
	}
	return &ws.Drafts[ws.DraftedFrom.Index]
}

// publishedAbove says, after a stop, that the model's dose stands among the
// published ones: model and patient are of one species.
func publishedAbove(ws *dose.Worksheet) bool {
	for _, c := range activeStops(ws) {
		if c.Slug == string(dose.SameSpecies) {
			return true
		}
	}
	return false
}

// modelAndSource says the model of a draft and where its dose is from. After a
// stop its dose, too, is a number that one might give, and is left out.
func modelAndSource(ws *dose.Worksheet, m *dose.ModelDraft) (model, source string) {
	if ws.Drafted != nil {
		return modelWords(m), m.Source
	}
	if publishedAbove(ws) {
		return modelName(m), m.Source + ". Its dose stands above, as published"
	}
	return modelName(m), m.Source + ". After a stop its dose is not printed; it stands in the case"
}

// startLow says whether a single dose is to be begun at its low end. Where a
// written reason has set aside that the effect does not follow clearance, the
// low end of the two rules is no less arbitrary than the high one, and nothing
// urges it.
func startLow(ws *dose.Worksheet) bool {
	for _, c := range overridden(ws) {
		if c.Slug == string(dose.EffectDriven) {
			return false
		}
	}
	return true
}

// bracketWords is a remark of the record, without the call to start low where
// nothing speaks for it.
func bracketWords(ws *dose.Worksheet, remark string) string {
	if startLow(ws) {
		return remark
	}
	return strings.TrimSuffix(remark, "; start at the low end")
}

// basisLabel says a basis by its name, with the equation and the animal that
// stands on another basis: "group (patient: measured)".
func basisLabel(b *dose.BasisLine, id bool) string {
	var about []string
	if id && b.ID != "" {
		about = append(about, b.ID)
	}
	if b.StandIn != "" {
		about = append(about, b.StandIn)
	}
	if len(about) == 0 {
		return b.Basis
	}
	return b.Basis + " (" + strings.Join(about, "; ") + ")"
}

// basisUsed says whether the draft follows from a basis. A dose from a line
// fitted to data follows from none.
func basisUsed(ws *dose.Worksheet, b *dose.BasisLine) bool { return b.Drafted && !fittedDraft(ws) }

// fittedDraft says whether the dose comes from a line fitted to data.
func fittedDraft(ws *dose.Worksheet) bool {
	return ws.Drafted != nil && ws.Drafted.Plan == string(dose.PlanFitted)
}

// basesHold says which dose the lines under other bases hold, and of which dose
// the ranges beside them are where that is another.
func basesHold(ws *dose.Worksheet) string {
	s := basesDose(ws)
	m, d := draftedModel(ws), ws.Drafted
	if m != nil && fittedDraft(ws) && m.IntervalH != nil && d.IntervalH != nil && *m.IntervalH != *d.IntervalH {
		s += ". The ranges are of the drafted dose, " + intervalWords("", d.IntervalH)
	}
	return s
}

// basesDose says which dose the lines under other bases hold.
func basesDose(ws *dose.Worksheet) string {
	m, d := draftedModel(ws), ws.Drafted
	if m == nil || d == nil {
		return ""
	}
	switch {
	case m.Kind == "once":
		return "The dose by clearance, d·S"
	case fittedDraft(ws) && m.Kind == "infusion":
		return "The rate per kg, by scaling"
	case m.Kind == "infusion":
		return "The rate per kg"
	case fittedDraft(ws):
		return "The dose per kg " + intervalWords("", m.IntervalH) + ", at the model's interval, by scaling"
	}
	return "The dose per kg " + intervalWords("", d.IntervalH) + ", at the drafted interval"
}

// verdictWords are the sentences on a proposed regimen, but for those that its
// cautions tell with their marks.
func verdictWords(p *dose.Proposed) []string {
	var out []string
	for _, v := range p.Verdict {
		told := false
		for i := range p.Cautions {
			told = told || strings.HasSuffix(v, ": "+p.Cautions[i].Text)
		}
		if !told {
			out = append(out, v)
		}
	}
	return out
}

// proposedCautions are what a proposed regimen raises of itself, stops first.
func proposedCautions(p *dose.Proposed) []dose.Caution {
	out := slices.Clone(p.Cautions)
	slices.SortStableFunc(out, func(a, b dose.Caution) int { return levelRank(a.Level) - levelRank(b.Level) })
	return out
}

func levelRank(l dose.Level) int {
	switch l {
	case dose.Stop:
		return 0
	case dose.Warn:
		return 1
	}
	return 2
}

// proposedAmounts says what the proposed and the drafted regimen come to in this
// patient, and what the two amounts are: each time, or per hour.
func proposedAmounts(p *dose.Proposed, d *dose.Drafted) (amount, proposed, drafted string) {
	amount = "amount each time"
	if _, perHour := unitOf(p.Unit); perHour {
		amount = "amount per hour"
	}
	if p.Unit != d.Unit { // an infusion against single doses: nothing is side by side
		return amount, amountPair(p.PerAdministration, p.Unit), amountPair(d.PerAdministration, d.Unit)
	}
	say := amountsIn(p.Unit, p.PerAdministration, d.PerAdministration)
	return amount, say(p.PerAdministration), say(d.PerAdministration)
}

// stepsWords introduces the steps.
func stepsWords(ws *dose.Worksheet) string {
	s := "t is the patient, m the model. Results are printed to 6 figures"
	if ws.Drafted == nil {
		return s + ". After a stop the reckoning ends at the ratios."
	}
	return s + "; a pocket calculator fed with them ends at the drafted dose to 3 figures."
}

// planWords says the name of a plan.
func planWords(name string) string {
	if name == "once" {
		return "single dose"
	}
	return strings.ReplaceAll(name, "-", " ")
}

// chosenWords says who chose the drafted plan.
func chosenWords(d *dose.Drafted) string {
	switch d.ChosenBy {
	case "case":
		return "named in the case"
	case "fit":
		return "by the line fitted to data"
	}
	return "chosen by rule"
}

// averageWords says the average concentration of a plan against the model's.
func averageWords(ratio float64) string {
	if s := metabolic.FormatRatio(ratio); s != "1" {
		return s + " times"
	}
	return "equal"
}

// levelWord is the word for a level of caution, in capitals where it must not
// be overlooked.
func levelWord(l dose.Level) string {
	switch l {
	case dose.Stop:
		return "STOP"
	case dose.Warn:
		return "WARN"
	}
	return "note"
}

// stopWords says in few words, and without a number, why a stop stands: what
// the box holds in the place of the dose. The whole sentence is the caution's.
func stopWords(c *dose.Caution) string {
	switch dose.Slug(c.Slug) {
	case dose.SameSpecies:
		return "model and patient are of one species: nothing is scaled between them"
	case dose.ImplausibleMass:
		return "the mass cannot be this animal's: correct the case"
	case dose.NarrowMargin:
		return "the drug's margin is narrow"
	case dose.CrossClass:
		return "patient and model are of different classes"
	case dose.CrossThermy:
		return "one of the two animals warms itself, the other does not"
	case dose.TorpidPatient:
		return "the patient is torpid"
	case dose.NeonatePatient:
		return "the patient is a neonate"
	case dose.ClearingOrgan:
		return "the organ that clears the drug is diseased"
	case dose.DepotForm:
		return "a depot or long-acting form: its interval does not scale"
	case dose.AboveTolerated:
		return "the dose would be above the highest cited as tolerated by the model"
	case dose.Peak:
		return "a single administration would be far above the model's"
	case dose.EffectDriven:
		return "a potent immobiliser: its dose does not follow metabolic rate"
	case dose.BelowStep:
		if _, pieces := c.Numbers["step_pieces"]; pieces {
			return "the dose is less than the smallest part of a tablet"
		}
		return "the volume is too small for the device"
	}
	if strings.HasPrefix(c.Slug, string(dose.HazardOnFile)) {
		return "a published hazard stands against this drug here"
	}
	return "the caution " + strings.ReplaceAll(c.Slug, "-", " ")
}

// activeStops are the stops that no written reason has set aside.
func activeStops(ws *dose.Worksheet) []*dose.Caution {
	var out []*dose.Caution
	for i := range ws.Cautions {
		if c := &ws.Cautions[i]; c.Level == dose.Stop && !c.Overridden {
			out = append(out, c)
		}
	}
	return out
}

// overridden are the stops that a written reason has set aside.
func overridden(ws *dose.Worksheet) []*dose.Caution {
	var out []*dose.Caution
	for i := range ws.Cautions {
		if c := &ws.Cautions[i]; c.Overridden {
			out = append(out, c)
		}
	}
	return out
}

// countWords counts the cautions by level: "2 stops, 1 warn, 3 notes".
func countWords(cautions []dose.Caution) string {
	var n [3]int
	for i := range cautions {
		switch cautions[i].Level {
		case dose.Stop:
			n[0]++
		case dose.Warn:
			n[1]++
		default:
			n[2]++
		}
	}
	var parts []string
	for i, word := range [...]string{"stop", "warning", "note"} {
		switch {
		case n[i] == 1:
			parts = append(parts, "1 "+word)
		case n[i] > 1:
			parts = append(parts, fmt.Sprintf("%d %ss", n[i], word))
		}
	}
	if len(parts) == 0 {
		return "none raised, which is no evidence of safety"
	}
	return strings.Join(parts, ", ")
}

// worstWords is the word in the box for the gravest caution.
func worstWords(ws *dose.Worksheet) string {
	if len(ws.Cautions) == 0 {
		return "Cautions: " + countWords(nil) + "."
	}
	s := "Worst caution: " + levelWord(ws.Cautions[0].Level)
	if ws.Cautions[0].Overridden {
		s += ", overridden with a written reason"
	}
	return s + ". In all: " + countWords(ws.Cautions) + "."
}

// cautionModels says which models raised a caution, by their common names; it
// is empty for a caution of the case itself, and in a case of one model, where
// it goes without saying.
func cautionModels(ws *dose.Worksheet, c *dose.Caution) string {
	if c.Model == "" || len(ws.Drafts) < 2 {
		return ""
	}
	names := strings.Split(c.Model, ", ")
	for i, n := range names {
		for k := range ws.Drafts {
			if ws.Drafts[k].Model == n {
				names[i] = modelName(&ws.Drafts[k])
			}
		}
	}
	return strings.Join(names, ", ")
}

// numberWords says the numbers behind a caution that its sentence leaves out.
func numberWords(c *dose.Caution) string {
	if v, ok := c.Numbers["threshold"]; ok {
		return "limit " + metabolic.Significant(v, 3)
	}
	return ""
}

// relationWords says how a published dose's species is related to the patient.
func relationWords(relation string) string {
	switch relation {
	case "":
		return ""
	case "other class":
		return "of another class"
	}
	return "same " + relation
}

// drugWords says what the case tells of the drug, beside its name.
func drugWords(d *dose.DrugRecord) string {
	parts := make([]string, 0, 6)
	if d.Class != "" {
		parts = append(parts, d.Class)
	}
	if d.Elimination == "unknown" || d.Elimination == "" {
		parts = append(parts, "elimination unknown")
	} else {
		parts = append(parts, d.Elimination+" elimination")
	}
	if d.Extraction != "" {
		parts = append(parts, d.Extraction+" extraction")
	}
	switch d.Activity {
	case "time":
		parts = append(parts, "effect follows time")
	case "concentration":
		parts = append(parts, "effect follows concentration")
	}
	parts = append(parts, "margin "+orUnknown(d.Margin))
	if d.Formulation != "" {
		parts = append(parts, d.Formulation)
	}
	if d.Controlled {
		parts = append(parts, "CONTROLLED")
	}
	return strings.Join(parts, ", ")
}

// capital begins a sentence.
func capital(s string) string {
	r, n := utf8.DecodeRuneInString(s)
	return string(unicode.ToUpper(r)) + s[n:]
}

func orUnknown(s string) string {
	if s == "" {
		return "unknown"
	}
	return s
}

// groupSources gathers what leans on one citation, in the order of the record.
func groupSources(sources []dose.SourceLine) []dose.SourceLine {
	var out []dose.SourceLine
	at := map[string]int{}
	for _, s := range sources {
		if i, ok := at[s.Citation]; ok {
			out[i].What += "; " + s.What
			out[i].Memory = out[i].Memory || s.Memory
			continue
		}
		at[s.Citation] = len(out)
		out = append(out, s)
	}
	return out
}

// typedPatterns find what a person types otherwise than paper has it. They are
// made on first use: most runs of the program need none of them.
type typedPatterns struct{ doseRange, number, iu, micro, unspaced, perKg *regexp.Regexp }

var typedForms = sync.OnceValue(func() *typedPatterns {
	return &typedPatterns{
		doseRange: regexp.MustCompile(`([0-9])\s*[-–]\s*([0-9.])`),
		number:    regexp.MustCompile(`[0-9]*\.?[0-9]+`),
		iu:        regexp.MustCompile(`\b(IU|iu|U|u)\b`),
		micro:     regexp.MustCompile(`[µμ]g|\bug\b`),
		unspaced:  regexp.MustCompile(`([0-9])([a-zA-Zµμ])`),
		perKg:     regexp.MustCompile(`(?i)/\s*kg\s*(/\s*h)?\s*$`),
	}
})

var wordIU = sync.OnceValue(func() *regexp.Regexp { return regexp.MustCompile(`\bIU\b`) })

// asGiven says a dose as it was typed, by the rules of paper: ".5-1.0mg" is
// "0.5 to 1 mg", IU is units, µg is mcg. The record keeps the letters typed.
func asGiven(typed string) string {
	form := typedForms()
	s := form.doseRange.ReplaceAllString(strings.TrimSpace(typed), "$1 to $2")
	s = form.number.ReplaceAllStringFunc(s, func(n string) string {
		if strings.HasPrefix(n, ".") {
			n = "0" + n
		}
		if strings.Contains(n, ".") {
			n = strings.TrimRight(strings.TrimRight(n, "0"), ".")
		}
		whole, fraction, dotted := strings.Cut(n, ".")
		for i := len(whole) - 3; i > 0; i -= 3 {
			whole = whole[:i] + "," + whole[i:]
		}
		if dotted {
			return whole + "." + fraction
		}
		return whole
	})
	s = form.micro.ReplaceAllString(form.unspaced.ReplaceAllString(s, "$1 $2"), "mcg")
	return form.iu.ReplaceAllString(s, "units")
}

// paperUnits says IU as paper does: units. It is for formulas and results that
// are kept as text.
func paperUnits(s string) string {
	if !strings.Contains(s, "IU") {
		return s
	}
	return wordIU().ReplaceAllString(s, "units")
}

// isPerKg says whether a dose was typed per kg, or per kg and hour: then it is
// printed once, not twice.
func isPerKg(typed string) bool { return typed == "" || typedForms().perKg.MatchString(typed) }

// visible makes a text harmless where it is shown: what is not seen, or turns
// the letters around it, stands there as its code point. A line break or a tab
// becomes a space, so that a text can never begin a line of its own.
func visible(s string) string {
	plain := true
	for i := 0; i < len(s) && plain; i++ {
		plain = s[i] >= ' ' && s[i] <= '~'
	}
	if plain {
		return s
	}
	var b strings.Builder
	for i := 0; i < len(s); {
		r, n := utf8.DecodeRuneInString(s[i:])
		switch {
		case r == '\n' || r == '\t':
			b.WriteByte(' ')
		case r == utf8.RuneError && n == 1:
			fmt.Fprintf(&b, `\x%02x`, s[i])
		case unicode.IsControl(r):
			fmt.Fprintf(&b, `\x%02x`, r)
		case unicode.In(r, unicode.Cf, unicode.Zl, unicode.Zp, unicode.Cs, unicode.Co) || r == utf8.RuneError:
			if r > 0xFFFF {
				fmt.Fprintf(&b, `\U%08x`, r)
			} else {
				fmt.Fprintf(&b, `\u%04x`, r)
			}
		default:
			b.WriteRune(r)
		}
		i += n
	}
	return b.String()
}

// columns is how many columns of a terminal a text takes: two for the wide
// letters of East Asia, none for an accent that joins the letter before it.
func columns(s string) int {
	n := 0
	for _, r := range s {
		switch {
		case r < 0x300:
			n++
		case unicode.In(r, unicode.Mn, unicode.Me):
		default:
			n++
			if k := width.LookupRune(r).Kind(); k == width.EastAsianWide || k == width.EastAsianFullwidth {
				n++
			}
		}
	}
	return n
}

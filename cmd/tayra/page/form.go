package page

import (
	"strings"

	"tayra/dose"
	"tayra/metabolic"
)

// group is one part of the form, under a heading.
type group struct {
	Title  string
	Lead   string
	List   string // path of the list, when the part may be there several times
	One    string // what one of the list is called
	Start  bool   // one of the list is there from the start
	Folded bool   // most cases do without it
	Fields []field
	More   []field // what most cases do without
}

// field is one entry of the case file on the form.
type field struct {
	Path   string // in the case file; # is the place in the list
	Label  string
	Unit   string // stands beside the field: every quantity is typed with its unit
	Hint   string
	Kind   string // "" is one line of text
	Words  []word
	Needed bool
}

// Kinds of fields.
const (
	animalField = "animal" // one line, with the animals of that name below it
	proseField  = "prose"  // several lines
	wordField   = "word"   // one of a few words
	wordsField  = "words"  // some of a few words
	dateField   = "date"
)

// word is a word of the case file with what the form says for it.
type word struct{ Value, Label string }

func sameWords(ws ...string) []word {
	out := make([]word, len(ws))
	for i, w := range ws {
		out[i] = word{w, w}
	}
	return out
}

// idOf is the id of a field's element. page.js makes the same of a path.
func idOf(path string) string {
	return "f-" + strings.NewReplacer("[", "-", "]", "", ".", "-").Replace(path)
}

var yesNo = []word{{"true", "yes"}, {"false", "no"}}
var yesNoUnknown = []word{{"yes", "yes"}, {"no", "no"}, {"unknown", "unknown"}}

const (
	massUnits     = "kg, g, lb or oz"
	doseUnits     = "mg/kg, mcg/kg, IU/kg …"
	intervalUnits = "h or d, once, infusion"
	timeUnits     = "h, min or d"
	volumeUnits   = "mL"
)

// formGroups is the whole form in its order: every key of the case file.
func formGroups() []group {
	const m, p = "models[#].", "published[#]."
	return []group{
		{Title: "Case", Fields: []field{
			{Path: "case", Label: "Case number", Hint: "the practice's own"},
			{Path: "date", Label: "Date", Unit: "year-month-day", Kind: dateField, Needed: true},
			{Path: "prepared_by", Label: "Prepared by"},
		}},
		{Title: "Patient", Fields: []field{
			{Path: "patient.species", Label: "Animal", Hint: "common or scientific name; type to search names, orders and families", Kind: animalField, Needed: true},
			{Path: "patient.mass", Label: "Body mass", Unit: massUnits, Hint: "weighed, 41 kg; estimated, 36-46 kg or 41 kg ± 10 %", Needed: true},
			{Path: "patient.temperature", Label: "Body temperature", Unit: "°C or °F", Hint: "needed for a reptile or an amphibian"},
			{Path: "patient.name", Label: "Name"},
			{Path: "patient.stage", Label: "Stage of life", Kind: wordField, Words: sameWords("adult", "juvenile", "neonate")},
			{Path: "patient.food_producing", Label: "Food-producing", Hint: "may its meat, milk or eggs be eaten?", Kind: wordField, Words: yesNo},
			{Path: "patient.condition", Label: "Condition", Kind: wordsField, Words: []word{
				{"dehydrated", "dehydrated"}, {"renal", "renal disease"}, {"hepatic", "hepatic disease"}, {"pregnant", "pregnant"},
				{"lactating", "lactating"}, {"torpid", "torpid"}, {"obese", "obese"}, {"gravid", "gravid"}}},
		}},
		{Title: "Drug", Fields: []field{
			{Path: "drug.name", Label: "Drug", Hint: "hazards are looked up by this name", Needed: true},
			{Path: "drug.class", Label: "Class", Hint: "such as penicillin"},
			{Path: "drug.elimination", Label: "Elimination", Kind: wordField, Words: sameWords("renal", "hepatic", "mixed", "biliary", "unknown")},
			{Path: "drug.margin", Label: "Margin", Hint: "between the dose that works and the dose that harms", Kind: wordField, Words: sameWords("wide", "narrow", "unknown")},
		}, More: []field{
			{Path: "drug.activity", Label: "Effect follows", Kind: wordField, Words: []word{
				{"time", "time above a level"}, {"concentration", "the peak level"}, {"unknown", "unknown"}}},
			{Path: "drug.route", Label: "Intended route", Hint: "only if it is not the known dose's"},
			{Path: "drug.extraction", Label: "Extraction by the liver", Kind: wordField, Words: sameWords("low", "medium", "high", "unknown")},
			{Path: "drug.formulation", Label: "Formulation", Kind: wordField, Words: sameWords("solution", "suspension", "tablet", "powder", "depot", "long-acting")},
			{Path: "drug.protein_binding", Label: "Protein binding", Unit: "%"},
			{Path: "drug.active_secretion", Label: "Active secretion", Kind: wordField, Words: yesNoUnknown},
			{Path: "drug.enterohepatic_recycling", Label: "Enterohepatic recycling", Kind: wordField, Words: yesNoUnknown},
			{Path: "drug.saturable_kinetics", Label: "Saturable kinetics", Kind: wordField, Words: yesNoUnknown},
			{Path: "drug.controlled", Label: "Controlled substance", Kind: wordField, Words: yesNo},
		}},
		{Title: "Known dose", Lead: "The regimen of the model species, in which the dose is known.", List: "models", One: "model", Start: true, Fields: []field{
			{Path: m + "species", Label: "Model species", Hint: "common or scientific name", Kind: animalField, Needed: true},
			{Path: m + "mass", Label: "Its body mass", Unit: massUnits, Needed: true},
			{Path: m + "temperature", Label: "Its body temperature", Unit: "°C or °F", Hint: "needed for a reptile or an amphibian"},
			{Path: m + "dose", Label: "Dose", Unit: doseUnits, Hint: "per administration, 10 mg/kg or 10-15 mg/kg; of an infusion, 2 mg/kg/h", Needed: true},
			{Path: m + "interval", Label: "Interval", Unit: intervalUnits, Hint: "such as q12h or 12 h", Needed: true},
			{Path: m + "route", Label: "Route", Hint: "such as SC, IM, IV or PO"},
			{Path: m + "source", Label: "Source", Hint: "where this dose is written", Kind: proseField, Needed: true},
		}, More: []field{
			{Path: m + "half_life", Label: "Half-life", Unit: timeUnits, Hint: "of elimination in the model; draws the curves"},
			{Path: m + "volume", Label: "Volume of distribution", Unit: "L/kg or mL/kg"},
			{Path: m + "bioavailability", Label: "Bioavailability", Unit: "%"},
			{Path: m + "absorption_half_life", Label: "Absorption half-life", Unit: timeUnits},
			{Path: m + "loading_dose", Label: "Loading dose", Unit: doseUnits},
			{Path: m + "tolerated.dose", Label: "Highest dose tolerated", Unit: doseUnits},
			{Path: m + "tolerated.source", Label: "Source of the tolerated dose", Kind: proseField},
		}},
		{Title: "Doses in print", Lead: "For this species or its near kin. They outrank the draft.", List: "published", One: "dose in print", Folded: true, Fields: []field{
			{Path: p + "species", Label: "Species", Kind: animalField, Needed: true},
			{Path: p + "dose", Label: "Dose", Unit: doseUnits, Needed: true},
			{Path: p + "interval", Label: "Interval", Unit: intervalUnits, Needed: true},
			{Path: p + "route", Label: "Route"},
			{Path: p + "source", Label: "Source", Kind: proseField, Needed: true},
		}},
		{Title: "Product and device", Folded: true, Fields: []field{
			{Path: "product.strength", Label: "Strength", Unit: "mg/mL, %, mg per tablet …", Hint: "50 mg/mL, 250 mg per tablet, 1 g powder in 10 mL"},
			{Path: "product.step", Label: "Smallest step of the device", Unit: volumeUnits, Hint: "such as 0.1 mL"},
			{Path: "product.divisible", Label: "Tablets may be divided", Kind: wordField, Words: []word{{"no", "no"}, {"halves", "in halves"}, {"quarters", "in quarters"}}},
			{Path: "product.largest_per_site", Label: "Most at one site", Unit: volumeUnits},
			{Path: "product.container", Label: "One container holds", Unit: "mL or tablets"},
			{Path: "product.days", Label: "Length of the course", Unit: "days"},
		}},
		{Title: "Proposed regimen", Lead: "One that somebody proposes, to be held against the draft.", Folded: true, Fields: []field{
			{Path: "proposed.dose", Label: "Dose", Unit: doseUnits},
			{Path: "proposed.interval", Label: "Interval", Unit: intervalUnits},
		}},
		{Title: "Blood level to stay above", Lead: "Such as an MIC.", Folded: true, Fields: []field{
			{Path: "target.concentration", Label: "Concentration", Unit: "mg/L, mcg/mL …"},
			{Path: "target.source", Label: "Source", Kind: proseField},
		}},
		{Title: "Method", Lead: "Left blank, the usual way is taken.", Folded: true, Fields: []field{
			{Path: "method.basis", Label: "Metabolic rate from", Kind: wordField, Words: []word{
				{"group", "group: the constant of its group"}, {"equation", "equation: a published line"},
				{"measured", "measured: the species' own rate"}, {"relatives", "relatives: measured relatives"}}},
			{Path: "method.equation", Label: "Published line", Hint: "with the basis equation", Kind: wordField, Words: equationWords()},
			{Path: "method.plan", Label: "Plan", Kind: wordField, Words: []word{
				{"same-interval", "same interval"}, {"same-dose", "same dose"}, {"both-adjusted", "both adjusted"}, {"clock", "clock"}}},
			{Path: "method.intervals", Label: "Intervals that the rounds allow", Unit: "h or d", Hint: "with commas: 6 h, 8 h, 12 h, 24 h"},
			{Path: "method.q10", Label: "Q10", Unit: "no unit", Hint: "how the rate rises with 10 °C; 2.5 unless given"},
		}, More: thresholdForm()},
	}
}

// equationWords are the published lines by which a dose can be scaled.
func equationWords() []word {
	var out []word
	for _, e := range metabolic.Equations() {
		if e.Usable() {
			out = append(out, word{e.ID, e.ID + ": " + e.Animals})
		}
	}
	return out
}

// thresholdForm are the numbers at which cautions are raised.
func thresholdForm() []field {
	d := dose.DefaultThresholds()
	at := func(name, label, unit string, usual float64) field {
		return field{Path: "method.thresholds." + name, Label: label, Unit: unit, Hint: "usually " + metabolic.Significant(usual, 4)}
	}
	return []field{
		at("mass-ratio", "Caution from a mass ratio of", "times", d.MassRatio),
		at("mass-ratio-extreme", "Extreme mass ratio from", "times", d.MassRatioExtreme),
		at("basis-disagrees", "Bases disagree from", "times", d.BasisWarn),
		at("basis-disagrees-note", "Bases differ (a note) from", "times", d.BasisNote),
		at("large-change", "Large change from", "times", d.LargeChange),
		at("peak", "Peak from", "times the model's", d.PeakWarn),
		at("peak-stop", "Peak stops from", "times the model's", d.PeakStop),
		at("interval-short", "Interval impractical under", "h", d.IntervalShortH),
		at("interval-long", "Interval impractical over", "h", d.IntervalLongH),
		at("rounding-error", "Rounding error from", "%", d.RoundingPercent),
		at("models-disagree", "Models disagree from", "times", d.ModelsFold),
		at("accumulation", "Accumulation from", "times", d.Accumulation),
	}
}

// fieldPath is the field of the form that a fault of the case belongs to: the
// items of a list that is typed on one line share it.
func fieldPath(path string) string {
	for _, list := range []string{"patient.condition", "method.intervals"} {
		if strings.HasPrefix(path, list+"[") {
			return list
		}
	}
	return path
}

// onForm says whether the form has a field of a path, and what it is called.
func onForm(path string) (label string, ok bool) {
	if slug, ok := strings.CutPrefix(path, "overrides."); ok && slug != "" {
		return "Reason for going on past " + slug, true
	}
	label, ok = formLabels()[pattern(path)]
	return label, ok
}

// pattern writes # for the places in lists.
func pattern(path string) string {
	var b strings.Builder
	inside := false
	for _, r := range path {
		switch {
		case r == '[':
			inside = true
			b.WriteString("[#")
		case r == ']':
			inside = false
			b.WriteRune(r)
		case !inside:
			b.WriteRune(r)
		}
	}
	return b.String()
}

func formLabels() map[string]string {
	out := map[string]string{}
	for _, g := range formGroups() {
		for _, f := range append(g.Fields[:len(g.Fields):len(g.Fields)], g.More...) {
			out[f.Path] = f.Label
			if g.List != "" {
				out[f.Path] += " (" + g.One + ")"
			}
		}
	}
	return out
}

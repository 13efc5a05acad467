package page

import (
	"html/template"
	"maps"
	"regexp"
	"strconv"
	"strings"
	"sync"

	"tayra/dose"
	"tayra/metabolic"
	"tayra/reports"
)

// sheet is a worksheet with what its templates need beside it. Its fields are
// places of the record; how they are said is reports.Wording.
type sheet struct {
	*dose.Worksheet
	Model  *dose.ModelDraft // that the draft was taken from
	Strip  *strip
	Course *course
	Digest string
}

func newSheet(ws *dose.Worksheet) *sheet {
	v := &sheet{Worksheet: ws, Digest: reports.RecordDigest(ws)}
	if f := ws.DraftedFrom; f != nil && f.Index >= 0 && f.Index < len(ws.Drafts) {
		v.Model = &ws.Drafts[f.Index]
	}
	v.Strip = newStrip(v)
	v.Course = newCourse(ws)
	return v
}

// announcement is what is read out when the worksheet is there. It holds no
// dose: that stands nowhere without its range.
func (v *sheet) announcement() string {
	if v.Drafted == nil {
		return "STOP: no dose is drafted. The reason stands in the box."
	}
	return "The draft is there. " + wording[func(*dose.Worksheet) string]("worst")(v.Worksheet)
}

// wording is one function of reports.Wording, where a template does not call it.
func wording[F any](name string) F { return sayings()[name].(F) }

var sayings = sync.OnceValue(reports.Wording)

func stopWords(c *dose.Caution) string { return wording[func(*dose.Caution) string]("stop")(c) }

// Final says whether a stop stands whatever the reason.
func (v *sheet) Final() bool {
	for i := range v.Cautions {
		if c := &v.Cautions[i]; c.Level == dose.Stop && dose.CannotOverride(c.Slug) {
			return true
		}
	}
	return false
}

// Unit is that of the drafted model's doses.
func (v *sheet) Unit() string {
	if v.Model == nil {
		return "mg/kg"
	}
	return v.Model.Unit
}

// About is the line below the patient's name.
func (v *sheet) About() string {
	p := &v.Patient
	var parts []string
	if p.Stage != "" {
		parts = append(parts, p.Stage)
	}
	parts = append(parts, wording[func([]string) []string]("conditions")(p.Condition)...)
	if p.TemperatureC != nil {
		parts = append(parts, "body "+metabolic.FormatCelsius(metabolic.Celsius(*p.TemperatureC)))
	}
	if a := p.AdultMassKg; a != nil {
		parts = append(parts, "adults weigh "+wording[func(low, high float64) string]("massRange")(a[0], a[1]))
	}
	switch p.FoodProducing {
	case "true":
		parts = append(parts, "food-producing")
	case "false":
		parts = append(parts, "not food-producing")
	}
	return strings.Join(parts, ", ")
}

// StepsInOrder are the drafts with their steps, the drafted one first.
func (v *sheet) StepsInOrder() []*dose.ModelDraft {
	var out []*dose.ModelDraft
	if v.Model != nil {
		out = append(out, v.Model)
	}
	for i := range v.Drafts {
		if d := &v.Drafts[i]; d != v.Model {
			out = append(out, d)
		}
	}
	return out
}

// StepSource is the source of a step: a whole citation once, then the step that
// has it.
func (v *sheet) StepSource(d *dose.ModelDraft, i int) string {
	source := d.Steps[i].Source
	if source == "definition" {
		return ""
	}
	for k := range d.Steps[:i] {
		if d.Steps[k].Source == source && source != "" {
			return "as in step " + strconv.Itoa(k+1)
		}
	}
	return source
}

// DraftedPlan is the plan of a draft that it is drafted by; nil after a stop.
func (v *sheet) DraftedPlan(d *dose.ModelDraft) *dose.Plan {
	for i := range d.Plans {
		if d.Plans[i].Name == d.Plan {
			return &d.Plans[i]
		}
	}
	return nil
}

// HasTemperature says whether the patient has just this body temperature.
func (v *sheet) HasTemperature(t float64) bool {
	return v.Patient.TemperatureC != nil && *v.Patient.TemperatureC == t
}

// IsDrafted says whether a curve is the drafted regimen's.
func (v *sheet) IsDrafted(c dose.Curve) bool { return v.Drafted != nil && c.Name == v.Drafted.Plan }

// Level says a concentration in the unit of the curves: an amount per litre, or
// a number where no volume of distribution is known.
func (v *sheet) Level(c float64) string {
	if v.Relative() != "" {
		return metabolic.Significant(c, 3)
	}
	var unit metabolic.AmountUnit
	if strings.HasPrefix(v.Unit(), "IU") {
		unit = metabolic.InternationalUnit
	}
	return metabolic.FormatConcentration(metabolic.Concentration{Value: c, Unit: unit})
}

// Relative says what concentrations are relative to, "" when they are absolute.
func (v *sheet) Relative() string {
	if len(v.Curves) == 0 || !strings.Contains(v.Curves[0].Unit, "times") {
		return ""
	}
	return "Concentrations are given as " + v.Curves[0].Unit + "."
}

// Infusion says whether the draft runs on a pump.
func (v *sheet) Infusion() bool { return v.Model != nil && v.Model.Kind == "infusion" }

// PlanAmounts are the amounts of the model's plans, in one unit.
func (v *sheet) PlanAmounts() []string {
	say := wording[func(*dose.ModelDraft) func(dose.Pair) string]("amountsOfPlans")(v.Model)
	var out []string
	for i := range v.Model.Plans {
		out = append(out, say(v.Model.Plans[i].PerAdministration))
	}
	return out
}

// TemperatureAmounts are the amounts at other body temperatures, in one unit.
func (v *sheet) TemperatureAmounts() []string {
	say := wording[func([]dose.TemperatureLine, string) func(dose.Pair) string]("amountsByTemperature")(v.Temperature, v.Unit())
	var out []string
	for i := range v.Temperature {
		out = append(out, say(v.Temperature[i].Amount))
	}
	return out
}

// Daily says two daily amounts per kg as a range; unit is that of the dose.
func (v *sheet) Daily(low, high float64, unit string) string {
	return wording[func(*dose.Pair, string) string]("dailyPair")(&dose.Pair{low, high}, unit)
}

func massOf(kg float64) string { return metabolic.FormatMass(metabolic.Mass(kg)) }

// funcs are the functions of the templates: the wording of the reports, and the
// few that are of a page's own.
func funcs() template.FuncMap {
	m := template.FuncMap(maps.Clone(sayings()))
	m["id"] = idOf
	m["glue"] = glue
	m["massKg"] = massOf
	m["celsius"] = func(t float64) string { return metabolic.FormatCelsius(metabolic.Celsius(t)) }
	m["power"] = func(w float64) string { return metabolic.FormatPower(metabolic.Power(w)) }
	m["ratio"] = metabolic.FormatRatio
	m["figure"] = func(n int, v float64) string { return metabolic.Significant(v, n) }
	m["percent"] = func(p float64) string { return metabolic.FormatPercent(p / 100) }
	m["inc"] = func(i int) int { return i + 1 }
	m["perDay"] = func(unit string) string { return strings.TrimSuffix(unit, "/day") }
	m["recalled"] = func(s dose.SourceLine) string {
		if s.Memory && !strings.Contains(s.Citation, "memory") {
			return " (from memory)"
		}
		return ""
	}
	m["float"] = func(n int) float64 { return float64(n) }
	m["at"] = func(path, place string) string { return strings.Replace(path, "#", place, 1) }
	m["dict"] = dict
	return m
}

// dict gives a template several values under names.
func dict(pairs ...any) map[string]any {
	m := make(map[string]any, len(pairs)/2)
	for i := 0; i+1 < len(pairs); i += 2 {
		m[pairs[i].(string)] = pairs[i+1]
	}
	return m
}

// numberAndUnit is a number with what stands behind it.
var numberAndUnit = regexp.MustCompile(`([0-9]) ([^\s0-9])`)

// glue keeps a number and its unit on one line.
func glue(s string) string { return numberAndUnit.ReplaceAllString(s, "$1\u00a0$2") }

package dose

import (
	"encoding/json"
	"fmt"
	"strings"
)

// Entry is one value as it was typed, with its place in the file. Line and
// Column count from 1; both are 0 when the value did not come from a file.
// It is deliberately no number: "041" and "1.10" must reach the parser of
// their quantity unchanged.
type Entry struct {
	Text   string
	Line   int
	Column int
}

// E makes an entry from text that did not come from a file.
func E(text string) Entry { return Entry{Text: text} }

// Given says whether anything was typed.
func (e Entry) Given() bool { return e.Text != "" || e.Line != 0 }

// IsZero is what encoding/json asks for omitzero.
func (e Entry) IsZero() bool { return !e.Given() }

// MarshalJSON writes the text alone: the record keeps inputs as typed.
func (e Entry) MarshalJSON() ([]byte, error) { return json.Marshal(e.Text) }

// UnmarshalJSON reads the text back; a record has no lines.
func (e *Entry) UnmarshalJSON(b []byte) error {
	e.Line, e.Column = 0, 0
	return json.Unmarshal(b, &e.Text)
}

// NamedEntry is an entry whose key was typed too (an override, a threshold).
type NamedEntry struct {
	Name  Entry `json:"name"`
	Value Entry `json:"value"`
}

// CaseInput is a case as typed: the keys of the case file, nothing parsed.
// File names the source for error messages.
type CaseInput struct {
	File string `json:"-"`

	Case       Entry            `json:"case,omitzero"`
	Date       Entry            `json:"date,omitzero"`
	PreparedBy Entry            `json:"prepared_by,omitzero"`
	Patient    PatientInput     `json:"patient"`
	Drug       DrugInput        `json:"drug"`
	Models     []ModelInput     `json:"models"`
	Published  []PublishedInput `json:"published,omitempty"`
	Method     MethodInput      `json:"method,omitzero"`
	Product    ProductEntry     `json:"product,omitzero"`
	Target     TargetInput      `json:"target,omitzero"`
	Proposed   ProposedInput    `json:"proposed,omitzero"`
	Overrides  []NamedEntry     `json:"overrides,omitempty"`

	// Fit is set by the command fit, never by a case file.
	Fit *FitCase `json:"fit,omitempty"`
}

// PatientInput is the animal in front of the veterinarian.
type PatientInput struct {
	Place         Entry   `json:"-"` // where the section stands, for messages about what is missing
	Name          Entry   `json:"name,omitzero"`
	Species       Entry   `json:"species,omitzero"`
	Mass          Entry   `json:"mass,omitzero"`
	Temperature   Entry   `json:"temperature,omitzero"`
	Stage         Entry   `json:"stage,omitzero"`
	Condition     []Entry `json:"condition,omitempty"`
	FoodProducing Entry   `json:"food_producing,omitzero"`
}

// DrugInput is the drug and what is known of how it leaves the body.
type DrugInput struct {
	Place                  Entry `json:"-"`
	Name                   Entry `json:"name,omitzero"`
	Class                  Entry `json:"class,omitzero"`
	Route                  Entry `json:"route,omitzero"` // intended route, when it is not the model's
	Elimination            Entry `json:"elimination,omitzero"`
	Extraction             Entry `json:"extraction,omitzero"`
	Activity               Entry `json:"activity,omitzero"`
	Formulation            Entry `json:"formulation,omitzero"`
	ProteinBinding         Entry `json:"protein_binding,omitzero"`
	ActiveSecretion        Entry `json:"active_secretion,omitzero"`
	EnterohepaticRecycling Entry `json:"enterohepatic_recycling,omitzero"`
	SaturableKinetics      Entry `json:"saturable_kinetics,omitzero"`
	Margin                 Entry `json:"margin,omitzero"`
	Controlled             Entry `json:"controlled,omitzero"`
}

// ModelInput is a known regimen in a model species.
type ModelInput struct {
	Place              Entry          `json:"-"`
	Species            Entry          `json:"species,omitzero"`
	Mass               Entry          `json:"mass,omitzero"`
	Temperature        Entry          `json:"temperature,omitzero"`
	Dose               Entry          `json:"dose,omitzero"`
	Interval           Entry          `json:"interval,omitzero"`
	LoadingDose        Entry          `json:"loading_dose,omitzero"`
	Route              Entry          `json:"route,omitzero"`
	HalfLife           Entry          `json:"half_life,omitzero"`
	Volume             Entry          `json:"volume,omitzero"`
	Bioavailability    Entry          `json:"bioavailability,omitzero"`
	AbsorptionHalfLife Entry          `json:"absorption_half_life,omitzero"`
	Tolerated          ToleratedInput `json:"tolerated,omitzero"`
	Source             Entry          `json:"source,omitzero"`
}

// ToleratedInput is a maximum that the model species tolerated, with its source.
type ToleratedInput struct {
	Place  Entry `json:"-"`
	Dose   Entry `json:"dose,omitzero"`
	Source Entry `json:"source,omitzero"`
}

// PublishedInput is a dose in print for the patient's species or near kin.
type PublishedInput struct {
	Place    Entry `json:"-"`
	Species  Entry `json:"species,omitzero"`
	Dose     Entry `json:"dose,omitzero"`
	Interval Entry `json:"interval,omitzero"`
	Route    Entry `json:"route,omitzero"`
	Source   Entry `json:"source,omitzero"`
}

// MethodInput is how to scale, when not by the defaults.
type MethodInput struct {
	Place      Entry        `json:"-"`
	Basis      Entry        `json:"basis,omitzero"`
	Equation   Entry        `json:"equation,omitzero"`
	Plan       Entry        `json:"plan,omitzero"`
	Intervals  []Entry      `json:"intervals,omitempty"`
	Q10        Entry        `json:"q10,omitzero"`
	Thresholds []NamedEntry `json:"thresholds,omitempty"`
}

// ProductEntry is the product in the cupboard and the device in the hand.
type ProductEntry struct {
	Place          Entry `json:"-"`
	Strength       Entry `json:"strength,omitzero"`
	Step           Entry `json:"step,omitzero"`
	Divisible      Entry `json:"divisible,omitzero"` // tablets: no | halves | quarters
	LargestPerSite Entry `json:"largest_per_site,omitzero"`
	Container      Entry `json:"container,omitzero"`
	Days           Entry `json:"days,omitzero"`
}

// TargetInput is a concentration to stay above, such as an MIC.
type TargetInput struct {
	Place         Entry `json:"-"`
	Concentration Entry `json:"concentration,omitzero"`
	Source        Entry `json:"source,omitzero"`
}

// ProposedInput is a regimen that somebody proposes, for check.
type ProposedInput struct {
	Place    Entry `json:"-"`
	Dose     Entry `json:"dose,omitzero"`
	Interval Entry `json:"interval,omitzero"`
}

// IsZero lets encoding/json leave an absent section out.
func (m MethodInput) IsZero() bool {
	return !m.Basis.Given() && !m.Equation.Given() && !m.Plan.Given() && len(m.Intervals) == 0 &&
		!m.Q10.Given() && len(m.Thresholds) == 0
}

// IsZero lets encoding/json leave an absent section out.
func (p ProductEntry) IsZero() bool {
	return !p.Strength.Given() && !p.Step.Given() && !p.Divisible.Given() && !p.LargestPerSite.Given() &&
		!p.Container.Given() && !p.Days.Given()
}

// IsZero lets encoding/json leave an absent section out.
func (t TargetInput) IsZero() bool { return !t.Concentration.Given() && !t.Source.Given() }

// IsZero lets encoding/json leave an absent section out.
func (p ProposedInput) IsZero() bool { return !p.Dose.Given() && !p.Interval.Given() }

// IsZero lets encoding/json leave an absent section out.
func (t ToleratedInput) IsZero() bool { return !t.Dose.Given() && !t.Source.Given() }

// InputError is one fault of the input. Its text is
//
//	FILE:LINE:COLUMN: field: what is wrong; what to write instead
//
// with the file and place left out where there are none.
type InputError struct {
	File         string
	Line, Column int
	Field        string // dotted path of the case file: patient.mass, models[0].dose
	Problem      string
	Remedy       string
}

// Error implements error.
func (e *InputError) Error() string {
	var b strings.Builder
	if e.File != "" {
		b.WriteString(e.File)
		b.WriteByte(':')
		if e.Line > 0 {
			fmt.Fprintf(&b, "%d:", e.Line)
			if e.Column > 0 {
				fmt.Fprintf(&b, "%d:", e.Column)
			}
		}
		b.WriteByte(' ')
	}
	if e.Field != "" {
		b.WriteString(e.Field)
		b.WriteString(": ")
	}
	b.WriteString(e.Problem)
	if e.Remedy != "" {
		b.WriteString("; ")
		b.WriteString(e.Remedy)
	}
	return b.String()
}

// InputErrors is every fault found in one input, in the order of the file.
type InputErrors []*InputError

// Error implements error: one line a fault.
func (es InputErrors) Error() string {
	lines := make([]string, len(es))
	for i, e := range es {
		lines[i] = e.Error()
	}
	return strings.Join(lines, "\n")
}

package dose

import "tayra/species"

// Level of a caution.
type Level string

// Levels, gravest first.
const (
	Stop Level = "stop"
	Warn Level = "warn"
	Note Level = "note"
)

// Slug names a caution. It is what a case file overrides.
type Slug string

// Cautions of the method, section 6, and what belongs to them.
const (
	SameSpecies       Slug = "same-species"
	ImplausibleMass   Slug = "implausible-mass"
	NarrowMargin      Slug = "narrow-margin"
	CrossClass        Slug = "cross-class"
	CrossThermy       Slug = "cross-thermy"
	TorpidPatient     Slug = "torpid"
	NeonatePatient    Slug = "neonate"
	ClearingOrgan     Slug = "clearing-organ"
	DepotForm         Slug = "depot"
	AboveTolerated    Slug = "above-tolerated"
	Peak              Slug = "peak"
	EffectDriven      Slug = "effect-driven"
	BelowStep         Slug = "below-step"
	MassRatio         Slug = "mass-ratio"
	MassRatioExtreme  Slug = "mass-ratio-extreme"
	OutsideData       Slug = "outside-data"
	BasisDisagrees    Slug = "basis-disagrees"
	LargeChange       Slug = "large-change"
	Compounded        Slug = "compounded"
	Impractical       Slug = "interval-impractical"
	Suitability       Slug = "suitability"
	RouteDiffers      Slug = "route-differs"
	GutType           Slug = "gut-type"
	HumanModel        Slug = "human-model"
	PublishedExists   Slug = "published-exists"
	FoodAnimal        Slug = "food-animal"
	ControlledDrug    Slug = "controlled"
	JuvenilePatient   Slug = "juvenile"
	PatientCondition  Slug = "condition"
	RoundingError     Slug = "rounding-error"
	EstimatedMass     Slug = "estimated-mass"
	OneModel          Slug = "one-model"
	GroupConstant     Slug = "group-constant"
	NoHalfLife        Slug = "no-half-life"
	MassNotBody       Slug = "mass-not-body"
	BodyTemperature   Slug = "body-temperature"
	AdultMass         Slug = "adult-mass"
	MassUnjudged      Slug = "mass-unjudged"
	LowConfidence     Slug = "low-confidence"
	ModelsDisagree    Slug = "models-disagree"
	OneDecides        Slug = "one-model-decides"
	OneOrder          Slug = "models-of-one-order"
	Thresh            Slug = "threshold-changed"
	Anatomy           Slug = "anatomy"
	Accumulation      Slug = "accumulation"
	FlipFlop          Slug = "flip-flop"
	StandIn           Slug = "basis-stands-in"
	NameTakenAs       Slug = "name-taken-as"
	DrugNotNamed      Slug = "drug-not-named"
	DrugNotRecognised Slug = "drug-not-recognised"
	HazardOnFile      Slug = "hazard" // followed by the row's id: hazard-h019
)

// Caution is a warning raised by the case, data to be shown and not an error.
// A stop leaves no dose unless its slug is overridden with a written reason.
type Caution struct {
	Slug       string             `json:"slug"`
	Level      Level              `json:"level"`
	Text       string             `json:"text"`
	Numbers    map[string]float64 `json:"numbers"`
	Model      string             `json:"model,omitempty"` // the model species that raised it, when not the case itself
	Source     string             `json:"source,omitempty"`
	Overridden bool               `json:"overridden,omitempty"`
	Reason     string             `json:"reason,omitempty"`
}

// CannotOverride says whether a stop stands whatever the reason.
func CannotOverride(slug string) bool {
	return slug == string(SameSpecies) || slug == string(ImplausibleMass)
}

// levelRank orders cautions, stops first.
func levelRank(l Level) int {
	switch l {
	case Stop:
		return 0
	case Warn:
		return 1
	}
	return 2
}

// raised is a caution as compute gives it: a slug, a level and the numbers
// behind it, whose meaning belongs to the slug (see cautiontext.go).
type raised struct {
	slug    Slug
	level   Level
	model   int // index of the model that raised it; -1 for the case itself
	a, b, c float64
	detail  string // a constant word or a name from a table, never made up here
	hazard  *species.HazardMatch
}

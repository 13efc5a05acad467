package dose

// Format names the record's layout. A record of an older format stays
// readable; a change of meaning or spelling of a key makes a new number.
const Format = "tayra-worksheet/1"

// Version is the program's version. It is a constant, and not read from the
// build, so that the same source prints the same worksheet everywhere.
const Version = "0.1.0"

// Pair is the two ends of a dose range, smaller first; equal for a single dose.
type Pair [2]float64

// Worksheet is the whole record of one draft: everything that stands on paper
// and nothing else. Every number is computed before a Worksheet exists; the
// writers of package reports only arrange it. Masses are in kg, rates in W,
// intervals in hours, temperatures in °C, amounts in mg or IU as Unit says.
type Worksheet struct {
	Format      string            `json:"format"`
	Program     Program           `json:"program"`
	Case        string            `json:"case"`
	Date        string            `json:"date"`
	PreparedBy  string            `json:"prepared_by"`
	Input       *CaseInput        `json:"input"`
	Patient     PatientRecord     `json:"patient"`
	Drug        DrugRecord        `json:"drug"`
	Drafts      []ModelDraft      `json:"drafts"`
	DraftedFrom *DraftedFrom      `json:"drafted_from"`
	Several     *Several          `json:"several,omitempty"`
	Drafted     *Drafted          `json:"drafted"`
	Loading     *Loading          `json:"loading,omitempty"`
	Product     *ProductRecord    `json:"product,omitempty"`
	Published   []PublishedDose   `json:"published,omitempty"`
	Bases       []BasisLine       `json:"bases,omitempty"`
	Unavailable []UnavailableLine `json:"bases_unavailable,omitempty"`
	Exponents   []ExponentLine    `json:"exponents,omitempty"`
	Temperature []TemperatureLine `json:"temperature_table,omitempty"`
	Target      *TargetRecord     `json:"target,omitempty"`
	Proposed    *Proposed         `json:"proposed,omitempty"`
	Curves      []Curve           `json:"curves,omitempty"`
	CurvesNote  string            `json:"curves_note,omitempty"` // what cannot be said, and why
	Suitability []Criterion       `json:"suitability,omitempty"`
	Fit         *FitRecord        `json:"fit,omitempty"` // set when the dose comes from a line fitted to data
	Cautions    []Caution         `json:"cautions"`
	Overrides   map[string]string `json:"overrides"`
	TrackRecord []string          `json:"track_record"`
	Statements  []string          `json:"statements"` // draft, not a prescription, local law
	Sources     []SourceLine      `json:"sources"`
}

// Program says what made a record.
type Program struct {
	Name    string `json:"name"`
	Version string `json:"version"`
	Tables  string `json:"tables"` // digest of the embedded tables
}

// PatientRecord is the target animal as used.
type PatientRecord struct {
	Name          string   `json:"name,omitempty"`
	Typed         string   `json:"typed"` // species as typed
	Species       string   `json:"species"`
	CommonName    string   `json:"common_name"`
	Class         string   `json:"class"`
	Order         string   `json:"order"`
	Family        string   `json:"family"`
	Group         string   `json:"group"`
	MassTyped     string   `json:"mass_typed"`
	MassKg        float64  `json:"mass_kg"`
	MassLowKg     float64  `json:"mass_low_kg"`
	MassHighKg    float64  `json:"mass_high_kg"`
	Estimated     bool     `json:"mass_estimated"`
	AdultMassKg   *Pair    `json:"adult_mass_kg"` // null when no range is on file
	TemperatureC  *float64 `json:"temperature_c,omitempty"`
	Stage         string   `json:"stage"`
	Condition     []string `json:"condition,omitempty"`
	FoodProducing string   `json:"food_producing,omitempty"` // "true", "false" or "" (not said)
	RateW         float64  `json:"metabolic_rate_w"`
	Basis         string   `json:"basis"`
}

// DrugRecord is the drug as the case describes it.
type DrugRecord struct {
	Name        string `json:"name"`
	Class       string `json:"class,omitempty"`
	Route       string `json:"route,omitempty"` // the route of the draft
	Elimination string `json:"elimination"`
	Extraction  string `json:"extraction,omitempty"`
	Activity    string `json:"activity"`
	Formulation string `json:"formulation,omitempty"`
	Margin      string `json:"margin"`
	Controlled  bool   `json:"controlled"`
}

// Ratios are target over model: M of mass, R of metabolic rate, S = R/M of
// rate per unit of mass.
type Ratios struct {
	Mass      float64 `json:"mass"`
	Metabolic float64 `json:"metabolic"`
	Specific  float64 `json:"specific"`
}

// ModelDraft is the draft from one model species.
type ModelDraft struct {
	Model         string     `json:"model"`
	CommonName    string     `json:"model_common_name"`
	Class         string     `json:"model_class"`
	Order         string     `json:"model_order"`
	Family        string     `json:"model_family"`
	Kinship       string     `json:"kinship"` // nearest rank shared with the patient, "" for none
	MassTyped     string     `json:"model_mass_typed"`
	MassKg        float64    `json:"model_mass_kg"`
	MassLowKg     float64    `json:"model_mass_low_kg"`
	MassHighKg    float64    `json:"model_mass_high_kg"`
	TemperatureC  *float64   `json:"model_temperature_c,omitempty"`
	RateW         float64    `json:"model_metabolic_rate_w"`
	Basis         string     `json:"model_basis"`
	DoseTyped     string     `json:"model_dose_typed"`
	IntervalTyped string     `json:"model_interval_typed"`
	DosePerKg     Pair       `json:"model_dose_per_kg"`
	Unit          string     `json:"unit"` // of dose_per_kg: mg/kg, IU/kg, mg/kg/h, IU/kg/h
	Kind          string     `json:"kind"` // repeated | once | infusion
	IntervalH     *float64   `json:"model_interval_h"`
	DailyPerKg    *Pair      `json:"model_daily_per_kg,omitempty"`
	Route         string     `json:"route,omitempty"`
	HalfLifeH     *float64   `json:"model_half_life_h,omitempty"`
	Source        string     `json:"source"`
	Ratios        Ratios     `json:"ratios"`
	Plans         []Plan     `json:"plans"`
	Plan          string     `json:"drafted_plan,omitempty"`
	Range90       *DoseRange `json:"range90"`
	Range50       *DoseRange `json:"range50"`
	// VolumeRange90 belongs to the by-volume end of a single dose.
	VolumeRange90 *DoseRange  `json:"volume_range90,omitempty"`
	SDAmount      float64     `json:"sd_ln_amount,omitempty"` // with estimated masses, of the amount
	Parts         []RangePart `json:"range_parts,omitempty"`
	Steps         []Step      `json:"steps"`
}

// Plan is one way to carry a regimen across: method, "Plans".
type Plan struct {
	Name              string   `json:"name"` // same-interval | same-dose | both-adjusted | clock | once | infusion
	DosePerKg         Pair     `json:"dose_per_kg"`
	Unit              string   `json:"unit"`
	PerAdministration Pair     `json:"per_administration"` // mg or IU; per hour for an infusion
	AtLowMass         *Pair    `json:"per_administration_at_low_mass,omitempty"`
	AtHighMass        *Pair    `json:"per_administration_at_high_mass,omitempty"`
	IntervalH         *float64 `json:"interval_h"`
	DailyPerKg        *Pair    `json:"daily_per_kg,omitempty"`
	AverageRatio      float64  `json:"average_ratio"` // average concentration over the model's
	PeakRatio         float64  `json:"peak_ratio"`    // dose per kg over the model's
	Remark            string   `json:"remark,omitempty"`
}

// DoseRange is an interval about the drafted dose per kg.
type DoseRange struct {
	Low  float64 `json:"low"`
	High float64 `json:"high"`
	SD   float64 `json:"sd_ln,omitempty"`
}

// RangePart is one contribution to the standard deviation of ln dose.
type RangePart struct {
	Name   string  `json:"name"`
	SD     float64 `json:"sd_ln"`
	Text   string  `json:"text"`
	Source string  `json:"source,omitempty"`
}

// Step is one line of the reckoning, enough to follow with a pocket
// calculator: Result is Value as printed.
type Step struct {
	Title       string  `json:"title"`
	Formula     string  `json:"formula"`
	Substituted string  `json:"substituted"`
	Value       float64 `json:"value"`
	Unit        string  `json:"unit"`
	Result      string  `json:"result"`
	Source      string  `json:"source"`
}

// DraftedFrom says which model the draft was taken from.
type DraftedFrom struct {
	Index int    `json:"index"`
	Model string `json:"model"`
	Why   string `json:"why"`
}

// Drafted is the starting regimen, with its ranges: what the first page shows.
type Drafted struct {
	Plan              string    `json:"plan"`
	ChosenBy          string    `json:"chosen_by"` // default | case
	Why               string    `json:"why"`
	DosePerKg         Pair      `json:"dose_per_kg"`
	Unit              string    `json:"unit"`
	PerAdministration Pair      `json:"per_administration"`
	AtLowMass         *Pair     `json:"per_administration_at_low_mass,omitempty"`
	AtHighMass        *Pair     `json:"per_administration_at_high_mass,omitempty"`
	IntervalH         *float64  `json:"interval_h"`
	DailyPerKg        *Pair     `json:"daily_per_kg,omitempty"`
	Route             string    `json:"route,omitempty"`
	Range90           DoseRange `json:"range90"`
	Range50           DoseRange `json:"range50"`
	Range90Amount     DoseRange `json:"range90_amount"` // mg or IU per administration
	Range50Amount     DoseRange `json:"range50_amount"`
	Meaning           string    `json:"meaning"`                  // what the ranges say and do not say
	Disagreement      string    `json:"bases_disagree,omitempty"` // the dose by the other bases, where they disagree 2-fold
	Outranked         string    `json:"outranked,omitempty"`      // a published dose for this very species
	WorstCaution      string    `json:"worst_caution"`
}

// Loading is a first dose that fills the volume of distribution. It follows
// mass, and only within a class.
type Loading struct {
	DosePerKg         *Pair      `json:"dose_per_kg"` // null when it is not given
	Unit              string     `json:"unit"`
	PerAdministration *Pair      `json:"per_administration"`
	AtLowMass         *Pair      `json:"per_administration_at_low_mass,omitempty"`
	AtHighMass        *Pair      `json:"per_administration_at_high_mass,omitempty"`
	Range90           *DoseRange `json:"range90"`
	Range90Amount     *DoseRange `json:"range90_amount,omitempty"`
	// Measured is the loading dose in the syringe: one for a single dose, two
	// for a dose range; nil without a product.
	Measured []Administration `json:"measured,omitempty"`
	Text     string           `json:"text"`
}

// ProductRecord is the draft in the syringe: method, section 8. VolumeML (or
// Pieces), DoseGiven and ErrorPercent are those of the high end of a dose
// range; Ends has each end by itself.
type ProductRecord struct {
	StrengthTyped    string           `json:"strength_typed"`
	Form             string           `json:"form"` // liquid | powder | tablet | capsule
	AmountPerML      float64          `json:"amount_per_ml,omitempty"`
	AmountPerPiece   float64          `json:"amount_per_piece,omitempty"`
	StepML           float64          `json:"step_ml,omitempty"` // mL/h for a pump
	StepPieces       float64          `json:"step_pieces,omitempty"`
	LargestPerSiteML float64          `json:"largest_per_site_ml,omitempty"`
	Rounding         string           `json:"rounding"` // nearest | down
	VolumeML         float64          `json:"volume_ml,omitempty"`
	Pieces           float64          `json:"pieces,omitempty"`
	DoseGiven        float64          `json:"dose_given"`
	ErrorPercent     float64          `json:"error_percent"`
	Ends             []Administration `json:"ends,omitempty"`
	PumpMLPerH       *float64         `json:"pump_ml_per_h,omitempty"`
	Pump             []Pump           `json:"pump,omitempty"`
	// The drafted dose measured out at both ends of an estimated mass.
	AtLowMass  []Administration `json:"at_low_mass,omitempty"`
	AtHighMass []Administration `json:"at_high_mass,omitempty"`
	Days       float64          `json:"days,omitempty"`
	Text       []string         `json:"text,omitempty"`
}

// PublishedDose is a dose in print that the case cites; it outranks the draft.
type PublishedDose struct {
	Species    string   `json:"species"`
	CommonName string   `json:"common_name"`
	DoseTyped  string   `json:"dose_typed"`
	DosePerKg  *Pair    `json:"dose_per_kg"`
	Unit       string   `json:"unit"`
	IntervalH  *float64 `json:"interval_h"`
	Interval   string   `json:"interval_typed"`
	Route      string   `json:"route,omitempty"`
	Source     string   `json:"source"`
	Relation   string   `json:"relation"` // same species, genus, family, order, class, other
	// DailyRatio is the drafted daily amount per kg over the published one;
	// 0 when there is no draft or either is not repeated.
	DailyRatio float64 `json:"daily_ratio,omitempty"`
}

// BasisLine is the dose (same interval) if the basis were another.
type BasisLine struct {
	Basis     string  `json:"basis"`
	ID        string  `json:"id,omitempty"`
	PatientW  float64 `json:"patient_w"`
	ModelW    float64 `json:"model_w"`
	Specific  float64 `json:"specific"`
	DosePerKg *Pair   `json:"dose_per_kg"`        // at the drafted interval; null after a stop
	Drafted   bool    `json:"drafted"`            // the basis that the draft uses
	StandIn   string  `json:"stand_in,omitempty"` // which animal stands on another basis
	Source    string  `json:"source"`
}

// UnavailableLine says why a basis cannot be used for this pair of animals.
type UnavailableLine struct {
	Basis string `json:"basis"`
	Why   string `json:"why"`
}

// ExponentLine is the dose (same interval) under another exponent of the group
// constants: S_b = (kt/km)·(temperature factors)·M^(b−1), pivot 1 kg.
type ExponentLine struct {
	Exponent  float64 `json:"exponent"`
	Specific  float64 `json:"specific"`
	DosePerKg Pair    `json:"dose_per_kg"`
	Remark    string  `json:"remark"`
}

// TemperatureLine is the dose at another body temperature of an ectotherm.
type TemperatureLine struct {
	TemperatureC float64 `json:"temperature_c"`
	Specific     float64 `json:"specific"`
	DosePerKg    Pair    `json:"dose_per_kg"`
	IntervalH    float64 `json:"interval_h"` // 0 for a single dose and an infusion
	DailyPerKg   *Pair   `json:"daily_per_kg,omitempty"`
	Amount       Pair    `json:"per_administration"`
}

// TargetRecord is a concentration that the case asks to stay above.
type TargetRecord struct {
	Typed    string  `json:"typed"`
	PerLitre float64 `json:"per_litre"` // mg/L or IU/L
	Unit     string  `json:"unit"`
	Source   string  `json:"source"`
}

// ProposedRatios are proposed over drafted.
type ProposedRatios struct {
	Dose     float64  `json:"dose"`
	Daily    float64  `json:"daily"`
	Interval float64  `json:"interval"`
	Peak     *float64 `json:"peak"` // null without a half-life
	Trough   *float64 `json:"trough"`
}

// Proposed is a regimen held against the drafted one.
type Proposed struct {
	DoseTyped     string   `json:"dose_typed"`
	IntervalTyped string   `json:"interval_typed"`
	DosePerKg     Pair     `json:"dose_per_kg"`
	Unit          string   `json:"unit"`
	IntervalH     *float64 `json:"interval_h"`
	DailyPerKg    *Pair    `json:"daily_per_kg,omitempty"`
	// PerAdministration is for the patient; per hour for an infusion.
	PerAdministration Pair             `json:"per_administration"`
	Measured          []Administration `json:"measured,omitempty"` // in the syringe, when a product is given
	Ratios            ProposedRatios   `json:"ratios"`
	Differs           bool             `json:"differs"`
	OutsideRange      bool             `json:"outside_range90"`
	RaisesStop        bool             `json:"raises_stop"`
	Cautions          []Caution        `json:"cautions,omitempty"`
	Verdict           []string         `json:"verdict"`
}

// Curve is the one-compartment course of one regimen at steady state.
// Concentrations are in Unit.
type Curve struct {
	Name         string   `json:"name"`  // model | a plan's name | proposed
	Label        string   `json:"label"` // for the figure
	HalfLifeH    float64  `json:"half_life_h"`
	IntervalH    *float64 `json:"interval_h"`
	DosePerKg    float64  `json:"dose_per_kg"`
	Cmax         float64  `json:"cmax"`
	TmaxH        float64  `json:"tmax_h"`
	Cmin         float64  `json:"cmin"`
	Cavg         float64  `json:"cavg"`
	Unit         string   `json:"unit"`
	Fluctuation  float64  `json:"fluctuation"`
	Accumulation float64  `json:"accumulation"`
	DosesTo90    int      `json:"doses_to_90_percent"`
	PercentAbove *float64 `json:"percent_of_interval_above_target"`

	// For the figure; the curve follows from what the record holds.
	kinetics Kinetics
	dosing   Dosing
	per      float64
}

// Criterion is one line of the table of suitability for scaling.
type Criterion struct {
	Name     string `json:"name"`
	Verdict  string `json:"verdict"` // speaks for | speaks against | unknown
	Text     string `json:"text"`
	Source   string `json:"source"`
	Verified string `json:"verified"`
}

// SourceLine is one source that the worksheet leans on.
type SourceLine struct {
	What     string `json:"what"`
	Citation string `json:"citation"`
	Memory   bool   `json:"from_memory,omitempty"` // not verified against the source
}

package dose

import (
	"tayra/metabolic"
	"tayra/species"
)

// Case is a case whose every entry was read: typed quantities, animals found.
// Only [CaseInput.Check] makes one.
type Case struct {
	ID, Date, PreparedBy string

	Patient   Patient
	Drug      Drug
	Models    []Model
	Published []Published
	Method    Method
	Product   *Product
	Target    *Target
	Proposed  *Regimen
	Overrides []Override

	FitAverage *Target // concentration that a fitted dose is to reach on average

	Input *CaseInput
}

// Patient is the target animal.
type Patient struct {
	Name           string
	Animal         *species.Animal
	Mass           metabolic.BodyMass
	Temperature    metabolic.Celsius
	HasTemperature bool
	Stage          Stage
	Conditions     Condition
	FoodProducing  Answer
}

// Stage of life.
type Stage uint8

// Stages, and what the case file calls them.
const (
	Adult Stage = iota
	Juvenile
	Neonate
)

// Condition is a set of states of the patient that the case file names.
type Condition uint16

// Conditions of the case file.
const (
	Dehydrated Condition = 1 << iota
	RenalDisease
	HepaticDisease
	Pregnant
	Lactating
	Torpid
	Obese
	Gravid
)

// Answer to a yes-or-no question that may be left open.
type Answer uint8

// Answers.
const (
	NotSaid Answer = iota
	Yes
	No
)

// Elimination is the main way in which the drug leaves the body.
type Elimination uint8

// Ways of elimination.
const (
	EliminationUnknown Elimination = iota
	Renal
	Hepatic
	Mixed
	Biliary
)

// Extraction of a hepatic drug by the liver.
type Extraction uint8

// Degrees of extraction.
const (
	ExtractionUnknown Extraction = iota
	LowExtraction
	MediumExtraction
	HighExtraction
)

// Activity says what the drug's effect follows.
type Activity uint8

// Kinds of activity.
const (
	ActivityUnknown Activity = iota
	TimeDependent
	ConcentrationDependent
)

// Margin between the usual and a harmful dose.
type Margin uint8

// Margins.
const (
	MarginUnknown Margin = iota
	Wide
	Narrow
)

// Drug is the drug as the case describes it.
type Drug struct {
	Name, Class, Route string
	Elimination        Elimination
	Extraction         Extraction
	Activity           Activity
	Depot              bool
	FormSaid           bool    // the case says whether it is a depot
	ProteinBinding     float64 // fraction bound; only with HasBinding
	HasBinding         bool
	ActiveSecretion    Answer
	Recycling          Answer // enterohepatic
	Saturable          Answer
	Margin             Margin
	Controlled         Answer
}

// Model is a known regimen in a model species.
type Model struct {
	Animal         *species.Animal
	Mass           metabolic.BodyMass
	Temperature    metabolic.Celsius
	HasTemperature bool
	Regimen        Regimen
	LoadingPerKg   *Pair
	LoadingPerHead bool // typed per animal: the model's mass divides it
	Route          string
	HalfLife       metabolic.Hours // 0: not given
	VolumePerKg    float64         // L/kg; 0: not given
	Fraction       float64         // bioavailability; 0: not given
	AbsorptionHalf metabolic.Hours // 0: a bolus
	Tolerated      *Tolerated
	Source         string
}

// Regimen is a dose per kg, or per kg and hour, with its interval.
type Regimen struct {
	Typed, IntervalTyped string
	Given                metabolic.Dose // as typed, in mg or IU
	PerKg                Pair           // per administration; per hour for an infusion
	Unit                 metabolic.AmountUnit
	Interval             metabolic.Interval
	Steps                []Step // how PerKg follows from Given, when it is not given so
	PerAnimal            bool   // typed per animal: the model's mass enters twice
}

// Tolerated is a maximum that the model species tolerated.
type Tolerated struct {
	PerKg  float64
	Unit   metabolic.AmountUnit
	Typed  string
	Source string
}

// Published is a dose in print for the patient's species or near kin.
type Published struct {
	Animal   *species.Animal
	Regimen  Regimen
	HasPerKg bool // false for a dose per animal: no mass is known there
	Route    string
	Source   string
}

// Method is how to scale.
type Method struct {
	Basis      Basis
	Equation   *metabolic.Equation
	Plan       PlanName // PlanDefault: chosen by the rule
	Intervals  []metabolic.Hours
	Q10        float64
	Thresholds Thresholds
	Changed    []ChangedThreshold
}

// ChangedThreshold is a threshold of cautions that the case set.
type ChangedThreshold struct {
	Name           string
	Value, Default float64
	Loosened       bool // the caution is raised later than by default
}

// Product is the product and the device.
type Product struct {
	StrengthTyped string
	Input         ProductInput
}

// Target is a concentration to stay above.
type Target struct {
	Typed         string
	Concentration metabolic.Concentration
	Source        string
}

// Override is a written reason for going on past one stop.
type Override struct {
	Slug, Reason string
	Entry        Entry
}

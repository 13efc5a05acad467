package metabolic

import "errors"

var errStub = errors.New("not yet")

type QuantityError struct{ Input, Problem, Remedy string }

func (e *QuantityError) Error() string { return e.Problem + "; " + e.Remedy }

type BodyMass struct{ Low, Middle, High Mass }

func (b BodyMass) HalfWidth() float64 { return 0 }
func (b BodyMass) Estimated() bool    { return b.Low < b.High }

type DosePer uint8

const (
	PerKg DosePer = iota
	PerAnimal
	PerKgDay
	PerKgHour
	PerSquareMetre
)

type Dose struct {
	Low, High float64
	Unit      AmountUnit
	Per       DosePer
}

type IntervalKind uint8

const (
	Repeated IntervalKind = iota
	Once
	Infusion
)

type Interval struct {
	Kind  IntervalKind
	Hours Hours
}

type Concentration struct {
	Value float64
	Unit  AmountUnit
}

func ParseBodyMass(s string) (BodyMass, error)                          { return BodyMass{}, errStub }
func ParseDose(s string) (Dose, error)                                  { return Dose{}, errStub }
func ParseInterval(s string) (Interval, error)                          { return Interval{}, errStub }
func ParseTemperature(s string) (Celsius, error)                        { return 0, errStub }
func ParseDuration(s string) (Hours, error)                             { return 0, errStub }
func ParseVolumePerKg(s string) (float64, error)                        { return 0, errStub }
func ParseFraction(s string) (float64, error)                           { return 0, errStub }
func ParseConcentration(s string) (Concentration, error)                { return Concentration{}, errStub }
func ParseLiquid(s string) (float64, error)                             { return 0, errStub }
func ParseClearance(s string) (value float64, perKg bool, err error)    { return 0, false, errStub }
func ParseRate(s string) (Power, error)                                 { return 0, errStub }
func Significant(x float64, digits int) string                          { return "" }
func FormatMass(m Mass) string                                          { return "" }
func FormatBodyMass(b BodyMass) string                                  { return "" }
func FormatAmount(v float64, unit AmountUnit) string                    { return "" }
func FormatDosePerKg(v float64, unit AmountUnit, perHour bool) string   { return "" }
func FormatRange(low, high float64, format func(float64) string) string { return "" }
func FormatInterval(i Interval) string                                  { return "" }
func FormatShortInterval(i Interval) string                             { return "" }
func FormatPower(p Power) string                                        { return "" }
func FormatCelsius(c Celsius) string                                    { return "" }
func FormatRatio(r float64) string                                      { return "" }

var Units = []string{}

const (
	Q10Default = 2.5
	Q10Low     = 1.5
	Q10High    = 4.0
)

func Q10Factor(q10 float64, t, t0 Celsius) float64 { return 1 }

type Equation struct {
	ID                string
	Animals           string
	AppliesTo         []string
	Kind              string // BMR, SMR, RMR, FMR
	Form              string // power, log-linear, boltzmann, quadratic, linear
	A, B, C           float64
	MassUnit          string
	RateUnit          string
	T0                Celsius
	HasT0             bool
	MassLow, MassHigh Mass
	N                 int
	ResidualSDln      float64
	Level             string
	Citation          string
	Verified          string
	Note              string
	DefaultFor        []string
	LowConfidence     bool
}

func (e *Equation) Rate(m Mass, t Celsius, q10 float64) (Power, error) { return 0, errStub }
func (e *Equation) Usable() bool                                       { return false }
func (e *Equation) Interspecific() bool                                { return false }
func (e *Equation) Ectotherm() bool                                    { return false }
func (e *Equation) HasTemperatureTerm() bool                           { return false }
func (e *Equation) Applies(group, species string) bool                 { return false }
func (e *Equation) Convert(massUnit, rateUnit string) (a, b float64, err error) {
	return 0, 0, errStub
}
func (e *Equation) Formula() string                  { return "" }
func (e *Equation) Memory() bool                     { return false }
func Equations() []*Equation                         { return nil }
func FindEquation(id string) (*Equation, bool)       { return nil, false }
func DefaultEquation(group string) (*Equation, bool) { return nil, false }
func GroupConstant(group string) (*Equation, bool)   { return nil, false }

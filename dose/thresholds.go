package dose

// Thresholds are the numbers at which cautions are raised: the defaults of the
// method, which a case may change. A threshold of a stop can only be made
// stricter.
type Thresholds struct {
	MassRatio        float64 // mass-ratio: M outside 1/x to x
	MassRatioExtreme float64 // mass-ratio-extreme
	BasisWarn        float64 // basis-disagrees, warn
	BasisNote        float64 // basis-disagrees, note
	LargeChange      float64 // large-change: S outside 1/x to x
	PeakWarn         float64 // peak: drafted mg/kg over the model's
	PeakStop         float64
	CompoundedLow    float64 // compounded: S outside low to high
	CompoundedHigh   float64
	IntervalShortH   float64 // interval-impractical
	IntervalLongH    float64
	RoundingPercent  float64 // rounding-error
	ModelsFold       float64 // models-disagree
	Accumulation     float64 // accumulation
}

// DefaultThresholds are those of the method.
func DefaultThresholds() Thresholds {
	return Thresholds{
		MassRatio:        20,
		MassRatioExtreme: 100,
		BasisWarn:        2,
		BasisNote:        1.5,
		LargeChange:      3,
		PeakWarn:         1.5,
		PeakStop:         3,
		CompoundedLow:    0.8,
		CompoundedHigh:   1.25,
		IntervalShortH:   4,
		IntervalLongH:    168,
		RoundingPercent:  5,
		ModelsFold:       3,
		Accumulation:     20,
	}
}

// thresholdField is one threshold by its name in the case file.
type thresholdField struct {
	name     string
	of       func(*Thresholds) *float64
	min, max float64
	below    bool // raised below the threshold, not above it
}

// thresholdFields says what a case may set, and within what limits.
var thresholdFields = []thresholdField{
	{"mass-ratio", func(t *Thresholds) *float64 { return &t.MassRatio }, 1, 1000, false},
	{"mass-ratio-extreme", func(t *Thresholds) *float64 { return &t.MassRatioExtreme }, 1, 1e6, false},
	{"basis-disagrees", func(t *Thresholds) *float64 { return &t.BasisWarn }, 1, 10, false},
	{"basis-disagrees-note", func(t *Thresholds) *float64 { return &t.BasisNote }, 1, 10, false},
	{"large-change", func(t *Thresholds) *float64 { return &t.LargeChange }, 1, 10, false},
	{"peak", func(t *Thresholds) *float64 { return &t.PeakWarn }, 1, 3, false},
	{"peak-stop", func(t *Thresholds) *float64 { return &t.PeakStop }, 1, 3, false},
	{"interval-short", func(t *Thresholds) *float64 { return &t.IntervalShortH }, 0.5, 24, true},
	{"interval-long", func(t *Thresholds) *float64 { return &t.IntervalLongH }, 24, 720, false},
	{"rounding-error", func(t *Thresholds) *float64 { return &t.RoundingPercent }, 0.1, 20, false},
	{"models-disagree", func(t *Thresholds) *float64 { return &t.ModelsFold }, 1, 10, false},
	{"accumulation", func(t *Thresholds) *float64 { return &t.Accumulation }, 2, 100, false},
}

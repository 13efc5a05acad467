package dose

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"

	"tayra/metabolic"
	"tayra/species"
)

// Bands of a fitted exponent of clearance in the published rule of exponents
// (Mahmood & Balian, for the prediction of man; from memory, with the version
// for anticancer drugs read in Clin Pharmacokinet abstracts).
const (
	usableLow  = 0.55 // below: prediction likely far off
	simpleHigh = 0.70 // up to here the simple line is called adequate
	lifeHigh   = 0.99 // up to here the rule multiplies by maximum life span, above by brain mass
	usableHigh = 1.3  // above: prediction likely far off
)

// FitPoint is one animal of a fit.
type FitPoint struct {
	Species  string  `json:"species"`
	Rows     int     `json:"rows"` // rows averaged geometrically into it
	MassKg   float64 `json:"mass_kg"`
	Value    float64 `json:"value"`
	Fitted   float64 `json:"fitted"`
	Residual float64 `json:"residual_ln"`
	Leverage float64 `json:"leverage"`
	Cook     float64 `json:"cooks_distance"`
}

// FitAt is what a line says at the target's mass.
type FitAt struct {
	MassKg float64 `json:"mass_kg"`
	Value  float64 `json:"value"`
	CI95   Pair    `json:"ci95"`
	PI95   Pair    `json:"pi95"`
}

// FitLeftOut is one animal predicted by the line of the others.
type FitLeftOut struct {
	Species   string  `json:"species"`
	Predicted float64 `json:"predicted"`
	FoldError float64 `json:"fold_error"` // predicted over observed
}

// FitFixed is the line with the usual exponent instead of the fitted one.
type FitFixed struct {
	Exponent   float64 `json:"exponent"`
	A          float64 `json:"a"`
	ResidualSD float64 `json:"residual_sd_ln"`
	AtTarget   FitAt   `json:"at_target"`
}

// FitRecord is an allometric line fitted to the user's data: method, section 9.
//
//	ln Y = ln a + b·ln W, W in kg, Y per animal in Unit
type FitRecord struct {
	Parameter  Parameter    `json:"parameter"`
	Unit       string       `json:"unit"`
	N          int          `json:"n"`
	A          float64      `json:"a"`
	B          float64      `json:"b"`
	SELnA      float64      `json:"se_ln_a"`
	SEB        float64      `json:"se_b"`
	CI95B      Pair         `json:"ci95_b"`
	ResidualSD float64      `json:"residual_sd_ln"`
	RSquared   float64      `json:"r_squared"`
	Target     string       `json:"target"`
	AtTarget   FitAt        `json:"at_target"`
	Fixed      FitFixed     `json:"fixed_exponent"`
	Points     []FitPoint   `json:"points"`
	LeaveOne   []FitLeftOut `json:"leave_one_out"`
	Notes      []string     `json:"notes"`
	Others     []FitRecord  `json:"others,omitempty"` // further parameters of the table
	Regimen    *FitRegimen  `json:"regimen,omitempty"`
	Cautions   []Caution    `json:"cautions"`

	estimate metabolic.PowerEstimate
	line     *metabolic.PowerFit
}

// Line is the fitted line, for a figure.
func (f *FitRecord) Line() *metabolic.PowerFit { return f.line }

// FitRegimen is a dose from a fitted clearance: D = Cavg·CL·τ/F.
type FitRegimen struct {
	Average       float64 `json:"average_per_litre"` // mg/L or IU/L
	AverageSource string  `json:"average_source"`
	Bioavailable  float64 `json:"bioavailability"`
	HalfLifeH     float64 `json:"half_life_h,omitempty"`
	HalfLifeFrom  string  `json:"half_life_from,omitempty"`
}

// Cautions of a fit.
const (
	FewSpecies    Slug = "few-species"
	NarrowMasses  Slug = "narrow-masses"
	OutsideMasses Slug = "outside-masses"
	ExponentBand  Slug = "exponent-outside-band"
	WideInterval  Slug = "wide-interval"
	HighLeverage  Slug = "high-leverage"
)

// FitTarget is the animal that a line is asked about.
type FitTarget struct {
	Animal *species.Animal
	Mass   metabolic.BodyMass
}

// Fit fits the line of in.Parameter and of every further parameter of the
// table, and reads them at the target's mass. The error is an [InputErrors]:
// a fault of a cell, or fewer than 3 species, or one mass only.
func Fit(in *FitInput, target FitTarget) (*FitRecord, error) {
	rows, err := in.check()
	if err != nil {
		return nil, err
	}
	main, err := fitOne(in, rows, in.Parameter, target)
	if err != nil {
		return nil, err
	}
	for _, p := range Parameters() {
		if p == in.Parameter {
			continue
		}
		n := 0
		for _, r := range rows {
			if _, ok := r.values[p]; ok {
				n++
			}
		}
		if n == 0 {
			continue
		}
		other, err := fitOne(in, rows, p, target)
		if err != nil {
			main.Notes = append(main.Notes, fmt.Sprintf("No line for %s: %s.", p, strings.TrimSuffix(err.Error(), ".")))
			continue
		}
		main.Others = append(main.Others, *other)
	}
	return main, nil
}

func fitOne(in *FitInput, rows []fitRow, p Parameter, target FitTarget) (*FitRecord, error) {
	f := &FitRecord{Parameter: p, Unit: p.unit(), Target: target.Animal.Name, Notes: []string{}, Cautions: []Caution{}, LeaveOne: []FitLeftOut{}}
	points := gather(f, rows, p, in.KeepAll)
	fail := func(problem, remedy string) error {
		return InputErrors{{File: in.File, Field: string(p), Problem: problem, Remedy: remedy}}
	}
	distinct := map[string]bool{}
	for _, q := range points {
		distinct[strings.ToLower(q.Name)] = true
	}
	if len(distinct) == 1 {
		return nil, fail("one species only ("+points[0].Name+")", "a line between species needs at least 3; slopes within one species are lower and are not used between species")
	}
	if len(distinct) < 3 {
		return nil, fail(fmt.Sprintf("%d species with a value", len(distinct)), "a line needs at least 3, better 5")
	}
	line, err := metabolic.FitPowerLaw(points)
	if errors.Is(err, metabolic.ErrSameX) {
		return nil, fail("all masses are equal", "a line on mass needs different masses")
	}
	if err != nil {
		return nil, fail(err.Error(), "check the values of the column")
	}
	w := float64(target.Mass.Middle)
	at, err := line.At(w)
	if err != nil {
		return nil, fail(err.Error(), "check the target's mass")
	}
	f.line, f.estimate = line, at
	f.N, f.A, f.B, f.SELnA, f.SEB = line.N, line.A, line.B, line.SELnA, line.SEB
	ci := line.CI95B()
	f.CI95B, f.ResidualSD, f.RSquared = Pair(ci), line.ResidualSDLn, line.RSquared
	f.AtTarget = fitAt(at)
	fixed, err := metabolic.FixedExponent(points, p.usualExponent())
	if err != nil {
		return nil, fail(err.Error(), "check the values of the column")
	}
	fat, err := fixed.At(w)
	if err != nil {
		return nil, fail(err.Error(), "check the target's mass")
	}
	f.Fixed = FitFixed{Exponent: fixed.B, A: fixed.A, ResidualSD: fixed.ResidualSDLn, AtTarget: fitAt(fat)}
	res, lev, cook := line.Residuals(), line.Leverage(), line.CooksDistance()
	for i := range f.Points {
		q := &f.Points[i]
		q.Residual, q.Leverage, q.Cook = res[i], lev[i], cook[i]
		q.Fitted = q.Value * math.Exp(-res[i])
		if math.IsInf(q.Cook, 0) || math.IsNaN(q.Cook) {
			q.Cook = math.MaxFloat64 // one animal alone sets the slope; JSON has no infinity
		}
	}
	for _, l := range line.LeaveOneOut() {
		if !l.Undetermined {
			f.LeaveOne = append(f.LeaveOne, FitLeftOut{Species: l.Name, Predicted: l.Predicted, FoldError: l.Fold})
		}
	}
	f.caution(target)
	return f, nil
}

func fitAt(e metabolic.PowerEstimate) FitAt {
	return FitAt{MassKg: e.X, Value: e.Value, CI95: Pair(e.CI95), PI95: Pair(e.PI95)}
}

// gather makes the points of a parameter: repeated species are averaged
// geometrically in mass and value, or kept.
func gather(f *FitRecord, rows []fitRow, p Parameter, keepAll bool) []metabolic.Point {
	index := map[string]int{}
	for _, r := range rows {
		v, ok := r.values[p]
		if !ok {
			continue
		}
		key := strings.ToLower(r.name)
		if i, ok := index[key]; ok && !keepAll {
			q := &f.Points[i]
			n := float64(q.Rows)
			q.MassKg = math.Exp((math.Log(q.MassKg)*n + math.Log(r.mass)) / (n + 1))
			q.Value = math.Exp((math.Log(q.Value)*n + math.Log(v)) / (n + 1))
			q.Rows++
			continue
		}
		index[key] = len(f.Points)
		f.Points = append(f.Points, FitPoint{Species: r.name, Rows: 1, MassKg: r.mass, Value: v})
	}
	points := make([]metabolic.Point, len(f.Points))
	for i, q := range f.Points {
		points[i] = metabolic.Point{X: q.MassKg, Y: q.Value, Name: q.Species}
		if q.Rows > 1 {
			f.Notes = append(f.Notes, fmt.Sprintf("%s: %d rows averaged geometrically.", q.Species, q.Rows))
		}
	}
	return points
}

// caution raises what a fit should be doubted for.
func (f *FitRecord) caution(target FitTarget) {
	add := func(s Slug, l Level, text, source string, numbers map[string]float64) {
		f.Cautions = append(f.Cautions, Caution{Slug: string(s), Level: l, Text: text, Source: source, Numbers: numbers})
	}
	f3 := func(x float64) string { return metabolic.Significant(x, 3) }
	names := map[string]bool{}
	low, high := math.Inf(1), 0.0
	for _, q := range f.Points {
		names[strings.ToLower(q.Species)] = true
		low, high = math.Min(low, q.MassKg), math.Max(high, q.MassKg)
	}
	if len(names) < 4 {
		add(FewSpecies, Warn, fmt.Sprintf("Only %d species: 24 of 115 drugs with 3 species or more showed no correlation at all.", len(names)), "Hu & Hayton 2001 AAPS PharmSci (read)", map[string]float64{"species": float64(len(names))})
	}
	if high/low < 10 {
		add(NarrowMasses, Warn, fmt.Sprintf("The masses span %s-fold, under 10-fold: the exponent is poorly known.", f3(high/low)), "Martinez et al. 2006 (abstract read; detail from memory)", map[string]float64{"span": high / low})
	}
	// The masses of animals that the table knows, under whatever name.
	cannotBe := func(a *species.Animal, mass metabolic.Mass, what string) {
		if implausible(a, mass, Adult) {
			add(ImplausibleMass, Warn, fmt.Sprintf("%s, %s, cannot be that of an adult %s, which weighs %s to %s: grams for kilograms, or another animal? The line was fitted and read as it stands.",
				what, metabolic.FormatMass(mass), animalWords(a), metabolic.FormatMass(a.AdultLow), metabolic.FormatMass(a.AdultHigh)), "",
				map[string]float64{"mass_kg": float64(mass), "adult_low_kg": float64(a.AdultLow), "adult_high_kg": float64(a.AdultHigh)})
		}
	}
	for _, q := range f.Points {
		if a, ok := species.Known(q.Species); ok {
			cannotBe(a, metabolic.Mass(q.MassKg), "The mass of the row "+q.Species)
		}
	}
	cannotBe(target.Animal, target.Mass.Middle, "The mass of the target")
	w := float64(target.Mass.Middle)
	if w < low || w > high {
		add(OutsideMasses, Warn, fmt.Sprintf("The target's mass, %s, lies outside the data, %s to %s: beyond them the error widens fast.", metabolic.FormatMass(target.Mass.Middle), metabolic.FormatMass(metabolic.Mass(low)), metabolic.FormatMass(metabolic.Mass(high))),
			"Martinez et al. 2006 (abstract read; detail from memory)", map[string]float64{"mass_kg": w, "low_kg": low, "high_kg": high})
	}
	if f.Parameter == Clearance {
		if f.B < usableLow || f.B > usableHigh {
			add(ExponentBand, Warn, fmt.Sprintf("The fitted exponent, %s, is outside 0.55 to 1.3, where the published rule calls a prediction likely far off.", f3(f.B)), "rule of exponents, Mahmood & Balian (memory)", map[string]float64{"b": f.B})
		}
		f.Notes = append(f.Notes, exponentRule(f.B))
	}
	if r := f.AtTarget.PI95[1] / f.AtTarget.PI95[0]; r > 10 {
		add(WideInterval, Warn, fmt.Sprintf("The 95 %% prediction interval is %s-fold wide, over 10-fold: the line says little about one animal.", f3(r)), "", map[string]float64{"fold": r})
	}
	for _, q := range f.Points {
		// Twice the mean leverage 2/n is the usual mark; 1 is a point that
		// alone sets the slope.
		if limit := math.Min(4/float64(f.N), 0.95); q.Leverage > limit && f.N > 3 {
			add(HighLeverage, Note, fmt.Sprintf("%s alone carries much of the slope (leverage %s).", q.Species, f3(q.Leverage)), "common practice, no source", map[string]float64{"leverage": q.Leverage})
		}
	}
	sortCautions(f.Cautions)
}

// sortCautions puts stops first and keeps the order within a level.
func sortCautions(cs []Caution) {
	slices.SortStableFunc(cs, func(a, b Caution) int { return levelRank(a.Level) - levelRank(b.Level) })
}

// exponentRule says where the exponent lies in the rule of exponents, and why
// its corrections are not applied.
func exponentRule(b float64) string {
	band := "below 0.55 or above 1.3: prediction likely far off"
	switch {
	case b >= usableLow && b <= simpleHigh:
		band = "0.55 to 0.70: the simple line is called adequate"
	case b > simpleHigh && b <= lifeHigh:
		band = "0.71 to 0.99: the rule would multiply by maximum life span"
	case b > lifeHigh && b <= usableHigh:
		band = "1.0 to 1.3: the rule would multiply by brain mass"
	}
	return "Rule of exponents (Mahmood & Balian, from memory), exponent in the band " + band +
		". Its corrections were made for predicting man and are not applied to animals (Martinez, Mahmood & Hunter 2006, from memory)."
}

package dose

import (
	"math"
	"strconv"
	"strings"

	"tayra/metabolic"
	"tayra/species"
)

// RateLine is an animal's metabolic rate by one basis or one published line.
type RateLine struct {
	Basis string `json:"basis"`
	ID    string `json:"id,omitempty"` // of a published line
	// Drafted marks the line of its basis that a draft takes when the case
	// names none; every basis has one at most.
	Drafted bool `json:"drafted"`
	// DisplayOnly marks a line by which no dose is scaled: resting, active and
	// field rates, and lines within one species.
	DisplayOnly   bool     `json:"display_only,omitempty"`
	Kind          string   `json:"kind"` // BMR, SMR, RMR, FMR; "resting" for a measured row that is not basal
	Formula       string   `json:"formula,omitempty"`
	Watt          float64  `json:"watt"`
	KcalPerDay    float64  `json:"kcal_per_day"`
	KJPerDay      float64  `json:"kj_per_day"`
	MLO2PerHour   float64  `json:"ml_o2_per_hour"`
	SDln          *float64 `json:"sd_ln"` // of ln(species' own rate / this one); null where it is not known
	Species       int      `json:"species,omitempty"`
	SDAssumed     bool     `json:"sd_assumed,omitempty"`
	OutsideData   bool     `json:"outside_data,omitempty"` // the mass lies outside the masses behind the line
	MassLowKg     float64  `json:"mass_low_kg,omitempty"`  // the masses behind the line
	MassHighKg    float64  `json:"mass_high_kg,omitempty"`
	LowConfidence bool     `json:"low_confidence,omitempty"`
	Remark        string   `json:"remark,omitempty"`
	Source        string   `json:"source"`
}

// Rates gives the metabolic rate of an animal of mass m by every basis that it
// has, then by every other published line of its group, and says of each basis
// that it lacks why. Without a temperature (hasT false) an ectotherm has no
// rate, which is an error, as are a temperature outside 10 to 40 °C and a q10
// outside [metabolic.Q10Low] to [metabolic.Q10High]; an endotherm's
// temperature and q10 change nothing.
//
// Errors are InputErrors whose Field is mass, temperature or q10.
func Rates(a *species.Animal, m metabolic.Mass, t metabolic.Celsius, hasT bool, q10 float64) (have []RateLine, missing []UnavailableLine, err error) {
	if err := checkRates(a, m, t, hasT, q10); err != nil {
		return nil, nil, err
	}
	taken := map[string]bool{}
	for _, b := range Bases() {
		r, err := basisRate(b, nil, a, m, t, q10)
		if err != nil {
			missing = append(missing, UnavailableLine{Basis: b.String(), Why: reason(err)})
			continue
		}
		if e := r.line.equation; e != nil {
			taken[e.ID] = true
		}
		l := rateRecord(b, &r, a, m)
		l.Drafted = true
		if b == BasisGroup && r.line.basis != BasisGroup {
			l.Remark = "no group constant for a " + a.Group + ": this stands in for it"
		}
		have = append(have, l)
	}
	for _, e := range metabolic.Equations() {
		if taken[e.ID] || !e.Applies(a.Group, a.Name) || strings.HasPrefix(e.ID, "group_") {
			continue
		}
		r, err := equationLine(BasisEquation, e, a).at(m, t, q10)
		if err != nil {
			continue // a fit that ends short of this temperature
		}
		l := rateRecord(BasisEquation, &r, a, m)
		l.DisplayOnly = !e.Usable()
		have = append(have, l)
	}
	return have, missing, nil
}

func checkRates(a *species.Animal, m metabolic.Mass, t metabolic.Celsius, hasT bool, q10 float64) error {
	fail := func(field, problem, remedy string) error {
		return InputErrors{{Field: field, Problem: problem, Remedy: remedy}}
	}
	if !(m > 0) || math.IsInf(float64(m), 1) {
		return fail("mass", "not above zero", "write the body mass with its unit, such as 41 kg")
	}
	if a.Endotherm() {
		return nil
	}
	if !hasT {
		return fail("temperature", "missing: a "+animalWords(a)+" has the metabolic rate of its body temperature",
			"write the body temperature of this animal, such as 30 °C")
	}
	if err := metabolic.CheckEctotherm(t); err != nil {
		return fail("temperature", err.Error(), "the rate is not carried beyond those temperatures")
	}
	if err := metabolic.CheckQ10(q10); err != nil {
		return fail("q10", err.Error(), "published values run from 2.4 to 2.65, the default is 2.5")
	}
	return nil
}

// rateRecord puts a rate into the units and words of a record.
func rateRecord(b Basis, r *rate, a *species.Animal, m metabolic.Mass) RateLine {
	p := metabolic.Power(r.watt)
	l := RateLine{
		Basis: b.String(), Kind: r.line.kind,
		Watt: r.watt, KcalPerDay: p.KcalPerDay(), KJPerDay: p.KJPerDay(), MLO2PerHour: p.MLO2PerHour(),
		LowConfidence: r.lowConfidence(), Source: rateSource(r),
	}
	if low, high, ok := r.massLimits(); ok {
		l.MassLowKg, l.MassHighKg = float64(low), float64(high)
		l.OutsideData = m < low || m > high
	}
	sd := r.sd
	switch {
	case r.pred != nil:
		l.SDln, l.Species = &sd, r.pred.ClassN
	case r.line.measured != nil:
		l.Formula = measuredFormula(r)
		l.SDln, l.Remark = &sd, r.line.measured.Notes
	default:
		e := r.line.equation
		l.ID, l.Formula, l.Remark = e.ID, e.Formula(), e.Note
		if e.Usable() {
			l.SDln, l.Species, l.SDAssumed = &sd, r.line.scatter.N, r.line.scatter.Assumed
		}
		l.Source = e.Citation + verifiedMark(e.Verified)
	}
	if r.hasT0 && r.line.measured != nil {
		l.Formula += ", at " + metabolic.FormatCelsius(r.t0)
	}
	return l
}

// measuredFormula is how a species' own rate is carried to another mass.
func measuredFormula(r *rate) string {
	m := r.line.measured
	return "B = " + metabolic.Significant(float64(m.Rate), 4) + " watt·(W/" + metabolic.FormatMass(m.Mass) + ")^" +
		strconv.FormatFloat(measuredExponent, 'g', -1, 64)
}

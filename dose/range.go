package dose

import (
	"math"

	"tayra/metabolic"
	"tayra/species"
)

// Constants of the range: method, "How far off it may be". Each is held by a
// test against the published rows that it was computed from, or says that it
// is assumed.
const (
	// Root mean square of ln(predicted/observed) for the clearance of one
	// species carried to another by mass^0.75.
	recordMammals    = 1.25 // 1.14 over 221 pairs of rat, dog and monkey, raised (see method)
	recordMan        = 1.41 // man on either side, 361 pairs
	recordBirds      = 1.46 // bird to bird: 1.22 over 34 pairs of seven drugs, raised to the figure between mammals and birds
	recordRatite     = 2.70 // an ostrich-like bird on either side, 18 pairs
	recordMammalBird = 1.46 // 30 published predictions (Hunter et al. 2008)
	recordEctotherms = 1.46 // reptiles and amphibians: assumed
	recordCrossTherm = 2.0  // ectotherm and endotherm: assumed

	kinshipOneOrder = 0.8 // mammals of one order

	// exponentSpread is the standard deviation, between drugs, of the exponent
	// of clearance on mass: Hu & Hayton 2001, 91 substances.
	exponentSpread = 0.16

	temperatureSD = 0.15 // per 10 °C from the reference temperature: assumed

	// A loading dose and the by-volume end of a single dose have their own.
	volumeMammals = 1.10 // volume per kg, 218 pairs, rat, dog and monkey
	volumeOther   = 1.46 // assumed

	z90 = 1.645 // standard normal quantile of 0.95
	z50 = 0.674 // of 0.75
)

// record is a published record of single-species scaling.
type record struct {
	s       float64
	kappa   float64
	name    string // key of recordTexts
	assumed bool
}

// recordFor picks the record by the two animals.
func recordFor(a, b *species.Animal) record {
	r := record{kappa: 1}
	switch {
	case a.Endotherm() != b.Endotherm():
		r.s, r.name, r.assumed = recordCrossTherm, "cross-thermy", true
	case !a.Endotherm():
		r.s, r.name, r.assumed = recordEctotherms, "ectotherms", true
	case a.Mammal() && b.Mammal():
		r.s, r.name = recordMammals, "mammals"
		if a.Human() || b.Human() {
			r.s, r.name = recordMan, "man"
		}
		if a.Order == b.Order {
			r.kappa = kinshipOneOrder
		}
	case a.Bird() && b.Bird():
		r.s, r.name = recordBirds, "birds"
		if a.Ratite() || b.Ratite() {
			r.s, r.name = recordRatite, "ratite"
		}
	default:
		r.s, r.name = recordMammalBird, "mammal-bird"
	}
	return r
}

// spread is the standard deviation of ln dose in its parts.
type spread struct {
	record      record
	exponent    float64 // σb·|ln M|
	model       float64 // σm
	target      float64 // σt
	floor       float64 // κ·s
	composed    float64 // sqrt of the three
	temperature float64 // both ectotherms, in quadrature
	massPerKg   float64 // estimated masses, as they move mg/kg
	massAmount  float64 // and amounts
	perKg       float64 // the sum, for mg/kg
	amount      float64 // for amounts per administration
}

// spreadOf computes
//
//	sd = sqrt( max(κ·s, sqrt((σb·ln M)² + σm² + σt²))² + temperature² + mass² )
//
// An estimated patient's mass moves mg/kg by W^-0.25 and the amount by W^0.75;
// a model's moves both by W^0.25, or by W^-0.75 where its dose was given per
// animal (the division by its mass included).
func spreadOf(c *Case, m *Model, t, mo *rate) spread {
	a, b := c.Patient.Animal, m.Animal
	sp := spread{record: recordFor(a, b), model: mo.sd, target: t.sd}
	sp.exponent = exponentSpread * math.Abs(math.Log(float64(c.Patient.Mass.Middle/m.Mass.Middle)))
	sp.floor = sp.record.kappa * sp.record.s
	sp.composed = math.Sqrt(sp.exponent*sp.exponent + sp.model*sp.model + sp.target*sp.target)
	sp.temperature = math.Hypot(temperatureSpread(t, c.Patient.Temperature), temperatureSpread(mo, m.Temperature))
	ht, hm := c.Patient.Mass.HalfWidth()/z90, m.Mass.HalfWidth()/z90
	modelPower := 0.25
	if m.Regimen.PerAnimal {
		modelPower = 0.75
	}
	sp.massPerKg = math.Hypot(0.25*ht, modelPower*hm)
	sp.massAmount = math.Hypot(0.75*ht, modelPower*hm)
	core := math.Max(sp.floor, sp.composed)
	sp.perKg = math.Sqrt(core*core + sp.temperature*sp.temperature + sp.massPerKg*sp.massPerKg)
	sp.amount = math.Sqrt(core*core + sp.temperature*sp.temperature + sp.massAmount*sp.massAmount)
	return sp
}

func temperatureSpread(r *rate, t metabolic.Celsius) float64 {
	if !r.hasT0 {
		return 0
	}
	return temperatureSD * math.Abs(float64(t-r.t0)) / 10
}

// volumeSD is the spread of a dose that follows volume.
func volumeSD(a, b *species.Animal) float64 {
	if a.Mammal() && b.Mammal() {
		return volumeMammals
	}
	return volumeOther
}

// rangeAbout takes the low end of a dose range down and its high end up.
func rangeAbout(p Pair, sd, z float64) DoseRange {
	return DoseRange{Low: p[0] * math.Exp(-z*sd), High: p[1] * math.Exp(z*sd), SD: sd}
}

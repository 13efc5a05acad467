package metabolic

import (
	"math"
	"testing"
)

// Values in print, each with where it stands. "From memory" says that the page
// was not seen; "definition" that the figure follows from the units alone.

func line(t *testing.T, id string) *Equation {
	t.Helper()
	e, ok := FindEquation(id)
	if !ok {
		t.Fatalf("no line %s", id)
	}
	return e
}

func rate(t *testing.T, e *Equation, m Mass, at Celsius) Power {
	t.Helper()
	p, err := e.Rate(m, at, Q10Default)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

func read(t *testing.T, s string) Power {
	t.Helper()
	p, err := ParseRate(s)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

func TestPublishedUnitIdentities(t *testing.T) {
	// The mammal line of general physiology, 63.6 J/h per g^0.76 (common
	// practice, no source), in the units of Kleiber: a definition.
	common := line(t, "common_636")
	joules, _, err := common.Convert("kg", "J/h")
	if err != nil {
		t.Fatal(err)
	}
	near(t, "63.6 J/h per g^0.76 in J/h per kg^0.76", joules, 12118.7, 1e-4)
	kcal, b, err := common.Convert("kg", "kcal/day")
	if err != nil || b != 0.76 {
		t.Fatal(b, err)
	}
	near(t, "63.6 J/h per g^0.76 in kcal/day per kg^0.76", kcal, 69.515, 1e-4)
	near(t, "its distance from Kleiber", kcal/70, 0.99307, 1e-5)

	// Kleiber M 1947 Physiol Rev 27:511-541, as printed in public code.
	watts, _, err := line(t, "group_placental").Convert("kg", "W")
	if err != nil {
		t.Fatal(err)
	}
	within(t, "70 kcal/day in W", watts, 3.390, 0.005)
	// His fitted line in its printed form, log10 M = 1.83 + 0.756 log10 W.
	near(t, "a of the fitted line", line(t, "kleiber1947").A, math.Pow(10, 1.83), 1e-6)
	// His scatter, printed as 0.05 in log10 (from memory).
	near(t, "its residual sd in ln", line(t, "kleiber1947").ResidualSDln, 0.115129, 1e-5)

	// 3.39 W per kg^0.75 at 65 kg: heat-balance documentation, 77.6 W (the
	// mass is inferred); at 73 kg: the unit test of a public physics library.
	kleiber339 := &Equation{ID: "3.39", Form: FormPower, A: 3.39, B: 0.75, MassUnit: "kg", RateUnit: "W"}
	within(t, "3.39 W at 65 kg", float64(rate(t, kleiber339, 65, 37)), 77.6, 0.05)
	within(t, "3.39 W at 73 kg", float64(rate(t, kleiber339, 73, 37)), 84.66264711922338, 1e-10)

	// A cat of 100 times a mouse's mass burns about 32 times as much:
	// encyclopaedia articles on Kleiber's law.
	placental := line(t, "group_placental")
	within(t, "rate for 100 times the mass", float64(rate(t, placental, 3, 37)/rate(t, placental, 0.03, 37)), 32, 0.5)
	// A gram of a 5 g shrew burns about 30 times as much as one of a 4 t
	// elephant: manual of a public biology library.
	within(t, "rate per gram, shrew over elephant", float64(rate(t, placental, 0.005, 37)/rate(t, placental, 4000, 37))*4000/0.005, 30, 0.5)
	// mg/kg factor for ten times the mass, interval factor for ten thousand
	// times: definitions.
	within(t, "10^-0.25", float64(rate(t, placental, 10, 37)/rate(t, placental, 1, 37))/10, 0.5623, 5e-5)
	near(t, "10000^0.25", 1e4/float64(rate(t, placental, 1e4, 37)/rate(t, placental, 1, 37)), 10, 1e-12)
	// The same manual: a 7 g shrew at 0.29 W is more than 3 times above
	// 3.34·W^0.75.
	within(t, "shrew above the line", 0.29/float64(rate(t, line(t, "schmidtnielsen_w"), 0.007, 37)), 3.588, 0.005)

	// Ratios of the comparative constants (from memory).
	for group, want := range map[string]float64{"passerine bird": 1.843, "non-passerine bird": 1.114, "marsupial": 0.700, "squamate": 0.1429} {
		e, _ := GroupConstant(group)
		within(t, group+" over placental mammal", float64(rate(t, e, 2.2, 37)/rate(t, placental, 2.2, 37)), want, 5e-4)
	}

	// Bird lines as Bushuev A et al 2018 Curr Zool 64:33-43, table 1, lists
	// them, in kJ/day with W in kg; their own papers print kcal/day or logs.
	for id, want := range map[string]struct{ kJ, within float64 }{
		"ld1967_passerine":     {540.10, 0.5},
		"ld1967_nonpasserine":  {327.83, 0.3},
		"ld1967_all":           {361.74, 0.3},
		"ap1970_pass_rest":     {480.64, 0.4},
		"ap1970_nonpass_rest":  {307.73, 0.3},
		"kingfarner1961_large": {311.08, 0.3},
		"mckechniewolf2004":    {303.75, 0.9},
	} {
		kJ, _, err := line(t, id).Convert("kg", "kJ/day")
		if err != nil {
			t.Fatal(err)
		}
		within(t, id+" in kJ/day", kJ, want.kJ, want.within)
	}
	// Dawson & Hulbert in watts: source of a public biology library.
	marsupial, _, err := line(t, "dawsonhulbert1970").Convert("kg", "W")
	if err != nil {
		t.Fatal(err)
	}
	within(t, "48.6 kcal/day in W", marsupial, 2.36, 0.01)
}

func TestPublishedBasalRates(t *testing.T) {
	// Schmidt-Nielsen K, Animal Physiology and Scaling: mL O2 per g and h
	// (from memory). The mouse: 1.65 at 25 g; the elephant: 0.07, one digit,
	// at 3,833 kg, after Benedict.
	placental := line(t, "group_placental")
	mouse := read(t, "41 mL O2/h")
	near(t, "mouse, 25 g at 1.65 mL/g/h", 25*1.65, 41, 0.01)
	near(t, "mouse in kcal/day", mouse.KcalPerDay(), 4.76, 0.01)
	near(t, "mouse by Kleiber", rate(t, placental, 0.025, 37).KcalPerDay(), 4.40, 0.002)
	near(t, "elephant in kcal/day", read(t, "268000 mL O2/h").KcalPerDay(), 30900, 0.002)
	near(t, "elephant by Kleiber", rate(t, placental, 3833, 37).KcalPerDay(), 34100, 0.002)

	// Measured over 3.34·W^0.75 W: documentation of a public biology library.
	watts := line(t, "schmidtnielsen_w")
	for _, c := range []struct {
		animal      string
		kg          Mass
		watts, want float64
	}{
		{"mouse", 0.021, 0.26, 1.41}, {"rat", 0.262, 1.45, 1.19}, {"rabbit", 2.4, 6.6, 1.02}, {"dog", 20, 25, 0.79}, {"man", 70, 83, 1.03},
	} {
		within(t, c.animal+" over the line", c.watts/float64(rate(t, watts, c.kg, 37)), c.want, 0.005)
	}

	// Seymour RS et al 2013 J Comp Physiol B 183:491-500, abstract:
	// 1.01·W^0.829 mL O2/min at 30 °C.
	perMinute := func(p Power) float64 { return p.MLO2PerHour() / 60 }
	crocodile := line(t, "seymour2013_cporosus")
	within(t, "saltwater crocodile, 1 kg", perMinute(rate(t, crocodile, 1, 30)), 1.01, 0.005)
	near(t, "saltwater crocodile, 100 kg", perMinute(rate(t, crocodile, 100, 30)), 45.95, 0.003)
	// Gienger CM et al 2017 PLoS ONE 12:e0171082: 0.491·W^0.965 mL O2/min.
	alligator := line(t, "gienger2017_alligator")
	within(t, "alligator, 100 kg", perMinute(rate(t, alligator, 100, 30)), 41.79, 0.02)
	near(t, "alligator, 100 kg, an hour", rate(t, alligator, 100, 30).MLO2PerHour(), 2507.5, 5e-4)
}

func TestPublishedTemperature(t *testing.T) {
	// Andrews RM & Pough FH 1985 Physiol Zool 58:214-231, equation 2 as held
	// in public code: 0.013·W^0.80·10^(0.038·T), times 10^0.14 when resting.
	standard, resting := line(t, "ap1985_standard"), line(t, "ap1985_resting")
	q10 := float64(rate(t, standard, 1, 30) / rate(t, standard, 1, 20))
	within(t, "Q10 of squamates, printed 2.4", q10, 2.4, 0.05)
	near(t, "Q10 of squamates", q10, 2.3988, 1e-4)
	near(t, "50 g at 30 °C, mL O2/h", rate(t, standard, 0.05, 30).MLO2PerHour(), 4.103, 1e-3)
	near(t, "50 g at 30 °C, W", float64(rate(t, standard, 0.05, 30)), 0.02291, 1e-3)
	near(t, "1 kg at 30 °C", rate(t, standard, 1, 30).MLO2PerHour(), 45.08, 1e-3)
	near(t, "1 kg at 20 °C", rate(t, standard, 1, 20).MLO2PerHour(), 18.79, 1e-3)
	within(t, "resting over standard", float64(rate(t, resting, 1, 30)/rate(t, standard, 1, 30)), 1.380, 5e-4)

	// Definition: 10 at 20 °C and 25 at 30 °C are a Q10 of 2.5, and 15.81 at
	// 25 °C.
	near(t, "ten degrees", 10*Q10Factor(2.5, 30, 20), 25, 1e-15)
	within(t, "five degrees", 10*Q10Factor(2.5, 25, 20), 15.81, 0.005)

	// Mean activation energy of Gillooly JF et al 2001 Science 293:2248-2251,
	// 0.62 eV (from memory), as a Q10; k = 8.617333e-5 eV/K.
	boltzmann := &Equation{ID: "0.62 eV", Form: FormBoltzmann, A: 1, B: 0.75, C: 0.62 / 8.617333e-5, MassUnit: "g", RateUnit: "W", ectotherm: true}
	within(t, "0.62 eV, 15 to 25 °C", float64(rate(t, boltzmann, 1, 25)/rate(t, boltzmann, 1, 15)), 2.310, 1e-3)
	within(t, "0.62 eV, 20 to 30 °C", float64(rate(t, boltzmann, 1, 30)/rate(t, boltzmann, 1, 20)), 2.247, 1e-3)

	// Published Q10s: 2.61 and 2.65, Chappell MA & Ellis TM 1987 J Comp
	// Physiol B 157:227-235; about 2.5, Thompson GG & Withers PC 1997 Physiol
	// Zool 70:307-323. The default lies among them, the limits outside.
	for _, published := range []float64{q10, 2.5, 2.61, 2.65} {
		if math.Abs(math.Log(published/Q10Default)) > math.Log(1.1) || CheckQ10(published) != nil {
			t.Errorf("a published Q10 of %v lies far from the default or outside the limits", published)
		}
	}

	// The constant of reptiles, moved by a Q10 of 2.4: 5.4 kcal/day at 30 °C
	// and 2.3 at 20 °C, worked out apart from this code.
	reptile, _ := GroupConstant("squamate")
	for at, want := range map[Celsius]float64{30: 5.4, 20: 2.3} {
		p, err := reptile.Rate(1, at, 2.4)
		if err != nil {
			t.Fatal(err)
		}
		within(t, "10 kcal/day moved by Q10", p.KcalPerDay(), want, 0.05)
	}
}

// A monitor lizard of 10 kg in air at 25 °C burns three times its standard
// rate, which warms it over the air by rate/conductance, which raises the
// rate. Worked example in public source code:
// 1.9·W^0.82 J/h with W in g at 20 °C, Q10 2.5, conductance
// 2603·W^0.148 J/h/°C; three rounds end at 27.0 °C and 20.67 kJ/h, and the
// loop settles at 27.034 °C and 20.691 kJ/h.
func TestPublishedMonitorLizard(t *testing.T) {
	e := line(t, "lizard20_practice")
	const air Celsius = 25
	conductance := 2603 * math.Pow(10000, 0.148)
	active := func(body Celsius) float64 { return 3 * float64(rate(t, e, 10, body)) * 3600 } // J/h
	body := air
	for range 3 {
		body = air + Celsius(active(body)/conductance)
	}
	within(t, "body temperature after three rounds", float64(body), 27.0, 0.05)
	within(t, "rate after three rounds, kJ/h", active(body)/1000, 20.67, 0.005)
	for range 100 {
		body = air + Celsius(active(body)/conductance)
	}
	within(t, "body temperature at rest", float64(body), 27.034, 1e-3)
	within(t, "rate at rest, kJ/h", active(body)/1000, 20.691, 1e-3)
}

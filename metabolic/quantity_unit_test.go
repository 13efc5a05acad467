package metabolic

import "testing"

// Every spelling that is accepted, with what one of it is: definitions of the
// avoirdupois pound and of the thermochemical calorie, 20.1 J per mL O2.
func TestEverySpelling(t *testing.T) {
	const lb = 0.45359237
	want := []struct {
		what  string
		table []unit
		one   map[string]float64
	}{
		{"mass in kg", massUnits, map[string]float64{
			"g": 0.001, "gram": 0.001, "grams": 0.001, "kg": 1, "Kg": 1, "KG": 1, "kilogram": 1, "kilograms": 1,
			"lb": lb, "lbs": lb, "pound": lb, "pounds": lb, "oz": lb / 16, "ounce": lb / 16, "ounces": lb / 16,
		}},
		{"drug in mg", milligramUnits, map[string]float64{"mg": 1, "g": 1000, "mcg": 0.001, "µg": 0.001, "ug": 0.001, "ng": 0.000001}},
		{"drug in IU", internationalUnits, map[string]float64{"IU": 1, "iu": 1, "units": 1, "unit": 1, "international units": 1}},
		{"time in h", timeUnits, map[string]float64{
			"h": 1, "hr": 1, "hrs": 1, "hour": 1, "hours": 1, "min": 1. / 60, "mins": 1. / 60, "minute": 1. / 60, "minutes": 1. / 60,
			"d": 24, "day": 24, "days": 24, "week": 168, "weeks": 168,
		}},
		{"volume in L", volumeUnits, map[string]float64{"L": 1, "l": 1, "mL": 0.001, "ml": 0.001}},
		{"rate in W", rateUnits, map[string]float64{
			"W": 1, "mW": 0.001, "kcal/day": 0.0484259259259, "kcal/d": 0.0484259259259, "kJ/day": 0.0115740740741, "kJ/d": 0.0115740740741,
			"J/h": 0.000277777777778, "kJ/h": 0.277777777778, "mL O2/h": 0.00558333333333, "ml O2/h": 0.00558333333333, "mLO2/h": 0.00558333333333,
			"mL O2/min": 0.335, "ml O2/min": 0.335, "mLO2/min": 0.335,
		}},
		{"share of 1", percentUnits, map[string]float64{"%": 0.01, "percent": 0.01}},
	}
	for _, w := range want {
		if len(w.table) != len(w.one) {
			t.Errorf("%s: %d spellings, %d expected", w.what, len(w.table), len(w.one))
		}
		for _, u := range w.table {
			one, ok := w.one[u.name]
			if !ok {
				t.Errorf("%s: %q is accepted", w.what, u.name)
				continue
			}
			near(t, w.what+" of one "+u.name, u.canonical(1), one, 1e-11)
		}
	}
}

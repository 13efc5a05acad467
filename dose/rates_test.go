package dose

import (
	"errors"
	"math"
	"strings"
	"testing"

	"tayra/metabolic"
	"tayra/species"
)

func ratesByName(t *testing.T, name string, kg, celsius float64) ([]RateLine, []UnavailableLine) {
	t.Helper()
	a, err := species.Find(name)
	if err != nil {
		t.Fatal(err)
	}
	have, missing, err := Rates(a, metabolic.Mass(kg), metabolic.Celsius(celsius), celsius != 0, metabolic.Q10Default)
	if err != nil {
		t.Fatal(err)
	}
	return have, missing
}

func basisLine(t *testing.T, lines []RateLine, basis string) *RateLine {
	t.Helper()
	var found *RateLine
	for i := range lines {
		if lines[i].Basis == basis && lines[i].Drafted {
			if found != nil {
				t.Fatalf("two drafted lines of basis %s", basis)
			}
			found = &lines[i]
		}
	}
	if found == nil {
		t.Fatalf("no drafted line of basis %s", basis)
	}
	return found
}

func rateNear(got, want, relative float64) bool { return math.Abs(got-want) <= relative*math.Abs(want) }

func TestRatesOfAnAnteater(t *testing.T) {
	have, missing := ratesByName(t, "giant anteater", 41, 0)
	if len(missing) != 0 {
		t.Errorf("missing: %v", missing)
	}
	group := basisLine(t, have, "group")
	kcal := 70 * math.Pow(41, 0.75)
	// 1 kcal is 4,184 J, a day 86,400 s; 1 mL of oxygen is taken as 20.1 J.
	watt := kcal * 4184 / 86400
	for _, c := range []struct {
		unit      string
		got, want float64
	}{
		{"kcal/day", group.KcalPerDay, kcal},
		{"W", group.Watt, watt},
		{"kJ/day", group.KJPerDay, kcal * 4.184},
		{"mL O2/h", group.MLO2PerHour, watt * 3600 / 20.1},
	} {
		if !rateNear(c.got, c.want, 1e-12) {
			t.Errorf("group constant in %s: %v, by hand %v", c.unit, c.got, c.want)
		}
	}
	measured := basisLine(t, have, "measured")
	a, _ := species.Find("giant anteater")
	m, _ := species.MeasuredRate(a)
	if want := float64(m.Rate) * math.Pow(41/float64(m.Mass), 0.75); !rateNear(measured.Watt, want, 1e-12) {
		t.Errorf("measured %v W, carried by hand %v W", measured.Watt, want)
	}
	if measured.SDln == nil || *measured.SDln != 0 {
		t.Errorf("a species' own rate has scatter %v", measured.SDln)
	}
	ids := map[string]bool{}
	for _, l := range have {
		if l.ID != "" && ids[l.ID] {
			t.Errorf("%s stands twice", l.ID)
		}
		ids[l.ID] = true
		if l.Source == "" || l.Watt <= 0 {
			t.Errorf("%s %s: source %q, %v W", l.Basis, l.ID, l.Source, l.Watt)
		}
		if display := l.Kind == "RMR" || l.Kind == "FMR"; display != l.DisplayOnly {
			t.Errorf("%s is %s and display only is %v", l.ID, l.Kind, l.DisplayOnly)
		}
	}
	for _, id := range []string{"kleiber1947", "kleiber1961", "nagy_eutherian"} {
		if !ids[id] {
			t.Errorf("%s is not listed for a placental mammal", id)
		}
	}
	for _, id := range []string{"dawsonhulbert1970", "ld1967_passerine", "ap1985_standard"} {
		if ids[id] {
			t.Errorf("%s is listed for a placental mammal", id)
		}
	}
}

func TestRatesFollowTheTemperatureOfAnEctotherm(t *testing.T) {
	warm, _ := ratesByName(t, "green iguana", 2.5, 37)
	cool, _ := ratesByName(t, "green iguana", 2.5, 27)
	w, c := basisLine(t, warm, "group"), basisLine(t, cool, "group")
	if kcal := 10 * math.Pow(2.5, 0.75); !rateNear(w.KcalPerDay, kcal, 1e-12) {
		t.Errorf("at 37 °C %v kcal/day, by hand %v", w.KcalPerDay, kcal)
	}
	if !rateNear(w.Watt/c.Watt, 2.5, 1e-12) {
		t.Errorf("over 10 °C the group rate rises by %v, not by the Q10", w.Watt/c.Watt)
	}
	// ap1985_standard has a temperature term of its own: 10^(0.038·10) over
	// 10 °C (Andrews & Pough 1985), and no Q10 on top.
	w, c = basisLine(t, warm, "equation"), basisLine(t, cool, "equation")
	if w.ID != "ap1985_standard" || !rateNear(w.Watt/c.Watt, math.Pow(10, 0.38), 1e-9) {
		t.Errorf("%s rises by %v over 10 °C", w.ID, w.Watt/c.Watt)
	}
}

func TestRatesSayWhatIsMissing(t *testing.T) {
	for _, c := range []struct {
		name        string
		kg, celsius float64
		missing     string // basis and a part of the reason
	}{
		{"giant anteater", 200, 0, "measured: measured at 30.6 kg"},
		{"saltwater crocodile", 300, 30, ""},
		{"tuatara", 0.5, 20, ""},
	} {
		have, missing := ratesByName(t, c.name, c.kg, c.celsius)
		if len(have) == 0 {
			t.Errorf("%s has no rate at all", c.name)
		}
		var all []string
		for _, m := range missing {
			all = append(all, m.Basis+": "+m.Why)
			if m.Why == "" {
				t.Errorf("%s: %s is missing without a reason", c.name, m.Basis)
			}
		}
		if !strings.Contains(strings.Join(all, "\n"), c.missing) {
			t.Errorf("%s: %q is not in %q", c.name, c.missing, all)
		}
	}
}

func TestRatesOfAMonotremeStandInForTheGroup(t *testing.T) {
	have, _ := ratesByName(t, "short-beaked echidna", 3, 0)
	group := basisLine(t, have, "group")
	if !strings.Contains(group.Remark, "no group constant for a monotreme") {
		t.Errorf("the group line does not say that it stands in: %q", group.Remark)
	}
}

func TestRatesRefuse(t *testing.T) {
	iguana, err := species.Find("green iguana")
	if err != nil {
		t.Fatal(err)
	}
	dog, err := species.Find("dog")
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		what  string
		a     *species.Animal
		m     metabolic.Mass
		t     metabolic.Celsius
		hasT  bool
		q10   float64
		field string
	}{
		{"no mass", dog, 0, 0, false, 2.5, "mass"},
		{"a mass below zero", dog, -3, 0, false, 2.5, "mass"},
		{"a mass that is no number", dog, metabolic.Mass(math.NaN()), 0, false, 2.5, "mass"},
		{"an endless mass", dog, metabolic.Mass(math.Inf(1)), 0, false, 2.5, "mass"},
		{"no temperature", iguana, 2, 0, false, 2.5, "temperature"},
		{"too cold", iguana, 2, 9.9, true, 2.5, "temperature"},
		{"too hot", iguana, 2, 40.1, true, 2.5, "temperature"},
		{"a flat Q10", iguana, 2, 30, true, 1.4, "q10"},
		{"a steep Q10", iguana, 2, 30, true, 4.1, "q10"},
	} {
		_, _, err := Rates(c.a, c.m, c.t, c.hasT, c.q10)
		var faults InputErrors
		if !errors.As(err, &faults) || faults[0].Field != c.field {
			t.Errorf("%s: %v, want a fault of %s", c.what, err, c.field)
		}
	}
}

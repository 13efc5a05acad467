package species

import (
	"testing"
)

func TestMeasuredRate(t *testing.T) {
	n := 0
	for _, r := range table(t, "measured-rates.csv") {
		a := found(t, r["scientific_name"])
		m, ok := MeasuredRate(a)
		if !ok {
			t.Errorf("%s has no measured rate", a.Name)
			continue
		}
		n++
		if float64(m.Mass) != number(r["mass_kg"]) || float64(m.Rate) != number(r["rate_w"]) || m.Kind != r["kind"] || m.Grade != r["grade"] ||
			m.Flag != r["flag"] || m.Source != r["source"] || m.Notes != r["notes"] ||
			m.HasTemperature != (r["temperature_c"] != "") || float64(m.Temperature) != number(r["temperature_c"]) {
			t.Errorf("%s: %+v, table %v", a.Name, m, r)
		}
		if _, ok := Sources(m.Source); !ok {
			t.Errorf("%s: no source %q", a.Name, m.Source)
		}
		if !a.Endotherm() && !m.HasTemperature {
			t.Errorf("%s: an ectotherm's rate without its temperature", a.Name)
		}
		// An animal that Find did not make has the row all the same.
		if other, ok := MeasuredRate(&Animal{Name: a.Name}); !ok || *other != *m {
			t.Errorf("%s by its bare name: %+v, %v", a.Name, other, ok)
		}
	}
	if n != 2094 {
		t.Errorf("%d measured rates, want 2094", n)
	}
	for _, name := range []string{"ferret", "Przewalski's horse", "kakapo"} {
		if m, ok := MeasuredRate(found(t, name)); ok {
			t.Errorf("%s has the measured rate %+v", name, m)
		}
	}
	for _, name := range []string{"", "Nobody here", "C\u0430nis lupus"} {
		if m, ok := MeasuredRate(&Animal{Name: name}); ok {
			t.Errorf("%q has the measured rate %+v", name, m)
		}
	}
	// What a caller changes stays with it.
	a := found(t, "dog")
	m, _ := MeasuredRate(a)
	m.Rate = 0
	if m, _ := MeasuredRate(a); m.Rate == 0 {
		t.Error("MeasuredRate hands out its own row")
	}
}

package species

import (
	"errors"
	"math"
	"os"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"tayra/metabolic"
	"tayra/species/internal/build"
)

// relativesOfR are predictions of ln W and their sd, by R 4.2.2 with nlme
// 3.1-162 and testdata/relatives.R over the same table (lme by REML; the sd
// from the covariance matrix written out in full). The dog's and anteater's own
// rows are in the fit.
var relativesOfR = []struct {
	class, order, family, genus string
	mass, temperature           float64
	mean, sd                    float64
	levels                      int
}{
	{"Mammalia", "Pilosa", "Myrmecophagidae", "Myrmecophaga", 41, 37, 3.0997152, 0.26574017, 3},
	{"Mammalia", "Carnivora", "Canidae", "Canis", 18, 37, 3.3152136, 0.23635585, 3},
	{"Mammalia", "Artiodactyla", "Giraffidae", "Giraffa", 800, 37, 6.2731236, 0.36462375, 1},
	{"Mammalia", "Proboscidea", "Nowhere", "Nobody", 3000, 37, 6.6965183, 0.47160928, 0},
	{"Aves", "Psittaciformes", "Strigopidae", "Strigops", 2, 40, 1.8312821, 0.24752113, 1},
	{"Aves", "Passeriformes", "Corvidae", "Corvus", 0.5, 40, 1.1380574, 0.19470782, 3},
	{"Reptilia", "Squamata", "Pythonidae", "Python", 1.5, 30, -1.3803619, 0.38268787, 3},
	{"Reptilia", "Testudines", "Testudinidae", "Testudo", 1, 30, -1.8108665, 0.55189514, 1},
	{"Amphibia", "Anura", "Ranidae", "Rana", 0.03, 20, -4.5797108, 0.40798086, 3},
	{"Amphibia", "Caudata", "Ambystomatidae", "Ambystoma", 0.06, 18, -4.5158138, 0.40993798, 3},
}

func TestRelativesAgainstR(t *testing.T) {
	for _, r := range relativesOfR {
		a := &Animal{Name: r.genus + " sp", Class: r.class, Order: r.order, Family: r.family}
		p, err := Relatives(a, metabolic.Mass(r.mass), metabolic.Celsius(r.temperature))
		if err != nil {
			t.Errorf("%s: %v", r.genus, err)
			continue
		}
		// R's variances are printed to seven figures and its search stops earlier
		// than ours.
		if mean := math.Log(float64(p.Rate)); math.Abs(mean-r.mean) > 1e-6 || math.Abs(p.SDln-r.sd) > 1e-6 {
			t.Errorf("%s: ln rate %.8f, sd %.8f; R %.8f, %.8f", r.genus, mean, p.SDln, r.mean, r.sd)
		}
		if len(p.Levels) != r.levels {
			t.Errorf("%s: levels %q, want %d", r.genus, p.Levels, r.levels)
		}
	}
}

func TestRelatives(t *testing.T) {
	a := found(t, "giant anteater")
	p, err := Relatives(a, 41, 0)
	if err != nil {
		t.Fatal(err)
	}
	if want := []string{"genus Myrmecophaga", "family Myrmecophagidae", "order Pilosa"}; !slices.Equal(p.Levels, want) || p.N != 1 || p.ClassN != 739 || !p.Own ||
		p.MassLow != 0.0022 || p.MassHigh != 4037.5 {
		t.Errorf("%+v", p)
	}
	// No measured relative in the family: the order stands, and the range is wider.
	kakapo, err := Relatives(found(t, "kakapo"), 2, 0)
	if err != nil || kakapo.Own || !slices.Equal(kakapo.Levels, []string{"order Psittaciformes"}) {
		t.Errorf("kakapo: %+v, %v", kakapo, err)
	}
	grey, err := Relatives(found(t, "rosy-faced lovebird"), 2, 0)
	if err != nil || !(grey.SDln < kakapo.SDln) {
		t.Errorf("a measured genus has sd %v, an unmeasured family %v", grey.SDln, kakapo.SDln)
	}
	// A row that is flagged is not among its own relatives.
	flagged := 0
	for _, a := range All() {
		if m, ok := MeasuredRate(a); ok && m.Flag != "" {
			flagged++
			if p, err := Relatives(a, m.Mass, m.Temperature); err == nil && p.Own {
				t.Errorf("%s is flagged %s and among its own relatives", a.Name, m.Flag)
			}
		}
	}
	if flagged != 27 {
		t.Errorf("%d flagged rows, want 27", flagged)
	}
}

func TestRelativesUnavailable(t *testing.T) {
	python := found(t, "ball python")
	for name, call := range map[string]func() (*Prediction, error){
		"a fish": func() (*Prediction, error) {
			return Relatives(&Animal{Name: "Opsanus tau", Class: "Actinopterygii"}, 1, 20)
		},
		"no class":               func() (*Prediction, error) { return Relatives(&Animal{Name: "Opsanus tau"}, 1, 20) },
		"a class that is a path": func() (*Prediction, error) { return Relatives(&Animal{Class: "Mammalia/Pilosa"}, 1, 20) },
		"no temperature":         func() (*Prediction, error) { return Relatives(python, 1, 0) },
		"a hot snake":            func() (*Prediction, error) { return Relatives(python, 1, 41) },
		"no mass":                func() (*Prediction, error) { return Relatives(python, 0, 30) },
		"a mass of NaN":          func() (*Prediction, error) { return Relatives(python, metabolic.Mass(math.NaN()), 30) },
		"an infinite mass":       func() (*Prediction, error) { return Relatives(python, metabolic.Mass(math.Inf(1)), 30) },
		"a NaN temperature":      func() (*Prediction, error) { return Relatives(python, 1, metabolic.Celsius(math.NaN())) },
	} {
		p, err := call()
		var missing *UnavailableError
		if p != nil || !errors.As(err, &missing) || missing.Basis != "relatives" || missing.Why == "" {
			t.Errorf("%s: %v, %v", name, p, err)
		}
	}
}

// What is stored predicts as the fit itself does, for every animal.
func TestRelativesIsTheFit(t *testing.T) {
	data := os.DirFS("data")
	for _, class := range build.Classes {
		fit, _, _, err := build.Fit(data, class.Name, class.Ectotherm)
		if err != nil || fit == nil {
			t.Fatalf("%s: %v, %v", class.Name, fit, err)
		}
		n := 0
		for _, a := range All() {
			if a.Class != class.Name {
				continue
			}
			n++
			x := []float64{math.Log(0.7)}
			if class.Ectotherm {
				x = append(x, 28)
			}
			want, err := fit.Predict(a.Order, a.Family, a.Genus(), x)
			if err != nil {
				t.Fatal(err)
			}
			got, err := Relatives(a, 0.7, 28)
			if err != nil || math.Abs(math.Log(float64(got.Rate))-want.Mean) > 1e-9 || math.Abs(got.SDln-want.SD) > 1e-9 || got.N != want.Rows {
				t.Errorf("%s: %+v, %v; the fit says %+v", a.Name, got, err, want)
			}
		}
		if n < build.LeastRows {
			t.Errorf("%s has %d animals", class.Name, n)
		}
	}
}

// Rates rise with mass by a power that does not depend on the animal, and an
// ectotherm's with temperature.
func TestRelativesLaws(t *testing.T) {
	all := All()
	rapid.Check(t, func(t *rapid.T) {
		a := rapid.SampledFrom(all).Draw(t, "animal")
		m := metabolic.Mass(rapid.Float64Range(0.005, 2000).Draw(t, "mass"))
		temp := metabolic.Celsius(rapid.Float64Range(12, 35).Draw(t, "temperature"))
		p, err := Relatives(a, m, temp)
		q, err2 := Relatives(a, 2*m, temp)
		r, err3 := Relatives(a, m, temp+5)
		if err != nil || err2 != nil || err3 != nil {
			t.Fatalf("%s: %v, %v, %v", a.Name, err, err2, err3)
		}
		b := math.Log(float64(q.Rate)/float64(p.Rate)) / math.Ln2
		if !(p.Rate > 0) || !(p.SDln > 0.1 && p.SDln < 1) || b < 0.6 || b > 0.9 {
			t.Errorf("%s: %+v, exponent %v", a.Name, p, b)
		}
		if a.Endotherm() != (r.Rate == p.Rate) || !a.Endotherm() && r.Rate < p.Rate {
			t.Errorf("%s: %v at %v, %v five degrees up", a.Name, p.Rate, temp, r.Rate)
		}
	})
}

func BenchmarkRelatives(b *testing.B) {
	a := found(b, "giant anteater")
	b.ReportAllocs()
	for b.Loop() {
		if _, err := Relatives(a, 41, 0); err != nil {
			b.Fatal(err)
		}
	}
}

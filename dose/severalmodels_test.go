package dose

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// Worked by hand.
func TestSummarise(t *testing.T) {
	// ln 2, ln 4, ln 8 are 1, 2, 3 times ln 2: mean 4, variance between
	// (ln 2)²·(1 + 0 + 1)/2 = 0.480453; mean sd² (0.36 + 0.64 + 1)/3 = 2/3.
	s := Summarise([]float64{2, 8, 4}, []float64{0.6, 0.8, 1})
	wantNear(t, "mean", s.Mean, 4, 1e-14)
	wantNear(t, "variance between", s.VarBetween, math.Ln2*math.Ln2, 1e-14)
	wantNear(t, "sd", s.SD, math.Sqrt(2./3+0.4804530139182014), 1e-14)
	wantNear(t, "sd, printed", s.SD, 1.07104, 1e-5)
	wantNear(t, "90 %, low", s.Range90[0], 4*math.Exp(-1.645*1.0710367), 1e-6)
	wantNear(t, "90 %, high", s.Range90[1], 4*math.Exp(1.645*1.0710367), 1e-6)
	wantNear(t, "50 %, low", s.Range50[0], 4*math.Exp(-0.674*1.0710367), 1e-6)
	wantNear(t, "50 %, high", s.Range50[1], 4*math.Exp(0.674*1.0710367), 1e-6)
	if s.Low != 2 || s.High != 8 || s.FoldSpread != 4 || s.DecidedBy != -1 {
		t.Errorf("%+v", s)
	}
	// Without 2: √32 = 5.657, times √2; without 8: √8, over √2; without 4: 4.
	for i, want := range []float64{math.Sqrt2, 1 / math.Sqrt2, 1} {
		wantNear(t, "influence", s.Influence[i], want, 1e-14)
	}
}

func TestSummariseOneModel(t *testing.T) {
	s := Summarise([]float64{16.28}, []float64{1.25})
	if math.Abs(s.Mean-16.28) > 1e-13 || s.SD != 1.25 || s.VarBetween != 0 || s.FoldSpread != 1 || s.DecidedBy != -1 || len(s.Influence) != 1 || s.Influence[0] != 1 {
		t.Errorf("%+v", s)
	}
}

func TestDecidedBy(t *testing.T) {
	for _, tt := range []struct {
		name  string
		daily []float64
		want  int
	}{
		// Mean of 1, 1, 100 is 4.64; without the third 1, without the first 10.
		{"one far above", []float64{1, 1, 100}, 2},
		{"one far below", []float64{90, 1, 110, 100}, 1},
		// ln 16 away from three at 1: mean 2, without it 1, a factor of 2 and
		// not more.
		{"at the limit", []float64{1, 16, 1, 1}, -1},
		{"past the limit", []float64{1, 16.1, 1, 1}, 1},
		{"far apart, but only two", []float64{1, 1000}, -1},
		{"two against two", []float64{1, 1, 1000, 1000}, -1},
		{"alike", []float64{5, 5, 5}, -1},
		// 0.01 and 100 about 1: either moves the mean tenfold, neither alone.
		{"one on either side", []float64{0.01, 1, 100}, -1},
	} {
		sds := make([]float64, len(tt.daily))
		if got := Summarise(tt.daily, sds); got.DecidedBy != tt.want {
			t.Errorf("%s: %d, want %d (influence %v)", tt.name, got.DecidedBy, tt.want, got.Influence)
		}
	}
}

// The influence is what leaving the model out really does; the order of models
// and their unit of amount decide nothing; more of the same models do not
// narrow the range.
func TestSummariseProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(2, 6).Draw(t, "models")
		daily, sds := make([]float64, n), make([]float64, n)
		for i := range n {
			daily[i] = math.Exp(rapid.Float64Range(-5, 8).Draw(t, "ln daily"))
			sds[i] = rapid.Float64Range(0.5, 2).Draw(t, "sd")
		}
		s := Summarise(daily, sds)
		for i := range n {
			var d, e []float64
			d = append(append(d, daily[:i]...), daily[i+1:]...)
			e = append(append(e, sds[:i]...), sds[i+1:]...)
			wantNear(t, "influence", s.Influence[i], Summarise(d, e).Mean/s.Mean, 1e-12)
		}
		if !(s.Low <= s.Mean*(1+1e-12) && s.Mean <= s.High*(1+1e-12)) {
			t.Errorf("mean %g outside %g to %g", s.Mean, s.Low, s.High)
		}
		turned, turnedSD, mcg := make([]float64, n), make([]float64, n), make([]float64, n)
		for i := range n {
			turned[n-1-i], turnedSD[n-1-i], mcg[i] = daily[i], sds[i], 1000*daily[i]
		}
		r, m := Summarise(turned, turnedSD), Summarise(mcg, sds)
		wantNear(t, "mean, turned", r.Mean, s.Mean, 1e-12)
		wantNear(t, "sd, turned", r.SD, s.SD, 1e-12)
		wantNear(t, "high end in mcg", m.Range90[1], 1000*s.Range90[1], 1e-11)
		wantNear(t, "ends about the mean", s.Range90[0]*s.Range90[1], s.Mean*s.Mean, 1e-11)

		least := math.Inf(1)
		for _, sd := range sds {
			least = math.Min(least, sd)
		}
		if s.SD < least {
			t.Errorf("sd %g of the summary is under every model's", s.SD)
		}
	})
}

func TestBackPredict(t *testing.T) {
	// Model 0 is predicted as 4 and 9 from the others, so 6, against a
	// published 12; model 1 as 8 and 2, so 4, against 4; model 2 as 1 and 25,
	// so 5, against 2. The diagonal is not read.
	got := BackPredict([]float64{12, 4, 2}, [][]float64{
		{math.NaN(), 4, 9},
		{8, math.NaN(), 2},
		{1, 25, math.NaN()},
	})
	want := []BackPrediction{{6, 12, 0.5}, {4, 4, 1}, {5, 2, 2.5}}
	for i := range want {
		wantNear(t, "predicted", got[i].Predicted, want[i].Predicted, 1e-14)
		wantNear(t, "fold error", got[i].Fold, want[i].Fold, 1e-14)
		if got[i].Published != want[i].Published {
			t.Errorf("published %g, want %g", got[i].Published, want[i].Published)
		}
	}
	if alone := BackPredict([]float64{5}, [][]float64{{5}}); alone != nil {
		t.Errorf("one model predicted by none: %v", alone)
	}
}

func TestSeveralModelsPanics(t *testing.T) {
	for name, f := range map[string]func(){
		"no model":       func() { Summarise(nil, nil) },
		"lengths differ": func() { Summarise([]float64{1, 2}, []float64{1}) },
		"rows differ":    func() { BackPredict([]float64{1, 2}, [][]float64{{1, 2}}) },
		"row too short":  func() { BackPredict([]float64{1, 2}, [][]float64{{1, 2}, {1}}) },
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("%s: no panic", name)
				}
			}()
			f()
		}()
	}
}

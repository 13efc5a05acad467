package metabolic

import (
	"fmt"
	"math"
)

// A FixedFit is the allometric line Y = A·X^B whose exponent B is given, not
// fitted: the comparison that shows what a fitted exponent bought.
//
//	LnA          = mean(ln Y − B·ln X)
//	ResidualSDLn = sqrt(Σ(ln Y − LnA − B·ln X)² / DF), DF = N − 1
//	SELnA        = ResidualSDLn / sqrt(N)
//
// B is taken as known without error, so that the intervals do not widen away
// from the data. It is made by FixedExponent.
type FixedFit struct {
	N, DF        int
	A, LnA, B    float64
	SELnA        float64
	ResidualSDLn float64
}

// FixedExponent fits the coefficient of Y = a·X^b with b given and finite. It
// needs at least 2 points, all values positive and finite; the error names the
// point and wraps ErrTooFewPoints or ErrBadValue.
func FixedExponent(points []Point, b float64) (*FixedFit, error) {
	if !isFinite(b) {
		return nil, fmt.Errorf("fixed exponent: b is %v: %w", b, ErrBadValue)
	}
	if len(points) < 2 {
		return nil, fmt.Errorf("fixed exponent: %d points, at least 2 are needed: %w", len(points), ErrTooFewPoints)
	}
	x, y, err := logs(points)
	if err != nil {
		return nil, fmt.Errorf("fixed exponent: %w", err)
	}
	level := make([]float64, len(x))
	for i := range x {
		level[i] = y[i] - b*x[i]
	}
	f := &FixedFit{N: len(x), DF: len(x) - 1, B: b, LnA: centre(level)}
	f.A = math.Exp(f.LnA)
	var sse float64
	for _, v := range level {
		sse += (v - f.LnA) * (v - f.LnA)
	}
	f.ResidualSDLn = math.Sqrt(sse / float64(f.DF))
	f.SELnA = f.ResidualSDLn / math.Sqrt(float64(f.N))
	return f, nil
}

// TQuantile returns the p quantile of Student's t with the fit's degrees of
// freedom, 0 < p < 1.
func (f *FixedFit) TQuantile(p float64) float64 { return studentT(p, f.DF) }

// At returns the estimate at x: ln Value = LnA + B·ln x, standard errors s/√N
// and s·sqrt(1 + 1/N). x must be positive and finite, else the error wraps
// ErrBadValue.
func (f *FixedFit) At(x float64) (PowerEstimate, error) {
	if !(x > 0) || math.IsInf(x, 0) {
		return PowerEstimate{}, fmt.Errorf("fixed exponent: X is %v, not a positive finite number: %w", x, ErrBadValue)
	}
	t := f.TQuantile(0.975)
	e := LineEstimate{
		Mean:         f.LnA + f.B*math.Log(x),
		SEMean:       f.SELnA,
		SEPrediction: f.ResidualSDLn * math.Sqrt(1+1/float64(f.N)),
	}
	e.CI95 = [2]float64{e.Mean - t*e.SEMean, e.Mean + t*e.SEMean}
	e.PI95 = [2]float64{e.Mean - t*e.SEPrediction, e.Mean + t*e.SEPrediction}
	return powerEstimate(x, e), nil
}

package metabolic

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// Errors that a fit wraps, so that a caller can tell a thin table from a bad
// cell without reading the message.
var (
	// ErrTooFewPoints says that there are fewer points than the fit needs.
	ErrTooFewPoints = errors.New("too few points")
	// ErrSameX says that all points share one X, so that no slope exists.
	ErrSameX = errors.New("all points have the same X")
	// ErrBadValue says that a value is not finite, or not positive where a
	// logarithm is to be taken of it.
	ErrBadValue = errors.New("value outside the range of the fit")
)

// sameXTolerance is the spread of X, relative to its size, under which the
// points are taken to share one X: below it the slope is made of rounding.
const sameXTolerance = 1e-13

// A LineFit is an ordinary least-squares line y = Intercept + Slope·x with the
// figures that judge it. It is made by FitLine.
//
// With n points, means x̄ and ȳ, Sxx = Σ(x−x̄)² and residuals e:
//
//	Slope       = Σ(x−x̄)(y−ȳ) / Sxx
//	Intercept   = ȳ − Slope·x̄
//	SSE         = Σe²                      DF = n − 2
//	ResidualSD  = sqrt(SSE/DF)
//	SESlope     = ResidualSD / sqrt(Sxx)
//	SEIntercept = ResidualSD · sqrt(1/n + x̄²/Sxx)
//	RSquared    = 1 − SSE/Σ(y−ȳ)²
//
// Source: any text on linear regression, for example Draper & Smith, Applied
// Regression Analysis, chapters 1 and 8 (from memory); the tests hold the
// figures against the certified values of NIST StRD Norris and against R.
type LineFit struct {
	N, DF                  int
	Intercept, Slope       float64
	SEIntercept, SESlope   float64
	ResidualSD, SSE        float64
	RSquared               float64 // 0 when all y are equal: nothing to explain
	meanX, meanY, sxx, syy float64
	x, y, residual         []float64
}

// FitLine fits y = Intercept + Slope·x by ordinary least squares. x and y have
// the same length, at least 3; the slices are not kept. It returns an error
// that wraps ErrTooFewPoints, ErrBadValue (a value not finite) or ErrSameX.
func FitLine(x, y []float64) (*LineFit, error) {
	if len(x) != len(y) {
		return nil, fmt.Errorf("line fit: %d values of x and %d of y", len(x), len(y))
	}
	n := len(x)
	if n < 3 {
		return nil, fmt.Errorf("line fit: %d points, at least 3 are needed: %w", n, ErrTooFewPoints)
	}
	largest := 0.0
	for i := range x {
		if !isFinite(x[i]) || !isFinite(y[i]) {
			return nil, fmt.Errorf("line fit: point %d (x %v, y %v) is not finite: %w", i+1, x[i], y[i], ErrBadValue)
		}
		largest = max(largest, math.Abs(x[i]))
	}
	f := &LineFit{
		N: n, DF: n - 2,
		x: append([]float64(nil), x...), y: append([]float64(nil), y...),
		residual: make([]float64, n),
	}
	f.meanX, f.meanY = centre(x), centre(y)
	// Sums about the means: raw sums of squares lose as many digits as the
	// means exceed the spread.
	var sxy float64
	for i := range x {
		dx, dy := x[i]-f.meanX, y[i]-f.meanY
		f.sxx += dx * dx
		f.syy += dy * dy
		sxy += dx * dy
	}
	if math.Sqrt(f.sxx/float64(n)) <= sameXTolerance*largest || f.sxx == 0 {
		return nil, fmt.Errorf("line fit: %d points at x = %v: %w", n, x[0], ErrSameX)
	}
	f.Slope = sxy / f.sxx
	f.Intercept = math.FMA(-f.Slope, f.meanX, f.meanY)
	for i := range x {
		e := (y[i] - f.meanY) - f.Slope*(x[i]-f.meanX)
		f.residual[i] = e
		f.SSE += e * e
	}
	f.ResidualSD = math.Sqrt(f.SSE / float64(f.DF))
	f.SESlope = f.ResidualSD / math.Sqrt(f.sxx)
	f.SEIntercept = f.ResidualSD * math.Sqrt(1/float64(n)+f.meanX*f.meanX/f.sxx)
	if f.syy > 0 {
		f.RSquared = max(0, 1-f.SSE/f.syy)
	}
	if !isFinite(f.Intercept) || !isFinite(f.Slope) || !isFinite(f.SSE) || !isFinite(f.SEIntercept) {
		return nil, fmt.Errorf("line fit: the sums overflow: %w", ErrBadValue)
	}
	return f, nil
}

// centre returns the mean, corrected once by the mean of the deviations from
// it, which removes the rounding of the first sum.
func centre(v []float64) float64 {
	n := float64(len(v))
	var sum, rest float64
	for _, a := range v {
		sum += a
	}
	mean := sum / n
	for _, a := range v {
		rest += a - mean
	}
	return mean + rest/n
}

func isFinite(a float64) bool { return !math.IsNaN(a) && !math.IsInf(a, 0) }

// studentT returns the p quantile of Student's t with df degrees of freedom.
func studentT(p float64, df int) float64 {
	return distuv.StudentsT{Mu: 0, Sigma: 1, Nu: float64(df)}.Quantile(p)
}

// TQuantile returns the p quantile of Student's t with the fit's degrees of
// freedom, 0 < p < 1.
func (f *LineFit) TQuantile(p float64) float64 { return studentT(p, f.DF) }

// A LineEstimate is what a line says at one x.
type LineEstimate struct {
	X, Mean float64
	// SEMean is the standard error of the line's height at X,
	// ResidualSD·sqrt(h), h = 1/n + (X−x̄)²/Sxx.
	SEMean float64
	// SEPrediction is that of one new y at X, ResidualSD·sqrt(1 + h).
	SEPrediction float64
	// CI95 and PI95 are Mean ∓ t(0.975, DF) times the two.
	CI95, PI95 [2]float64
}

// At returns the line's estimate at x, which must be finite (NaN otherwise).
func (f *LineFit) At(x float64) LineEstimate {
	d := x - f.meanX
	h := 1/float64(f.N) + d*d/f.sxx
	e := LineEstimate{
		X:            x,
		Mean:         f.meanY + f.Slope*d,
		SEMean:       f.ResidualSD * math.Sqrt(h),
		SEPrediction: f.ResidualSD * math.Sqrt(1+h),
	}
	t := f.TQuantile(0.975)
	e.CI95 = [2]float64{e.Mean - t*e.SEMean, e.Mean + t*e.SEMean}
	e.PI95 = [2]float64{e.Mean - t*e.SEPrediction, e.Mean + t*e.SEPrediction}
	return e
}

// Residuals returns y − (Intercept + Slope·x) of every point, in order.
func (f *LineFit) Residuals() []float64 { return append([]float64(nil), f.residual...) }

// Leverage returns the hat values h = 1/n + (x−x̄)²/Sxx of every point. They
// add up to 2; a value near 1 marks a point that the line must pass through.
func (f *LineFit) Leverage() []float64 {
	h := make([]float64, f.N)
	for i := range h {
		h[i] = f.leverage(i)
	}
	return h
}

func (f *LineFit) leverage(i int) float64 {
	d := f.x[i] - f.meanX
	return 1/float64(f.N) + d*d/f.sxx
}

// onlySupport reports whether the other points share one x, so that no line is
// left without point i.
func (f *LineFit) onlySupport(i int) bool { return 1-f.leverage(i) < 1e-12 }

// CooksDistance returns D = e²·h / (2·s²·(1−h)²) of every point: how far all
// fitted values move when the point is left out. It is NaN for a point without
// which no line is left, and where the residuals are all zero.
func (f *LineFit) CooksDistance() []float64 {
	d := make([]float64, f.N)
	for i := range d {
		if f.onlySupport(i) {
			d[i] = math.NaN()
			continue
		}
		h, e := f.leverage(i), f.residual[i]
		d[i] = e * e * h / (2 * f.ResidualSD * f.ResidualSD * (1 - h) * (1 - h))
	}
	return d
}

// Standardized returns e / (s·sqrt(1−h)) of every point, the internally
// studentized residual (R's rstandard), with the same exceptions as
// CooksDistance.
func (f *LineFit) Standardized() []float64 {
	r := make([]float64, f.N)
	for i := range r {
		if f.onlySupport(i) {
			r[i] = math.NaN()
			continue
		}
		r[i] = f.residual[i] / (f.ResidualSD * math.Sqrt(1-f.leverage(i)))
	}
	return r
}

// Studentized returns the externally studentized residual of every point (R's
// rstudent), in which s comes from the fit without that point:
//
//	t = r·sqrt((DF−1)/(DF−r²)), r the standardized residual
//
// It follows Student's t with DF − 1 degrees of freedom. With three points
// there are none, and it is NaN; so it is under CooksDistance's exceptions.
func (f *LineFit) Studentized() []float64 {
	t := f.Standardized()
	df := float64(f.DF)
	for i, r := range t {
		if f.DF < 2 {
			t[i] = math.NaN()
			continue
		}
		t[i] = r * math.Sqrt((df-1)/(df-r*r))
	}
	return t
}

// deletedResidual returns y minus the height at that x of the line fitted
// without point i, by the closed form e/(1−h): no refit is made.
func (f *LineFit) deletedResidual(i int) (float64, bool) {
	if f.onlySupport(i) {
		return 0, false
	}
	return f.residual[i] / (1 - f.leverage(i)), true
}

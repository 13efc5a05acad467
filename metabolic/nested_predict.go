package metabolic

import (
	"fmt"
	"math"
	"sort"
)

// A NestedPrediction is what a NestedFit says of one species.
type NestedPrediction struct {
	// Mean = Line + Kin: the fixed line at the species' covariates, and the sum
	// of the BLUPs of the levels that it shares with measured species.
	Mean, Line, Kin float64

	// SD is the standard deviation of the species' own value about Mean,
	//
	//	sqrt(σ²order + σ²family + σ²genus + σ²residual − c'V⁻¹c
	//	     + (x₀ − X'V⁻¹c)'(X'V⁻¹X)⁻¹(x₀ − X'V⁻¹c))
	//
	// the variances taken as known. SDFixed is the root of the last term alone,
	// the part that comes from the fixed effects.
	SD, SDFixed float64

	// Level is the closest level shared, "genus", "family" or "order", and "" if
	// no measured species shares even the order. Rows counts the measured species
	// in that node, or all of them.
	Level string
	Rows  int
}

// Predict returns the prediction for a species of the given order, family and
// genus at its covariates (as in the rows, without the intercept). Names that
// no row has, or that are empty, share nothing; a family counts only within its
// order and a genus only within its family. A species that was itself a row
// gets the prediction for any species of its genus, which its own row helped to
// make: its measured value is known better than that. The covariates must be as
// many as in the rows and finite, else the error wraps ErrBadValue.
func (f *NestedFit) Predict(order, family, genus string, covariates []float64) (NestedPrediction, error) {
	p := len(f.Beta)
	if len(covariates) != p-1 {
		return NestedPrediction{}, fmt.Errorf("nested prediction: %d covariates, the fit has %d: %w", len(covariates), p-1, ErrBadValue)
	}
	x := make([]float64, p)
	x[0] = 1
	for i, v := range covariates {
		if !isFinite(v) {
			return NestedPrediction{}, fmt.Errorf("nested prediction: covariate %d is %v: %w", i+1, v, ErrBadValue)
		}
		x[i+1] = v
	}
	out := NestedPrediction{Rows: f.N}
	for i, b := range f.Beta {
		out.Line += b * x[i]
	}
	variance := f.VarOrder + f.VarFamily + f.VarGenus + f.VarResidual
	if node, level := f.closest(nestedPath{order, family, genus}); node != nil {
		out.Kin, out.Level, out.Rows = node.Shared, level, node.N
		variance -= node.Explained
		for i := range x {
			x[i] -= node.Loading[i]
		}
	}
	out.Mean = out.Line + out.Kin
	var fixed float64
	for i := range x {
		for j := range x {
			fixed += x[i] * f.CovBeta[i][j] * x[j]
		}
	}
	fixed = max(fixed, 0) // of a positive definite form: only rounding is below zero
	out.SDFixed = math.Sqrt(fixed)
	out.SD = math.Sqrt(variance + fixed)
	return out, nil
}

// closest returns the deepest node on the path, or nil.
func (f *NestedFit) closest(at nestedPath) (*NestedNode, string) {
	for _, try := range []struct {
		path   nestedPath
		known  bool
		levels string
	}{
		{at, at.order != "" && at.family != "" && at.genus != "", levelNames[levelGenus]},
		{nestedPath{at.order, at.family, ""}, at.order != "" && at.family != "", levelNames[levelFamily]},
		{nestedPath{at.order, "", ""}, at.order != "", levelNames[levelOrder]},
	} {
		if !try.known {
			continue
		}
		i := sort.Search(len(f.Nodes), func(i int) bool { return !f.Nodes[i].path().less(try.path) })
		if i < len(f.Nodes) && f.Nodes[i].path() == try.path {
			return &f.Nodes[i], try.levels
		}
	}
	return nil, ""
}

package metabolic

import (
	"fmt"
	"math"
)

// A NestedLeftOut is one row as predicted from all the others.
type NestedLeftOut struct {
	Observed, Predicted float64
	// SD is the standard deviation of Observed about Predicted.
	SD float64
}

// LeaveOneOut predicts each of the rows from all the others, in their order.
// Held are the variances, which are those of the fit, to which the row itself
// belonged; fitted anew without the row are the fixed effects and every BLUP,
// so that a species alone in its genus, family or order is predicted from the
// next level up, or from the line. Fitting the variances anew as well raises the
// root mean square error by 0.2 % in the measured mammals and birds, 2 % in
// reptiles and 1 % in amphibians. With
//
//	P = V⁻¹ − V⁻¹X(X'V⁻¹X)⁻¹X'V⁻¹
//
// it is exact and needs no refit (Dubrule 1983, Mathematical Geology
// 15:687-699, from memory):
//
//	Observed − Predicted = (Py)ᵢ/Pᵢᵢ     SD = 1/sqrt(Pᵢᵢ)
//
// The rows are the fit's, since a fit does not keep them; other rows give the
// same figures for a fit of theirs at these variances. The error is that of
// FitNested, or says that a row alone carries a covariate.
func (f *NestedFit) LeaveOneOut(rows []NestedRow) ([]NestedLeftOut, error) {
	s, err := newNestedSums(rows)
	if err != nil {
		return nil, err
	}
	if s.p != len(f.Beta) {
		return nil, fmt.Errorf("nested leave-one-out: %d covariates, the fit has %d: %w", s.p-1, len(f.Beta)-1, ErrBadValue)
	}
	st := &nestedState{}
	theta := [levels]float64{f.VarOrder / f.VarResidual, f.VarFamily / f.VarResidual, f.VarGenus / f.VarResidual}
	if err := s.up(theta, st); err != nil {
		return nil, fmt.Errorf("nested leave-one-out: %w", err)
	}
	out := make([]NestedLeftOut, len(rows))
	alone := -1
	s.eachRow(st, func(k int, a []float64, v float64) {
		i := s.place[k]
		p := v - st.quadratic(a)
		if p < 1e-12*v {
			alone = i
			return
		}
		y := rows[i].Y
		out[i] = NestedLeftOut{
			Observed:  y,
			Predicted: y - st.residualPart(a)/p,
			SD:        math.Sqrt(f.VarResidual / p),
		}
	})
	if alone >= 0 {
		return nil, fmt.Errorf("nested leave-one-out: without row %d (%s) the covariates are collinear: %w", alone+1, rows[alone].Genus, ErrTooFewPoints)
	}
	return out, nil
}

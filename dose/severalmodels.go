package dose

import "math"

// Summary is several models' drafts taken together, in the unit of the daily
// amounts.
type Summary struct {
	Mean       float64 // exp of the mean of ln daily amount
	Low, High  float64 // smallest and largest of the drafts
	FoldSpread float64 // High/Low
	VarBetween float64 // variance of ln daily amount between models, n − 1 below; 0 for one model
	SD         float64 // sqrt(mean sd² + VarBetween), of ln daily amount
	Range90    Pair    // Mean·exp(±1.645·SD)
	Range50    Pair    // Mean·exp(±0.674·SD)

	// Influence is, for each model, the mean without it over the mean with
	// it; 1 for a model that changes nothing, and for one model alone.
	Influence []float64
	// DecidedBy is the model whose removal alone moves the mean by more than
	// a factor of 2, and more than that of any other does; −1 if there is
	// none. Of two models neither is more than the other: −1, whatever
	// FoldSpread.
	DecidedBy int
}

// decidingFold is the factor by which the removal of one model must move the
// mean for that model to be said to decide it. Assumed.
const decidingFold = 2

// Summarise takes the drafts of several models together: daily holds each
// one's drafted daily amount per kg (the geometric middle of a dose range), sds
// the standard deviation of its ln. The sd of the summary,
//
//	sqrt(mean sdᵢ² + variance between models),
//
// is not divided by the number of models: they share the patient, the basis
// and the record of scaling, so that more of them do not make the record better.
//
// It panics if the lengths differ or are 0; amounts must be above 0.
func Summarise(daily, sds []float64) Summary {
	if len(daily) == 0 || len(daily) != len(sds) {
		panic("dose: as many standard deviations as daily amounts are needed, and at least one")
	}
	n := float64(len(daily))
	logs := make([]float64, len(daily))
	s := Summary{Low: math.Inf(1), Influence: make([]float64, len(daily)), DecidedBy: -1}
	var sum, within float64
	for i, x := range daily {
		logs[i] = math.Log(x)
		sum += logs[i]
		within += sds[i] * sds[i] / n
		s.Low, s.High = math.Min(s.Low, x), math.Max(s.High, x)
	}
	mean := sum / n
	if len(daily) > 1 {
		for _, l := range logs {
			s.VarBetween += (l - mean) * (l - mean) / (n - 1)
		}
	}
	s.Mean = math.Exp(mean)
	s.FoldSpread = s.High / s.Low
	s.SD = math.Sqrt(within + s.VarBetween)
	for _, r := range []struct {
		ends *Pair
		z    float64
	}{{&s.Range90, z90}, {&s.Range50, z50}} {
		*r.ends = Pair{s.Mean * math.Exp(-r.z*s.SD), s.Mean * math.Exp(r.z*s.SD)}
	}

	most, second := 0.0, 0.0 // |ln influence|
	for i, l := range logs {
		if len(daily) == 1 {
			s.Influence[i] = 1
			break
		}
		// (sum − l)/(n − 1) − sum/n
		moved := (mean - l) / (n - 1)
		s.Influence[i] = math.Exp(moved)
		if moved = math.Abs(moved); moved > most {
			most, second, s.DecidedBy = moved, most, i
		} else {
			second = math.Max(second, moved)
		}
	}
	if most <= math.Log(decidingFold)*(1+noiseAt) || most <= second*(1+noiseAt) {
		s.DecidedBy = -1
	}
	return s
}

// BackPrediction is one model's published daily dose as the others predict it.
type BackPrediction struct {
	Predicted float64 // geometric mean of the predictions from the others
	Published float64
	Fold      float64 // Predicted/Published
}

// BackPredict predicts each model's published daily dose from all the others:
// pred[i][j] is the daily dose of model i as scaled from model j's (the
// diagonal is not read), and
//
//	predictedᵢ = exp(mean over j ≠ i of ln pred[i][j]).
//
// It is nil for fewer than two models: there are no others. It panics if pred
// is not square in the number of models; amounts must be above 0.
func BackPredict(published []float64, pred [][]float64) []BackPrediction {
	if len(pred) != len(published) {
		panic("dose: as many rows of predictions as published doses are needed")
	}
	if len(published) < 2 {
		return nil
	}
	out := make([]BackPrediction, len(published))
	for i, row := range pred {
		if len(row) != len(published) {
			panic("dose: as many predictions in a row as published doses are needed")
		}
		sum := 0.0
		for j, x := range row {
			if j != i {
				sum += math.Log(x)
			}
		}
		p := math.Exp(sum / float64(len(row)-1))
		out[i] = BackPrediction{Predicted: p, Published: published[i], Fold: p / published[i]}
	}
	return out
}

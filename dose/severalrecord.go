package dose

import "tayra/metabolic"

// Several is the summary over several models: method, section 9.
type Several struct {
	MeanDailyPerKg float64        `json:"mean_daily_per_kg"` // geometric
	Low            float64        `json:"low_daily_per_kg"`
	High           float64        `json:"high_daily_per_kg"`
	FoldSpread     float64        `json:"fold_spread"`
	SD             float64        `json:"sd_ln"`
	VarBetween     float64        `json:"variance_between_models"`
	Range90        DoseRange      `json:"range90_daily_per_kg"`
	Range50        DoseRange      `json:"range50_daily_per_kg"`
	Unit           string         `json:"unit"`
	Models         []SeveralModel `json:"models"`
	Text           string         `json:"text"`
}

// SeveralModel is one model held against the others.
type SeveralModel struct {
	Model          string  `json:"model"`
	CommonName     string  `json:"model_common_name"`
	DraftedDaily   float64 `json:"drafted_daily_per_kg"`
	PublishedDaily float64 `json:"published_daily_per_kg"`
	PredictedDaily float64 `json:"predicted_from_others_daily_per_kg"`
	FoldError      float64 `json:"fold_error"` // predicted over published
}

// severalRecord holds the models of a case against one another: the summary of
// their drafts, and each one's published dose predicted from the others.
func (n *numbers) severalRecord(c *Case) *Several {
	if len(c.Models) < 2 || !n.several || n.stopped {
		return nil
	}
	k := len(c.Models)
	s := n.summary
	out := &Several{
		MeanDailyPerKg: s.Mean, Low: s.Low, High: s.High, FoldSpread: s.FoldSpread, SD: s.SD, VarBetween: s.VarBetween,
		Range90: DoseRange{Low: s.Range90[0], High: s.Range90[1], SD: s.SD}, Range50: DoseRange{Low: s.Range50[0], High: s.Range50[1]},
		Unit: c.Models[0].Regimen.Unit.String() + "/kg/day",
		Text: "Mean of the logs of the drafted daily amounts; its standard deviation takes the models' own and the variance between them, not divided by their number. The draft is taken from one model, not from this mean.",
	}
	published := make([]float64, k)
	pred := make([][]float64, k)
	for i := range c.Models {
		published[i] = modelDaily(&c.Models[i].Regimen)
		pred[i] = make([]float64, k)
		for j := range c.Models {
			// Both models' rates were found for the same basis, so the ratio
			// of rates per kg carries j's daily dose to i.
			si := n.models[i].model.watt / float64(c.Models[i].Mass.Middle)
			sj := n.models[j].model.watt / float64(c.Models[j].Mass.Middle)
			pred[i][j] = modelDaily(&c.Models[j].Regimen) * si / sj
		}
	}
	back := BackPredict(published, pred)
	for i := range c.Models {
		a := c.Models[i].Animal
		out.Models = append(out.Models, SeveralModel{
			Model: a.Name, CommonName: a.CommonName(), DraftedDaily: middle(n.models[i].plan().daily),
			PublishedDaily: published[i], PredictedDaily: back[i].Predicted, FoldError: back[i].Fold,
		})
	}
	return out
}

// modelDaily is the model's own daily amount per kg, middle of its range.
func modelDaily(r *Regimen) float64 {
	if r.Interval.Kind == metabolic.Infusion {
		return middle(r.PerKg) * 24
	}
	return middle(r.PerKg) * 24 / float64(r.Interval.Hours)
}

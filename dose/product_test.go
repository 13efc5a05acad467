package dose

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tayra/metabolic"
)

func TestParseStrength(t *testing.T) {
	mg, iu := metabolic.Milligram, metabolic.InternationalUnit
	for in, want := range map[string]Strength{
		"50 mg/mL":               {Unit: mg, AmountPerML: 50},
		"50mg/ml":                {Unit: mg, AmountPerML: 50},
		"  50  mg / mL ":         {Unit: mg, AmountPerML: 50},
		"50\u00a0mg per mL":      {Unit: mg, AmountPerML: 50}, // no-break space
		"22.7 mg/mL":             {Unit: mg, AmountPerML: 22.7},
		"300 mcg/mL":             {Unit: mg, AmountPerML: 0.3},
		"300 µg/mL":              {Unit: mg, AmountPerML: 0.3},
		"0.3 g/mL":               {Unit: mg, AmountPerML: 300},
		"50 g/L":                 {Unit: mg, AmountPerML: 50},
		"250 mg per 5 mL":        {Unit: mg, AmountPerML: 50},
		"250 mg/5 mL":            {Unit: mg, AmountPerML: 50},
		"100 mg/3 mL":            {Unit: mg, AmountPerML: 33.3333333333},
		"100000 IU/mL":           {Unit: iu, AmountPerML: 100000},
		"300000 units per mL":    {Unit: iu, AmountPerML: 300000},
		"5 %":                    {Unit: mg, AmountPerML: 50}, // 5 g in 100 mL
		"5%":                     {Unit: mg, AmountPerML: 50},
		"2.5 % w/v":              {Unit: mg, AmountPerML: 25},
		"0.9 %":                  {Unit: mg, AmountPerML: 9},
		"100 %":                  {Unit: mg, AmountPerML: 1000},
		"250 mg per tablet":      {Form: Tablet, Unit: mg, AmountPerPiece: 250},
		"250 mg/tablet":          {Form: Tablet, Unit: mg, AmountPerPiece: 250},
		"250 mg tablets":         {Form: Tablet, Unit: mg, AmountPerPiece: 250},
		"62.5 mcg/tab":           {Form: Tablet, Unit: mg, AmountPerPiece: 0.0625},
		"1 g per tablet":         {Form: Tablet, Unit: mg, AmountPerPiece: 1000},
		"50 mg/capsule":          {Form: Capsule, Unit: mg, AmountPerPiece: 50},
		"400 IU capsules":        {Form: Capsule, Unit: iu, AmountPerPiece: 400},
		"1 g powder in 10 mL":    {Form: Powder, Unit: mg, AmountPerML: 100, VialAmount: 1000, VialML: 10},
		"1 g in 10 mL":           {Form: Powder, Unit: mg, AmountPerML: 100, VialAmount: 1000, VialML: 10},
		"500 mg vial in 2 mL":    {Form: Powder, Unit: mg, AmountPerML: 250, VialAmount: 500, VialML: 2},
		"1000000 IU in 4 mL":     {Form: Powder, Unit: iu, AmountPerML: 250000, VialAmount: 1e6, VialML: 4},
		"600 mg powder in 0.1 L": {Form: Powder, Unit: mg, AmountPerML: 6, VialAmount: 600, VialML: 100},
	} {
		got, err := ParseStrength(in)
		if err != nil {
			t.Errorf("ParseStrength(%q): %v", in, err)
		} else if got != want {
			t.Errorf("ParseStrength(%q) = %+v, want %+v", in, got, want)
		}
	}
}

func TestParseStrengthErrors(t *testing.T) {
	// Input, then words that the problem and the remedy must have.
	for _, tt := range [][3]string{
		{"100,000 IU/mL", "comma", `"100 IU/mL" or "100000 IU/mL"`},
		{"2,5 mg/mL", "comma", `"2.5 mg/mL" or "25 mg/mL"`},
		{"2,5 %", "comma", "2.5 %"},
		{"", "nothing", "50 mg/mL"},
		{"   ", "nothing", "50 mg/mL"},
		{"50", "unit", "50 mg/mL"},
		{"50 mg", "in what volume or piece", "50 mg/mL"},
		{"mg/mL", "number", "50 mg/mL"},
		{"50 MG/mL", "capitals", "mg"},
		{"50 Mg tablets", "capitals", "mg"},
		{"100000 U/mL", "nought", "IU"},
		{"100000 u/mL", "nought", "IU"},
		{"10 mg/kg", "dose", "50 mg/mL"},
		{"10 mg/kg/h", "dose", "50 mg/mL"},
		{"1:1000", "ratio", "1 mg/mL"},
		{"1 g powder", "volume", "1 g powder in 10 mL"},
		{"1 g vial", "volume", "1 g powder in 10 mL"},
		{"5 % w/w", "weight in volume", "mg/mL"},
		{"5 % of something", "no strength", "50 mg/mL"},
		{"150 %", "100", "%"},
		{".5 mg/mL", "decimal point", "0.5"},
		{"-5 mg/mL", "minus", ""},
		{"0 mg/mL", "zero", ""},
		{"50 mg/0 mL", "zero", ""},
		{"5-10 mg/mL", "range", "label"},
		{"50 mg/", "", ""},
		{"50 mg/cc", "cc", "mL"},
		{"50 mg/ampoule", "", "mL"},
		{"50 mmol/mL", "no strength", "50 mg/mL"},
		{"500 g/mL", "more than a mL can hold", "mg"},
		{"200 mg + 40 mg/mL", "no strength", ""},
		{"250 mg/2 tablets", "", ""},
		{"50 mg\u200b/mL", "invisible", ""},
		{"50 mg\x00/mL", "control", ""},
		{"50 mg/mL\xff", "UTF-8", ""},
		{strings.Repeat("5", 300) + " mg/mL", "long", ""},
	} {
		got, err := ParseStrength(tt[0])
		var q *metabolic.QuantityError
		if !errors.As(err, &q) {
			t.Errorf("ParseStrength(%q) = %+v, %v; want a QuantityError", tt[0], got, err)
			continue
		}
		if q.Input != tt[0] || !strings.Contains(q.Problem, tt[1]) || !strings.Contains(q.Remedy, tt[2]) || q.Problem == "" || q.Remedy == "" {
			t.Errorf("ParseStrength(%q): input %q, problem %q, remedy %q", tt[0], q.Input, q.Problem, q.Remedy)
		}
		if strings.Contains(q.Remedy, "10 mg/kg") {
			t.Errorf("ParseStrength(%q) advises a dose: %q", tt[0], q.Remedy)
		}
	}
}

func FuzzParseStrength(f *testing.F) {
	for _, s := range []string{"50 mg/mL", "5 % w/v", "250 mg per tablet", "100,000 IU/mL", "1 g powder in 10 mL", "1:1000", "5 mg/", "in", " in 3 mL", "%", "5e3 mg/mL"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		got, err := ParseStrength(s)
		if err != nil {
			var q *metabolic.QuantityError
			if !errors.As(err, &q) || q.Input != s || q.Problem == "" || q.Remedy == "" {
				t.Fatalf("ParseStrength(%q): %#v", s, err)
			}
			return
		}
		per := got.AmountPerML
		if got.Form.Pieces() {
			per = got.AmountPerPiece
		}
		if !(per > 0) || math.IsInf(per, 0) || got.AmountPerML > 0 && got.AmountPerPiece > 0 {
			t.Fatalf("ParseStrength(%q) = %+v", s, got)
		}
		if strings.ContainsAny(s, ",") {
			t.Fatalf("ParseStrength(%q) guessed at a comma", s)
		}
	})
}

func mustStrength(t *testing.T, s string) Strength {
	t.Helper()
	out, err := ParseStrength(s)
	if err != nil {
		t.Fatal(err)
	}
	return out
}

// Worked by hand.
func TestForSyringe(t *testing.T) {
	for _, tt := range []struct {
		name     string
		amount   float64
		strength string
		p        ProductInput
		exact    float64
		measured float64
		given    float64
		percent  float64
	}{
		{"333.7 mg of 50 mg/mL: 6.674 mL, 6.7 mL holds 335 mg, 1.3/333.7 too much",
			333.7, "50 mg/mL", ProductInput{StepML: 0.1}, 6.674, 6.7, 335, 130 / 333.7},
		{"the same, narrow: 6.6 mL holds 330 mg",
			333.7, "50 mg/mL", ProductInput{StepML: 0.1, NarrowMargin: true}, 6.674, 6.6, 330, -370 / 333.7},
		{"a tie goes down: 0.25 mL, 0.2 mL holds 2 of 2.5 mg",
			2.5, "10 mg/mL", ProductInput{StepML: 0.1}, 0.25, 0.2, 2, -20},
		{"a tie that binary noise hides: 0.35 mL is 3.4999999999999996 steps",
			3.5, "10 mg/mL", ProductInput{StepML: 0.1}, 0.35, 0.3, 3, -50.0 / 3.5},
		{"just over a tie goes up",
			2.501, "10 mg/mL", ProductInput{StepML: 0.1}, 0.2501, 0.3, 3, 49.9 / 2.501},
		{"0.3 mL is 2.9999999999999996 steps of 0.1 mL: 3 of them, also when rounding down",
			15, "50 mg/mL", ProductInput{StepML: 0.1, NarrowMargin: true}, 0.3, 0.3, 15, 0},
		{"0.7 mL likewise",
			7, "10 mg/mL", ProductInput{StepML: 0.1, NarrowMargin: true}, 0.7, 0.7, 7, 0},
		{"just under three steps, narrow: two",
			14.99, "50 mg/mL", ProductInput{StepML: 0.1, NarrowMargin: true}, 0.2998, 0.2, 10, -499 / 14.99},
		{"exactly one step",
			5, "50 mg/mL", ProductInput{StepML: 0.1}, 0.1, 0.1, 5, 0},
		{"steps of 0.02 mL: 0.5 mL",
			12.6, "25 mg/mL", ProductInput{StepML: 0.02}, 0.504, 0.5, 12.5, -10 / 12.6},
		{"units: 20,000 IU/kg × 4.1 kg of 300,000 IU/mL is 0.27333 mL",
			82000, "300000 IU/mL", ProductInput{StepML: 0.01}, 82. / 300, 0.27, 81000, -100. / 82},
		{"percent: 5 % is 50 mg/mL",
			100, "5 %", ProductInput{StepML: 0.5}, 2, 2, 100, 0},
		{"powder made up to 100 mg/mL",
			333, "1 g in 10 mL", ProductInput{StepML: 0.1}, 3.33, 3.3, 330, -300. / 333},
		{"quarters of 250 mg: 1.3348 tablets, 1.25 hold 312.5 mg",
			333.7, "250 mg per tablet", ProductInput{StepPieces: 0.25}, 1.3348, 1.25, 312.5, -2120 / 333.7},
		{"halves: 1.5 tablets hold 375 mg",
			333.7, "250 mg per tablet", ProductInput{StepPieces: 0.5}, 1.3348, 1.5, 375, 4130 / 333.7},
		{"halves, narrow: 1 tablet",
			333.7, "250 mg per tablet", ProductInput{StepPieces: 0.5, NarrowMargin: true}, 1.3348, 1, 250, -8370 / 333.7},
		{"whole tablets unless said otherwise",
			333.7, "250 mg per tablet", ProductInput{}, 1.3348, 1, 250, -8370 / 333.7},
		{"capsules",
			333.7, "125 mg capsules", ProductInput{}, 2.6696, 3, 375, 4130 / 333.7},
	} {
		tt.p.Strength = mustStrength(t, tt.strength)
		a, err := ForSyringe(tt.amount, tt.p.Strength.Unit, tt.p)
		if err != nil {
			t.Errorf("%s: %v", tt.name, err)
			continue
		}
		wantNear(t, tt.name+": exact", a.Exact, tt.exact, 1e-11)
		wantNear(t, tt.name+": error", a.ErrorPercent, tt.percent, 1e-9)
		if a.Measured != tt.measured || a.AmountGiven != tt.given || a.BelowStep || a.Dilution != nil {
			t.Errorf("%s: %+v", tt.name, a)
		}
		if a.AmountAsked != tt.amount || a.Unit != tt.p.Strength.Unit.String() {
			t.Errorf("%s: asked %g %s", tt.name, a.AmountAsked, a.Unit)
		}
	}
}

func TestForSyringeRangeRoundsEachEnd(t *testing.T) {
	p := ProductInput{Strength: mustStrength(t, "10 mg/mL"), StepML: 0.1}
	ends, err := ForSyringeRange(Pair{12.4, 18.8}, metabolic.Milligram, p)
	if err != nil || len(ends) != 2 || ends[0].Measured != 1.2 || ends[1].Measured != 1.9 {
		t.Errorf("ends %+v, %v; want 1.2 and 1.9 mL", ends, err)
	}
	if one, err := ForSyringeRange(Pair{12.4, 12.4}, metabolic.Milligram, p); err != nil || len(one) != 1 {
		t.Errorf("a single dose gave %d ends, %v", len(one), err)
	}
	if _, err := ForSyringeRange(Pair{12.4, 18.8}, metabolic.InternationalUnit, p); err == nil {
		t.Error("units of mg were no error")
	}
}

func TestSitesAndCourse(t *testing.T) {
	for _, tt := range []struct {
		name           string
		strength       string
		p              ProductInput
		sites          []float64
		times          int
		total          float64
		containers     int
		amount, expect float64
	}{
		{"no limit, no course", "50 mg/mL", ProductInput{StepML: 0.1, IntervalH: 12},
			[]float64{6.7}, 0, 0, 0, 333.7, 6.7},
		{"7 days every 12 hours: 14 × 6.7 mL = 93.8 mL, 5 bottles of 20 mL", "50 mg/mL",
			ProductInput{StepML: 0.1, IntervalH: 12, Days: 7, ContainerML: 20, LargestPerSiteML: 5},
			[]float64{3.4, 3.3}, 14, 93.8, 5, 333.7, 6.7},
		{"10 days every 72 hours: 80/24 is 3.33, so 4", "50 mg/mL",
			ProductInput{StepML: 0.1, IntervalH: 72, Days: 10}, []float64{6.7}, 4, 26.8, 0, 333.7, 6.7},
		{"a single dose", "50 mg/mL", ProductInput{StepML: 0.1, Days: 7, ContainerML: 6.7},
			[]float64{6.7}, 1, 6.7, 1, 333.7, 6.7},
		{"3 sites of 2 mL exactly, not 4 for noise", "10 mg/mL",
			ProductInput{StepML: 0.1, LargestPerSiteML: 0.1 + 0.2, IntervalH: 24, Days: 1, ContainerML: 0.3},
			[]float64{0.3, 0.3, 0.3}, 1, 0.9, 3, 9, 0.9},
		{"a largest volume between steps: 0.25 mL holds two steps, so 5 sites for 1 mL", "10 mg/mL",
			ProductInput{StepML: 0.1, LargestPerSiteML: 0.25}, []float64{0.2, 0.2, 0.2, 0.2, 0.2}, 1, 1, 0, 10, 1},
		{"0.3 days every 2.4 hours: 3 doses, not 4 for noise", "10 mg/mL",
			ProductInput{StepML: 0.1, IntervalH: 2.4, Days: 0.3}, []float64{1}, 3, 3, 0, 10, 1},
		{"a powder's vial is its container: 14 × 3.3 mL = 46.2 mL, 5 vials of 10 mL", "1 g in 10 mL",
			ProductInput{StepML: 0.1, IntervalH: 12, Days: 7}, []float64{3.3}, 14, 46.2, 5, 333, 3.3},
		{"tablets: 14 × 1.25 = 17.5 of 10 in a box", "250 mg/tablet",
			ProductInput{StepPieces: 0.25, IntervalH: 12, Days: 7, ContainerPieces: 10, LargestPerSiteML: 1}, nil, 14, 17.5, 2, 333.7, 1.25},
	} {
		tt.p.Strength = mustStrength(t, tt.strength)
		a, err := ForSyringe(tt.amount, metabolic.Milligram, tt.p)
		if err != nil {
			t.Errorf("%s: %v", tt.name, err)
			continue
		}
		if a.Measured != tt.expect || !slices.Equal(a.Sites, tt.sites) || a.Administrations != tt.times || a.Total != tt.total || a.Containers != tt.containers {
			t.Errorf("%s: %+v", tt.name, a)
		}
	}
}

func TestDilution(t *testing.T) {
	for _, tt := range []struct {
		name     string
		amount   float64
		strength string
		p        ProductInput
		want     Dilution
	}{
		{
			// 3 mg of 50 mg/mL is 0.06 mL, six tenths of a step. 1 in 10 is
			// 5 mg/mL: 0.6 mL.
			"1 in 10", 3, "50 mg/mL", ProductInput{StepML: 0.1},
			Dilution{Factor: 10, AmountPerML: 5, ExactML: 0.6, DrawML: 0.6, AmountGiven: 3,
				Steps: []DilutionStep{{1, 9, 10, 5}}},
		},
		{
			// 2.75 mg is 0.055 mL. 1 in 10 would be 0.55 mL, drawn as 0.5: 9 %
			// short. 1 in 20 is 2.5 mg/mL: 1.1 mL.
			"1 in 10 would round too far", 2.75, "50 mg/mL", ProductInput{StepML: 0.1},
			Dilution{Factor: 20, AmountPerML: 2.5, ExactML: 1.1, DrawML: 1.1, AmountGiven: 2.75,
				Steps: []DilutionStep{{1, 19, 20, 2.5}}},
		},
		{
			// 0.33 mg is 0.0066 mL of 0.01 mL steps. 1 in 10: 0.066, drawn
			// as 0.07, 6.06 % over. 1 in 20: 0.132, drawn as 0.13, which
			// holds 0.325 mg, 1.515 % short.
			"a fine syringe", 0.33, "50 mg/mL", ProductInput{StepML: 0.01},
			Dilution{Factor: 20, AmountPerML: 2.5, ExactML: 0.132, DrawML: 0.13, AmountGiven: 0.325, ErrorPercent: -0.5 / 0.33,
				Steps: []DilutionStep{{0.1, 1.9, 2, 2.5}}},
		},
		{
			// The same for a narrow margin: 1 in 10 gives 0.06 of 0.066 mL, 9 %
			// short; 1 in 20 gives 0.13.
			"narrow", 0.33, "50 mg/mL", ProductInput{StepML: 0.01, NarrowMargin: true},
			Dilution{Factor: 20, AmountPerML: 2.5, ExactML: 0.132, DrawML: 0.13, AmountGiven: 0.325, ErrorPercent: -0.5 / 0.33,
				Steps: []DilutionStep{{0.1, 1.9, 2, 2.5}}},
		},
		{
			// 0.02 mg of 100 mg/mL is 0.0002 mL, a fiftieth of a step. 1 in 500
			// is 0.2 mg/mL: 0.1 mL; by way of 1 in 10 and 1 in 50.
			"two steps", 0.02, "100 mg/mL", ProductInput{StepML: 0.01},
			Dilution{Factor: 500, AmountPerML: 0.2, ExactML: 0.1, DrawML: 0.1, AmountGiven: 0.02,
				Steps: []DilutionStep{{0.1, 0.9, 1, 10}, {0.1, 4.9, 5, 0.2}}},
		},
	} {
		tt.p.Strength = mustStrength(t, tt.strength)
		tt.p.IntervalH, tt.p.Days, tt.p.ContainerML = 24, 5, 2
		a, err := ForSyringe(tt.amount, metabolic.Milligram, tt.p)
		if err != nil {
			t.Errorf("%s: %v", tt.name, err)
			continue
		}
		d := a.Dilution
		if !a.BelowStep || a.Measured != 0 || a.AmountGiven != 0 || a.ErrorPercent != -100 || d == nil {
			t.Errorf("%s: %+v", tt.name, a)
			continue
		}
		wantNear(t, tt.name+": error", d.ErrorPercent, tt.want.ErrorPercent, 1e-9)
		tt.want.ErrorPercent = d.ErrorPercent
		if fmt.Sprint(*d) != fmt.Sprint(tt.want) {
			t.Errorf("%s:\n got %+v\nwant %+v", tt.name, *d, tt.want)
		}
		if !slices.Equal(a.Sites, []float64{d.DrawML}) {
			t.Errorf("%s: sites %v", tt.name, a.Sites)
		}
		// Made afresh for each of five doses.
		if want := withoutNoise(5 * d.Steps[0].TakeML); a.Administrations != 5 || a.Total != want || a.Containers != int(math.Ceil(want/2)) {
			t.Errorf("%s: %d doses, %g mL, %d containers", tt.name, a.Administrations, a.Total, a.Containers)
		}
	}

	p := ProductInput{Strength: mustStrength(t, "100 mg/mL"), StepML: 0.1}
	if a, err := ForSyringe(1e-4, metabolic.Milligram, p); err != nil || !a.BelowStep || a.Dilution != nil {
		t.Errorf("thinner than 1 in 10,000: %+v, %v", a, err)
	}
	p = ProductInput{Strength: mustStrength(t, "250 mg/tablet"), StepPieces: 0.25}
	if a, err := ForSyringe(62, metabolic.Milligram, p); err != nil || !a.BelowStep || a.Dilution != nil || a.Containers != 0 {
		t.Errorf("under a quarter tablet: %+v, %v", a, err)
	}
}

func drawProduct(t *rapid.T) ProductInput {
	return ProductInput{
		Strength:         Strength{Unit: metabolic.Milligram, AmountPerML: rapid.Float64Range(0.01, 600).Draw(t, "strength")},
		StepML:           rapid.SampledFrom([]float64{0.005, 0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1}).Draw(t, "step"),
		LargestPerSiteML: rapid.SampledFrom([]float64{0, 1, 2, 2.25, 10, 20}).Draw(t, "largest"),
		NarrowMargin:     rapid.Bool().Draw(t, "narrow"),
		IntervalH:        rapid.SampledFrom([]float64{0, 6, 8, 12, 24, 72}).Draw(t, "interval"),
		Days:             rapid.SampledFrom([]float64{0, 1, 5, 7, 10}).Draw(t, "days"),
		ContainerML:      rapid.SampledFrom([]float64{0, 10, 50}).Draw(t, "container"),
	}
}

// isSteps says whether v is a whole number of steps.
func isSteps(v, step float64) bool {
	return math.Abs(v/step-math.Round(v/step)) < 1e-6
}

// What is given lies within half a step of what was asked, or within a step
// below when the margin is narrow; every volume can be measured; the sites add
// up; the course adds up.
func TestMeasuredVolume(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawProduct(t)
		steps := math.Exp(rapid.Float64Range(0, math.Log(300)).Draw(t, "ln steps"))
		if rapid.Bool().Draw(t, "whole or half steps") {
			steps = math.Floor(2*steps) / 2
		}
		amount := steps * p.StepML * p.Strength.AmountPerML
		a, err := ForSyringe(amount, metabolic.Milligram, p)
		if err != nil {
			t.Fatal(err)
		}
		slack := 1e-8 * amount
		oneStep := p.StepML * p.Strength.AmountPerML
		off := a.AmountGiven - amount
		switch {
		case p.NarrowMargin && !(off <= slack && off > -oneStep-slack):
			t.Errorf("narrow: asked %g, given %g, a step is %g", amount, a.AmountGiven, oneStep)
		case !p.NarrowMargin && math.Abs(off) > oneStep/2+slack:
			t.Errorf("asked %g, given %g, half a step is %g", amount, a.AmountGiven, oneStep/2)
		case math.Abs(math.Abs(off)-oneStep/2) < slack && off > 0:
			t.Errorf("a tie went up: asked %g, given %g", amount, a.AmountGiven)
		}
		wantNear(t, "given", a.AmountGiven, a.Measured*p.Strength.AmountPerML, 1e-9)
		if math.Abs(a.ErrorPercent-100*off/amount) > 1e-6 {
			t.Errorf("error %g %%, want %g %%", a.ErrorPercent, 100*off/amount)
		}
		if a.BelowStep || !isSteps(a.Measured, p.StepML) {
			t.Errorf("measured %g mL in steps of %g", a.Measured, p.StepML)
		}
		sum := 0.0
		for _, v := range a.Sites {
			sum += v
			if !isSteps(v, p.StepML) || v <= 0 || p.LargestPerSiteML > 0 && v > p.LargestPerSiteML*(1+1e-9) {
				t.Errorf("%g mL at one site, step %g, largest %g", v, p.StepML, p.LargestPerSiteML)
			}
		}
		wantNear(t, "sum of the sites", sum, a.Measured, 1e-9)
		if p.LargestPerSiteML > 0 && isSteps(p.LargestPerSiteML, p.StepML) {
			if want := int(math.Ceil(a.Measured/p.LargestPerSiteML - 1e-9)); len(a.Sites) != want {
				t.Errorf("%d sites, want %d", len(a.Sites), want)
			}
		}
		if slices.Max(a.Sites)-slices.Min(a.Sites) > p.StepML*(1+1e-6) {
			t.Errorf("uneven sites %v", a.Sites)
		}
		wantNear(t, "total", a.Total, float64(a.Administrations)*a.Measured, 1e-9)
		if p.ContainerML > 0 && a.Total > 0 &&
			!(float64(a.Containers)*p.ContainerML >= a.Total*(1-1e-8) && float64(a.Containers-1)*p.ContainerML < a.Total) {
			t.Errorf("%d containers of %g mL for %g mL", a.Containers, p.ContainerML, a.Total)
		}
	})
}

// A proposed dilution can be made and drawn with the same syringe, holds what
// it says, and is within 5 %.
func TestDilutionCanBeMade(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawProduct(t)
		steps := math.Exp(rapid.Float64Range(math.Log(0.002), math.Log(0.9999)).Draw(t, "ln steps"))
		amount := steps * p.StepML * p.Strength.AmountPerML
		a, err := ForSyringe(amount, metabolic.Milligram, p)
		if err != nil {
			t.Fatal(err)
		}
		d := a.Dilution
		if !a.BelowStep || d == nil {
			t.Fatalf("%g steps: %+v", steps, a)
		}
		perML, made := p.Strength.AmountPerML, math.Inf(1)
		for _, s := range d.Steps {
			if !isSteps(s.TakeML, p.StepML) || !isSteps(s.AddML, p.StepML) || s.TakeML < 10*p.StepML*(1-1e-9) || s.TakeML > made {
				t.Errorf("take %g mL, add %g mL in steps of %g", s.TakeML, s.AddML, p.StepML)
			}
			wantNear(t, "total of the parts", s.TotalML, s.TakeML+s.AddML, 1e-9)
			if s.TotalML/s.TakeML > 100*(1+1e-9) {
				t.Errorf("1 in %g by one step", s.TotalML/s.TakeML)
			}
			perML *= s.TakeML / s.TotalML
			made = s.TotalML
			wantNear(t, "strength of a step", s.AmountPerML, perML, 1e-9)
		}
		wantNear(t, "strength", d.AmountPerML, perML, 1e-9)
		wantNear(t, "given", d.AmountGiven, d.DrawML*perML, 1e-8)
		wantNear(t, "exact", d.ExactML, amount/perML, 1e-9)
		if !isSteps(d.DrawML, p.StepML) || d.DrawML < 5*p.StepML*(1-1e-9) || d.DrawML > made {
			t.Errorf("draw %g mL of %g in steps of %g", d.DrawML, made, p.StepML)
		}
		off := 100 * (d.AmountGiven - amount) / amount
		if math.Abs(off) > 5+1e-6 || p.NarrowMargin && off > 1e-6 {
			t.Errorf("off by %g %%", off)
		}
	})
}

func TestPumpRate(t *testing.T) {
	for _, tt := range []struct {
		name    string
		perHour float64
		p       ProductInput
		want    Pump
	}{
		{"20 mg/h of 5 mg/mL is 4 mL/h", 20, ProductInput{}, Pump{ExactMLPerH: 4, MLPerH: 4, AmountPerHour: 20}},
		{"21.3 mg/h: 4.26, set to 4.3, which gives 21.5", 21.3, ProductInput{},
			Pump{ExactMLPerH: 4.26, MLPerH: 4.3, AmountPerHour: 21.5, ErrorPercent: 20 / 21.3}},
		{"narrow: 4.2 gives 21", 21.3, ProductInput{NarrowMargin: true},
			Pump{ExactMLPerH: 4.26, MLPerH: 4.2, AmountPerHour: 21, ErrorPercent: -30 / 21.3}},
		{"steps of 1 mL/h, two days: 4 × 48 = 192 mL, 4 bags of 50", 21.3, ProductInput{StepMLPerH: 1, Days: 2, ContainerML: 50},
			Pump{ExactMLPerH: 4.26, MLPerH: 4, AmountPerHour: 20, ErrorPercent: -130 / 21.3, TotalML: 192, Containers: 4}},
		// 0.3 mg/h is 0.06 mL/h; at 0.5 mg/mL 0.6 mL/h; of the product itself 0.06 mL/h × 24 h.
		{"too slow", 0.3, ProductInput{Days: 1, ContainerML: 50},
			Pump{ExactMLPerH: 0.06, BelowStep: true, ErrorPercent: -100, DiluteTo: 0.5, DilutePartIn: 10, TotalML: 1.44, Containers: 1}},
	} {
		tt.p.Strength = mustStrength(t, "5 mg/mL")
		got, err := PumpRate(tt.perHour, metabolic.Milligram, tt.p)
		if err != nil {
			t.Errorf("%s: %v", tt.name, err)
			continue
		}
		wantNear(t, tt.name+": error", got.ErrorPercent, tt.want.ErrorPercent, 1e-9)
		tt.want.ErrorPercent = got.ErrorPercent
		if d := got.Dilution; got.BelowStep != (d != nil) {
			t.Errorf("%s: dilution %+v", tt.name, d)
		} else if d != nil {
			// 0.3 mg/h of 5 mg/mL diluted 1 in 10 is 0.6 mL/h of 0.5 mg/mL.
			if d.DrawML != 0.6 || d.AmountPerML != 0.5 || len(d.Steps) != 1 || relative(d.Steps[0].TotalML, 10*d.Steps[0].TakeML) > 1e-12 {
				t.Errorf("%s: dilution %+v", tt.name, d)
			}
		}
		got.Dilution = nil
		if got != tt.want {
			t.Errorf("%s:\n got %+v\nwant %+v", tt.name, got, tt.want)
		}
	}
	for _, p := range []ProductInput{
		{Strength: mustStrength(t, "250 mg/tablet")},
		{Strength: mustStrength(t, "5000 IU/mL")},
		{Strength: mustStrength(t, "5 mg/mL"), StepMLPerH: -1},
		{Strength: mustStrength(t, "0.000001 mg/mL")},
	} {
		if got, err := PumpRate(20, metabolic.Milligram, p); err == nil {
			t.Errorf("PumpRate of %+v = %+v, want an error", p, got)
		}
	}
}

func TestProductErrors(t *testing.T) {
	mg := metabolic.Milligram
	liquid, tablet := mustStrength(t, "50 mg/mL"), mustStrength(t, "250 mg/tablet")
	for _, tt := range []struct {
		name   string
		amount float64
		unit   metabolic.AmountUnit
		p      ProductInput
		says   string
	}{
		{"IU of mg", 100, metabolic.InternationalUnit, ProductInput{Strength: liquid, StepML: 0.1}, "not converted"},
		{"mg of IU", 100, mg, ProductInput{Strength: mustStrength(t, "5000 IU/mL"), StepML: 0.1}, "not converted"},
		{"no step", 100, mg, ProductInput{Strength: liquid}, "step"},
		{"a negative step", 100, mg, ProductInput{Strength: liquid, StepML: -0.1}, "step"},
		{"no strength", 100, mg, ProductInput{StepML: 0.1}, "strength"},
		{"nothing", 0, mg, ProductInput{Strength: liquid, StepML: 0.1}, "not above 0"},
		{"less than nothing", -1, mg, ProductInput{Strength: liquid, StepML: 0.1}, "not above 0"},
		{"no number", math.NaN(), mg, ProductInput{Strength: liquid, StepML: 0.1}, "not above 0"},
		{"without end", math.Inf(1), mg, ProductInput{Strength: liquid, StepML: 0.1}, "not above 0"},
		{"a slip of units", 1e9, mg, ProductInput{Strength: liquid, StepML: 0.1}, "far more"},
		{"thirds of a tablet", 100, mg, ProductInput{Strength: tablet, StepPieces: 1. / 3}, "divided"},
		{"half a capsule", 100, mg, ProductInput{Strength: mustStrength(t, "50 mg/capsule"), StepPieces: 0.5}, "capsule"},
		{"negative days", 100, mg, ProductInput{Strength: liquid, StepML: 0.1, Days: -1}, "neither"},
		{"endless interval", 100, mg, ProductInput{Strength: liquid, StepML: 0.1, IntervalH: math.Inf(1)}, "neither"},
		{"a site under a step", 100, mg, ProductInput{Strength: liquid, StepML: 0.1, LargestPerSiteML: 0.05}, "under the syringe's step"},
		{"more sites than animals have room for", 1e5, mg, ProductInput{Strength: liquid, StepML: 0.1, LargestPerSiteML: 0.5}, "sites"},
	} {
		a, err := ForSyringe(tt.amount, tt.unit, tt.p)
		var q *metabolic.QuantityError
		if !errors.As(err, &q) || !strings.Contains(q.Problem, tt.says) || q.Remedy == "" {
			t.Errorf("%s: %+v, %v", tt.name, a, err)
		}
	}
}

package reports

import (
	"strings"
	"testing"
	"unicode"
	"unicode/utf8"

	"pgregory.net/rapid"

	"tayra/dose"
)

func TestDoseWords(t *testing.T) {
	hours := func(h float64) *float64 { return &h }
	for _, k := range []struct{ got, want string }{
		{perKgPair(dose.Pair{8.14, 8.14}, "mg/kg"), "8.14 mg/kg"},
		{perKgPair(dose.Pair{5, 10}, "mg/kg"), "5 to 10 mg/kg"},
		{perKgPair(dose.Pair{21647.9, 21647.9}, "IU/kg"), "21,600 units/kg"},
		{perKgPair(dose.Pair{0.388, 0.388}, "mg/kg/h"), "0.388 mg/kg/h"},
		{dailyPair(&dose.Pair{16.28, 16.28}, "mg/kg"), "16.3 mg/kg/day"},
		{dailyPair(&dose.Pair{9.32, 9.32}, "mg/kg/h"), "9.32 mg/kg/day"},
		{dailyPair(nil, "mg/kg"), ""},
		{amountPair(dose.Pair{333.7, 333.7}, "mg/kg"), "334 mg"},
		{amountPair(dose.Pair{0.75, 1.5}, "mg/kg"), "0.75 to 1.5 mg"},
		{amountPair(dose.Pair{4.271, 4.271}, "mg/kg/h"), "4.27 mg/h"},
		{amountPair(dose.Pair{10390985, 10390985}, "IU/kg"), "10,400,000 units"},
		{intervalWords("clock", hours(72)), "every 72 hours (3 days)"},
		{intervalWords("once", nil), "once"},
		{intervalWords("infusion", nil), "continuous infusion"},
		{intervalBothWords("clock", hours(12)), "every 12 hours (q12h)"},
		{intervalBothWords("clock", hours(14.742)), "every 14.7 hours"}, // q14.7h is no order
		{measuredWords(12.35, "mL"), "12.35 mL"},                        // FormatLiquid would say 12.4
		{measuredWords(0.5, "tablet"), "0.5 tablet"},
		{measuredWords(1.5, "tablet"), "1.5 tablets"},
		{measuredWords(1, "capsule"), "1 capsule"},
		{exactWords(0.0007521206, "mL"), "0.0007521 mL"},
		{exactWords(1.531, "tablet"), "1.531 tablets"},
		{perMLWords(0.025, "mg/kg"), "0.025 mg/mL"}, // not 25 mcg/mL: see perMLWords
		{perMLWords(300000, "IU/kg"), "300,000 units/mL"},
		{errorWords(0.378057), "0.378 % more than drafted"},
		{errorWords(-10.479), "10.5 % less than drafted"},
		{errorWords(0), "exactly as drafted"},
		{dilutionWords(200), "1 in 200"},
		{averageWords(0.99999999999), "equal"},
		{averageWords(0.813996), "0.814 times"},
		{countWords(nil), "none raised, which is no evidence of safety"},
		{countWords([]dose.Caution{{Level: dose.Stop}, {Level: dose.Note}, {Level: dose.Note}}), "1 stop, 2 notes"},
		{planWords("both-adjusted"), "both adjusted"},
		{typedWords("Dog ", "dog", "Canis lupus familiaris"), ""},
		{typedWords("canis lupus familiaris", "dog", "Canis lupus familiaris"), ""},
		{typedWords("domestic pigeon", "rock dove", "Columba livia"), ", typed as domestic pigeon"},
		{paperUnits("2 IU/kg × 3"), "2 units/kg × 3"},
	} {
		if k.got != k.want {
			t.Errorf("%q, want %q", k.got, k.want)
		}
	}
}

func TestGiveWords(t *testing.T) {
	end := func(asked, measured, given float64) dose.Administration {
		return dose.Administration{AmountAsked: asked, Measure: "mL", Measured: measured, AmountGiven: given}
	}
	small := dose.Administration{Measure: "mL", BelowStep: true, Dilution: &dose.Dilution{Factor: 200, DrawML: 0.15, AmountGiven: 0.00375}}
	piece := func(measured, given float64) dose.Administration {
		return dose.Administration{Measure: "tablet", Measured: measured, AmountGiven: given}
	}
	for _, k := range []struct {
		name string
		p    *dose.ProductRecord
		unit string
		want string
	}{
		{"none", nil, "mg/kg", ""},
		{"stopped", &dose.ProductRecord{AmountPerML: 50}, "mg/kg", ""},
		{"one", &dose.ProductRecord{AmountPerML: 50, Ends: []dose.Administration{end(333.7, 6.7, 335)}}, "mg/kg", "6.7 mL of 50 mg/mL (335 mg)"},
		{"range", &dose.ProductRecord{AmountPerML: 50, Ends: []dose.Administration{end(13.3, 0.27, 13.5), end(26.5, 0.53, 26.5)}}, "mg/kg", "0.27 to 0.53 mL of 50 mg/mL (13.5 to 26.5 mg)"},
		{"units", &dose.ProductRecord{AmountPerML: 300000, Ends: []dose.Administration{end(1, 34.5, 10350000)}}, "IU/kg", "34.5 mL of 300,000 units/mL (10,400,000 units)"},
		{"tablets", &dose.ProductRecord{Form: "tablet", AmountPerPiece: 250, Ends: []dose.Administration{piece(0.5, 125), piece(1.5, 375)}}, "mg/kg", "0.5 to 1.5 tablets of 250 mg (125 to 375 mg)"},
		{"dilution", &dose.ProductRecord{AmountPerML: 5, Ends: []dose.Administration{small}}, "mg/kg", "0.15 mL of the product diluted 1 in 200 (3.75 mcg)"},
		{"one end below the step", &dose.ProductRecord{AmountPerML: 5, Ends: []dose.Administration{small, end(1, 0.2, 1)}}, "mg/kg", ""},
		{"pump", &dose.ProductRecord{AmountPerML: 1, Pump: []dose.Pump{{MLPerH: 4.3, AmountPerHour: 4.3}}}, "mg/kg/h", "4.3 mL/h of 1 mg/mL (4.3 mg/h)"},
		{"pump below its step", &dose.ProductRecord{AmountPerML: 1, Pump: []dose.Pump{{BelowStep: true}}}, "mg/kg/h", ""},
		{"pump, diluted", &dose.ProductRecord{AmountPerML: 1, Pump: []dose.Pump{{BelowStep: true, Dilution: &dose.Dilution{Factor: 1000, DrawML: 1.5, AmountGiven: 0.0015}}}}, "mg/kg/h",
			"1.5 mL/h of the product diluted 1 in 1,000 (1.5 mcg/h)"},
	} {
		if got := giveWords(k.p, k.unit); got != k.want {
			t.Errorf("%s: %q, want %q", k.name, got, k.want)
		}
	}
}

func TestAsGiven(t *testing.T) {
	for typed, want := range map[string]string{
		"10 mg/kg":      "10 mg/kg",
		" .5-1.0mg ":    "0.5 to 1 mg",
		"22000 IU/kg":   "22,000 units/kg",
		"5000U":         "5,000 units",
		"85µg/kg":       "85 mcg/kg",
		"85 ug/kg":      "85 mcg/kg",
		"10 – 15 mg/kg": "10 to 15 mg/kg",
		"0.50 mg/kg":    "0.5 mg/kg",
		"100 mg":        "100 mg",
	} {
		if got := asGiven(typed); got != want {
			t.Errorf("%q: %q, want %q", typed, got, want)
		}
	}
	for typed, want := range map[string]bool{"10 mg/kg": true, "2 mg/kg/h": true, "2 mg / kg ": true, "": true, "100 mg": false, "20 mg/kg/day": false, "300 mg/m2": false, "5 mcg/kg/min": false} {
		if got := isPerKg(typed); got != want {
			t.Errorf("%q: per kg is %v", typed, got)
		}
	}
}

func TestVisible(t *testing.T) {
	for s, want := range map[string]string{
		"plain":              "plain",
		"Ærø 犬 ≤ 5 °C":       "Ærø 犬 ≤ 5 °C",
		"a\nb\tc":            "a b c",
		"red\x1b[31m":        `red\x1b[31m`,
		"bell\a nul\x00":     `bell\x07 nul\x00`,
		"c1 \u009b31m":       `c1 \x9b31m`,
		"5 mg\u202eg/kg":     `5 mg\u202eg/kg`,
		"zero\u200bwidth":    `zero\u200bwidth`,
		"soft\u00adhyphen":   `soft\u00adhyphen`,
		"line\u2028end":      `line\u2028end`,
		"tag\U000e0041":      `tag\U000e0041`,
		"broken \xff\xfe":    `broken \xff\xfe`,
		"private \ue000 use": `private \ue000 use`,
	} {
		if got := visible(s); got != want {
			t.Errorf("%q: %q, want %q", s, got, want)
		}
	}
}

// harmless says whether a text can act on a terminal.
func harmless(s string) bool {
	return utf8.ValidString(s) && !strings.ContainsFunc(s, func(r rune) bool {
		return unicode.IsControl(r) || unicode.In(r, unicode.Cf, unicode.Zl, unicode.Zp, unicode.Bidi_Control)
	})
}

func TestVisibleLaws(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := string(rapid.SliceOf(rapid.Byte()).Draw(t, "bytes")) + rapid.String().Draw(t, "letters")
		got := visible(s)
		if !harmless(got) {
			t.Fatalf("%q becomes %q", s, got)
		}
		if again := visible(got); again != got {
			t.Fatalf("%q, then %q", got, again)
		}
	})
}

func TestColumns(t *testing.T) {
	for s, want := range map[string]int{"": 0, "mg/kg": 5, "σ ≤ √2": 6, "犬": 2, "Ｗ": 2, "e\u0301": 1, "°C": 2, "┃": 1} {
		if got := columns(s); got != want {
			t.Errorf("%q: %d, want %d", s, got, want)
		}
	}
}

// Every stop that the program knows has words of its own for the box, and none
// of them holds a number.
func TestStopWords(t *testing.T) {
	stops := []dose.Slug{dose.SameSpecies, dose.ImplausibleMass, dose.NarrowMargin, dose.CrossClass, dose.CrossThermy, dose.TorpidPatient, dose.NeonatePatient,
		dose.ClearingOrgan, dose.DepotForm, dose.AboveTolerated, dose.Peak, dose.EffectDriven, dose.BelowStep, "hazard-h019"}
	seen := map[string]bool{}
	for _, s := range stops {
		got := stopWords(&dose.Caution{Slug: string(s), Level: dose.Stop})
		if got == "" || strings.HasPrefix(got, "the caution ") || seen[got] || strings.ContainsAny(got, "0123456789") {
			t.Errorf("%s: %q", s, got)
		}
		seen[got] = true
	}
	if got := stopWords(&dose.Caution{Slug: "something-new"}); got != "the caution something new" {
		t.Errorf("an unknown stop: %q", got)
	}
}

func TestWorstWords(t *testing.T) {
	ws := &dose.Worksheet{}
	if got := worstWords(ws); !strings.Contains(got, "no evidence of safety") {
		t.Error(got)
	}
	ws.Cautions = []dose.Caution{{Level: dose.Stop, Overridden: true}, {Level: dose.Warn}}
	if got := worstWords(ws); got != "Worst caution: STOP, overridden with a written reason. In all: 1 stop, 1 warning." {
		t.Error(got)
	}
}

func TestGroupSources(t *testing.T) {
	got := groupSources([]dose.SourceLine{{What: "a", Citation: "x"}, {What: "b", Citation: "y"}, {What: "c", Citation: "x", Memory: true}})
	if len(got) != 2 || got[0].What != "a; c" || !got[0].Memory || got[1].What != "b" {
		t.Errorf("%+v", got)
	}
}

package reports

import (
	"regexp"
	"strings"
	"testing"

	"tayra/dose"
)

// paperLines are the lines of the bodies of all pages, and those of the box.
func paperLines(t testing.TB, ws *dose.Worksheet) (all, box string) {
	t.Helper()
	_, l := sheetOf(t, ws, A4)
	var lines, boxed []string
	for _, page := range l.pages {
		for _, p := range page {
			if len(p.band.labels) == 0 {
				continue
			}
			text := strings.Join(pageText([]placing{p}), " ")
			lines = append(lines, text)
			if p.band.frame != nil {
				boxed = append(boxed, text)
			}
		}
	}
	return oneLine(strings.Join(lines, " ")), oneLine(strings.Join(boxed, " "))
}

func wholeText(ws *dose.Worksheet) string {
	return oneLine(strings.ReplaceAll(string(Text(ws, TextOptions{Steps: true})), "┃", " "))
}

// What changes what is done with the dose stands in the box of both writers,
// and what outranks it before the ranges.
func TestBox(t *testing.T) {
	for _, k := range []struct {
		example string
		want    []string
	}{
		{"outranked", []string{
			"A dose is published for this species, and outranks this draft: 0.8 to 1 mg/kg SC every 12 hours (small-mammal notes 3, invented for this example).",
			"If it weighs 0.8 kg: 447 mcg, 0.559 mg/kg, 0.2 mL.", "If it weighs 1.2 kg: 606 mcg, 0.505 mg/kg, 0.3 mL.",
			"Loading dose, once, first: 980 mcg (1 mg/kg) = 0.5 mL, divided over 2 sites.", "0.8 mg if it weighs 0.8 kg, 1.2 mg if 1.2 kg."}},
		{"python", []string{"The bases disagree: the dose at the drafted interval is 6.28 mg/kg by group", "If it weighs 1.2 kg: 7.81 mg, 6.51 mg/kg, 0.8 mL.", "If it weighs 1.6 kg: 9.7 mg, 6.06 mg/kg, 0.95 mL.", "0.774 to 97.9 mg"}},
		{"pump", []string{"= 1.5 mL/h of the product diluted 1 in 1,000 (1.5 mcg/h)", "If it weighs 1.1 kg: 1.36 mcg/h, 0.00124 mg/kg/h."}},
		{"range", []string{"Loading dose, once, first: 28 mg (20 mg/kg) = 0.56 mL.", "ine times in ten 3.27 to 122 mg/kg, 4.58 to 171 mg."}},
		{"once", []string{"tart at the low end"}},
	} {
		ws := exampleNamed(t, k.example)
		_, paper := paperLines(t, ws)
		for _, want := range k.want {
			for writer, box := range map[string]string{"terminal": boxOf(t, ws), "paper": paper} {
				if !strings.Contains(box, want) {
					t.Errorf("%s, %s: no %q in the box:\n%s", k.example, writer, want, box)
				}
			}
		}
	}
	// Bold on paper, and above the ranges.
	ws := exampleNamed(t, "outranked")
	_, box := paperLines(t, ws)
	if strings.Index(box, "outranks this draft") > strings.Index(box, "nine times in ten within") {
		t.Error("the ranges stand above what outranks the dose")
	}
	s, _ := sheetOf(t, ws, A4)
	heavy := false
	for i := range s.f.bands {
		for _, l := range s.f.bands[i].labels {
			heavy = heavy || l.bold && strings.Contains(l.text, "outranks")
		}
	}
	if !heavy {
		t.Error("what outranks the dose is not bold")
	}
}

// The box says what the dose was taken from: a model, or a line fitted to data.
func TestDraftedFrom(t *testing.T) {
	ws := exampleNamed(t, "anteater")
	if got := fromWords(ws); got != "From dog, 18 kg: 10 mg/kg SC every 12 hours." {
		t.Error(got)
	}
	ws.Drafted.Route = ""
	if got := fromWords(ws); !strings.HasSuffix(got, " No route is given.") {
		t.Error(got)
	}
	ws = fittedCase(t, 4)
	_, paper := paperLines(t, ws)
	for writer, box := range map[string]string{"terminal": boxOf(t, ws), "paper": paper} {
		if !strings.Contains(box, "From the line fitted to 4 animals, for an average of 4.8") || !strings.Contains(box, "Model: dog, 10 kg: 10 mg/kg SC every 12 hours.") {
			t.Errorf("%s: %s", writer, box)
		}
	}
}

// Nothing urges the low end of a bracket where a written reason has set aside
// that the effect does not follow clearance.
func TestLowEndNotUrged(t *testing.T) {
	urged, not := exampleNamed(t, "once"), exampleNamed(t, "immobiliser")
	paper, _ := paperLines(t, urged)
	if n := strings.Count(wholeText(urged), "start at the low end"); n < 1 || !strings.Contains(paper, "Start at the low end.") {
		t.Error("a single dose that is not begun low")
	}
	paper, _ = paperLines(t, not)
	for writer, text := range map[string]string{"terminal": wholeText(not), "paper": paper} {
		if strings.Contains(strings.ToLower(text), "start at the low end") {
			t.Errorf("%s: urged to start low", writer)
		}
		if !strings.Contains(text, "by volume") {
			t.Errorf("%s: the bracket is not told", writer)
		}
	}
}

// The basis used shows exactly the drafted dose, is called so, and stands for
// nothing else; no dose of the strip is at another interval than the drafted.
func TestBasisUsed(t *testing.T) {
	n := 0
	for _, e := range examples(t) {
		d := e.ws.Drafted
		if d == nil {
			continue
		}
		used := 0
		for i := range e.ws.Bases {
			b := &e.ws.Bases[i]
			if !basisUsed(e.ws, b) {
				continue
			}
			used++
			if b.DosePerKg == nil || d.Plan != "once" && perKgPair(*b.DosePerKg, d.Unit) != perKgPair(d.DosePerKg, d.Unit) {
				t.Errorf("%s: the basis used gives %v, drafted is %v", e.name, b.DosePerKg, d.DosePerKg)
			}
			paper, _ := paperLines(t, e.ws)
			for writer, text := range map[string]string{"terminal": wholeText(e.ws), "paper": paper} {
				if !strings.Contains(text, basisLabel(b, writer == "paper")+", basis used") {
					t.Errorf("%s, %s: the line of the basis used is not called so", e.name, writer)
				}
				for _, not := range []string{"drafted, basis", "as the model is given it", "carried to that interval"} {
					if strings.Contains(text, not) {
						t.Errorf("%s, %s: %q", e.name, writer, not)
					}
				}
				if d.IntervalH != nil && !strings.Contains(text, "The dose per kg "+intervalWords("", d.IntervalH)+", at the drafted interval") {
					t.Errorf("%s, %s: the interval of the other bases is not said", e.name, writer)
				}
			}
		}
		if used != 1 {
			t.Errorf("%s: %d bases used", e.name, used)
		}
		n++
	}
	if n < 10 {
		t.Errorf("%d drafts", n)
	}
	// Beside a fitted line the bases are at the model's interval, and none is used.
	ws := fittedCase(t, 4)
	paper, _ := paperLines(t, ws)
	for writer, text := range map[string]string{"terminal": wholeText(ws), "paper": paper} {
		if !strings.Contains(text, "The dose per kg every 12 hours, at the model's interval, by scaling") || strings.Contains(text, ", basis used") || strings.Contains(text, "basis used, ") {
			t.Errorf("%s: the bases beside a fitted line", writer)
		}
	}
	// Where the fitted half-life gives another interval, the ranges say theirs.
	six := 6.0
	ws.Drafted.IntervalH = &six
	paper, _ = paperLines(t, ws)
	for text, want := range map[string]string{wholeText(ws): "by scaling. The ranges are of the drafted dose, every 6 hours.", paper: "the dose from the fitted line, every 6 hours, with its ranges."} {
		if !strings.Contains(text, want) {
			t.Errorf("no %q", want)
		}
	}
}

func TestBasisLabel(t *testing.T) {
	for _, k := range []struct {
		b    dose.BasisLine
		id   bool
		want string
	}{
		{dose.BasisLine{Basis: "group"}, true, "group"},
		{dose.BasisLine{Basis: "group", StandIn: "patient: measured"}, false, "group (patient: measured)"},
		{dose.BasisLine{Basis: "equation", ID: "a, b"}, true, "equation (a, b)"},
		{dose.BasisLine{Basis: "equation", ID: "a, b"}, false, "equation"},
	} {
		if got := basisLabel(&k.b, k.id); got != k.want {
			t.Errorf("%q, want %q", got, k.want)
		}
	}
}

// After a stop no number of a dose stands in the text either: not the model's,
// unless it is the patient's own species and stands as published.
func TestTextAfterAStop(t *testing.T) {
	n := 0
	for _, e := range paperExamples(t) {
		if e.ws.Drafted != nil {
			continue
		}
		n++
		for _, o := range []TextOptions{{Steps: true, Width: 4000}, {Quiet: true, Width: 4000}} {
			var lines []string
			for _, l := range strings.Split(string(Text(e.ws, o)), "\n") {
				if !strings.HasPrefix(l, "[") && strings.Trim(l, "━┏┓┗┛┃ ") != "" { // a caution's own numbers
					lines = append(lines, l)
				}
			}
			for _, l := range stoppedLines(e.ws, lines) {
				t.Errorf("%s: a dose after a stop: %s", e.name, l)
			}
		}
	}
	if n < 5 {
		t.Errorf("%d examples stop", n)
	}
	// With several models, too, and with the way out of a stop told.
	ws := exampleNamed(t, "severalmodels")
	ws.Cautions = append([]dose.Caution{{Slug: string(dose.NarrowMargin), Level: dose.Stop}}, ws.Cautions...)
	ws.Drafted, ws.Product, ws.Exponents, ws.Loading = nil, &dose.ProductRecord{AmountPerML: 50, StepML: 0.1, Rounding: "down", Text: []string{"Proposed: dilute."}}, nil, nil
	for i := range ws.Drafts {
		ws.Drafts[i].Plans, ws.Drafts[i].Range90, ws.Drafts[i].Steps, ws.Drafts[i].Parts = nil, nil, nil, nil
	}
	for i := range ws.Bases {
		ws.Bases[i].DosePerKg = nil
	}
	for _, l := range stoppedLines(ws, strings.Split(string(Text(ws, TextOptions{Steps: true, Width: 4000})), "\n")) {
		t.Errorf("several models: a dose after a stop: %s", l)
	}
	if !strings.Contains(wholeText(ws), "Proposed: dilute.") {
		t.Error("the way out is not told")
	}
}

// A proposed regimen stands beside the draft in mg and mL, and what it raises
// stands first, stops before all, and once.
func TestProposedBeside(t *testing.T) {
	ws := exampleNamed(t, "outranked")
	paper, _ := paperLines(t, ws)
	for writer, text := range map[string]string{"terminal": wholeText(ws), "paper": paper} {
		for _, want := range []string{"amount each time 4.9 mg 0.521 mg", "measured 2.45 mL 0.25 mL"} {
			if !strings.Contains(text, want) {
				t.Errorf("%s: no %q", writer, want)
			}
		}
		after := text[strings.Index(strings.ToLower(text), "proposed regimen:"):]
		stop, warn, verdict := strings.Index(after, "The proposed dose, 5 mg/kg, is above"), strings.Index(after, "One administration is 10 times"), strings.Index(after, "The proposed daily amount")
		if stop < 0 || stop > warn || warn > verdict {
			t.Errorf("%s: the stop at %d, the warning at %d, the verdict at %d", writer, stop, warn, verdict)
		}
		if n := strings.Count(text, "The proposed dose, 5 mg/kg, is above"); n != 1 {
			t.Errorf("%s: the stop is told %d times", writer, n)
		}
	}
}

// At other body temperatures dose, interval, amount a day and amount stand side
// by side; without an interval there is no amount a day of a single dose.
func TestTemperatureTable(t *testing.T) {
	ws := exampleNamed(t, "python")
	paper, _ := paperLines(t, ws)
	for _, l := range ws.Temperature {
		if l.DailyPerKg == nil || l.Amount[0] <= 0 {
			t.Fatalf("%+v", l)
		}
		row := perKgPair(l.DosePerKg, "mg/kg") + " "
		if !strings.Contains(wholeText(ws), row+hoursCell(l.IntervalH)+" "+dailyPair(l.DailyPerKg, "mg/kg")+" "+amountPair(l.Amount, "mg/kg")) {
			t.Errorf("terminal: no row of %v °C", l.TemperatureC)
		}
		if !strings.Contains(paper, row+intervalWords("", &l.IntervalH)+" "+perKgPair(*l.DailyPerKg, "mg/kg")+" "+amountPair(l.Amount, "mg/kg")) {
			t.Errorf("paper: no row of %v °C", l.TemperatureC)
		}
	}
}

// The steps of an infusion's dilution, a loading dose's volume, a patient's
// conditions, and who set a stop aside, in both writers.
func TestSaidByBoth(t *testing.T) {
	for _, k := range []struct {
		example string
		want    []string
	}{
		{"pump", []string{"the pump is set in steps of 0.1 mL/h", "Take 1 mL of the product, add diluent 9 mL: 10 mL of 0.1 mg/mL.", "Take 1 mL of that, add diluent 99 mL: 100 mL of 0.001 mg/mL.",
			"Set the pump to 1.5 mL/h (exactly 1.492 mL/h): 1.5 mcg/h, 0.545 % more than drafted. To fill a larger syringe or bag, keep the proportions."}},
		{"range", []string{"kidney disease, obese", "ends at the drafted dose to 3 figures."}},
		{"outranked", []string{"liver disease"}},
		{"smalltablet", []string{"he dose is less than the smallest part of a tablet", "After a stop the reckoning ends at the ratios."}},
		{"samespecies", []string{"Its dose stands above, as published."}},
		{"belowstep", []string{"Proposed: dilute 1 part of product in 200 parts", "After a stop its dose is not printed; it stands in the case."}},
	} {
		ws := exampleNamed(t, k.example)
		paper, _ := paperLines(t, ws)
		_, l := sheetOf(t, ws, A4)
		paper += oneLine(strings.Join(bandTexts(l.heads[0]), " "))
		for _, want := range k.want {
			for writer, text := range map[string]string{"terminal": wholeText(ws), "paper": paper} {
				if !strings.Contains(text, want) {
					t.Errorf("%s, %s: no %q", k.example, writer, want)
				}
			}
		}
	}
	if paper, _ := paperLines(t, exampleNamed(t, "override")); !strings.Contains(paper, "OVERRIDDEN (sheet prepared by duty veterinarian): serum levels") {
		t.Error("who prepared the sheet is taken for who set the stop aside, or not said")
	}
	// The loading dose is a row of its own on paper.
	paper, _ := paperLines(t, exampleNamed(t, "range"))
	if !regexp.MustCompile(`loading dose 28 mg 0\.56 mL 0\.56 mL 28 mg`).MatchString(paper) {
		t.Error("the loading dose is not measured out on paper")
	}
	if !strings.Contains(wholeText(exampleNamed(t, "range")), "Loading dose, once: 28 mg is exactly 0.56 mL; given 0.56 mL") {
		t.Error("the loading dose is not measured out on the terminal")
	}
}

func TestVolumeWords(t *testing.T) {
	mL := func(v float64) dose.Administration { return dose.Administration{Measure: "mL", Measured: v} }
	diluted := func(factor, draw float64) dose.Administration {
		return dose.Administration{Measure: "mL", BelowStep: true, Dilution: &dose.Dilution{Factor: factor, DrawML: draw}}
	}
	for _, k := range []struct {
		ends []dose.Administration
		want string
	}{
		{nil, ""},
		{[]dose.Administration{mL(0.8)}, "0.8 mL"},
		{[]dose.Administration{mL(0.8), mL(0.8)}, "0.8 mL"},
		{[]dose.Administration{mL(0.8), mL(1.25)}, "0.8 to 1.25 mL"},
		{[]dose.Administration{diluted(20, 0.5)}, "0.5 mL of the product diluted 1 in 20"},
		{[]dose.Administration{diluted(20, 0.5), diluted(20, 1)}, "0.5 to 1 mL of the product diluted 1 in 20"},
		{[]dose.Administration{diluted(20, 0.5), diluted(10, 1)}, "low end 0.5 mL of the product diluted 1 in 20, high end 1 mL of the product diluted 1 in 10"},
		{[]dose.Administration{diluted(20, 0.5), mL(0.1)}, "low end 0.5 mL of the product diluted 1 in 20, high end 0.1 mL"},
		{[]dose.Administration{{Measure: "mL", BelowStep: true}}, "less than can be measured"},
		{[]dose.Administration{{Measure: "tablet", BelowStep: true}, {Measure: "tablet", Measured: 0.5}}, "low end less than the smallest part of a tablet, high end 0.5 tablet"},
		{[]dose.Administration{{Measure: "tablet", Measured: 0.5}, {Measure: "tablet", Measured: 1.5}}, "0.5 to 1.5 tablets"},
	} {
		if got := volumeWords(k.ends); got != k.want {
			t.Errorf("%q, want %q", got, k.want)
		}
	}
}

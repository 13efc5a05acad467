package page

import (
	"bytes"
	"encoding/json"
	"fmt"
	"net/http"
	"net/http/httptest"
	"regexp"
	"strings"
	"sync"
	"testing"
	"unicode"

	"tayra/dose"
	"tayra/reports"
)

// commandRecord is the record that the command makes of a case file.
func commandRecord(t testing.TB, name string, file []byte) []byte {
	t.Helper()
	in, _, err := dose.ReadCase(name, file)
	if err != nil {
		t.Fatal(err)
	}
	c, err := in.Check()
	if err != nil {
		t.Fatal(err)
	}
	ws, err := dose.Draft(c)
	if err != nil {
		t.Fatal(err)
	}
	record, err := reports.JSON(ws)
	if err != nil {
		t.Fatal(err)
	}
	return record
}

// Whatever way a case takes, through the command, through the form, or through
// the form into a file and from there to the command, its record is the same to
// the byte, in the PDF too.
func TestRecordsEqualTheCommands(t *testing.T) {
	for _, name := range caseNames(t) {
		t.Run(name, func(t *testing.T) {
			want := commandRecord(t, name, example(t, name))
			pairs := pairsOfCase(t, name)
			record := post(t, "/record", pairs)
			if record.Code != 200 || !bytes.Equal(record.Body.Bytes(), want) {
				t.Errorf("status %d; the record of the form is not the command's", record.Code)
			}
			file := post(t, "/case", pairs)
			if !bytes.Equal(commandRecord(t, name, file.Body.Bytes()), want) {
				t.Errorf("the command makes another record of the case file that was saved:\n%s", file.Body)
			}
			for _, paper := range []string{"a4", "letter"} {
				sheet := post(t, "/worksheet/"+paper, pairs)
				attached, err := reports.ReadWorksheetPDF(sheet.Body.Bytes())
				if err != nil {
					t.Fatal(err)
				}
				if !bytes.Equal(attached.Record, want) || !bytes.Equal(attached.Case, file.Body.Bytes()) || !strings.EqualFold(attached.Paper.String(), paper) {
					t.Errorf("the worksheet on %s carries another record or case, or is on %s", paper, attached.Paper)
				}
			}
		})
	}
}

func TestFilesAreNamedAfterTheCase(t *testing.T) {
	pairs := pairsOfCase(t, "anteater.yaml")
	for _, tt := range []struct{ number, want string }{
		{"LW-0412", "record-LW-0412.json"},
		{"", "record.json"},
		{`../../"x"; y`, "record-x---y.json"},
		{"Fälle 3/4", "record-F-lle-3-4.json"},
		{"...", "record.json"},
		{strings.Repeat("1", 200), "record-" + strings.Repeat("1", 60) + ".json"},
	} {
		w := post(t, "/record", with(pairs, "case", tt.number))
		if got := w.Header().Get("Content-Disposition"); got != `attachment; filename="`+tt.want+`"` {
			t.Errorf("%q: %s", tt.number, got)
		}
	}
}

// What the worksheet must hold stands on the page in the worksheet's order.
func TestTheDraftInItsOrder(t *testing.T) {
	a := draftOf(t, pairsOfCase(t, "check.yaml"))
	if a.State != "draft" || len(a.Faults) != 0 {
		t.Fatalf("%+v", a)
	}
	text := seen(a.Top + " " + a.Rest)
	record := commandRecord(t, "check.yaml", example(t, "check.yaml"))
	var ws dose.Worksheet
	if err := json.Unmarshal(record, &ws); err != nil {
		t.Fatal(err)
	}
	// The words are the reports' own; their place and the numbers are the page's.
	perKg, amount := wording[func(dose.DoseRange, string) string]("perKgRange"), wording[func(dose.DoseRange, string) string]("amountRange")
	even := "as likely as not " + perKg(ws.Drafted.Range50, "mg/kg") + " " + amount(ws.Drafted.Range50Amount, "mg/kg")
	ninety := "nine times in ten " + perKg(ws.Drafted.Range90, "mg/kg") + " " + amount(ws.Drafted.Range90Amount, "mg/kg")
	at := 0
	for _, s := range []string{
		"case LW-0413, 2026-11-30, prepared by duty veterinarian", "Marisol, giant anteater", "41 kg", "dehydrated",
		"The draft", "examplicillin 334 mg SC every 12 hours (q12h)", "= 6.7 mL of 50 mg/mL (335 mg)",
		even, ninety,
		"This is not a range to choose from.", "Worst caution: WARN.",
		"Cautions: ", "WARN Dehydrated:", "[condition]", "[basis-disagrees]",
		"Proposed regimen: differs from the draft", "1.47 times the drafted",
		"From dog to giant anteater", "The plans side by side", "same interval (drafted) 8.14 mg/kg 334 mg 12 hours 16.3 mg/kg/day equal",
		"If the basis were another", "group, basis used 0.814 8.14 mg/kg", "exponent 0.65", "nine in ten 1.04 to 63.6 mg/kg",
		"How far off the dose may be", "Syringe and course", "Course of 7 days: 14 doses, 93.8 mL of the product in all.",
		"Concentrations at steady state", "mg/L", "Target: 2 mg/L.",
		"Does this drug suit scaling by size?", "Steps", "S = R / M", "0.813996",
		"Sources", "practice protocol 7, invented for this example", "How such predictions have fared", "Signature",
		"DRAFT for a licensed veterinarian's judgement. Not a prescription.", "Local law on off-label use, controlled drugs and food animals applies.", "record ",
	} {
		i := strings.Index(text[at:], s)
		if i < 0 {
			t.Fatalf("%q is missing, or stands too early:\n%s", s, text)
		}
		at += i + len(s)
	}
	if !strings.Contains(text, "record "+reports.Digest(record)) {
		t.Error("the digest is not the record's")
	}
}

// The announcement is read out alone, so it must never be a dose without its
// range.
func TestNoAnnouncementHoldsADose(t *testing.T) {
	number := regexp.MustCompile(`[0-9.]+ ?(mg|mcg|g|mL|units|IU)\b`)
	for _, name := range caseNames(t) {
		if a := draftOf(t, pairsOfCase(t, name)); number.MatchString(a.Say) || a.Say == "" {
			t.Errorf("%s: %q", name, a.Say)
		}
	}
}

// squash keeps the letters and digits of a text: what it says, whatever the marks
// and spaces around it. Raised and lowered letters are as plain ones.
func squash(s string) string {
	s = strings.NewReplacer("⁰", "0", "¹", "1", "²", "2", "³", "3", "⁴", "4", "⁵", "5", "⁶", "6", "⁷", "7", "⁸", "8", "⁹", "9", "ᵇ", "b", "₁", "1", "₀", "0", "ₜ", "t", "ₘ", "m",
		" (drafted)", "", "sources:", "", "²", "").Replace(s)
	return strings.Map(func(r rune) rune {
		if unicode.IsLetter(r) || unicode.IsDigit(r) {
			return unicode.ToLower(r)
		}
		return -1
	}, s)
}

// The page says what the terminal says: every line of it, in the same words.
// What is told apart is only what each has of its own.
func TestThePageSaysWhatTheTerminalSays(t *testing.T) {
	strip := regexp.MustCompile(`\s+[|┼o●].*$|^[0-9., ]+$`) // the rest of a row is drawn
	number := regexp.MustCompile(`^\s*[0-9]+\. `)           // of a step: the page counts by itself
	// A head of a table is words with gaps between them and no number but "90 %".
	isHead := func(line string) bool {
		line = strings.TrimSpace(strings.ReplaceAll(line, "90 %", ""))
		return !strings.ContainsAny(line, "0123456789") && (strings.Contains(line, "  ") || !strings.Contains(line, " "))
	}
	compared := 0
	hold := func(t *testing.T, pairs []pair) {
		file := post(t, "/case", pairs).Body.Bytes()
		var ws dose.Worksheet
		if err := json.Unmarshal(commandRecord(t, "case.yaml", file), &ws); err != nil {
			t.Fatal(err)
		}
		a := draftOf(t, pairs)
		text := squash(seen(a.Top + " " + a.Rest))
		for line := range strings.SplitSeq(string(reports.Text(&ws, reports.TextOptions{Width: 20000, Steps: true})), "\n") {
			said := squash(number.ReplaceAllString(strip.ReplaceAllString(strings.Trim(line, "┃ "), ""), ""))
			switch {
			case isHead(line), strings.HasPrefix(said, "worksheetdraft"), strings.HasPrefix(said, "readthecautions"):
				continue
			}
			compared++
			if !strings.Contains(text, said) {
				t.Errorf("the page lacks %q", strings.Join(strings.Fields(line), " "))
			}
		}
	}
	for _, name := range caseNames(t) {
		t.Run(name, func(t *testing.T) { hold(t, pairsOfCase(t, name)) })
	}
	for name, changes := range map[string][]pair{
		"an infusion":                  {{"models[0].dose", "2 mg/kg/h"}, {"models[0].interval", "infusion"}, {"models[0].tolerated.dose", ""}, {"models[0].tolerated.source", ""}},
		"an infusion under the pump":   {{"models[0].dose", "20 mcg/kg/h"}, {"models[0].interval", "infusion"}, {"models[0].tolerated.dose", ""}, {"models[0].tolerated.source", ""}, {"patient.mass", "20 kg"}},
		"once":                         {{"models[0].interval", "once"}, {"models[0].dose", "5-10 mg/kg"}},
		"a loading dose":               {{"models[0].loading_dose", "20 mg/kg"}},
		"a range and an estimate":      {{"models[0].dose", "8-12 mg/kg"}, {"patient.mass", "36-46 kg"}, {"models[0].loading_dose", "20 mg/kg"}},
		"a dilution":                   {{"models[0].dose", "20 mcg/kg"}, {"models[0].tolerated.dose", ""}, {"models[0].tolerated.source", ""}, {"overrides.below-step", "diluted as proposed, and labelled"}},
		"too little to dilute":         {{"models[0].dose", "1 mcg/kg"}, {"models[0].tolerated.dose", ""}, {"models[0].tolerated.source", ""}},
		"several sites and containers": {{"product.largest_per_site", "2 mL"}, {"product.container", "20 mL"}},
		"tablets":                      {{"product.strength", "250 mg per tablet"}, {"product.step", ""}, {"product.divisible", "quarters"}, {"product.container", "30"}},
		"units":                        {{"models[0].dose", "3000 IU/kg"}, {"product.strength", "20000 IU/mL"}, {"models[0].tolerated.dose", ""}, {"models[0].tolerated.source", ""}},
		"no volume":                    {{"models[0].volume", ""}, {"target.concentration", ""}},
		"a dose in print":              {{"published[0].species", "giant anteater"}, {"published[0].dose", "300 mg"}, {"published[0].interval", "q24h"}, {"published[0].source", "invented"}},
		"a proposed stop":              {{"proposed.dose", "60 mg/kg"}, {"proposed.interval", "q12h"}},
		"a proposed rate":              {{"models[0].dose", "2 mg/kg/h"}, {"models[0].interval", "infusion"}, {"proposed.dose", "3 mg/kg/h"}, {"proposed.interval", "infusion"}, {"models[0].tolerated.dose", ""}, {"models[0].tolerated.source", ""}},
		"one species":                  {{"models[0].species", "giant anteater"}, {"models[0].mass", "30 kg"}},
		"another name":                 {{"patient.species", "Myrmecophaga tridactyla tridactyla"}, {"models[0].species", "Canis familiaris"}},
		"changed thresholds":           {{"method.thresholds.mass-ratio", "2"}, {"method.plan", "same-interval"}, {"method.basis", "measured"}},
	} {
		t.Run(name, func(t *testing.T) {
			pairs := pairsOfCase(t, "anteater.yaml")
			for _, c := range changes {
				pairs = with(pairs, c[0], c[1])
			}
			if a := draftOf(t, pairs); a.State == "faults" {
				t.Fatalf("this is no case: %v", a.Faults)
			}
			hold(t, pairs)
		})
	}
	if compared < 2000 {
		t.Errorf("only %d lines were compared", compared)
	}
}

// After a stop there is no number of a dose anywhere on the page. What would
// have been drafted is known from the case in which the stops are overridden.
func TestAStopShowsNoDose(t *testing.T) {
	stopped := draftOf(t, pairsOfCase(t, "stop.yaml"))
	if stopped.State != "stop" || !strings.HasPrefix(stopped.Say, "STOP: no dose is drafted.") {
		t.Fatalf("%s: %s", stopped.State, stopped.Say)
	}
	text := seen(stopped.Top + stopped.Rest)
	if !strings.Contains(text, "STOP: no dose is drafted") || !strings.Contains(text, "the drug's margin is narrow") {
		t.Errorf("the box does not say why: %s", seen(stopped.Top))
	}
	var ws dose.Worksheet
	if err := json.Unmarshal(commandRecord(t, "override.yaml", example(t, "override.yaml")), &ws); err != nil || ws.Drafted == nil {
		t.Fatal("override.yaml is not drafted", err)
	}
	perKg := wording[func(dose.Pair, string) string]("perKgPair")
	amount := wording[func(dose.Pair, string) string]("amountPair")
	var numbers []string
	for _, p := range ws.Drafts[0].Plans {
		numbers = append(numbers, amount(p.PerAdministration, p.Unit))
		if p.DosePerKg != ws.Drafts[0].DosePerKg { // the same dose is the model's own
			numbers = append(numbers, perKg(p.DosePerKg, p.Unit))
		}
	}
	for _, e := range ws.Exponents {
		numbers = append(numbers, perKg(e.DosePerKg, ws.Drafts[0].Unit))
	}
	numbers = append(numbers, perKg(dose.Pair{ws.Drafted.Range90.Low, ws.Drafted.Range90.High}, ws.Drafted.Unit))
	for _, n := range numbers {
		if regexp.MustCompile(`(^|[^0-9.])` + regexp.QuoteMeta(n)).MatchString(text) {
			t.Errorf("after a stop the page says %s", n)
		}
	}
	// The model's own regimen, the patient's mass, and that of its adults.
	allowed := map[string]bool{"5 mg/kg": true, "980 g": true, "800 g": true}
	for _, m := range regexp.MustCompile(`[0-9][0-9.,]* (?:mg|mcg|g|units|mL)(?:/kg)?\b(?:/h|/day)?`).FindAllString(text, -1) {
		if !allowed[m] {
			t.Errorf("after a stop the page says %s", m)
		}
	}
	if strings.Contains(stopped.Rest, "<circle") {
		t.Error("after a stop doses are drawn")
	}
	var slugs []string
	for _, s := range stopped.Stops {
		slugs = append(slugs, s.Slug)
	}
	if strings.Join(slugs, " ") != "cross-class narrow-margin" {
		t.Errorf("reasons are asked for %q", slugs)
	}
}

func TestAReasonGoesPastAStop(t *testing.T) {
	pairs := pairsOfCase(t, "stop.yaml")
	one := with(pairs, "overrides.narrow-margin", "serum levels will be measured after the second dose")
	if a := draftOf(t, one); a.State != "stop" || len(a.Stops) != 2 {
		t.Errorf("one reason for two stops: %s, %v", a.State, a.Stops)
	}
	both := with(one, "overrides.cross-class", "no dose in any bird was found on 2026-12-08")
	a := draftOf(t, both)
	if a.State != "draft" || len(a.Stops) != 2 {
		t.Fatalf("%s, %v", a.State, a.Stops)
	}
	for _, where := range []string{"Overridden: serum levels will be measured", "Overridden: narrow-margin: serum levels"} {
		if !strings.Contains(seen(a.Rest), where) {
			t.Errorf("%q does not stand on the page", where)
		}
	}
	short := draftOf(t, with(one, "overrides.cross-class", "because"))
	if short.State != "faults" || len(short.Faults) != 1 || short.Faults[0].ID != "f-overrides-cross-class" || !strings.Contains(short.Faults[0].Text, "too short") {
		t.Errorf("%+v", short)
	}
	if strings.Contains(short.Top, "mg") {
		t.Errorf("a fault beside a dose: %s", short.Top)
	}
	same := draftOf(t, with(pairs, "models[0].species", "Ara ararauna"))
	if same.State != "stop" || len(same.Stops) == 0 || !strings.Contains(seen(same.Top), "This stop cannot be overridden") {
		t.Errorf("%s, %v: %s", same.State, same.Stops, seen(same.Top))
	}
	for _, s := range same.Stops {
		if dose.CannotOverride(s.Slug) {
			t.Errorf("a reason is asked for %s", s.Slug)
		}
	}
}

// What is typed is shown as it is, never as a part of the page.
func TestTypedTextIsText(t *testing.T) {
	const evil = `<img src=x onerror="alert(1)">'"&{{.}}</section><script>alert(2)</script>`
	pairs := pairsOfCase(t, "anteater.yaml")
	for _, path := range []string{"case", "prepared_by", "patient.name", "drug.name", "drug.class", "models[0].route", "models[0].source"} {
		pairs = with(pairs, path, evil+" "+path)
	}
	pairs = append(pairs, pair{"published[0].species", "southern tamandua"}, pair{"published[0].dose", "9 mg/kg"}, pair{"published[0].interval", "q12h"}, pair{"published[0].source", evil})
	a := draftOf(t, pairs)
	if a.State != "draft" {
		t.Fatal(a.Say)
	}
	for _, part := range []string{a.Top, a.Rest} {
		if strings.Contains(part, "<img") || strings.Contains(part, "<script") || strings.Contains(part, `onerror="`) {
			t.Error("a text that was typed became a part of the page")
		}
	}
	wrong := draftOf(t, with(pairsOfCase(t, "anteater.yaml"), "patient.species", evil))
	if wrong.State != "faults" || strings.Contains(wrong.Top, "<img") {
		t.Errorf("%s", wrong.Top)
	}
}

// An empty form is no mistake: what is missing is listed, each thing with its
// field, and nothing is called wrong.
func TestAnEmptyForm(t *testing.T) {
	a := draftOf(t, []pair{{"date", "2026-11-30"}, {"models[0].species", ""}, {"patient.mass", "  "}})
	if a.State != "faults" || a.Say != "No draft yet: 8 fields are still to fill in." {
		t.Fatalf("%s: %s", a.State, a.Say)
	}
	for _, f := range a.Faults {
		if !f.Missing || f.ID == "" || f.Label == "" || !strings.Contains(string(emptyForm()), `id="`+f.ID+`"`) {
			t.Errorf("%+v", f)
		}
	}
	if !strings.Contains(seen(a.Top), "Still to fill in") || strings.Contains(seen(a.Top), "Wrong") {
		t.Errorf("%s", seen(a.Top))
	}
}

// Fifty tabs at once: each gets the answer to what stands in it, and no answer
// is another tab's.
func TestManyTabsAtOnce(t *testing.T) {
	srv := httptest.NewUnstartedServer(nil)
	srv.Config.Handler = Handler(srv.Listener.Addr().String())
	Limits(srv.Config)
	srv.Start()
	defer srv.Close()
	pairs := pairsOfCase(t, "anteater.yaml")
	var tabs sync.WaitGroup
	for i := range 50 {
		tabs.Go(func() {
			for k := range 3 {
				mass := fmt.Sprintf("%d.%d kg", 20+i%30, k+1)
				name := fmt.Sprintf("Tab %d", i)
				body, _ := json.Marshal(with(with(pairs, "patient.mass", mass), "patient.name", name))
				response, err := http.Post(srv.URL+"/draft", "application/json", bytes.NewReader(body))
				if err != nil {
					t.Error(err)
					return
				}
				var a drafted
				err = json.NewDecoder(response.Body).Decode(&a)
				response.Body.Close()
				if text := seen(a.Top); err != nil || !strings.Contains(text, name+", giant anteater") || !strings.Contains(text, mass) {
					t.Errorf("tab %d: %v: %s", i, err, text)
				}
			}
		})
	}
	tabs.Wait()
}

func BenchmarkDraft(b *testing.B) {
	h := Handler(testHost)
	for _, name := range []string{"anteater.yaml", "check.yaml", "severalmodels.yaml", "stop.yaml"} {
		body, _ := json.Marshal(pairsOfCase(b, name))
		b.Run(strings.TrimSuffix(name, ".yaml"), func(b *testing.B) {
			for b.Loop() {
				w := httptest.NewRecorder()
				h.ServeHTTP(w, request("POST", "/draft", "application/json", body))
				if w.Code != 200 {
					b.Fatal(w.Body)
				}
			}
		})
	}
}

func BenchmarkWorksheet(b *testing.B) {
	h := Handler(testHost)
	body, _ := json.Marshal(pairsOfCase(b, "anteater.yaml"))
	for b.Loop() {
		h.ServeHTTP(httptest.NewRecorder(), request("POST", "/worksheet/a4", "application/json", body))
	}
}

// BenchmarkFiftyTabs is fifty drafts asked for at the same moment, through
// fifty connections: what it takes until the last has its answer.
func BenchmarkFiftyTabs(b *testing.B) {
	srv := httptest.NewUnstartedServer(nil)
	srv.Config.Handler = Handler(srv.Listener.Addr().String())
	srv.Start()
	defer srv.Close()
	client := &http.Client{Transport: &http.Transport{MaxIdleConnsPerHost: 50}}
	body, _ := json.Marshal(pairsOfCase(b, "anteater.yaml"))
	for b.Loop() {
		var tabs sync.WaitGroup
		for range 50 {
			tabs.Go(func() {
				r, err := client.Post(srv.URL+"/draft", "application/json", bytes.NewReader(body))
				if err != nil {
					b.Error(err)
					return
				}
				r.Body.Close()
			})
		}
		tabs.Wait()
	}
}

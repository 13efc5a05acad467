package reports

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"strings"
	"testing"

	"tayra/dose"
)

func recordOf(t testing.TB, ws *dose.Worksheet) []byte {
	t.Helper()
	b, err := JSON(ws)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// The same worksheet has the same bytes, and a record read back has them too:
// nothing is lost, no number is rounded.
func TestRecordRoundTrip(t *testing.T) {
	for _, e := range examples(t) {
		record := recordOf(t, e.ws)
		if again := recordOf(t, worksheetOf(t, e.name, e.data)); !bytes.Equal(record, again) {
			t.Errorf("%s: drafted twice: %s", e.name, firstDifference(again, record))
		}
		ws, err := ReadRecord(record)
		if err != nil {
			t.Fatalf("%s: %v", e.name, err)
		}
		if again := recordOf(t, ws); !bytes.Equal(record, again) {
			t.Errorf("%s: read back: %s", e.name, firstDifference(again, record))
		}
		// A record holds enough to be computed again.
		c, err := ws.Input.Check()
		if err != nil {
			t.Fatalf("%s: %v", e.name, err)
		}
		drafted, err := dose.Draft(c)
		if err != nil {
			t.Fatalf("%s: %v", e.name, err)
		}
		if again := recordOf(t, drafted); !bytes.Equal(record, again) {
			t.Errorf("%s: computed again from its record: %s", e.name, firstDifference(again, record))
		}
	}
}

func TestRecordForm(t *testing.T) {
	ws := exampleNamed(t, "anteater")
	ws.Drug.Name = "a<b>&c µ \u2028"
	record := recordOf(t, ws)
	for _, want := range []string{"{\n  \"format\": \"tayra-worksheet/1\",\n", `"a<b>&c µ \u2028"`} {
		if !bytes.Contains(record, []byte(want)) {
			t.Errorf("no %q", want)
		}
	}
	if !bytes.HasSuffix(record, []byte("\n}\n")) || bytes.HasSuffix(record, []byte("\n\n")) {
		t.Error("does not end in one line break")
	}
	if bytes.Contains(record, []byte("\t")) || bytes.Contains(record, []byte("\r")) {
		t.Error("holds a tab or a carriage return")
	}
	// 41^0.75·70 kcal/day in W, which no rounding to a few digits survives.
	if want := fmt.Sprintf("%v", 70*math.Pow(41, 0.75)*4184/86400); !bytes.Contains(record, []byte(`"metabolic_rate_w": `+want[:15])) {
		t.Errorf("no rate of %s", want)
	}
}

func TestRecordOfNoNumber(t *testing.T) {
	for _, v := range []float64{math.NaN(), math.Inf(1)} {
		if b, err := JSON(&dose.Worksheet{Patient: dose.PatientRecord{MassKg: v}}); err == nil || b != nil {
			t.Errorf("%v is written: %s", v, b)
		}
	}
}

// The keys that tools may rely on, as the documentation of the interface lists
// them; a dot goes down, [] into the first item of a list.
var reliedOn = []string{
	"format", "case", "date", "patient.species", "patient.common_name", "patient.mass_kg", "patient.metabolic_rate_w", "patient.basis",
	"drafts[].model", "drafts[].model_mass_kg", "drafts[].ratios.mass", "drafts[].ratios.metabolic", "drafts[].ratios.specific",
	"drafts[].plans[].name", "drafts[].plans[].dose_per_kg[]", "drafts[].plans[].unit", "drafts[].plans[].per_administration[]", "drafts[].plans[].interval_h",
	"drafts[].plans[].daily_per_kg[]", "drafts[].plans[].average_ratio", "drafts[].range90.low", "drafts[].range90.high", "drafts[].range90.sd_ln",
	"drafts[].range50.low", "drafts[].range50.high", "drafts[].steps[].title", "drafts[].steps[].formula", "drafts[].steps[].substituted", "drafts[].steps[].value",
	"drafts[].steps[].unit", "drafts[].steps[].source", "drafted.plan", "drafted.chosen_by", "drafted.dose_per_kg[]", "drafted.unit", "drafted.per_administration[]",
	"drafted.interval_h", "drafted.range90.low", "drafted.range90.high", "drafted.range50.low", "drafted.range50.high", "product.volume_ml", "product.dose_given",
	"product.error_percent", "cautions[].slug", "cautions[].level", "cautions[].text", "cautions[].numbers", "overrides",
	"proposed.dose_per_kg[]", "proposed.interval_h", "proposed.ratios.dose", "proposed.ratios.daily", "proposed.ratios.interval", "proposed.ratios.peak",
	"proposed.ratios.trough", "proposed.differs", "curves[].name", "curves[].half_life_h", "curves[].cmax", "curves[].cmin", "curves[].cavg", "curves[].accumulation",
	"curves[].doses_to_90_percent", "curves[].percent_of_interval_above_target",
}

func TestKeysReliedOn(t *testing.T) {
	var record any
	if err := json.Unmarshal(recordOf(t, exampleNamed(t, "check")), &record); err != nil {
		t.Fatal(err)
	}
	for _, path := range reliedOn {
		v := record
		for _, key := range strings.Split(path, ".") {
			name, list := strings.CutSuffix(key, "[]")
			m, _ := v.(map[string]any)
			if v = m[name]; v == nil {
				t.Errorf("%s is not in the record", path)
				break
			}
			if items, ok := v.([]any); list && ok && len(items) > 0 {
				v = items[0]
			} else if list {
				t.Errorf("%s is no list", path)
				break
			}
		}
	}
	var stopped map[string]any
	if err := json.Unmarshal(recordOf(t, exampleNamed(t, "stop")), &stopped); err != nil {
		t.Fatal(err)
	}
	if v, ok := stopped["drafted"]; !ok || v != nil {
		t.Errorf("after a stop drafted is %v", v)
	}
	draft := stopped["drafts"].([]any)[0].(map[string]any)
	if draft["range90"] != nil || len(draft["plans"].([]any)) != 0 {
		t.Error("after a stop a draft carries a dose")
	}
}

// SHA-256 of the empty text and of "abc" are those of FIPS 180-4 (NIST's
// examples).
func TestDigest(t *testing.T) {
	for text, want := range map[string]string{"": "e3b0c44298fc1c14", "abc": "ba7816bf8f01cfea"} {
		if got := Digest([]byte(text)); got != want {
			t.Errorf("%q: %s, want %s", text, got, want)
		}
	}
}

func TestReadRecordErrors(t *testing.T) {
	record := string(recordOf(t, exampleNamed(t, "anteater")))
	swap := func(old, new string) string {
		if !strings.Contains(record, old) {
			t.Fatalf("the record has no %s", old)
		}
		return strings.Replace(record, old, new, 1)
	}
	for _, k := range []struct{ name, record, want string }{
		{"nothing", "", "is empty"},
		{"spaces", " \n", "is empty"},
		{"a PDF", "%PDF-1.7\n", "no record of a worksheet"},
		{"a list", "[]", "no JSON object"},
		{"a text", `"tayra-worksheet/1"`, "no JSON object"},
		{"null", "null", "no JSON object"},
		{"cut short", record[:len(record)/2], "ends too early"},
		{"cut at the end", record[:len(record)-3], "ends too early"},
		{"broken", "{\"format\" \"x\"}", "byte"},
		{"other JSON", `{"name": "x"}`, `it has no "format"`},
		{"another program's", `{"format": "inkdrop/2"}`, `its format is "inkdrop/2"`},
		{"another program's, long", `{"format": "` + strings.Repeat("x", 500) + `"}`, "…"},
		{"a later format", swap(`"tayra-worksheet/1"`, `"tayra-worksheet/2"`), "this program reads tayra-worksheet/1"},
		{"format a number", swap(`"tayra-worksheet/1"`, `1`), `"format" holds a number`},
		{"format null", swap(`"tayra-worksheet/1"`, `null`), `it has no "format"`},
		{"no cautions", swap(`"cautions": `, `"cautiones": `), `it has no "cautions"`},
		{"key in capitals", swap(`"drafted": {`, `"Drafted": {`), `it has no "drafted"`},
		{"key twice", swap(`"case": "LW-0412"`, `"case": "LW-0412", "case": "LW-0413"`), `"case" is given twice`},
		{"key twice, in capitals", swap(`"case": "LW-0412"`, `"case": "LW-0412", "CASE": "LW-0413"`), `"CASE" is given twice`},
		{"key twice, inside", swap(`"mass_kg": 41,`, `"mass_kg": 41, "mass_kg": 4.1,`), `"mass_kg" is given twice`},
		{"no version", swap(`"version": "`+dose.Version+`"`, `"version": ""`), "which program and version"},
		{"no program", swap(`"program": {`, `"program": null, "was": {`), "which program and version"},
		{"a text for a number", swap(`"mass_kg": 41,`, `"mass_kg": "41 kg",`), `"patient.mass_kg" holds a string`},
		{"after the end", record + "{}", "after its end"},
		{"letters after the end", record + "x", "after its end"},
		{"too large a number", swap(`"mass_kg": 41,`, `"mass_kg": 1e999,`), `"patient.mass_kg" holds a number`},
		{"not UTF-8", swap("giant anteater", "giant \xff"), "not UTF-8"},
		{"too deep", strings.Repeat(`{"a":`, 100) + "1" + strings.Repeat("}", 100), "too deep"},
		{"too long", `{"format":"` + strings.Repeat(" ", maxRecord) + `"}`, "over the limit"},
	} {
		ws, err := ReadRecord([]byte(k.record))
		var re *RecordError
		if err == nil || ws != nil || !errors.As(err, &re) {
			t.Errorf("%s: %v, %v", k.name, ws != nil, err)
			continue
		}
		if !strings.Contains(err.Error(), k.want) || re.Remedy == "" && re.err == nil {
			t.Errorf("%s: %q, want %q", k.name, err, k.want)
		}
		for _, not := range []string{"json:", "Go ", "struct", "float64", "dose."} {
			if strings.Contains(err.Error(), not) {
				t.Errorf("%s: names an innard: %q", k.name, err)
			}
		}
		if len(err.Error()) > 300 {
			t.Errorf("%s: %d letters", k.name, len(err.Error()))
		}
	}
}

// A record of an older version lacks a key that came later; a newer one has a
// key that is not known here. Both are read.
func TestReadRecordOfOtherVersions(t *testing.T) {
	ws := exampleNamed(t, "anteater")
	var m map[string]any
	if err := json.Unmarshal(recordOf(t, ws), &m); err != nil {
		t.Fatal(err)
	}
	for _, later := range []string{"suitability", "track_record", "exponents", "bases_unavailable", "statements", "curves_note"} {
		delete(m, later)
	}
	m["added_later"] = map[string]any{"x": 1}
	m["program"].(map[string]any)["version"] = "0.0.9"
	old, err := json.Marshal(m)
	if err != nil {
		t.Fatal(err)
	}
	got, err := ReadRecord(old)
	if err != nil {
		t.Fatal(err)
	}
	if got.Program.Version != "0.0.9" || got.Drafted.DosePerKg != ws.Drafted.DosePerKg || got.Suitability != nil {
		t.Errorf("%+v", got.Program)
	}
	if len(Text(got, TextOptions{Steps: true})) < 1000 {
		t.Error("its text is empty")
	}
}

// FuzzReadRecord: no bytes make the reader panic, and what it reads it writes
// and reads again to the same bytes.
func FuzzReadRecord(f *testing.F) {
	f.Add([]byte(`{"format":"tayra-worksheet/1","program":{"name":"tayra","version":"0.1.0"},"patient":{"mass_kg":41},"drug":{},"drafts":[{"plans":[{"dose_per_kg":[1,2]}]}],"drafted":null,"cautions":[],"overrides":{"a":"b"}}`))
	f.Add([]byte(`{"format":"tayra-worksheet/1","program":{"name":"tayra","version":"0.1.0"},"patient":{},"drug":{},"drafts":null,"drafted":{"dose_per_kg":[1e-300,1e300],"unit":"IU/kg"},"cautions":[{"level":"stop","numbers":{"x":1}}],"overrides":{},"input":{"models":[{"dose":"1 mg"}]}}`))
	f.Add([]byte(`{"format":"tayra-worksheet/2"}`))
	f.Add([]byte(`[{"format":`))
	f.Fuzz(func(t *testing.T, b []byte) {
		ws, err := ReadRecord(b)
		if err != nil {
			if ws != nil || err.Error() == "" {
				t.Fatal("an error with a worksheet, or without words")
			}
			return
		}
		record, err := JSON(ws)
		if err != nil {
			t.Fatal(err)
		}
		again, err := ReadRecord(record)
		if err != nil {
			t.Fatalf("%v\n%s", err, record)
		}
		if second := recordOf(t, again); !bytes.Equal(record, second) {
			t.Fatal(firstDifference(second, record))
		}
		if text := Text(ws, TextOptions{Steps: true}); !harmless(strings.ReplaceAll(string(text), "\n", "")) {
			t.Fatalf("%q", text)
		}
	})
}

func BenchmarkJSON(b *testing.B) {
	ws := exampleNamed(b, "severalmodels")
	for b.Loop() {
		if _, err := JSON(ws); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkReadRecord(b *testing.B) {
	record := recordOf(b, exampleNamed(b, "severalmodels"))
	for b.Loop() {
		if _, err := ReadRecord(record); err != nil {
			b.Fatal(err)
		}
	}
}

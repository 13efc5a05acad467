package page

import (
	"bytes"
	"encoding/json"
	"net/http"
	"net/url"
	"strings"
	"testing"
)

func batchRequest(what, name string, data []byte, shared ...pair) *http.Request {
	r := fileRequest("/batch/"+what+"?paper=a4", name, data)
	if shared == nil {
		shared = []pair{{"date", "2026-11-30"}}
	}
	text, _ := json.Marshal(shared)
	r.Header.Set("X-Shared", url.PathEscape(string(text)))
	return r
}

// batchAnswer takes an answer apart: its last line, and the file behind it.
func batchAnswer(t testing.TB, r *http.Request) (last batchLine, file []byte) {
	t.Helper()
	w := answer(r)
	if w.Code != 200 {
		t.Fatalf("status %d: %s", w.Code, w.Body)
	}
	for !last.Done {
		line, err := w.Body.ReadBytes('\n')
		if err != nil {
			t.Fatal("no last line", err)
		}
		if err := json.Unmarshal(line, &last); err != nil {
			t.Fatal(err)
		}
	}
	return last, w.Body.Bytes()
}

// The result is the command's, to the byte.
func TestAListOfAnimals(t *testing.T) {
	last, file := batchAnswer(t, batchRequest("table", "animals of today.csv", example(t, "batch/animals.csv")))
	if !bytes.Equal(file, example(t, "batch/drafted.csv")) {
		t.Errorf("not the command's table:\n%s", file)
	}
	if last.Failed || last.Name != "animals-of-today-drafted.csv" || last.Say != "10 rows: 7 drafted, 1 stopped, 2 failed." {
		t.Errorf("%+v", last)
	}
	text := seen(last.HTML)
	for _, s := range []string{
		"10 rows: 7 drafted, 1 stopped, 2 failed.",
		"1 LW-0501 Marisol, giant anteater 8.14 mg/kg 1.04 to 63.6 mg/kg 334 mg 12 hours WARN",
		"5.59 to 11.2 mg/kg",
		"5 LW-0505 Rex, dog no dose STOP same-species",
		`6 LW-0506 Nandi, giant anteater Wrong: mass: "41" has no unit; write the number with its unit, like "41 kg"`,
		"19,100 units/kg 3,690 to 99,000 units/kg 459,000 units 72 hours",
		"0.795 mg/kg/h 0.153 to 4.12 mg/kg/h 127 mg/h infusion",
		"not prescriptions",
	} {
		if !strings.Contains(text, s) {
			t.Errorf("the page does not say %q:\n%s", s, text)
		}
	}
}

func TestAListWithDecimalCommas(t *testing.T) {
	table := "species;mass;drug;model_species;model_mass;dose;interval;source\ngiant anteater;41,5 kg;examplicillin;dog;18 kg;10 mg/kg;q12h;invented\n"
	last, _ := batchAnswer(t, batchRequest("table", "t.csv", []byte(table)))
	text := seen(last.HTML)
	if !strings.Contains(text, "giant anteater 8.12 mg/kg") || !strings.Contains(text, "decimal comma") {
		t.Errorf("%s\n%s", last.Say, text)
	}
}

// All worksheets in one file: a page each at least, none for a row at fault.
func TestTheWorksheetsOfAList(t *testing.T) {
	last, file := batchAnswer(t, batchRequest("worksheets", "animals.csv", example(t, "batch/animals.csv")))
	if last.Failed || last.Name != "animals-worksheets.pdf" || !bytes.HasPrefix(file, []byte("%PDF-")) || !strings.HasPrefix(last.Say, "8 worksheets in one file.") {
		t.Errorf("%+v, %d bytes", last, len(file))
	}
}

func TestListsThatCannotBeUsed(t *testing.T) {
	good := "species,mass,drug,model_species,model_mass,dose,interval,source\n"
	for _, tt := range []struct {
		name, what, table string
		shared            []pair
		says              string
	}{
		{"no table", "table", "hello", nil, "list: "},
		{"empty", "table", "", nil, "list: "},
		{"a column missing", "table", "species,mass\ndog,18 kg\n", nil, "model_species"},
		{"no date", "table", good, []pair{{"date", ""}}, "Date: missing"},
		{"a wrong method", "table", good, []pair{{"date", "2026-11-30"}, {"method.q10", "9"}}, "Q10: "},
		{"no worksheet", "worksheets", good + "dog,18,x,cat,4 kg,1 mg/kg,q12h,invented\n", nil, "not one row"},
	} {
		t.Run(tt.name, func(t *testing.T) {
			last, file := batchAnswer(t, batchRequest(tt.what, "list", []byte(tt.table), tt.shared...))
			if !last.Failed || len(file) > 0 || !strings.Contains(last.Say, tt.says) {
				t.Errorf("%+v, %d bytes", last, len(file))
			}
		})
	}
	r := batchRequest("table", "list", []byte(good))
	r.Header.Set("X-Shared", "%5B")
	if w := answer(r); w.Code != http.StatusBadRequest {
		t.Errorf("status %d", w.Code)
	}
	if w := answer(batchRequest("table", "list", make([]byte, maxTable+1))); w.Code != http.StatusRequestEntityTooLarge {
		t.Errorf("status %d", w.Code)
	}
	if w := answer(batchRequest("anything", "list", []byte(good))); w.Code != http.StatusNotFound {
		t.Errorf("status %d for what is not offered", w.Code)
	}
}

// The rows on the page are the first; how many more the file has is said.
func TestALongList(t *testing.T) {
	var table strings.Builder
	table.WriteString("species,mass,drug,model_species,model_mass,dose,interval,source\n")
	for range 700 {
		table.WriteString("giant anteater,41 kg,examplicillin,dog,18 kg,10 mg/kg,q12h,invented\n")
	}
	last, file := batchAnswer(t, batchRequest("table", "list.csv", []byte(table.String())))
	if bytes.Count(file, []byte("\n")) != 701 || !strings.Contains(seen(last.HTML), "650 more rows in the file.") {
		t.Errorf("%d lines; %s", bytes.Count(file, []byte("\n")), last.Say)
	}
}

package page

import (
	"bytes"
	"net/http"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"tayra/dose"
	"tayra/reports"
)

func openedFrom(t testing.TB, name string, data []byte) opened {
	t.Helper()
	w := answer(fileRequest("/open", name, data))
	if w.Header().Get("Content-Type") == refusalType {
		t.Fatalf("%s is refused: %s", name, w.Body)
	}
	return decode[opened](t, w, http.StatusOK)
}

func refusedFrom(t testing.TB, name string, data []byte) refusal {
	t.Helper()
	w := answer(fileRequest("/open", name, data))
	if w.Header().Get("Content-Type") != refusalType {
		t.Fatalf("%s is read: %s", name, w.Body)
	}
	return decode[refusal](t, w, understood)
}

// A case comes back from everything that carries it: the case file, the record,
// the worksheet on paper.
func TestACaseComesBackFromItsFiles(t *testing.T) {
	for _, name := range caseNames(t) {
		t.Run(name, func(t *testing.T) {
			want := pairsOfCase(t, name)
			for kind, data := range map[string][]byte{
				"as it was":     example(t, name),
				"case.yaml":     post(t, "/case", want).Body.Bytes(),
				"record.json":   post(t, "/record", want).Body.Bytes(),
				"worksheet.pdf": post(t, "/worksheet/a4", want).Body.Bytes(),
			} {
				if got := openedFrom(t, kind, data); !reflect.DeepEqual(got.Pairs, want) || !strings.Contains(got.Say, kind) {
					t.Errorf("%s: %q\n%v\nwant\n%v", kind, got.Say, got.Pairs, want)
				}
			}
		})
	}
}

// A file with values that are wrong is opened, and the form says what is wrong
// beside each; one that cannot be read at all is refused in the command's words.
func TestFilesThatAreHostile(t *testing.T) {
	for _, row := range hostileRows(t) {
		name, stage := row[0], row[1]
		t.Run(name, func(t *testing.T) {
			data := example(t, filepath.Join("hostile", name))
			if stage != "read" {
				got := answer(fileRequest("/open", name, data))
				if got.Header().Get("Content-Type") != refusalType {
					return
				}
				said := decode[refusal](t, got, understood)
				in, _, err := dose.ReadCase(name, data)
				if err != nil || len(unplaceable(in)) == 0 || len(said.Lines) == 0 {
					t.Errorf("refused: %+v", said)
				}
				return
			}
			said := refusedFrom(t, name, data)
			if bytes.HasPrefix(data, []byte("%PDF-")) {
				if len(said.Lines) != 1 {
					t.Errorf("%+v", said)
				}
				return
			}
			_, _, err := dose.ReadCase(name, data)
			if err == nil {
				t.Fatal("the command reads it")
			}
			if strings.Join(said.Lines, "\n") != err.Error() || said.Say != name+" was not read." {
				t.Errorf("%q\n%q\nwant\n%q", said.Say, said.Lines, err)
			}
		})
	}
}

func TestFilesThatAreNoCase(t *testing.T) {
	pdf := post(t, "/worksheet/a4", pairsOfCase(t, "anteater.yaml")).Body.Bytes()
	record := post(t, "/record", pairsOfCase(t, "anteater.yaml")).Body.String()
	_, sheets := batchAnswer(t, batchRequest("worksheets", "animals.csv", example(t, "batch/animals.csv")))
	for _, tt := range []struct {
		name string
		data []byte
		says string
	}{
		{"empty", nil, "no case"},
		{"half a worksheet", pdf[:len(pdf)/2], "cut off"},
		{"the worksheets of a list", sheets, "no record"}, // printed, they carry no record
		{"half a record", []byte(record[:len(record)/2]), "no record"},
		{"a record of another format", []byte(strings.Replace(record, dose.Format, "tayra-worksheet/9", 1)), "tayra-worksheet/9"},
		{"a picture", []byte("\x89PNG\r\n\x1a\n\x00\x00"), ""},
		{"a threshold of no name", []byte("method:\n  thresholds: {mass-ration: 20}\n"), "method.thresholds.mass-ration: there is no such field"},
		{"a worksheet of a fitted line", []byte(strings.Replace(record, `"input": {`, `"input": {"fit": {"parameter": "clearance"},`, 1)), "tayra fit"},
	} {
		t.Run(tt.name, func(t *testing.T) {
			said := refusedFrom(t, "file", tt.data)
			if said.Say != "file was not read." || !strings.Contains(strings.Join(said.Lines, "\n"), tt.says) {
				t.Errorf("%+v", said)
			}
		})
	}
}

// Who opens a worksheet of another version, or one whose record was exchanged,
// is told.
func TestWorksheetsThatAreNotWhatTheySeem(t *testing.T) {
	record := post(t, "/record", pairsOfCase(t, "anteater.yaml")).Body.Bytes()
	old := bytes.Replace(record, []byte(`"version": "`+dose.Version+`"`), []byte(`"version": "0.0.1"`), 1)
	if got := openedFrom(t, "old.json", old); !strings.Contains(got.Say, "first drafted by version 0.0.1") {
		t.Error(got.Say)
	}
	if got := openedFrom(t, "new.json", record); strings.Contains(got.Say, "version") {
		t.Error(got.Say)
	}
	pdf := post(t, "/worksheet/a4", pairsOfCase(t, "anteater.yaml")).Body.Bytes()
	if got := openedFrom(t, "sheet.pdf", pdf); strings.Contains(got.Say, "hold the fields") {
		t.Error(got.Say)
	}
	a, err := reports.ReadWorksheetPDF(pdf)
	if err != nil || a.Digest == "" {
		t.Fatal(err)
	}
	exchanged := bytes.ReplaceAll(pdf, utf16(a.Digest), utf16("0123456789abcdef"))
	if bytes.Equal(exchanged, pdf) {
		exchanged = bytes.ReplaceAll(pdf, []byte(a.Digest), []byte("0123456789abcdef"))
	}
	if bytes.Equal(exchanged, pdf) {
		t.Fatal("the digest does not stand in the file in letters")
	}
	if got := openedFrom(t, "sheet.pdf", exchanged); !strings.Contains(got.Say, "hold the fields against the paper") {
		t.Error(got.Say)
	}
}

// utf16 is a text of plain letters as a PDF writes it in its properties.
func utf16(s string) []byte {
	var b []byte
	for i := range len(s) {
		b = append(b, 0, s[i])
	}
	return b
}

func TestTheExampleIsInventedAndWhole(t *testing.T) {
	got := decode[opened](t, post(t, "/example", struct{}{}), http.StatusOK)
	if !strings.Contains(got.Say, "invented") {
		t.Error(got.Say)
	}
	for _, p := range got.Pairs {
		if p[0] == "date" {
			t.Error("the example brings a date of its own")
		}
	}
	a := draftOf(t, append(got.Pairs, pair{"date", "2026-11-30"}))
	if a.State != "draft" || !strings.Contains(a.Rest, "<figure") {
		t.Errorf("%s: %s", a.State, a.Say)
	}
}

func TestFileNamesAreOnlySaid(t *testing.T) {
	for _, name := range []string{"", "  ", "a\nb", strings.Repeat("x", 2000), "%zz"} {
		r := fileRequest("/open", "x", []byte("case: x"))
		r.Header.Set("X-File-Name", strings.ReplaceAll(name, "\n", "%0A"))
		if got := decode[opened](t, answer(r), http.StatusOK); !strings.HasPrefix(got.Say, "the file is filled in") {
			t.Errorf("%.40q: %s", name, got.Say)
		}
	}
}

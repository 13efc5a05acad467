package page

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"net/http"
	"net/url"
	"strconv"
	"strings"
	"unicode"

	"tayra/dose"
	"tayra/reports"
)

// opened fills the form.
type opened struct {
	Say   string `json:"say"`
	Pairs []pair `json:"pairs"`
}

// open reads a case file, or the case of an earlier worksheet or record.
func (s *server) open(w http.ResponseWriter, r *http.Request) {
	name, ok := uploadName(w, r, "the file")
	if !ok {
		return
	}
	data, ok := upload(w, r, name)
	if !ok {
		return
	}
	in, say, err := readFile(name, data)
	if err != nil {
		refuse(w, understood, name+" was not read.", strings.Split(err.Error(), "\n")...)
		return
	}
	if lines := unplaceable(in); len(lines) > 0 {
		refuse(w, understood, name+" was not read.", lines...)
		return
	}
	reply(w, http.StatusOK, opened{Say: say, Pairs: pairsOf(in)})
}

// uploadName is the name that a file has on the user's disk, for messages. Only
// a request of this type is read, which no other page can send unasked.
func uploadName(w http.ResponseWriter, r *http.Request, unnamed string) (string, bool) {
	if r.Header.Get("Content-Type") != "application/octet-stream" {
		refuse(w, http.StatusUnsupportedMediaType, "files are sent as application/octet-stream")
		return "", false
	}
	name, err := url.PathUnescape(r.Header.Get("X-File-Name"))
	if err != nil || strings.TrimSpace(name) == "" || len(name) > 1000 || strings.ContainsFunc(name, unicode.IsControl) {
		name = unnamed
	}
	return name, true
}

// upload reads a file that was dropped or chosen.
func upload(w http.ResponseWriter, r *http.Request, name string) ([]byte, bool) {
	data, err := io.ReadAll(r.Body)
	var large *http.MaxBytesError
	switch {
	case errors.As(err, &large):
		refuse(w, http.StatusRequestEntityTooLarge, name+" is too large: at most "+strconv.FormatInt(large.Limit>>20, 10)+" MB are read.")
	case err != nil:
		refuse(w, http.StatusBadRequest, name+" did not arrive whole.")
	}
	return data, err == nil
}

// readFile takes a file for what it is by its first bytes, whatever its name.
func readFile(name string, data []byte) (in *dose.CaseInput, say string, err error) {
	begin := bytes.TrimLeft(data, "\ufeff \t\r\n")
	var ws *dose.Worksheet
	switch {
	case bytes.HasPrefix(data, []byte("%PDF-")):
		ws, say, err = readWorksheet(data)
	case bytes.HasPrefix(begin, []byte("{")) && bytes.Contains(data, []byte(`"format"`)):
		ws, err = reports.ReadRecord(data)
	default:
		var warnings []dose.Warning
		in, warnings, err = dose.ReadCase(name, data)
		say = name + " is filled in."
		for _, w := range warnings {
			say += " Line " + strconv.Itoa(w.Line) + ": " + w.Text + "."
		}
		return in, say, err
	}
	switch {
	case err != nil:
		return nil, "", err
	case ws.Input == nil:
		return nil, "", errors.New("the record holds no case as it was typed")
	case ws.Input.Fit != nil:
		return nil, "", errors.New("the worksheet was drafted from a line fitted to data; `tayra fit` drafts it again")
	}
	say = "The case of " + name + " is filled in, and drafted anew." + say
	if ws.Program.Version != dose.Version || ws.Program.Tables != dose.TablesDigest {
		say += " It was first drafted by version " + ws.Program.Version + ", tables " + ws.Program.Tables + "; this is version " + dose.Version + ", tables " + dose.TablesDigest + "."
	}
	return ws.Input, say, nil
}

// readWorksheet takes the record out of a worksheet on paper.
func readWorksheet(data []byte) (ws *dose.Worksheet, say string, err error) {
	a, err := reports.ReadWorksheetPDF(data)
	if err != nil {
		return nil, "", err
	}
	if ws, err = reports.ReadRecord(a.Record); err != nil {
		return nil, "", err
	}
	if a.Digest != "" && a.Digest != reports.Digest(a.Record) {
		say = " The record in the file is not the one that its pages were drawn from: hold the fields against the paper."
	}
	return ws, say, nil
}

// unplaceable lists what a case holds and the form has no field for: it would be
// lost without a word.
func unplaceable(in *dose.CaseInput) []string {
	var lines []string
	for _, p := range pairsOf(in) {
		if _, ok := onForm(p[0]); !ok {
			lines = append(lines, p[0]+": there is no such field on the form")
		}
	}
	for i, e := range in.Method.Intervals {
		if strings.Contains(e.Text, ",") {
			lines = append(lines, fmt.Sprintf("method.intervals[%d]: %q is one item with a comma in it; write a list, as in [6 h, 8 h]", i, e.Text))
		}
	}
	return lines
}

// example fills in the case that `tayra new` writes; the date stays the form's.
func (s *server) example(w http.ResponseWriter, _ *http.Request) {
	in, _, err := dose.ReadCase("the example", dose.CaseTemplate("2026-11-30"))
	if err != nil {
		http.Error(w, err.Error(), http.StatusInternalServerError)
		return
	}
	in.Date = dose.Entry{}
	reply(w, http.StatusOK, opened{Say: "The Larkmoor example is filled in. Animal, drug and doses are invented.", Pairs: pairsOf(in)})
}

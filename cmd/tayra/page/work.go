package page

import (
	"encoding/json"
	"errors"
	"net/http"
	"strconv"

	"tayra/dose"
)

// work is a case as worked out from the form.
type work struct {
	in     *dose.CaseInput
	file   []byte          // the case as a file
	ws     *dose.Worksheet // nil when there are faults
	faults dose.InputErrors
}

// workOut takes what is typed the way of a case file: written as one, read back
// from it, checked, drafted.
func workOut(pairs []pair) (*work, error) {
	in, err := caseOf(pairs)
	if err != nil {
		return nil, err
	}
	w := &work{in: in, file: dose.WriteCase(in)}
	read, _, err := dose.ReadCase("", w.file)
	if err == nil {
		w.in = read
		var c *dose.Case
		if c, err = read.Check(); err == nil {
			w.ws, err = dose.Draft(c)
		}
	}
	if err != nil && !errors.As(err, &w.faults) {
		return nil, err
	}
	return w, nil
}

// pairsFrom reads the fields of the form as page.js sends them: a list of
// [path, text]. Only a request of that type is read, which no other page can
// send without asking first.
func pairsFrom(w http.ResponseWriter, r *http.Request) (pairs []pair, ok bool) {
	if r.Header.Get("Content-Type") != "application/json" {
		refuse(w, http.StatusUnsupportedMediaType, "the fields of the form are sent as application/json")
		return nil, false
	}
	d := json.NewDecoder(r.Body)
	err := d.Decode(&pairs)
	if err == nil && d.More() {
		err = errors.New("something follows them")
	}
	var large *http.MaxBytesError
	switch {
	case errors.As(err, &large):
		refuse(w, http.StatusRequestEntityTooLarge, "the case is too large: at most "+strconv.FormatInt(large.Limit, 10)+" bytes are read")
	case err != nil:
		refuse(w, http.StatusBadRequest, "the fields of the form cannot be read: "+err.Error())
	default:
		return pairs, true
	}
	return nil, false
}

// workFrom works out the case that a request carries.
func workFrom(w http.ResponseWriter, r *http.Request) (*work, bool) {
	pairs, ok := pairsFrom(w, r)
	if !ok {
		return nil, false
	}
	c, err := workOut(pairs)
	if err != nil {
		refuse(w, http.StatusBadRequest, "the case cannot be worked out: "+err.Error())
		return nil, false
	}
	return c, true
}

// refusal is an answer that the page announces and shows.
type refusal struct {
	Say   string   `json:"say"`
	Lines []string `json:"lines,omitempty"`
}

// understood is the status of a refusal that a user meets in common use, such
// as a case file with a slip in it. It is no fault of the request, and a browser
// would write one to its console.
const understood = http.StatusOK

// refusalType is the type of every refusal, by which the page knows it.
const refusalType = "application/problem+json"

func refuse(w http.ResponseWriter, status int, say string, lines ...string) {
	w.Header().Set("Content-Type", refusalType)
	w.WriteHeader(status)
	json.NewEncoder(w).Encode(refusal{Say: say, Lines: lines})
}

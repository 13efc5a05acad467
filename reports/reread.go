package reports

import (
	"encoding/json"
	"errors"
	"fmt"
	"strings"

	"tayra/dose"
)

// Verdict says what became of a worksheet that was read back.
type Verdict string

// Verdicts. Only Differs is a finding.
const (
	Same    Verdict = "same"            // recomputed and, by the version that wrote it, drawn again
	Version Verdict = "version-differs" // the same results by another version of program or tables
	Differs Verdict = "differs"
)

// Rereading is a worksheet read back: its record worked out again and compared,
// its pages drawn again and compared. Differing is no judgement on either.
type Rereading struct {
	Verdict  Verdict `json:"verdict"`
	Case     string  `json:"case"`
	Date     string  `json:"date"`
	Species  string  `json:"species"`
	Drug     string  `json:"drug"`
	Prepared string  `json:"prepared_by"`

	Program dose.Program `json:"program"`       // that wrote the worksheet
	Now     dose.Program `json:"program_now"`   // that reads it
	Digest  string       `json:"record_digest"` // of the record that it carries
	Stated  string       `json:"stated_digest"` // of the record that it was drawn from, as it states; "" when it states none

	Pages       string            `json:"pages"`            // how the pages compare, or why they do not
	Why         []string          `json:"why"`              // sentences, gravest first
	Differences []dose.Difference `json:"differences"`      // of the record as it was and as it is recomputed
	CaseFile    []dose.Difference `json:"case_differences"` // of the inputs in the record and in the case file beside it

	Worksheet *dose.Worksheet `json:"-"` // worked out again; nil when it could not be
}

// Reread takes the record out of a worksheet on paper, works its inputs out
// again and compares: numbers to [dose.Tolerance] and texts exactly, the case
// file beside it with the inputs, the stated digest with the record's. When the
// worksheet is of this version of program and tables its pages are drawn again
// and compared too, byte for byte.
//
// The error is a [*WorksheetError] or a [*RecordError]: the file is no worksheet
// that can be read back. A difference is no error.
func Reread(data []byte) (*Rereading, error) {
	a, err := ReadWorksheetPDF(data)
	if err != nil {
		return nil, err
	}
	was, err := ReadRecord(a.Record)
	if err != nil {
		return nil, err
	}
	r := &Rereading{
		Case: was.Case, Date: was.Date, Species: was.Patient.Species, Drug: was.Drug.Name, Prepared: was.PreparedBy,
		Program: was.Program, Now: dose.Program{Name: "tayra", Version: dose.Version, Tables: dose.TablesDigest},
		Digest: Digest(a.Record), Stated: a.Digest,
		Why: []string{}, Differences: []dose.Difference{}, CaseFile: []dose.Difference{},
	}
	if err := r.compare(a, was); err != nil {
		return nil, err
	}
	r.compareCase(a, was)
	r.comparePages(data, a)
	r.judge()
	return r, nil
}

// sameVersion says whether the same program and tables wrote the worksheet.
func (r *Rereading) sameVersion() bool { return r.Program == r.Now }

func (r *Rereading) why(format string, args ...any) {
	r.Why = append(r.Why, fmt.Sprintf(format, args...))
}

// compare works the record out again and lists where the two differ.
func (r *Rereading) compare(a *Attached, was *dose.Worksheet) error {
	now, err := dose.Recompute(was)
	var faults dose.InputErrors
	if errors.As(err, &faults) {
		for _, f := range faults {
			r.Differences = append(r.Differences, dose.Difference{Path: below("input", f.Field), Was: quoted("taken by the program that wrote it"), Now: quoted(f.Problem)})
		}
		return nil
	}
	if err != nil {
		return err
	}
	record, err := JSON(now)
	if err != nil {
		return err
	}
	found, err := dose.Compare(a.Record, record)
	if err != nil {
		return &RecordError{Problem: "the record was changed or damaged: " + err.Error(), err: err}
	}
	r.Worksheet = now
	r.Differences = append(r.Differences, dose.Without(found, "program.version", "program.tables")...)
	return nil
}

func below(section, field string) string {
	if field == "" || field == section {
		return section
	}
	return section + "." + field
}

func quoted(s string) json.RawMessage {
	b, _ := json.Marshal(s) // a text can always be written
	return b
}

// compareCase holds the case file that is attached beside the record against
// the inputs in the record.
func (r *Rereading) compareCase(a *Attached, was *dose.Worksheet) {
	if a.Case == nil {
		r.why("The case file that a worksheet carries beside its record is missing.")
		r.Verdict = Differs
		return
	}
	typed, _, err := dose.ReadCase(attachedCase, a.Case)
	if err != nil {
		first, _, _ := strings.Cut(err.Error(), "\n")
		r.why("The attached case file cannot be read: %s.", strings.TrimSuffix(first, "."))
		r.Verdict = Differs
		return
	}
	inRecord := *was.Input
	inRecord.Fit = nil // a table of data is no part of a case file
	x, err1 := json.Marshal(&inRecord)
	y, err2 := json.Marshal(typed)
	if err1 != nil || err2 != nil {
		return // neither can hold what JSON has no letters for
	}
	if found, err := dose.Compare(x, y); err == nil {
		r.CaseFile = append(r.CaseFile, found...)
	}
}

// comparePages draws the pages again, when this is the version that wrote them.
func (r *Rereading) comparePages(data []byte, a *Attached) {
	switch {
	case !r.sameVersion():
		r.Pages = "The pages were not compared: another version drew them, and only that one draws them alike."
		return
	case r.Worksheet == nil:
		r.Pages = "The pages were not compared: there is nothing to draw them from."
		return
	}
	drawn, err := PDF(r.Worksheet, PDFOptions{Paper: a.Paper, Case: a.Case})
	if err != nil {
		r.Pages = "The pages could not be drawn again: " + err.Error() + "."
		r.Verdict = Differs
		return
	}
	var ok bool
	if ok, r.Pages = samePages(data, drawn, a.Producer); !ok {
		r.Verdict = Differs
	}
}

// judge says why things differ, as far as that can be told.
func (r *Rereading) judge() {
	if len(r.Differences) > 0 || len(r.CaseFile) > 0 {
		r.Verdict = Differs
	}
	edited := r.Stated != "" && r.Stated != r.Digest
	why := []string{}
	say := func(format string, args ...any) { why = append(why, fmt.Sprintf(format, args...)) }
	switch {
	case edited:
		r.Verdict = Differs
		say("The record or the document was changed after it was written: the document states the record %s, and the record that it carries is %s.", clip(r.Stated), r.Digest)
	case r.Stated == "":
		r.Verdict = Differs
		say("The document does not state which record it was drawn from, as every worksheet does: it was changed or saved again by another program.")
	}
	if len(r.CaseFile) > 0 {
		say("The inputs in the record are not those of the case file beside it: one of the two was changed.")
	}
	if r.Program.Version != r.Now.Version {
		say("Another version of the program wrote it: %s then, %s now.%s", clip(r.Program.Version), r.Now.Version, may(r.Differences))
	}
	if r.Program.Tables != r.Now.Tables {
		say("Other tables were used: %s then, %s now.%s", clip(r.Program.Tables), r.Now.Tables, may(r.Differences))
	}
	if r.sameVersion() && len(r.Differences) > 0 && !edited {
		say("This version with these tables does not give this record: it was changed together with the digest that the document states, or another build of the program wrote it.")
	}
	r.Why = append(why, r.Why...)
	switch {
	case r.Verdict == Differs:
	case r.sameVersion():
		r.Verdict = Same
	default:
		r.Verdict = Version
	}
}

// may says that a version can be the reason for differences, when there are any.
func may(found []dose.Difference) string {
	if len(found) == 0 {
		return " The results are the same."
	}
	return " The differences may come from that."
}

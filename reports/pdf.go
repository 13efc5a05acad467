// The worksheet on paper is read by a tired clinician beside a restrained
// animal, signed, filed, and read again years later by somebody who asks why.
// So the first page can be acted on alone: the draft with its ranges, every
// caution, the foot. No caution is smaller, paler or later than the number it
// speaks about. After a stop no number of a drafted dose stands anywhere. Marks
// and words tell what colour might, and there is no colour.

package reports

import (
	"fmt"
	"strings"
	"time"

	"tayra/dose"
)

// PDFOptions says how a worksheet is set on paper. The zero value is A4.
type PDFOptions struct {
	Paper Paper
	// Case is the case file as it was read. It is attached as case.yaml; when
	// nil, the case is written anew from the worksheet's input.
	Case []byte
}

// The names of the files that a worksheet carries.
const (
	attachedRecord = "record.json"
	attachedCase   = "case.yaml"
)

// PDF sets a worksheet on paper: a PDF 1.7 file dated by the worksheet, with
// the record and the case attached, so that a sheet found in a case record can
// be read back, recomputed and compared. The same worksheet and options give
// the same bytes.
//
// A text that cannot be printed is a [*LetterError] that names the key of the
// case file. Any other error is of a worksheet that this program did not draft,
// such as one without a date.
func PDF(ws *dose.Worksheet, o PDFOptions) ([]byte, error) {
	if err := checkInput(ws.Input); err != nil {
		return nil, err
	}
	date, err := time.ParseInLocation(time.DateOnly, ws.Date, time.UTC)
	if err != nil {
		return nil, fmt.Errorf("the worksheet's date, %q, is not a date as in 2026-11-30", ws.Date)
	}
	record, err := JSON(ws)
	if err != nil {
		return nil, err
	}
	caseFile := o.Case
	if caseFile == nil && ws.Input != nil {
		caseFile = dose.WriteCase(ws.Input)
	}
	s := newSheet(ws, o.Paper, Digest(record))
	s.whole()
	pr := properties{
		title:    "Worksheet " + caseWords(ws) + ", " + onOneLine(patientName(&ws.Patient)),
		subject:  "Draft of a starting dose of " + onOneLine(ws.Drug.Name) + " for a licensed veterinarian's judgement; not a prescription",
		keywords: strings.Join([]string{ws.Patient.Species, onOneLine(ws.Drug.Name), "allometric scaling", "draft", "record " + Digest(record)}, ", "),
		author:   onOneLine(ws.PreparedBy),
		producer: producer(),
		date:     date,
		attached: []attachment{{attachedRecord, "the record of this worksheet, " + dose.Format, record}},
	}
	if caseFile != nil {
		pr.attached = append(pr.attached, attachment{attachedCase, "the case as it was written", caseFile})
	}
	return s.doc.render(pr)
}

// sheet is a worksheet on its way to paper.
type sheet struct {
	doc    *document
	f      *flow
	ws     *dose.Worksheet
	from   *dose.ModelDraft // what the draft was taken from; nil in a damaged record
	unit   string           // of a dose per kg
	digest string           // of the record
}

func newSheet(ws *dose.Worksheet, p Paper, digest string) *sheet {
	d := newDocument(p)
	s := &sheet{doc: d, f: d.body, ws: ws, from: draftedModel(ws), unit: "mg/kg", digest: digest}
	if s.from != nil {
		s.unit = s.from.Unit
	}
	d.head, d.foot = s.head, s.foot
	return s
}

// whole sets every part, in the order in which they are read.
func (s *sheet) whole() {
	if s.ws.Drafted != nil {
		s.draftBox()
	} else {
		s.stopBox()
	}
	s.cautions()
	s.publishedDoses()
	s.proposed()
	s.theCase()
	s.plans()
	s.severalModels()
	s.fit()
	s.otherBases()
	s.temperatures()
	s.rates()
	s.syringe()
	s.concentrations()
	s.howFarOff()
	s.suitability()
	s.trackRecord()
	s.steps()
	s.sources()
	s.signature()
}

// mostTogether is how many rows of a table are kept on one page. A longer table
// runs over, with its head repeated.
const mostTogether = 10

// table adds a table, on one page if it is short.
func (s *sheet) table(t pageTable) {
	if len(t.rows) > mostTogether {
		s.f.table(t)
		return
	}
	s.f.together(func(f *flow) { f.table(t) })
}

// caseWords names the case.
func caseWords(ws *dose.Worksheet) string {
	if ws.Case == "" {
		return "without a case number"
	}
	return onOneLine(ws.Case)
}

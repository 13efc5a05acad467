package reports

import (
	"fmt"
	"time"

	"tayra/dose"
)

// PDFBundle is the worksheets of many animals in one file, to be printed: each
// begins on a page of its own and has a bookmark. The records are not attached;
// a worksheet that is to be read back is kept as a file of its own.
type PDFBundle struct {
	paper   Paper
	pen     *pen
	date    string
	records string // digests, for the digest of the whole
	sheets  int
	pages   int
}

// LaidOut is a worksheet dealt out on pages, not yet drawn.
type LaidOut struct {
	layout layout
	title  string
	date   string
	digest string
}

// NewPDFBundle is an empty bundle.
func NewPDFBundle(paper Paper) *PDFBundle {
	return &PDFBundle{paper: paper, pen: newPen(paper.Size())}
}

// LayOut breaks a worksheet into pages. It may be called from several
// goroutines. Its errors are those of [PDF].
func (b *PDFBundle) LayOut(ws *dose.Worksheet) (*LaidOut, error) {
	if err := checkInput(ws.Input); err != nil {
		return nil, err
	}
	record, err := JSON(ws)
	if err != nil {
		return nil, err
	}
	l := &LaidOut{date: ws.Date, digest: Digest(record)}
	words := onOneLine(patientName(&ws.Patient))
	if ws.Case != "" {
		words = onOneLine(ws.Case) + ", " + words
	}
	if l.title, err = CheckText("bookmark", words); err != nil {
		return nil, err
	}
	s := newSheet(ws, b.paper, l.digest)
	s.whole()
	if s.doc.err != nil {
		return nil, s.doc.err
	}
	_, height := b.paper.Size()
	l.layout, err = s.doc.layOut(height)
	return l, err
}

// Add draws a worksheet behind those that are there.
func (b *PDFBundle) Add(l *LaidOut) {
	_, height := b.paper.Size()
	for i, page := range l.layout.pages {
		b.pen.page()
		if i == 0 {
			b.pen.setFont(sizeBody, false) // the library writes the bookmark in its encoding
			b.pen.pdf.Bookmark(l.title, 0, 0)
		}
		b.pen.stacked(l.layout.heads[i], marginY)
		b.pen.placed(page, l.layout.top)
		b.pen.stacked(l.layout.feet[i], height-marginY-stack(l.layout.feet[i]))
	}
	b.date = l.date
	b.records += l.digest
	b.sheets++
	b.pages += len(l.layout.pages)
}

// Sheets is how many worksheets are in it.
func (b *PDFBundle) Sheets() int { return b.sheets }

// Bytes ends the bundle and gives the file. The same worksheets in the same
// order give the same bytes.
func (b *PDFBundle) Bytes() ([]byte, error) {
	if b.sheets == 0 {
		return nil, fmt.Errorf("no worksheet to be printed")
	}
	date, err := time.ParseInLocation(time.DateOnly, b.date, time.UTC)
	if err != nil {
		return nil, fmt.Errorf("the worksheets' date, %q, is not a date as in 2026-11-30", b.date)
	}
	return b.pen.finish(properties{
		title:    fmt.Sprintf("%d worksheets of %s", b.sheets, b.date),
		subject:  "Drafts of starting doses for a licensed veterinarian's judgement; not prescriptions",
		keywords: "allometric scaling, draft, records " + Digest([]byte(b.records)),
		producer: producer(),
		date:     date,
	})
}

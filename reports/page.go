package reports

import (
	"fmt"
	"strings"
)

// The paper writers work in three steps that never mix. A flow of blocks
// (pageblock.go, pagetable.go) breaks every text into lines and turns every
// block into bands, thin slices of the page that are never split. Then
// pageflow.go deals the bands out on pages, so the number of pages is known
// before anything is drawn. Then pagedraw.go draws each page once.
//
// All lengths are points (1/72 inch); y runs downwards.

// Paper is a size of paper.
type Paper int

const (
	A4     Paper = iota // 210 × 297 mm
	Letter              // 8.5 × 11 inches
)

// Size returns the width and height in points, upright.
func (p Paper) Size() (width, height float64) {
	if p == Letter {
		return 612, 792
	}
	return 595.28, 841.89
}

// String returns "A4" or "Letter".
func (p Paper) String() string {
	if p == Letter {
		return "Letter"
	}
	return "A4"
}

// ParsePaper reads the name of a paper size, in capitals or not.
func ParsePaper(name string) (Paper, error) {
	switch strings.ToLower(name) {
	case "a4":
		return A4, nil
	case "letter":
		return Letter, nil
	}
	return A4, fmt.Errorf("paper %q is not known; write A4 or Letter", name)
}

// The measures of a page. The outer margin is wider than any office printer
// needs, so that a copier that shifts the sheet cuts nothing off.
const (
	marginX = 42.5 // 15 mm
	marginY = 34.0 // 12 mm
	marginA = 6.0  // air between head and body, and body and foot

	sizeDraft = 15.0 // the one line to be read from afar
	sizeTitle = 13.0
	sizeHead  = 10.5
	sizeBody  = 9.0
	sizeSmall = 8.0 // nothing on the sheet is smaller

	lineHeight = 1.32 // of the size; DejaVu Sans itself is 1.164 high
	lineBase   = 1.0  // the base line, below the top of the line

	rulerHair   = 0.4 // a photocopy keeps it
	rulerThin   = 0.6
	rulerHeavy  = 1.2
	gapBlock    = 5.0
	gapHeading  = 11.0
	gapColumn   = 9.0
	indentMark  = 15.0 // of text beside a mark or a box to tick
	tickSide    = 8.5
	minimumBody = 200.0 // between head and foot
)

// margin draws what stands at the top or the bottom of a page. It is called
// for each page, after the number of pages is known.
type margin func(f *flow, page, pages int)

// document is a sheaf of pages in the making. Its methods never fail: the
// first error is kept and returned by render.
type document struct {
	paper Paper
	body  *flow

	head, foot margin

	breaker breaker
	where   string // names the text in a LetterError
	err     error
}

// newDocument returns an empty document. Draw on its body, then call render.
func newDocument(p Paper) *document {
	d := &document{paper: p, where: "worksheet"}
	w, _ := p.Size()
	d.body = &flow{doc: d, x: marginX, width: w - 2*marginX}
	return d
}

// naming sets how the texts that follow are named if one cannot be printed.
func (d *document) naming(where string) { d.where = where }

// fail keeps the first error.
func (d *document) fail(err error) {
	if d.err == nil {
		d.err = err
	}
}

// admit passes each text through CheckText. A text that fails is emptied, so
// that laying out can go on.
func (d *document) admit(runs []run) []run {
	for i := range runs {
		if isPlain(runs[i].text) {
			continue
		}
		text, err := CheckText(d.where, onOneLine(runs[i].text))
		if err != nil {
			d.fail(err)
		}
		if text != runs[i].text {
			runs = append([]run(nil), runs...)
			runs[i].text = text
		}
	}
	return runs
}

// band is a slice of the page, as wide as the text, that is never split.
type band struct {
	gap    float64 // space above it, dropped at the top of a page
	height float64
	keep   bool // stays on the page of the next band

	labels []placedText
	shapes []shape
	figure *figureArea
	frame  *frame
	head   *tableHead

	ruleAbove float64 // thickness; not drawn right under a repeated table head
	ruleBelow float64
	ruleX     float64
	ruleWidth float64
}

// placedText is one stretch of text in one size and weight. x is counted from the
// left edge of the page, base from the top of the band.
type placedText struct {
	x, base, size float64
	bold          bool
	text          string
}

// frame is a box drawn around all bands that name it.
type frame struct {
	x, width, line float64
}

// tableHead is what is set again at the top when a table runs over a page.
type tableHead struct {
	bands  []band
	height float64
}

package reports

import (
	"slices"

	"github.com/jung-kurt/gofpdf"
)

// pen draws on one document of the PDF library. It remembers what is set, for
// each setting is written into the page.
type pen struct {
	pdf *gofpdf.Fpdf
	err error // the first failure of a figure

	size         float64
	bold         bool
	line         float64
	stroke, fill [3]int
	dashes       []float64
	offset       float64
	images       int
}

const fontFamily = "sans"

// newPen starts a document whose pages are width by height points.
func newPen(width, height float64) *pen {
	pdf := gofpdf.NewCustom(&gofpdf.InitType{UnitStr: "pt", Size: gofpdf.SizeType{Wd: width, Ht: height}})
	pdf.SetMargins(0, 0, 0)
	pdf.SetAutoPageBreak(false, 0)
	pdf.SetCatalogSort(true)
	// The library writes into these bytes: each document has its own.
	pdf.AddUTF8FontFromBytes(fontFamily, "", []byte(sansRegular.data))
	pdf.AddUTF8FontFromBytes(fontFamily, "B", []byte(sansBold.data))
	return &pen{pdf: pdf}
}

// page starts a page. The library carries colours and dashes over to it.
func (p *pen) page() {
	p.pdf.AddPage()
	p.size, p.line = 0, -1
}

// fail keeps the first failure.
func (p *pen) fail(err error) {
	if p.err == nil {
		p.err = err
	}
}

func (p *pen) setFont(size float64, bold bool) {
	if p.size == size && p.bold == bold {
		return
	}
	style := ""
	if bold {
		style = "B"
	}
	p.pdf.SetFont(fontFamily, style, size)
	p.size, p.bold = size, bold
}

func (p *pen) text(x, base, size float64, bold bool, s string) {
	p.setFont(size, bold)
	p.pdf.Text(x, base, s)
}

func (p *pen) lineWidth(w float64) {
	if p.line != w {
		p.pdf.SetLineWidth(w)
		p.line = w
	}
}

func (p *pen) strokeColor(c [3]int) {
	if p.stroke != c {
		p.pdf.SetDrawColor(c[0], c[1], c[2])
		p.stroke = c
	}
}

// fillColor sets the colour of areas and of text. The library wraps every text
// in a colour change of its own unless the two are the same.
func (p *pen) fillColor(c [3]int) {
	if p.fill != c {
		p.pdf.SetFillColor(c[0], c[1], c[2])
		p.pdf.SetTextColor(c[0], c[1], c[2])
		p.fill = c
	}
}

func (p *pen) dash(dashes []float64, offset float64) {
	if !slices.Equal(p.dashes, dashes) || p.offset != offset {
		p.pdf.SetDashPattern(dashes, offset)
		p.dashes, p.offset = slices.Clone(dashes), offset
	}
}

func (p *pen) rule(x, y, w, thickness float64) {
	p.lineWidth(thickness)
	p.pdf.Line(x, y, x+w, y)
}

// path draws a closed polygon from its corners.
func (p *pen) path(fill bool, xy ...float64) {
	p.pdf.MoveTo(xy[0], xy[1])
	for i := 2; i < len(xy); i += 2 {
		p.pdf.LineTo(xy[i], xy[i+1])
	}
	p.pdf.ClosePath()
	if fill {
		p.pdf.DrawPath("F")
	} else {
		p.pdf.DrawPath("D")
	}
}

// band draws a band whose top lies at the height top of the page.
func (p *pen) band(s *band, top float64) {
	for _, shape := range s.shapes {
		shape.draw(p, top)
	}
	for _, l := range s.labels {
		p.text(l.x, top+l.base, l.size, l.bold, l.text)
	}
	if s.ruleBelow > 0 {
		p.rule(s.ruleX, top+s.height, s.ruleWidth, s.ruleBelow)
	}
	if s.figure != nil {
		c := newCanvas(p, s.figure.x, top, s.figure.width, s.height)
		s.figure.draw(c)
		c.done()
	}
}

// stacked draws a head or a foot whose top lies at the height top.
func (p *pen) stacked(bands []band, top float64) {
	for i := range bands {
		s := &bands[i]
		if i > 0 {
			top += s.gap
		}
		if s.ruleAbove > 0 {
			p.rule(s.ruleX, top, s.ruleWidth, s.ruleAbove)
		}
		p.band(s, top)
		top += s.height
	}
}

// placed draws the body of a page.
func (p *pen) placed(page []placing, top float64) {
	for i := 0; i < len(page); i++ {
		s, y := page[i].band, top+page[i].y
		if s.ruleAbove > 0 && i > 0 && !page[i-1].band.isHeadOf(s) {
			p.rule(s.ruleX, y, s.ruleWidth, s.ruleAbove)
		}
		p.band(s, y)
		// A frame that runs over a page is closed on each: an open end would
		// not show that the box goes on.
		if f := s.frame; f != nil && (i == 0 || page[i-1].band.frame != f) {
			last := i
			for last+1 < len(page) && page[last+1].band.frame == f {
				last++
			}
			bottom := top + page[last].y + page[last].band.height
			p.lineWidth(f.line)
			p.pdf.Rect(f.x, y, f.width, bottom-y, "D")
		}
	}
}

// isHeadOf reports whether s is part of the repeated head of the table that
// the band row belongs to.
func (s *band) isHeadOf(row *band) bool {
	if row.head == nil {
		return false
	}
	for i := range row.head.bands {
		if s == &row.head.bands[i] {
			return true
		}
	}
	return false
}

package reports

import "math"

// mark is a sign of its own shape for each level of caution. The shapes are
// drawn as paths: no font of the kind has a filled octagon, and a path
// survives a bad copy.
type mark int

const (
	markNone  mark = iota
	markStop       // filled octagon
	markWarn       // filled triangle
	markNote       // open circle
	markTick       // open square, to be ticked by hand
	shapeRule      // a line across
	shapeDot       // a small filled circle, before the items of a list
)

// shape is a mark, a box or a rule inside a band. x is counted from the left
// edge of the page, y from the top of the band; w is its width, and its
// height where the shape is not a rule.
type shape struct {
	kind    mark
	x, y, w float64
	line    float64
}

// draw draws the shape on the page at the height top.
func (s shape) draw(p *pen, top float64) {
	x, y, w := s.x, top+s.y, s.w
	switch s.kind {
	case markStop:
		c := w / (2 + math.Sqrt2) // what each corner loses
		p.path(true, x+c, y, x+w-c, y, x+w, y+c, x+w, y+w-c, x+w-c, y+w, x+c, y+w, x, y+w-c, x, y+c)
	case markWarn:
		h := w * math.Sqrt(3) / 2
		y += (w - h) / 2
		p.path(true, x+w/2, y, x+w, y+h, x, y+h)
	case markNote:
		p.lineWidth(s.line)
		p.pdf.Circle(x+w/2, y+w/2, w/2-s.line/2, "D")
	case markTick:
		p.lineWidth(s.line)
		p.pdf.Rect(x, y, w, w, "D")
	case shapeDot:
		p.pdf.Circle(x+w/2, y+w/2, w/2, "F")
	case shapeRule:
		p.rule(x, y, w, s.line)
	}
}

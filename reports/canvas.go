package reports

import (
	"bytes"
	"fmt"
	"image"
	"image/color"
	"image/draw"
	"image/png"
	"math"

	"github.com/jung-kurt/gofpdf"
	xfont "golang.org/x/image/font"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
)

// canvas draws a figure of gonum/plot into a rectangle of a page, as lines and
// text and not as an image. gonum's own PDF canvas cannot: it makes documents
// of its own, with another library, and writes the time of day into them.
//
// The figure's origin is at the lower left with y upwards; the matrix carries
// its points to the page, where y runs downwards. Colours are laid over white,
// so that a half-transparent band stays a plain grey on every printer.
type canvas struct {
	pen           *pen
	width, height float64
	canvasState
	stack []canvasState
}

type canvasState struct {
	matrix matrix
	line   float64
	dashes []float64
	offset float64
	color  [3]int
}

// matrix carries (x, y) to (a·x + c·y + e, b·x + d·y + f).
type matrix struct{ a, b, c, d, e, f float64 }

func (m matrix) at(p vg.Point) (x, y float64) {
	px, py := p.X.Points(), p.Y.Points()
	return m.a*px + m.c*py + m.e, m.b*px + m.d*py + m.f
}

// before returns the matrix that applies n first and then m.
func (m matrix) before(n matrix) matrix {
	return matrix{
		a: m.a*n.a + m.c*n.b,
		b: m.b*n.a + m.d*n.b,
		c: m.a*n.c + m.c*n.d,
		d: m.b*n.c + m.d*n.d,
		e: m.a*n.e + m.c*n.f + m.e,
		f: m.b*n.e + m.d*n.f + m.f,
	}
}

// scale is the factor by which the matrix stretches lengths, the mean of the
// two directions.
func (m matrix) scale() float64 { return math.Sqrt(math.Abs(m.a*m.d - m.b*m.c)) }

var _ vg.CanvasSizer = (*canvas)(nil)

// newCanvas returns a canvas whose upper left corner lies at (x, top) of the
// page. Call done when the figure is drawn.
func newCanvas(p *pen, x, top, width, height float64) *canvas {
	c := &canvas{pen: p, width: width, height: height}
	c.matrix = matrix{a: 1, d: -1, e: x, f: top + height}
	vg.Initialize(c)
	return c
}

// done sets the page back to solid black lines.
func (c *canvas) done() {
	c.pen.dash(nil, 0)
	c.pen.strokeColor([3]int{})
	c.pen.fillColor([3]int{})
}

func (c *canvas) Size() (w, h vg.Length) { return vg.Points(c.width), vg.Points(c.height) }

func (c *canvas) SetLineWidth(w vg.Length) { c.line = w.Points() }

func (c *canvas) SetLineDash(pattern []vg.Length, offset vg.Length) {
	c.dashes = make([]float64, len(pattern))
	sum := 0.0
	for i, d := range pattern {
		c.dashes[i] = d.Points()
		sum += c.dashes[i]
	}
	if sum <= 0 {
		c.dashes = nil // a pattern of nothing is an error in a PDF
	}
	c.offset = offset.Points()
}

func (c *canvas) SetColor(col color.Color) {
	if col == nil {
		col = color.Black
	}
	r, g, b, a := col.RGBA() // premultiplied
	white := 0xFFFF - a
	c.color = [3]int{int((r + white) >> 8), int((g + white) >> 8), int((b + white) >> 8)}
}

func (c *canvas) Rotate(rad float64) {
	sin, cos := math.Sincos(rad)
	c.matrix = c.matrix.before(matrix{a: cos, b: sin, c: -sin, d: cos})
}

func (c *canvas) Translate(p vg.Point) {
	c.matrix = c.matrix.before(matrix{a: 1, d: 1, e: p.X.Points(), f: p.Y.Points()})
}

func (c *canvas) Scale(x, y float64) {
	c.matrix = c.matrix.before(matrix{a: x, d: y})
}

func (c *canvas) Push() { c.stack = append(c.stack, c.canvasState) }

func (c *canvas) Pop() {
	c.canvasState = c.stack[len(c.stack)-1]
	c.stack = c.stack[:len(c.stack)-1]
}

func (c *canvas) Stroke(path vg.Path) {
	if c.line <= 0 || len(path) == 0 {
		return
	}
	scale := c.matrix.scale()
	c.pen.lineWidth(c.line * scale)
	dashes := c.dashes
	if scale != 1 && len(dashes) > 0 {
		dashes = make([]float64, len(c.dashes))
		for i, d := range c.dashes {
			dashes[i] = d * scale
		}
	}
	c.pen.dash(dashes, c.offset*scale)
	c.pen.strokeColor(c.color)
	c.trace(path)
	c.pen.pdf.DrawPath("D")
}

func (c *canvas) Fill(path vg.Path) {
	if len(path) == 0 {
		return
	}
	c.pen.fillColor(c.color)
	c.trace(path)
	c.pen.pdf.DrawPath("F")
}

// trace writes the path in the coordinates of the page.
func (c *canvas) trace(path vg.Path) {
	pdf := c.pen.pdf
	var current, start vg.Point
	open := false // whether there is a current point
	move := func(p vg.Point) {
		pdf.MoveTo(c.matrix.at(p))
		current, start, open = p, p, true
	}
	line := func(p vg.Point) {
		if !open {
			move(p)
			return
		}
		pdf.LineTo(c.matrix.at(p))
		current = p
	}
	cubic := func(p1, p2, p vg.Point) {
		x1, y1 := c.matrix.at(p1)
		x2, y2 := c.matrix.at(p2)
		x, y := c.matrix.at(p)
		pdf.CurveBezierCubicTo(x1, y1, x2, y2, x, y)
		current = p
	}
	for _, comp := range path {
		switch comp.Type {
		case vg.MoveComp:
			move(comp.Pos)
		case vg.LineComp:
			line(comp.Pos)
		case vg.ArcComp:
			arc(comp, line, cubic)
		case vg.CurveComp:
			if !open {
				move(comp.Pos)
				continue
			}
			switch len(comp.Control) {
			case 1:
				// The cubic through the same points as a quadratic curve.
				q := comp.Control[0]
				cubic(between(current, q, 2.0/3), between(comp.Pos, q, 2.0/3), comp.Pos)
			case 2:
				cubic(comp.Control[0], comp.Control[1], comp.Pos)
			default:
				c.pen.fail(fmt.Errorf("a curve of a figure has %d control points", len(comp.Control)))
			}
		case vg.CloseComp:
			if open {
				pdf.ClosePath()
				current = start
			}
		default:
			c.pen.fail(fmt.Errorf("a path of a figure has a part of unknown kind %d", comp.Type))
		}
	}
}

func between(p, q vg.Point, t float64) vg.Point {
	return vg.Point{X: p.X + vg.Length(t)*(q.X-p.X), Y: p.Y + vg.Length(t)*(q.Y-p.Y)}
}

// arc draws a circular arc as cubic curves of at most a quarter turn each,
// with a line to its start. For a part that turns by α, the control points lie
// at 4/3·tan(α/4) of the radius along the tangents; the error is below 0.03 %
// of the radius.
func arc(comp vg.PathComp, line func(vg.Point), cubic func(p1, p2, p vg.Point)) {
	r := comp.Radius.Points()
	on := func(angle, tangent float64) vg.Point {
		sin, cos := math.Sincos(angle)
		return vg.Point{
			X: comp.Pos.X + vg.Points(r*cos-tangent*r*sin),
			Y: comp.Pos.Y + vg.Points(r*sin+tangent*r*cos),
		}
	}
	parts := max(1, int(math.Ceil(math.Abs(comp.Angle)/(math.Pi/2)-1e-9)))
	turn := comp.Angle / float64(parts)
	k := 4.0 / 3 * math.Tan(turn/4)
	line(on(comp.Start, 0))
	for i := range parts {
		a := comp.Start + float64(i)*turn
		cubic(on(a, k), on(a+turn, -k), on(a+turn, 0))
	}
}

// FillString draws text in the embedded font: bold where the face is bold,
// upright always. A text that cannot be printed fails the whole document.
func (c *canvas) FillString(face font.Face, p vg.Point, text string) {
	size := face.Font.Size.Points() * c.matrix.scale()
	if size == 0 || text == "" {
		return
	}
	text, err := CheckText("figure", text)
	if err != nil {
		c.pen.fail(err)
		return
	}
	x, y := c.matrix.at(p)
	pdf := c.pen.pdf
	c.pen.setFont(size, face.Font.Weight >= xfont.WeightSemiBold)
	c.pen.fillColor(c.color)
	// On the page y runs downwards, so a turn to the left has b below zero.
	degrees := math.Atan2(-c.matrix.b, c.matrix.a) * 180 / math.Pi
	if math.Abs(degrees) < 1e-9 {
		pdf.Text(x, y, text)
		return
	}
	pdf.TransformBegin()
	pdf.TransformRotate(degrees, x, y)
	pdf.Text(x, y, text)
	pdf.TransformEnd()
}

// DrawImage draws an image into a rectangle.
func (c *canvas) DrawImage(rect vg.Rectangle, img image.Image) {
	size := rect.Size()
	if size.X <= 0 || size.Y <= 0 || img.Bounds().Empty() {
		return
	}
	// Eight bits a channel, the only depth that the library reads.
	flat := image.NewNRGBA(image.Rect(0, 0, img.Bounds().Dx(), img.Bounds().Dy()))
	draw.Draw(flat, flat.Bounds(), img, img.Bounds().Min, draw.Src)
	var buf bytes.Buffer
	if err := png.Encode(&buf, flat); err != nil {
		c.pen.fail(err)
		return
	}
	c.pen.images++
	name := fmt.Sprintf("figure-%d", c.pen.images)
	pdf := c.pen.pdf
	options := gofpdf.ImageOptions{ImageType: "png"}
	pdf.RegisterImageOptionsReader(name, options, &buf)
	// The whole matrix goes to the PDF, whose y runs upwards from the foot of
	// the page; the image is then placed in the figure's own coordinates.
	_, page := pdf.GetPageSize()
	m := c.matrix
	pdf.TransformBegin()
	pdf.Transform(gofpdf.TransformMatrix{A: m.a, B: -m.b, C: m.c, D: -m.d, E: m.e, F: page - m.f})
	w, h := size.X.Points(), size.Y.Points()
	pdf.ImageOptions(name, rect.Min.X.Points(), page-rect.Min.Y.Points()-h, w, h, false, options, 0, "")
	pdf.TransformEnd()
}

package reports

import (
	"bytes"
	"fmt"
	"image"
	"image/color"
	"slices"

	"github.com/jung-kurt/gofpdf"
	xfont "golang.org/x/image/font"
	"golang.org/x/image/font/opentype"
	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgsvg"
)

// plotText sets the text of figures in the embedded fonts.
func plotText() text.Handler { return text.Plain{Fonts: plotFonts()} }

// plotStyle returns a style for text inside a figure.
func plotStyle(size float64, heavy bool) text.Style {
	f := font.Font{Typeface: plotTypeface, Size: vg.Points(size)}
	if heavy {
		f.Weight = xfont.WeightBold
	}
	return text.Style{Color: color.Black, Font: f, Handler: plotText()}
}

// newPlot returns an empty plot whose every text is set in the embedded fonts
// at the size of running text, with air between the axes and their names. The
// defaults of gonum/plot are left as they are.
func newPlot() *plot.Plot {
	p := plot.New()
	p.TextHandler = plotText()
	set := func(st *text.Style, size float64, heavy bool) {
		of := plotStyle(size, heavy)
		st.Font, st.Handler = of.Font, of.Handler
	}
	set(&p.Title.TextStyle, sizeBody, true)
	set(&p.Legend.TextStyle, sizeSmall, false)
	for _, axis := range []*plot.Axis{&p.X, &p.Y} {
		set(&axis.Label.TextStyle, sizeSmall, false)
		set(&axis.Tick.Label, sizeSmall, false)
		axis.Label.Padding = vg.Points(4)
		axis.Tick.Length = vg.Points(4)
	}
	p.Title.Padding = vg.Points(4)
	p.Legend.ThumbnailWidth = vg.Points(28)
	return p
}

// plotDPI is the resolution of .png figures.
const plotDPI = 150

// plotFile draws a plot as a file of its own, width by height points, in the
// format svg, png or pdf, and returns the bytes. The same plot gives the same
// bytes. producer and date are written into a PDF; the other formats carry
// neither.
//
// An SVG holds the letters that it uses as a font inside it, so it looks the
// same where the font is not installed.
func plotFile(p *plot.Plot, width, height float64, format string, pr properties) ([]byte, error) {
	w, h := vg.Points(width), vg.Points(height)
	draws := func(c vg.CanvasSizer) {
		const edge = 6 // points
		p.Draw(draw.Crop(draw.New(c), edge, -edge, edge, -edge))
	}
	used := &letterCanvas{width: w, height: h}
	draws(used)
	if used.err != nil {
		return nil, used.err
	}
	var out bytes.Buffer
	switch format {
	case "pdf":
		pen := newPen(width, height)
		pen.page()
		c := newCanvas(pen, 0, 0, width, height)
		draws(c)
		c.done()
		return pen.finish(pr)
	case "png":
		c := &pngCanvas{vgimg.NewWith(vgimg.UseWH(w, h), vgimg.UseDPI(plotDPI))}
		draws(c)
		if _, err := (vgimg.PngCanvas{Canvas: c.Canvas}).WriteTo(&out); err != nil {
			return nil, err
		}
	case "svg":
		c := &svgCanvas{Canvas: vgsvg.NewWith(vgsvg.UseWH(w, h), vgsvg.EmbedFonts(true)), letters: used}
		draws(c)
		if c.err != nil {
			return nil, c.err
		}
		if _, err := c.WriteTo(&out); err != nil {
			return nil, err
		}
	default:
		return nil, fmt.Errorf("a figure cannot be written as %q; write .svg, .png or .pdf", format)
	}
	return out.Bytes(), nil
}

// letterCanvas draws nothing: it checks every text of a figure and collects
// the letters used in each weight.
type letterCanvas struct {
	width, height vg.Length
	used          [2][]rune // regular, bold; sorted, each letter once
	err           error
}

func (c *letterCanvas) Size() (w, h vg.Length)              { return c.width, c.height }
func (c *letterCanvas) SetLineWidth(vg.Length)              {}
func (c *letterCanvas) SetLineDash([]vg.Length, vg.Length)  {}
func (c *letterCanvas) SetColor(color.Color)                {}
func (c *letterCanvas) Rotate(float64)                      {}
func (c *letterCanvas) Translate(vg.Point)                  {}
func (c *letterCanvas) Scale(x, y float64)                  {}
func (c *letterCanvas) Push()                               {}
func (c *letterCanvas) Pop()                                {}
func (c *letterCanvas) Stroke(vg.Path)                      {}
func (c *letterCanvas) Fill(vg.Path)                        {}
func (c *letterCanvas) DrawImage(vg.Rectangle, image.Image) {}
func (c *letterCanvas) FillString(f font.Face, _ vg.Point, s string) {
	s, err := CheckText("figure", s)
	if err != nil && c.err == nil {
		c.err = err
	}
	i := weightOf(f)
	for _, r := range s {
		if at, found := slices.BinarySearch(c.used[i], r); !found {
			c.used[i] = slices.Insert(c.used[i], at, r)
		}
	}
}

func weightOf(f font.Face) int {
	if f.Font.Weight >= xfont.WeightSemiBold {
		return 1
	}
	return 0
}

// pngCanvas is gonum's image canvas, given every text as CheckText returns it.
type pngCanvas struct{ *vgimg.Canvas }

func (c *pngCanvas) FillString(f font.Face, p vg.Point, s string) {
	if s, err := CheckText("figure", s); err == nil { // letterCanvas has kept the error
		c.Canvas.FillString(f, p, s)
	}
}

// svgCanvas is gonum's SVG canvas with the fonts cut down to the letters of
// the figure: whole, they would add 300 kB to each file.
type svgCanvas struct {
	*vgsvg.Canvas
	letters *letterCanvas
	cut     [2]*opentype.Font
	err     error
}

func (c *svgCanvas) FillString(f font.Face, p vg.Point, s string) {
	i := weightOf(f)
	if c.cut[i] == nil {
		small := gofpdf.UTF8CutFont([]byte(sans(i == 1).data), string(c.letters.used[i]))
		parsed, err := opentype.Parse(small)
		if err != nil {
			if c.err == nil {
				c.err = fmt.Errorf("cutting the font of a figure: %w", err)
			}
			return
		}
		c.cut[i] = parsed
	}
	f.Face = c.cut[i]
	if s, err := CheckText("figure", s); err == nil { // letterCanvas has kept the error
		c.Canvas.FillString(f, p, s)
	}
}

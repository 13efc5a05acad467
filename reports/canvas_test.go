package reports

import (
	"bytes"
	"encoding/base64"
	"encoding/xml"
	"errors"
	"image"
	"image/color"
	"image/png"
	"io"
	"math"
	"regexp"
	"strings"
	"testing"

	"golang.org/x/image/font/sfnt"
	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"pgregory.net/rapid"
)

// drawnPage returns what draw writes into an uncompressed page of 400 by 300
// points, on a canvas of 200 by 100 whose corner lies at (50, 40).
func drawnPage(t *testing.T, draw func(c *canvas)) string {
	t.Helper()
	p := newPen(400, 300)
	p.pdf.SetCompression(false)
	p.page()
	c := newCanvas(p, 50, 40, 200, 100)
	draw(c)
	c.done()
	b, err := p.finish(sampleProperties)
	if err != nil {
		t.Fatal(err)
	}
	_, stream, _ := strings.Cut(string(b), "stream\n")
	stream, _, _ = strings.Cut(stream, "endstream")
	return stream
}

func pt(x, y float64) vg.Point { return vg.Point{X: vg.Length(x), Y: vg.Length(y)} }

// PDF counts y from the foot of the page, so the canvas' lower left corner, at
// 40 + 100 points from the top, is at (50, 160).
func TestCanvasPlaces(t *testing.T) {
	line := func(c *canvas) {
		var p vg.Path
		p.Move(pt(0, 0))
		p.Line(pt(10, 20))
		c.Stroke(p)
	}
	for _, c := range []struct {
		name string
		draw func(c *canvas)
		want string
	}{
		{"as it is", line, "50.00 160.00 m\n60.00 180.00 l\nS"},
		{"moved", func(c *canvas) { c.Translate(pt(5, 7)); line(c) }, "55.00 167.00 m\n65.00 187.00 l\nS"},
		{"scaled", func(c *canvas) { c.Scale(2, 3); line(c) }, "50.00 160.00 m\n70.00 220.00 l\nS"},
		{"a quarter turn to the left", func(c *canvas) { c.Rotate(math.Pi / 2); line(c) }, "50.00 160.00 m\n30.00 170.00 l\nS"},
		{"moved, then turned", func(c *canvas) { c.Translate(pt(100, 50)); c.Rotate(math.Pi / 2); line(c) }, "150.00 210.00 m\n130.00 220.00 l\nS"},
		{"turned, then moved", func(c *canvas) { c.Rotate(math.Pi / 2); c.Translate(pt(10, 0)); line(c) }, "50.00 170.00 m\n30.00 180.00 l\nS"},
		{"push and pop", func(c *canvas) { c.Push(); c.Translate(pt(5, 7)); c.Rotate(1); c.Pop(); line(c) }, "50.00 160.00 m\n60.00 180.00 l\nS"},
		{"filled", func(c *canvas) {
			var p vg.Path
			p.Move(pt(0, 0))
			p.Line(pt(10, 0))
			p.Line(pt(10, 10))
			p.Close()
			c.Fill(p)
		}, "50.00 160.00 m\n60.00 160.00 l\n60.00 170.00 l\nh\nf"},
		{"quadratic curve as the same cubic one", func(c *canvas) {
			var p vg.Path
			p.Move(pt(0, 0))
			p.QuadTo(pt(30, 60), pt(60, 0))
			c.Stroke(p)
		}, "70.00000 200.00000 90.00000 200.00000 110.00000 160.00000 c"},
		{"cubic curve", func(c *canvas) {
			var p vg.Path
			p.Move(pt(0, 0))
			p.CubeTo(pt(1, 2), pt(3, 4), pt(5, 6))
			c.Stroke(p)
		}, "51.00000 162.00000 53.00000 164.00000 55.00000 166.00000 c"},
		{"no line of no width", func(c *canvas) { c.SetLineWidth(0); line(c); c.SetLineWidth(3); line(c) }, "3.00 w"},
		{"dashes", func(c *canvas) { c.SetLineDash([]vg.Length{4, 2}, 1); line(c) }, "[4.00 2.00] 1.00 d"},
		{"dashes scaled", func(c *canvas) { c.Scale(2, 2); c.SetLineDash([]vg.Length{4, 2}, 1); line(c) }, "[8.00 4.00] 2.00 d"},
		{"colour", func(c *canvas) { c.SetColor(color.RGBA{255, 0, 0, 255}); line(c) }, "1.000 0.000 0.000 RG"},
		{"half transparent black is grey", func(c *canvas) { c.SetColor(color.NRGBA{0, 0, 0, 128}); line(c) }, "0.498 G"},
	} {
		if got := drawnPage(t, c.draw); !strings.Contains(got, c.want) {
			t.Errorf("%s: %q is not in\n%s", c.name, c.want, got)
		}
	}
	if got := drawnPage(t, func(c *canvas) { c.SetLineWidth(0); line(c) }); strings.Contains(got, " l\n") {
		t.Errorf("a line of no width is drawn:\n%s", got)
	}
	if got := drawnPage(t, func(c *canvas) { c.SetLineDash([]vg.Length{0, 0}, 0); line(c) }); strings.Contains(got, "[0") {
		t.Errorf("dashes of no length:\n%s", got)
	}
}

// After a figure the page is back to solid black.
func TestCanvasCleansUp(t *testing.T) {
	p := newPen(400, 300)
	p.pdf.SetCompression(false)
	p.page()
	c := newCanvas(p, 0, 0, 100, 100)
	c.SetColor(color.RGBA{255, 0, 0, 255})
	c.SetLineDash([]vg.Length{4, 2}, 0)
	var path vg.Path
	path.Move(pt(0, 0))
	path.Line(pt(9, 9))
	c.Stroke(path)
	c.Fill(path)
	c.done()
	p.rule(10, 10, 50, 1)
	p.text(10, 20, 9, false, "after")
	b, err := p.finish(sampleProperties)
	if err != nil {
		t.Fatal(err)
	}
	_, after, _ := strings.Cut(string(b), "f\n")
	for _, want := range []string{"[] 0.00 d", "0.000 G", "0.000 g"} {
		if !strings.Contains(after[:200], want) {
			t.Errorf("%q is not set after the figure:\n%s", want, after[:200])
		}
	}
}

// Text is turned as the canvas is, in the size that the scale gives.
func TestCanvasText(t *testing.T) {
	face := plotFonts().Lookup(plotStyle(10, false).Font, 10)
	heavy := plotFonts().Lookup(plotStyle(10, true).Font, 10)
	got := drawnPage(t, func(c *canvas) { c.FillString(face, pt(0, 0), "ab") })
	if !strings.Contains(got, "BT 50.00 160.00 Td (\x00a\x00b) Tj ET") || strings.Contains(got, " cm") || !strings.Contains(got, " 10.00 Tf") {
		t.Errorf("upright:\n%s", got)
	}
	got = drawnPage(t, func(c *canvas) { c.Scale(2, 2); c.FillString(face, pt(5, 0), "ab") })
	if !strings.Contains(got, "BT 60.00 160.00 Td") || !strings.Contains(got, " 20.00 Tf") {
		t.Errorf("scaled:\n%s", got)
	}
	got = drawnPage(t, func(c *canvas) { c.Translate(pt(10, 10)); c.Rotate(math.Pi / 2); c.FillString(heavy, pt(0, 0), "ab") })
	// Reading upwards: the x axis of the text is the y axis of the page.
	if !strings.Contains(got, "0.00000 1.00000 -1.00000 0.00000 230.00000 110.00000 cm") || !strings.Contains(got, "BT 60.00 170.00 Td") {
		t.Errorf("turned:\n%s", got)
	}
	got = drawnPage(t, func(c *canvas) { c.FillString(font.Face{}, pt(0, 0), "ab") })
	if strings.Contains(got, "Td") {
		t.Errorf("text of no size is drawn:\n%s", got)
	}
}

// gonum measures labels as the canvas draws them.
func TestPlotTextMeasuresAsDrawn(t *testing.T) {
	for _, heavy := range []bool{false, true} {
		face := plotFonts().Lookup(plotStyle(10, heavy).Font, 10)
		for _, s := range []string{"concentration (mg/L)", "AVATAR To Ty", "τ½ 41⁰·⁷⁵ ёж"} {
			got, want := face.Width(s).Points(), points(sans(heavy).units(s), 10)
			if math.Abs(got-want) > 0.01*float64(len(s)) {
				t.Errorf("%q, bold %v: gonum says %.3f points, the page %.3f", s, heavy, got, want)
			}
		}
	}
}

// The curves of an arc stay on the circle, begin and end where they should,
// and are at most a quarter turn each.
func TestArcLaws(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		comp := vg.PathComp{
			Type: vg.ArcComp, Pos: pt(rapid.Float64Range(-9, 9).Draw(t, "x"), rapid.Float64Range(-9, 9).Draw(t, "y")),
			Radius: vg.Length(rapid.Float64Range(0.1, 100).Draw(t, "r")),
			Start:  rapid.Float64Range(-7, 7).Draw(t, "start"), Angle: rapid.Float64Range(-6.3, 6.3).Draw(t, "angle"),
		}
		r := comp.Radius.Points()
		on := func(a float64) vg.Point {
			return pt(comp.Pos.X.Points()+r*math.Cos(a), comp.Pos.Y.Points()+r*math.Sin(a))
		}
		away := func(p, q vg.Point) float64 {
			return math.Hypot((p.X - q.X).Points(), (p.Y - q.Y).Points())
		}
		var at vg.Point
		curves := 0
		arc(comp, func(p vg.Point) { at = p }, func(p1, p2, p vg.Point) {
			curves++
			for k := 0; k <= 8; k++ {
				s := float64(k) / 8
				b := func(f func(vg.Point) vg.Length) float64 {
					u := 1 - s
					return u*u*u*f(at).Points() + 3*u*u*s*f(p1).Points() + 3*u*s*s*f(p2).Points() + s*s*s*f(p).Points()
				}
				x, y := b(func(p vg.Point) vg.Length { return p.X }), b(func(p vg.Point) vg.Length { return p.Y })
				if d := math.Abs(away(pt(x, y), comp.Pos)/r - 1); d > 0.0003 {
					t.Fatalf("the curve is %.4f of the radius off the circle", d)
				}
			}
			at = p
		})
		if away(at, on(comp.Start+comp.Angle)) > 1e-9*r+1e-9 {
			t.Fatalf("ends at %v", at)
		}
		if want := int(math.Ceil(math.Abs(comp.Angle) / (math.Pi / 2))); curves != max(1, want) {
			t.Fatalf("%d curves for a turn of %.2f", curves, comp.Angle)
		}
	})
}

func TestCanvasImage(t *testing.T) {
	img := image.NewNRGBA64(image.Rect(0, 0, 4, 2)) // deeper than the library reads
	img.Set(0, 0, color.Black)
	got := drawnPage(t, func(c *canvas) {
		c.Translate(pt(10, 20))
		c.DrawImage(vg.Rectangle{Min: pt(5, 5), Max: pt(45, 25)}, img)
	})
	if !strings.Contains(got, "1.00000 -0.00000 0.00000 1.00000 60.00000 180.00000 cm") || !strings.Contains(got, "40.00000 0 0 20.00000 5.00000 5.00000 cm") {
		t.Errorf("the image is placed so:\n%s", got)
	}
}

func TestPlotFiles(t *testing.T) {
	for _, format := range []string{"svg", "png", "pdf"} {
		b, err := plotFile(samplePlot(t), 400, 250, format, sampleProperties)
		if err != nil {
			t.Fatal(err)
		}
		again, err := plotFile(samplePlot(t), 400, 250, format, sampleProperties)
		if err != nil || !bytes.Equal(b, again) {
			t.Errorf("%s: a second run gave other bytes (%v)", format, err)
		}
		switch format {
		case "pdf":
			if ctx := readStrictly(t, b); ctx.PageCount != 1 {
				t.Errorf("%d pages", ctx.PageCount)
			}
		case "png":
			img, err := png.Decode(bytes.NewReader(b))
			if err != nil {
				t.Fatal(err)
			}
			// 400 by 250 points at 150 to the inch.
			if s := img.Bounds().Size(); s != image.Pt(833, 521) {
				t.Errorf("the image is %v", s)
			}
		case "svg":
			checkSVG(t, b)
		}
	}
	if _, err := plotFile(samplePlot(t), 400, 250, "gif", sampleProperties); err == nil || !strings.Contains(err.Error(), "svg") {
		t.Errorf("gif: %v", err)
	}
	for _, format := range []string{"svg", "png", "pdf"} {
		p := samplePlot(t)
		p.X.Label.Text = "time 漢"
		var letter *LetterError
		if _, err := plotFile(p, 400, 250, format, sampleProperties); !errors.As(err, &letter) {
			t.Errorf("%s with a letter that cannot be printed: %v", format, err)
		}
	}
}

// The SVG is well formed and carries its letters with it, in fonts cut down
// to them.
func checkSVG(t *testing.T, b []byte) {
	t.Helper()
	dec := xml.NewDecoder(bytes.NewReader(b))
	for {
		if _, err := dec.Token(); err == io.EOF {
			break
		} else if err != nil {
			t.Fatal(err)
		}
	}
	if !bytes.Contains(b, []byte("α phase")) {
		t.Error("the Greek label is not in the SVG")
	}
	fonts := regexp.MustCompile(`base64,([A-Za-z0-9+/=]+)`).FindAllSubmatch(b, -1)
	if len(fonts) != 2 { // regular and, for the title, bold
		t.Fatalf("%d fonts inside", len(fonts))
	}
	for i, has := range []string{"concetraioαδ01248", "Concetraiovm"} {
		found := false
		for _, f := range fonts {
			ttf, err := base64.StdEncoding.DecodeString(string(f[1]))
			if err != nil {
				t.Fatal(err)
			}
			if len(ttf) > 40_000 {
				t.Errorf("a font of %d bytes inside", len(ttf))
			}
			parsed, err := sfnt.Parse(ttf)
			if err != nil {
				t.Fatal(err)
			}
			all := true
			for _, r := range has {
				g, err := parsed.GlyphIndex(nil, r)
				all = all && err == nil && g != 0
			}
			found = found || all
		}
		if !found {
			t.Errorf("no font %d with the letters %q", i, has)
		}
	}
}

// A figure on a page of a worksheet is made of lines and letters, no image.
func TestFigureIsNoImage(t *testing.T) {
	d := newDocument(A4)
	d.body.figure(150, func(c vg.CanvasSizer) { samplePlot(t).Draw(draw.New(c)) })
	if ctx := readStrictly(t, render(t, d)); len(ctx.Optimize.ImageObjects) > 0 {
		t.Error("there is an image")
	}
}

// Styling one plot leaves the defaults of the library alone.
func TestNewPlotKeepsToItself(t *testing.T) {
	newPlot()
	if plot.DefaultFont.Typeface != "Liberation" || plot.New().X.Label.TextStyle.Font.Typeface != "Liberation" {
		t.Error("the defaults of gonum/plot changed")
	}
}

func BenchmarkFigure(b *testing.B) {
	p := samplePlot(b)
	pen := newPen(595, 842)
	b.ReportAllocs()
	for b.Loop() {
		pen.page()
		c := newCanvas(pen, 40, 40, 510, 150)
		p.Draw(draw.New(c))
		c.done()
	}
}

package reports

import (
	"fmt"
	"testing"
	"unicode"

	"github.com/jung-kurt/gofpdf"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"

	"tayra/reports/internal/alphabet"
)

// What the layout measures is what the PDF library writes into the file as
// the letter's width, for every letter and in both weights.
func TestWidthsAgreeWithThePDF(t *testing.T) {
	pdf := gofpdf.NewCustom(&gofpdf.InitType{UnitStr: "pt"})
	pdf.AddUTF8FontFromBytes("sans", "", []byte(sansRegular.data))
	pdf.AddUTF8FontFromBytes("sans", "B", []byte(sansBold.data))
	pdf.AddPage()
	for _, face := range []struct {
		style string
		face  *fontFace
	}{{"", &sansRegular}, {"B", &sansBold}} {
		pdf.SetFont("sans", face.style, 10)
		n := 0
		for _, r := range alphabet.All() {
			if !face.face.has(r) {
				continue
			}
			n++
			if got, want := face.face.units(string(r)), pdf.GetStringSymbolWidth(string(r)); got != want {
				t.Errorf("%s %U: %d thousandths of an em, the PDF says %d", face.face.name, r, got, want)
			}
		}
		if n < 2200 {
			t.Errorf("the %s font has only %d letters", face.face.name, n)
		}
	}
}

// Both weights hold the same letters, so one check of a text serves both.
func TestFontsHoldTheSameLetters(t *testing.T) {
	for letter := rune(0); letter < 0x10000; letter++ {
		if r, b := sansRegular.has(letter), sansBold.has(letter); r != b {
			t.Errorf("%U: regular %v, bold %v", letter, r, b)
		}
	}
}

// Every letter but the spaces has an outline, and not that of the empty box
// which stands for a letter that a font lacks.
func TestLettersHaveShapes(t *testing.T) {
	for _, face := range []*fontFace{&sansRegular, &sansBold} {
		outline := func(glyph sfnt.GlyphIndex) string {
			segments, err := face.font().LoadGlyph(nil, glyph, fixed.I(64), nil)
			if err != nil {
				t.Fatal(err)
			}
			return fmt.Sprint(segments)
		}
		box := outline(0)
		for _, r := range alphabet.All() {
			glyph, err := face.font().GlyphIndex(nil, r)
			if err != nil || glyph == 0 || unicode.IsSpace(r) || unicode.Is(unicode.Zs, r) {
				continue
			}
			if got := outline(glyph); got == "[]" || got == box {
				t.Errorf("%s %U %q has no shape", face.name, r, r)
			}
		}
	}
}

// The letters that the worksheets, formulas and figures need.
func TestFontsHoldTheTrade(t *testing.T) {
	for _, r := range "0123456789×±°≤≥≈·−→√½¼¾⁰¹²³⁴⁵⁶⁷⁸⁹⁻⁺₀₁₂₃ⁿ∞∫∑ΔΣΩαβγδθλμσςτφ☐☑✓✗♀♂µ‰–—‘’“”…\u00a0\u2009\u202f\u2007" {
		if !sansRegular.has(r) || !sansBold.has(r) {
			t.Errorf("%U %q is missing", r, r)
		}
	}
}

// Figures are tabular: columns of numbers line up in both weights.
func TestFiguresAreTabular(t *testing.T) {
	for _, face := range []*fontFace{&sansRegular, &sansBold} {
		for r := '1'; r <= '9'; r++ {
			if face.widths()[r] != face.widths()['0'] {
				t.Errorf("%s: %q is not as wide as 0", face.name, r)
			}
		}
	}
}

func BenchmarkMeasure(b *testing.B) {
	for b.Loop() {
		sansRegular.units("average against the model's: 8.14 mg/kg every 12 hours")
	}
}

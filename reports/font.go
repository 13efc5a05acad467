package reports

import (
	_ "embed"
	"fmt"
	"sync"
	"unicode/utf8"

	xfont "golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"
	"gonum.org/v1/plot/font"

	"tayra/reports/internal/alphabet"
)

//go:generate go run ./internal/cutfont -dir fonts

// The two fonts are DejaVu Sans cut down to the letters of package alphabet;
// their licence lies beside them. They are embedded as strings because the PDF
// library writes into the bytes that it is given: []byte(f.data) is then the
// copy that each document needs anyway, and nobody can spoil the original.
var (
	//go:embed fonts/DejaVuSans.ttf
	sansRegularTTF string
	//go:embed fonts/DejaVuSans-Bold.ttf
	sansBoldTTF string

	sansRegular = fontFace{name: "regular", data: sansRegularTTF}
	sansBold    = fontFace{name: "bold", data: sansBoldTTF}
)

// fontFace is one embedded font: its bytes, the parsed form that knows which
// letters it has, and the advance of each letter. The last two are made on
// first use, for a run that prints nothing needs neither.
type fontFace struct {
	name string
	data string

	parseOnce sync.Once
	parsed    *sfnt.Font

	widthOnce sync.Once
	width     *[1 << 16]uint16 // thousandths of an em; 0 where the font has no letter
}

// sans returns the face for running or for bold text.
func sans(bold bool) *fontFace {
	if bold {
		return &sansBold
	}
	return &sansRegular
}

// font returns the parsed font. The embedded bytes are fixed when the program
// is built, so a failure to parse them is a fault of the program: it panics.
func (f *fontFace) font() *sfnt.Font {
	f.parseOnce.Do(func() {
		parsed, err := sfnt.Parse([]byte(f.data))
		if err != nil {
			panic(fmt.Sprintf("reports: the embedded %s font: %v", f.name, err))
		}
		f.parsed = parsed
	})
	return f.parsed
}

// has reports whether the font draws r. A letter that it lacks would print as
// an empty box while text extraction still reads it.
func (f *fontFace) has(r rune) bool {
	glyph, err := f.font().GlyphIndex(nil, r)
	return err == nil && glyph != 0
}

// widths returns the table of advances, in thousandths of an em, rounded to
// whole ones as the PDF itself states them: what is measured here is what a
// viewer draws, to the last digit. There is no kerning on either side.
func (f *fontFace) widths() *[1 << 16]uint16 {
	f.widthOnce.Do(func() {
		parsed := f.font()
		perEm := parsed.UnitsPerEm()
		table := new([1 << 16]uint16)
		var buf sfnt.Buffer
		for _, b := range alphabet.Blocks {
			for r := b.First; r <= b.Last; r++ {
				glyph, err := parsed.GlyphIndex(&buf, r)
				if err != nil || glyph == 0 {
					continue
				}
				// Asked for an em of perEm/64 pixels, the advance comes out in
				// 64ths of a pixel, which are font units.
				advance, err := parsed.GlyphAdvance(&buf, glyph, fixed.Int26_6(perEm), xfont.HintingNone)
				if err != nil {
					continue
				}
				table[r] = uint16((2*1000*int(advance) + int(perEm)) / (2 * int(perEm)))
			}
		}
		f.width = table
	})
	return f.width
}

// units returns the width of s in thousandths of an em. Every letter of s has
// passed CheckText, so each is in the table.
func (f *fontFace) units(s string) int {
	table := f.widths()
	w := 0
	for i := 0; i < len(s); {
		if c := s[i]; c < utf8.RuneSelf {
			w += int(table[c])
			i++
			continue
		}
		r, n := utf8.DecodeRuneInString(s[i:])
		if r < 1<<16 {
			w += int(table[r])
		}
		i += n
	}
	return w
}

// plotTypeface is the name under which figures ask for the embedded fonts.
const plotTypeface font.Typeface = "DejaVu Sans"

// plotFonts returns the embedded fonts as gonum/plot wants them, so that the
// labels of a figure have Greek, superscripts and the rest.
var plotFonts = sync.OnceValue(func() *font.Cache {
	return font.NewCache(font.Collection{
		{Font: font.Font{Typeface: plotTypeface}, Face: sansRegular.font()},
		{Font: font.Font{Typeface: plotTypeface, Weight: xfont.WeightBold}, Face: sansBold.font()},
	})
})

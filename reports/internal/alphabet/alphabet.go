// Package alphabet says which letters the worksheets can print. The program
// that cuts the fonts and the code that measures text both read it, so the two
// cannot drift apart.
package alphabet

import "unicode"

// Block is a run of code points, both ends included.
type Block struct{ First, Last rune }

// Blocks lists, in rising order, where printable letters may lie: Latin,
// Greek and Cyrillic with what a citation, a formula or a label needs around
// them. Nothing lies above U+FFFF, which the PDF library cannot write.
var Blocks = []Block{
	{0x0020, 0x007E}, // Basic Latin
	{0x00A0, 0x00FF}, // Latin-1 Supplement
	{0x0100, 0x024F}, // Latin Extended-A and -B
	{0x02B9, 0x02DD}, // modifier letters: the ʻokina of Hawaiian names, primes
	{0x0370, 0x03FF}, // Greek
	{0x0400, 0x052F}, // Cyrillic and its supplement
	{0x1D47, 0x1D47}, // the raised b of a power a·Wᵇ
	{0x1E00, 0x1EFF}, // Latin Extended Additional
	{0x1F00, 0x1FFF}, // Greek Extended
	{0x2000, 0x205F}, // General Punctuation, thin and fixed spaces
	{0x2070, 0x209C}, // superscripts and subscripts
	{0x20A0, 0x20BF}, // currency signs
	{0x2100, 0x214F}, // letterlike symbols
	{0x2150, 0x218F}, // fractions, Roman numerals
	{0x2190, 0x21FF}, // arrows
	{0x2200, 0x22FF}, // mathematical operators
	{0x2300, 0x230B}, // diameter, ceiling, floor
	{0x25A0, 0x25FF}, // geometric shapes
	{0x2610, 0x2612}, // ballot boxes
	{0x2640, 0x2642}, // female, male
	{0x26A0, 0x26A0}, // warning sign
	{0x2713, 0x2718}, // ticks and crosses
	{0xFB00, 0xFB04}, // Latin ligatures, which come with text copied from papers
}

// Scripts are the writing systems that the fonts hold whole.
var Scripts = []*unicode.RangeTable{unicode.Latin, unicode.Greek, unicode.Cyrillic, unicode.Common}

// Printable reports whether r belongs to one of Scripts and is a visible
// letter, mark of punctuation, symbol or plain space. Control, formatting
// (bidirectional marks among them), line-separating, private and surrogate
// code points are not; nor are combining marks, which this way of drawing sets
// beside their letter and not over it.
func Printable(r rune) bool {
	return unicode.In(r, Scripts...) && unicode.IsGraphic(r) && !unicode.Is(unicode.M, r)
}

// All returns every code point of Blocks that is Printable, in rising order.
func All() []rune {
	var all []rune
	for _, b := range Blocks {
		for r := b.First; r <= b.Last; r++ {
			if Printable(r) {
				all = append(all, r)
			}
		}
	}
	return all
}

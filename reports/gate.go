package reports

import (
	"fmt"
	"strings"
	"unicode"
	"unicode/utf8"

	"golang.org/x/text/unicode/norm"

	"tayra/reports/internal/alphabet"
)

// LetterError is a text that cannot be put on paper as it was written, with
// the first letter that stands in the way.
type LetterError struct {
	Field    string // where the text stands, such as patient.name
	File     string // the file that the text was read from, if any
	Line     int    // the place of the text in it, counted from 1; 0 if not known
	Column   int
	Text     string // the text as it was given
	Rune     rune   // the letter; utf8.RuneError for bytes that are no letter
	Position int    // its place in the text, letters counted from 1
	what     string
	instead  string
}

// Error names the field, the letter with its code point, and what to write,
// after the file and the place in it where they are known:
//
//	FILE:LINE:COLUMN: FIELD: letter N: what is wrong; what to write instead
func (e *LetterError) Error() string {
	at := ""
	if e.File != "" {
		at = e.File + ": "
		if e.Line > 0 {
			at = fmt.Sprintf("%s:%d:%d: ", e.File, e.Line, e.Column)
		}
	}
	return fmt.Sprintf("%s%s: letter %d: %s; %s", at, e.Field, e.Position, e.what, e.instead)
}

// CheckText returns s as it goes on paper (in Unicode normalization form C) or
// a *LetterError when it cannot: bytes that are not UTF-8; control, invisible
// and direction-changing characters; scripts other than Latin, Greek, Cyrillic
// and what is common to all; code points above U+FFFF; and letters that the
// fonts do not have. field names the text in the error.
//
// Every text that is drawn, and every text set as a document property, passes
// here first. The reasons: the PDF library panics on the first and the
// last-but-one of these; a letter that the fonts lack prints as an empty box
// while a copy of the text still shows it; and a mark that turns the writing
// direction makes a dose read backwards.
//
// Text of plain ASCII letters costs one pass over its bytes.
func CheckText(field, s string) (string, error) {
	if isPlain(s) {
		return s, nil
	}
	s2 := norm.NFC.String(s)
	position := 0
	for i, r := range s2 {
		position++
		what, instead := unprintable(r, s2[i:])
		if what != "" {
			return "", &LetterError{Field: field, Text: s, Rune: r, Position: position, what: what, instead: instead}
		}
	}
	return s2, nil
}

// onOneLine sets a text that was written over several lines on one, as paper
// does: its line breaks and tabs are spaces.
func onOneLine(s string) string {
	if !strings.ContainsAny(s, "\r\n\t") {
		return s
	}
	return strings.Join(strings.FieldsFunc(s, func(r rune) bool { return r == '\r' || r == '\n' || r == '\t' }), " ")
}

// isPlain reports whether s holds nothing but the visible ASCII letters and
// the space.
func isPlain(s string) bool {
	for i := 0; i < len(s); i++ {
		if s[i] < ' ' || s[i] > '~' {
			return false
		}
	}
	return true
}

// unprintable says what is wrong with the first letter of rest, and what to
// write; both are empty when the letter can be printed.
func unprintable(r rune, rest string) (what, instead string) {
	if ' ' <= r && r <= '~' || alphabet.Printable(r) && sansRegular.has(r) {
		return "", ""
	}
	code := fmt.Sprintf("U+%04X", r)
	switch {
	case r == utf8.RuneError:
		if _, n := utf8.DecodeRuneInString(rest); n == 1 {
			return fmt.Sprintf("the byte 0x%02X is not UTF-8 text", rest[0]), "save the text as UTF-8"
		}
		return code + " stands where a letter was lost", "write the letter itself"
	case r == '\n' || r == '\r' || r == '\u2028' || r == '\u2029':
		return "a line break (" + code + ")", "write the text on one line"
	case r == '\t':
		return "a tab (" + code + ")", "write a space"
	case unicode.IsControl(r):
		return "the control character " + code, "delete it"
	case unicode.Is(unicode.Bidi_Control, r):
		return "the invisible mark " + code + ", which turns the writing direction", "delete it"
	case unicode.Is(unicode.Cf, r):
		return "the invisible character " + code, "delete it"
	case unicode.Is(unicode.M, r):
		return "the accent " + code + " has no single letter together with the one before it", "write that letter without the accent"
	case r > 0xFFFF:
		return fmt.Sprintf("%q (%s) cannot be printed", r, code), "write it in words"
	case unicode.IsLetter(r) && !unicode.In(r, alphabet.Scripts...):
		return fmt.Sprintf("%q (%s) is not a Latin, Greek or Cyrillic letter", r, code), "write it in one of these scripts"
	}
	return fmt.Sprintf("%q (%s) is not in the fonts of the worksheet", r, code), "write it in words"
}

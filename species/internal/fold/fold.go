// Package fold brings names to one spelling, so that "Przewalski's horse",
// "przewalskis  HORSE" and "Przewalski’s horse" are one name, and refuses
// letters that a name cannot have: an animal or drug must not be taken for
// another because a letter only looks like one of ours.
package fold

import (
	"fmt"
	"strings"
	"unicode"
	"unicode/utf8"

	"golang.org/x/text/unicode/norm"
)

// MaxBytes is the longest name that is read; the longest real one has under 60.
const MaxBytes = 200

// A LetterError says which letter makes a name unreadable.
type LetterError struct {
	Problem string // quotes the letter escaped, never as it is
}

func (e *LetterError) Error() string { return e.Problem }

// Words folds a name to lower-case words of a-z and 0-9 with single spaces
// between them. Diacritics are taken off, apostrophes vanish, every other
// mark (hyphen, comma, full stop) ends a word. Control and formatting
// characters, letters of other scripts and broken UTF-8 are a *LetterError.
func Words(s string) (string, error) {
	if len(s) > MaxBytes {
		return "", &LetterError{fmt.Sprintf("the name has %d bytes; no name has over %d", len(s), MaxBytes)}
	}
	out := make([]byte, 0, len(s))
	gap := false
	letter := func(c byte) {
		if gap && len(out) > 0 {
			out = append(out, ' ')
		}
		gap = false
		out = append(out, c)
	}
	for i := 0; i < len(s); i++ {
		switch c := s[i]; {
		case 'a' <= c && c <= 'z' || '0' <= c && c <= '9':
			letter(c)
		case 'A' <= c && c <= 'Z':
			letter(c + 'a' - 'A')
		case c == '\'' || c == '`':
		case c == '\t' || c == '\n' || c == '\r':
			gap = true
		case c < ' ' || c == 0x7f:
			return "", &LetterError{fmt.Sprintf("the name contains the control character %s", escaped(rune(c)))}
		case c < utf8.RuneSelf:
			gap = true
		default:
			r, size := utf8.DecodeRuneInString(s[i:])
			if r == utf8.RuneError && size <= 1 {
				return "", &LetterError{"the name is not valid UTF-8"}
			}
			if isUnseen(r) {
				return "", &LetterError{fmt.Sprintf("the name contains %s, which is nothing to the eye", escaped(r))}
			}
			plain, err := latin(r)
			if err != nil {
				return "", err
			}
			if plain == " " {
				gap = true
			} else {
				for j := 0; j < len(plain); j++ {
					letter(plain[j])
				}
			}
			i += size - 1
		}
	}
	return string(out), nil
}

// isUnseen reports whether a letter is blank or only bends the look of its
// neighbours: separators of lines, variation selectors, the joiner of
// graphemes, the blank Braille pattern, and what stands for a letter that was
// lost.
func isUnseen(r rune) bool {
	return r == 0x034F || r == 0x2800 || r == utf8.RuneError || unicode.In(r, unicode.Zl, unicode.Zp, unicode.Variation_Selector)
}

// latin gives the plain letters of one non-ASCII character: "" to drop it,
// " " to end a word.
func latin(r rune) (string, error) {
	switch r {
	case '‘', '’', 'ʼ', 'ʻ', '´', '′': // as in Pallas’s cat
		return "", nil
	case 'ß', 'ẞ':
		return "ss", nil
	case 'æ', 'Æ':
		return "ae", nil
	case 'œ', 'Œ':
		return "oe", nil
	case 'ø', 'Ø':
		return "o", nil
	case 'đ', 'Đ', 'ð', 'Ð':
		return "d", nil
	case 'ł', 'Ł':
		return "l", nil
	case 'þ', 'Þ':
		return "th", nil
	case 'ı':
		return "i", nil
	}
	switch {
	case unicode.Is(unicode.Cf, r):
		return "", &LetterError{fmt.Sprintf("the name contains the invisible formatting character %s", escaped(r))}
	case unicode.IsControl(r):
		return "", &LetterError{fmt.Sprintf("the name contains the control character %s", escaped(r))}
	case unicode.Is(unicode.Mn, r):
		if unicode.Is(unicode.Inherited, r) {
			return "", nil // a diacritic written as a letter of its own
		}
	case unicode.Is(unicode.Latin, r):
		var b strings.Builder
		for _, p := range norm.NFKD.String(string(r)) {
			switch {
			case p < utf8.RuneSelf && (unicode.IsLetter(p) || unicode.IsDigit(p)):
				b.WriteRune(unicode.ToLower(p))
			case unicode.Is(unicode.Mn, p):
			default:
				return "", &LetterError{fmt.Sprintf("the name contains the letter %s, which no name here has", escaped(r))}
			}
		}
		return b.String(), nil
	case unicode.IsPunct(r) || unicode.IsSpace(r) || unicode.IsSymbol(r):
		return " ", nil
	}
	return "", &LetterError{fmt.Sprintf(
		"the name contains %s, a letter of another script that may only look like a Latin one; type the name in Latin letters", escaped(r))}
}

// escaped names a character by its code point: shown as it is, it could
// be invisible or turn the message round.
func escaped(r rune) string { return fmt.Sprintf("U+%04X", r) }

// Key is a folded name without its spaces, so that "guinea fowl",
// "guinea-fowl" and "guineafowl" are one key.
func Key(words string) string {
	if strings.IndexByte(words, ' ') < 0 {
		return words
	}
	return strings.ReplaceAll(words, " ", "")
}

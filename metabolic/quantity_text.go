// How every quantity is read, in one place:
//
//   - A quantity is a plain decimal number and a unit. A number without a unit
//     is an error, because the reader and the writer would each add their own.
//   - A comma is an error that offers its readings. "1,200 kg" is a small
//     horse or a hen by the country in which it was typed.
//   - Nothing is guessed, nothing is dropped: text that is left over is an
//     error.
//   - Text comes from files of strangers: its length is bounded, and control
//     and invisible letters are refused before anything else looks at it.

package metabolic

import (
	"errors"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"
)

// maxQuantityBytes bounds the text of one quantity. The longest one that means
// anything is under 40 bytes.
const maxQuantityBytes = 200

// A value read is kept between these bounds in its canonical unit. Nothing
// that is weighed or given lies near them; they keep later products, powers
// and quotients finite.
const (
	smallestQuantity = 1e-12
	largestQuantity  = 1e12
)

// QuantityError says why a text is no quantity of the kind that was asked for,
// and what to write instead. Every Parse function of this package returns it.
type QuantityError struct {
	Input   string // the text as it was given
	Problem string // what is wrong with it, one clause
	Remedy  string // what to write instead, one clause
}

// Error gives "problem; remedy".
func (e *QuantityError) Error() string { return e.Problem + "; " + e.Remedy }

// text is one input while it is being read.
type text struct {
	input string // as given, for the error
	body  string // with plain spaces, one at a time, none at the ends
	kind  string // "a body mass", for messages
	like  string // a well-formed example of it
}

func (t text) fail(problem, remedy string) *QuantityError {
	return &QuantityError{Input: t.input, Problem: problem, Remedy: remedy}
}

// quoted gives the input in quotation marks, escaped and cut to what fits on a
// line of an error message.
func quoted(s string) string {
	const most = 60
	if len(s) > most {
		cut := most
		for cut > 0 && !utf8.RuneStart(s[cut]) {
			cut--
		}
		s = s[:cut] + "…"
	}
	return strconv.Quote(s)
}

// newText checks the letters of s and evens out its spaces, signs and
// look-alike letters.
func newText(s, kind, like string) (text, *QuantityError) {
	t := text{input: s, kind: kind, like: like}
	write := "write it like " + strconv.Quote(like)
	if len(s) > maxQuantityBytes {
		return t, t.fail(quoted(s)+" is over "+strconv.Itoa(maxQuantityBytes)+" bytes long", write)
	}
	if !utf8.ValidString(s) {
		return t, t.fail(quoted(s)+" is not valid UTF-8 text", write)
	}
	var b strings.Builder
	space := false
	for _, r := range s {
		switch {
		case unicode.Is(unicode.Zs, r): // the no-break and thin spaces of word processors among them
			space = b.Len() > 0
			continue
		case unicode.IsControl(r), unicode.Is(unicode.Cf, r), unicode.Is(unicode.Zl, r), unicode.Is(unicode.Zp, r):
			return t, t.fail(quoted(s)+" has a control or invisible character in it", write)
		}
		if space {
			b.WriteByte(' ')
			space = false
		}
		switch r {
		case 'μ': // Greek mu, for the micro sign
			b.WriteRune('µ')
		case '‐', '‑', '–', '—', '−': // hyphens, dashes and the minus sign
			b.WriteByte('-')
		case '²', '₂':
			b.WriteByte('2')
		case '℃':
			b.WriteString("°C")
		case '℉':
			b.WriteString("°F")
		case 'º', '˚': // ordinal mark and ring, typed for the degree sign
			b.WriteRune('°')
		case '，': // full-width comma
			b.WriteByte(',')
		default:
			b.WriteRune(r)
		}
	}
	t.body = b.String()
	if t.body == "" {
		return t, t.fail("nothing is written where "+kind+" belongs", write)
	}
	if strings.Contains(t.body, ",") {
		return t, t.comma()
	}
	return t, nil
}

// comma is the error for a text with a comma: it shows what the text would be
// with the comma as a decimal mark and as a mark of thousands, and chooses
// neither.
func (t text) comma() *QuantityError {
	decimal, decimalOK := rewriteNumbers(t.body, func(n string) (string, bool) {
		whole, fraction, _ := strings.Cut(n, ",")
		if strings.Contains(fraction, ",") || strings.Contains(fraction, ".") {
			return "", false
		}
		whole = strings.ReplaceAll(whole, ".", "")
		fraction = strings.TrimRight(fraction, "0")
		if fraction == "" {
			return whole, true
		}
		return whole + "." + fraction, true
	})
	thousands, thousandsOK := rewriteNumbers(t.body, func(n string) (string, bool) {
		if point := strings.IndexByte(n, '.'); point >= 0 && strings.Contains(n[point:], ",") {
			return "", false
		}
		return strings.ReplaceAll(n, ",", ""), true
	})
	problem := quoted(t.input) + " has a comma, which is a decimal mark to some and a mark of thousands to others"
	switch {
	case decimalOK && thousandsOK:
		return t.fail(problem, "write "+quoted(decimal)+" or "+quoted(thousands)+", whichever is meant")
	case decimalOK:
		return t.fail(problem, "write "+quoted(decimal)+" if that is meant")
	case thousandsOK:
		return t.fail(problem, "write "+quoted(thousands)+" if that is meant")
	}
	return t.fail(problem, "write it without a comma, like "+strconv.Quote(t.like))
}

// rewriteNumbers passes each number of s that holds a comma through f. It
// reports false if f does, or if a comma stands outside a number.
func rewriteNumbers(s string, f func(number string) (string, bool)) (string, bool) {
	part := func(c byte) bool { return c >= '0' && c <= '9' || c == '.' || c == ',' }
	var b strings.Builder
	for i := 0; i < len(s); {
		if !part(s[i]) {
			b.WriteByte(s[i])
			i++
			continue
		}
		j := i
		for j < len(s) && part(s[j]) {
			j++
		}
		number := s[i:j]
		if strings.Contains(number, ",") {
			if number[0] == ',' || number[len(number)-1] == ',' || strings.Contains(number, ",,") {
				return "", false
			}
			var ok bool
			if number, ok = f(number); !ok {
				return "", false
			}
		}
		b.WriteString(number)
		i = j
	}
	return b.String(), true
}

// number reads a plain decimal number, with a power of ten if there is one
// ("5e-4", as statistics programs write it), from the start of s, and gives
// what follows it.
func (t text) number(s string) (value float64, rest string, problem *QuantityError) {
	write := "write it like " + strconv.Quote(t.like)
	digits := func(i int) int {
		for i < len(s) && s[i] >= '0' && s[i] <= '9' {
			i++
		}
		return i
	}
	if s == "" {
		return 0, "", t.fail("a number is missing in "+quoted(t.input), write)
	}
	switch s[0] {
	case '-':
		return 0, "", t.fail(quoted(t.input)+" has a minus before a number", "write a number above zero, like "+strconv.Quote(t.like))
	case '+':
		return 0, "", t.fail(quoted(t.input)+" has a plus before a number", "leave the plus out")
	case '.':
		return 0, "", t.fail(quoted(t.input)+" has no digit before the decimal point", "write 0.5, not .5")
	}
	end := digits(0)
	if end == 0 {
		return 0, "", t.fail(quoted(t.input)+" has no number where one belongs", write)
	}
	if end < len(s) && s[end] == '.' {
		point := end
		end = digits(point + 1)
		if end == point+1 {
			return 0, "", t.fail(quoted(t.input)+" has no digit after the decimal point", "write 5 or 5.2, not a bare point")
		}
	}
	if end < len(s) && (s[end] == 'e' || s[end] == 'E') {
		sign := end + 1
		if sign < len(s) && (s[sign] == '+' || s[sign] == '-') {
			sign++
		}
		if last := digits(sign); last > sign {
			end = last
		}
	}
	if end < len(s) && (s[end] == 'x' || s[end] == 'X') {
		return 0, "", t.fail(quoted(t.input)+" has a number that is not in plain decimal digits", write)
	}
	rest = strings.TrimPrefix(s[end:], " ")
	if rest != "" && (rest[0] >= '0' && rest[0] <= '9' || rest[0] == '.' || rest[0] == '\'' || strings.HasPrefix(rest, "’")) {
		return 0, "", t.fail(quoted(t.input)+" has two numbers where one belongs", "write one number without a gap in it, and one unit, like "+strconv.Quote(t.like))
	}
	value, err := strconv.ParseFloat(s[:end], 64)
	switch {
	case errors.Is(err, strconv.ErrRange):
		return 0, "", t.fail(quoted(t.input)+" is a number beyond all use", write)
	case err != nil:
		return 0, "", t.fail(quoted(t.input)+" has no number where one belongs", write)
	case value == 0:
		return 0, "", t.fail(quoted(t.input)+" is zero", "write a number above zero, like "+strconv.Quote(t.like))
	}
	return value, rest, nil
}

// inBounds refuses values that nothing real has.
func (t text) inBounds(value float64) *QuantityError {
	if value >= smallestQuantity && value <= largestQuantity {
		return nil
	}
	size := "large"
	if value < smallestQuantity {
		size = "small"
	}
	return t.fail(quoted(t.input)+" is too "+size+" for "+t.kind, "check the number and its unit; write it like "+strconv.Quote(t.like))
}

// splitRange cuts "36-46 kg", "36 kg to 46 kg" into its two ends. A dash that
// is the sign of a power of ten is no range mark.
func (t text) splitRange() (low, high string, isRange bool, problem *QuantityError) {
	s := t.body
	cut, width := -1, 0
	for i := 1; i < len(s); i++ {
		w := 0
		switch {
		case s[i] == '-':
			power := (s[i-1] == 'e' || s[i-1] == 'E') && i >= 2 && s[i-2] >= '0' && s[i-2] <= '9'
			if !power {
				w = 1
			}
		case strings.HasPrefix(s[i:], " to "):
			w = len(" to ")
		}
		if w == 0 {
			continue
		}
		if cut >= 0 {
			return "", "", false, t.fail(quoted(t.input)+" has more than one range or minus sign", "write a range as "+strconv.Quote(t.like)+", smaller end first")
		}
		cut, width = i, w
	}
	if cut < 0 {
		return s, s, false, nil
	}
	return strings.TrimSpace(s[:cut]), strings.TrimSpace(s[cut+width:]), true, nil
}

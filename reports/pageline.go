package reports

import (
	"strings"
	"unicode"
	"unicode/utf8"
)

// run is a piece of text in one weight. A paragraph is a list of runs; the
// spaces between two words may stand in either run.
type run struct {
	text string
	bold bool
}

func plain(s string) run { return run{text: s} }
func bold(s string) run  { return run{text: s, bold: true} }

// textSpan is the part of a line that comes from one run.
type textSpan struct {
	x    int // thousandths of an em from the start of the line
	text string
	bold bool
}

// textLine is one line of a paragraph.
type textLine struct {
	spans []textSpan
	units int // width in thousandths of an em
}

// token is what stands between two spaces, in one or (where the weight changes
// inside a word) more pieces. All widths are thousandths of an em.
type token struct {
	first, last int  // its pieces: pieces[first:last]
	space       int  // width of the spaces before it
	width       int  // its own width
	bond        bond // to the token before it
}

// bond is how firmly two tokens share a line.
type bond int

const (
	loose  bond = iota // a line may end between them
	paired             // the low end of a range and "to"
	held               // an operator and what it works on, "to" and its number
	tight              // a number and its unit
)

type piece struct {
	run, start, end int // text[start:end] of a run
	width           int
}

// breaker wraps text into lines. It holds scratch space, so one serves a whole
// document; it is not for use by two goroutines at once.
//
// A line may end at a space (U+0020) and nowhere else, except that
//   - a number stays with its unit and with the operator or word before it
//     ("10 mg/kg", "± 5 %", "to 18.9", "every 12 hours");
//   - an operator ("=", "×") never ends a line, so a long formula turns over
//     before it;
//   - both ends of a range share a line ("3.27 to 122 mg/kg");
//   - where that does not fit, the range is let go first, then the operator,
//     and the unit last; a word wider than the whole line is broken hard, at best after a mark
//     such as / or -.
//
// All other spaces (no-break, thin, figure) hold what they join.
type breaker struct {
	tokens []token
	pieces []piece
}

// split cuts the runs into tokens.
func (b *breaker) split(runs []run) {
	b.tokens, b.pieces = b.tokens[:0], b.pieces[:0]
	space, apart := 0, true
	for i, r := range runs {
		face := sans(r.bold)
		blank := int(face.widths()[' '])
		for at := 0; at < len(r.text); {
			if r.text[at] == ' ' {
				space += blank
				apart = true
				at++
				continue
			}
			end := strings.IndexByte(r.text[at:], ' ')
			if end < 0 {
				end = len(r.text)
			} else {
				end += at
			}
			w := face.units(r.text[at:end])
			b.pieces = append(b.pieces, piece{run: i, start: at, end: end, width: w})
			if apart {
				b.tokens = append(b.tokens, token{first: len(b.pieces) - 1, last: len(b.pieces), space: space, width: w})
			} else {
				t := &b.tokens[len(b.tokens)-1]
				t.last = len(b.pieces)
				t.width += w
			}
			space, apart = 0, false
			at = end
		}
	}
	previous, figure := "", false // and whether the word before previous ends in a figure
	for i := range b.tokens {
		word := b.word(runs, b.tokens[i])
		if i > 0 {
			b.tokens[i].bond = bondBetween(previous, word)
		}
		if figure && previous == "to" && startsWithFigure(word) {
			b.tokens[i-1].bond = paired
		}
		previous, figure = word, endsInFigure(previous)
	}
}

func (b *breaker) word(runs []run, t token) string {
	p := b.pieces[t.first]
	word := runs[p.run].text[p.start:p.end]
	for _, p := range b.pieces[t.first+1 : t.last] {
		word += runs[p.run].text[p.start:p.end]
	}
	return word
}

// chunk returns the end of the tokens from i on that are bound to each other at
// least so firmly, and their width without the space before the first.
func (b *breaker) chunk(i int, firm bond) (end, width int) {
	width = b.tokens[i].width
	for end = i + 1; end < len(b.tokens) && b.tokens[end].bond >= firm; end++ {
		width += b.tokens[end].space + b.tokens[end].width
	}
	return end, width
}

// extent returns the width of the runs on one line, and of the widest part
// that should not be broken, both in thousandths of an em.
func (b *breaker) extent(runs []run) (natural, least int) {
	b.split(runs)
	for i := 0; i < len(b.tokens); {
		end, w := b.chunk(i, held)
		if i > 0 {
			natural += b.tokens[i].space
		}
		natural += w
		least = max(least, w)
		i = end
	}
	return natural, least
}

// wrap sets the runs in lines at most width thousandths of an em wide. There
// is always at least one line, if an empty one.
func (b *breaker) wrap(runs []run, width int) []textLine {
	b.split(runs)
	w := wrapping{runs: runs, width: width, lines: make([]textLine, 0, 1)}
	for i := 0; i < len(b.tokens); {
		end, chunk := i, 0
		for firm := paired; firm <= tight+1; firm++ {
			if end, chunk = b.chunk(i, firm); chunk <= width {
				break
			}
		}
		if !w.empty() && w.line.units+b.tokens[i].space+chunk > width {
			w.turn()
		}
		for ; i < end; i++ {
			t := b.tokens[i]
			if !w.empty() {
				w.line.units += t.space
			}
			for _, p := range b.pieces[t.first:t.last] {
				w.add(p, chunk <= width)
			}
		}
	}
	if !w.empty() || len(w.lines) == 0 {
		w.turn()
	}
	return w.lines
}

// wrapping is the state of one call of wrap.
type wrapping struct {
	runs  []run
	width int
	lines []textLine
	line  textLine

	lastRun, lastStart int // where the last span of the line came from
}

func (w *wrapping) empty() bool { return len(w.line.spans) == 0 }

func (w *wrapping) turn() {
	w.lines = append(w.lines, w.line)
	w.line = textLine{}
}

// add puts a piece on the line; one that does not fit is broken hard.
func (w *wrapping) add(p piece, fits bool) {
	if fits || w.line.units+p.width <= w.width {
		w.place(p.run, p.start, p.end, p.width)
		return
	}
	text, face := w.runs[p.run].text, sans(w.runs[p.run].bold)
	for at := p.start; at < p.end; {
		end, units := at, 0
		good, goodUnits := at, 0
		for end < p.end {
			r, n := utf8.DecodeRuneInString(text[end:p.end])
			u := face.units(text[end : end+n])
			if w.line.units+units+u > w.width {
				break
			}
			end += n
			units += u
			if strings.ContainsRune("/-_.,:;@)=&", r) {
				good, goodUnits = end, units
			}
		}
		if end < p.end && good > at && 2*goodUnits > units {
			end, units = good, goodUnits
		}
		if end == at {
			if !w.empty() { // the rest of the line is too narrow even for one letter
				w.turn()
				continue
			}
			_, n := utf8.DecodeRuneInString(text[at:p.end])
			end, units = at+n, face.units(text[at:at+n])
		}
		w.place(p.run, at, end, units)
		at = end
		if at < p.end {
			w.turn()
		}
	}
}

// place appends text[start:end] of a run to the line, joining it to the span
// before it where both come from the same run: the spaces between are then
// part of the span.
func (w *wrapping) place(from, start, end, units int) {
	n := len(w.line.spans)
	if n > 0 && w.lastRun == from {
		w.line.spans[n-1].text = w.runs[from].text[w.lastStart:end]
	} else {
		w.line.spans = append(w.line.spans, textSpan{x: w.line.units, text: w.runs[from].text[start:end], bold: w.runs[from].bold})
		w.lastRun, w.lastStart = from, start
	}
	w.line.units += units
}

// bondBetween says how firmly the words before and next share a line.
func bondBetween(before, next string) bond {
	switch before {
	case "=", "×", "·", "+", "−", "±", "≈", "≤", "≥", "<", ">", "÷", "/", "√", "~", "∝":
		return held
	case "to", "every":
		if startsWithFigure(next) {
			return held
		}
		return loose
	}
	if endsInFigure(before) && isUnit(next) {
		return tight
	}
	return loose
}

func startsWithFigure(s string) bool {
	s = strings.TrimLeft(s, "(−+±-")
	return s != "" && '0' <= s[0] && s[0] <= '9'
}

func endsInFigure(s string) bool {
	s = strings.TrimRight(s, ")]")
	if s == "" {
		return false
	}
	if c := s[len(s)-1]; c < utf8.RuneSelf {
		return '0' <= c && c <= '9'
	}
	r, _ := utf8.DecodeLastRuneInString(s)
	return unicode.Is(unicode.No, r) // superscripts and fractions
}

// isUnit reports whether s is a unit of measure or a counted word, with any
// punctuation around it: "mg/kg,", "kg⁰·⁷⁵", "%)", "hours".
func isUnit(s string) bool {
	s = strings.TrimLeft(s, "([")
	s = strings.TrimRight(s, ".,;:)]?!")
	if s == "" {
		return false
	}
	for s != "" {
		factor := s
		if i := strings.IndexAny(s, "/·"); i >= 0 && !isExponentDot(s, i) {
			factor, s = s[:i], strings.TrimPrefix(strings.TrimPrefix(s[i:], "/"), "·")
			if s == "" {
				return false
			}
		} else {
			s = ""
		}
		if i := strings.IndexAny(factor, "^⁰¹²³⁴⁵⁶⁷⁸⁹⁻"); i > 0 {
			factor = factor[:i]
		}
		if !unitWords[factor] {
			return false
		}
	}
	return true
}

// isExponentDot reports whether the dot at i is the decimal point of an
// exponent, as in kg⁰·⁷⁵, and not a sign of multiplication.
func isExponentDot(s string, i int) bool {
	if !strings.HasPrefix(s[i:], "·") || i == 0 {
		return false
	}
	r, _ := utf8.DecodeLastRuneInString(s[:i])
	return unicode.Is(unicode.No, r)
}

// unitWords are the units and counted words that a number is not parted from.
var unitWords = func() map[string]bool {
	m := make(map[string]bool)
	for _, w := range strings.Fields(`
		% ‰ °C °F K
		t kg g mg mcg ng lb oz
		L dL mL mcL
		s min h d second seconds minute minutes hour hours day days week weeks month months year years
		W kW mW J kJ kcal cal
		mol mmol nmol mEq IU units unit
		km m cm mm nm ha Hz Pa kPa mmHg V mV
		pt dose doses times fold tablet tablets capsule capsules vial vials drop drops animal animals species rows pages`) {
		m[w] = true
	}
	return m
}()

// A terminal shows what it is sent. Two rules keep a worksheet on it honest:
// every text passes shown before it is laid out, so that no text of the case
// can move the cursor, change a colour or turn the writing direction; and
// nothing is told by colour alone.

package reports

import (
	"bytes"
	"strings"
)

// style is how a piece of text looks where colour is shown. Each has a word or
// a mark beside it, so that taking the colour away loses nothing.
type style int

const (
	styleNone style = iota
	styleHead       // headings and the order
	styleStop
	styleWarn
	styleFaint // sources and what is read last
)

// escapes of ECMA-48 (Select Graphic Rendition), which every terminal of use
// understands.
var escapes = [...]string{styleHead: "\x1b[1m", styleStop: "\x1b[1;31m", styleWarn: "\x1b[1;33m", styleFaint: "\x1b[2m"}

const endStyle = "\x1b[0m"

// words is a piece of text in one style.
type words struct {
	style style
	text  string
}

// terminal lays text out in lines of so many columns.
type terminal struct {
	width  int
	colour bool
	b      bytes.Buffer

	// left and right stand at the ends of every line while a box is open;
	// the text between them is width columns wide.
	left, right string
}

// boxLetters are those that the box around the draft is drawn with. No text can
// hold them, so that none can pass for a box.
var boxLetters = strings.NewReplacer("┏", `\u250f`, "┓", `\u2513`, "┗", `\u2517`, "┛", `\u251b`, "┃", `\u2503`)

// shown is a text as it goes on the terminal.
func shown(s string) string {
	s = visible(s)
	if strings.Contains(s, "\xe2\x94") { // how each of them begins
		s = boxLetters.Replace(s)
	}
	return s
}

// line writes one line of pieces.
func (t *terminal) line(pieces ...words) {
	t.b.WriteString(t.left)
	used := 0
	last := len(pieces)
	for last > 0 && pieces[last-1].text == "" {
		last--
	}
	for i, p := range pieces[:last] {
		text := shown(p.text)
		if i == last-1 && t.right == "" {
			text = strings.TrimRight(text, " ")
		}
		used += columns(text)
		if t.colour && p.style != styleNone && text != "" {
			t.b.WriteString(escapes[p.style] + text + endStyle)
		} else {
			t.b.WriteString(text)
		}
	}
	if t.right != "" {
		t.b.WriteString(strings.Repeat(" ", max(0, t.width-used)) + t.right)
	}
	t.b.WriteByte('\n')
}

// blank writes an empty line.
func (t *terminal) blank() { t.line() }

// heading opens a section.
func (t *terminal) heading(title string) {
	t.blank()
	for _, l := range wrapColumns(shown(title), t.width, t.width) {
		t.line(words{styleHead, l})
	}
}

// para writes a paragraph that hangs under what stands before it: lead, in its
// own style, then text beside it, broken where it must be. Where text is empty
// lead stands alone.
func (t *terminal) para(indent int, lead words, text words) {
	pad := strings.Repeat(" ", indent)
	lead.text, text.text = shown(lead.text), shown(text.text)
	hang := indent
	first := pad
	if lead.text != "" {
		hang += columns(lead.text) + 1
		lead.text += " "
	}
	if hang > t.width/2 { // too little left beside it: go on under it
		for _, l := range wrapColumns(lead.text, t.width-indent, t.width-indent) {
			t.line(words{text: pad}, words{lead.style, l})
		}
		if text.text == "" {
			return
		}
		lead.text, first = "", pad+"  "
		hang = indent + 2
	}
	for i, l := range wrapColumns(text.text, t.width-hang, t.width-hang) {
		if i == 0 {
			t.line(words{text: first}, lead, words{text.style, l})
			continue
		}
		t.line(words{text: strings.Repeat(" ", hang)}, words{text.style, l})
	}
}

// text writes a paragraph at an indent.
func (t *terminal) text(indent int, s string) { t.para(indent, words{}, words{text: s}) }

// faint writes a paragraph of what is read last.
func (t *terminal) faint(indent int, s string) {
	t.para(indent, words{}, words{styleFaint, s})
}

// open begins a box with a title in its upper edge; shut ends it.
func (t *terminal) open(title string) {
	edge := "┏━ " + title + " "
	t.b.WriteString(edge + strings.Repeat("━", max(0, t.width-columns(edge)-1)) + "┓\n")
	t.width -= 4
	t.left, t.right = "┃ ", " ┃"
}

func (t *terminal) shut() {
	t.width += 4
	t.left, t.right = "", ""
	t.b.WriteString("┗" + strings.Repeat("━", t.width-2) + "┛\n")
}

// wrapColumns breaks a text into lines, the first at most first columns wide,
// the others rest. A line ends at a space, never between a number and its unit
// or an operator and what it works on; a word wider than a line is broken hard.
func wrapColumns(s string, first, rest int) []string {
	first, rest = max(first, 1), max(rest, 1)
	tokens := strings.FieldsFunc(s, func(r rune) bool { return r == ' ' })
	var lines []string
	var line strings.Builder
	used, limit := 0, first
	turn := func() {
		lines = append(lines, line.String())
		line.Reset()
		used, limit = 0, rest
	}
	put := func(token string) {
		if used > 0 {
			line.WriteByte(' ')
			used++
		}
		line.WriteString(token)
		used += columns(token)
	}
	for i := 0; i < len(tokens); {
		// As firmly bound together as fits on a line of their own.
		end, wide := i+1, columns(tokens[i])
		for firm := held; firm <= tight+1; firm++ {
			end, wide = i+1, columns(tokens[i])
			for end < len(tokens) && firm <= tight && bondOf(tokens, end) >= firm {
				wide += 1 + columns(tokens[end])
				end++
			}
			if wide <= rest {
				break
			}
		}
		if used > 0 && used+1+wide > limit {
			turn()
		}
		if wide <= limit {
			for ; i < end; i++ {
				put(tokens[i])
			}
			continue
		}
		for _, r := range tokens[i] { // wider than a whole line
			if c := columns(string(r)); used+c > limit {
				turn()
			}
			line.WriteRune(r)
			used += columns(string(r))
		}
		i++
	}
	if used > 0 || len(lines) == 0 {
		turn()
	}
	return lines
}

// bondOf is how firmly a word holds to the one before it: as on paper, and both
// ends of "3.27 to 122 mg/kg" together.
func bondOf(tokens []string, i int) bond {
	if tokens[i] == "to" && i+1 < len(tokens) && startsWithFigure(tokens[i-1]) && startsWithFigure(tokens[i+1]) {
		return held
	}
	return bondBetween(tokens[i-1], tokens[i])
}

// table is rows of short cells under a head. Its cells are never broken: where
// the columns do not fit side by side, those that do not are set below in a
// table of their own, with the first column again.
type table struct {
	head []string // one line each, or two with a line break
	rows [][]string
}

func (tb *table) row(cells ...string) { tb.rows = append(tb.rows, cells) }

const (
	tableIndent = 2
	tableGap    = 2
)

// table writes the table in as many parts as the width asks for. Columns that
// are empty in every row are left out.
func (t *terminal) table(tb *table) {
	type column struct {
		head  []string
		cells []string
		width int
		right bool
	}
	var cols []column
	for i := range tb.head {
		c := column{head: strings.Split(tb.head[i], "\n")}
		used := false
		for _, row := range tb.rows {
			cell := ""
			if i < len(row) {
				cell = shown(row[i])
			}
			used = used || cell != ""
			c.cells = append(c.cells, cell)
		}
		if !used && i > 0 {
			continue
		}
		if i > 0 {
			c.cells, c.right = alignFigures(c.cells)
		}
		for _, cell := range append(c.head, c.cells...) {
			c.width = max(c.width, columns(cell))
		}
		cols = append(cols, c)
	}
	put := func(s string, width int, right bool) string {
		blank := strings.Repeat(" ", max(0, width-columns(s)))
		if right {
			return blank + s
		}
		return s + blank
	}
	for next := 1; next < len(cols); {
		part := []column{cols[0]}
		used := tableIndent + cols[0].width
		for next < len(cols) && (len(part) == 1 || used+tableGap+cols[next].width <= t.width) {
			used += tableGap + cols[next].width
			part = append(part, cols[next])
			next++
		}
		lines := 1
		for _, c := range part {
			lines = max(lines, len(c.head))
		}
		write := func(cell func(column) string, s style) {
			var b strings.Builder
			b.WriteString(strings.Repeat(" ", tableIndent))
			for i, c := range part {
				if i > 0 {
					b.WriteString(strings.Repeat(" ", tableGap))
				}
				b.WriteString(put(cell(c), c.width, c.right))
			}
			t.line(words{s, strings.TrimRight(b.String(), " ")})
		}
		for l := 0; l < lines; l++ {
			write(func(c column) string {
				if k := l - (lines - len(c.head)); k >= 0 {
					return c.head[k]
				}
				return ""
			}, styleFaint)
		}
		for r := range tb.rows {
			s := styleNone
			if strings.HasPrefix(cols[0].cells[r], chosenMark) {
				s = styleHead
			}
			write(func(c column) string { return c.cells[r] }, s)
		}
		if next < len(cols) {
			t.blank()
		}
	}
}

// figures is a cell taken apart: the whole part of its first number, and all
// that follows. unit is what stands behind the last number.
type figures struct{ whole, rest, unit string }

// readFigures takes "18.9 to 37.9 mg/kg" apart; ok is false for a text that
// does not begin with a number.
func readFigures(s string) (f figures, ok bool) {
	n := 0
	for n < len(s) && (s[n] >= '0' && s[n] <= '9' || s[n] == ',') {
		n++
	}
	if n == 0 {
		return f, false
	}
	f.whole, f.rest = s[:n], s[n:]
	f.unit = strings.TrimLeft(f.rest, ".0123456789")
	if high, two := strings.CutPrefix(f.unit, " to "); two {
		f.unit = strings.TrimLeft(high, ".,0123456789")
	}
	return f, f.unit == "" || f.unit[0] == ' '
}

// alignFigures pads the cells of a column so that the decimal points of their
// first numbers stand below one another; the unit follows its number as
// everywhere. It does so only where every cell is a number in one and the same
// unit: a 2 above a 2 must not be g above mg. right says that a column of
// figures in several units is set to the right instead.
func alignFigures(cells []string) (out []string, right bool) {
	parts := make([]figures, len(cells))
	unit, mixed, wide := "", false, 0
	for i, s := range cells {
		if s == "" {
			continue
		}
		f, ok := readFigures(s)
		if !ok {
			return cells, false
		}
		mixed = mixed || unit != "" && f.unit != unit
		unit, wide, parts[i] = f.unit, max(wide, len(f.whole)), f
	}
	if mixed {
		return cells, true
	}
	for i, s := range cells {
		if s != "" {
			s = strings.Repeat(" ", wide-len(parts[i].whole)) + s
		}
		out = append(out, s)
	}
	return out, false
}

package reports

import (
	"math"
	"strings"
)

// cellAlign is how the cells of a column stand.
type cellAlign int

const (
	alignLeft    cellAlign = iota
	alignRight             // for figures of the same number of decimals
	alignDecimal           // the decimal points of the first figures under each other
)

// tableColumn is a column of a table.
type tableColumn struct {
	head  string
	align cellAlign
	grow  float64 // its share of what width is left over
}

// tableRow is a row of a table; a cell is a list of runs. Cells left out are empty.
type tableRow struct {
	cells [][]run
	rule  bool // a rule above it, between groups of rows
}

// pageTable is a table as wide as its text needs, or as the page where a column
// grows.
type pageTable struct {
	columns []tableColumn
	rows    []tableRow
	size    float64 // sizeBody when zero
}

// cellTexts makes cells of plain text.
func cellTexts(cells ...string) [][]run {
	out := make([][]run, len(cells))
	for i, c := range cells {
		out[i] = []run{plain(c)}
	}
	return out
}

// cellLines is the text of a cell, set.
type cellLines struct {
	x, width float64
	align    cellAlign
	lines    []textLine
}

// appendRow appends the bands of a row of cells: one band a line, all kept
// together, so that a row is split only where no page could hold it.
func appendRow(bands []band, cells []cellLines, size, pad float64) []band {
	height := 1
	for _, c := range cells {
		height = max(height, len(c.lines))
	}
	for i := range height {
		s := band{height: size * lineHeight, keep: i < height-1}
		base := size * lineBase
		if i == 0 {
			s.height += pad
			base += pad
		}
		if i == height-1 {
			s.height += pad
		}
		for _, c := range cells {
			if i >= len(c.lines) {
				continue
			}
			x := c.x
			if c.align == alignRight {
				x += c.width - points(c.lines[i].units, size)
			}
			s.labels = appendLine(s.labels, c.lines[i], x, base, size)
		}
		bands = append(bands, s)
	}
	return bands
}

// longestWord is the width, in ems, of the longest word that a column is made
// wide enough for.
const longestWord = 11

// longestFigure is the width, in thousandths of an em, up to which a cell is
// aligned at its decimal point; a sentence in such a column is set as text.
const longestFigure = 14000

// measure is what a column needs, in points.
type measure struct {
	natural, least float64
	whole, rest    float64 // of decimal cells: before the point, and from it on
}

// table adds a table. Its head, set in bold, is repeated when it runs over a
// page; a row is not split between pages.
func (f *flow) table(t pageTable) {
	if t.size == 0 {
		t.size = sizeBody
	}
	const pad = 2
	b := &f.doc.breaker

	heads := make([][]run, len(t.columns))
	headed := false
	for i, c := range t.columns {
		heads[i] = f.doc.admit([]run{bold(c.head)})
		headed = headed || c.head != ""
	}
	cells := make([][][]run, len(t.rows))
	for r, row := range t.rows {
		cells[r] = make([][]run, len(t.columns))
		for c := range t.columns {
			if c < len(row.cells) {
				cells[r][c] = f.doc.admit(row.cells[c])
			}
		}
	}

	// What each column needs.
	needs := make([]measure, len(t.columns))
	for c := range t.columns {
		m := &needs[c]
		natural, least := b.extent(heads[c])
		m.natural, m.least = points(natural, t.size), points(least, t.size)
		for r := range cells {
			natural, least := b.extent(cells[r][c])
			if t.columns[c].align == alignDecimal && natural <= longestFigure {
				whole, rest := f.parts(cells[r][c], t.size)
				m.whole, m.rest = max(m.whole, whole), max(m.rest, rest)
				continue
			}
			m.natural, m.least = max(m.natural, points(natural, t.size)), max(m.least, points(least, t.size))
		}
		// One long address must not starve the other columns: it is broken.
		m.least = min(m.least, longestWord*t.size)
		if t.columns[c].align == alignDecimal {
			m.natural, m.least = max(m.natural, m.whole+m.rest), max(m.least, m.whole+m.rest)
		}
	}
	widths := f.share(t.columns, needs)

	// Where each column stands.
	xs := make([]float64, len(widths))
	x := f.x
	for c, w := range widths {
		xs[c] = x
		x += w + gapColumn
	}
	full := x - gapColumn - f.x

	set := func(c int, runs []run, al cellAlign) cellLines {
		out := cellLines{x: xs[c], width: widths[c], align: al}
		if al == alignDecimal {
			whole, rest := f.parts(runs, t.size)
			// What is too long for a figure, and a column that had to be
			// narrowed below its figures, is set as text.
			if m := needs[c]; m.whole+m.rest <= widths[c]+slack && whole <= m.whole+slack && rest <= m.rest+slack {
				out.x = xs[c] + widths[c] - m.rest - whole
				out.align = alignLeft
				out.width = whole + rest
			}
		}
		out.lines = f.lines(t.size, out.width, runs)
		return out
	}

	var head *tableHead
	if headed {
		var row []cellLines
		deepest := 0
		for c := range t.columns {
			al := t.columns[c].align
			if al == alignDecimal {
				al = alignRight
			}
			row = append(row, set(c, heads[c], al))
			deepest = max(deepest, len(row[c].lines))
		}
		for c := range row { // heads stand on the rule
			row[c].lines = append(make([]textLine, deepest-len(row[c].lines)), row[c].lines...)
		}
		head = &tableHead{bands: appendRow(nil, row, t.size, pad)}
		last := &head.bands[len(head.bands)-1]
		last.ruleBelow, last.ruleX, last.ruleWidth = rulerThin, f.x, full
		for i := range head.bands {
			head.bands[i].keep = true
			head.height += head.bands[i].height
		}
		start := len(f.bands)
		f.bands = append(f.bands, head.bands...)
		f.bands[start].gap = gapBlock
	}
	for r, row := range t.rows {
		var line []cellLines
		for c := range t.columns {
			line = append(line, set(c, cells[r][c], t.columns[c].align))
		}
		start := len(f.bands)
		f.bands = appendRow(f.bands, line, t.size, pad)
		if row.rule && r > 0 {
			s := &f.bands[start]
			s.ruleAbove, s.ruleX, s.ruleWidth = rulerHair, f.x, full
		}
		if r == 0 && !headed {
			f.bands[start].gap = gapBlock
		}
		for i := start; i < len(f.bands); i++ {
			f.bands[i].head = head
		}
		last := &f.bands[len(f.bands)-1]
		// The first two rows and the last two share a page: no row stands alone.
		last.keep = r == 0 && len(t.rows) > 1 || r == len(t.rows)-2
		if r == len(t.rows)-1 {
			last.ruleBelow, last.ruleX, last.ruleWidth = rulerThin, f.x, full
		}
	}
}

// share divides the width of the flow among the columns. Where all text does
// not fit on one line, each column gets room by the square root of its text,
// which gives rows of few lines, but not more than its text needs nor less than
// its longest word.
func (f *flow) share(columns []tableColumn, needs []measure) []float64 {
	room := f.width - gapColumn*float64(len(columns)-1)
	var natural, least, grow float64
	for c, m := range needs {
		natural += m.natural
		least += m.least
		grow += columns[c].grow
	}
	widths := make([]float64, len(needs))
	if natural <= room || least > room {
		for c, m := range needs {
			switch {
			case least > room:
				widths[c] = m.least * room / least
			case grow > 0:
				widths[c] = m.natural + (room-natural)*columns[c].grow/grow
			default:
				widths[c] = m.natural
			}
		}
		return widths
	}
	settled := make([]bool, len(needs))
	// A short text stays on one line, if that leaves the others their words.
	brief := room / (1.5 * float64(len(needs)))
	for c, m := range needs {
		if m.natural <= brief && least+m.natural-m.least <= room {
			widths[c], settled[c] = m.natural, true
			least += m.natural - m.least
		}
	}
	for c := range needs {
		if settled[c] {
			room -= widths[c]
		}
	}
	for {
		roots := 0.0
		for c, m := range needs {
			if !settled[c] {
				roots += math.Sqrt(m.natural)
			}
		}
		again := false
		for _, bound := range []func(m measure, w float64) (float64, bool){
			func(m measure, w float64) (float64, bool) { return m.least, w < m.least },
			func(m measure, w float64) (float64, bool) { return m.natural, w > m.natural },
		} {
			left := room
			for c, m := range needs {
				if settled[c] {
					continue
				}
				w := room * math.Sqrt(m.natural) / roots
				if at, over := bound(m, w); over {
					widths[c], settled[c], again = at, true, true
					left -= at
				} else {
					widths[c] = w
				}
			}
			if again {
				room = left
				break
			}
		}
		if !again {
			return widths
		}
	}
}

// parts returns the widths, in points, of a decimal cell before its decimal
// point and from there on. A cell without a figure stands before the point.
func (f *flow) parts(runs []run, size float64) (whole, rest float64) {
	natural, _ := f.doc.breaker.extent(runs)
	total := points(natural, size)
	before := 0
	for _, r := range runs {
		if i := wholeEnd(r.text); i >= 0 {
			before += sans(r.bold).units(strings.TrimLeft(r.text[:i], " "))
			whole = points(before, size)
			return whole, total - whole
		}
		before += sans(r.bold).units(r.text)
	}
	return total, 0
}

// wholeEnd returns where the whole part of the first figure in s ends, or -1:
// "≤ 1,234.5 mg" gives the index of the point.
func wholeEnd(s string) int {
	start := strings.IndexAny(s, "0123456789")
	if start < 0 {
		return -1
	}
	for i := start; i < len(s); i++ {
		c := s[i]
		if '0' <= c && c <= '9' || c == ',' && i+1 < len(s) && '0' <= s[i+1] && s[i+1] <= '9' {
			continue
		}
		return i
	}
	return len(s)
}

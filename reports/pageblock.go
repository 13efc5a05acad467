package reports

import (
	"fmt"
	"strconv"

	"gonum.org/v1/plot/vg"
)

// flow is a column of blocks, set one under the other. Each method adds a
// block.
type flow struct {
	doc   *document
	x     float64
	width float64
	bands []band
}

// paraStyle is how a paragraph is set. The zero value is running text.
type paraStyle struct {
	size   float64 // sizeBody when zero
	gap    float64 // space above; gapBlock when zero, none when negative
	indent float64 // of the whole paragraph
	center bool
	keep   bool // with the block that follows
}

func (s paraStyle) sized() float64 {
	if s.size == 0 {
		return sizeBody
	}
	return s.size
}

func (s paraStyle) above() float64 {
	switch {
	case s.gap < 0:
		return 0
	case s.gap == 0:
		return gapBlock
	}
	return s.gap
}

// para adds a paragraph of running text.
func (f *flow) para(runs ...run) { f.paragraph(paraStyle{}, runs...) }

// paragraph adds a paragraph. A page break leaves at least two of its lines on
// either side.
func (f *flow) paragraph(st paraStyle, runs ...run) {
	size := st.sized()
	lines := f.lines(size, f.width-st.indent, f.doc.admit(runs))
	for i, line := range lines {
		x := f.x + st.indent
		if st.center {
			x += (f.width - st.indent - points(line.units, size)) / 2
		}
		s := band{height: size * lineHeight, labels: appendLine(nil, line, x, size*lineBase, size)}
		switch {
		case i == 0:
			s.gap = st.above()
			s.keep = len(lines) > 1
		case i == len(lines)-2:
			s.keep = true
		}
		if i == len(lines)-1 {
			s.keep = st.keep
		}
		f.bands = append(f.bands, s)
	}
}

// lines wraps runs that have been admitted.
func (f *flow) lines(size, width float64, runs []run) []textLine {
	return f.doc.breaker.wrap(runs, thousandths(width, size))
}

// thousandths converts a length to thousandths of an em, rounded down; the
// slack lets a text fit into a column that was made as wide as the text.
func thousandths(width, size float64) int { return int(width*1000/size + slack) }

func points(units int, size float64) float64 { return float64(units) * size / 1000 }

// appendLine appends the spans of a line that starts at x.
func appendLine(labels []placedText, line textLine, x, base, size float64) []placedText {
	for _, s := range line.spans {
		labels = append(labels, placedText{x: x + points(s.x, size), base: base, size: size, bold: s.bold, text: s.text})
	}
	return labels
}

// heading adds a heading, which stays with what follows it and names the texts
// under it in errors.
func (f *flow) heading(text string) {
	f.doc.naming(text)
	n := len(f.bands)
	f.paragraph(paraStyle{size: sizeHead, gap: gapHeading, keep: true}, bold(text))
	for i := n; i < len(f.bands); i++ {
		f.bands[i].keep = true
	}
	f.bands = append(f.bands, band{height: 3, keep: true, shapes: []shape{{kind: shapeRule, x: f.x, y: 1, w: f.width, line: rulerThin}}})
}

// space adds empty height, dropped at the top of a page.
func (f *flow) space(h float64) {
	f.bands = append(f.bands, band{gap: h})
}

// rule adds a line across.
func (f *flow) rule(thickness float64) {
	f.bands = append(f.bands, band{gap: 2, height: 2, shapes: []shape{{kind: shapeRule, x: f.x, y: 1, w: f.width, line: thickness}}})
}

// keepNext keeps the block added last on the page of the one added next.
func (f *flow) keepNext() {
	if n := len(f.bands); n > 0 {
		f.bands[n-1].keep = true
	}
}

// together adds blocks that share a page, if a page can hold them.
func (f *flow) together(add func(*flow)) {
	g := &flow{doc: f.doc, x: f.x, width: f.width}
	add(g)
	for i := range g.bands[:max(0, len(g.bands)-1)] {
		g.bands[i].keep = true
	}
	f.bands = append(f.bands, g.bands...)
}

// box adds blocks with a frame around them, kept together.
func (f *flow) box(add func(*flow)) {
	const pad = 8
	fr := &frame{x: f.x, width: f.width, line: rulerHeavy}
	g := &flow{doc: f.doc, x: f.x + pad, width: f.width - 2*pad}
	add(g)
	f.bands = append(f.bands, band{gap: gapBlock + 2, height: pad - 2, keep: true, frame: fr})
	for i, s := range g.bands {
		if i == 0 {
			s.gap = 0
		}
		s.keep, s.frame = true, fr
		f.bands = append(f.bands, s)
	}
	f.bands = append(f.bands, band{height: pad, frame: fr}, band{gap: 3})
}

// split adds a line or more with one text at the left and one, on one line, at
// the right edge.
func (f *flow) split(st paraStyle, left, right []run) {
	size := st.sized()
	left, right = f.doc.admit(left), f.doc.admit(right)
	natural, _ := f.doc.breaker.extent(right)
	w := points(natural, size)
	lines := f.lines(size, max(f.width-w-gapColumn, f.width/4), left)
	rights := f.lines(size, f.width, right)
	for i, line := range lines {
		s := band{height: size * lineHeight, keep: i < len(lines)-1, labels: appendLine(nil, line, f.x, size*lineBase, size)}
		if i == 0 {
			s.gap = st.above()
			s.labels = appendLine(s.labels, rights[0], f.x+f.width-points(rights[0].units, size), size*lineBase, size)
		}
		f.bands = append(f.bands, s)
	}
}

// keyValue is a name and what stands under it.
type keyValue struct {
	key   string
	value []run
}

// pairs adds names with their values, in the given number of columns, row by
// row.
func (f *flow) pairs(columns int, pairs ...keyValue) {
	const size = sizeBody
	width := (f.width - float64(columns-1)*2*gapColumn) / float64(columns)
	keys := make([]float64, columns)
	for i := range pairs {
		key := f.doc.admit([]run{plain(pairs[i].key)})
		pairs[i].key = key[0].text
		keys[i%columns] = max(keys[i%columns], points(sansRegular.units(pairs[i].key), size))
	}
	for c := range keys {
		keys[c] = min(keys[c], 0.4*width)
	}
	for i := 0; i < len(pairs); i += columns {
		var row []cellLines
		for c, p := range pairs[i:min(i+columns, len(pairs))] {
			x := f.x + float64(c)*(width+2*gapColumn)
			row = append(row,
				cellLines{x: x, width: keys[c], lines: f.lines(size, keys[c], []run{plain(p.key)})},
				cellLines{x: x + keys[c] + gapColumn, lines: f.lines(size, width-keys[c]-gapColumn, f.doc.admit(p.value))})
		}
		n := len(f.bands)
		f.bands = appendRow(f.bands, row, size, 0)
		if i == 0 {
			f.bands[n].gap = gapBlock
		} else {
			f.bands[n].gap = 1
		}
	}
}

// markedItem is a text with a mark or a box to tick, or both, before it.
type markedItem struct {
	mark   mark
	tick   bool
	text   []run
	under  []run   // a second paragraph, as dark and as large
	indent float64 // of the text; wide enough for the marks when zero
}

// item adds an item, kept together.
func (f *flow) item(it markedItem) {
	const size = sizeBody
	var marks []shape
	x := f.x
	for _, m := range []mark{it.mark, markTick} {
		if m == markNone || m == markTick && !it.tick {
			continue
		}
		// Centred on the height of a capital letter, 0.73 of the size.
		y := size*lineBase - 0.73*size/2 - tickSide/2
		marks = append(marks, shape{kind: m, x: x, y: y, w: tickSide, line: 1})
		x += indentMark
	}
	indent := max(it.indent, x-f.x)
	f.together(func(g *flow) {
		g.paragraph(paraStyle{indent: indent, gap: 4}, it.text...)
		g.bands[0].shapes = marks
		if len(it.under) > 0 {
			g.paragraph(paraStyle{indent: indent, gap: -1}, it.under...)
		}
	})
}

// bullet adds an item of a list.
func (f *flow) bullet(st paraStyle, runs ...run) {
	n := len(f.bands)
	size := st.sized()
	st.indent += 10
	if st.gap == 0 {
		st.gap = 2
	}
	f.paragraph(st, runs...)
	f.bands[n].shapes = []shape{{kind: shapeDot, x: f.x + st.indent - 8, y: size*lineBase - 0.37*size - 1.2, w: 2.4}}
}

// slateStep is one step of a calculation as one writes it on a slate.
type slateStep struct {
	number      int
	title       string
	formula     string
	substituted string
	result      string
	source      string
}

// step adds a step, kept together. Parts that are empty are left out.
func (f *flow) step(s slateStep) {
	const indent, column = 20, 62
	f.together(func(g *flow) {
		g.paragraph(paraStyle{indent: indent, gap: 6}, bold(s.title))
		g.bands[0].labels = append(g.bands[0].labels, placedText{x: f.x, base: sizeBody * lineBase, size: sizeBody, bold: true, text: strconv.Itoa(s.number)})
		for _, part := range []struct {
			name string
			text run
		}{
			{"formula", plain(s.formula)},
			{"in numbers", plain(s.substituted)},
			{"result", bold(s.result)},
			{"source", plain(s.source)},
		} {
			if part.text.text == "" {
				continue
			}
			x, w := f.x+indent+column, f.width-indent-column
			g.bands = appendRow(g.bands, []cellLines{
				{x: f.x + indent, lines: g.lines(sizeSmall, column, []run{plain(part.name)})},
				{x: x, lines: g.lines(sizeBody, w, g.doc.admit([]run{part.text}))},
			}, sizeBody, 0)
		}
	})
}

// figureArea is a drawing of a fixed height.
type figureArea struct {
	x, width float64
	draw     func(vg.CanvasSizer)
}

// figure adds a drawing as wide as the text. draw is called once, when the
// page is drawn.
func (f *flow) figure(height float64, draw func(vg.CanvasSizer)) {
	f.bands = append(f.bands, band{gap: gapBlock, height: height, figure: &figureArea{x: f.x, width: f.width, draw: draw}})
}

// ruled adds n empty lines to write on, kept together.
func (f *flow) ruled(n int) {
	const height = 22
	for i := range n {
		f.bands = append(f.bands, band{height: height, keep: i < n-1,
			shapes: []shape{{kind: shapeRule, x: f.x, y: height - 1, w: f.width, line: rulerHair}}})
	}
}

// signatures adds lines to sign on, with a name under each, in columns, row by
// row, kept together.
func (f *flow) signatures(columns int, names ...string) {
	const height = 26
	width := (f.width - float64(columns-1)*2*gapColumn) / float64(columns)
	f.together(func(g *flow) {
		for i := 0; i < len(names); i += columns {
			line := band{height: height}
			var row []cellLines
			for c, name := range names[i:min(i+columns, len(names))] {
				x := f.x + float64(c)*(width+2*gapColumn)
				line.shapes = append(line.shapes, shape{kind: shapeRule, x: x, y: height - 1, w: width, line: rulerThin})
				row = append(row, cellLines{x: x, lines: g.lines(sizeSmall, width, g.doc.admit([]run{plain(name)}))})
			}
			g.bands = appendRow(append(g.bands, line), row, sizeSmall, 0)
		}
	})
}

// pageOf says which page of how many.
func pageOf(page, pages int) run {
	return plain(fmt.Sprintf("page %d of %d", page, pages))
}

package main

import (
	"slices"
	"strings"
	"unicode/utf8"

	"tayra/metabolic"
)

// listWidth is the width of the lists that the commands print: they are read
// on an ordinary terminal, and are never wrapped by it.
const listWidth = 80

// paragraph breaks a text at spaces: the first line stands behind first spaces,
// the others behind indent. A no-break space holds its line together, and a
// number keeps its unit.
func paragraph(text string, first, indent, width int) string {
	var b strings.Builder
	b.WriteString(strings.Repeat(" ", first))
	at := first
	for i, word := range unbreakable(text) {
		n := utf8.RuneCountInString(word)
		switch {
		case i == 0:
		case at+1+n > width:
			b.WriteString("\n" + strings.Repeat(" ", indent))
			at = indent
		default:
			b.WriteByte(' ')
			at++
		}
		b.WriteString(word)
		at += n
	}
	return b.String()
}

// unbreakable cuts a text into what may stand on lines of their own.
func unbreakable(text string) []string {
	words := strings.FieldsFunc(text, func(r rune) bool { return r == ' ' || r == '\n' || r == '\t' })
	out := words[:0]
	for _, w := range words {
		if n := len(out); n > 0 && endsInFigure(out[n-1]) && slices.Contains(metabolic.Units, strings.TrimRight(w, ".,;:)")) {
			out[n-1] += " " + w
			continue
		}
		out = append(out, w)
	}
	return out
}

func endsInFigure(s string) bool { return s[len(s)-1] >= '0' && s[len(s)-1] <= '9' }

// column is one column of a table.
type column struct {
	head  string
	right bool // figures stand at the right
}

// table sets rows under heads, two spaces between columns, nothing at the end
// of a line. indent spaces stand before every row.
func table(columns []column, rows [][]string, indent int) string {
	width := make([]int, len(columns))
	for i, c := range columns {
		width[i] = utf8.RuneCountInString(c.head)
		for _, r := range rows {
			width[i] = max(width[i], utf8.RuneCountInString(r[i]))
		}
	}
	var b strings.Builder
	row := func(cell func(i int) string) {
		var line strings.Builder
		line.WriteString(strings.Repeat(" ", indent))
		for i, c := range columns {
			text := cell(i)
			pad := strings.Repeat(" ", width[i]-utf8.RuneCountInString(text))
			if i > 0 {
				line.WriteString("  ")
			}
			if c.right {
				line.WriteString(pad + text)
			} else {
				line.WriteString(text + pad)
			}
		}
		b.WriteString(strings.TrimRight(line.String(), " ") + "\n")
	}
	heads := false
	for _, c := range columns {
		heads = heads || c.head != ""
	}
	if heads {
		row(func(i int) string { return columns[i].head })
	}
	for _, r := range rows {
		row(func(i int) string { return r[i] })
	}
	return b.String()
}

package dose

import (
	"errors"
	"fmt"
	"slices"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"github.com/goccy/go-yaml/ast"
	"github.com/goccy/go-yaml/token"
)

// leaf is a text of the file with its place.
type leaf struct {
	Entry
	plain     bool // without quotes
	block     bool // a block scalar: the text stands on the lines below
	manyLines bool // a plain text over several lines
}

// leafOf reads the text of a scalar token again from the file.
func (y *yamlText) leafOf(n ast.Node) (leaf, *InputError) {
	if n, ok := n.(*ast.LiteralNode); ok {
		return y.blockLeaf(n)
	}
	t := n.GetToken()
	switch {
	case quotedToken(t):
		return y.quotedLeaf(t)
	case plainToken(t):
		return y.plainLeaf(t)
	}
	return leaf{}, y.unsure(t)
}

// unsure refuses a text on which the library and the file do not agree.
func (y *yamlText) unsure(t *token.Token) *InputError {
	line, column := y.place(t)
	for _, r := range y.lines[line-1] {
		if r == '\t' {
			return &InputError{File: y.file, Line: line, Column: column, Problem: "the value holds a tab",
				Remedy: "write spaces instead"}
		}
	}
	return &InputError{File: y.file, Line: line, Column: column, Problem: "the value cannot be read with certainty",
		Remedy: "write it on one line in double quotes"}
}

// plainLeaf finds a plain text in its line.
func (y *yamlText) plainLeaf(t *token.Token) (leaf, *InputError) {
	line := t.Position.Line
	if line < 1 || line > len(y.lines) || t.Value == "" {
		return leaf{}, y.unsure(t)
	}
	if len(t.Value) > maxEntryBytes {
		l, column := y.place(t)
		return leaf{Entry: Entry{Text: t.Value, Line: l, Column: column}, plain: true}, nil // too long to be used
	}
	value := []rune(t.Value)
	// The library is laxer than YAML here, and other readers would see other texts.
	first := value[0]
	if strings.ContainsRune("`@%,[]{}#&*!|>'\"", first) ||
		(strings.ContainsRune("-?:", first) && (len(value) == 1 || value[1] == ' ')) {
		return leaf{}, y.tokenFault(t, fmt.Sprintf("a value cannot begin with %c", first), remedyQuote)
	}
	if y.opener[t] != nil && strings.ContainsAny(t.Value, "[]{}") {
		return leaf{}, y.tokenFault(t, "a bracket in the value", remedyQuote)
	}
	if strings.Contains(t.Value, ": ") || value[len(value)-1] == ':' {
		return leaf{}, y.tokenFault(t, "a second colon in the value", remedyQuote)
	}
	column, ok := y.nearest(line, t.Position.Column, func(c int) bool { return y.plainAt(line, c, value, y.opener[t] != nil) })
	if !ok {
		return leaf{}, y.unsure(t)
	}
	l := leaf{Entry: Entry{Text: t.Value, Line: line, Column: column}, plain: true}
	l.manyLines = column-1+len(value) > len(y.lines[line-1]) ||
		string(y.lines[line-1][column-1:column-1+len(value)]) != t.Value
	return l, nil
}

// glued says whether something stands right behind the colon of a plain key.
func (y *yamlText) glued(key leaf) bool {
	line := y.lines[key.Line-1]
	rest := line[min(len(line), key.Column-1+utf8.RuneCountInString(key.Text)):]
	i := slices.Index(rest, ':')
	return i >= 0 && i+1 < len(rest) && !strings.ContainsRune(" \t,]}", rest[i+1])
}

// nearest is the column of the line nearest to the one given at which ok holds
// and where a text can begin. The library is wrong by the number of tabs before
// the place, or of spaces at the line's end, so a few tries must do.
func (y *yamlText) nearest(line, column int, ok func(c int) bool) (int, bool) {
	text := y.lines[line-1]
	tries := 64
	begins := func(c int) bool {
		if c < 1 || c > len(text) || c > 1 && !strings.ContainsRune(" \t{[,:", text[c-2]) {
			return false
		}
		tries--
		return ok(c)
	}
	for off := 0; off <= len(text) && tries > 0; off++ {
		if begins(column + off) {
			return column + off, true
		}
		if off > 0 && begins(column-off) {
			return column - off, true
		}
	}
	return 0, false
}

// plainAt says whether exactly this plain text stands at a place, from its
// first letter to its end. A space of it may be a line's end in the file, and
// so may a newline of it with the empty lines that follow.
func (y *yamlText) plainAt(line, column int, value []rune, flow bool) bool {
	l, c := line-1, column-1
	end := y.contentEnd(l)
	for i := 0; i < len(value); {
		if value[i] == '#' && i > 0 && strings.ContainsRune(" \t\n", value[i-1]) {
			return false // a comment that the library took for text
		}
		if c < end {
			if y.lines[l][c] != value[i] {
				return false
			}
			i, c = i+1, c+1
			continue
		}
		breaks := 0
		for c >= end {
			if l++; l >= len(y.lines) {
				return false
			}
			breaks++
			c, end = y.indent(l+1), y.contentEnd(l)
		}
		// One break is a space, and n of them are n-1 newlines.
		folded := " "
		if breaks > 1 {
			folded = strings.Repeat("\n", breaks-1)
		}
		for _, r := range folded {
			if i >= len(value) || value[i] != r {
				return false
			}
			i++
		}
	}
	return y.endsAt(l, c, flow)
}

// contentEnd is the length of a line without the spaces and tabs at its end.
func (y *yamlText) contentEnd(l int) int {
	n := len(y.lines[l])
	for n > 0 && (y.lines[l][n-1] == ' ' || y.lines[l][n-1] == '\t') {
		n--
	}
	return n
}

// endsAt says whether a text can end before this place: only space, a comment,
// or a sign that ends a text follows.
func (y *yamlText) endsAt(l, c int, flow bool) bool {
	rest := y.lines[l][c:]
	for i, r := range rest {
		switch {
		case r == ' ' || r == '\t':
		case r == '#':
			return i > 0
		case r == ':':
			return flow || i+1 == len(rest) || rest[i+1] == ' ' || rest[i+1] == '\t'
		default:
			return flow && strings.ContainsRune(",]}", r)
		}
	}
	return true
}

// quotedLeaf reads a quoted text, which must end on its line: an open quote
// would swallow keys up to the next quote.
func (y *yamlText) quotedLeaf(t *token.Token) (leaf, *InputError) {
	line, quote := t.Position.Line, '"'
	if t.Type == token.SingleQuoteType {
		quote = '\''
	}
	if line < 1 || line > len(y.lines) {
		return leaf{}, y.unsure(t)
	}
	text := y.lines[line-1]
	column, ok := y.nearest(line, t.Position.Column, func(c int) bool { return text[c-1] == quote })
	if !ok {
		return leaf{}, y.unsure(t)
	}
	value, length, err := unquoteYAML(text[column-1:])
	if err != nil {
		remedy := remedyOpenQuote
		if errors.Is(err, errBadEscape) {
			remedy = remedyBadEscape
		}
		return leaf{}, &InputError{File: y.file, Line: line, Column: column, Problem: err.Error(), Remedy: remedy}
	}
	if value != t.Value || !y.endsAt(line-1, column-1+length, y.opener[t] != nil) {
		return leaf{}, y.unsure(t)
	}
	return leaf{Entry: Entry{Text: value, Line: line, Column: column}}, nil
}

const (
	remedyQuote     = "put the value in double quotes"
	remedyOpenQuote = "close it on the same line, or take the quote away"
	remedyBadEscape = `write \\ for a backslash, or use single quotes`
)

var (
	errOpenQuote = errors.New("the quote opened here is not closed on its line")
	errBadEscape = errors.New("a backslash in the double quotes begins no escape of YAML")
)

// unquoteYAML reads the quoted text with which a line begins, and gives its
// length with both quotes.
func unquoteYAML(line []rune) (string, int, error) {
	var b strings.Builder
	quote := line[0]
	for i := 1; i < len(line); i++ {
		switch c := line[i]; {
		case c == quote && quote == '\'' && i+1 < len(line) && line[i+1] == '\'':
			b.WriteByte('\'')
			i++
		case c == quote:
			return b.String(), i + 1, nil
		case c == '\\' && quote == '"':
			r, length, ok := unescapeYAML(line[i+1:])
			if !ok {
				return "", 0, errBadEscape
			}
			b.WriteRune(r)
			i += length
		default:
			b.WriteRune(c)
		}
	}
	return "", 0, errOpenQuote
}

// yamlEscapes are the one-letter escapes of double quotes.
var yamlEscapes = map[rune]rune{
	'0': 0, 'a': 7, 'b': 8, 't': '\t', '\t': '\t', 'n': '\n', 'v': 11, 'f': 12, 'r': '\r', 'e': 27, ' ': ' ', '"': '"',
	'/': '/', '\\': '\\', 'N': 0x85, '_': 0xa0, 'L': 0x2028, 'P': 0x2029,
}

// unescapeYAML reads what follows a backslash: the letter meant, and how many
// letters of the file it takes.
func unescapeYAML(s []rune) (r rune, length int, ok bool) {
	if len(s) == 0 {
		return 0, 0, false
	}
	digits := map[rune]int{'x': 2, 'u': 4, 'U': 8}[s[0]]
	if digits == 0 {
		r, ok = yamlEscapes[s[0]]
		return r, 1, ok
	}
	if len(s) <= digits {
		return 0, 0, false
	}
	code, err := strconv.ParseUint(string(s[1:1+digits]), 16, 32)
	if err != nil || code > unicode.MaxRune {
		return 0, 0, false
	}
	return rune(code), 1 + digits, utf8.ValidRune(rune(code))
}

// blockLeaf reads a block scalar. The library unfolds it; that it lost nothing
// is seen by comparing all letters but the spaces.
func (y *yamlText) blockLeaf(n *ast.LiteralNode) (leaf, *InputError) {
	line, column := y.place(n.Start)
	l := leaf{Entry: Entry{Line: line, Column: column}, block: true}
	if n.Value == nil {
		return l, nil
	}
	l.Text = strings.TrimRight(n.Value.Value, " \n")
	want := strings.Join(strings.Fields(l.Text), "")
	var got strings.Builder
	for i := line; i < len(y.lines) && got.Len() < len(want); i++ {
		got.WriteString(strings.Join(strings.Fields(string(y.lines[i])), ""))
	}
	if got.String() != want {
		return leaf{}, y.unsure(n.Start)
	}
	return l, nil
}

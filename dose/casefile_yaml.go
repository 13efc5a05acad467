// What of YAML 1.2 a case file may use, and how a text is taken out of it.
//
//   - Block and flow maps and lists, plain, quoted and block scalars, comments.
//   - No anchors, aliases, merge keys, tags, directives, "?" keys, second
//     documents. No tab or foreign space at the beginning of a line. A quoted
//     text ends on the line where it begins.
//   - The library finds the structure. It is not trusted with a text: it drops
//     a tab inside a plain value ("4<tab>1 kg" becomes 41 kg) and would read
//     041 as a number. Every text is therefore read a second time from the file
//     at its place, and refused when the two disagree.
//   - Everything is bounded before the library sees the file, because its
//     scanner takes time in the square of the length of a line with tabs, of a
//     row of < and of a run of empty lines.

package dose

import (
	"bytes"
	"errors"
	"fmt"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"sync"
	"unicode"
	"unicode/utf8"

	"github.com/goccy/go-yaml"
	"github.com/goccy/go-yaml/ast"
	"github.com/goccy/go-yaml/lexer"
	"github.com/goccy/go-yaml/parser"
	"github.com/goccy/go-yaml/token"
)

// The bounds of a case file. A real one has about 2,000 bytes.
const (
	maxCaseBytes  = 1 << 20
	maxLineBytes  = 20_000
	maxLines      = 20_000
	maxCostly     = 5_000 // tabs and <, each of which may cost the scanner a line
	maxEmptyLines = 100   // in a row
	maxMarks      = 100_000
	maxDepth      = 8
	maxModels     = 50 // and any other list of a case
	maxEntryBytes = 4_000
	maxNameBytes  = 200 // a key of the user's own
	maxFaults     = 100
)

// caseMarks are the bytes from which the scanner can make a token.
const caseMarks = "[]{},:-?&*!|>'\"%@#`"

// yamlText is a case file that was looked over: its lines, its tree, and what
// the tokens tell beside the tree.
type yamlText struct {
	file    string
	lines   [][]rune
	root    ast.Node                      // nil: nothing but comments
	opener  map[*token.Token]*token.Token // the innermost { or [ that a token stands in
	closed  map[*token.Token]bool         // the { or [ has its fellow
	comment map[*token.Token]*token.Token // the comment behind a plain token on its line
}

// readYAML looks a file over and parses it.
func readYAML(file string, data []byte) (*yamlText, *InputError) {
	y := &yamlText{
		file:    file,
		opener:  map[*token.Token]*token.Token{},
		closed:  map[*token.Token]bool{},
		comment: map[*token.Token]*token.Token{},
	}
	text, fault := y.lookOver(data)
	if fault != nil {
		return nil, fault
	}
	tokens := lexer.Tokenize(text)
	if fault := y.checkTokens(tokens); fault != nil {
		return nil, fault
	}
	tree, err := parser.Parse(tokens, 0, parser.AllowDuplicateMapKey())
	if err != nil {
		return nil, y.syntax(err)
	}
	for _, doc := range tree.Docs {
		if doc.Body == nil {
			continue
		}
		if y.root != nil {
			return nil, y.tokenFault(doc.Body.GetToken(), secondDocument, secondDocumentRemedy)
		}
		y.root = doc.Body
	}
	if y.root != nil {
		if tok := tooDeep(y.root, maxDepth); tok != nil {
			return nil, y.tokenFault(tok, deepProblem, deepRemedy)
		}
	}
	return y, nil
}

var (
	secondDocument       = "the file holds a second document"
	secondDocumentRemedy = "one case a file: delete this line and what follows, or move it to a file of its own"
	deepProblem          = fmt.Sprintf("the file is nested more than %d levels deep", maxDepth)
	deepRemedy           = "a case file needs four; see `tayra new`"
)

// lookOver refuses what is no text of reasonable size, and gives the text as
// the parser shall see it: no byte-order mark, lines that end in \n.
func (y *yamlText) lookOver(data []byte) (string, *InputError) {
	at := func(line, column int, problem, remedy string) (string, *InputError) {
		return "", &InputError{File: y.file, Line: line, Column: column, Problem: problem, Remedy: remedy}
	}
	if len(data) > maxCaseBytes {
		return at(0, 0, fmt.Sprintf("the file has %d bytes, and a case file at most %d", len(data), maxCaseBytes),
			"is it the right file?")
	}
	if bytes.HasPrefix(data, []byte("\xff\xfe")) || bytes.HasPrefix(data, []byte("\xfe\xff")) {
		return at(0, 0, "the file is UTF-16 text", "save it as UTF-8")
	}
	data = bytes.TrimPrefix(data, []byte("\ufeff"))
	data = bytes.ReplaceAll(data, []byte("\r\n"), []byte("\n"))
	data = bytes.ReplaceAll(data, []byte("\r"), []byte("\n"))
	data = bytes.TrimSuffix(data, []byte("\n"))

	marks, costly, empty := 0, 0, 0
	raw := bytes.Split(data, []byte("\n"))
	for i, line := range raw {
		n := i + 1
		if n > maxLines {
			return at(n, 1, fmt.Sprintf("the file has %d lines, and a case file at most %d", len(raw), maxLines), "is it the right file?")
		}
		if len(line) > maxLineBytes {
			return at(n, 1, fmt.Sprintf("the line has %d bytes, and may have %d", len(line), maxLineBytes),
				"write one key a line")
		}
		column := 0
		for b := line; len(b) > 0; {
			r, size := utf8.DecodeRune(b)
			column++
			switch {
			case r == utf8.RuneError && size == 1:
				return at(n, column, fmt.Sprintf("the byte %02x is not UTF-8 text", b[0]), "save the file as UTF-8")
			case r == 0:
				return at(n, column, "a NUL byte stands here, so this is not a text file", "is it the right file?")
			case r == '\t' || r == '<':
				costly++
			case unicode.IsControl(r) || r == '\ufffe' || r == '\uffff':
				return at(n, column, fmt.Sprintf("the control character U+%04X stands here", r), "delete it")
			case size == 1 && strings.IndexByte(caseMarks, b[0]) >= 0:
				marks++
			}
			b = b[size:]
		}
		body := bytes.TrimLeftFunc(line, unicode.IsSpace)
		if len(body) == 0 {
			// Spaces on an empty line mean nothing, but the library may stumble on them.
			raw[i] = nil
			if empty++; empty > maxEmptyLines {
				return at(n, 1, fmt.Sprintf("more than %d empty lines in a row", maxEmptyLines), "delete them")
			}
			continue
		}
		empty = 0
		for j, r := range []rune(string(line[:len(line)-len(body)])) {
			switch {
			case r == '\t':
				return at(n, j+1, "the line begins with a tab", "indent with spaces: YAML allows no tabs there")
			case r != ' ':
				return at(n, j+1, "the line begins with "+nameLetter(r)+", which only looks like a space",
					"indent with ordinary spaces")
			}
		}
	}
	if costly > maxCostly || marks > maxMarks {
		return at(0, 0, "the file holds far more tabs or punctuation than a case can", "is it the right file?")
	}
	text := string(bytes.Join(raw, []byte("\n"))) + "\n"
	for line := range strings.SplitSeq(text, "\n") {
		y.lines = append(y.lines, []rune(line))
	}
	return text, nil
}

// refusedTokens are the parts of YAML that a case file may not use. Most arise
// from a value that happens to begin with the sign.
var refusedTokens = map[token.Type]string{
	token.AnchorType:     "the value begins with &, which marks an anchor in YAML",
	token.AliasType:      "the value begins with *, which refers to an anchor in YAML",
	token.TagType:        "the value begins with !, which marks a tag in YAML",
	token.MergeKeyType:   "<< is a merge key in YAML",
	token.DirectiveType:  "the line begins with %, which marks a directive in YAML",
	token.MappingKeyType: "the value begins with ?, which marks a key in YAML",
}

// checkTokens refuses what a case file may not use, before any tree is built.
func (y *yamlText) checkTokens(tokens token.Tokens) *InputError {
	dashes, content, ended := 0, false, false
	var before *token.Token
	var open []*token.Token
	for _, t := range tokens {
		if t.Type == token.CommentType {
			if before != nil && plainToken(before) && before.Next == t {
				y.comment[before] = t
			}
			continue
		}
		if problem, refused := refusedTokens[t.Type]; refused {
			return y.tokenFault(t, problem, "a case file uses none: if it is part of the text, put the value in double quotes")
		}
		if ended && t.Type != token.DocumentEndType {
			return y.tokenFault(t, secondDocument, secondDocumentRemedy)
		}
		if quotedToken(t) && strings.Contains(strings.TrimSpace(t.Origin), "\n") {
			return y.tokenFault(t, errOpenQuote.Error(), remedyOpenQuote)
		}
		switch t.Type {
		case token.InvalidType:
			return y.explain(t, t.Error)
		case token.DocumentHeaderType:
			if content {
				return y.tokenFault(t, secondDocument, secondDocumentRemedy)
			}
		case token.DocumentEndType:
			ended = true
		case token.MappingStartType, token.SequenceStartType:
			open = append(open, t)
		case token.MappingEndType, token.SequenceEndType:
			if len(open) > 0 {
				y.closed[open[len(open)-1]] = true
				open = open[:len(open)-1]
			}
		case token.SequenceEntryType:
			// Dashes behind one another on a line nest without any indentation.
			if before == nil || before.Type != token.SequenceEntryType || before.Position.Line != t.Position.Line {
				dashes = 0
			}
			dashes++
		}
		if len(open) > maxDepth || dashes > maxDepth {
			return y.tokenFault(t, deepProblem, deepRemedy)
		}
		if len(open) > 0 {
			y.opener[t] = open[len(open)-1]
		}
		content = true
		before = t
	}
	return nil
}

// tooDeep gives the first token below the permitted depth, or nil.
func tooDeep(n ast.Node, left int) *token.Token {
	var children []ast.Node
	switch n := n.(type) {
	case *ast.MappingNode:
		for _, v := range n.Values {
			children = append(children, v.Value)
		}
	case *ast.MappingValueNode:
		children = append(children, n.Value)
	case *ast.SequenceNode:
		children = n.Values
	default:
		return nil
	}
	if left == 0 {
		return firstToken(n)
	}
	for _, child := range children {
		if tok := tooDeep(child, left-1); tok != nil {
			return tok
		}
	}
	return nil
}

// firstToken is the token with which a node begins: for a block map not its own,
// which is a colon, but its first key.
func firstToken(n ast.Node) *token.Token {
	switch m := n.(type) {
	case *ast.MappingNode:
		if !m.IsFlowStyle && len(m.Values) > 0 {
			return m.Values[0].Key.GetToken()
		}
	case *ast.MappingValueNode:
		return m.Key.GetToken()
	}
	return n.GetToken()
}

func plainToken(t *token.Token) bool {
	switch t.Type {
	case token.StringType, token.IntegerType, token.BinaryIntegerType, token.OctetIntegerType, token.HexIntegerType,
		token.FloatType, token.BoolType, token.NullType, token.InfinityType, token.NanType:
		return true
	}
	return false
}

func quotedToken(t *token.Token) bool {
	return t.Type == token.SingleQuoteType || t.Type == token.DoubleQuoteType
}

// tokenFault is a fault at a token. Its column is looked up in the file: behind
// a tab the library counts wrong.
func (y *yamlText) tokenFault(t *token.Token, problem, remedy string) *InputError {
	line, column := y.place(t)
	return &InputError{File: y.file, Line: line, Column: column, Problem: problem, Remedy: remedy}
}

// place is where a token stands, as well as it can be told.
func (y *yamlText) place(t *token.Token) (line, column int) {
	line = max(1, min(t.Position.Line, len(y.lines)))
	text := y.lines[line-1]
	column = max(1, min(t.Position.Column, len(text)+1))
	for column < len(text) && (text[column-1] == ' ' || text[column-1] == '\t') {
		column++
	}
	return line, column
}

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

// syntax turns an error of the library into one that a keeper of animals can
// act on.
func (y *yamlText) syntax(err error) *InputError {
	var at yaml.Error
	if errors.As(err, &at) && at.GetToken() != nil {
		return y.explain(at.GetToken(), at.GetMessage())
	}
	return &InputError{File: y.file, Problem: "the file is not valid YAML", Remedy: "see `tayra new` for a file to start from"}
}

// Slips that a line shows by itself. Compiled when first needed: a good file
// needs none.
var (
	gluedColon = sync.OnceValue(func() *regexp.Regexp {
		return regexp.MustCompile(`^[ -]*([A-Za-z_0-9]+):([^ \t\r\n/].*)$`)
	})
	wideColon = sync.OnceValue(func() *regexp.Regexp {
		return regexp.MustCompile(`^[ -]*[A-Za-z_0-9]+ *[：﹕꞉∶]`)
	})
	twoColons = sync.OnceValue(func() *regexp.Regexp {
		return regexp.MustCompile(`^[ -]*([A-Za-z_0-9]+):[ \t]+([^"'#{[][^"'#]*:[ \t].*|[^"'#{[][^"'#]*:|:[ \t].*)$`)
	})
)

// explain finds the likely slip behind a syntax error. The library says where
// its grammar failed; the line of the file says more about what was meant.
func (y *yamlText) explain(t *token.Token, message string) *InputError {
	line, column := y.place(t)
	fault := func(problem, remedy string) *InputError {
		return &InputError{File: y.file, Line: line, Column: column, Problem: problem, Remedy: remedy}
	}
	// A plain text that ran on over the line's end: the slip is on a later line.
	last := line
	if plainToken(t) {
		last = min(len(y.lines), line+strings.Count(strings.Trim(t.Origin, " \n"), "\n"))
	}
	for n := max(1, line-1); n <= last; n++ {
		text := string(y.lines[n-1])
		if m := gluedColon().FindStringSubmatchIndex(text); m != nil && strings.IndexByte(text, '"') < 0 {
			line, column = n, utf8.RuneCountInString(text[:m[3]])+1
			return fault("no space after the colon", fmt.Sprintf("write %s: and a space before the value", text[m[2]:m[3]]))
		}
		if wideColon().MatchString(text) {
			line, column = n, 1
			return fault("the colon is not an ordinary one", "write : and a space")
		}
	}
	text := string(y.lines[line-1])
	has := func(parts ...string) bool {
		for _, p := range parts {
			if strings.Contains(message, p) {
				return true
			}
		}
		return false
	}
	switch {
	case has("end character of"):
		return fault(errOpenQuote.Error(), remedyOpenQuote)
	case has("reserved character"):
		return fault("a value cannot begin with @ or `", remedyQuote)
	case has("block sequence entries"):
		return fault("a value cannot begin with a dash and a space", "begin a list on the next line, or "+remedyQuote)
	case has("invalid header option"):
		return fault("a value cannot begin with > or |", remedyQuote)
	case has("could not find '[' character", "could not find '{' character"):
		return fault("a bracket is closed here that was never opened", "take it away, or put the value in double quotes")
	case has("escape", "UTF-16", "UTF-32"):
		if n := strings.LastIndexByte(string(y.lines[line-1][:min(column, len(y.lines[line-1]))]), '\\'); n >= 0 {
			column = utf8.RuneCountInString(text[:n]) + 1
		}
		return fault(errBadEscape.Error(), remedyBadEscape)
	}
	if open := y.opener[t]; open != nil && !y.closed[open] {
		line, column = y.place(open)
		if strings.Contains(string(y.lines[line-1][column:]), " #") {
			return fault("a bracket opened here is not closed, because # after a space begins a comment",
				"put the text with the # in double quotes")
		}
		return fault("a bracket opened here is not closed", "close it, or put the value in double quotes if the bracket is part of the text")
	}
	if m := twoColons().FindStringSubmatch(text); m != nil {
		if isSectionName(m[1]) {
			return fault("a key behind another key", "write the keys of "+m[1]+" below it, each on a line of its own behind two spaces")
		}
		return fault("a second colon on the line",
			fmt.Sprintf("put the value in double quotes: %s: %s", m[1], strconv.Quote(strings.TrimSpace(m[2]))))
	}
	if y.behindClosed(line, column) {
		return fault("something stands behind the closing quote or bracket", "put the whole value in double quotes")
	}
	if value := strings.TrimLeft(text[strings.IndexByte(text, ':')+1:], " \t"); strings.HasPrefix(value, "{") || strings.HasPrefix(value, "[") {
		return fault("the brackets on this line cannot be read",
			"write each key or item on a line of its own, or put the value in double quotes")
	}
	if line = last; last > t.Position.Line {
		column = y.indent(line) + 1
	}
	for n := line; n >= max(1, line-1); n-- {
		text := strings.TrimSpace(string(y.lines[n-1]))
		if text != "" && !strings.ContainsAny(text, ":#[]{},\"'|>") {
			line, column = n, y.indent(n)+1
			return fault("a key without a colon, or a text without a key", "write the key, a colon, a space and the value")
		}
	}
	for n := line - 1; n >= 1; n-- {
		above := string(y.lines[n-1])
		if strings.TrimSpace(above) == "" || y.indent(n) > y.indent(line) {
			continue
		}
		if y.indent(n) == y.indent(line) && strings.HasPrefix(strings.TrimLeft(above, " "), "- ") {
			return fault("the line stands left of the keys behind the dash above it",
				"begin it in the column of the first key behind the dash")
		}
		break
	}
	return fault("the line does not fit the lines above it",
		"begin all keys of a section in one column, two spaces to the right of the section's name")
}

// indent is the number of spaces with which a line begins.
func (y *yamlText) indent(line int) int {
	text := y.lines[line-1]
	n := 0
	for n < len(text) && text[n] == ' ' {
		n++
	}
	return n
}

// isSectionName says whether a key of the top level has keys under it.
func isSectionName(name string) bool {
	for _, k := range new(CaseInput).caseKeys() {
		if k.name == name {
			return k.kind == kindSection || k.kind == kindList || k.kind == kindNamed
		}
	}
	return false
}

// behindClosed says whether a closing quote or bracket stands before the place.
func (y *yamlText) behindClosed(line, column int) bool {
	before := strings.TrimRight(string(y.lines[line-1][:min(column-1, len(y.lines[line-1]))]), " \t")
	return strings.HasSuffix(before, `"`) || strings.HasSuffix(before, "'") || strings.HasSuffix(before, "]") ||
		strings.HasSuffix(before, "}")
}

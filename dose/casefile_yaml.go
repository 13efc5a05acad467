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
	"fmt"
	"strings"
	"unicode"
	"unicode/utf8"

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

// indent is the number of spaces with which a line begins.
func (y *yamlText) indent(line int) int {
	text := y.lines[line-1]
	n := 0
	for n < len(text) && text[n] == ' ' {
		n++
	}
	return n
}

package dose

import (
	"fmt"
	"slices"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"github.com/goccy/go-yaml/ast"
	"github.com/goccy/go-yaml/token"
)

// Warning is something in a case file that is no fault and may still not be
// what its writer meant.
type Warning struct {
	Line, Column int
	Field        string // dotted path, as in InputError
	Text         string
}

// ReadCase reads a case file: YAML 1.2 with the keys of CaseInput. file names
// the source for messages.
//
// Every text is kept as it stands in the file (041, 1.10, 0x1F, yes, null and
// 2026-11-30 are those letters), with its line and column; only quotes are
// taken off. What the texts mean is not looked at here.
//
// An error is InputErrors: every unknown, doubled, empty or misplaced key of the
// file in its order, or the one fault that keeps it from being read at all. The
// warnings are given with and without an error.
//
// The file is limited to 1 MB, a text to 4,000 bytes, a list to 50 items.
func ReadCase(file string, data []byte) (*CaseInput, []Warning, error) {
	y, fault := readYAML(file, data)
	if fault != nil {
		return nil, nil, InputErrors{fault}
	}
	c := &CaseInput{File: file}
	r := &caseReader{yaml: y}
	if y.root == nil {
		r.fault(Entry{}, "", "the file holds no case", "`tayra new FILE.yaml` writes one to start from")
	} else {
		r.section("", y.root, c.caseKeys())
	}
	if len(r.faults) > 0 {
		return nil, r.warnings, r.sorted()
	}
	return c, r.warnings, nil
}

// caseReader fills a CaseInput from the tree of its file.
type caseReader struct {
	yaml     *yamlText
	faults   InputErrors
	warnings []Warning
}

func (r *caseReader) fault(at Entry, field, problem, remedy string) {
	r.faults = append(r.faults, &InputError{
		File: r.yaml.file, Line: at.Line, Column: at.Column, Field: field, Problem: problem, Remedy: remedy,
	})
}

// sorted gives the faults in the order of the file, no more than a screen or
// two of them.
func (r *caseReader) sorted() InputErrors {
	slices.SortStableFunc(r.faults, func(a, b *InputError) int {
		if a.Line != b.Line {
			return a.Line - b.Line
		}
		return a.Column - b.Column
	})
	if more := len(r.faults) - maxFaults; more > 0 {
		r.faults = append(r.faults[:maxFaults], &InputError{
			File: r.yaml.file, Problem: fmt.Sprintf("%d more faults are not listed", more),
		})
	}
	return r.faults
}

// place is where a node begins.
func (r *caseReader) place(n ast.Node) Entry {
	line, column := r.yaml.place(firstToken(n))
	return Entry{Line: line, Column: column}
}

// itemPlace is where an item of a list begins, or its dash when it is empty.
func (r *caseReader) itemPlace(list *ast.SequenceNode, i int) Entry {
	if isEmpty(list.Values[i]) && i < len(list.Entries) {
		line, column := r.yaml.place(list.Entries[i].Start)
		return Entry{Line: line, Column: column}
	}
	return r.place(list.Values[i])
}

// pair is one key of a map with what stands under it.
type pair struct {
	key   leaf
	value ast.Node
}

// pairs takes a map apart. Keys that are not readable or come twice are faults
// and left out. ok is false when the node is no map.
func (r *caseReader) pairs(path string, n ast.Node) (ps []pair, ok bool) {
	var values []*ast.MappingValueNode
	switch n := n.(type) {
	case *ast.MappingNode:
		values = n.Values
	case *ast.MappingValueNode:
		values = []*ast.MappingValueNode{n}
	default:
		return nil, false
	}
	first := map[string]int{}
	for _, v := range values {
		key, fault := r.yaml.leafOf(v.Key)
		switch {
		case fault != nil:
			fault.Field = path
			r.faults = append(r.faults, fault)
			continue
		case key.block || key.manyLines:
			r.fault(key.Entry, path, "the key runs over several lines", "write the key, a colon, a space and the value")
			continue
		case key.plain && r.yaml.glued(key):
			// In braces the library reads {dose:4} as a key and a value, YAML as one text.
			r.fault(key.Entry, userPath(path, key.Text), "no space after the colon", "write a space between the colon and the value")
			continue
		}
		if line, twice := first[key.Text]; twice {
			r.fault(key.Entry, userPath(path, key.Text), fmt.Sprintf("given twice, first on line %d", line), "keep one of the two")
			continue
		}
		first[key.Text] = key.Line
		ps = append(ps, pair{key, v.Value})
	}
	return ps, true
}

// section reads a map by the keys that it may have.
func (r *caseReader) section(path string, n ast.Node, keys []caseKey) {
	ps, ok := r.pairs(path, n)
	if !ok {
		r.notKeys(path, n)
		return
	}
	for _, p := range ps {
		i := slices.IndexFunc(keys, func(k caseKey) bool { return k.name == p.key.Text })
		if i < 0 {
			if len(r.faults) > maxFaults {
				r.fault(p.key.Entry, path, "unknown key", "") // will not be listed
				continue
			}
			problem, remedy := unknownKey(p.key.Text, path, keys)
			if isFlow(n) && isEmpty(p.value) {
				remedy = "in braces a comma begins the next key: put a text with a comma in double quotes"
			}
			r.fault(p.key.Entry, path, problem, remedy)
			continue
		}
		r.key(joinPath(path, p.key.Text), p, keys[i])
	}
}

// key reads what stands under one known key.
func (r *caseReader) key(path string, p pair, k caseKey) {
	at := Entry{Line: p.key.Line, Column: p.key.Column}
	switch k.kind {
	case kindValue, kindProse:
		if e, ok := r.text(path, at, p.value, k.kind == kindProse); ok {
			*k.entry = e
		}
	case kindValues:
		r.values(path, at, p.value, k.values)
	case kindNamed:
		r.named(path, p.value, k.named)
	case kindSection:
		*k.entry = at
		if !isEmpty(p.value) {
			r.section(path, p.value, k.keys())
		}
	case kindList:
		r.list(path, p.value, k)
	}
}

// text reads one value. at is the place of its key.
func (r *caseReader) text(path string, at Entry, n ast.Node, prose bool) (Entry, bool) {
	if isEmpty(n) {
		r.fault(at, path, "empty", "write a value, or delete the line")
		return Entry{}, false
	}
	switch n.(type) {
	case *ast.SequenceNode:
		r.fault(r.place(n), path, "a list where one value is expected", "write one value; a text in [brackets] goes in double quotes")
		return Entry{}, false
	case *ast.MappingNode, *ast.MappingValueNode:
		r.fault(r.place(n), path, "keys where one value is expected",
			"write the value behind the colon; a text with a colon or in {braces} goes in double quotes")
		return Entry{}, false
	}
	l, fault := r.yaml.leafOf(n)
	if fault != nil {
		fault.Field = path
		r.faults = append(r.faults, fault)
		return Entry{}, false
	}
	switch {
	case strings.TrimSpace(l.Text) == "":
		r.fault(l.Entry, path, "empty", "write a value, or delete the line")
		return Entry{}, false
	case len(l.Text) > maxEntryBytes:
		r.fault(l.Entry, path, fmt.Sprintf("%d bytes long, and a value may have %d", len(l.Text), maxEntryBytes), "shorten it")
		return Entry{}, false
	case (l.block || l.manyLines || l.Line != at.Line) && !prose:
		r.fault(l.Entry, path, "the value does not stand on the line of its key, or runs on over the next one",
			"write the value on one line, and begin every key in the column of its neighbours")
		return Entry{}, false
	case l.Line != at.Line && l.Column <= at.Column:
		r.fault(l.Entry, path, "the text does not stand to the right of its key", "indent it by two spaces more")
		return Entry{}, false
	}
	for _, c := range l.Text {
		if unicode.IsControl(c) && c != '\n' && c != '\t' {
			r.fault(l.Entry, path, fmt.Sprintf("holds the control character U+%04X", c), "delete it")
			return Entry{}, false
		}
	}
	r.watchComment(path, l, n.GetToken(), prose)
	return l.Entry, true
}

// watchComment warns of a # that may have been meant as part of the text.
func (r *caseReader) watchComment(path string, l leaf, t *token.Token, prose bool) {
	c := r.yaml.comment[t]
	if c == nil {
		return
	}
	next, _ := utf8.DecodeRuneInString(c.Value)
	number, _ := utf8.DecodeRuneInString(strings.TrimLeft(c.Value, " \t"))
	glued := c.Value != "" && next != '#' && !unicode.IsSpace(next)
	if !glued && !(prose && unicode.IsDigit(number)) {
		return
	}
	r.warnings = append(r.warnings, Warning{
		Line: l.Line, Column: l.Column, Field: path,
		Text: fmt.Sprintf("read as %s: # after a space begins a comment; if it is part of the text, put the whole value in double quotes",
			quoteShort(l.Text)),
	})
}

// values reads a list of values; one value alone is a list of one.
func (r *caseReader) values(path string, at Entry, n ast.Node, to *[]Entry) {
	if isEmpty(n) {
		return
	}
	list, ok := n.(*ast.SequenceNode)
	if !ok {
		if e, ok := r.text(path, at, n, false); ok {
			*to = []Entry{e}
		}
		return
	}
	if r.tooMany(path, n, len(list.Values)) {
		return
	}
	for i, v := range list.Values {
		if e, ok := r.text(indexPath(path, i), r.itemPlace(list, i), v, false); ok {
			*to = append(*to, e)
		}
	}
}

// named reads keys of the user's own with a text under each.
func (r *caseReader) named(path string, n ast.Node, to *[]NamedEntry) {
	if isEmpty(n) {
		return
	}
	ps, ok := r.pairs(path, n)
	if !ok {
		r.notKeys(path, n)
		return
	}
	if r.tooMany(path, n, len(ps)) {
		return
	}
	for _, p := range ps {
		at := Entry{Line: p.key.Line, Column: p.key.Column}
		if strings.TrimSpace(p.key.Text) == "" || len(p.key.Text) > maxNameBytes || hasControl(p.key.Text) {
			r.fault(at, path, "not a usable name: "+quoteShort(p.key.Text), "write the name of one caution, a colon and the text")
			continue
		}
		if e, ok := r.text(userPath(path, p.key.Text), at, p.value, true); ok {
			*to = append(*to, NamedEntry{Name: p.key.Entry, Value: e})
		}
	}
}

// list reads a list of sections.
func (r *caseReader) list(path string, n ast.Node, k caseKey) {
	if isEmpty(n) {
		return
	}
	list, ok := n.(*ast.SequenceNode)
	if !ok {
		r.fault(r.place(n), path, "a list is expected",
			"begin each item with a dash and a space, and the first key of the item behind it: - species: dog")
		return
	}
	if r.tooMany(path, n, len(list.Values)) {
		return
	}
	for i, v := range list.Values {
		at := r.itemPlace(list, i)
		keys := k.add(at)
		if isEmpty(v) {
			r.fault(at, indexPath(path, i), "empty", "write the keys of the item behind its dash, or delete the dash")
			continue
		}
		r.section(indexPath(path, i), v, keys)
	}
}

func (r *caseReader) tooMany(path string, n ast.Node, count int) bool {
	if count <= maxModels {
		return false
	}
	r.fault(r.place(n), path, fmt.Sprintf("%d items, and the list may have %d", count, maxModels), "split the case")
	return true
}

// notKeys is the fault of a list or a value in the place of keys.
func (r *caseReader) notKeys(path string, n ast.Node) {
	at := r.place(n)
	if _, list := n.(*ast.SequenceNode); list {
		r.fault(at, path, "a list where keys are expected", "take the dashes or brackets away")
		return
	}
	switch text := string(r.yaml.lines[at.Line-1]); {
	case gluedColon().MatchString(text):
		r.fault(at, path, "no space after the colon", "write the key, a colon, a space and the value")
		return
	case wideColon().MatchString(text):
		r.fault(at, path, "the colon is not an ordinary one", "write the key, :, a space and the value")
		return
	}
	r.fault(at, path, "a value where keys are expected", "write the keys below, each with a colon, a space and its value")
}

// isEmpty says whether nothing at all stands under a key.
func isEmpty(n ast.Node) bool {
	if n == nil {
		return true
	}
	t := n.GetToken()
	return n.Type() == ast.NullType && (t == nil || t.Type == token.ImplicitNullType)
}

func isFlow(n ast.Node) bool {
	m, ok := n.(*ast.MappingNode)
	return ok && m.IsFlowStyle
}

func indexPath(path string, i int) string { return path + "[" + strconv.Itoa(i) + "]" }

func hasControl(s string) bool { return strings.ContainsFunc(s, unicode.IsControl) }

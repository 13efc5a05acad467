package reports

import (
	"errors"
	"fmt"
	"strconv"
	"strings"
	"unicode/utf8"

	"github.com/goccy/go-yaml"
	"github.com/goccy/go-yaml/ast"
	"github.com/goccy/go-yaml/parser"

	"tayra/dose"
)

// BatchColumns says under which headings the columns of a table stand, where
// they are not called as [dose.Column] calls them. The nil value renames
// nothing.
type BatchColumns struct {
	rules map[dose.Column]columnRule
}

// columnRule is what a mapping file says of a column.
type columnRule struct {
	heading string // "": as the column is called
	unit    string // of cells that are bare numbers
	value   string // for every row; then the table has no such column
}

func (c *BatchColumns) rule(column dose.Column) columnRule {
	if c == nil {
		return columnRule{}
	}
	return c.rules[column]
}

// find gives the column of a heading.
func (c *BatchColumns) find(heading string) (dose.Column, bool) {
	name := sameHeading(heading)
	if c != nil {
		for column, rule := range c.rules {
			if rule.heading != "" && sameHeading(rule.heading) == name {
				return column, true
			}
		}
	}
	column, ok := dose.FindColumn(name)
	if !ok {
		return 0, false
	}
	if rule := c.rule(column); rule.heading != "" || rule.value != "" {
		return 0, false // it is to be found elsewhere
	}
	return column, true
}

// largestMapping bounds a mapping file.
const largestMapping = 64 << 10

// ReadBatchColumns reads a mapping file, YAML of one level or two:
//
//	species: Tierart                  # the column's name here: its heading there
//	mass: {column: Gewicht, unit: kg} # cells are bare numbers of this unit
//	model_species: {value: dog}       # the same for every row, not in the table
//
// The error is a [*TableError] with the line.
func ReadBatchColumns(data []byte) (*BatchColumns, error) {
	fail := func(line int, problem, remedy string) (*BatchColumns, error) {
		return nil, &TableError{line, problem, remedy}
	}
	data = []byte(strings.TrimPrefix(string(data), byteOrderMark))
	switch {
	case len(data) > largestMapping:
		return fail(0, fmt.Sprintf("the mapping file is over %d bytes long", largestMapping), "is it the right file?")
	case !utf8.Valid(data) || strings.ContainsRune(string(data), 0):
		return fail(0, "the mapping file is not UTF-8 text", "save it as UTF-8")
	}
	// The parser is asked for the tree only: nothing in it is followed or
	// turned into numbers.
	file, err := parser.ParseBytes(data, 0)
	if err != nil {
		line := 0
		var y yaml.Error
		if errors.As(err, &y) {
			if t := y.GetToken(); t != nil && t.Position != nil {
				line = t.Position.Line
			}
		}
		return fail(line, "the mapping cannot be read", "write one column a line, such as `species: Tierart`; put a heading with a colon in quotes")
	}
	out := &BatchColumns{rules: map[dose.Column]columnRule{}}
	headings := map[string]dose.Column{}
	for i, doc := range file.Docs {
		if doc.Body == nil {
			continue
		}
		if i > 0 {
			return fail(doc.GetToken().Position.Line, "a second document", "write one mapping")
		}
		pairs, ok := mapPairs(doc.Body)
		if !ok {
			return fail(1, "this is no mapping", "write one column a line, such as `species: Tierart`")
		}
		for _, pair := range pairs {
			line := pair.Key.GetToken().Position.Line
			name := sameHeading(pair.Key.GetToken().Value)
			column, known := dose.FindColumn(name)
			if !known {
				return fail(line, fmt.Sprintf("no column is called %s", strconv.Quote(pair.Key.GetToken().Value)), "the columns are "+columnNames())
			}
			if _, twice := out.rules[column]; twice {
				return fail(line, name+" is named twice", "keep one of the two")
			}
			rule, problem := readRule(pair.Value, column)
			if problem != "" {
				return fail(line, name+": "+problem, "write `"+name+": HEADING`, or `"+name+": {column: HEADING, unit: UNIT}`, or `"+name+": {value: TEXT}`")
			}
			if rule.heading != "" {
				if other, taken := headings[sameHeading(rule.heading)]; taken {
					return fail(line, fmt.Sprintf("the heading %s is named for %s and for %s", strconv.Quote(rule.heading), other, column), "one column is read as one thing")
				}
				headings[sameHeading(rule.heading)] = column
			}
			out.rules[column] = rule
		}
	}
	return out, nil
}

func readRule(n ast.Node, column dose.Column) (rule columnRule, problem string) {
	if text, ok := scalarText(n); ok {
		if text == "" {
			return rule, "nothing is written behind it"
		}
		rule.heading = text
		return rule, ""
	}
	pairs, ok := mapPairs(n)
	if !ok {
		return rule, "neither a heading nor a mapping"
	}
	seen := map[string]bool{}
	for _, pair := range pairs {
		key := pair.Key.GetToken().Value
		text, ok := scalarText(pair.Value)
		switch {
		case !ok || text == "":
			return rule, key + " has no text"
		case seen[key]:
			return rule, key + " is written twice"
		}
		seen[key] = true
		switch key {
		case "column":
			rule.heading = text
		case "unit":
			rule.unit = text
		case "value":
			rule.value = text
		default:
			return rule, strconv.Quote(key) + " is no key here"
		}
	}
	switch {
	case rule.value != "" && (rule.heading != "" || rule.unit != ""):
		return rule, "a value for every row beside a column or unit"
	case rule.unit != "" && !column.Quantity():
		return rule, "a unit, but the column holds no quantities"
	}
	return rule, ""
}

// mapPairs are the pairs of a mapping; one pair alone is a node of its own.
func mapPairs(n ast.Node) ([]*ast.MappingValueNode, bool) {
	switch n := n.(type) {
	case *ast.MappingNode:
		return n.Values, true
	case *ast.MappingValueNode:
		return []*ast.MappingValueNode{n}, true
	}
	return nil, false
}

// scalarText is a value as typed: "041" stays "041".
func scalarText(n ast.Node) (string, bool) {
	switch n.(type) {
	case *ast.NullNode:
		return "", true
	case *ast.StringNode, *ast.IntegerNode, *ast.FloatNode, *ast.BoolNode, *ast.InfinityNode, *ast.NanNode:
		return strings.TrimSpace(n.GetToken().Value), true
	}
	return "", false
}

func columnNames() string {
	var names []string
	for _, c := range dose.Columns() {
		names = append(names, c.String())
	}
	return strings.Join(names, ", ")
}

package dose

import (
	"errors"
	"regexp"
	"strings"
	"sync"
	"unicode/utf8"

	"github.com/goccy/go-yaml"
	"github.com/goccy/go-yaml/token"
)

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
			return fault("no space after the colon", "write "+shorten(text[m[2]:m[3]])+": and a space before the value")
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
		rest := string(y.lines[line-1][min(column, len(y.lines[line-1])):])
		if _, remark, found := strings.Cut(rest, " #"); found && strings.ContainsAny(remark, "]}") {
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
			"put the value in double quotes: "+shorten(m[1])+": "+quoteShort(strings.TrimSpace(m[2])))
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

package dose

import (
	"bytes"
	_ "embed"
	"fmt"
	"regexp"
	"strings"
	"sync"
	"unicode"
)

// WriteCase writes a case as a case file: the keys in their usual order, what
// was not given left out, and a text in double quotes wherever YAML, or another
// reader of YAML, would take it for something else (041, 1.10, yes, "a: b").
//
// ReadCase gives the same texts back for every case that ReadCase can give. A
// text may hold anything in a case from elsewhere: letters that are not UTF-8
// become U+FFFD, and control characters are written as escapes, which ReadCase
// refuses by name. The table of the command fit is no part of a case file.
func WriteCase(c *CaseInput) []byte {
	var b bytes.Buffer
	writeKeys(&b, "", c.caseKeys())
	if b.Len() == 0 {
		return []byte("{}\n")
	}
	return b.Bytes()
}

// writeKeys writes the given keys of one section, each line behind the indent.
func writeKeys(b *bytes.Buffer, indent string, keys []caseKey) {
	for _, k := range keys {
		switch k.kind {
		case kindValue, kindProse:
			if k.entry.Given() {
				fmt.Fprintf(b, "%s%s: %s\n", indent, k.name, yamlScalar(k.entry.Text))
			}
		case kindValues:
			if len(*k.values) > 0 {
				fmt.Fprintf(b, "%s%s: %s\n", indent, k.name, yamlList(*k.values))
			}
		case kindNamed:
			if len(*k.named) > 0 {
				fmt.Fprintf(b, "%s%s:\n", indent, k.name)
			}
			for _, e := range *k.named {
				fmt.Fprintf(b, "%s  %s: %s\n", indent, yamlScalar(e.Name.Text), yamlScalar(e.Value.Text))
			}
		case kindSection:
			var section bytes.Buffer
			writeKeys(&section, indent+"  ", k.keys())
			if section.Len() > 0 {
				fmt.Fprintf(b, "%s%s:\n%s", indent, k.name, section.Bytes())
			}
		case kindList:
			if k.count() > 0 {
				fmt.Fprintf(b, "%s%s:\n", indent, k.name)
			}
			for i := range k.count() {
				var item bytes.Buffer
				writeKeys(&item, indent+"    ", k.item(i))
				if item.Len() == 0 {
					fmt.Fprintf(b, "%s  - {}\n", indent)
					continue
				}
				fmt.Fprintf(b, "%s  - %s", indent, item.Bytes()[len(indent)+4:])
			}
		}
	}
}

// yamlList writes a list of values on one line.
func yamlList(es []Entry) string {
	texts := make([]string, len(es))
	for i, e := range es {
		texts[i] = yamlScalar(e.Text)
		if strings.ContainsAny(texts[i], ",[]{}") && texts[i][0] != '"' {
			texts[i] = yamlQuote(e.Text)
		}
	}
	return "[" + strings.Join(texts, ", ") + "]"
}

// The patterns are compiled when first needed: most runs write no case file.
var (
	// plainWords are words that a reader of YAML 1.1 or 1.2 turns into something
	// else and would not write back in the same letters.
	plainWords = sync.OnceValue(func() *regexp.Regexp {
		return regexp.MustCompile(`(?i)^(null|yes|no|on|off|y|n|true|false)$`)
	})

	// numberLike begins as numbers, dates and times do and has no unit behind it.
	numberLike = sync.OnceValue(func() *regexp.Regexp {
		return regexp.MustCompile(`(?i)^[0-9][0-9_.,:/exoa-f+-]*$`)
	})

	// plainNumber are the numbers and dates that any reader writes back in the
	// same letters.
	plainNumber = sync.OnceValue(func() *regexp.Regexp {
		return regexp.MustCompile(`^(0|[1-9][0-9]{0,14})(\.[0-9]{0,5}[1-9])?$|^[0-9]{4}-[0-9]{2}-[0-9]{2}$`)
	})
)

// plainSafe says whether a text begins and ends with a letter, a digit or a sign
// that means nothing in YAML there, and holds no other inside.
func plainSafe(s string) bool {
	const inside, atEnd = " .,;/°±+()'%=_–-", " ,"
	for i, r := range s {
		letter := unicode.IsLetter(r) || unicode.IsNumber(r)
		switch {
		case i == 0 && !letter:
			return false
		case !letter && !unicode.IsMark(r) && !strings.ContainsRune(inside, r):
			return false
		}
	}
	return s != "" && strings.IndexByte(atEnd, s[len(s)-1]) < 0
}

// yamlScalar writes a text plain where that cannot change it, else quoted.
func yamlScalar(s string) string {
	switch {
	case s == "true" || s == "false" || plainNumber().MatchString(s):
		return s
	case plainSafe(s) && !plainWords().MatchString(s) && !numberLike().MatchString(s):
		return s
	}
	return yamlQuote(s)
}

// yamlQuote writes a text in double quotes, on one line, with everything that
// cannot be seen as an escape.
func yamlQuote(s string) string {
	var b strings.Builder
	b.WriteByte('"')
	for _, r := range strings.ToValidUTF8(s, "\ufffd") {
		switch {
		case r == '"' || r == '\\':
			b.WriteByte('\\')
			b.WriteRune(r)
		case r == '\n':
			b.WriteString(`\n`)
		case r == '\t':
			b.WriteString(`\t`)
		case r == ' ' || unicode.IsPrint(r):
			b.WriteRune(r)
		case r <= 0xff:
			fmt.Fprintf(&b, `\x%02x`, r)
		case r <= 0xffff:
			fmt.Fprintf(&b, `\u%04x`, r)
		default:
			fmt.Fprintf(&b, `\U%08x`, r)
		}
	}
	b.WriteByte('"')
	return b.String()
}

//go:embed casefile_template.yaml
var caseTemplate string

// CaseTemplate is a case file to start from: every key with a word on what to
// write there, filled in with an invented case. Keys that most cases do without
// stand behind a # in the first column. date is the day that the case will bear,
// as in 2026-11-30.
func CaseTemplate(date string) []byte {
	return []byte(strings.Replace(caseTemplate, "DATE", yamlScalar(date), 1))
}

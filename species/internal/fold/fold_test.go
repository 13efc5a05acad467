package fold

import (
	"errors"
	"slices"
	"strings"
	"testing"
)

func TestWords(t *testing.T) {
	for in, want := range map[string]string{
		"Giant  Anteater":           "giant anteater",
		"Przewalski's horse":        "przewalskis horse",
		"Przewalski’s horse":        "przewalskis horse",
		"red-tailed hawk":           "red tailed hawk",
		"  vicuña\t":                "vicuna",
		"vicun\u0303a":              "vicuna",
		"Linné's two-toed sloth":    "linnes two toed sloth",
		"Canis lupus (domestic)":    "canis lupus domestic",
		"Færøerne Ægle straße øre":  "faeroerne aegle strasse ore",
		"blue\u00a0and\u2013yellow": "blue and yellow",
		"ﬁeld mouse":                "field mouse",
		"":                          "",
		"--":                        "",
	} {
		got, err := Words(in)
		if err != nil || got != want {
			t.Errorf("Words(%q) = %q, %v; want %q", in, got, err, want)
		}
	}
}

func TestWordsRefuses(t *testing.T) {
	for in, want := range map[string]string{
		"C\u0430nis lupus":       "U+0430",          // Cyrillic a
		"C\u03b1nis":             "U+03B1",          // Greek alpha
		"\U0001d402anis":         "U+1D402",         // mathematical bold C
		"Canis\u202elupus":       "U+202E",          // right-to-left override
		"Ca\u200bnis":            "U+200B",          // zero width space
		"Canis\x00":              "U+0000",          // NUL
		"Canis\x1b[31m":          "U+001B",          // terminal escape
		"Canis\x7f":              "U+007F",          // DEL
		"Canis\u0085":            "U+0085",          // C1 control
		"狼":                      "U+72FC",          // a wolf, but not in the table
		"C\xffnis":               "not valid UTF-8", //
		"Canis\u2028lupus":       "U+2028",          // line separator
		"Canis\ufe0f":            "U+FE0F",          // variation selector
		"Ca\u034fnis":            "U+034F",          // grapheme joiner
		"Ca\u2800nis":            "U+2800",          // blank Braille pattern
		"Ca\ufffdnis":            "U+FFFD",          // a letter that was lost
		strings.Repeat("a", 201): "201 bytes",
	} {
		got, err := Words(in)
		var letter *LetterError
		if !errors.As(err, &letter) || !strings.Contains(err.Error(), want) {
			t.Errorf("Words(%+q) = %q, %v; want an error with %q", in, got, err, want)
			continue
		}
		for _, r := range err.Error() {
			if r < ' ' || r > '~' {
				t.Errorf("Words(%+q): the message holds %U itself", in, r)
			}
		}
	}
}

func TestTokens(t *testing.T) {
	for in, want := range map[string][]string{
		"Tiletamine-Zolazepam":         {"tiletamine", "zolazepam"},
		"a + b":                        {"a", "", "b"},
		"a/b (c) and d with e":         {"a", "", "b", "", "c", "", "d", "", "e"},
		"iv\u0435rm\u0435ctin":         {"ivermectin"}, // Cyrillic e
		"iver\u200bmectin":             {"ivermectin"},
		"β-lactam":                     {"beta", "lactam"},
		"α2 agonist":                   {"alpha2", "agonist"},
		"m\u03b1rbofloxacin":           {"marbofloxacin"}, // Greek alpha inside a word
		"\U0001d41dog \xff":            {"dog"},
		"N-acetyl-p-aminophenol, 5 mg": {"n", "acetyl", "p", "aminophenol", "", "5", "mg"},
		"":                             nil,
	} {
		if got := Tokens(in); !slices.Equal(got, want) {
			t.Errorf("Tokens(%q) = %q, want %q", in, got, want)
		}
	}
}

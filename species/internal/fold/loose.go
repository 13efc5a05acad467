package fold

import (
	"unicode"
	"unicode/utf8"

	"golang.org/x/text/unicode/norm"
)

// Boundary is the token that Tokens puts where one part of a name ends and
// another begins: a plus, a slash, a bracket, a comma, "and", "with".
const Boundary = ""

// Tokens folds any text to words as Words does, but never refuses it: a
// letter of another script is read as the Latin letter that it looks like,
// what cannot be read is dropped. It is for questions that must not be
// evaded by spelling, such as whether a drug is in the hazard table.
func Tokens(s string) []string {
	var out []string
	word := make([]byte, 0, 32)
	end := func() {
		switch string(word) {
		case "":
			return
		case "and", "with", "plus", "und", "et":
			out = boundary(out)
		default:
			out = append(out, string(word))
		}
		word = word[:0]
	}
	before := ' '
	for i, r := range s {
		switch {
		case 'a' <= r && r <= 'z' || '0' <= r && r <= '9':
			word = append(word, byte(r))
		case 'A' <= r && r <= 'Z':
			word = append(word, byte(r)+'a'-'A')
		case r < utf8.RuneSelf:
			switch r {
			case '\'', '`':
			case '+', '/', '&', ',', ';', '(', ')', '[', ']', '|':
				end()
				out = boundary(out)
			default:
				end()
			}
		case unicode.Is(unicode.Cf, r) || unicode.Is(unicode.Mn, r):
		default:
			if name := greek[r]; name != "" && !unicode.IsLetter(before) && !letterAfter(s[i+utf8.RuneLen(r):]) {
				word = append(word, name...)
				break
			}
			if like, ok := lookAlike[unicode.ToLower(r)]; ok {
				word = append(word, like)
				break
			}
			if plain, err := latin(r); err == nil {
				if plain == " " {
					end()
				} else {
					word = append(word, plain...)
				}
				break
			}
			for _, p := range norm.NFKD.String(string(r)) {
				if p < utf8.RuneSelf && (unicode.IsLetter(p) || unicode.IsDigit(p)) {
					word = append(word, byte(unicode.ToLower(p)))
				}
			}
		}
		before = r
	}
	end()
	return out
}

func boundary(out []string) []string {
	if len(out) > 0 && out[len(out)-1] != Boundary {
		out = append(out, Boundary)
	}
	return out
}

func letterAfter(s string) bool {
	r, _ := utf8.DecodeRuneInString(s)
	return unicode.IsLetter(r)
}

// greek names the letters that stand for themselves in the names of drugs
// and classes ("β-lactam", "α2 agonist").
var greek = map[rune]string{'α': "alpha", 'β': "beta", 'γ': "gamma", 'δ': "delta", 'Α': "alpha", 'Β': "beta"}

// lookAlike is the Latin letter that a small Cyrillic or Greek letter looks
// like in common typefaces.
var lookAlike = map[rune]byte{
	'а': 'a', 'в': 'b', 'с': 'c', 'ԁ': 'd', 'е': 'e', 'ё': 'e', 'һ': 'h', 'н': 'h', 'і': 'i', 'ї': 'i', 'ј': 'j', 'к': 'k',
	'м': 'm', 'п': 'n', 'о': 'o', 'р': 'p', 'ԛ': 'q', 'г': 'r', 'ѕ': 's', 'т': 't', 'и': 'u', 'ѵ': 'v', 'ԝ': 'w', 'х': 'x',
	'у': 'y', 'ү': 'y', 'з': '3', 'ӏ': 'l',
	'α': 'a', 'β': 'b', 'ε': 'e', 'η': 'n', 'ι': 'i', 'κ': 'k', 'μ': 'u', 'µ': 'u', 'ν': 'v', 'ο': 'o', 'ρ': 'p', 'σ': 'o', 'ς': 'c',
	'τ': 't', 'υ': 'u', 'χ': 'x', 'ω': 'w', 'γ': 'y', 'ɑ': 'a', 'ɡ': 'g', 'ı': 'i',
}

package species

import "strings"

// soundLetters is the shortest name that is compared by its sound: of shorter
// ones too little is left.
const soundLetters = 8

// soundOf writes a folded name as it may be heard, so that "asetominafen" is
// acetaminophen: letters that stand for one sound in drug names are one
// letter, doubled letters are single, and every vowel is the same one. The
// rules are our own, from how such names are commonly misspelt.
func soundOf(word string) string {
	word = sounds.Replace(word)
	out := make([]byte, 0, len(word))
	for i := 0; i < len(word); i++ {
		c := word[i]
		switch c {
		case 'c':
			c = 'k'
			if i+1 < len(word) && strings.IndexByte("eiy", word[i+1]) >= 0 {
				c = 's'
			}
		case 'z':
			c = 's'
		case 'q':
			c = 'k'
		case 'w':
			c = 'v'
		case 'e', 'i', 'o', 'u', 'y':
			c = 'a'
		case 'h': // after its digraphs are written, it is silent
			continue
		}
		if len(out) > 0 && out[len(out)-1] == c {
			continue
		}
		out = append(out, c)
	}
	return strings.TrimSuffix(string(out), "a") // "ivermectine", "diclofenaque"
}

// sounds writes groups of letters as the one that they sound like. The first
// that fits is taken, so the longer stand first.
var sounds = strings.NewReplacer("sch", "s", "ch", "k", "ck", "k", "ph", "f", "th", "t", "rh", "r", "gh", "g",
	"qu", "k", "x", "ks", "ae", "e", "oe", "e", "ou", "u")

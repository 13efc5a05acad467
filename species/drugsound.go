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
	var room, heard [64]byte
	out := heard[:0]
	written := sounds(room[:0], word)
	for i, c := range written {
		switch c {
		case 'c':
			c = 'k'
			if i+1 < len(written) && (written[i+1] == 'e' || written[i+1] == 'i' || written[i+1] == 'y') {
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

// sounds writes groups of letters as the one that they sound like: sch as s,
// ch, ck and qu as k, ph as f, th as t, rh as r, gh as g, x as ks, ae and oe as
// e, ou as u. It runs over every name of the tables for a drug that none of
// them knows, so it is written out rather than left to a strings.Replacer,
// which takes ten times as long.
func sounds(out []byte, word string) []byte {
	for i := 0; i < len(word); i++ {
		c, next := word[i], byte(0)
		if i+1 < len(word) {
			next = word[i+1]
		}
		switch {
		case c == 's' && strings.HasPrefix(word[i:], "sch"):
			i += 2
		case c == 'c' && (next == 'h' || next == 'k'), c == 'q' && next == 'u':
			c = 'k'
			i++
		case c == 'p' && next == 'h':
			c = 'f'
			i++
		case (c == 't' || c == 'r' || c == 'g') && next == 'h':
			i++
		case c == 'x':
			out = append(out, 'k')
			c = 's'
		case (c == 'a' || c == 'o') && next == 'e':
			c = 'e'
			i++
		case c == 'o' && next == 'u':
			c = 'u'
			i++
		}
		out = append(out, c)
	}
	return out
}

package species

import (
	"math/bits"
	"sort"
	"strings"

	"tayra/species/internal/fold"
)

// near returns up to five names near the folded words: by edit distance of the
// whole to at most a third of its letters, and by words, each of which must be
// near to one of the name, in their order. The nearest stand first; a word that
// the name has more counts half a slip. An animal is named once.
func near(folded string) []string {
	if adult, ok := youngOf[folded]; ok {
		return []string{adult}
	}
	key := fold.Key(folded)
	words, mask := strings.Fields(folded), letters(key)
	limit := max(1, len(key)/3)
	type hit struct {
		name, animal string
		distance     int // in half slips
	}
	var hits []hit
	consider := func(nameKey, written, animal string) {
		d := 2 * editDistance(key, nameKey, limit)
		within := d <= 2*limit
		// Each word has two slips at most, of one letter each that the name
		// may lack: spares the comparison with most names.
		if bits.OnesCount32(mask&^letters(nameKey)) <= 2*len(words) {
			w, _ := fold.Words(written)
			if byWords, ok := wordDistance(words, strings.Fields(w)); ok && (byWords < d || !within) {
				d, within = byWords, true
			}
		}
		if within {
			hits = append(hits, hit{written, animal, d})
		}
	}
	for l := range lines(animalsIndex) {
		k, rest, _ := strings.Cut(l, "\t")
		name, _, _ := strings.Cut(rest, "\t")
		consider(k, name, name)
	}
	for l := range lines(namesIndex) {
		k, _, _ := strings.Cut(l, "\t")
		n := parseName(l)
		animal := n.scientific[0]
		if len(n.scientific) > 1 {
			animal = n.written
		}
		consider(k, n.written, animal)
	}
	sort.SliceStable(hits, func(i, j int) bool {
		if hits[i].distance != hits[j].distance {
			return hits[i].distance < hits[j].distance
		}
		return hits[i].name < hits[j].name
	})
	var out []string
	seen := make(map[string]bool)
	for _, h := range hits {
		if !seen[h.animal] && len(out) < 5 {
			seen[h.animal] = true
			out = append(out, h.name)
		}
	}
	return out
}

// youngOf are words for the young of animals. None is a name that is read, since
// the case would then be that of an adult: the stage of life has its own entry.
var youngOf = map[string]string{
	"kitten": "cat", "kittens": "cat", "puppy": "dog", "puppies": "dog", "pup": "dog", "foal": "horse", "colt": "horse", "filly": "horse",
	"calf": "cattle", "calves": "cattle", "heifer": "cattle", "lamb": "sheep", "lambs": "sheep", "kid": "goat", "goat kid": "goat",
	"piglet": "pig", "piglets": "pig", "chick": "chicken", "chicks": "chicken", "poult": "turkey", "duckling": "domestic duck", "gosling": "domestic goose",
	"fawn": "white-tailed deer", "cria": "llama", "joey": "red kangaroo", "tadpole": "common frog", "bear cub": "brown bear", "lion cub": "lion", "tiger cub": "tiger",
}

// wordDistance is how far words are from those of a name, in half slips: two a
// slip within a word, and one for every word that only the name has. ok is
// false unless each word is near to one of the name (equal under four letters,
// within a slip under seven, else two) in the same order.
func wordDistance(words, name []string) (d int, ok bool) {
	if len(words) > len(name) {
		return 0, false
	}
	at := 0
	for i, w := range words {
		limit := 2
		switch {
		case len(w) < 4:
			limit = 0
		case len(w) < 7:
			limit = 1
		}
		best := limit + 1
		// The nearest of the words that leave enough of them for the rest.
		for j := at; j <= len(name)-(len(words)-i); j++ {
			if e := editDistance(w, name[j], limit); e < best {
				best, at = e, j
			}
		}
		if best > limit {
			return 0, false
		}
		d += 2 * best
		at++
	}
	return d + len(name) - len(words), true
}

// editDistance counts the letters to insert, delete, change or swap with
// their neighbour (optimal string alignment); anything over limit is
// reported as limit+1. Letters are bytes: both words are folded.
func editDistance(a, b string, limit int) int {
	if len(a) > len(b) {
		a, b = b, a
	}
	if len(b)-len(a) > limit {
		return limit + 1
	}
	var room [3][fold.MaxBytes + 1]int
	if len(b) > fold.MaxBytes {
		return limit + 1
	}
	before, previous, current := room[0][:len(a)+1], room[1][:len(a)+1], room[2][:len(a)+1]
	for i := range previous {
		previous[i] = i
	}
	for j := 1; j <= len(b); j++ {
		current[0] = j
		least := j
		for i := 1; i <= len(a); i++ {
			cost := 1
			if a[i-1] == b[j-1] {
				cost = 0
			}
			d := min(previous[i]+1, current[i-1]+1, previous[i-1]+cost)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				d = min(d, before[i-2]+1)
			}
			current[i] = d
			least = min(least, d)
		}
		if least > limit {
			// A swap reaches back two rows, so one row over the limit decides
			// only together with the one before; that one was within it, and
			// a swap adds one to it: still not enough to come back under.
			if leastOf(previous) >= limit {
				return limit + 1
			}
		}
		before, previous, current = previous, current, before
	}
	return min(previous[len(a)], limit+1)
}

func leastOf(row []int) int {
	least := row[0]
	for _, d := range row {
		least = min(least, d)
	}
	return least
}

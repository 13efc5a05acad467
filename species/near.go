package species

import (
	"sort"
	"strings"

	"tayra/species/internal/fold"
)

// near returns up to five names near the folded words: first those that
// contain them as whole words, then by edit distance to at most a third of
// their letters. An animal is named once.
func near(folded string) []string {
	key := fold.Key(folded)
	limit := max(1, len(key)/3)
	type hit struct {
		name, animal string
		distance     int
	}
	var hits []hit
	consider := func(nameKey, written, animal string) {
		d := editDistance(key, nameKey, limit)
		if d > limit {
			w, err := fold.Words(written)
			if err != nil || !hasWords(w, folded) {
				return
			}
			d = 1 // as good as one slip: the words are right, one is missing
		}
		hits = append(hits, hit{written, animal, d})
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

// hasWords reports whether name contains words at word ends.
func hasWords(name, words string) bool {
	return strings.Contains(" "+name+" ", " "+words+" ")
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

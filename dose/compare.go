package dose

import (
	"encoding/json"
	"fmt"
	"math"
	"slices"
	"strconv"
)

// Tolerance is how far two numbers of a record may lie apart, relative to the
// larger, and still count as the same: far below what is printed, and far above
// what another processor or compiler changes in the last digits.
const Tolerance = 1e-9

// noise is the size under which a number counts as zero. Some numbers of a
// record are differences that ought to vanish, and what the binary arithmetic
// leaves of them has no digits to compare. The smallest amount on paper is far
// larger.
const noise = 1e-12

// Difference is one place where two records differ. Was and Now are the JSON
// values there; one of them is empty where the place is in one record only.
type Difference struct {
	Path string          `json:"path"` // drafts[0].plans[1].dose_per_kg[0]
	Was  json.RawMessage `json:"was,omitempty"`
	Now  json.RawMessage `json:"now,omitempty"`
}

// Recompute works the case of a record out again, from its inputs as typed and
// nothing else of it. The error is an [InputErrors]: this program does not take
// the inputs, so either they were changed or another version took them.
func Recompute(w *Worksheet) (*Worksheet, error) {
	if w.Input == nil {
		return nil, InputErrors{{Field: "input", Problem: "the record has no inputs", Remedy: "only a whole record can be worked out again"}}
	}
	c, err := w.Input.Check()
	if err != nil {
		return nil, err
	}
	return Draft(c)
}

// Compare lists where two JSON texts differ, in the order of the first: numbers
// by [Tolerance], everything else exactly. The order of the keys of an object
// does not matter. Items of a list that name themselves (a caution by its slug,
// a plan by its name) are held against the item of that name, so that one more
// caution is one difference and not one for each that follows it.
//
// The error is of a text that is no JSON, has a key twice, or nests too deep.
func Compare(was, now []byte) ([]Difference, error) {
	a, err := readTree(was)
	if err != nil {
		return nil, fmt.Errorf("the first record: %w", err)
	}
	b, err := readTree(now)
	if err != nil {
		return nil, fmt.Errorf("the second record: %w", err)
	}
	var c comparison
	c.nodes("", a, b)
	return c.found, nil
}

type comparison struct{ found []Difference }

func (c *comparison) differ(path string, was, now *jsonNode) {
	d := Difference{Path: path}
	if was != nil {
		d.Was = was.raw
	}
	if now != nil {
		d.Now = now.raw
	}
	c.found = append(c.found, d)
}

func (c *comparison) nodes(path string, a, b *jsonNode) {
	switch {
	case a.kind != b.kind:
		c.differ(path, a, b)
	case a.kind == jsonObject:
		c.objects(path, a, b)
	case a.kind == jsonList:
		c.lists(path, a, b)
	case !sameLeaf(a, b):
		c.differ(path, a, b)
	}
}

func (c *comparison) objects(path string, a, b *jsonNode) {
	below := func(key string) string {
		if path == "" {
			return key
		}
		return path + "." + key
	}
	for i, key := range a.keys {
		if j := b.find(key); j >= 0 {
			c.nodes(below(key), a.items[i], b.items[j])
		} else {
			c.differ(below(key), a.items[i], nil)
		}
	}
	for j, key := range b.keys {
		if a.find(key) < 0 {
			c.differ(below(key), nil, b.items[j])
		}
	}
}

// lists walks two lists side by side. An item without a partner stands under
// its own number: that of the first list, or that of the second when it is new.
func (c *comparison) lists(path string, a, b *jsonNode) {
	at := func(i int) string { return path + "[" + strconv.Itoa(i) + "]" }
	i, j := 0, 0
	for _, p := range append(align(a.items, b.items), [2]int{len(a.items), len(b.items)}) {
		for ; i < p[0]; i++ {
			c.differ(at(i), a.items[i], nil)
		}
		for ; j < p[1]; j++ {
			c.differ(at(j), nil, b.items[j])
		}
		if i < len(a.items) && j < len(b.items) {
			c.nodes(at(i), a.items[i], b.items[j])
		}
		i, j = i+1, j+1
	}
}

// sameLeaf compares texts, truth values and nothings by their letters and
// numbers by their value.
func sameLeaf(a, b *jsonNode) bool {
	if a.text == b.text {
		return true
	}
	if a.kind != jsonNumber {
		return false
	}
	x, err1 := strconv.ParseFloat(a.text, 64)
	y, err2 := strconv.ParseFloat(b.text, 64)
	if err1 != nil || err2 != nil { // beyond the largest number
		return false
	}
	size := math.Max(math.Abs(x), math.Abs(y))
	return size <= noise || math.Abs(x-y) <= Tolerance*size
}

// mostPairs bounds the work of aligning two lists; beyond it items are taken in
// order.
const mostPairs = 1 << 20

// align pairs the items of two lists: the longest run of equal names in their
// order. Items without a name are taken first with first, second with second;
// texts go by their letters when one list has more of them.
func align(a, b []*jsonNode) [][2]int {
	letters := len(a) != len(b)
	same := func(x, y *jsonNode) bool {
		return x.name() == y.name() && (!letters || x.kind != jsonText || y.kind != jsonText || x.text == y.text)
	}
	var pairs [][2]int
	// What is alike at both ends needs no search.
	head := 0
	for head < len(a) && head < len(b) && same(a[head], b[head]) {
		pairs = append(pairs, [2]int{head, head})
		head++
	}
	tail := 0
	for tail < len(a)-head && tail < len(b)-head && same(a[len(a)-1-tail], b[len(b)-1-tail]) {
		tail++
	}
	restA, restB := a[head:len(a)-tail], b[head:len(b)-tail]
	if len(restA)*len(restB) > mostPairs {
		for k := range min(len(restA), len(restB)) {
			pairs = append(pairs, [2]int{head + k, head + k})
		}
	} else {
		for _, p := range longestRun(restA, restB, same) {
			pairs = append(pairs, [2]int{head + p[0], head + p[1]})
		}
	}
	for k := tail; k > 0; k-- {
		pairs = append(pairs, [2]int{len(a) - k, len(b) - k})
	}
	return pairs
}

// longestRun is the longest common subsequence of two lists.
func longestRun(a, b []*jsonNode, same func(x, y *jsonNode) bool) [][2]int {
	if len(a) == 0 || len(b) == 0 {
		return nil
	}
	width := len(b) + 1
	length := make([]int32, (len(a)+1)*width)
	for i := len(a) - 1; i >= 0; i-- {
		for j := len(b) - 1; j >= 0; j-- {
			if same(a[i], b[j]) {
				length[i*width+j] = length[(i+1)*width+j+1] + 1
			} else {
				length[i*width+j] = max(length[(i+1)*width+j], length[i*width+j+1])
			}
		}
	}
	var pairs [][2]int
	for i, j := 0, 0; i < len(a) && j < len(b); {
		switch {
		case same(a[i], b[j]):
			pairs = append(pairs, [2]int{i, j})
			i, j = i+1, j+1
		case length[(i+1)*width+j] >= length[i*width+j+1]:
			i++
		default:
			j++
		}
	}
	return pairs
}

// Without drops the differences at some places and below them.
func Without(found []Difference, places ...string) []Difference {
	return slices.DeleteFunc(slices.Clone(found), func(d Difference) bool {
		return slices.ContainsFunc(places, func(p string) bool {
			return d.Path == p || len(d.Path) > len(p) && d.Path[:len(p)] == p && (d.Path[len(p)] == '.' || d.Path[len(p)] == '[')
		})
	})
}

// The generated indexes are sorted lines. Finding one animal bisects the
// embedded bytes and reads a single line; nothing is parsed at start.

package species

import (
	_ "embed"
	"strings"
)

//go:generate go run ./internal/build/generate

//go:embed data/animals.index
var animalsIndex string

//go:embed data/names.index
var namesIndex string

// line returns the line of a sorted index that begins with key and a tab.
func line(index, key string) (string, bool) {
	low, high := 0, len(index)
	for low < high {
		middle := int(uint(low+high) / 2)
		start := low + strings.LastIndexByte(index[low:middle], '\n') + 1
		end := start + strings.IndexByte(index[start:], '\n')
		switch c := compareKey(index[start:end], key); {
		case c == 0:
			return index[start:end], true
		case c < 0:
			low = end + 1
		default:
			high = start
		}
	}
	return "", false
}

// compareKey compares the first cell of a line with key.
func compareKey(line, key string) int {
	n := min(len(line), len(key))
	if c := strings.Compare(line[:n], key[:n]); c != 0 {
		return c
	}
	switch {
	case len(line) == n && len(key) == n:
		return 0
	case len(line) == n: // no tab: not a line of an index
		return -1
	case len(key) > n:
		return -1
	case line[n] == '\t':
		return 0
	}
	return 1
}

// lines calls yield with every line of an index.
func lines(index string) func(yield func(string) bool) {
	return func(yield func(string) bool) {
		for index != "" {
			var l string
			l, index, _ = strings.Cut(index, "\n")
			if !yield(l) {
				return
			}
		}
	}
}

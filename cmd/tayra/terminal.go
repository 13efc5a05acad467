package main

import (
	"io"
	"os"
)

const (
	ordinaryWidth = 80
	widestText    = 100 // longer lines are hard to follow
	narrowestText = 60
)

// takesColour says whether what is written may be coloured: a terminal, and
// nobody who asked for none.
func takesColour(w io.Writer) bool {
	if os.Getenv("NO_COLOR") != "" || os.Getenv("TERM") == "dumb" {
		return false
	}
	return isTerminal(w)
}

func isTerminal(w io.Writer) bool {
	_, ok := terminalWidth(w)
	return ok
}

// textWidth is the width of a running text: the terminal's within reason, and
// that of an ordinary terminal for everything else.
func textWidth(w io.Writer) int {
	n, ok := terminalWidth(w)
	if !ok || n == 0 {
		return ordinaryWidth
	}
	return min(max(n, narrowestText), widestText)
}

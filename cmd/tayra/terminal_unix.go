//go:build unix

package main

import (
	"io"
	"os"

	"golang.org/x/sys/unix"
)

// terminalWidth gives the columns of a terminal; ok is false for everything
// else. A terminal that does not know its size has 0.
func terminalWidth(w io.Writer) (columns int, ok bool) {
	f, isFile := w.(*os.File)
	if !isFile {
		return 0, false
	}
	size, err := unix.IoctlGetWinsize(int(f.Fd()), unix.TIOCGWINSZ)
	if err != nil {
		return 0, false
	}
	return int(size.Col), true
}

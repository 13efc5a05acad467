//go:build !unix

package main

import "io"

// terminalWidth knows no terminal: the text is plain and of ordinary width.
func terminalWidth(io.Writer) (columns int, ok bool) { return 0, false }

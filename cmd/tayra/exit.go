package main

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"strings"
	"syscall"

	"tayra/dose"
)

// The exit statuses of every command.
const (
	exitDone    = 0
	exitFinding = 1 // a stop left no dose, a check found a difference, a row of a batch was stopped or failed
	exitInput   = 2 // the input or the command line is wrong
	exitFile    = 3 // a file could not be read or written, or exists and --force was not given
)

// errFinding ends a command that did its work, wrote it, and found something:
// it says nothing more and gives exitFinding.
var errFinding = errors.New("a finding")

// usageError is a fault of the command line. what names the flag or argument,
// or is empty.
type usageError struct{ what, problem, remedy string }

func (e *usageError) Error() string { return joinMessage(e.what, e.problem, e.remedy) }

// fileError is a file that could not be read or written.
type fileError struct{ path, problem, remedy string }

func (e *fileError) Error() string { return joinMessage(e.path, e.problem, e.remedy) }

func joinMessage(what, problem, remedy string) string {
	if what != "" {
		problem = what + ": " + problem
	}
	if remedy != "" {
		problem += "; " + remedy
	}
	return problem
}

// report says what went wrong and gives the exit status.
func report(err error, stderr io.Writer) int {
	if err == nil {
		return exitDone
	}
	if errors.Is(err, errFinding) {
		return exitFinding
	}
	for line := range strings.SplitSeq(err.Error(), "\n") {
		fmt.Fprintf(stderr, "tayra: %s\n", printable(line))
	}
	if file := (*fileError)(nil); errors.As(err, &file) {
		return exitFile
	}
	return exitInput
}

// warn says something that changes nothing.
func warn(stderr io.Writer, what, text string) {
	fmt.Fprintf(stderr, "tayra: %s: warning: %s\n", printable(what), printable(text))
}

// printable keeps a file's name or text from acting on the terminal: control
// characters are written as escapes.
func printable(s string) string {
	if !strings.ContainsFunc(s, isControl) {
		return s
	}
	var b strings.Builder
	for _, r := range s {
		if isControl(r) {
			fmt.Fprintf(&b, `\u%04x`, r)
		} else {
			b.WriteRune(r)
		}
	}
	return b.String()
}

// isControl covers C0, DEL, C1 and the letters that turn the line around.
func isControl(r rune) bool {
	return r < 0x20 || r >= 0x7f && r < 0xa0 || r >= 0x202a && r <= 0x202e || r >= 0x2066 && r <= 0x2069 || r == 0x200e || r == 0x200f
}

// unreadable and unwritable put the operating system's reason into words.
func unreadable(path string, err error) error {
	problem, remedy := reason(err)
	return &fileError{path, "cannot be read: " + problem, remedy}
}

func unwritable(path string, err error) error {
	problem, remedy := reason(err)
	return &fileError{path, "cannot be written: " + problem, remedy}
}

func reason(err error) (problem, remedy string) {
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return "no such file or folder", "check the name"
	case errors.Is(err, fs.ErrPermission):
		return "permission denied", ""
	case errors.Is(err, syscall.EISDIR):
		return "it is a folder", "name a file"
	case errors.Is(err, syscall.ENOTDIR):
		return "a part of its path is no folder", "check the name"
	case errors.Is(err, syscall.ENOSPC):
		return "the disk is full", ""
	case errors.Is(err, syscall.ENAMETOOLONG):
		return "the name is too long", ""
	case errors.Is(err, syscall.EROFS):
		return "the disk is read-only", ""
	}
	var path *fs.PathError
	var link *os.LinkError
	switch {
	case errors.As(err, &path):
		return path.Err.Error(), ""
	case errors.As(err, &link):
		return link.Err.Error(), ""
	}
	return err.Error(), ""
}

// keysAsFlags turns the keys of the case file in a remedy into the flags that
// stand for them.
var keysAsFlags = strings.NewReplacer("basis: equation", "--basis equation", "interval: infusion", "--interval infusion",
	"interval: once", "--interval once", "write half_life", "write --half-life")

// flagErrors renames the places of an input that was typed as flags: field
// names of the case file become flags, and there is no file to point into.
// flagOf may be nil.
func flagErrors(err error, flagOf func(field string) string) error {
	var faults dose.InputErrors
	if flagOf == nil || !errors.As(err, &faults) {
		return err
	}
	out := make(dose.InputErrors, len(faults))
	for i, f := range faults {
		renamed := *f
		if flag := flagOf(f.Field); flag != "" && f.Line == 0 {
			renamed.File, renamed.Field = "", flag
			renamed.Problem, renamed.Remedy = keysAsFlags.Replace(f.Problem), keysAsFlags.Replace(f.Remedy)
		}
		out[i] = &renamed
	}
	return out
}

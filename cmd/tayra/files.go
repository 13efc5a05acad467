// Files are written whole or not at all:
//
//   - Everything is rendered in memory before the first file is touched, and
//     every target is looked at before the first is written.
//   - The bytes go to a new file in the target's own folder, are synced, and
//     take the target's name by a link, which fails when the name is taken:
//     without --force no file can be lost, not even to a program that makes one
//     in the same moment. With --force the name is taken by a rename.
//   - If one of several outputs fails, the ones already in place are taken away
//     again, and files that they had replaced are put back.
//   - What is no regular file (a terminal, a pipe, /dev/null) is written to as
//     it stands, last of all. A folder is refused.

package main

import (
	"crypto/rand"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"

	"tayra/dose"
)

// output is one file that a command was asked for.
type output struct {
	flag string // by which it was named
	path string
	data []byte
}

// target is an output with what stands at its place now.
type target struct {
	output
	real     string      // the path behind symbolic links
	old      fs.FileInfo // nil: nothing there
	stream   bool        // no regular file
	staged   string      // the finished bytes under another name
	replaced string      // the old file under another name
	placed   bool
}

// writeFiles puts all the outputs in place or none of them. sources are files
// that the command reads: none of them is ever a target.
func writeFiles(outputs []output, force bool, sources ...string) error {
	targets, err := lookAt(outputs, force, sources)
	if err != nil {
		return err
	}
	for _, t := range targets {
		if err := t.stage(); err != nil {
			undo(targets)
			return err
		}
	}
	for _, t := range targets {
		if err := t.place(force, len(targets) > 1); err != nil {
			undo(targets)
			return err
		}
	}
	for _, t := range targets {
		if err := t.pour(); err != nil {
			undo(targets)
			return err
		}
	}
	for _, t := range targets {
		t.tidy()
	}
	return nil
}

// lookAt finds out what stands at every target, and refuses before anything is
// written.
func lookAt(outputs []output, force bool, sources []string) ([]*target, error) {
	var targets []*target
	for _, o := range outputs {
		t := &target{output: o, real: o.path}
		if o.path == "" {
			return nil, &usageError{o.flag, "empty", "name a file"}
		}
		here, err := os.Lstat(o.path)
		switch {
		case errors.Is(err, fs.ErrNotExist):
			// The folder is looked at now: a missing one is found before the
			// other outputs are written.
			if _, err := os.Stat(filepath.Dir(o.path)); err != nil {
				return nil, &fileError{o.path, "cannot be written: there is no folder " + filepath.Dir(o.path), "make it first"}
			}
		case err != nil:
			return nil, unwritable(o.path, err)
		case here.Mode()&fs.ModeSymlink != 0:
			if t.real, err = filepath.EvalSymlinks(o.path); err != nil {
				return nil, &fileError{o.path, "cannot be written: it is a symbolic link to nothing", "remove the link, or name another file"}
			}
			fallthrough
		default:
			if t.old, err = os.Stat(t.real); err != nil {
				return nil, unwritable(o.path, err)
			}
		}
		if t.old != nil {
			t.stream = !t.old.Mode().IsRegular()
			switch {
			case t.old.IsDir():
				return nil, &fileError{o.path, "cannot be written: it is a folder", "name a file in it"}
			case sameAsAny(t.old, sources):
				return nil, &usageError{o.flag, o.path + " is the input itself", "name another file"}
			case !t.stream && !force:
				return nil, existsError(o.path)
			}
		}
		for _, other := range targets {
			same := filepath.Clean(other.real) == filepath.Clean(t.real)
			if t.old != nil && other.old != nil {
				same = same || os.SameFile(t.old, other.old)
			}
			if same && !t.stream {
				return nil, &usageError{o.flag, o.path + " is also the file of " + other.flag, "name two files"}
			}
		}
		targets = append(targets, t)
	}
	return targets, nil
}

func existsError(path string) error {
	return &fileError{path, "exists already", "name another file, or add --force to replace it"}
}

func sameAsAny(info fs.FileInfo, paths []string) bool {
	for _, p := range paths {
		if other, err := os.Stat(p); err == nil && os.SameFile(info, other) {
			return true
		}
	}
	return false
}

// neighbour is an unused name beside a file.
func neighbour(path, ending string) string {
	return filepath.Join(filepath.Dir(path), "."+filepath.Base(path)+"."+rand.Text()[:10]+ending)
}

// stage writes the bytes under a name of its own.
func (t *target) stage() error {
	if t.stream {
		return nil
	}
	mode := fs.FileMode(0o666) // less the user's mask
	if t.old != nil {
		mode = t.old.Mode().Perm()
	}
	name := neighbour(t.real, ".tmp")
	f, err := os.OpenFile(name, os.O_WRONLY|os.O_CREATE|os.O_EXCL, mode)
	if err != nil {
		return unwritable(t.path, err)
	}
	t.staged = name
	if _, err = f.Write(t.data); err == nil && t.old != nil {
		err = f.Chmod(mode)
	}
	if err == nil {
		err = f.Sync()
	}
	if e := f.Close(); err == nil {
		err = e
	}
	if err != nil {
		return unwritable(t.path, err)
	}
	return nil
}

// place gives the staged bytes their name.
func (t *target) place(force, undoable bool) error {
	switch {
	case t.stream:
		return nil
	case force:
		if undoable && t.old != nil {
			keep := neighbour(t.real, ".old")
			if err := os.Link(t.real, keep); err != nil {
				if err := copyFile(t.real, keep); err != nil {
					os.Remove(keep)
					return unwritable(t.path, err)
				}
			}
			t.replaced = keep
		}
		if err := os.Rename(t.staged, t.real); err != nil {
			return unwritable(t.path, err)
		}
		t.staged = ""
	default:
		err := os.Link(t.staged, t.real)
		if err != nil && !errors.Is(err, fs.ErrExist) {
			err = t.reserve() // a file system without links
		}
		if errors.Is(err, fs.ErrExist) {
			return existsError(t.path)
		}
		if err != nil {
			return unwritable(t.path, err)
		}
	}
	t.placed = true
	syncFolder(filepath.Dir(t.real))
	return nil
}

// reserve takes the name with an empty file of our own, which fails when the
// name is taken, and renames the staged bytes over it.
func (t *target) reserve() error {
	f, err := os.OpenFile(t.real, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if err != nil {
		return err
	}
	f.Close()
	if err := os.Rename(t.staged, t.real); err != nil {
		os.Remove(t.real)
		return err
	}
	t.staged = ""
	return nil
}

// pour writes to what is no regular file.
func (t *target) pour() error {
	if !t.stream {
		return nil
	}
	f, err := os.OpenFile(t.real, os.O_WRONLY, 0)
	if err != nil {
		return unwritable(t.path, err)
	}
	_, err = f.Write(t.data)
	if e := f.Close(); err == nil {
		err = e
	}
	if err != nil {
		return unwritable(t.path, err)
	}
	return nil
}

// tidy removes what was only needed on the way.
func (t *target) tidy() {
	if t.staged != "" {
		os.Remove(t.staged)
	}
	if t.replaced != "" {
		os.Remove(t.replaced)
	}
}

// undo takes away what was put in place.
func undo(targets []*target) {
	for _, t := range targets {
		switch {
		case t.placed && t.replaced != "":
			if os.Rename(t.replaced, t.real) == nil {
				t.replaced = ""
			}
		case t.placed:
			os.Remove(t.real)
		}
		t.tidy()
	}
}

func copyFile(from, to string) error {
	data, err := os.ReadFile(from)
	if err != nil {
		return err
	}
	return os.WriteFile(to, data, 0o600)
}

// syncFolder makes a new name last through a power cut where the system can;
// where it cannot, the file is there all the same.
func syncFolder(path string) {
	if f, err := os.Open(path); err == nil {
		f.Sync()
		f.Close()
	}
}

// largestInput is one byte more than any input that is read whole, so that the
// reader of the input can say that it is too large.
const largestInput = 1<<20 + 1

// readInput reads a case file, or standard input for "-". name is how messages
// call it; source is the path, empty for standard input.
func readInput(arg string, stdin io.Reader) (name, source string, data []byte, err error) {
	if arg == "-" {
		data, err = io.ReadAll(io.LimitReader(stdin, largestInput))
		if err != nil {
			return "", "", nil, unreadable("standard input", err)
		}
		return "standard input", "", data, nil
	}
	f, err := os.Open(arg)
	if err != nil {
		return "", "", nil, unreadable(arg, err)
	}
	defer f.Close()
	data, err = io.ReadAll(io.LimitReader(f, largestInput))
	if err != nil {
		return "", "", nil, unreadable(arg, err)
	}
	return arg, arg, data, nil
}

// readCase reads a case and says its warnings.
func readCase(arg string, stdin io.Reader, stderr io.Writer) (in *dose.CaseInput, source string, data []byte, err error) {
	name, source, data, err := readInput(arg, stdin)
	if err != nil {
		return nil, "", nil, err
	}
	in, warnings, err := dose.ReadCase(name, data)
	for _, w := range warnings {
		text := w.Text
		if w.Field != "" {
			text = w.Field + ": " + text
		}
		warn(stderr, fmt.Sprintf("%s:%d:%d", name, w.Line, w.Column), text)
	}
	return in, source, data, err
}

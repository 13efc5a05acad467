// The result of a batch is too long to be rendered before it is written. It is
// whole or not there all the same:
//
//   - Rows go to OUT.csv.part, whole rows only. If the disk is full in the
//     middle of a row, the file is cut back to the last whole one.
//   - OUT.csv appears by taking the part file's name, when all rows are done.
//   - A part file that is there already is neither overwritten nor gone on with
//     unless that is asked for.

package main

import (
	"errors"
	"io"
	"io/fs"
	"os"
	"path/filepath"

	"tayra/reports"
)

const partEnding = ".part"

// batchResult takes the rows as they are made.
type batchResult struct {
	name    string             // in messages
	part    string             // path of the part file; "" where rows go straight on
	earlier *reports.BatchPart // with --resume: what is in the part file

	to      io.Writer // straight on
	target  *target
	sources []string
	force   bool
	file    *os.File // the part file, once there is a row for it
	size    int64    // of it, in whole rows
}

func openResult(b *batchCall, table *batchTable, stdout io.Writer) (*batchResult, error) {
	if b.out == "-" {
		return &batchResult{name: "standard output", to: stdout}, nil
	}
	r := &batchResult{name: b.out, force: b.force}
	for _, path := range []string{table.source, b.columns} {
		if path != "" && path != "-" {
			r.sources = append(r.sources, path)
		}
	}
	outputs := []output{{flag: "--output", path: b.out}}
	if b.merge != "" {
		outputs = append(outputs, output{flag: "--merge", path: b.merge})
	}
	targets, err := lookAt(outputs, b.force, r.sources)
	if err != nil {
		return nil, err
	}
	r.target = targets[0]
	if r.target.stream {
		if r.file, err = os.OpenFile(r.target.real, os.O_WRONLY, 0); err != nil {
			return nil, unwritable(b.out, err)
		}
		r.to = r.file
		return r, nil
	}
	r.part = r.target.real + partEnding
	if b.resume {
		return r, r.goOn()
	}
	switch info, err := os.Lstat(r.part); {
	case err == nil && sameAsAny(info, r.sources):
		return nil, &usageError{"--output", r.part + ", where its rows would go, is the input itself", "name another file"}
	case err == nil && !b.force:
		return nil, &fileError{r.part, "exists already: an earlier run was interrupted", "add --resume to go on with it, or --force to start anew"}
	case err == nil:
		if err := os.Remove(r.part); err != nil {
			return nil, unwritable(r.part, err)
		}
	case !errors.Is(err, fs.ErrNotExist):
		return nil, unwritable(r.part, err)
	}
	return r, r.writable()
}

// writable finds a folder in which nothing can be written before any work is
// done.
func (r *batchResult) writable() error {
	probe := neighbour(r.part, ".tmp")
	f, err := os.OpenFile(probe, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if err != nil {
		return unwritable(r.name, err)
	}
	f.Close()
	os.Remove(probe)
	return nil
}

// goOn opens the part file and cuts off a row that is not whole.
func (r *batchResult) goOn() error {
	info, err := os.Lstat(r.part)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return &fileError{r.part, "there is nothing to go on with", "leave --resume out"}
	case err == nil && !info.Mode().IsRegular():
		return &fileError{r.part, "no regular file", "start anew without --resume"}
	}
	f, err := os.OpenFile(r.part, os.O_RDWR, 0)
	if err != nil {
		return unwritable(r.part, err)
	}
	r.file = f
	r.earlier, err = reports.ReadPart(f)
	var fault *reports.PartError
	if errors.As(err, &fault) {
		return &usageError{"--resume", r.part + ": " + fault.Problem, fault.Remedy}
	}
	if err != nil {
		return unreadable(r.part, err)
	}
	r.size = r.earlier.Size
	if err := f.Truncate(r.size); err != nil {
		return unwritable(r.part, err)
	}
	if _, err := f.Seek(r.size, io.SeekStart); err != nil {
		return unwritable(r.part, err)
	}
	return nil
}

// Write takes whole rows.
func (r *batchResult) Write(rows []byte) (int, error) {
	if r.to != nil {
		return r.to.Write(rows)
	}
	if r.file == nil {
		f, err := os.OpenFile(r.part, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
		if err != nil {
			return 0, err
		}
		r.file = f
	}
	n, err := r.file.Write(rows)
	if err != nil {
		r.file.Truncate(r.size)
		return n, err
	}
	r.size += int64(n)
	return n, nil
}

// finish gives the result its name, and the merged worksheets theirs: both or
// neither.
func (r *batchResult) finish(merged []output, err error) error {
	if err != nil {
		return err
	}
	if r.part == "" {
		return writeFiles(merged, r.force, r.sources...)
	}
	if err := r.file.Sync(); err != nil {
		return &reports.WriteError{Err: err}
	}
	if err := r.file.Close(); err != nil {
		return &reports.WriteError{Err: err}
	}
	r.file = nil
	if err := writeFiles(merged, r.force, r.sources...); err != nil {
		return err
	}
	r.target.staged = r.part
	if err := r.target.place(r.force, false); err != nil {
		for _, o := range merged {
			os.Remove(o.path)
		}
		return err
	}
	r.target.tidy()
	syncFolder(filepath.Dir(r.part))
	return nil
}

// close lets go of what is still open. A part file without a single row is of
// no use to anybody.
func (r *batchResult) close() {
	if r.file != nil {
		r.file.Sync()
		r.file.Close()
	}
}

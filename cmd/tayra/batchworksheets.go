package main

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"runtime/debug"
	"strings"
	"sync"

	"tayra/dose"
	"tayra/reports"
)

// mostMerged is how many worksheets one file takes: six thousand pages, which
// are made in memory.
const mostMerged = 1000

// batchSheets makes the worksheets of a batch.
type batchSheets struct {
	folder  string
	replace bool // a file of the same name
	paper   reports.Paper
	bundle  *reports.PDFBundle

	sync.Mutex
	waiting map[int]*reports.LaidOut // by row: laid out, not yet drawn
	drawn   int                      // rows that are behind
}

// worksheets sets up what the batch makes besides the table.
func (b *batchCall) worksheets(o *reports.BatchOptions) (*batchSheets, error) {
	s := &batchSheets{folder: b.pdfDir, replace: b.force || b.resume}
	if b.pdfDir == "" && b.merge == "" {
		return s, nil
	}
	if b.paper == "letter" {
		s.paper = reports.Letter
	}
	if b.pdfDir != "" {
		if err := s.prepareFolder(); err != nil {
			return nil, err
		}
	}
	if b.merge != "" {
		s.bundle, s.waiting = reports.NewPDFBundle(s.paper), map[int]*reports.LaidOut{}
	}
	o.Worksheet = s.make
	// Setting pages makes much rubbish, and the collector is what keeps a
	// second processor from helping: it is asked to run seldom, within bounds.
	// The pages of a bundle are no rubbish.
	if s.bundle == nil && os.Getenv("GOGC") == "" && os.Getenv("GOMEMLIMIT") == "" {
		debug.SetGCPercent(800)
		debug.SetMemoryLimit(192 << 20)
	}
	return s, nil
}

// prepareFolder makes the folder, or sees that it can take the files.
func (s *batchSheets) prepareFolder() error {
	if err := os.Mkdir(s.folder, 0o777); err != nil && !errors.Is(err, os.ErrExist) {
		return unwritable(s.folder, err)
	}
	f, err := os.CreateTemp(s.folder, ".tayra-*.tmp")
	if err != nil {
		return unwritable(s.folder, err)
	}
	f.Close()
	os.Remove(f.Name())
	entries, err := os.ReadDir(s.folder)
	if err != nil {
		return unreadable(s.folder, err)
	}
	for _, e := range entries {
		if !s.replace && sheetName.MatchString(e.Name()) {
			return &fileError{filepath.Join(s.folder, e.Name()), "a worksheet of an earlier run", "name another folder, or add --force to replace worksheets of the same name"}
		}
	}
	return nil
}

// make makes the worksheet of one row. It is called from several goroutines.
func (s *batchSheets) make(row int, ws *dose.Worksheet, in *dose.CaseInput) error {
	if s.bundle != nil {
		laid, err := s.bundle.LayOut(ws)
		if err != nil {
			return unprintable(err)
		}
		s.Lock()
		s.waiting[row] = laid
		s.Unlock()
	}
	if s.folder == "" {
		return nil
	}
	pdf, err := reports.PDF(ws, reports.PDFOptions{Paper: s.paper, Case: dose.WriteCase(in)})
	if err != nil {
		return unprintable(err)
	}
	return s.write(sheetFile(row, ws), pdf)
}

// unprintable makes a text that no worksheet can show the fault of its row.
func unprintable(err error) error {
	return &reports.RowError{Problem: "no worksheet can be made: " + err.Error()}
}

// write puts a file into the folder, whole or not at all. It is not synced: a
// batch that is cut off by a power cut is run again.
func (s *batchSheets) write(name string, data []byte) error {
	path := filepath.Join(s.folder, name)
	temporary := neighbour(path, ".tmp")
	err := os.WriteFile(temporary, data, 0o666)
	if err == nil {
		if !s.replace {
			if _, e := os.Lstat(path); e == nil {
				os.Remove(temporary)
				return existsError(path)
			}
		}
		err = os.Rename(temporary, path)
	}
	if err != nil {
		os.Remove(temporary)
		return unwritable(path, err)
	}
	return nil
}

// sheetName is what the names of worksheets look like.
var sheetName = regexp.MustCompile(`^[0-9]{6,}(-[A-Za-z0-9-]+)?\.pdf$`)

// sheetFile names a worksheet by its row, which makes the name unique and puts
// the files into the order of the table, its case and its animal. Letters that
// are not plain become a hyphen.
func sheetFile(row int, ws *dose.Worksheet) string {
	animal := ws.Patient.CommonName
	if animal == "" {
		animal = ws.Patient.Species
	}
	name := fmt.Sprintf("%06d", row)
	for _, part := range []string{ws.Case, animal} {
		if part = plainName(part); part != "" {
			name += "-" + part
		}
	}
	return name + ".pdf"
}

func plainName(s string) string {
	const longest = 40
	words := strings.FieldsFunc(s, func(r rune) bool {
		return !(r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z' || r >= '0' && r <= '9')
	})
	name := strings.Join(words, "-")
	if len(name) > longest {
		name = strings.Trim(name[:longest], "-")
	}
	return name
}

// upTo draws the worksheets of the rows that are written, in their order.
func (s *batchSheets) upTo(rows int) error {
	if s.bundle == nil {
		return nil
	}
	for ; s.drawn < rows; s.drawn++ {
		s.Lock()
		laid := s.waiting[s.drawn+1]
		delete(s.waiting, s.drawn+1)
		s.Unlock()
		if laid == nil {
			continue // a row at fault
		}
		if s.bundle.Sheets() == mostMerged {
			return &usageError{"--merge", "more than " + withCommas(mostMerged) + " worksheets do not go into one file", "write them with --pdf-dir"}
		}
		s.bundle.Add(laid)
	}
	return nil
}

// merged is the file of all worksheets.
func (s *batchSheets) merged(path string) ([]output, error) {
	if s.bundle == nil {
		return nil, nil
	}
	if s.bundle.Sheets() == 0 {
		return nil, &usageError{"--merge", "not one row gives a worksheet", "see the column error"}
	}
	data, err := s.bundle.Bytes()
	if err != nil {
		return nil, err
	}
	return []output{{flag: "--merge", path: path, data: data}}, nil
}

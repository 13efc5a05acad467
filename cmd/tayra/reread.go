package main

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"unicode/utf8"

	"github.com/spf13/cobra"

	"tayra/dose"
	"tayra/reports"
)

func rereadCommand() *cobra.Command {
	var listing listingFlags
	cmd := &cobra.Command{
		Use:   "reread WORKSHEET.pdf...",
		Short: "Work the record of a stored worksheet out again and compare",
		Long: `Take the record out of a worksheet in PDF, work it out again from its inputs,
and say whether it is the same: numbers to 1e-9, texts exactly, and the case
file that is attached against the inputs in the record. A worksheet of this
version of the program is drawn again too and compared byte for byte. What
differs is listed, with the reasons that can be told: another version of program
or tables, a changed record, an edited file. That a worksheet is the same says
nothing of the dose.

Several files may be named, and folders, in which every PDF is read; one that
was never a worksheet is passed over there. The exit status is 0 when all are
the same or were only written by another version, 1 when one differs, 2 when one
is no worksheet or cannot be read back, 3 when a file cannot be opened.`,
		Example: `tayra draft case.yaml --pdf worksheet.pdf --quiet
tayra reread worksheet.pdf
tayra reread . --json reread.json`,
		Annotations:       map[string]string{"usage": "tayra reread WORKSHEET.pdf... [flags]\ntayra reread FOLDER [flags]"},
		Args:              oneOrMore("WORKSHEET.pdf"),
		ValidArgsFunction: completeFiles("pdf"),
		RunE: func(cmd *cobra.Command, args []string) error {
			return rereadAll(cmd, args, &listing)
		},
	}
	inGroup(cmd, "Flags", listing.define)
	return cmd
}

// oneOrMore asks for an argument and takes more of its kind.
func oneOrMore(name string) cobra.PositionalArgs {
	return func(cmd *cobra.Command, args []string) error {
		usage := "write `tayra " + cmd.Use + "`"
		if len(args) == 0 {
			return &usageError{name, "missing", usage}
		}
		for _, a := range args {
			if strings.TrimSpace(a) == "" {
				return &usageError{name, "empty", usage}
			}
		}
		return nil
	}
}

// rereadFile is one file on its way: named on the command line, or found in a
// folder that was.
type rereadFile struct {
	path  string
	found bool

	done   chan struct{}
	result *reports.Rereading
	err    error
}

// read reads the file and compares it with itself.
func (f *rereadFile) read(stdin io.Reader) {
	defer close(f.done)
	if f.err != nil {
		return
	}
	in := stdin
	if f.path != "-" {
		file, err := os.Open(f.path)
		if err != nil {
			f.err = unreadable(f.path, err)
			return
		}
		defer file.Close()
		in = file
	}
	data, err := io.ReadAll(io.LimitReader(in, reports.MaxWorksheetBytes+1))
	if err != nil {
		f.err = unreadable(f.name(), err)
		return
	}
	if f.result, err = reports.Reread(data); err != nil {
		f.err = err
		return
	}
	f.result.Worksheet = nil // a folder may hold thousands
}

func (f *rereadFile) name() string {
	if f.path == "-" {
		return "standard input"
	}
	return f.path
}

// passedOver says whether the file is a PDF that has nothing to do with us, in a
// folder where such ones are to be expected.
func (f *rereadFile) passedOver() bool {
	var e *reports.WorksheetError
	return f.found && errors.As(f.err, &e) && e.Foreign
}

// rereadList puts the files in order: as named, and within a folder by name.
func rereadList(args []string) []*rereadFile {
	var list []*rereadFile
	add := func(path string, found bool, err error) {
		list = append(list, &rereadFile{path: path, found: found, err: err, done: make(chan struct{})})
	}
	for _, arg := range args {
		info, err := os.Stat(arg)
		if arg == "-" || err != nil || !info.IsDir() {
			add(arg, false, nil)
			continue
		}
		before := len(list)
		// The separator makes a link to a folder as good as the folder.
		_ = filepath.WalkDir(arg+string(filepath.Separator), func(path string, d fs.DirEntry, err error) error {
			if err != nil {
				add(path, true, unreadable(path, err))
				return nil
			}
			if !strings.EqualFold(filepath.Ext(path), ".pdf") {
				return nil
			}
			// A pipe that nobody writes to would be waited for.
			if info, err := os.Stat(path); err != nil || info.Mode().IsRegular() {
				add(path, true, nil)
			}
			return nil
		})
		if len(list) == before {
			add(arg, false, &usageError{arg, "there is no PDF in this folder", "name the folder of the worksheets"})
		}
	}
	return list
}

// rereadEntry is a file in the record of `tayra reread`.
type rereadEntry struct {
	File string `json:"file"`
	*reports.Rereading
}

// rereadOther is a file that could not be read back, or was passed over.
type rereadOther struct {
	File string `json:"file"`
	Why  string `json:"why"`
}

type rereadRecord struct {
	Worksheets []rereadEntry `json:"worksheets"`
	Refused    []rereadOther `json:"refused"`
	PassedOver []rereadOther `json:"passed_over"`
}

// rereadAll reads every file and reports on each in their order. Files are read
// by as many workers as there are processors, few ahead of what is reported.
func rereadAll(cmd *cobra.Command, args []string, listing *listingFlags) error {
	list := rereadList(args)
	workers := runtime.GOMAXPROCS(0)
	ahead := make(chan *rereadFile, 2*workers)
	work := make(chan *rereadFile)
	for range workers {
		go func() {
			for f := range work {
				f.read(cmd.InOrStdin())
			}
		}()
	}
	go func() {
		for _, f := range list {
			ahead <- f
			work <- f
		}
		close(ahead)
		close(work)
	}()

	record := rereadRecord{Worksheets: []rereadEntry{}, Refused: []rereadOther{}, PassedOver: []rereadOther{}}
	var text strings.Builder
	var faults []error
	count := map[reports.Verdict]int{}
	for f := range ahead {
		<-f.done
		switch {
		case f.passedOver():
			record.PassedOver = append(record.PassedOver, rereadOther{f.name(), f.err.Error()})
		case f.err != nil:
			record.Refused = append(record.Refused, rereadOther{f.name(), f.err.Error()})
			faults = append(faults, named(f.name(), f.err))
		default:
			record.Worksheets = append(record.Worksheets, rereadEntry{f.name(), f.result})
			count[f.result.Verdict]++
			text.WriteString(rereadText(f.name(), f.result, len(list) == 1))
		}
	}
	for _, p := range record.PassedOver {
		fmt.Fprintln(&text, paragraph(printable(p.File)+": passed over, never a worksheet", 0, 2, listWidth))
	}
	if err := listing.write(cmd, func() any { return record }, text.String()); err != nil {
		return err
	}
	if len(list) > 1 {
		fmt.Fprintf(cmd.ErrOrStderr(), "tayra: %d the same, %d of another version, %d differ, %d refused, %d passed over\n",
			count[reports.Same], count[reports.Version], count[reports.Differs], len(record.Refused), len(record.PassedOver))
	}
	switch {
	case len(faults) > 0:
		return errors.Join(faults...)
	case len(record.Worksheets) == 0:
		return &usageError{strings.Join(args, " "), "no worksheet among the PDFs there", "name the folder of the worksheets"}
	case count[reports.Differs] > 0:
		return errFinding
	}
	return nil
}

// named puts the file's name before what is wrong with it, where it is not there
// already.
func named(name string, err error) error {
	var file *fileError
	var usage *usageError
	if errors.As(err, &file) || errors.As(err, &usage) {
		return err
	}
	return &usageError{name, err.Error(), ""}
}

// mostDifferences is how many differences the text lists; the JSON has all.
const mostDifferences = 40

// rereadText says what became of one worksheet: in full where it differs or is
// the only one.
func rereadText(name string, r *reports.Rereading, alone bool) string {
	var b strings.Builder
	line := func(indent int, s string) {
		fmt.Fprintln(&b, paragraph(printable(s), indent, indent, listWidth))
	}
	verdict := map[reports.Verdict]string{
		reports.Same: "same", reports.Version: "same results, another version", reports.Differs: "DIFFERS",
	}[r.Verdict]
	what := r.Case
	if what == "" {
		what = "no case number"
	}
	fmt.Fprintln(&b, paragraph(printable(name+": "+verdict+" ("+what+", "+r.Species+", "+r.Drug+", "+r.Date+")"), 0, 2, listWidth))
	if r.Verdict == reports.Same && !alone {
		return b.String()
	}
	line(2, "written by "+r.Program.Name+" "+r.Program.Version+", tables "+r.Program.Tables+"; record "+r.Digest)
	for _, w := range r.Why {
		line(2, w)
	}
	if len(r.Differences) == 0 {
		line(2, "The record was worked out again from its inputs: every text the same, every number to 1e-9.")
	}
	line(2, r.Pages)
	differences(&b, "The record, and what its inputs give now:", r.Differences, "was", "now")
	differences(&b, "The inputs in the record, and in the case file beside it:", r.CaseFile, "record", "case")
	return b.String()
}

func differences(b *strings.Builder, head string, found []dose.Difference, was, now string) {
	if len(found) == 0 {
		return
	}
	fmt.Fprintf(b, "  %s\n", head)
	width := max(len(was), len(now))
	for i, d := range found {
		if i == mostDifferences {
			fmt.Fprintf(b, "    and %d more; --json lists them all\n", len(found)-i)
			break
		}
		x, y := excerpts(onOneLine(d.Was), onOneLine(d.Now))
		fmt.Fprintf(b, "    %s\n", printable(d.Path))
		fmt.Fprintf(b, "      %-*s  %s\n", width, was, printable(x))
		fmt.Fprintf(b, "      %-*s  %s\n", width, now, printable(y))
	}
}

// onOneLine is a JSON value without the breaks and indents of the record.
func onOneLine(value json.RawMessage) string {
	if len(value) == 0 {
		return "(not there)"
	}
	var b bytes.Buffer
	if err := json.Compact(&b, value); err != nil {
		return string(value)
	}
	return b.String()
}

// excerpts shortens two values to what differs and some letters around it.
func excerpts(a, b string) (string, string) {
	const around, most = 16, 64
	from := 0
	if utf8.RuneCountInString(a) > most || utf8.RuneCountInString(b) > most {
		for from < len(a) && from < len(b) && a[from] == b[from] {
			from++
		}
		from -= around
	}
	cut := func(s string) string {
		at := 0
		if from > 0 {
			for at = min(from, len(s)); at > 0 && at < len(s) && !utf8.RuneStart(s[at]); at-- {
			}
			s = "…" + s[at:]
		}
		if r := []rune(s); len(r) > most {
			s = string(r[:most-1]) + "…"
		}
		return s
	}
	return cut(a), cut(b)
}

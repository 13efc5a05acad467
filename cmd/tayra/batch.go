package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"strconv"
	"syscall"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tayra/dose"
	"tayra/reports"
)

func batchCommand() *cobra.Command {
	var b batchCall
	cmd := &cobra.Command{
		Use:   "batch ANIMALS.csv",
		Short: "Draft a starting dose for every row of a table of animals",
		Long: `Draft a starting dose for every row of a table (CSV, UTF-8, comma, semicolon or
tab between the cells; - reads standard input) and write the table with what was
drafted behind its own columns. Needed are the columns species, mass,
model_species, model_mass, dose, interval and source; read where they stand are
case, animal, temperature, stage, condition, food_producing, drug, class,
elimination, extraction, activity, formulation, protein_binding, margin,
controlled, model_temperature, route and half_life. All others are passed
through as they are.

A row at fault carries its error and ends nothing. A cell that a spreadsheet
would run as a formula gets an apostrophe. Decimal commas are read in tables
with semicolons only. Rows go to OUT.csv.part, which becomes OUT.csv when all
are done; after an interruption, --resume goes on from there. The exit status is
1 when a row was stopped or is at fault.`,
		Example: `tayra batch animals.csv --date 2026-11-30 -o drafted.csv
tayra batch animals.csv --date 2026-11-30 -o again.csv --pdf-dir worksheets`,
		Annotations:       map[string]string{"usage": "tayra batch ANIMALS.csv -o OUT.csv --date DATE [flags]"},
		Args:              arguments("ANIMALS.csv"),
		ValidArgsFunction: completeFirst(completeFiles("csv", "tsv", "txt")),
		RunE: func(cmd *cobra.Command, args []string) error {
			return b.run(cmd, args[0])
		},
	}
	inGroup(cmd, "Output", func(flags *pflag.FlagSet) {
		flags.VarP(&onceFlag{text: &b.out, name: "FILE"}, "output", "o", "the table with the drafts; - is standard output; needed")
		flags.Var(&onceFlag{text: &b.pdfDir, name: "FOLDER"}, "pdf-dir", "write a worksheet for every row that is not at fault, as PDF")
		flags.Var(&onceFlag{text: &b.merge, name: "FILE"}, "merge", "write all worksheets into one PDF with bookmarks, to be printed")
		flags.Var(&onceFlag{text: &b.paper, name: "SIZE"}, "paper", "of the worksheets: a4 or letter; a4 unless given")
		flags.BoolVar(&b.resume, "resume", false, "go on from OUT.csv.part, which an interrupted run left")
		defineForce(flags, &b.force)
	})
	inGroup(cmd, "Input", func(flags *pflag.FlagSet) {
		flags.Var(&onceFlag{text: &b.columns, name: "FILE"}, "columns", "YAML that names the table's own headings, as in \"mass: {column: Gewicht, unit: kg}\" or \"model_species: {value: dog}\"")
	})
	inGroup(cmd, "The worksheets", func(flags *pflag.FlagSet) {
		flags.Var(&entryFlag{&b.shared.Date, "DATE"}, "date", "the date of every row, such as 2026-11-30; needed")
		flags.Var(&entryFlag{&b.shared.PreparedBy, "NAME"}, "prepared-by", "who prepares the worksheets")
	})
	how := &b.shared.Method
	inGroup(cmd, "The method", func(flags *pflag.FlagSet) {
		flags.Var(&entryFlag{&how.Basis, "BASIS"}, "basis", "of the metabolic rate: group, equation, measured or relatives")
		flags.Var(&entryFlag{&how.Equation, "ID"}, "equation", "with --basis equation: a line that \"tayra equations\" lists")
		flags.Var(&entryFlag{&how.Plan, "PLAN"}, "plan", "clock, same-interval, same-dose or both-adjusted")
		flags.Var(&entryFlag{&how.Q10, "NUMBER"}, "q10", "how the rate rises with 10 °C, reptiles and amphibians; 2.5 unless given")
	})
	completeWords(cmd, "paper", "a4", "letter")
	completeWords(cmd, "basis", "group", "equation", "measured", "relatives")
	completeWords(cmd, "plan", "clock", "same-interval", "same-dose", "both-adjusted")
	_ = cmd.RegisterFlagCompletionFunc("equation", func(*cobra.Command, []string, string) ([]cobra.Completion, cobra.ShellCompDirective) {
		return equationIDs(), cobra.ShellCompDirectiveNoFileComp
	})
	return cmd
}

func completeFiles(endings ...string) cobra.CompletionFunc {
	return func(*cobra.Command, []string, string) ([]cobra.Completion, cobra.ShellCompDirective) {
		return endings, cobra.ShellCompDirectiveFilterFileExt
	}
}

// batchCall is the command as it was typed.
type batchCall struct {
	out, columns, paper string
	pdfDir, merge       string
	resume, force       bool
	shared              dose.CaseInput
}

// batchFlags are the flags of the faults that concern every row.
var batchFlags = map[string]string{
	"date": "--date", "prepared_by": "--prepared-by", "method.basis": "--basis", "method.equation": "--equation", "method.plan": "--plan", "method.q10": "--q10",
}

// check refuses what contradicts itself, before anything is read.
func (b *batchCall) check() error {
	switch {
	case b.out == "":
		return &usageError{"--output", "missing", "name the file of the result, as in -o drafted.csv; - is standard output"}
	case b.resume && b.out == "-":
		return &usageError{"--resume", "standard output cannot be gone on with", "give the result a file"}
	case b.resume && b.force:
		return &usageError{"--resume", "given with --force, which starts anew", "leave one of the two out"}
	case b.resume && b.merge != "":
		return &usageError{"--merge", "given with --resume: the worksheets before the interruption are not at hand", "run it anew, or print those of --pdf-dir"}
	case b.merge == "-":
		return &usageError{"--merge", "standard output is not for the worksheets", "name a file"}
	case b.paper != "" && b.paper != "a4" && b.paper != "letter":
		return &usageError{"--paper", strconv.Quote(b.paper) + " is no size known here", "write a4 or letter"}
	case b.paper != "" && b.pdfDir == "" && b.merge == "":
		return &usageError{"--paper", "without --pdf-dir or --merge it changes nothing", "add one of them, or leave it out"}
	}
	return nil
}

func (b *batchCall) run(cmd *cobra.Command, animals string) error {
	if err := b.check(); err != nil {
		return err
	}
	stderr := cmd.ErrOrStderr()
	table, err := openTable(animals, cmd.InOrStdin())
	if err != nil {
		return err
	}
	defer table.Close()
	options := reports.BatchOptions{Notice: func(text string) { warn(stderr, table.name, text) }}
	if b.columns != "" {
		if b.columns == "-" && table.source == "" {
			return &usageError{"--columns", "standard input is the table already", "name a file"}
		}
		if options.Columns, err = readColumns(b.columns, cmd.InOrStdin()); err != nil {
			return err
		}
	}
	result, err := openResult(b, table, cmd.OutOrStdout())
	if err != nil {
		return err
	}
	defer result.close()
	options.Part = result.earlier
	sheets, err := b.worksheets(&options)
	if err != nil {
		return err
	}
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	progress := newBatchProgress(stderr, table.size)
	options.Progress = func(rows int, read int64) error {
		progress.tell(rows, read)
		return sheets.upTo(rows)
	}
	counts, err := reports.Batch(ctx, table, result, &b.shared, options)
	progress.end()
	if err == nil {
		err = result.finish(sheets.merged(b.merge))
	}
	if err != nil {
		return b.fault(err, table, result, &counts, stderr)
	}
	sayCounts(stderr, &counts, "")
	if counts.Stopped+counts.Failed > 0 {
		return errFinding
	}
	return nil
}

// fault puts what ended a batch into the words of the command.
func (b *batchCall) fault(err error, table *batchTable, result *batchResult, counts *reports.BatchCounts, stderr io.Writer) error {
	var ofTable *reports.TableError
	var ofPart *reports.PartError
	var ofWriting *reports.WriteError
	var faults dose.InputErrors
	switch {
	case errors.As(err, &faults):
		return flagErrors(err, func(field string) string { return batchFlags[field] })
	case errors.As(err, &ofTable):
		return tableFault(table.name, ofTable)
	case errors.As(err, &ofPart):
		return &usageError{"--resume", result.part + ": " + ofPart.Problem, ofPart.Remedy}
	}
	if counts.Rows > counts.Before {
		sayCounts(stderr, counts, "so far, ")
	}
	goOn := ""
	if result.part != "" && counts.Rows > 0 && b.merge == "" {
		goOn = fmt.Sprintf("%s are in %s, and the same command with --resume goes on", countWords(counts.Rows, "row"), result.part)
	}
	switch {
	case errors.Is(err, context.Canceled):
		return &fileError{result.name, "not finished: interrupted", goOn}
	case errors.As(err, &ofWriting):
		problem, _ := reason(ofWriting.Err)
		return &fileError{result.name, "cannot be written: " + problem, goOn}
	case errors.As(err, new(*fileError)), errors.As(err, new(*usageError)):
		return err
	}
	problem, _ := reason(err)
	return &fileError{table.name, "cannot be read on: " + problem, goOn}
}

func tableFault(name string, err *reports.TableError) error {
	fault := &dose.InputError{File: name, Line: err.Line, Problem: err.Problem, Remedy: err.Remedy}
	return dose.InputErrors{fault}
}

// readColumns reads the mapping file.
func readColumns(path string, stdin io.Reader) (*reports.BatchColumns, error) {
	name, _, data, err := readInput(path, stdin)
	if err != nil {
		return nil, err
	}
	columns, err := reports.ReadBatchColumns(data)
	var fault *reports.TableError
	if errors.As(err, &fault) {
		return nil, tableFault(name, fault)
	}
	return columns, err
}

// batchTable is the table as it is read.
type batchTable struct {
	io.Reader
	name   string // in messages
	source string // path; "" for standard input
	size   int64  // in bytes; 0 where it is not known
	file   *os.File
}

func openTable(arg string, stdin io.Reader) (*batchTable, error) {
	if arg == "-" {
		return &batchTable{Reader: stdin, name: "standard input"}, nil
	}
	f, err := os.Open(arg)
	if err != nil {
		return nil, unreadable(arg, err)
	}
	t := &batchTable{Reader: f, name: arg, source: arg, file: f}
	info, err := f.Stat()
	switch {
	case err != nil:
		err = unreadable(arg, err)
	case info.IsDir():
		err = unreadable(arg, syscall.EISDIR)
	case info.Mode().IsRegular():
		t.size = info.Size()
	}
	if err != nil {
		f.Close()
		return nil, err
	}
	return t, nil
}

// Close closes the file, if there is one.
func (t *batchTable) Close() error {
	if t.file == nil {
		return nil
	}
	return t.file.Close()
}

// sayCounts says what is to be known of a table, and last what became of its
// rows.
func sayCounts(stderr io.Writer, c *reports.BatchCounts, before string) {
	say := func(text string) { fmt.Fprintf(stderr, "tayra: %s\n", text) }
	if c.Blank > 0 {
		say(countWords(c.Blank, "empty row") + " left out")
	}
	if c.DecimalCommas > 0 {
		say("decimal commas read in " + countWords(c.DecimalCommas, "cell"))
	}
	if c.Mark == ',' {
		say("numbers are written with a decimal comma, as in the table")
	}
	if c.Neutralised > 0 {
		say(countWords(c.Neutralised, "cell") + " that a spreadsheet would run as a formula got an apostrophe")
	}
	if c.Before > 0 {
		say("gone on after " + countWords(c.Before, "row") + " of an earlier run")
	}
	say(fmt.Sprintf("%s%s: %s drafted, %s stopped, %s failed", before, countWords(c.Rows, "row"), withCommas(c.Drafted), withCommas(c.Stopped), withCommas(c.Failed)))
}

func countWords(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return withCommas(n) + " " + what + "s"
}

// withCommas writes a count with commas between its thousands.
func withCommas(n int) string {
	s := strconv.Itoa(n)
	for i := len(s) - 3; i > 0; i -= 3 {
		s = s[:i] + "," + s[i:]
	}
	return s
}

package main

import (
	"errors"
	"fmt"
	"strconv"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tayra/dose"
	"tayra/reports"
)

func draftCommand() *cobra.Command {
	var out worksheetFlags
	typed := newCaseByFlags()
	cmd := &cobra.Command{
		Use:   "draft CASE.yaml",
		Short: "Draft a starting dose from a case file or from flags",
		Long: `Draft a starting dose and interval for one animal from a known dose in another,
and print the worksheet with every step. The case is in a file, which
"tayra new" writes to start from, or in flags; - reads it from standard input.
When a stop leaves no dose, the worksheet says so, is written all the same, and
the exit status is 1.`,
		Example: `tayra draft case.yaml
tayra draft case.yaml --pdf worksheet.pdf --json record.json
tayra draft --date 2026-11-30 --species "giant anteater" --mass "41 kg" \
  --drug examplicillin --model-species dog --model-mass "18 kg" \
  --dose "10 mg/kg" --interval q12h --route SC \
  --source "practice protocol 7" --save-case anteater.yaml`,
		Annotations:       map[string]string{"usage": "tayra draft CASE.yaml [flags]\ntayra draft --species NAME --mass MASS ... [flags]"},
		Args:              arguments("[CASE.yaml]"),
		ValidArgsFunction: completeCase,
		RunE: func(cmd *cobra.Command, args []string) error {
			if err := out.check(cmd); err != nil {
				return err
			}
			given := typed.given(cmd)
			var c *readCaseFile
			var err error
			if len(args) == 1 {
				c, err = caseFromFile(cmd, args[0], typed, given)
				if err == nil && out.saveCase != "" {
					err = &usageError{"--save-case", "the case is in " + c.name + " already", "leave the flag out"}
				}
			} else {
				c, err = caseFromFlags(typed, given)
			}
			if err != nil {
				return err
			}
			ws, err := c.draft()
			if err != nil {
				return err
			}
			if err := out.write(cmd, ws, c, wholeText); err != nil {
				return err
			}
			if ws.Drafted == nil {
				return errFinding
			}
			return nil
		},
	}
	typed.define(cmd)
	out.define(cmd, func(flags *pflag.FlagSet) {
		flags.Var(&onceFlag{text: &out.saveCase, name: "FILE"}, "save-case", "write the case that the flags make as a case file")
	})
	return cmd
}

// readCaseFile is a case as read, with what is needed to report on it.
type readCaseFile struct {
	name   string // in messages
	source string // path; "" when there is no file
	text   []byte // the case as a file
	in     *dose.CaseInput
	flagOf func(field string) string // the flag under which an entry was typed, or ""
}

// caseFromFlags takes the case from the command line.
func caseFromFlags(typed *caseByFlags, given []string) (*readCaseFile, error) {
	if len(given) == 0 {
		return nil, &usageError{"CASE.yaml", "missing", "name a case file, which `tayra new FILE.yaml` writes to start from, or give the case by flags: see `tayra draft --help`"}
	}
	return &readCaseFile{in: typed.in, text: dose.WriteCase(typed.in), flagOf: typed.flagOf}, nil
}

// caseFromFile reads a case file. Of the flags that make a case only the date
// may stand beside it, and only where the file has none: nothing in the file is
// silently overridden.
func caseFromFile(cmd *cobra.Command, arg string, typed *caseByFlags, given []string) (*readCaseFile, error) {
	for _, name := range given {
		if name != dateField {
			return nil, &usageError{"--" + name, "the case is in " + arg, "write it there, or leave the file out and give the whole case by flags"}
		}
	}
	in, source, text, err := readCase(arg, cmd.InOrStdin(), cmd.ErrOrStderr())
	if err != nil {
		return nil, err
	}
	c := &readCaseFile{name: in.File, source: source, text: text, in: in}
	if len(given) > 0 {
		if in.Date.Given() {
			return nil, &usageError{"--date", fmt.Sprintf("the case has a date already, %s, in line %d of %s", strconv.Quote(in.Date.Text), in.Date.Line, in.File), "leave the flag out, or change the file"}
		}
		in.Date = typed.in.Date
		c.text = dose.WriteCase(in) // so that the worksheet carries a whole case
		c.flagOf = func(field string) string {
			if field == dateField {
				return "--date"
			}
			return ""
		}
	}
	return c, nil
}

// draft works the case out. Faults of what was typed as flags name the flags.
func (c *readCaseFile) draft() (*dose.Worksheet, error) {
	checked, err := c.in.Check()
	if err != nil {
		return nil, flagErrors(err, c.flagOf)
	}
	ws, err := dose.Draft(checked)
	if err != nil {
		return nil, flagErrors(err, c.flagOf)
	}
	return ws, nil
}

// worksheetFlags say where a worksheet goes.
type worksheetFlags struct {
	pdf, paper string
	json       string
	saveCase   string // of draft
	plot       string // of check
	quiet      bool
	force      bool
	width      int
}

func (w *worksheetFlags) define(cmd *cobra.Command, more func(*pflag.FlagSet)) {
	inGroup(cmd, "Output", func(flags *pflag.FlagSet) {
		flags.Var(&onceFlag{text: &w.pdf, name: "FILE"}, "pdf", "write the worksheet as PDF; - is standard output and replaces the text")
		flags.Var(&onceFlag{text: &w.paper, name: "SIZE"}, "paper", "of the PDF: a4 or letter; a4 unless given")
		defineJSON(flags, &w.json)
		if more != nil {
			more(flags)
		}
		flags.BoolVar(&w.quiet, "quiet", false, "print the draft and its cautions only")
		flags.IntVar(&w.width, "width", 0, "`COLUMNS` of the text, from 60 to 200; the terminal's, up to 100, unless given")
		defineForce(flags, &w.force)
	})
	completeWords(cmd, "paper", "a4", "letter")
}

// check refuses flags that contradict each other, before anything is read.
func (w *worksheetFlags) check(cmd *cobra.Command) error {
	if w.plot != "" {
		if _, err := reports.FigureFormat(w.plot); err != nil {
			return plotFault(err)
		}
	}
	_, paperErr := reports.ParsePaper(w.paper)
	switch {
	case w.paper != "" && paperErr != nil:
		return &usageError{"--paper", strconv.Quote(w.paper) + " is no size known here", "write a4 or letter"}
	case w.paper != "" && w.pdf == "":
		return &usageError{"--paper", "without --pdf it changes nothing", "add --pdf FILE, or leave it out"}
	case w.pdf == "-" && w.json == "-":
		return &usageError{"--json", "standard output takes the PDF already", "give one of the two a file"}
	case w.saveCase == "-":
		return &usageError{"--save-case", "standard output takes the worksheet", "name a file"}
	case w.pdf == "-" && isTerminal(cmd.OutOrStdout()):
		return &usageError{"--pdf", "standard output is a terminal, and a PDF is no text", "name a file, or send it to another program"}
	case cmd.Flags().Changed("width") && (w.width < 60 || w.width > 200):
		return &usageError{"--width", strconv.Itoa(w.width) + " is outside 60 to 200", "write a number of columns, such as 80"}
	}
	return nil
}

// wholeText is the worksheet with every step.
func wholeText(ws *dose.Worksheet, o reports.TextOptions) []byte {
	o.Steps = true
	return reports.Text(ws, o)
}

// write renders everything in memory, puts the files in place, all or none, and
// then prints the text.
func (w *worksheetFlags) write(cmd *cobra.Command, ws *dose.Worksheet, c *readCaseFile, text func(*dose.Worksheet, reports.TextOptions) []byte, files ...output) error {
	var printed []byte
	take := func(flag, path string, data []byte) {
		switch path {
		case "":
		case "-":
			printed = data
		default:
			files = append(files, output{flag: flag, path: path, data: data})
		}
	}
	if w.pdf != "" {
		paper := reports.A4
		if w.paper != "" {
			paper, _ = reports.ParsePaper(w.paper) // check has read it already
		}
		data, err := reports.PDF(ws, reports.PDFOptions{Paper: paper, Case: c.text})
		if err != nil {
			return letterFault(err, c)
		}
		take("--pdf", w.pdf, data)
	}
	take("--save-case", w.saveCase, c.text)
	if w.json != "" {
		data, err := reports.JSON(ws)
		if err != nil {
			return err
		}
		take("--json", w.json, data)
	}
	if w.plot != "" {
		data, err := w.drawCurves(cmd, ws)
		if err != nil {
			return err
		}
		if data != nil {
			take("--plot", w.plot, data)
		}
	}
	if w.pdf != "-" && w.json != "-" {
		printed = text(ws, w.textOptions(cmd))
	}
	var sources []string
	if c.source != "" {
		sources = append(sources, c.source)
	}
	if err := writeFiles(files, w.force, sources...); err != nil {
		return err
	}
	return toStandardOutput(cmd, printed)
}

// drawCurves draws the concentrations. A stopped draft has none, which its
// worksheet says; a case without a half-life cannot have any, which is a fault
// of the command line.
func (w *worksheetFlags) drawCurves(cmd *cobra.Command, ws *dose.Worksheet) ([]byte, error) {
	if ws.Drafted == nil {
		warn(cmd.ErrOrStderr(), "--plot", "nothing is drawn: a stop leaves no dose")
		return nil, nil
	}
	format, err := reports.FigureFormat(w.plot)
	if err != nil {
		return nil, plotFault(err)
	}
	if len(ws.Curves) == 0 {
		return nil, &usageError{"--plot", "no concentration to draw", "write the model's half_life in the case, or leave the flag out"}
	}
	data, err := reports.CurvesFigure(ws, format)
	if err != nil {
		return nil, &usageError{"--plot", err.Error(), ""}
	}
	return data, nil
}

func plotFault(err error) error {
	problem, remedy, _ := strings.Cut(err.Error(), "; ")
	return &usageError{"--plot", problem, remedy}
}

// letterFault names the flag of a text that cannot be printed, when it was
// typed as one; a case file's place stands in the error already.
func letterFault(err error, c *readCaseFile) error {
	var letter *reports.LetterError
	if c.flagOf == nil || !errors.As(err, &letter) || letter.Line > 0 {
		return err
	}
	if flag := c.flagOf(letter.Field); flag != "" {
		named := *letter
		named.File, named.Field = "", flag
		return &named
	}
	return err
}

func (w *worksheetFlags) textOptions(cmd *cobra.Command) reports.TextOptions {
	out := cmd.OutOrStdout()
	o := reports.TextOptions{Width: w.width, Colour: takesColour(out), Quiet: w.quiet}
	if o.Width == 0 {
		o.Width = textWidth(out)
	}
	return o
}

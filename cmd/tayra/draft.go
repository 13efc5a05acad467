package main

import (
	"fmt"
	"strconv"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tayra/dose"
	"tayra/reports"
)

func draftCommand() *cobra.Command {
	var out worksheetFlags
	var saveCase string
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
tayra draft case.yaml --json record.json
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
				if err == nil && saveCase != "" {
					err = &usageError{"--save-case", "the case is in " + c.name + " already", "leave the flag out"}
				}
			} else {
				c, err = caseFromFlags(typed, given)
			}
			if err != nil {
				return err
			}
			ws, err := c.draft(typed)
			if err != nil {
				return err
			}
			var more []output
			if saveCase != "" {
				more = append(more, output{flag: "--save-case", path: saveCase, data: c.text})
			}
			if err := out.write(cmd, ws, c, true, more...); err != nil {
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
		flags.Var(&onceFlag{text: &saveCase, name: "FILE"}, "save-case", "write the case that the flags make as a case file")
	})
	return cmd
}

// readCaseFile is a case as read, with what is needed to report on it.
type readCaseFile struct {
	name   string // in messages
	source string // path; "" when there is no file
	text   []byte // the case as a file
	in     *dose.CaseInput
}

// caseFromFlags takes the case from the command line.
func caseFromFlags(typed *caseByFlags, given []string) (*readCaseFile, error) {
	if len(given) == 0 {
		return nil, &usageError{"CASE.yaml", "missing", "name a case file, which `tayra new FILE.yaml` writes to start from, or give the case by flags: see `tayra draft --help`"}
	}
	return &readCaseFile{in: typed.in, text: dose.WriteCase(typed.in)}, nil
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
	if len(given) > 0 {
		if in.Date.Given() {
			return nil, &usageError{"--date", fmt.Sprintf("the case has a date already, %s, in line %d of %s", strconv.Quote(in.Date.Text), in.Date.Line, in.File), "leave the flag out, or change the file"}
		}
		in.Date = typed.in.Date
		text = dose.WriteCase(in) // so that the worksheet carries a whole case
	}
	return &readCaseFile{name: in.File, source: source, text: text, in: in}, nil
}

// draft works the case out. Faults of what was typed as flags name the flags.
func (c *readCaseFile) draft(typed *caseByFlags) (*dose.Worksheet, error) {
	flagOf := typed.flagOf
	if c.name != "" {
		flagOf = func(field string) string {
			if field == dateField && c.in.Date.Given() {
				return "--date" // its entry has no line: it was typed as a flag
			}
			return ""
		}
	}
	checked, err := c.in.Check()
	if err != nil {
		return nil, flagErrors(err, flagOf)
	}
	ws, err := dose.Draft(checked)
	if err != nil {
		return nil, flagErrors(err, flagOf)
	}
	return ws, nil
}

// worksheetFlags say where a worksheet goes.
type worksheetFlags struct {
	json  string
	quiet bool
	force bool
	width int
}

func (w *worksheetFlags) define(cmd *cobra.Command, more func(*pflag.FlagSet)) {
	inGroup(cmd, "Output", func(flags *pflag.FlagSet) {
		defineJSON(flags, &w.json)
		if more != nil {
			more(flags)
		}
		flags.BoolVar(&w.quiet, "quiet", false, "print the draft and its cautions only")
		flags.IntVar(&w.width, "width", 0, "`COLUMNS` of the text, from 60 to 200; the terminal's, up to 100, unless given")
		defineForce(flags, &w.force)
	})
}

// check refuses flags that contradict each other, before anything is read.
func (w *worksheetFlags) check(cmd *cobra.Command) error {
	switch {
	case cmd.Flags().Changed("width") && (w.width < 60 || w.width > 200):
		return &usageError{"--width", strconv.Itoa(w.width) + " is outside 60 to 200", "write a number of columns, such as 80"}
	}
	return nil
}

// write renders everything in memory, puts the files in place, all or none, and
// then prints.
func (w *worksheetFlags) write(cmd *cobra.Command, ws *dose.Worksheet, c *readCaseFile, steps bool, files ...output) error {
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
	if w.json != "" {
		data, err := reports.JSON(ws)
		if err != nil {
			return err
		}
		take("--json", w.json, data)
	}
	if w.json != "-" {
		printed = reports.Text(ws, w.textOptions(cmd, steps))
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

func (w *worksheetFlags) textOptions(cmd *cobra.Command, steps bool) reports.TextOptions {
	out := cmd.OutOrStdout()
	o := reports.TextOptions{Width: w.width, Colour: takesColour(out), Quiet: w.quiet, Steps: steps}
	if o.Width == 0 {
		o.Width = textWidth(out)
	}
	return o
}

package main

import (
	"errors"
	"strconv"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tayra/dose"
	"tayra/metabolic"
	"tayra/reports"
	"tayra/species"
)

func fitCommand() *cobra.Command {
	f := &fitCall{}
	cmd := &cobra.Command{
		Use:   "fit DATA.csv",
		Short: "Fit an allometric line to a table of species data",
		Long: `Fit ln Y = ln a + b·ln W to a table of species, body masses and one quantity or
more (clearance, volume, half_life, dose), and read the line at a target animal:
its slope with standard error, confidence and prediction intervals, how each
animal is predicted by the others, and the cautions. The table is CSV in UTF-8
with comma, semicolon or tab; - reads it from standard input. Units stand in the
cells ("12 mL/min") or in the heading ("clearance (mL/min)"); a quantity per kg
and one per animal are told apart by their unit. Decimal commas are read in
tables with semicolons only.

With --case the target and the known regimen come from a case file, and the
fitted clearance gives a dose: the worksheet is that of "tayra draft", and exit
status 1 means that a stop left none.`,
		Example: `tayra fit clearances.csv --target "giant anteater" --mass "41 kg"
tayra fit clearances.csv --target emu --mass 40kg --plot line.svg
tayra fit clearances.csv --case case.yaml --pdf worksheet.pdf`,
		Annotations:       map[string]string{"usage": "tayra fit DATA.csv --target SPECIES --mass MASS [flags]\ntayra fit DATA.csv --case CASE.yaml [flags]"},
		Args:              arguments("DATA.csv"),
		ValidArgsFunction: completeFirst(completeFiles("csv", "tsv", "txt")),
		RunE:              f.run,
	}
	inGroup(cmd, "The target", func(flags *pflag.FlagSet) {
		flags.Var(&entryFlag{&f.target, "SPECIES"}, "target", "the animal that the line is asked about")
		flags.Var(&entryFlag{&f.mass, "MASS"}, "mass", "its body mass, such as \"41 kg\"")
		flags.Var(&onceFlag{text: &f.caseFile, name: "CASE.yaml"}, "case", "take target, mass and known regimen from a case, and draft a dose")
	})
	inGroup(cmd, "The line", func(flags *pflag.FlagSet) {
		flags.Var(&entryFlag{&f.parameter, "NAME"}, "parameter", "clearance, volume, half_life or dose; the first of them in the table unless given")
		flags.BoolVar(&f.keep, "keep-repeated", false, "keep repeated species as rows of their own; averaged geometrically unless given")
		flags.Var(&entryFlag{&f.average, "CONC"}, "average", "with --case: concentration to reach on average, such as \"2 mg/L\"; the model's own unless given")
		flags.Var(&entryFlag{&f.averageSource, "TEXT"}, "average-source", "with --average: where it was read")
		flags.Var(&entryFlag{&f.date, "DATE"}, "date", "the date of the PDF or of a case without one, such as 2026-11-30")
	})
	f.out.define(cmd, func(flags *pflag.FlagSet) {
		flags.Var(&onceFlag{text: &f.out.plot, name: "FILE"}, "plot", "draw the animals and the line; the name ends in .svg, .png or .pdf")
	})
	completeWords(cmd, "parameter", "clearance", "volume", "half_life", "dose")
	_ = cmd.RegisterFlagCompletionFunc("target", completeSpecies)
	return cmd
}

// fitCall is one call of the command.
type fitCall struct {
	target, mass, parameter, average, averageSource, date dose.Entry
	caseFile                                              string
	keep                                                  bool
	out                                                   worksheetFlags
}

func (f *fitCall) run(cmd *cobra.Command, args []string) error {
	if err := f.check(cmd); err != nil {
		return err
	}
	name, source, data, err := readInput(args[0], cmd.InOrStdin())
	if err != nil {
		return err
	}
	table, err := dose.ReadFitTable(name, data)
	if err != nil {
		return err
	}
	table.KeepAll = f.keep
	if f.parameter.Given() {
		table.Parameter = dose.Parameter(strings.ReplaceAll(strings.ToLower(strings.TrimSpace(f.parameter.Text)), "-", "_"))
	}
	if f.caseFile != "" {
		return f.worksheet(cmd, table, source)
	}
	target, err := f.animal()
	if err != nil {
		return err
	}
	rec, err := dose.Fit(table, target)
	if err != nil {
		return err
	}
	return f.write(cmd, rec, data, source)
}

// check refuses flags that contradict each other.
func (f *fitCall) check(cmd *cobra.Command) error {
	if err := f.out.check(cmd); err != nil {
		return err
	}
	if f.parameter.Given() {
		p := strings.ReplaceAll(strings.ToLower(strings.TrimSpace(f.parameter.Text)), "-", "_")
		known := false
		for _, x := range dose.Parameters() {
			known = known || string(x) == p
		}
		if !known {
			return &usageError{"--parameter", strconv.Quote(f.parameter.Text) + " is no quantity known here", "write clearance, volume, half_life or dose"}
		}
	}
	withCase := f.caseFile != ""
	switch {
	case withCase && (f.target.Given() || f.mass.Given()):
		return &usageError{"--target", "the case names the animal and its mass", "leave --target and --mass out, or leave --case out"}
	case !withCase && !f.target.Given():
		return &usageError{"--target", "missing", "name the animal that the line is asked about, or give --case CASE.yaml"}
	case !withCase && !f.mass.Given():
		return &usageError{"--mass", "missing", "write its body mass with the unit, such as \"41 kg\""}
	case !withCase && (f.average.Given() || f.averageSource.Given()):
		return &usageError{"--average", "without --case no dose is drafted", "add --case CASE.yaml, or leave it out"}
	case f.average.Given() != f.averageSource.Given():
		return &usageError{"--average-source", "a concentration and its source go together", "give both --average and --average-source"}
	case !withCase && f.out.pdf != "" && !f.date.Given():
		return &usageError{"--date", "missing", "write the date of the sheet, such as 2026-11-30"}
	}
	return nil
}

func (f *fitCall) animal() (t dose.FitTarget, err error) {
	if t.Animal, err = species.Find(f.target.Text); err != nil {
		return t, animalFault("--target", err)
	}
	if t.Mass, err = metabolic.ParseBodyMass(f.mass.Text); err != nil {
		return t, quantityFault("--mass", err)
	}
	return t, nil
}

// write prints a line without a case.
func (f *fitCall) write(cmd *cobra.Command, rec *dose.FitRecord, data []byte, source string) error {
	var files []output
	var printed []byte
	take := func(flag, path string, b []byte) {
		if path == "-" {
			printed = b
		} else {
			files = append(files, output{flag: flag, path: path, data: b})
		}
	}
	if f.out.pdf != "" {
		paper := reports.A4
		if f.out.paper != "" {
			paper, _ = reports.ParsePaper(f.out.paper) // check has read it already
		}
		b, err := reports.FitPDF(rec, reports.FitPDFOptions{Paper: paper, Date: strings.TrimSpace(f.date.Text), Table: data})
		var letter *reports.LetterError
		switch {
		case errors.As(err, &letter):
			return letter
		case err != nil:
			return &usageError{"--date", err.Error(), "write it like 2026-11-30"}
		}
		take("--pdf", f.out.pdf, b)
	}
	if f.out.plot != "" {
		b, err := f.draw(rec)
		if err != nil {
			return err
		}
		take("--plot", f.out.plot, b)
	}
	if f.out.json != "" {
		b, err := marshal(rec)
		if err != nil {
			return err
		}
		take("--json", f.out.json, b)
	}
	if f.out.pdf != "-" && f.out.json != "-" {
		printed = reports.FitText(rec, f.out.textOptions(cmd))
	}
	if err := writeFiles(files, f.out.force, sourcesOf(source)...); err != nil {
		return err
	}
	return toStandardOutput(cmd, printed)
}

func (f *fitCall) draw(rec *dose.FitRecord) ([]byte, error) {
	format, err := reports.FigureFormat(f.out.plot)
	if err != nil {
		return nil, plotFault(err)
	}
	b, err := reports.FitFigure(rec, format)
	if err != nil {
		return nil, &usageError{"--plot", err.Error(), "retype the name"}
	}
	return b, nil
}

func sourcesOf(names ...string) (out []string) {
	for _, n := range names {
		if n != "" {
			out = append(out, n)
		}
	}
	return out
}

// worksheet drafts a dose from the fitted clearance.
func (f *fitCall) worksheet(cmd *cobra.Command, table *dose.FitInput, source string) error {
	in, caseSource, text, err := readCase(f.caseFile, cmd.InOrStdin(), cmd.ErrOrStderr())
	if err != nil {
		return err
	}
	c := &readCaseFile{name: in.File, source: caseSource, text: text, in: in}
	if f.date.Given() {
		if in.Date.Given() {
			return &usageError{"--date", "the case has a date already", "leave the flag out, or change the file"}
		}
		in.Date = f.date
		c.text = dose.WriteCase(in)
	}
	c.flagOf = func(field string) string {
		switch {
		case field == "average":
			return "--average"
		case field == "average_source":
			return "--average-source"
		case field == dateField && f.date.Given():
			return "--date"
		}
		return ""
	}
	in.Fit = &dose.FitCase{Table: *table, Average: f.average, Source: f.averageSource}
	ws, err := c.draft()
	if err != nil {
		return err
	}
	var files []output
	if f.out.plot != "" { // the line, not the concentrations
		b, err := f.draw(ws.Fit)
		if err != nil {
			return err
		}
		files = append(files, output{flag: "--plot", path: f.out.plot, data: b})
		f.out.plot = ""
	}
	if err := f.out.write(cmd, ws, c, wholeText, files...); err != nil {
		return err
	}
	if ws.Drafted == nil {
		return errFinding
	}
	return nil
}

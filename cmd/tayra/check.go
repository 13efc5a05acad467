package main

import (
	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tayra/dose"
	"tayra/reports"
)

func checkCommand() *cobra.Command {
	var out worksheetFlags
	cmd := &cobra.Command{
		Use:   "check CASE.yaml",
		Short: "Hold a proposed regimen against the drafted one",
		Long: `Hold the regimen that a case proposes (its section "proposed": dose, interval)
against the drafted one: dose, daily amount, interval, and with a half-life the
curves. The exit status is 1 when the two differ, when the proposed dose lies
outside the nine-in-ten range or raises a stop, and when the draft itself is
stopped. Agreement with the draft is no evidence of safety. What the draft rests
on is shown by "tayra draft".`,
		Example: `tayra check check.yaml
tayra check check.yaml --plot curves.svg --json check.json`,
		Annotations:       map[string]string{"usage": "tayra check CASE.yaml [flags]"},
		Args:              arguments("CASE.yaml"),
		ValidArgsFunction: completeCase,
		RunE: func(cmd *cobra.Command, args []string) error {
			if err := out.check(cmd); err != nil {
				return err
			}
			in, source, text, err := readCase(args[0], cmd.InOrStdin(), cmd.ErrOrStderr())
			if err != nil {
				return err
			}
			if in.Proposed.IsZero() {
				return dose.InputErrors{{File: in.File, Line: in.Proposed.Place.Line, Column: in.Proposed.Place.Column, Field: "proposed",
					Problem: "missing: nothing to check", Remedy: "write the dose and the interval that are proposed, or run `tayra draft`"}}
			}
			c := &readCaseFile{name: in.File, source: source, text: text, in: in}
			ws, err := c.draft()
			if err != nil {
				return err
			}
			if err := out.write(cmd, ws, c, reports.ProposedText); err != nil {
				return err
			}
			if p := ws.Proposed; ws.Drafted == nil || p == nil || p.Differs || p.OutsideRange || p.RaisesStop {
				return errFinding
			}
			return nil
		},
	}
	out.define(cmd, func(flags *pflag.FlagSet) {
		flags.Var(&onceFlag{text: &out.plot, name: "FILE"}, "plot", "draw the curves; the name ends in .svg, .png or .pdf")
	})
	return cmd
}

package main

import (
	"strconv"

	"github.com/spf13/cobra"

	"tayra/reports"
)

func schemaCommand() *cobra.Command {
	return &cobra.Command{
		Use:   "schema case|record",
		Short: "Print the JSON Schema of case files or of records",
		Long: `Print the JSON Schema (draft 2020-12) of case files, for an editor, or of the
record that --json writes, for a program that reads it.`,
		Example: `tayra schema case
tayra schema record`,
		Args:      arguments("case|record"),
		ValidArgs: []string{"case", "record"},
		RunE: func(cmd *cobra.Command, args []string) error {
			switch args[0] {
			case "case":
				return toStandardOutput(cmd, reports.CaseSchema())
			case "record":
				return toStandardOutput(cmd, reports.RecordSchema())
			}
			return &usageError{strconv.Quote(args[0]), "there is no such schema", "write case or record"}
		},
	}
}

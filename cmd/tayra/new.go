package main

import (
	"bytes"
	"net/url"
	"path/filepath"
	"time"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tayra/dose"
	"tayra/reports"
)

func newCommand() *cobra.Command {
	var schema string
	var force bool
	cmd := &cobra.Command{
		Use:   "new FILE.yaml",
		Short: "Write a case file to start from",
		Long: `Write a case file to start from: an invented case with a remark on every key,
dated today. Change it and give it to "tayra draft". With --schema, write the
JSON Schema of case files too and name it in the case file's first line: many
editors then complete the keys and mark mistakes while you type.`,
		Example: `tayra new anteater.yaml
tayra new macaw.yaml --schema case.schema.json`,
		Annotations:       map[string]string{"usage": "tayra new FILE.yaml [flags]"},
		Args:              arguments("FILE.yaml"),
		ValidArgsFunction: completeCase,
		RunE: func(cmd *cobra.Command, args []string) error {
			// The only command that reads the clock: the date goes into the
			// file, and from there into every worksheet made of it.
			text := dose.CaseTemplate(time.Now().Format(time.DateOnly))
			if args[0] == "-" {
				if schema != "" {
					return &usageError{"--schema", "a case on standard output has no place beside which to write it", "name a file for the case"}
				}
				return toStandardOutput(cmd, text)
			}
			files := []output{{flag: "FILE.yaml", path: args[0], data: text}}
			if schema != "" {
				files[0].data = append(schemaLine(args[0], schema), text...)
				files = append(files, output{flag: "--schema", path: schema, data: reports.CaseSchema()})
			}
			return writeFiles(files, force)
		},
	}
	inGroup(cmd, "Flags", func(flags *pflag.FlagSet) {
		flags.Var(&onceFlag{text: &schema, name: "FILE"}, "schema", "write the schema of case files too and name it in the first line")
		defineForce(flags, &force)
	})
	return cmd
}

// schemaLine names the schema by its way from the case file's folder, as
// editors read it.
func schemaLine(casePath, schemaPath string) []byte {
	way := schemaPath
	folder, err := filepath.Abs(filepath.Dir(casePath))
	if err == nil {
		if absolute, err := filepath.Abs(schemaPath); err == nil {
			way = absolute
			if relative, err := filepath.Rel(folder, absolute); err == nil {
				way = relative
			}
		}
	}
	way = (&url.URL{Path: filepath.ToSlash(way)}).EscapedPath()
	var b bytes.Buffer
	b.WriteString("# yaml-language-server: $schema=" + way + "\n")
	return b.Bytes()
}

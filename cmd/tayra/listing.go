package main

import (
	"bytes"
	"encoding/json"
	"io"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"
)

// listingFlags are those of a command that prints a list or its JSON.
type listingFlags struct {
	json  string
	force bool
}

func (l *listingFlags) define(flags *pflag.FlagSet) {
	defineJSON(flags, &l.json)
	defineForce(flags, &l.force)
}

func defineJSON(flags *pflag.FlagSet, path *string) {
	flags.Var(&onceFlag{text: path, name: "FILE"}, "json", "write the record as JSON; - is standard output and replaces the text")
}

func defineForce(flags *pflag.FlagSet, force *bool) {
	flags.BoolVar(force, "force", false, "replace files that exist")
}

// write puts the text on standard output and the record where --json says, with
// other files; the record is only made when it is asked for.
func (l *listingFlags) write(cmd *cobra.Command, record func() any, text string, files ...output) error {
	printed := []byte(text)
	if l.json != "" {
		data, err := marshal(record())
		if err != nil {
			return err
		}
		if l.json == "-" {
			printed = data
		} else {
			files = append(files, output{flag: "--json", path: l.json, data: data})
		}
	}
	if err := writeFiles(files, l.force); err != nil {
		return err
	}
	return toStandardOutput(cmd, printed)
}

// marshal writes JSON for people too: indented, < and > as they are.
func marshal(record any) ([]byte, error) {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	if err := e.Encode(record); err != nil {
		return nil, err
	}
	return b.Bytes(), nil
}

// toStandardOutput writes a result. A full disk behind it is an error like that
// of any file.
func toStandardOutput(cmd *cobra.Command, data []byte) error {
	if len(data) == 0 {
		return nil
	}
	n, err := cmd.OutOrStdout().Write(data)
	if err == nil && n < len(data) {
		err = io.ErrShortWrite
	}
	if err != nil {
		return unwritable("standard output", err)
	}
	return nil
}

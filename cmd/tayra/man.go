package main

import (
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tayra/dose"
)

// manCommand is for who packages the program: it is not listed.
func manCommand() *cobra.Command {
	var force bool
	cmd := &cobra.Command{
		Use:     "man DIR",
		Short:   "Write a manual page for every command",
		Long:    "Write a manual page for every command into a folder.",
		Example: "tayra man .",
		Hidden:  true,
		Args:    arguments("DIR"),
		RunE: func(cmd *cobra.Command, args []string) error {
			if info, err := os.Stat(args[0]); err != nil {
				return unwritable(args[0], err)
			} else if !info.IsDir() {
				return &fileError{args[0], "is no folder", "name the folder for the pages"}
			}
			root := cmd.Root()
			pages := []output{{flag: "DIR", path: filepath.Join(args[0], "tayra.1"), data: manPage(root)}}
			for _, c := range root.Commands() {
				if c.IsAvailableCommand() {
					pages = append(pages, output{flag: "DIR", path: filepath.Join(args[0], "tayra-"+c.Name()+".1"), data: manPage(c)})
				}
			}
			return writeFiles(pages, force)
		},
	}
	inGroup(cmd, "Flags", func(flags *pflag.FlagSet) { defineForce(flags, &force) })
	return cmd
}

// manPage sets a command's help as a manual page. It carries the version and no
// date, so that one source gives one page.
func manPage(cmd *cobra.Command) []byte {
	var b strings.Builder
	line := func(s string) { b.WriteString(s + "\n") }
	name := strings.ReplaceAll(cmd.CommandPath(), " ", "-")
	line(`.TH "` + roff(strings.ToUpper(name)) + `" 1 "" "tayra ` + dose.Version + `" "tayra"`)
	line(".SH NAME")
	line(roff(name) + ` \- ` + roff(strings.ToLower(cmd.Short[:1])+cmd.Short[1:]))
	line(".SH SYNOPSIS")
	for use := range strings.SplitSeq(useLines(cmd), "\n") {
		line(".B " + roff(use))
		line(".br")
	}
	line(".SH DESCRIPTION")
	about := cmd.Long
	if about == "" {
		about = cmd.Short + "."
	}
	for paragraph := range strings.SplitSeq(about, "\n\n") {
		line(".PP")
		if strings.Contains(paragraph, ":  ") { // a table is kept as it stands
			line(".nf")
		}
		for text := range strings.SplitSeq(paragraph, "\n") {
			line(roff(text))
		}
		if strings.Contains(paragraph, ":  ") {
			line(".fi")
		}
	}
	for _, g := range flagGroups(cmd) {
		line(`.SH "` + roff(strings.ToUpper(g.heading)) + `"`)
		for _, f := range g.flags {
			_, usage := pflag.UnquoteUsage(f)
			line(".TP")
			line(".B " + roff(flagHead(f)))
			line(roff(usage))
		}
	}
	if cmd.Example != "" {
		line(".SH EXAMPLES")
		line(".nf")
		for text := range strings.SplitSeq(strings.TrimSpace(cmd.Example), "\n") {
			line(roff(text))
		}
		line(".fi")
	}
	line(".SH SEE ALSO")
	var others []string
	for _, c := range append([]*cobra.Command{cmd.Root()}, cmd.Root().Commands()...) {
		if c != cmd && (c.IsAvailableCommand() || c == cmd.Root()) {
			others = append(others, `.BR `+roff(strings.ReplaceAll(c.CommandPath(), " ", "-"))+` (1)`)
		}
	}
	for i, o := range others {
		if i < len(others)-1 {
			o += " ,"
		}
		line(o)
	}
	return []byte(b.String())
}

// roff writes a text so that no letter of it is a request or an escape.
func roff(s string) string {
	s = strings.NewReplacer(`\`, `\e`, "-", `\-`, "'", `\(aq`, `"`, `\(dq`).Replace(s)
	if strings.HasPrefix(s, ".") {
		s = `\&` + s
	}
	return s
}

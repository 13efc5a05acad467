package main

import (
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"
)

// runsOn is the annotation of a command that runs until it is interrupted.
const runsOn = "runs on"

// helpWidth is the width of every help text.
const helpWidth = 80

// writeHelp writes what a command is for, how it is written, an example that
// runs, and its flags under their headings.
func writeHelp(w io.Writer, cmd *cobra.Command) {
	about := cmd.Long
	if about == "" {
		about = cmd.Short
	}
	fmt.Fprintf(w, "%s\n\nUsage:\n", strings.TrimSpace(about))
	for line := range strings.SplitSeq(useLines(cmd), "\n") {
		fmt.Fprintf(w, "  %s\n", line)
	}
	if cmd.HasAvailableSubCommands() {
		fmt.Fprint(w, "\nCommands:\n")
		for _, c := range cmd.Commands() {
			if c.IsAvailableCommand() {
				fmt.Fprintf(w, "  %-11s %s\n", c.Name(), c.Short)
			}
		}
	}
	if cmd.Example != "" {
		fmt.Fprint(w, "\nExamples:\n")
		for line := range strings.SplitSeq(strings.TrimSpace(cmd.Example), "\n") {
			fmt.Fprintf(w, "  %s\n", line)
		}
	}
	for _, g := range flagGroups(cmd) {
		fmt.Fprintf(w, "\n%s:\n", g.heading)
		for _, f := range g.flags {
			fmt.Fprintf(w, "  %-22s", flagHead(f))
			const indent = 24
			if len([]rune(flagHead(f))) > 21 {
				fmt.Fprintf(w, "\n%s", strings.Repeat(" ", indent))
			}
			_, usage := pflag.UnquoteUsage(f)
			fmt.Fprintln(w, strings.TrimLeft(paragraph(usage, indent, indent, helpWidth), " "))
		}
	}
}

// useLines are the ways in which a command is written.
func useLines(cmd *cobra.Command) string {
	if lines := cmd.Annotations["usage"]; lines != "" {
		return lines
	}
	return cmd.UseLine()
}

// flagHead is "--mass MASS".
func flagHead(f *pflag.Flag) string {
	value, _ := pflag.UnquoteUsage(f)
	head := "--" + f.Name
	if f.Shorthand != "" {
		head = "-" + f.Shorthand + ", " + head
	}
	if f.NoOptDefVal != "" {
		return head
	}
	return strings.TrimSpace(head + " " + value)
}

type flagsOfGroup struct {
	heading string
	flags   []*pflag.Flag
}

// flagGroups are the shown flags in the order of their definition.
func flagGroups(cmd *cobra.Command) []flagsOfGroup {
	const rest = "Flags"
	groups := []flagsOfGroup{}
	put := func(f *pflag.Flag) {
		if f.Hidden {
			return
		}
		heading := rest
		if a := f.Annotations[flagGroup]; len(a) > 0 {
			heading = a[0]
		}
		for i := range groups {
			if groups[i].heading == heading {
				groups[i].flags = append(groups[i].flags, f)
				return
			}
		}
		groups = append(groups, flagsOfGroup{heading, []*pflag.Flag{f}})
	}
	cmd.Flags().VisitAll(put)
	return groups
}

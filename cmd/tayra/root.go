package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tayra/dose"
)

// newRoot builds the tree of commands. It runs at every start: nothing is
// looked up or read here.
func newRoot() *cobra.Command {
	root := &cobra.Command{
		Use:   "tayra",
		Short: "Draft a starting dose for an animal that has no published one",
		Long: `Draft a starting dose and interval for an animal that has no published one, by
the scaling of metabolic rate with body mass, and write the worksheet for a
licensed veterinarian to judge. A draft is not a prescription.

Exit status: 0 done; 1 a stop left no dose, or a check found a difference;
2 the input or the command line is wrong; 3 a file could not be read or written,
or exists and --force was not given.`,
		Example: `tayra new case.yaml
tayra draft case.yaml
tayra draft case.yaml --pdf worksheet.pdf --json record.json
tayra species anteater`,
		Annotations: map[string]string{"usage": "tayra COMMAND [flags]"},
		Args:        cobra.ArbitraryArgs,
		RunE: func(cmd *cobra.Command, args []string) error {
			if version, _ := cmd.Flags().GetBool("version"); version {
				fmt.Fprintf(cmd.OutOrStdout(), "tayra %s (tables %s)\n", dose.Version, dose.TablesDigest)
				return nil
			}
			if len(args) > 0 {
				return unknownCommand(cmd, args[0])
			}
			writeHelp(cmd.OutOrStdout(), cmd)
			return nil
		},
		SilenceErrors:              true,
		SilenceUsage:               true,
		SuggestionsMinimumDistance: 2,
		CompletionOptions:          cobra.CompletionOptions{DisableDefaultCmd: true},
	}
	cobra.EnableCommandSorting = false
	inGroup(root, "Flags", func(flags *pflag.FlagSet) {
		flags.BoolP("version", "v", false, "print the version of the program and of its tables")
	})
	root.AddCommand(
		draftCommand(),
		checkCommand(),
		fitCommand(),
		rereadCommand(),
		batchCommand(),
		serveCommand(),
		newCommand(),
		speciesCommand(),
		rateCommand(),
		equationsCommand(),
		schemaCommand(),
		completionCommand(),
		manCommand(),
	)
	help := helpCommand()
	root.SetHelpCommand(help)
	root.AddCommand(help)
	root.SetFlagErrorFunc(flagFault)
	root.SetHelpFunc(func(cmd *cobra.Command, _ []string) { writeHelp(cmd.OutOrStdout(), cmd) })
	for _, c := range root.Commands() {
		c.DisableFlagsInUseLine = true
		c.InitDefaultHelpFlag()
		describeHelpFlag(c)
	}
	root.InitDefaultHelpFlag()
	describeHelpFlag(root)
	return root
}

func describeHelpFlag(cmd *cobra.Command) {
	if f := cmd.Flags().Lookup("help"); f != nil {
		f.Usage = "this text"
		// It stands with the last group rather than alone under a heading.
		groups := flagGroups(cmd)
		if n := len(groups); n > 1 && len(groups[n-1].flags) == 1 {
			f.Annotations = map[string][]string{flagGroup: {groups[n-2].heading}}
		}
	}
}

// unknownCommand names the commands that may have been meant.
func unknownCommand(root *cobra.Command, word string) error {
	var names []string
	for _, c := range root.Commands() {
		if c.IsAvailableCommand() {
			names = append(names, c.Name())
		}
	}
	remedy := "the commands are " + strings.Join(names, ", ")
	if near := root.SuggestionsFor(word); len(near) > 0 {
		remedy = "did you mean " + strings.Join(near, " or ") + "?"
	}
	return &usageError{word, "no such command", remedy}
}

func helpCommand() *cobra.Command {
	return &cobra.Command{
		Use:     "help [COMMAND]",
		Short:   "Say how a command is written",
		Example: "tayra help draft",
		Args:    arguments("[COMMAND]"),
		ValidArgsFunction: func(cmd *cobra.Command, args []string, _ string) ([]cobra.Completion, cobra.ShellCompDirective) {
			var names []cobra.Completion
			for _, c := range cmd.Root().Commands() {
				if c.IsAvailableCommand() && len(args) == 0 {
					names = append(names, cobra.CompletionWithDesc(c.Name(), c.Short))
				}
			}
			return names, cobra.ShellCompDirectiveNoFileComp
		},
		RunE: func(cmd *cobra.Command, args []string) error {
			root := cmd.Root()
			if len(args) == 0 {
				writeHelp(cmd.OutOrStdout(), root)
				return nil
			}
			for _, c := range root.Commands() {
				if c.Name() == args[0] {
					writeHelp(cmd.OutOrStdout(), c)
					return nil
				}
			}
			return unknownCommand(root, args[0])
		},
	}
}

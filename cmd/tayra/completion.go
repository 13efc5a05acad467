package main

import (
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"tayra/species"
)

var shells = []string{"bash", "zsh", "fish", "powershell"}

func completionCommand() *cobra.Command {
	return &cobra.Command{
		Use:   "completion SHELL",
		Short: "Print the completion script of a shell",
		Long: `Print the script by which a shell completes commands, flags and the names of
animals. SHELL is bash, zsh, fish or powershell; bash needs its package
bash-completion.

bash:        source <(tayra completion bash)
zsh:         tayra completion zsh > "${fpath[1]}/_tayra"
fish:        tayra completion fish | source
powershell:  tayra completion powershell | Out-String | Invoke-Expression`,
		Example:   `tayra completion bash`,
		Args:      arguments("SHELL"),
		ValidArgs: shells,
		RunE: func(cmd *cobra.Command, args []string) error {
			root, out := cmd.Root(), cmd.OutOrStdout()
			switch args[0] {
			case "bash":
				return root.GenBashCompletionV2(out, true)
			case "zsh":
				return root.GenZshCompletion(out)
			case "fish":
				return root.GenFishCompletion(out, true)
			case "powershell":
				return root.GenPowerShellCompletionWithDesc(out)
			}
			return &usageError{"SHELL", args[0] + " is none of the shells known here", "write " + strings.Join(shells, ", ")}
		},
	}
}

// completeSpecies offers the common and scientific names that begin with what
// was typed.
func completeSpecies(_ *cobra.Command, args []string, typed string) ([]cobra.Completion, cobra.ShellCompDirective) {
	if len(args) > 0 {
		return nil, cobra.ShellCompDirectiveNoFileComp
	}
	typed = strings.ToLower(typed)
	var out []cobra.Completion
	for _, a := range species.All() {
		for _, name := range a.CommonNames {
			if strings.HasPrefix(strings.ToLower(name), typed) {
				out = append(out, cobra.CompletionWithDesc(name, a.Name))
			}
		}
		if strings.HasPrefix(strings.ToLower(a.Name), typed) {
			out = append(out, cobra.CompletionWithDesc(a.Name, a.CommonName()))
		}
	}
	slices.Sort(out)
	return slices.Compact(out), cobra.ShellCompDirectiveNoFileComp
}

// completeFirst completes the first argument only.
func completeFirst(f cobra.CompletionFunc) cobra.CompletionFunc {
	return func(cmd *cobra.Command, args []string, typed string) ([]cobra.Completion, cobra.ShellCompDirective) {
		if len(args) > 0 {
			return nil, cobra.ShellCompDirectiveNoFileComp
		}
		return f(cmd, args, typed)
	}
}

// completeCase offers case files.
func completeCase(_ *cobra.Command, args []string, _ string) ([]cobra.Completion, cobra.ShellCompDirective) {
	if len(args) > 0 {
		return nil, cobra.ShellCompDirectiveNoFileComp
	}
	return []cobra.Completion{"yaml", "yml"}, cobra.ShellCompDirectiveFilterFileExt
}

// completeWords offers the words that a flag may have.
func completeWords(cmd *cobra.Command, flag string, words ...string) {
	_ = cmd.RegisterFlagCompletionFunc(flag, cobra.FixedCompletions(words, cobra.ShellCompDirectiveNoFileComp))
}

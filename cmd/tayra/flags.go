package main

import (
	"errors"
	"slices"
	"strconv"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tayra/dose"
)

// entryFlag is a flag whose value goes to the readers of package dose as it was
// typed. A second value would silently win over the first, so it is refused.
type entryFlag struct {
	entry *dose.Entry
	name  string // of the value, for the help
}

func (f *entryFlag) String() string { return "" }
func (f *entryFlag) Type() string   { return f.name }

func (f *entryFlag) Set(s string) error {
	if f.entry.Given() {
		return errors.New("given twice")
	}
	if strings.TrimSpace(s) == "" {
		return errors.New("empty")
	}
	*f.entry = dose.E(s)
	return nil
}

// entriesFlag is a list: given several times, or with commas between.
type entriesFlag struct {
	entries *[]dose.Entry
	name    string
}

func (f *entriesFlag) String() string { return "" }
func (f *entriesFlag) Type() string   { return f.name }

func (f *entriesFlag) Set(s string) error {
	for word := range strings.SplitSeq(s, ",") {
		word = strings.TrimSpace(word)
		if word == "" {
			return errors.New("empty")
		}
		*f.entries = append(*f.entries, dose.E(word))
	}
	return nil
}

// onceFlag is a plain text that may be given once: the name of a file, a size
// of paper.
type onceFlag struct {
	text *string
	name string
	set  bool
}

func (f *onceFlag) String() string { return "" }
func (f *onceFlag) Type() string   { return f.name }

func (f *onceFlag) Set(s string) error {
	if f.set {
		return errors.New("given twice")
	}
	if strings.TrimSpace(s) == "" {
		return errors.New("empty")
	}
	*f.text, f.set = s, true
	return nil
}

// flagGroup is the annotation under which the help shows a flag.
const flagGroup = "group"

// inGroup sorts the flags that add defines under one heading of the help.
func inGroup(cmd *cobra.Command, heading string, add func(flags *pflag.FlagSet)) {
	group := pflag.NewFlagSet("", pflag.ContinueOnError)
	group.SortFlags = false
	add(group)
	cmd.Flags().SortFlags = false
	group.VisitAll(func(f *pflag.Flag) {
		if f.Annotations == nil {
			f.Annotations = map[string][]string{}
		}
		f.Annotations[flagGroup] = []string{heading}
	})
	cmd.Flags().AddFlagSet(group)
}

// flagFault puts what the flag parser found into the words of the other errors.
func flagFault(cmd *cobra.Command, err error) error {
	var unknown *pflag.NotExistError
	var noValue *pflag.ValueRequiredError
	var invalid *pflag.InvalidValueError
	var syntax *pflag.InvalidSyntaxError
	help := "see `" + cmd.CommandPath() + " --help`"
	switch {
	case errors.As(err, &unknown):
		if group := unknown.GetSpecifiedShortnames(); group != "" {
			if group[0] >= '0' && group[0] <= '9' || group[0] == '.' {
				return &usageError{"-" + group, "begins with a minus", "every mass and dose is above zero"}
			}
			return &usageError{"-" + group, "no such flag", help}
		}
		name := unknown.GetSpecifiedName()
		if near := nearFlags(cmd, name); len(near) > 0 {
			help = "did you mean " + strings.Join(near, " or ") + "?"
		}
		return &usageError{"--" + name, "no such flag", help}
	case errors.As(err, &noValue):
		f := noValue.GetFlag()
		return &usageError{"--" + f.Name, "without a value", "write it behind the flag, in quotes if it has a space"}
	case errors.As(err, &invalid):
		f := invalid.GetFlag()
		cause := invalid.Unwrap().Error()
		switch cause {
		case "given twice":
			return &usageError{"--" + f.Name, cause, "keep one of the two"}
		case "empty":
			return &usageError{"--" + f.Name, cause, "write a value, or leave the flag out"}
		}
		switch f.Value.Type() {
		case "bool":
			return &usageError{"--" + f.Name, strconv.Quote(invalid.GetValue()) + " is neither true nor false", "the flag alone is enough"}
		case "int":
			return &usageError{"--" + f.Name, strconv.Quote(invalid.GetValue()) + " is no whole number", help}
		}
		return &usageError{"--" + f.Name, cause, help}
	case errors.As(err, &syntax):
		return &usageError{syntax.GetSpecifiedFlag(), "not written like a flag", help}
	}
	return &usageError{"", err.Error(), help}
}

// nearFlags are the flags that a mistyped name may have meant.
func nearFlags(cmd *cobra.Command, name string) []string {
	var near []string
	least := 1 + len(name)/4
	cmd.Flags().VisitAll(func(f *pflag.Flag) {
		n := slips(name, f.Name)
		if len(name) >= 3 && strings.HasPrefix(f.Name, name) {
			n = min(n, 1) // cut short
		}
		switch {
		case f.Hidden || n > least:
		case n < least:
			near, least = []string{"--" + f.Name}, n
		default:
			near = append(near, "--"+f.Name)
		}
	})
	if len(near) > 3 {
		return nil
	}
	return near
}

// slips counts the letters to insert, delete or change that turn one word into
// the other.
func slips(a, b string) int {
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range len(a) {
		diagonal := row[0]
		row[0] = i + 1
		for j := range len(b) {
			change := diagonal
			if a[i] != b[j] {
				change++
			}
			diagonal = row[j+1]
			row[j+1] = min(change, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(b)]
}

// arguments asks for a number of arguments by their names in the usage line:
// "SPECIES", "MASS". Names in brackets may be left out.
func arguments(names ...string) cobra.PositionalArgs {
	least := slices.IndexFunc(names, func(n string) bool { return strings.HasPrefix(n, "[") })
	if least < 0 {
		least = len(names)
	}
	return func(cmd *cobra.Command, args []string) error {
		usage := "write `" + cmd.UseLine() + "`"
		switch {
		case len(args) < least:
			return &usageError{names[len(args)], "missing", usage}
		case len(args) > len(names):
			if len(names) == 0 {
				return &usageError{args[0], "this command takes no argument", usage}
			}
			return &usageError{args[len(names)], "one argument too many", "put a name or a mass of several words in quotes: " + usage}
		}
		for i, a := range args {
			if strings.TrimSpace(a) == "" {
				return &usageError{strings.Trim(names[i], "[]"), "empty", usage}
			}
		}
		return nil
	}
}

package main

import (
	"bytes"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"unicode/utf8"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tayra/dose"
)

func everyCommand() []*cobra.Command {
	root := newRoot()
	return append([]*cobra.Command{root}, root.Commands()...)
}

// TestHelp: every command says what it is for, how it is written, an example,
// and what each flag is; and fits an ordinary terminal.
func TestHelp(t *testing.T) {
	for _, c := range everyCommand() {
		var b bytes.Buffer
		writeHelp(&b, c)
		if c.Short == "" || c.Example == "" || !strings.Contains(b.String(), "Examples:\n") {
			t.Errorf("%s: no short text or no example", c.Name())
		}
		for line := range strings.Lines(b.String()) {
			if n := utf8.RuneCountInString(strings.TrimRight(line, "\n")); n > helpWidth {
				t.Errorf("%s: a line of %d columns: %q", c.Name(), n, line)
			}
			if strings.TrimRight(line, " \n") != strings.TrimRight(line, "\n") {
				t.Errorf("%s: spaces at the end of %q", c.Name(), line)
			}
		}
		c.Flags().VisitAll(func(f *pflag.Flag) {
			if f.Usage == "" {
				t.Errorf("%s --%s says nothing", c.Name(), f.Name)
			}
			if !strings.Contains(b.String(), flagHead(f)) {
				t.Errorf("%s --%s is not shown", c.Name(), f.Name)
			}
		})
	}
}

// TestExamplesRun runs the examples of every command's help in a shell, in a
// folder with the files that they read.
func TestExamplesRun(t *testing.T) {
	template := string(dose.CaseTemplate("2026-11-30"))
	proposing := strings.NewReplacer("#proposed:", "proposed:", "#  dose: 8 mg/kg", "  dose: 8.1 mg/kg", "#  interval: q8h", "  interval: q12h").Replace(template)
	if proposing == template {
		t.Fatal("the template has no sleeping proposal")
	}
	table, err := os.ReadFile("../../testdata/clearances.csv")
	if err != nil {
		t.Fatal(err)
	}
	clearances := string(table)
	for _, c := range everyCommand() {
		t.Run(c.Name(), func(t *testing.T) {
			folder := t.TempDir()
			// The program's own example begins with `tayra new case.yaml`.
			if c.HasParent() {
				write(t, folder, "case.yaml", template)
			}
			write(t, folder, "check.yaml", proposing)
			write(t, folder, "animals.csv", animalsTable)
			write(t, folder, "clearances.csv", clearances)
			if c.Annotations[runsOn] != "" {
				for line := range strings.SplitSeq(c.Example, "\n") {
					interrupt(t, folder, line)
				}
				return
			}
			shell := exec.Command("sh", "-e", "-c", c.Example)
			shell.Dir = folder
			out, err := shell.CombinedOutput()
			if err != nil {
				t.Errorf("%v\n%s\n%s", err, c.Example, out)
			}
			if len(out) == 0 && c.Name() != "new" && c.Name() != "man" {
				t.Error("the examples print nothing")
			}
		})
	}
}

// interrupt starts a command that runs on until it is stopped, waits until it
// has said where it is, and stops it as Ctrl-C does. Nothing that it might open
// is within its reach.
func interrupt(t *testing.T, folder, line string) {
	t.Helper()
	tayra, err := exec.LookPath("tayra")
	if err != nil {
		t.Fatal(err)
	}
	shell := exec.Command("/bin/sh", "-c", "exec "+line)
	shell.Dir = folder
	shell.Env = []string{"PATH=" + filepath.Dir(tayra)}
	out, err := shell.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := shell.Start(); err != nil {
		t.Fatal(err)
	}
	first := make([]byte, 1)
	if _, err := out.Read(first); err != nil {
		t.Errorf("%s says nothing: %v", line, err)
	}
	if err := shell.Process.Signal(os.Interrupt); err != nil {
		t.Error(err)
	}
	if err := shell.Wait(); err != nil {
		t.Errorf("%s: %v", line, err)
	}
}

func write(t *testing.T, folder, name, text string) {
	t.Helper()
	if err := os.WriteFile(filepath.Join(folder, name), []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
}

package main

import (
	"errors"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"tayra": main})
}

// TestScripts runs testdata/*.txt: one file a command or a habit. Besides the
// usual commands of the script language,
//
//	exits N command...
//
// runs a command that must end with that status, and
//
//	example FILE.yaml
//
// copies a case of the repository's testdata into the script's folder.
func TestScripts(t *testing.T) {
	examples, err := filepath.Abs("../../testdata")
	if err != nil {
		t.Fatal(err)
	}
	testscript.Run(t, testscript.Params{
		Dir:                 "testdata",
		RequireExplicitExec: true,
		RequireUniqueNames:  true,
		Setup: func(e *testscript.Env) error {
			e.Setenv("ESCAPE", "\x1b[31mred.yaml") // no such letter can stand in a script
			return nil
		},
		Cmds: map[string]func(*testscript.TestScript, bool, []string){
			"exits": exits,
			"example": func(ts *testscript.TestScript, _ bool, args []string) {
				for _, name := range args {
					data, err := os.ReadFile(filepath.Join(examples, name))
					ts.Check(err)
					ts.Check(os.WriteFile(ts.MkAbs(name), data, 0o666))
				}
			},
		},
	})
}

func exits(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: exits STATUS COMMAND...")
	}
	want, err := strconv.Atoi(args[0])
	ts.Check(err)
	got := 0
	if err := ts.Exec(args[1], args[2:]...); err != nil {
		var status *exec.ExitError
		if !errors.As(err, &status) {
			ts.Fatalf("%v", err)
		}
		got = status.ExitCode()
	}
	if got != want {
		ts.Fatalf("exit status %d, want %d", got, want)
	}
}

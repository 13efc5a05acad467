package main

import (
	"bytes"
	"flag"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
)

var updateReadme = flag.Bool("update", false, "write the outputs in README.md anew")

// most lines of an output that the README shows; what is longer is cut.
const readmeLines = 30

// Every command of the README is run in testdata, and what it prints is held
// against what the README says it prints.
func TestReadme(t *testing.T) {
	const file = "../../README.md"
	before, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	if err := os.CopyFS(dir, os.DirFS("../../testdata")); err != nil {
		t.Fatal(err)
	}
	run := func(line string) string {
		cmd := exec.Command("sh", "-c", line)
		cmd.Dir = dir
		self, err := os.Executable()
		if err != nil {
			t.Fatal(err)
		}
		bin := filepath.Join(dir, "bin")
		if _, err := os.Stat(bin); err != nil {
			if err := os.MkdirAll(bin, 0o777); err != nil {
				t.Fatal(err)
			}
			// The test program is tayra itself under that name (TestMain).
			if err := os.Symlink(self, filepath.Join(bin, "tayra")); err != nil {
				t.Fatal(err)
			}
		}
		cmd.Env = append(os.Environ(), "PATH="+bin+string(os.PathListSeparator)+os.Getenv("PATH"), "NO_COLOR=1")
		var out bytes.Buffer
		cmd.Stdout, cmd.Stderr = &out, &out
		if err := cmd.Run(); err != nil {
			if _, ok := err.(*exec.ExitError); !ok {
				t.Fatalf("%s: %v", line, err)
			}
		}
		return out.String()
	}
	// The example of reread needs the worksheet of the README's first command.
	if out := run("tayra draft anteater.yaml --quiet --pdf worksheet.pdf"); !strings.Contains(out, "DRAFT") {
		t.Fatalf("no worksheet to reread: %s", out)
	}
	var after strings.Builder
	inside, commands := false, 0
	for _, line := range strings.SplitAfter(string(before), "\n") {
		switch {
		case strings.HasPrefix(line, "```console"):
			inside = true
			after.WriteString(line)
		case inside && strings.HasPrefix(line, "```"):
			inside = false
			after.WriteString(line)
		case inside && strings.HasPrefix(line, "$ "):
			commands++
			after.WriteString(line)
			after.WriteString(shortened(run(strings.TrimSpace(line[2:]))))
		case inside:
		default:
			after.WriteString(line)
		}
	}
	if commands < 8 {
		t.Errorf("only %d commands in the README", commands)
	}
	if after.String() == string(before) {
		return
	}
	if *updateReadme {
		if err := os.WriteFile(file, []byte(after.String()), 0o666); err != nil {
			t.Fatal(err)
		}
		return
	}
	// The digest of the tables changes with every one of them, and nothing that
	// the README says with it.
	digest := regexp.MustCompile(`tables [0-9a-f]{12}`)
	lines := func(text string) []string {
		return strings.Split(digest.ReplaceAllString(text, "tables ............"), "\n")
	}
	want, got := lines(string(before)), lines(after.String())
	for i := range want {
		if i >= len(got) || got[i] != want[i] {
			t.Fatalf("README.md:%d: the program prints otherwise (go test ./cmd/tayra -run Readme -update)\nREADME:  %q\nprogram: %q", i+1, want[i], got[min(i, len(got)-1)])
		}
	}
}

// shortened cuts an output in its middle and leaves no line empty at its end.
func shortened(s string) string {
	lines := strings.Split(strings.TrimRight(s, "\n"), "\n")
	if len(lines) > readmeLines {
		lines = append(lines[:readmeLines:readmeLines], "[...]")
	}
	return strings.Join(lines, "\n") + "\n"
}

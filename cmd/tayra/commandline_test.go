package main

import (
	"bytes"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// TestAnyCommandLine: whatever is typed, the program ends with one of its four
// statuses; it says something on standard error when, and only when, something
// is wrong with the line or a file, each line under its name; and then standard
// output stays empty.
func TestAnyCommandLine(t *testing.T) {
	t.Chdir(t.TempDir())
	words := rapid.OneOf(
		rapid.SampledFrom([]string{
			"draft", "check", "new", "species", "rate", "equations", "schema", "completion", "man", "help",
			"--help", "-h", "--version", "--", "-", "--json", "--pdf", "--force", "--quiet", "--width", "--paper", "--plot",
			"--mass", "--species", "--date", "--dose", "--interval", "--drug", "--source", "--model-species", "--model-mass",
			"--temperature", "--hazards", "--schema", "--save-case", "--condition", "--controlled", "--q10",
			"dog", "giant anteater", "tortoise", "41 kg", "18kg", "10 mg/kg", "q12h", "2026-11-30", "examplicillin", "30C",
			"a.yaml", "b.json", "c.pdf", "d.svg", ".", "case", "record", "bash", "kleiber1947", "a4", "80", "=", "--mass=4kg",
		}),
		rapid.String(),
	)
	rapid.Check(t, func(t *rapid.T) {
		args := rapid.SliceOfN(words, 0, 8).Draw(t, "args")
		var stdout, stderr bytes.Buffer
		status := run(args, strings.NewReader(""), &stdout, &stderr)
		said := strings.TrimSuffix(stderr.String(), "\n")
		switch status {
		case exitDone, exitFinding:
			if said != "" && !strings.Contains(said, ": warning: ") {
				t.Fatalf("status %d, and said %q", status, said)
			}
		case exitInput, exitFile:
			if said == "" || stdout.Len() > 0 {
				t.Fatalf("status %d, said %q, %d bytes on standard output", status, said, stdout.Len())
			}
		default:
			t.Fatalf("status %d", status)
		}
		if said == "" {
			return
		}
		for line := range strings.SplitSeq(said, "\n") {
			if !strings.HasPrefix(line, "tayra: ") || strings.ContainsFunc(line, isControl) {
				t.Fatalf("said %q", line)
			}
		}
	})
}

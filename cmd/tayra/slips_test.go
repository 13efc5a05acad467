package main

import (
	"bytes"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
)

// TestOutputsHoldNoSlips reads what the commands print, all their examples
// among them, for the slips of testdata/slips.tsv: the error-prone dose
// designations of the ISMP list and of the Joint Commission's "Do Not Use"
// list, as recalled, and the house's own.
func TestOutputsHoldNoSlips(t *testing.T) {
	const examples = "../../testdata/"
	files, err := filepath.Glob(examples + "*.yaml")
	if err != nil || len(files) < 7 {
		t.Fatalf("%d examples, %v", len(files), err)
	}
	lines := [][]string{
		{"rate", "giant anteater", "41 kg"}, {"rate", "house mouse", "20 g"}, {"rate", "Asian elephant", "3200 kg"}, {"rate", "ball python", "1.4 kg", "--temperature", "30 °C"},
		{"species", "dog"}, {"species", "giant anteater"}, {"species", "cat"}, {"species", "Asian elephant"}, {"species", "--hazards"},
		{"equations"}, {"equations", "kleiber1947"}, {"check", examples + "check.yaml"},
		{"fit", examples + "clearances.csv", "--target", "giant anteater", "--mass", "41 kg"},
	}
	for _, f := range files {
		lines = append(lines, []string{"draft", f}, []string{"draft", f, "--quiet", "--width", "60"})
	}
	rules := index(t, examples+"slips.tsv")
	for _, line := range lines {
		var stdout, stderr bytes.Buffer
		status := run(line, strings.NewReader(""), &stdout, &stderr)
		if status > exitFinding || stdout.Len() == 0 {
			t.Errorf("%q: status %d, %s", line, status, &stderr)
		}
		for _, rule := range rules {
			re := regexp.MustCompile(rule[2])
			for _, l := range strings.Split(stdout.String(), "\n") {
				if re.MatchString(l) {
					t.Errorf("%q: %s (%s): %s", line, rule[0], rule[1], l)
				}
			}
		}
	}
}

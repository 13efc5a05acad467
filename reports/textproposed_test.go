package reports

import (
	"bytes"
	"os"
	"testing"

	"tayra/dose"
)

// TestProposedText: it is Text without what the draft rests on; nothing that
// decides is missing.
func TestProposedText(t *testing.T) {
	data, err := os.ReadFile("../testdata/check.yaml")
	if err != nil {
		t.Fatal(err)
	}
	in, _, err := dose.ReadCase("check.yaml", data)
	if err != nil {
		t.Fatal(err)
	}
	c, err := in.Check()
	if err != nil {
		t.Fatal(err)
	}
	ws, err := dose.Draft(c)
	if err != nil {
		t.Fatal(err)
	}
	whole := Text(ws, TextOptions{})
	short := ProposedText(ws, TextOptions{})
	for line := range bytes.Lines(short) {
		if !bytes.Contains(whole, line) {
			t.Errorf("a line that the whole worksheet has not: %q", line)
		}
	}
	for _, part := range []string{"THE DRAFT", "nine times in ten", "CAUTIONS", "PROPOSED REGIMEN: DIFFERS", "CONCENTRATIONS AT STEADY STATE", "Not a prescription"} {
		if !bytes.Contains(short, []byte(part)) {
			t.Errorf("%q is missing", part)
		}
	}
	if bytes.Contains(short, []byte("THE PLANS SIDE BY SIDE")) {
		t.Error("the plans are shown")
	}
	if quiet := ProposedText(ws, TextOptions{Quiet: true}); !bytes.Equal(quiet, Text(ws, TextOptions{Quiet: true})) {
		t.Error("quietly the two are not one")
	}
	c.Drug.Margin = dose.Narrow
	if ws, err = dose.Draft(c); err != nil {
		t.Fatal(err)
	}
	if stopped := ProposedText(ws, TextOptions{}); !bytes.Contains(stopped, []byte("STOP: NO DOSE")) || bytes.Contains(stopped, []byte("THE DRAFT")) {
		t.Errorf("after a stop:\n%s", stopped)
	}
}

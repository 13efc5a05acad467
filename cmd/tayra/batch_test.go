package main

import (
	"bytes"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"tayra/dose"
)

// animalsTable is the table that the examples of the help read.
const animalsTable = `case,species,mass,drug,model_species,model_mass,dose,interval,source
LW-0501,giant anteater,41 kg,examplicillin,dog,18 kg,10 mg/kg,q12h,practice protocol 7 (invented)
LW-0502,red panda,4.5 kg,examplicillin,dog,18 kg,10 mg/kg,q12h,practice protocol 7 (invented)
`

// rowsOf repeats the rows of animalsTable.
func rowsOf(n int) string {
	head, rest, _ := strings.Cut(animalsTable, "\n")
	rows := strings.SplitAfter(rest, "\n")
	var b strings.Builder
	b.WriteString(head + "\n")
	for i := range n {
		b.WriteString(rows[i%2])
	}
	return b.String()
}

// TestBatchInterrupted: Ctrl-C leaves whole rows in the part file and says how
// far it got; --resume goes on to the same bytes.
func TestBatchInterrupted(t *testing.T) {
	tayra, err := exec.LookPath("tayra")
	if err != nil {
		t.Fatal(err)
	}
	folder := t.TempDir()
	table := rowsOf(2000)
	write(t, folder, "animals.csv", table)
	run := func(stdin *os.File, args ...string) *exec.Cmd {
		c := exec.Command(tayra, append([]string{"batch", "--date", "2026-11-30"}, args...)...)
		c.Dir = folder
		if stdin != nil {
			c.Stdin = stdin
		}
		return c
	}
	if out, err := run(nil, "animals.csv", "-o", "whole.csv").CombinedOutput(); err != nil {
		t.Fatalf("%v %s", err, out)
	}
	from, to, err := os.Pipe()
	if err != nil {
		t.Fatal(err)
	}
	defer to.Close()
	slow := run(from, "-", "-o", "out.csv")
	var said bytes.Buffer
	slow.Stderr = &said
	if err := slow.Start(); err != nil {
		t.Fatal(err)
	}
	// Half of the table and no more: the program waits for the rest.
	if _, err := to.WriteString(table[:len(table)/2]); err != nil {
		t.Fatal(err)
	}
	ended := make(chan error, 1)
	go func() { ended <- slow.Wait() }()
	part := filepath.Join(folder, "out.csv.part")
	for {
		if data, err := os.ReadFile(part); err == nil && bytes.Count(data, []byte("\n")) > 256 {
			break
		}
		select {
		case err := <-ended:
			t.Fatalf("ended by itself: %v %s", err, said.String())
		case <-time.After(time.Millisecond):
		}
	}
	if err := slow.Process.Signal(os.Interrupt); err != nil {
		t.Fatal(err)
	}
	<-ended
	if slow.ProcessState.ExitCode() != exitFile {
		t.Errorf("status %d: %s", slow.ProcessState.ExitCode(), said.String())
	}
	data, err := os.ReadFile(part)
	if err != nil {
		t.Fatal(err)
	}
	rows := bytes.Count(data, []byte("\n")) - 1
	if !bytes.HasSuffix(data, []byte("\n")) {
		t.Error("the part file ends within a row")
	}
	for _, want := range []string{
		fmt.Sprintf("tayra: so far, %s: %s drafted, 0 stopped, 0 failed\n", countWords(rows, "row"), withCommas(rows)),
		fmt.Sprintf("tayra: out.csv: not finished: interrupted; %s are in out.csv.part, and the same command with --resume goes on\n", countWords(rows, "row")),
	} {
		if !strings.Contains(said.String(), want) {
			t.Errorf("said %q, want %q", said.String(), want)
		}
	}
	if out, err := run(nil, "animals.csv", "-o", "out.csv", "--resume").CombinedOutput(); err != nil || !strings.Contains(string(out), "tayra: 2,000 rows: 2,000 drafted, 0 stopped, 0 failed\n") {
		t.Errorf("%v %s", err, out)
	}
	a, _ := os.ReadFile(filepath.Join(folder, "whole.csv"))
	b, _ := os.ReadFile(filepath.Join(folder, "out.csv"))
	if len(a) == 0 || !bytes.Equal(a, b) {
		t.Error("gone on with, the result is another")
	}
	if _, err := os.Stat(part); err == nil {
		t.Error("the part file is still there")
	}
}

func TestSheetFile(t *testing.T) {
	for want, ws := range map[string]dose.Worksheet{
		"000001-LW-0412-giant-anteater.pdf":          {Case: "LW-0412", Patient: dose.PatientRecord{CommonName: "giant anteater"}},
		"000001-etc-passwd-Panthera-tigris.pdf":      {Case: "../../etc/passwd\x00", Patient: dose.PatientRecord{Species: "Panthera tigris"}},
		"000001-Przewalski-s-horse.pdf":              {Patient: dose.PatientRecord{CommonName: "Przewalski's horse"}},
		"000001-CON-usta.pdf":                        {Case: "CON: ", Patient: dose.PatientRecord{CommonName: "ñusta"}},
		"000001-" + strings.Repeat("a", 40) + ".pdf": {Case: strings.Repeat("a", 300)},
		"000001.pdf": {Case: "…", Patient: dose.PatientRecord{}},
	} {
		got := sheetFile(1, &ws)
		if got != want {
			t.Errorf("%q, want %q", got, want)
		}
		if !sheetName.MatchString(got) {
			t.Errorf("%q is not known as a worksheet again", got)
		}
	}
}

func TestWithCommas(t *testing.T) {
	for n, want := range map[int]string{0: "0", 7: "7", 999: "999", 1000: "1,000", 123456: "123,456", 1234567: "1,234,567"} {
		if got := withCommas(n); got != want {
			t.Errorf("%d is %s", n, got)
		}
	}
}

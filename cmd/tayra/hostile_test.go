package main

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"unicode"
)

// TestHostileCases gives the whole program every file of testdata/hostile: what
// its index says is wrong is said on standard error, at the place that the
// index names, with exit status 2, nothing on standard output and no file.
func TestHostileCases(t *testing.T) {
	const folder = "../../testdata/hostile"
	index, err := os.ReadFile(filepath.Join(folder, "cases.tsv"))
	if err != nil {
		t.Fatal(err)
	}
	rows := strings.Split(strings.TrimSuffix(string(index), "\n"), "\n")[1:]
	if len(rows) < 100 {
		t.Fatalf("the index has %d rows", len(rows))
	}
	for _, row := range rows {
		f := strings.Split(row, "\t")
		file, stage, field, place, expected := f[0], f[1], f[2], f[3], f[4]
		t.Run(file, func(t *testing.T) {
			path := filepath.Join(folder, file)
			record := filepath.Join(t.TempDir(), "record.json")
			var stdout, stderr bytes.Buffer
			status := run([]string{"draft", path, "--json", record}, strings.NewReader(""), &stdout, &stderr)
			_, err := os.Stat(record)
			written := err == nil
			at := "tayra: " + path + ": "
			if place != "" {
				at = "tayra: " + path + ":" + place + ": "
			}
			switch stage {
			case "ok", "warn":
				if status != exitDone || !written || stdout.Len() == 0 {
					t.Errorf("status %d, record written %v\n%s", status, written, &stderr)
				}
				want := ""
				if stage == "warn" {
					want = at + "warning: " + field + ": "
				}
				if !strings.HasPrefix(stderr.String(), want) || want == "" && stderr.Len() > 0 {
					t.Errorf("said %q, want %q", &stderr, want)
				}
			default:
				if status != exitInput || written || stdout.Len() > 0 {
					t.Errorf("status %d, record written %v, %d bytes on standard output", status, written, stdout.Len())
				}
				if stage != "read" {
					at = "tayra: " + path + ":" // the place is the reader's business alone
				}
				first, _, _ := strings.Cut(stderr.String(), "\n")
				if !strings.HasPrefix(first, at) || !strings.Contains(first, field) || !strings.Contains(first, expected) {
					t.Errorf("said %q\nwant %q with %q and %q", first, at, field, expected)
				}
			}
			for line := range strings.Lines(stderr.String()) {
				if !strings.HasPrefix(line, "tayra: ") {
					t.Errorf("a line without the program's name: %q", line)
				}
			}
			for _, r := range stderr.String() {
				if r != '\n' && !unicode.IsPrint(r) {
					t.Errorf("the message holds %U", r)
				}
			}
		})
	}
}

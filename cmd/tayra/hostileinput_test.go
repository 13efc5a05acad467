package main

import (
	"bytes"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"
	"unicode"
)

// index reads the rows of an index of testdata/hostile.
func index(t *testing.T, file string) [][]string {
	t.Helper()
	data, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	var out [][]string
	for _, row := range strings.Split(strings.TrimSuffix(string(data), "\n"), "\n")[1:] {
		out = append(out, strings.Split(row, "\t"))
	}
	return out
}

// refusal checks what a refused input gets: exit status 2, nothing on standard
// output, no file, a first line at the place with the message and, after a
// semicolon, what to write instead; every line with the program's name, and
// nothing that acts on a terminal.
func refusal(t *testing.T, status int, stdout, stderr *bytes.Buffer, record, at, expected string) {
	t.Helper()
	if status != exitInput || stdout.Len() > 0 {
		t.Errorf("status %d, %d bytes on standard output", status, stdout.Len())
	}
	if _, err := os.Stat(record); err == nil {
		t.Error("a record was written")
	}
	first, _, _ := strings.Cut(stderr.String(), "\n")
	if !strings.HasPrefix(first, at+expected) {
		t.Errorf("said %q\nwant %q", first, at+expected)
	}
	if !strings.ContainsAny(first[min(len(at), len(first)):], ";?") {
		t.Errorf("%q does not say what to write instead", first)
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
}

// TestHostileTables fits a line to every table of testdata/hostile/fit.
func TestHostileTables(t *testing.T) {
	const folder = "../../testdata/hostile/fit"
	rows := index(t, filepath.Join(folder, "fit.tsv"))
	files, err := filepath.Glob(filepath.Join(folder, "*.csv"))
	if err != nil || len(files) != len(rows) || len(rows) < 90 {
		t.Fatalf("%d files, %d rows in the index, %v", len(files), len(rows), err)
	}
	for _, row := range rows {
		file, stage, field, place, expected := row[0], row[1], row[2], row[3], row[4]
		t.Run(file, func(t *testing.T) {
			path := filepath.Join(folder, file)
			record := filepath.Join(t.TempDir(), "record.json")
			var stdout, stderr bytes.Buffer
			status := run([]string{"fit", path, "--target", "giant anteater", "--mass", "41 kg", "--json", record, "--width", "200"}, strings.NewReader(""), &stdout, &stderr)
			if stage == "refused" {
				at := "tayra: " + path + ": "
				if place != "" {
					at = "tayra: " + path + ":" + place + ": "
				}
				if field != "" {
					at += field + ": "
				}
				refusal(t, status, &stdout, &stderr, record, at, expected)
				return
			}
			if status != exitDone || stderr.Len() > 0 || !strings.Contains(strings.Join(strings.Fields(stdout.String()), " "), expected) {
				t.Errorf("status %d, %q\n%s", status, &stderr, &stdout)
			}
			// The accepted spellings are one table.
			if stage == "ok" && file != "accepted-semicolon-decimal-comma.csv" && !strings.Contains(stdout.String(), "b = 0.7322") {
				t.Errorf("another line than that of the plain table\n%s", &stdout)
			}
		})
	}
}

// repeated is "x{5000}" in a flag of the index: the letter so often.
var repeated = regexp.MustCompile(`(.)\{([0-9]+)\}`)

// TestHostileFlags drafts from flags with each change of testdata/hostile/flags.tsv.
func TestHostileFlags(t *testing.T) {
	plain := []string{"--date=2026-11-30", "--species=giant anteater", "--mass=41 kg", "--drug=examplicillin", "--class=penicillin", "--model-species=dog",
		"--model-mass=18 kg", "--dose=10 mg/kg", "--interval=q12h", "--route=SC", "--source=practice protocol 7"}
	rows := index(t, "../../testdata/hostile/flags.tsv")
	if len(rows) < 80 {
		t.Fatalf("%d rows", len(rows))
	}
	for _, row := range rows {
		name, stage, flag, expected := row[0], row[1], row[2], row[3]
		t.Run(name, func(t *testing.T) {
			args := map[string]string{}
			order := []string{}
			put := func(arg string) {
				name, _, _ := strings.Cut(arg, "=")
				if _, ok := args[name]; !ok {
					order = append(order, name)
				}
				args[name] = arg
			}
			for _, arg := range plain {
				put(arg)
			}
			for _, cell := range row[4:] {
				if cell == "" {
					continue
				}
				cell = repeated.ReplaceAllStringFunc(cell, func(s string) string {
					m := repeated.FindStringSubmatch(s)
					n, _ := strconv.Atoi(m[2])
					return strings.Repeat(m[1], n)
				})
				arg, err := strconv.Unquote(`"` + cell + `"`)
				if err != nil {
					t.Fatalf("%q: %v", cell, err)
				}
				put(arg)
			}
			record := filepath.Join(t.TempDir(), "record.json")
			line := []string{"draft", "--json", record}
			for _, name := range order {
				line = append(line, args[name])
			}
			var stdout, stderr bytes.Buffer
			status := run(line, strings.NewReader(""), &stdout, &stderr)
			if stage == "ok" {
				if status != exitDone || stderr.Len() > 0 || !strings.Contains(stdout.String(), "every 12 hours") {
					t.Errorf("status %d, %q", status, &stderr)
				}
				return
			}
			refusal(t, status, &stdout, &stderr, record, "tayra: "+flag+": ", expected)
		})
	}
}

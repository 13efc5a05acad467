package main

import (
	"bytes"
	"os"
	"os/exec"
	"path/filepath"
	"testing"
)

// The same inputs give the same bytes wherever and whenever they are worked
// out: in two time zones and two locales, on one core and on two.
func TestSameBytes(t *testing.T) {
	self, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	tayra := filepath.Join(dir, "tayra") // the test program is tayra under that name (TestMain)
	if err := os.Symlink(self, tayra); err != nil {
		t.Fatal(err)
	}
	testdata, err := filepath.Abs("../../testdata")
	if err != nil {
		t.Fatal(err)
	}
	commands := [][]string{
		{"check", filepath.Join(testdata, "check.yaml"), "--pdf", "sheet.pdf", "--json", "record.json", "--plot", "curves.svg"},
		{"draft", filepath.Join(testdata, "python.yaml"), "--pdf", "python.pdf", "--paper", "letter"},
		{"fit", filepath.Join(testdata, "clearances.csv"), "--target", "emu", "--mass", "40 kg", "--plot", "line.png", "--json", "fit.json"},
		{"batch", filepath.Join(testdata, "batch", "animals.csv"), "--date", "2026-11-30", "-o", "out.csv"},
	}
	files := []string{"sheet.pdf", "record.json", "curves.svg", "python.pdf", "line.png", "fit.json", "out.csv"}
	var first map[string][]byte
	for i, env := range [][]string{
		{"TZ=UTC", "LC_ALL=C", "LANG=C", "GOMAXPROCS=1"},
		{"TZ=UTC", "LC_ALL=C", "LANG=C", "GOMAXPROCS=1"},
		{"TZ=Pacific/Auckland", "LC_ALL=de_DE.UTF-8", "LANG=de_DE.UTF-8", "GOMAXPROCS=2"},
	} {
		out := filepath.Join(dir, string(rune('a'+i)))
		if err := os.Mkdir(out, 0o777); err != nil {
			t.Fatal(err)
		}
		for _, args := range commands {
			cmd := exec.Command(tayra, args...)
			cmd.Dir, cmd.Env = out, append(os.Environ(), env...)
			if msg, err := cmd.CombinedOutput(); err != nil {
				if e, ok := err.(*exec.ExitError); !ok || e.ExitCode() != 1 { // 1: a difference or a stop, as meant
					t.Fatalf("%v %v: %v\n%s", env, args, err, msg)
				}
			}
		}
		got := map[string][]byte{}
		for _, f := range files {
			b, err := os.ReadFile(filepath.Join(out, f))
			if err != nil {
				t.Fatal(err)
			}
			got[f] = b
		}
		if i == 0 {
			first = got
			continue
		}
		for _, f := range files {
			if !bytes.Equal(first[f], got[f]) {
				t.Errorf("%s differs under %v", f, env)
			}
		}
	}
}

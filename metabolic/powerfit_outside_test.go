//go:build outside

// The figures under testdata/r are what R gives: the scripts are run again and
// their output held against the files. Needs Rscript with nlme (Debian:
// r-base-core, r-cran-nlme); without them the test fails.

package metabolic

import (
	"bytes"
	"encoding/csv"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"testing"
)

func TestFiguresOfRAreReproduced(t *testing.T) {
	for _, c := range []struct {
		script string
		files  []string
		tol    float64 // relative, and absolute below 1
	}{
		{"powerfit.R", []string{"powerfit-lines.csv", "powerfit-points.csv"}, 1e-10},
		// lme stops where its optimiser does: another build of the linear algebra
		// may end a little beside it.
		{"nested.R", []string{"nested-figures.csv", "nested-predictions.csv"}, 1e-7},
	} {
		t.Run(c.script, func(t *testing.T) {
			out := t.TempDir()
			run := exec.Command("Rscript", "--vanilla", c.script, out)
			run.Dir = "../testdata/r"
			if text, err := run.CombinedOutput(); err != nil {
				t.Fatalf("Rscript %s: %v\n%s", c.script, err, text)
			}
			for _, file := range c.files {
				got := records(t, filepath.Join(out, file))
				want := records(t, filepath.Join("../testdata/r", file))
				if len(got) != len(want) {
					t.Fatalf("%s: R writes %d rows, the file has %d", file, len(got), len(want))
				}
				for i := range want {
					if len(got[i]) != len(want[i]) {
						t.Fatalf("%s row %d: %v, the file has %v", file, i+1, got[i], want[i])
					}
					for j := range want[i] {
						if !sameCell(got[i][j], want[i][j], c.tol) {
							t.Errorf("%s row %d (%v): R gives %s, the file has %s", file, i+1, want[i][:2], got[i][j], want[i][j])
						}
					}
				}
			}
		})
	}
}

func records(t *testing.T, path string) [][]string {
	t.Helper()
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(bytes.NewReader(text)).ReadAll()
	if err != nil {
		t.Fatalf("%s: %v", path, err)
	}
	return rows
}

func sameCell(a, b string, tol float64) bool {
	x, errX := strconv.ParseFloat(a, 64)
	y, errY := strconv.ParseFloat(b, 64)
	if errX != nil || errY != nil {
		return a == b
	}
	return math.Abs(x-y) <= tol*math.Max(1, math.Abs(y))
}

// The bare formula in R, the peer of the batch benchmark, on its own table: the
// first row by hand.
func TestBareFormulaOfR(t *testing.T) {
	dir := t.TempDir()
	in, out := filepath.Join(dir, "in.csv"), filepath.Join(dir, "out.csv")
	for _, args := range [][]string{{"make", "50", in}, {in, out}} {
		run := exec.Command("Rscript", append([]string{"--vanilla", "bareformula.R"}, args...)...)
		run.Dir = "../testdata/r"
		if text, err := run.CombinedOutput(); err != nil {
			t.Fatalf("Rscript bareformula.R %v: %v\n%s", args, err, text)
		}
	}
	rows := fitTable(t, out)
	if len(rows) != 50 {
		t.Fatalf("%d rows, want 50", len(rows))
	}
	r := rows[0]
	if r["mass"] != "38.53 kg" || r["dose"] != "5 mg/kg" || r["interval"] != "12 h" {
		t.Fatalf("first row %v", r)
	}
	s := math.Pow(38.53/20, -0.25)
	wantDigits(t, "S", r.number(t, "s"), s, 1e-12)
	wantDigits(t, "dose", r.number(t, "dose_mg_per_kg"), 5*s, 1e-12)
	wantDigits(t, "amount", r.number(t, "amount_mg"), 5*s*38.53, 1e-12)
	wantDigits(t, "interval", r.number(t, "stretched_interval_h"), 12/s, 1e-12)
}

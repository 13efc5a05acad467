//go:build outside

package reports

import (
	"bytes"
	"encoding/csv"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

// BenchmarkBareFormulaR is the bare formula over the table of BenchmarkBatch in
// R: no lookup, no caution, no range. The start of R is in it.
func BenchmarkBareFormulaR(b *testing.B) {
	folder := b.TempDir()
	in, out := filepath.Join(folder, "in.csv"), filepath.Join(folder, "out.csv")
	if err := os.WriteFile(in, bareTable(benchRows), 0o666); err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		if said, err := exec.Command("Rscript", "../testdata/r/bareformula.R", in, out).CombinedOutput(); err != nil {
			b.Fatalf("%v\n%s", err, said)
		}
	}
	b.ReportMetric(benchRows*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
}

// TestBatchAgainstR holds drafts to the bare formula as R computes it: where
// both animals have one group constant, the dose at the model's interval is the
// model's times (mass/model mass)^-0.25.
func TestBatchAgainstR(t *testing.T) {
	const rows = 2000
	folder := t.TempDir()
	in, out := filepath.Join(folder, "in.csv"), filepath.Join(folder, "out.csv")
	if err := os.WriteFile(in, bareTable(rows), 0o666); err != nil {
		t.Fatal(err)
	}
	if said, err := exec.Command("Rscript", "../testdata/r/bareformula.R", in, out).CombinedOutput(); err != nil {
		t.Fatalf("%v\n%s", err, said)
	}
	theirs := cellsOf(t, out)
	// And the table itself is the one that R makes.
	if said, err := exec.Command("Rscript", "../testdata/r/bareformula.R", "make", strconv.Itoa(rows), out).CombinedOutput(); err != nil {
		t.Fatalf("%v\n%s", err, said)
	}
	if made, err := os.ReadFile(out); err != nil || !bytes.Equal(made, bareTable(rows)) {
		t.Errorf("%v: R makes another table: %s", err, firstDifference(made, bareTable(rows)))
	}
	ours, counts := batchOf(t, string(bareTable(rows)), BatchOptions{})
	if err := os.WriteFile(out, []byte(ours), 0o666); err != nil {
		t.Fatal(err)
	}
	mine := cellsOf(t, out)
	if counts.Drafted != rows || len(theirs) != rows || len(mine) != rows {
		t.Fatalf("%+v, %d rows of R", counts, len(theirs))
	}
	for i, r := range theirs {
		m := mine[i]
		// The drafted interval may be another practical one; the daily dose is
		// kept either way.
		got := asNumber(t, m["drafted_dose_per_kg"]) / asNumber(t, m["drafted_interval_h"])
		want := asNumber(t, r["dose_mg_per_kg"]) / asNumber(t, strings.TrimSuffix(r["interval"], " h"))
		if !closeTo(got, want, 1e-5) {
			t.Fatalf("row %d: %v, R says %v", i+1, m, r)
		}
		if want := asNumber(t, m["drafted_dose_per_kg"]) * asNumber(t, r["amount_mg"]) / asNumber(t, r["dose_mg_per_kg"]); !closeTo(asNumber(t, m["drafted_dose"]), want, 2e-5) {
			t.Fatalf("row %d: amount %v, R says %v", i+1, m, r)
		}
	}
}

// cellsOf reads a table by its headings.
func cellsOf(t *testing.T, path string) (rows []map[string]string) {
	t.Helper()
	f, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	records, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	for _, record := range records[1:] {
		row := map[string]string{}
		for i, value := range record {
			row[records[0][i]] = value
		}
		rows = append(rows, row)
	}
	return rows
}

func asNumber(t *testing.T, s string) float64 {
	t.Helper()
	x, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	return x
}

func closeTo(got, want, relative float64) bool { return math.Abs(got/want-1) <= relative }

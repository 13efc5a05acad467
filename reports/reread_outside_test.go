//go:build outside

package reports

import (
	"errors"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// What qpdf (11.3, Debian 12) makes of a worksheet: encrypted ones are refused,
// with and without a password; packed or put in another order the record still
// comes out whole, and the pages no longer pass for ours.
func TestRereadAfterQPDF(t *testing.T) {
	dir := t.TempDir()
	in := filepath.Join(dir, "worksheet.pdf")
	if err := os.WriteFile(in, anteaterPDF(t, PDFOptions{}), 0o600); err != nil {
		t.Fatal(err)
	}
	through := func(args ...string) []byte {
		out := filepath.Join(dir, "out.pdf")
		outside(t, "qpdf", append(args, in, out)...)
		b, err := os.ReadFile(out)
		if err != nil {
			t.Fatal(err)
		}
		return b
	}
	for _, args := range [][]string{
		{"--encrypt", "secret", "owner", "256", "--"},
		{"--encrypt", "", "owner", "256", "--"},
		{"--encrypt", "", "owner", "256", "--cleartext-metadata", "--"},
		{"--allow-weak-crypto", "--encrypt", "", "owner", "128", "--use-aes=y", "--"},
		{"--allow-weak-crypto", "--encrypt", "", "owner", "40", "--"},
		{"--object-streams=generate", "--encrypt", "", "owner", "256", "--"},
	} {
		_, err := Reread(through(args...))
		var e *WorksheetError
		if !errors.As(err, &e) || !strings.HasPrefix(e.Problem, "the file is encrypted") || e.Foreign {
			t.Errorf("%v: %v", args, err)
		}
	}
	for _, args := range [][]string{{"--object-streams=generate"}, {"--linearize"}, {"--qdf"}, {"--stream-data=uncompress"}, {"--compression-level=9", "--recompress-flate"}} {
		r, err := Reread(through(args...))
		if err != nil || r.Verdict != Differs || len(r.Differences) > 0 || len(r.CaseFile) > 0 || r.Stated != r.Digest {
			t.Errorf("%v: %v %+v", args, err, r)
		}
	}
}

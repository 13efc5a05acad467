//go:build outside

package reports

import (
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
)

// What another program reads in a worksheet: qpdf finds it whole, and
// pdftotext finds on each page what must stand there, no slip of the pen, and
// after a stop no number of a dose.
func TestOutsideWorksheets(t *testing.T) {
	dir := t.TempDir()
	for i, e := range paperExamples(t) {
		for _, paper := range []Paper{A4, Letter} {
			b, err := PDF(e.ws, PDFOptions{Paper: paper, Case: e.data})
			if err != nil {
				t.Fatalf("%s: %v", e.name, err)
			}
			file := filepath.Join(dir, fmt.Sprintf("%d-%v.pdf", i, paper))
			if err := os.WriteFile(file, b, 0o644); err != nil {
				t.Fatal(err)
			}
			if out := outside(t, "qpdf", "--check", file); !strings.Contains(out, "No syntax or stream encoding errors") {
				t.Errorf("%s: %s", e.name, out)
			}
			text := outside(t, "pdftotext", "-layout", file, "-")
			pages := strings.Split(strings.TrimSuffix(text, "\f"), "\f")
			for k, page := range pages {
				for _, want := range []string{"DRAFT", "Not a prescription", "licensed veterinarian", "Local law", fmt.Sprintf("page %d of %d", k+1, len(pages)), shortened(caseWords(e.ws), headLetters), e.ws.Date, "record " + digestOf(t, e.ws)} {
					if !strings.Contains(page, want) {
						t.Errorf("%s on %v, page %d: no %q", e.name, paper, k+1, want)
					}
				}
			}
			if e.ws.Drafted == nil {
				for _, line := range stoppedLines(e.ws, strings.Split(text, "\n")) {
					t.Errorf("%s on %v: a dose after a stop: %s", e.name, paper, line)
				}
			} else {
				if order := oneLine(orderWords(e.ws)); !strings.Contains(oneLine(pages[0]), order) {
					t.Errorf("%s on %v: the first page has no %q", e.name, paper, order)
				}
			}
			// In the order in which it was drawn: laid out anew, a short number
			// in bold loses the space before its unit.
			drawn := outside(t, "pdftotext", "-raw", file, "-")
			for _, s := range penSlips {
				re := regexp.MustCompile(s.pattern)
				for _, line := range strings.Split(drawn, "\n") {
					if re.MatchString(line) {
						t.Errorf("%s on %v: %s: %s", e.name, paper, s.what, strings.TrimSpace(line))
					}
				}
			}
		}
	}
}

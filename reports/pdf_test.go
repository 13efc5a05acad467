package reports

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"tayra/dose"
)

// draftCase drafts a case of its text.
func draftCase(t testing.TB, name, text string) (*dose.Worksheet, []byte) {
	t.Helper()
	in, _, err := dose.ReadCase(name, []byte(text))
	if err != nil {
		t.Fatalf("%s: %v", name, err)
	}
	c, err := in.Check()
	if err != nil {
		t.Fatalf("%s: %v", name, err)
	}
	ws, err := dose.Draft(c)
	if err != nil {
		t.Fatalf("%s: %v", name, err)
	}
	return ws, []byte(text)
}

// exampleCases are the case files beside the tests.
func exampleCases(t testing.TB) map[string]string {
	t.Helper()
	files, err := filepath.Glob(filepath.Join("..", "testdata", "*.yaml"))
	if err != nil || len(files) == 0 {
		t.Fatalf("no example cases: %v", err)
	}
	out := map[string]string{}
	for _, f := range files {
		b, err := os.ReadFile(f)
		if err != nil {
			t.Fatal(err)
		}
		out[strings.TrimSuffix(filepath.Base(f), ".yaml")] = string(b)
	}
	return out
}

func TestPDFOfEveryExample(t *testing.T) {
	for name, text := range exampleCases(t) {
		ws, file := draftCase(t, name+".yaml", text)
		for _, paper := range []Paper{A4, Letter} {
			if _, err := PDF(ws, PDFOptions{Paper: paper, Case: file}); err != nil {
				t.Errorf("%s on %v: %v", name, paper, err)
			}
		}
	}
}

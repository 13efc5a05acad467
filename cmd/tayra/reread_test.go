package main

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"github.com/pdfcpu/pdfcpu/pkg/api"
	"github.com/pdfcpu/pdfcpu/pkg/pdfcpu/model"

	"tayra/dose"
	"tayra/reports"
)

// worksheetFile drafts the example case into a folder of its own.
func worksheetFile(t *testing.T) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "worksheet.pdf")
	var stderr bytes.Buffer
	if status := run([]string{"draft", "../../testdata/anteater.yaml", "--quiet", "--pdf", path}, nil, io.Discard, &stderr); status != exitDone {
		t.Fatalf("exit status %d: %s", status, &stderr)
	}
	return path
}

// withRecord replaces an attached file by another, as a program for PDFs does,
// and saves the document.
func withRecord(t *testing.T, path string, change func([]byte) []byte) string {
	t.Helper()
	api.DisableConfigDir()
	conf := model.NewDefaultConfiguration()
	dir := t.TempDir()
	b, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	files, err := api.ExtractAttachmentsRaw(bytes.NewReader(b), "", nil, conf)
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, f := range files {
		content, err := io.ReadAll(f)
		if err != nil {
			t.Fatal(err)
		}
		if f.FileName == "record.json" {
			content = change(content)
		}
		name := filepath.Join(dir, f.FileName)
		if err := os.WriteFile(name, content, 0o600); err != nil {
			t.Fatal(err)
		}
		names = append(names, name)
	}
	bare, whole := filepath.Join(dir, "bare.pdf"), filepath.Join(dir, "changed.pdf")
	if err := api.RemoveAttachmentsFile(path, bare, nil, conf); err != nil {
		t.Fatal(err)
	}
	if err := api.AddAttachmentsFile(bare, whole, names, false, conf); err != nil {
		t.Fatal(err)
	}
	return whole
}

func rereadRun(args ...string) (status int, stdout, stderr string) {
	var out, errs bytes.Buffer
	status = run(append([]string{"reread"}, args...), nil, &out, &errs)
	return status, out.String(), errs.String()
}

// One digit of the record, changed with another program, is found, and where.
func TestRereadOneDigit(t *testing.T) {
	drafted := regexp.MustCompile(`("drafted": \{[^}]*?"dose_per_kg": \[\s*)(\d)`)
	changed := withRecord(t, worksheetFile(t), func(b []byte) []byte {
		m := drafted.FindSubmatch(b)
		if m == nil {
			t.Fatal("no drafted dose in the record")
		}
		return drafted.ReplaceAll(b, fmt.Appendf(nil, "${1}%c", '0'+(m[2][0]-'0'+1)%10))
	})
	status, out, errs := rereadRun(changed)
	if status != exitFinding || errs != "" {
		t.Errorf("exit status %d: %s", status, errs)
	}
	for _, want := range []string{"DIFFERS", "    drafted.dose_per_kg[0]\n      was  9.1", "\n      now  8.1", "changed after it was written"} {
		if !strings.Contains(strings.Join(strings.Fields(out), " "), strings.Join(strings.Fields(want), " ")) {
			t.Errorf("%q is not in\n%s", want, out)
		}
	}
	if strings.Count(out, "was  ") != 1 {
		t.Errorf("more than one difference:\n%s", out)
	}
	status, out, _ = rereadRun(changed, "--json", "-")
	var record struct {
		Worksheets []struct {
			Verdict     string
			Differences []struct {
				Path     string
				Was, Now float64
			}
			Stated string `json:"stated_digest"`
			Digest string `json:"record_digest"`
		}
	}
	if err := json.Unmarshal([]byte(out), &record); err != nil || status != exitFinding || len(record.Worksheets) != 1 {
		t.Fatalf("%v, exit status %d\n%s", err, status, out)
	}
	w := record.Worksheets[0]
	if w.Verdict != "differs" || len(w.Differences) != 1 || w.Differences[0].Path != "drafted.dose_per_kg[0]" || w.Differences[0].Was-w.Differences[0].Now < 0.999 || w.Stated == w.Digest {
		t.Errorf("%+v", w)
	}
}

// A worksheet of another version, which states the digest of its own record,
// differs in nothing else: that is said, and is no finding.
func TestRereadOtherVersion(t *testing.T) {
	var record []byte
	changed := withRecord(t, worksheetFile(t), func(b []byte) []byte {
		record = regexp.MustCompile(`"version": "[^"]*"`).ReplaceAll(b, []byte(`"version": "0.0.1"`))
		return record
	})
	conf := model.NewDefaultConfiguration()
	bare, stated := filepath.Join(t.TempDir(), "bare.pdf"), filepath.Join(t.TempDir(), "old.pdf")
	if err := api.RemoveKeywordsFile(changed, bare, nil, conf); err != nil {
		t.Fatal(err)
	}
	if err := api.AddKeywordsFile(bare, stated, []string{"record " + reports.Digest(record)}, conf); err != nil {
		t.Fatal(err)
	}
	status, out, errs := rereadRun(stated)
	if status != exitDone || errs != "" {
		t.Errorf("exit status %d: %s", status, errs)
	}
	out = strings.Join(strings.Fields(out), " ")
	for _, want := range []string{"old.pdf: same results, another version (", "0.0.1 then, " + dose.Version + " now. The results are the same.", "The pages were not compared"} {
		if !strings.Contains(out, want) {
			t.Errorf("%q is not in %s", want, out)
		}
	}
	// Without the digest of its own, the record counts as changed.
	if status, out, _ := rereadRun(changed); status != exitFinding || !strings.Contains(out, "0.0.1") {
		t.Errorf("exit status %d\n%s", status, out)
	}
}

// What stands in a worksheet from elsewhere cannot act on the terminal.
func TestRereadHarmlessText(t *testing.T) {
	changed := withRecord(t, worksheetFile(t), func(b []byte) []byte {
		return bytes.Replace(b, []byte(`"prepared_by": "duty veterinarian"`), []byte("\"prepared_by\": \"a\\u001b[31m\u202eb\u009bc\""), 1)
	})
	status, out, _ := rereadRun(changed)
	if status != exitFinding || !strings.Contains(out, "prepared_by") {
		t.Errorf("exit status %d\n%s", status, out)
	}
	for _, r := range out {
		if r != '\n' && isControl(r) {
			t.Fatalf("%U in %q", r, out)
		}
	}
}

func TestRereadExcerpts(t *testing.T) {
	long := strings.Repeat("é", 100)
	for _, k := range [][4]string{
		{"8.14", "8.24", "8.14", "8.24"},
		{`"` + long + `a"`, `"` + long + `b"`, "…éééééééé" + `a"`, "…éééééééé" + `b"`},
		{`"a` + long + `"`, `"b"`, `"a` + strings.Repeat("é", 61) + "…", `"b"`},
		{"(not there)", "{" + long, "(not there)", "{" + strings.Repeat("é", 62) + "…"},
	} {
		if a, b := excerpts(k[0], k[1]); a != k[2] || b != k[3] {
			t.Errorf("%q, %q", a, b)
		}
	}
}

// A link to a folder is as good as the folder.
func TestRereadLinkedFolder(t *testing.T) {
	file := worksheetFile(t)
	link := filepath.Join(t.TempDir(), "link")
	if err := os.Symlink(filepath.Dir(file), link); err != nil {
		t.Fatal(err)
	}
	if status, out, errs := rereadRun(link); status != exitDone || !strings.Contains(out, "worksheet.pdf: same") {
		t.Errorf("exit status %d: %s%s", status, out, errs)
	}
}

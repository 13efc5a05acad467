//go:build outside

package reports

import (
	"bytes"
	"fmt"
	"image"
	_ "image/png"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

// These tests read the PDF with programs that share no code with the writer:
// qpdf and poppler's pdftotext, pdftoppm and pdfdetach. They fail where one is missing.

func outside(t *testing.T, name string, args ...string) string {
	t.Helper()
	var stdout, stderr bytes.Buffer
	cmd := exec.Command(name, args...)
	cmd.Stdout, cmd.Stderr = &stdout, &stderr
	if err := cmd.Run(); err != nil {
		t.Fatalf("%s: %v\n%s%s", name, err, stderr.String(), stdout.String())
	}
	if stderr.Len() > 0 {
		t.Errorf("%s complains: %s", name, stderr.String())
	}
	return stdout.String()
}

func samplePDF(t *testing.T, paper Paper) string {
	t.Helper()
	b, err := sampleDocument(t, paper).render(attachedProperties())
	if err != nil {
		t.Fatal(err)
	}
	file := filepath.Join(t.TempDir(), "sample.pdf")
	if err := os.WriteFile(file, b, 0o644); err != nil {
		t.Fatal(err)
	}
	return file
}

func TestOutsideQPDF(t *testing.T) {
	for _, paper := range []Paper{A4, Letter} {
		file := samplePDF(t, paper)
		if out := outside(t, "qpdf", "--check", file); !strings.Contains(out, "No syntax or stream encoding errors") {
			t.Errorf("%v: %s", paper, out)
		}
		if out := outside(t, "pdfdetach", "-list", file); !strings.Contains(out, "1: record.json") || !strings.Contains(out, "2: case.yaml") {
			t.Errorf("%v: attachments: %s", paper, out)
		}
	}
	b, err := plotFile(samplePlot(t), 400, 250, "pdf", sampleProperties)
	if err != nil {
		t.Fatal(err)
	}
	file := filepath.Join(t.TempDir(), "plot.pdf")
	if err := os.WriteFile(file, b, 0o644); err != nil {
		t.Fatal(err)
	}
	outside(t, "qpdf", "--check", file)
}

func TestOutsideText(t *testing.T) {
	file := samplePDF(t, A4)
	out := outside(t, "pdftotext", "-layout", file, "-")
	pages := strings.Split(strings.TrimSuffix(out, "\f"), "\f")
	if len(pages) != 5 {
		t.Fatalf("%d pages", len(pages))
	}
	for i, page := range pages {
		for _, want := range []string{fmt.Sprintf("page %d of 5", i+1), "LW-0412", "Draft; not a prescription."} {
			if !strings.Contains(page, want) {
				t.Errorf("page %d lacks %q", i+1, want)
			}
		}
	}
	for _, want := range []string{
		"every 12 hours", "8.14 mg/kg", "70 × M⁰·⁷⁵ kcal/day", "R = (M ÷ M₀)⁰·⁷⁵", "concentration (mg/L), α phase", "drafted, δ",
		"1,420 mg", "Licence number", "measured at 30 °C",
	} {
		if !strings.Contains(out, want) {
			t.Errorf("the text lacks %q", want)
		}
	}
	// The head of the long table stands on each of its pages.
	for i, page := range pages {
		if strings.Contains(page, " 9 h ") || strings.Contains(page, " 45 h ") {
			if n := strings.Count(page, "Concentration\n"); n == 0 {
				t.Errorf("page %d has rows of the table but not its head", i+1)
			}
		}
	}
}

// Printed, every page has ink inside the margins and none outside.
func TestOutsideInk(t *testing.T) {
	for _, paper := range []Paper{A4, Letter} {
		file := samplePDF(t, paper)
		dir := filepath.Dir(file)
		outside(t, "pdftoppm", "-r", "72", "-gray", "-png", file, filepath.Join(dir, "p"))
		files, err := filepath.Glob(filepath.Join(dir, "p-*.png"))
		if err != nil || len(files) != 5 {
			t.Fatalf("%v: %v, %v", paper, files, err)
		}
		for _, name := range files {
			f, err := os.Open(name)
			if err != nil {
				t.Fatal(err)
			}
			img, _, err := image.Decode(f)
			f.Close()
			if err != nil {
				t.Fatal(err)
			}
			w, h := paper.Size()
			left, top := marginX, marginY
			inside := image.Rect(int(left)-2, int(top)-2, int(w-left)+3, int(h-top)+3)
			ink, out := 0, 0
			for y := range img.Bounds().Dy() {
				for x := range img.Bounds().Dx() {
					if r, _, _, _ := img.At(x, y).RGBA(); r < 0x8000 {
						ink++
						if !image.Pt(x, y).In(inside) {
							out++
						}
					}
				}
			}
			if ink < 2000 || out > 0 {
				t.Errorf("%v, %s: %d dark points, %d of them outside the margins", paper, filepath.Base(name), ink, out)
			}
		}
	}
}

// Every letter of the fonts, set on paper, can be found and copied again. (That
// each has a shape of its own is tested beside the fonts: extraction would not
// show it.)
func TestOutsideEveryLetterReadsBack(t *testing.T) {
	d := newDocument(A4)
	var all strings.Builder
	n := 0
	for r := rune(0x21); r < 0x10000; r++ {
		if text, err := CheckText("f", string(r)); err == nil && strings.TrimSpace(text) == string(r) {
			fmt.Fprintf(&all, "%c ", r)
			n++
		}
	}
	d.body.para(plain(all.String()))
	file := filepath.Join(t.TempDir(), "letters.pdf")
	if err := os.WriteFile(file, render(t, d), 0o644); err != nil {
		t.Fatal(err)
	}
	got := map[rune]bool{}
	for _, r := range outside(t, "pdftotext", file, "-") {
		got[r] = true
	}
	missing := 0
	for _, r := range strings.ReplaceAll(all.String(), " ", "") {
		if !got[r] {
			missing++
		}
	}
	// pdftotext writes ligatures out as letters.
	if n < 2100 || missing > 10 {
		t.Errorf("%d of %d letters cannot be read back", missing, n)
	}
}

//go:build outside

package reports

import (
	"image"
	"image/png"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"testing"
)

// The first page, drawn by poppler, looks as it did when it was last looked at:
// text extraction alone would read a letter that is drawn as a box. The stored
// picture is drawn anew by `go test -tags outside ./reports -run Picture
// -update`; look at it before it is committed. Another version of poppler may
// smooth edges otherwise, hence the tolerance.
func TestOutsidePicture(t *testing.T) {
	const stored = "../testdata/golden/anteater-1.png"
	dir := t.TempDir()
	pdf, err := PDF(exampleNamed(t, "anteater"), PDFOptions{})
	if err != nil {
		t.Fatal(err)
	}
	file := filepath.Join(dir, "sheet.pdf")
	if err := os.WriteFile(file, pdf, 0o666); err != nil {
		t.Fatal(err)
	}
	base := filepath.Join(dir, "page")
	if msg, err := exec.Command("pdftoppm", "-png", "-gray", "-r", "60", "-f", "1", "-l", "1", "-singlefile", file, base).CombinedOutput(); err != nil {
		t.Fatalf("pdftoppm (Debian: poppler-utils): %v\n%s", err, msg)
	}
	drawn, err := os.ReadFile(base + ".png")
	if err != nil {
		t.Fatal(err)
	}
	if *update {
		if err := os.WriteFile(stored, drawn, 0o666); err != nil {
			t.Fatal(err)
		}
	}
	got, want := grayOf(t, base+".png"), grayOf(t, stored)
	if got.Bounds() != want.Bounds() {
		t.Fatalf("a page of %v, stored %v", got.Bounds(), want.Bounds())
	}
	// Blocks of 8 by 8 points: a letter that is lost or becomes a box changes
	// the ink of its block, smoothing does not.
	const block, tolerance = 8, 24
	for y := 0; y+block <= got.Bounds().Dy(); y += block {
		for x := 0; x+block <= got.Bounds().Dx(); x += block {
			if d := math.Abs(ink8(got, x, y, block) - ink8(want, x, y, block)); d > tolerance {
				t.Fatalf("the page differs at %d, %d by %.0f of 255", x, y, d)
			}
		}
	}
}

func grayOf(t *testing.T, file string) image.Image {
	t.Helper()
	f, err := os.Open(file)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	img, err := png.Decode(f)
	if err != nil {
		t.Fatal(err)
	}
	return img
}

// ink8 is the mean blackness of a block, 0 to 255.
func ink8(img image.Image, x0, y0, n int) float64 {
	var sum float64
	for y := y0; y < y0+n; y++ {
		for x := x0; x < x0+n; x++ {
			v, _, _, _ := img.At(x, y).RGBA()
			sum += 255 - float64(v>>8)
		}
	}
	return sum / float64(n*n)
}

// Command cutfont cuts DejaVu Sans down to the letters that the worksheets
// print and writes the two small fonts with their licence. It is run by
// go generate in package reports; its output is committed.
//
// The whole fonts would cost every PDF twice the time: the PDF library parses
// a font anew for each document.
package main

import (
	"bytes"
	"flag"
	"fmt"
	"log"
	"os"
	"os/exec"
	"path/filepath"
	"strings"

	"github.com/go-fonts/dejavu/dejavusans"
	"github.com/go-fonts/dejavu/dejavusansbold"
	"github.com/jung-kurt/gofpdf"
	"golang.org/x/image/font/sfnt"

	"tayra/reports/internal/alphabet"
)

func main() {
	log.SetFlags(0)
	log.SetPrefix("cutfont: ")
	dir := flag.String("dir", "fonts", "folder to write to")
	flag.Parse()
	if err := cut(*dir); err != nil {
		log.Fatal(err)
	}
}

func cut(dir string) error {
	fonts := []struct {
		name string
		ttf  []byte
	}{
		{"DejaVuSans.ttf", dejavusans.TTF},
		{"DejaVuSans-Bold.ttf", dejavusansbold.TTF},
	}
	// Only letters that both weights draw are kept: a text that passes the
	// check once can then be set in either.
	keep := alphabet.All()
	for _, f := range fonts {
		parsed, err := sfnt.Parse(f.ttf)
		if err != nil {
			return fmt.Errorf("%s: %w", f.name, err)
		}
		both := keep[:0:0]
		for _, r := range keep {
			glyph, err := parsed.GlyphIndex(nil, r)
			if err != nil {
				return fmt.Errorf("%s: U+%04X: %w", f.name, r, err)
			}
			if glyph != 0 {
				both = append(both, r)
			}
		}
		keep = both
	}
	for _, f := range fonts {
		// UTF8CutFont writes into the bytes that it is given.
		small := gofpdf.UTF8CutFont(bytes.Clone(f.ttf), string(keep))
		if len(small) == 0 {
			return fmt.Errorf("%s: nothing was cut", f.name)
		}
		if err := os.WriteFile(filepath.Join(dir, f.name), small, 0o644); err != nil {
			return err
		}
	}
	fmt.Printf("%d letters\n", len(keep))
	return licence(dir)
}

// licence copies the fonts' licence from the module that brings them.
func licence(dir string) error {
	out, err := exec.Command("go", "list", "-m", "-f", "{{.Dir}}", "github.com/go-fonts/dejavu").Output()
	if err != nil {
		return fmt.Errorf("finding the font module: %w", err)
	}
	text, err := os.ReadFile(filepath.Join(strings.TrimSpace(string(out)), "LICENSE-DejaVu"))
	if err != nil {
		return err
	}
	return os.WriteFile(filepath.Join(dir, "LICENSE-DejaVu.txt"), text, 0o644)
}

//go:build outside

package page

import (
	"context"
	"encoding/json"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"github.com/chromedp/chromedp"
)

// axe holds the page as it stands against the rules of WCAG 2.0, 2.1 and 2.2 at
// levels A and AA, and the rules of good practice.
func (b *tab) axe(state string) {
	b.Helper()
	script := string(example(b, "axe/axe.min.js"))
	b.do(func(ctx context.Context, t *chromedp.Target) (chromedp.Void, error) {
		return chromedp.EvaluateAsDevTools[chromedp.Void](script)(ctx, t)
	})
	type violation struct {
		ID, Help string
		Nodes    []struct {
			HTML           string
			FailureSummary string
		}
	}
	raw := eval[string](b, `axe.run(document, {runOnly: ["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa", "best-practice"], rules: {"target-size": {enabled: true}}})
		.then((r) => JSON.stringify({violations: r.violations, passes: r.passes.length}))`)
	var found struct {
		Violations []violation
		Passes     int
	}
	if err := json.Unmarshal([]byte(raw), &found); err != nil {
		b.Fatal(err)
	}
	if found.Passes < 20 {
		b.Errorf("%s: only %d rules were tried", state, found.Passes)
	}
	for _, v := range found.Violations {
		for _, n := range v.Nodes {
			b.Errorf("%s, %s: %s (%s)\n%.300s\n%s", state, b.screen, v.Help, v.ID, n.HTML, n.FailureSummary)
		}
	}
}

// fits says that nothing makes the page wider than its window.
func (b *tab) fits(state string) {
	b.Helper()
	if wide := eval[[]int](b, "[document.documentElement.scrollWidth, innerWidth]"); wide[0] > wide[1] {
		b.Errorf("%s, %s: the page is %d wide", state, b.screen, wide[0])
	}
}

// Every state of the page in both colour schemes, wide and narrow: no violation
// of WCAG 2.2 AA, nothing wider than the window.
func TestAccessibleInEveryState(t *testing.T) {
	for _, s := range []screen{desk, phone, desk.inTheDark(), phone.inTheDark()} {
		t.Run(s.String(), func(t *testing.T) {
			b := newTab(t, s)
			state := func(name string) {
				b.axe(name)
				b.fits(name)
				b.picture(name)
			}
			state("empty")
			b.drop("check.yaml", example(t, "check.yaml"))
			b.until(`document.querySelector("#rest figure")`)
			eval[bool](b, `{ for (const d of document.querySelectorAll("details")) d.open = true; true }`)
			state("check")
			b.drop("severalmodels.yaml", example(t, "severalmodels.yaml"))
			b.until(`document.getElementById("s-several")`)
			state("several")
			b.drop("python.yaml", example(t, "python.yaml"))
			b.until(`document.getElementById("s-temperature")`)
			state("ectotherm")
			b.drop("override.yaml", example(t, "override.yaml"))
			b.until(`document.querySelector("#top .order")?.textContent.includes("demoxacin")`)
			state("overridden")
			b.drop("stop.yaml", example(t, "stop.yaml"))
			b.until(`document.querySelector("#top .stopped")`)
			state("stopped")
			b.typeIn("patient.mass", "0.98")
			b.until(`document.querySelector("[aria-invalid]")`)
			b.settled()
			state("faulty")
			b.do(chromedp.Focus(chromedp.ID("f-models-0-species")))
			eval[bool](b, `(document.activeElement.select(), true)`)
			b.do(chromedp.KeyEvent("bear"))
			b.until(`document.getElementById("f-models-0-species").getAttribute("aria-expanded") === "true"`)
			state("choosing")
			b.drop("animals.csv", example(t, "batch/animals.csv"))
			b.until(`!document.getElementById("list-keep").hidden`)
			state("list")
		})
	}
}

// At 200 % on a common screen, and at 400 %, nothing is lost and nothing has to
// be pushed sideways.
func TestZoom(t *testing.T) {
	for _, width := range []int64{640, 320} {
		b := newTab(t, screen{width: width, height: 450})
		b.drop("check.yaml", example(t, "check.yaml"))
		b.until(`document.querySelector("#rest figure")`)
		b.fits("zoomed")
		b.picture(fmt.Sprintf("zoomed-%d", width))
		for _, cut := range eval[[]string](b, `[...document.querySelectorAll("main *, .batch *")].filter((el) => {
			const style = getComputedStyle(el), box = el.getBoundingClientRect();
			return !el.closest(".wide, .unseen, .combo ul, svg") && box.width > 0 && (box.right > innerWidth + 1 || style.overflowX === "hidden" && el.scrollWidth > el.clientWidth + 1);
		}).map((el) => el.outerHTML.slice(0, 100))`) {
			t.Errorf("at %d: cut off: %s", width, cut)
		}
	}
}

// printed prints the page and gives its text.
func (b *tab) printed(name string) string {
	b.Helper()
	pdf, err := chromedp.Run(b.ctx, chromedp.PrintToPDF(chromedp.PDFPreferCSSPageSize()))
	if err != nil {
		b.Fatal(err)
	}
	path := filepath.Join(b.artefacts(), "page-printed-"+name+".pdf")
	if err := os.WriteFile(path, pdf, 0o666); err != nil {
		b.Fatal(err)
	}
	text, err := exec.Command("pdftotext", "-layout", path, "-").Output()
	if err != nil {
		b.Fatal(err)
	}
	return string(text)
}

// Printed, the page is a worksheet: the draft with its ranges, the cautions, the
// place to sign, and on every page what it is; no form, no buttons.
func TestPrinted(t *testing.T) {
	b := newTab(t, desk)
	b.drop("severalmodels.yaml", example(t, "severalmodels.yaml"))
	b.until(`document.getElementById("s-several")`)
	b.printed("several")
	b.drop("override.yaml", example(t, "override.yaml"))
	b.until(`document.querySelector("#top .order")?.textContent.includes("demoxacin")`)
	text := b.printed("overridden")
	pages := strings.Split(strings.TrimSuffix(text, "\f"), "\f")
	for i, page := range pages {
		for _, s := range []string{"DRAFT for a licensed veterinarian's judgement.", "Not a prescription.", "Local law", "case LW-0444, 2026-12-09, Sol, blue-and-yellow macaw, 980 g", "Overridden: narrow-margin: serum levels", "Overridden: cross-class:", fmt.Sprintf("%d of %d", i+1, len(pages))} {
			if !strings.Contains(page, s) {
				t.Errorf("page %d of %d does not say %q:\n%s", i+1, len(pages), s, page)
			}
		}
		for _, s := range []string{"Choose File", "Record (JSON)", "Add a model", "Empty the form"} {
			if strings.Contains(page, s) {
				t.Errorf("page %d shows the form: %q", i+1, s)
			}
		}
	}
	for _, s := range []string{"demoxacin", "nine times in ten", "Worst caution: STOP, overridden", "Cautions"} {
		if !strings.Contains(pages[0], s) {
			t.Errorf("the first page does not say %q:\n%s", s, pages[0])
		}
	}
	for _, s := range []string{"Signature", "Licence number", "Steps"} {
		if !strings.Contains(text, s) {
			t.Errorf("not printed: %q", s)
		}
	}
}

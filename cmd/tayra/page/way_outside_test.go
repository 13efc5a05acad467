//go:build outside

package page

import (
	"bytes"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"

	"tayra/reports"
)

// tayra builds the program and runs it.
func tayra(t *testing.T, args ...string) []byte {
	t.Helper()
	program := filepath.Join(t.TempDir(), "tayra")
	if out, err := exec.Command("go", "build", "-o", program, "tayra/cmd/tayra").CombinedOutput(); err != nil {
		t.Fatalf("%v: %s", err, out)
	}
	var stderr bytes.Buffer
	run := exec.Command(program, args...)
	run.Stderr = &stderr
	out, err := run.Output()
	if err != nil {
		t.Fatalf("tayra %s: %v: %s", strings.Join(args, " "), err, &stderr)
	}
	return out
}

// The whole way of somebody who has a patient and a dog's dose: from the empty
// page to the worksheet, the case file and the record; the command makes the
// same record of them.
func TestFromTheEmptyPageToTheWorksheet(t *testing.T) {
	b := newTab(t, desk)
	b.shows("#top", "No draft", "Still to fill in", "Body mass")
	b.hides("#top", "Wrong")
	b.fill(pair{"date", "2026-11-30"}, pair{"case", "LW-0412"}, pair{"prepared_by", "duty veterinarian"},
		pair{"patient.name", "Marisol"}, pair{"patient.mass", "41 kg"},
		pair{"drug.name", "examplicillin"}, pair{"drug.class", "penicillin"},
		pair{"models[0].species", "dog"}, pair{"models[0].mass", "18 kg"}, pair{"models[0].dose", "10 mg/kg"},
		pair{"models[0].interval", "q12h"}, pair{"models[0].route", "SC"}, pair{"models[0].source", "practice protocol 7, invented for this example"})
	b.shows("#top", "No draft", "Animal")

	// The animal is found while its name is typed.
	b.do(chromedp.Focus(chromedp.ID("f-patient-species")), chromedp.KeyEvent("giant ant"))
	b.until(`document.querySelectorAll("#l-f-patient-species [role=option]").length > 0`)
	b.shows("#l-f-patient-species", "giant anteater", "Myrmecophaga tridactyla, Pilosa, Myrmecophagidae")
	b.picture("animal")
	b.do(chromedp.Click(chromedp.CSS("#l-f-patient-species [role=option]")))
	b.until(`document.getElementById("n-f-patient-species").textContent`)
	b.shows("#n-f-patient-species", "order Pilosa, family Myrmecophagidae", "adults weigh 18 to 60 kg")
	b.until(`document.querySelector("#top .order")`)

	b.choose("drug.elimination", "renal")
	b.do(chromedp.Click(chromedp.CSS("#g-4 ~ [data-list] details.more > summary")))
	b.fill(pair{"models[0].half_life", "1.3 h"}, pair{"models[0].volume", "0.3 L/kg"})
	b.do(chromedp.Click("//summary[contains(., 'Product and device')]"))
	b.fill(pair{"product.strength", "50 mg/mL"}, pair{"product.step", "0.1 mL"}, pair{"product.days", "7"})
	b.until(`document.querySelector("#rest figure")`)
	b.shows("#top", "Marisol, giant anteater", "examplicillin 334 mg SC every 12 hours (q12h)", "6.7 mL of 50 mg/mL", "nine times in ten", "1.04 to 63.6 mg/kg", "Worst caution")
	b.shows("#rest", "Cautions", "The plans side by side", "If the basis were another", "Concentrations at steady state", "Steps", "Sources")
	b.until(`document.getElementById("say").textContent.startsWith("The draft is there. Worst caution: WARN.")`)
	b.hides("#say", "mg")
	b.picture("draft")

	name, pdf := b.downloaded("[data-get='/worksheet/']")
	if name != "worksheet-LW-0412.pdf" {
		t.Errorf("the worksheet is called %s", name)
	}
	_, file := b.downloaded("[data-get='/case']")
	_, record := b.downloaded("[data-get='/record']")
	folder := t.TempDir()
	onDisk := filepath.Join(folder, "case.yaml")
	if err := os.WriteFile(onDisk, file, 0o666); err != nil {
		t.Fatal(err)
	}
	command := tayra(t, "draft", onDisk, "--json", "-")
	if !bytes.Equal(record, command) {
		t.Errorf("the command makes another record of the case file:\n%s", command)
	}
	attached, err := reports.ReadWorksheetPDF(pdf)
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(attached.Record, command) || !bytes.Equal(attached.Case, file) {
		t.Error("the worksheet carries another record or case")
	}
	if here := eval[string](b, "location.href"); here != b.address {
		t.Errorf("the address bar says %s", here)
	}
}

func TestAStopAsksForItsReason(t *testing.T) {
	b := newTab(t, desk)
	b.drop("stop.yaml", example(t, "stop.yaml"))
	b.until(`document.querySelector("#top .stopped")`)
	b.shows("#top", "STOP: no dose is drafted", "demoxacin: no dose", "narrow")
	b.hides("#result", "mg PO")
	b.shows("#overrides", "Reason for going on past narrow-margin", "Reason for going on past cross-class")
	b.picture("stop")

	b.typeIn("overrides.narrow-margin", "levels")
	b.until(`document.getElementById("e-f-overrides-narrow-margin").textContent.includes("too short")`)
	b.settled()
	b.hides("#result", "mg PO", "STOP: no dose is drafted")
	b.shows("#overrides", "Reason for going on past cross-class") // it is still to be written
	b.typeIn("overrides.narrow-margin", "serum levels will be measured after the second dose")
	b.typeIn("overrides.cross-class", "no dose in any bird was found, and the infection will not wait")
	b.until(`document.querySelector("#top .order")?.textContent.includes("PO")`)
	b.shows("#top", "Worst caution: STOP, overridden with a written reason")
	b.shows("#rest", "Overridden: narrow-margin: serum levels will be measured after the second dose")
	b.shows("#overrides", "narrow-margin", "cross-class")
	b.picture("overridden")
	_, file := b.downloaded("[data-get='/case']")
	if !strings.Contains(string(file), "narrow-margin: serum levels") {
		t.Errorf("the reason is not in the case file:\n%s", file)
	}

	// A reason without its stop means nothing, and says so beside its field.
	b.choose("drug.margin", "wide")
	b.until(`document.getElementById("e-f-overrides-narrow-margin")?.textContent.includes("no stop of this name is raised")`)
	b.typeIn("overrides.narrow-margin", " ")
	b.typeIn("overrides.cross-class", " ")
	b.until(`!document.getElementById("f-overrides-narrow-margin")`)
}

func TestWrongInputStandsBesideItsField(t *testing.T) {
	b := newTab(t, phone)
	b.do(clickID("example"))
	b.until(`document.querySelector("#top .order")`)
	for _, tt := range []struct{ path, text, says string }{
		{"patient.mass", "41", `"41" has no unit`},
		{"patient.mass", "4,2 kg", ""},
		{"patient.species", "giant antbear", "no animal called"},
		{"models[0].interval", "q12-24h", ""},
		{"models[0].half_life", "soon", ""},
		{"date", "30.11.2026", "is not a date"},
	} {
		before := eval[string](b, fmt.Sprintf("document.getElementById(%q).value", idOf(tt.path)))
		b.typeIn(tt.path, tt.text)
		id := idOf(tt.path)
		b.until(fmt.Sprintf(`document.getElementById(%q).getAttribute("aria-invalid") === "true"`, id))
		beside := b.text("#e-" + id)
		if beside == "" || !strings.Contains(beside, tt.says) {
			t.Errorf("%s: %q beside the field", tt.path, beside)
		}
		if !eval[bool](b, fmt.Sprintf(`document.getElementById(%q).getAttribute("aria-describedby").split(" ").includes("e-" + %q)`, id, id)) {
			t.Errorf("%s: the fault is not the field's description", tt.path)
		}
		b.shows("#top", "No draft", "Wrong:")
		b.hides("#result", "334 mg", "8.14")
		b.until(`document.getElementById("say").textContent.startsWith("No draft: 1 field is wrong.")`)
		b.typeIn(tt.path, before)
		b.until(fmt.Sprintf(`!document.getElementById(%q).hasAttribute("aria-invalid") && document.querySelector("#top .order")`, id))
		if s := b.text("#e-" + id); s != "" {
			t.Errorf("%s: %q stays beside the field", tt.path, s)
		}
	}
	b.typeIn("patient.mass", "41")
	b.until(`document.querySelector("#top .none")`)
	b.picture("wrong")
	// The list leads to the field.
	b.do(chromedp.Click(chromedp.CSS("#top a[href='#f-patient-mass']")))
	b.until(`document.activeElement.id === "f-patient-mass"`)
	if here := eval[string](b, "location.href"); here != b.address {
		t.Errorf("the address bar says %s", here)
	}
}

// The moment that a field changes, the worksheet that was drafted from other
// inputs is out of the document; an answer to older inputs never comes back in.
func TestAStaleWorksheetIsNeverSeen(t *testing.T) {
	b := newTab(t, desk)
	b.do(clickID("example"))
	b.until(`document.querySelector("#top .order")`)
	for _, path := range []string{"patient.mass", "patient.stage", "models[0].dose", "case"} {
		change := fmt.Sprintf(`{
			const el = document.getElementById(%q);
			el.value = el.tagName === "SELECT" ? el.options[1].value : el.value + " ";
			el.dispatchEvent(new Event("input", {bubbles: true}));
			[document.getElementById("top").childNodes.length, document.getElementById("rest").childNodes.length, document.getElementById("stale").hidden].join() }`, idOf(path))
		if got := eval[string](b, change); got != "0,0,false" {
			t.Errorf("%s changed, and the old worksheet is still there: %s", path, got)
		}
		b.settled()
	}
	// Answers that overtake one another: the first is held back until the second
	// is there.
	eval[bool](b, `{
		const ask = window.fetch; let n = 0;
		window.fetch = (path, options) => {
			if (path !== "/draft" || n++) return ask(path, options);
			delete options.signal;
			return ask(path, options).then((r) => new Promise((go) => { window.letGo = () => go(r); }));
		}; true }`)
	b.typeIn("patient.mass", "20 kg")
	b.until(`window.letGo`)
	b.typeIn("patient.mass", "30 kg")
	b.settled()
	b.shows("#top", "30 kg")
	eval[bool](b, `(window.letGo(), true)`)
	b.do(chromedp.Sleep(300 * time.Millisecond))
	b.shows("#top", "30 kg")
	b.hides("#top", "20 kg")
}

// press sends one key.
func (b *tab) press(key string, modifiers ...chromedp.Modifier) {
	b.Helper()
	b.do(chromedp.KeyEvent(key, chromedp.KeyModifiers(modifiers...)))
}

// tabTo goes to an element by the tabulator key alone, and sees that each place
// on the way shows the focus.
func (b *tab) tabTo(id string, modifiers ...chromedp.Modifier) {
	b.Helper()
	for range 150 {
		at := eval[string](b, `{
			const el = document.activeElement, style = getComputedStyle(el), box = el.getBoundingClientRect();
			const seen = el === document.body || (parseFloat(style.outlineWidth) >= 2 && style.outlineStyle !== "none");
			const inside = el === document.body || (box.bottom > 0 && box.top < innerHeight - document.getElementById("say").offsetHeight + 1);
			(el.id || el.dataset.get || el.tagName) + (seen ? "" : " UNSEEN") + (inside ? "" : " HIDDEN " + [box.top, box.bottom, innerHeight, scrollY]) }`)
		if strings.Contains(at, "UNSEEN") || strings.Contains(at, "HIDDEN") {
			b.Errorf("the focus is not seen at %s", at)
		}
		if strings.Fields(at)[0] == id {
			return
		}
		b.press(kb.Tab, modifiers...)
	}
	b.Fatalf("%s cannot be reached by the tabulator", id)
}

// A new user with a keyboard alone, at a narrow screen: fills the form in,
// reaches the draft, meets a stop, writes the reason, saves the worksheet.
func TestByKeyboardAlone(t *testing.T) {
	b := newTab(t, phone)
	write := func(path, text string) {
		t.Helper()
		b.tabTo(idOf(path))
		b.do(chromedp.KeyEvent(text))
	}
	b.press(kb.Tab)
	if got := eval[string](b, "document.activeElement.className"); got != "skip" {
		t.Errorf("the first stop is %q, not the way past the form", got)
	}
	write("case", "LW-0444")
	b.tabTo(idOf("date"))
	b.press("a", chromedp.ModifierCtrl)
	b.do(chromedp.KeyEvent("2026-12-09"))
	b.tabTo(idOf("patient.species"))
	b.do(chromedp.KeyEvent("blue-and-yellow"))
	b.until(`document.getElementById("f-patient-species").getAttribute("aria-expanded") === "true"`)
	b.press(kb.ArrowDown)
	if eval[string](b, `document.getElementById(document.activeElement.getAttribute("aria-activedescendant"))?.getAttribute("aria-selected") || ""`) != "true" {
		t.Error("the arrow key chooses nothing")
	}
	b.picture("keyboard-animal")
	b.press(kb.Enter)
	b.until(`document.getElementById("f-patient-species").value.includes("macaw") && document.getElementById("f-patient-species").getAttribute("aria-expanded") === "false"`)
	write("patient.mass", "0.98 kg")
	write("drug.name", "demoxacin")
	b.tabTo(idOf("drug.margin"))
	b.do(chromedp.KeyEvent("narrow")) // a list of words is chosen from by its letters
	write("models[0].species", "dog")
	b.press(kb.Escape)
	write("models[0].mass", "20 kg")
	write("models[0].dose", "5 mg/kg")
	write("models[0].interval", "q24h")
	write("models[0].route", "PO")
	write("models[0].source", "practice protocol 11, invented for this example")
	b.until(`document.querySelector("#top .stopped")`)
	write("overrides.cross-class", "no dose in any bird was found, and the infection will not wait")
	b.until(`document.activeElement.id === "f-overrides-cross-class"`) // the stop goes, the focus stays
	write("overrides.narrow-margin", "serum levels will be measured after the second dose")
	b.until(`document.querySelector("#top .order")?.textContent.includes("demoxacin")`)
	if got := eval[string](b, "document.activeElement.id"); got != "f-overrides-narrow-margin" {
		t.Errorf("the focus has gone to %q", got)
	}
	b.tabTo("/worksheet/", chromedp.ModifierShift)
	b.picture("keyboard-keep")
	b.press(kb.Enter)
	if name := <-b.arrived; name != "worksheet-LW-0444.pdf" {
		t.Errorf("saved %s", name)
	}
	b.until(`document.getElementById("say").textContent === "Saved as worksheet-LW-0444.pdf."`)

	// A second model, and away with it: the focus goes along.
	add := "document.querySelector('[data-list=models] [data-add]')"
	eval[bool](b, "("+add+".focus(), true)")
	b.press(kb.Enter)
	b.until(`document.activeElement.id === "f-models-1-species"`)
	b.do(chromedp.KeyEvent("cat"))
	b.press(kb.Escape)
	eval[bool](b, "(document.querySelectorAll('[data-list=models] [data-remove]')[0].focus(), true)")
	b.press(kb.Enter)
	b.until(`document.getElementById("f-models-0-species").value === "cat" && !document.getElementById("f-models-1-species")`)
	if got := eval[string](b, "document.activeElement.tagName"); got != "LEGEND" {
		t.Errorf("after a removal the focus is at %s", got)
	}
}

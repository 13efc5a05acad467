//go:build outside

package page

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/chromedp/chromedp"
)

// A file that is dropped or chosen fills the form in: a case file, a record, an
// earlier worksheet; one that is wrong changes nothing and says why.
func TestFilesFillTheFormIn(t *testing.T) {
	b := newTab(t, desk)
	b.drop("severalmodels.yaml", example(t, "severalmodels.yaml"))
	b.until(`document.getElementById("s-several")`)
	_, pdf := b.downloaded("[data-get='/worksheet/']")
	_, record := b.downloaded("[data-get='/record']")
	b.do(clickID("clear"))
	b.until(`document.getElementById("f-patient-species").value === ""`)
	b.settled()
	b.shows("#top", "Still to fill in")
	if eval[int](b, `document.querySelectorAll("[data-list=models] > [data-item]").length`) != 1 {
		t.Error("emptied, the form still has several models")
	}
	b.hides("#result", "mg/kg every")

	for name, data := range map[string][]byte{"worksheet.pdf": pdf, "record.json": record} {
		b.drop(name, data)
		b.until(`document.getElementById("open-notes").textContent.startsWith("The case of ` + name + ` is filled in")`)
		b.settled()
		if got := eval[string](b, `["f-models-2-species", "f-models-2-dose", "f-published-0-species", "f-date"].map((id) => document.getElementById(id).value).join()`); got != "sheep,7-9 mg/kg,southern tamandua,2026-11-30" {
			t.Errorf("%s: %s", name, got)
		}
		_, again := b.downloaded("[data-get='/record']")
		if !bytes.Equal(again, record) {
			t.Errorf("%s: the record is another", name)
		}
	}

	b.drop("alias.yaml", example(t, filepath.Join("hostile", "alias.yaml")))
	b.until(`document.activeElement.id === "open-notes"`)
	b.shows("#open-notes", "alias.yaml was not read.", "alias.yaml:5:12", "refers to an anchor")
	b.until(`document.getElementById("say").textContent === "alias.yaml was not read."`)
	if got := eval[string](b, `document.getElementById("f-models-2-species").value`); got != "sheep" {
		t.Errorf("a file that was refused changed the form: %q", got)
	}

	// Words that the form does not offer are shown, and refused in the same words
	// as by the command.
	odd := strings.Replace(strings.Replace(string(example(t, "anteater.yaml")), "stage: adult", "stage: teenage", 1), "[dehydrated]", "[thirsty, renal]", 1)
	b.drop("odd.yaml", []byte(odd))
	b.until(`document.getElementById("f-patient-stage").getAttribute("aria-invalid") === "true"`)
	b.shows("#e-f-patient-stage", `"teenage" is none of the words known here`)
	b.shows("#e-f-patient-condition", `"thirsty" is none of the words known here`)
	b.do(clickID("clear"))
	b.settled()
	b.hides("#f-patient-condition", "thirsty")
	if eval[bool](b, `[...document.getElementById("f-patient-stage").options].some((o) => o.value === "teenage")`) {
		t.Error("a word of the last case is still offered")
	}

	// Chosen by its button instead of dropped.
	path := filepath.Join(t.TempDir(), "stop.yaml")
	if err := os.WriteFile(path, example(t, "stop.yaml"), 0o666); err != nil {
		t.Fatal(err)
	}
	b.do(chromedp.SetUploadFiles(chromedp.ID("open"), []string{path}))
	b.until(`document.querySelector("#top .stopped")`)
}

func TestAListIsWorkedOut(t *testing.T) {
	b := newTab(t, desk)
	b.typeIn("date", "2026-11-30")
	b.drop("animals.csv", example(t, "batch/animals.csv"))
	b.until(`!document.getElementById("list-keep").hidden`)
	b.shows("#list-result", "10 rows: 7 drafted, 1 stopped, 2 failed.", "LW-0501", "1.04 to 63.6 mg/kg", "STOP same-species", "Wrong:")
	name, table := b.downloaded("#list-table")
	if name != "animals-drafted.csv" || !bytes.Equal(table, example(t, "batch/drafted.csv")) {
		t.Errorf("%s is not the command's table:\n%s", name, table)
	}
	name, sheets := b.downloaded("#list-sheets")
	if name != "animals-worksheets.pdf" || !bytes.HasPrefix(sheets, []byte("%PDF-")) {
		t.Errorf("%s, %d bytes", name, len(sheets))
	}
	b.typeIn("date", "2026-12-24") // of another day
	if !eval[bool](b, `document.getElementById("list-keep").hidden`) || strings.Contains(b.text("#list-result"), "mg/kg") {
		t.Error("a list's result stands beside another date")
	}
	b.typeIn("date", "soon")
	b.drop("animals.csv", example(t, "batch/animals.csv"))
	b.until(`document.getElementById("say").textContent.includes("is not a date")`)
	if !eval[bool](b, `document.getElementById("list-keep").hidden && !document.getElementById("list-result").childElementCount`) {
		t.Error("the last list's result stands beside a list that failed")
	}

	// A long list shows how far it is and can be stopped.
	row := "giant anteater,41 kg,examplicillin,dog,18 kg,10 mg/kg,q12h,invented\n"
	eval[bool](b, `{
		const data = new DataTransfer();
		data.items.add(new File(["species,mass,drug,model_species,model_mass,dose,interval,source\n" + "`+strings.TrimSpace(row)+`\n".repeat(300000)], "long.csv"));
		document.getElementById("f-date").value = "2026-11-30";
		document.body.dispatchEvent(new DragEvent("drop", {dataTransfer: data, bubbles: true, cancelable: true})); true }`)
	b.until(`document.getElementById("list-bar").value > 0`)
	b.do(clickID("list-stop"))
	b.until(`document.getElementById("say").textContent === "Stopped." && document.getElementById("list-work").hidden`)
}

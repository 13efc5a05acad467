package main

import (
	"bytes"
	"encoding/json"
	"strings"
	"testing"
	"unicode/utf8"

	"tayra/dose"
	"tayra/metabolic"
	"tayra/species"
)

func fits(t *testing.T, what, text string) {
	t.Helper()
	for line := range strings.Lines(text) {
		line = strings.TrimSuffix(line, "\n")
		// A long word, such as the address of a paper, stands alone on its line.
		if n := utf8.RuneCountInString(line); n > listWidth && strings.Contains(strings.TrimSpace(line), " ") {
			t.Errorf("%s: a line of %d columns: %q", what, n, line)
		}
		if strings.TrimRight(line, " ") != line {
			t.Errorf("%s: spaces at the end of %q", what, line)
		}
	}
}

// TestListingsFit: no listing is wrapped by an ordinary terminal, whatever the
// animal.
func TestListingsFit(t *testing.T) {
	all := species.All()
	fits(t, "species", animalsText(all))
	fits(t, "hazards", hazardCoverageText())
	fits(t, "equations", equationsText(metabolic.Equations()))
	for _, a := range all {
		fits(t, a.Name, animalText(a))
		mass := (a.AdultLow + a.AdultHigh) / 2
		if mass == 0 {
			mass = 1
		}
		r := &ratesOf{animal: a, mass: metabolic.BodyMass{Low: mass, Middle: mass, High: mass}, temperature: 30, hasTemperature: true, q10: metabolic.Q10Default}
		var err error
		if r.have, r.missing, err = dose.Rates(a, mass, 30, true, r.q10); err != nil {
			t.Errorf("%s: %v", a.Name, err)
			continue
		}
		fits(t, "rate of "+a.Name, r.text())
	}
}

// listing runs the program for a JSON record and decodes it.
func listing(t *testing.T, args ...string) map[string]any {
	t.Helper()
	var stdout, stderr bytes.Buffer
	if status := run(append(args, "--json", "-"), strings.NewReader(""), &stdout, &stderr); status != exitDone {
		t.Fatalf("%q: status %d: %s", args, status, &stderr)
	}
	var record map[string]any
	if err := json.Unmarshal(stdout.Bytes(), &record); err != nil {
		t.Fatal(err)
	}
	return record
}

func hasKeys(t *testing.T, what string, record map[string]any, keys ...string) {
	t.Helper()
	for _, k := range keys {
		if _, ok := record[k]; !ok {
			t.Errorf("%s has no %q", what, k)
		}
	}
}

// TestListingRecords: the keys on which other programs may rely.
func TestListingRecords(t *testing.T) {
	rate := listing(t, "rate", "giant anteater", "41 kg")
	hasKeys(t, "rate", rate, "species", "mass_kg", "rates", "unavailable")
	first := rate["rates"].([]any)[0].(map[string]any)
	hasKeys(t, "a rate", first, "basis", "watt", "kcal_per_day", "sd_ln", "source")
	// 70·41^0.75 = 1,134.2 kcal/day; 4.184 kJ a kcal over 86,400 s.
	if kcal, watt := first["kcal_per_day"].(float64), first["watt"].(float64); kcal < 1134.1 || kcal > 1134.3 || watt < 54.92 || watt > 54.93 {
		t.Errorf("group: %v kcal/day, %v W", kcal, watt)
	}
	missing := listing(t, "rate", "giant anteater", "200 kg")["unavailable"].([]any)
	if len(missing) != 1 {
		t.Fatalf("unavailable: %v", missing)
	}
	hasKeys(t, "an unavailable basis", missing[0].(map[string]any), "basis", "why")

	found := listing(t, "species", "Myrmecophagidae")["species"].([]any)
	if len(found) != 3 {
		t.Errorf("%d Myrmecophagidae", len(found))
	}
	for _, a := range found {
		animal := a.(map[string]any)
		hasKeys(t, "an animal", animal, "name", "common_names", "class", "order", "family", "group", "adult_mass_kg", "measured", "sources")
		if animal["name"] == "Myrmecophaga tridactyla" {
			hasKeys(t, "measured", animal["measured"].(map[string]any), "watt", "mass_kg")
			if mass := animal["adult_mass_kg"].([]any); len(mass) != 2 || mass[0].(float64) >= mass[1].(float64) {
				t.Errorf("adult mass %v", mass)
			}
		}
	}

	lines := listing(t, "equations", "kleiber1947")["equations"].([]any)
	hasKeys(t, "an equation", lines[0].(map[string]any), "id", "a", "b", "mass_unit", "rate_unit", "form", "level", "source", "verified", "usable")
}

// TestListedHazards: each rank of the table reaches the animals of it, the wild
// form is one with the domestic one, and what is known of relatives is told
// apart.
func TestListedHazards(t *testing.T) {
	text := func(name string) (own, relatives string) {
		a, err := species.Find(name)
		if err != nil {
			t.Fatal(err)
		}
		own, relatives, _ = strings.Cut(animalText(a), "Known in relatives")
		return own, relatives
	}
	rank := map[string]string{}
	for _, h := range species.Hazards() {
		rank[h.ID] = h.Rank + " " + h.Taxon
	}
	for _, c := range []struct {
		animal, row    string
		own, relatives bool
	}{
		{animal: "dog", row: "h032", own: true},                  // species Canis lupus familiaris
		{animal: "wolf", row: "h032", own: true},                 // one species with the dog
		{animal: "cat", row: "h032"},                             // a breed's gene
		{animal: "Hermann's tortoise", row: "h001", own: true},   // order Testudines
		{animal: "Greek tortoise", row: "h002", relatives: true}, // of one family
		{animal: "green iguana", row: "h001"},
		{animal: "giant anteater", row: "h090", own: true}, // any animal
		{animal: "alpaca", row: "h067", relatives: true},   // of one order
		{animal: "cat", row: "h082"},                       // the handler's, not the cat's
	} {
		own, relatives := text(c.animal)
		row := "[" + c.row + "]"
		if strings.Contains(own, row) != c.own || strings.Contains(relatives, row) != c.relatives {
			t.Errorf("%s and %s (%s): own %v, of relatives %v", c.animal, c.row, rank[c.row], strings.Contains(own, row), strings.Contains(relatives, row))
		}
	}
}

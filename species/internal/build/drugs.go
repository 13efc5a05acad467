package build

import (
	"fmt"
	"io/fs"
	"slices"
	"strings"
)

// Drugs makes drugs.index and drug-classes.index, by which the hazard table
// reads the name and class of a drug.
//
// A line of drugs.index is, tab-separated: key, name as written, kind
// ("drug", "name", "combination", "yields" for a drug that the body turns into
// the further ones, or "whole" for a name that counts only where nothing else
// stands beside it), the drugs, their classes (both
// joined by semicolons), and why a near spelling of it is looked for: "hazard"
// if a row of the hazard table is about one of these, "trait" if none is but a
// class has a trait, or nothing. A line of drug-classes.index is: key, name,
// classes, and the same.
func Drugs(data fs.FS, out map[string][]byte) error {
	tables := make(map[string]*table)
	for _, name := range []string{"drug-classes.csv", "drug-synonyms.csv", "drug-class-names.csv", "drug-class-traits.csv", "drug-yields.csv", "hazards.csv"} {
		t, err := read(data, name)
		if err != nil {
			return err
		}
		tables[name] = t
	}

	classes := make(map[string][]string) // by drug
	whole := make(map[string]bool)
	for _, r := range tables["drug-classes.csv"].rows {
		classes[r["drug"]] = list(r["classes"])
	}
	canonical := make(map[string]string) // drug by key
	synonyms := tables["drug-synonyms.csv"].rows
	for _, r := range synonyms {
		for _, d := range list(r["drug"]) {
			if classes[d] == nil {
				return fmt.Errorf("drug-synonyms.csv: %s: no drug %q in drug-classes.csv", r["name"], d)
			}
			if r["kind"] == "whole" {
				whole[d] = true
			}
		}
	}

	yields := make(map[string][]string)
	for _, r := range tables["drug-yields.csv"].rows {
		for _, d := range []string{r["drug"], r["yields"]} {
			if classes[d] == nil {
				return fmt.Errorf("drug-yields.csv: no drug %q in drug-classes.csv", d)
			}
		}
		yields[r["drug"]] = append(yields[r["drug"]], r["yields"])
	}

	hazardDrugs, hazardClasses := make(map[string]bool), make(map[string]bool)
	entries := make(map[string][]string) // by key: written, kind, drugs
	add := func(written, kind string, drugs ...string) error {
		key, err := keyOf(written)
		if err != nil {
			return err
		}
		if other := entries[key]; other != nil {
			return fmt.Errorf("drug name %q is there as %q too", written, other[0])
		}
		entries[key] = append([]string{written, kind}, drugs...)
		if kind != "combination" {
			canonical[key] = drugs[0]
		}
		return nil
	}
	for d := range classes {
		kind := "drug"
		if yields[d] != nil {
			kind = "yields"
		}
		if whole[d] {
			kind = "whole"
		}
		if err := add(d, kind, append([]string{d}, yields[d]...)...); err != nil {
			return err
		}
	}
	for _, r := range synonyms {
		kind, drugs := r["kind"], list(r["drug"])
		if more := yields[drugs[0]]; kind == "name" && more != nil {
			kind, drugs = "yields", append(drugs, more...)
		}
		if err := add(r["name"], kind, drugs...); err != nil {
			return err
		}
	}
	for _, h := range tables["hazards.csv"].rows {
		for _, d := range append(list(h["also_drugs"]), list(h["drug"])...) {
			key, err := keyOf(d)
			if err != nil {
				return err
			}
			if canonical[key] == "" {
				return fmt.Errorf("hazard %s: no drug %q in drug-classes.csv or drug-synonyms.csv", h["id"], d)
			}
			hazardDrugs[canonical[key]] = true
		}
		for _, c := range append(list(h["also_classes"]), h["drug_class"]) {
			hazardClasses[c] = true
		}
	}

	traits := make(map[string]bool)
	for _, r := range tables["drug-class-traits.csv"].rows {
		traits[r["class"]] = true
	}
	mark := func(drugs, classes []string) string {
		is := func(marked map[string]bool) func(string) bool { return func(s string) bool { return marked[s] } }
		switch {
		case slices.ContainsFunc(drugs, is(hazardDrugs)) || slices.ContainsFunc(classes, is(hazardClasses)):
			return "hazard"
		case slices.ContainsFunc(classes, is(traits)):
			return "trait"
		}
		return ""
	}

	var lines []string
	for key, e := range entries {
		var all []string
		for _, d := range e[2:] {
			for _, c := range classes[d] {
				if !slices.Contains(all, c) {
					all = append(all, c)
				}
			}
		}
		lines = append(lines, strings.Join([]string{key, e[0], e[1], strings.Join(e[2:], ";"), strings.Join(all, ";"), mark(e[2:], all)}, "\t"))
	}
	out["drugs.index"] = sorted(lines)

	lines = nil
	known := make(map[string]bool)
	seen := make(map[string]string)
	for _, r := range tables["drug-class-names.csv"].rows {
		key, err := keyOf(r["name"])
		if err != nil {
			return err
		}
		if seen[key] != "" {
			return fmt.Errorf("class name %q is there twice", r["name"])
		}
		seen[key] = r["classes"]
		for _, c := range list(r["classes"]) {
			known[c] = true
		}
		lines = append(lines, strings.Join([]string{key, r["name"], strings.Join(list(r["classes"]), ";"), mark(nil, list(r["classes"]))}, "\t"))
	}
	for c := range hazardClasses {
		if !known[c] {
			return fmt.Errorf("hazard class %q is not in drug-class-names.csv", c)
		}
	}
	for c := range traits {
		if !known[c] {
			return fmt.Errorf("class %q of drug-class-traits.csv is not in drug-class-names.csv", c)
		}
	}
	for d, cs := range classes {
		for _, c := range cs {
			if !known[c] {
				return fmt.Errorf("class %q of %s is not in drug-class-names.csv", c, d)
			}
		}
	}
	out["drug-classes.index"] = sorted(lines)
	return nil
}

// list splits a cell that holds several values.
func list(cell string) []string {
	var out []string
	for _, s := range strings.Split(cell, ";") {
		if s = strings.TrimSpace(s); s != "" {
			out = append(out, s)
		}
	}
	return out
}

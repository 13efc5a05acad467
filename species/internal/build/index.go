package build

import (
	"fmt"
	"io/fs"
	"sort"
	"strings"

	"tayra/species/internal/fold"
)

// Index makes animals.index and names.index.
//
// A line of animals.index is, tab-separated: key, the twelve columns of
// animals.csv, and the mass, rate, temperature, kind, grade, flag, source and
// notes of measured-rates.csv. A line of names.index is: key, name as
// written, kind ("common", "former", or "form" for a subspecies or breed that
// has no row of its own), and the scientific names, joined by
// semicolons. Lines are sorted by key and a key is one line; the key is the
// folded name without spaces.
func Index(data fs.FS, out map[string][]byte) error {
	animals, err := read(data, "animals.csv")
	if err != nil {
		return err
	}
	measured, err := read(data, "measured-rates.csv")
	if err != nil {
		return err
	}
	names, err := read(data, "names.csv")
	if err != nil {
		return err
	}

	rows := make(map[string]map[string]string) // by scientific name
	for _, r := range animals.rows {
		if rows[r["scientific_name"]] != nil {
			return fmt.Errorf("animals.csv: %s is there twice", r["scientific_name"])
		}
		rows[r["scientific_name"]] = r
	}
	seen := make(map[string]bool)
	for _, m := range measured.rows {
		name := m["scientific_name"]
		if seen[name] {
			return fmt.Errorf("measured-rates.csv: %s is there twice", name)
		}
		seen[name] = true
		r := rows[name]
		if r == nil {
			r = map[string]string{"scientific_name": name}
			for _, c := range []string{"class", "group", "order", "family"} {
				r[c] = m[c]
			}
			// The temperature of an endotherm under measurement is its own;
			// that of an ectotherm is the chamber's.
			if (m["class"] == "Mammalia" || m["class"] == "Aves") && m["flag"] == "" && m["temperature_c"] != "" {
				r["body_temp_c"], r["body_temp_basis"] = m["temperature_c"], m["source"]
			}
			rows[name] = r
		}
		for _, c := range []string{"class", "group", "order", "family"} {
			if r[c] != m[c] {
				return fmt.Errorf("%s: %s is %q in animals.csv, %q in measured-rates.csv", name, c, r[c], m[c])
			}
		}
		for _, c := range measuredColumns {
			r["measured "+c] = m[c]
		}
	}

	var lines []string
	keys := make(map[string]string)
	for name, r := range rows {
		key, err := keyOf(name)
		if err != nil {
			return err
		}
		if other, ok := keys[key]; ok {
			return fmt.Errorf("%s and %s have one key", name, other)
		}
		keys[key] = name
		cells := []string{key}
		for _, c := range animalColumns {
			cells = append(cells, r[c])
		}
		for _, c := range measuredColumns {
			cells = append(cells, r["measured "+c])
		}
		for _, c := range cells {
			if strings.ContainsAny(c, "\t\r\n") {
				return fmt.Errorf("%s: a cell holds a tab or a line end", name)
			}
		}
		lines = append(lines, strings.Join(cells, "\t"))
	}
	out["animals.index"] = sorted(lines)

	type entry struct {
		written, kind string
		scientific    []string
	}
	byKey := make(map[string]*entry)
	add := func(written, scientific, kind string) error {
		if rows[scientific] == nil {
			return fmt.Errorf("name %q: no animal %s", written, scientific)
		}
		key, err := keyOf(written)
		if err != nil {
			return err
		}
		if keys[key] == scientific {
			return nil // the scientific name itself, such as "boa constrictor"
		}
		if other, ok := keys[key]; ok {
			return fmt.Errorf("name %q of %s is the scientific name of %s", written, scientific, other)
		}
		e := byKey[key]
		if e == nil {
			e = &entry{written: written, kind: kind}
			byKey[key] = e
		}
		if e.kind != kind {
			return fmt.Errorf("name %q is both %s and %s", written, e.kind, kind)
		}
		for _, s := range e.scientific {
			if s == scientific {
				return nil
			}
		}
		e.scientific = append(e.scientific, scientific)
		return nil
	}
	for _, r := range animals.rows {
		for _, n := range strings.Split(r["common_names"], ";") {
			if n = strings.TrimSpace(n); n != "" {
				if err := add(n, r["scientific_name"], "common"); err != nil {
					return err
				}
			}
		}
	}
	for _, r := range names.rows {
		if err := add(r["name"], r["scientific_name"], r["kind"]); err != nil {
			return err
		}
	}
	lines = nil
	for key, e := range byKey {
		lines = append(lines, strings.Join([]string{key, e.written, e.kind, strings.Join(e.scientific, ";")}, "\t"))
	}
	out["names.index"] = sorted(lines)
	return nil
}

var (
	animalColumns = []string{"scientific_name", "common_names", "class", "group", "order", "family",
		"adult_mass_low_kg", "adult_mass_high_kg", "adult_mass_basis", "body_temp_c", "body_temp_basis", "notes"}
	measuredColumns = []string{"mass_kg", "rate_w", "temperature_c", "kind", "grade", "flag", "source", "notes"}
)

func keyOf(name string) (string, error) {
	words, err := fold.Words(name)
	if err != nil {
		return "", fmt.Errorf("%s: %w", name, err)
	}
	return fold.Key(words), nil
}

// sorted joins lines in the order of their keys. The tab that ends a key
// sorts before every letter, so sorting whole lines sorts keys.
func sorted(lines []string) []byte {
	sort.Strings(lines)
	return []byte(strings.Join(lines, "\n") + "\n")
}

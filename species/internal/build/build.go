// Package build makes the tables that package species embeds beside its
// source tables, so that a program start parses none of them whole: a sorted
// animal index, a sorted name index, the fitted relatives and the scatter of
// species about each basis. The generate command beside it writes them; a
// test of package species fails when they are stale.
package build

import (
	"encoding/csv"
	"fmt"
	"io/fs"
)

// table is a CSV file with a head row, read by column name.
type table struct {
	name string
	rows []map[string]string
}

func read(data fs.FS, name string) (*table, error) {
	f, err := data.Open(name)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	records, err := csv.NewReader(f).ReadAll()
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	if len(records) == 0 {
		return nil, fmt.Errorf("%s: no head row", name)
	}
	t := &table{name: name}
	for _, record := range records[1:] {
		row := make(map[string]string, len(record))
		for i, cell := range record {
			row[records[0][i]] = cell
		}
		t.rows = append(t.rows, row)
	}
	return t, nil
}

// All returns the generated files by name.
func All(data fs.FS) (map[string][]byte, error) {
	out := make(map[string][]byte)
	for _, make := range []func(fs.FS, map[string][]byte) error{Index, Drugs, Relatives, Scatter} {
		if err := make(data, out); err != nil {
			return nil, err
		}
	}
	return out, nil
}

package species

import "strings"

// records calls yield with the cells of every row of an embedded CSV table
// after its head row. Cells are slices of the table wherever they can be: a
// program start that needs one small table pays for finding commas only.
// The tables are the project's own; their tests read them with encoding/csv
// too and hold both equal.
func records(table string) func(yield func([]string) bool) {
	return func(yield func([]string) bool) {
		var cells []string
		for first := true; table != ""; first = false {
			cells, table = record(table, cells[:0])
			if first {
				continue
			}
			if !yield(cells) {
				return
			}
		}
	}
}

// record splits off the first row.
func record(table string, cells []string) (row []string, rest string) {
	for {
		var cell string
		if strings.HasPrefix(table, `"`) {
			end := 1
			for {
				quote := strings.IndexByte(table[end:], '"')
				if quote < 0 {
					return append(cells, table[1:]), "" // unreachable in a sound table
				}
				end += quote + 1
				if !strings.HasPrefix(table[end:], `"`) {
					break
				}
				end++
			}
			cell = table[1 : end-1]
			if strings.IndexByte(cell, '"') >= 0 {
				cell = strings.ReplaceAll(cell, `""`, `"`)
			}
			table = table[end:]
		} else {
			end := 0
			for end < len(table) && table[end] != ',' && table[end] != '\n' {
				end++
			}
			cell, table = table[:end], table[end:]
		}
		cells = append(cells, cell)
		if table == "" {
			return cells, ""
		}
		separator := table[0]
		table = table[1:]
		if separator == '\n' {
			return cells, table
		}
	}
}

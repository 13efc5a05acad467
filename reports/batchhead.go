package reports

import (
	"bytes"
	"fmt"
	"slices"
	"strconv"
	"strings"
	"unicode/utf8"

	"tayra/dose"
)

// resultColumns are the columns that a batch adds, in this order.
var resultColumns = []string{
	"drafted_dose_per_kg", "drafted_dose", "drafted_unit", "drafted_interval_h",
	"range50_low_per_kg", "range50_high_per_kg", "range90_low_per_kg", "range90_high_per_kg",
	"plan", "cautions", "error",
}

// A TableError says why a file is no table of animals that can be read. Its
// faults are of the whole file; those of a row stand in the row.
type TableError struct {
	Line    int // 0 where the fault has no line
	Problem string
	Remedy  string
}

// Error says what is wrong and what to do.
func (e *TableError) Error() string {
	text := e.Problem
	if e.Line > 0 {
		text = fmt.Sprintf("line %d: %s", e.Line, text)
	}
	if e.Remedy != "" {
		text += "; " + e.Remedy
	}
	return text
}

// batchHead is the first row of a table, read, and how the table is written.
type batchHead struct {
	comma  byte   // between cells
	mark   byte   // in decimals that are written
	eol    string // LF or CRLF
	bom    bool
	line   int
	cells  int
	reads  []readCell
	fixed  dose.Row // cells that the mapping file gives for every row
	row    []byte   // as written, with the new columns, without line end
	passed []string // headings that are passed through, as typed
	doubts []string // headings that are passed through and look like a known one

	neutralised int
}

// readCell is a cell of a row that is read.
type readCell struct {
	at     int
	column dose.Column
	unit   string // for a bare number
}

const byteOrderMark = "\xEF\xBB\xBF"

// mostColumns bounds the columns of a table: what a spreadsheet can hold.
const mostColumns = 16384

// readHead reads the first row and finds out how the table is written. The
// error is a *TableError or that of the reader.
func readHead(s *rowScanner, columns *BatchColumns) (*batchHead, error) {
	s.fill()
	for !s.eof && s.end-s.start < len(byteOrderMark) {
		s.fill()
	}
	h := &batchHead{mark: '.', eol: "\n"}
	if bytes.HasPrefix(s.buf[s.start:s.end], []byte(byteOrderMark)) {
		h.bom = true
		s.consume(len(byteOrderMark))
	}
	for { // empty lines above the header
		for !s.eof && bytes.IndexByte(s.buf[s.start:s.end], '\n') < 0 && s.end-s.start <= s.largest {
			s.fill()
		}
		line, _, ended := bytes.Cut(s.buf[s.start:s.end], []byte("\n"))
		if !ended || len(bytes.TrimSpace(line)) > 0 {
			break
		}
		s.consume(len(line) + 1)
		s.line++
	}
	h.line = s.line
	if err := h.look(s); err != nil {
		return nil, err
	}
	best := -1
	for _, comma := range []byte{',', ';', '\t'} {
		n, err := knownHeadings(s, comma, columns)
		if err != nil {
			return nil, err
		}
		if n > best {
			best, h.comma = n, comma
		}
	}
	s.comma = h.comma
	first, err := s.next()
	if err != nil {
		return nil, err // the reader's: the head was there a moment ago
	}
	if first.fault != noFault {
		return nil, &TableError{h.line, "the quotes in the header are broken", "write each heading once, in quotes as a whole or not at all"}
	}
	if first.crlf {
		h.eol = "\r\n"
	}
	return h, h.read(first.text, columns)
}

// look refuses what is no such text at all.
func (h *batchHead) look(s *rowScanner) error {
	data := s.buf[s.start:s.end]
	if s.eof && s.err != nil && bytes.IndexByte(data, '\n') < 0 {
		return s.err
	}
	if len(bytes.TrimSpace(data)) == 0 && s.eof {
		return &TableError{0, "the table is empty", "write a header with the names of the columns, then one row an animal"}
	}
	line, _, ended := bytes.Cut(data, []byte("\n"))
	line = bytes.TrimSuffix(line, []byte("\r"))
	switch {
	case !ended && len(data) > s.largest:
		return &TableError{h.line, fmt.Sprintf("the first line is over %d bytes long", s.largest), "is it a table?"}
	case bytes.HasPrefix(data, []byte("PK\x03\x04")):
		return &TableError{0, "this is a spreadsheet file or another archive, not a table as text", "save the sheet as CSV, in UTF-8"}
	case bytes.HasPrefix(data, []byte("\xFF\xFE")) || bytes.HasPrefix(data, []byte("\xFE\xFF")) || bytes.IndexByte(line, 0) >= 0:
		return &TableError{h.line, "the table is UTF-16 text or no text", "save it as CSV in UTF-8"}
	case !utf8.Valid(line):
		return &TableError{h.line, "the header is not UTF-8 text", "save the table as CSV in UTF-8"}
	case bytes.IndexByte(line, '\r') >= 0 && !ended:
		return &TableError{h.line, "lines end in a carriage return alone", "save the table with line ends of Unix or Windows"}
	}
	return nil
}

// knownHeadings counts the columns that the header has if comma stands between
// its cells.
func knownHeadings(s *rowScanner, comma byte, columns *BatchColumns) (int, error) {
	q := quoting{comma: comma, firstEnd: -1}
	for !q.advance(s.buf[s.start:s.end], s.eof) {
		if s.eof || s.end-s.start > s.largest {
			return 0, nil
		}
		s.fill()
	}
	if q.fault != noFault {
		return 0, nil
	}
	row, n := s.buf[s.start:s.start+q.end], 0
	for _, c := range splitCells(row, comma, nil) {
		name, _ := c.value(row, nil)
		if _, ok := columns.find(string(name)); ok {
			n++
		}
	}
	return n, nil
}

// read takes the headings one by one.
func (h *batchHead) read(row []byte, columns *BatchColumns) error {
	cells := splitCells(row, h.comma, nil)
	h.cells = len(cells)
	if h.cells > mostColumns {
		return &TableError{h.line, fmt.Sprintf("%d columns", h.cells), fmt.Sprintf("at most %d are read", mostColumns)}
	}
	first := map[string]int{} // heading as compared: its column, from 1
	var have [64]bool
	for i, c := range cells {
		value, _ := c.value(row, nil)
		typed := strings.TrimSpace(string(value))
		name := sameHeading(typed)
		if at, ok := first[name]; ok && name != "" {
			return &TableError{h.line, fmt.Sprintf("two columns are called %s: number %d and number %d", strconv.Quote(typed), at, i+1), "rename or delete one of them"}
		}
		first[name] = i + 1
		if slices.Contains(resultColumns, name) {
			return &TableError{h.line, fmt.Sprintf("column %d is called %s, which is a column that is written", i+1, strconv.Quote(typed)), "rename or delete it"}
		}
		column, ok := columns.find(typed)
		if !ok {
			h.pass(typed)
			continue
		}
		have[column] = true
		h.reads = append(h.reads, readCell{i, column, columns.rule(column).unit})
	}
	for _, column := range dose.Columns() {
		rule := columns.rule(column)
		switch {
		case rule.value != "":
			h.fixed[column] = []byte(rule.value)
			have[column] = true
		case rule.heading != "" && !have[column]:
			return &TableError{h.line, fmt.Sprintf("no column is called %s, which the mapping names for %s", strconv.Quote(rule.heading), column), "write the heading as it stands in the table"}
		}
	}
	var missing []string
	for _, column := range dose.Columns() {
		if column.Required() && !have[column] {
			missing = append(missing, column.String())
		}
	}
	if len(missing) > 0 {
		return h.lacking(missing, row)
	}
	h.write(row, cells)
	return nil
}

// pass notes a heading that is passed through, and what it may have been meant
// for.
func (h *batchHead) pass(typed string) {
	h.passed = append(h.passed, typed)
	name := sameHeading(typed)
	for _, column := range dose.Columns() {
		known := column.String()
		if len(known) > 4 && headingSlips(name, known) <= 1+len(known)/8 {
			h.doubts = append(h.doubts, fmt.Sprintf("column %s is passed through, not read; if %s is meant, name it so", strconv.Quote(typed), known))
		}
	}
}

// lacking is the error for columns that are not there.
func (h *batchHead) lacking(missing []string, row []byte) error {
	var required []string
	for _, column := range dose.Columns() {
		if column.Required() {
			required = append(required, column.String())
		}
	}
	if len(h.reads) == 0 {
		const most = 60
		return &TableError{h.line, "there is no header: the first row has no column that is known here (" + strconv.Quote(cut(string(row), most)) + ")",
			"write the names of the columns above the animals; needed are " + strings.Join(required, ", ") + "; for other headings see --columns"}
	}
	problem := "column " + missing[0] + " is missing"
	if len(missing) > 1 {
		problem = "columns " + strings.Join(missing, ", ") + " are missing"
	}
	remedy := "needed are " + strings.Join(required, ", ")
	if len(h.passed) > 0 {
		remedy += "; for other headings see --columns"
	}
	return &TableError{h.line, problem, remedy}
}

// write makes the header of the result.
func (h *batchHead) write(row []byte, cells []cell) {
	for i, c := range cells {
		if i > 0 {
			h.row = append(h.row, h.comma)
		}
		value, _ := c.value(row, nil)
		if runsAsFormula(value) {
			h.neutralised++
			h.row = appendCell(h.row, append([]byte("'"), value...), h.comma)
		} else {
			h.row = append(h.row, row[c.start:c.end]...)
		}
	}
	for _, name := range resultColumns {
		h.row = append(h.row, h.comma)
		h.row = append(h.row, name...)
	}
}

// sameHeading is a heading as it is compared: "Model species", "model-species"
// and "model_species" are one.
func sameHeading(s string) string {
	return strings.Join(strings.FieldsFunc(strings.ToLower(s), func(r rune) bool { return r == ' ' || r == '-' || r == '_' || r == '\u00a0' }), "_")
}

// cut shortens a text that is only shown.
func cut(s string, most int) string {
	if len(s) <= most {
		return s
	}
	for most > 0 && !utf8.RuneStart(s[most]) {
		most--
	}
	return s[:most] + "…"
}

// headingSlips counts the letters to insert, delete or change that turn one word into
// the other.
func headingSlips(a, b string) int {
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range len(a) {
		diagonal := row[0]
		row[0] = i + 1
		for j := range len(b) {
			change := diagonal
			if a[i] != b[j] {
				change++
			}
			diagonal = row[j+1]
			row[j+1] = min(change, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(b)]
}

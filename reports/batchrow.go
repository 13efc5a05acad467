package reports

import (
	"bytes"
	"errors"
	"fmt"
	"strconv"
	"strings"

	"tayra/dose"
	"tayra/metabolic"
)

// batchWorker drafts rows and writes them. Each goroutine has its own.
type batchWorker struct {
	run     *batchRun
	head    *batchHead
	drafter *dose.RowDrafter

	row     dose.Row
	draft   dose.RowDraft
	cells   []cell
	scratch []byte // holds what cells say where that is not in the table as it stands
}

func (r *batchRun) newWorker() *batchWorker {
	return &batchWorker{run: r, head: r.head, drafter: r.batch.Drafter()}
}

// block works out the rows of a block. What ends the batch is b.err; the rows
// before it are in b.out.
func (w *batchWorker) block(b *block) {
	b.out = b.out[:0]
	for i := range b.rows {
		if err := w.one(b, i); err != nil {
			b.err = err
			return
		}
	}
}

func (w *batchWorker) one(b *block, i int) error {
	at := &b.rows[i]
	text := b.text[at.start:at.end]
	if at.fault != noFault {
		w.broken(b, at, text)
		return nil
	}
	w.cells = splitCells(text, w.head.comma, w.cells[:0])
	if problem := w.ragged(text, at); problem != "" {
		w.fail(b, text, problem)
		return nil
	}
	if problem := w.read(text, &b.counts); problem != "" {
		w.fail(b, text, problem)
		return nil
	}
	if err := w.drafter.Draft(&w.row, &w.draft); err != nil {
		w.fail(b, text, rowProblem(err))
		return nil
	}
	if w.run.o.Worksheet != nil {
		err := w.worksheet(b.first + i)
		var fault *RowError
		switch {
		case errors.As(err, &fault):
			w.fail(b, text, fault.Problem)
			return nil
		case err != nil:
			return err
		}
	}
	w.pass(b, text)
	w.result(b)
	return nil
}

func (w *batchWorker) worksheet(row int) error {
	ws, err := w.run.batch.Worksheet(&w.row)
	if err != nil {
		return &RowError{rowProblem(err)}
	}
	return w.run.o.Worksheet(row, ws, w.run.batch.CaseInput(&w.row))
}

// read takes the cells that are read into w.row.
func (w *batchWorker) read(text []byte, counts *BatchCounts) (problem string) {
	w.row, w.scratch = w.head.fixed, w.scratch[:0]
	for _, read := range w.head.reads {
		var value []byte
		value, w.scratch = w.cells[read.at].value(text, w.scratch)
		if w.head.comma == ';' && read.column.Quantity() {
			var changed bool
			if w.head.mark == ',' {
				if number, ok := groupedPoint(value); ok && problem == "" {
					problem = twoReadings(read.column, string(value), string(number))
				}
			}
			if bytes.IndexByte(value, ',') >= 0 {
				if value, w.scratch, changed = pointForComma(value, w.scratch); changed {
					counts.DecimalCommas++
				}
			}
		}
		if read.unit != "" && isBareNumber(value) {
			from := len(w.scratch)
			w.scratch = append(append(append(w.scratch, bytes.TrimSpace(value)...), ' '), read.unit...)
			value = w.scratch[from:]
		}
		w.row[read.column] = value
	}
	return problem
}

// twoReadings is the problem of a point that may be a mark of thousands.
func twoReadings(column dose.Column, cell, number string) string {
	decimal, thousands := strings.Replace(number, ".", ",", 1), strings.Replace(number, ".", "", 1)
	return fmt.Sprintf("%s: %s has a point that is a mark of thousands where decimals have a comma, as in this table; write %s or %s, whichever is meant",
		column, strconv.Quote(cut(cell, 60)), strconv.Quote(strings.Replace(cell, number, decimal, 1)), strconv.Quote(strings.Replace(cell, number, thousands, 1)))
}

// isBareNumber says whether a cell has digits and no letters: no unit.
func isBareNumber(value []byte) bool {
	digits := false
	for _, b := range value {
		switch {
		case b >= '0' && b <= '9':
			digits = true
		case b != '.' && b != ',' && b != ' ' && b != '-' && b != '+':
			return false
		}
	}
	return digits
}

// ragged says what is wrong with the number of cells. Empty cells too many,
// which spreadsheets leave behind a table, are let off.
func (w *batchWorker) ragged(text []byte, at *blockRow) string {
	want := w.head.cells
	for len(w.cells) > want {
		last := w.cells[len(w.cells)-1]
		if len(bytes.Trim(text[last.start:last.end], `" `)) > 0 {
			break
		}
		w.cells = w.cells[:len(w.cells)-1]
	}
	have := len(w.cells)
	if have == want {
		return ""
	}
	problem := fmt.Sprintf("%d cells where the header has %d", have, want)
	if at.lines > 1 {
		problem += fmt.Sprintf(", over lines %d to %d", at.line, at.line+at.lines-1)
	}
	if have < want {
		return problem + "; write every cell, empty ones too"
	}
	var more []string
	for _, c := range w.cells[want:] {
		value, _ := c.value(text, nil)
		more = append(more, strconv.Quote(string(value)))
	}
	w.cells = w.cells[:want]
	return problem + "; put a cell with a separator in it in quotes; too many: " + cut(strings.Join(more, ", "), 200)
}

// rowProblem puts the faults of a row into one cell.
func rowProblem(err error) string {
	const most = 2000
	return cut(strings.ReplaceAll(err.Error(), "\n", " | "), most)
}

// pass writes the row's own cells as they came, and apostrophes where a
// spreadsheet would run them.
func (w *batchWorker) pass(b *block, text []byte) {
	from := 0
	for _, c := range w.cells {
		if !mayRun(text, c) {
			continue
		}
		var value []byte
		if value, w.scratch = c.value(text, w.scratch); !runsAsFormula(value) {
			continue
		}
		b.out = append(b.out, text[from:c.start]...)
		b.out = appendCell(b.out, append([]byte("'"), value...), w.head.comma)
		from = c.end
		b.counts.Neutralised++
	}
	end := 0
	if len(w.cells) > 0 {
		end = w.cells[len(w.cells)-1].end
	}
	b.out = append(b.out, text[from:end]...)
}

// mayRun looks at the first letter only.
func mayRun(text []byte, c cell) bool {
	at := c.start
	if c.quoted {
		at++
	}
	if at >= c.end {
		return false
	}
	switch text[at] {
	case '=', '+', '-', '@', '\t', '\r':
		return true
	}
	return false
}

// result writes the new cells of a drafted or stopped row.
func (w *batchWorker) result(b *block) {
	d, comma := &w.draft, w.head.comma
	if d.Stopped {
		b.counts.Stopped++
		for range 9 {
			b.out = append(b.out, comma)
		}
	} else {
		b.counts.Drafted++
		b.out = w.pair(append(b.out, comma), d.DosePerKg)
		b.out = w.pair(append(b.out, comma), d.Amount)
		b.out = append(b.out, comma)
		b.out = append(b.out, amountUnit(d)...)
		b.out = append(b.out, comma)
		if d.IntervalH > 0 {
			b.out = appendNumber(b.out, d.IntervalH, w.head.mark)
		}
		for _, x := range [...]float64{d.Range50.Low, d.Range50.High, d.Range90.Low, d.Range90.High} {
			b.out = appendNumber(append(b.out, comma), x, w.head.mark)
		}
		b.out = append(append(b.out, comma), d.Plan...)
	}
	b.out = append(b.out, comma)
	for i, k := range d.Cautions {
		if i > 0 {
			b.out = append(b.out, ' ')
		}
		b.out = append(append(append(b.out, k.Slug...), ':'), k.Level...)
	}
	b.out = append(append(b.out, comma), w.head.eol...)
}

// pair writes a dose, or both ends of a range in words: a dash between numbers
// makes spreadsheets see a date.
func (w *batchWorker) pair(out []byte, p dose.Pair) []byte {
	out = appendNumber(out, p[0], w.head.mark)
	if p[0] != p[1] {
		out = appendNumber(append(out, " to "...), p[1], w.head.mark)
	}
	return out
}

func amountUnit(d *dose.RowDraft) string {
	switch {
	case d.Unit == metabolic.InternationalUnit && d.Infusion:
		return "IU/h"
	case d.Unit == metabolic.InternationalUnit:
		return "IU"
	case d.Infusion:
		return "mg/h"
	}
	return "mg"
}

// fail writes a row that is at fault: its own cells, nothing drafted, the
// problem.
func (w *batchWorker) fail(b *block, text []byte, problem string) {
	w.pass(b, text)
	for range w.head.cells - len(w.cells) {
		b.out = append(b.out, w.head.comma)
	}
	w.problem(b, problem)
}

func (w *batchWorker) problem(b *block, problem string) {
	b.counts.Failed++
	for range len(resultColumns) {
		b.out = append(b.out, w.head.comma)
	}
	b.out = appendCell(b.out, []byte(problem), w.head.comma)
	b.out = append(b.out, w.head.eol...)
}

// broken writes a row whose cells could not be told apart: those before the
// fault, and the rest of the line in one cell. Of a row that is too long the
// rest is left out.
func (w *batchWorker) broken(b *block, at *blockRow, text []byte) {
	whole := text[:at.faultAt]
	w.cells = w.cells[:0]
	if len(whole) > 0 {
		whole = whole[:len(whole)-1] // the separator before the cell at fault
		w.cells = splitCells(whole, w.head.comma, w.cells)
	}
	cells := len(w.cells)
	if cells >= w.head.cells { // the fault lies beyond the last column
		w.cells = w.cells[:w.head.cells]
	}
	w.pass(b, whole)
	problem := ""
	if at.fault == badQuote {
		problem = fmt.Sprintf("line %d: the quotes are broken in cell %d; put the whole cell in quotes and double those within", at.line, cells+1)
	} else {
		problem = fmt.Sprintf("line %d: the row is over %d bytes long; it is left out from cell %d on", at.line, largestRow, cells+1)
	}
	if cells < w.head.cells && at.fault == badQuote {
		if cells > 0 {
			b.out = append(b.out, w.head.comma)
		}
		rest := text[at.faultAt:]
		if runsAsFormula(rest) {
			b.counts.Neutralised++
			rest = append([]byte("'"), rest...)
		}
		b.out = appendCell(b.out, rest, w.head.comma)
		cells++
	} else if cells == 0 {
		cells = 1 // the first cell is there, empty
	}
	for range w.head.cells - cells {
		b.out = append(b.out, w.head.comma)
	}
	w.problem(b, problem)
}

// Rows of a table as bytes. The scanner finds where rows end and hands them on
// as they are, so that a cell that is passed through leaves as it came: its
// quotes, its line breaks (CRLF within quotes too) and its letters.
//
//   - The quoting is that of RFC 4180 and is taken strictly: a quote stands
//     around a whole cell, a quote within is doubled.
//   - Where it is broken, the fault is the row's alone: the row ends at the end
//     of its first line, and the next line is read afresh. A quote that is
//     never closed so costs one row and not the rest of the table.
//   - No more than one row of the largest size is held, whatever the file.

package reports

import (
	"bytes"
	"io"
)

// largestRow is the size in bytes above which a row is not read.
const largestRow = 1 << 20

const scanChunk = 64 << 10 // bytes read at a time

// rowFault says why the cells of a row could not be told apart.
type rowFault uint8

const (
	noFault  rowFault = iota
	badQuote          // from the byte at faultAt on
	tooLong           // only its beginning is there
)

// rawRow is a row without its line end.
type rawRow struct {
	text    []byte // good until the next row is read
	line    int    // on which it begins, from 1
	lines   int    // how many it takes
	fault   rowFault
	faultAt int
	crlf    bool // ended by CRLF
	ended   bool // ended by a line end, not by the end of the file
}

// rowScanner reads rows one after the other.
type rowScanner struct {
	r       io.Reader
	comma   byte
	largest int

	buf        []byte
	start, end int // of what is read and not yet handed on
	eof        bool
	err        error
	line       int
	skipping   bool  // in a row that was too long: up to the next line end
	consumed   int64 // bytes handed on
}

func newRowScanner(r io.Reader, comma byte) *rowScanner {
	return &rowScanner{r: r, comma: comma, largest: largestRow, line: 1}
}

// next gives the next row; the error is io.EOF after the last one, or that of
// the reader.
func (s *rowScanner) next() (rawRow, error) {
	if s.skipping {
		if err := s.skipLine(); err != nil {
			return rawRow{}, err
		}
	}
	q := quoting{comma: s.comma, firstEnd: -1}
	for {
		data := s.buf[s.start:s.end]
		done := q.advance(data, s.eof && s.err == nil) // what an error cut off is no row
		switch {
		case done && q.fault == noFault:
			return s.hand(data, q.end, q.next, q.lines), nil
		case done:
			// The row is its first line; wait until that has ended.
			if row, ok := s.firstLine(data, &q); ok {
				return row, nil
			}
		case len(data) > s.largest:
			if q.firstEnd >= 0 { // a quote that was not closed for so long
				q.fault = badQuote
				row, _ := s.firstLine(data, &q)
				return row, nil
			}
		case s.eof && s.err == nil && len(data) == 0:
			return rawRow{}, io.EOF
		}
		if len(data) > s.largest {
			row := rawRow{text: data[:s.largest], line: s.line, lines: 1, fault: tooLong, faultAt: q.cell, ended: true}
			s.consume(len(data))
			s.skipping = true
			return row, nil
		}
		if s.eof && s.err != nil {
			return rawRow{}, s.err
		}
		s.fill()
	}
}

// hand gives out the row that ends at end; the next one begins at next.
func (s *rowScanner) hand(data []byte, end, next, lines int) rawRow {
	row := rawRow{text: data[:end], line: s.line, lines: lines, ended: next > end}
	row.crlf = next == end+2
	s.line += lines
	s.consume(next)
	return row
}

// firstLine gives out the first line of a row whose quoting is broken. It says
// false when the end of that line has not been read.
func (s *rowScanner) firstLine(data []byte, q *quoting) (rawRow, bool) {
	end, cell := q.firstEnd, q.firstCell
	if end < 0 {
		cell = q.cell
		end = bytes.IndexByte(data, '\n')
	}
	switch {
	case end < 0 && (!s.eof || s.err != nil):
		return rawRow{}, false
	case end < 0:
		end = len(data)
	}
	next := min(end+1, len(data))
	if end > 0 && data[end-1] == '\r' {
		end--
	}
	row := s.hand(data, end, next, 1)
	row.fault, row.faultAt = badQuote, min(cell, end)
	return row, true
}

func (s *rowScanner) consume(n int) {
	s.start += n
	s.consumed += int64(n)
}

// skipLine drops the rest of a row that was too long.
func (s *rowScanner) skipLine() error {
	for {
		data := s.buf[s.start:s.end]
		if i := bytes.IndexByte(data, '\n'); i >= 0 {
			s.consume(i + 1)
			s.line++
			s.skipping = false
			return nil
		}
		s.consume(len(data))
		if s.eof {
			s.skipping = false
			return s.err
		}
		s.fill()
	}
}

// fill reads on. A read error counts as the end; the rows before it are handed
// out first.
func (s *rowScanner) fill() {
	if s.start > 0 && s.end-s.start < scanChunk {
		copy(s.buf, s.buf[s.start:s.end])
		s.start, s.end = 0, s.end-s.start
	}
	if len(s.buf)-s.end < scanChunk {
		grown := make([]byte, 2*(s.end-s.start)+2*scanChunk)
		s.end = copy(grown, s.buf[s.start:s.end])
		s.buf, s.start = grown, 0
	}
	for tries := 0; ; tries++ {
		n, err := s.r.Read(s.buf[s.end : s.end+scanChunk])
		s.end += n
		if err == nil && n == 0 && tries < 100 {
			continue
		}
		if err == nil && n == 0 {
			err = io.ErrNoProgress
		}
		if err != nil {
			s.eof = true
			if err != io.EOF {
				s.err = err
			}
		}
		return
	}
}

// quoting follows a row from quote to quote until it ends. It can stop at the
// end of what is read and go on when there is more.
type quoting struct {
	comma byte
	at    int // looked at up to here
	cell  int // where the cell begins
	state quoteState
	lines int
	// The first line end, if it stands within quotes, and where the cell
	// around it begins; -1 if none was met.
	firstEnd, firstCell int

	end   int // of the row
	next  int // of the next one
	fault rowFault
}

type quoteState uint8

const (
	cellBegins quoteState = iota
	bare
	inQuotes
	afterQuote // a quote within quotes: the end, or half of a doubled one
)

// advance says whether the row has ended or is at fault.
func (q *quoting) advance(data []byte, eof bool) bool {
	if q.at == 0 { // nearly every row: one line without a quote
		line := bytes.IndexByte(data, '\n')
		if line >= 0 && bytes.IndexByte(data[:line], '"') < 0 {
			q.finish(data, line)
			return true
		}
	}
	for q.at < len(data) {
		c := data[q.at]
		switch q.state {
		case cellBegins:
			if c == '"' {
				q.state = inQuotes
				q.at++
				continue
			}
			q.state = bare
			fallthrough
		case bare:
			switch c {
			case '"':
				return q.broken()
			case '\n':
				q.finish(data, q.at)
				return true
			case q.comma:
				q.state, q.cell = cellBegins, q.at+1
			}
		case inQuotes:
			switch c {
			case '"':
				q.state = afterQuote
			case '\n':
				q.lines++
				if q.firstEnd < 0 {
					q.firstEnd, q.firstCell = q.at, q.cell
				}
			}
		case afterQuote:
			switch c {
			case '"':
				q.state = inQuotes
			case '\n':
				q.finish(data, q.at)
				return true
			case q.comma:
				q.state, q.cell = cellBegins, q.at+1
			case '\r':
				if q.at+1 == len(data) && !eof {
					return false
				}
				if q.at+1 < len(data) && data[q.at+1] != '\n' {
					return q.broken()
				}
			default:
				return q.broken()
			}
		}
		q.at++
	}
	if !eof || len(data) == 0 {
		return false
	}
	if q.state == inQuotes {
		return q.broken()
	}
	q.end, q.next, q.lines = len(data), len(data), q.lines+1
	if data[q.end-1] == '\r' {
		q.end--
	}
	return true
}

func (q *quoting) broken() bool {
	q.fault = badQuote
	return true
}

// finish ends the row at a line feed.
func (q *quoting) finish(data []byte, feed int) {
	q.end, q.next, q.lines = feed, feed+1, q.lines+1
	if feed > 0 && data[feed-1] == '\r' {
		q.end--
	}
}

// cell is where a cell stands in its row, quotes included.
type cell struct {
	start, end int
	quoted     bool
}

// splitCells finds the cells of a row whose quoting is sound.
func splitCells(row []byte, comma byte, cells []cell) []cell {
	for at := 0; ; {
		if at < len(row) && row[at] == '"' {
			end := at + 1
			for { // to the quote that is not doubled
				end += bytes.IndexByte(row[end:], '"') + 1
				if end >= len(row) || row[end] != '"' {
					break
				}
				end++
			}
			cells = append(cells, cell{at, end, true})
			at = end
		} else {
			end := at
			for end < len(row) && row[end] != comma {
				end++
			}
			cells = append(cells, cell{at, end, false})
			at = end
		}
		if at >= len(row) {
			return cells
		}
		at++ // the comma
	}
}

// value is what a cell says. Doubled quotes are undone in scratch.
func (c cell) value(row, scratch []byte) (value, rest []byte) {
	if !c.quoted {
		return row[c.start:c.end], scratch
	}
	inner := row[c.start+1 : c.end-1]
	if bytes.IndexByte(inner, '"') < 0 {
		return inner, scratch
	}
	from := len(scratch)
	for i := 0; i < len(inner); i++ {
		scratch = append(scratch, inner[i])
		if inner[i] == '"' {
			i++
		}
	}
	return scratch[from:], scratch
}

package reports

import (
	"bytes"
	"context"
	"fmt"
	"io"
	"strings"
)

// BatchPart is what a run that did not come to its end left of its result.
type BatchPart struct {
	Rows                     int
	Size                     int64 // up to the end of the last whole row
	Drafted, Stopped, Failed int

	head, last []byte // the first and the last row as written, with line ends
}

// ReadPart reads a part file. A row at its end that is not whole does not
// count: Size says where it begins. A file without a whole header is no part:
// the error is then a [*PartError], else that of the reader.
func ReadPart(r io.Reader) (*BatchPart, error) {
	s := newRowScanner(r, ',')
	s.largest = 4 * largestRow // a row that was read, and what was added to it
	p := &BatchPart{}
	if err := p.readHead(s); err != nil {
		return nil, err
	}
	var cells []cell
	for {
		p.Size = s.consumed
		row, err := s.next()
		if err == io.EOF || err == nil && (!row.ended || row.fault != noFault) {
			return p, nil
		}
		if err != nil {
			return nil, err
		}
		cells = splitCells(row.text, s.comma, cells[:0])
		if len(cells) < len(resultColumns) {
			return p, nil
		}
		result := cells[len(cells)-len(resultColumns):]
		switch problem, dose := result[len(result)-1], result[0]; {
		case problem.start < problem.end:
			p.Failed++
		case dose.start == dose.end:
			p.Stopped++
		default:
			p.Drafted++
		}
		p.Rows++
		p.last = append(append(p.last[:0], row.text...), lineEnd(row)...)
	}
}

// readHead looks for the separator with which the header ends in the columns
// of the result.
func (p *BatchPart) readHead(s *rowScanner) error {
	for !s.eof && bytes.IndexByte(s.buf[s.start:s.end], '\n') < 0 && s.end-s.start <= s.largest {
		s.fill()
	}
	if s.err != nil {
		return s.err
	}
	if bytes.HasPrefix(s.buf[s.start:s.end], []byte(byteOrderMark)) {
		s.consume(len(byteOrderMark))
		p.head = append(p.head, byteOrderMark...)
	}
	for _, s.comma = range []byte{',', ';', '\t'} {
		q := quoting{comma: s.comma, firstEnd: -1}
		if !q.advance(s.buf[s.start:s.end], s.eof) || q.fault != noFault {
			continue
		}
		if !bytes.HasSuffix(s.buf[s.start:s.start+q.end], []byte(string(s.comma)+strings.Join(resultColumns, string(s.comma)))) {
			continue
		}
		row, err := s.next()
		if err != nil || !row.ended {
			break
		}
		p.head = append(append(p.head, row.text...), lineEnd(row)...)
		return nil
	}
	return &PartError{"there is no whole header in it", "start again with --force"}
}

func lineEnd(row rawRow) string {
	if row.crlf {
		return "\r\n"
	}
	return "\n"
}

// goOn finds the place in the table where an earlier run stopped: its header
// and its last row must be what this run would write.
func (r *batchRun) goOn(ctx context.Context, head []byte, b *block) (*block, error) {
	part := r.o.Part
	if !bytes.Equal(head, part.head) {
		return nil, &PartError{"the part file has another header than this table", "start again with --force, or go on with the table it was made from"}
	}
	*r.counts = BatchCounts{Rows: part.Rows, Before: part.Rows, Drafted: part.Drafted, Stopped: part.Stopped, Failed: part.Failed,
		Separator: r.counts.Separator, Mark: r.counts.Mark, Neutralised: r.counts.Neutralised}
	if part.Rows == 0 {
		return b, nil
	}
	for b.first+len(b.rows)-1 < part.Rows {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		if b.err != nil {
			return nil, b.err
		}
		if r.ended {
			return nil, &PartError{fmt.Sprintf("the part file has %d rows, the table only %d", part.Rows, r.rows), "start again with --force, or go on with the table it was made from"}
		}
		r.fill(b)
	}
	i := part.Rows - b.first
	last := &block{first: part.Rows, text: b.text, rows: b.rows[i : i+1]}
	r.newWorker().block(last)
	if last.err != nil {
		return nil, last.err
	}
	if !bytes.Equal(last.out, part.last) {
		return nil, &PartError{fmt.Sprintf("row %d, the last of the part file, is not what this run writes for it", part.Rows),
			"the table, the date, the method or the program has changed; start again with --force"}
	}
	b.first, b.rows = part.Rows+1, b.rows[i+1:]
	return b, nil
}

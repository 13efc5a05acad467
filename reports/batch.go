// A batch runs through four hands: a reader cuts the table into blocks of whole
// rows, workers draft the rows of a block and write its part of the result, a
// writer takes the blocks in their order, and used blocks go back to the
// reader. There are a few blocks and no more, so memory does not grow with the
// table, and the order of the result is that of the table whatever the number
// of workers.

package reports

import (
	"bytes"
	"context"
	"io"
	"runtime"
	"sync"

	"tayra/dose"
)

const (
	blockRows       = 256
	blockWorksheets = 8         // rows of a block when worksheets are made: they take far longer
	blockBytes      = 256 << 10 // long rows make shorter blocks
)

// BatchOptions says how a table is read and what is made of it.
type BatchOptions struct {
	Columns *BatchColumns // nil: the table's headings are those of dose.Columns
	Workers int           // rows are drafted by so many at once; 0: one a processor

	// Worksheet is given the worksheet of every row that is not at fault, with
	// the number of the row from 1 and the case that it stands for. It is
	// called from several goroutines, out of order. A *RowError puts the fault
	// into the row; any other error ends the batch.
	Worksheet func(row int, ws *dose.Worksheet, in *dose.CaseInput) error

	// Part is what an earlier run left, to go on from there: see ReadPart.
	Part *BatchPart

	// Progress is told how far the result is written, in rows and in bytes of
	// the table, from one goroutine. An error ends the batch.
	Progress func(rows int, read int64) error

	// Notice is given what the reader of a table should know before the rows
	// are worked out, one sentence a call.
	Notice func(text string)
}

// A RowError is a fault of one row, said in its cell "error".
type RowError struct{ Problem string }

// Error is the problem.
func (e *RowError) Error() string { return e.Problem }

// A PartError says why a part file does not belong to the table or the call.
type PartError struct{ Problem, Remedy string }

// Error says what is wrong and what to do.
func (e *PartError) Error() string { return e.Problem + "; " + e.Remedy }

// A WriteError is a result that could not be written on.
type WriteError struct{ Err error }

// Error is the error of the writer.
func (e *WriteError) Error() string { return e.Err.Error() }

// Unwrap gives the error of the writer.
func (e *WriteError) Unwrap() error { return e.Err }

// BatchCounts is what became of the rows.
type BatchCounts struct {
	Rows                       int // written, those of an earlier run included
	Before                     int // of these, by the earlier run
	Drafted, Stopped, Failed   int // of Rows
	Blank                      int // rows without anything in them, left out
	Neutralised, DecimalCommas int // cells, of this run
	Separator                  byte
	Mark                       byte // of decimals, as written
}

// add counts a block that is written.
func (c *BatchCounts) add(b *BatchCounts) {
	c.Rows += b.Drafted + b.Stopped + b.Failed
	c.Drafted += b.Drafted
	c.Stopped += b.Stopped
	c.Failed += b.Failed
	c.Blank += b.Blank
	c.Neutralised += b.Neutralised
	c.DecimalCommas += b.DecimalCommas
}

// block is some rows of the table on their way.
type block struct {
	first  int // number of its first row, from 1
	text   []byte
	rows   []blockRow
	read   int64 // bytes of the table up to its end
	out    []byte
	counts BatchCounts
	err    error
	done   chan struct{}
}

type blockRow struct {
	start, end, faultAt int
	line, lines         int
	fault               rowFault
}

// Batch drafts every row of a table of animals and writes the table with the
// columns of the result behind its own. Rows keep their order; a row at fault
// carries what is wrong with it and never ends the run; cells that are passed
// through stay as they are, byte for byte, but for those that a spreadsheet
// would run as a formula, which get an apostrophe.
//
// Whole rows only are handed to w, in one Write a block. The counts are right
// whatever the error, which is a [*TableError] or an [dose.InputErrors] where
// the table, or what shared says of all rows, cannot be used, and then nothing
// is written; a [*PartError]; a [*WriteError]; that of the reader, of Worksheet
// or of ctx, and then the rows before it are written.
func Batch(ctx context.Context, r io.Reader, w io.Writer, shared *dose.CaseInput, o BatchOptions) (counts BatchCounts, err error) {
	batch, err := dose.NewBatch(shared)
	if err != nil {
		return counts, err
	}
	s := newRowScanner(r, ',')
	head, err := readHead(s, o.Columns)
	if err != nil {
		return counts, err
	}
	if o.Workers <= 0 {
		o.Workers = runtime.GOMAXPROCS(0)
	}
	run := &batchRun{o: o, batch: batch, scanner: s, head: head, writer: w, counts: &counts}
	err = run.all(ctx)
	return counts, err
}

type batchRun struct {
	o       BatchOptions
	batch   *dose.Batch
	scanner *rowScanner
	head    *batchHead
	writer  io.Writer
	counts  *BatchCounts // the writer's

	rows  int  // read so far; the reader's
	ended bool // the table has no more rows; the reader's
}

func (r *batchRun) all(ctx context.Context) error {
	first, err := r.start(ctx)
	if err != nil {
		return err
	}
	// A block is in the reader's hand, in a worker's, or waits to be written.
	blocks := 2*r.o.Workers + 2
	free := make(chan *block, blocks)
	for range blocks - 1 {
		free <- &block{done: make(chan struct{}, 1)}
	}
	work, ordered := make(chan *block, blocks), make(chan *block, blocks)
	stop := make(chan struct{})
	go r.read(ctx, first, free, work, ordered, stop)
	var workers sync.WaitGroup
	for range r.o.Workers {
		workers.Go(func() { r.work(work, stop) })
	}
	err = r.write(ctx, free, ordered)
	// Nobody waits for a reader that waits for a slow pipe; but no worker is
	// left in the middle of a file.
	close(stop)
	workers.Wait()
	return err
}

// work drafts blocks until there are no more, or the batch has ended.
func (r *batchRun) work(blocks <-chan *block, stop <-chan struct{}) {
	worker := r.newWorker()
	for {
		select {
		case b, open := <-blocks:
			if !open {
				return
			}
			worker.block(b)
			b.done <- struct{}{}
		case <-stop:
			return
		}
	}
}

// start reads the first block, which shows the decimal mark of the table, and
// writes the header, or finds the place where an earlier run stopped.
func (r *batchRun) start(ctx context.Context) (*block, error) {
	h, first := r.head, &block{done: make(chan struct{}, 1)}
	r.fill(first)
	if h.comma == ';' {
		h.mark = r.decimalMark(first)
	}
	r.counts.Separator, r.counts.Mark, r.counts.Neutralised = h.comma, h.mark, h.neutralised
	if r.o.Notice != nil {
		for _, d := range h.doubts {
			r.o.Notice(d)
		}
	}
	var line []byte
	if h.bom {
		line = append(line, byteOrderMark...)
	}
	line = append(append(line, h.row...), h.eol...)
	if r.o.Part != nil {
		return r.goOn(ctx, line, first)
	}
	if _, err := r.writer.Write(line); err != nil {
		return nil, &WriteError{err}
	}
	return first, nil
}

// fill reads the rows of a block. An error of the reader comes with the rows
// before it.
func (r *batchRun) fill(b *block) {
	b.first, b.text, b.rows, b.err, b.counts = r.rows+1, b.text[:0], b.rows[:0], nil, BatchCounts{}
	most := blockRows
	if r.o.Worksheet != nil {
		most = blockWorksheets
	}
	for !r.ended && len(b.rows) < most && len(b.text) < blockBytes {
		raw, err := r.scanner.next()
		if err != nil {
			r.ended = true
			if err != io.EOF {
				b.err = err
			}
			break
		}
		if isBlank(raw.text, r.head.comma) {
			b.counts.Blank++
			continue
		}
		start := len(b.text)
		b.text = append(b.text, raw.text...)
		b.rows = append(b.rows, blockRow{start, len(b.text), raw.faultAt, raw.line, raw.lines, raw.fault})
		r.rows++
	}
	b.read = r.scanner.consumed
}

// isBlank says whether nothing is written in a row: the empty rows that a
// spreadsheet leaves below its table.
func isBlank(row []byte, comma byte) bool {
	for _, b := range row {
		if b != comma && b != ' ' && b != '"' && b != '\t' && b != '\r' {
			return false
		}
	}
	return true
}

// read fills blocks and hands each to the workers and, in order, to the writer.
func (r *batchRun) read(ctx context.Context, b *block, free <-chan *block, work, ordered chan<- *block, stop <-chan struct{}) {
	defer close(work)
	defer close(ordered)
	for {
		// Neither channel is ever full: each has room for every block.
		work <- b
		ordered <- b
		if r.ended || ctx.Err() != nil {
			return
		}
		select {
		case b = <-free:
		case <-stop:
			return
		}
		r.fill(b)
	}
}

// write puts the blocks out in order. When ctx ends, what is ready is written:
// a reader that waits for a slow pipe is not waited for.
func (r *batchRun) write(ctx context.Context, free chan<- *block, ordered <-chan *block) error {
	for {
		var b *block
		open := true
		select {
		case b, open = <-ordered:
		case <-ctx.Done():
			select {
			case b, open = <-ordered:
			default:
				return ctx.Err()
			}
		}
		if !open {
			return ctx.Err()
		}
		<-b.done
		if len(b.out) > 0 {
			if _, err := r.writer.Write(b.out); err != nil {
				return &WriteError{err}
			}
		}
		r.counts.add(&b.counts)
		if b.err != nil {
			return b.err
		}
		if r.o.Progress != nil {
			if err := r.o.Progress(r.counts.Rows, b.read); err != nil {
				return err
			}
		}
		free <- b
	}
}

// decimalMark is how decimals are written into a table with semicolons. These
// come from places where the decimal mark is a comma, unless the table's own
// quantities show points and no comma.
func (r *batchRun) decimalMark(b *block) byte {
	points := false
	var cells []cell
	for _, row := range b.rows {
		text := b.text[row.start:row.end]
		if row.fault != noFault {
			continue
		}
		cells = splitCells(text, r.head.comma, cells[:0])
		for _, read := range r.head.reads {
			if read.at >= len(cells) || !read.column.Quantity() {
				continue
			}
			value, _ := cells[read.at].value(text, nil)
			if _, _, comma := pointForComma(value, nil); comma {
				return ','
			}
			points = points || bytes.IndexByte(value, '.') >= 0
		}
	}
	if points {
		return '.'
	}
	return ','
}

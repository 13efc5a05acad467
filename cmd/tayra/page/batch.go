package page

import (
	"bytes"
	"context"
	"encoding/csv"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"net/http"
	"net/url"
	"strconv"
	"strings"
	"sync"
	"time"

	"tayra/dose"
	"tayra/metabolic"
	"tayra/reports"
)

const (
	maxTable   = 32 << 20
	batchTime  = 15 * time.Minute
	shownRows  = 50   // of the result, on the page; the file has them all
	mostSheets = 1000 // in one file, which is made in memory, 100 kB a worksheet
)

// batchLine is a line of the answer to a table: how far the work is, and last
// what became of it, followed by the file itself.
type batchLine struct {
	Rows   int    `json:"rows"`
	Share  int    `json:"share"` // of the table, in percent
	Done   bool   `json:"done"`
	Failed bool   `json:"failed"` // ended without a file
	Say    string `json:"say"`
	HTML   string `json:"html"`
	Name   string `json:"name"`
	Type   string `json:"type"`
}

// batch drafts every row of a table and answers with what PathValue "what" asks
// for: the table with the drafts, or the worksheets in one PDF. The answer is
// lines of JSON and, behind the last line, the file.
func (s *server) batch(w http.ResponseWriter, r *http.Request) {
	what := r.PathValue("what")
	if what != "table" && what != "worksheets" {
		http.NotFound(w, r)
		return
	}
	out := http.NewResponseController(w)
	out.SetWriteDeadline(time.Now().Add(batchTime))
	shared, ok := sharedFrom(w, r)
	if !ok {
		return
	}
	name, ok := uploadName(w, r, "the table")
	if !ok {
		return
	}
	data, ok := upload(w, r, name)
	if !ok {
		return
	}
	line := json.NewEncoder(w)
	b := &batchWork{total: len(data)}
	if what == "worksheets" {
		paper, err := reports.ParsePaper(r.URL.Query().Get("paper"))
		if err != nil {
			refuse(w, http.StatusBadRequest, err.Error())
			return
		}
		b.bundle, b.laid = reports.NewPDFBundle(paper), map[int]*reports.LaidOut{}
	}
	w.Header().Set("Content-Type", "application/x-ndjson")
	told := time.Now()
	b.tell = func(rows int, share int) {
		if time.Since(told) < 100*time.Millisecond {
			return
		}
		told = time.Now()
		line.Encode(batchLine{Rows: rows, Share: share, Say: count(rows, "row is", "rows are") + " worked out."})
		out.Flush()
	}
	last, file := b.run(r.Context(), name, data, shared)
	line.Encode(last)
	w.Write(file)
}

// sharedFrom reads what all rows share: the fields of the form for the date,
// who prepares the worksheets and the method. They come as a header, since the
// body is the table.
func sharedFrom(w http.ResponseWriter, r *http.Request) (*dose.CaseInput, bool) {
	text, err := url.PathUnescape(r.Header.Get("X-Shared"))
	var pairs []pair
	if err == nil {
		err = json.Unmarshal([]byte(text), &pairs)
	}
	var in *dose.CaseInput
	if err == nil {
		in, err = caseOf(pairs)
	}
	if err != nil {
		refuse(w, http.StatusBadRequest, "what all rows share cannot be read: "+err.Error())
		return nil, false
	}
	return in, true
}

// batchWork is one table on its way.
type batchWork struct {
	total  int
	tell   func(rows, share int)
	bundle *reports.PDFBundle // nil when the table is asked for

	mu    sync.Mutex
	laid  map[int]*reports.LaidOut // by row: laid out, not yet drawn
	drawn int                      // rows that are behind
}

func (b *batchWork) run(ctx context.Context, name string, data []byte, shared *dose.CaseInput) (last batchLine, file []byte) {
	var notices []string
	options := reports.BatchOptions{
		Notice: func(text string) { notices = append(notices, text) },
		Progress: func(rows int, read int64) error {
			b.tell(rows, int(100*read/int64(max(b.total, 1))))
			return b.upTo(rows)
		},
	}
	if b.bundle != nil {
		options.Worksheet = b.layOut
	}
	var table bytes.Buffer
	counts, err := reports.Batch(ctx, bytes.NewReader(data), &table, shared, options)
	file = table.Bytes()
	last = batchLine{Done: true, Rows: counts.Rows, Share: 100, Name: batchName(name, "-drafted.csv"), Type: "text/csv"}
	if err == nil && b.bundle != nil {
		last.Name, last.Type = batchName(name, "-worksheets.pdf"), "application/pdf"
		if b.bundle.Sheets() == 0 {
			err = errors.New("not one row gives a worksheet; the column error says why")
		} else {
			file, err = b.bundle.Bytes()
		}
	}
	if err != nil {
		return batchLine{Done: true, Failed: true, Rows: counts.Rows, Say: name + ": " + batchFault(err)}, nil
	}
	last.Say = fmt.Sprintf("%s: %d drafted, %d stopped, %d failed.", count(counts.Rows, "row", "rows"), counts.Drafted, counts.Stopped, counts.Failed)
	if b.bundle != nil {
		last.Say = fmt.Sprintf("%s in one file. %s", count(b.bundle.Sheets(), "worksheet", "worksheets"), last.Say)
		return last, file
	}
	result := &batchTable{Counts: counts, Notices: append(notices, remarks(&counts)...)}
	result.read(file)
	if last.HTML, err = render("batch.html", result); err != nil {
		last = batchLine{Done: true, Failed: true, Say: err.Error()}
	}
	return last, file
}

// layOut takes the worksheet of one row; it is called from several goroutines.
func (b *batchWork) layOut(row int, ws *dose.Worksheet, _ *dose.CaseInput) error {
	laid, err := b.bundle.LayOut(ws)
	if err != nil {
		return &reports.RowError{Problem: "no worksheet can be made: " + err.Error()}
	}
	b.mu.Lock()
	defer b.mu.Unlock()
	b.laid[row] = laid
	return nil
}

// upTo draws the worksheets of the rows that are behind, in their order.
func (b *batchWork) upTo(rows int) error {
	if b.bundle == nil {
		return nil
	}
	for ; b.drawn < rows; b.drawn++ {
		b.mu.Lock()
		laid := b.laid[b.drawn+1]
		delete(b.laid, b.drawn+1)
		b.mu.Unlock()
		if laid == nil {
			continue // a row at fault
		}
		if b.bundle.Sheets() == mostSheets {
			return errors.New("more than " + strconv.Itoa(mostSheets) + " worksheets do not go into one file; `tayra batch --pdf-dir` writes one file each")
		}
		b.bundle.Add(laid)
	}
	return nil
}

// batchFault says what ended a batch; faults of what all rows share by the
// names of their fields.
func batchFault(err error) string {
	var faults dose.InputErrors
	if !errors.As(err, &faults) {
		return err.Error()
	}
	var parts []string
	for _, e := range faults {
		f := faultOf(e)
		parts = append(parts, strings.TrimPrefix(f.Label+": ", ": ")+f.Text)
	}
	return strings.Join(parts, " ")
}

// remarks are what is to be known of the whole table.
func remarks(c *reports.BatchCounts) []string {
	var out []string
	if c.Blank > 0 {
		out = append(out, count(c.Blank, "empty row", "empty rows")+" left out")
	}
	if c.DecimalCommas > 0 {
		out = append(out, "decimal commas read in "+count(c.DecimalCommas, "cell", "cells"))
	}
	if c.Mark == ',' {
		out = append(out, "numbers are written with a decimal comma, as in the table")
	}
	if c.Neutralised > 0 {
		out = append(out, count(c.Neutralised, "cell", "cells")+" that a spreadsheet would run as a formula got an apostrophe")
	}
	return out
}

// batchTable is the head of a result, as the page shows it.
type batchTable struct {
	Counts  reports.BatchCounts
	Notices []string
	Rows    []batchRow
	More    int // rows that only the file has
}

// batchRow is one row of the result. A dose stands with its range or not at
// all.
type batchRow struct {
	Number, Case, Animal, Species string
	Dose, Amount, Every, Range    string
	Stops, Warns                  []string
	Error                         string
}

// read takes the first rows of a result.
func (t *batchTable) read(file []byte) {
	r := csv.NewReader(bytes.NewReader(bytes.TrimPrefix(file, []byte("\ufeff"))))
	r.Comma, r.FieldsPerRecord, r.LazyQuotes, r.ReuseRecord = rune(t.Counts.Separator), -1, true, true
	head, err := r.Read()
	if err != nil {
		return
	}
	at := map[string]int{}
	for i, h := range head {
		at[strings.ToLower(strings.TrimSpace(h))] = i // the result's own columns are the last
	}
	for len(t.Rows) < shownRows {
		cells, err := r.Read()
		if errors.Is(err, io.EOF) {
			return
		}
		if err != nil {
			break // a row that only its own reader can read; the file has it
		}
		cell := func(name string) string {
			if i, ok := at[name]; ok && i < len(cells) {
				return cells[i]
			}
			return ""
		}
		t.Rows = append(t.Rows, t.row(len(t.Rows)+1, cell))
	}
	t.More = t.Counts.Rows - len(t.Rows)
}

func (t *batchTable) row(n int, cell func(string) string) batchRow {
	out := batchRow{Number: strconv.Itoa(n), Case: cell("case"), Animal: cell("animal"), Species: cell("species"), Error: cell("error")}
	for c := range strings.FieldsSeq(cell("cautions")) {
		slug, level, _ := strings.Cut(c, ":")
		switch dose.Level(level) {
		case dose.Stop:
			out.Stops = append(out.Stops, slug)
		case dose.Warn:
			out.Warns = append(out.Warns, slug)
		}
	}
	dosePerKg, unit := cell("drafted_dose_per_kg"), cell("drafted_unit")
	if dosePerKg == "" {
		return out
	}
	amount, hour, perHour := strings.Cut(unit, "/")
	if amount = strings.ReplaceAll(amount, "IU", "units"); perHour {
		hour = "/" + hour
	}
	out.Dose = t.figures(dosePerKg) + " " + amount + "/kg" + hour
	out.Range = t.figures(cell("range90_low_per_kg")+" to "+cell("range90_high_per_kg")) + " " + amount + "/kg" + hour
	out.Amount = t.figures(cell("drafted_dose")) + " " + amount + hour
	out.Every = strings.ReplaceAll(cell("plan"), "-", " ")
	if h := cell("drafted_interval_h"); h != "" {
		out.Every = t.figures(h) + " hours"
	}
	return out
}

// figures prints the numbers of a cell, "5.59017 to 11.1803", to the figures of
// a dose.
func (t *batchTable) figures(s string) string {
	parts := strings.Split(s, " to ")
	for i, p := range parts {
		if t.Counts.Mark == ',' {
			p = strings.Replace(p, ",", ".", 1)
		}
		v, err := strconv.ParseFloat(p, 64)
		if err != nil {
			return s
		}
		parts[i] = metabolic.Significant(v, 3)
	}
	return strings.Join(parts, " to ")
}

// batchName names a result after its table.
func batchName(table, ending string) string {
	base := table
	if i := strings.LastIndexByte(base, '.'); i > 0 {
		base = base[:i]
	}
	if base = plainName(base); base == "" {
		base = "animals"
	}
	return base + ending
}

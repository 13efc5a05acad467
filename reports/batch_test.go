package reports

import (
	"bytes"
	"context"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"testing/iotest"

	"pgregory.net/rapid"

	"tayra/dose"
)

// sharedByRows is what every table of the tests shares.
func sharedByRows() *dose.CaseInput { return &dose.CaseInput{Date: dose.E("2026-11-30")} }

// batchOf runs a table in memory.
func batchOf(t interface {
	Helper()
	Fatalf(string, ...any)
}, table string, o BatchOptions) (string, BatchCounts) {
	t.Helper()
	var out bytes.Buffer
	counts, err := Batch(context.Background(), strings.NewReader(table), &out, sharedByRows(), o)
	if err != nil {
		t.Fatalf("%v", err)
	}
	return out.String(), counts
}

const plainHead = "species,mass,drug,model_species,model_mass,dose,interval,source\n"

const plainRow = "capybara,48 kg,examplicillin,dog,20 kg,5 mg/kg,q12h,invented\n"

// tableOf writes a table of so many animals: no clock, no chance that a second
// run would not have. One row in twenty is stopped, one in twenty at fault.
func tableOf(rows int) []byte {
	random := rand.New(rand.NewPCG(1, 2))
	animals := []struct {
		name string
		kg   float64
	}{{"giant anteater", 33}, {"red panda", 4.5}, {"capybara", 48}, {"maned wolf", 24}, {"meerkat", 0.75}, {"tiger", 160}, {"red kangaroo", 50}}
	var b bytes.Buffer
	b.WriteString("case,animal,species,mass,drug,class,model_species,model_mass,dose,interval,route,source,keeper\n")
	for i := range rows {
		a := animals[random.IntN(len(animals))]
		kg := strconv.FormatFloat(a.kg*(0.8+0.4*random.Float64()), 'g', 4, 64)
		model, mass := "dog", "20 kg"
		switch random.IntN(20) {
		case 0:
			model, mass = a.name, kg+" kg" // one species: a stop
		case 1:
			mass = "20" // no unit
		}
		fmt.Fprintf(&b, "LW-%06d,animal %d,%s,%s kg,examplicillin,penicillin,%s,%s,%s mg/kg,q%dh,SC,\"practice protocol %d, invented\",keeper %d\n",
			i+1, i+1, a.name, kg, model, mass, []string{"2", "5", "12.5"}[random.IntN(3)], []int{8, 12, 24}[random.IntN(3)], random.IntN(9), random.IntN(30))
	}
	return b.Bytes()
}

func TestBatchGolden(t *testing.T) {
	folder := filepath.Join("..", "testdata", "batch")
	table, err := os.ReadFile(filepath.Join(folder, "animals.csv"))
	if err != nil {
		t.Fatal(err)
	}
	got, counts := batchOf(t, string(table), BatchOptions{})
	golden := filepath.Join(folder, "drafted.csv")
	if *update {
		if err := os.WriteFile(golden, []byte(got), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	if got != string(want) {
		t.Errorf("%s: %s\nIf it is meant: go test ./reports -update", golden, firstDifference([]byte(got), want))
	}
	if counts.Rows != 10 || counts.Drafted != 7 || counts.Stopped != 1 || counts.Failed != 2 || counts.Neutralised != 3 {
		t.Errorf("%+v", counts)
	}
}

// Headings of another language, semicolons, decimal commas, a byte-order mark,
// CRLF within cells and without, bare numbers whose unit the mapping gives.
func TestBatchForeignTable(t *testing.T) {
	folder := filepath.Join("..", "testdata", "batch")
	table, err := os.ReadFile(filepath.Join(folder, "tiere.csv"))
	if err != nil {
		t.Fatal(err)
	}
	mapping, err := os.ReadFile(filepath.Join(folder, "tiere.yaml"))
	if err != nil {
		t.Fatal(err)
	}
	columns, err := ReadBatchColumns(mapping)
	if err != nil {
		t.Fatal(err)
	}
	got, counts := batchOf(t, string(table), BatchOptions{Columns: columns})
	if counts.Drafted != 2 || counts.Failed != 1 || counts.Blank != 1 || counts.DecimalCommas != 3 || counts.Separator != ';' || counts.Mark != ',' {
		t.Errorf("%+v", counts)
	}
	lines := strings.SplitAfter(got, "\r\n")
	if !strings.HasPrefix(got, byteOrderMark+"Tierart;Gewicht;") || strings.Contains(strings.ReplaceAll(got, "\r\n", ""), "\n") {
		t.Errorf("the byte-order mark or the line ends are gone: %q", got)
	}
	// (41.5/18)^-0.25 = 0.811533, by Python: 8.11533 mg/kg, with a decimal comma.
	if want := `Myrmecophaga tridactyla;41,5;dog;18 kg;10 mg/kg;12;Protokoll 7 (erfunden);"Müller; Anna";8,11533;336,786;mg;12;`; !strings.HasPrefix(lines[1], want) {
		t.Errorf("%q, want %q", lines[1], want)
	}
	if !strings.Contains(lines[2], `write ""1,200 kg"" or ""1200 kg""`) {
		t.Errorf("a point that may be a mark of thousands: %q", lines[2])
	}
	if lines[3] != "red panda;4,5;dog;18 kg;2,5-5 mg/kg;8;Protokoll 7 (erfunden);\"zwei\r\n" || !strings.HasPrefix(lines[4], "Zeilen\";2,65165 to 5,3033;") {
		t.Errorf("a cell of two lines or a range: %q %q", lines[3], lines[4])
	}
}

// A table with semicolons whose own decimals have points gets points.
func TestBatchDecimalMark(t *testing.T) {
	head := strings.ReplaceAll(plainHead, ",", ";")
	row := func(mass string) string {
		// 5·(48/20)^-0.25 = 4.01714 and 5·(48.5/20)^-0.25 = 4.00675, by Python.
		return strings.Replace(strings.ReplaceAll(plainRow, ",", ";"), "48 kg", mass, 1)
	}
	for _, k := range []struct {
		mass string
		mark byte
		cell string
	}{{"48.5 kg", '.', ";4.00675;"}, {"48 kg", ',', ";4,01714;"}} {
		got, counts := batchOf(t, head+row(k.mass), BatchOptions{})
		if counts.Mark != k.mark || !strings.Contains(got, k.cell) {
			t.Errorf("%s: mark %c in %q", k.mass, counts.Mark, got)
		}
	}
	// A comma is read even where the table began with points; where it did not,
	// 1.234 may be twelve hundred and more.
	got, counts := batchOf(t, head+strings.Repeat(row("48.5 kg"), blockRows)+row("48,5 kg")+row("1.234 kg"), BatchOptions{})
	if counts.DecimalCommas != 1 || counts.Failed != 0 || counts.Mark != '.' {
		t.Errorf("%+v %q", counts, got)
	}
	got, counts = batchOf(t, head+row("48,5 kg")+row("48.5 kg")+row("1.234 kg"), BatchOptions{})
	if counts.DecimalCommas != 1 || counts.Failed != 1 || counts.Mark != ',' || !strings.Contains(got, `"mass: ""1.234 kg"" has a point`) {
		t.Errorf("%+v %q", counts, got)
	}
	// And nowhere else.
	got, counts = batchOf(t, plainHead+strings.Replace(plainRow, "48 kg", `"48,5 kg"`, 1), BatchOptions{})
	if counts.Failed != 1 || counts.DecimalCommas != 0 || !strings.Contains(got, `has a comma`) {
		t.Errorf("%+v %q", counts, got)
	}
}

// What is passed through stays as it came, byte for byte.
func TestBatchPassesThrough(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		eol := rapid.SampledFrom([]string{"\n", "\r\n"}).Draw(r, "eol")
		notes := rapid.SliceOfN(rapid.StringOf(rapid.SampledFrom([]rune("ab ,;\"\r\n\té'"))), 1, 20).Draw(r, "notes")
		table := strings.TrimSuffix(plainHead, "\n") + ",note" + eol
		var rows []string
		for i, note := range notes {
			cell := `"` + strings.ReplaceAll(note, `"`, `""`) + `"`
			if runsAsFormula([]byte(note)) {
				cell = "x"
			} else if i%2 == 0 && !needsQuotes([]byte(note), ',') {
				cell = note
			}
			row := strings.TrimSuffix(plainRow, "\n") + "," + cell
			rows = append(rows, row)
			table += row + eol
		}
		got, counts := batchOf(r, table, BatchOptions{})
		if counts.Drafted != len(notes) || counts.Neutralised != 0 {
			r.Fatalf("%+v", counts)
		}
		_, got, _ = strings.Cut(got, eol)
		for _, row := range rows {
			if !strings.HasPrefix(got, row+",4.01714,") {
				r.Fatalf("%q does not begin with %q", got, row)
			}
			got = got[len(row):]
			_, got, _ = strings.Cut(got, eol)
		}
	})
}

// The result does not depend on the number of workers, nor on how the reader
// cuts the table.
func TestBatchKeepsOrder(t *testing.T) {
	table := tableOf(5000)
	var want bytes.Buffer
	counts, err := Batch(context.Background(), bytes.NewReader(table), &want, sharedByRows(), BatchOptions{Workers: 1})
	if err != nil || counts.Rows != 5000 || counts.Stopped == 0 || counts.Failed == 0 {
		t.Fatalf("%+v %v", counts, err)
	}
	for _, workers := range []int{2, 3, 8} {
		var got bytes.Buffer
		again, err := Batch(context.Background(), iotest.HalfReader(bytes.NewReader(table)), &got, sharedByRows(), BatchOptions{Workers: workers})
		if err != nil || again != counts || !bytes.Equal(got.Bytes(), want.Bytes()) {
			t.Errorf("%d workers: %+v %v", workers, again, err)
		}
	}
	var got bytes.Buffer
	small := table[:20000]
	if _, err := Batch(context.Background(), iotest.OneByteReader(bytes.NewReader(small)), &got, sharedByRows(), BatchOptions{}); err != nil {
		t.Fatal(err)
	}
	whole, _ := batchOf(t, string(small), BatchOptions{})
	if got.String() != whole {
		t.Error("byte by byte the table reads otherwise")
	}
}

func TestBatchNamesFaultsOfTheTable(t *testing.T) {
	for name, k := range map[string]struct{ table, says string }{
		"empty":                {"", "the table is empty"},
		"blank":                {"\n\n \n", "the table is empty"},
		"no header":            {plainRow, "there is no header"},
		"a column missing":     {strings.Replace(plainHead, "mass,", "", 1), "column mass is missing"},
		"columns missing":      {"species,notes\n", "columns mass, model_species, model_mass, dose, interval, source are missing"},
		"two of one name":      {"species,Species ," + plainHead, `two columns are called "Species": number 1 and number 2`},
		"two of one name, too": {strings.Replace(plainHead, "drug", "Model species", 1), "two columns are called"},
		"two notes":            {"note,NOTE," + plainHead, "two columns are called"},
		"a result column":      {"error," + plainHead, `is called "error", which is a column that is written`},
		"UTF-16":               {"\xff\xfes\x00p\x00", "UTF-16"},
		"Latin-1":              {"Gr\xf6\xdfe," + plainHead, "not UTF-8"},
		"a spreadsheet":        {"PK\x03\x04\x14\x00\n", "a spreadsheet file"},
		"old line ends":        {strings.ReplaceAll(plainHead+plainRow, "\n", "\r"), "carriage return"},
		"broken quotes":        {`spe"cies,mass,` + "\n", "the quotes in the header are broken"},
		"a quote left open":    {`"species,` + plainHead, "the quotes in the header are broken"},
		"a line without end":   {strings.Repeat("x", largestRow+scanChunk), "the first line is over"},
	} {
		var out bytes.Buffer
		counts, err := Batch(context.Background(), strings.NewReader(k.table), &out, sharedByRows(), BatchOptions{})
		var fault *TableError
		if !errors.As(err, &fault) || !strings.Contains(err.Error(), k.says) || fault.Remedy == "" {
			t.Errorf("%s: %v, want %q", name, err, k.says)
		}
		if out.Len() > 0 || counts.Rows > 0 {
			t.Errorf("%s: %d bytes written", name, out.Len())
		}
	}
	// Nothing is written for a method that cannot be.
	var out bytes.Buffer
	if _, err := Batch(context.Background(), strings.NewReader(plainHead+plainRow), &out, &dose.CaseInput{}, BatchOptions{}); err == nil || out.Len() > 0 {
		t.Errorf("no date: %v, %d bytes", err, out.Len())
	}
}

// Headings are found however they are spaced and in whatever case; a heading
// that looks like a slip is said.
func TestBatchHeadings(t *testing.T) {
	var notices []string
	table := "Species,MASS,Model species,model-mass,Dose,Interval,Source,margn\n" + "capybara,48 kg,dog,20 kg,5 mg/kg,q12h,invented,narrow\n"
	got, counts := batchOf(t, table, BatchOptions{Notice: func(text string) { notices = append(notices, text) }})
	if counts.Drafted != 1 {
		t.Errorf("%q", got)
	}
	if len(notices) != 1 || !strings.Contains(notices[0], `"margn" is passed through, not read; if margin is meant`) {
		t.Errorf("%q", notices)
	}
}

func TestBatchRowsAtFault(t *testing.T) {
	head := strings.TrimSuffix(plainHead, "\n") + ",note\n"
	row := strings.TrimSuffix(plainRow, "\n")
	for name, k := range map[string]struct {
		rows string
		want []string // what each row of the result begins with, and a part of its error
	}{
		"too few cells":     {row + "\n", []string{row + ",,,,,,,,,,,,", "8 cells where the header has 9"}},
		"too many":          {row + ",x,\"y,y\"\n", []string{row + ",x,,,", `too many: ""y,y""`}},
		"too many, empty":   {row + ",x,, \n", []string{row + ",x,4.0", ""}},
		"a quote in a cell": {"capy\"bara,48 kg\n" + row + ",x\n", []string{`"capy""bara,48 kg",,`, "line 2: the quotes are broken in cell 1", row + ",x,4.0", ""}},
		"a quote not closed": {`capybara,"48 kg` + "\n" + row + ",x\n" + row + ",y\n",
			[]string{`capybara,"""48 kg",,`, "broken in cell 2", row + ",x,4.0", "", row + ",y,4.0", ""}},
		"letters behind a quote": {`"capybara"x,48 kg` + "\r\n" + row + ",x\n", []string{`"""capybara""x,48 kg",`, "broken in cell 1", row + ",x,4.0", ""}},
		"a broken row that runs": {`capybara,=1,x"` + "\n", []string{`capybara,'=1,"x""",,`, "broken in cell 3"}},
		"the fault runs":         {`capybara,=x"` + "\n", []string{`capybara,"'=x""",,`, "broken in cell 2"}},
		"beyond the last column": {row + ",note,x\"\n", []string{row + ",note,,", "broken in cell 10"}},
		"not UTF-8":              {"capybara\xff,48 kg" + row[len("capybara,48 kg"):] + ",x\n", []string{"capybara\xff,48 kg", "species: "}},
		"NUL":                    {"capybara,48 kg\x00" + row[len("capybara,48 kg"):] + ",x\n", []string{"capybara,48 kg\x00", "mass: "}},
		"a cell of two lines, then a fault": {"\"capybara\nx\",48 kg,a\"\n" + row + ",x\n", []string{`"""capybara",,`, "line 2: the quotes are broken in cell 1",
			`"x"",48 kg,a""",,`, "line 3: the quotes are broken in cell 1", row + ",x,4.0", ""}},
		"the last without end":     {row + ",x", []string{row + ",x,4.0", ""}},
		"a quote at the end":       {row + `,"x`, []string{row + `,"""x",,`, "broken in cell 9"}},
		"two lines too many cells": {row + ",\"x\ny\",z,w\n", []string{row + ",\"x\ny\",,,", "11 cells where the header has 9, over lines 2 to 3"}},
	} {
		got, counts := batchOf(t, head+k.rows, BatchOptions{})
		records := splitRecords(t, got)
		if len(records) != 1+len(k.want)/2 || counts.Rows != len(k.want)/2 {
			t.Errorf("%s: %d rows in %q", name, len(records)-1, got)
			continue
		}
		for i := 0; i < len(k.want); i += 2 {
			record := records[1+i/2]
			if !strings.HasPrefix(record, k.want[i]) || !strings.Contains(record, k.want[i+1]) || k.want[i+1] == "" && !strings.HasSuffix(record, ",") {
				t.Errorf("%s: row %d is\n%q, want\n%q … %q", name, i/2+1, record, k.want[i], k.want[i+1])
			}
		}
	}
}

// splitRecords cuts a result at the line ends that are not within quotes.
func splitRecords(t interface {
	Helper()
	Fatalf(string, ...any)
}, result string) (records []string) {
	t.Helper()
	s := newRowScanner(strings.NewReader(result), ',')
	for {
		row, err := s.next()
		if err == io.EOF {
			return records
		}
		if err != nil || row.fault != noFault || !row.ended {
			t.Fatalf("the result is no table: %v, %+v", err, row)
		}
		records = append(records, string(row.text))
	}
}

// One line of 100 MB costs its row and no memory to speak of.
func TestBatchLongLine(t *testing.T) {
	long := io.MultiReader(strings.NewReader(plainHead+plainRow+"LW,\"ok\",x"), io.LimitReader(letters{}, 100<<20), strings.NewReader("\n"+plainRow))
	var out bytes.Buffer
	s := newRowScanner(long, ',')
	head, err := readHead(s, nil)
	if err != nil {
		t.Fatal(err)
	}
	batch, err := dose.NewBatch(sharedByRows())
	if err != nil {
		t.Fatal(err)
	}
	var counts BatchCounts
	run := &batchRun{o: BatchOptions{Workers: 1}, batch: batch, scanner: s, head: head, writer: &out, counts: &counts}
	if err := run.all(context.Background()); err != nil {
		t.Fatal(err)
	}
	records := splitRecords(t, out.String())
	if len(records) != 4 || counts.Drafted != 2 || counts.Failed != 1 || !strings.HasPrefix(records[2], `LW,"ok",,,`) || !strings.Contains(records[2], "line 3: the row is over 1048576 bytes long; it is left out from cell 3 on") {
		t.Errorf("%+v %.300q", counts, out.String())
	}
	if cap(s.buf) > 4*largestRow {
		t.Errorf("the scanner holds %d bytes", cap(s.buf))
	}
	// The same within quotes, and a first cell without end.
	for _, begin := range []string{`LW,"`, ``} {
		long := io.MultiReader(strings.NewReader(plainHead+begin), io.LimitReader(letters{}, 3<<20), strings.NewReader("\n"+plainRow))
		var out bytes.Buffer
		counts, err := Batch(context.Background(), long, &out, sharedByRows(), BatchOptions{})
		if err != nil || counts.Drafted != 1 || counts.Failed != 1 || out.Len() > 2000 {
			t.Errorf("%q: %+v %v, %d bytes", begin, counts, err, out.Len())
		}
	}
	// A quote left open over many lines, with megabytes behind it.
	row := strings.TrimSuffix(plainRow, "\n")
	many := plainHead + `"` + plainRow + strings.Repeat(plainRow, 60000)
	got, counts := batchOf(t, many, BatchOptions{})
	if counts.Failed != 1 || counts.Drafted != 60000 {
		t.Errorf("%+v", counts)
	}
	if records := splitRecords(t, got); !strings.HasPrefix(records[1], `"""`+row) {
		t.Errorf("%.200q", records[1])
	}
}

// letters reads as x without end.
type letters struct{}

func (letters) Read(p []byte) (int, error) {
	for i := range p {
		p[i] = 'x'
	}
	return len(p), nil
}

// A reader that fails, and a disk that is full: what was whole before is
// written and counted, and the error is the one that came.
func TestBatchErrorsOfFiles(t *testing.T) {
	table := tableOf(2000)
	failed := errors.New("the disk is on fire")
	var out bytes.Buffer
	counts, err := Batch(context.Background(), io.MultiReader(bytes.NewReader(table[:100000]), iotest.ErrReader(failed)), &out, sharedByRows(), BatchOptions{})
	if !errors.Is(err, failed) {
		t.Errorf("%v", err)
	}
	rows := bytes.Count(table[:100000], []byte("\n")) - 1
	if records := splitRecords(t, out.String()); len(records)-1 != counts.Rows || counts.Rows != rows {
		t.Errorf("%d rows written, %d counted, %d were there", len(records)-1, counts.Rows, rows)
	}
	if _, err := Batch(context.Background(), iotest.ErrReader(failed), &out, sharedByRows(), BatchOptions{}); !errors.Is(err, failed) {
		t.Errorf("at once: %v", err)
	}
	for _, room := range []int{0, 100, 50000} {
		full := &fullDisk{room: room}
		counts, err := Batch(context.Background(), bytes.NewReader(table), full, sharedByRows(), BatchOptions{})
		var fault *WriteError
		if !errors.As(err, &fault) || !errors.Is(err, errFull) {
			t.Errorf("room %d: %v", room, err)
		}
		if got := bytes.Count(full.whole, []byte("\n")); got > 0 && got != counts.Rows+1 {
			t.Errorf("room %d: %d rows counted, %d taken", room, counts.Rows, got-1)
		}
	}
}

var errFull = errors.New("no room")

// fullDisk takes whole writes while there is room.
type fullDisk struct {
	room  int
	whole []byte
}

func (d *fullDisk) Write(p []byte) (int, error) {
	if len(d.whole)+len(p) > d.room {
		return 0, errFull
	}
	d.whole = append(d.whole, p...)
	return len(p), nil
}

// Interrupted while the table comes slowly, a batch ends at once, with whole
// rows.
func TestBatchInterrupted(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	in, feed := io.Pipe()
	defer feed.Close()
	table := tableOf(3000)
	var out bytes.Buffer
	written := 0
	ended := make(chan error)
	go func() {
		counts, err := Batch(ctx, in, &out, sharedByRows(), BatchOptions{Progress: func(rows int, _ int64) error {
			if written = rows; rows >= blockRows {
				cancel()
			}
			return nil
		}})
		if counts.Rows != written {
			err = fmt.Errorf("%d rows counted, %d told", counts.Rows, written)
		}
		ended <- err
	}()
	go feed.Write(table[:len(table)/2]) // and no more: the reader waits
	if err := <-ended; !errors.Is(err, context.Canceled) {
		t.Fatalf("%v", err)
	}
	if records := splitRecords(t, out.String()); len(records)-1 != written || written < blockRows {
		t.Errorf("%d rows, %d told", len(records)-1, written)
	}
}

// A result that was cut off anywhere is gone on with to the same bytes.
func TestBatchResumes(t *testing.T) {
	table := tableOf(600)
	var whole bytes.Buffer
	counts, err := Batch(context.Background(), bytes.NewReader(table), &whole, sharedByRows(), BatchOptions{})
	if err != nil {
		t.Fatal(err)
	}
	head := bytes.IndexByte(whole.Bytes(), '\n') + 1
	rapid.Check(t, func(r *rapid.T) {
		cut := rapid.IntRange(head, whole.Len()).Draw(r, "cut")
		part, err := ReadPart(bytes.NewReader(whole.Bytes()[:cut]))
		if err != nil {
			r.Fatal(err)
		}
		out := bytes.NewBuffer(bytes.Clone(whole.Bytes()[:part.Size]))
		again, err := Batch(context.Background(), bytes.NewReader(table), out, sharedByRows(), BatchOptions{Part: part})
		if err != nil || !bytes.Equal(out.Bytes(), whole.Bytes()) {
			r.Fatalf("after %d of %d rows: %v", part.Rows, counts.Rows, err)
		}
		if again.Before != part.Rows || again.Rows != counts.Rows || again.Drafted != counts.Drafted || again.Stopped != counts.Stopped || again.Failed != counts.Failed {
			r.Fatalf("%+v, want %+v", again, counts)
		}
	})
}

func TestBatchRefusesAnotherPart(t *testing.T) {
	table := string(tableOf(400))
	whole, _ := batchOf(t, table, BatchOptions{})
	records := splitRecords(t, whole)
	part := strings.Join(records[:301], "\n") + "\n"
	for name, k := range map[string]struct {
		table, part, says string
		shared            *dose.CaseInput
	}{
		"another row":      {strings.Replace(table, "animal 300,", "animal 3OO,", 1), part, "row 300, the last of the part file", sharedByRows()},
		"another header":   {strings.Replace(table, "keeper", "warden", 1), part, "another header", sharedByRows()},
		"another method":   {table, part, "row 300", &dose.CaseInput{Date: dose.E("2026-11-30"), Method: dose.MethodInput{Basis: dose.E("relatives")}}},
		"a shorter table":  {table[:strings.Index(table, "LW-000200")], part, "the table only 199", sharedByRows()},
		"no header":        {table, "LW-1,x\n", "no whole header", sharedByRows()},
		"half a header":    {table, records[0][:50], "no whole header", sharedByRows()},
		"header, no end":   {table, records[0], "no whole header", sharedByRows()},
		"empty":            {table, "", "no whole header", sharedByRows()},
		"an edited result": {table, strings.Replace(part, records[300], strings.Replace(records[300], "q", "Q", 1), 1), "row 300", sharedByRows()},
	} {
		read, err := ReadPart(strings.NewReader(k.part))
		var out bytes.Buffer
		if err == nil {
			_, err = Batch(context.Background(), strings.NewReader(k.table), &out, k.shared, BatchOptions{Part: read})
		}
		var fault *PartError
		if !errors.As(err, &fault) || !strings.Contains(err.Error(), k.says) || out.Len() > 0 {
			t.Errorf("%s: %v, want %q", name, err, k.says)
		}
	}
}

// Every row that is not at fault gives the worksheet that a case file would.
func TestBatchWorksheets(t *testing.T) {
	table := string(tableOf(60))
	rows := make([]*dose.Worksheet, 61)
	_, counts := batchOf(t, table, BatchOptions{Worksheet: func(row int, ws *dose.Worksheet, in *dose.CaseInput) error {
		again, _, err := dose.ReadCase("case.yaml", dose.WriteCase(in))
		if err != nil {
			return err
		}
		c, err := again.Check()
		if err != nil {
			return err
		}
		w, err := dose.Draft(c)
		if err != nil {
			return err
		}
		a, _ := JSON(ws)
		b, _ := JSON(w)
		if !bytes.Equal(a, b) {
			return fmt.Errorf("row %d: %s", row, firstDifference(a, b))
		}
		rows[row] = ws
		if row == 7 {
			return &RowError{"a letter that is no letter"}
		}
		return nil
	}})
	made := 0
	for _, w := range rows {
		if w != nil {
			made++
		}
	}
	if made != counts.Drafted+counts.Stopped+1 {
		t.Errorf("%d worksheets, %+v", made, counts)
	}
	_, err := Batch(context.Background(), strings.NewReader(table), io.Discard, sharedByRows(), BatchOptions{Worksheet: func(int, *dose.Worksheet, *dose.CaseInput) error { return errFull }})
	if !errors.Is(err, errFull) {
		t.Errorf("%v", err)
	}
}

func TestReadBatchColumns(t *testing.T) {
	for text, says := range map[string]string{
		"species: Tierart\nmass: {column: Gewicht, unit: kg}\ndrug: {value: examplicillin}": "",
		"# nothing but a remark\n":          "",
		"spezies: Tierart":                  `line 1: no column is called "spezies"`,
		"species: Tierart\nspecies: Animal": "line 2: ",
		"species: Tierart\nanimal: tierart": `line 2: the heading "tierart" is named for species and for animal`,
		"species: [a, b]":                   "neither a heading nor a mapping",
		"species: *a":                       "line 1",
		"species: &a Tier":                  "line 1",
		"species:":                          "nothing is written",
		"species: {column: A, unit: kg}":    "holds no quantities",
		"mass: {unit: kg, value: 4 kg}":     "a value for every row beside",
		"mass: {einheit: kg}":               `"einheit" is no key`,
		"mass: {column: {a: b}}":            "column has no text",
		"- species":                         "no mapping",
		"species: a: b":                     "line 1",
		"a: b\n---\nc: d":                   "line ",
		"\xff":                              "not UTF-8",
	} {
		columns, err := ReadBatchColumns([]byte(text))
		if says == "" {
			if err != nil || columns == nil {
				t.Errorf("%q: %v", text, err)
			}
			continue
		}
		if err == nil || !strings.Contains(err.Error(), says) {
			t.Errorf("%q: %v, want %q", text, err, says)
		}
	}
	columns, err := ReadBatchColumns([]byte("mass: 041\nsource: 1.10\n"))
	if err != nil || columns.rule(dose.ColumnMass).heading != "041" || columns.rule(dose.ColumnSource).heading != "1.10" {
		t.Errorf("headings that are numbers: %+v %v", columns, err)
	}
	// A heading that the mapping names must be there.
	_, err = Batch(context.Background(), strings.NewReader(plainHead), io.Discard, sharedByRows(), BatchOptions{Columns: columns})
	if err == nil || !strings.Contains(err.Error(), `no column is called "041"`) {
		t.Errorf("%v", err)
	}
}

// Rows as the scanner finds them are those of encoding/csv, which turns CRLF
// within a cell into LF and leaves empty lines out.
func TestScannerAgainstEncodingCSV(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		table := rapid.StringOf(rapid.SampledFrom([]rune("ab,,\"\"\n\n\r é"))).Draw(r, "table")
		theirs := csv.NewReader(strings.NewReader(table))
		theirs.FieldsPerRecord = -1
		want, err := theirs.ReadAll()
		if err != nil {
			return // where it stops, we go on: see TestBatchRowsAtFault
		}
		s := newRowScanner(iotest.OneByteReader(strings.NewReader(table)), ',')
		var got [][]string
		for {
			row, err := s.next()
			if err == io.EOF {
				break
			}
			if err != nil || row.fault != noFault {
				r.Fatalf("%q: %v %+v", table, err, row)
			}
			if len(row.text) == 0 {
				continue
			}
			var cells []string
			for _, c := range splitCells(row.text, ',', nil) {
				value, _ := c.value(row.text, nil)
				cells = append(cells, strings.ReplaceAll(string(value), "\r\n", "\n"))
			}
			got = append(got, cells)
		}
		if fmt.Sprintf("%q", got) != fmt.Sprintf("%q", want) {
			r.Fatalf("%q is\n%q, want\n%q", table, got, want)
		}
	})
}

// Whatever the table, the result is a table: as many cells in every row, every
// row of the table once, the quoting sound for a strict reader.
func FuzzBatch(f *testing.F) {
	for _, s := range []string{plainHead + plainRow, plainHead + "\"a\nb,c\n" + plainRow, byteOrderMark + strings.ReplaceAll(plainHead+plainRow, ",", ";"), plainHead + "=1,-2,\"\"\"\r\n", "", "\xff\xfe"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, table string) {
		for _, text := range []string{table, plainHead + table} {
			var out bytes.Buffer
			counts, err := Batch(context.Background(), strings.NewReader(text), &out, sharedByRows(), BatchOptions{Workers: 1})
			if err != nil {
				if out.Len() > 0 {
					t.Fatalf("%v, and %q written", err, out.String())
				}
				continue
			}
			strict := csv.NewReader(strings.NewReader(strings.TrimPrefix(out.String(), byteOrderMark)))
			strict.Comma = rune(counts.Separator)
			records, err := strict.ReadAll()
			if err != nil {
				t.Fatalf("%q: %v", out.String(), err)
			}
			if len(records) != counts.Rows+1 || counts.Rows != counts.Drafted+counts.Stopped+counts.Failed {
				t.Fatalf("%q: %d rows, %+v", out.String(), len(records)-1, counts)
			}
			for _, record := range records {
				for _, value := range record {
					if runsAsFormula([]byte(value)) {
						t.Fatalf("%q would run", value)
					}
				}
			}
			part, err := ReadPart(bytes.NewReader(out.Bytes()))
			if err != nil || part.Rows != counts.Rows || part.Size != int64(out.Len()) || part.Failed != counts.Failed || part.Stopped != counts.Stopped {
				t.Fatalf("read back: %+v %v, want %+v", part, err, counts)
			}
		}
	})
}

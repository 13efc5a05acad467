package reports

import (
	"bufio"
	"bytes"
	"context"
	"encoding/csv"
	"fmt"
	"io"
	"runtime"
	"runtime/debug"
	"strconv"
	"testing"

	"tayra/dose"
)

// bareTable is the table on which batch is timed against its peers: the one
// that testdata/r/bareformula.R makes.
func bareTable(rows int) []byte {
	animals := []string{"giant anteater", "red panda", "capybara", "maned wolf", "meerkat"}
	middle := []float64{33, 4.5, 48, 24, 0.75}
	var b bytes.Buffer
	b.WriteString("species,mass,model_species,model_mass,dose,interval,source\n")
	for i := 1; i <= rows; i++ {
		k := (i - 1) % len(animals)
		kg := strconv.FormatFloat(middle[k]*(0.8+0.4*float64(i*7919%1000)/1000), 'g', 4, 64)
		fmt.Fprintf(&b, "%s,%s kg,dog,20 kg,%s mg/kg,%d h,invented\n", animals[k], kg, []string{"2", "5", "12.5"}[i%3], []int{8, 12, 24}[i%3])
	}
	return b.Bytes()
}

const benchRows = 200_000

// BenchmarkBatch drafts 200,000 rows. Its peers are BenchmarkPlainCopy in the
// same run and, with the tag outside, BenchmarkBareFormulaR.
func BenchmarkBatch(b *testing.B) {
	table := bareTable(benchRows)
	b.SetBytes(int64(len(table)))
	for b.Loop() {
		counts, err := Batch(context.Background(), bytes.NewReader(table), io.Discard, sharedByRows(), BatchOptions{})
		if err != nil || counts.Drafted != benchRows {
			b.Fatalf("%+v %v", counts, err)
		}
	}
	b.ReportMetric(benchRows*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
}

// BenchmarkPlainCopy reads the table and writes it again with encoding/csv, and
// does nothing else.
func BenchmarkPlainCopy(b *testing.B) {
	table := bareTable(benchRows)
	b.SetBytes(int64(len(table)))
	for b.Loop() {
		r := csv.NewReader(bufio.NewReaderSize(bytes.NewReader(table), 64<<10))
		r.ReuseRecord = true
		w := csv.NewWriter(bufio.NewWriterSize(io.Discard, 64<<10))
		rows := 0
		for {
			record, err := r.Read()
			if err == io.EOF {
				break
			}
			if err == nil {
				err = w.Write(record)
			}
			if err != nil {
				b.Fatal(err)
			}
			rows++
		}
		if w.Flush(); rows != benchRows+1 || w.Error() != nil {
			b.Fatal(rows, w.Error())
		}
	}
	b.ReportMetric(benchRows*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
}

// BenchmarkBatchMemory tells how much memory the program holds at most, in MB,
// for tables of 10,000 and of 1,000,000 rows.
func BenchmarkBatchMemory(b *testing.B) {
	for _, rows := range []int{10_000, 1_000_000} {
		b.Run(strconv.Itoa(rows), func(b *testing.B) {
			const repeated = 10_000
			table := bareTable(repeated)
			head := table[:bytes.IndexByte(table, '\n')+1]
			var most, before runtime.MemStats
			for b.Loop() {
				debug.FreeOSMemory()
				runtime.ReadMemStats(&before)
				body := make([]io.Reader, 0, rows/repeated+1)
				body = append(body, bytes.NewReader(head))
				for range rows / repeated {
					body = append(body, bytes.NewReader(table[len(head):]))
				}
				blocks := 0
				_, err := Batch(context.Background(), io.MultiReader(body...), io.Discard, sharedByRows(), BatchOptions{Progress: func(int, int64) error {
					if blocks++; blocks%16 == 0 {
						var now runtime.MemStats
						if runtime.ReadMemStats(&now); now.HeapInuse > most.HeapInuse {
							most = now
						}
					}
					return nil
				}})
				if err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(most.HeapInuse-min(before.HeapInuse, most.HeapInuse))/1e6, "MB")
		})
	}
}

// BenchmarkBatchWorksheets sets a worksheet for each of 100 rows, without
// writing it. To see what a second processor does, run it twice, with
// GOMAXPROCS=1 and 2 in the environment: with -cpu 1,2 the first round does not
// keep to the 1.
func BenchmarkBatchWorksheets(b *testing.B) {
	const rows = 100
	table := bareTable(rows)
	defer debug.SetGCPercent(debug.SetGCPercent(800)) // as the command does
	for b.Loop() {
		counts, err := Batch(context.Background(), bytes.NewReader(table), io.Discard, sharedByRows(), BatchOptions{Worksheet: func(_ int, ws *dose.Worksheet, in *dose.CaseInput) error {
			_, err := PDF(ws, PDFOptions{Case: dose.WriteCase(in)})
			return err
		}})
		if err != nil || counts.Drafted != rows {
			b.Fatalf("%+v %v", counts, err)
		}
	}
	b.ReportMetric(rows*float64(b.N)/b.Elapsed().Seconds(), "worksheets/s")
}

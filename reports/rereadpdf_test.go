package reports

import (
	"bytes"
	"compress/zlib"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"runtime"
	"strings"
	"testing"

	"github.com/jung-kurt/gofpdf"
	"github.com/pdfcpu/pdfcpu/pkg/api"
	"github.com/pdfcpu/pdfcpu/pkg/pdfcpu/model"

	"tayra/dose"
	"tayra/metabolic"
	"tayra/species"
)

// anteaterPDF is a worksheet of the example case.
func anteaterPDF(t testing.TB, o PDFOptions) []byte {
	t.Helper()
	text, err := os.ReadFile("../testdata/anteater.yaml")
	if err != nil {
		t.Fatal(err)
	}
	if o.Case == nil {
		o.Case = text
	}
	b, err := PDF(worksheetOf(t, "anteater.yaml", text), o)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// rawPDF writes objects 1, 2, … as a PDF whose catalog is object 1. extra goes
// into the trailer.
func rawPDF(extra string, objects ...string) []byte {
	var b bytes.Buffer
	b.WriteString("%PDF-1.7\n")
	offsets := make([]int, len(objects))
	for i, o := range objects {
		offsets[i] = b.Len()
		fmt.Fprintf(&b, "%d 0 obj\n%s\nendobj\n", i+1, o)
	}
	xref := b.Len()
	fmt.Fprintf(&b, "xref\n0 %d\n0000000000 65535 f \n", len(objects)+1)
	for _, o := range offsets {
		fmt.Fprintf(&b, "%010d 00000 n \n", o)
	}
	fmt.Fprintf(&b, "trailer\n<< /Size %d /Root 1 0 R %s >>\nstartxref\n%d\n%%%%EOF\n", len(objects)+1, extra, xref)
	return b.Bytes()
}

func packed(content []byte) []byte {
	var b bytes.Buffer
	z, _ := zlib.NewWriterLevel(&b, zlib.BestCompression)
	z.Write(content)
	z.Close()
	return b.Bytes()
}

// stream is an object with content.
func stream(dict string, content []byte) string {
	return fmt.Sprintf("<< %s /Length %d >>\nstream\n%s\nendstream", dict, len(content), content)
}

const (
	catalog   = "<< /Type /Catalog /Pages 2 0 R /Names << /EmbeddedFiles 4 0 R >> >>"
	pageTree  = "<< /Type /Pages /Kids [3 0 R] /Count 1 /MediaBox [0 0 612 792] >>"
	emptyPage = "<< /Type /Page /Parent 2 0 R >>"
	fileSpec  = "<< /Type /Filespec /F (record.json) /UF (record.json) /EF << /F 6 0 R >> >>"
)

// withAttachment is the smallest document that carries one file.
func withAttachment(file string, more ...string) []byte {
	return rawPDF("", append([]string{catalog, pageTree, emptyPage, "<< /Names [(a) 5 0 R] >>", fileSpec, file}, more...)...)
}

// The parts come out as they went in, whatever the paper.
func TestReadWorksheetPDF(t *testing.T) {
	caseText := []byte("# as typed\ncase: LW-0412\n")
	for _, paper := range []Paper{A4, Letter} {
		b := anteaterPDF(t, PDFOptions{Paper: paper, Case: caseText})
		a, err := ReadWorksheetPDF(b)
		if err != nil {
			t.Fatal(err)
		}
		ws, err := ReadRecord(a.Record)
		if err != nil {
			t.Fatal(err)
		}
		if a.Paper != paper || !bytes.Equal(a.Case, caseText) || a.Digest != Digest(a.Record) || a.Producer != "tayra "+dose.Version || ws.Case != "LW-0412" {
			t.Errorf("%v: paper %v, case %q, digest %q, producer %q", paper, a.Paper, a.Case, a.Digest, a.Producer)
		}
	}
}

// A document of another program with our record attached is read: who wrote the
// pages is for the comparison to say.
func TestReadOtherProducer(t *testing.T) {
	a, err := ReadWorksheetPDF(withAttachment(stream("", []byte("{}"))))
	if err != nil || string(a.Record) != "{}" || a.Case != nil || a.Digest != "" || a.Producer != "" || a.Paper != Letter {
		t.Errorf("%+v, %v", a, err)
	}
}

// encrypted is a worksheet under a password, by the PDF library.
func encrypted(t testing.TB, b []byte, user, owner string) []byte {
	t.Helper()
	withoutFolder()
	conf := model.NewAESConfiguration(user, owner, 256)
	var out bytes.Buffer
	if err := api.Encrypt(bytes.NewReader(b), &out, conf); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

// optimized is a worksheet saved again by another program, its objects packed.
func optimized(t testing.TB, b []byte) []byte {
	t.Helper()
	withoutFolder()
	conf := model.NewDefaultConfiguration()
	conf.WriteObjectStream, conf.WriteXRefStream = true, true
	var out bytes.Buffer
	if err := api.Optimize(bytes.NewReader(b), &out, conf); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

// A worksheet that another program has saved anew, its objects packed together,
// still gives its record back.
func TestReadSavedAgain(t *testing.T) {
	b := anteaterPDF(t, PDFOptions{Paper: Letter})
	want, err := ReadWorksheetPDF(b)
	if err != nil {
		t.Fatal(err)
	}
	again := optimized(t, b)
	if !bytes.Contains(again, []byte("/ObjStm")) {
		t.Fatal("the objects are not packed")
	}
	got, err := ReadWorksheetPDF(again)
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(got.Record, want.Record) || !bytes.Equal(got.Case, want.Case) || got.Paper != Letter || got.Digest != want.Digest {
		t.Errorf("paper %v, digest %q", got.Paper, got.Digest)
	}
}

// Everything that is no worksheet is refused by name, and costs little memory:
// no answer may take more than a few times the size of the largest record.
func TestReadRefuses(t *testing.T) {
	whole := anteaterPDF(t, PDFOptions{})
	var attached bytes.Buffer
	other := gofpdf.New("P", "mm", "A4", "")
	other.SetAttachments([]gofpdf.Attachment{{Content: []byte("an invoice"), Filename: "invoice.xml"}})
	other.AddPage()
	if err := other.Output(&attached); err != nil {
		t.Fatal(err)
	}

	kids := func(i int) string { return fmt.Sprintf("<< /Kids [%d 0 R %d 0 R] >>", i, i) }
	var manyNames strings.Builder
	for i := range 1000 {
		fmt.Fprintf(&manyNames, "(a%04d) 5 0 R ", i)
	}
	b := NewPDFBundle(A4)
	sheet, err := b.LayOut(exampleNamed(t, "anteater"))
	if err != nil {
		t.Fatal(err)
	}
	b.Add(sheet)
	bundle, err := b.Bytes()
	if err != nil {
		t.Fatal(err)
	}
	line, err := FitPDF(clearances(t), FitPDFOptions{Date: "2026-11-30"})
	if err != nil {
		t.Fatal(err)
	}

	bomb := packed(make([]byte, 64<<20)) // 64 kB
	content := stream("/Type /EmbeddedFile", []byte("{}"))
	many := []string{catalog, pageTree, emptyPage, kids(5)}
	for i := range 40 { // 2^40 nodes, if each were visited
		many = append(many, kids(6+i))
	}
	many = append(many, "<< /Names [(a) 5 0 R] >> % /EmbeddedFile")

	for _, k := range []struct {
		name    string
		data    []byte
		want    string
		foreign bool
	}{
		{"nothing", nil, "the file is empty", true},
		{"a text", []byte("case: LW-0412\n"), "no PDF", true},
		{"a plain PDF", rawPDF("", "<< /Type /Catalog /Pages 2 0 R >>", pageTree, emptyPage), "no file is attached", true},
		{"a PDF with another attachment", attached.Bytes(), "no file named record.json", true},
		{"too large", make([]byte, MaxWorksheetBytes+1), "over 16 MB", false},
		{"cut in the middle", whole[:len(whole)/2], "cut off", false},
		{"without its last line", whole[:len(whole)-8], "cut off", false},
		{"without its first half", append([]byte("%PDF-1.7\n"), whole[len(whole)/2:]...), "damaged", false},
		{"a password", encrypted(t, whole, "secret", "owner"), "encrypted", false},
		{"an empty password", encrypted(t, whole, "", "owner"), "encrypted", false},
		{"a bomb for a record", withAttachment(stream("/Type /EmbeddedFile /Filter /FlateDecode", bomb)), "record.json unpacks to more than 16 MB", false},
		{"a bomb in two filters", withAttachment(stream("/Type /EmbeddedFile /Filter [/FlateDecode /FlateDecode]", packed(bomb))), "packed several times", false},
		{"a bomb for metadata", rawPDF("", "<< /Type /Catalog /Pages 2 0 R /Metadata 5 0 R /Names << /EmbeddedFiles 4 0 R >> >>", pageTree, emptyPage, "<< /Names [] >>",
			stream("/Type /Metadata /Subtype /XML /Filter /FlateDecode", bomb), "(/EmbeddedFile)"), "no file named record.json", true},
		{"a large record", withAttachment(stream("/Type /EmbeddedFile", bytes.Repeat([]byte(" "), 17<<20))), "over 16 MB", false},
		{"a record that does not unpack", withAttachment(stream("/Type /EmbeddedFile /Filter /FlateDecode", []byte("no zlib"))), "record.json is damaged", false},
		{"a record without content", withAttachment("(/EmbeddedFile)"), "has no content", false},
		{"two records", rawPDF("", catalog, pageTree, emptyPage, "<< /Names [(a) 5 0 R (b) 5 0 R] >>", fileSpec, content), "two files named record.json", false},
		{"attachments without end", rawPDF("", catalog, pageTree, emptyPage, "<< /Names ["+manyNames.String()+"] >>", "<< /UF (other) /EF << /F 6 0 R >> >>", content), "more attachments", false},
		{"a tree that forks forty times", rawPDF("", many...), "more attachments", false},
		{"a tree in a circle", rawPDF("", catalog, pageTree, emptyPage, kids(4), content), "more attachments", false},
		{"pages in a circle", rawPDF("", catalog, "<< /Kids [2 0 R] >>", emptyPage, "<< /Names [] >>", content), "no file named record.json", true},
		{"a catalog that is none", rawPDF("", "(/EmbeddedFile)"), "damaged", false},
		{"lost its record", rawPDF("/Info 5 0 R", catalog, pageTree, emptyPage, "<< /Names [] >>", "<< /Producer (tayra 0.1.0) /Keywords (draft, record 0123456789abcdef) >>", content), "has lost the record", false},
		{"a bundle for the printer", bundle, "carry no record", true},
		{"a line fitted to data", line, "a line fitted to data", true},
		{"one stream named often", oneStreamOften(), "more reading", false},
		{"objects by the ten thousand", manyObjects(12000), "more reading", false},
		{"an object without end", rawPDF("", strings.Repeat("[", 1<<20), content), "more reading", false},
		{"brackets", rawPDF("", strings.Repeat("[", 60000), content), "damaged", false},
		{"a table of contents to be mended", append(append([]byte("%PDF-1.7\n9 0 obj /EmbeddedFile endobj\n"), bytes.Repeat([]byte("1 0 obj\n"), 1<<17)...), "startxref\n9\n%%EOF\n"...), "cannot be read", false},
		{"the word stream", append(append([]byte("%PDF-1.7\n9 0 obj /EmbeddedFile\n"), bytes.Repeat([]byte("stream\n"), 1<<17)...), "startxref\n9\n%%EOF\n"...), "more reading", false},
		{"a chain of tables", chainOfTables(), "more reading", false},
	} {
		t.Run(k.name, func(t *testing.T) {
			runtime.GC()
			var before, after runtime.MemStats
			runtime.ReadMemStats(&before)
			_, err := ReadWorksheetPDF(k.data)
			runtime.ReadMemStats(&after)
			var e *WorksheetError
			if !errors.As(err, &e) || !strings.Contains(err.Error(), k.want) || e.Foreign != k.foreign {
				t.Errorf("%v, want %q, foreign %v", err, k.want, k.foreign)
			}
			if used := (after.TotalAlloc - before.TotalAlloc) >> 20; used > 200 {
				t.Errorf("took %d MB", used)
			}
		})
	}
}

// clearances is the line of the example table, read at the anteater's mass.
func clearances(t testing.TB) *dose.FitRecord {
	t.Helper()
	text, err := os.ReadFile("../testdata/clearances.csv")
	if err != nil {
		t.Fatal(err)
	}
	in, err := dose.ReadFitTable("clearances.csv", text)
	if err != nil {
		t.Fatal(err)
	}
	a, err := species.Find("giant anteater")
	if err != nil {
		t.Fatal(err)
	}
	f, err := dose.Fit(in, dose.FitTarget{Animal: a, Mass: metabolic.BodyMass{Low: 41, Middle: 41, High: 41}})
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// oneStreamOften has one large stream under a thousand numbers.
func oneStreamOften() []byte {
	b := withAttachment(stream("/Type /EmbeddedFile", bytes.Repeat([]byte(" "), 1<<20)))
	i := bytes.LastIndex(b, []byte("xref\n0 7\n"))
	rows := regexp.MustCompile(`\d{10} 00000 n \n`).FindAll(b[i:], -1)
	var out bytes.Buffer
	out.Write(b[:i])
	at := out.Len()
	fmt.Fprintf(&out, "xref\n0 %d\n0000000000 65535 f \n", 1001)
	out.Write(bytes.Join(rows, nil))
	for range 1000 - len(rows) {
		out.Write(rows[len(rows)-1])
	}
	fmt.Fprintf(&out, "trailer\n<< /Size 1001 /Root 1 0 R >>\nstartxref\n%d\n%%%%EOF\n", at)
	return out.Bytes()
}

// chainOfTables has ten thousand tables of contents, each pointing to the one
// before.
func chainOfTables() []byte {
	var b bytes.Buffer
	b.WriteString("%PDF-1.7\n% /EmbeddedFile\n")
	last := 0
	for range 10000 {
		at := b.Len()
		fmt.Fprintf(&b, "xref\n0 1\n0000000000 65535 f \ntrailer\n<< /Size 2 /Root 1 0 R /Prev %d >>\n", last)
		last = at
	}
	fmt.Fprintf(&b, "startxref\n%d\n%%%%EOF\n", last)
	return b.Bytes()
}

func manyObjects(n int) []byte {
	objects := []string{catalog, pageTree, emptyPage, "<< /Names [(a) 5 0 R] >>", fileSpec, stream("/Type /EmbeddedFile", []byte("{}"))}
	for range n {
		objects = append(objects, "null")
	}
	return rawPDF("", objects...)
}

// Wherever a worksheet is cut off, it is refused, as cut off or, before anything
// of it can be told, as no PDF.
func TestReadTruncated(t *testing.T) {
	whole := anteaterPDF(t, PDFOptions{})
	for n := 0; n < len(whole)-len("%%EOF\n"); n += 1 + n/50 {
		if _, err := ReadWorksheetPDF(whole[:n]); err == nil || n > 8 && !strings.Contains(err.Error(), "cut off") {
			t.Fatalf("cut after %d bytes: %v", n, err)
		}
	}
}

// Reading a worksheet leaves nothing in the user's home.
func TestReadLeavesNoFolder(t *testing.T) {
	home := t.TempDir()
	t.Setenv("HOME", home)
	t.Setenv("XDG_CONFIG_HOME", filepath.Join(home, "config"))
	if _, err := ReadWorksheetPDF(anteaterPDF(t, PDFOptions{})); err != nil {
		t.Fatal(err)
	}
	if left, err := os.ReadDir(home); err != nil || len(left) > 0 {
		t.Errorf("%v %v", left, err)
	}
}

func BenchmarkReadWorksheetPDF(b *testing.B) {
	data := anteaterPDF(b, PDFOptions{})
	b.ReportAllocs()
	for b.Loop() {
		if _, err := ReadWorksheetPDF(data); err != nil {
			b.Fatal(err)
		}
	}
}

func FuzzReadWorksheetPDF(f *testing.F) {
	f.Add(withAttachment(stream("/Type /EmbeddedFile", []byte("{}"))))
	f.Add(withAttachment(stream("/Type /EmbeddedFile /Filter /FlateDecode", packed([]byte("{}")))))
	f.Add(rawPDF("/Encrypt 5 0 R", catalog, pageTree, emptyPage, "<< /Names [] >>", "<< /Filter /Standard /V 5 /R 6 >>", "(/EmbeddedFile)"))
	f.Add(rawPDF("", catalog, "<< /Kids [2 0 R] >>", emptyPage, "<< /Kids [4 0 R] >>", "(/EmbeddedFile)"))
	f.Fuzz(func(t *testing.T, data []byte) {
		a, err := ReadWorksheetPDF(data)
		var e *WorksheetError
		if err != nil && !errors.As(err, &e) {
			t.Fatalf("%T: %v", err, err)
		}
		if err == nil && (a.Record == nil || len(a.Record) > maxRecord || len(a.Case) > maxCaseFile) {
			t.Fatalf("%d and %d bytes", len(a.Record), len(a.Case))
		}
	})
}

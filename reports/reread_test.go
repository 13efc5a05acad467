package reports

import (
	"bytes"
	"crypto/md5"
	"encoding/json"
	"errors"
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tayra/dose"
)

// rebuilt is a worksheet with other content in its packed parts, its lengths,
// check sums and places put right: what a careful hand would leave. edit gets
// the object's dictionary and the unpacked content.
func rebuilt(t interface {
	Helper()
	Fatalf(string, ...any)
}, b []byte, edit func(dict string, content []byte) []byte) []byte {
	t.Helper()
	var out bytes.Buffer
	offsets := map[string]int{}
	object := regexp.MustCompile(`(?m)^(\d+) 0 obj$`)
	write := func(text []byte) {
		for _, m := range object.FindAllSubmatchIndex(text, -1) {
			offsets[string(text[m[2]:m[3]])] = out.Len() + m[0]
		}
		out.Write(text)
	}
	for {
		p, ok := cutStream(b)
		if !ok {
			break
		}
		content, err := p.unpack(maxRecord)
		if err != nil {
			t.Fatalf("%v", err)
		}
		at := bytes.LastIndex(p.before, []byte(" obj\n"))
		at = bytes.LastIndexByte(p.before[:at], '\n') + 1
		dict := string(p.before[at:])
		if changed := edit(dict, content); !bytes.Equal(changed, content) {
			raw := changed
			if p.flate {
				raw = packed(changed)
			}
			dict = lengthEntry().ReplaceAllString(dict, fmt.Sprintf("/Length %d", len(raw)))
			dict = regexp.MustCompile(`/Size \d+`).ReplaceAllString(dict, fmt.Sprintf("/Size %d", len(changed)))
			dict = regexp.MustCompile(`/CheckSum <\w*>`).ReplaceAllString(dict, fmt.Sprintf("/CheckSum <%x>", md5.Sum(changed)))
			p.packed = raw
		}
		write(p.before[:at])
		write([]byte(dict))
		out.Write(p.packed)
		b = p.after
	}
	head, tail, ok := bytes.Cut(b, []byte("\nxref\n"))
	if !ok {
		t.Fatalf("no table of contents")
	}
	write(append(head, '\n'))
	xref := out.Len()
	_, trailer, _ := bytes.Cut(tail, []byte("trailer\n"))
	fmt.Fprintf(&out, "xref\n0 %d\n0000000000 65535 f \n", len(offsets)+1)
	for i := range len(offsets) {
		at, ok := offsets[fmt.Sprint(i+1)]
		if !ok {
			t.Fatalf("object %d of %d is missing", i+1, len(offsets))
		}
		fmt.Fprintf(&out, "%010d 00000 n \n", at)
	}
	out.WriteString("trailer\n")
	out.Write(startReference().ReplaceAll(trailer, fmt.Appendf(nil, "startxref\n%d\n", xref)))
	return out.Bytes()
}

// recordChanged changes the attached record by hand.
func recordChanged(t interface {
	Helper()
	Fatalf(string, ...any)
}, b []byte, change func([]byte) []byte) []byte {
	t.Helper()
	return rebuilt(t, b, func(dict string, content []byte) []byte {
		if strings.Contains(dict, "/EmbeddedFile") && bytes.HasPrefix(content, []byte("{")) {
			return change(content)
		}
		return content
	})
}

// stated gives a worksheet another digest among its keywords, of equal length.
func restated(b []byte, from, to string) []byte {
	wide := func(s string) []byte {
		var w []byte
		for i := range len(s) {
			w = append(w, 0, s[i])
		}
		return w
	}
	return bytes.ReplaceAll(b, wide(from), wide(to))
}

func replaced(old, new string) func([]byte) []byte {
	return func(b []byte) []byte {
		if !bytes.Contains(b, []byte(old)) {
			panic(old + " is not in the record")
		}
		return bytes.Replace(b, []byte(old), []byte(new), 1)
	}
}

func reread(t interface {
	Helper()
	Fatalf(string, ...any)
}, b []byte) *Rereading {
	t.Helper()
	r, err := Reread(b)
	if err != nil {
		t.Fatalf("%v", err)
	}
	return r
}

func paths(found []dose.Difference) string {
	var out []string
	for _, d := range found {
		out = append(out, d.Path)
	}
	return strings.Join(out, " ")
}

// Rebuilding without a change gives the same bytes: what the other tests change
// is what they say and nothing else.
func TestRebuilt(t *testing.T) {
	b := anteaterPDF(t, PDFOptions{})
	if got := rebuilt(t, b, func(_ string, c []byte) []byte { return c }); !bytes.Equal(got, b) {
		t.Error("other bytes")
	}
}

// Every example, on either paper, is read back, worked out again and drawn again
// the same.
func TestRereadExamples(t *testing.T) {
	for _, e := range examples(t) {
		ws, name := e.ws, e.name
		for _, o := range []PDFOptions{{Paper: A4, Case: e.data}, {Paper: Letter}} {
			b, err := PDF(ws, o)
			if err != nil {
				t.Fatal(err)
			}
			r := reread(t, b)
			if r.Verdict != Same || len(r.Differences) > 0 || len(r.CaseFile) > 0 || len(r.Why) > 0 || !strings.Contains(r.Pages, "byte for byte") {
				t.Errorf("%s: %s, %v, %v, %q, %s", name, r.Verdict, r.Differences, r.CaseFile, r.Why, r.Pages)
			}
			if r.Case != ws.Case || r.Species != ws.Patient.Species || r.Digest != r.Stated {
				t.Errorf("%s: %+v", name, r)
			}
		}
	}
}

// What a hand can change is found, and where.
func TestRereadEdited(t *testing.T) {
	b := anteaterPDF(t, PDFOptions{})
	record := reread(t, b)
	a, err := ReadWorksheetPDF(b)
	if err != nil {
		t.Fatal(err)
	}
	old := regexp.MustCompile(`"drafted": \{[^}]*?"dose_per_kg": \[\s*([\d.]+)`).FindSubmatch(a.Record)
	if old == nil {
		t.Fatal("no drafted dose in the record")
	}
	drafted := string(old[0])
	digit := drafted[:len(drafted)-len(old[1])] + "9" + string(old[1][1:])

	caseEdited := rebuilt(t, b, func(dict string, c []byte) []byte {
		return bytes.Replace(c, []byte("mass: 41 kg"), []byte("mass: 14 kg"), 1)
	})
	pageEdited := func(n int) []byte {
		i := 0
		return rebuilt(t, b, func(dict string, c []byte) []byte {
			if !bytes.Contains(c, []byte("BT ")) {
				return c
			}
			if i++; i == n {
				return append(bytes.Clone(c), "0 0 10 10 re f\n"...)
			}
			return c
		})
	}
	// One digit and the stated digest with it, as far as the keywords go.
	forged := recordChanged(t, b, replaced(drafted, digit))
	forged = restated(forged, record.Digest, reread(t, forged).Digest)

	if r := reread(t, recordChanged(t, b, replaced(drafted, digit))); !strings.HasPrefix(r.Pages, "The pages are those that are drawn from the inputs;") {
		t.Errorf("a digit of the record, the pages as they were: %s", r.Pages)
	}
	junk := bytes.Replace(b, []byte("\nendstream\n"), []byte("\nendstream "), 1)
	for _, k := range []struct {
		name    string
		data    []byte
		paths   string // of the record
		cases   string // of the case file
		edited  bool   // the stated digest tells
		says    string
		verdict Verdict
	}{
		{"one digit of the dose", recordChanged(t, b, replaced(drafted, digit)), "drafted.dose_per_kg[0]", "", true, "changed after it was written", Differs},
		{"one digit and the digest", forged, "drafted.dose_per_kg[0]", "", false, "changed together with the digest", Differs},
		{"a last digit", recordChanged(t, b, func(b []byte) []byte {
			return bytes.Replace(b, old[1], append(bytes.Clone(old[1][:len(old[1])-1]), '1'), 1)
		}), "", "", true, "changed after it was written", Differs},
		{"a caution taken out", recordChanged(t, b, replaced(`"slug": "condition"`, `"slug": "xondition"`)), "cautions", "", true, "", Differs},
		{"the level of a caution", recordChanged(t, b, replaced(`"level": "warn"`, `"level": "note"`)), "cautions[0].level", "", true, "", Differs},
		{"an input", recordChanged(t, b, replaced(`"mass": "41 kg"`, `"mass": "44 kg"`)), "patient.mass_typed patient.mass_kg", "patient.mass", true, "not those of the case file", Differs},
		{"an input that is none", recordChanged(t, b, replaced(`"mass": "41 kg"`, `"mass": "4l kg"`)), "input.patient.mass", "patient.mass", true, "", Differs},
		{"a text", recordChanged(t, b, replaced(`"prepared_by": "duty veterinarian",
  "input"`, `"prepared_by": "someone else",
  "input"`)), "prepared_by", "", true, "", Differs},
		{"a key of ours that is not", recordChanged(t, b, replaced(`"date":`, `"weather": "fine", "date":`)), "weather", "", true, "", Differs},
		{"the case file", caseEdited, "", "patient.mass", false, "one of the two was changed", Differs},
		{"a space between the parts", junk, "", "", false, "another program saved it again", Differs},
		{"the first page", pageEdited(1), "", "", false, "changed: page 1.", Differs},
		{"the second page", pageEdited(2), "", "", false, "changed: page 2.", Differs},
		{"something behind", append(bytes.Clone(b), "% a note\nstartxref\n"+lastStart(b)+"\n%%EOF\n"...), "", "", false, "added behind", Differs},
		{"another stated digest", restated(b, record.Digest, "0123456789abcdef"), "", "", true, "changed after it was written", Differs},
		{"no stated digest", restated(b, "record "+record.Digest, "report "+record.Digest), "", "", false, "does not state which record", Differs},
		{"saved by another program", optimized(t, b), "", "", false, "saved again by another program (pdfcpu", Differs},
		{"packed by another compressor", repacked(t, b), "", "", false, "only the compressor", Same},
	} {
		r := reread(t, k.data)
		if r.Verdict != k.verdict || !strings.HasPrefix(paths(r.Differences), k.paths) || k.paths == "" && len(r.Differences) > 0 || paths(r.CaseFile) != k.cases {
			t.Errorf("%s: %s, %q, %q", k.name, r.Verdict, paths(r.Differences), paths(r.CaseFile))
		}
		if edited := r.Stated != "" && r.Stated != r.Digest; edited != k.edited {
			t.Errorf("%s: states %s, carries %s", k.name, r.Stated, r.Digest)
		}
		if all := strings.Join(r.Why, " ") + " " + r.Pages; !strings.Contains(all, k.says) {
			t.Errorf("%s: %q, want %q", k.name, all, k.says)
		}
		if k.verdict == Differs && len(r.Why) == 0 && !strings.Contains(r.Pages, "changed") && !strings.Contains(r.Pages, "added") && !strings.Contains(r.Pages, "saved again") && !strings.Contains(r.Pages, "saved it again") {
			t.Errorf("%s: no reason given: %s", k.name, r.Pages)
		}
	}
}

// Bytes that no reader of the page unpacks do not pass for another compressor.
func TestSamePagesHiddenBytes(t *testing.T) {
	b := anteaterPDF(t, PDFOptions{})
	if ok, text := samePages(behindPacking(t, b), b, producer()); ok || !strings.Contains(text, "changed: page 1.") {
		t.Error(text)
	}
}

// behindPacking hides bytes behind the packed content of the first page.
func behindPacking(t *testing.T, b []byte) []byte {
	t.Helper()
	at := bytes.Index(b, []byte("/Type /Page\n"))
	p, ok := cutStream(b[at:])
	if at < 0 || !ok {
		t.Fatal("no page")
	}
	old, long := fmt.Sprintf("/Length %d", len(p.packed)), fmt.Sprintf("/Length %d", len(p.packed)+5)
	page := bytes.Replace(p.before, []byte(old), []byte(long), 1)
	return slices.Concat(b[:at], page, p.packed, []byte("notes"), p.after)
}

// lastStart is where the table of contents is.
func lastStart(b []byte) string {
	m := regexp.MustCompile(`startxref\n(\d+)\n`).FindAllSubmatch(b, -1)
	return string(m[len(m)-1][1])
}

// repacked is the same worksheet with its parts packed harder.
func repacked(t *testing.T, b []byte) []byte {
	t.Helper()
	touched := false
	out := rebuilt(t, b, func(dict string, c []byte) []byte {
		if touched {
			return c
		}
		touched = true
		return append(bytes.Clone(c), ' ') // makes the helper pack it anew
	})
	out = rebuilt(t, out, func(dict string, c []byte) []byte { return bytes.TrimSuffix(c, []byte(" ")) })
	if bytes.Equal(out, b) {
		t.Fatal("the same packing")
	}
	return out
}

// A worksheet of another version or other tables: the difference of versions is
// said and is no finding; with another result beside it, it is.
func TestRereadOtherVersion(t *testing.T) {
	b := anteaterPDF(t, PDFOptions{})
	digest := reread(t, b).Digest
	with := func(changes ...string) []byte {
		out := b
		for i := 0; i < len(changes); i += 2 {
			out = recordChanged(t, out, replaced(changes[i], changes[i+1]))
		}
		return restated(out, digest, reread(t, out).Digest)
	}
	version, tables := `"version": "`+dose.Version+`"`, `"tables": "`+dose.TablesDigest+`"`
	for _, k := range []struct {
		name    string
		data    []byte
		verdict Verdict
		says    string
	}{
		{"version", with(version, `"version": "0.0.9"`), Version, "0.0.9 then, " + dose.Version + " now. The results are the same."},
		{"tables", with(tables, `"tables": "aaaaaaaaaaaa"`), Version, "aaaaaaaaaaaa then"},
		{"version and a result", with(version, `"version": "0.0.9"`, `"level": "warn"`, `"level": "note"`), Differs, "may come from that"},
		{"tables and a result", with(tables, `"tables": "aaaaaaaaaaaa"`, `"level": "warn"`, `"level": "note"`), Differs, "may come from that"},
	} {
		r := reread(t, k.data)
		if r.Verdict != k.verdict || !strings.Contains(strings.Join(r.Why, " "), k.says) || !strings.Contains(r.Pages, "not compared") {
			t.Errorf("%s: %s, %q, %s", k.name, r.Verdict, r.Why, r.Pages)
		}
	}
}

// Whatever digit of the record is changed, the worksheet no longer counts as
// the same.
func TestRereadAnyDigit(t *testing.T) {
	b := anteaterPDF(t, PDFOptions{})
	a, err := ReadWorksheetPDF(b)
	if err != nil {
		t.Fatal(err)
	}
	var digits []int
	for i, c := range a.Record {
		if c >= '0' && c <= '9' {
			digits = append(digits, i)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		i := rapid.SampledFrom(digits).Draw(t, "place")
		by := rapid.IntRange(1, 9).Draw(t, "by")
		changed := recordChanged(t, b, func(b []byte) []byte {
			b = bytes.Clone(b)
			b[i] = '0' + (b[i]-'0'+byte(by))%10
			return b
		})
		r, err := Reread(changed)
		var e *RecordError
		if errors.As(err, &e) {
			return // no record any more: 1e0 became 1e9, or the format another
		}
		if err != nil || r.Verdict != Differs {
			t.Fatalf("%.40q: %v %v", a.Record[max(0, i-20):i+20], r, err)
		}
	})
}

// A record that cannot be read is refused by name.
func TestRereadRefusesRecord(t *testing.T) {
	b := anteaterPDF(t, PDFOptions{})
	for _, k := range []struct {
		name, want string
		change     func([]byte) []byte
	}{
		{"no JSON", "no record", func(b []byte) []byte { return b[:len(b)/2] }},
		{"another format", "reads " + dose.Format, replaced(dose.Format, "tayra-worksheet/9")},
		{"a text for a number", "changed or damaged", replaced(`"mass_kg": 41`, `"mass_kg": "41"`)},
		{"without its patient", `no "patient"`, replaced(`"patient": {
    "name": "Marisol"`, `"patience": {
    "name": "Marisol"`)},
	} {
		_, err := Reread(recordChanged(t, b, k.change))
		var e *RecordError
		if !errors.As(err, &e) || !strings.Contains(err.Error(), k.want) {
			t.Errorf("%s: %v, want %q", k.name, err, k.want)
		}
	}
}

func TestRereadJSON(t *testing.T) {
	b, err := json.Marshal(reread(t, anteaterPDF(t, PDFOptions{})))
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{`"verdict":"same"`, `"case":"LW-0412"`, `"differences":[]`, `"case_differences":[]`, `"why":[]`, `"program_now":{"name":"tayra"`} {
		if !bytes.Contains(b, []byte(want)) {
			t.Errorf("%s is not in %s", want, b)
		}
	}
}

var writeRecords = flag.Bool("write-records", false, "write the stored worksheets of this format that are not there yet")

// Worksheets of every format that was ever written stay readable: each format
// has its own in testdata/records, written by the version that introduced it and
// never replaced. What they were drafted from is worked out without an error and
// the drafted dose is the same to 1e-6, or the change is written down here.
func TestStoredWorksheets(t *testing.T) {
	dir := filepath.Join("..", "testdata", "records")
	if *writeRecords {
		for _, name := range []string{"anteater", "python", "stop", "severalmodels"} {
			text, err := os.ReadFile(filepath.Join("..", "testdata", name+".yaml"))
			if err != nil {
				t.Fatal(err)
			}
			ws := worksheetOf(t, name+".yaml", text)
			b, err := PDF(ws, PDFOptions{Case: text})
			if err != nil {
				t.Fatal(err)
			}
			base := filepath.Join(dir, "v1-"+name)
			if _, err := os.Stat(base + ".pdf"); err == nil {
				continue
			}
			if err := errors.Join(os.MkdirAll(dir, 0o777), os.WriteFile(base+".pdf", b, 0o666), os.WriteFile(base+".json", recordOf(t, ws), 0o666)); err != nil {
				t.Fatal(err)
			}
		}
	}
	files, err := filepath.Glob(filepath.Join(dir, "v1-*.pdf"))
	if err != nil || len(files) < 4 {
		t.Fatalf("%d stored worksheets of format 1, %v", len(files), err)
	}
	for _, f := range files {
		b, err := os.ReadFile(f)
		if err != nil {
			t.Fatal(err)
		}
		record, err := os.ReadFile(strings.TrimSuffix(f, ".pdf") + ".json")
		if err != nil {
			t.Fatal(err)
		}
		a, err := ReadWorksheetPDF(b)
		if err != nil {
			t.Errorf("%s: %v", f, err)
			continue
		}
		if !bytes.Equal(a.Record, record) || a.Digest != Digest(record) {
			t.Errorf("%s: not the record beside it", f)
		}
		was, err := ReadRecord(a.Record)
		if err != nil {
			t.Errorf("%s: %v", f, err)
			continue
		}
		r := reread(t, b)
		if r.Worksheet == nil || r.Stated != r.Digest || len(r.CaseFile) > 0 {
			t.Errorf("%s: %s %v %v", f, r.Verdict, r.Why, r.CaseFile)
			continue
		}
		now := r.Worksheet
		if (was.Drafted == nil) != (now.Drafted == nil) {
			t.Errorf("%s: drafted then %v, now %v", f, was.Drafted != nil, now.Drafted != nil)
			continue
		}
		if was.Drafted == nil {
			continue
		}
		for i := range 2 {
			x, y := was.Drafted.DosePerKg[i], now.Drafted.DosePerKg[i]
			if diff := x/y - 1; diff > 1e-6 || diff < -1e-6 {
				t.Errorf("%s: drafted %v then, %v now", f, x, y)
			}
		}
	}
}

func BenchmarkReread(b *testing.B) {
	data := anteaterPDF(b, PDFOptions{})
	b.ReportAllocs()
	for b.Loop() {
		if _, err := Reread(data); err != nil {
			b.Fatal(err)
		}
	}
}

func FuzzReread(f *testing.F) {
	f.Add([]byte(`{"format":"tayra-worksheet/1"}`), []byte("case: x\n"))
	f.Add([]byte(`{"format":"tayra-worksheet/1","program":{"name":"tayra","version":"0.1.0","tables":"x"},"input":{"patient":{},"drug":{},"models":null},"patient":{},"drug":{},"drafts":[],"drafted":null,"cautions":[],"overrides":{}}`), []byte("{}"))
	f.Fuzz(func(t *testing.T, record, caseFile []byte) {
		two := rawPDF("", catalog, pageTree, emptyPage, "<< /Names [(a) 5 0 R (b) 7 0 R] >>", fileSpec, stream("/Type /EmbeddedFile", record),
			"<< /Type /Filespec /UF (case.yaml) /EF << /F 8 0 R >> >>", stream("/Type /EmbeddedFile", caseFile))
		r, err := Reread(two)
		if err == nil && r.Verdict == Same {
			t.Error("an empty page is no worksheet")
		}
	})
}

// fittedWorksheet is a worksheet whose dose comes from a line fitted to a table.
func fittedWorksheet(t testing.TB, table *dose.FitInput) []byte {
	t.Helper()
	text, err := os.ReadFile("../testdata/anteater.yaml")
	if err != nil {
		t.Fatal(err)
	}
	in, _, err := dose.ReadCase("anteater.yaml", text)
	if err != nil {
		t.Fatal(err)
	}
	in.Fit = &dose.FitCase{Table: *table, Average: dose.E("2 mg/L"), Source: dose.E("invented for this test")}
	c, err := in.Check()
	if err != nil {
		t.Fatal(err)
	}
	ws, err := dose.Draft(c)
	if err != nil {
		t.Fatal(err)
	}
	b, err := PDF(ws, PDFOptions{Case: text})
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// A worksheet from a fitted line carries the table, and is the same again; a
// changed cell of the table is found.
func TestRereadFitted(t *testing.T) {
	text, err := os.ReadFile("../testdata/clearances.csv")
	if err != nil {
		t.Fatal(err)
	}
	table, err := dose.ReadFitTable("clearances.csv", text)
	if err != nil {
		t.Fatal(err)
	}
	for _, keep := range []bool{false, true} {
		table.KeepAll = keep
		b := fittedWorksheet(t, table)
		if r := reread(t, b); r.Verdict != Same {
			t.Errorf("keep %v: %s %v %v %q %s", keep, r.Verdict, r.Differences, r.CaseFile, r.Why, r.Pages)
		}
		changed := recordChanged(t, b, replaced(`"clearance": "62 mL/min"`, `"clearance": "26 mL/min"`))
		if r := reread(t, changed); r.Verdict != Differs || !strings.Contains(paths(r.Differences), "fit.a ") {
			t.Errorf("keep %v: %s %s", keep, r.Verdict, paths(r.Differences))
		}
	}
}

// The largest worksheet that can be drafted, from a table of 2,000 animals and all that
// it may hold, can
// be read back.
func TestRereadLargest(t *testing.T) {
	table := &dose.FitInput{File: "large.csv", Parameter: dose.Clearance}
	for i := range 2000 {
		w := 0.02 * float64(1+i)
		table.Rows = append(table.Rows, dose.FitRowInput{Species: dose.E(fmt.Sprintf("animal number %d of the table, %s", i, strings.Repeat("long ", 20))), Mass: dose.E(fmt.Sprintf("%.4f kg", w)),
			Clearance: dose.E(fmt.Sprintf("%.5f L/h", w*(1+float64(i%7)/10))), Volume: dose.E(fmt.Sprintf("%.5f L", w*(1+float64(i%5)/10))),
			HalfLife: dose.E(fmt.Sprintf("%.5f h", 1+float64(i%11)/10)), Dose: dose.E(fmt.Sprintf("%.5f mg", w)),
			Source: dose.E("invented for this test: " + strings.Repeat("a citation of some length, ", 10))})
	}
	b := fittedWorksheet(t, table)
	if r := reread(t, b); r.Verdict != Same {
		t.Errorf("%s %q %s", r.Verdict, r.Why, r.Pages)
	}
}

// A worksheet that is read back comes from anywhere: a mail, an old disk, a
// stranger. So nothing in it is believed, and no file may cost more than a
// worksheet can:
//
//   - A file without the mark of an attachment is turned away unread. That mark
//     stays in plain letters whoever packs or encrypts the file.
//   - The PDF library reads through a meter. Its own limits are for one stream;
//     a table that names one stream a thousand times needs one for the file.
//   - Its checks of the document's form are not asked for. They unpack the
//     document's metadata up to 512 MB whatever the limit, and the form does not
//     matter here: the page is held against the one that is drawn again.
//   - Only the files of two names are unpacked, each within a limit.

package reports

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"strconv"
	"strings"
	"sync"

	"github.com/pdfcpu/pdfcpu/pkg/api"
	"github.com/pdfcpu/pdfcpu/pkg/filter"
	"github.com/pdfcpu/pdfcpu/pkg/pdfcpu"
	"github.com/pdfcpu/pdfcpu/pkg/pdfcpu/model"
	"github.com/pdfcpu/pdfcpu/pkg/pdfcpu/types"
)

// MaxWorksheetBytes is the largest file that is read as a worksheet. A common
// one has some 100 kB, one drafted from a line over 2,000 animals about one MB.
const MaxWorksheetBytes = 16 << 20

const (
	maxCaseFile      = 1 << 20  // as a case file may be read
	maxSeeks         = 10000    // of the library; a worksheet of 20 pages takes some 150
	maxPackedBytes   = 1 << 20  // unpacked, of one stream that holds other objects
	maxPackedNumbers = 64 << 10 // the table at its beginning
	maxObject        = 64 << 10 // of what stands before its content
	maxPDFDepth      = 100
	maxNameNodes     = 64 // of the tree that lists the attachments
	endOfFile        = 1024
)

// Attached is what a worksheet on paper carries with it.
type Attached struct {
	Record []byte // as [JSON] wrote it; not yet read
	Case   []byte // the case file; nil when there is none
	Paper  Paper
	// Digest is the digest of its record that the document states among its
	// keywords, as each page does in its foot; "" when it states none.
	Digest   string
	Producer string // the program that wrote the file, as the file says
}

// A WorksheetError says why a file is no worksheet that can be read back.
type WorksheetError struct {
	Problem string
	Remedy  string
	// Foreign marks a whole file that was never a worksheet, or has lost all
	// that it carried: nothing in it was refused.
	Foreign bool
	err     error
}

// Error says what is wrong and what to do.
func (e *WorksheetError) Error() string {
	if e.Remedy == "" {
		return e.Problem
	}
	return e.Problem + "; " + e.Remedy
}

// Unwrap gives what the PDF library said, where it did.
func (e *WorksheetError) Unwrap() error { return e.err }

const (
	giveOriginal = "give the file as this program wrote it"
	// lostRecord is for a document that may once have been a worksheet.
	lostRecord = "a worksheet that was printed again or saved by another program may have lost the record that it carried; " + giveOriginal
	// attachedFit is the record of a line fitted to data, set on paper alone.
	attachedFit = "fit.json"
)

func refused(err error, problem, remedy string) error {
	return &WorksheetError{Problem: problem, Remedy: remedy, err: err}
}

func foreign(problem, remedy string) error {
	return &WorksheetError{Problem: "this is no worksheet of this program: " + problem, Foreign: true, Remedy: remedy}
}

// withoutFolder keeps the PDF library from making a folder for its configuration
// in the user's home.
var withoutFolder = sync.OnceFunc(api.DisableConfigDir)

// ReadWorksheetPDF takes the record and the case out of a worksheet. Neither is
// read here: [ReadRecord] and [dose.ReadCase] do that. The error is a
// [*WorksheetError]: a file that is cut off, encrypted, damaged, or no
// worksheet; it never depends on how fast the machine is.
func ReadWorksheetPDF(data []byte) (*Attached, error) {
	switch {
	case len(data) == 0:
		return nil, foreign("the file is empty", giveOriginal)
	case len(data) > MaxWorksheetBytes:
		return nil, refused(nil, fmt.Sprintf("the file has over %d MB, and no worksheet has", MaxWorksheetBytes>>20), giveOriginal)
	case !bytes.Contains(data[:min(len(data), endOfFile)], []byte("%PDF-")):
		return nil, foreign("the file is no PDF", giveOriginal)
	}
	if err := checkEnd(data); err != nil {
		return nil, err
	}
	if !bytes.Contains(data, []byte("/EmbeddedFile")) {
		return nil, foreign("no file is attached to it", lostRecord)
	}
	ctx, err := openPDF(data)
	if err != nil {
		return nil, err
	}
	return (&pdfReader{ctx: ctx, names: maxNameNodes}).attached()
}

// contents is how a table of contents begins: plain, or as an object.
var contents = pattern(`^\s*(xref\s|\d{1,10}\s+\d{1,5}\s+obj\b)`)

// checkEnd looks for the last lines that every whole PDF has, and for the table
// of contents that they point to.
func checkEnd(data []byte) error {
	const cut = "the file is cut off: its last lines are missing"
	tail := data[max(0, len(data)-endOfFile):]
	i := bytes.LastIndex(tail, []byte("startxref"))
	if i < 0 || !bytes.Contains(tail[i:], []byte("%%EOF")) {
		return refused(nil, cut, "copy or send it again")
	}
	at, _, _ := bytes.Cut(tail[i+len("startxref"):], []byte("%%EOF"))
	offset, err := strconv.Atoi(strings.TrimSpace(string(at)))
	if err != nil || offset <= 0 || offset >= len(data) || !contents().Match(data[offset:]) {
		return refused(nil, "the file is damaged: its table of contents is not where it says", "copy or send it again")
	}
	return nil
}

// errOverMeter ends a reading that asks for more than a worksheet needs.
var errOverMeter = errors.New("more reading than a worksheet needs")

// meter bounds what is read of a file: the places by their number, the bytes by
// the size of the file. What is read in large pieces is kept by the reader, so
// each byte may be read so about once; small pieces are looked at and dropped,
// and a place costs one of them.
//
// Two habits of the library take minutes for a crafted MB, and no worksheet
// needs them. It mends a broken table of contents by looking for objects line
// by line from the beginning of the file: the beginning, which holds no object,
// is read once, for its version. And it takes an object without an end apart
// again and again: an object must end, or its content begin, within maxObject.
type meter struct {
	data  []byte
	r     *bytes.Reader
	seeks int   // places left
	kept  int64 // bytes left that may be read in large pieces
	bytes int64 // bytes left in all
	begun bool
	over  bool // something asked for too much
	mends bool // the table of contents is broken
}

func newMeter(data []byte) *meter {
	size := int64(len(data))
	return &meter{data: data, r: bytes.NewReader(data), seeks: maxSeeks, kept: 2*size + 1<<16, bytes: 2*size + 8<<20}
}

func (m *meter) Seek(offset int64, whence int) (int64, error) {
	if m.seeks--; m.seeks < 0 {
		m.over = true
	}
	if whence == io.SeekStart {
		if offset == 0 {
			m.mends = m.begun
			m.begun = true
		} else if offset > 0 && offset < int64(len(m.data)) && !isShortObject(m.data[offset:]) {
			m.over = true
		}
	}
	if m.over || m.mends {
		return 0, errOverMeter
	}
	return m.r.Seek(offset, whence)
}

func (m *meter) Read(p []byte) (int, error) {
	const small = 4096
	n := int64(min(len(p), m.r.Len()))
	if m.bytes -= n; m.bytes < 0 {
		m.over = true
	}
	if len(p) > small {
		if m.kept -= n; m.kept < 0 {
			m.over = true
		}
	}
	if m.over || m.mends {
		return 0, errOverMeter
	}
	return m.r.Read(p)
}

var objectHead = pattern(`^\s*\d{1,10}\s+\d{1,5}\s+obj\b`)

// isShortObject says whether the object that begins here, if one does, ends or
// comes to its content soon.
func isShortObject(b []byte) bool {
	if !objectHead().Match(b[:min(len(b), 64)]) {
		return true
	}
	b = b[:min(len(b), maxObject)]
	if end := bytes.Index(b, []byte("endobj")); end >= 0 {
		b = b[:end]
	} else if !bytes.Contains(b, []byte("stream")) {
		return false
	}
	// The word may stand in a text of the object, but not often.
	return bytes.Count(b, []byte("stream")) <= 16
}

// openPDF reads the objects of a file and unpacks none.
func openPDF(data []byte) (ctx *model.Context, err error) {
	withoutFolder()
	conf := model.NewDefaultConfiguration()
	conf.ValidationMode = model.ValidationRelaxed
	conf.Limits.MaxStreamBytes = int64(len(data))
	conf.Limits.MaxDecodeBytes = maxPackedBytes
	conf.Limits.MaxObjectStreamFirst = maxPackedNumbers
	conf.Limits.MaxObjectCount = maxSeeks
	conf.Limits.MaxObjectStreamCount = maxSeeks
	conf.Limits.MaxXRefEntries = maxSeeks
	conf.Limits.MaxRecursionDepth = maxPDFDepth
	m := newMeter(data)
	damaged := func(err error) error {
		return refused(err, "the file is damaged or is no PDF: "+err.Error(), giveOriginal)
	}
	defer func() {
		// The library turns its own panics into errors; one that slips through
		// is a damaged file all the same.
		if r := recover(); r != nil {
			ctx, err = nil, damaged(fmt.Errorf("%v", r))
		}
	}()
	ctx, err = api.ReadContext(m, conf)
	switch {
	case errors.Is(err, pdfcpu.ErrWrongPassword), errors.Is(err, pdfcpu.ErrPermissionDenied),
		err == nil && (ctx.E != nil || ctx.Encrypt != nil):
		return nil, refused(err, "the file is encrypted", "take the encryption off with the program that put it on, and give the plain file")
	case m.mends:
		return nil, refused(err, "the file is damaged: its table of contents cannot be read", giveOriginal)
	case m.over:
		return nil, refused(err, "the file asks for more reading than any worksheet", giveOriginal)
	case err != nil && bytes.Contains(data, []byte("/Encrypt")):
		return nil, refused(err, "the file is encrypted or damaged: "+err.Error(), "take the encryption off with the program that put it on, and give the plain file")
	case err != nil:
		return nil, damaged(err)
	}
	return ctx, nil
}

// pdfReader finds its way in a document that may be wrong in every part.
type pdfReader struct {
	ctx   *model.Context
	names int // nodes of the tree of attachments that may still be visited

	lineAlone bool // the record of a fitted line is attached
}

// attached collects the files of our two names and what else is needed.
func (p *pdfReader) attached() (a *Attached, err error) {
	defer func() {
		if r := recover(); r != nil {
			a, err = nil, refused(fmt.Errorf("%v", r), "the file is damaged", giveOriginal)
		}
	}()
	root, err := p.ctx.Catalog()
	if err != nil || root == nil {
		return nil, refused(err, "the file is damaged: it has no table of contents", giveOriginal)
	}
	a = &Attached{Paper: p.paper(root)}
	if info := p.dict(refOrNil(p.ctx.Info)); info != nil {
		a.Producer = p.text(info["Producer"])
		a.Digest = digestAmong(p.text(info["Keywords"]))
	}
	if names := p.dict(root["Names"]); names != nil {
		if err := p.tree(a, names["EmbeddedFiles"]); err != nil {
			return nil, err
		}
	}
	if a.Record == nil {
		switch {
		case p.lineAlone:
			return nil, foreign("it is a line fitted to data, which holds no dose", "`tayra fit` draws it again from the table attached to it")
		case a.Digest != "":
			return nil, refused(nil, "the worksheet has lost the record that it carried", giveOriginal)
		case strings.HasPrefix(a.Producer, "tayra "):
			return nil, foreign("it is a figure, or a bundle of worksheets for the printer, which carry no record", "give the worksheet's own file")
		}
		return nil, foreign("no file named "+attachedRecord+" is attached to it", lostRecord)
	}
	return a, nil
}

func refOrNil(r *types.IndirectRef) types.Object {
	if r == nil {
		return nil
	}
	return *r
}

func (p *pdfReader) dict(o types.Object) types.Dict {
	if o == nil {
		return nil
	}
	d, err := p.ctx.DereferenceDict(o)
	if err != nil {
		return nil
	}
	return d
}

func (p *pdfReader) array(o types.Object) types.Array {
	if o == nil {
		return nil
	}
	a, err := p.ctx.DereferenceArray(o)
	if err != nil {
		return nil
	}
	return a
}

func (p *pdfReader) text(o types.Object) string {
	if o == nil {
		return ""
	}
	s, err := p.ctx.DereferenceStringOrHexLiteral(o, model.V10, nil)
	if err != nil {
		return ""
	}
	return s
}

// tree walks the list of attachments, an ordered tree of names.
func (p *pdfReader) tree(a *Attached, o types.Object) error {
	if p.names--; p.names < 0 {
		return refused(nil, "the file lists more attachments than any worksheet", giveOriginal)
	}
	node := p.dict(o)
	if node == nil {
		return nil
	}
	for _, kid := range p.array(node["Kids"]) {
		if err := p.tree(a, kid); err != nil {
			return err
		}
	}
	pairs := p.array(node["Names"])
	for i := 1; i < len(pairs); i += 2 {
		if p.names--; p.names < 0 {
			return refused(nil, "the file lists more attachments than any worksheet", giveOriginal)
		}
		if err := p.file(a, p.dict(pairs[i])); err != nil {
			return err
		}
	}
	return nil
}

// file takes one attachment, if its name is one of ours. The library writes the
// name under UF only; other programs write both.
func (p *pdfReader) file(a *Attached, spec types.Dict) error {
	name := p.text(spec["UF"])
	if name == "" {
		name = p.text(spec["F"])
	}
	var into *[]byte
	limit := 0
	switch name {
	case attachedRecord:
		into, limit = &a.Record, maxRecord
	case attachedCase:
		into, limit = &a.Case, maxCaseFile
	case attachedFit:
		p.lineAlone = true
		return nil
	default:
		return nil
	}
	if *into != nil {
		return refused(nil, "two files named "+name+" are attached to it", giveOriginal)
	}
	ef := p.dict(spec["EF"])
	var stream *types.StreamDict
	for _, key := range []string{"F", "UF"} {
		if o := ef[key]; o != nil && stream == nil {
			stream, _, _ = p.ctx.DereferenceStreamDict(o)
		}
	}
	if stream == nil {
		return refused(nil, "the attached "+name+" is damaged: it has no content", giveOriginal)
	}
	// One filter, the one that the worksheets are written with, or none: a chain
	// of filters could unpack to the limit at each link.
	if len(stream.FilterPipeline) > 1 {
		return refused(nil, "the attached "+name+" is packed several times over", giveOriginal)
	}
	err := stream.DecodeWithLimit(int64(limit))
	switch {
	case errors.Is(err, filter.ErrDecodeLimitExceeded):
		return refused(err, fmt.Sprintf("the attached %s unpacks to more than %d MB", name, limit>>20), "no worksheet has so much; "+giveOriginal)
	case err != nil:
		return refused(err, "the attached "+name+" is damaged: "+err.Error(), giveOriginal)
	case len(stream.Content) > limit:
		return refused(nil, fmt.Sprintf("the attached %s has more than %d MB", name, limit>>20), "no worksheet has so much; "+giveOriginal)
	}
	*into = stream.Content
	if *into == nil {
		*into = []byte{}
	}
	return nil
}

// paper is the size that the pages are set on: of the first that says one.
func (p *pdfReader) paper(root types.Dict) Paper {
	node := p.dict(root["Pages"])
	for range maxPDFDepth {
		if node == nil {
			break
		}
		if box := p.array(node["MediaBox"]); len(box) == 4 {
			if width, err := p.ctx.DereferenceNumber(box[2]); err == nil {
				if w, _ := Letter.Size(); width > w-1 && width < w+1 {
					return Letter
				}
			}
			return A4
		}
		kids := p.array(node["Kids"])
		if len(kids) == 0 {
			break
		}
		node = p.dict(kids[0])
	}
	return A4
}

// digestAmong finds the digest among the keywords: "…, record 0123456789abcdef".
func digestAmong(keywords string) string {
	for word := range strings.SplitSeq(keywords, ",") {
		if d, ok := strings.CutPrefix(strings.TrimSpace(word), "record "); ok {
			return d
		}
	}
	return ""
}

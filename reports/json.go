package reports

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"strconv"
	"strings"
	"unicode/utf8"

	"tayra/dose"
)

// JSON writes the record of a worksheet: indented by two spaces, letters as
// they are, one line break at the end. The keys stand in the order of
// [dose.Worksheet], those of a map in the order of the alphabet, and every
// number has all its digits, so that one worksheet has one record, byte for
// byte. The error is of a number that is none, which no worksheet should hold.
func JSON(ws *dose.Worksheet) ([]byte, error) {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	if err := e.Encode(ws); err != nil {
		return nil, fmt.Errorf("the record cannot be written: %w", err)
	}
	return b.Bytes(), nil
}

// Digest names a record: the first 16 hexadecimal digits of its SHA-256. It
// stands in the foot of every page, so that a sheet of paper and a file can be
// told to be of one draft. It guards against mistakes, not against forgery.
func Digest(record []byte) string {
	sum := sha256.Sum256(record)
	return hex.EncodeToString(sum[:])[:16]
}

const (
	// maxRecord bounds a record in bytes; the largest worksheet, drafted from a
	// line over 2,000 animals, has about half of it.
	maxRecord = 16 << 20
	// maxRecordDepth bounds its nesting; a worksheet nests 8 deep.
	maxRecordDepth = 32
)

// A RecordError says why a file is no record that this program can read.
type RecordError struct {
	Problem string
	Remedy  string
	err     error
}

// Error says what is wrong and what to do.
func (e *RecordError) Error() string {
	if e.Remedy == "" {
		return e.Problem
	}
	return e.Problem + "; " + e.Remedy
}

// Unwrap gives the fault of the JSON text, where there is one.
func (e *RecordError) Unwrap() error { return e.err }

// recordKeys are the keys that every record of the format has had.
var recordKeys = []string{"format", "program", "patient", "drug", "drafts", "drafted", "cautions", "overrides"}

// ReadRecord reads a record that [JSON] wrote, of this version or another of
// the same format: a key that an older version did not write is left at its
// zero value, and a key that a later one added is passed over. What is not ours
// is refused: another format, a missing main part, a key twice or in other
// capitals, a value of another kind, anything after the end. The error is a
// [*RecordError].
func ReadRecord(b []byte) (*dose.Worksheet, error) {
	fail := func(err error, problem, remedy string) (*dose.Worksheet, error) {
		return nil, &RecordError{Problem: problem, Remedy: remedy, err: err}
	}
	const give = "give the file that --json wrote, or the attachment of a worksheet"
	switch {
	case len(b) > maxRecord:
		return fail(nil, fmt.Sprintf("the record has %d bytes, over the limit of %d", len(b), maxRecord), give)
	case len(bytes.TrimSpace(b)) == 0:
		return fail(nil, "the record is empty", give)
	case !utf8.Valid(b):
		return fail(nil, "the record is not UTF-8 text", give)
	}
	keys, err := checkKeys(b)
	if err != nil {
		return fail(err, "this is no record of a worksheet: "+err.Error(), give)
	}
	var head struct {
		Format  *string       `json:"format"`
		Program *dose.Program `json:"program"`
	}
	if err := json.Unmarshal(b, &head); err != nil {
		return fail(err, "this is no record of a worksheet: "+plainJSONError(err), give)
	}
	switch {
	case head.Format == nil:
		return fail(nil, "this is no record of a worksheet: it has no \"format\"", give)
	case *head.Format != dose.Format:
		name, _, _ := strings.Cut(dose.Format, "/")
		if strings.HasPrefix(*head.Format, name+"/") {
			return fail(nil, fmt.Sprintf("the record is of the format %s, and this program reads %s", strconv.Quote(*head.Format), dose.Format), "read it with the version of the program that wrote it")
		}
		return fail(nil, "this is no record of a worksheet: its format is "+strconv.Quote(clip(*head.Format)), give)
	}
	for _, k := range recordKeys {
		if !keys[k] {
			return fail(nil, "the record is incomplete: it has no "+strconv.Quote(k), give)
		}
	}
	if head.Program == nil || head.Program.Name == "" || head.Program.Version == "" {
		return fail(nil, "the record does not say which program and version wrote it", give)
	}
	ws := new(dose.Worksheet)
	if err := json.Unmarshal(b, ws); err != nil {
		return fail(err, "the record was changed or damaged: "+plainJSONError(err), give)
	}
	return ws, nil
}

// clip keeps a text of the file short enough for a message.
func clip(s string) string {
	const most = 40
	if r := []rune(s); len(r) > most {
		return string(r[:most]) + "…"
	}
	return s
}

// plainJSONError says a fault of the JSON text without the names of Go types.
func plainJSONError(err error) string {
	var t *json.UnmarshalTypeError
	if errors.As(err, &t) {
		return fmt.Sprintf("%s holds a %s where the record has another kind of value", strconv.Quote(t.Field), t.Value)
	}
	if errors.Is(err, io.ErrUnexpectedEOF) { // in the middle of a word or text
		return "it ends too early"
	}
	var s *json.SyntaxError
	if errors.As(err, &s) {
		return fmt.Sprintf("byte %d: %s", s.Offset, s.Error())
	}
	return err.Error()
}

// checkKeys walks the whole text and gives the keys of the outermost object.
// It refuses a key given twice, with capitals ignored as the decoder ignores
// them, since the two readings of such a file differ between programs; nesting
// beyond reason; and anything after the end.
func checkKeys(b []byte) (top map[string]bool, err error) {
	d := json.NewDecoder(bytes.NewReader(b))
	d.UseNumber()
	type level struct {
		keys map[string]bool // nil in a list
		key  bool            // the next text is a key
	}
	var stack []level
	top = map[string]bool{}
	for {
		token, err := d.Token()
		if err == io.EOF {
			if len(stack) > 0 {
				return nil, errors.New("it ends too early")
			}
			return top, nil
		}
		if err != nil {
			return nil, errors.New(plainJSONError(err))
		}
		if len(stack) == 0 && token != json.Delim('{') {
			return nil, errors.New("it is no JSON object")
		}
		delim, isDelim := token.(json.Delim)
		switch {
		case isDelim && (delim == '{' || delim == '['):
			if n := len(stack); n > 0 && stack[n-1].keys != nil {
				stack[n-1].key = true
			}
			if len(stack) == maxRecordDepth {
				return nil, errors.New("it is nested too deep")
			}
			l := level{}
			if delim == '{' {
				l.keys, l.key = map[string]bool{}, true
			}
			stack = append(stack, l)
		case isDelim:
			stack = stack[:len(stack)-1]
			if len(stack) == 0 {
				if d.More() {
					return nil, errors.New("something stands after its end")
				}
				if _, err := d.Token(); err != io.EOF {
					return nil, errors.New("something stands after its end")
				}
				return top, nil
			}
		default:
			l := &stack[len(stack)-1]
			if l.keys == nil {
				continue
			}
			if !l.key {
				l.key = true
				continue
			}
			name, _ := token.(string)
			folded := strings.ToLower(name)
			if l.keys[folded] {
				return nil, fmt.Errorf("the key %s is given twice", strconv.Quote(clip(name)))
			}
			l.keys[folded], l.key = true, false
			if len(stack) == 1 {
				top[name] = true
			}
		}
	}
}

package reports

import (
	"bytes"
	"compress/zlib"
	"errors"
	"fmt"
	"io"
	"regexp"
	"slices"
	"strings"
	"sync"
)

const attachedPart = "an attached file"

// samePages says how the pages of a file compare with those drawn again from
// its record. ok is true when they are the same, byte for byte or, where only
// the packing differs, after unpacking: the same source built with another
// version of its compressor packs other bytes. text says it in a sentence.
func samePages(given, drawn []byte, producerThen string) (ok bool, text string) {
	if bytes.Equal(given, drawn) {
		return true, "The pages were drawn again: the same file, byte for byte."
	}
	if bytes.HasPrefix(given, drawn) {
		return false, fmt.Sprintf("Something was added behind the worksheet as it was written, %s (a note, a signature, a change of a page); underneath it is the same, byte for byte.", countWord(float64(len(given)-len(drawn)), "byte"))
	}
	page, otherForm := 0, false
	var changed []string
	note := func(part string) {
		if !slices.Contains(changed, part) {
			changed = append(changed, part)
		}
	}
	for {
		g, okGiven := cutStream(given)
		d, okDrawn := cutStream(drawn)
		if okGiven != okDrawn {
			otherForm = true
			break
		}
		content := ""
		if okGiven {
			// A page's content follows the page.
			if bytes.Contains(d.before, []byte("/Type /Page\n")) {
				page++
				content = fmt.Sprintf("page %d", page)
			} else if content = "a font or a figure"; bytes.Contains(d.before, []byte("/Type /EmbeddedFile")) {
				content = attachedPart
			}
		}
		same := !okGiven || sameContent(&g, &d)
		x, y := withoutLengths(g.before), withoutLengths(d.before)
		if !same && content == attachedPart {
			x, y = withoutSums(x), withoutSums(y) // they follow from the content
		}
		if !bytes.Equal(x, y) {
			note("what stands between its pages (its properties, such as the keywords with the digest, or its order)")
		}
		if !okGiven {
			break
		}
		if !same {
			note(content)
		}
		given, drawn = g.after, d.after
	}
	if len(changed) == 0 && !otherForm {
		return true, "The pages were drawn again: the same once unpacked; only the compressor of another build differs."
	}
	switch now := producer(); {
	case producerThen != "" && producerThen != now:
		return false, "The file was saved again by another program (" + clip(producerThen) + "), so its pages cannot be held against those drawn from the record."
	case otherForm:
		return false, "The file is not put together as this program does it: another program saved it again, so its pages cannot be held against those drawn from the record."
	}
	if len(changed) == 1 && changed[0] == attachedPart {
		return false, "The pages are those that are drawn from the inputs; an attached file was changed."
	}
	const most = 8
	if more := len(changed) - most; more > 0 {
		changed = append(changed[:most], countWord(float64(more), "more part"))
	}
	return false, "The file is not the one that is drawn from the inputs in the record; changed: " + strings.Join(changed, "; ") + "."
}

// streamPart is a packed part of a PDF as this program writes it.
type streamPart struct {
	before []byte // from the part before, up to the content and with its opening
	packed []byte
	flate  bool
	after  []byte
}

var (
	lengthEntry = pattern(`/Length (\d+)`)
	opening     = pattern(`>>\n\n?stream\n`)
)

// cutStream cuts the next packed part off. Without one, before is all there is.
func cutStream(b []byte) (streamPart, bool) {
	const closing = "\nendstream\n"
	at := opening().FindIndex(b)
	if at == nil {
		return streamPart{before: b}, false
	}
	head, rest := b[:at[1]], b[at[1]:]
	dict := head[max(0, bytes.LastIndex(head, []byte(" obj\n"))):]
	m := lengthEntry().FindSubmatch(dict)
	if m == nil || len(m[1]) > 9 {
		return streamPart{before: b}, false
	}
	n := 0
	for _, digit := range m[1] {
		n = 10*n + int(digit-'0')
	}
	if n > len(rest) || !bytes.HasPrefix(rest[n:], []byte(closing)) {
		return streamPart{before: b}, false
	}
	return streamPart{before: head, packed: rest[:n], flate: bytes.Contains(dict, []byte("/FlateDecode")), after: rest[n:]}, true
}

// sameContent compares two parts unpacked; the first is not unpacked further
// than the second is long.
func sameContent(given, drawn *streamPart) bool {
	if bytes.Equal(given.packed, drawn.packed) {
		return true
	}
	want, err := drawn.unpack(maxUnpacked)
	if err != nil {
		return false
	}
	got, err := given.unpack(len(want))
	return err == nil && bytes.Equal(got, want)
}

// maxUnpacked bounds a part of our own making.
const maxUnpacked = 64 << 20

// unpack gives the content, up to one byte more than the limit. Anything behind
// the end of the packing is an error.
func (s *streamPart) unpack(limit int) ([]byte, error) {
	if !s.flate {
		return s.packed, nil
	}
	r := bytes.NewReader(s.packed)
	z, err := zlib.NewReader(r)
	if err != nil {
		return nil, err
	}
	defer z.Close()
	b, err := io.ReadAll(io.LimitReader(z, int64(limit)+1))
	if err == nil && len(b) <= limit && r.Len() > 0 {
		err = errors.New("something stands behind its end")
	}
	return b, err
}

var (
	crossReferences = pattern(`\nxref\n[0-9 \nfn]*trailer\n`)
	startReference  = pattern(`startxref\n\d+\n`)
	sumsOfFile      = pattern(`/Params << /CheckSum <[0-9a-f]*> /Size \d+ >>`)
)

// withoutSums drops the check sum and the size of an attached file.
func withoutSums(b []byte) []byte { return sumsOfFile().ReplaceAll(b, nil) }

// withoutLengths drops the numbers that follow from how well the parts are
// packed: their lengths, and the places of the objects behind them.
func withoutLengths(b []byte) []byte {
	b = lengthEntry().ReplaceAll(b, []byte("/Length"))
	b = crossReferences().ReplaceAll(b, []byte("\ntrailer\n"))
	return startReference().ReplaceAll(b, []byte("startxref\n"))
}

// pattern is a regular expression that is read when it is first used: every
// command starts this program, and few of them reread.
func pattern(expr string) func() *regexp.Regexp {
	return sync.OnceValue(func() *regexp.Regexp { return regexp.MustCompile(expr) })
}

package reports

import (
	"bytes"
	"compress/zlib"
	"fmt"
	"io"
	"regexp"
	"strings"
)

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
	page := 0
	var changed []string
	note := func(part string) {
		if len(changed) == 0 || changed[len(changed)-1] != part {
			changed = append(changed, part)
		}
	}
	for {
		g, okGiven := cutStream(given)
		d, okDrawn := cutStream(drawn)
		if okGiven != okDrawn {
			note("the number of its parts")
			break
		}
		if !bytes.Equal(withoutLengths(g.before), withoutLengths(d.before)) {
			note("what stands between its pages (its properties, such as the keywords with the digest, or its order)")
		}
		if !okGiven {
			break
		}
		// A page's content follows the page.
		isPage := bytes.Contains(d.before, []byte("/Type /Page\n"))
		if isPage {
			page++
		}
		want, err := d.unpack(maxRecord)
		if err != nil {
			note("a part that cannot be unpacked")
			break
		}
		got, err := g.unpack(len(want))
		if err != nil || !bytes.Equal(got, want) {
			switch {
			case isPage:
				note(fmt.Sprintf("page %d", page))
			case bytes.Contains(d.before, []byte("/Type /EmbeddedFile")):
				note("an attached file")
			default:
				note("a font or a figure")
			}
		}
		given, drawn = g.after, d.after
	}
	if len(changed) == 0 {
		return true, "The pages were drawn again: the same once unpacked; only the compressor of another build differs."
	}
	if now := producer(); producerThen != "" && producerThen != now {
		return false, "The file was saved again by another program (" + clip(producerThen) + "), so its pages cannot be held against those drawn from the record."
	}
	const most = 8
	if more := len(changed) - most; more > 0 {
		changed = append(changed[:most], countWord(float64(more), "more part"))
	}
	return false, "The file is not the one that is drawn from the record; changed: " + strings.Join(changed, "; ") + "."
}

// streamPart is a packed part of a PDF as this program writes it.
type streamPart struct {
	before []byte // from the part before, up to the content and with its opening
	packed []byte
	flate  bool
	after  []byte
}

var (
	lengthEntry = regexp.MustCompile(`/Length (\d+)`)
	opening     = regexp.MustCompile(`>>\n\n?stream\n`)
)

// cutStream cuts the next packed part off. Without one, before is all there is.
func cutStream(b []byte) (streamPart, bool) {
	const closing = "\nendstream\n"
	at := opening.FindIndex(b)
	if at == nil {
		return streamPart{before: b}, false
	}
	head, rest := b[:at[1]], b[at[1]:]
	dict := head[max(0, bytes.LastIndex(head, []byte(" obj\n"))):]
	m := lengthEntry.FindSubmatch(dict)
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

// unpack gives the content, up to one byte more than the limit.
func (s *streamPart) unpack(limit int) ([]byte, error) {
	if !s.flate {
		return s.packed, nil
	}
	z, err := zlib.NewReader(bytes.NewReader(s.packed))
	if err != nil {
		return nil, err
	}
	defer z.Close()
	return io.ReadAll(io.LimitReader(z, int64(limit)+1))
}

var (
	crossReferences = regexp.MustCompile(`\nxref\n[0-9 \nfn]*trailer\n`)
	startReference  = regexp.MustCompile(`startxref\n\d+\n`)
)

// withoutLengths drops the numbers that follow from how well the parts are
// packed: their lengths, and the places of the objects behind them.
func withoutLengths(b []byte) []byte {
	b = lengthEntry.ReplaceAll(b, []byte("/Length"))
	b = crossReferences.ReplaceAll(b, []byte("\ntrailer\n"))
	return startReference.ReplaceAll(b, []byte("startxref\n"))
}

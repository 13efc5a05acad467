package reports

import (
	"bytes"
	"errors"
	"fmt"
	"strings"
	"time"

	"github.com/jung-kurt/gofpdf"
)

// properties is what a PDF says about itself. All texts pass CheckText; those
// that are empty are left out, but for the producer.
type properties struct {
	title, subject, keywords, author string

	producer string    // the program and its version
	date     time.Time // written in UTC as the date of creation and of change
	attached []attachment
}

// attachment is a file inside the PDF.
type attachment struct {
	name        string // of the file, no folder
	description string
	content     []byte
}

// mostAttached is how many files fit in: the library numbers their keys
// without leading zeros, and the keys of a PDF name tree must be sorted.
const mostAttached = 9

// render lays the document out, draws it and returns the bytes of a PDF 1.7
// file. The same document and properties give the same bytes in the same
// build.
func (d *document) render(pr properties) ([]byte, error) {
	if d.err != nil {
		return nil, d.err
	}
	width, height := d.paper.Size()
	l, err := d.layOut(height)
	if err != nil {
		return nil, err
	}
	p := newPen(width, height)
	for i, page := range l.pages {
		p.page()
		p.stacked(l.heads[i], marginY)
		p.placed(page, l.top)
		p.stacked(l.feet[i], height-marginY-stack(l.feet[i]))
	}
	return p.finish(pr)
}

// layout is a document whose pages are known.
type layout struct {
	top, height float64 // of the body
	pages       [][]placing
	heads, feet [][]band
}

// layOut deals the body out on pages. The head and the foot may say how many
// pages there are, and how high they are decides how many there are: it is
// done again with more room for them until they fit, which nearly always is
// at once.
func (d *document) layOut(height float64) (layout, error) {
	one := func(m margin, page, pages int) []band {
		f := &flow{doc: d, x: d.body.x, width: d.body.width}
		if m != nil {
			d.naming("page margin")
			m(f, page, pages)
		}
		return f.bands
	}
	headRoom, footRoom := stack(one(d.head, 1, 1)), stack(one(d.foot, 1, 1))
	for range 4 {
		l := layout{top: marginY + headRoom + marginA}
		l.height = height - marginY - footRoom - marginA - l.top
		if l.height < minimumBody {
			return l, fmt.Errorf("head and foot leave %.0f points of the page; shorten the texts in them", l.height)
		}
		var err error
		if l.pages, err = paginate(d.body.bands, l.height); err != nil {
			return l, err
		}
		head, foot := headRoom, footRoom
		for i := range l.pages {
			l.heads = append(l.heads, one(d.head, i+1, len(l.pages)))
			l.feet = append(l.feet, one(d.foot, i+1, len(l.pages)))
			head = max(head, stack(l.heads[i]))
			foot = max(foot, stack(l.feet[i]))
		}
		if d.err != nil {
			return l, d.err
		}
		if head <= headRoom+slack && foot <= footRoom+slack {
			return l, nil
		}
		headRoom, footRoom = head, foot
	}
	return layout{}, errors.New("the head or the foot grows with the number of pages")
}

// finish closes the document and returns its bytes.
func (p *pen) finish(pr properties) ([]byte, error) {
	if p.err != nil {
		return nil, p.err
	}
	if pr.date.IsZero() {
		return nil, errors.New("a PDF needs a date; the clock is not read")
	}
	for _, property := range []struct {
		name string
		text string
		set  func(string, bool)
	}{
		{"title", pr.title, p.pdf.SetTitle},
		{"subject", pr.subject, p.pdf.SetSubject},
		{"keywords", pr.keywords, p.pdf.SetKeywords},
		{"author", pr.author, p.pdf.SetAuthor},
		{"producer", pr.producer, p.pdf.SetProducer},
	} {
		text, err := CheckText("document "+property.name, property.text)
		if err != nil {
			return nil, err
		}
		if text != "" || property.name == "producer" {
			property.set(text, true)
		}
	}
	p.pdf.SetCreationDate(pr.date.UTC())
	p.pdf.SetModificationDate(pr.date.UTC())
	if len(pr.attached) > mostAttached {
		return nil, fmt.Errorf("%d files attached; at most %d can be", len(pr.attached), mostAttached)
	}
	var attached []gofpdf.Attachment
	for _, a := range pr.attached {
		name, err := CheckText("attachment name", a.name)
		if err != nil {
			return nil, err
		}
		if name == "" || strings.ContainsAny(name, `/\:`) {
			return nil, fmt.Errorf("attachment name %q is not a plain file name", name)
		}
		description, err := CheckText("attachment description", a.description)
		if err != nil {
			return nil, err
		}
		attached = append(attached, gofpdf.Attachment{Content: a.content, Filename: name, Description: description})
	}
	p.pdf.SetAttachments(attached)

	var out bytes.Buffer
	if err := p.pdf.Output(&out); err != nil {
		return nil, err
	}
	b := out.Bytes()
	// The library says version 1.3 whatever is inside; attached files and the
	// rest of what it writes belong to later ones.
	const wrong, right = "%PDF-1.", "%PDF-1.7"
	if !bytes.HasPrefix(b, []byte(wrong)) || len(b) < len(right) {
		return nil, errors.New("the PDF library wrote no PDF header")
	}
	copy(b, right)
	return b, nil
}

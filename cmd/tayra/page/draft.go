package page

import (
	"bytes"
	"fmt"
	"net/http"
	"strings"

	"tayra/dose"
)

// drafted is the answer to what is typed.
type drafted struct {
	State  string  `json:"state"` // draft | stop | faults
	Say    string  `json:"say"`   // announced; it holds no dose, which never stands without its range
	Top    string  `json:"top"`   // the head of the worksheet and its box
	Rest   string  `json:"rest"`  // everything below
	Faults []fault `json:"faults"`
	Stops  []stop  `json:"stops"`
}

// fault is one fault, beside the field that it belongs to.
type fault struct {
	Path    string `json:"path"` // "" for one of the case as a whole
	ID      string `json:"id"`
	Label   string `json:"label"`
	Text    string `json:"text"`    // what is wrong; what to write instead
	Missing bool   `json:"missing"` // nothing is typed there yet
}

// stop is a stop that a written reason can set aside, or has.
type stop struct {
	Slug string `json:"slug"`
	Text string `json:"text"`
}

func (s *server) draft(w http.ResponseWriter, r *http.Request) {
	c, ok := workFrom(w, r)
	if !ok {
		return
	}
	out := drafted{Faults: []fault{}, Stops: []stop{}}
	var err error
	if c.ws == nil {
		err = out.refused(c)
	} else {
		err = out.worked(c.ws)
	}
	if err != nil {
		http.Error(w, "the worksheet cannot be set: "+err.Error(), http.StatusInternalServerError)
		return
	}
	reply(w, http.StatusOK, out)
}

// refused fills the answer to a case with faults.
func (d *drafted) refused(c *work) error {
	d.State = "faults"
	missing := 0
	for _, e := range c.faults {
		f := faultOf(e)
		if f.Missing {
			missing++
		}
		d.Faults = append(d.Faults, f)
	}
	switch wrong := len(d.Faults) - missing; {
	case wrong == 0:
		d.Say = "No draft yet: " + count(missing, "field is", "fields are") + " still to fill in."
	default:
		d.Say = "No draft: " + count(wrong, "field is", "fields are") + " wrong."
		for _, f := range d.Faults {
			if !f.Missing {
				d.Say += " " + strings.TrimPrefix(f.Label+": ", ": ") + f.Text + "."
				break
			}
		}
	}
	var err error
	d.Top, err = render("faults.html", d)
	return err
}

func count(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}

func faultOf(e *dose.InputError) fault {
	f := fault{Text: e.Problem, Missing: strings.HasPrefix(e.Problem, "missing")}
	if e.Remedy != "" {
		f.Text += "; " + e.Remedy
	}
	path := fieldPath(e.Field)
	if label, ok := onForm(path); ok {
		f.Path, f.ID, f.Label = path, idOf(path), label
	} else {
		f.Label = e.Field
	}
	return f
}

// worked fills the answer to a case that was worked out, stopped or not.
func (d *drafted) worked(ws *dose.Worksheet) error {
	d.State = "draft"
	if ws.Drafted == nil {
		d.State = "stop"
	}
	for i := range ws.Cautions {
		c := &ws.Cautions[i]
		if (c.Level == dose.Stop || c.Overridden) && !dose.CannotOverride(c.Slug) {
			d.Stops = append(d.Stops, stop{Slug: c.Slug, Text: stopWords(c)})
		}
	}
	v := newSheet(ws)
	d.Say = v.announcement()
	var err error
	if d.Top, err = render("top.html", v); err != nil {
		return err
	}
	d.Rest, err = render("rest.html", v)
	return err
}

func render(name string, data any) (string, error) {
	var b bytes.Buffer
	err := templates().ExecuteTemplate(&b, name, data)
	return b.String(), err
}

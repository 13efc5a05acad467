package page

import (
	"net/http"
	"strings"

	"tayra/reports"
)

// caseFile gives the case as a file, with or without faults: what is half
// filled in is worth keeping too.
func (s *server) caseFile(w http.ResponseWriter, r *http.Request) {
	if c, ok := workFrom(w, r); ok {
		attach(w, "application/yaml", fileName("case", c, ".yaml"), c.file)
	}
}

// record gives the JSON record.
func (s *server) record(w http.ResponseWriter, r *http.Request) {
	c, ok := completeFrom(w, r)
	if !ok {
		return
	}
	data, err := reports.JSON(c.ws)
	if err != nil {
		http.Error(w, err.Error(), http.StatusInternalServerError)
		return
	}
	attach(w, "application/json", fileName("record", c, ".json"), data)
}

// worksheet gives the PDF, with the case in it.
func (s *server) worksheet(w http.ResponseWriter, r *http.Request) {
	paper, err := reports.ParsePaper(r.PathValue("paper"))
	if err != nil {
		refuse(w, http.StatusNotFound, err.Error())
		return
	}
	c, ok := completeFrom(w, r)
	if !ok {
		return
	}
	data, err := reports.PDF(c.ws, reports.PDFOptions{Paper: paper, Case: c.file})
	if err != nil {
		refuse(w, understood, "No worksheet: "+err.Error())
		return
	}
	attach(w, "application/pdf", fileName("worksheet", c, ".pdf"), data)
}

// completeFrom is a case that was worked out, stopped or not. One with faults
// is refused with all of them.
func completeFrom(w http.ResponseWriter, r *http.Request) (*work, bool) {
	c, ok := workFrom(w, r)
	if !ok {
		return nil, false
	}
	if c.ws != nil {
		return c, true
	}
	lines := make([]string, len(c.faults))
	for i, e := range c.faults {
		f := faultOf(e)
		lines[i] = strings.TrimPrefix(f.Label+": ", ": ") + f.Text
	}
	refuse(w, understood, "Nothing to save yet: "+count(len(lines), "field is", "fields are")+" wrong or missing.", lines...)
	return nil, false
}

// attach sends a file to be saved.
func attach(w http.ResponseWriter, kind, name string, data []byte) {
	w.Header().Set("Content-Type", kind)
	w.Header().Set("Content-Disposition", `attachment; filename="`+name+`"`)
	w.Write(data)
}

// fileName names a file after the case number.
func fileName(what string, c *work, ending string) string {
	if id := plainName(c.in.Case.Text); id != "" {
		what += "-" + id
	}
	return what + ending
}

// plainName keeps the letters of a name that are safe in the name of a file
// everywhere.
func plainName(s string) string {
	s = strings.Map(func(r rune) rune {
		switch {
		case r >= 'a' && r <= 'z', r >= 'A' && r <= 'Z', r >= '0' && r <= '9', r == '-', r == '.':
			return r
		}
		return '-'
	}, s)
	s = strings.Trim(s, ".-")
	return strings.TrimRight(s[:min(len(s), 60)], ".-")
}

package reports

import (
	"fmt"
	"strings"
)

// steps writes the reckoning out as on a slate, model by model, the one that
// the draft was taken from first.
func (s *sheet) steps() {
	f, ws := s.f, s.ws
	var order []int
	if ws.DraftedFrom != nil && ws.DraftedFrom.Index >= 0 && ws.DraftedFrom.Index < len(ws.Drafts) {
		order = append(order, ws.DraftedFrom.Index)
	}
	for i := range ws.Drafts {
		if len(order) == 0 || i != order[0] {
			order = append(order, i)
		}
	}
	for n, i := range order {
		d := &ws.Drafts[i]
		if len(d.Steps) == 0 {
			continue
		}
		title := "Steps"
		if len(ws.Drafts) > 1 {
			title += ", model " + modelName(d)
		}
		f.heading(title)
		if n == 0 {
			f.para(plain(stepsWords(ws)))
			f.keepNext()
		}
		seen := map[string]int{}
		for k := range d.Steps {
			x := &d.Steps[k]
			source := paperText(x.Source)
			switch at, ok := seen[source]; {
			case source == "definition":
				source = ""
			case ok && len(source) > 40:
				source = fmt.Sprintf("as in step %d", at)
			case !ok:
				seen[source] = k + 1
			}
			f.step(slateStep{number: k + 1, title: paperFormula(x.Title), formula: paperFormula(x.Formula), substituted: paperText(x.Substituted), result: paperText(x.Result), source: source})
		}
	}
}

// sources lists what the worksheet leans on, each once.
func (s *sheet) sources() {
	f := s.f
	f.heading("Sources")
	for _, x := range groupSources(s.ws.Sources) {
		runs := []run{bold(capital(x.What) + ": "), plain(paperText(x.Citation))}
		if x.Memory && !strings.Contains(x.Citation, "memory") {
			runs = append(runs, plain(" (from memory)"))
		}
		f.bullet(paraStyle{size: sizeSmall}, runs...)
	}
	f.bullet(paraStyle{size: sizeSmall}, plain("From memory: not yet held against the publication. Attached to this file: "+attachedRecord+" (every number in full) and "+attachedCase+" (the case as written)."))
}

// signature is what the veterinarian fills in by hand.
func (s *sheet) signature() {
	s.f.together(func(f *flow) {
		f.heading("Signature")
		f.para(plain("What the veterinarian changed, and why:"))
		f.ruled(3)
		f.signatures(3, "Name", "Licence number", "Signature", "Date and time", "Second check: name", "Second check: signature, time")
	})
}

package reports

import (
	"strings"

	"tayra/metabolic"
)

// How many letters of a typed text the head and the foot show. The whole text
// stands in the body; a margin that grew with it would leave no page.
const (
	headLetters = 40
	footLetters = 200
	mostReasons = 4 // overrides whose reason the foot shows
)

// shortened cuts a text to at most n letters, at the end of a word where one is
// near, and marks the cut.
func shortened(text string, n int) string {
	letters := []rune(text)
	if len(letters) <= n {
		return text
	}
	cut := string(letters[:n-1])
	if i := strings.LastIndexByte(cut, ' '); i > len(cut)*2/3 {
		cut = cut[:i]
	}
	return strings.TrimRight(cut, " ,;:.") + "…"
}

// head says on every page whose worksheet this is.
func (s *sheet) head(f *flow, page, pages int) {
	p := &s.ws.Patient
	left := []run{bold("Worksheet, case " + shortened(caseWords(s.ws), headLetters))}
	name := animalWords(p.CommonName, p.Species)
	if p.Name != "" {
		name = shortened(p.Name, headLetters) + ", " + name
	}
	left = append(left, plain("   "), bold(name))
	f.split(paraStyle{size: sizeBody, gap: -1}, left, []run{plain(s.ws.Date + "   "), pageOf(page, pages)})
	mass := massWords(p.MassKg, p.MassLowKg, p.MassHighKg)
	if !p.Estimated {
		mass += " (weighed)"
	}
	second := []run{bold(mass)}
	about := []string{}
	if p.TemperatureC != nil {
		about = append(about, "body temperature "+metabolic.FormatCelsius(metabolic.Celsius(*p.TemperatureC)))
	}
	if p.Stage != "" {
		about = append(about, p.Stage)
	}
	about = append(about, conditionWords(p.Condition)...)
	if p.CommonName != "" {
		about = append(about, p.Species)
	}
	second = append(second, plain(", "+strings.Join(about, ", ")))
	f.paragraph(paraStyle{size: sizeBody, gap: -1}, second...)
	f.rule(rulerThin)
}

// foot says on every page what this is not, which stops were set aside, and
// which record it belongs to.
func (s *sheet) foot(f *flow, page, pages int) {
	f.rule(rulerThin)
	over := overridden(s.ws)
	if len(over) > 0 {
		runs := []run{bold("OVERRIDDEN STOPS: ")}
		letters := footLetters / min(len(over), mostReasons)
		cut := len(over) > mostReasons
		for i, c := range over {
			between := "; "
			if i == 0 {
				between = ""
			}
			runs = append(runs, bold(between+c.Slug))
			if len(over) <= mostReasons {
				reason := shortened(c.Reason, letters)
				cut = cut || reason != c.Reason
				runs = append(runs, plain(": "+reason))
			}
		}
		if cut {
			runs = append(runs, plain(" (reasons in full: see the cautions)"))
		}
		f.paragraph(paraStyle{size: sizeSmall, gap: -1}, runs...)
	}
	made := s.ws.Program.Name + " " + s.ws.Program.Version
	if s.ws.Program.Tables != "" {
		made += ", tables " + s.ws.Program.Tables
	}
	// The first statement stands alone; the right edge names program and record.
	right := []string{made, "record " + s.digest}
	for i, text := range s.ws.Statements {
		cell := plain(text)
		if i == 0 {
			cell = bold(text)
		}
		beside := ""
		if i < len(right) {
			beside = right[i]
		}
		f.split(paraStyle{size: sizeSmall, gap: -1}, []run{cell}, []run{plain(beside)})
	}
	for i := len(s.ws.Statements); i < len(right); i++ {
		f.split(paraStyle{size: sizeSmall, gap: -1}, nil, []run{plain(right[i])})
	}
}

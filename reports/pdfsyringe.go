package reports

import (
	"fmt"
	"strings"

	"tayra/dose"
	"tayra/metabolic"
)

// syringe says what to measure out, and what a course needs.
func (s *sheet) syringe() {
	f, p := s.f, s.ws.Product
	if p == nil {
		return
	}
	f.heading("Syringe and course")
	text := "Product: " + strengthWords(p, s.unit)
	if p.AmountPerPiece > 0 {
		text += " per " + p.Form
	}
	if typed := asGiven(p.StrengthTyped); typed != "" && "Product: "+typed != strings.ReplaceAll(text, ",", "") {
		text += " (given as " + typed + ")"
	}
	switch {
	case p.StepML > 0 && s.from != nil && s.from.Kind == "infusion":
		text += "; the pump is set in steps of " + measuredWords(p.StepML, "mL/h")
	case p.StepML > 0:
		text += "; smallest step of the syringe " + measuredWords(p.StepML, "mL")
	case p.StepPieces > 0:
		text += "; smallest part given " + measuredWords(p.StepPieces, p.Form)
	}
	if p.Rounding == "down" {
		text += "; rounded down, since the margin is narrow"
	} else {
		text += "; rounded to the nearest step"
	}
	if p.LargestPerSiteML > 0 {
		text += "; at most " + measuredWords(p.LargestPerSiteML, "mL") + " at one site"
	}
	f.para(plain(text + "."))
	f.keepNext()
	for _, x := range p.Text {
		f.para(plain(paperText(x)))
	}
	if give := giveWords(p, s.unit); give != "" && s.ws.Drafted != nil {
		f.paragraph(paraStyle{size: sizeAmount}, bold("Give "+give+"."))
		f.keepNext()
	}
	s.measureTable()
	for i := range p.Ends {
		s.administration(endWords(i, len(p.Ends)), &p.Ends[i])
	}
	for i := range p.Pump {
		switch a := &p.Pump[i]; {
		case a.Dilution != nil:
			s.mixing(endWords(i, len(p.Pump)), a.Dilution, true)
		case a.BelowStep:
			f.bullet(paraStyle{}, plain(capital(endWords(i, len(p.Pump))+"the rate is under one step of the pump, and no usual dilution can be set either.")))
		}
	}
	for i, n := 0, len(loadingEnds(s.ws)); i < n; i++ {
		s.administration(loadingLead(i, n)+": ", &s.ws.Loading.Measured[i])
	}
}

// loadingEnds are the loading dose as it is measured out; none without one.
func loadingEnds(ws *dose.Worksheet) []dose.Administration {
	if ws.Loading == nil {
		return nil
	}
	return ws.Loading.Measured
}

// loadingLead names a loading dose, or one end of it.
func loadingLead(i, n int) string {
	return strings.TrimSuffix("loading dose, "+strings.TrimSuffix(endWords(i, n), ": "), ", ")
}

// errorCell is errorWords under a head that says what it is against.
func errorCell(percent float64) string {
	return strings.TrimSuffix(errorWords(percent), " than drafted")
}

// endWords says which end of a dose range something is of.
func endWords(i, n int) string {
	if n == 1 {
		return ""
	}
	return [...]string{"low end: ", "high end: "}[i]
}

// measureTable is what is asked for, what is measured, and the course.
func (s *sheet) measureTable() {
	p := s.ws.Product
	t := pageTable{columns: []tableColumn{{}, {head: "drafted"}, {head: "exactly"}, {head: "measured"}, {head: "holds"}, {head: "error v. drafted"}, {head: "course"}, {head: "in all"}}}
	end := func(i, n int) string { return strings.TrimSuffix(endWords(i, n), ": ") }
	course, total := false, false
	row := func(cells ...string) {
		course, total = course || cells[6] != "", total || cells[7] != ""
		t.rows = append(t.rows, tableRow{cells: cellTexts(cells...)})
	}
	containers := func(n int) string {
		if n == 0 {
			return ""
		}
		return " (" + countWord(float64(n), "container") + ")"
	}
	one := func(name string, a *dose.Administration, unit string) []string {
		cells := []string{name, amountWords(a.AmountAsked, unit), exactWords(a.Exact, a.Measure), "under one step", "", "", "", ""}
		if d := a.Dilution; d != nil {
			cells[3], cells[4], cells[5] = measuredWords(d.DrawML, "mL")+" of the dilution", amountWords(d.AmountGiven, unit), errorCell(d.ErrorPercent)
		} else if !a.BelowStep {
			cells[3], cells[4], cells[5] = measuredWords(a.Measured, a.Measure), amountWords(a.AmountGiven, unit), errorCell(a.ErrorPercent)
		}
		return cells
	}
	for i := range p.Ends {
		a := &p.Ends[i]
		name := end(i, len(p.Ends))
		if name == "" && len(loadingEnds(s.ws)) > 0 {
			name = "each dose"
		}
		cells := one(name, a, s.unit)
		if p.Days > 0 && a.Administrations > 0 {
			cells[6] = countWord(float64(a.Administrations), "dose") + " in " + countWord(p.Days, "day")
			if a.Total > 0 {
				cells[7] = measuredWords(a.Total, a.Measure) + containers(a.Containers)
			}
		}
		row(cells...)
	}
	for i := range p.Pump {
		a := &p.Pump[i]
		asked := ""
		if d := s.ws.Drafted; d != nil {
			asked = amountWords(d.PerAdministration[min(i+2-len(p.Pump), 1)], s.unit)
		}
		cells := []string{end(i, len(p.Pump)), asked, metabolic.Significant(a.ExactMLPerH, 4) + " mL/h", "under one step", "", "", "", ""}
		if d := a.Dilution; d != nil {
			cells[3], cells[4], cells[5] = measuredWords(d.DrawML, "mL/h")+" of the dilution", amountWords(d.AmountGiven, s.unit), errorCell(d.ErrorPercent)
		} else if !a.BelowStep {
			cells[3], cells[4], cells[5] = measuredWords(a.MLPerH, "mL/h"), amountWords(a.AmountPerHour, s.unit), errorCell(a.ErrorPercent)
		}
		if p.Days > 0 && a.TotalML > 0 {
			cells[6], cells[7] = countWord(p.Days, "day"), measuredWords(a.TotalML, "mL")+containers(a.Containers)
		}
		row(cells...)
	}
	for i, n := 0, len(loadingEnds(s.ws)); i < n; i++ {
		cells := one(loadingLead(i, n), &s.ws.Loading.Measured[i], s.ws.Loading.Unit)
		if p.Days > 0 {
			cells[6] = "once, first"
		}
		row(cells...)
	}
	if len(t.rows) == 0 {
		return
	}
	t.drop(map[int]bool{0: len(t.rows) == 1, 6: !course, 7: !total})
	s.table(t)
}

// administration is the dilution and the sites of one dose.
func (s *sheet) administration(lead string, a *dose.Administration) {
	f := s.f
	if d := a.Dilution; d != nil {
		s.mixing(lead, d, false)
	} else if a.BelowStep {
		f.bullet(paraStyle{}, plain(capital(lead+"the dose is under one step, and no usual dilution can be measured either.")))
	}
	if len(a.Sites) > 1 {
		f.bullet(paraStyle{}, plain(capital(lead+"divide over "+countWord(float64(len(a.Sites)), "site")+": "+siteWords(a.Sites)+".")))
	}
}

// mixing is the steps of a dilution, kept on one page.
func (s *sheet) mixing(lead string, d *dose.Dilution, perHour bool) {
	s.f.together(func(f *flow) {
		f.para(bold(capital(lead + "dilute " + dilutionWords(d.Factor) + ":")))
		for i, step := range mixingWords(d, s.unit, perHour) {
			text := plain(step)
			if i == len(d.Steps) {
				text = bold(step)
			}
			f.paragraph(paraStyle{indent: 10, gap: 2}, bold(fmt.Sprintf("%d. ", i+1)), text)
		}
	})
}

// sitesWords says on the first page that a volume goes to several places.
func (s *sheet) sitesWords() string {
	p := s.ws.Product
	if p == nil || len(p.Ends) == 0 {
		return ""
	}
	last := p.Ends[len(p.Ends)-1].Sites
	if len(last) < 2 {
		return ""
	}
	text := "divided over " + countWord(float64(len(last)), "site")
	if len(p.Ends) > 1 {
		text += " at the high end"
	}
	return text + ": " + siteWords(last)
}

// siteWords lists the volumes at each site, equal ones counted.
func siteWords(sites []float64) string {
	var parts []string
	for i := 0; i < len(sites); {
		k := i
		for k < len(sites) && sites[k] == sites[i] {
			k++
		}
		part := measuredWords(sites[i], "mL")
		if k-i > 1 {
			part += fmt.Sprintf(" at each of %d", k-i)
		} else {
			part += " at one"
		}
		parts = append(parts, part)
		i = k
	}
	return strings.Join(parts, ", ")
}

package reports

import (
	"fmt"
	"strings"

	"tayra/dose"
)

// sizeAmount is the second line of the draft: the dose per kg.
const sizeAmount = 11.0

// draftBox is what the first glance takes in: what to give, how far off it may
// be, and the gravest caution.
func (s *sheet) draftBox() {
	s.doc.naming("the draft")
	ws, d := s.ws, s.ws.Drafted
	s.f.box(func(f *flow) {
		f.split(paraStyle{gap: -1}, []run{bold("Draft of a starting dose")}, []run{plain("for a veterinarian's judgement; not a prescription")})
		f.paragraph(paraStyle{size: sizeDraft, gap: 2}, bold(orderWords(ws)))
		if give := giveWords(ws.Product, d.Unit); give != "" {
			f.paragraph(paraStyle{size: sizeDraft, gap: -1}, bold("= "+give))
		} else if ws.Product != nil {
			f.paragraph(paraStyle{size: sizeAmount, gap: -1}, bold("How to measure it out: see Syringe and course."))
		}
		if sites := s.sitesWords(); sites != "" {
			f.paragraph(paraStyle{size: sizeAmount, gap: -1}, bold(sites))
		}
		perKg := []run{bold(perKgPair(d.DosePerKg, d.Unit))}
		if daily := dailyPair(d.DailyPerKg, d.Unit); daily != "" {
			perKg = append(perKg, plain(", in a day "+strings.TrimSuffix(daily, "/day")))
		}
		f.paragraph(paraStyle{size: sizeAmount, gap: 1}, perKg...)
		// What outranks the dose, or contradicts it, is read in one glance
		// with it.
		for _, x := range []string{outrankedWords(ws), d.Disagreement} {
			if x != "" {
				f.para(bold(paperText(x)))
			}
		}
		for _, x := range massEnds(ws) {
			f.paragraph(paraStyle{gap: 1}, plain(x))
		}
		if d.Plan == string(dose.PlanOnce) {
			runs := []run{plain("The two ends follow two rules: by clearance it matches the model's area under the curve, by volume its peak. No interval is drafted.")}
			if startLow(ws) {
				runs = append([]run{bold("Start at the low end. ")}, runs...)
			}
			f.para(runs...)
		}
		if l := ws.Loading; l != nil {
			if order, about := loadingWords(ws); order != "" {
				f.para(bold(order), plain(" "+about))
			} else {
				f.para(bold("No loading dose."), plain(" "+l.Text))
			}
		}
		s.rangeTable(f)
		f.para(plain(d.Meaning))
		if from := fromWords(ws); from != "" {
			f.paragraph(paraStyle{gap: 3}, plain(from))
		}
		s.worst(f)
	})
}

// rangeTable sets the ranges beside the dose that they are about.
func (s *sheet) rangeTable(f *flow) {
	ws, d := s.ws, s.ws.Drafted
	t := pageTable{columns: []tableColumn{{}, {head: "drafted"}, {head: "as likely as not within"}, {head: "nine times in ten within"}}}
	row := func(name, drafted, range50, range90 string) {
		t.rows = append(t.rows, tableRow{cells: [][]run{{plain(name)}, {bold(drafted)}, {bold(range50)}, {bold(range90)}}})
	}
	amount := "amount each time"
	if _, perHour := unitOf(d.Unit); perHour {
		amount = "amount per hour"
	}
	even, ninety := amountRanges(d)
	if d.Plan == string(dose.PlanOnce) && s.from != nil {
		by := ""
		for i := range ws.Bases {
			if b := &ws.Bases[i]; b.Drafted && b.DosePerKg != nil {
				by = perKgPair(*b.DosePerKg, d.Unit)
			}
		}
		row("by clearance", by, perKgRange(d.Range50, d.Unit), perKgRange(d.Range90, d.Unit))
		row("amount by clearance", "", even, ninety)
		if r := s.from.VolumeRange90; r != nil {
			row("by volume", perKgPair(s.from.DosePerKg, d.Unit), "", perKgRange(*r, d.Unit))
		}
		amount = "amount, both ends"
		row(amount, amountPair(d.PerAdministration, d.Unit), "", "")
	} else {
		row("dose per kg", perKgPair(d.DosePerKg, d.Unit), perKgRange(d.Range50, d.Unit), perKgRange(d.Range90, d.Unit))
		row(amount, amountPair(d.PerAdministration, d.Unit), even, ninety)
	}
	f.table(t)
}

// worst says the gravest caution and names every one that asks for a decision,
// so that none is missed where the list runs over the page.
func (s *sheet) worst(f *flow) {
	cs := s.ws.Cautions
	f.rule(rulerHair)
	if len(cs) == 0 {
		f.paragraph(paraStyle{size: sizeHead, gap: 2}, bold(worstWords(s.ws)))
		return
	}
	var names []string
	count := map[string]int{}
	for i := range cs {
		if cs[i].Level == dose.Note {
			continue
		}
		if count[cs[i].Slug]++; count[cs[i].Slug] == 1 {
			names = append(names, cs[i].Slug)
		}
	}
	for i, n := range names {
		if count[n] > 1 {
			names[i] = fmt.Sprintf("%s (%d)", n, count[n])
		}
	}
	worst := "Worst caution: " + levelWord(cs[0].Level)
	if cs[0].Overridden {
		worst += ", overridden with a written reason"
	}
	n := len(f.bands)
	f.paragraph(paraStyle{size: sizeHead, gap: 2, indent: indentMark + 2}, bold(worst+"."))
	f.bands[n].shapes = append(f.bands[n].shapes, levelShape(cs[0].Level, f.x, sizeHead))
	all := "In all " + countWords(cs)
	if len(names) > 0 {
		all += ": " + strings.Join(names, ", ")
	}
	f.paragraph(paraStyle{indent: indentMark + 2, gap: -1}, plain(all+"."))
}

// stopBox stands in the place of the draft and holds no number.
func (s *sheet) stopBox() {
	s.doc.naming("the stops")
	ws := s.ws
	stops := activeStops(ws)
	s.f.box(func(f *flow) {
		n := len(f.bands)
		f.paragraph(paraStyle{size: sizeDraft, gap: -1, indent: 24}, bold("STOP: no dose is drafted"))
		f.bands[n].shapes = append(f.bands[n].shapes, shape{kind: markStop, x: f.x, y: sizeDraft*lineBase - 0.73*sizeDraft/2 - 8, w: 16})
		f.paragraph(paraStyle{size: sizeAmount, gap: 2}, bold(ws.Drug.Name), plain(", "+patientName(&ws.Patient)))
		final := false
		said := map[string]bool{}
		for _, c := range stops {
			final = final || dose.CannotOverride(c.Slug)
			if said[c.Slug] {
				continue
			}
			said[c.Slug] = true
			f.item(markedItem{mark: markStop, text: []run{bold(c.Slug + ": "), plain(capital(stopWords(c)) + ".")}})
		}
		next := "Read the cautions. Whoever goes on writes under overrides in the case file, for each stop by its name, why it does not hold here; the reasons are then printed on every page."
		if final {
			next = "This cannot be overridden: correct the case, or use another source."
			for _, c := range stops {
				if dose.CannotOverride(c.Slug) && len(stops) > 1 {
					next = "The stop " + c.Slug + " cannot be overridden: correct the case, or use another source."
				}
			}
		}
		f.para(plain(next))
		f.paragraph(paraStyle{gap: 3}, plain("Cautions in all: "+countWords(ws.Cautions)+"."))
	})
}

// levelShape is the mark of a level, beside text of the given size.
func levelShape(l dose.Level, x, size float64) shape {
	return shape{kind: levelMark(l), x: x, y: size*lineBase - 0.73*size/2 - tickSide/2, w: tickSide, line: 1}
}

func levelMark(l dose.Level) mark {
	switch l {
	case dose.Stop:
		return markStop
	case dose.Warn:
		return markWarn
	}
	return markNote
}

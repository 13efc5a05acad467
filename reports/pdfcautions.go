package reports

import (
	"strings"

	"tayra/dose"
	"tayra/metabolic"
)

// cautions lists every caution, stops first, with a box to tick beside each
// that asks for a decision.
func (s *sheet) cautions() {
	f := s.f
	f.heading("Cautions: " + countWords(s.ws.Cautions))
	for i := range s.ws.Cautions {
		s.caution(&s.ws.Cautions[i])
	}
	if len(s.ws.Cautions) > 0 {
		f.paragraph(paraStyle{gap: 3}, plain("A caution that is not raised is no evidence of safety."))
	}
}

func (s *sheet) caution(c *dose.Caution) {
	it := markedItem{mark: levelMark(c.Level), tick: c.Level != dose.Note, indent: 2*indentMark + 2}
	it.text = []run{bold(levelWord(c.Level) + " " + c.Slug + ": "), plain(paperText(c.Text))}
	if n := numberWords(c); n != "" {
		it.text = append(it.text, plain(" ("+n+")"))
	}
	if m := cautionModels(s.ws, c); m != "" {
		it.text = append(it.text, plain(" Model: "+m+"."))
	}
	if c.Source != "" {
		it.text = append(it.text, plain(" ["+c.Source+"]"))
	}
	if c.Overridden {
		by := "OVERRIDDEN"
		if s.ws.PreparedBy != "" {
			by += " (sheet prepared by " + s.ws.PreparedBy + ")"
		}
		it.under = []run{bold(by + ": "), plain(c.Reason)}
	}
	s.f.item(it)
}

// publishedDoses lists the doses in print that the case cites. They stand on
// paper after a stop too: they are not drafted, and they outrank a draft.
func (s *sheet) publishedDoses() {
	if len(s.ws.Published) == 0 {
		return
	}
	f := s.f
	f.heading("Published doses that the case cites")
	t := pageTable{columns: []tableColumn{{head: "animal"}, {head: "kinship"}, {head: "dose as published"}, {head: "drafted v. published, a day"}, {head: "source", grow: 1}}}
	for i := range s.ws.Published {
		p := &s.ws.Published[i]
		ratio := "not compared"
		if p.DailyRatio > 0 {
			ratio = metabolic.FormatRatio(p.DailyRatio) + " times"
		}
		t.rows = append(t.rows, tableRow{cells: cellTexts(animalWords(p.CommonName, p.Species), relationWords(p.Relation), publishedWords(p), ratio, p.Source)})
	}
	t.drop(map[int]bool{3: s.ws.Drafted == nil})
	s.table(t)
}

// proposed holds a proposed regimen against the draft.
func (s *sheet) proposed() {
	f, p, d := s.f, s.ws.Proposed, s.ws.Drafted
	if p == nil || d == nil {
		if s.ws.Input != nil && !s.ws.Input.Proposed.IsZero() {
			f.heading("Proposed regimen")
			f.para(plain("A regimen is proposed. After a stop nothing is drafted to hold it against."))
		}
		return
	}
	verdict := "does not differ from the draft"
	if p.Differs {
		verdict = "DIFFERS from the draft"
	}
	if p.RaisesStop {
		verdict += ", and raises a STOP"
	}
	f.heading("Proposed regimen: " + verdict)
	raised := proposedCautions(p)
	for i := range raised {
		s.caution(&raised[i])
	}
	t := pageTable{columns: []tableColumn{{}, {head: "proposed"}, {head: "drafted"}, {head: "proposed / drafted", align: alignDecimal}}}
	ratio := func(v float64) string {
		if v == 0 {
			return "not compared"
		}
		return metabolic.FormatRatio(v)
	}
	every := func(h *float64) string {
		if h == nil {
			if strings.HasSuffix(p.Unit, "/h") {
				return intervalWords("infusion", nil)
			}
			return intervalWords("once", nil)
		}
		return intervalWords("", h)
	}
	row := func(cells ...string) { t.rows = append(t.rows, tableRow{cells: cellTexts(cells...)}) }
	row("dose per kg", perKgPair(p.DosePerKg, p.Unit), perKgPair(d.DosePerKg, d.Unit), ratio(p.Ratios.Dose))
	amount, proposed, drafted := proposedAmounts(p, d)
	row(amount, proposed, drafted, "")
	if len(p.Measured) > 0 && s.ws.Product != nil {
		row("measured", volumeWords(p.Measured), volumeWords(s.ws.Product.Ends), "")
	}
	row("interval", every(p.IntervalH), every(d.IntervalH), ratio(p.Ratios.Interval))
	row("daily", dailyPair(p.DailyPerKg, p.Unit), dailyPair(d.DailyPerKg, d.Unit), ratio(p.Ratios.Daily))
	if p.Ratios.Peak != nil {
		row("peak", "", "", ratio(*p.Ratios.Peak))
	}
	if p.Ratios.Trough != nil {
		row("trough", "", "", ratio(*p.Ratios.Trough))
	}
	s.table(t)
	for _, v := range verdictWords(p) {
		f.bullet(paraStyle{}, plain(paperText(v)))
	}
}

package reports

import (
	"strings"

	"tayra/dose"
	"tayra/metabolic"
)

// TextOptions says how a worksheet is set on a terminal. The zero value is the
// whole worksheet without its steps, 80 columns wide, without colour.
type TextOptions struct {
	// Width is the number of columns; 0 is 80, less than 60 is 60. Only a cell
	// of a table or a path that is wider by itself can run past it.
	Width int
	// Colour marks headings and cautions; nothing is told by it alone.
	Colour bool
	// Steps shows the reckoning, step by step.
	Steps bool
	// Quiet leaves only the draft, the cautions and the verdict on a proposed
	// regimen.
	Quiet bool
}

const (
	defaultWidth = 80
	leastWidth   = 60
)

// Text sets a worksheet as a terminal shows it, in the order of the paper: the
// draft in a box, with both ranges and the word for the worst caution; the
// cautions, stops first; and then what they rest on. After a stop the box holds
// the stop and no number. Letters that cannot be seen, or that act on a
// terminal, are shown by their code points.
func Text(ws *dose.Worksheet, o TextOptions) []byte {
	t := newTerminal(o)
	t.head(ws, o)
	if ws.Drafted == nil {
		t.stopBox(ws)
	} else {
		t.draftBox(ws)
	}
	t.cautions(ws)
	t.publishedDoses(ws)
	t.proposed(ws)
	if !o.Quiet {
		t.plans(ws)
		t.otherBases(ws)
		t.temperatures(ws)
		t.howFarOff(ws)
		t.syringe(ws)
		t.concentrations(ws)
		t.severalModels(ws)
		t.suitability(ws)
		t.fitSection(ws)
		if o.Steps {
			t.steps(ws)
		}
		t.sources(ws)
		t.trackRecord(ws)
	}
	t.foot(ws)
	return t.b.Bytes()
}

func newTerminal(o TextOptions) *terminal {
	t := &terminal{width: o.Width, colour: o.Colour}
	if t.width == 0 {
		t.width = defaultWidth
	}
	t.width = max(t.width, leastWidth)
	t.b.Grow(32 << 10) // of a whole worksheet
	return t
}

// spread sets two texts at the two ends of a line, or below one another where
// they do not fit.
func (t *terminal) spread(s style, left, right string) {
	left, right = shown(left), shown(right)
	gap := t.width - columns(left) - columns(right)
	if gap < 2 {
		for _, l := range wrapColumns(left, t.width, t.width) {
			t.line(words{s, l})
		}
		left, gap = "", 0
	}
	if right == "" {
		if left != "" {
			t.line(words{s, left})
		}
		return
	}
	if columns(right) > t.width {
		t.text(0, right)
		return
	}
	t.line(words{s, left}, words{text: strings.Repeat(" ", max(0, gap))}, words{text: right})
}

// head says which case, animal and drug this is.
func (t *terminal) head(ws *dose.Worksheet, o TextOptions) {
	p := &ws.Patient
	id := ws.Date
	if ws.Case != "" {
		id = "case " + ws.Case + "  " + id
	}
	t.spread(styleHead, "Worksheet: draft of a starting dose", id)
	name := patientName(p)
	if p.CommonName != "" && p.Species != "" {
		name += " (" + p.Species + ")"
	}
	name += typedWords(p.Typed, p.CommonName, p.Species)
	t.spread(styleNone, name, massWords(p.MassKg, p.MassLowKg, p.MassHighKg))
	if o.Quiet {
		t.blank()
		return
	}
	var about []string
	if p.Stage != "" {
		about = append(about, p.Stage)
	}
	about = append(about, conditionWords(p.Condition)...)
	if p.TemperatureC != nil {
		about = append(about, "body "+metabolic.FormatCelsius(metabolic.Celsius(*p.TemperatureC)))
	}
	if a := p.AdultMassKg; a != nil {
		about = append(about, "adults weigh "+massRange(a[0], a[1]))
	}
	switch p.FoodProducing {
	case "true":
		about = append(about, "food-producing")
	case "false":
		about = append(about, "not food-producing")
	}
	t.text(0, strings.Join(about, ", "))
	t.text(0, ws.Drug.Name+": "+drugWords(&ws.Drug))
	if ws.PreparedBy != "" {
		t.text(0, "prepared by "+ws.PreparedBy)
	}
	t.blank()
}

// draftBox is what the first glance takes in: the order, both ranges and what
// they mean, the word for the worst caution.
func (t *terminal) draftBox(ws *dose.Worksheet) {
	d := ws.Drafted
	t.open("THE DRAFT")
	t.para(0, words{}, words{styleHead, orderWords(ws)})
	if give := giveWords(ws.Product, d.Unit); give != "" {
		t.para(0, words{}, words{styleHead, "= " + give})
	} else if ws.Product != nil {
		t.text(0, "How to measure it out: see SYRINGE AND COURSE.")
	}
	perKg := perKgPair(d.DosePerKg, d.Unit)
	if daily := dailyPair(d.DailyPerKg, d.Unit); daily != "" {
		perKg += ", that is " + daily
	}
	t.text(0, perKg+".")
	// What outranks the dose, or contradicts it, is read in one glance with it.
	for _, x := range []string{outrankedWords(ws), d.Disagreement} {
		if x != "" {
			t.para(0, words{}, words{styleWarn, x})
		}
	}
	for _, x := range massEnds(ws) {
		t.text(0, x)
	}
	if d.Plan == "once" {
		s := "A bracket of two rules, by volume and by clearance"
		if startLow(ws) {
			s += ": start at the low end"
		}
		t.text(0, s+".")
	}
	if from := fromWords(ws); from != "" {
		t.text(0, from)
	}
	if l := ws.Loading; l != nil {
		order, about := loadingWords(ws)
		if order == "" {
			t.text(0, "No loading dose. "+l.Text)
		} else {
			t.para(0, words{}, words{styleHead, order})
			t.text(0, joinNonEmpty(about, l.Text, " "))
		}
	}
	t.blank()
	even, ninety := amountRanges(d)
	tb := &table{head: []string{"", "per kg", "amount"}}
	tb.row("as likely as not", perKgRange(d.Range50, d.Unit), even)
	tb.row("nine times in ten", perKgRange(d.Range90, d.Unit), ninety)
	t.table(tb)
	if m := draftedModel(ws); m != nil && m.VolumeRange90 != nil {
		t.text(tableIndent, "The end of the bracket that follows volume: nine times in ten "+perKgRange(*m.VolumeRange90, m.Unit)+".")
	}
	t.text(0, d.Meaning)
	t.blank()
	t.para(0, words{}, words{worstStyle(ws), worstWords(ws)})
	t.shut()
}

func worstStyle(ws *dose.Worksheet) style {
	if len(ws.Cautions) == 0 {
		return styleNone
	}
	return levelStyle(ws.Cautions[0].Level)
}

func levelStyle(l dose.Level) style {
	switch l {
	case dose.Stop:
		return styleStop
	case dose.Warn:
		return styleWarn
	}
	return styleNone
}

// stopBox stands in the place of the draft, and holds no number.
func (t *terminal) stopBox(ws *dose.Worksheet) {
	t.open("STOP: NO DOSE IS DRAFTED")
	t.para(0, words{}, words{styleHead, ws.Drug.Name + ": no dose."})
	stops := activeStops(ws)
	for _, c := range stops {
		t.para(0, words{styleStop, "[STOP]"}, words{text: stopWords(c)})
	}
	t.blank()
	final := false
	for _, c := range stops {
		final = final || dose.CannotOverride(c.Slug)
	}
	if final {
		t.text(0, "This stop cannot be overridden: correct the case, or use another source.")
	} else {
		t.text(0, "Read the cautions. Whoever goes on writes under overrides in the case file, for each stop by its name, why it does not hold here; the reasons are printed with the dose.")
	}
	t.shut()
}

// cautions lists them, stops first.
func (t *terminal) cautions(ws *dose.Worksheet) {
	t.heading("CAUTIONS: " + countWords(ws.Cautions))
	for i := range ws.Cautions {
		t.caution(ws, &ws.Cautions[i])
	}
	if len(ws.Cautions) > 0 {
		t.faint(0, "A caution that is not raised is no evidence of safety.")
	}
}

func (t *terminal) caution(ws *dose.Worksheet, c *dose.Caution) {
	mark := "[" + levelWord(c.Level) + "]"
	text := c.Text
	if n := numberWords(c); n != "" {
		text += " (" + n + ")"
	}
	// The slug is what the case file overrides.
	about := c.Slug
	if m := cautionModels(ws, c); m != "" {
		about += "; model: " + m
	}
	if c.Source != "" {
		about += "; source: " + c.Source
	}
	t.para(0, words{levelStyle(c.Level), mark}, words{text: text + " [" + about + "]"})
	if c.Overridden {
		t.para(columns(mark)+1, words{styleStop, "OVERRIDDEN:"}, words{text: c.Reason})
	}
}

// publishedDoses lists the doses in print that the case cites.
func (t *terminal) publishedDoses(ws *dose.Worksheet) {
	if len(ws.Published) == 0 {
		return
	}
	t.heading("PUBLISHED DOSES")
	for i := range ws.Published {
		p := &ws.Published[i]
		who := animalWords(p.CommonName, p.Species)
		if r := relationWords(p.Relation); r != "" {
			who += " (" + r + ")"
		}
		t.para(tableIndent, words{text: who + ":"}, words{text: publishedWords(p)})
		if p.DailyRatio > 0 {
			t.text(tableIndent+2, "The drafted daily amount per kg is "+metabolic.FormatRatio(p.DailyRatio)+" times this.")
		}
		t.faint(tableIndent+2, "Source: "+p.Source)
	}
}

// proposed holds a proposed regimen against the draft.
func (t *terminal) proposed(ws *dose.Worksheet) {
	p := ws.Proposed
	if p == nil {
		if ws.Drafted == nil && ws.Input != nil && !ws.Input.Proposed.IsZero() {
			t.heading("PROPOSED REGIMEN")
			t.text(tableIndent, "A regimen is proposed, and after a stop nothing is drafted to hold it against.")
		}
		return
	}
	d := ws.Drafted
	verdict := "does not differ from the draft"
	if p.Differs {
		verdict = "DIFFERS from the draft"
	}
	if p.RaisesStop {
		verdict += ", and raises a STOP"
	}
	t.heading("PROPOSED REGIMEN: " + verdict)
	raised := proposedCautions(p)
	for i := range raised {
		t.caution(ws, &raised[i])
	}
	for _, v := range verdictWords(p) {
		t.para(tableIndent, words{text: "-"}, words{text: v})
	}
	if d == nil {
		return
	}
	tb := &table{head: []string{"", "proposed", "drafted", "proposed/drafted"}}
	ratio := func(v float64) string {
		if v == 0 {
			return "not compared"
		}
		return metabolic.FormatRatio(v)
	}
	every := func(h *float64, kind string) string {
		if h == nil {
			return intervalWords(kind, nil)
		}
		return metabolic.FormatDuration(metabolic.Hours(*h))
	}
	kind := d.Plan
	tb.row("dose", perKgPair(p.DosePerKg, p.Unit), perKgPair(d.DosePerKg, d.Unit), ratio(p.Ratios.Dose))
	amount, proposed, drafted := proposedAmounts(p, d)
	tb.row(amount, proposed, drafted)
	if len(p.Measured) > 0 && ws.Product != nil {
		tb.row("measured", volumeWords(p.Measured), volumeWords(ws.Product.Ends))
	}
	tb.row("daily", dailyPair(p.DailyPerKg, p.Unit), dailyPair(d.DailyPerKg, d.Unit), ratio(p.Ratios.Daily))
	tb.row("interval", every(p.IntervalH, kind), every(d.IntervalH, kind), ratio(p.Ratios.Interval))
	if p.Ratios.Peak != nil {
		tb.row("peak", "", "", ratio(*p.Ratios.Peak))
	}
	if p.Ratios.Trough != nil {
		tb.row("trough", "", "", ratio(*p.Ratios.Trough))
	}
	t.table(tb)
}

// foot says what every page of the paper says. The digest of the record stands
// on paper only: the terminal keeps no record that it could name.
func (t *terminal) foot(ws *dose.Worksheet) {
	t.blank()
	t.line(words{styleFaint, strings.Repeat("─", t.width)})
	for _, s := range ws.Statements {
		t.text(0, s)
	}
	for _, c := range overridden(ws) {
		t.para(0, words{styleStop, "Overridden: " + c.Slug + ":"}, words{text: c.Reason})
	}
	s := ws.Program.Name + " " + ws.Program.Version
	if ws.Program.Tables != "" {
		s += ", tables " + ws.Program.Tables
	}
	t.faint(0, s)
}

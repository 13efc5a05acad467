package reports

import (
	"fmt"
	"strings"

	"tayra/dose"
	"tayra/metabolic"
)

// hoursCell is an interval or a half-life in a table: "12 hours".
func hoursCell(h float64) string { return metabolic.FormatDuration(metabolic.Hours(h)) }

// chosenMark stands before the row that the draft was taken from.
const chosenMark = "> "

func marked(chosen bool, s string) string {
	if chosen {
		return chosenMark + s
	}
	return "  " + s
}

// plans sets the plans of the model that the draft was taken from side by side,
// under the ratios that they follow from. After a stop only the ratios stand.
func (t *terminal) plans(ws *dose.Worksheet) {
	m := draftedModel(ws)
	if m == nil {
		return
	}
	p := &ws.Patient
	t.heading("FROM " + strings.ToUpper(modelName(m)) + " TO " + strings.ToUpper(animalWords(p.CommonName, p.Species)))
	model, source := modelAndSource(ws, m)
	t.text(tableIndent, "Model: "+model+". Source: "+source+".")
	if typed := modelTyped(ws, ws.DraftedFrom.Index); typed != "" {
		t.text(tableIndent, capital(modelName(m))+" ("+m.Model+")"+typed+".")
	}
	if f := ws.DraftedFrom; f.Why != "" && len(ws.Drafts) > 1 {
		t.text(tableIndent, "Chosen among the models as "+f.Why+".")
	}
	tb := &table{head: []string{"", "mass", "metabolic rate", "basis"}}
	rate := func(w float64) string { return metabolic.FormatPower(metabolic.Power(w)) }
	tb.row("patient", massWords(p.MassKg, p.MassLowKg, p.MassHighKg), rate(p.RateW), p.Basis)
	tb.row("model", massWords(m.MassKg, m.MassLowKg, m.MassHighKg), rate(m.RateW), m.Basis)
	t.table(tb)
	r := &m.Ratios
	t.text(tableIndent, fmt.Sprintf("Patient over model: of mass, M = %s; of metabolic rate, R = %s; of rate per kg, S = R/M, %s.",
		metabolic.FormatRatio(r.Mass), metabolic.FormatRatio(r.Metabolic), metabolic.FormatRatio(r.Specific)))
	if len(m.Plans) == 0 {
		return
	}
	t.heading("THE PLANS SIDE BY SIDE")
	tb = &table{head: []string{"", "dose", "amount", "every", "daily", "average\nv. model"}}
	amount := planAmounts(m)
	for i := range m.Plans {
		q := &m.Plans[i]
		every := "" // the name of the plan says it
		if q.IntervalH != nil {
			every = hoursCell(*q.IntervalH)
		}
		tb.row(marked(q.Name == m.Plan, planWords(q.Name)), perKgPair(q.DosePerKg, q.Unit), amount(q.PerAdministration),
			every, dailyPair(q.DailyPerKg, q.Unit), averageCell(q))
	}
	t.table(tb)
	for i := range m.Plans {
		q := &m.Plans[i]
		s := bracketWords(ws, q.Remark)
		if x := massChoices(ws, q.AtLowMass, q.AtHighMass, q.Unit); x != "" {
			s = joinNonEmpty(s, "amount: "+x, "; ")
		}
		if s != "" {
			t.para(tableIndent, words{text: planWords(q.Name) + ":"}, words{text: s + "."})
		}
	}
	if d := ws.Drafted; d != nil {
		if len(m.Plans) > 1 {
			t.text(tableIndent, fmt.Sprintf("Drafted: %s, %s. %s.", planWords(d.Plan), chosenWords(d), capital(bracketWords(ws, d.Why))))
		}
	}
}

// averageCell is the average concentration of a plan; a single dose has none.
func averageCell(p *dose.Plan) string {
	if p.Name == "once" {
		return ""
	}
	return averageWords(p.AverageRatio)
}

func joinNonEmpty(a, b, between string) string {
	if a == "" || b == "" {
		return a + b
	}
	return a + between + b
}

// otherBases is the dose under every basis and exponent, one line each, with a
// strip on a log axis.
func (t *terminal) otherBases(ws *dose.Worksheet) {
	m := draftedModel(ws)
	if m == nil || len(ws.Bases)+len(ws.Unavailable) == 0 {
		return
	}
	t.heading("IF THE BASIS WERE ANOTHER")
	type line struct {
		label, s, dose string
		low, high      float64
		mark, bar      rune
	}
	var lines []line
	for i := range ws.Bases {
		b := &ws.Bases[i]
		l := line{label: marked(basisUsed(ws, b), basisLabel(b, false)), s: metabolic.FormatRatio(b.Specific), mark: 'o', bar: '-'}
		if basisUsed(ws, b) {
			l.label += ", basis used"
			l.mark = '●'
		}
		if b.DosePerKg != nil {
			l.dose, l.low, l.high = perKgPair(*b.DosePerKg, m.Unit), b.DosePerKg[0], b.DosePerKg[1]
		}
		lines = append(lines, l)
	}
	for i := range ws.Exponents {
		e := &ws.Exponents[i]
		lines = append(lines, line{label: marked(false, "exponent "+metabolic.FormatRatio(e.Exponent)), s: metabolic.FormatRatio(e.Specific),
			dose: perKgPair(e.DosePerKg, m.Unit), low: e.DosePerKg[0], high: e.DosePerKg[1], mark: 'o', bar: '-'})
	}
	d := ws.Drafted
	if d != nil {
		for _, r := range []struct {
			label string
			r     dose.DoseRange
			mark  rune
			bar   rune
		}{{"as likely as not", d.Range50, '|', '━'}, {"nine in ten", d.Range90, '|', '─'}} {
			lines = append(lines, line{label: "  " + r.label, dose: perKgRange(r.r, d.Unit), low: r.r.Low, high: r.r.High, mark: r.mark, bar: r.bar})
		}
		t.text(tableIndent, basesHold(ws)+". S is the ratio of rates per kg.")
	}
	tb := &table{head: []string{"", "S", "dose"}}
	var all []float64
	for _, l := range lines {
		tb.row(l.label, l.s, l.dose)
		all = append(all, l.low, l.high)
	}
	if d != nil {
		const least = 22
		used := 0
		for i := range tb.head {
			w := 0
			cells := make([]string, len(tb.rows))
			for r := range tb.rows {
				cells[r] = tb.rows[r][i]
			}
			if i > 0 {
				cells, _ = alignFigures(cells)
			}
			for _, c := range cells {
				w = max(w, columns(c))
			}
			if used += w + tableGap; i == 0 {
				used += tableIndent
			}
		}
		wide := t.width - used
		if wide < least {
			w := 0
			for _, l := range lines {
				w = max(w, columns(l.label))
			}
			wide = t.width - tableIndent - w - tableGap
		}
		s := newStrip(wide, all...)
		numbers, ticks := s.axis()
		tb.head = append(tb.head, numbers+"\n"+ticks)
		for i, l := range lines {
			tb.rows[i] = append(tb.rows[i], s.row(l.low, l.high, l.mark, l.bar))
		}
	}
	t.table(tb)
	for _, u := range ws.Unavailable {
		t.para(tableIndent, words{text: "no " + u.Basis + ":"}, words{text: u.Why + "."})
	}
	var remarks []string
	for i := range ws.Exponents {
		if e := &ws.Exponents[i]; e.Remark != "" {
			remarks = append(remarks, metabolic.FormatRatio(e.Exponent)+": "+e.Remark+".")
		}
	}
	if len(remarks) > 0 {
		t.faint(tableIndent, "Exponents, of the group constants. "+strings.Join(remarks, " "))
	}
}

// temperatures is the dose of an ectotherm at other body temperatures.
func (t *terminal) temperatures(ws *dose.Worksheet) {
	m := draftedModel(ws)
	if m == nil || len(ws.Temperature) == 0 {
		return
	}
	t.heading("AT ANOTHER BODY TEMPERATURE")
	tb := &table{head: []string{"", "S", "dose", "every", "daily", "amount"}}
	amount := temperatureAmounts(ws.Temperature, m.Unit)
	for i := range ws.Temperature {
		l := &ws.Temperature[i]
		here := ws.Patient.TemperatureC != nil && *ws.Patient.TemperatureC == l.TemperatureC
		every := ""
		if l.IntervalH > 0 {
			every = hoursCell(l.IntervalH)
		}
		tb.row(marked(here, metabolic.FormatCelsius(metabolic.Celsius(l.TemperatureC))), metabolic.FormatRatio(l.Specific), perKgPair(l.DosePerKg, m.Unit), every, dailyPair(l.DailyPerKg, m.Unit), amount(l.Amount))
	}
	t.table(tb)
}

// howFarOff shows what the ranges are made of.
func (t *terminal) howFarOff(ws *dose.Worksheet) {
	m := draftedModel(ws)
	if m == nil || len(m.Parts) == 0 {
		return
	}
	t.heading("HOW FAR OFF THE DOSE MAY BE")
	s := "Standard deviations of ln dose"
	if ws.Fit == nil { // a fitted line has Student's t in the place of these
		s += "; nine in ten is the dose times and divided by exp(1.645 × sd), as likely as not by exp(0.674 × sd)"
	}
	t.text(tableIndent, s+".")
	for i := range m.Parts {
		p := &m.Parts[i]
		sd := metabolic.Significant(p.SD, 3)
		sd += strings.Repeat(" ", max(0, 6-len(sd)))
		t.para(tableIndent, words{text: sd}, words{text: joinNonEmpty(p.Name, p.Text, ": ")})
		if p.Source != "" {
			t.faint(tableIndent+7, "Source: "+p.Source)
		}
	}
}

// syringe says what to measure out, and what a course needs.
func (t *terminal) syringe(ws *dose.Worksheet) {
	p := ws.Product
	if p == nil {
		return
	}
	m := draftedModel(ws)
	unit := "mg/kg"
	if m != nil {
		unit = m.Unit
	}
	t.heading("SYRINGE AND COURSE")
	s := "Product: " + strengthWords(p, unit)
	if p.AmountPerPiece > 0 {
		s += " per " + p.Form
	}
	switch {
	case p.StepML > 0 && m != nil && m.Kind == "infusion":
		s += "; the pump is set in steps of " + measuredWords(p.StepML, "mL/h")
	case p.StepML > 0:
		s += "; smallest step " + measuredWords(p.StepML, "mL")
	case p.StepPieces > 0:
		s += "; smallest part given " + measuredWords(p.StepPieces, p.Form)
	}
	switch p.Rounding {
	case "down":
		s += "; rounded down, since the margin is narrow"
	default:
		s += "; rounded to the nearest step"
	}
	if p.LargestPerSiteML > 0 {
		s += "; at most " + measuredWords(p.LargestPerSiteML, "mL") + " at one site"
	}
	t.text(tableIndent, s+".")
	for _, x := range p.Text {
		t.text(tableIndent, x)
	}
	if give := giveWords(p, unit); give != "" {
		t.para(tableIndent, words{styleHead, "Give"}, words{styleHead, give + "."})
	}
	end := func(i, n int) string {
		if n == 1 {
			return ""
		}
		return [...]string{"Low end: ", "High end: "}[i]
	}
	for i := range p.Ends {
		t.administration(end(i, len(p.Ends)), p.Days, &p.Ends[i], unit)
	}
	for i := range p.Pump {
		t.pump(end(i, len(p.Pump)), p, &p.Pump[i], unit)
	}
	if l := ws.Loading; l != nil {
		for i := range l.Measured {
			lead := "Loading dose, once: "
			if len(l.Measured) > 1 {
				lead = "Loading dose, once, " + strings.ToLower(end(i, len(l.Measured)))
			}
			t.administration(lead, 0, &l.Measured[i], l.Unit)
		}
	}
}

// administration says how one dose is measured out, and what a course of so many
// days needs; days is 0 for none.
func (t *terminal) administration(lead string, days float64, a *dose.Administration, unit string) {
	exact := exactWords(a.Exact, a.Measure)
	switch {
	case a.Dilution != nil:
		t.text(tableIndent, fmt.Sprintf("%s%s is exactly %s, under one step. Dilute %s:", lead, amountWords(a.AmountAsked, unit), exact, dilutionWords(a.Dilution.Factor)))
		t.mixing(a.Dilution, unit, false)
	case a.BelowStep:
		t.text(tableIndent, fmt.Sprintf("%s%s is exactly %s: under one step, and no usual dilution can be measured either.", lead, amountWords(a.AmountAsked, unit), exact))
	default:
		t.text(tableIndent, fmt.Sprintf("%s%s is exactly %s; given %s, that is %s, %s.", lead, amountWords(a.AmountAsked, unit), exact,
			measuredWords(a.Measured, a.Measure), amountWords(a.AmountGiven, unit), errorWords(a.ErrorPercent)))
	}
	if len(a.Sites) > 1 {
		parts := make([]string, len(a.Sites))
		for i, v := range a.Sites {
			parts[i] = measuredWords(v, "mL")
		}
		t.text(tableIndent, fmt.Sprintf("Divided over %d sites: %s.", len(a.Sites), strings.Join(parts, ", ")))
	}
	if days > 0 && a.Administrations > 0 {
		s := fmt.Sprintf("Course of %s: %s", countWord(days, "day"), countWord(float64(a.Administrations), "dose"))
		if a.Total > 0 {
			s += ", " + measuredWords(a.Total, a.Measure) + " of the product in all"
		}
		if a.Containers > 0 {
			s += ", " + countWord(float64(a.Containers), "container")
		}
		t.text(tableIndent, s+".")
	}
}

// mixing writes the steps of a dilution.
func (t *terminal) mixing(d *dose.Dilution, unit string, perHour bool) {
	for i, step := range mixingWords(d, unit, perHour) {
		t.para(tableIndent+2, words{text: fmt.Sprintf("%d.", i+1)}, words{text: step})
	}
}

func (t *terminal) pump(lead string, p *dose.ProductRecord, a *dose.Pump, unit string) {
	exact := metabolic.Significant(a.ExactMLPerH, 4) + " mL/h"
	switch {
	case a.Dilution != nil:
		t.text(tableIndent, fmt.Sprintf("%sExactly %s, under one step of the pump. Dilute %s:", lead, exact, dilutionWords(a.Dilution.Factor)))
		t.mixing(a.Dilution, unit, true)
	case a.BelowStep:
		t.text(tableIndent, fmt.Sprintf("%sExactly %s: under one step of the pump, and no usual dilution can be set either.", lead, exact))
	default:
		t.text(tableIndent, fmt.Sprintf("%sExactly %s; set %s, that is %s, %s.", lead, exact, measuredWords(a.MLPerH, "mL/h"), amountWords(a.AmountPerHour, unit), errorWords(a.ErrorPercent)))
	}
	if p.Days > 0 && a.TotalML > 0 {
		s := fmt.Sprintf("Over %s: %s of the product", countWord(p.Days, "day"), measuredWords(a.TotalML, "mL"))
		if a.Containers > 0 {
			s += ", " + countWord(float64(a.Containers), "container")
		}
		t.text(tableIndent, s+".")
	}
}

// countWord says how many of something: "1 day", "14 doses".
func countWord(n float64, what string) string {
	s := metabolic.Significant(n, 7) + " " + what
	if n != 1 {
		s += "s"
	}
	return s
}

// curveName says whose course a curve is.
func curveName(c *dose.Curve) string {
	switch c.Name {
	case "model", "proposed":
		return c.Name
	case "once":
		return strings.ReplaceAll(c.Label, "once", "single dose")
	}
	return planWords(c.Name)
}

// concentrations is the interval check: the course of every regimen at steady
// state.
func (t *terminal) concentrations(ws *dose.Worksheet) {
	if len(ws.Curves) == 0 && ws.CurvesNote == "" {
		return
	}
	title := "CONCENTRATIONS AT STEADY STATE"
	if m := draftedModel(ws); len(ws.Curves) == 0 {
		title = "CONCENTRATIONS"
	} else if m != nil && m.Kind == "once" {
		title = "CONCENTRATIONS AFTER A SINGLE DOSE"
	}
	t.heading(title)
	t.concentrationTable(ws)
	if x := ws.Target; x != nil {
		amount, _ := unitOf(x.Unit)
		t.text(tableIndent, "Target: "+metabolic.FormatConcentration(metabolic.Concentration{Value: x.PerLitre, Unit: amount})+". Source: "+x.Source+".")
	}
	if ws.CurvesNote != "" {
		t.text(tableIndent, ws.CurvesNote)
	}
}

func (t *terminal) concentrationTable(ws *dose.Worksheet) {
	if len(ws.Curves) == 0 {
		return
	}
	m := draftedModel(ws)
	unit := ws.Curves[0].Unit
	amount, _ := unitOf(unit)
	level := func(v float64) string {
		if strings.Contains(unit, "times") {
			return metabolic.Significant(v, 3)
		}
		return metabolic.FormatConcentration(metabolic.Concentration{Value: v, Unit: amount})
	}
	single := m != nil && m.Kind == "once"
	tb := &table{head: []string{"", "half-life", "every", "peak", "trough", "average", "swing", "build-up", "doses to\n90 %", "above\ntarget"}}
	for i := range ws.Curves {
		c := &ws.Curves[i]
		every := ""
		if c.IntervalH != nil {
			every = hoursCell(*c.IntervalH)
		}
		above := ""
		if c.PercentAbove != nil {
			above = metabolic.FormatPercent(*c.PercentAbove / 100)
		}
		name := marked(ws.Drafted != nil && c.Name == ws.Drafted.Plan, curveName(c))
		row := []string{name, hoursCell(c.HalfLifeH), every, level(c.Cmax), "", "", "", "", "", above}
		if c.IntervalH != nil {
			row[4], row[5] = level(c.Cmin), level(c.Cavg)
			row[6], row[7] = metabolic.Significant(c.Fluctuation, 3), metabolic.Significant(c.Accumulation, 3)
			row[8] = fmt.Sprint(c.DosesTo90)
		} else if !single {
			row[5] = level(c.Cavg)
		}
		tb.row(row...)
	}
	t.table(tb)
	if strings.Contains(unit, "times") {
		t.text(tableIndent, "Concentrations are given as "+unit+".")
	}
	if !single && len(ws.Curves) > 0 && ws.Curves[0].IntervalH != nil {
		t.faint(tableIndent, "swing: (peak − trough)/average; build-up: peak at steady state over the first; doses to 90 %: of steady state")
	}
}

// severalModels holds the models of a case against one another.
func (t *terminal) severalModels(ws *dose.Worksheet) {
	if len(ws.Drafts) < 2 {
		return
	}
	t.heading("SEVERAL MODELS")
	from := -1
	if ws.DraftedFrom != nil {
		from = ws.DraftedFrom.Index
	}
	tb := &table{head: []string{"", "mass", "kin", "S", "dose", "every", "drafted daily", "nine in ten"}}
	for i := range ws.Drafts {
		d := &ws.Drafts[i]
		kin := d.Kinship
		if kin == "" {
			kin = "none"
		}
		row := []string{marked(i == from, modelName(d)), metabolic.FormatMass(metabolic.Mass(d.MassKg)), kin, metabolic.FormatRatio(d.Ratios.Specific), "", "", "", ""}
		for k := range d.Plans {
			p := &d.Plans[k]
			if p.Name != d.Plan {
				continue
			}
			row[4], row[6] = perKgPair(p.DosePerKg, p.Unit), dailyPair(p.DailyPerKg, p.Unit)
			if p.IntervalH != nil {
				row[5] = hoursCell(*p.IntervalH)
			}
		}
		if d.Range90 != nil {
			row[7] = perKgRange(*d.Range90, d.Unit)
		}
		tb.row(row...)
	}
	t.table(tb)
	for i := range ws.Drafts {
		d := &ws.Drafts[i]
		model, source := modelAndSource(ws, d)
		t.para(tableIndent, words{text: "-"}, words{text: model + ". Source: " + source + "."})
	}
	s := ws.Several
	if s == nil || ws.Drafted == nil {
		return
	}
	t.blank()
	tb = &table{head: []string{"", "published\ndaily", "predicted from\nthe others", "fold\nerror"}}
	perDay := func(v float64) string { return dailyWords(v, strings.TrimSuffix(s.Unit, "/day")) }
	for i := range s.Models {
		x := &s.Models[i]
		tb.row(animalWords(x.CommonName, x.Model), perDay(x.PublishedDaily), perDay(x.PredictedDaily), metabolic.Significant(x.FoldError, 3))
	}
	t.table(tb)
	between := func(low, high float64) string { return metabolic.FormatRange(low, high, perDay) }
	t.text(tableIndent, fmt.Sprintf("Drafted daily amounts: mean of the logs %s, from %s, a spread of %s-fold; standard deviation of ln %s, in it the variance between the models, %s. As likely as not %s, nine times in ten %s.",
		perDay(s.MeanDailyPerKg), between(s.Low, s.High), metabolic.Significant(s.FoldSpread, 3), metabolic.FormatRatio(s.SD), metabolic.Significant(s.VarBetween, 3),
		between(s.Range50.Low, s.Range50.High), between(s.Range90.Low, s.Range90.High)))
	if s.Text != "" {
		t.text(tableIndent, s.Text)
	}
}

// suitability is the table of published reasons for and against scaling by
// size.
func (t *terminal) suitability(ws *dose.Worksheet) {
	if len(ws.Suitability) == 0 {
		return
	}
	t.heading("DOES THIS DRUG SUIT SCALING BY SIZE?")
	for i := range ws.Suitability {
		c := &ws.Suitability[i]
		text := c.Name + ". " + c.Text
		if c.Source != "" {
			text += " [" + c.Source + verifiedWords(c.Verified) + "]"
		}
		t.para(tableIndent, words{text: verdictMark(c.Verdict)}, words{text: text})
	}
}

// verdictMark is the verdict of a criterion, all of one width.
func verdictMark(verdict string) string {
	switch verdict {
	case "speaks for":
		return "for     "
	case "speaks against":
		return "AGAINST "
	}
	return "unknown "
}

// verifiedWords says how far a source was checked.
func verifiedWords(v string) string {
	switch v {
	case "":
		return ""
	case "memory":
		return " (from memory)"
	}
	return " (" + v + ")"
}

// steps writes the reckoning out, model by model, the drafted one first.
func (t *terminal) steps(ws *dose.Worksheet) {
	from := 0
	if ws.DraftedFrom != nil {
		from = ws.DraftedFrom.Index
	}
	order := []int{}
	if from >= 0 && from < len(ws.Drafts) {
		order = append(order, from)
	}
	for i := range ws.Drafts {
		if i != from {
			order = append(order, i)
		}
	}
	for _, i := range order {
		d := &ws.Drafts[i]
		if len(d.Steps) == 0 {
			continue
		}
		title := "STEPS"
		if len(ws.Drafts) > 1 {
			title += ", MODEL " + strings.ToUpper(modelName(d))
		}
		t.heading(title)
		t.text(tableIndent, stepsWords(ws))
		seen := map[string]int{}
		for k := range d.Steps {
			t.step(k+1, &d.Steps[k], seen)
		}
	}
}

func (t *terminal) step(n int, s *dose.Step, seen map[string]int) {
	const under = tableIndent + 4
	t.para(tableIndent, words{text: fmt.Sprintf("%2d.", n)}, words{text: s.Title})
	t.text(under, paperUnits(s.Formula))
	if s.Substituted != "" {
		t.para(under, words{text: "="}, words{text: paperUnits(s.Substituted)})
	}
	t.para(under, words{text: "="}, words{styleHead, paperUnits(s.Result)})
	if s.Source == "" || s.Source == "definition" {
		return
	}
	if at, ok := seen[s.Source]; ok {
		t.faint(under, fmt.Sprintf("Source: as in step %d", at))
		return
	}
	seen[s.Source] = n
	t.faint(under, "Source: "+s.Source)
}

// sources lists what the worksheet leans on, each once.
func (t *terminal) sources(ws *dose.Worksheet) {
	if len(ws.Sources) == 0 {
		return
	}
	t.heading("SOURCES")
	for _, s := range groupSources(ws.Sources) {
		text := s.Citation
		if s.Memory && !strings.Contains(text, "memory") {
			text += " (from memory)"
		}
		t.para(tableIndent, words{text: "-"}, words{text: s.What + ": " + text})
	}
}

// trackRecord is what became of such predictions elsewhere.
func (t *terminal) trackRecord(ws *dose.Worksheet) {
	if len(ws.TrackRecord) == 0 {
		return
	}
	t.heading("HOW SUCH PREDICTIONS HAVE FARED")
	for _, s := range ws.TrackRecord {
		t.para(tableIndent, words{text: "-"}, words{text: s})
	}
}

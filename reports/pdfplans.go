package reports

import (
	"strings"

	"tayra/dose"
	"tayra/metabolic"
)

// theCase is what the case says of animal and drug.
func (s *sheet) theCase() {
	f, ws, p := s.f, s.ws, &s.ws.Patient
	f.heading("The case")
	yes := func(v string) string {
		switch v {
		case "true":
			return "yes"
		case "false":
			return "no"
		}
		return "not said"
	}
	animal := p.Species
	if p.CommonName != "" {
		animal = p.CommonName + " (" + p.Species + ")"
	}
	if typed := strings.ToLower(p.Typed); typed != "" && typed != strings.ToLower(p.CommonName) && typed != strings.ToLower(p.Species) {
		animal += ", written as " + p.Typed
	}
	condition := "nothing said"
	if len(p.Condition) > 0 {
		condition = strings.Join(conditionWords(p.Condition), ", ")
	}
	adults := "none on file"
	if a := p.AdultMassKg; a != nil {
		adults = massRange(a[0], a[1])
	}
	pairs := []keyValue{{"Case", []run{plain(caseWords(ws))}}, {"Prepared by", []run{plain(orDefault(ws.PreparedBy, "not said"))}}}
	add := func(key, value string) { pairs = append(pairs, keyValue{key, []run{plain(value)}}) }
	if p.Name != "" {
		add("Name", p.Name)
	}
	add("Animal", animal)
	add("Family, order", p.Family+", "+p.Order)
	mass := massWords(p.MassKg, p.MassLowKg, p.MassHighKg)
	if typed := asGiven(p.MassTyped); strings.Contains(typed, "lb") || strings.Contains(typed, "oz") || strings.Contains(typed, "±") {
		mass += ", written as " + typed
	}
	add("Mass", mass)
	add("Adults weigh", adults)
	if p.TemperatureC != nil {
		add("Body temperature", metabolic.FormatCelsius(metabolic.Celsius(*p.TemperatureC)))
	}
	add("Stage", orDefault(p.Stage, "not said"))
	add("Condition", condition)
	add("Food-producing", yes(p.FoodProducing))
	add("Drug", ws.Drug.Name+": "+drugWords(&ws.Drug))
	f.together(func(f *flow) { f.pairs(2, pairs...) })
}

// plans sets the plans of the model that the draft was taken from side by side,
// under the ratios that they follow from. After a stop only the ratios stand.
func (s *sheet) plans() {
	f, ws, m := s.f, s.ws, s.from
	if m == nil {
		return
	}
	p := &ws.Patient
	patient := animalWords(p.CommonName, p.Species)
	f.heading("From " + modelName(m) + " to " + patient)
	model, source := modelAndSource(ws, m)
	f.para(plain("Model: " + model + ". Source: " + source + "."))
	if x := ws.DraftedFrom; x.Why != "" && len(ws.Drafts) > 1 {
		f.keepNext()
		f.para(plain("Chosen among the models as " + x.Why + "."))
	}
	f.keepNext()
	t := pageTable{columns: []tableColumn{{}, {head: "body mass"}, {head: "metabolic rate"}, {head: "basis"}, {head: "body temperature"}}}
	temperature := func(v *float64) string {
		if v == nil {
			return ""
		}
		return metabolic.FormatCelsius(metabolic.Celsius(*v))
	}
	rate := func(w float64) string { return metabolic.FormatPower(metabolic.Power(w)) }
	t.rows = append(t.rows,
		tableRow{cells: cellTexts("patient: "+patient, massWords(p.MassKg, p.MassLowKg, p.MassHighKg), rate(p.RateW), p.Basis, temperature(p.TemperatureC))},
		tableRow{cells: cellTexts("model: "+modelName(m), massWords(m.MassKg, m.MassLowKg, m.MassHighKg), rate(m.RateW), m.Basis, temperature(m.TemperatureC))})
	if p.TemperatureC == nil && m.TemperatureC == nil {
		t.columns = t.columns[:4]
	}
	s.table(t)
	f.keepNext()
	r := &m.Ratios
	f.para(plain("Patient over model: mass, "), bold("M = "+metabolic.FormatRatio(r.Mass)), plain("; metabolic rate, "), bold("R = "+metabolic.FormatRatio(r.Metabolic)),
		plain("; rate per kg, "), bold("S = R/M = "+metabolic.FormatRatio(r.Specific)), plain("."))
	if len(m.Plans) == 0 || ws.Drafted == nil {
		return
	}
	f.heading("The plans side by side")
	s.table(planTable(m))
	for i := range m.Plans {
		q := &m.Plans[i]
		text := paperText(bracketWords(ws, q.Remark))
		if x := massChoices(ws, q.AtLowMass, q.AtHighMass, q.Unit); x != "" {
			text = joinNonEmpty(text, "amount: "+x, "; ")
		}
		if text != "" {
			f.bullet(paraStyle{}, bold(capital(planWords(q.Name))+": "), plain(text+"."))
		}
	}
	d := ws.Drafted
	f.para(bold("Drafted: "+planWords(d.Plan)+", "+chosenWords(d)+". "), plain(capital(paperText(bracketWords(ws, d.Why)))+"."))
}

// amountHead heads a column of amounts.
func amountHead(m *dose.ModelDraft) string {
	if m.Kind == "infusion" {
		return "amount per hour"
	}
	return "amount each time"
}

// planTable is one row a plan, the drafted one in bold.
func planTable(m *dose.ModelDraft) pageTable {
	amount := planAmounts(m)
	t := pageTable{columns: []tableColumn{{head: "plan"}, {head: "dose per kg", align: alignDecimal}, {head: amountHead(m), align: alignDecimal}, {head: "every"}, {head: "in a day", align: alignDecimal}, {head: "average v. model's"}}}
	for i := range m.Plans {
		q := &m.Plans[i]
		name, cell := planWords(q.Name), plain
		if q.Name == m.Plan {
			name, cell = name+" (drafted)", bold
		}
		if q.DosePerKg[0] != q.DosePerKg[1] {
			t.size = sizeSmall // six columns, three of them with two numbers
		}
		average := averageWords(q.AverageRatio)
		if q.Name == string(dose.PlanOnce) {
			average = ""
		}
		every := intervalWords(q.Name, nil)
		if q.IntervalH != nil {
			every = hoursCell(*q.IntervalH)
		}
		row := tableRow{}
		for _, c := range []string{name, perKgPair(q.DosePerKg, q.Unit), amount(q.PerAdministration), every, strings.TrimSuffix(dailyPair(q.DailyPerKg, q.Unit), "/day"), average} {
			row.cells = append(row.cells, []run{cell(c)})
		}
		t.rows = append(t.rows, row)
	}
	if m.Kind == "once" {
		t.drop(map[int]bool{4: true, 5: true})
	}
	return t
}

// howFarOff shows what the ranges are made of.
func (s *sheet) howFarOff() {
	f, m := s.f, s.from
	if m == nil || len(m.Parts) == 0 {
		return
	}
	f.heading("How far off the dose may be")
	if s.ws.Fit == nil {
		f.para(plain("Standard deviations (sd) of ln dose. Nine times in ten: the dose divided by and times exp(1.645 × sd); as likely as not: by and times exp(0.674 × sd)."))
		f.keepNext()
	} else {
		f.para(plain("Standard deviations (sd) of ln dose."))
	}
	t := pageTable{columns: []tableColumn{{head: "part"}, {head: "sd", align: alignDecimal}, {head: "what it is, and its source", grow: 1}}}
	for i := range m.Parts {
		q := &m.Parts[i]
		text := paperText(q.Text)
		if q.Source != "" && q.Source != "assumed" {
			text = joinNonEmpty(text, "Source: "+paperText(q.Source), ". ")
		}
		t.rows = append(t.rows, tableRow{cells: [][]run{{plain(q.Name)}, {plain(metabolic.Significant(q.SD, 3))}, {plain(text)}}, rule: strings.HasPrefix(q.Name, "together, of mg/kg") || strings.HasPrefix(q.Name, "the larger")})
	}
	s.table(t)
}

// trackRecord is what became of such predictions elsewhere.
func (s *sheet) trackRecord() {
	if len(s.ws.TrackRecord) == 0 {
		return
	}
	s.f.heading("How such predictions have fared")
	for _, x := range s.ws.TrackRecord {
		s.f.bullet(paraStyle{}, plain(paperText(x)))
	}
}

// suitability is the table of published reasons for and against scaling by
// size.
func (s *sheet) suitability() {
	if len(s.ws.Suitability) == 0 {
		return
	}
	f := s.f
	f.heading("Does this drug suit scaling by size?")
	t := pageTable{columns: []tableColumn{{head: "criterion"}, {head: "speaks"}, {head: "why", grow: 2}, {head: "source", grow: 1}}}
	for i := range s.ws.Suitability {
		c := &s.ws.Suitability[i]
		verdict := []run{plain("unknown")}
		switch c.Verdict {
		case "speaks for":
			verdict = []run{plain("for")}
		case "speaks against":
			verdict = []run{bold("AGAINST")}
		}
		t.rows = append(t.rows, tableRow{cells: [][]run{{plain(c.Name)}, verdict, {plain(paperText(c.Text))}, {plain(paperText(c.Source) + verifiedWords(c.Verified))}}, rule: true})
	}
	t.size = sizeSmall
	f.table(t)
}

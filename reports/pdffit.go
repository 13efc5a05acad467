package reports

import (
	"tayra/dose"
	"tayra/metabolic"
)

// fitHeight is the height of the figure of a fitted line.
const fitHeight = 260

// fit is the line fitted to data that a dose comes from.
func (s *sheet) fit() {
	if s.ws.Fit == nil {
		return
	}
	s.fittedLine(s.ws.Fit)
	for i := range s.ws.Fit.Others {
		s.fittedLine(&s.ws.Fit.Others[i])
	}
}

// fittedLine sets one line: what it is, what it says at the target's mass, and
// its animals.
func (s *sheet) fittedLine(r *dose.FitRecord) {
	f := s.f
	name := parameterWords(r.Parameter)
	f.heading("Line fitted to data: " + name)
	value := func(v float64) string { return metabolic.Significant(v, 3) + " " + paperUnits(r.Unit) }
	span := func(p dose.Pair) string { return metabolic.FormatRange(p[0], p[1], value) }
	number := func(v float64) string { return metabolic.Significant(v, 3) }
	f.para(plain(capital(name)+" = a·Wᵇ, W in kg; least squares on logs over "+countWord(float64(r.N), "animal")+": "),
		bold("a = "+value(r.A)+", b = "+metabolic.FormatRatio(r.B)),
		plain("; 95 % interval of b "+metabolic.FormatRange(r.CI95B[0], r.CI95B[1], number)+"; standard errors: of b "+number(r.SEB)+", of ln a "+number(r.SELnA)+
			"; residual standard deviation of ln "+number(r.ResidualSD)+"; R² "+metabolic.FormatRatio(r.RSquared)+"."))
	at := "at " + metabolic.FormatMass(metabolic.Mass(r.AtTarget.MassKg))
	t := pageTable{columns: []tableColumn{{}, {head: "value"}, {head: "95 % confidence of the line"}, {head: "95 % prediction of one animal"}}}
	x := &r.Fixed.AtTarget
	t.rows = append(t.rows,
		tableRow{cells: [][]run{{bold(at + ", fitted exponent")}, {bold(value(r.AtTarget.Value))}, {bold(span(r.AtTarget.CI95))}, {bold(span(r.AtTarget.PI95))}}},
		tableRow{cells: cellTexts(at+", exponent "+metabolic.FormatRatio(r.Fixed.Exponent), value(x.Value), span(x.CI95), span(x.PI95))})
	s.table(t)
	if g := r.Regimen; g != nil {
		text := "Average concentration kept: " + number(g.Average) + " " + amountName(s.unit) + "/L (" + g.AverageSource + "); bioavailability " + metabolic.FormatPercent(g.Bioavailable)
		if g.HalfLifeH > 0 {
			text += "; half-life in the patient " + hoursCell(g.HalfLifeH) + " (" + g.HalfLifeFrom + ")"
		}
		f.para(plain(text + "."))
	}
	if p := fitPlot(r); p != nil {
		s.drawn(p, fitHeight, fitCaption(r))
	}
	for _, n := range r.Notes {
		f.bullet(paraStyle{}, plain(paperText(n)))
	}
	s.fittedAnimals(r, value)
}

// fitCaption says what the figure of a line shows.
func fitCaption(r *dose.FitRecord) string {
	text := "Rings: the animals, larger with more leverage. Diamond: the target, with its 95 % prediction."
	if len(r.Points) > mostNamed {
		text += " Names: see the table."
	}
	return text
}

// mostFitted is how many animals of a line are listed on paper; the attached
// record has them all.
const mostFitted = 60

// fittedAnimals lists the animals of a line, each with what the line of the
// others says of it.
func (s *sheet) fittedAnimals(r *dose.FitRecord, value func(float64) string) {
	if len(r.Points) == 0 {
		return
	}
	left := map[string]*dose.FitLeftOut{}
	for i := range r.LeaveOne {
		left[r.LeaveOne[i].Species] = &r.LeaveOne[i]
	}
	t := pageTable{size: sizeSmall, columns: []tableColumn{{head: "animal"}, {head: "mass", align: alignDecimal}, {head: "value", align: alignDecimal}, {head: "on the line", align: alignDecimal}, {head: "leverage", align: alignDecimal}, {head: "predicted from the others", align: alignDecimal}, {head: "fold error", align: alignDecimal}}}
	for i := range r.Points {
		p := &r.Points[i]
		if i == mostFitted {
			break
		}
		cells := []string{p.Species, metabolic.FormatMass(metabolic.Mass(p.MassKg)), value(p.Value), value(p.Fitted), metabolic.Significant(p.Leverage, 2), "", ""}
		// Repeated species that are kept have one name; which row was left
		// out is then not told by it.
		if l := left[p.Species]; l != nil && len(r.LeaveOne) <= len(left) {
			cells[5], cells[6] = value(l.Predicted), metabolic.Significant(l.FoldError, 3)
		}
		t.rows = append(t.rows, tableRow{cells: cellTexts(cells...)})
	}
	s.f.table(t)
	if more := len(r.Points) - mostFitted; more > 0 {
		s.f.para(plain(countWord(float64(more), "more animal") + " in the attached record."))
	}
}

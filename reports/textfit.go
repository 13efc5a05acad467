package reports

import (
	"fmt"
	"strings"

	"tayra/dose"
	"tayra/metabolic"
)

// FitText sets a line fitted to data as a terminal shows it: what it says at
// the target's mass with both intervals, the cautions, the animals one by one.
func FitText(f *dose.FitRecord, o TextOptions) []byte {
	t := newTerminal(o)
	t.spread(styleHead, "A line fitted to data", f.Target)
	t.fit(f, "mg/kg")
	t.heading("CAUTIONS: " + countWords(f.Cautions))
	ws := &dose.Worksheet{}
	for i := range f.Cautions {
		t.caution(ws, &f.Cautions[i])
	}
	if len(f.Cautions) > 0 {
		t.faint(0, "A caution that is not raised is no evidence of safety.")
	}
	if !o.Quiet {
		t.fitAnimals(f)
		for i := range f.Others {
			t.fit(&f.Others[i], "mg/kg")
		}
	}
	return t.b.Bytes()
}

// fitSection is the line on a worksheet whose dose comes from it. Its cautions
// stand among those of the worksheet.
func (t *terminal) fitSection(ws *dose.Worksheet) {
	f := ws.Fit
	if f == nil {
		return
	}
	unit := "mg/kg"
	if m := draftedModel(ws); m != nil {
		unit = m.Unit
	}
	t.fit(f, unit)
	t.fitAnimals(f)
	for i := range f.Others {
		t.fit(&f.Others[i], unit)
	}
}

// fit says what one line is and what it says at the target's mass. unit is that
// of the dose per kg.
func (t *terminal) fit(f *dose.FitRecord, unit string) {
	name := strings.ReplaceAll(string(f.Parameter), "_", "-")
	t.heading("LINE FITTED TO DATA: " + strings.ToUpper(name))
	value := func(v float64) string { return metabolic.Significant(v, 3) + " " + f.Unit }
	span := func(p dose.Pair) string { return metabolic.FormatRange(p[0], p[1], value) }
	t.text(tableIndent, fmt.Sprintf("%s = a·W^b with W in kg, least squares on logs over %s: a = %s, b = %s.",
		name, countWord(float64(f.N), "animal"), value(f.A), metabolic.FormatRatio(f.B)))
	plain := func(v float64) string { return metabolic.Significant(v, 3) }
	t.text(tableIndent, fmt.Sprintf("95 %% interval of b: %s; standard errors: of b %s, of ln a %s; residual standard deviation of ln %s; R² %s.",
		metabolic.FormatRange(f.CI95B[0], f.CI95B[1], plain), plain(f.SEB), plain(f.SELnA), plain(f.ResidualSD), metabolic.FormatRatio(f.RSquared)))
	at := "At " + metabolic.FormatMass(metabolic.Mass(f.AtTarget.MassKg))
	tb := &table{head: []string{"", "value", "95 % confidence\nof the line", "95 % prediction\nof one animal"}}
	tb.row(at, value(f.AtTarget.Value), span(f.AtTarget.CI95), span(f.AtTarget.PI95))
	x := &f.Fixed.AtTarget
	tb.row(at+", b = "+metabolic.FormatRatio(f.Fixed.Exponent), value(x.Value), span(x.CI95), span(x.PI95))
	t.table(tb)
	if r := f.Regimen; r != nil {
		amount, _ := unitOf(unit)
		s := "Average concentration kept: " + metabolic.FormatConcentration(metabolic.Concentration{Value: r.Average, Unit: amount}) + " (" + r.AverageSource + "); bioavailability " + metabolic.FormatPercent(r.Bioavailable)
		if r.HalfLifeH > 0 {
			s += "; half-life in the patient " + hoursCell(r.HalfLifeH) + " (" + r.HalfLifeFrom + ")"
		}
		t.text(tableIndent, s+".")
	}
	for _, n := range f.Notes {
		t.para(tableIndent, words{text: "-"}, words{text: n})
	}
}

// mostAnimals is how many animals of a fit a terminal shows; the record has
// them all.
const mostAnimals = 60

// fitAnimals lists the animals of a line, each with what the line of the others
// says of it.
func (t *terminal) fitAnimals(f *dose.FitRecord) {
	if len(f.Points) == 0 {
		return
	}
	t.heading("THE ANIMALS OF THE LINE, AND EACH PREDICTED FROM THE OTHERS")
	left := map[string]*dose.FitLeftOut{}
	for i := range f.LeaveOne {
		left[f.LeaveOne[i].Species] = &f.LeaveOne[i]
	}
	value := func(v float64) string { return metabolic.Significant(v, 3) + " " + f.Unit }
	tb := &table{head: []string{"", "mass", "value", "fitted", "leverage", "predicted from\nthe others", "fold\nerror"}}
	for i := range f.Points {
		p := &f.Points[i]
		if i == mostAnimals {
			break
		}
		row := []string{p.Species, metabolic.FormatMass(metabolic.Mass(p.MassKg)), value(p.Value), value(p.Fitted), metabolic.Significant(p.Leverage, 2), "", ""}
		// Repeated species that are kept have one name; which row was left out
		// is then not told by it.
		if l := left[p.Species]; l != nil && len(f.LeaveOne) <= len(left) {
			row[5], row[6] = value(l.Predicted), metabolic.Significant(l.FoldError, 3)
		}
		tb.row(row...)
	}
	t.table(tb)
	if more := len(f.Points) - mostAnimals; more > 0 {
		t.text(tableIndent, fmt.Sprintf("%d more are in the record.", more))
	}
}

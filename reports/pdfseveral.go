package reports

import (
	"strings"

	"tayra/metabolic"
)

// severalModels holds the models of a case against one another.
func (s *sheet) severalModels() {
	f, ws := s.f, s.ws
	if len(ws.Drafts) < 2 {
		return
	}
	f.heading("Several models")
	if p := severalPlot(ws); p != nil && ws.Drafted != nil {
		s.drawn(p, severalHeight(ws), "Bars: the range of the mean over the models, not of the draft, which comes from one of them. Broken line: the mean.")
	}
	from := -1
	if ws.DraftedFrom != nil {
		from = ws.DraftedFrom.Index
	}
	t := pageTable{columns: []tableColumn{{head: "model"}, {head: "mass"}, {head: "kinship"}, {head: "S", align: alignDecimal}}}
	if ws.Drafted != nil {
		t.columns = append(t.columns, tableColumn{head: "its own dose"}, tableColumn{head: "gives"}, tableColumn{head: "nine times in ten within", align: alignDecimal})
	}
	for i := range ws.Drafts {
		d := &ws.Drafts[i]
		name, cell := modelName(d), plain
		if i == from && ws.Drafted != nil {
			name, cell = name+" (drafted from)", bold
		}
		kin := orDefault(d.Kinship, "none")
		cells := []string{name, massWords(d.MassKg, d.MassLowKg, d.MassHighKg), kin, metabolic.FormatRatio(d.Ratios.Specific)}
		if ws.Drafted != nil {
			cells = append(cells, modelRegimen(d))
			gives := ""
			for k := range d.Plans {
				if p := &d.Plans[k]; p.Name == d.Plan {
					gives = perKgPair(p.DosePerKg, p.Unit) + " " + intervalWords(p.Name, p.IntervalH)
				}
			}
			range90 := ""
			if d.Range90 != nil {
				range90 = perKgRange(*d.Range90, d.Unit)
			}
			cells = append(cells, gives, range90)
		}
		row := tableRow{}
		for _, c := range cells {
			row.cells = append(row.cells, []run{cell(c)})
		}
		t.rows = append(t.rows, row)
	}
	t.size = sizeSmall
	s.table(t)
	for i := range ws.Drafts {
		f.bullet(paraStyle{}, plain("Source of the dose in the "+modelName(&ws.Drafts[i])+": "+ws.Drafts[i].Source+"."))
	}
	v := ws.Several
	if v == nil || ws.Drafted == nil {
		return
	}
	perDay := func(x float64) string { return dailyWords(x, strings.TrimSuffix(v.Unit, "/day")) }
	between := func(low, high float64) string { return metabolic.FormatRange(low, high, perDay) }
	f.para(plain("Drafted daily amounts: mean of the logs "), bold(perDay(v.MeanDailyPerKg)), plain(", from "+between(v.Low, v.High)+", a spread of "+metabolic.Significant(v.FoldSpread, 3)+
		"-fold. As likely as not within "+between(v.Range50.Low, v.Range50.High)+", nine times in ten within "+between(v.Range90.Low, v.Range90.High)+
		"; standard deviation of ln "+metabolic.FormatRatio(v.SD)+", in it the variance between the models, "+metabolic.Significant(v.VarBetween, 3)+"."))
	if v.Text != "" {
		f.para(plain(v.Text))
	}
	f.para(bold("Each model's own dose, predicted from the others:"))
	f.keepNext()
	b := pageTable{columns: []tableColumn{{head: "model"}, {head: "its own, in a day", align: alignDecimal}, {head: "predicted from the others", align: alignDecimal}, {head: "fold error", align: alignDecimal}}}
	for i := range v.Models {
		x := &v.Models[i]
		b.rows = append(b.rows, tableRow{cells: cellTexts(animalWords(x.CommonName, x.Model), perDay(x.PublishedDaily), perDay(x.PredictedDaily), metabolic.Significant(x.FoldError, 3))})
	}
	s.table(b)
}

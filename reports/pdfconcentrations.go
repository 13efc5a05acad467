package reports

import (
	"fmt"
	"strings"

	"tayra/metabolic"
)

// curvesHeight is about a third of a page.
const curvesHeight = 235

// concentrations is the interval check: the course of the regimens from the
// first dose, and of each at steady state.
func (s *sheet) concentrations() {
	f, ws := s.f, s.ws
	if len(ws.Curves) == 0 && ws.CurvesNote == "" {
		return
	}
	single := s.from != nil && s.from.Kind == "once"
	f.heading("Concentrations")
	if p := curvesPlot(ws); p != nil {
		caption := "Heavy line: drafted. Broken: the model's own regimen in the model"
		if ws.Proposed != nil {
			caption += ". Dotted: proposed"
		}
		if single {
			caption = "Broken: the model's own dose in the model. Solid: both ends of the bracket in the patient"
		}
		s.drawn(p, curvesHeight, caption+".")
	}
	s.concentrationTable(single)
	if x := ws.Target; x != nil {
		amount, _ := unitOf(x.Unit)
		f.para(plain("Target: " + metabolic.FormatConcentration(metabolic.Concentration{Value: x.PerLitre, Unit: amount}) + ". Source: " + x.Source + "."))
	}
	if ws.CurvesNote != "" {
		f.para(plain(paperText(ws.CurvesNote)))
	}
}

func (s *sheet) concentrationTable(single bool) {
	ws := s.ws
	if len(ws.Curves) == 0 {
		return
	}
	unit := ws.Curves[0].Unit
	amount, _ := unitOf(unit)
	relative := strings.Contains(unit, "times")
	level := func(v float64) string {
		if relative {
			return metabolic.Significant(v, 3) + " times"
		}
		return metabolic.FormatConcentration(metabolic.Concentration{Value: v, Unit: amount})
	}
	repeated, target := false, false
	t := pageTable{size: sizeSmall, columns: []tableColumn{{head: "regimen"}, {head: "half-life"}, {head: "interval"}, {head: "peak", align: alignDecimal}, {head: "trough", align: alignDecimal}, {head: "average", align: alignDecimal},
		{head: "swing", align: alignDecimal}, {head: "build-up", align: alignDecimal}, {head: "doses to 90 %", align: alignDecimal}, {head: "above target", align: alignDecimal}}}
	for i := range ws.Curves {
		c := &ws.Curves[i]
		name, cell := curveName(c), plain
		if ws.Drafted != nil && c.Name == ws.Drafted.Plan {
			name, cell = name+" (drafted)", bold
		}
		cells := []string{name, hoursCell(c.HalfLifeH), "", level(c.Cmax), "", "", "", "", "", ""}
		switch {
		case c.IntervalH != nil:
			repeated = true
			cells[2], cells[4], cells[5] = hoursCell(*c.IntervalH), level(c.Cmin), level(c.Cavg)
			cells[6], cells[7], cells[8] = metabolic.Significant(c.Fluctuation, 3), metabolic.Significant(c.Accumulation, 3), fmt.Sprint(c.DosesTo90)
		case !single:
			cells[5] = level(c.Cavg)
		}
		if c.PercentAbove != nil {
			target = true
			cells[9] = metabolic.FormatPercent(*c.PercentAbove / 100)
		}
		row := tableRow{}
		for _, x := range cells {
			row.cells = append(row.cells, []run{cell(x)})
		}
		t.rows = append(t.rows, row)
	}
	drop := map[int]bool{9: !target}
	if !repeated {
		drop[2], drop[4], drop[6], drop[7], drop[8] = true, true, true, true, true
		drop[5] = single
	}
	t.drop(drop)
	s.table(t)
	var notes []string
	if relative {
		notes = append(notes, "Concentrations are "+unit+".")
	}
	if repeated {
		notes = append(notes, "At steady state. Swing: (peak − trough)/average. Build-up: peak at steady state over the first. Doses to 90 %: of steady state.")
	}
	if target {
		notes = append(notes, "Above target: part of the interval.")
	}
	if len(notes) > 0 {
		s.f.keepNext()
		s.f.paragraph(paraStyle{gap: 2}, plain(strings.Join(notes, " ")))
	}
}

// drop takes columns out of a table.
func (t *pageTable) drop(drop map[int]bool) {
	var columns []tableColumn
	for c := range t.columns {
		if !drop[c] {
			columns = append(columns, t.columns[c])
		}
	}
	for r := range t.rows {
		var cells [][]run
		for c := range t.rows[r].cells {
			if !drop[c] {
				cells = append(cells, t.rows[r].cells[c])
			}
		}
		t.rows[r].cells = cells
	}
	t.columns = columns
}

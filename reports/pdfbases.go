package reports

import (
	"strconv"
	"strings"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"tayra/metabolic"
	"tayra/species"
)

// drawn adds a figure with a line of words under it.
func (s *sheet) drawn(p *plot.Plot, height float64, caption string) {
	s.f.figure(height, func(c vg.CanvasSizer) {
		const edge = 2
		p.Draw(draw.Crop(draw.New(c), edge, -edge, edge, -edge))
	})
	if caption != "" {
		s.f.keepNext()
		s.f.paragraph(paraStyle{gap: 2}, plain(caption))
	}
}

// otherBases is the dose under every basis and exponent: the strip, and a line
// each.
func (s *sheet) otherBases() {
	f, ws, m := s.f, s.ws, s.from
	if m == nil || len(ws.Bases)+len(ws.Unavailable) == 0 {
		return
	}
	f.heading("If the basis were another")
	if p := stripPlot(ws); p != nil {
		f.para(plain(stripWords(ws)))
		f.keepNext()
		s.drawn(p, stripHeight(ws), "")
	}
	t := pageTable{columns: []tableColumn{{head: "basis"}, {head: "patient burns"}, {head: "model burns"}, {head: "S", align: alignDecimal}, {head: "dose per kg", align: alignDecimal}}}
	rate := func(w float64) string { return metabolic.FormatPower(metabolic.Power(w)) }
	for i := range ws.Bases {
		b := &ws.Bases[i]
		name, cell, per := basisLabel(b, true), plain, ""
		if b.DosePerKg != nil {
			per = perKgPair(*b.DosePerKg, m.Unit)
		}
		if basisUsed(ws, b) {
			name, cell = name+", basis used", bold
		}
		t.rows = append(t.rows, tableRow{cells: [][]run{{cell(name)}, {cell(rate(b.PatientW))}, {cell(rate(b.ModelW))}, {cell(metabolic.FormatRatio(b.Specific))}, {cell(per)}}})
	}
	t.drop(map[int]bool{4: ws.Drafted == nil})
	s.table(t)
	for _, u := range ws.Unavailable {
		f.bullet(paraStyle{}, bold("No "+u.Basis+": "), plain(paperText(u.Why)+"."))
	}
	if len(ws.Exponents) == 0 {
		return
	}
	e := pageTable{columns: []tableColumn{{head: "exponent", align: alignDecimal}, {head: "S", align: alignDecimal}, {head: "dose per kg", align: alignDecimal}, {head: "of the group constants"}}}
	for i := range ws.Exponents {
		x := &ws.Exponents[i]
		e.rows = append(e.rows, tableRow{cells: cellTexts(metabolic.FormatRatio(x.Exponent), metabolic.FormatRatio(x.Specific), perKgPair(x.DosePerKg, m.Unit), paperText(x.Remark))})
	}
	s.table(e)
}

// temperatures is the draft of an ectotherm at other body temperatures.
func (s *sheet) temperatures() {
	f, ws, m := s.f, s.ws, s.from
	if m == nil || len(ws.Temperature) == 0 {
		return
	}
	f.heading("At another body temperature")
	t := pageTable{columns: []tableColumn{{head: "body temperature", align: alignDecimal}, {head: "S", align: alignDecimal}, {head: "dose per kg", align: alignDecimal}, {head: "interval"}, {head: "in a day", align: alignDecimal}, {head: amountHead(m), align: alignDecimal}}}
	amount := temperatureAmounts(ws.Temperature, m.Unit)
	daily := false
	for i := range ws.Temperature {
		l := &ws.Temperature[i]
		cell, note := plain, ""
		if ws.Patient.TemperatureC != nil && *ws.Patient.TemperatureC == l.TemperatureC {
			cell, note = bold, " (the patient's)"
		}
		every := intervalWords(m.Kind, nil)
		if l.IntervalH > 0 {
			every = intervalWords("", &l.IntervalH)
		}
		t.rows = append(t.rows, tableRow{cells: [][]run{{cell(metabolic.FormatCelsius(metabolic.Celsius(l.TemperatureC)) + note)}, {cell(metabolic.FormatRatio(l.Specific))}, {cell(perKgPair(l.DosePerKg, m.Unit))}, {cell(every)},
			{cell(strings.TrimSuffix(dailyPair(l.DailyPerKg, m.Unit), "/day"))}, {cell(amount(l.Amount))}}})
		daily = daily || l.DailyPerKg != nil
	}
	t.drop(map[int]bool{4: !daily})
	s.table(t)
}

// rateHeight is the height of the figure of rates.
const rateHeight = 230

// rates shows where the two animals lie among the measured ones of the
// patient's class, and the lines that the bases draw through them.
func (s *sheet) rates() {
	ws, m := s.ws, s.from
	a, err := species.Find(ws.Patient.Species)
	if err != nil || m == nil {
		return
	}
	t, q10 := metabolic.Celsius(0), metabolic.Q10Default
	if ws.Patient.TemperatureC != nil {
		t = metabolic.Celsius(*ws.Patient.TemperatureC)
	}
	if ws.Input != nil && ws.Input.Method.Q10.Given() {
		if q, err := strconv.ParseFloat(strings.TrimSpace(ws.Input.Method.Q10.Text), 64); err == nil {
			q10 = q
		}
	}
	at := func(name string, c *float64) string {
		if c != nil {
			name += " at " + metabolic.FormatCelsius(metabolic.Celsius(*c))
		}
		return name
	}
	patient := animalWords(ws.Patient.CommonName, ws.Patient.Species)
	marks := []rateMark{{name: at("patient: "+patient, ws.Patient.TemperatureC), mass: ws.Patient.MassKg, watt: ws.Patient.RateW, bold: true}}
	caption := "Dots: the measured animals of the class " + ws.Patient.Class + ". Marks: the rates used"
	other := ""
	if m.Class == ws.Patient.Class {
		marks = append(marks, rateMark{name: at("model: "+modelName(m), m.TemperatureC), mass: m.MassKg, watt: m.RateW})
	} else {
		other = " The model is of another class (" + m.Class + ") and is not shown."
	}
	if own, ok := species.MeasuredRate(a); ok && own.Flag == "" {
		marks = append(marks, rateMark{name: "as measured: " + patient, mass: float64(own.Mass), watt: float64(own.Rate)})
		caption += ", and the patient's kind as it was measured"
	}
	p := ratePlot(a.Class, linesOfAnimal(a, t, q10), marks)
	if p == nil {
		return
	}
	s.f.heading("Where the animals lie among measured ones")
	s.drawn(p, rateHeight, caption+"."+other)
}

package reports

import (
	"encoding/json"
	"fmt"
	"time"

	"tayra/dose"
	"tayra/metabolic"
	"tayra/species"
)

// FitPDFOptions says how a fitted line is set on paper without a case.
type FitPDFOptions struct {
	Paper Paper
	// Date is the day of the sheet, as 2026-11-30. It is required: no clock is
	// read.
	Date string
	// Table is the file that the line was fitted to, as it was read. It is
	// attached as data.csv; nothing is when nil.
	Table []byte
}

// FitPDF sets a fitted line on paper, with the line's record attached as
// fit.json. It holds no dose, and says so. The same line and options give the
// same bytes. A text that cannot be printed is a [*LetterError].
func FitPDF(r *dose.FitRecord, o FitPDFOptions) ([]byte, error) {
	date, err := time.ParseInLocation(time.DateOnly, o.Date, time.UTC)
	if err != nil {
		return nil, fmt.Errorf("the date, %q, is not a date as in 2026-11-30", o.Date)
	}
	record, err := json.MarshalIndent(r, "", "  ")
	if err != nil {
		return nil, fmt.Errorf("the record cannot be written: %w", err)
	}
	record = append(record, '\n')
	target := r.Target
	if a, err := species.Find(r.Target); err == nil && a.CommonName() != "" {
		target = a.CommonName() + " (" + a.Name + ")"
	}
	d := newDocument(o.Paper)
	s := &sheet{doc: d, f: d.body, ws: &dose.Worksheet{}, unit: "mg/kg"}
	mass := metabolic.FormatMass(metabolic.Mass(r.AtTarget.MassKg))
	d.head = func(f *flow, page, pages int) {
		f.split(paraStyle{gap: -1}, []run{bold("Line fitted to data"), plain(", read at " + target + ", " + mass)}, []run{plain(o.Date + "   "), pageOf(page, pages)})
		f.rule(rulerThin)
	}
	d.foot = func(f *flow, page, pages int) {
		f.rule(rulerThin)
		f.split(paraStyle{size: sizeSmall, gap: -1}, []run{bold("A line, no dose. Not a prescription.")}, []run{plain(producer())})
		f.split(paraStyle{size: sizeSmall, gap: -1}, []run{plain("For a licensed veterinarian's judgement.")}, []run{plain("record " + Digest(record))})
	}
	d.body.heading("Cautions: " + countWords(r.Cautions))
	for i := range r.Cautions {
		s.caution(&r.Cautions[i])
	}
	if len(r.Cautions) > 0 {
		d.body.paragraph(paraStyle{gap: 3}, plain("A caution that is not raised is no evidence of safety."))
	}
	s.fittedLine(r)
	for i := range r.Others {
		s.fittedLine(&r.Others[i])
	}
	pr := properties{
		title: "Line fitted to data, " + parameterWords(r.Parameter), subject: "An allometric line read at " + target + ", " + mass,
		keywords: "allometric scaling, record " + Digest(record), producer: producer(), date: date,
		attached: []attachment{{"fit.json", "the record of the line", record}},
	}
	if o.Table != nil {
		pr.attached = append(pr.attached, attachment{"data.csv", "the table that the line was fitted to", o.Table})
	}
	return d.render(pr)
}

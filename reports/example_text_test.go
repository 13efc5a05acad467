package reports_test

import (
	"bytes"
	"fmt"
	"log"

	"tayra/dose"
	"tayra/reports"
)

// A case becomes a worksheet, and the worksheet a text: here only what stands
// in front.
func Example() {
	in, _, err := dose.ReadCase("case.yaml", []byte(`
case: LW-0412
date: 2026-11-30
patient: {species: giant anteater, mass: 41 kg}
drug: {name: examplicillin, margin: narrow}
models:
  - {species: dog, mass: 18 kg, dose: 10 mg/kg, interval: q12h, source: invented for this example}
`))
	if err != nil {
		log.Fatal(err)
	}
	c, err := in.Check()
	if err != nil {
		log.Fatal(err)
	}
	ws, err := dose.Draft(c)
	if err != nil {
		log.Fatal(err)
	}
	text := reports.Text(ws, reports.TextOptions{Width: 70, Quiet: true})
	front, _, _ := bytes.Cut(text, []byte("\nCAUTIONS"))
	fmt.Println(string(front))
	record, err := reports.JSON(ws)
	if err != nil {
		log.Fatal(err)
	}
	again, err := reports.ReadRecord(record)
	fmt.Println(again.Case, err)
	// Output:
	// Worksheet: draft of a starting dose           case LW-0412  2026-11-30
	// giant anteater (Myrmecophaga tridactyla)                         41 kg
	//
	// ┏━ STOP: NO DOSE IS DRAFTED ━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━┓
	// ┃ examplicillin: no dose.                                            ┃
	// ┃ [STOP] the drug's margin is narrow                                 ┃
	// ┃                                                                    ┃
	// ┃ Read the cautions. Whoever goes on writes under overrides in the   ┃
	// ┃ case file, for each stop by its name, why it does not hold here;   ┃
	// ┃ the reasons are printed with the dose.                             ┃
	// ┗━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━━┛
	//
	// LW-0412 <nil>
}

package main

import (
	"errors"
	"fmt"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tayra/metabolic"
	"tayra/species"
)

func speciesCommand() *cobra.Command {
	var listing listingFlags
	var hazards bool
	cmd := &cobra.Command{
		Use:   "species [WORDS]",
		Short: "Find animals by name, family or order",
		Long: `Find animals by common or scientific name, family or order. Without words, list
every animal of the table. When the words are the name of one animal, show all
that is on file for it, hazards included. With --hazards, list what the table of
hazards covers: on everything else it is silent, and a missing entry is no
evidence of safety.`,
		Example: `tayra species anteater
tayra species "Myrmecophaga tridactyla"
tayra species --hazards
tayra species Carnivora --json carnivores.json`,
		Annotations:       map[string]string{"usage": "tayra species [WORDS] [flags]\ntayra species --hazards"},
		Args:              cobra.ArbitraryArgs,
		ValidArgsFunction: completeSpecies,
		RunE: func(cmd *cobra.Command, args []string) error {
			words := strings.Join(args, " ")
			if hazards {
				if len(args) > 0 || listing.json != "" {
					return &usageError{"--hazards", "stands alone", "leave the words and --json out"}
				}
				return listing.write(cmd, nil, hazardCoverageText())
			}
			animals, single, err := findSpecies(words)
			if err != nil {
				return err
			}
			text := animalsText(animals)
			if single {
				text = animalText(animals[0])
			}
			return listing.write(cmd, func() any { return speciesRecord(animals, single) }, text)
		},
	}
	inGroup(cmd, "Flags", func(flags *pflag.FlagSet) {
		flags.BoolVar(&hazards, "hazards", false, "list what the table of hazards covers, and so what it does not")
		listing.define(flags)
	})
	return cmd
}

// findSpecies gives the animals of some words; single says that the words are
// the name of one animal.
func findSpecies(words string) (animals []*species.Animal, single bool, err error) {
	if strings.TrimSpace(words) == "" {
		return species.All(), false, nil
	}
	a, err := species.Find(words)
	if err == nil {
		return []*species.Animal{a}, true, nil
	}
	if found := species.Search(words); len(found) > 0 {
		return found, len(found) == 1, nil
	}
	return nil, false, animalFault("WORDS", err)
}

// animalFault says under the name of an argument or flag that no single animal
// was found.
func animalFault(what string, err error) error {
	var none *species.NotFoundError
	var several *species.AmbiguousError
	switch {
	case errors.As(err, &none):
		remedy := "search with `tayra species WORDS`, or write the scientific name"
		if len(none.Near) > 0 {
			remedy = "did you mean " + strings.Join(none.Near, ", ") + "?"
		}
		return &usageError{what, fmt.Sprintf("no animal called %q in the table", none.Words), remedy}
	case errors.As(err, &several):
		problem, _, _ := strings.Cut(several.Error(), "; ")
		return &usageError{what, problem, "write which"}
	}
	problem, remedy, ok := strings.Cut(err.Error(), "; ")
	if !ok {
		remedy = "retype the name"
	}
	return &usageError{what, problem, remedy}
}

// animalsText lists animals family by family, in the order in which the
// families are first met: the best match stands first.
func animalsText(animals []*species.Animal) string {
	type family struct {
		heading string
		rows    [][]string
	}
	var families []*family
	at := map[string]*family{}
	columns := []column{{head: "SCIENTIFIC NAME"}, {head: "COMMON NAME"}}
	for _, a := range animals {
		heading := a.Class + ", " + a.Order + ", " + a.Family
		f := at[heading]
		if f == nil {
			f = &family{heading: heading}
			at[heading] = f
			families = append(families, f)
		}
		f.rows = append(f.rows, []string{a.Name, a.CommonName()})
	}
	// One width for all families: the columns run straight down the page.
	var all [][]string
	for _, f := range families {
		all = append(all, f.rows...)
	}
	lines := strings.Split(strings.TrimSuffix(table(columns, all, 2), "\n"), "\n")
	var b strings.Builder
	fmt.Fprintln(&b, lines[0])
	lines = lines[1:]
	for _, f := range families {
		fmt.Fprintln(&b, f.heading)
		for range f.rows {
			fmt.Fprintln(&b, lines[0])
			lines = lines[1:]
		}
	}
	count := fmt.Sprintf("%d animals", len(animals))
	if len(animals) == 1 {
		count = "1 animal"
	}
	fmt.Fprintf(&b, "\n%s\n", count)
	return b.String()
}

// animalText is all that is on file for one animal.
func animalText(a *species.Animal) string {
	var b strings.Builder
	fmt.Fprintln(&b, animalTitle(a))
	if a.MatchedAs != "" {
		fmt.Fprintln(&b, paragraph(a.MatchedAs, 0, 0, listWidth))
	}
	b.WriteByte('\n')
	const indent = 16
	fact := func(name, text string) {
		if text != "" {
			fmt.Fprintf(&b, "%-*s%s\n", indent, name, strings.TrimLeft(paragraph(text, indent, indent, listWidth), " "))
		}
	}
	if len(a.CommonNames) > 1 {
		fact("also called", strings.Join(a.CommonNames[1:], ", "))
	}
	fact("class", a.Class)
	fact("order", a.Order)
	fact("family", a.Family)
	fact("group", a.Group)
	fact("adult mass", adultMassText(a))
	fact("temperature", bodyTemperatureText(a))
	fact("measured rate", measuredText(a))
	fact("notes", a.Notes)

	var matches, relatives []species.HazardMatch
	for _, m := range species.HazardsOf(a) {
		if m.Relation == "direct" {
			matches = append(matches, m)
		} else {
			relatives = append(relatives, m)
		}
	}
	fmt.Fprintf(&b, "\n%s\n", paragraph(hazardCountText(a, len(matches)), 0, 0, listWidth))
	for _, h := range matches {
		fmt.Fprintf(&b, "\n%s\n", paragraph(hazardHead(&h.Hazard), 2, 4, listWidth))
		fmt.Fprintln(&b, paragraph(h.WhatHappens, 4, 4, listWidth))
		if q := h.Question(); q != "" {
			fmt.Fprintln(&b, paragraph(q, 4, 4, listWidth))
		}
		fmt.Fprintln(&b, paragraph("Source: "+h.Citation+" ("+h.Verified+")", 4, 4, listWidth))
	}
	if text := relativesText(relatives); text != "" {
		fmt.Fprintf(&b, "\n%s\n", paragraph(text, 2, 2, listWidth))
	}
	return b.String()
}

// animalTitle is "giant anteater (Myrmecophaga tridactyla)".
func animalTitle(a *species.Animal) string {
	if c := a.CommonName(); c != "" {
		return c + " (" + a.Name + ")"
	}
	return a.Name
}

// sourceText is a citation by its id; what was recalled says so.
func sourceText(id string) string {
	switch id {
	case "":
		return ""
	case "memory":
		return "from memory"
	}
	if citation, ok := species.Sources(id); ok {
		return citation
	}
	return id
}

func adultMassText(a *species.Animal) string {
	if a.AdultHigh == 0 {
		return "not on file: a mass of this animal cannot be judged"
	}
	return massRange(a.AdultLow, a.AdultHigh) + " (" + sourceText(a.AdultBasis) + ")"
}

func massRange(low, high metabolic.Mass) string {
	return metabolic.FormatRange(float64(low), float64(high), func(kg float64) string { return metabolic.FormatMass(metabolic.Mass(kg)) })
}

func bodyTemperatureText(a *species.Animal) string {
	if !a.HasTemperature {
		return ""
	}
	text := metabolic.FormatCelsius(a.BodyTemperature)
	if !a.Endotherm() {
		text += " preferred; a draft needs that of the patient itself"
	}
	return text + " (" + sourceText(a.TemperatureBasis) + ")"
}

func measuredText(a *species.Animal) string {
	m, ok := species.MeasuredRate(a)
	if !ok {
		return "none on file"
	}
	text := metabolic.FormatPower(m.Rate) + " at " + metabolic.FormatMass(m.Mass)
	if m.HasTemperature {
		text += " and " + metabolic.FormatCelsius(m.Temperature)
	}
	text += ", " + m.Kind
	if m.Grade != "" {
		text += ", " + m.Grade
	}
	if m.Flag != "" {
		text += "; marked " + m.Flag + " and not used"
	}
	if m.Notes != "" {
		text += "; " + m.Notes
	}
	return text + ". " + sourceText(m.Source)
}

// relativesText names what is known in relatives of the animal, of which a
// draft warns as well.
func relativesText(matches []species.HazardMatch) string {
	var of []string
	for _, m := range matches {
		drug := m.Drug
		if drug == "" {
			drug = m.DrugClass
		}
		of = append(of, drug+" in "+m.Taxon+" ["+m.ID+"]")
	}
	if len(of) == 0 {
		return ""
	}
	return "Known in relatives, of the same family or order: " + strings.Join(of, ", ") + ". A draft tells of these too."
}

func hazardCountText(a *species.Animal, n int) string {
	const rest = "`tayra species --hazards` lists what the table covers; a missing entry is no evidence of safety."
	switch n {
	case 0:
		return "Hazards on file: none. " + rest
	case 1:
		return "Hazards on file: 1. " + rest
	}
	return fmt.Sprintf("Hazards on file: %d. %s", n, rest)
}

// hazardHead is "contraindicated: ivermectin (avermectin), any route, order Testudines [h001]".
func hazardHead(h *species.Hazard) string {
	drug := h.DrugClass
	if h.Drug != "" {
		drug = h.Drug + " (" + h.DrugClass + ")"
	}
	if also := append(append([]string{}, h.AlsoDrugs...), h.AlsoClasses...); len(also) > 0 {
		drug += ", also " + strings.Join(also, ", ")
	}
	route := h.Route + " route"
	if h.Route == "any" {
		route = "any route"
	}
	taxon := h.Rank + " " + h.Taxon
	if h.Rank == "any" {
		taxon = "any animal"
	}
	if h.Operator {
		taxon = "danger to whoever handles it"
	}
	return h.Severity + ": " + drug + ", " + route + ", " + taxon + " [" + h.ID + "]"
}

// hazardCoverageText lists what the hazard table is about.
func hazardCoverageText() string {
	c := species.HazardCoverage()
	var b strings.Builder
	fmt.Fprintln(&b, paragraph(fmt.Sprintf("The table of hazards has %d rows: %d contraindicated, %d reduced margin, %d caution. "+
		"The citations of %d were not read and are given from memory. It covers the drugs, classes and animals below and nothing else. "+
		"A missing entry is no evidence of safety: it means that nobody has written it down here.",
		c.Rows, c.Severity["contraindicated"], c.Severity["reduced margin"], c.Severity["caution"], c.Memory), 0, 0, listWidth))
	list := func(heading string, words []string) {
		fmt.Fprintf(&b, "\n%s (%d)\n", heading, len(words))
		held := make([]string, len(words))
		for i, w := range words { // a name of two words stays on one line
			held[i] = strings.ReplaceAll(w, " ", "\u00a0")
		}
		text := paragraph(strings.Join(held, ", "), 2, 2, listWidth)
		fmt.Fprintln(&b, strings.ReplaceAll(text, "\u00a0", " "))
	}
	list("Drugs", c.Drugs)
	list("Classes of drugs", c.Classes)
	list("Animals", c.Taxa)
	return b.String()
}

// speciesJSON is an animal in the listing's record.
type speciesJSON struct {
	Name         string         `json:"name"`
	CommonNames  []string       `json:"common_names"`
	Class        string         `json:"class"`
	Order        string         `json:"order"`
	Family       string         `json:"family"`
	Group        string         `json:"group"`
	AdultMassKg  *[2]float64    `json:"adult_mass_kg"` // null when no range is on file
	TemperatureC *float64       `json:"temperature_c"`
	Measured     *measuredJSON  `json:"measured"`
	Sources      []string       `json:"sources"`
	MatchedAs    string         `json:"matched_as,omitempty"`
	Hazards      []hazardRecord `json:"hazards,omitzero"` // of one animal alone
}

type measuredJSON struct {
	Watt         float64  `json:"watt"`
	MassKg       float64  `json:"mass_kg"`
	TemperatureC *float64 `json:"temperature_c"`
	Kind         string   `json:"kind"`
	Grade        string   `json:"grade"`
	Flag         string   `json:"flag,omitempty"`
	Source       string   `json:"source"`
}

type hazardRecord struct {
	ID       string `json:"id"`
	Relation string `json:"relation"` // "direct", or "relative": known in one of the same family or order
	Severity string `json:"severity"`
	Drug     string `json:"drug,omitempty"`
	Class    string `json:"drug_class"`
	Route    string `json:"route"`
	Taxon    string `json:"taxon"`
	Text     string `json:"text"`
	Source   string `json:"source"`
	Verified string `json:"verified"`
}

func speciesRecord(animals []*species.Animal, single bool) any {
	out := struct {
		Species []speciesJSON `json:"species"`
	}{Species: []speciesJSON{}}
	for _, a := range animals {
		s := speciesJSON{
			Name: a.Name, CommonNames: append([]string{}, a.CommonNames...), Class: a.Class, Order: a.Order, Family: a.Family,
			Group: a.Group, MatchedAs: a.MatchedAs, Sources: []string{},
		}
		ids := []string{}
		if a.AdultHigh > 0 {
			s.AdultMassKg = &[2]float64{float64(a.AdultLow), float64(a.AdultHigh)}
			ids = append(ids, a.AdultBasis)
		}
		if a.HasTemperature {
			t := float64(a.BodyTemperature)
			s.TemperatureC = &t
			ids = append(ids, a.TemperatureBasis)
		}
		if m, ok := species.MeasuredRate(a); ok {
			s.Measured = &measuredJSON{Watt: float64(m.Rate), MassKg: float64(m.Mass), Kind: m.Kind, Grade: m.Grade, Flag: m.Flag, Source: sourceText(m.Source)}
			if m.HasTemperature {
				t := float64(m.Temperature)
				s.Measured.TemperatureC = &t
			}
			ids = append(ids, m.Source)
		}
		seen := map[string]bool{}
		for _, id := range ids {
			if id != "" && !seen[id] {
				seen[id] = true
				s.Sources = append(s.Sources, sourceText(id))
			}
		}
		if single {
			s.Hazards = hazardRecords(a)
		}
		out.Species = append(out.Species, s)
	}
	return out
}

func hazardRecords(a *species.Animal) []hazardRecord {
	out := []hazardRecord{}
	for _, h := range species.HazardsOf(a) {
		out = append(out, hazardRecord{ID: h.ID, Relation: h.Relation, Severity: h.Severity, Drug: h.Drug, Class: h.DrugClass, Route: h.Route,
			Taxon: h.Taxon, Text: h.WhatHappens, Source: h.Citation, Verified: h.Verified})
	}
	return out
}

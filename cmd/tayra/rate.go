package main

import (
	"errors"
	"fmt"
	"strconv"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tayra/dose"
	"tayra/metabolic"
	"tayra/reports"
	"tayra/species"
)

func rateCommand() *cobra.Command {
	var listing listingFlags
	var temperature, q10 dose.Entry
	var plot string
	cmd := &cobra.Command{
		Use:   "rate SPECIES MASS",
		Short: "Show an animal's metabolic rate by every basis",
		Long: `Show what an animal burns at a body mass, by every basis that it has and every
published line of its group, and why the other bases are not there. SPECIES and
MASS are one argument each. A reptile or amphibian needs its body temperature.`,
		Example: `tayra rate "giant anteater" "41 kg"
tayra rate "green iguana" 2.5kg --temperature 30C
tayra rate "blue-and-yellow macaw" "1.1 kg" --plot rates.svg`,
		Annotations:       map[string]string{"usage": "tayra rate SPECIES MASS [flags]"},
		Args:              arguments("SPECIES", "MASS"),
		ValidArgsFunction: completeFirst(completeSpecies),
		RunE: func(cmd *cobra.Command, args []string) error {
			r, err := rates(args[0], args[1], temperature, q10)
			if err != nil {
				return err
			}
			if r.animal.Endotherm() && (temperature.Given() || q10.Given()) {
				what := "--temperature"
				if !temperature.Given() {
					what = "--q10"
				}
				warn(cmd.ErrOrStderr(), what, "changes nothing: the rate of a "+shortName(r.animal)+" does not follow its body temperature")
			}
			var files []output
			if plot != "" {
				format, err := reports.FigureFormat(plot)
				if err != nil {
					return plotFault(err)
				}
				data, err := reports.RateFigure(r.animal, r.mass.Middle, r.temperature, r.q10, format)
				if err != nil {
					return &usageError{"--plot", err.Error(), ""}
				}
				files = append(files, output{flag: "--plot", path: plot, data: data})
			}
			return listing.write(cmd, r.record, r.text(), files...)
		},
	}
	inGroup(cmd, "Flags", func(flags *pflag.FlagSet) {
		flags.Var(&entryFlag{&temperature, "TEMP"}, "temperature", "body temperature, such as 30C or \"86 °F\"; needed for reptiles and amphibians")
		flags.Var(&entryFlag{&q10, "NUMBER"}, "q10", "how the rate rises with 10 °C, from 1.5 to 4; 2.5 unless given")
		flags.Var(&onceFlag{text: &plot, name: "FILE"}, "plot", "draw the measured animals of the class and the lines; the name ends in .svg, .png or .pdf")
		listing.define(flags)
	})
	return cmd
}

// ratesOf is an animal with all its rates.
type ratesOf struct {
	animal         *species.Animal
	mass           metabolic.BodyMass
	temperature    metabolic.Celsius
	hasTemperature bool
	q10            float64
	have           []dose.RateLine
	missing        []dose.UnavailableLine
}

func rates(name, massText string, temperature, q10 dose.Entry) (*ratesOf, error) {
	r := &ratesOf{q10: metabolic.Q10Default}
	var err error
	if r.animal, err = species.Find(name); err != nil {
		return nil, animalFault("SPECIES", err)
	}
	if r.mass, err = metabolic.ParseBodyMass(massText); err != nil {
		return nil, quantityFault("MASS", err)
	}
	if temperature.Given() {
		if r.temperature, err = metabolic.ParseTemperature(temperature.Text); err != nil {
			return nil, quantityFault("--temperature", err)
		}
		r.hasTemperature = true
	}
	if q10.Given() {
		if r.q10, err = strconv.ParseFloat(strings.TrimSpace(q10.Text), 64); err != nil {
			return nil, &usageError{"--q10", strconv.Quote(q10.Text) + " is no plain number", "write it like 2.5"}
		}
		if err := metabolic.CheckQ10(r.q10); err != nil {
			return nil, &usageError{"--q10", err.Error(), "published values run from 2.4 to 2.65, the default is 2.5"}
		}
	}
	r.have, r.missing, err = dose.Rates(r.animal, r.mass.Middle, r.temperature, r.hasTemperature, r.q10)
	if err != nil {
		return nil, flagErrors(err, func(field string) string {
			if field == "mass" {
				return "MASS"
			}
			return "--" + field
		})
	}
	return r, nil
}

// quantityFault says under the name of an argument or flag what a quantity
// lacks.
func quantityFault(what string, err error) error {
	var q *metabolic.QuantityError
	if errors.As(err, &q) {
		return &usageError{what, q.Problem, q.Remedy}
	}
	return &usageError{what, err.Error(), ""}
}

func shortName(a *species.Animal) string {
	if c := a.CommonName(); c != "" {
		return c
	}
	return a.Name
}

func (r *ratesOf) text() string {
	var b strings.Builder
	title := animalTitle(r.animal) + ", " + metabolic.FormatBodyMass(r.mass)
	if !r.animal.Endotherm() {
		title += ", at " + metabolic.FormatCelsius(r.temperature) + ", Q10 " + metabolic.Significant(r.q10, 3)
	}
	fmt.Fprintln(&b, paragraph(title, 0, 2, listWidth))
	if r.animal.MatchedAs != "" {
		fmt.Fprintln(&b, paragraph(r.animal.MatchedAs, 0, 0, listWidth))
	}
	fmt.Fprintln(&b, paragraph(r.animal.Group+", "+r.animal.Order+", "+r.animal.Family, 0, 2, listWidth))
	fmt.Fprintln(&b, paragraph("adult mass: "+adultMassText(r.animal), 0, 2, listWidth))
	b.WriteByte('\n')

	var drafted, others []dose.RateLine
	for _, l := range r.have {
		if l.Drafted {
			drafted = append(drafted, l)
		} else {
			others = append(others, l)
		}
	}
	b.WriteString(rateTable("BASIS", drafted, func(l *dose.RateLine) string { return l.Basis }))
	for _, m := range r.missing {
		fmt.Fprintln(&b, paragraph(m.Basis+": not available: "+m.Why, 0, 2, listWidth))
	}
	fmt.Fprintf(&b, "\n%s\n", paragraph("SD LN is the standard deviation of ln(a species' own rate/this rate): two species in three lie within e to that power, up or down.", 0, 0, listWidth))
	b.WriteByte('\n')
	for i := range drafted {
		fmt.Fprintln(&b, paragraph(rateSourceText(&drafted[i]), 0, 2, listWidth))
	}
	if len(others) > 0 {
		fmt.Fprintf(&b, "\n%s\n\n", paragraph("Other published lines for a "+r.animal.Group+"; by those marked * no dose is scaled. `tayra equations ID` gives the source of a line.", 0, 0, listWidth))
		b.WriteString(rateTable("ID", others, func(l *dose.RateLine) string { return l.ID }))
	}
	return b.String()
}

func rateTable(head string, lines []dose.RateLine, name func(*dose.RateLine) string) string {
	columns := []column{{head: head}, {head: "KIND"}, {"KCAL/DAY", true}, {"W", true}, {"KJ/DAY", true}, {"ML O2/H", true}, {"SD LN", true}}
	var rows [][]string
	for i := range lines {
		l := &lines[i]
		sd := ""
		if l.SDln != nil {
			sd = metabolic.Significant(*l.SDln, 3)
		}
		kind := l.Kind
		if l.DisplayOnly {
			kind += "*"
		}
		rows = append(rows, []string{name(l), kind, figure(l.KcalPerDay), figure(l.Watt), figure(l.KJPerDay), figure(l.MLO2PerHour), sd})
	}
	return table(columns, rows, 0)
}

// figure prints a rate as everywhere else: three figures.
func figure(x float64) string { return metabolic.Significant(x, 3) }

// rateSourceText says where a rate comes from and how far it reaches.
func rateSourceText(l *dose.RateLine) string {
	name := l.Basis
	if l.ID != "" && l.Basis == dose.BasisEquation.String() {
		name += " " + l.ID
	}
	var parts []string
	add := func(s string) {
		if s != "" {
			parts = append(parts, s)
		}
	}
	add(l.Formula)
	add(l.Remark)
	switch {
	case l.Basis == dose.BasisRelatives.String():
	case l.SDAssumed:
		add("scatter assumed: too few measured species")
	case l.Species > 0:
		add("scatter over " + strconv.Itoa(l.Species) + " measured species")
	}
	if l.MassHighKg > 0 {
		where := "masses behind it: " + massRange(metabolic.Mass(l.MassLowKg), metabolic.Mass(l.MassHighKg))
		if l.OutsideData {
			where += ", THIS MASS IS OUTSIDE THEM"
		}
		add(where)
	}
	if l.LowConfidence {
		add("low confidence")
	}
	add(l.Source)
	return name + ": " + strings.Join(parts, "; ")
}

// ratesJSON is the record of `tayra rate`.
type ratesJSON struct {
	Species      string                 `json:"species"`
	CommonName   string                 `json:"common_name"`
	MassKg       float64                `json:"mass_kg"`
	TemperatureC *float64               `json:"temperature_c"`
	Q10          *float64               `json:"q10"`
	Rates        []dose.RateLine        `json:"rates"`
	Unavailable  []dose.UnavailableLine `json:"unavailable"`
}

func (r *ratesOf) record() any {
	out := ratesJSON{
		Species: r.animal.Name, CommonName: r.animal.CommonName(), MassKg: float64(r.mass.Middle),
		Rates: r.have, Unavailable: r.missing,
	}
	if !r.animal.Endotherm() {
		t, q := float64(r.temperature), r.q10
		out.TemperatureC, out.Q10 = &t, &q
	}
	if out.Rates == nil {
		out.Rates = []dose.RateLine{}
	}
	if out.Unavailable == nil {
		out.Unavailable = []dose.UnavailableLine{}
	}
	return out
}

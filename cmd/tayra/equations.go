package main

import (
	"fmt"
	"strconv"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tayra/metabolic"
)

func equationsCommand() *cobra.Command {
	var listing listingFlags
	cmd := &cobra.Command{
		Use:   "equations [WORDS]",
		Short: "List the published lines of metabolic rate on body mass",
		Long: `List the published lines of metabolic rate on body mass: in the units in which
each was published and at 1 kg in kcal/day, with its masses, its species and its
source. With words, list those whose id, animals or citation have all of them.`,
		Example: `tayra equations
tayra equations kleiber1947
tayra equations marsupial
tayra equations lizard --json lines.json`,
		Annotations: map[string]string{"usage": "tayra equations [WORDS] [flags]"},
		Args:        cobra.ArbitraryArgs,
		ValidArgsFunction: func(*cobra.Command, []string, string) ([]cobra.Completion, cobra.ShellCompDirective) {
			return equationIDs(), cobra.ShellCompDirectiveNoFileComp
		},
		RunE: func(cmd *cobra.Command, args []string) error {
			words := strings.Join(args, " ")
			lines := findEquations(words)
			if len(lines) == 0 {
				return &usageError{"WORDS", "no published line has " + strconv.Quote(words), "`tayra equations` lists them all"}
			}
			return listing.write(cmd, func() any { return equationsRecord(lines) }, equationsText(lines))
		},
	}
	inGroup(cmd, "Flags", func(flags *pflag.FlagSet) { listing.define(flags) })
	return cmd
}

func equationIDs() []cobra.Completion {
	var out []cobra.Completion
	for _, e := range metabolic.Equations() {
		out = append(out, cobra.CompletionWithDesc(e.ID, e.Animals))
	}
	return out
}

// findEquations are the lines that have every word, case aside; an id alone is
// that line and no other.
func findEquations(words string) []*metabolic.Equation {
	if e, ok := metabolic.FindEquation(strings.ToLower(strings.TrimSpace(words))); ok {
		return []*metabolic.Equation{e}
	}
	var out []*metabolic.Equation
	for _, e := range metabolic.Equations() {
		text := strings.ToLower(strings.Join(append([]string{e.ID, e.Animals, e.Kind, e.Citation}, e.AppliesTo...), " "))
		all := true
		for _, w := range strings.Fields(strings.ToLower(words)) {
			all = all && strings.Contains(text, w)
		}
		if all {
			out = append(out, e)
		}
	}
	return out
}

// oneKilogram is a line's rate at 1 kg, and the body temperature of it for an
// ectotherm: the line's own, or 30 °C for a line with a term for it.
func oneKilogram(e *metabolic.Equation) (p metabolic.Power, at metabolic.Celsius, err error) {
	at = 30
	if e.HasT0 {
		at = e.T0
	}
	p, err = e.Rate(1, at, metabolic.Q10Default)
	return p, at, err
}

func equationsText(lines []*metabolic.Equation) string {
	var b strings.Builder
	for i, e := range lines {
		if i > 0 {
			b.WriteByte('\n')
		}
		head := e.ID + ": " + e.Animals + ", " + e.Kind
		if len(e.DefaultFor) > 0 {
			head += "; the default for " + strings.Join(e.DefaultFor, ", ")
		}
		fmt.Fprintln(&b, paragraph(head, 0, 2, listWidth))
		say := func(s string) {
			if s != "" {
				fmt.Fprintln(&b, paragraph(s, 2, 4, listWidth))
			}
		}
		say(e.Formula())
		if p, at, err := oneKilogram(e); err == nil {
			s := "at 1 kg: " + metabolic.FormatPower(p)
			if e.NeedsTemperature() {
				s += " at " + metabolic.FormatCelsius(at)
			}
			say(s)
		}
		say(rangeText(e))
		if !e.Usable() {
			say("for display only: no dose is scaled by it")
		}
		if e.LowConfidence {
			say("low confidence")
		}
		say("source: " + e.Citation)
		say("figures: " + e.Verified)
		if e.Note != "" {
			say("note: " + e.Note)
		}
	}
	return b.String()
}

// rangeText says over what a line was fitted.
func rangeText(e *metabolic.Equation) string {
	parts := []string{e.Level}
	if e.MassHigh > 0 || e.MassLow > 0 {
		switch {
		case e.MassHigh == 0:
			parts = append(parts, "masses from "+metabolic.FormatMass(e.MassLow))
		default:
			parts = append(parts, "masses "+massRange(e.MassLow, e.MassHigh))
		}
	} else {
		parts = append(parts, "masses not on file")
	}
	if e.THigh > 0 {
		parts = append(parts, metabolic.Significant(float64(e.TLow), 3)+" to "+metabolic.FormatCelsius(e.THigh))
	}
	if e.N > 0 {
		what := "species"
		if e.Level == metabolic.LevelIntraspecific {
			what = "animals"
		}
		parts = append(parts, metabolic.Significant(float64(e.N), 6)+" "+what)
	}
	if e.ResidualSDln > 0 {
		parts = append(parts, "residual sd of ln "+metabolic.Significant(e.ResidualSDln, 3))
	}
	return strings.Join(parts, ", ")
}

// equationJSON is a published line in the record; a, b and c are in the line's
// own units and form.
type equationJSON struct {
	ID              string      `json:"id"`
	Animals         string      `json:"animals"`
	AppliesTo       []string    `json:"applies_to"`
	DefaultFor      []string    `json:"default_for"`
	Kind            string      `json:"kind"`
	Form            string      `json:"form"`
	Formula         string      `json:"formula"`
	A               float64     `json:"a"`
	B               float64     `json:"b"`
	C               float64     `json:"c"`
	MassUnit        string      `json:"mass_unit"`
	RateUnit        string      `json:"rate_unit"`
	TemperatureC    *float64    `json:"temperature_c"`
	MassKg          *[2]float64 `json:"mass_kg"` // null where not on file; 0 for an open end
	N               int         `json:"n"`
	ResidualSDln    float64     `json:"residual_sd_ln"`
	Level           string      `json:"level"`
	Usable          bool        `json:"usable"`
	LowConfidence   bool        `json:"low_confidence"`
	KcalPerDayAt1Kg float64     `json:"kcal_per_day_at_1_kg"`
	Source          string      `json:"source"`
	Verified        string      `json:"verified"`
	Note            string      `json:"note,omitempty"`
}

func equationsRecord(lines []*metabolic.Equation) any {
	out := struct {
		Equations []equationJSON `json:"equations"`
	}{}
	for _, e := range lines {
		j := equationJSON{
			ID: e.ID, Animals: e.Animals, AppliesTo: append([]string{}, e.AppliesTo...), DefaultFor: append([]string{}, e.DefaultFor...),
			Kind: e.Kind, Form: e.Form, Formula: e.Formula(), A: e.A, B: e.B, C: e.C, MassUnit: e.MassUnit, RateUnit: e.RateUnit,
			N: e.N, ResidualSDln: e.ResidualSDln, Level: e.Level, Usable: e.Usable(), LowConfidence: e.LowConfidence,
			Source: e.Citation, Verified: e.Verified, Note: e.Note,
		}
		if e.MassLow > 0 || e.MassHigh > 0 {
			j.MassKg = &[2]float64{float64(e.MassLow), float64(e.MassHigh)}
		}
		if p, at, err := oneKilogram(e); err == nil {
			j.KcalPerDayAt1Kg = p.KcalPerDay()
			if e.NeedsTemperature() {
				t := float64(at)
				j.TemperatureC = &t
			}
		}
		out.Equations = append(out.Equations, j)
	}
	return out
}

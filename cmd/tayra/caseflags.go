package main

import (
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tayra/dose"
)

// caseFlag is one entry of a case that may be typed as a flag.
type caseFlag struct {
	name  string
	value string // how the help calls the value; "" for a flag that stands alone
	field string // the entry's place in the case file, by which errors name it
	usage string
	entry *dose.Entry
}

// caseByFlags is a case as it is typed on the command line: one model, and the
// entries that most cases have. What a case needs beyond them (several models,
// published doses, overrides with their reasons) is written in a file.
type caseByFlags struct {
	in     *dose.CaseInput
	flags  []caseFlag
	groups []caseFlagGroup
}

type caseFlagGroup struct {
	heading string
	flags   []caseFlag
}

const dateField = "date"

func newCaseByFlags() *caseByFlags {
	in := &dose.CaseInput{Models: make([]dose.ModelInput, 1)}
	p, d, m, how, prod := &in.Patient, &in.Drug, &in.Models[0], &in.Method, &in.Product
	c := &caseByFlags{in: in, groups: []caseFlagGroup{
		{"The case", []caseFlag{
			{"case", "NUMBER", "case", "your own case number", &in.Case},
			{"date", "DATE", dateField, "the date of the worksheet, such as 2026-11-30; needed here or in the case file", &in.Date},
			{"prepared-by", "NAME", "prepared_by", "who prepares the worksheet", &in.PreparedBy},
		}},
		{"The animal", []caseFlag{
			{"species", "NAME", "patient.species", "common or scientific name", &p.Species},
			{"mass", "MASS", "patient.mass", "weighed, \"41 kg\"; or estimated, \"36-46 kg\"", &p.Mass},
			{"temperature", "TEMP", "patient.temperature", "body temperature, such as 30C; needed for reptiles and amphibians", &p.Temperature},
			{"name", "NAME", "patient.name", "what the animal is called", &p.Name},
			{"stage", "STAGE", "patient.stage", "adult, juvenile or neonate", &p.Stage},
			{"condition", "WORDS", "patient.condition", "dehydrated, renal, hepatic, pregnant, lactating, torpid, obese, gravid; several with commas", nil},
			{"food-producing", "", "patient.food_producing", "meat, milk or eggs may be eaten", &p.FoodProducing},
		}},
		{"The drug", []caseFlag{
			{"drug", "NAME", "drug.name", "the drug; hazards are looked up by it", &d.Name},
			{"class", "NAME", "drug.class", "its class, such as penicillin", &d.Class},
			{"elimination", "WAY", "drug.elimination", "renal, hepatic, mixed, biliary or unknown", &d.Elimination},
			{"extraction", "DEGREE", "drug.extraction", "by the liver: low, medium or high", &d.Extraction},
			{"activity", "KIND", "drug.activity", "what its effect follows: time, concentration or unknown", &d.Activity},
			{"formulation", "KIND", "drug.formulation", "solution or depot", &d.Formulation},
			{"margin", "WIDTH", "drug.margin", "between the dose that works and the one that harms: wide, narrow or unknown", &d.Margin},
			{"controlled", "", "drug.controlled", "a controlled substance", &d.Controlled},
		}},
		{"The known dose", []caseFlag{
			{"model-species", "NAME", "models[0].species", "the animal in which the dose is known", &m.Species},
			{"model-mass", "MASS", "models[0].mass", "its body mass", &m.Mass},
			{"model-temperature", "TEMP", "models[0].temperature", "its body temperature; needed for reptiles and amphibians", &m.Temperature},
			{"dose", "DOSE", "models[0].dose", "per administration: \"10 mg/kg\", \"10-15 mg/kg\", \"2 mg/kg/h\"", &m.Dose},
			{"interval", "INTERVAL", "models[0].interval", "q12h, \"12 h\", once or infusion", &m.Interval},
			{"loading-dose", "DOSE", "models[0].loading_dose", "a first dose that fills the body", &m.LoadingDose},
			{"route", "ROUTE", "models[0].route", "such as SC, IM, IV or PO", &m.Route},
			{"source", "TEXT", "models[0].source", "where the dose is written; needed", &m.Source},
			{"half-life", "TIME", "models[0].half_life", "of elimination, in the model; draws the curves", &m.HalfLife},
			{"volume", "VOLUME", "models[0].volume", "of distribution, such as \"0.3 L/kg\"", &m.Volume},
		}},
		{"The method", []caseFlag{
			{"basis", "BASIS", "method.basis", "of the metabolic rate: group, equation, measured or relatives", &how.Basis},
			{"equation", "ID", "method.equation", "with --basis equation: a line that `tayra equations` lists", &how.Equation},
			{"plan", "PLAN", "method.plan", "clock, same-interval, same-dose or both-adjusted", &how.Plan},
			{"q10", "NUMBER", "method.q10", "how the rate rises with 10 °C, reptiles and amphibians; 2.5 unless given", &how.Q10},
		}},
		{"The product", []caseFlag{
			{"strength", "STRENGTH", "product.strength", "such as \"50 mg/mL\"", &prod.Strength},
			{"step", "VOLUME", "product.step", "the smallest step of the device, such as \"0.1 mL\"", &prod.Step},
			{"largest-per-site", "VOLUME", "product.largest_per_site", "the most to put in one place", &prod.LargestPerSite},
			{"days", "NUMBER", "product.days", "length of the course", &prod.Days},
		}},
	}}
	for _, g := range c.groups {
		c.flags = append(c.flags, g.flags...)
	}
	return c
}

// define adds the flags to a command.
func (c *caseByFlags) define(cmd *cobra.Command) {
	for _, g := range c.groups {
		inGroup(cmd, g.heading, func(flags *pflag.FlagSet) {
			for _, f := range g.flags {
				var v pflag.Value = &entriesFlag{&c.in.Patient.Condition, f.value}
				if f.entry != nil {
					v = &entryFlag{f.entry, f.value}
				}
				// Backquotes would name the value a second time.
				flag := flags.VarPF(v, f.name, "", strings.ReplaceAll(f.usage, "`", ""))
				if f.value == "" {
					flag.NoOptDefVal = "yes"
				}
			}
		})
	}
	completeWords(cmd, "stage", "adult", "juvenile", "neonate")
	completeWords(cmd, "condition", "dehydrated", "renal", "hepatic", "pregnant", "lactating", "torpid", "obese", "gravid")
	completeWords(cmd, "elimination", "renal", "hepatic", "mixed", "biliary", "unknown")
	completeWords(cmd, "extraction", "low", "medium", "high")
	completeWords(cmd, "activity", "time", "concentration", "unknown")
	completeWords(cmd, "formulation", "solution", "depot")
	completeWords(cmd, "margin", "wide", "narrow", "unknown")
	completeWords(cmd, "interval", "q6h", "q8h", "q12h", "q24h", "once", "infusion")
	completeWords(cmd, "plan", "clock", "same-interval", "same-dose", "both-adjusted")
	completeWords(cmd, "basis", "group", "equation", "measured", "relatives")
	for _, f := range []string{"species", "model-species"} {
		_ = cmd.RegisterFlagCompletionFunc(f, completeSpecies)
	}
	_ = cmd.RegisterFlagCompletionFunc("equation", func(*cobra.Command, []string, string) ([]cobra.Completion, cobra.ShellCompDirective) {
		return equationIDs(), cobra.ShellCompDirectiveNoFileComp
	})
}

// given are the names of the flags that were typed.
func (c *caseByFlags) given(cmd *cobra.Command) []string {
	var names []string
	for _, f := range c.flags {
		if cmd.Flags().Changed(f.name) {
			names = append(names, f.name)
		}
	}
	return names
}

// flagOf gives the flag of a place in the case file.
func (c *caseByFlags) flagOf(field string) string {
	if strings.HasPrefix(field, "patient.condition[") {
		field = "patient.condition"
	}
	for _, f := range c.flags {
		if f.field == field {
			return "--" + f.name
		}
	}
	return ""
}

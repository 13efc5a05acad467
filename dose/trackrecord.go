package dose

// trackRecord is the published record of this kind of scaling. The figures are
// recomputed from the published rows in trackrecord_test.go.
var trackRecord = []string{
	"Among rat, dog and monkey: of 221 clearances predicted from one other species by mass^0.75, 114 fell within 2-fold and 158 within 3-fold of the observed value (195 drugs; nominal masses; Lombardo et al. 2013, citation from memory).",
	"From an animal to man, or back: of 361, 164 fell within 2-fold and 237 within 3-fold (same table).",
	"Across classes: of 30 avian clearances predicted from mammals, 7 fell within 2-fold and 13 within 3-fold of the observed value; geometric mean error 3.6-fold (Hunter et al. 2008).",
	"Of 44 veterinary drugs, the half-life followed body mass in 11 (Riviere et al. 1997).",
}

// statements stand on every worksheet, on every page.
var statements = []string{
	"DRAFT for a licensed veterinarian's judgement. Not a prescription.",
	"Local law on off-label use, controlled drugs and food animals applies.",
}

// short names a record in a few words, for the first page.
func (r record) short() string {
	s := map[string]string{
		"mammals":     "221 pairs among rat, dog and monkey",
		"man":         "361 pairs with man on one side",
		"birds":       "34 pairs of birds",
		"ratite":      "18 pairs of birds, one of them ostrich-like",
		"mammal-bird": "30 published predictions from mammals to birds",
		"ectotherms":  "an assumed spread, since no record is published",
	}[r.name]
	if s == "" {
		s = "an assumed spread, since no record is published"
	}
	if r.kappa != 1 {
		s += ", taken a fifth closer within one order"
	}
	return s
}

// text says where a record comes from.
func (r record) text() (name, text, source string) {
	lombardo := "mammal clearances of 195 drugs, Lombardo et al. 2013 J Clin Pharmacol 53:167-191 (citation from memory), as released with Seal et al. 2024; recomputed"
	hunter := "Hunter et al. 2008 J Zoo Wildl Med 39, as reprinted in Hunter 2010 Handb Exp Pharmacol 199:147; recomputed"
	switch r.name {
	case "mammals":
		return "mammal to mammal", "root mean square ln(predicted/observed) 1.14 over 221 pairs among rat, dog and monkey, raised to 1.25 for species outside that table", lombardo
	case "man":
		return "mammals with man on one side", "root mean square ln(predicted/observed) 1.41 over 361 pairs", lombardo
	case "birds":
		return "bird to bird", "root mean square ln(predicted/observed) 1.22 over 34 pairs of seven drugs, raised to 1.46, the figure between mammals and birds", hunter
	case "ratite":
		return "birds with an ostrich-like bird on one side", "root mean square ln(predicted/observed) 2.70 over 18 pairs of four drugs", hunter
	case "mammal-bird":
		return "between mammals and birds", "root mean square ln(predicted/observed) 1.46 over 30 published predictions from several model species: a lower limit for one", hunter
	case "ectotherms":
		return "among reptiles and amphibians", "1.46, assumed: no published record", "assumed"
	}
	return "between an ectotherm and an endotherm", "2.0, assumed: no published record", "assumed"
}

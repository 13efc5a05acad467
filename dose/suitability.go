package dose

import (
	"slices"

	"tayra/metabolic"
	"tayra/species"
)

// Verdict of a criterion on whether scaling by size is a fair guess.
type verdict uint8

const (
	unknown verdict = iota
	speaksFor
	speaksAgainst
	notApplicable
)

func (v verdict) String() string {
	switch v {
	case speaksFor:
		return "speaks for"
	case speaksAgainst:
		return "speaks against"
	}
	return "unknown"
}

// criterion is one published reason for or against scaling by size.
type criterion struct {
	name     string
	judge    func(*Drug) verdict
	text     [4]string // by verdict
	source   string
	verified string
}

// highBinding is the bound fraction from which protein binding counts against
// scaling: assumed; the sources say "high".
const highBinding = 0.8

// drugCriteria follow Sharma & McNeill 2009, Hu & Hayton 2001 and the works
// named in each row; "memory" says that the row was not checked against them.
var drugCriteria = []criterion{
	{
		name: "elimination",
		judge: func(d *Drug) verdict {
			switch d.Elimination {
			case Renal:
				return speaksFor
			case Biliary:
				return speaksAgainst
			}
			return unknown
		},
		text: [4]string{
			unknown:       "Not renal by filtration alone, or not said: whether such a drug scales depends on enzymes and transporters.",
			speaksFor:     "Mostly renal: clearance by filtration follows kidney function, whose exponent (0.65 over 21 drugs) is near the one used. In the record of pairs, though, renal drugs were predicted no better.",
			speaksAgainst: "Biliary: large, amphiphilic or conjugated drugs are named among those unlikely to scale.",
		},
		source:   "Hu & Hayton 2001 AAPS PharmSci; Sharma & McNeill 2009 Br J Pharmacol",
		verified: "read: abstracts",
	},
	{
		name: "extraction by the liver",
		judge: func(d *Drug) verdict {
			if d.Elimination != Hepatic && d.Elimination != Mixed {
				return notApplicable
			}
			switch d.Extraction {
			case HighExtraction:
				return speaksFor
			case LowExtraction:
				return speaksAgainst
			}
			return unknown
		},
		text: [4]string{
			unknown:       "Extraction not given: flow-limited drugs scale, capacity-limited ones often do not.",
			speaksFor:     "High extraction: clearance follows liver blood flow, which scales.",
			speaksAgainst: "Low extraction: prediction error sits mainly in these drugs (antipyrine in man is about 8-fold below the line of ten mammals).",
		},
		source:   "Boxenbaum 1980 J Pharmacokinet Biopharm; Huh et al. 2011 Xenobiotica",
		verified: "read: abstracts",
	},
	{
		name: "protein binding",
		judge: func(d *Drug) verdict {
			switch {
			case !d.HasBinding:
				return unknown
			case d.ProteinBinding >= highBinding:
				return speaksAgainst
			}
			return speaksFor
		},
		text: [4]string{
			unknown:       "Binding not given: where it differs between species, total clearance mixes binding with metabolism.",
			speaksFor:     "Binding below 80 % in the species named: less of the difference between species can hide in it.",
			speaksAgainst: "Highly bound: a small difference in the free fraction between species moves clearance by a large factor.",
		},
		source:   "Sharma & McNeill 2009 Br J Pharmacol; Feng et al. 2000; Riond & Riviere 1990; the limit of 80 % is assumed",
		verified: "read: abstracts",
	},
	{
		name:  "active secretion",
		judge: func(d *Drug) verdict { return answerAgainst(d.ActiveSecretion) },
		text: [4]string{
			unknown:       "Not said: transporters of kidney and liver differ between species.",
			speaksFor:     "No active secretion: filtration and diffusion follow size more closely than transporters do.",
			speaksAgainst: "Actively secreted: transporters differ between species and can outweigh size.",
		},
		source:   "Sharma & McNeill 2009 Br J Pharmacol",
		verified: "read: abstract",
	},
	{
		name:  "enterohepatic recycling",
		judge: func(d *Drug) verdict { return answerAgainst(d.Recycling) },
		text: [4]string{
			unknown:       "Not said.",
			speaksFor:     "No recycling through the gut.",
			speaksAgainst: "Recycled through the gut: phenylbutazone clearance differs 4-fold between African and Asian elephants of one size.",
		},
		source:   "Bechert & Christensen 2007 J Zoo Wildl Med",
		verified: "read: abstract",
	},
	{
		name:  "saturable kinetics",
		judge: func(d *Drug) verdict { return answerAgainst(d.Saturable) },
		text: [4]string{
			unknown:       "Not said: one exponent cannot hold for a clearance that moves with dose.",
			speaksFor:     "Linear in the dose range.",
			speaksAgainst: "Saturable in the dose range: one exponent cannot hold for a clearance that moves with dose.",
		},
		source:   "general pharmacokinetics",
		verified: "memory",
	},
	{
		name: "margin",
		judge: func(d *Drug) verdict {
			switch d.Margin {
			case Wide:
				return speaksFor
			case Narrow:
				return speaksAgainst
			}
			return unknown
		},
		text: [4]string{
			unknown:       "Margin not known: assume it may be narrow.",
			speaksFor:     "Wide margin: an error of the size in the record is less likely to harm.",
			speaksAgainst: "Narrow margin: the record's error alone can harm.",
		},
		source:   "Houben, veterinary review, Ghent",
		verified: "read: summary",
	},
}

func answerAgainst(a Answer) verdict {
	switch a {
	case Yes:
		return speaksAgainst
	case No:
		return speaksFor
	}
	return unknown
}

// suitabilityAgainst counts the criteria that speak against scaling; margin
// has a stop of its own and is left out.
func suitabilityAgainst(d *Drug) int {
	n := 0
	for i := range drugCriteria {
		if drugCriteria[i].name != "margin" && drugCriteria[i].judge(d) == speaksAgainst {
			n++
		}
	}
	return n
}

// drugFindings are what the literature says of single drugs and classes.
var drugFindings = []struct {
	name             string
	drugs            []string // under their names in the lists of package species
	classes          []string
	birds            bool // the finding is about birds: it counts where both animals are
	verdict          verdict
	text             string
	source, verified string
}{
	{
		name:    "this drug",
		drugs:   []string{"tetracycline", "oxytetracycline", "chlortetracycline", "erythromycin", "diazepam", "prednisolone", "cefapirin", "ampicillin", "gentamicin", "apramycin", "carbenicillin"},
		verdict: speaksFor,
		text:    "Among the 11 of 44 veterinary drugs whose half-life did follow body mass across species.",
		source:  "Riviere et al. 1997 J Vet Pharmacol Ther", verified: "read: catalogue entry",
	},
	{
		name: "this drug in birds", birds: true, verdict: speaksAgainst,
		drugs:  []string{"sulfadimidine", "tobramycin", "apramycin"},
		text:   "Its exponents across birds lie away from theory, where other antibacterials lie near it.",
		source: "Lashev & Haritova 2012", verified: "read: summary",
	},
	{
		name: "this drug in birds", birds: true, verdict: speaksAgainst,
		drugs: []string{"pefloxacin", "doxycycline", "trimethoprim"}, classes: []string{"penicillin"},
		text:   "Its half-life across birds is nearly independent of mass: do not stretch the interval by size.",
		source: "Lashev & Haritova 2012", verified: "read: summary",
	},
	{
		name: "fluoroquinolones", verdict: unknown, classes: []string{"fluoroquinolone"},
		text:   "Mixed: over mammals and birds marbofloxacin was predicted best, enrofloxacin and ciprofloxacin worst; over 17 mammals the clearance of enrofloxacin followed mass^0.80 and its half-life did not follow mass.",
		source: "Haritova & Lashev 2009; Hatt 2015", verified: "read: summaries",
	},
}

// suitability is the table of the worksheet: the drug's criteria, then those
// of the pair of animals.
func suitability(c *Case, from int) []Criterion {
	var out []Criterion
	for i := range drugCriteria {
		k := &drugCriteria[i]
		if v := k.judge(&c.Drug); v != notApplicable {
			out = append(out, Criterion{Name: k.name, Verdict: v.String(), Text: k.text[v], Source: k.source, Verified: k.verified})
		}
	}
	a, m := c.Patient.Animal, &c.Models[from]
	b := m.Animal
	add := func(name string, v verdict, text, source, verified string) {
		out = append(out, Criterion{Name: name, Verdict: v.String(), Text: text, Source: source, Verified: verified})
	}
	traits := traitsOf(&c.Drug)
	target := func(v verdict, text string) {
		add("target of the drug", v, text, "Sharma & McNeill 2009 Br J Pharmacol", "read: abstract; classes from memory")
	}
	switch {
	case traits.effect != "":
		target(speaksAgainst, capital(traits.what)+": where receptors differ between species, an equal exposure is not an equal effect.")
	case traits.antibiotic:
		target(speaksFor, "An antibacterial: its target is the microbe, not the animal. Its harms still follow the animal.")
	default:
		target(unknown, "Not known: where the target differs between species, an equal exposure is not an equal effect.")
	}
	for i := range drugFindings {
		f := &drugFindings[i]
		if f.birds && !(a.Bird() && b.Bird()) || !sharesOne(f.drugs, traits.reading.Drugs) && !sharesOne(f.classes, traits.reading.Classes) {
			continue
		}
		add(f.name, f.verdict, f.text, f.source, f.verified)
	}
	switch {
	case a.Endotherm() != b.Endotherm():
		add("the two animals", speaksAgainst, "One warms itself and the other does not: there is no published record of scaling between them.", "Andrews & Pough 1985 Physiol Zool; chelonian pharmacokinetic abstracts", "read: abstracts")
	case !a.Endotherm():
		add("the two animals", speaksAgainst, "Two animals of their surroundings' temperature: no record of scaling drugs between such is known to this program, and the half-life of one drug ran from 5 to 79 h between chelonians.", "Andrews & Pough 1985 Physiol Zool; chelonian pharmacokinetic abstracts", "read: abstracts")
	case a.Class != b.Class:
		add("the two animals", speaksAgainst, "Of two classes: 30 avian clearances predicted from mammals were off by 7 % to 1,385 %, in both directions.", "Hunter et al. 2008 J Zoo Wildl Med, table reprinted in Hunter 2010 Handb Exp Pharmacol 199:147", "read")
	case a.Bird() && (a.Ratite() || b.Ratite()):
		add("the two animals", speaksAgainst, "An ostrich-like bird and another: size does not order them. The half-life of flunixin was 0.17 h in ostriches and 5.45 h in chickens.", "Baert 2002, two papers", "read: abstracts")
	case a.Bird():
		add("the two animals", speaksFor, "Two birds: lines of birds alone fit better than those of birds and mammals together.", "Lashev & Haritova 2012; Houben review", "read: summaries")
	case a.Human() || b.Human():
		add("the two animals", speaksAgainst, "Man is often the outlier among mammals: antipyrine in man is about 8-fold below the line of ten mammals.", "Tang & Mayersohn 2005; Boxenbaum 1980 J Pharmacokinet Biopharm", "read: abstracts")
	case a.Mammal() && a.Order == b.Order:
		add("the two animals", speaksFor, "Mammals of one order: the record is somewhat better within an order.", "Lombardo et al. 2013 J Clin Pharmacol 53:167-191 (citation from memory), recomputed", "computed")
	default:
		add("the two animals", unknown, "Of one class: the record of this class applies as it stands.", "see the track record", "computed")
	}
	if f := max(c.Patient.Mass.Middle, m.Mass.Middle) / metabolic.Mass(1000); f > 1 {
		add("very large animal", speaksAgainst, "Scaling has been called unreliable at the mass of elephants and whales.", "Bechert & Christensen 2007 J Zoo Wildl Med", "read: abstract")
	}
	if c.Patient.Stage != Adult {
		add("age", speaksAgainst, "Young: clearance follows maturity, not mass. That of enrofloxacin, per kg, was 3.4 times as high in mares as in week-old foals.", "Am J Vet Res 2000;61:706; Haines 2000 (357 computed)", "read: abstracts")
	}
	if a.Bird() && (c.Drug.Elimination == Renal || c.Drug.Elimination == Mixed) {
		add("kidney of birds", speaksAgainst, "Filtration in birds follows arterial pressure, so that shock or dehydration moves a renal clearance.", "Hunter 2010 Handb Exp Pharmacol 199 p. 148", "read")
	}
	if oralRoute(m.Route) || oralRoute(c.Drug.Route) {
		if g, h := species.GutType(a), species.GutType(b); g != "" && h != "" && g != h {
			add("gut", speaksAgainst, "Given by mouth between different guts ("+h+", "+g+"): availability by mouth does not scale; scale parenteral data.", "Hunter 2010 Handb Exp Pharmacol 199; Baggot 1992", "read: abstracts")
		}
	}
	return out
}

func sharesOne(a, b []string) bool {
	return slices.ContainsFunc(a, func(s string) bool { return slices.Contains(b, s) })
}

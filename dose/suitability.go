package dose

import (
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
			unknown:       "Route of elimination not known to decide: the record of scaling is no better for renal drugs, but large departures gather among metabolised ones.",
			speaksFor:     "Mostly renal: clearance by filtration follows kidney function, whose exponent (0.65 over 21 drugs) is near the one used.",
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
	switch {
	case a.Endotherm() != b.Endotherm():
		add("the two animals", speaksAgainst, "One warms itself and the other does not: there is no published record of scaling between them.", "Andrews & Pough 1985 Physiol Zool; chelonian pharmacokinetic abstracts", "read: abstracts")
	case a.Class != b.Class:
		add("the two animals", speaksAgainst, "Of two classes: 30 avian clearances predicted from mammals were off by 7 % to 1,385 %, in both directions.", "Hunter et al. 2008 J Zoo Wildl Med, table reprinted in Hunter 2010 Handb Exp Pharmacol 199:147", "read")
	case a.Bird():
		add("the two animals", speaksFor, "Two birds: lines of birds alone fit better than those of birds and mammals together.", "Lashev & Haritova 2012; Houben review", "read: summaries")
	case a.Mammal() && a.Order == b.Order:
		add("the two animals", speaksFor, "Mammals of one order: the record is somewhat better within an order.", "Lombardo et al. 2013 J Clin Pharmacol 53:167-191 (citation from memory), recomputed", "computed")
	default:
		add("the two animals", unknown, "Of one class: the record of this class applies as it stands.", "see the track record", "computed")
	}
	if f := float64(c.Patient.Mass.Middle / metabolic.Mass(1000)); f > 1 {
		add("very large animal", speaksAgainst, "Scaling has been called unreliable at the mass of elephants and whales.", "Bechert & Christensen 2007 J Zoo Wildl Med", "read: abstract")
	}
	if oralRoute(m.Route) || oralRoute(c.Drug.Route) {
		if g, h := species.GutType(a), species.GutType(b); g != "" && h != "" && g != h {
			add("gut", speaksAgainst, "Given by mouth between different guts ("+h+", "+g+"): availability by mouth does not scale; scale parenteral data.", "Hunter 2010 Handb Exp Pharmacol 199; Baggot 1992", "read: abstracts")
		}
	}
	return out
}

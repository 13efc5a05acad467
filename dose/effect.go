package dose

import "strings"

// Drugs whose effect differs between species because receptors do, and not
// because clearance does. Grouped by word of the class; from general
// pharmacology, from memory, no source.
var effectDrivenWords = []struct{ word, what string }{
	{"sedat", "sedative"},
	{"tranquil", "tranquillizer"},
	{"anaesthe", "anaesthetic"},
	{"anesthe", "anaesthetic"},
	{"dissociative", "dissociative anaesthetic"},
	{"barbiturate", "barbiturate"},
	{"benzodiazepine", "benzodiazepine"},
	{"alpha-2", "alpha-2 agonist"},
	{"alpha2", "alpha-2 agonist"},
	{"α2", "alpha-2 agonist"},
	{"opioid", "opioid"},
	{"opiate", "opioid"},
	{"phenothiazine", "phenothiazine"},
	{"butyrophenone", "butyrophenone"},
	{"neuromuscular", "neuromuscular blocker"},
	{"relaxant", "muscle relaxant"},
	{"anticholinergic", "anticholinergic"},
	{"antimuscarinic", "anticholinergic"},
	{"hormone", "hormone"},
	{"insulin", "hormone"},
	{"corticosteroid", "hormone"},
	{"glucocorticoid", "hormone"},
	{"progest", "hormone"},
	{"oestrogen", "hormone"},
	{"estrogen", "hormone"},
	{"gonadotrop", "hormone"},
	{"prostaglandin", "hormone"},
}

// Potent immobilisers: a stop, not a warning. A dose of these is set by the
// receptor and by the danger of recumbency, and a scratch can kill the person
// who handles them.
var immobiliserWords = []string{
	"immobili", "ultra-potent", "ultrapotent", "etorphine", "carfentanil", "carfentanyl", "thiafentanil", "sufentanil",
	"lofentanil", "ohmefentanyl",
}

// drugTraits is what a drug's name and class say of it.
type drugTraits struct {
	effect     Level // of effect-driven; "" if it is not
	what       string
	antibiotic bool
}

func traitsOf(d *Drug) *drugTraits {
	t := &drugTraits{antibiotic: isAntibiotic(d.Class)}
	t.effect, t.what = effectDriven(d.Name, d.Class)
	return t
}

// effectDriven says whether the drug's name or class marks it as driven by
// receptors, at which level, and what it is.
func effectDriven(name, class string) (Level, string) {
	text := strings.ToLower(name + " " + class)
	for _, w := range immobiliserWords {
		if strings.Contains(text, w) {
			return Stop, "potent immobiliser"
		}
	}
	for _, w := range effectDrivenWords {
		if strings.Contains(text, w.word) {
			return Warn, w.what
		}
	}
	return "", ""
}

// antibioticWords mark classes of antibacterial drugs: general pharmacology,
// from memory, no source.
var antibioticWords = []string{
	"penicillin", "cephalosporin", "cefalosporin", "macrolide", "lincosamide", "tetracycline", "quinolone", "aminoglycoside",
	"sulfonamide", "sulphonamide", "antibiotic", "antibacterial", "beta-lactam", "carbapenem", "amphenicol", "pleuromutilin",
	"nitroimidazole", "polymyxin", "glycopeptide",
}

// isAntibiotic says whether the class names an antibacterial.
func isAntibiotic(class string) bool {
	class = strings.ToLower(class)
	for _, w := range antibioticWords {
		if strings.Contains(class, w) {
			return true
		}
	}
	return false
}

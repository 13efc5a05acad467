package dose

import (
	"slices"
	"strings"

	"tayra/species"
)

// Words of a class that mark a drug as one whose effect differs between
// species because receptors do, and not because clearance does. The lists of
// package species know the classes by name, and most drugs of them; these
// words find a class that is described instead ("sedating agent"). From
// general pharmacology, from memory, no source.
var effectDrivenWords = []struct{ word, what string }{
	{"sedat", "sedative"},
	{"tranquil", "tranquillizer"},
	{"anaesthe", "anaesthetic"},
	{"anesthe", "anaesthetic"},
	{"hypnotic", "hypnotic"},
	{"dissociative", "dissociative anaesthetic"},
	{"barbiturate", "barbiturate"},
	{"benzodiazepine", "benzodiazepine"},
	{"alpha2", "alpha-2 agonist"},
	{"α2", "alpha-2 agonist"},
	{"opioid", "opioid"},
	{"opiate", "opioid"},
	{"narcotic", "opioid"},
	{"phenothiazine", "phenothiazine"},
	{"butyrophenone", "butyrophenone"},
	{"neuromuscular", "neuromuscular blocker"},
	{"relaxant", "muscle relaxant"},
	{"anticholinergic", "anticholinergic"},
	{"antimuscarinic", "anticholinergic"},
	{"hormon", "hormone"},
	{"insulin", "hormone"},
	{"corticosteroid", "hormone"},
	{"glucocorticoid", "hormone"},
	{"progest", "hormone"},
	{"oestrogen", "hormone"},
	{"estrogen", "hormone"},
	{"androgen", "hormone"},
	{"gonadotrop", "hormone"},
	{"prostaglandin", "hormone"},
}

// Potent immobilisers: a stop, not a warning. A dose of these is set by the
// receptor and by the danger of recumbency, and a scratch can kill the person
// who handles them.
var immobiliserWords = []string{"immobili", "ultrapotent", "superpotent", "etorphin", "carfentan", "thiafentan"}

// potentImmobiliser is what such a drug is called.
const potentImmobiliser = "potent immobiliser"

// drugTraits is what a drug's name and class say of it.
type drugTraits struct {
	reading    *species.DrugReading
	effect     Level  // of effect-driven; "" if it is not
	what       string // what it is
	meant      string // the name that was meant, where only a near spelling says so
	antibiotic bool
	controlled bool // by the law of many countries
}

func traitsOf(d *Drug) *drugTraits {
	t := &drugTraits{reading: readDrug(d.Name, d.Class)}
	_, t.antibiotic = t.reading.Has(species.Antibacterial)
	t.antibiotic = t.antibiotic || containsAny(joinedWords(d.Class), antibioticWords)
	_, t.controlled = t.reading.Has(species.Controlled)
	t.effectDriven(d)
	return t
}

// effectDriven finds whether the drug's name or class marks it as driven by
// receptors, at which level, and what it is: a potent immobiliser before all,
// then what the name and class are read as, then a near spelling.
func (t *drugTraits) effectDriven(d *Drug) {
	text := joinedWords(d.Name + " " + d.Class)
	immobiliser, found := t.reading.Has(species.Immobiliser)
	if found || containsAny(text, immobiliserWords) {
		t.effect, t.what, t.meant = Stop, potentImmobiliser, immobiliser.Meant
		return
	}
	var what []string
	for _, r := range t.reading.Traits {
		if r.Trait != species.EffectDriven || r.Meant != "" && (r.Meant != t.meant && t.meant != "" || t.meant == "" && len(what) > 0) {
			continue // a near spelling counts only where nothing surer was read
		}
		t.meant = r.Meant
		what = append(what, r.Word)
	}
	if len(what) == 0 {
		for _, w := range effectDrivenWords {
			if containsWord(text, w.word) {
				what = append(what, w.what)
				break
			}
		}
	}
	if len(what) > 0 {
		t.effect, t.what = Warn, strings.Join(what, " and ")
	}
}

// antibioticWords mark a class of antibacterial drugs that is described
// instead of named: general pharmacology, from memory, no source.
var antibioticWords = []string{
	"penicillin", "cephalosporin", "cefalosporin", "macrolide", "lincosamide", "tetracycline", "quinolone", "aminoglycoside",
	"sulfonamide", "sulphonamide", "antibiotic", "antibacterial", "antimicrobial", "betalactam", "carbapenem", "amphenicol", "pleuromutilin",
	"nitroimidazole", "polymyxin", "glycopeptide",
}

// joinedWords is a text in small letters without hyphens and spaces.
func joinedWords(text string) string { return joiner.Replace(strings.ToLower(text)) }

var joiner = strings.NewReplacer("-", "", " ", "", "\u00a0", "", "\u2010", "", "\u2011", "")

// containsAny says whether the text holds one of the words.
func containsAny(text string, words []string) bool {
	return slices.ContainsFunc(words, func(w string) bool { return containsWord(text, w) })
}

// containsWord says whether the text holds a word, but for one that it denies
// ("non-opioid").
func containsWord(text, word string) bool {
	for {
		i := strings.Index(text, word)
		if i < 0 {
			return false
		}
		if !strings.HasSuffix(text[:i], "non") {
			return true
		}
		text = text[i+len(word):]
	}
}

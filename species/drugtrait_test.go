package species

import (
	"slices"
	"strings"
	"testing"
)

// A drug's traits are known by its name, whatever class is given or none.
func TestReadDrugTraits(t *testing.T) {
	for _, tt := range []struct {
		drug, class string
		trait       Trait
		word, meant string
	}{
		{"medetomidine", "", EffectDriven, "alpha-2 agonist", ""},
		{"medetomidine hydrochloride", "antibiotic", EffectDriven, "alpha-2 agonist", ""},
		{"thiopentone sodium", "", EffectDriven, "thiobarbiturate", ""},
		{"tiletamine + zolazepam", "", EffectDriven, "dissociative anaesthetic", ""},
		{"ketamine-xylazine", "", EffectDriven, "alpha-2 agonist", ""},
		{"morphine sulfate", "", EffectDriven, "opioid", ""},
		{"atropine", "", EffectDriven, "anticholinergic", ""},
		{"suxamethonium", "", EffectDriven, "depolarising neuromuscular blocker", ""},
		{"guaifenesin", "", EffectDriven, "muscle relaxant", ""},
		{"dexamethasone sodium phosphate", "", EffectDriven, "hormone", ""},
		{"insulin glargine", "", EffectDriven, "hormone", ""},
		{"atipamezole", "", EffectDriven, "alpha-2 antagonist", ""},
		{"samplazolam", "", EffectDriven, "benzodiazepine", ""}, // by its stem
		{"midazolan", "", EffectDriven, "benzodiazepine", "midazolam"},
		{"buprenorfine", "", EffectDriven, "opioid", "buprenorphine"},
		{"samplazole", "neuroleptic", EffectDriven, "phenothiazine", ""},
		{"samplazole", "benzodiazapine", EffectDriven, "benzodiazepine", "benzodiazepine"},
		{"etorphine", "", Immobiliser, "potent immobiliser", ""},
		{"M99", "", Immobiliser, "potent immobiliser", ""},
		{"M-99", "", Immobiliser, "potent immobiliser", ""},
		{"A3080", "", Immobiliser, "potent immobiliser", ""},
		{"thiafentanyl", "", Immobiliser, "potent immobiliser", ""},
		{"carfentinal", "", Immobiliser, "potent immobiliser", "carfentanil"},
		{"samplazole", "thebaine derivative", Immobiliser, "potent immobiliser", ""},
		{"samplazole", "ultra potent opiates", Immobiliser, "potent immobiliser", ""},
		{"amoxicillin", "", Antibacterial, "", ""},
		{"co-amoxiclav", "", Antibacterial, "", ""},
		{"enroflaxacin", "", Antibacterial, "", "enrofloxacin"},
		{"ketamine", "", Controlled, "", ""},
		{"pentobarbitone", "", Controlled, "", ""},
		{"testosterone", "", Controlled, "", ""},
	} {
		r := ReadDrug(tt.drug, tt.class)
		if !slices.ContainsFunc(r.Traits, func(d DrugTrait) bool {
			return d.Trait == tt.trait && d.Word == tt.word && d.Meant == tt.meant && d.Via != "" && d.Class != ""
		}) {
			t.Errorf("%q (%q): %+v, want %s %q meant %q", tt.drug, tt.class, r.Traits, tt.trait, tt.word, tt.meant)
		}
	}
	for _, tt := range []struct {
		drug, class string
		trait       Trait
	}{
		{"meloxicam", "non-opioid analgesic", EffectDriven}, {"samplazole", "non-steroidal anti-inflammatory", EffectDriven},
		{"samplazole", "nonsteroidal", EffectDriven}, {"examplicillin", "penicillin", EffectDriven}, {"fenbendazole", "", Antibacterial},
		{"morphine", "", Immobiliser}, {"butorphanol", "opioid", Immobiliser}, {"amoxicillin", "", Controlled}, {"naloxone", "", Controlled},
	} {
		if d, ok := ReadDrug(tt.drug, tt.class).Has(tt.trait); ok {
			t.Errorf("%q (%q) is %+v", tt.drug, tt.class, d)
		}
	}
}

// What is not known is said, and not taken for what it is near to.
func TestReadDrugUnread(t *testing.T) {
	for _, tt := range []struct {
		drug, class  string
		named, known bool
		unread, near string
	}{
		{"amoxicillin", "", true, true, "", ""},
		{"examplicillin", "", false, true, "", ""},
		{"samplazole", "azole", false, true, "samplazole", ""},
		{"samplazole", "medicine", false, false, "samplazole", ""},
		{"paracetamol + samplazole", "", true, true, "samplazole", ""},
		{"midazolan", "", false, false, "midazolan", "midazolam"},
		{"cupric oxide wire particles", "", true, true, "", ""},
		{"hydrochloride 50 mg/mL", "", false, false, "", ""},
		{"\u202esamplazole\x07", "", false, false, "samplazole", ""},
		{"", "penicillin", false, true, "", ""},
		{"", "", false, false, "", ""},
	} {
		r := ReadDrug(tt.drug, tt.class)
		if r.Named() != tt.named || r.Known() != tt.known || strings.Join(r.Unread, "|") != tt.unread || strings.Join(r.Near, "|") != tt.near {
			t.Errorf("%q (%q): %+v", tt.drug, tt.class, r)
		}
	}
}

// A long-acting form is known by the words of its name.
func TestLongActing(t *testing.T) {
	for name, want := range map[string]string{
		"oxytetracycline LA": "la", "Oxytetracycline L.A.": "l a", "examplicillin long-acting": "long acting", "benzathine benzylpenicillin": "benzathine",
		"haloperidol decanoate": "decanoate", "morphine SR": "sr", "morphine slow-release": "slow release", "deslorelin implant": "implant",
		"ceftiofur crystalline free acid": "crystalline free acid", "testosterone cypionate": "cypionate", "pyrantel pamoate": "",
		"examplicillin": "", "lasalocid": "", "amoxicillin trihydrate": "", "": "",
	} {
		if got := ReadDrug(name, "").LongActing; got != want {
			t.Errorf("%q: %q, want %q", name, got, want)
		}
	}
}

// The table of traits speaks of classes that a name leads to, and every drug
// of such a class has the trait.
func TestDrugClassTraits(t *testing.T) {
	traits := make(map[string][]string)
	for _, r := range table(t, "drug-class-traits.csv") {
		traits[r["class"]] = append(traits[r["class"]], r["trait"])
		if !slices.Contains([]Trait{EffectDriven, Immobiliser, Antibacterial, Controlled}, Trait(r["trait"])) || r["basis"] == "" {
			t.Errorf("%v", r)
		}
		if named := Trait(r["trait"]) == EffectDriven || Trait(r["trait"]) == Immobiliser; named != (r["word"] != "") {
			t.Errorf("%v: only what is told has a word", r)
		}
	}
	for _, r := range table(t, "drug-classes.csv") {
		for _, c := range strings.Split(r["classes"], "; ") {
			for _, trait := range traits[c] {
				if _, ok := ReadDrug(r["drug"], "").Has(Trait(trait)); !ok {
					t.Errorf("%s of the class %s is not %s", r["drug"], c, trait)
				}
			}
		}
	}
}

func TestSoundOf(t *testing.T) {
	for _, same := range [][]string{
		{"acetaminophen", "asetaminofen", "acetominafen", "asetomynophin"},
		{"xylazine", "ksilazin"},
		{"diclofenac", "diklofenak", "dicloffenac", "diclofenack", "dyclofenaque"},
		{"thiopental", "tiopental", "thyopental"},
		{"chloramphenicol", "kloramfenikol"},
	} {
		for _, w := range same[1:] {
			if soundOf(w) != soundOf(same[0]) {
				t.Errorf("%s sounds %q, %s %q", same[0], soundOf(same[0]), w, soundOf(w))
			}
		}
	}
	for _, differ := range [][2]string{{"ketoprofen", "carprofen"}, {"meloxicam", "piroxicam"}, {"ampicillin", "amoxicillin"}, {"morphine", "heroin"}} {
		if soundOf(differ[0]) == soundOf(differ[1]) {
			t.Errorf("%s and %s sound alike", differ[0], differ[1])
		}
	}
}

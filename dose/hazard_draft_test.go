package dose

import (
	"fmt"
	"strings"
	"testing"

	"tayra/species"
)

// hazardCases is each row of the hazard table as a clinician would meet it: a
// drug as it is written on a label, an animal of the row's taxon, a route, and
// what must be raised. Written from the rows' citations, apart from the table.
var hazardCases = []struct {
	id, drug, class, animal, route string
	level                          Level
	happens, cites, read           string
}{
	{"h001", "ivermectin", "", "Greek tortoise", "SC", Stop, "flaccid paralysis", "Teare & Bush 1983", "read"},
	{"h002", "fenbendazole", "", "Hermann's tortoise", "PO", Note, "fall in heterophils", "Neiffer et al. 2005", "read"},
	{"h003", "gentamicin sulfate", "", "ball python", "IM", Warn, "Kidney injury", "Am J Vet Res 2024", "read"},
	{"h004", "metronidazole", "", "Drymarchon corais", "PO", Warn, "indigo snakes", "Jacobson & Kollias 1988", "memory"},
	{"h005", "metronidazole", "", "Lampropeltis getula", "by stomach tube", Warn, "kingsnakes", "Mader", "memory"},
	{"h006", "chlorhexidine gluconate", "", "axolotl", "topical", Note, "cross frog skin", "Kaufmann & Dohmen 2016", "read"},
	{"h007", "gentamicin", "", "Opsanus tau", "IM", Warn, "proximal tubules", "Reimschuessel et al. 1996", "read"},
	{"h008", "ivermectin", "", "Dicentrarchus labrax", "PO", Warn, "sea bass", "Athanassopoulou et al. 2002", "read"},
	{"h009", "fenbendazole", "", "Elasmobranchii", "PO", Note, "white-cell loss", "Myers et al. 2007", "read"},
	{"h010", "diclofenac sodium", "", "griffon vulture", "IM", Stop, "visceral gout", "Oaks et al. 2004", "read"},
	{"h011", "diclofenac", "", "cinereous vulture", "IM", Stop, "wild fledgling", "Herrero-Villar et al. 2021", "read"},
	{"h012", "aceclofenac", "", "griffon vulture", "IM", Stop, "into diclofenac", "Galligan et al. 2016", "read"},
	{"h013", "ketoprofen", "", "griffon vulture", "IM", Stop, "inside the usual treatment range", "Naidoo et al. 2010", "read"},
	{"h014", "nimesulide", "", "griffon vulture", "IM", Stop, "within about two days", "Galligan et al. 2022", "read"},
	{"h015", "flunixin meglumine", "", "griffon vulture", "IV", Stop, "in the wild and in captive care", "Zorrilla et al. 2015", "read"},
	{"h016", "carprofen", "", "griffon vulture", "IM", Warn, "one of two vultures died", "Naidoo et al. 2018", "read"},
	{"h017", "ketoprofen", "", "common eider", "IM", Warn, "king eiders", "Mulcahy et al. 2003", "read"},
	{"h018", "meloxicam", "", "chicken", "IM", Note, "tubular necrosis and gout", "Mulcahy et al. 2003", "read"},
	{"h019", "fenbendazole", "", "mourning dove", "PO", Stop, "marrow failure", "Howard et al. 2002", "read"},
	{"h020", "albendazole", "", "pigeon", "PO", Stop, "crypt damage", "Howard et al. 2002", "read"},
	{"h021", "fenbendazole", "", "marabou stork", "in feed", Warn, "Marabou storks", "Bonar et al. 2003", "read"},
	{"h022", "fenbendazole", "", "griffon vulture", "in feed", Warn, "white-backed vultures", "Bonar et al. 2003", "read"},
	{"h023", "gentamicin", "", "red-tailed hawk", "IM", Warn, "apnoeic", "Bird et al. 1983", "read"},
	{"h024", "itraconazole", "", "African grey", "PO", Warn, "lose appetite", "avian aspergillosis review", "read"},
	{"h025", "voriconazole", "", "Humboldt penguin", "PO", Warn, "made penguins ill", "Hyatt et al. 2017", "read"},
	{"h026", "malathion", "", "chicken", "topical", Warn, "respiratory failure", "Walker 1983", "read"},
	{"h027", "prednisolone", "", "African grey", "PO", Note, "aspergillosis", "Verstappen & Dorrestein 2005", "read"},
	{"h028", "lidocaine", "", "budgerigar", "SC", Note, "cardiac arrest", "West, Heard & Caulkett", "memory"},
	{"h029", "procaine penicillin", "", "budgerigar", "IM", Note, "procaine part", "Ritchie, Harrison & Harrison", "memory"},
	{"h030", "monensin sodium", "", "turkey", "in feed", Warn, "Adult turkeys", "Vet Rec 1978", "read"},
	{"h031", "monensin", "", "helmeted guinea fowl", "in feed", Stop, "medicated for chickens", "21 CFR 558.355", "read"},
	{"h032", "moxidectin", "", "dog", "SC", Stop, "ABCB1 (MDR1)", "Mealey et al. 2001", "read"},
	{"h033", "acetaminophen", "", "tiger", "PO", Stop, "methaemoglobinaemia", "Court 2013", "read"},
	{"h034", "paracetamol", "", "California sea lion", "PO", Note, "as poorly as cat liver", "Kakehi et al. 2015", "read"},
	{"h035", "phenol", "", "cat", "topical", Note, "grooming exposure", "Shrestha et al. 2011", "read"},
	{"h036", "acetylsalicylic acid", "", "cat", "PO", Warn, "accumulate salicylate", "Court 2013", "read"},
	{"h037", "meloxicam", "", "cat", "PO", Warn, "acute kidney failure", "FDA boxed-warning", "read"},
	{"h038", "permethrin", "", "cat", "spot-on", Stop, "hyperthermia", "J Feline Med Surg", "read"},
	{"h039", "benzyl alcohol", "", "cat", "IV", Warn, "hyperaesthesia", "Wilcke 1984", "read"},
	{"h040", "benzocaine", "", "cat", "topical", Warn, "cyanosis", "Wilkie & Kirby 1988", "read"},
	{"h041", "enrofloxacin", "", "cat", "SC", Warn, "blindness", "Wiebe & Hamilton 2002", "read"},
	{"h042", "propofol", "", "cat", "IV", Note, "Heinz bodies", "Andress et al. 1995", "read"},
	{"h043", "cisplatin", "", "cat", "IV", Stop, "Fluid in lungs", "Knapp et al. 1987", "read"},
	{"h044", "5-fluorouracil", "", "cat", "topical", Stop, "fatal seizures", "poisons-service note", "read"},
	{"h045", "sodium phosphate enema", "", "cat", "enema", Stop, "high phosphate", "phosphate enema entry", "read"},
	{"h046", "melengestrol acetate", "", "lion", "PO", Note, "mammary carcinoma", "McAloose et al. 2007", "read"},
	{"h047", "tiletamine-zolazepam", "", "tiger", "IM", Note, "evidence disputed", "Kreeger & Armstrong 2010", "read"},
	{"h048", "xylitol", "", "dog", "PO", Stop, "insulin release", "Dunayer & Gwaltney-Brant 2006", "read"},
	{"h049", "thiopentone sodium", "", "dog", "IV", Warn, "Greyhounds", "Court 1999", "read"},
	{"h050", "lasalocid", "", "dog", "PO", Warn, "stop breathing", "poisons-service note on ionophores", "read"},
	{"h051", "metronidazole benzoate", "", "dog", "PO", Note, "vestibular signs", "metronidazole entry", "read"},
	{"h052", "monensin", "", "horse", "in feed", Stop, "cattle tolerance", "Matsuoka et al. 1996", "read"},
	{"h053", "clindamycin", "", "horse", "IM", Stop, "Fatal colitis", "Prescott et al. 1988", "read"},
	{"h054", "doxycycline hyclate", "", "horse", "slow IV", Stop, "collapse and death", "Riond et al. 1992", "read"},
	{"h055", "tilmicosin", "", "donkey", "SC", Stop, "heart contraction", "Youssef et al. 2016", "read"},
	{"h056", "amitraz", "", "horse", "pour-on", Stop, "impaction", "Phetudomsinsuk et al. 2014", "read"},
	{"h057", "azaperone", "", "horse", "IV", Stop, "violent excitement", "Dodman & Waterman 1979", "read"},
	{"h058", "acetylpromazine", "", "horse", "IM", Note, "Penile prolapse", "Wagner 2009", "read"},
	{"h059", "xylazine hydrochloride", "", "goat", "IM", Warn, "a tenth of the horse dose", "Lin & Walz", "read"},
	{"h060", "medetomidine", "", "sheep", "IV", Warn, "lung oedema", "Kastner 2006", "read"},
	{"h061", "xylazine", "", "alpaca", "IM", Warn, "Camelids are more sensitive", "Lin & Walz", "read"},
	{"h062", "salinomycin", "", "llama", "in feed", Stop, "Contaminated feed", "salinomycin toxicity in camelids", "read"},
	{"h063", "copper sulphate", "", "sheep", "PO", Warn, "haemolytic crisis", "Borobia et al. 2022", "read"},
	{"h064", "sodium selenite", "", "sheep", "SC", Warn, "heart muscle necrosis", "McKenzie et al. 2017", "read"},
	{"h065", "isoflurane", "", "pig", "by mask", Warn, "rigidity", "Merck Veterinary Manual", "read"},
	{"h066", "suxamethonium chloride", "", "pig", "IV", Warn, "malignant hyperthermia", "Schuster et al. 2014", "read"},
	{"h067", "tilmicosin", "", "wild boar", "SC", Stop, "can kill pigs", "Jorden et al. 1993", "memory"},
	{"h068", "tilmicosin phosphate", "", "goat", "SC", Stop, "fatal in goats", "regulators' warnings", "memory"},
	{"h069", "tilmicosin", "", "chimpanzee", "SC", Stop, "cardiotoxic", "Veenhuizen et al. 2006", "read"},
	{"h070", "vitamin D3", "", "common marmoset", "PO", Note, "hypercalcaemia", "Adams et al. 1985", "read"},
	{"h071", "amoxycillin", "", "rabbit", "PO", Stop, "clostridial enterotoxaemia", "House Rabbit Society", "read"},
	{"h072", "lincomycin", "", "rabbit", "SC", Stop, "Clostridium spiroforme", "Carman & Borriello 1984", "read"},
	{"h073", "fipronil", "", "rabbit", "spot-on", Stop, "spot-on strengths", "ANSES notice 2023", "read"},
	{"h074", "albendazole", "", "rabbit", "PO", Note, "marrow depletion", "Graham, Garner & Reavill", "read"},
	{"h075", "atropine sulphate", "", "rabbit", "SC", Note, "glycopyrronium", "Olson et al. 1994", "read"},
	{"h076", "co-amoxiclav", "", "guinea pig", "PO", Stop, "coliforms and clostridia", "veterinary teaching text", "read"},
	{"h077", "ampicillin", "", "chinchilla", "PO", Stop, "clostridial enterotoxaemia", "Quesenberry & Carpenter", "memory"},
	{"h078", "clindamycin", "", "golden hamster", "SC", Stop, "Clostridium difficile", "Lusk et al. 1978", "read"},
	{"h079", "cephalexin", "", "golden hamster", "SC", Stop, "most hamsters tested", "Bartlett et al. 1978", "read"},
	{"h080", "fenbendazole", "", "North American porcupine", "PO", Stop, "half of four died", "Weber et al. 2006", "read"},
	{"h081", "etorphine", "", "white rhinoceros", "IM", Warn, "high carbon dioxide", "Haw et al. 2014", "read"},
	{"h082", "carfentanil", "", "giant anteater", "dart", Warn, "a scratch can cause coma", "Tolo & Keyler 1998", "read"},
	{"h083", "chloramphenicol", "", "giant anteater", "topical", Warn, "wear gloves", "J Am Vet Med Assoc 1984", "read"},
	{"h084", "chloramphenicol", "", "cattle", "IM", Stop, "banned in the US and EU", "21 CFR 530.41", "read"},
	{"h085", "furazolidone", "", "pig", "PO", Stop, "residue carcinogenicity", "21 CFR 530.41", "read"},
	{"h086", "dimetridazole", "", "goat", "PO", Stop, "may not be used in the US or EU", "21 CFR 530.41", "read"},
	{"h087", "clenbuterol", "", "cattle", "PO", Note, "extra-label use", "21 CFR 530.41", "read"},
	{"h088", "tiamulin", "", "pig", "PO", Stop, "skeletal muscle in poultry and pigs", "Ekinci et al. 2023", "read"},
	{"h089", "marbofloxacin", "", "dog", "PO", Note, "joint cartilage", "Burkhardt et al. 1992", "read"},
	{"h090", "levamisole", "", "giant anteater", "SC", Warn, "low multiples of the usual dose", "safety study in goats", "read"},
}

// hazardCase is a case for a drug in an animal: a dog's dose, a cat's for a dog.
func hazardCase(t *testing.T, drug, class, animal, route string) *CaseInput {
	t.Helper()
	a, err := species.Find(animal)
	if err != nil {
		t.Fatal(err)
	}
	in := caseOf(animal, "1 kg", "dog", "18 kg", "10 mg/kg", "q24h")
	if a.AdultHigh > 0 {
		in.Patient.Mass = E(fmt.Sprintf("%.4f kg", float64(a.AdultHigh)))
	}
	if a.SpeciesWords() == "Canis lupus" {
		in.Models[0].Species, in.Models[0].Mass = E("cat"), E("4 kg")
	}
	if !a.Endotherm() {
		in.Patient.Temperature = E("28 °C")
	}
	in.Drug.Name = E(drug)
	if class != "" {
		in.Drug.Class = E(class)
	}
	if route != "" {
		in.Models[0].Route = E(route)
	}
	return in
}

// narrower is the level of a row when the drug's own margin is narrow.
func narrower(l Level, severity string) Level {
	if severity == "reduced margin" {
		return Stop
	}
	return l
}

// Every row of the hazard table, from the drug's name to the worksheet: its
// level, what happens, why scaling cannot see it, the citation and how it was
// read; a stop leaves no dose and falls to a written reason only.
func TestEveryHazardReachesTheWorksheet(t *testing.T) {
	rows := species.Hazards()
	if len(rows) != 90 || len(hazardCases) != 90 {
		t.Fatalf("%d rows, %d cases", len(rows), len(hazardCases))
	}
	for i, k := range hazardCases {
		row := &rows[i]
		if row.ID != k.id {
			t.Fatalf("case %d is %s, the row is %s", i, k.id, row.ID)
		}
		t.Run(k.id, func(t *testing.T) {
			if !strings.Contains(row.WhatHappens, k.happens) || !strings.Contains(row.Citation, k.cites) || !strings.HasPrefix(row.Verified, k.read) {
				t.Errorf("the row says %q, %q (%s)", row.WhatHappens, row.Citation, row.Verified)
			}
			slug := "hazard-" + k.id
			checkText := func(c *Caution) {
				for _, want := range []string{k.happens, ". Scaling cannot see it: " + row.Why + ".", "A missing entry is no evidence of safety."} {
					if !strings.Contains(c.Text, want) {
						t.Errorf("no %q in %q", want, c.Text)
					}
				}
				if c.Source != row.Citation+" ("+row.Verified+")" || !strings.Contains(c.Source, k.cites) || !strings.Contains(c.Source, "("+k.read) {
					t.Errorf("source %q", c.Source)
				}
				if q := row.Question(); q != "" && !strings.Contains(c.Text, q) {
					t.Errorf("%q is not asked in %q", q, c.Text)
				}
			}
			if _, err := species.Find(k.animal); err != nil {
				// Fish have no row in the animal table, so no case can be theirs;
				// the rows stay, for their animals may come.
				m := species.MatchHazards(k.drug, k.class, &species.Animal{Name: k.animal, Class: "Elasmobranchii"}, k.route)
				for i := range m {
					if m[i].ID == k.id {
						var c Caution
						new(numbers).hazardText(&Case{}, &raised{hazard: &m[i]}, &c)
						checkText(&c)
						if l := hazardLevel(&m[i], &Case{}); l != k.level {
							t.Errorf("level %s, want %s", l, k.level)
						}
						return
					}
				}
				t.Error("no match")
				return
			}
			w := draftOf(t, hazardCase(t, k.drug, k.class, k.animal, k.route))
			c := has(w, slug)
			if c == nil || c.Level != k.level {
				t.Fatalf("%s in the %s: %+v, want %s", k.drug, k.animal, c, k.level)
			}
			checkText(c)
			if k.level == Stop && (w.Drafted != nil || len(w.Drafts) > 0 && len(w.Drafts[0].Plans) > 0) {
				t.Error("a dose in spite of the stop")
			}
			if k.read == "memory" && !strings.Contains(c.Source, "memory") {
				t.Errorf("%q hides that the citation was not read", c.Source)
			}
			// A narrow margin makes a stop of a warning.
			in := hazardCase(t, k.drug, k.class, k.animal, k.route)
			in.Drug.Margin = E("narrow")
			want := narrower(k.level, row.Severity)
			if row.Operator {
				want = Warn
			}
			if c := has(draftOf(t, in), slug); c == nil || c.Level != want {
				t.Errorf("with a narrow margin: %+v, want %s", c, want)
			}
			// However the name is written, the level is the same.
			for _, spelling := range []string{strings.ToUpper(k.drug), k.drug + " 5 %", "samplovite + " + k.drug, k.drug + "/samplovite", misspelt(k.drug)} {
				for _, class := range []string{k.class, "medicine", "vitamin"} {
					if c := has(draftOf(t, hazardCase(t, spelling, class, k.animal, k.route)), slug); c == nil || c.Level != k.level {
						t.Errorf("%q of the class %q: %+v, want %s", spelling, class, c, k.level)
					}
				}
			}
			// A route that is not said, or not understood, rules nothing out.
			for _, route := range []string{"", "by some way"} {
				if c := has(draftOf(t, hazardCase(t, k.drug, k.class, k.animal, route)), slug); c == nil || c.Level != k.level {
					t.Errorf("by %q: %+v, want %s", route, c, k.level)
				}
			}
			// Every stop falls to a written reason, which is printed with it.
			in = hazardCase(t, k.drug, k.class, k.animal, k.route)
			for _, c := range w.Cautions {
				if c.Level == Stop {
					if CannotOverride(c.Slug) {
						t.Fatalf("the case raises %s", c.Slug)
					}
					in.Overrides = append(in.Overrides, NamedEntry{Name: E(c.Slug), Value: E("no other drug is at hand and the owner was told")})
				}
			}
			over := draftOf(t, in)
			if over.Drafted == nil {
				t.Error("no dose though every stop has a reason")
			}
			if c := has(over, slug); k.level == Stop && (c == nil || !c.Overridden || c.Reason == "") {
				t.Errorf("%+v is not marked as overridden", c)
			}
		})
	}
}

// misspelt swaps two letters in the middle of the longest word.
func misspelt(name string) string {
	longest := ""
	for _, w := range strings.FieldsFunc(name, func(r rune) bool { return r == ' ' || r == '-' }) {
		if len(w) > len(longest) {
			longest = w
		}
	}
	if len(longest) < 6 {
		return name
	}
	i := len(longest) / 2
	for longest[i] == longest[i-1] {
		i--
	}
	swapped := longest[:i-1] + string(longest[i]) + string(longest[i-1]) + longest[i+1:]
	return strings.Replace(name, longest, swapped, 1)
}

// What a careless user types, and what must still be raised.
func TestCarelessDrafts(t *testing.T) {
	for _, k := range []struct {
		drug, class, animal, route string
		slug                       string
		level                      Level
		says                       string
	}{
		// Misspelt, run together, by another pharmacopoeia, a form of the drug.
		{"paracetmol", "", "cat", "PO", "hazard-h033", Stop, "Did you mean paracetamol? Paracetamol, contraindicated in Felidae"},
		{"asetaminofen", "", "cat", "PO", "hazard-h033", Stop, "Did you mean acetaminophen?"},
		{"propacetamol", "", "cat", "IV", "hazard-h033", Stop, "(Found by propacetamol, which yields paracetamol.)"},
		{"co-codamol", "", "cat", "PO", "hazard-h033", Stop, "Paracetamol, contraindicated"},
		{"codeine & acetaminophen", "", "cat", "PO", "hazard-h033", Stop, "(Found by synonym acetaminophen.)"},
		{"febantel, praziquantel", "", "pigeon", "PO", "hazard-h019", Stop, "which yields fenbendazole"},
		{"fenbendazolepraziquantel", "", "pigeon", "PO", "hazard-h019", Stop, "Did you mean fenbendazole?"},
		{"suksamethonium", "", "pig", "IV", "hazard-h066", Warn, "Did you mean suxamethonium?"},
		{"ivermectin1%", "", "Greek tortoise", "SC", "hazard-h001", Stop, "Ivermectin"},
		// The wrong class, none, one described, one misspelt.
		{"clindamycin", "macrolide", "horse", "PO", "hazard-h053", Stop, "Lincosamide, contraindicated in Equus"},
		{"samplazole", "N.S.A.I.D.", "griffon vulture", "IM", "hazard-h010", Warn, "Known in Gyps for a drug of the same class (diclofenac)"},
		{"samplazole", "benzimidizole", "pigeon", "PO", "hazard-h019", Warn, "Did you mean benzimidazole?"},
		{"samplazole", "penicilins", "rabbit", "PO", "hazard-h071", Stop, "Did you mean penicillin?"},
		{"examplicillin", "", "rabbit", "by mouth with food", "hazard-h071", Stop, "by the ending -cillin"},
		// A subspecies, a breed, a domestic form, a relative.
		{"paracetamol", "", "Panthera tigris altaica", "PO", "hazard-h033", Stop, "Felidae"},
		{"paracetamol", "", "Amur tiger", "PO", "hazard-h033", Stop, "Felidae"},
		{"thiopental", "", "greyhound", "IV", "hazard-h049", Warn, "Is this patient a greyhound or another sighthound?"},
		{"ivermectin", "", "wolf", "SC", "hazard-h032", Stop, "Is this patient a dog with the ABCB1 (MDR1) deletion"},
		{"halothane", "", "wild boar", "inhaled", "hazard-h065", Warn, "Is this patient of a stress-susceptible line of pigs (RYR1)?"},
		{"tilmicosin", "", "alpaca", "SC", "hazard-h067", Warn, "Known in a relative (Sus scrofa, of the same order), tilmicosin"},
		{"diclofenac", "", "golden eagle", "IM", "hazard-h010", Warn, "Known in a relative (Gyps, of the same family), diclofenac"},
		{"cisplatin", "", "spotted hyena", "IV", "hazard-h043", Warn, "Known in a relative (Felis catus, of the same order)"},
		{"phenylbutazone", "", "griffon vulture", "PO", "hazard-h014", Warn, "for a drug of the same class (nimesulide)"},
		// The law on food animals.
		{"chloramphenicol", "", "chicken", "PO", "hazard-h084", Warn, "Law on food animals, on file for Artiodactyla (chloramphenicol)"},
		{"metronidazole", "", "giraffe", "PO", "hazard-h086", Stop, "Is this patient a food-producing animal?"},
		// The handler.
		{"etorphine", "", "lion", "dart", "hazard-h082", Warn, "Danger to the person who handles it (etorphine)"},
		{"tilmicosin", "", "giant anteater", "SC", "hazard-h069", Warn, "Danger to the person who handles it (tilmicosin)"},
		{"chloramphenicol", "", "Greek tortoise", "IM", "hazard-h083", Warn, "aplastic anaemia"},
		// What acts by receptors is known by its name.
		{"medetomidine", "", "lion", "IM", "effect-driven", Warn, "Alpha-2 agonist: its effect differs"},
		{"medetomidine", "antibiotic", "lion", "IM", "effect-driven", Warn, "Alpha-2 agonist"},
		{"ketamine-xylazine", "", "lion", "IM", "effect-driven", Warn, "Dissociative anaesthetic and alpha-2 agonist"},
		{"buprenorfine", "", "lion", "IM", "effect-driven", Warn, "Did you mean buprenorphine? Opioid"},
		{"morphine", "", "lion", "IM", "effect-driven", Warn, "Opioid"},
		{"atropine", "", "lion", "IM", "effect-driven", Warn, "Anticholinergic"},
		{"rocuronium", "", "lion", "IV", "effect-driven", Warn, "Neuromuscular blocker"},
		{"guaifenesin", "", "horse", "IV", "effect-driven", Warn, "Muscle relaxant"},
		{"insulin glargine", "", "cat", "SC", "effect-driven", Warn, "Hormone"},
		{"dexamethasone sodium phosphate", "", "lion", "IM", "effect-driven", Warn, "Hormone"},
		{"samplazole", "a new sedating agent", "lion", "IM", "effect-driven", Warn, "Sedative"},
		{"etorphine", "", "white rhinoceros", "dart", "effect-driven", Stop, "Potent immobiliser"},
		{"M99", "", "white rhinoceros", "dart", "effect-driven", Stop, "Potent immobiliser"},
		{"etorpine", "", "white rhinoceros", "dart", "effect-driven", Stop, "Did you mean etorphine? Potent immobiliser"},
		{"carfentanyl citrate", "", "moose", "dart", "effect-driven", Stop, "Potent immobiliser"},
		{"carfentinal", "", "moose", "dart", "effect-driven", Stop, "Did you mean carfentanil?"},
		{"thiafentanyl", "penicillin", "impala", "dart", "effect-driven", Stop, "Potent immobiliser"},
		{"A-3080", "", "impala", "dart", "effect-driven", Stop, "Potent immobiliser"},
		{"samplazole", "thebaine derivative", "impala", "dart", "effect-driven", Stop, "Potent immobiliser"},
		{"samplazole", "Ultra potent opiates", "impala", "dart", "effect-driven", Stop, "Potent immobiliser"},
		{"samplazole", "immobilising agent", "impala", "dart", "effect-driven", Stop, "Potent immobiliser"},
		// A depot form that only its name tells.
		{"oxytetracycline LA", "", "lion", "IM", "depot", Stop, "speaks of a depot or long-acting form (la)"},
		{"benzathine benzylpenicillin", "", "lion", "IM", "depot", Stop, "Write formulation in the case"},
		// Controlled drugs are asked about.
		{"ketamine", "", "lion", "IM", "controlled", Warn, "Is this one controlled where you work?"},
		{"pentobarbitone", "", "lion", "IV", "controlled", Warn, "Is this one controlled where you work?"},
		// What is not known is said.
		{"samplazole", "", "lion", "IM", "drug-not-recognised", Warn, "Nothing has been ruled out."},
		{"samplazole", "medicine", "lion", "IM", "drug-not-recognised", Warn, "Neither the drug's name nor a class"},
		{"midazolan", "", "lion", "IM", "drug-not-recognised", Warn, "Did you mean midazolam?"},
		{"samplazole", "azole", "lion", "PO", "drug-not-recognised", Note, "hazards were looked up by its class only"},
		{"paracetamol + samplazole", "", "dog", "PO", "drug-not-recognised", Note, "Part of the drug's name is not in the lists of this program (samplazole)"},
		// Anatomy, gut and route.
		{"amoxicillin", "", "red kangaroo", "orally", "anatomy", Warn, "lives by fermentation"},
		{"amoxicillin", "", "red kangaroo", "", "anatomy", Warn, "is it the mouth?"},
		{"samplazole", "antibiotic", "koala", "oral gavage", "anatomy", Warn, "lives by fermentation"},
		{"samplazole", "azole", "ball python", "i.m.", "anatomy", Note, "Renal portal system"},
		{"samplazole", "azole", "axolotl", "bath", "anatomy", Note, "Amphibian skin"},
		{"samplazole", "azole", "red kangaroo", "tablet", "gut-type", Warn, "By mouth between different guts"},
		{"samplazole", "azole", "chicken", "SC", "food-animal", Warn, "Will this one, its milk or its eggs ever be?"},
		{"samplazole", "azole", "rabbit", "SC", "food-animal", Warn, "Write food_producing in the case"},
	} {
		w := draftOf(t, hazardCase(t, k.drug, k.class, k.animal, k.route))
		found := false
		for _, c := range w.Cautions {
			found = found || c.Slug == k.slug && c.Level == k.level && strings.Contains(c.Text, k.says)
		}
		if !found {
			t.Errorf("%q (%q) in the %s by %q: no %s %s with %q but %+v", k.drug, k.class, k.animal, k.route, k.level, k.slug, k.says, has(w, k.slug))
		}
		if k.level == Stop && w.Drafted != nil {
			t.Errorf("%q in the %s: a dose in spite of the stop", k.drug, k.animal)
		}
	}
}

// What must not be raised, or everything would be.
func TestCalmDrafts(t *testing.T) {
	for _, k := range []struct{ drug, class, animal, route, slug string }{
		{"amoxicillin", "", "rabbit", "SC", "hazard-h071"},
		{"doxycycline", "", "horse", "PO", "hazard-h054"},
		{"ivermectin", "", "coyote", "SC", "hazard-h032"}, // a breed's gene is nobody else's
		{"meloxicam", "non-opioid analgesic", "lion", "SC", "effect-driven"},
		{"amoxicillin", "penicillin", "lion", "PO", "effect-driven"},
		{"amoxicillin", "penicillin", "lion", "PO", "controlled"},
		{"amoxicillin", "penicillin", "lion", "PO", "drug-not-recognised"},
		{"examplicillin", "penicillin", "lion", "PO", "drug-not-recognised"},
		{"amoxicillin", "penicillin", "lion", "PO", "anatomy"},
		{"amoxicillin", "penicillin", "red kangaroo", "SC", "anatomy"},
		{"fenbendazole", "benzimidazole", "red kangaroo", "PO", "anatomy"},
		{"samplazole", "azole", "ball python", "PO", "anatomy"},
		{"chloramphenicol", "amphenicol", "lion", "IM", "hazard-h084"},
		{"samplazole", "azole", "lion", "SC", "food-animal"},
	} {
		if c := has(draftOf(t, hazardCase(t, k.drug, k.class, k.animal, k.route)), k.slug); c != nil {
			t.Errorf("%q in the %s by %q: %+v", k.drug, k.animal, k.route, c)
		}
	}
}

// The case's own answers: food animal or not, controlled or not, the route.
func TestHazardAnswers(t *testing.T) {
	for _, k := range []struct {
		animal, food string
		level        Level // "" for nothing raised
	}{
		{"cattle", "", Stop}, {"cattle", "true", Stop}, {"cattle", "false", Note},
		{"chicken", "", Warn}, {"chicken", "true", Stop}, {"chicken", "false", ""},
		{"lion", "", ""}, {"lion", "true", Stop}, {"lion", "false", ""},
	} {
		in := hazardCase(t, "chloramphenicol", "", k.animal, "IM")
		if k.food != "" {
			in.Patient.FoodProducing = E(k.food)
		}
		c := has(draftOf(t, in), "hazard-h084")
		if (c != nil) != (k.level != "") || c != nil && c.Level != k.level {
			t.Errorf("%s, food-producing %q: %+v, want %s", k.animal, k.food, c, k.level)
		}
	}
	for form, stops := range map[string]bool{"": true, "depot": true, "solution": false} {
		in := hazardCase(t, "oxytetracycline LA", "", "lion", "IM")
		if form != "" {
			in.Drug.Formulation = E(form)
		}
		if c := has(draftOf(t, in), "depot"); (c != nil) != stops {
			t.Errorf("formulation %q: %+v", form, c)
		}
	}
	for answer, says := range map[string]string{"": "Is this one controlled", "true": "A controlled drug", "false": ""} {
		in := hazardCase(t, "ketamine", "", "lion", "IM")
		if answer != "" {
			in.Drug.Controlled = E(answer)
		}
		c := has(draftOf(t, in), "controlled")
		if (c != nil) != (says != "") || c != nil && !strings.HasPrefix(c.Text, says) && !strings.Contains(c.Text, says) {
			t.Errorf("controlled %q: %+v", answer, c)
		}
	}
	for _, k := range []struct {
		model, draft string
		differs      bool
	}{
		{"SC", "s.c.", false}, {"subcutaneously", "SC", false}, {"i.m.", "intramuscular", false}, {"PO", "by mouth", false}, {"p/o", "oral gavage", false},
		{"by some way", "By some way", false}, {"IV", "IM", true}, {"SC", "IM", true}, {"PO", "SC", true}, {"by some way", "SC", true},
	} {
		in := hazardCase(t, "examplicillin", "penicillin", "lion", k.model)
		in.Drug.Route = E(k.draft)
		if c := has(draftOf(t, in), "route-differs"); (c != nil) != k.differs {
			t.Errorf("%q and %q: %+v", k.model, k.draft, c)
		}
	}
}

// The table of suitability: what speaks for and against, from the drug's name
// and the two animals.
func TestSuitabilityOfDrugAndAnimals(t *testing.T) {
	for _, k := range []struct {
		drug, animal, model, modelMass string
		change                         func(*CaseInput)
		criterion, verdict, says       string
	}{
		{drug: "gentamicin", animal: "lion", criterion: "this drug", verdict: "speaks for", says: "11 of 44"},
		{drug: "cephapirin", animal: "lion", criterion: "this drug", verdict: "speaks for", says: "11 of 44"},
		{drug: "tobramycin", animal: "turkey", model: "chicken", modelMass: "2 kg", criterion: "this drug in birds", verdict: "speaks against", says: "away from theory"},
		{drug: "amoxicillin", animal: "turkey", model: "chicken", modelMass: "2 kg", criterion: "this drug in birds", verdict: "speaks against", says: "do not stretch the interval"},
		{drug: "marbofloxacin", animal: "lion", criterion: "fluoroquinolones", verdict: "unknown", says: "Mixed"},
		{drug: "amoxicillin", animal: "lion", criterion: "target of the drug", verdict: "speaks for", says: "the microbe"},
		{drug: "medetomidine", animal: "lion", criterion: "target of the drug", verdict: "speaks against", says: "Alpha-2 agonist"},
		{drug: "samplazole", animal: "lion", criterion: "target of the drug", verdict: "unknown", says: "Not known"},
		{drug: "samplazole", animal: "ostrich", model: "chicken", modelMass: "2 kg", criterion: "the two animals", verdict: "speaks against", says: "0.17 h in ostriches"},
		{drug: "samplazole", animal: "ball python", model: "green iguana", modelMass: "2 kg", criterion: "the two animals", verdict: "speaks against", says: "5 to 79 h",
			change: func(in *CaseInput) { in.Models[0].Temperature = E("30 °C") }},
		{drug: "samplazole", animal: "chimpanzee", model: "human", modelMass: "70 kg", criterion: "the two animals", verdict: "speaks against", says: "outlier"},
		{drug: "samplazole", animal: "Asian elephant", criterion: "very large animal", verdict: "speaks against", says: "elephants"},
		{drug: "samplazole", animal: "lion", model: "Asian elephant", modelMass: "3000 kg", criterion: "very large animal", verdict: "speaks against", says: "elephants"},
		{drug: "samplazole", animal: "lion", criterion: "age", verdict: "speaks against", says: "foals",
			change: func(in *CaseInput) { in.Patient.Stage = E("juvenile") }},
		{drug: "samplazole", animal: "chicken", criterion: "kidney of birds", verdict: "speaks against", says: "arterial pressure",
			change: func(in *CaseInput) { in.Drug.Elimination = E("renal") }},
		{drug: "samplazole", animal: "horse", criterion: "gut", verdict: "speaks against", says: "hindgut fermenter",
			change: func(in *CaseInput) { in.Models[0].Route = E("by stomach tube") }},
		{drug: "samplazole", animal: "lion", criterion: "protein binding", verdict: "speaks against", says: "Highly bound",
			change: func(in *CaseInput) { in.Drug.ProteinBinding = E("95 %") }},
		{drug: "samplazole", animal: "lion", criterion: "active secretion", verdict: "unknown", says: "Not said"},
	} {
		in := hazardCase(t, k.drug, "", k.animal, "SC")
		if k.model != "" {
			in.Models[0].Species, in.Models[0].Mass = E(k.model), E(k.modelMass)
		}
		if k.change != nil {
			k.change(in)
		}
		w := draftOf(t, in)
		found := false
		for _, c := range w.Suitability {
			if c.Source == "" || c.Verified == "" || c.Text == "" {
				t.Errorf("%+v has no source", c)
			}
			found = found || c.Name == k.criterion && c.Verdict == k.verdict && strings.Contains(c.Text, k.says)
		}
		if !found {
			t.Errorf("%s in the %s: no %q %q with %q in %+v", k.drug, k.animal, k.criterion, k.verdict, k.says, w.Suitability)
		}
	}
}

package species

import (
	"cmp"
	"maps"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// patientOf returns an animal that a hazard row is about: from the animal
// table, or made up where the table has none of it.
func patientOf(t testing.TB, r map[string]string) (a *Animal, inTable bool) {
	t.Helper()
	if r["taxon_rank"] == "any" {
		return found(t, "giant anteater"), true
	}
	for _, a := range All() {
		at := map[string]string{"genus": a.Genus(), "family": a.Family, "order": a.Order, "class": a.Class}[r["taxon_rank"]]
		if r["taxon_rank"] == "species" && a.Name == r["taxon"] || r["taxon_rank"] != "species" && at == r["taxon"] {
			return a, true
		}
	}
	a = &Animal{Name: r["taxon"], Class: r["taxon_class"], Order: r["taxon_order"], Family: r["taxon_family"]}
	return a, false
}

func matchOf(matches []HazardMatch, id string) (HazardMatch, bool) {
	for _, m := range matches {
		if m.ID == id {
			return m, true
		}
	}
	return HazardMatch{}, false
}

// Every row of the table is matched by its drug (or class) in an animal of its
// taxon by its route, whatever way the drug is written.
func TestEveryHazard(t *testing.T) {
	rows := table(t, "hazards.csv")
	if len(rows) != 90 || len(Hazards()) != 90 {
		t.Fatalf("%d rows, %d hazards, want 90", len(rows), len(Hazards()))
	}
	var outside []string
	for i, r := range rows {
		h := Hazards()[i]
		if h.ID != r["id"] || h.Drug != r["drug"] || h.DrugClass != r["drug_class"] || h.Rank != r["taxon_rank"] || h.Taxon != r["taxon"] || h.Route != r["route"] ||
			h.Severity != r["severity"] || h.WhatHappens != r["what_happens"] || h.Why != r["why_scaling_misses_it"] || h.Citation != r["citation"] ||
			h.Verified != r["verified"] || h.Condition != r["condition"] || h.ConditionKind != r["condition_kind"] {
			t.Errorf("%s is read as %+v", r["id"], h)
		}
		if h.WhatHappens == "" || h.Why == "" || h.Citation == "" || h.Verified == "" || h.DrugClass == "" {
			t.Errorf("%s has an empty cell", h.ID)
		}
		if !slices.Contains([]string{"contraindicated", "reduced margin", "caution"}, h.Severity) ||
			!slices.Contains([]string{"any", "oral", "parenteral", "intravenous", "topical", "inhaled", "rectal"}, h.Route) {
			t.Errorf("%s: severity %q, route %q", h.ID, h.Severity, h.Route)
		}
		if (h.Condition == "") != (h.ConditionKind == "") || (h.Question() == "") != (h.Condition == "") ||
			h.Condition != "" && h.Question() != "Is this patient "+h.Condition+"?" {
			t.Errorf("%s: condition %q of kind %q, question %q", h.ID, h.Condition, h.ConditionKind, h.Question())
		}
		if h.Operator != (h.Taxon == "Homo sapiens" && strings.HasPrefix(h.WhatHappens, "Operator hazard")) {
			t.Errorf("%s: operator %v", h.ID, h.Operator)
		}
		if h.Regulatory != strings.HasPrefix(h.Why, "regulatory") {
			t.Errorf("%s: regulatory %v", h.ID, h.Regulatory)
		}
		a, ok := patientOf(t, r)
		if !ok {
			outside = append(outside, r["taxon"])
		} else if r["taxon_rank"] != "any" {
			// Where the taxon stands is written out in the row; the animal agrees.
			for column, has := range map[string]string{"taxon_class": a.Class, "taxon_order": a.Order, "taxon_family": a.Family} {
				if r[column] != "" && r[column] != has {
					t.Errorf("%s: %s %q, %s has %q", h.ID, column, r[column], a.Name, has)
				}
			}
			if (r["taxon_rank"] == "species" || r["taxon_rank"] == "genus" || r["taxon_rank"] == "family") && r["taxon_family"] == "" {
				t.Errorf("%s has no family", h.ID)
			}
		}
		drug, class, via := r["drug"], r["drug_class"], "drug name"
		if drug == "" {
			via = "class " + class
		}
		for _, spelling := range []string{drug, strings.ToUpper(drug), " " + drug + "  ", drug + " sodium", drug + " hydrochloride injection 50 mg/mL", drug + " + samplazole"} {
			for _, given := range []string{"", class, strings.ToUpper(class) + "s"} {
				if drug == "" && given == "" {
					continue
				}
				for _, route := range []string{"", h.Route, strings.ToUpper(h.Route), "by some way"} {
					m, ok := matchOf(MatchHazards(spelling, given, a, route), h.ID)
					if !ok || m.Relation != "direct" || m.Meant != "" {
						t.Errorf("%s: MatchHazards(%q, %q, %s, %q) = %+v", h.ID, spelling, given, a.Name, route, m)
						continue
					}
					if m.Via != via && !strings.HasPrefix(m.Via, "synonym ") {
						t.Errorf("%s: via %q, want %q", h.ID, m.Via, via)
					}
				}
			}
		}
		// Another drug says nothing, but for what is known of the whole class.
		for _, m := range MatchHazards("samplazole", "", a, "") {
			t.Errorf("%s matches an invented drug: %s", a.Name, m.ID)
		}
	}
	slices.Sort(outside)
	if want := []string{"Dicentrarchus labrax", "Elasmobranchii", "Opsanus tau"}; !slices.Equal(outside, want) {
		t.Errorf("taxa without an animal in the table: %q, want %q", outside, want)
	}
}

// The table against the rows that it was written from: the number of rows by
// severity, counted there.
func TestHazardCoverage(t *testing.T) {
	c := HazardCoverage()
	want := make(map[string]int)
	memory := 0
	for _, r := range table(t, "hazards.csv") {
		want[r["severity"]]++
		if r["verified"] == "memory" {
			memory++
		}
	}
	if c.Rows != 90 || !maps.Equal(c.Severity, want) || c.Memory != memory {
		t.Errorf("%+v", c)
	}
	for _, s := range [][]string{c.Drugs, c.Classes, c.Taxa} {
		if len(s) == 0 || !slices.IsSorted(s) || len(slices.Compact(slices.Clone(s))) != len(s) {
			t.Errorf("%q", s)
		}
	}
	if !slices.Contains(c.Drugs, "carfentanil") || !slices.Contains(c.Classes, "NSAID") || !slices.Contains(c.Taxa, "genus Gyps") || !slices.Contains(c.Taxa, "any animal") {
		t.Errorf("%+v", c)
	}
}

// Names as they stand on labels and in records.
func TestMatchHazardsNames(t *testing.T) {
	for _, tt := range []struct{ drug, class, animal, route, id, via string }{
		{"acetaminophen", "", "cat", "PO", "h033", "synonym acetaminophen"},
		{"Acetaminophen tablets", "", "tiger", "PO", "h033", "synonym acetaminophen"},
		{"suxamethonium chloride", "", "pig", "IV", "h066", "synonym suxamethonium"},
		{"succinyl choline", "", "pig", "IV", "h066", "drug name"},
		{"thiopentone sodium", "", "dog", "IV", "h049", "synonym thiopentone"},
		{"cholecalciferol", "", "common marmoset", "PO", "h070", "synonym cholecalciferol"},
		{"vitamin D3", "", "common marmoset", "PO", "h070", "synonym vitamin D3"},
		{"vitamin D-3", "", "common marmoset", "PO", "h070", "synonym vitamin D3"},
		{"acetylsalicylic acid", "", "cat", "PO", "h036", "synonym acetylsalicylic acid"},
		{"ASA", "", "cat", "PO", "h036", "synonym ASA"},
		{"5-fluorouracil", "", "cat", "topical", "h044", "synonym 5-fluorouracil"},
		{"5 FU cream", "", "cat", "topical", "h044", "synonym 5-FU"},
		{"gentamycin sulphate", "", "red-tailed hawk", "IM", "h023", "synonym gentamycin"},
		{"gentamicin sulfate", "", "red-tailed hawk", "i.m.", "h023", "drug name"},
		{"flunixin meglumine", "", "griffon vulture", "IM", "h015", "synonym flunixin meglumine"},
		{"diclofenac-sodium", "", "griffon vulture", "IM", "h010", "drug name"},
		{"diclofenac epolamine", "", "griffon vulture", "topical", "h010", "synonym diclofenac epolamine"},
		{"doxycycline hyclate", "", "horse", "slow IV", "h054", "drug name"},
		{"melengestrol", "", "lion", "PO", "h046", "drug name"},
		{"procaine penicillin", "", "budgerigar", "IM", "h029", "drug name"},
		{"penicillin G procaine", "", "budgerigar", "IM", "h029", "drug name"},
		{"benzylpenicillin procaine + benzathine", "", "budgerigar", "IM", "h029", "drug name"},
		{"copper sulphate", "", "sheep", "PO", "h063", "synonym copper sulphate"},
		{"cupric oxide wire particles", "", "sheep", "PO", "h063", "synonym cupric oxide"},
		{"sodium selenite / vitamin E", "", "sheep", "SC", "h064", "synonym sodium selenite"},
		{"sodium phosphate", "", "cat", "PR", "h045", "drug name"},
		{"hypertonic phosphate enema", "", "cat", "rectal", "h045", "synonym hypertonic phosphate enema"},
		{"M99", "", "dog", "dart", "h082", "synonym M99"},
		{"carfentanil", "", "dog", "dart", "h082", "drug name"},
		{"etorphine-acepromazine", "", "horse", "IM", "h058", "drug name"},
		{"tiletamine-zolazepam", "", "tiger", "IM", "h047", "drug name"},
		{"tiletamine and zolazepam", "", "tiger", "IM", "h047", "synonym tiletamine"},
		{"Zolazepam/Tiletamine", "", "tiger", "IM", "h047", "synonym zolazepam"},
		{"ketamine with xylazine", "", "goat", "IM", "h059", "drug name"},
		{"ketamine-xylazine", "", "goat", "IM", "h059", "drug name"},
		{"lidocaine-prilocaine cream", "", "budgerigar", "topical", "h028", "class local anaesthetic"},
		{"lignocaine", "", "chicken", "SC", "h028", "class local anaesthetic"},
		{"MS-222", "", "chicken", "bath", "h028", "class local anaesthetic"},
		{"co-amoxiclav", "", "rabbit", "PO", "h071", "class penicillin"},
		{"amoxycillin trihydrate", "", "guinea pig", "PO", "h076", "class penicillin"},
		{"ampicillin", "", "golden hamster", "SC", "h079", "class penicillin"},
		{"ampicillin", "sulfonamide", "golden hamster", "SC", "h079", "class penicillin"}, // a wrong class takes nothing away
		{"clindamycin", "", "rabbit", "PO", "h072", "class lincosamide"},
		{"lincomycin-spectinomycin", "", "horse", "PO", "h053", "class lincosamide"},
		{"cephalexin", "", "golden hamster", "PO", "h079", "class cephalosporin"},
		{"erythromycin", "", "golden hamster", "PO", "h079", "drug name"},
		{"clindamycin", "", "chinchilla", "PO", "h077", "class lincosamide"},
		{"moxidectin", "", "dog", "SC", "h032", "class avermectin"},
		{"milbemycin oxime", "", "dog", "PO", "h032", "class avermectin"},
		{"carbaryl", "", "chicken", "topical", "h026", "class carbamate"},
		{"malathion", "", "chicken", "topical", "h026", "class organophosphate"},
		{"dexamethasone sodium phosphate", "", "African grey parrot", "IM", "h027", "class corticosteroid"},
		{"isoflurane", "", "pig", "mask", "h065", "class volatile anaesthetic"},
		{"lasalocid", "", "dog", "in feed", "h050", "class ionophore"},
		{"tiamulin", "", "pig", "PO", "h088", "drug name"},
		{"chlorhexidine", "", "axolotl", "topical", "h006", "class topical antiseptic"},
		{"phenol", "", "cat", "topical", "h035", "class phenol"},
		{"marbofloxacin", "", "dog", "PO", "h089", "class fluoroquinolone"},
		{"medetomidine hydrochloride", "", "sheep", "IV", "h060", "class alpha-2 agonist"},
		{"nitrofurantoin", "", "pig", "PO", "h085", "class nitrofuran"},
		{"ronidazole", "", "cattle", "PO", "h086", "class nitroimidazole"},
		{"unheardofcillin", "", "rabbit", "PO", "h071", "class penicillin, by the ending -cillin"},
		{"newfloxacin", "", "dog", "PO", "h089", "class fluoroquinolone, by the ending -floxacin"},
		{"demoxacin", "", "dog", "PO", "h089", "class fluoroquinolone, by the ending -oxacin"},
		{"cefsampl", "", "golden hamster", "SC", "h079", "class cephalosporin, by the beginning cef-"},
		{"ivermectin1%", "", "Greek tortoise", "SC", "h001", "drug name"},
		{"co-codamol", "", "cat", "PO", "h033", "drug name"},
		{"amox/clav", "", "rabbit", "PO", "h071", "class penicillin"},
		{"Pen-G", "", "rabbit", "PO", "h071", "class penicillin"},
		{"genta", "", "ball python", "IM", "h003", "synonym genta"},
		{"metro", "", "dog", "PO", "h051", "synonym metro"},
		{"propacetamol", "", "cat", "IV", "h033", "propacetamol, which yields paracetamol"},
		{"capecitabine", "", "cat", "PO", "h044", "capecitabine, which yields fluorouracil"},
		{"febantel + praziquantel", "", "pigeon", "PO", "h019", "febantel, which yields fenbendazole"},
		{"albendazole oxide", "", "pigeon", "PO", "h020", "albendazole oxide, which yields albendazole"},
		{"aceclofenac", "", "cinereous vulture", "IM", "h011", "aceclofenac, which yields diclofenac"},
		{"tetramisole", "", "goat", "SC", "h090", "tetramisole, which yields levamisole"},
		{"samplazole", "NSAIDs", "chicken", "", "h018", "class NSAID"},
		{"samplazole", "non-steroidal anti-inflammatory", "chicken", "", "h018", "class NSAID"},
		{"samplazole", "Nonsteroidal anti-inflammatory drugs", "chicken", "", "h018", "class NSAID"},
		{"sodium phosphate, dibasic", "", "cat", "enema", "h045", "drug name"},
		{"sodium phosphate enema 60 mL", "", "cat", "enema", "h045", "drug name"},
		{"samplazole", "beta-lactam", "rabbit", "PO", "h071", "class penicillin"},
		{"samplazole", "β-lactam", "rabbit", "PO", "h071", "class penicillin"},
		{"samplazole", "macrocyclic lactones", "dog", "", "h032", "class avermectin"},
		{"samplazole", "broad-spectrum penicillin antibiotic", "rabbit", "PO", "h071", "class penicillin"},
		{"samplazole", "glucocorticoid", "chicken", "", "h027", "class corticosteroid"},
		{"samplazole", "local anesthetic", "chicken", "", "h028", "class local anaesthetic"},
		{"samplazole", "α2-agonist", "sheep", "IV", "h060", "class alpha-2 agonist"},
		{"", "penicillin", "rabbit", "PO", "h071", "class penicillin"},
		{"\u0456vermectin", "", "Greek tortoise", "", "h001", "drug name"}, // Cyrillic i
		{"iver\u200bmectin", "", "Greek tortoise", "", "h001", "drug name"},
		{"Iver mectin", "", "Greek tortoise", "", "h001", "drug name"},
	} {
		m, ok := matchOf(MatchHazards(tt.drug, tt.class, found(t, tt.animal), tt.route), tt.id)
		if !ok || m.Relation != "direct" || m.Via != tt.via || m.Meant != "" {
			t.Errorf("%q (%q) in the %s: %s is %v, %s %s via %q, meant %q; want via %q", tt.drug, tt.class, tt.animal, tt.id, ok, m.Relation, m.RelativeRank, m.Via, m.Meant, tt.via)
		}
	}
}

func TestMatchHazardsMisspelt(t *testing.T) {
	for _, tt := range []struct{ drug, animal, id, meant string }{
		{"ivermectine B", "Greek tortoise", "h001", ""}, // a spelling of other languages is known
		{"ivermectn", "Greek tortoise", "h001", "ivermectin"},
		{"ivremectin", "Greek tortoise", "h001", "ivermectin"},
		{"paracetmol", "cat", "h033", "paracetamol"},
		{"parcetamoll", "cat", "h033", "paracetamol"},
		{"acetominophen", "cat", "h033", "acetaminophen"},
		{"ampicilin", "rabbit", "h071", "ampicillin"},
		{"metronidizole", "dog", "h051", "metronidazole"},
		{"diclofenak", "griffon vulture", "h010", "diclofenac"},
		{"asprin", "cat", "h036", "aspirin"},
		{"permetrin", "cat", "h038", "permethrin"},
		{"fenbendozole", "pigeon", "h019", "fenbendazole"},
		{"xylotol", "dog", "h048", "xylitol"},
		{"enroflaxacin", "cat", "h041", "enrofloxacin"},
		{"iver mectn", "Greek tortoise", "h001", "ivermectin"},
		{"chlindamycin", "rabbit", "h072", "clindamycin"},
		{"asetaminofen", "cat", "h033", "acetaminophen"}, // by ear
		{"acetominafen", "cat", "h033", "acetaminophen"},
		{"eevermektin", "Greek tortoise", "h001", "ivermectine"},
		{"fenbendazolepraziquantel", "pigeon", "h019", "fenbendazole"}, // two names run together
		{"etorfeen", "white rhinoceros", "h082", "etorfin"},
		{"carfentinall", "lion", "h082", "carfentanil"},
	} {
		a := found(t, tt.animal)
		m, ok := matchOf(MatchHazards(tt.drug, "", a, ""), tt.id)
		if !ok || m.Meant != tt.meant || (tt.meant != "") != (m.Via == "near spelling") {
			t.Errorf("%q in the %s: %s is %v via %q, meant %q; want %q", tt.drug, tt.animal, tt.id, ok, m.Via, m.Meant, tt.meant)
		}
	}
	if m, ok := matchOf(MatchHazards("samplazole", "penicilin", found(t, "rabbit"), "PO"), "h071"); !ok || m.Via != "near spelling" || m.Meant != "penicillin" {
		t.Errorf("a misspelt class: %+v", m)
	}
}

func TestMatchHazardsSilent(t *testing.T) {
	for _, tt := range []struct{ drug, class, animal, route string }{
		{"examplicillin", "penicillin", "giant anteater", "SC"},
		{"examplicillin", "penicillin", "dog", "PO"},
		{"samplazole", "", "cat", "PO"},
		{"dexamethasone sodium phosphate", "", "cat", "PO"}, // a salt, no enema
		{"amoxicillin", "", "rabbit", "SC"},                 // the row is about oral penicillins
		{"doxycycline", "", "horse", "PO"},
		{"doxycycline", "", "horse", "IM injection"},
		{"ceftiofur", "cephalosporin", "dog", "SC"},
		{"water for injection", "", "cat", ""},
		{"", "", "cat", ""},
		{"50", "mg", "cat", ""},
		{"+ / &", "()", "cat", "--"},
		{"hydrochloride", "antibiotic", "cat", ""},
	} {
		for _, m := range MatchHazards(tt.drug, tt.class, found(t, tt.animal), tt.route) {
			t.Errorf("%q in the %s by %q: %s %s via %s", tt.drug, tt.animal, tt.route, m.ID, m.Relation, m.Via)
		}
	}
}

func TestMatchHazardsRelation(t *testing.T) {
	for _, tt := range []struct{ drug, animal, id, relation, rank string }{
		{"ivermectin", "wolf", "h032", "direct", ""},          // one species with the dog
		{"aspirin", "European wildcat", "h036", "direct", ""}, // one species with the cat
		{"halothane", "wild boar", "h065", "direct", ""},      //
		{"halothane", "pig", "h065", "direct", ""},            // the row is about the species, the pig is a trinomial
		{"paracetamol", "tiger", "h033", "direct", ""},        // family
		{"paracetamol", "dog", "h033", "relative", "order"},   //
		{"paracetamol", "rabbit", "h033", "", ""},             //
		{"diclofenac", "golden eagle", "h010", "relative", "family"},
		{"diclofenac", "osprey", "h010", "relative", "order"},
		{"diclofenac", "osprey", "h011", "relative", "order"},        //
		{"diclofenac", "golden eagle", "h011", "relative", "family"}, //
		{"ivermectin", "coyote", "h032", "", ""},                     // a breed's gene is nobody else's
		{"thiopental", "red fox", "h049", "", ""},                    //
		{"xylazine", "red deer", "h059", "relative", "order"},        //
		{"metronidazole", "corn snake", "h004", "relative", "family"},
		{"fenbendazole", "mourning dove", "h019", "direct", ""},
		{"fenbendazole", "chicken", "h019", "", ""},                       // an order row has no relatives
		{"meloxicam", "chicken", "h018", "direct", ""},                    //
		{"meloxicam", "dog", "h018", "", ""},                              // nor has a class row
		{"clenbuterol", "horse", "h087", "relative", "food animal"},       // law
		{"chloramphenicol", "cattle", "h084", "direct", ""},               //
		{"chloramphenicol", "chicken", "h084", "relative", "food animal"}, //
		{"etorphine", "giant anteater", "h082", "direct", ""},             // operator
		{"etorphine", "black rhinoceros", "h081", "relative", "family"},
		{"levamisole", "giant anteater", "h090", "direct", ""},
		{"moxidectin", "Greek tortoise", "h001", "relative", "drug class"},
		{"ivermectin", "Greek tortoise", "h001", "direct", ""},
		{"carprofen", "griffon vulture", "h016", "direct", ""},
		{"carprofen", "griffon vulture", "h010", "", ""}, // the table speaks of carprofen itself
		{"phenylbutazone", "griffon vulture", "h010", "relative", "drug class"},
		{"phenylbutazone", "golden eagle", "h010", "", ""}, // one step aside, not two
		{"chloramphenicol", "giant anteater", "h083", "direct", ""},
		{"florfenicol", "giant anteater", "h083", "", ""},
		{"florfenicol", "cattle", "h084", "", ""},
		{"tilmicosin", "chimpanzee", "h069", "direct", ""},
		{"tilmicosin", "dog", "h069", "direct", ""},
		{"tylosin", "dog", "h069", "", ""},
		{"tylosin", "chimpanzee", "h069", "relative", "drug class"},
		{"azithromycin", "golden hamster", "h079", "relative", "drug class"}, // of the class of erythromycin, which the row names
		{"valnemulin", "pig", "h088", "relative", "drug class"},              // of the class of tiamulin
		{"azithromycin", "rabbit", "h079", "", ""},
	} {
		m, ok := matchOf(MatchHazards(tt.drug, "", found(t, tt.animal), ""), tt.id)
		if ok != (tt.relation != "") || m.Relation != tt.relation || m.RelativeRank != tt.rank {
			t.Errorf("%s in the %s: %s is %q %q, want %q %q", tt.drug, tt.animal, tt.id, m.Relation, m.RelativeRank, tt.relation, tt.rank)
		}
	}
	// A condition is asked of the animal itself, not of its relatives.
	for animal, asked := range map[string]bool{"turkey": true, "chicken": false} {
		if m, ok := matchOf(MatchHazards("monensin", "", found(t, animal), "PO"), "h030"); !ok || (m.Question() != "") != asked {
			t.Errorf("%s: %q", animal, m.Question())
		}
	}
	// Who is in danger: the handler, or the animal and the handler.
	for _, tt := range []struct {
		drug, animal, id string
		operator         bool
	}{
		{"etorphine", "lion", "h082", true}, {"chloramphenicol", "lion", "h083", true}, {"tilmicosin", "lion", "h069", true},
		{"tilmicosin", "chimpanzee", "h069", false}, {"levamisole", "lion", "h090", false},
	} {
		if m, ok := matchOf(MatchHazards(tt.drug, "", found(t, tt.animal), ""), tt.id); !ok || m.Operator != tt.operator {
			t.Errorf("%s in the %s: %s operator %v", tt.drug, tt.animal, tt.id, m.Operator)
		}
	}
	// Without an animal, what concerns every patient stays.
	got := MatchHazards("etorphine + levamisole + paracetamol", "", nil, "")
	if _, ok := matchOf(got, "h082"); !ok || len(got) != 2 {
		t.Errorf("no animal: %+v", got)
	}
}

// What an animal's own list holds is what a draft of each drug would raise.
func TestHazardsOf(t *testing.T) {
	for _, name := range []string{"cat", "tiger", "griffon vulture", "alpaca", "giant anteater", "Greek tortoise", "dog", "chicken"} {
		a := found(t, name)
		list := HazardsOf(a)
		ids := make(map[string]string)
		for _, m := range list {
			ids[m.ID] = m.Relation
			drug, class := m.Drug, ""
			if drug == "" {
				class = m.DrugClass
			}
			if got, ok := matchOf(MatchHazards(drug, class, a, ""), m.ID); !ok || got.Relation != m.Relation || got.RelativeRank != m.RelativeRank || got.Condition != m.Condition {
				t.Errorf("%s: the list has %s %s %s, a draft %+v", name, m.ID, m.Relation, m.RelativeRank, got)
			}
		}
		if !slices.IsSortedFunc(list, compareMatches) {
			t.Errorf("%s: out of order", name)
		}
		for _, h := range Hazards() {
			drug, class := h.Drug, ""
			if drug == "" {
				class = h.DrugClass
			}
			m, ok := matchOf(MatchHazards(drug, class, a, ""), h.ID)
			if ok && !m.Operator && m.RelativeRank != "drug class" && m.RelativeRank != "food animal" && ids[h.ID] == "" {
				t.Errorf("%s: %s is not in the list", name, h.ID)
			}
		}
	}
	if m, ok := matchOf(HazardsOf(found(t, "alpaca")), "h067"); !ok || m.Relation != "relative" || m.RelativeRank != "order" {
		t.Errorf("alpaca: %+v", m)
	}
}

// The worst stands first.
func TestMatchHazardsOrder(t *testing.T) {
	got := MatchHazards("ketoprofen + fenbendazole + gentamicin", "", found(t, "griffon vulture"), "IM")
	if len(got) < 4 || got[0].Severity != "contraindicated" {
		t.Fatalf("%+v", got)
	}
	if !slices.IsSortedFunc(got, func(x, y HazardMatch) int {
		return cmp.Or(severityRank(x.Severity)-severityRank(y.Severity), cmp.Compare(x.Relation, y.Relation), cmp.Compare(x.ID, y.ID))
	}) {
		t.Errorf("out of order: %+v", got)
	}
}

func TestReadRoute(t *testing.T) {
	for text, want := range map[string]routes{
		"": 0, "SC": intoSC, "s.c.": intoSC, "s/c": intoSC, "subcutaneously": intoSC, "sub-cutaneous": intoSC, "sub-q": intoSC, "SQ": intoSC,
		"IM": intoIM, "i/m": intoIM, "deep intramuscular": intoIM, "intra-muscular": intoIM, "IM injection": intoIM, "IM twice daily": intoIM, "dart": intoIM,
		"IM or SC": intoIM | intoSC, "IM/SC": intoIM | intoSC,
		"IV": byVein, "slow i.v.": byVein, "IV CRI": byVein, "injection": byVein, "IO": byVein, "intracardiac": byVein,
		"IC": byVein, "ICe": intoIP, "intracoelomic": intoIP, "ip": intoIP,
		"PO": oral, "p.o.": oral, "P O": oral, "p/o": oral, "PO q12h": oral, "per os": oral, "by mouth": oral, "by mouth with food": oral, "oral gavage": oral,
		"in feed": oral, "in the drinking water": oral, "stomach tube": oral, "NG tube": oral, "tablet": oral, "intragastric": oral,
		"topical": topical, "spot-on": topical, "pour-on": topical, "transdermal": topical, "bath": inWater,
		"inhaled": inhaled, "nebulisation": inhaled, "by mask": inhaled, "rectal": rectal, "enema": rectal,
		"SC or PO": intoSC | oral, "IV then oral": byVein | oral,
	} {
		if got := ReadRoute(text); got.ways != want || !got.all && text != "" {
			t.Errorf("ReadRoute(%q) = %b, all understood: %v; want %b", text, got.ways, got.all, want)
		}
	}
	// What is not understood rules nothing out, whatever stands beside it.
	for text, oral := range map[string]bool{"intramammary": false, "by some way": false, "??": false, "слово": false, "PO by some way": true, "syringe-fed": true} {
		got := ReadRoute(text)
		if got.Oral() != oral || got.Same(got) {
			t.Errorf("ReadRoute(%q) = %b, all understood: %v", text, got.ways, got.all)
		}
		for _, way := range []string{"any", "oral", "parenteral", "intravenous", "topical", "inhaled", "rectal"} {
			if !got.admits(way) {
				t.Errorf("%q rules %s out", text, way)
			}
		}
	}
	for _, tt := range []struct {
		a, b string
		same bool
	}{
		{"SC", "s.c.", true}, {"SC", "IM", false}, {"PO", "by mouth with food", true}, {"IV", "IO", true}, {"SC", "SC or IM", false},
		{"", "", false}, {"intramammary", "intramammary", false},
	} {
		if got := ReadRoute(tt.a).Same(ReadRoute(tt.b)); got != tt.same {
			t.Errorf("%q and %q: same %v", tt.a, tt.b, got)
		}
	}
}

// A slip in a name that the table is about is caught: one letter changed,
// lost, doubled or swapped with the next.
func TestHazardNamesSurviveASlip(t *testing.T) {
	var names []nearName
	for _, n := range nearNames().hazard {
		if !n.class && len(n.key) >= 6 {
			names = append(names, n)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.SampledFrom(names).Draw(t, "name")
		i := rapid.IntRange(0, len(n.key)-2).Draw(t, "at")
		b := []byte(n.key)
		switch rapid.IntRange(0, 3).Draw(t, "slip") {
		case 0:
			b[i] = byte(rapid.IntRange('a', 'z').Draw(t, "letter"))
		case 1:
			b = slices.Delete(b, i, i+1)
		case 2:
			b = slices.Insert(b, i, b[i])
		case 3:
			b[i], b[i+1] = b[i+1], b[i]
		}
		drugs := make(map[string]bool)
		read, _ := readDrug(string(b), "")
		for _, r := range read {
			drugs[r.drug] = true
		}
		// The slip may have made another name or word of it.
		_, drug := lookUp(drugsIndex, string(b))
		_, class := lookUp(drugClassesIndex, string(b))
		if drug || class || !otherDrug(string(b)) {
			return
		}
		if !drugs[parseDrug(n.line).drugs[0]] {
			t.Errorf("%q is not read as %s, but as %v", b, n.key, drugs)
		}
	})
}

// The lists of names are sound: every drug of a hazard and every class is
// found by each of its names, and no preparation or salt hides one.
func TestDrugNames(t *testing.T) {
	classesOf := make(map[string]string)
	for _, r := range table(t, "drug-classes.csv") {
		classesOf[r["drug"]] = r["classes"]
		if r["basis"] == "" {
			t.Errorf("%s has no basis", r["drug"])
		}
	}
	has := func(text, drug, class string) {
		read, _ := readDrug(text, "")
		for _, r := range read {
			if r.how < bySpelling && (drug != "" && r.drug == drug || class != "" && r.class == class) {
				return
			}
		}
		t.Errorf("%q is not read as %s%s", text, drug, class)
	}
	for drug, classes := range classesOf {
		has(drug, drug, "")
		has(strings.ToUpper(drug)+" INJECTION", drug, "")
		for _, c := range strings.Split(classes, "; ") {
			has(drug, "", c)
		}
	}
	for _, r := range table(t, "drug-synonyms.csv") {
		for _, drug := range strings.Split(r["drug"], "; ") {
			has(r["name"], drug, "")
		}
	}
	for _, r := range table(t, "drug-class-names.csv") {
		for _, c := range strings.Split(r["classes"], "; ") {
			has(r["name"], "", c)
		}
	}
	for _, r := range table(t, "drug-stems.csv") {
		word := "sampl" + r["stem"]
		if r["at"] == "start" {
			word = r["stem"] + "sampl"
		}
		has(word, "", r["classes"])
	}
	for _, r := range table(t, "hazards.csv") {
		if r["drug"] != "" && !strings.Contains("; "+classesOf[canonicalDrug(r["drug"])]+";", "; "+r["drug_class"]+";") {
			t.Errorf("%s: %s is of the class %q in the hazard table, of %q in the list of drugs", r["id"], r["drug"], r["drug_class"], classesOf[canonicalDrug(r["drug"])])
		}
	}
}

// A batch asks again and again; what is remembered has a bound.
func TestCandidatesAreForgotten(t *testing.T) {
	for i := range 3 * rememberAtMost {
		name := "samplazole " + strings.Repeat("a", i%100) + string(rune('a'+i%26)) + strings.Repeat("b", i/100)
		remember(name, "")
	}
	remembered.RLock()
	defer remembered.RUnlock()
	if n := len(remembered.found); n > rememberAtMost {
		t.Errorf("%d names are remembered", n)
	}
}

func FuzzMatchHazards(f *testing.F) {
	f.Add("acetaminophen", "NSAID", "PO")
	f.Add("penicillin G procaine + samplazole", "β-lactam", "slow i.v.")
	f.Add("iver\u200bmectin", "\u202e", "\xff")
	f.Add("5-FU (cream) 5 %", "", "IM/SC")
	a, err := Find("cat")
	if err != nil {
		f.Fatal(err)
	}
	f.Fuzz(func(t *testing.T, drug, class, route string) {
		all := MatchHazards(drug, class, a, "")
		some := MatchHazards(drug, class, a, route)
		seen := make(map[string]bool)
		for _, m := range all {
			if seen[m.ID] || m.Via == "" || m.Relation != "direct" && m.Relation != "relative" ||
				(m.Relation == "relative") != (m.RelativeRank != "") || (m.Meant != "") != (m.Via == "near spelling") {
				t.Errorf("%q: %+v", drug, m)
			}
			seen[m.ID] = true
		}
		// A route may only take away.
		for _, m := range some {
			if !seen[m.ID] && m.RelativeRank != "drug class" {
				t.Errorf("%q by %q matches %s, without a route not", drug, route, m.ID)
			}
		}
		// Text beside a name takes nothing away.
		for _, text := range []string{drug + " + ivermectin", "ivermectin + " + drug} {
			if _, ok := matchOf(MatchHazards(text, class, &Animal{Order: "Testudines"}, ""), "h001"); !ok {
				t.Errorf("%q is not read as ivermectin", text)
			}
		}
	})
}

func BenchmarkMatchHazards(b *testing.B) {
	for name, c := range map[string][2]string{"hit": {"amoxicillin trihydrate", "penicillin"}, "none": {"examplicillin", "penicillin"}} {
		b.Run(name, func(b *testing.B) {
			a := found(b, "rabbit")
			if name == "none" {
				a = found(b, "giant anteater")
			}
			b.ReportAllocs()
			for b.Loop() {
				MatchHazards(c[0], c[1], a, "PO")
			}
		})
	}
}

// The first match of a program reads the table.
func BenchmarkHazardTable(b *testing.B) {
	for b.Loop() {
		readHazards()
	}
}

func BenchmarkReadDrug(b *testing.B) {
	for b.Loop() {
		read, unread := readDrug("examplicillin", "penicillin")
		findCandidates(read)
		newReading("examplicillin", read, unread)
	}
}

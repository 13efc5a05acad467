package species

import "tayra/species/internal/fold"

// routes is a set of ways into the body; 0 is an unknown one.
type routes uint8

const (
	parenteral routes = 1 << iota
	intravenous
	oral
	topical
	inhaled
	rectal
)

// routeWords are the words and abbreviations of clinical notes. An injection
// into a vein, the heart or the marrow is intravenous as well as parenteral.
var routeWords = map[string]routes{
	"iv": parenteral | intravenous, "intravenous": parenteral | intravenous, "intravenously": parenteral | intravenous,
	"cri": parenteral | intravenous, "io": parenteral | intravenous, "intraosseous": parenteral | intravenous,
	"intraosseously": parenteral | intravenous, "intracardiac": parenteral | intravenous, "intraarterial": parenteral | intravenous,
	"ic": parenteral | intravenous, // intracardiac to some, intracoelomic to others
	"im": parenteral, "intramuscular": parenteral, "intramuscularly": parenteral, "dart": parenteral, "darted": parenteral,
	"sc": parenteral, "sq": parenteral, "subq": parenteral, "subcut": parenteral, "subcutaneous": parenteral,
	"subcutaneously": parenteral, "hypodermic": parenteral,
	"ip": parenteral, "intraperitoneal": parenteral, "intraperitoneally": parenteral, "ice": parenteral, "icoe": parenteral,
	"intracoelomic": parenteral, "intracelomic": parenteral, "intradermal": parenteral, "epidural": parenteral,
	"intrathecal": parenteral, "perineural": parenteral, "intraarticular": parenteral, "intralesional": parenteral,
	"oral": oral, "orally": oral, "po": oral, "peros": oral, "mouth": oral, "gavage": oral, "gavaged": oral, "feed": oral,
	"food": oral, "water": oral, "tube": oral, "stomach": oral, "drench": oral, "buccal": oral, "sublingual": oral,
	"transmucosal": oral, "otm": oral,
	"topical": topical, "topically": topical, "transdermal": topical, "transdermally": topical, "skin": topical,
	"dermal": topical, "cutaneous": topical, "percutaneous": topical, "spot": topical, "spoton": topical, "pour": topical,
	"pouron": topical, "bath": topical, "bathing": topical, "immersion": topical, "soak": topical, "dip": topical,
	"shampoo": topical, "wound": topical, "collar": topical, "spray": topical | inhaled,
	"inhaled": inhaled, "inhalation": inhaled, "inhalational": inhaled, "nebulised": inhaled, "nebulized": inhaled,
	"nebulisation": inhaled, "nebulization": inhaled, "mask": inhaled, "inhalant": inhaled, "intratracheal": inhaled,
	"rectal": rectal, "rectally": rectal, "pr": rectal, "enema": rectal, "cloacal": rectal, "percloacal": rectal,
}

// anyInjection are words for an injection that leave open into what.
var anyInjection = setOf("parenteral parenterally injection injections injected injectable inj infusion infused")

// routeFillers are words of a route that say nothing about the way in.
var routeFillers = setOf("slow slowly on rapid rapidly deep by per via in into the or of medicated drinking bolus over route once given")

// readRoute reads the route of a case: "slow IV", "s.c.", "IM or SC". A route
// with any word that it does not know is unknown, since what it does not say
// must not rule a hazard out.
func readRoute(text string) routes {
	switch text { // nearly all routes; spares the rest
	case "":
		return 0
	case "SC", "IM", "IP":
		return parenteral
	case "IV":
		return parenteral | intravenous
	case "PO", "oral":
		return oral
	}
	var out routes
	injection := false
	tokens := fold.Tokens(text)
	for i := 0; i < len(tokens); i++ {
		w := tokens[i]
		r := routeWords[w]
		// Abbreviations with full stops and words with hyphens fall apart:
		// "s.c.", "intra-muscular".
		if r == 0 && i+1 < len(tokens) && tokens[i+1] != fold.Boundary {
			if r = routeWords[w+tokens[i+1]]; r != 0 {
				i++
			}
		}
		switch {
		case r != 0:
			out |= r
		case anyInjection[w]:
			injection = true
		case w != fold.Boundary && !routeFillers[w]:
			return 0
		}
	}
	if injection && out&parenteral == 0 {
		out |= parenteral | intravenous
	}
	return out
}

// admits reports whether a hazard of a route concerns a drug given by these.
func (r routes) admits(hazardRoute string) bool {
	if r == 0 {
		return true
	}
	switch hazardRoute {
	case "parenteral":
		return r&parenteral != 0
	case "intravenous":
		return r&intravenous != 0
	case "oral":
		return r&oral != 0
	case "topical":
		return r&topical != 0
	case "inhaled":
		return r&inhaled != 0
	case "rectal":
		return r&rectal != 0
	}
	return true // "any"
}

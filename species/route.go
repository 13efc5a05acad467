package species

import "tayra/species/internal/fold"

// Route is the ways into the body that the words for a route of administration
// name: a set, since "IM or SC" names two.
type Route struct {
	ways routes
	all  bool // every word was understood
}

// routes is a set of ways into the body.
type routes uint16

const (
	parenteral routes = 1 << iota
	intravenous
	oral
	topical
	inhaled
	rectal
	intramuscular
	subcutaneous
	intracoelomic // or intraperitoneal
	immersion
)

// Sets of ways. An injection into a vein, the heart or the marrow is parenteral
// as well as intravenous.
const (
	byVein  = parenteral | intravenous
	intoIM  = parenteral | intramuscular
	intoSC  = parenteral | subcutaneous
	intoIP  = parenteral | intracoelomic
	inWater = topical | immersion
)

// routeWords are the words and abbreviations of clinical notes.
var routeWords = map[string]routes{
	"iv": byVein, "intravenous": byVein, "intravenously": byVein,
	"cri": byVein, "io": byVein, "intraosseous": byVein, "intraosseously": byVein, "intracardiac": byVein, "intraarterial": byVein,
	"ic": byVein, // intracardiac to some, intracoelomic to others
	"im": intoIM, "intramuscular": intoIM, "intramuscularly": intoIM, "dart": intoIM, "darted": intoIM,
	"sc": intoSC, "sq": intoSC, "subq": intoSC, "subcut": intoSC, "subcutaneous": intoSC, "subcutaneously": intoSC, "hypodermic": intoSC, "hypodermically": intoSC,
	"ip": intoIP, "intraperitoneal": intoIP, "intraperitoneally": intoIP, "ice": intoIP, "icoe": intoIP, "intracoelomic": intoIP,
	"intracelomic": intoIP, "intracoelomically": intoIP,
	"intradermal": parenteral, "epidural": parenteral, "epidurally": parenteral, "intrathecal": parenteral, "perineural": parenteral,
	"intraarticular": parenteral, "intralesional": parenteral,
	"oral": oral, "orally": oral, "po": oral, "os": oral, "peros": oral, "mouth": oral, "gavage": oral, "gavaged": oral, "feed": oral,
	"food": oral, "water": oral, "tube": oral, "stomach": oral, "drench": oral, "drenched": oral, "buccal": oral, "sublingual": oral,
	"transmucosal": oral, "otm": oral, "tablet": oral, "capsule": oral, "swallowed": oral, "syrup": oral,
	"intragastric": oral, "intragastrically": oral, "nasogastric": oral, "orogastric": oral, "oesophagostomy": oral, "esophagostomy": oral,
	"nasooesophageal": oral, "nasoesophageal": oral, "intraruminal": oral, "intraruminally": oral, "ng": oral, "fed": oral, "eaten": oral, "bait": oral,
	"topical": topical, "topically": topical, "transdermal": topical, "transdermally": topical, "skin": topical,
	"dermal": topical, "cutaneous": topical, "percutaneous": topical, "spot": topical, "spoton": topical, "pour": topical,
	"pouron": topical, "bath": inWater, "bathing": inWater, "immersion": inWater, "soak": inWater, "dip": inWater,
	"shampoo": topical, "wound": topical, "collar": topical, "spray": topical | inhaled, "backline": topical,
	"inhaled": inhaled, "inhalation": inhaled, "inhalational": inhaled, "nebulised": inhaled, "nebulized": inhaled,
	"nebulisation": inhaled, "nebulization": inhaled, "mask": inhaled, "inhalant": inhaled, "intratracheal": inhaled,
	"rectal": rectal, "rectally": rectal, "pr": rectal, "enema": rectal, "cloacal": rectal, "percloacal": rectal,
}

// anyInjection are words for an injection that leave open into what.
var anyInjection = setOf("parenteral parenterally injection injections injected injectable inj infusion infused")

// routeFillers are words of a route that say nothing about the way in.
var routeFillers = setOf(`slow slowly on rapid rapidly deep by per via in into the or of a an as with then followed medicated drinking bolus over route
	once given daily twice times every day days hour hours bid tid sid qid only remote delivery`)

// ReadRoute reads words for a route of administration: "slow IV", "s.c.",
// "IM or SC", "by mouth with food".
func ReadRoute(text string) Route {
	switch text { // nearly all routes; spares the rest
	case "":
		return Route{}
	case "SC":
		return Route{intoSC, true}
	case "IM":
		return Route{intoIM, true}
	case "IV":
		return Route{byVein, true}
	case "PO", "oral":
		return Route{oral, true}
	}
	out := Route{all: true}
	injection := false
	tokens := fold.Tokens(text)
	for i := 0; i < len(tokens); i++ {
		w := tokens[i]
		r := routeWords[w]
		// Abbreviations with full stops or strokes and words with hyphens fall
		// apart: "s.c.", "p/o", "intra-muscular".
		next := i + 1
		if len(w) == 1 && next < len(tokens) && tokens[next] == fold.Boundary {
			next++
		}
		if r == 0 && w != fold.Boundary && next < len(tokens) && (next == i+1 || len(tokens[next]) == 1) {
			if r = routeWords[w+tokens[next]]; r != 0 {
				i = next
			}
		}
		switch {
		case r != 0:
			out.ways |= r
		case anyInjection[w]:
			injection = true
		case w != fold.Boundary && !routeFillers[w] && !isNumber(w) && !isEvery(w):
			out.all = false
		}
	}
	if injection && out.ways&parenteral == 0 {
		out.ways |= byVein
	}
	return out
}

// isEvery reports whether a word is an interval such as "q12h".
func isEvery(w string) bool { return len(w) > 1 && w[0] == 'q' && isNumber(w[1:]) }

// Known reports whether any way into the body was read.
func (r Route) Known() bool { return r.ways != 0 }

// Oral reports whether the mouth or a tube into the gut is among the ways.
func (r Route) Oral() bool { return r.ways&oral != 0 }

// Injected reports whether an injection is among the ways.
func (r Route) Injected() bool { return r.ways&parenteral != 0 }

// Same reports whether two routes were read and name the same ways.
func (r Route) Same(other Route) bool {
	return r.all && other.all && r.ways != 0 && r.ways == other.ways
}

// admits reports whether a hazard of a route concerns a drug given by these. A
// route with any word that was not understood rules nothing out, since that
// word may be another way in.
func (r Route) admits(hazardRoute string) bool {
	if r.ways == 0 || !r.all {
		return true
	}
	switch hazardRoute {
	case "parenteral":
		return r.ways&parenteral != 0
	case "intravenous":
		return r.ways&intravenous != 0
	case "oral":
		return r.ways&oral != 0
	case "topical":
		return r.ways&topical != 0
	case "inhaled":
		return r.ways&inhaled != 0
	case "rectal":
		return r.ways&rectal != 0
	}
	return true // "any"
}

package dose

import "tayra/species"

// hazardLevel is how grave a row is here. A hazard of the animal itself:
// contraindicated is a stop, a reduced margin a warning (a stop when the
// drug's own margin is narrow), a caution a note. A name that is only near to
// the row's drug makes no difference, since a tidy number for a misspelt poison
// is the worst outcome of all: whoever means another drug overrides the stop
// with its name. A hazard known in a relative or of a sister drug is a warning
// that says so, a note where it would be one in the animal itself. A hazard to
// the person who handles the drug is a warning for every patient. A ban for
// food animals stands unless the case says that the patient is none; for animals
// of other kinds than those of the row it warns, and stops where the case says
// that the patient is one.
func hazardLevel(m *species.HazardMatch, c *Case) Level {
	switch {
	case m.Operator:
		return Warn
	case m.Regulatory && c.Patient.FoodProducing == No:
		return Note
	case m.Severity == "caution":
		return Note
	case m.Regulatory && c.Patient.FoodProducing == Yes:
		return Stop
	case m.Relation != "direct":
		return Warn
	case m.Severity == "contraindicated" || c.Drug.Margin == Narrow:
		return Stop
	}
	return Warn
}

// matchHazards and readDrug are variables so that a benchmark can draft without
// them and tell what they cost.
var (
	matchHazards = species.MatchHazards
	readDrug     = species.ReadDrug
)

// raiseHazards raises every row of the hazard table that concerns the case.
func raiseHazards(c *Case, n *numbers) {
	route := draftRoute(c, n)
	find := n.recall.hazards
	if find == nil {
		find = matchHazards
	}
	matches := find(c.Drug.Name, c.Drug.Class, c.Patient.Animal, route)
	for i := range matches {
		m := &matches[i]
		if m.RelativeRank == "food animal" && !mayBeEaten(c, n) {
			continue
		}
		n.raised = append(n.raised, raised{slug: HazardOnFile, level: hazardLevel(m, c), model: -1, hazard: m})
	}
}

// mayBeEaten says whether the patient is a food animal, or of a kind that is
// eaten and not said to be none.
func mayBeEaten(c *Case, n *numbers) bool {
	switch c.Patient.FoodProducing {
	case Yes:
		return true
	case No:
		return false
	}
	return n.models[0].pair.target.body.eaten
}

// raiseAnatomy notes what the patient's body does to the route. A route that is
// not given, or not understood, may be any.
func raiseAnatomy(c *Case, n *numbers, traits *drugTraits, add adder) {
	body := &n.models[0].pair.target.body
	route := species.ReadRoute(draftRoute(c, n))
	if body.renalPortal && (route.Injected() || !route.Known()) && (c.Drug.Elimination == Renal || c.Drug.Elimination == Mixed || c.Drug.Elimination == EliminationUnknown) {
		add(Anatomy, Note, -1).detail = "renal portal"
	}
	if g := body.gut; traits.antibiotic && (g == species.GutHindgut || g == species.GutRuminant || g == species.GutForegut) {
		switch {
		case route.Oral():
			add(Anatomy, Warn, -1).detail = "fermenting gut"
		case !route.Known():
			add(Anatomy, Warn, -1).detail = "fermenting gut, route not said"
		}
	}
	if body.amphibianSkin {
		add(Anatomy, Note, -1).detail = "amphibian skin"
	}
}

package dose

import "tayra/species"

// hazardLevel is how grave a row is here. A hazard of the animal itself:
// contraindicated is a stop, a reduced margin a warning (a stop when the
// drug's own margin is narrow), a caution a note. A hazard known in a relative,
// of a sister drug, or found by a near spelling is a warning that says so:
// nothing gets past by spelling, and nothing is stopped by a guess. A hazard
// to the person who handles the drug is a warning for every patient. A ban for
// food animals stands unless the case says that the patient is none.
func hazardLevel(m *species.HazardMatch, c *Case) Level {
	switch {
	case m.Operator:
		return Warn
	case m.Regulatory && c.Patient.FoodProducing == No:
		return Note
	case m.Relation != "direct" || m.Meant != "":
		if m.Severity == "caution" {
			return Note
		}
		return Warn
	case m.Severity == "contraindicated":
		return Stop
	case m.Severity == "reduced margin":
		if c.Drug.Margin == Narrow {
			return Stop
		}
		return Warn
	}
	return Note
}

// raiseHazards raises every row of the hazard table that concerns the case.
func raiseHazards(c *Case, n *numbers) {
	route := c.Drug.Route
	if route == "" {
		route = c.Models[n.from].Route
	}
	find := n.recall.hazards
	if find == nil {
		find = species.MatchHazards
	}
	matches := find(c.Drug.Name, c.Drug.Class, c.Patient.Animal, route)
	for i := range matches {
		m := &matches[i]
		n.raised = append(n.raised, raised{slug: HazardOnFile, level: hazardLevel(m, c), model: -1, hazard: m})
	}
}

// raiseAnatomy notes what the patient's body does to the route.
func raiseAnatomy(c *Case, n *numbers, traits *drugTraits, add adder) {
	body := &n.models[0].pair.target.body
	route := c.Drug.Route
	if route == "" {
		route = c.Models[n.from].Route
	}
	if body.renalPortal && !oralRoute(route) && (c.Drug.Elimination == Renal || c.Drug.Elimination == Mixed || c.Drug.Elimination == EliminationUnknown) {
		add(Anatomy, Note, -1).detail = "renal portal"
	}
	if traits.antibiotic && oralRoute(route) {
		if g := body.gut; g == "hindgut fermenter" || g == "ruminant" || g == "foregut fermenter" {
			add(Anatomy, Warn, -1).detail = "fermenting gut"
		}
	}
	if body.amphibianSkin {
		add(Anatomy, Note, -1).detail = "amphibian skin"
	}
}

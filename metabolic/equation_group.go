package metabolic

import "slices"

// Groups holds the groups of animals by which lines and constants are chosen.
var Groups = []string{
	"placental mammal", "marsupial", "monotreme",
	"non-passerine bird", "passerine bird",
	"squamate", "chelonian", "crocodilian", "tuatara",
	"frog", "salamander", "caecilian",
}

const (
	groupCitation = "comparative energy groups as used in zoological medicine (Sedgwick 1988; Sedgwick & Borkowski 1996; Kirkwood 1983)"
	groupVerified = "memory; consistent with the fitted lines that they round (Lasiewski & Dawson 129 and 78.3, Kleiber 70, Dawson & Hulbert 48.6)"
)

// groupConstants are the five rows group_* of data/equations.csv again, so
// that the usual draft need not read the table. A test holds both equal.
var groupConstants = []*Equation{
	groupConstant("group_placental", "placental mammals", "BMR", 70, 37, "", "placental mammal"),
	groupConstant("group_marsupial", "marsupials", "SMR", 49, 35, "the fitted line it rounds is 48.6·W^0.737", "marsupial"),
	groupConstant("group_nonpasserine", "non-passerine birds", "BMR", 78, 40, "exponent set to 0.75; 0.723 in the fitted line it rounds", "non-passerine bird"),
	groupConstant("group_passerine", "passerine birds", "BMR", 129, 42, "exponent set to 0.75; 0.724 in the fitted line it rounds", "passerine bird"),
	groupConstant("group_reptile37", "reptiles", "SMR", 10, 37, "no single fitted line behind it was found; holds at 37 °C only and falls to about half at 28 to 30 °C", "squamate", "chelonian", "crocodilian", "tuatara"),
}

func groupConstant(id, animals, kind string, k float64, t0 Celsius, note string, groups ...string) *Equation {
	return &Equation{
		ID: id, Animals: animals, AppliesTo: groups, Kind: kind, Form: FormPower, A: k, B: 0.75,
		MassUnit: "kg", RateUnit: "kcal/day", T0: t0, HasT0: true, Level: LevelInterspecific,
		Citation: groupCitation, Verified: groupVerified, Note: note, ectotherm: id == "group_reptile37",
	}
}

// GroupConstant gives the comparative constant of a group, B = k·W^0.75
// kcal/day with W in kg: placental mammal 70, marsupial 49, non-passerine bird
// 78, passerine bird 129, and 10 at 37 °C for squamates, chelonians,
// crocodilians and the tuatara. Monotremes and amphibians have none. It does
// not read the table of equations.
func GroupConstant(group string) (*Equation, bool) {
	for _, e := range groupConstants {
		if slices.Contains(e.AppliesTo, group) {
			return e, true
		}
	}
	return nil, false
}

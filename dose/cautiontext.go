package dose

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"tayra/metabolic"
	"tayra/species"
)

// caution puts a raised caution into words.
func (n *numbers) caution(c *Case, r *raised) Caution {
	out := Caution{Slug: r.name(), Level: r.level, Numbers: map[string]float64{}}
	who := animalWords(c.Patient.Animal)
	if r.model >= 0 {
		out.Model = c.Models[r.model].Animal.Name
		who = animalWords(c.Models[r.model].Animal)
	}
	patient := animalWords(c.Patient.Animal)
	num := func(name string, v float64) string {
		out.Numbers[name] = v
		return metabolic.Significant(v, 3)
	}
	kg := func(name string, v float64) string {
		out.Numbers[name+"_kg"] = v
		return metabolic.FormatMass(roundedMass(v))
	}
	perKg := func(name string, v float64) string {
		out.Numbers[name] = v
		u := c.Models[0].Regimen
		return metabolic.FormatDosePerKg(v, u.Unit, u.Interval.Kind == metabolic.Infusion)
	}
	t := &out.Text
	switch r.slug {
	case SameSpecies:
		*t = fmt.Sprintf("The model (%s) and the patient (%s) are one species, wild and domestic forms counted as one: nothing is scaled between them. The model's dose stands below as published, not as a draft; within one species a dose per kg is adjusted by other rules than this method's.", c.Models[r.model].Animal.Name, c.Patient.Animal.Name)
	case ImplausibleMass:
		*t = fmt.Sprintf("A mass of %s cannot be a %s, whose adults weigh %s to %s: grams for kilograms, or another animal? Correct the case.", kg("mass", r.a), who, kg("adult_low", r.b), kg("adult_high", r.c))
		out.Source = massSource(c, r.model)
	case NarrowMargin:
		*t = "The drug's margin is narrow: an error of the size in the published record can harm. Measure concentrations, or choose another drug."
		out.Source = "Houben, veterinary review, Ghent (read: summary)"
	case CrossClass:
		*t = fmt.Sprintf("Patient (%s) and model (%s) are of different classes.", classWords(c.Patient.Animal), classWords(c.Models[r.model].Animal))
		if c.Patient.Animal.Endotherm() && c.Models[r.model].Animal.Endotherm() {
			*t += " Of 30 avian clearances predicted from mammals, 7 fell within 2-fold and 13 within 3-fold of the observed value."
			if c.Patient.Animal.Mammal() {
				*t += " Of the other direction no record is known to this program."
			}
			out.Source = "Hunter et al. 2008 J Zoo Wildl Med 39"
		} else {
			*t += " No published record of scaling between them is known to this program."
		}
		if r.level == Warn {
			*t += " The case calls the margin wide."
		}
	case CrossThermy:
		*t = fmt.Sprintf("One of the two warms itself, the other has the temperature of its surroundings (%s, %s). No published record of scaling between such animals is known to this program.", patient, who)
	case TorpidPatient:
		*t = "The patient is torpid or hibernating: its metabolic rate may be a small part of the one used here."
	case NeonatePatient:
		*t = "A neonate clears drugs by its maturity, not by its mass: enrofloxacin clearance was 104 mL/h/kg in week-old foals and about 357 in mares."
		out.Source = "Am J Vet Res 2000;61:706 (read); Haines 2000 (357 computed)"
	case ClearingOrgan:
		*t = fmt.Sprintf("The organ that clears the drug is diseased (%s disease, %s elimination): clearance may be far below the one scaled.", organWords(r.detail), eliminationName(c.Drug.Elimination))
	case DepotForm:
		*t = "A depot or long-acting form: its absorption, not the animal's clearance, sets the interval. No interval is scaled."
		if r.detail != "" {
			*t = "The drug's name speaks of a depot or long-acting form (" + r.detail + "), whose absorption, not the animal's clearance, sets the interval: none is scaled for such. Write formulation in the case: depot, or solution if it is none."
		}
	case AboveTolerated:
		tol := c.Models[r.model].Tolerated
		if n.stopped { // the number that a stop holds back is not told by the stop
			*t = fmt.Sprintf("The dose per kg%s is above the highest that the case cites as tolerated by the model, %s (%s).", comma(r.detail), perKg("tolerated_per_kg", r.b), tol.Source)
		} else {
			*t = fmt.Sprintf("The drafted dose%s, %s, is above the highest that the case cites as tolerated by the model, %s (%s).", comma(r.detail), perKg("drafted_per_kg", r.a), perKg("tolerated_per_kg", r.b), tol.Source)
		}
	case Peak:
		*t = fmt.Sprintf("One administration is %s times the model's dose per kg: effects that follow the peak grow with it.", num("peak_ratio", r.a))
		if c.Models[r.model].Regimen.Interval.Kind == metabolic.Infusion {
			*t = fmt.Sprintf("The rate per kg is %s times the model's.", num("peak_ratio", r.a))
		}
		out.Numbers["threshold"] = r.b
	case EffectDriven:
		*t = fmt.Sprintf("%s: its effect differs between species because receptors do, not because clearance does. An equal blood level is not an equal effect.", capital(r.detail))
		if r.level == Stop {
			*t = "Potent immobiliser: its dose is set by receptors, by the danger of recumbency and by the person who handles it, none of which follow metabolic rate. Use published doses for the species or its kin and those who have given them."
		}
		if meant := traitsOf(&c.Drug).meant; meant != "" {
			*t = "Did you mean " + meant + "? " + *t
		}
		out.Source = "Sharma & McNeill 2009 Br J Pharmacol (read: abstract); classes from memory"
	case BelowStep:
		switch {
		case c.Product.Input.Strength.Tablet():
			part := map[float64]string{1: "a whole one", 0.5: "half a one", 0.25: "a quarter"}[r.b]
			out.Numbers["step_pieces"] = r.b
			*t = "The dose is less than the smallest part of a tablet that can be given, " + part + ". Take another form."
		case c.Models[n.from].Regimen.Interval.Kind == metabolic.Infusion:
			*t = fmt.Sprintf("The rate is under one step of the pump (%s mL/h): it cannot be set. Dilute the product, or take a finer pump.", num("step_ml_per_h", r.b))
		default:
			*t = fmt.Sprintf("The volume is under one step of the device (%s mL): it cannot be measured. Dilute the product, or take a finer device.", num("step_ml", r.b))
		}
	case MassRatio:
		*t = fmt.Sprintf("Patient and model differ in mass by a factor of %s: between the exponents 0.65 and 0.80 the dose moves by a factor of %s.", num("mass_ratio", above1(r.a)), num("exponents_factor", math.Pow(above1(r.a), 0.15)))
	case MassRatioExtreme:
		*t = fmt.Sprintf("Patient and model differ in mass by a factor of %s, beyond 100: between the exponents 0.65 and 0.80 the dose moves by a factor of %s.", num("mass_ratio", above1(r.a)), num("exponents_factor", math.Pow(above1(r.a), 0.15)))
	case OutsideData:
		if r.b == r.c {
			*t = fmt.Sprintf("The mass of the %s, %s, is not the one mass behind the basis %s, %s.", who, kg("mass", r.a), r.detail, kg("low", r.b))
			break
		}
		*t = fmt.Sprintf("The mass of the %s, %s, lies outside the measured masses behind the basis %s, %s to %s.", who, kg("mass", r.a), r.detail, kg("low", r.b), kg("high", r.c))
	case BasisDisagrees:
		s := n.models[r.model].s
		*t = fmt.Sprintf("The bases disagree: by the basis %s the ratio of rates per kg S is %s, by the basis used (%s) it is %s, a factor of %s. Look at the doses under every basis before choosing.",
			r.detail, num("specific_other", r.b*s), c.Method.Basis, num("specific", s), num("ratio", r.a))
	case LargeChange:
		*t = fmt.Sprintf("Scaling changes the dose per kg at the same interval by a factor of %s.", num("factor", r.a))
	case Compounded:
		*t = fmt.Sprintf("Dose and interval are both adjusted, as in the energy-cost worksheets: the daily amount then departs by the factor %s from the one that keeps the model's average concentration.", num("average_ratio", r.a))
	case Impractical:
		h, th := r.a, c.Method.Thresholds
		limit := "over " + metabolic.Significant(th.IntervalLongH, 3) + " h"
		if h < th.IntervalShortH {
			limit = "under " + metabolic.Significant(th.IntervalShortH, 3) + " h"
		}
		*t = fmt.Sprintf("The interval that follows from half-lives, %s, is %s: it says how far the two animals' clocks lie apart, not when to give the drug.", hoursWords(h), limit)
		out.Numbers["interval_h"] = h
	case Suitability:
		*t = fmt.Sprintf("Of the published criteria for scaling by size, %s speak against it for this drug: see the table of suitability.", num("criteria_against", r.a))
		if r.a == 1 {
			*t = "Of the published criteria for scaling by size, 1 speaks against it for this drug: see the table of suitability."
		}
	case RouteDiffers:
		*t = fmt.Sprintf("The model's dose was given %s, the draft is for %s: absorption does not scale.", c.Models[r.model].Route, draftRoute(c, n))
	case GutType:
		*t = fmt.Sprintf("By mouth between different guts (%s: %s; %s: %s): availability by mouth does not scale.", patient, species.GutType(c.Patient.Animal), who, species.GutType(c.Models[r.model].Animal))
		out.Source = "Hunter 2010 Handb Exp Pharmacol 199; Baggot 1992 (read: abstracts); gut types from memory"
	case HumanModel:
		*t = "Man is often the outlier among mammals: of 361 clearances carried to or from man, 164 fell within 2-fold and 237 within 3-fold."
		out.Source = "Lombardo et al. 2013 J Clin Pharmacol 53:167-191 (citation from memory), recomputed"
	case PublishedExists:
		*t = fmt.Sprintf("The case cites a published dose for %s: it outranks this draft. See the published doses.", patient)
		if r.a == 0 {
			*t = fmt.Sprintf("The case cites a published dose for a relative (%s): weigh it before this draft.", commonName(r.detail))
		}
	case FoodAnimal:
		if r.a == 1 {
			*t = "The patient is a food-producing animal. A withdrawal period is not computed and does not scale: ask the local authority, and the residue service where there is one, before the drug is given."
		} else {
			_, why := species.CommonlyEaten(c.Patient.Animal)
			*t = fmt.Sprintf("Animals of this kind are eaten (%s). Will this one, its milk or its eggs ever be? Write food_producing in the case. A withdrawal period is not computed: ask the local authority.", why)
		}
	case DrugNotNamed:
		*t = "No drug is named: what is known of it in this animal could not be looked up. Nothing has been ruled out."
	case DrugNotRecognised:
		*t = drugNotRecognisedText(c, r.level)
	case ControlledDrug:
		*t = "A controlled drug: local law on keeping, recording and giving it applies."
		if r.a == 0 {
			*t = "The law of many countries controls such drugs. Is this one controlled where you work? Write controlled in the case. Local law on keeping, recording and giving it applies."
			out.Source = "classes from memory"
		}
	case JuvenilePatient:
		*t = "A juvenile: organs that clear drugs mature with age, which mass does not show."
		out.Source = "Am J Vet Res 2000;61:706 (read)"
	case PatientCondition:
		*t = conditionText(r.detail)
	case RoundingError:
		verb := "raises"
		if r.a < 0 {
			verb = "lowers"
		}
		*t = fmt.Sprintf("Rounding to the device's step %s the dose by %s %%.", verb, metabolic.Significant(math.Abs(r.a), 3))
		out.Numbers["error_percent"] = r.a
	case EstimatedMass:
		*t = fmt.Sprintf("The mass of the %s is estimated: %s to %s.", who, kg("low", r.a), kg("high", r.b))
		if r.model < 0 {
			*t += " Weigh the animal if it can be weighed."
		}
	case OneModel:
		*t = "One model species only: the weakest evidence. Add others if their doses are published."
	case GroupConstant:
		*t = "The basis is a constant of the whole group; single species lie above or below it."
	case NoHalfLife:
		*t = fmt.Sprintf("No half-life in the %s is given: nothing can be said of peaks, troughs or the time above a concentration.", who)
	case MassNotBody:
		*t = fmt.Sprintf("Part of the mass of the %s is not metabolising body (%s): its rate by whole mass may be too high.", who, r.detail)
		out.Source = "from memory"
	case BodyTemperature:
		*t = fmt.Sprintf("A body temperature of %s against the usual %s: ", metabolic.FormatCelsius(metabolic.Celsius(r.a)), metabolic.FormatCelsius(metabolic.Celsius(r.b)))
		out.Numbers["temperature_c"], out.Numbers["usual_c"] = r.a, r.b
		if r.a < r.b {
			*t += "is the animal torpid or chilled? Its metabolic rate may be a small part of the one used here. The rate was not scaled by temperature."
		} else {
			*t += "fever or overheating? The rate was not scaled by temperature."
		}
	case AdultMass:
		*t = fmt.Sprintf("A mass of %s is outside the adult range on file, %s to %s: young, obese, ill, or another animal?", kg("mass", r.a), kg("adult_low", r.b), kg("adult_high", r.c))
		out.Source = massSource(c, r.model)
	case StandIn:
		a := c.Patient.Animal
		if r.model >= 0 {
			a = c.Models[r.model].Animal
		}
		*t = fmt.Sprintf("No group constant is published for a %s: for the %s the basis %s stands in.", a.Group, who, r.detail)
		if r.level == Warn {
			*t += " The two animals then stand on two different bases, which adds an error that the range does not hold."
		}
	case NameTakenAs:
		a := c.Patient.Animal
		if r.model >= 0 {
			a = c.Models[r.model].Animal
		}
		*t = "The name of the animal was read as follows: " + strings.TrimSuffix(a.MatchedAs, ".") + "."
	case MassUnjudged:
		*t = fmt.Sprintf("No adult mass of %s is on file: a slip in the mass cannot be found.", patient)
	case LowConfidence:
		*t = fmt.Sprintf("The published line used for the %s (%s) is of low confidence.", who, r.detail)
	case ModelsDisagree:
		*t = fmt.Sprintf("The models disagree: their drafted daily amounts differ by a factor of %s.", num("fold_spread", r.a))
	case OneDecides:
		*t = fmt.Sprintf("One model alone decides: without the %s the mean of the drafts moves by more than a factor of 2.", who)
	case OneOrder:
		*t = fmt.Sprintf("All models are of one order (%s): their agreement says little about the patient.", r.detail)
	case Thresh:
		var set []string
		for _, ch := range c.Method.Changed {
			set = append(set, fmt.Sprintf("%s %s (default %s)", ch.Name, metabolic.Significant(ch.Value, 4), metabolic.Significant(ch.Default, 4)))
		}
		*t = "The case sets thresholds of cautions: " + strings.Join(set, ", ") + "."
		if r.level == Warn {
			*t += " Some cautions are then raised later than by default, or not at all."
		}
		out.Numbers["changed"] = r.a
	case Anatomy:
		*t = anatomyText(r.detail)
		out.Source = "from memory"
		if r.detail == "renal portal" {
			out.Source = "Hunter 2010 Handb Exp Pharmacol 199 p. 148 (read)"
		}
	case Accumulation:
		*t = fmt.Sprintf("The drafted interval is far below the expected half-life (%s): the drug accumulates %s-fold to steady state, long after the first dose.", hoursWords(r.b), num("accumulation", r.a))
		out.Numbers["half_life_h"] = r.b
	case FlipFlop:
		*t = fmt.Sprintf("Absorption (half-life %s) is slower than elimination (%s): the later course shows absorption, which does not follow metabolic rate.", hoursWords(r.a), hoursWords(r.b))
		out.Numbers["absorption_half_life_h"], out.Numbers["half_life_h"] = r.a, r.b
	case HazardOnFile:
		n.hazardText(c, r, &out)
	}
	if r.level == Stop {
		for i := range c.Overrides {
			if c.Overrides[i].Slug == out.Slug && !CannotOverride(out.Slug) {
				out.Overridden, out.Reason = true, c.Overrides[i].Reason
			}
		}
	}
	return out
}

// hazardText words a row of the hazard table: what happens, why scaling cannot
// see it, and where it is published.
func (n *numbers) hazardText(c *Case, r *raised, out *Caution) {
	h := r.hazard
	drug := h.Drug
	if drug == "" {
		drug = h.DrugClass
	}
	named := drug
	if also := append(append([]string{}, h.AlsoDrugs...), h.AlsoClasses...); len(also) > 0 && !slices.Contains(also, drug) {
		named += " (also " + strings.Join(also, ", ") + ")"
	}
	var b strings.Builder
	if h.Meant != "" {
		fmt.Fprintf(&b, "Did you mean %s? ", h.Meant)
	}
	switch {
	case h.Operator:
		fmt.Fprintf(&b, "Danger to the person who handles it (%s): ", drug)
	case h.RelativeRank == "food animal":
		fmt.Fprintf(&b, "Law on food animals, on file for %s (%s): ", taxonWords(h.Taxon), drug)
	case h.RelativeRank == "drug class":
		fmt.Fprintf(&b, "Known in %s for a drug of the same class (%s): ", taxonWords(h.Taxon), h.Sister)
	case h.Relation == "relative":
		fmt.Fprintf(&b, "Known in a relative (%s, of the same %s), %s: ", h.Taxon, h.RelativeRank, named)
	default:
		fmt.Fprintf(&b, "%s, %s in %s: ", capital(named), h.Severity, taxonWords(h.Taxon))
	}
	b.WriteString(strings.TrimSuffix(h.WhatHappens, "."))
	b.WriteString(". Scaling cannot see it: ")
	b.WriteString(strings.TrimSuffix(h.Why, "."))
	b.WriteString(".")
	if q := h.Question(); q != "" {
		b.WriteString(" ")
		b.WriteString(q)
	}
	if h.Via != "" && h.Via != "drug name" && h.Meant == "" {
		fmt.Fprintf(&b, " (Found by %s.)", h.Via)
	}
	b.WriteString(" A missing entry is no evidence of safety.")
	out.Text = b.String()
	out.Source = h.Citation + " (" + h.Verified + ")"
}

func taxonWords(taxon string) string {
	if taxon == "any" {
		return "any animal"
	}
	return taxon
}

// drugNotRecognisedText says what could not be looked up. Parts of the name are
// told in plain letters only.
func drugNotRecognisedText(c *Case, l Level) string {
	r := traitsOf(&c.Drug).reading
	const remedy = " Write the international nonproprietary name, not a brand's, and the class."
	near := ""
	if len(r.Near) > 0 {
		near = " Did you mean " + strings.Join(r.Near, ", ") + "?"
	}
	switch {
	case l == Warn:
		return "Neither the drug's name nor a class of it is in the lists of this program: hazards were not looked up, or by near spellings only. Nothing has been ruled out." + near + remedy
	case r.Named():
		return fmt.Sprintf("Part of the drug's name is not in the lists of this program (%s): hazards were looked up for the rest only.%s%s", strings.Join(r.Unread, "; "), near, remedy)
	}
	return "The drug's name is not in the lists of this program: hazards were looked up by its class only, and what is known of single drugs of the class is told as that of another drug." + near + " A brand's name is not known: write the international nonproprietary one."
}

func conditionText(word string) string {
	switch word {
	case "dehydrated":
		return "Dehydrated: volume of distribution and kidney perfusion are not those of the model. Correct fluids first."
	case "renal":
		return "Kidney disease: if the kidney clears any of this drug, its clearance is lower than the one scaled."
	case "hepatic":
		return "Liver disease: if the liver clears any of this drug, its clearance is lower than the one scaled."
	case "pregnant":
		return "Pregnant: volume and clearance differ, and the young are exposed."
	case "lactating":
		return "Lactating: the drug may pass into milk, and the young are exposed."
	case "obese":
		return "Obese: use lean mass; fat adds mass but little metabolic rate."
	case "gravid":
		return "Gravid: eggs add mass but not clearance, and may be exposed."
	}
	return word
}

func anatomyText(detail string) string {
	switch detail {
	case "renal portal":
		return "Renal portal system: blood from the hind part of the body can pass the kidney first. Inject drugs that leave by the kidney, or harm it, in the front half."
	case "fermenting gut, route not said":
		return "An antibacterial by mouth in an animal that lives by fermentation can kill its gut flora, and then the animal. No route is given, or none that is understood: is it the mouth?"
	case "fermenting gut":
		return "An antibacterial by mouth in an animal that lives by fermentation can kill its gut flora, and then the animal."
	}
	return "Amphibian skin takes up and loses drugs: contact with bedding, water and gloves is a route of its own."
}

// massSource is the source of an adult mass range.
func massSource(c *Case, model int) string {
	a := c.Patient.Animal
	if model >= 0 {
		a = c.Models[model].Animal
	}
	if a.AdultBasis == "" {
		return ""
	}
	if a.AdultBasis == "memory" {
		return "adult mass range: from memory"
	}
	if s, ok := species.Sources(a.AdultBasis); ok {
		return "adult mass range: " + s
	}
	return "adult mass range: " + a.AdultBasis
}

// commonName is the name by which a text calls an animal of the table.
func commonName(scientific string) string {
	if a, err := species.Find(scientific); err == nil {
		return animalWords(a)
	}
	return scientific
}

// organWords is a diseased organ in plain words.
func organWords(condition string) string {
	if condition == "renal" {
		return "kidney"
	}
	return "liver"
}

// comma sets an aside off, where there is one.
func comma(s string) string {
	if s == "" {
		return ""
	}
	return ", " + s
}

// roundedMass is a mass to 4 figures: the middle of an estimate carries no more.
func roundedMass(kg float64) metabolic.Mass {
	e := math.Pow(10, 3-math.Floor(math.Log10(kg)))
	return metabolic.Mass(math.Round(kg*e) / e)
}

// classWords calls an animal by its class.
func classWords(a *species.Animal) string {
	switch {
	case a.Mammal():
		return "a mammal"
	case a.Bird():
		return "a bird"
	case a.Reptile():
		return "a reptile"
	}
	return "an amphibian"
}

func eliminationName(e Elimination) string {
	return [...]string{"unknown", "renal", "hepatic", "mixed", "biliary"}[e]
}

func draftRoute(c *Case, n *numbers) string {
	if c.Drug.Route != "" {
		return c.Drug.Route
	}
	return c.Models[n.from].Route
}

func above1(x float64) float64 {
	if x < 1 {
		return 1 / x
	}
	return x
}

func capital(s string) string {
	if s == "" {
		return s
	}
	r := []rune(s)
	return strings.ToUpper(string(r[:1])) + string(r[1:])
}

// hoursWords prints a duration: minutes under an hour, days beside hours from
// two days on.
func hoursWords(h float64) string {
	switch {
	case h < 1:
		return metabolic.Significant(h*60, 3) + " min"
	case h > 48:
		return metabolic.Significant(h, 3) + " h (" + metabolic.Significant(h/24, 3) + " days)"
	}
	return metabolic.Significant(h, 3) + " h"
}

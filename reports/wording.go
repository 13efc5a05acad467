package reports

import "tayra/dose"

// Wording is how the values of a record are said, one function a name, for a
// template that sets a worksheet where this package does not: text/template and
// html/template take it by Funcs. So every place says a dose, an interval or a
// caution in the same words.
//
// Functions of a value and its unit take the unit as the record spells it
// (mg/kg, IU/kg/h). amount and perKg say one value; the names with Pair say both
// ends of a [dose.Pair], or the one value where they are equal; those with Range
// say a [dose.DoseRange].
func Wording() map[string]any {
	return map[string]any{
		"perKg": perKgWords, "perKgPair": perKgPair, "perKgRange": perKgRange, "dailyPair": dailyPair, "daily": dailyWords,
		"amount": amountWords, "amountPair": amountPair, "amountRange": amountRange, "amountsOfPlans": planAmounts, "amountsByTemperature": temperatureAmounts,
		"interval": intervalWords, "intervalBoth": intervalBothWords, "hours": hoursCell,
		"asGiven": asGiven, "measured": measuredWords, "exact": exactWords, "count": countWord,

		"order": orderWords, "give": giveWords, "massChoices": massChoices, "massEnds": massEnds,
		"volume": volumeWords, "strength": strengthWords, "perML": perMLWords, "dilution": dilutionWords, "mixing": mixingWords, "roundingError": errorWords,
		"outranked": outrankedWords, "published": publishedWords, "startLow": startLow, "bracket": bracketWords,

		"animal": animalWords, "patientName": patientName, "mass": massWords, "massRange": massRange, "conditions": conditionWords, "drug": drugWords,
		"draftedModel": draftedModel, "modelName": modelName, "model": modelWords, "typed": typedWords, "modelTyped": modelTyped,
		"plan": planWords, "chosen": chosenWords, "average": averageWords,
		"curveName": curveName, "relation": relationWords,
		"basis": basisLabel, "basisUsed": basisUsed, "basesHold": basesHold, "from": fromWords, "verdict": verdictWords, "proposedCautions": proposedCautions, "steps": stepsWords,

		"level": levelWord, "stop": stopWords, "activeStops": activeStops, "overridden": overridden,
		"countCautions": countWords, "worst": worstWords, "cautionModels": cautionModels, "numbers": numberWords,
		"verified": verifiedWords, "groupSources": groupSources,

		// A template takes one value: these are the parts of one sentence or row.
		"loading": func(ws *dose.Worksheet) [2]string {
			order, about := loadingWords(ws)
			return [2]string{order, about}
		},
		"amountRanges": func(d *dose.Drafted) [2]string {
			even, ninety := amountRanges(d)
			return [2]string{even, ninety}
		},
		"proposedAmounts": func(p *dose.Proposed, d *dose.Drafted) [3]string {
			name, proposed, drafted := proposedAmounts(p, d)
			return [3]string{name, proposed, drafted}
		},
		"modelAndSource": func(ws *dose.Worksheet, m *dose.ModelDraft) [2]string {
			model, source := modelAndSource(ws, m)
			return [2]string{model, source}
		},

		"capital": capital, "paper": paperText, "formula": paperFormula,
	}
}

// RecordDigest is the [Digest] of a worksheet's own record; "" for a worksheet
// that has none.
func RecordDigest(ws *dose.Worksheet) string {
	record, err := JSON(ws)
	if err != nil {
		return ""
	}
	return Digest(record)
}

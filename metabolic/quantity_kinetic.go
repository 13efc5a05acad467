package metabolic

import "strings"

// Concentration is an amount of drug per litre, in mg/L or IU/L as Unit says.
type Concentration struct {
	Value float64
	Unit  AmountUnit
}

// ParseConcentration reads a blood level, an inhibitory concentration or the
// strength of a solution: "2 mg/L", "0.5 mcg/mL", "50 mg/mL", "1 IU/mL".
// Amounts as in [ParseDose], volumes in L or mL. A strength in percent is an
// error. The error is a [*QuantityError].
func ParseConcentration(s string) (Concentration, error) {
	const accepted = "mg, mcg, g or IU, per L or per mL"
	t, problem := newText(s, "a concentration", "2 mg/L")
	if problem != nil {
		return Concentration{}, problem
	}
	number, rest, problem := t.number(t.body)
	if problem != nil {
		return Concentration{}, problem
	}
	name := unitText(rest)
	if name == "%" {
		return Concentration{}, t.fail(quoted(t.input)+" is a strength in percent", "write mg/mL (1 % of weight in volume is 10 mg/mL)")
	}
	amountName, volumeName, _ := strings.Cut(name, "/")
	amount, unit, ok := findAmountUnit(amountName)
	if !ok {
		return Concentration{}, t.unitError(amountName, accepted, milligramUnits, internationalUnits)
	}
	volume, ok := findUnit(volumeUnits, volumeName)
	if !ok {
		return Concentration{}, t.perError(volumeName, "volume", accepted, volumeUnits)
	}
	value := number * amount.times * volume.by / (amount.by * volume.times)
	if problem := t.inBounds(value); problem != nil {
		return Concentration{}, problem
	}
	return Concentration{value, unit}, nil
}

// ParseVolumePerKg reads a volume of distribution, in L/kg: "0.3 L/kg",
// "300 mL/kg". The error is a [*QuantityError].
func ParseVolumePerKg(s string) (float64, error) {
	const accepted = "L/kg or mL/kg"
	t, problem := newText(s, "a volume per kg", "0.3 L/kg")
	if problem != nil {
		return 0, problem
	}
	number, rest, problem := t.number(t.body)
	if problem != nil {
		return 0, problem
	}
	name := unitText(rest)
	volumeName, per, _ := strings.Cut(name, "/")
	volume, ok := findUnit(volumeUnits, volumeName)
	if !ok {
		return 0, t.unitError(volumeName, accepted, volumeUnits)
	}
	if per != "kg" {
		return 0, t.perError(per, "body mass", accepted, []unit{{"kg", 1, 1}})
	}
	value := volume.canonical(number)
	if problem := t.inBounds(value); problem != nil {
		return 0, problem
	}
	return value, nil
}

// ParseLiquid reads a volume to be measured out, in mL: "0.1 mL", "1 L". The
// abbreviation cc is refused. The error is a [*QuantityError].
func ParseLiquid(s string) (float64, error) {
	t, problem := newText(s, "a volume", "0.1 mL")
	if problem != nil {
		return 0, problem
	}
	number, rest, problem := t.number(t.body)
	if problem != nil {
		return 0, problem
	}
	volume, ok := findUnit(volumeUnits, rest)
	if !ok {
		if strings.EqualFold(rest, "cc") {
			return 0, t.fail(quoted(t.input)+" has cc, which is misread as a nought or as units", "write mL")
		}
		return 0, t.unitError(rest, "mL or L", volumeUnits)
	}
	value := number * volume.times * 1000 / volume.by
	if problem := t.inBounds(value); problem != nil {
		return 0, problem
	}
	return value, nil
}

// ParseClearance reads a clearance. The value is in L/h, or in L/h/kg where
// perKg is true. Accepted are L or mL per h, min or day, alone or per kg:
// "3 L/h", "12 mL/min", "4 mL/min/kg", "4 mL/kg/min". The error is a
// [*QuantityError].
func ParseClearance(s string) (value float64, perKg bool, err error) {
	const accepted = "L or mL, per h, min or day, alone or with /kg"
	t, problem := newText(s, "a clearance", "4 mL/min/kg")
	if problem != nil {
		return 0, false, problem
	}
	number, rest, problem := t.number(t.body)
	if problem != nil {
		return 0, false, problem
	}
	name := unitText(rest)
	volumeName, per, _ := strings.Cut(name, "/")
	volume, ok := findUnit(volumeUnits, volumeName)
	if !ok {
		return 0, false, t.unitError(volumeName, accepted, volumeUnits)
	}
	timeName, perKg := strings.CutSuffix(per, "/kg")
	if !perKg {
		timeName, perKg = strings.CutPrefix(per, "kg/")
	}
	span, ok := findUnit(timeUnits, timeName)
	if !ok {
		return 0, false, t.perError(timeName, "time", accepted, timeUnits)
	}
	value = number * volume.times * span.by / (volume.by * span.times)
	if problem := t.inBounds(value); problem != nil {
		return 0, false, problem
	}
	return value, perKg, nil
}

// ParseFraction reads a share in percent, above 0 and at most 100, and gives
// it between 0 and 1: "80 %" is 0.8. A bare number is an error, since 1 might
// be the whole or a hundredth. The error is a [*QuantityError].
func ParseFraction(s string) (float64, error) {
	t, problem := newText(s, "a percentage", "80 %")
	if problem != nil {
		return 0, problem
	}
	value, problem := t.simple(t.body, "%", percentUnits)
	if problem != nil {
		return 0, problem
	}
	if value > 1 {
		return 0, t.fail(quoted(t.input)+" is more than 100 %", "write a share of the whole, like "+quoted(t.like))
	}
	return value, nil
}

// perError is the error for what stands under the stroke of a unit.
func (t text) perError(got, kind, accepted string, table []unit) *QuantityError {
	if got == "" {
		return t.fail(quoted(t.input)+" has no unit of "+kind+" after the stroke", "write "+accepted)
	}
	return t.unitError(got, accepted, table)
}

package metabolic

const ratesAccepted = "W, kcal/day, kJ/day, J/h, mL O2/h or mL O2/min"

// ParseRate reads a metabolic rate of the whole animal, in W: "54.9 W",
// "1130 kcal/day", "4740 kJ/day", "197000 J/h", "9830 mL O2/h",
// "164 mL O2/min" (also mW, kJ/h, and kcal/d, kJ/d). Oxygen is turned to energy
// by [JoulePerMLO2], calories by [JoulePerCalorie]. A bare "cal" or "Cal" is
// refused, being a thousandfold apart in use. The error is a [*QuantityError].
func ParseRate(s string) (Power, error) {
	t, problem := newText(s, "a metabolic rate", "1130 kcal/day")
	if problem != nil {
		return 0, problem
	}
	watts, problem := t.simple(t.body, ratesAccepted, rateUnits)
	if problem != nil {
		return 0, problem
	}
	return Power(watts), nil
}

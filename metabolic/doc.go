// Package metabolic holds what the scaling of doses rests on: quantities with
// their units, published equations of metabolic rate on body mass, body
// temperature, and the fits that give new lines from measured animals. It
// knows no animal, no drug and no plan.
//
// A quantity has a type, so that a mass cannot be passed for a rate: [Mass] in
// kg, [Power] in W, [Celsius], [Hours], amounts of drug in mg or IU with their
// [AmountUnit]. The Parse functions read what people write and refuse what two
// people would read differently; the Format functions print by the published
// habits of medication safety. No other part of the program does either.
//
// An [Equation] is one published line B = a·W^b with its own units, form,
// animals and source. [Equation.Rate] evaluates it, [Equation.Convert] changes
// its units; [DefaultEquation] and [GroupConstant] choose one by the group of
// an animal.
package metabolic

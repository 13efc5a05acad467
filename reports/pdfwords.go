package reports

import (
	"regexp"
	"strings"
	"sync"
)

// The wording that only paper has: true superscripts and subscripts in
// formulas, and units as medication safety asks for them.

var (
	powers = sync.OnceValue(func() *regexp.Regexp {
		return regexp.MustCompile(`\^\(?([-−]?[0-9]+(?:\.[0-9]+)?|b)\)?`)
	})
	// symbols of the method whose last letter is an index; σ is no letter to \b
	indexed = sync.OnceValue(func() *regexp.Regexp { return regexp.MustCompile(`\bQ10\b|\b[WBT][0tm]\b|σ[tm]\b`) })

	raised = strings.NewReplacer("0", "⁰", "1", "¹", "2", "²", "3", "³", "4", "⁴", "5", "⁵", "6", "⁶", "7", "⁷", "8", "⁸", "9", "⁹",
		"-", "⁻", "−", "⁻", ".", "·", "b", "ᵇ")
	lowered = strings.NewReplacer("Q10", "Q₁₀", "0", "₀", "t", "ₜ", "m", "ₘ")
)

// paperText is a text of the record as paper says it: units instead of IU, and
// powers raised: kg^0.75 is kg⁰·⁷⁵. A power that is itself a formula keeps its
// sign: no font has all of its letters raised.
func paperText(s string) string {
	s = paperUnits(s)
	if !strings.Contains(s, "^") {
		return s
	}
	return powers().ReplaceAllStringFunc(s, func(p string) string {
		exponent := strings.TrimPrefix(p, "^")
		if strings.HasPrefix(exponent, "(") != strings.HasSuffix(exponent, ")") {
			if !strings.HasPrefix(exponent, "(") { // the bracket after it closes another
				return raised.Replace(strings.TrimSuffix(exponent, ")")) + ")"
			}
			return p
		}
		return raised.Replace(strings.Trim(exponent, "()"))
	})
}

// paperFormula is a formula in symbols, its indices lowered.
func paperFormula(s string) string {
	return indexed().ReplaceAllStringFunc(paperText(s), func(x string) string {
		if x == "Q10" {
			return lowered.Replace(x)
		}
		return x[:len(x)-1] + lowered.Replace(x[len(x)-1:])
	})
}

package dose

import "testing"

func benchCase(b *testing.B) *Case {
	b.Helper()
	in := caseOf("giant anteater", "41 kg", "dog", "18 kg", "10 mg/kg", "q12h")
	in.Models[0].HalfLife, in.Models[0].Volume, in.Models[0].Route = E("1.3 h"), E("0.3 L/kg"), E("SC")
	in.Product = ProductEntry{Strength: E("50 mg/mL"), Step: E("0.1 mL"), Days: E("7")}
	c, err := in.Check()
	if err != nil {
		b.Fatal(err)
	}
	return c
}

// From a case in memory to the whole worksheet.
func BenchmarkDraft(b *testing.B) {
	c := benchCase(b)
	for b.Loop() {
		if _, err := Draft(c); err != nil {
			b.Fatal(err)
		}
	}
}

// From typed entries to the worksheet: what a form pays for a keystroke.
func BenchmarkCheckAndDraft(b *testing.B) {
	in := benchCase(b).Input
	for b.Loop() {
		c, err := in.Check()
		if err != nil {
			b.Fatal(err)
		}
		if _, err := Draft(c); err != nil {
			b.Fatal(err)
		}
	}
}

// The numbers alone, which is what a batch row pays for.
func BenchmarkCompute(b *testing.B) {
	c := benchCase(b)
	var n numbers
	b.ReportAllocs()
	for b.Loop() {
		if err := compute(c, &n); err != nil {
			b.Fatal(err)
		}
	}
}

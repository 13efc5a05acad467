package dose

import (
	"fmt"
	"strings"
	"testing"
)

// tableOf is a table of n animals, a tenth of them of a species named before.
func tableOf(n int) []byte {
	var b strings.Builder
	b.WriteString("species,mass (kg),clearance (mL/min)\n")
	for i := range n {
		w := 0.02 * float64(i+1)
		fmt.Fprintf(&b, "animal %d,%.3f,%.4f\n", i-i/10, w, w*(1+float64(i%7)/10))
	}
	return []byte(b.String())
}

// BenchmarkFit fits a line to 1,000 rows, every animal left out in turn.
func BenchmarkFit(b *testing.B) {
	for _, read := range []bool{false, true} {
		name := "fit"
		if read {
			name = "read-and-fit"
		}
		b.Run(name, func(b *testing.B) {
			data := tableOf(1000)
			in, err := ReadFitTable("t.csv", data)
			if err != nil {
				b.Fatal(err)
			}
			target := targetOf(b, "giant anteater", "41 kg")
			b.ReportAllocs()
			for b.Loop() {
				if read {
					if in, err = ReadFitTable("t.csv", data); err != nil {
						b.Fatal(err)
					}
				}
				f, err := Fit(in, target)
				if err != nil || len(f.LeaveOne) == 0 {
					b.Fatal(err)
				}
			}
		})
	}
}

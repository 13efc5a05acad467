//go:build outside

package species

import (
	"bufio"
	"bytes"
	"fmt"
	"math"
	"os/exec"
	"testing"

	"tayra/metabolic"
)

// R and nlme fit the table as it is now and predict the animals of
// testdata/relatives.R.
func TestRelativesByR(t *testing.T) {
	command := exec.Command("Rscript", "testdata/relatives.R", "data/measured-rates.csv")
	var problems bytes.Buffer
	command.Stderr = &problems
	out, err := command.Output()
	if err != nil {
		t.Fatalf("Rscript with nlme is needed: %v\n%s", err, problems.String())
	}
	n := 0
	for lines := bufio.NewScanner(bytes.NewReader(out)); lines.Scan(); {
		var class, order, family, genus string
		var mass, temperature, mean, sd float64
		if k, _ := fmt.Sscanf(lines.Text(), "%s %s %s %s %g %g %g %g", &class, &order, &family, &genus, &mass, &temperature, &mean, &sd); k != 8 || class == "fit" {
			continue
		}
		n++
		a := &Animal{Name: genus + " sp", Class: class, Order: order, Family: family}
		p, err := Relatives(a, metabolic.Mass(mass), metabolic.Celsius(temperature))
		if err != nil || math.Abs(math.Log(float64(p.Rate))-mean) > 1e-5 || math.Abs(p.SDln-sd) > 1e-5 {
			t.Errorf("%s: %+v, %v; R %g, %g", genus, p, err, mean, sd)
		}
	}
	if n != len(relativesOfR) {
		t.Errorf("R predicted %d animals, want %d\n%s", n, len(relativesOfR), out)
	}
}

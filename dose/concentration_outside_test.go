//go:build outside

package dose

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"math"
	"os/exec"
	"strconv"
	"testing"
)

// The closed forms against lsoda of deSolve 1.34 under R 4.2.2
// (testdata/r/onecompartment.R): every kind of input, from the first dose to
// steady state.
func TestConcentrationAgainstDeSolve(t *testing.T) {
	type scenario struct {
		k Kinetics
		d Dosing
	}
	scenarios := map[string]scenario{}
	var in bytes.Buffer
	for name, k := range kineticsKinds {
		for _, d := range []Dosing{
			{DosePerKg: 10, IntervalH: 6}, {DosePerKg: 10, IntervalH: 24}, {DosePerKg: 2, Infusion: true},
		} {
			id := fmt.Sprintf("s%d", len(scenarios))
			scenarios[id] = scenario{k, d}
			t.Logf("%s: %s, %+v", id, name, d)
			ke, ka, f, tau, infusion := math.Ln2/k.HalfLifeH, 0.0, k.Bioavailability, d.IntervalH, 0
			if k.AbsorptionHalfLifeH > 0 {
				ka = math.Ln2 / k.AbsorptionHalfLifeH
			}
			if f == 0 {
				f = 1
			}
			if d.Infusion {
				tau, infusion = 10, 1
			}
			doses := 5 + math.Ceil(30*math.Max(k.HalfLifeH, k.AbsorptionHalfLifeH)/tau)
			fmt.Fprintf(&in, "%s,%.17g,%.17g,%.17g,%g,%g,%d\n", id, ke, ka, f*d.DosePerKg/k.VolumeLPerKg, tau, doses, infusion)
		}
	}
	cmd := exec.Command("Rscript", "--vanilla", "../testdata/r/onecompartment.R")
	cmd.Stdin = &in
	var problems bytes.Buffer
	cmd.Stderr = &problems
	out, err := cmd.Output()
	if err != nil {
		t.Fatalf("Rscript: %v\n%s", err, problems.Bytes())
	}
	rows, err := csv.NewReader(bytes.NewReader(out)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	counts, compared := map[string]int{}, 0
	for _, row := range rows {
		s := scenarios[row[0]]
		x, errX := strconv.ParseFloat(row[2], 64)
		want, errW := strconv.ParseFloat(row[3], 64)
		if errX != nil || errW != nil {
			t.Fatalf("row %v", row)
		}
		counts[row[1]]++
		p := steadyProfile(t, s.k, s.d, 0)
		label := row[0] + " " + row[1] + " " + row[2]
		switch row[1] {
		case "at":
			// lsoda is held to 1e-13 absolutely, which is much beside the
			// last traces of a drug long gone.
			if want > 1e-6 {
				compared++
				wantNear(t, label, ConcentrationAt(s.k, s.d, x), want, 1e-6)
			}
		case "cmax":
			wantNear(t, label, p.Cmax, want, 1e-6)
		case "tmax":
			if !s.d.Infusion {
				wantNear(t, label, p.TmaxH+1, want+1, 1e-3) // the top is flat
			}
		case "cmin":
			if want > 1e-6 {
				wantNear(t, label, p.Cmin, want, 1e-6)
			}
		case "auc":
			if s.d.Infusion {
				want /= 10 // of one hour
			}
			wantNear(t, label, p.AUC, want, 1e-6)
		}
	}
	if counts["at"] != 35*len(scenarios) || counts["cmax"] != len(scenarios) || counts["auc"] != len(scenarios) {
		t.Fatalf("rows by kind: %v for %d scenarios", counts, len(scenarios))
	}
	if compared < counts["at"]*9/10 {
		t.Errorf("only %d of %d points were above the traces", compared, counts["at"])
	}
}

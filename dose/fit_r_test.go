package dose

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"
)

// rTable reads one of the tables that testdata/r/powerfit.R wrote (R 4.2.2: lm,
// confint, predict, hatvalues, cooks.distance; leaving one out refits).
func rTable(t *testing.T, file string) []map[string]string {
	t.Helper()
	f, err := os.Open("../testdata/r/" + file)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var out []map[string]string
	for _, r := range rows[1:] {
		m := map[string]string{}
		for i, h := range rows[0] {
			m[h] = r[i]
		}
		out = append(out, m)
	}
	return out
}

func rNumber(t *testing.T, s string) float64 {
	t.Helper()
	x, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	return x
}

// The record of a fit is what R's lm says of the same table, to 1e-9: line,
// intervals at the target's mass, the line of fixed exponent, and every animal.
// The points go in as a table of clearances in L/h, masses in kg.
func TestFitAgainstR(t *testing.T) {
	lines, points := rTable(t, "powerfit-lines.csv"), rTable(t, "powerfit-points.csv")
	for _, set := range []string{"kleiber", "meloxicam", "enrofloxacin", "sulphadimidine"} {
		figures := map[string]float64{}
		for _, r := range lines {
			if r["set"] == set {
				figures[r["figure"]] = rNumber(t, r["value"])
			}
		}
		table := &strings.Builder{}
		table.WriteString("species,mass (kg),clearance (L/h)\n")
		var of []map[string]string
		for _, r := range points {
			if r["set"] == set {
				of = append(of, r)
				table.WriteString(r["name"] + "," + r["x"] + "," + r["y"] + "\n")
			}
		}
		in, err := ReadFitTable(set+".csv", []byte(table.String()))
		if err != nil {
			t.Fatal(err)
		}
		in.KeepAll = true
		same := func(what string, got, want float64) {
			t.Helper()
			if math.Abs(got-want) > 1e-9*math.Max(1, math.Abs(want)) {
				t.Errorf("%s, %s: %v, R says %v", set, what, got, want)
			}
		}
		for _, mass := range []string{"0.05", "3.3", "900"} {
			f, err := Fit(in, targetOf(t, "emu", mass+" kg"))
			if err != nil {
				t.Fatalf("%s: %v", set, err)
			}
			if f.Unit != "L/h" || f.Parameter != Clearance {
				t.Fatalf("%s in %s", f.Parameter, f.Unit)
			}
			same("n", float64(f.N), figures["n"])
			same("a", f.A, figures["a"])
			same("b", f.B, figures["b"])
			same("se of ln a", f.SELnA, figures["se_ln_a"])
			same("se of b", f.SEB, figures["se_b"])
			same("residual sd", f.ResidualSD, figures["residual_sd_ln"])
			same("R squared", f.RSquared, figures["r_squared"])
			same("b from", f.CI95B[0], figures["ci95_b_low"])
			same("b to", f.CI95B[1], figures["ci95_b_high"])
			at := func(what string) float64 { return figures["at_"+mass+"_"+what] }
			same("value at "+mass, f.AtTarget.Value, at("value"))
			same("confidence from at "+mass, f.AtTarget.CI95[0], at("ci95_low"))
			same("confidence to at "+mass, f.AtTarget.CI95[1], at("ci95_high"))
			same("prediction from at "+mass, f.AtTarget.PI95[0], at("pi95_low"))
			same("prediction to at "+mass, f.AtTarget.PI95[1]/at("pi95_high"), 1)
			if mass != "3.3" {
				continue
			}
			same("fixed residual sd", f.Fixed.ResidualSD, figures["fixed_residual_sd_ln"])
			same("ln of fixed a", math.Log(f.Fixed.A), figures["fixed_ln_a"])
			same("fixed value", f.Fixed.AtTarget.Value, figures["fixed_at_3.3_value"])
			same("fixed confidence from", f.Fixed.AtTarget.CI95[0], figures["fixed_at_3.3_ci95_low"])
			same("fixed confidence to", f.Fixed.AtTarget.CI95[1], figures["fixed_at_3.3_ci95_high"])
			same("fixed prediction from", f.Fixed.AtTarget.PI95[0], figures["fixed_at_3.3_pi95_low"])
			same("fixed prediction to", f.Fixed.AtTarget.PI95[1], figures["fixed_at_3.3_pi95_high"])
			if len(f.Points) != len(of) || len(f.LeaveOne) != len(of) {
				t.Fatalf("%s: %d points, %d left out, of %d", set, len(f.Points), len(f.LeaveOne), len(of))
			}
			for i, r := range of {
				p, l := f.Points[i], f.LeaveOne[i]
				if p.Species != r["name"] || l.Species != r["name"] {
					t.Errorf("%s: %s and %s for %s", set, p.Species, l.Species, r["name"])
				}
				same("residual of "+p.Species, p.Residual, rNumber(t, r["residual"]))
				same("fitted of "+p.Species, p.Fitted, p.Value*math.Exp(-rNumber(t, r["residual"])))
				same("leverage of "+p.Species, p.Leverage, rNumber(t, r["leverage"]))
				same("Cook's distance of "+p.Species, p.Cook, rNumber(t, r["cooks_distance"]))
				same("left out "+p.Species, l.Predicted/p.Value, rNumber(t, r["left_out_fold"]))
				same("fold error of "+p.Species, l.FoldError, rNumber(t, r["left_out_fold"]))
			}
		}
	}
}

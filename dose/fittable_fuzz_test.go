package dose

import (
	"encoding/json"
	"errors"
	"math"
	"strings"
	"testing"
	"unicode"
	"unicode/utf8"

	"tayra/metabolic"
	"tayra/species"
)

// Whatever bytes a table of species data holds, it is read or refused with
// faults that lie inside it and can be printed; a line fitted to it is finite.
func FuzzReadFitTable(f *testing.F) {
	f.Add([]byte(meloxicam))
	f.Add([]byte("\xef\xbb\xbfSpecies;Mass (kg);CL (mL/min);note\r\npigeon;0,45;0,35;x\r\nduck;3;2,85;\"a;\nb\"\r\nturkey;8;8,4;\r\n"))
	f.Add([]byte("species\tmass\tclearance\tvolume\nrat\t250 g\t2 mL/min\t0.1 L\nrabbit\t3 kg\t12 mL/min\t\ndog\t10 kg\t30 mL/min\t3 L\n"))
	f.Add([]byte("species,mass (kg),half_life (h),dose (mg/kg),source\nrat,0.25,1,5,x\nrat,0.3,1.2,5,\"say \"\"y\"\"\"\ndog,10,3,5,\n"))
	f.Add([]byte("species,mass,mass,clearance\n\"dog,10\nrat;1;2\x00"))
	f.Add([]byte("species,mass (kg),clearance (mL/min)\n=cmd,1e308,1e-308\n\u202egod,NaN,Inf\ndog,-1,1e999\n"))
	target, err := species.Find("giant anteater")
	if err != nil {
		f.Fatal(err)
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		lines := strings.Count(string(data), "\n") + 1
		fits := func(line, column int) bool { return line >= 0 && line <= lines && column >= 0 && column <= len(data)+1 }
		checkErr := func(err error) {
			var faults InputErrors
			if !errors.As(err, &faults) || len(faults) == 0 {
				t.Fatalf("%T %v", err, err)
			}
			for _, e := range faults {
				if e.Problem == "" || !fits(e.Line, e.Column) {
					t.Fatalf("%+v lies outside the table of %d lines", e, lines)
				}
				text := e.Error()
				if !utf8.ValidString(text) || strings.ContainsFunc(text, func(r rune) bool { return unicode.IsControl(r) || isUnseen(r) }) {
					t.Fatalf("%q cannot be printed", text)
				}
			}
		}
		in, err := ReadFitTable("f", data)
		if err != nil {
			checkErr(err)
			return
		}
		if len(in.Rows) > maxFitRows || in.Parameter == "" {
			t.Fatalf("%d rows, parameter %q", len(in.Rows), in.Parameter)
		}
		for _, r := range in.Rows {
			for _, e := range []Entry{r.Species, r.Mass, r.Clearance, r.Volume, r.HalfLife, r.Dose, r.Source} {
				if !fits(e.Line, e.Column) {
					t.Fatalf("%+v lies outside the table", e)
				}
			}
		}
		fit, err := Fit(in, FitTarget{Animal: target, Mass: metabolic.BodyMass{Low: 41, Middle: 41, High: 41}})
		if err != nil {
			checkErr(err)
			return
		}
		for name, v := range map[string]float64{"A": fit.A, "B": fit.B, "residual sd": fit.ResidualSD, "value": fit.AtTarget.Value} {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				t.Fatalf("%s is %v", name, v)
			}
		}
		if _, err := json.Marshal(fit); err != nil {
			t.Fatal(err)
		}
	})
}

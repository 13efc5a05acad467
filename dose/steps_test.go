package dose

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

// A pocket calculator that reads what a step prints: units are dropped, and
// + − × / ^ ² √ exp ln log10 max ½· and |x| are worked out. It knows nothing of
// the method, so a step that prints other numbers than it used is found.
type calculator struct {
	s  string
	at int
}

var stepUnits = regexp.MustCompile(`([0-9)]) ?(kcal/day|kJ/day|mL O2/h|J/h|mg/kg/day|mg/kg/h|mg/kg|IU/kg/day|IU/kg/h|IU/kg|mg/L|IU/L|mg/h|IU/h|L/kg|L/h|kg|mg|IU|g|h|W)\b`)

func calculate(text string) (v float64, err error) {
	for _, u := range []string{" kg/m²", " mg/m²", " m²", " °C"} { // no word ends in ² or begins with °
		text = strings.ReplaceAll(text, u, "")
	}
	for {
		next := stepUnits.ReplaceAllString(text, "$1")
		if next == text {
			break
		}
		text = next
	}
	defer func() {
		if r := recover(); r != nil {
			err = fmt.Errorf("%q: %v", text, r)
		}
	}()
	c := &calculator{s: strings.ReplaceAll(text, " ", "")}
	v = c.sum()
	if c.at != len(c.s) {
		panic("left over: " + c.s[c.at:])
	}
	return v, nil
}

func (c *calculator) take(p string) bool {
	if strings.HasPrefix(c.s[c.at:], p) {
		c.at += len(p)
		return true
	}
	return false
}

func (c *calculator) sum() float64 {
	v := c.product()
	for {
		switch {
		case c.take("+"):
			v += c.product()
		case c.take("−"):
			v -= c.product()
		default:
			return v
		}
	}
}

func (c *calculator) product() float64 {
	v := c.power()
	for {
		switch {
		case c.take("×"):
			v *= c.power()
		case c.take("·"):
			v *= c.power()
		case c.take("/"):
			v /= c.power()
		default:
			return v
		}
	}
}

func (c *calculator) power() float64 {
	v := c.value()
	for {
		switch {
		case c.take("²"):
			v *= v
		case c.take("^"):
			v = math.Pow(v, c.value())
		default:
			return v
		}
	}
}

func (c *calculator) value() float64 {
	switch {
	case c.take("("):
		v := c.sum()
		if !c.take(")") {
			panic("no )")
		}
		return v
	case c.take("|"):
		v := math.Abs(c.sum())
		if !c.take("|") {
			panic("no |")
		}
		return v
	case c.take("−"):
		return -c.power()
	case c.take("½"):
		return 0.5
	case c.take("√"):
		return math.Sqrt(c.value())
	case c.take("exp"):
		return math.Exp(c.value())
	case c.take("log10"):
		return math.Log10(c.value())
	case c.take("ln"):
		return math.Log(c.value())
	case c.take("max("):
		v := c.sum()
		for c.take(";") {
			v = math.Max(v, c.sum())
		}
		if !c.take(")") {
			panic("no )")
		}
		return v
	}
	from := c.at
	for c.at < len(c.s) && strings.ContainsRune("0123456789.,", rune(c.s[c.at])) {
		c.at++
	}
	v, err := strconv.ParseFloat(strings.ReplaceAll(c.s[from:c.at], ",", ""), 64)
	if err != nil {
		panic(err)
	}
	return v
}

// Every step of every example and of cases that reach the other ways of
// reckoning is followed with the numbers that it prints, and ends at the result
// that it prints to 4 figures.
func TestStepsCanBeFollowed(t *testing.T) {
	var cases []*CaseInput
	for _, pattern := range []string{"../testdata/*.yaml", "../testdata/golden/*.yaml"} {
		files, err := filepath.Glob(pattern)
		if err != nil || len(files) == 0 {
			t.Fatalf("no cases in %s: %v", pattern, err)
		}
		for _, f := range files {
			b, err := os.ReadFile(f)
			if err != nil {
				t.Fatal(err)
			}
			in, _, err := ReadCase(f, b)
			if err != nil {
				t.Fatal(err)
			}
			cases = append(cases, in)
		}
	}
	add := func(in *CaseInput, change func(*CaseInput)) {
		in.Drug.Name = E("inventamol")
		change(in)
		cases = append(cases, in)
	}
	for _, basis := range []string{"group", "equation", "measured", "relatives"} {
		add(caseOf("giant anteater", "36-46 kg", "dog", "18 kg ± 10 %", "180-200 mg per animal", "q12h"), func(in *CaseInput) { in.Method.Basis = E(basis) })
		add(caseOf("ball python", "1.2-1.6 kg", "corn snake", "0.8 kg", "6 mg/kg", "q72h"), func(in *CaseInput) {
			in.Method.Basis, in.Patient.Temperature, in.Models[0].Temperature = E(basis), E("30 °C"), E("27 °C")
		})
	}
	for _, id := range []string{"whiteseymour2003_all", "kolokotrones2010", "savage2004", "common_636", "mcnab2008", "gillooly2001_endotherm"} {
		add(caseOf("giant anteater", "41 kg", "dog", "18 kg", "20 mg/kg/day", "q12h"), func(in *CaseInput) { in.Method.Basis, in.Method.Equation = E("equation"), E(id) })
	}
	add(caseOf("common frog", "30 g", "American bullfrog", "400 g", "5 mg/kg", "q24h"), func(in *CaseInput) {
		in.Method.Basis, in.Patient.Temperature, in.Models[0].Temperature = E("equation"), E("18 °C"), E("22 °C")
	})
	add(caseOf("giant anteater", "41 kg", "dog", "18 kg", "30-40 mg/m²", "q24h"), func(*CaseInput) {})
	add(caseOf("giant anteater", "41 kg", "human", "70 kg", "30 mg/m²", "q24h"), func(*CaseInput) {})
	add(caseOf("rabbit", "3 kg", "dog", "18 kg", "5-10 mg/kg", "once"), func(*CaseInput) {})
	add(caseOf("rabbit", "3 kg", "dog", "18 kg", "5 mcg/kg/min", "infusion"), func(*CaseInput) {})
	add(caseOf("rabbit", "3 kg", "dog", "18 kg", "5 mg/kg", "q12h"), func(in *CaseInput) { in.Method.Plan = E("both-adjusted") })
	table, err := ReadFitTable("drug.csv", []byte("species,mass (kg),clearance (mL/min),volume (L)\nrat,0.25,2,0.1\nrabbit,3,12,1.1\ndog,10,30,3.5\nhorse,500,600,160\n"))
	if err != nil {
		t.Fatal(err)
	}
	for _, average := range []string{"", "2 mg/L"} {
		add(caseOf("giant anteater", "41 kg", "dog", "10 kg", "10 mg/kg", "q12h"), func(in *CaseInput) {
			in.Models[0].HalfLife, in.Models[0].Volume, in.Models[0].Bioavailability = E("1.4 h"), E("0.35 L/kg"), E("80 %")
			in.Fit = &FitCase{Table: *table}
			if average != "" {
				in.Fit.Average, in.Fit.Source = E(average), E("invented for this test")
			}
		})
	}
	followed, seen := 0, map[string]bool{}
	for _, in := range cases {
		c, err := in.Check()
		if err != nil {
			t.Errorf("%s: %v", in.File, err)
			continue
		}
		w, err := Draft(c)
		if err != nil {
			// A line for display only, or one that an animal lacks: no steps.
			continue
		}
		for _, d := range w.Drafts {
			for _, s := range d.Steps {
				if strings.HasPrefix(s.Substituted, "nearest to") || s.Substituted == "the middle as typed" || strings.Contains(s.Result, " to ") || strings.HasSuffix(s.Formula, "as given") {
					continue // a choice, or two numbers at once
				}
				got, err := calculate(strings.ReplaceAll(s.Substituted, ", ", ";"))
				if err != nil {
					t.Errorf("%s: %s: %v", in.Models[0].Species.Text, s.Title, err)
					continue
				}
				printed, err := strconv.ParseFloat(strings.ReplaceAll(strings.Fields(s.Result)[0], ",", ""), 64)
				if err != nil {
					t.Errorf("%s: result %q", s.Title, s.Result)
					continue
				}
				if relative(got, printed) > 2e-4 {
					t.Errorf("%s: %s: %q gives %v, printed %s", in.Models[0].Species.Text, s.Title, s.Substituted, got, s.Result)
				}
				if relative(printed, s.Value) > 1e-5 {
					t.Errorf("%s: printed %s, value %v", s.Title, s.Result, s.Value)
				}
				followed++
				seen[s.Title] = true
			}
		}
	}
	if followed < 500 || len(seen) < 40 {
		t.Errorf("only %d steps of %d kinds followed", followed, len(seen))
	}
}

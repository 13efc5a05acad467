package metabolic

import (
	"math"
	"reflect"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// The rate of every line in kcal/day, worked out apart from this code when the
// table was compiled (20.1 J per mL O2, 4.184 J per calorie): at 1 kg to 3
// figures, lines with a temperature term at the temperature of checkedAt,
// lines with a temperature of their own at that; and at 50 g to 5 figures,
// ectotherms at 25 °C by a Q10 of 2.5.
var kcalPerDay = map[string]struct{ at1kg, at50g float64 }{
	"kleiber1961":                {70, 7.4016},
	"kleiber1947":                {67.6, 7.0214},
	"kleiber1932":                {73.3, 7.9862},
	"brody1945":                  {70.5, 7.8205},
	"whiteseymour2003":           {51.2, 6.8804},
	"whiteseymour2003_all":       {54.7, 6.9808},
	"savage2004":                 {61.2, 6.7308},
	"kolokotrones2010":           {52.1, 6.5692},
	"mcnab2008":                  {58.4, 6.7402},
	"ballesteros2018_mammals":    {57.4, 6.6372},
	"ballesteros2018_desert":     {52.7, 5.751},
	"ballesteros2018_polar":      {91.1, 11.434},
	"stahl1967_vo2":              {80.2, 8.2346},
	"schmidtnielsen_w":           {69, 7.2928},
	"hemmingsen1960_homeo":       {84.7, 8.9255},
	"hemmingsen1960_poikilo":     {2.89, 0.48189},
	"common_636":                 {69.5, 7.1334},
	"dawsonhulbert1970":          {48.6, 5.3429},
	"macmillennelson1969":        {46.6, 5.0877},
	"dawsondawson1982_dasyurid":  {45.8, 4.8473},
	"dawsondawson1982_rodent":    {67.5, 7.14},
	"monotreme_zaglossus":        {17.8, 1.8778},
	"monotreme_tachyglossus":     {20.2, 2.1398},
	"monotreme_ornithorhynchus":  {45.6, 4.8255},
	"group_passerine":            {129, 13.64},
	"group_nonpasserine":         {78, 8.2475},
	"group_placental":            {70, 7.4016},
	"group_marsupial":            {49, 5.1811},
	"group_reptile37":            {10, 0.35213},
	"ld1967_passerine":           {129, 14.745},
	"ld1967_nonpasserine":        {78.3, 8.9767},
	"ld1967_all":                 {86.4, 11.68},
	"ap1970_pass_rest":           {115, 13.043},
	"ap1970_pass_active":         {141, 17.1},
	"ap1970_nonpass_rest":        {73.5, 8.1533},
	"ap1970_nonpass_active":      {91, 10.247},
	"brodyproctor1932":           {89, 13.084},
	"kingfarner1961_large":       {74.3, 7.9988},
	"kingfarner1961_all":         {80.2, 11.131},
	"zar1969_all":                {77.5, 8.4639},
	"zar1969_passerine":          {113, 17.026},
	"zar1969_nonpasserine":       {76.2, 8.2333},
	"bennettharvey1987":          {57.6, 7.7377},
	"daan1990":                   {86.4, 11.363},
	"reynoldslee1996":            {82, 11.021},
	"reynoldslee1996_pc":         {81.1, 12.1},
	"gavrilov1997_passerine":     {104, 12.772},
	"gavrilov1997_nonpasserine":  {83.6, 9.9612},
	"tielemanwilliams2000":       {73.7, 10.898},
	"rezende2002":                {78.8, 11.757},
	"mckechniewolf2004":          {72.6, 9.7844},
	"mckechniewolf2004_pi":       {58.2, 7.6582},
	"mcnab2009":                  {75.2, 10.659},
	"ballesteros2018_flying":     {76.7, 10.72},
	"ballesteros2018_flightless": {60.7, 6.532},
	"bushuev2018_tropical":       {48.5, 8.3017},
	"bd1976_lizard20":            {2.78, 0.40016},
	"bd1976_lizard30":            {8.55, 0.44999},
	"bd1976_lizard37":            {14.1, 0.40254},
	"bd1976_snake20":             {2.82, 0.44481},
	"bd1976_snake30":             {6.15, 0.39923},
	"bd1976_turtle20":            {2.89, 0.34789},
	"bd1976_reptile20":           {2.95, 0.42517},
	"bd1976_reptile30":           {6.54, 0.41219},
	"lizard20_practice":          {3.14, 0.42609},
	"ap1985_standard":            {5.2, 0.30545},
	"ap1985_resting":             {7.17, 0.42163},
	"seymour2013_cporosus":       {6.99, 0.36878},
	"gienger2017_alligator":      {3.4, 0.11928},
	"smith1975_alligator":        {15.8, 1.4226},
	"gillooly2001_endotherm":     {71.1, 7.5139},
	"gillooly2001_reptile":       {7.4, 0.48149},
	"gillooly2001_amphibian":     {3.14, 0.46221},
	"nagy_mammals":               {183, 20.347},
	"nagy_birds":                 {277, 36.024},
	"nagy_reptiles":              {21.8, 1.5172},
	"nagy_eutherian":             {208, 20.62},
	"nagy_marsupial":             {142, 24.273},
	"nagy_passerine":             {273, 35.542},
}

var checkedAt = map[string]Celsius{
	"ap1985_standard": 30, "ap1985_resting": 30, "smith1975_alligator": 30, "gillooly2001_reptile": 30, "gillooly2001_amphibian": 20,
}

func TestEveryLineAgainstItsCheckValues(t *testing.T) {
	if len(Equations()) != len(kcalPerDay) {
		t.Errorf("%d lines, %d check values", len(Equations()), len(kcalPerDay))
	}
	for _, e := range Equations() {
		want, ok := kcalPerDay[e.ID]
		if !ok {
			t.Errorf("%s has no check value", e.ID)
			continue
		}
		at, ok := checkedAt[e.ID]
		if !ok {
			at = e.T0
		}
		p, err := e.Rate(1, at, Q10Default)
		if err != nil {
			t.Error(err)
			continue
		}
		// Half a unit of the third figure.
		half := 0.5 * math.Pow(10, math.Floor(math.Log10(want.at1kg))-2)
		within(t, e.ID+" at 1 kg", p.KcalPerDay(), want.at1kg, half*(1+1e-6))
		small, err := e.Rate(0.05, 25, 2.5)
		if err != nil {
			t.Error(err)
			continue
		}
		near(t, e.ID+" at 50 g", small.KcalPerDay(), want.at50g, 6e-5)
	}
}

func TestTableIsWhole(t *testing.T) {
	ids := map[string]bool{}
	for _, e := range Equations() {
		if e.ID == "" || ids[e.ID] {
			t.Errorf("id %q is empty or there twice", e.ID)
		}
		ids[e.ID] = true
		if e.Animals == "" || e.Citation == "" || e.Verified == "" || len(e.AppliesTo) == 0 {
			t.Errorf("%s: animals, citation, mark or groups are missing", e.ID)
		}
		if strings.Contains(e.Verified, "no source") != strings.Contains(e.Citation, "no source") {
			t.Errorf("%s: mark and citation disagree on whether there is a source", e.ID)
		}
		if !slices.Contains([]string{"BMR", "SMR", "RMR", "FMR"}, e.Kind) ||
			!slices.Contains([]string{FormPower, FormLogLinear, FormBoltzmann, FormLinear, FormQuadratic}, e.Form) ||
			!slices.Contains([]string{LevelInterspecific, LevelIntraspecific, LevelSingleSpecies}, e.Level) {
			t.Errorf("%s: kind %q, form %q or level %q", e.ID, e.Kind, e.Form, e.Level)
		}
		if !(e.A > 0) || !(e.B > 0.5 && e.B < 1) || (e.C != 0) == (e.Form == FormPower) {
			t.Errorf("%s: a %v, b %v, c %v for a %s line", e.ID, e.A, e.B, e.C, e.Form)
		}
		if e.MassHigh != 0 && !(e.MassLow > 0 && e.MassLow < e.MassHigh) || e.THigh != 0 && !(e.TLow < e.THigh) || e.N < 0 || e.ResidualSDln < 0 {
			t.Errorf("%s: masses %v to %v, temperatures %v to %v, n %d, sd %v", e.ID, e.MassLow, e.MassHigh, e.TLow, e.THigh, e.N, e.ResidualSDln)
		}
		ectotherms := []string{"squamate", "chelonian", "crocodilian", "tuatara", "frog", "salamander", "caecilian", "Crocodylus porosus", "Alligator mississippiensis"}
		for _, name := range append(slices.Clone(e.AppliesTo), e.DefaultFor...) {
			if e.Ectotherm() != slices.Contains(ectotherms, name) {
				t.Errorf("%s: %s is an ectotherm, the line's animals are not, or the other way about", e.ID, name)
			}
			if first := name[:1]; first == strings.ToLower(first) && !slices.Contains(Groups, name) {
				t.Errorf("%s: %q is no group", e.ID, name)
			}
		}
		for _, name := range e.DefaultFor {
			if !slices.Contains(e.AppliesTo, name) || !e.Usable() {
				t.Errorf("%s is the default of %q but does not apply to it or is not usable", e.ID, name)
			}
		}
		if e.Ectotherm() && e.Usable() && !e.NeedsTemperature() {
			t.Errorf("%s: a line of ectotherms without a temperature is said to be usable", e.ID)
		}
		if e.HasTemperatureTerm() && !e.Ectotherm() && !e.HasT0 {
			t.Errorf("%s: a line of endotherms with a temperature term has no temperature to take it at", e.ID)
		}
		for _, text := range []string{e.Animals, e.Citation, e.Verified, e.Note} {
			if text != strings.TrimSpace(text) || strings.ContainsAny(text, "\n\t\\") || strings.Contains(text, "://") || strings.Contains(" "+text, " /") {
				t.Errorf("%s: odd text %q", e.ID, text)
			}
		}
	}
	if _, ok := FindEquation("kleiber"); ok {
		t.Error("a line is found that is not there")
	}
}

func TestReadEquationsRefuses(t *testing.T) {
	head := strings.Join(equationColumns, ",") + "\n"
	row := func(change func(cells []string)) string {
		cells := strings.Split("x,mammals,placental mammal,endotherm,BMR,power,70,0.75,,kg,kcal/day,,,,,,,,inter-specific,,,c,memory,", ",")
		change(cells)
		return head + strings.Join(cells, ",") + "\n"
	}
	for name, text := range map[string]string{
		"nothing":         "",
		"another head":    strings.Replace(head, "kind", "sort", 1),
		"a short row":     head + "x,mammals\n",
		"a quote":         head + "\"x\n",
		"a word for a":    row(func(c []string) { c[6] = "seventy" }),
		"NaN for b":       row(func(c []string) { c[7] = "NaN" }),
		"a third thermy":  row(func(c []string) { c[3] = "lukewarm" }),
		"a third truth":   row(func(c []string) { c[20] = "perhaps" }),
		"overflow of low": row(func(c []string) { c[14] = "1e999" }),
	} {
		if table, err := readEquations(strings.NewReader(text)); err == nil {
			t.Errorf("%s: %d rows and no error", name, len(table))
		}
	}
	if table, err := readEquations(strings.NewReader(row(func([]string) {}))); err != nil || len(table) != 1 {
		t.Errorf("the row that the others change is not read: %v", err)
	}
}

func TestDefaults(t *testing.T) {
	for name, want := range map[string]string{
		"placental mammal": "kleiber1947", "marsupial": "dawsonhulbert1970", "passerine bird": "ap1970_pass_rest", "non-passerine bird": "ap1970_nonpass_rest",
		"squamate": "ap1985_standard", "chelonian": "bd1976_turtle20", "crocodilian": "bd1976_reptile20", "tuatara": "bd1976_reptile20",
		"frog": "gillooly2001_amphibian", "salamander": "gillooly2001_amphibian", "caecilian": "gillooly2001_amphibian",
		"Tachyglossus aculeatus": "monotreme_tachyglossus", "Ornithorhynchus anatinus": "monotreme_ornithorhynchus", "Zaglossus bruijnii": "monotreme_zaglossus",
	} {
		e, ok := DefaultEquation(name)
		if !ok || e.ID != want {
			t.Errorf("DefaultEquation(%q) = %v, %v; want %s", name, e, ok, want)
		}
		count := 0
		for _, e := range Equations() {
			if covers(e.DefaultFor, name, name) {
				count++
			}
		}
		if count != 1 {
			t.Errorf("%s has %d default lines", name, count)
		}
	}
	for _, name := range []string{"monotreme", "", "fish", "Canis lupus familiaris", "Alligator mississippiensis"} {
		if e, ok := DefaultEquation(name); ok {
			t.Errorf("DefaultEquation(%q) = %s", name, e.ID)
		}
	}
	if e, _ := DefaultEquation("frog"); !e.LowConfidence || !e.Memory() {
		t.Error("the line of amphibians is not marked as weak")
	}
}

// The five constants that start without the table are the table's rows.
func TestGroupConstantsAreInTheTable(t *testing.T) {
	want := map[string]float64{
		"placental mammal": 70, "marsupial": 49, "non-passerine bird": 78, "passerine bird": 129,
		"squamate": 10, "chelonian": 10, "crocodilian": 10, "tuatara": 10,
	}
	for _, group := range Groups {
		e, ok := GroupConstant(group)
		if k, has := want[group]; ok != has || has && e.A != k {
			t.Errorf("GroupConstant(%q) = %v, %v; want %v", group, e, ok, k)
		}
		if !ok {
			continue
		}
		row, found := FindEquation(e.ID)
		if !found || !reflect.DeepEqual(e, row) {
			t.Errorf("%s is not the table's row:\n%+v\n%+v", e.ID, e, row)
		}
		if e.B != 0.75 || e.MassUnit != "kg" || e.RateUnit != "kcal/day" || !e.Usable() || e.Ectotherm() != (e.A == 10) || e.Ectotherm() && e.T0 != 37 {
			t.Errorf("%s: %+v", e.ID, e)
		}
	}
	n := 0
	for _, e := range Equations() {
		if strings.HasPrefix(e.ID, "group_") {
			n++
		}
	}
	if n != len(groupConstants) {
		t.Errorf("%d group rows in the table, %d in the code", n, len(groupConstants))
	}
}

func TestUsable(t *testing.T) {
	for id, want := range map[string]bool{
		"kleiber1947": true, "dawsonhulbert1970": true, "monotreme_tachyglossus": true, "gillooly2001_amphibian": true, "kolokotrones2010": true,
		"stahl1967_vo2": false, "nagy_mammals": false, "ap1970_pass_active": false, "ap1985_resting": false,
		"seymour2013_cporosus": false, "gienger2017_alligator": false, "smith1975_alligator": false,
	} {
		e, ok := FindEquation(id)
		if !ok || e.Usable() != want {
			t.Errorf("%s: Usable is %v, want %v", id, !want, want)
		}
	}
	echidna, _ := FindEquation("monotreme_tachyglossus")
	if echidna.Interspecific() {
		t.Error("one echidna is taken for a line between species")
	}
	if !echidna.Applies("monotreme", "Tachyglossus aculeatus") || echidna.Applies("monotreme", "Ornithorhynchus anatinus") || echidna.Applies("", "") {
		t.Error("the line of the short-beaked echidna is not its own")
	}
	long, _ := FindEquation("monotreme_zaglossus")
	if !long.Applies("monotreme", "Zaglossus attenboroughi") {
		t.Error("the genus of a line does not cover its species")
	}
	kleiber, _ := FindEquation("kleiber1947")
	if !kleiber.Applies("placental mammal", "Canis lupus") || kleiber.Applies("marsupial", "Macropus rufus") || kleiber.Interspecific() != true {
		t.Error("the line of placental mammals is not theirs")
	}
}

func TestFormula(t *testing.T) {
	for id, want := range map[string]string{
		"group_placental":        "B = 70·W^0.75 kcal/day, W in kg",
		"schmidtnielsen_w":       "B = 3.34·W^0.75 watt, W in kg",
		"bd1976_turtle20":        "B = 0.066·W^0.86 mL O2/h, W in g, at 20 °C",
		"ap1985_standard":        "B = 0.013·W^0.8·10^(0.038·T) mL O2/h, W in g, T in °C",
		"smith1975_alligator":    "B = 0.0673·W^0.69·(T − 12.67) mL O2/h, W in g, T in °C",
		"gillooly2001_reptile":   "B = 7.6323×10^9·W^0.75·e^(−8,780/T) watt, W in g, T in kelvin",
		"gillooly2001_endotherm": "B = 1.06953×10^11·W^0.75·e^(−9,100/T) watt, W in g, T in kelvin, taken at 37 °C",
		"kolokotrones2010":       "B = 0.0310599·W^(0.54 + 0.0322·log10 W) watt, W in g",
		"group_passerine":        "B = 129·W^0.75 kcal/day, W in kg",
	} {
		e, ok := FindEquation(id)
		if !ok || e.Formula() != want {
			t.Errorf("%s: %q, want %q", id, e.Formula(), want)
		}
	}
}

func TestRateErrors(t *testing.T) {
	turtle, _ := FindEquation("bd1976_turtle20")
	alligator, _ := FindEquation("smith1975_alligator")
	squamate, _ := FindEquation("ap1985_standard")
	kleiber, _ := FindEquation("kleiber1947")
	for _, c := range []struct {
		e    *Equation
		m    Mass
		t    Celsius
		q10  float64
		says string
	}{
		{kleiber, 0, 37, 2.5, "no rate"},
		{kleiber, -1, 37, 2.5, "no rate"},
		{kleiber, Mass(math.NaN()), 37, 2.5, "no rate"},
		{kleiber, Mass(math.Inf(1)), 37, 2.5, "no rate"},
		{turtle, 1, 0, 2.5, "10 to 40 °C"},
		{turtle, 1, 41, 2.5, "10 to 40 °C"},
		{turtle, 1, Celsius(math.NaN()), 2.5, "10 to 40 °C"},
		{turtle, 1, 25, 0, "Q10"},
		{turtle, 1, 25, 4.5, "Q10"},
		{turtle, 1, 25, math.NaN(), "Q10"},
		{squamate, 1, 9, 2.5, "10 to 40 °C"},
		{alligator, 1, 12, 2.5, "15 to 35 °C"},
		{alligator, 1, 36, 2.5, "15 to 35 °C"},
		{&Equation{ID: "x", Form: FormPower, A: 1, B: 1, MassUnit: "stone", RateUnit: "W"}, 1, 37, 2.5, "mass unit"},
		{&Equation{ID: "x", Form: FormPower, A: 1, B: 1, MassUnit: "kg", RateUnit: "hp"}, 1, 37, 2.5, "rate unit"},
		{&Equation{ID: "x", Form: "cubic", A: 1, B: 1, MassUnit: "kg", RateUnit: "W"}, 1, 37, 2.5, "form"},
		{&Equation{ID: "x", Form: FormBoltzmann, A: 1, B: 1, C: 1, MassUnit: "kg", RateUnit: "W"}, 1, 37, 2.5, "temperature"},
		{&Equation{ID: "x", Form: FormPower, A: 0, B: 1, MassUnit: "kg", RateUnit: "W"}, 1, 37, 2.5, "no rate"},
	} {
		p, err := c.e.Rate(c.m, c.t, c.q10)
		if err == nil || !strings.Contains(err.Error(), c.says) || p != 0 {
			t.Errorf("%s at %v kg, %v °C, Q10 %v: %v, %v; want an error that says %q", c.e.ID, float64(c.m), float64(c.t), c.q10, p, err, c.says)
		}
	}
	for _, at := range []Celsius{15, 35} {
		if _, err := alligator.Rate(1, at, 2.5); err != nil {
			t.Errorf("the ends of the temperatures of a fit are outside it: %v", err)
		}
	}
	// An endotherm's temperature and Q10 change nothing, absurd ones included.
	for _, id := range []string{"kleiber1947", "group_passerine", "gillooly2001_endotherm", "kolokotrones2010"} {
		e, _ := FindEquation(id)
		p, err1 := e.Rate(3, 37, 2.5)
		q, err2 := e.Rate(3, Celsius(math.NaN()), 0)
		if err1 != nil || err2 != nil || p != q {
			t.Errorf("%s: %v (%v) and %v (%v)", id, p, err1, q, err2)
		}
	}
	// A term for temperature is the only one: Q10 does not come on top.
	p, _ := squamate.Rate(1, 20, 1.5)
	q, _ := squamate.Rate(1, 20, 4)
	if p != q {
		t.Errorf("a line with a temperature term follows Q10: %v and %v", p, q)
	}
}

// In whatever units a line is written, it gives the same rate, and back again
// the same coefficient: a' = a·(mass unit)^-b·(rate unit).
func TestConversionLaw(t *testing.T) {
	table := slices.DeleteFunc(Equations(), func(e *Equation) bool { return e.Form == FormQuadratic })
	rapid.Check(t, func(r *rapid.T) {
		e := rapid.SampledFrom(table).Draw(r, "line")
		massUnit := rapid.SampledFrom([]string{"g", "kg", "lb", "oz"}).Draw(r, "mass unit")
		rateUnit := rapid.SampledFrom([]string{"W", "mW", "kcal/day", "kJ/day", "J/h", "kJ/h", "mL O2/h", "mL O2/min"}).Draw(r, "rate unit")
		m := Mass(math.Pow(10, rapid.Float64Range(-3, 4).Draw(r, "log mass")))
		at := Celsius(rapid.Float64Range(15, 35).Draw(r, "temperature"))
		q10 := rapid.Float64Range(Q10Low, Q10High).Draw(r, "q10")

		a, b, err := e.Convert(massUnit, rateUnit)
		if err != nil {
			r.Fatal(err)
		}
		converted := *e
		converted.A, converted.B, converted.MassUnit, converted.RateUnit = a, b, massUnit, rateUnit
		want, err1 := e.Rate(m, at, q10)
		got, err2 := converted.Rate(m, at, q10)
		if err1 != nil || err2 != nil || math.Abs(float64(got/want)-1) > 1e-12 {
			r.Fatalf("%s in %s and %s: %v (%v), want %v (%v)", e.ID, massUnit, rateUnit, got, err2, want, err1)
		}
		back, _, err := converted.Convert(e.MassUnit, e.RateUnit)
		if err != nil || math.Abs(back/e.A-1) > 1e-12 {
			r.Fatalf("%s: %v comes back as %v, %v", e.ID, e.A, back, err)
		}
	})
	quadratic, _ := FindEquation("kolokotrones2010")
	if _, _, err := quadratic.Convert("kg", "W"); err == nil || !strings.Contains(err.Error(), "exponent") {
		t.Errorf("a quadratic line is converted: %v", err)
	}
	kleiber, _ := FindEquation("kleiber1947")
	for _, c := range [][2]string{{"stone", "W"}, {"kg", "hp"}, {"", ""}} {
		if _, _, err := kleiber.Convert(c[0], c[1]); err == nil {
			t.Errorf("converted to %q and %q", c[0], c[1])
		}
	}
	for _, e := range []*Equation{{Form: FormPower}, {Form: FormPower, MassUnit: "kg"}, {Form: FormPower, RateUnit: "W"}} {
		if _, _, err := e.Convert("kg", "W"); err == nil {
			t.Errorf("a line in %q and %q is converted", e.MassUnit, e.RateUnit)
		}
	}
}

// A rate rises with mass, with an ectotherm's temperature, and for a power
// line as the mass to the power b.
func TestRateLaws(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		e := rapid.SampledFrom(Equations()).Draw(r, "line")
		m := Mass(math.Pow(10, rapid.Float64Range(-3, 3).Draw(r, "log mass")))
		fold := rapid.Float64Range(1.01, 100).Draw(r, "fold")
		at := Celsius(rapid.Float64Range(15, 34).Draw(r, "temperature"))
		p, err1 := e.Rate(m, at, 2.5)
		heavier, err2 := e.Rate(m*Mass(fold), at, 2.5)
		warmer, err3 := e.Rate(m, at+1, 2.5)
		if err1 != nil || err2 != nil || err3 != nil {
			r.Fatal(err1, err2, err3)
		}
		if e.Form != FormQuadratic {
			if b := math.Log(float64(heavier/p)) / math.Log(fold); math.Abs(b-e.B) > 1e-9 {
				r.Fatalf("%s: exponent %v, want %v", e.ID, b, e.B)
			}
		} else if heavier <= p {
			r.Fatalf("%s falls with mass", e.ID)
		}
		if e.NeedsTemperature() != (warmer > p) || !e.NeedsTemperature() && warmer != p {
			r.Fatalf("%s at %v °C: %v, a degree warmer %v", e.ID, float64(at), p, warmer)
		}
		if e.Form == FormPower && e.NeedsTemperature() {
			if f := float64(warmer / p); math.Abs(f-math.Pow(2.5, 0.1)) > 1e-9 {
				r.Fatalf("%s: a degree gives %v", e.ID, f)
			}
		}
	})
}

func BenchmarkRate(b *testing.B) {
	e, _ := GroupConstant("squamate")
	b.ReportAllocs()
	for b.Loop() {
		if _, err := e.Rate(1.4, 30, Q10Default); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkReadEquations(b *testing.B) {
	for b.Loop() {
		if _, err := readEquations(strings.NewReader(equationsCSV)); err != nil {
			b.Fatal(err)
		}
	}
}

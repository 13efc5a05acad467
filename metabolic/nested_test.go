package metabolic

import (
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strconv"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"
)

// measuredRow is a row of the measured rates that a class is fitted to.
type measuredRow struct {
	fitRow
	NestedRow
}

// measuredRates are the rows of one class without a flag: ln W on ln kg, and
// for ectotherms on the temperature of measurement in °C.
func measuredRates(t testing.TB, class string) []measuredRow {
	t.Helper()
	var rows []measuredRow
	for _, r := range fitTable(t, "../species/data/measured-rates.csv") {
		if r["class"] != class || r["flag"] != "" {
			continue
		}
		x := []float64{math.Log(r.number(t, "mass_kg"))}
		if class == "Reptilia" || class == "Amphibia" {
			x = append(x, r.number(t, "temperature_c"))
		}
		rows = append(rows, measuredRow{r, NestedRow{r["order"], r["family"], r["genus"], x, math.Log(r.number(t, "rate_w"))}})
	}
	return rows
}

func nestedRows(rows []measuredRow) []NestedRow {
	out := make([]NestedRow, len(rows))
	for i, r := range rows {
		out[i] = r.NestedRow
	}
	return out
}

func mustFitNested(t interface{ Fatal(...any) }, rows []NestedRow) *NestedFit {
	f, err := FitNested(rows)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

var measuredClasses = []string{"Mammalia", "Aves", "Reptilia", "Amphibia"}

// R 4.2.2 with nlme 3.1-162, lme(..., random = ~1|order/family/genus, method =
// "REML") run to convergence, and the dense covariance matrix for what lme does
// not give. testdata/r/nested.R.
func TestNestedAgainstR(t *testing.T) {
	figures := map[string][]fitRow{}
	for _, r := range fitTable(t, "../testdata/r/nested-figures.csv") {
		figures[r["class"]] = append(figures[r["class"]], r)
	}
	for _, class := range measuredClasses {
		t.Run(class, func(t *testing.T) {
			rows := measuredRates(t, class)
			f := mustFitNested(t, nestedRows(rows))
			left, err := f.LeaveOneOut(nestedRows(rows))
			if err != nil {
				t.Fatal(err)
			}
			byName := map[string]NestedLeftOut{}
			var ss, standardised, within90 float64
			for i, l := range left {
				byName[strings.ReplaceAll(rows[i].fitRow["scientific_name"], " ", "_")] = l
				d := l.Observed - l.Predicted
				ss += d * d
				standardised += d * d / (l.SD * l.SD)
				if math.Abs(d) < 1.6448536269514722*l.SD {
					within90++
				}
			}
			// The sd means what it says: nine species in ten lie within 1.645 of it.
			if share := within90 / float64(len(rows)); share < 0.88 || share > 0.92 {
				t.Errorf("%.1f %% of the species lie within their 90 %% range when left out", 100*share)
			}
			n := float64(len(rows))
			checked := 0
			for _, r := range figures[class] {
				figure, want := r["figure"], r.number(t, "value")
				what, index, hasIndex := strings.Cut(figure, "beta_")
				switch {
				case figure == "n":
					wantClose(t, figure, float64(f.N), want, 0)
				case figure == "n_order":
					wantClose(t, figure, float64(f.Orders), want, 0)
				case figure == "n_family":
					wantClose(t, figure, float64(f.Families), want, 0)
				case figure == "n_genus":
					wantClose(t, figure, float64(f.Genera), want, 0)
				case figure == "cov_beta_0_1":
					wantClose(t, figure, f.CovBeta[0][1], want, 1e-8)
				case hasIndex && what == "":
					i, _ := strconv.Atoi(index)
					wantClose(t, figure, f.Beta[i], want, 1e-7)
				case hasIndex && what == "se_":
					i, _ := strconv.Atoi(index)
					wantDigits(t, figure, math.Sqrt(f.CovBeta[i][i]), want, 1e-6)
				case figure == "var_order":
					wantClose(t, figure, f.VarOrder, want, 1e-6*f.VarResidual)
				case figure == "var_family":
					wantClose(t, figure, f.VarFamily, want, 1e-6*f.VarResidual)
				case figure == "var_genus":
					wantClose(t, figure, f.VarGenus, want, 1e-6*f.VarResidual)
				case figure == "var_residual":
					wantClose(t, figure, f.VarResidual, want, 1e-6*f.VarResidual)
				case figure == "log_likelihood":
					wantClose(t, figure, f.LogLikREML, want, 1e-8)
				case figure == "leave_one_out_rms":
					wantDigits(t, figure, math.Sqrt(ss/n), want, 1e-7)
				case figure == "leave_one_out_mean_square_standardised":
					wantDigits(t, figure, standardised/n, want, 1e-6)
				case figure == "leave_one_out_within_90":
					wantClose(t, figure, within90, want, 0)
				case strings.HasPrefix(figure, "left_out_mean_"):
					wantClose(t, figure, byName[strings.TrimPrefix(figure, "left_out_mean_")].Predicted, want, 1e-7)
				case strings.HasPrefix(figure, "left_out_sd_"):
					wantDigits(t, figure, byName[strings.TrimPrefix(figure, "left_out_sd_")].SD, want, 1e-6)
				default:
					t.Errorf("nothing to hold against %s", figure)
				}
				checked++
			}
			if checked < 18 {
				t.Errorf("%d figures checked, the file should hold 18 or more a class", checked)
			}
			if len(f.Held) != 0 {
				t.Errorf("held %v", f.Held)
			}
		})
	}
}

// R as above: predictions with their standard deviations for species that share
// a genus, a family, an order or nothing with the measured ones.
func TestNestedPredictionsAgainstR(t *testing.T) {
	fits := map[string]*NestedFit{}
	for _, class := range measuredClasses {
		fits[class] = mustFitNested(t, nestedRows(measuredRates(t, class)))
	}
	asked := fitTable(t, "../testdata/r/nested-species.csv")
	levels := map[string]int{}
	for i, want := range fitTable(t, "../testdata/r/nested-predictions.csv") {
		r := asked[i]
		if r["scientific_name"] != want["scientific_name"] {
			t.Fatalf("row %d: %s asked, %s predicted", i+1, r["scientific_name"], want["scientific_name"])
		}
		x := []float64{math.Log(r.number(t, "mass_kg"))}
		if r["temperature_c"] != "" {
			x = append(x, r.number(t, "temperature_c"))
		}
		p, err := fits[r["class"]].Predict(r["order"], r["family"], r["genus"], x)
		if err != nil {
			t.Fatal(err)
		}
		wantClose(t, r["scientific_name"]+" mean", p.Mean, want.number(t, "mean"), 1e-7)
		wantDigits(t, r["scientific_name"]+" sd", p.SD, want.number(t, "sd"), 1e-6)
		if p.Level != want["level"] {
			t.Errorf("%s shares %q, want %q", r["scientific_name"], p.Level, want["level"])
		}
		levels[p.Level]++
	}
	if len(levels) != 4 || levels["genus"] < 4 || levels["family"] < 4 || levels["order"] < 4 {
		t.Errorf("levels shared: %v; every one should be tried", levels)
	}
}

// What the kin buy: the error of predicting a species from the others, against
// that of the comparative constants (kcal/day per kg^0.75: 70, 49, 78, 129 for
// birds that perch, 10 for reptiles at 37 °C with Q10 2.5), rms ln. Figures to
// four digits by R 4.2.2.
func TestNestedBeatsGroupConstants(t *testing.T) {
	const kcalPerDay = 20.6501 // 1 W
	constants := map[string]float64{
		"placental mammal": 70, "marsupial": 49, "non-passerine bird": 78, "passerine bird": 129,
		"squamate": 10, "chelonian": 10, "crocodilian": 10, "tuatara": 10,
	}
	for _, c := range []struct {
		class             string
		relatives, groups float64
	}{
		{"Mammalia", 0.2605, 0.3975}, {"Aves", 0.2138, 0.2795}, {"Reptilia", 0.4022, 0.4827}, {"Amphibia", 0.4294, 0},
	} {
		rows := measuredRates(t, c.class)
		f := mustFitNested(t, nestedRows(rows))
		left, err := f.LeaveOneOut(nestedRows(rows))
		if err != nil {
			t.Fatal(err)
		}
		var kin, group []float64
		for i, l := range left {
			kin = append(kin, l.Predicted-l.Observed)
			if k, ok := constants[rows[i].fitRow["group"]]; ok {
				b := math.Log(k/kcalPerDay) + 0.75*rows[i].Covariates[0]
				if c.class == "Reptilia" {
					b += math.Log(2.5) * (rows[i].Covariates[1] - 37) / 10
				}
				group = append(group, b-l.Observed)
			}
		}
		if got := rms(kin); math.Abs(got-c.relatives) > 5.1e-5 {
			t.Errorf("%s from relatives: %.5f, want %.4f", c.class, got, c.relatives)
		}
		if got := rms(group); math.Abs(got-c.groups) > 5.1e-5 {
			t.Errorf("%s from group constants: %.5f, want %.4f", c.class, got, c.groups)
		}
	}
}

// Terms tried and left out, by the same error, rms ln over all species left out
// in turn; figures to four digits by R 4.2.2, nlme and the dense matrix. The best
// of them is mass by temperature in reptiles, 3 % lower; with the variances
// fitted anew as well its mean gain in squared error is 1.2 of its standard
// errors and rests on a few animals far from the rest, so that the plain line
// stays. A species asked for by name has no "not basal" of its own. Own slopes by
// order or family, with lme alone: mammals 0.2609 and 0.2596, birds 0.2118 and
// 0.2138, reptiles 0.4022 and 0.3978, amphibians 0.4294 both.
func TestNestedTermsTried(t *testing.T) {
	is := func(column, value string) func(measuredRow) float64 {
		return func(r measuredRow) float64 {
			if r.fitRow[column] == value {
				return 1
			}
			return 0
		}
	}
	square := func(r measuredRow) float64 { return r.Covariates[0] * r.Covariates[0] }
	for _, c := range []struct {
		class, term string
		extra       func(measuredRow) float64
		plain, with float64
	}{
		{"Mammalia", "not basal", is("grade", "not basal"), 0.2605, 0.2570},
		{"Mammalia", "marsupial", is("group", "marsupial"), 0.2605, 0.2602},
		{"Mammalia", "(ln mass)²", square, 0.2605, 0.2606},
		{"Aves", "passerine", is("group", "passerine bird"), 0.2138, 0.2137},
		{"Aves", "(ln mass)²", square, 0.2138, 0.2135},
		{"Reptilia", "(ln mass)²", square, 0.4022, 0.4020},
		{"Reptilia", "ln mass by temperature", func(r measuredRow) float64 { return r.Covariates[0] * r.Covariates[1] }, 0.4022, 0.3911},
		{"Amphibia", "salamander", is("group", "salamander"), 0.4294, 0.4318},
		{"Amphibia", "ln mass by temperature", func(r measuredRow) float64 { return r.Covariates[0] * r.Covariates[1] }, 0.4294, 0.4292},
	} {
		t.Run(c.class+" "+c.term, func(t *testing.T) {
			rows := measuredRates(t, c.class)
			if got := leftOutError(t, nestedRows(rows)); math.Abs(got-c.plain) > 5.1e-5 {
				t.Errorf("plain %.5f, want %.4f", got, c.plain)
			}
			wider := nestedRows(rows)
			for i, r := range rows {
				wider[i].Covariates = append(slices.Clone(r.Covariates), c.extra(r))
			}
			if got := leftOutError(t, wider); math.Abs(got-c.with) > 5.1e-5 {
				t.Errorf("with the term %.5f, want %.4f", got, c.with)
			}
		})
	}
}

// Fitting the variances anew without each species, too, changes little: what
// LeaveOneOut holds does not flatter. Figures by R 4.2.2, lme run to convergence
// without each row in turn.
func TestNestedLeaveOneOutHoldsLittle(t *testing.T) {
	for _, c := range []struct {
		class      string
		held, anew float64
	}{{"Reptilia", 0.4022, 0.4104}, {"Amphibia", 0.4294, 0.4349}} {
		rows := nestedRows(measuredRates(t, c.class))
		var e []float64
		for i, r := range rows {
			p, err := mustFitNested(t, append(slices.Clone(rows[:i]), rows[i+1:]...)).Predict(r.Order, r.Family, r.Genus, r.Covariates)
			if err != nil {
				t.Fatal(err)
			}
			e = append(e, p.Mean-r.Y)
		}
		if got := rms(e); math.Abs(got-c.anew) > 5.1e-5 {
			t.Errorf("%s: variances fitted anew %.5f, want %.4f", c.class, got, c.anew)
		}
		if got := leftOutError(t, rows); math.Abs(got-c.held) > 5.1e-5 {
			t.Errorf("%s: variances held %.5f, want %.4f", c.class, got, c.held)
		}
	}
}

func leftOutError(t *testing.T, rows []NestedRow) float64 {
	t.Helper()
	left, err := mustFitNested(t, rows).LeaveOneOut(rows)
	if err != nil {
		t.Fatal(err)
	}
	var e []float64
	for _, l := range left {
		e = append(e, l.Predicted-l.Observed)
	}
	return rms(e)
}

func rms(v []float64) float64 {
	var ss float64
	for _, e := range v {
		ss += e * e
	}
	if len(v) == 0 {
		return 0
	}
	return math.Sqrt(ss / float64(len(v)))
}

// dense is the model with its n by n covariance matrix: the definition, against
// which the sums by level are held.
type dense struct {
	rows    []NestedRow
	theta   [levels]float64
	v, w    *mat.Dense // V and its inverse
	x, c    *mat.Dense // X and (X'V⁻¹X)⁻¹
	y, beta *mat.VecDense
	sigma2  float64
	ll      float64
}

func (m *dense) cov(a, b NestedRow) float64 {
	v := 0.0
	if a.Order == b.Order {
		v += m.theta[levelOrder]
		if a.Family == b.Family {
			v += m.theta[levelFamily]
			if a.Genus == b.Genus {
				v += m.theta[levelGenus]
			}
		}
	}
	return v
}

func newDense(t interface{ Fatal(...any) }, rows []NestedRow, theta [levels]float64) *dense {
	n, p := len(rows), 1+len(rows[0].Covariates)
	m := &dense{rows: rows, theta: theta, v: mat.NewDense(n, n, nil), w: &mat.Dense{}, x: mat.NewDense(n, p, nil), c: &mat.Dense{},
		y: mat.NewVecDense(n, nil), beta: &mat.VecDense{}}
	for i, a := range rows {
		m.x.Set(i, 0, 1)
		for j, v := range a.Covariates {
			m.x.Set(i, j+1, v)
		}
		m.y.SetVec(i, a.Y)
		for j, b := range rows {
			m.v.Set(i, j, m.cov(a, b))
		}
		m.v.Set(i, i, m.v.At(i, i)+1)
	}
	if err := m.w.Inverse(m.v); err != nil {
		t.Fatal(err)
	}
	var wx, xwx mat.Dense
	wx.Mul(m.w, m.x)
	xwx.Mul(m.x.T(), &wx)
	if err := m.c.Inverse(&xwx); err != nil {
		t.Fatal(err)
	}
	var xwy mat.VecDense
	xwy.MulVec(wx.T(), m.y)
	m.beta.MulVec(m.c, &xwy)
	r := m.residual()
	var wr mat.VecDense
	wr.MulVec(m.w, r)
	df := float64(n - p)
	m.sigma2 = mat.Dot(r, &wr) / df
	logV, _ := mat.LogDet(m.v)
	logX, _ := mat.LogDet(&xwx)
	m.ll = -0.5 * (df*(math.Log(2*math.Pi*m.sigma2)+1) + logV + logX)
	return m
}

func (m *dense) residual() *mat.VecDense {
	var r mat.VecDense
	r.MulVec(m.x, m.beta)
	r.SubVec(m.y, &r)
	return &r
}

// predict gives mean and sd of a new row at residual variance s2.
func (m *dense) predict(a NestedRow, s2 float64) (mean, sd float64) {
	n := len(m.rows)
	c := mat.NewVecDense(n, nil)
	for i, b := range m.rows {
		c.SetVec(i, m.cov(a, b))
	}
	x0 := mat.NewVecDense(len(a.Covariates)+1, append([]float64{1}, a.Covariates...))
	var wc, gap, cg mat.VecDense
	wc.MulVec(m.w, c)
	mean = mat.Dot(x0, m.beta) + mat.Dot(&wc, m.residual())
	gap.MulVec(m.x.T(), &wc)
	gap.SubVec(x0, &gap)
	cg.MulVec(m.c, &gap)
	variance := m.theta[0] + m.theta[1] + m.theta[2] + 1 - mat.Dot(c, &wc) + mat.Dot(&gap, &cg)
	return mean, math.Sqrt(variance * s2)
}

// tree draws rows with several orders, families and genera, in no order. The
// values come from a seed: values drawn one by one shrink to rows all alike,
// which no fit can tell apart.
func tree(rt *rapid.T) []NestedRow {
	size := func() float64 { return rapid.SampledFrom([]float64{0, 0.3, 1}).Draw(rt, "spread of a level") }
	return treeOf(rapid.Uint64().Draw(rt, "seed"), rapid.IntRange(24, 50).Draw(rt, "n"), rapid.IntRange(1, 2).Draw(rt, "covariates"),
		[levels]float64{size(), size(), size()})
}

func treeOf(seed uint64, n, covariates int, spread [levels]float64) []NestedRow {
	random := rand.New(rand.NewPCG(seed, 1))
	var effect [levels][4 * 3 * 2]float64
	for l := range effect {
		for i := range effect[l] {
			effect[l][i] = spread[l] * random.NormFloat64()
		}
	}
	var rows []NestedRow
	for range n {
		o, f, g := random.IntN(4), random.IntN(3), random.IntN(2)
		// A family of the same name in two orders is two families. The rows are
		// as many as the genera and more, or there may be no residual to find.
		r := NestedRow{Order: fmt.Sprint("order ", o), Family: fmt.Sprint("family ", f), Genus: fmt.Sprint("genus ", g)}
		for range covariates {
			r.Covariates = append(r.Covariates, 3*random.NormFloat64())
		}
		r.Y = 0.7*r.Covariates[0] + effect[0][o] + effect[1][3*o+f] + effect[2][6*o+2*f+g] + 0.5*random.NormFloat64()
		rows = append(rows, r)
	}
	return rows
}

func thetaOf(f *NestedFit) [levels]float64 {
	return [levels]float64{f.VarOrder / f.VarResidual, f.VarFamily / f.VarResidual, f.VarGenus / f.VarResidual}
}

func TestNestedLaws(t *testing.T) {
	theta := func(rt *rapid.T) (out [levels]float64) {
		for l := range out {
			if !rapid.Bool().Draw(rt, "zero") {
				out[l] = rapid.Float64Range(0, 5).Draw(rt, "theta")
			}
		}
		return out
	}
	t.Run("sums by level are the dense matrix", rapid.MakeCheck(func(rt *rapid.T) {
		rows := tree(rt)
		s, err := newNestedSums(rows)
		if err != nil {
			rt.Fatal(err)
		}
		var st nestedState
		if err := s.up(theta(rt), &st); err != nil {
			rt.Fatal(err)
		}
		m := newDense(rt, rows, st.theta)
		wantClose(rt, "log-likelihood", st.ll, m.ll, 1e-9)
		wantClose(rt, "residual variance", st.sigma2, m.sigma2, 1e-10)
		f := s.fit(rows, &st)
		for i, b := range f.Beta {
			wantClose(rt, "beta", b, m.beta.AtVec(i), 1e-9)
			for j := range f.Beta {
				wantClose(rt, "cov beta", f.CovBeta[i][j], m.sigma2*m.c.At(i, j), 1e-9)
			}
		}
		for _, q := range []NestedRow{
			{Order: "order 0", Family: "family 0", Genus: "genus 0"}, {Order: "order 1", Family: "family 2", Genus: "none"},
			{Order: "order 2", Family: "none", Genus: "genus 1"}, {Order: "none", Family: "family 1", Genus: "genus 1"},
		} {
			q.Covariates = slices.Clone(rows[0].Covariates)
			p, err := f.Predict(q.Order, q.Family, q.Genus, q.Covariates)
			if err != nil {
				rt.Fatal(err)
			}
			mean, sd := m.predict(q, m.sigma2)
			wantClose(rt, "mean of "+q.Order+q.Family+q.Genus, p.Mean, mean, 1e-9)
			wantClose(rt, "sd of "+q.Order+q.Family+q.Genus, p.SD, sd, 1e-9)
		}
		// Leaving out: the row deleted, variances held.
		left, err := f.LeaveOneOut(rows)
		if err != nil {
			rt.Fatal(err)
		}
		i := rapid.IntRange(0, len(rows)-1).Draw(rt, "left out")
		rest := append(slices.Clone(rows[:i]), rows[i+1:]...)
		mean, sd := newDense(rt, rest, st.theta).predict(rows[i], st.sigma2)
		wantClose(rt, "left-out mean", left[i].Predicted, mean, 1e-8)
		wantClose(rt, "left-out sd", left[i].SD, sd, 1e-8)
	}))
	t.Run("gradient", rapid.MakeCheck(func(rt *rapid.T) {
		rows := tree(rt)
		s, err := newNestedSums(rows)
		if err != nil {
			rt.Fatal(err)
		}
		at := theta(rt)
		var st nestedState
		if err := s.up(at, &st); err != nil {
			rt.Fatal(err)
		}
		grad := s.gradient(&st)
		for l := range at {
			const h = 1e-5
			high, low := at, at
			high[l] += h
			low[l] -= h // 1 + θs stays positive at −h too
			var a, b nestedState
			if err := errors.Join(s.up(high, &a), s.up(low, &b)); err != nil {
				rt.Fatal(err)
			}
			wantClose(rt, "gradient by "+levelNames[l], grad[l], (a.ll-b.ll)/(2*h), 1e-5)
		}
	}))
	t.Run("no other variances are likelier", rapid.MakeCheck(func(rt *rapid.T) {
		rows := tree(rt)
		f := mustFitNested(rt, rows)
		s, _ := newNestedSums(rows)
		best := thetaOf(f)
		var other [levels]float64
		near := rapid.Bool().Draw(rt, "near")
		for l := range other {
			if near {
				other[l] = best[l] * rapid.Float64Range(0.9, 1.1).Draw(rt, "factor")
			} else {
				other[l] = math.Exp(rapid.Float64Range(-9, 3).Draw(rt, "ln theta"))
			}
		}
		var st nestedState
		if err := s.up(other, &st); err != nil {
			rt.Fatal(err)
		}
		if st.ll > f.LogLikREML+1e-9 {
			rt.Errorf("θ %v has log-likelihood %.12g, the fit's %v has %.12g", other, st.ll, best, f.LogLikREML)
		}
	}))
	t.Run("order of rows, shift and scale", rapid.MakeCheck(func(rt *rapid.T) {
		rows := tree(rt)
		f := mustFitNested(rt, rows)
		shift := rapid.Float64Range(-300, 300).Draw(rt, "shift")
		scale := rapid.Float64Range(0.1, 10).Draw(rt, "scale")
		other := slices.Clone(rows)
		slices.Reverse(other)
		for i := range other {
			other[i].Covariates = slices.Clone(other[i].Covariates)
			other[i].Covariates[0] += shift
			other[i].Y *= scale
		}
		g := mustFitNested(rt, other)
		// The likelihood's flat top leaves its square root of the digits.
		wantClose(rt, "slope", g.Beta[1], scale*f.Beta[1], 1e-5)
		wantClose(rt, "residual variance", g.VarResidual, scale*scale*f.VarResidual, 1e-4)
		wantClose(rt, "log-likelihood", g.LogLikREML, f.LogLikREML-float64(f.N-len(f.Beta))*math.Log(scale), 1e-7)
	}))
}

// A fit read back from JSON predicts to the last bit what the fit did, for every
// node and for strangers.
func TestNestedFitSurvivesJSON(t *testing.T) {
	f := mustFitNested(t, nestedRows(measuredRates(t, "Reptilia")))
	text, err := json.Marshal(f)
	if err != nil {
		t.Fatal(err)
	}
	var back NestedFit
	if err := json.Unmarshal(text, &back); err != nil {
		t.Fatal(err)
	}
	if want := f.Orders + f.Families + f.Genera; len(f.Nodes) != want {
		t.Fatalf("%d nodes, want %d", len(f.Nodes), want)
	}
	for _, node := range append(slices.Clone(f.Nodes), NestedNode{Order: "none"}) {
		a, errA := f.Predict(node.Order, node.Family, node.Genus, []float64{-1, 30})
		b, errB := back.Predict(node.Order, node.Family, node.Genus, []float64{-1, 30})
		if errA != nil || errB != nil || a != b {
			t.Errorf("%v: %+v %v, from JSON %+v %v", node.path(), a, errA, b, errB)
		}
	}
}

// The parts of a prediction, and that closer kin leave less doubt.
func TestNestedPredictionParts(t *testing.T) {
	f := mustFitNested(t, nestedRows(measuredRates(t, "Mammalia")))
	x := []float64{math.Log(41)}
	names := []struct{ order, family, genus, level string }{
		{"Carnivora", "Canidae", "Vulpes", "genus"},
		{"Carnivora", "Canidae", "Chrysocyon", "family"},
		{"Carnivora", "Canidae", "", "family"},
		{"Carnivora", "", "Vulpes", "order"}, // a genus counts only within its family
		{"Proboscidea", "Canidae", "Vulpes", ""},
		{"", "", "", ""},
	}
	last := 0.0
	for _, n := range names {
		p, err := f.Predict(n.order, n.family, n.genus, x)
		if err != nil {
			t.Fatal(err)
		}
		if p.Level != n.level {
			t.Errorf("%v: level %q", n, p.Level)
		}
		if p.SD < last {
			t.Errorf("%v: sd %v below %v of closer kin", n, p.SD, last)
		}
		last = p.SD
		wantClose(t, "mean", p.Mean, p.Line+p.Kin, 1e-14)
		wantClose(t, "line", p.Line, f.Beta[0]+f.Beta[1]*x[0], 1e-14)
		if p.Level == "" && (p.Kin != 0 || p.Rows != f.N) {
			t.Errorf("without kin: %+v", p)
		}
		if !(p.SDFixed > 0 && p.SDFixed < p.SD && p.SD*p.SD > f.VarResidual) {
			t.Errorf("parts of the sd: %+v", p)
		}
	}
	// The BLUPs of a path add up, and those of each level add up to nothing.
	var sum [levels]float64
	var shared [levels]float64
	for _, node := range f.Nodes {
		l := levelGenus
		if node.Genus == "" {
			l = levelFamily
		}
		if node.Family == "" {
			l = levelOrder
		}
		sum[l] += node.BLUP
		shared[l] = node.BLUP
		if l > 0 {
			shared[l] += shared[l-1]
		}
		wantClose(t, node.Genus+" shared", node.Shared, shared[l], 1e-12)
	}
	for l, v := range sum {
		wantClose(t, "sum of the BLUPs by "+levelNames[l], v, 0, 1e-9)
	}
	// Far outside the masses the fixed part of the doubt grows.
	near, _ := f.Predict("", "", "", []float64{0})
	far, _ := f.Predict("", "", "", []float64{30})
	if far.SDFixed <= near.SDFixed {
		t.Errorf("sd of the fixed part %v far out, %v within", far.SDFixed, near.SDFixed)
	}
	if _, err := f.Predict("Carnivora", "Canidae", "Vulpes", nil); !errors.Is(err, ErrBadValue) {
		t.Errorf("no covariate: error %v", err)
	}
	if _, err := f.Predict("Carnivora", "Canidae", "Vulpes", []float64{math.NaN()}); !errors.Is(err, ErrBadValue) {
		t.Errorf("covariate NaN: error %v", err)
	}
}

// scattered returns rows in which only the levels with a spread differ; noise is
// fixed, with no part by level.
func scattered(orders, families, genera, species int, spread [levels]float64) []NestedRow {
	var rows []NestedRow
	for o := range orders {
		for f := range families {
			for g := range genera {
				for s := range species {
					i := float64(len(rows))
					x := math.Mod(i*0.618034, 1) * 5
					rows = append(rows, NestedRow{
						Order: fmt.Sprint(o), Family: fmt.Sprint(f), Genus: fmt.Sprint(g), Covariates: []float64{x},
						Y: 0.7*x + spread[0]*math.Sin(float64(o)*2.4) + spread[1]*math.Sin(float64(7*o+f)*2.4) +
							spread[2]*math.Sin(float64(31*o+11*f+g)*2.4) + 0.2*float64(s%2*2-1) + 0.02*math.Sin(i*i),
					})
				}
			}
		}
	}
	return rows
}

// A variance whose best value is zero is reached, not approached: the two
// species of every genus differ more than the genera do.
func TestNestedReachesZeroVariance(t *testing.T) {
	f := mustFitNested(t, scattered(6, 3, 3, 2, [levels]float64{0.5, 0, 0}))
	if f.VarGenus != 0 || f.VarFamily != 0 {
		t.Errorf("variances of family %v and genus %v, want zeros", f.VarFamily, f.VarGenus)
	}
	if f.VarOrder < f.VarResidual {
		t.Errorf("variance of order %v, residual %v", f.VarOrder, f.VarResidual)
	}
	f = mustFitNested(t, scattered(6, 3, 3, 2, [levels]float64{0, 0, 0}))
	if f.VarOrder != 0 || f.VarFamily != 0 || f.VarGenus != 0 {
		t.Errorf("variances %v %v %v, want zeros", f.VarOrder, f.VarFamily, f.VarGenus)
	}
	// Without any level the fit is the least-squares line.
	var x, y []float64
	rows := scattered(6, 3, 3, 2, [levels]float64{0, 0, 0})
	for _, r := range rows {
		x, y = append(x, r.Covariates[0]), append(y, r.Y)
	}
	line, err := FitLine(x, y)
	if err != nil {
		t.Fatal(err)
	}
	wantClose(t, "slope", f.Beta[1], line.Slope, 1e-7)
	wantClose(t, "intercept", f.Beta[0], line.Intercept, 1e-7)
	p, err := f.Predict("0", "0", "0", []float64{9})
	if err != nil {
		t.Fatal(err)
	}
	e := line.At(9)
	wantClose(t, "mean", p.Mean, e.Mean, 1e-7)
	wantClose(t, "sd", p.SD, e.SEPrediction, 1e-6)
}

// Small tables whose likelihood has two hills, on which a search from one place
// ends on the lower: no point of a grid may be higher than the fit.
func TestNestedFindsTheHighestHill(t *testing.T) {
	grid := []float64{0}
	for th := 0.01; th < 20; th *= 1.3 {
		grid = append(grid, th)
	}
	for _, seed := range []uint64{1560, 1718, 2407, 2749, 3098} {
		rows := treeOf(seed, 26, 1, [levels]float64{0.3, 0.3, 0.3})
		f := mustFitNested(t, rows)
		s, err := newNestedSums(rows)
		if err != nil {
			t.Fatal(err)
		}
		var st nestedState
		for _, o := range grid {
			for _, fam := range grid {
				for _, g := range grid {
					if err := s.up([levels]float64{o, fam, g}, &st); err != nil {
						t.Fatal(err)
					}
					if st.ll > f.LogLikREML+1e-9 {
						t.Fatalf("seed %d: θ %v has log-likelihood %.10g, the fit's %v has %.10g", seed, st.theta, st.ll, thetaOf(f), f.LogLikREML)
					}
				}
			}
		}
	}
}

// What the rows cannot tell apart is held at zero and said.
func TestNestedHeldVariances(t *testing.T) {
	all := [levels]float64{0.8, 0.7, 0.6}
	for _, c := range []struct {
		name                              string
		orders, families, genera, species int
		held                              string
	}{
		{"all there", 4, 3, 3, 2, "[]"},
		{"one order", 1, 4, 3, 2, "[order]"},
		{"one family", 1, 1, 6, 2, "[order family]"},
		{"one genus", 1, 1, 1, 6, "[order family genus]"},
		{"a family an order", 5, 1, 3, 2, "[order]"},
		{"a genus a family", 4, 3, 1, 2, "[family]"},
		{"a species a genus", 4, 3, 2, 1, "[genus]"},
	} {
		rows := scattered(c.orders, c.families, c.genera, c.species, all)
		f := mustFitNested(t, rows)
		if got := fmt.Sprint(f.Held); got != c.held {
			t.Errorf("%s: held %s, want %s", c.name, got, c.held)
		}
		for i, v := range []float64{f.VarOrder, f.VarFamily, f.VarGenus} {
			if slices.Contains(f.Held, levelNames[i]) != (v == 0) {
				t.Errorf("%s: variance of %s is %v", c.name, levelNames[i], v)
			}
		}
		if _, err := f.LeaveOneOut(rows); err != nil {
			t.Errorf("%s: %v", c.name, err)
		}
	}
}

func TestNestedErrors(t *testing.T) {
	good := func() []NestedRow { return scattered(3, 2, 2, 2, [levels]float64{0.5, 0.4, 0.3}) }
	for _, c := range []struct {
		name   string
		change func(rows []NestedRow) []NestedRow
		is     error
		says   string
	}{
		{"no rows", func([]NestedRow) []NestedRow { return nil }, ErrTooFewPoints, "no rows"},
		{"three rows", func(r []NestedRow) []NestedRow { return r[:3] }, ErrTooFewPoints, "3 rows for 2 fixed effects"},
		{"no genus", func(r []NestedRow) []NestedRow { r[4].Genus = ""; return r }, ErrBadValue, "row 5"},
		{"infinite", func(r []NestedRow) []NestedRow { r[1].Y = math.Inf(-1); return r }, ErrBadValue, "row 2"},
		{"not a number", func(r []NestedRow) []NestedRow { r[2].Covariates[0] = math.NaN(); return r }, ErrBadValue, "row 3"},
		{"a covariate short", func(r []NestedRow) []NestedRow { r[3].Covariates = nil; return r }, ErrBadValue, "row 4"},
		{"a covariate twice", func(r []NestedRow) []NestedRow {
			for i := range r {
				r[i].Covariates = append(r[i].Covariates, r[i].Covariates[0])
			}
			return r
		}, errCollinear, "collinear"},
		{"a constant covariate", func(r []NestedRow) []NestedRow {
			for i := range r {
				r[i].Covariates[0] = 3
			}
			return r
		}, errCollinear, "collinear"},
		{"a line but for the genera", func(r []NestedRow) []NestedRow {
			for i := range r {
				r[i].Y = 2*r[i].Covariates[0] + float64(len(r[i].Genus+r[i].Family)) + map[string]float64{"0": 1, "1": -2}[r[i].Genus]
			}
			return r
		}, nil, "no residual"},
		{"a perfect line", func(r []NestedRow) []NestedRow {
			for i := range r {
				r[i].Y = 2 * r[i].Covariates[0]
			}
			return r
		}, nil, "no residual"},
	} {
		t.Run(c.name, func(t *testing.T) {
			f, err := FitNested(c.change(good()))
			if f != nil || err == nil || !strings.Contains(err.Error(), c.says) || c.is != nil && !errors.Is(err, c.is) {
				t.Errorf("FitNested = %v, %v; want an error saying %q", f, err, c.says)
			}
		})
	}
	f := mustFitNested(t, good())
	wide := good()
	for i := range wide {
		wide[i].Covariates = append(wide[i].Covariates, float64(i%5))
	}
	if _, err := f.LeaveOneOut(wide); !errors.Is(err, ErrBadValue) {
		t.Errorf("leave-one-out with another covariate: error %v", err)
	}
	// One row alone carries the second covariate.
	for i := range wide {
		wide[i].Covariates[1] = 0
	}
	wide[7].Covariates[1] = 1
	f = mustFitNested(t, wide)
	if _, err := f.LeaveOneOut(wide); !errors.Is(err, ErrTooFewPoints) || !strings.Contains(err.Error(), "row 8") {
		t.Errorf("leave-one-out of the row that carries a covariate: error %v", err)
	}
}

func ExampleNestedFit_Predict() {
	// ln W on ln kg; invented.
	rows := []NestedRow{
		{"A", "Aa", "Aaa", []float64{0.0}, 1.20}, {"A", "Aa", "Aaa", []float64{1.1}, 2.05},
		{"A", "Aa", "Aab", []float64{2.3}, 2.71}, {"A", "Ab", "Aba", []float64{3.4}, 3.90},
		{"A", "Ab", "Aba", []float64{0.7}, 1.95}, {"B", "Ba", "Baa", []float64{1.6}, 1.75},
		{"B", "Ba", "Bab", []float64{2.9}, 2.60}, {"B", "Ba", "Bab", []float64{0.3}, 0.80},
		{"B", "Bb", "Bba", []float64{1.9}, 2.10}, {"C", "Ca", "Caa", []float64{2.1}, 2.55},
	}
	f, err := FitNested(rows)
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, s := range [][3]string{{"B", "Ba", "Bab"}, {"B", "Ba", "new"}, {"D", "new", "new"}} {
		p, err := f.Predict(s[0], s[1], s[2], []float64{2})
		if err != nil {
			fmt.Println(err)
			return
		}
		fmt.Printf("%q shared with %d rows: %.2f, sd %.2f\n", p.Level, p.Rows, p.Mean, p.SD)
	}
	// Output:
	// "genus" shared with 2 rows: 1.99, sd 0.05
	// "family" shared with 3 rows: 2.02, sd 0.10
	// "" shared with 10 rows: 2.43, sd 0.41
}

func BenchmarkFitNested(b *testing.B) {
	for _, class := range measuredClasses {
		rows := nestedRows(measuredRates(b, class))
		b.Run(class, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if _, err := FitNested(rows); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkNestedLeaveOneOut(b *testing.B) {
	rows := nestedRows(measuredRates(b, "Aves"))
	f := mustFitNested(b, rows)
	b.ReportAllocs()
	for b.Loop() {
		if _, err := f.LeaveOneOut(rows); err != nil {
			b.Fatal(err)
		}
	}
}

package build

import (
	"fmt"
	"io/fs"
	"math"
	"strconv"
	"strings"

	"tayra/metabolic"
)

// LeastRows is the fewest measured species with which a class gets a fit.
const LeastRows = 30

// Classes are the classes that may get a fit, and whether the temperature of
// measurement is a covariate.
var Classes = []struct {
	Name      string
	Ectotherm bool
}{{"Amphibia", true}, {"Aves", false}, {"Mammalia", false}, {"Reptilia", true}}

// Fit fits log rate on log mass (and temperature, for ectotherms) over the
// unflagged measured rows of a class, with nested intercepts of order, family
// and genus. It also returns the masses of those rows, smallest and largest;
// and no fit if the class has fewer than LeastRows.
func Fit(data fs.FS, class string, ectotherm bool) (fit *metabolic.NestedFit, low, high float64, err error) {
	measured, err := Measured(data)
	if err != nil {
		return nil, 0, 0, err
	}
	var rows []metabolic.NestedRow
	low = math.Inf(1)
	for _, m := range measured {
		if m.Class != class || m.Flag != "" {
			continue
		}
		row := metabolic.NestedRow{Order: m.Order, Family: m.Family, Genus: m.Genus, Covariates: []float64{math.Log(m.Mass)}, Y: math.Log(m.Rate)}
		if ectotherm {
			if math.IsNaN(m.Temperature) {
				return nil, 0, 0, fmt.Errorf("%s: an ectotherm's rate without its temperature", m.Name)
			}
			row.Covariates = append(row.Covariates, m.Temperature)
		}
		rows = append(rows, row)
		low, high = min(low, m.Mass), max(high, m.Mass)
	}
	if len(rows) < LeastRows {
		return nil, 0, 0, nil
	}
	fit, err = metabolic.FitNested(rows)
	return fit, low, high, err
}

// MeasuredRow is a row of measured-rates.csv.
type MeasuredRow struct {
	Name, Class, Group, Order, Family, Genus, Flag string
	Mass, Rate, Temperature                        float64 // kg, W, °C; Temperature may be NaN
}

// Measured reads measured-rates.csv.
func Measured(data fs.FS) ([]MeasuredRow, error) {
	t, err := read(data, "measured-rates.csv")
	if err != nil {
		return nil, err
	}
	var out []MeasuredRow
	for _, r := range t.rows {
		m := MeasuredRow{Name: r["scientific_name"], Class: r["class"], Group: r["group"], Order: r["order"], Family: r["family"],
			Genus: r["genus"], Flag: r["flag"], Temperature: math.NaN()}
		var err error
		if m.Mass, err = strconv.ParseFloat(r["mass_kg"], 64); err == nil {
			m.Rate, err = strconv.ParseFloat(r["rate_w"], 64)
		}
		if err == nil && r["temperature_c"] != "" {
			m.Temperature, err = strconv.ParseFloat(r["temperature_c"], 64)
		}
		if err != nil || !(m.Mass > 0) || !(m.Rate > 0) {
			return nil, fmt.Errorf("measured-rates.csv: %s: mass, rate or temperature is no number", m.Name)
		}
		if genus, _, _ := strings.Cut(m.Name, " "); genus != m.Genus {
			return nil, fmt.Errorf("measured-rates.csv: %s is in the genus %s", m.Name, m.Genus)
		}
		out = append(out, m)
	}
	return out, nil
}

// Relatives makes relatives.index. A class line is: class, rows, smallest and
// largest mass, σ² of order, family, genus and residual, the fixed effects,
// and their covariance row by row. A node line is: class/order/family/genus
// (cut off at its rank), rows in it, sum of the BLUPs down to it, variance that
// they explain, and the loading on the fixed effects; see
// metabolic.NestedNode. Values are separated by tabs, vectors by spaces.
func Relatives(data fs.FS, out map[string][]byte) error {
	var text []string
	for _, class := range Classes {
		fit, low, high, err := Fit(data, class.Name, class.Ectotherm)
		if err != nil {
			return fmt.Errorf("class %s: %w", class.Name, err)
		}
		if fit == nil {
			continue
		}
		var cov []float64
		for _, row := range fit.CovBeta {
			cov = append(cov, row...)
		}
		text = append(text, strings.Join([]string{class.Name, strconv.Itoa(fit.N), numbers(low), numbers(high),
			numbers(fit.VarOrder), numbers(fit.VarFamily), numbers(fit.VarGenus), numbers(fit.VarResidual),
			numbers(fit.Beta...), numbers(cov...)}, "\t"))
		for _, n := range fit.Nodes {
			path := class.Name
			for _, level := range []string{n.Order, n.Family, n.Genus} {
				if level != "" {
					path += "/" + level
				}
			}
			text = append(text, strings.Join([]string{path, strconv.Itoa(n.N), numbers(n.Shared), numbers(n.Explained), numbers(n.Loading...)}, "\t"))
		}
	}
	out["relatives.index"] = sorted(text)
	return nil
}

// numbers writes to 12 figures: more than the fit holds, fewer than differ
// between processors.
func numbers(x ...float64) string {
	s := make([]string, len(x))
	for i := range x {
		s[i] = strconv.FormatFloat(x[i], 'g', 12, 64)
	}
	return strings.Join(s, " ")
}

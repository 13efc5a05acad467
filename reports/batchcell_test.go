package reports

import (
	"math"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestAppendNumber(t *testing.T) {
	for x, want := range map[float64]string{
		12: "12", 0.5: "0.5", 8.139957963337892: "8.13996", 333.7382764968536: "333.738", 1200: "1200", 1234567: "1234570",
		0.000123456789: "0.000123457", 999999.5: "1000000", 99999.95: "100000", 0.9999999: "1", 1e-12: "0.000000000001", 2.5e15: "2500000000000000",
		1e9: "1000000000", 123456789012: "123457000000", 0.1: "0.1", 1: "1", 10: "10", 9.999996: "10", 1e-9: "0.000000001",
	} {
		if got := string(appendNumber(nil, x, '.')); got != want {
			t.Errorf("%v is written %s, want %s", x, got, want)
		}
		if got := string(appendNumber([]byte("a;"), x, ',')); got != "a;"+strings.ReplaceAll(want, ".", ",") {
			t.Errorf("%v with a comma is written %s", x, got)
		}
	}
}

// Six significant digits, in plain decimals, of every number.
func TestAppendNumberRounds(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		x := math.Exp(rapid.Float64Range(-30, 30).Draw(r, "ln x"))
		got := string(appendNumber(nil, x, '.'))
		if strings.Trim(got, "0123456789.") != "" || got[0] == '.' || strings.HasSuffix(got, ".") || strings.Contains(got, ".") && strings.HasSuffix(got, "0") {
			r.Fatalf("%v is written %q", x, got)
		}
		back, err := strconv.ParseFloat(got, 64)
		if err != nil || math.Abs(back/x-1) > 0.500001e-5 {
			r.Fatalf("%v is written %q", x, got)
		}
		if len(strings.TrimLeft(strings.ReplaceAll(got, ".", ""), "0")) > numberDigits && x < 1e6 {
			r.Fatalf("%v is written %q: too many digits", x, got)
		}
	})
}

func TestRunsAsFormula(t *testing.T) {
	for text, want := range map[string]bool{
		"": false, "Marisol": false, "'=1": false, " =1+1": false,
		"=1+1": true, "@SUM(A1)": true, "\tx": true, "\rx": true, "=": true, "-": true, "+": true,
		"-5": false, "+3.2": false, "-1,5": false, "-.5": false, "-5 °C": false, "+5 mg/kg": false, "-1e-3": false, "-30 mg/m2": false, "-5%": false,
		"-5+cmd|' /C calc'!A0": true, "-A1": true, "+cmd": true, "-5*2": true, "-5/A1": true, "-(5)": true, "-5 ;x": true, "- 5": true,
		"-1e+": true, "-5 a//b": true, "+49 30 123": true, "--5": true, "-5 " + strings.Repeat("k", 17): true,
	} {
		if got := runsAsFormula([]byte(text)); got != want {
			t.Errorf("%q: %v, want %v", text, got, want)
		}
	}
}

func TestPointForComma(t *testing.T) {
	for text, want := range map[string]string{
		"4,2 kg": "4.2 kg", "36,5-46,25 kg": "36.5-46.25 kg", "41 kg ± 2,5 %": "41 kg ± 2.5 %",
		"1.200,5 kg": "1.200,5 kg", "1,200,000 kg": "1,200,000 kg", ",5 kg": ",5 kg", "5, kg": "5, kg", "41 kg": "41 kg", "": "",
	} {
		got, _, changed := pointForComma([]byte(text), []byte("before"))
		if string(got) != want || changed != (text != want) {
			t.Errorf("%q is read as %q (%v), want %q", text, got, changed, want)
		}
	}
}

func TestGroupedPoint(t *testing.T) {
	for text, want := range map[string]string{
		"1.200 kg": "1.200", "12.500-13.000 g": "12.500", "999.999 g": "999.999",
		"0.250 kg": "", "1.25 kg": "", "1.2500 kg": "", "1200.500 kg": "", "1.200,5 kg": "", "1.200.300 g": "", "41 kg": "", "": "",
	} {
		got, ok := groupedPoint([]byte(text))
		if string(got) != want || ok != (want != "") {
			t.Errorf("%q: %q, want %q", text, got, want)
		}
	}
}

// What is written as a cell is read back as it was.
func TestCellRoundTrip(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		comma := rapid.SampledFrom([]byte(",;\t")).Draw(r, "comma")
		values := rapid.SliceOfN(rapid.StringOf(rapid.SampledFrom([]rune("ab,;\t\"\r\n =+é"))), 1, 5).Draw(r, "cells")
		var row []byte
		for i, v := range values {
			if i > 0 {
				row = append(row, comma)
			}
			row = appendCell(row, []byte(v), comma)
		}
		cells := splitCells(row, comma, nil)
		if len(cells) != len(values) {
			r.Fatalf("%q: %d cells of %d", row, len(cells), len(values))
		}
		for i, c := range cells {
			if got, _ := c.value(row, nil); string(got) != values[i] {
				r.Fatalf("%q: cell %d is %q, want %q", row, i, got, values[i])
			}
		}
	})
}

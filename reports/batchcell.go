package reports

import (
	"bytes"
	"strconv"
)

// appendCell writes a cell, in quotes where RFC 4180 asks for them and where a
// blank at an end would be lost on a careless reader.
func appendCell(out, value []byte, comma byte) []byte {
	if !needsQuotes(value, comma) {
		return append(out, value...)
	}
	out = append(out, '"')
	for _, b := range value {
		if b == '"' {
			out = append(out, '"')
		}
		out = append(out, b)
	}
	return append(out, '"')
}

func needsQuotes(value []byte, comma byte) bool {
	if len(value) == 0 {
		return false
	}
	if value[0] == ' ' || value[len(value)-1] == ' ' {
		return true
	}
	for _, b := range value {
		if b == comma || b == '"' || b == '\n' || b == '\r' {
			return true
		}
	}
	return false
}

// runsAsFormula says whether a spreadsheet might run a cell as a formula
// instead of showing it: it begins with = + - @, a tab or a carriage return,
// and is neither a number nor a quantity such as "-5 °C".
func runsAsFormula(value []byte) bool {
	if len(value) == 0 {
		return false
	}
	switch value[0] {
	case '=', '@', '\t', '\r':
		return true
	case '+', '-':
		return !isQuantity(value[1:])
	}
	return false
}

// isQuantity says whether a text is a number, with a unit or without. What can
// stand in a formula beside a number (an operator, a bracket, a bar) stands in
// no unit, but for the stroke, which must follow a letter.
func isQuantity(value []byte) bool {
	digit := func(i int) bool { return i < len(value) && value[i] >= '0' && value[i] <= '9' }
	i := 0
	for digit(i) || i < len(value) && (value[i] == '.' || value[i] == ',') && digit(i+1) {
		i++
	}
	if i == 0 {
		return false
	}
	if i < len(value) && (value[i] == 'e' || value[i] == 'E') {
		power := i + 1
		if power < len(value) && (value[power] == '+' || value[power] == '-') {
			power++
		}
		if digit(power) {
			for digit(power) {
				power++
			}
			i = power
		}
	}
	for i < len(value) && value[i] == ' ' {
		i++
	}
	const longestUnit = 16
	unit := value[i:]
	if len(unit) > longestUnit {
		return false
	}
	for k, r := range string(unit) {
		letter := r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z' || r == '°' || r == 'µ' || r == 'μ' || r == '%' || r == '²'
		if !letter && !(k > 0 && (r == '/' || r == '2') && unit[k-1] != '/') {
			return false
		}
	}
	return true
}

// numberDigits is how many significant digits a number of the table has: it is
// data to be worked with, so more than the three of a printed dose.
const numberDigits = 6

// powersOfTen are exact: every one of them is a float64.
var powersOfTen = [...]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18}

// appendNumber writes a number above zero in plain decimals, without trailing
// zeros, with a leading zero, with a decimal comma where the table has them.
//
// Its digits are the whole number n = round(x·10^decimals) that has six of
// them. That is several times faster than strconv, which finds the last digit
// of numbers that lie within 1e-15 of a half more strictly.
func appendNumber(out []byte, x float64, mark byte) []byte {
	const low, high = 1e-9, 1e9
	if !(x >= low && x < high) {
		return appendFarNumber(out, x, mark)
	}
	whole := 0 // digits before the decimal mark; negative for zeros behind it
	for x >= powersOfTen[max(whole, 0)] {
		whole++
	}
	if whole == 0 {
		for x*powersOfTen[1-whole] < 1 {
			whole--
		}
	}
	decimals := numberDigits - whole
	var n uint64
	if decimals >= 0 {
		n = uint64(x*powersOfTen[decimals] + 0.5)
	} else {
		n = uint64(x/powersOfTen[-decimals]+0.5) * uint64(powersOfTen[-decimals])
		decimals = 0
	}
	for decimals > 0 && n%10 == 0 {
		n /= 10
		decimals--
	}
	var room [24]byte
	digits := strconv.AppendUint(room[:0], n, 10)
	if decimals == 0 {
		return append(out, digits...)
	}
	if before := len(digits) - decimals; before > 0 {
		out = append(append(out, digits[:before]...), mark)
		return append(out, digits[before:]...)
	}
	out = append(out, '0', mark)
	for range decimals - len(digits) {
		out = append(out, '0')
	}
	return append(out, digits...)
}

// appendFarNumber writes the very small and the very large.
func appendFarNumber(out []byte, x float64, mark byte) []byte {
	from := len(out)
	rounded, _ := strconv.ParseFloat(strconv.FormatFloat(x, 'g', numberDigits, 64), 64)
	out = strconv.AppendFloat(out, rounded, 'f', -1, 64)
	if point := bytes.IndexByte(out[from:], '.'); point >= 0 {
		out[from+point] = mark
	}
	return out
}

// pointForComma reads decimal commas: every number of the text that has one
// comma between digits and no point gets a point instead. Anything else with a
// comma is left for the reader of quantities to refuse.
func pointForComma(value, scratch []byte) (out, rest []byte, changed bool) {
	from := len(scratch)
	scratch = append(scratch, value...)
	out = scratch[from:]
	for i := 0; i < len(out); {
		if !numeral(out[i]) {
			i++
			continue
		}
		end := i
		commas, points, comma := 0, 0, 0
		for ; end < len(out) && numeral(out[end]); end++ {
			switch out[end] {
			case ',':
				commas++
				comma = end
			case '.':
				points++
			}
		}
		if commas == 1 && points == 0 && comma > i && comma < end-1 {
			out[comma] = '.'
			changed = true
		}
		i = end
	}
	return out, scratch, changed
}

func numeral(b byte) bool { return b >= '0' && b <= '9' || b == '.' || b == ',' }

// groupedPoint finds a number such as 1.200 that, in a table with decimal
// commas, may be one point two or twelve hundred.
func groupedPoint(value []byte) (number []byte, ok bool) {
	for i := 0; i < len(value); {
		if !numeral(value[i]) {
			i++
			continue
		}
		end := i
		for end < len(value) && numeral(value[end]) {
			end++
		}
		n := value[i:end]
		point := bytes.IndexByte(n, '.')
		if point >= 1 && point <= 3 && n[0] != '0' && len(n)-point-1 == 3 && bytes.IndexByte(n[point+1:], '.') < 0 && bytes.IndexByte(n, ',') < 0 {
			return n, true
		}
		i = end
	}
	return nil, false
}

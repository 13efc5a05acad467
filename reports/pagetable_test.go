package reports

import (
	"fmt"
	"math"
	"strings"
	"testing"
)

// A table that runs over pages has its head at the top of each, and no row is
// split between two.
func TestTableHeadRepeats(t *testing.T) {
	long := pageTable{columns: []tableColumn{{head: "Time of day, in two lines as it is long for so narrow a thing"}, {head: "Note", grow: 1}}}
	const rows = 150
	for i := range rows {
		long.rows = append(long.rows, tableRow{cells: cellTexts(fmt.Sprintf("row%d", i), fmt.Sprintf("first%d ", i)+strings.Repeat("words to fill the line ", 8)+fmt.Sprintf("last%d", i))})
	}
	for filler := range 8 {
		d := newDocument(A4)
		for range filler {
			d.body.para(plain("filler"))
		}
		d.body.table(long)
		l := laidOut(t, d)
		checkPages(t, d, l)
		if len(l.pages) < 4 {
			t.Fatalf("only %d pages", len(l.pages))
		}
		for n, page := range l.pages {
			text := strings.Join(pageText(page), " ")
			if strings.Count(text, "Time of day") != 1 {
				t.Errorf("page %d: %d heads", n+1, strings.Count(text, "Time of day"))
			}
			if n > 0 && !strings.Contains(pageText(page)[0], "Time of day") {
				t.Errorf("page %d begins with %q", n+1, pageText(page)[0])
			}
			words := " " + text + " "
			for i := range rows {
				if strings.Contains(words, fmt.Sprintf(" first%d ", i)) != strings.Contains(words, fmt.Sprintf(" last%d ", i)) {
					t.Errorf("row %d is split at page %d", i, n+1)
				}
			}
		}
	}
}

// edges returns where the decimal point of the first figure of each cell in
// the last column lies, and the right edges of the cells.
func edges(t *testing.T, al cellAlign, cells ...string) (point, right []float64) {
	d := newDocument(A4)
	tab := pageTable{columns: []tableColumn{{head: "A"}, {head: "B", align: al}}}
	for _, c := range cells {
		tab.rows = append(tab.rows, tableRow{cells: cellTexts("x", c)})
	}
	d.body.table(tab)
	for _, s := range d.body.bands[1:] {
		if len(s.labels) != 2 {
			t.Fatalf("%v is not on one line", s.labels)
		}
		l := s.labels[1]
		end := wholeEnd(l.text)
		if end < 0 {
			end = len(l.text)
		}
		point = append(point, l.x+points(sansRegular.units(l.text[:end]), l.size))
		right = append(right, l.x+points(sansRegular.units(l.text), l.size))
	}
	return point, right
}

func TestDecimalColumn(t *testing.T) {
	cells := []string{"8.14", "10", "1,420.5 mg", "≤ 0.002 mg/kg", "334 mg", "none", "5 %", "12, then 8"}
	point, right := edges(t, alignDecimal, cells...)
	for i := range cells {
		if math.Abs(point[i]-point[0]) > 1e-6 {
			t.Errorf("the point of %q lies at %.2f, that of %q at %.2f", cells[i], point[i], cells[0], point[0])
		}
	}
	if right[0] == right[1] {
		t.Error("aligned at the right edge instead")
	}
	_, right = edges(t, alignRight, cells...)
	for i := range cells {
		if math.Abs(right[i]-right[0]) > 1e-6 {
			t.Errorf("%q ends at %.2f, %q at %.2f", cells[i], right[i], cells[0], right[0])
		}
	}
}

func TestWholeEnd(t *testing.T) {
	for s, want := range map[string]string{
		"8.14": "8", "10": "10", "1,420.5 mg": "1,420", "1,420,000": "1,420,000", "≤ 0.002": "≤ 0",
		"12, then 8": "12", "334 mg": "334", "about 5 to 9": "about 5", "-3.5": "-3", "(41": "(41",
	} {
		if got := s[:wholeEnd(s)]; got != want {
			t.Errorf("wholeEnd(%q) gives %q, want %q", s, got, want)
		}
	}
	if wholeEnd("none") != -1 {
		t.Error("a figure in none")
	}
}

// Columns share the page by their text: short ones on one line, long ones
// with about as many lines each, an address without spaces broken.
func TestTableColumns(t *testing.T) {
	d := newDocument(A4)
	text := strings.Repeat("a sentence of some words ", 8)
	d.body.table(pageTable{columns: []tableColumn{{head: "Name"}, {head: "Long"}, {head: "Longer"}, {head: "Address"}},
		rows: []tableRow{{cells: cellTexts("short one", text, text+text, "https://example.org/"+strings.Repeat("x", 200))}}})
	lines := map[string]int{}
	for _, s := range d.body.bands[1:] {
		for _, l := range s.labels {
			switch {
			case strings.Contains(l.text, "short"), strings.Contains(l.text, "one"):
				lines["short"]++
			case l.x > 400:
				lines["address"]++
			case l.x > 180:
				lines["longer"]++
			default:
				lines["long"]++
			}
		}
	}
	if lines["short"] != 1 || lines["longer"] > 3*lines["long"] || lines["address"] < 3 || len(d.body.bands) > 20 {
		t.Errorf("lines: %v in %d bands", lines, len(d.body.bands))
	}
	// Cells left out are empty, and cells too many are not drawn.
	d = newDocument(A4)
	d.body.table(pageTable{columns: []tableColumn{{head: "A"}, {head: "B"}}, rows: []tableRow{{}, {cells: cellTexts("1")}, {cells: cellTexts("1", "2", "3")}}})
	checkPages(t, d, laidOut(t, d))
	if got := strings.Join(pageText(laidOut(t, d).pages[0]), " "); got != "A B 1 1 2" {
		t.Errorf("%q", got)
	}
}

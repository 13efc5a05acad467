package reports

import (
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// lineText returns the text of a line as it is seen.
func lineText(l textLine) string {
	var b strings.Builder
	end := 0
	for _, s := range l.spans {
		if s.x > end {
			b.WriteString(" ")
		}
		b.WriteString(s.text)
		end = s.x + sans(s.bold).units(s.text)
	}
	return b.String()
}

func TestBondBetween(t *testing.T) {
	for _, c := range []struct {
		before, next string
		want         bond
	}{
		{"10", "mg/kg", tight},
		{"10", "mg/kg,", tight},
		{"(10", "mg/kg)", tight},
		{"8.14)", "mg/kg", tight},
		{"1,234.5", "mL", tight},
		{"20", "mg/kg/h", tight},
		{"0.3", "L/kg;", tight},
		{"70", "kcal/day", tight},
		{"3.4", "W·kg⁻⁰·⁷⁵", tight},
		{"41⁰·⁷⁵", "kg", tight},
		{"2½", "h", tight},
		{"5", "%", tight},
		{"30", "°C.", tight},
		{"250", "mcg", tight},
		{"1,000", "units", tight},
		{"12", "hours", tight},
		{"every", "12", held},
		{"to", "18.9", held},
		{"=", "1.85", held},
		{"×", "(41", held},
		{"±", "10", held},
		{"√", "x", held},

		{"every", "animal", loose},
		{"to", "the", loose},
		{"dose", "10", loose},
		{"10", "or", loose},
		{"10", "mg/", loose},
		{"10,", "mg", loose},
		{"mg", "mg", loose},
		{"10", "×", loose},
		{"10", "milligrams-per", loose},
		{"10", "/", loose},
		{"10", "()", loose},
	} {
		if got := bondBetween(c.before, c.next); got != c.want {
			t.Errorf("bondBetween(%q, %q) = %v", c.before, c.next, got)
		}
	}
}

func TestWrap(t *testing.T) {
	var b breaker
	em := func(s string) int { return sansRegular.units(s) }
	for _, c := range []struct {
		name  string
		runs  []run
		width int
		want  []string
	}{
		{"one line", []run{plain("give it once")}, 100000, []string{"give it once"}},
		{"nothing", nil, 1000, []string{""}},
		{"only spaces", []run{plain("   ")}, 1000, []string{""}},
		{"turns at the space", []run{plain("give it once")}, em("give it"), []string{"give it", "once"}},
		{"one unit too narrow", []run{plain("give it once")}, em("give it") - 1, []string{"give", "it", "once"}},
		{"number and unit go together", []run{plain("give 10 mg/kg once")}, em("give 10 mg"), []string{"give", "10 mg/kg", "once"}},
		{"across weights", []run{plain("give "), bold("10"), plain(" mg/kg")}, em("give 10 mg"), []string{"give", "10 mg/kg"}},
		{"operator begins the line", []run{plain("70 × 2.5 = 175")}, em("70 × 2.5 ="), []string{"70 × 2.5", "= 175"}},
		{"range", []run{plain("3.5 to 18.9 mg/kg")}, em("3.5 to 18.9 mg"), []string{"3.5", "to 18.9 mg/kg"}},
		{"a range goes together", []run{plain("somewhere 3.5 to 18.9 mg/kg")}, em("somewhere 3.5 to 18.9"), []string{"somewhere", "3.5 to 18.9 mg/kg"}},
		{"no range", []run{plain("within reach to 18.9 mg/kg")}, em("within reach to"), []string{"within reach", "to 18.9 mg/kg"}},
		{"range in a narrow column", []run{plain("3.5 to 18.9 mg/kg")}, em("18.9 mg/kg"), []string{"3.5 to", "18.9 mg/kg"}},
		{"no-break space", []run{plain("a\u00a0b\u202fc\u2009d ee")}, em("a\u00a0b\u202fc\u2009d"), []string{"a\u00a0b\u202fc\u2009d", "ee"}},
		{"spaces kept inside, dropped at the turn", []run{plain("  a  b    c ")}, em("a  b"), []string{"a  b", "c"}},
		{"long word broken hard", []run{plain("aaaaaaaa")}, em("aaa"), []string{"aaa", "aaa", "aa"}},
		{"hard break after a slash", []run{plain("see abcd/efghij")}, em("abcd/efg"), []string{"see", "abcd/", "efghij"}},
		{"narrower than any letter", []run{plain("mmm")}, 1, []string{"m", "m", "m"}},
		{"narrower than the number and its unit", []run{plain("10 mg/kg")}, em("mg/kg"), []string{"10", "mg/kg"}},
	} {
		var got []string
		for _, l := range b.wrap(c.runs, c.width) {
			got = append(got, lineText(l))
		}
		if strings.Join(got, "|") != strings.Join(c.want, "|") {
			t.Errorf("%s: %q, want %q", c.name, got, c.want)
		}
	}
}

// A space between two runs is drawn as room between their spans.
func TestWrapRoomBetweenRuns(t *testing.T) {
	var b breaker
	for _, runs := range [][]run{
		{plain("give "), bold("10"), plain(" mg")},
		{plain("give"), bold(" 10 "), plain("mg")},
	} {
		lines := b.wrap(runs, 1_000_000)
		if len(lines) != 1 || len(lines[0].spans) != 3 {
			t.Fatalf("%v: %v", runs, lines)
		}
		s := lines[0].spans
		for i, want := range []string{"give", "10", "mg"} {
			if s[i].text != want {
				t.Errorf("span %d is %q", i, s[i].text)
			}
			if i > 0 {
				room := s[i].x - s[i-1].x - sans(s[i-1].bold).units(s[i-1].text)
				if room < 300 {
					t.Errorf("%v: %d thousandths before %q", runs, room, want)
				}
			}
		}
	}
}

// For any text and width: no letter is lost or moved, no line is wider than
// asked for if more than one letter stands on it, what is measured is what is
// drawn, and no number is parted from its unit where both fit on a line.
func TestWrapLaws(t *testing.T) {
	words := []string{"10", "mg/kg", "1,234.5", "mL", "every", "12", "hours", "to", "18.9", "=", "×", "±", "5", "%",
		"the", "a", "dose,", "(41", "kg)", "https://example.org/long/address/without/a/space", "τ½", "ёж", "0.75"}
	rapid.Check(t, func(t *rapid.T) {
		var runs []run
		var all strings.Builder
		for range rapid.IntRange(0, 6).Draw(t, "runs") {
			var text strings.Builder
			for range rapid.IntRange(0, 8).Draw(t, "words") {
				text.WriteString(rapid.SampledFrom(words).Draw(t, "word"))
				text.WriteString(strings.Repeat(" ", rapid.SampledFrom([]int{1, 1, 1, 2}).Draw(t, "spaces")))
			}
			if rapid.Bool().Draw(t, "joined") { // the weight changes inside a word
				text.WriteString("ab")
			}
			runs = append(runs, run{text.String(), rapid.Bool().Draw(t, "bold")})
			all.WriteString(text.String())
		}
		width := rapid.IntRange(1, 40000).Draw(t, "width")
		var b breaker
		lines := b.wrap(runs, width)
		var kept strings.Builder
		for i, l := range lines {
			text := lineText(l)
			kept.WriteString(text)
			if l.units > width && len([]rune(text)) > 1 {
				t.Fatalf("line %d, %q, is %d wide in a column of %d", i, text, l.units, width)
			}
			end := 0
			for _, s := range l.spans {
				if s.x < end {
					t.Fatalf("%q overlaps what stands before it", s.text)
				}
				end = s.x + sans(s.bold).units(s.text)
			}
			if end != l.units {
				t.Fatalf("line %d measures %d and draws %d", i, l.units, end)
			}
		}
		squeeze := func(s string) string { return strings.ReplaceAll(s, " ", "") }
		if squeeze(kept.String()) != squeeze(all.String()) {
			t.Fatalf("%q became %q", all.String(), kept.String())
		}
		if natural, least := b.extent(runs); natural <= width && len(lines) > 1 || least > natural {
			t.Fatalf("%d lines of a text %d wide (longest word %d) in %d", len(lines), natural, least, width)
		}
		for i := 1; i < len(lines); i++ {
			before := strings.Fields(lineText(lines[i-1]))
			next := strings.Fields(lineText(lines[i]))
			if len(before) == 0 || len(next) == 0 {
				continue
			}
			last, first := before[len(before)-1], next[0]
			if endsInFigure(last) && isUnit(first) && sansBold.units(last+"  "+first) <= width {
				t.Fatalf("%q is parted from %q", last, first)
			}
		}
	})
}

func BenchmarkWrap(b *testing.B) {
	var br breaker
	runs := []run{bold("8.14 mg/kg."), plain(" As likely as not the model's exposure lies between 3.5 to 18.9 mg/kg, nine times in ten between 1.04 to 63.6 mg/kg. A second sentence runs on so that the paragraph turns over: 10 mg/kg, 20 mg/kg, 30 mg/kg.")}
	b.ReportAllocs()
	for b.Loop() {
		br.wrap(runs, thousandths(510, 9))
	}
}

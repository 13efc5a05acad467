package reports

import (
	"errors"
	"strings"
	"testing"
	"unicode/utf8"

	"golang.org/x/text/unicode/norm"
	"pgregory.net/rapid"

	"tayra/reports/internal/alphabet"
)

func TestCheckTextAccepts(t *testing.T) {
	for _, c := range []struct{ name, in, want string }{
		{"plain", "Marisol, giant anteater (41 kg)", "Marisol, giant anteater (41 kg)"},
		{"empty", "", ""},
		{"Latin with accents", "Zürich, Ørsted, Łódź, Hồ Chí Minh", "Zürich, Ørsted, Łódź, Hồ Chí Minh"},
		{"decomposed becomes composed", "Zu\u0308rich", "Zürich"},
		{"Greek", "α-demoxacin, τ½, Δ ς", "α-demoxacin, τ½, Δ ς"},
		{"Cyrillic", "Жанна, обыкновенный ёж", "Жанна, обыкновенный ёж"},
		{"formula", "70 × 41⁰·⁷⁵ ± 5 % ≤ √2 ≥ −1 → x₀", "70 × 41⁰·⁷⁵ ± 5 % ≤ √2 ≥ −1 → x₀"},
		{"spaces that do not break", "10\u00a0mg 10\u202fmg 10\u2009mg\u2007", "10\u00a0mg 10\u202fmg 10\u2009mg\u2007"},
		{"boxes and ticks", "☐ ☑ ✓ ✗ ♀ ♂", "☐ ☑ ✓ ✗ ♀ ♂"},
		{"Hawaiian okina", "ʻalalā", "ʻalalā"},
		{"letterlike K becomes K", "\u212a", "K"},
		{"ligature from a paper", "ﬁeld", "ﬁeld"},
	} {
		got, err := CheckText("patient.name", c.in)
		if err != nil || got != c.want {
			t.Errorf("%s: CheckText(%q) = %q, %v; want %q", c.name, c.in, got, err, c.want)
		}
	}
}

func TestCheckTextRefuses(t *testing.T) {
	for _, c := range []struct {
		name, in string
		r        rune
		position int
		says     []string // what the message must hold
	}{
		{"Han", "Mei 漢", '漢', 5, []string{`'漢'`, "U+6F22", "Latin, Greek or Cyrillic"}},
		{"Arabic", "مها", 'م', 1, []string{"U+0645"}},
		{"Hebrew", "x\u05d0", '\u05d0', 2, []string{"U+05D0"}},
		{"emoji", "ok 🐾", '🐾', 4, []string{"U+1F43E", "in words"}},
		{"mathematical letter above U+FFFF", "𝑥", '𝑥', 1, []string{"U+1D465"}},
		{"right-to-left override", "10\u202e mg", '\u202e', 3, []string{"U+202E", "writing direction", "delete it"}},
		{"left-to-right isolate", "\u2066a", '\u2066', 1, []string{"U+2066", "writing direction"}},
		{"Arabic letter mark", "a\u061c", '\u061c', 2, []string{"U+061C"}},
		{"zero-width space", "a\u200bb", '\u200b', 2, []string{"U+200B", "invisible"}},
		{"soft hyphen", "a\u00adb", '\u00ad', 2, []string{"U+00AD", "invisible"}},
		{"byte-order mark", "\ufeffa", '\ufeff', 1, []string{"U+FEFF"}},
		{"NUL", "a\x00", 0, 2, []string{"U+0000", "control"}},
		{"escape", "\x1b[31mred", '\x1b', 1, []string{"U+001B"}},
		{"delete", "a\x7f", '\x7f', 2, []string{"U+007F"}},
		{"C1 control", "\u0085", '\u0085', 1, []string{"U+0085"}},
		{"line feed", "one\ntwo", '\n', 4, []string{"U+000A", "one line"}},
		{"carriage return", "one\rtwo", '\r', 4, []string{"U+000D", "one line"}},
		{"line separator", "a\u2028b", '\u2028', 2, []string{"U+2028", "one line"}},
		{"tab", "a\tb", '\t', 2, []string{"U+0009", "space"}},
		{"accent without a composed letter", "q\u0323", '\u0323', 2, []string{"U+0323", "accent"}},
		{"Cyrillic combining letter", "а\u0483", '\u0483', 2, []string{"U+0483"}},
		{"replacement character", "Z\ufffdrich", '\ufffd', 2, []string{"U+FFFD", "lost"}},
		{"broken UTF-8", "Z\xfcrich", utf8.RuneError, 2, []string{"0xFC", "UTF-8"}},
		{"cut short", "caf\xc3", utf8.RuneError, 4, []string{"0xC3"}},
		{"surrogate", "\xed\xa0\x80", utf8.RuneError, 1, []string{"0xED"}},
		{"private use", "\ue000", '\ue000', 1, []string{"U+E000"}},
		{"Latin that the fonts lack", "\u1efc", '\u1efc', 1, []string{"U+1EFC", "fonts"}},
		{"symbol that the fonts lack", "☠", '☠', 1, []string{"U+2620", "in words"}},
	} {
		got, err := CheckText("patient.name", c.in)
		var letter *LetterError
		if !errors.As(err, &letter) {
			t.Errorf("%s: CheckText(%q) = %q, %v; want a LetterError", c.name, c.in, got, err)
			continue
		}
		if letter.Rune != c.r || letter.Position != c.position || letter.Field != "patient.name" || letter.Text != c.in {
			t.Errorf("%s: got letter %U at %d of %q in %s; want %U at %d", c.name, letter.Rune, letter.Position, letter.Text, letter.Field, c.r, c.position)
		}
		for _, says := range append(c.says, "patient.name: ", "; ") {
			if !strings.Contains(err.Error(), says) {
				t.Errorf("%s: message %q lacks %q", c.name, err, says)
			}
		}
	}
}

// What passes once passes again unchanged, is in normalization form C, and
// has every letter in both fonts with a width of its own.
func TestCheckTextLaws(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := rapid.String().Draw(t, "s")
		got, err := CheckText("f", s)
		if err != nil {
			return
		}
		if again, err := CheckText("f", got); err != nil || again != got {
			t.Fatalf("CheckText(%q) = %q, and then %q, %v", s, got, again, err)
		}
		if !norm.NFC.IsNormalString(got) || !utf8.ValidString(got) {
			t.Fatalf("%q is not in form C", got)
		}
		for _, r := range got {
			if r > 0xFFFF || !sansRegular.has(r) || !sansBold.has(r) {
				t.Fatalf("%q let %U through", s, r)
			}
		}
	})
}

// Every code point is either refused or drawn by both fonts with a width, so
// nothing prints as an empty box or on top of its neighbour.
func TestCheckTextEveryCodePoint(t *testing.T) {
	passed := 0
	for r := rune(0); r <= 0x10FFFF; r++ {
		if 0xD800 <= r && r <= 0xDFFF {
			continue
		}
		got, err := CheckText("f", string(r))
		if err != nil {
			continue
		}
		passed++
		for _, r := range got {
			for _, f := range []*fontFace{&sansRegular, &sansBold} {
				if !f.has(r) || f.widths()[r] == 0 {
					t.Fatalf("%U passes but the %s font has no such letter", r, f.name)
				}
			}
		}
	}
	if all := len(alphabet.All()); passed < 2000 || passed > all+100 {
		t.Errorf("%d code points pass; the list holds %d", passed, all)
	}
}

func FuzzCheckText(f *testing.F) {
	for _, s := range []string{"", "10 mg/kg", "Zu\u0308rich", "\xff", "a\u202eb", "漢", "🐾"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		got, err := CheckText("f", s)
		if err == nil && sansRegular.units(got) < 0 {
			t.Fatal("negative width")
		}
		if err != nil && got != "" {
			t.Fatal("text beside an error")
		}
	})
}

func BenchmarkCheckTextPlain(b *testing.B) {
	for b.Loop() {
		CheckText("f", "average against the model's: 8.14 mg/kg every 12 hours")
	}
}

func BenchmarkCheckTextGreek(b *testing.B) {
	for b.Loop() {
		CheckText("f", "τ½ = ln 2 · V / CL, V = 0.3 L/kg, 70 × 41⁰·⁷⁵ W")
	}
}

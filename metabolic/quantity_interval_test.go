package metabolic

import (
	"testing"

	"pgregory.net/rapid"
)

func TestParseInterval(t *testing.T) {
	for input, want := range map[string]Interval{
		"q12h": {Repeated, 12}, "q 12 h": {Repeated, 12}, "q12 h": {Repeated, 12}, "Q12H": {Repeated, 12}, "q12hrs": {Repeated, 12},
		"12 h": {Repeated, 12}, "12h": {Repeated, 12}, "every 12 h": {Repeated, 12}, "every 12 hours": {Repeated, 12}, "Every 12 Hours": {Repeated, 12},
		"2 d": {Repeated, 48}, "every 3 days": {Repeated, 72}, "q3d": {Repeated, 72}, "90 min": {Repeated, 1.5}, "q90min": {Repeated, 1.5}, "every 2 weeks": {Repeated, 336},
		"once": {Kind: Once}, "Once": {Kind: Once}, "infusion": {Kind: Infusion}, "continuous infusion": {Kind: Infusion},
	} {
		got, err := ParseInterval(input)
		if err != nil || got != want {
			t.Errorf("ParseInterval(%q) = %+v, %v; want %+v", input, got, err, want)
		}
	}
}

func TestParseIntervalRefuses(t *testing.T) {
	for input, says := range map[string]string{
		"q12-24h": "range", "12 to 24 h": "range", "12 h–24 h": "range", "every 12-24 hours": "range",
		"BID": "write q12h", "b.i.d.": "write q12h", "TID": "write q8h", "QID": "write q6h", "SID": "write q24h", "EOD": "write q48h",
		"q.d.": "write q24h", "twice daily": "write q12h", "every other day": "write q48h", "CRI": "write infusion", "weekly": "write q168h",
		"PRN": "shortest interval", "q12": "no unit", "12": "no unit", "q12m": "write h, d or min", "q": "number", "every": "number",
		"q0h": "zero", "q-12h": "minus", "qq12h": "number", "q12hh": "write h, d or min",
	} {
		_, err := ParseInterval(input)
		refused(t, input, err, says)
	}
}

// Whatever the shorthand table advises can be written.
func TestShorthandAdviceParses(t *testing.T) {
	for word, advice := range shorthand {
		if _, err := ParseInterval(advice); err != nil {
			t.Errorf("%s: the advice %q does not parse: %v", word, advice, err)
		}
	}
}

func TestParseDuration(t *testing.T) {
	for input, want := range map[string]Hours{"1.3 h": 1.3, "20 min": 20. / 60, "20 minutes": 20. / 60, "2 d": 48, "3 days": 72, "1 day": 24, "1 hour": 1, "12 hours": 12, "1 week": 168} {
		got, err := ParseDuration(input)
		if err != nil || got != want {
			t.Errorf("ParseDuration(%q) = %v, %v; want %v", input, got, err, want)
		}
	}
	for input, says := range map[string]string{"q12h": "number", "12 m": "write h, min or d", "12 H": "capitals", "1-2 h": "unit", "once": "number"} {
		_, err := ParseDuration(input)
		refused(t, input, err, says)
	}
}

// What FormatShortInterval prints, ParseInterval reads back.
func TestShortIntervalRoundTrip(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		want := Interval{Repeated, Hours(rapid.IntRange(1, 5000).Draw(r, "hours"))}
		got, err := ParseInterval(FormatShortInterval(want))
		if err != nil || got != want {
			r.Fatalf("%+v prints as %q and is read as %+v, %v", want, FormatShortInterval(want), got, err)
		}
	})
}

func FuzzParseInterval(f *testing.F) {
	for _, s := range []string{"q12h", "every 12 hours", "2 d", "90 min", "once", "infusion", "BID", "q12-24h", "every 2 weeks"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		i, err := ParseInterval(s)
		if err != nil {
			refused(t, s, err)
			return
		}
		if (i.Kind == Repeated) != (i.Hours > 0) || i.Hours > largestQuantity || i.Kind > Infusion {
			t.Fatalf("%q: %+v", s, i)
		}
		FormatInterval(i)
		again, err := ParseInterval(FormatShortInterval(i))
		if err != nil || again.Kind != i.Kind {
			t.Fatalf("%q prints as %q: %+v, %v", s, FormatShortInterval(i), again, err)
		}
		near(t, s, float64(again.Hours), float64(i.Hours), 0.5e-2)
	})
}

func FuzzParseDuration(f *testing.F) {
	for _, s := range []string{"1.3 h", "20 min", "3 days", "1e3 d"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		h, err := ParseDuration(s)
		if err != nil {
			refused(t, s, err)
			return
		}
		if !(h >= smallestQuantity && h <= largestQuantity) {
			t.Fatalf("%q: %v", s, h)
		}
		FormatDuration(h)
	})
}

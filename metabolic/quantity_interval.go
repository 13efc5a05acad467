package metabolic

import "strings"

// IntervalKind says how a drug is repeated.
type IntervalKind uint8

// The kinds of regimen that an interval field can name.
const (
	Repeated IntervalKind = iota // every so many hours
	Once                         // a single administration
	Infusion                     // continuous
)

// Interval is the time between administrations. Hours is above zero for
// Repeated and zero for Once and Infusion.
type Interval struct {
	Kind  IntervalKind
	Hours Hours
}

// shorthand holds the abbreviations and phrases that are refused, with what
// each usually means. They are on every list of abbreviations that cause
// medication errors, and some differ between countries.
var shorthand = map[string]string{
	"sid": "q24h", "qd": "q24h", "od": "q24h", "uid": "q24h", "daily": "q24h", "once daily": "q24h", "once a day": "q24h", "every day": "q24h",
	"bid": "q12h", "bd": "q12h", "twice daily": "q12h", "twice a day": "q12h",
	"tid": "q8h", "tds": "q8h", "three times daily": "q8h", "three times a day": "q8h",
	"qid": "q6h", "qds": "q6h", "four times daily": "q6h", "four times a day": "q6h",
	"eod": "q48h", "qod": "q48h", "every other day": "q48h", "every second day": "q48h", "alternate days": "q48h",
	"weekly": "q168h", "once weekly": "q168h", "once a week": "q168h", "every week": "q168h",
	"hourly": "q1h", "every hour": "q1h", "qh": "q1h",
	"cri": "infusion", "single dose": "once", "stat": "once",
}

const intervalsAccepted = "h, d or min"

// ParseInterval reads the time between administrations, capitals or not.
//
//	q12h    q 12 h    12 h    every 12 h    every 12 hours
//	2 d    every 3 days    q3d    90 min    every 2 weeks
//	once    infusion    continuous infusion
//
// A range (q12-24h) is an error, since one interval is drafted from. So is
// shorthand such as BID; the error says what to write. The error is a
// [*QuantityError].
func ParseInterval(s string) (Interval, error) {
	t, problem := newText(s, "an interval", "q12h")
	if problem != nil {
		return Interval{}, problem
	}
	body := strings.ToLower(t.body)
	switch body {
	case "once":
		return Interval{Kind: Once}, nil
	case "infusion", "continuous infusion":
		return Interval{Kind: Infusion}, nil
	case "prn", "p.r.n.", "as needed":
		return Interval{}, t.fail(quoted(t.input)+" is no interval", `write the shortest interval allowed, like "q12h"`)
	}
	if write, ok := shorthand[strings.ReplaceAll(body, ".", "")]; ok {
		return Interval{}, t.fail(quoted(t.input)+" is shorthand that is often misread", "write "+write+" if that is meant")
	}
	if after, ok := strings.CutPrefix(body, "every "); ok {
		body = after
	} else if after, ok := strings.CutPrefix(body, "q"); ok {
		body = strings.TrimPrefix(after, " ")
	}
	if _, _, problem := t.number(body); problem != nil {
		return Interval{}, problem
	}
	t.body = body
	_, _, isRange, problem := t.splitRange()
	if problem != nil {
		return Interval{}, problem
	}
	if isRange {
		return Interval{}, t.fail(quoted(t.input)+" is a range of intervals or has a minus in it", `write the one interval to draft from, like "q12h"`)
	}
	hours, problem := t.simple(body, intervalsAccepted, timeUnits)
	if problem != nil {
		return Interval{}, problem
	}
	return Interval{Repeated, Hours(hours)}, nil
}

// ParseDuration reads a span of time, such as a half-life: "1.3 h", "20 min",
// "2 d", "3 days", "1 week", and their full words. The error is a
// [*QuantityError].
func ParseDuration(s string) (Hours, error) {
	t, problem := newText(s, "a time", "1.3 h")
	if problem != nil {
		return 0, problem
	}
	hours, problem := t.simple(t.body, "h, min or d", timeUnits)
	if problem != nil {
		return 0, problem
	}
	return Hours(hours), nil
}

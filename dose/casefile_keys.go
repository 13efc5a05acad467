package dose

import (
	"strconv"
	"strings"
	"unicode/utf8"
)

// caseKind is the shape of what stands under a key of the case file.
type caseKind uint8

const (
	kindValue   caseKind = iota // one value on one line
	kindProse                   // one value that may run over several lines
	kindValues                  // a list of values
	kindNamed                   // keys of the user's own with prose under them
	kindSection                 // the keys of a section
	kindList                    // a list of sections
)

// caseKey is one key of the case file and where its content lives in a
// CaseInput. The reader and the writer both walk these, so that neither can
// know a key that the other does not.
type caseKey struct {
	name string
	kind caseKind

	entry  *Entry        // kindValue, kindProse; kindSection: the place
	values *[]Entry      // kindValues
	named  *[]NamedEntry // kindNamed

	keys  func() []caseKey            // kindSection
	count func() int                  // kindList
	item  func(i int) []caseKey       // kindList
	add   func(place Entry) []caseKey // kindList
}

func valueKey(name string, e *Entry) caseKey { return caseKey{name: name, entry: e} }

func proseKey(name string, e *Entry) caseKey {
	return caseKey{name: name, kind: kindProse, entry: e}
}

func valuesKey(name string, es *[]Entry) caseKey {
	return caseKey{name: name, kind: kindValues, values: es}
}

func namedKey(name string, es *[]NamedEntry) caseKey {
	return caseKey{name: name, kind: kindNamed, named: es}
}

func sectionKey(name string, place *Entry, keys func() []caseKey) caseKey {
	return caseKey{name: name, kind: kindSection, entry: place, keys: keys}
}

// listKey describes a list of sections of type T.
func listKey[T any](name string, items *[]T, place func(*T) *Entry, keys func(*T) []caseKey) caseKey {
	return caseKey{
		name:  name,
		kind:  kindList,
		count: func() int { return len(*items) },
		item:  func(i int) []caseKey { return keys(&(*items)[i]) },
		add: func(at Entry) []caseKey {
			var zero T
			*items = append(*items, zero)
			last := &(*items)[len(*items)-1]
			*place(last) = at
			return keys(last)
		},
	}
}

// caseKeys are the keys of a whole case file, in the order of writing.
func (c *CaseInput) caseKeys() []caseKey {
	return []caseKey{
		valueKey("case", &c.Case),
		valueKey("date", &c.Date),
		valueKey("prepared_by", &c.PreparedBy),
		sectionKey("patient", &c.Patient.Place, c.Patient.caseKeys),
		sectionKey("drug", &c.Drug.Place, c.Drug.caseKeys),
		listKey("models", &c.Models, func(m *ModelInput) *Entry { return &m.Place }, (*ModelInput).caseKeys),
		listKey("published", &c.Published, func(p *PublishedInput) *Entry { return &p.Place }, (*PublishedInput).caseKeys),
		sectionKey("method", &c.Method.Place, c.Method.caseKeys),
		sectionKey("product", &c.Product.Place, c.Product.caseKeys),
		sectionKey("target", &c.Target.Place, c.Target.caseKeys),
		sectionKey("proposed", &c.Proposed.Place, c.Proposed.caseKeys),
		namedKey("overrides", &c.Overrides),
	}
}

func (p *PatientInput) caseKeys() []caseKey {
	return []caseKey{
		valueKey("name", &p.Name),
		valueKey("species", &p.Species),
		valueKey("mass", &p.Mass),
		valueKey("temperature", &p.Temperature),
		valueKey("stage", &p.Stage),
		valuesKey("condition", &p.Condition),
		valueKey("food_producing", &p.FoodProducing),
	}
}

func (d *DrugInput) caseKeys() []caseKey {
	return []caseKey{
		valueKey("name", &d.Name),
		valueKey("class", &d.Class),
		valueKey("route", &d.Route),
		valueKey("elimination", &d.Elimination),
		valueKey("extraction", &d.Extraction),
		valueKey("activity", &d.Activity),
		valueKey("formulation", &d.Formulation),
		valueKey("protein_binding", &d.ProteinBinding),
		valueKey("active_secretion", &d.ActiveSecretion),
		valueKey("enterohepatic_recycling", &d.EnterohepaticRecycling),
		valueKey("saturable_kinetics", &d.SaturableKinetics),
		valueKey("margin", &d.Margin),
		valueKey("controlled", &d.Controlled),
	}
}

func (m *ModelInput) caseKeys() []caseKey {
	return []caseKey{
		valueKey("species", &m.Species),
		valueKey("mass", &m.Mass),
		valueKey("temperature", &m.Temperature),
		valueKey("dose", &m.Dose),
		valueKey("interval", &m.Interval),
		valueKey("loading_dose", &m.LoadingDose),
		valueKey("route", &m.Route),
		valueKey("half_life", &m.HalfLife),
		valueKey("volume", &m.Volume),
		valueKey("bioavailability", &m.Bioavailability),
		valueKey("absorption_half_life", &m.AbsorptionHalfLife),
		sectionKey("tolerated", &m.Tolerated.Place, m.Tolerated.caseKeys),
		proseKey("source", &m.Source),
	}
}

func (t *ToleratedInput) caseKeys() []caseKey {
	return []caseKey{valueKey("dose", &t.Dose), proseKey("source", &t.Source)}
}

func (p *PublishedInput) caseKeys() []caseKey {
	return []caseKey{
		valueKey("species", &p.Species),
		valueKey("dose", &p.Dose),
		valueKey("interval", &p.Interval),
		valueKey("route", &p.Route),
		proseKey("source", &p.Source),
	}
}

func (m *MethodInput) caseKeys() []caseKey {
	return []caseKey{
		valueKey("basis", &m.Basis),
		valueKey("equation", &m.Equation),
		valueKey("plan", &m.Plan),
		valuesKey("intervals", &m.Intervals),
		valueKey("q10", &m.Q10),
		namedKey("thresholds", &m.Thresholds),
	}
}

func (p *ProductEntry) caseKeys() []caseKey {
	return []caseKey{
		valueKey("strength", &p.Strength),
		valueKey("step", &p.Step),
		valueKey("divisible", &p.Divisible),
		valueKey("largest_per_site", &p.LargestPerSite),
		valueKey("container", &p.Container),
		valueKey("days", &p.Days),
	}
}

func (t *TargetInput) caseKeys() []caseKey {
	return []caseKey{valueKey("concentration", &t.Concentration), proseKey("source", &t.Source)}
}

func (p *ProposedInput) caseKeys() []caseKey {
	return []caseKey{valueKey("dose", &p.Dose), valueKey("interval", &p.Interval)}
}

// otherWords are words that people write for a key of the case file.
var otherWords = map[string]string{
	"animal": "species", "weight": "mass", "bodyweight": "mass", "body_weight": "mass", "bw": "mass", "kg": "mass",
	"temp": "temperature", "body_temperature": "temperature", "age": "stage", "life_stage": "stage",
	"conditions": "condition", "disease": "condition", "food_animal": "food_producing", "id": "case",
	"case_number": "case", "vet": "prepared_by", "veterinarian": "prepared_by", "author": "prepared_by",
	"animals": "models", "model": "models", "frequency": "interval", "freq": "interval", "every": "interval",
	"reference": "source", "citation": "source", "ref": "source", "loading": "loading_dose",
	"half-life": "half_life", "t_half": "half_life", "vd": "volume", "volume_of_distribution": "volume",
	"maximum": "tolerated", "therapeutic_index": "margin", "safety_margin": "margin",
	"concentration": "strength", "mic": "target", "reasons": "overrides", "override": "overrides",
}

// unknownKey says what is wrong with a key that the section does not have, and
// which key was probably meant. section is the dotted path, empty at the top.
func unknownKey(name, section string, keys []caseKey) (problem, remedy string) {
	problem = "unknown key " + quoteShort(name)
	for _, r := range name {
		if r > 0x7e {
			problem += ", which holds " + nameLetter(r)
			break
		}
	}
	folded := strings.NewReplacer(" ", "_", "-", "_").Replace(strings.ToLower(strings.TrimSpace(name)))
	has := func(n string) bool {
		for _, k := range keys {
			if k.name == n {
				return true
			}
		}
		return false
	}
	// A word of six letters may be wrong in three places, a shorter one in fewer.
	best, bestDistance := "", min(3, 1+len(folded)/3)+1
	if len(folded) <= 40 {
		for _, k := range keys {
			if d := editDistance(folded, k.name); d < bestDistance {
				best, bestDistance = k.name, d
			}
		}
	}
	switch {
	case has(folded):
		return problem, "did you mean " + strconv.Quote(folded) + "? keys are written in small letters, words joined by _"
	case has(otherWords[folded]):
		return problem, "did you mean " + strconv.Quote(otherWords[folded]) + "?"
	case best != "" && bestDistance <= 1:
		return problem, "did you mean " + strconv.Quote(best) + "?"
	}
	if homes := keyHomes(folded, section); len(homes) > 0 {
		return problem + " here", strconv.Quote(folded) + " belongs " + strings.Join(homes, " or ")
	}
	if best != "" {
		return problem, "did you mean " + strconv.Quote(best) + "?"
	}
	names := make([]string, len(keys))
	for i, k := range keys {
		names[i] = k.name
	}
	return problem, "the keys here are " + strings.Join(names, ", ")
}

// keyHomes are the sections, other than the one asked from, that have a key.
func keyHomes(name, section string) []string {
	var homes []string
	var visit func(path string, keys []caseKey)
	visit = func(path string, keys []caseKey) {
		for _, k := range keys {
			if k.name == name && path != dropIndexes(section) {
				if path == "" {
					homes = append(homes, "at the left margin")
				} else {
					homes = append(homes, "under "+strings.ReplaceAll(path, ".", ", "))
				}
			}
			switch k.kind {
			case kindSection:
				visit(joinPath(path, k.name), k.keys())
			case kindList:
				visit(joinPath(path, k.name), k.add(Entry{}))
			}
		}
	}
	visit("", new(CaseInput).caseKeys())
	return homes
}

// dropIndexes turns models[0].tolerated into models.tolerated.
func dropIndexes(path string) string {
	for {
		open := strings.IndexByte(path, '[')
		if open < 0 {
			return path
		}
		end := strings.IndexByte(path[open:], ']')
		if end < 0 {
			return path
		}
		path = path[:open] + path[open+end+1:]
	}
}

func joinPath(path, name string) string {
	if path == "" {
		return name
	}
	return path + "." + name
}

// userPath is the path of a key that may be the user's own: quoted when a letter
// of it could act on the terminal, and never long.
func userPath(path, name string) string {
	if q := quoteShort(name); q != `"`+name+`"` {
		return joinPath(path, q)
	}
	return joinPath(path, name)
}

// editDistance counts the letters to insert, delete, change or swap with the
// neighbour that turn one word into the other.
func editDistance(a, b string) int {
	s, t := []rune(a), []rune(b)
	before, row, next := make([]int, len(t)+1), make([]int, len(t)+1), make([]int, len(t)+1)
	for j := range row {
		row[j] = j
	}
	for i := range s {
		next[0] = i + 1
		for j := range t {
			change := 1
			if s[i] == t[j] {
				change = 0
			}
			next[j+1] = min(row[j]+change, row[j+1]+1, next[j]+1)
			if i > 0 && j > 0 && s[i] == t[j-1] && s[i-1] == t[j] {
				next[j+1] = min(next[j+1], before[j-1]+1)
			}
		}
		before, row, next = row, next, before
	}
	return row[len(t)]
}

// quoteShort quotes a word of the user's for a message, so that no letter in it
// can act on the terminal and no length can drown the message.
func quoteShort(s string) string { return strconv.Quote(shorten(s)) }

// shorten cuts a word of the user's to what a message can bear.
func shorten(s string) string {
	const most = 40
	if utf8.RuneCountInString(s) > most {
		return string([]rune(s)[:most]) + "…"
	}
	return s
}

// nameLetter names a letter that a reader may not see or may take for another.
func nameLetter(r rune) string {
	code := "U+" + strings.ToUpper(strconv.FormatInt(0x10000+int64(r), 16)[1:])
	if r > 0xffff {
		code = "U+" + strings.ToUpper(strconv.FormatInt(int64(r), 16))
	}
	if strconv.IsPrint(r) {
		return "the letter " + string(r) + " (" + code + ")"
	}
	return "the unseen letter " + code
}

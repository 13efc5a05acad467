// How a drug's name is read for the hazard table: by the names that the
// table's own lists know, salts and forms of preparation let off, both halves
// of a combination, the stem of an international nonproprietary name, and
// last by near spelling. It only ever adds a hazard to be looked at; it never
// decides what a drug is.

package species

import (
	_ "embed"
	"math/bits"
	"slices"
	"strings"
	"sync"

	"tayra/species/internal/fold"
)

//go:embed data/drugs.index
var drugsIndex string

//go:embed data/drug-classes.index
var drugClassesIndex string

//go:embed data/drug-stems.csv
var drugStemsTable string

// how a drug or class came to be read, the surest first.
type certainty uint8

const (
	byName certainty = iota
	bySynonym
	byClass
	byEnding
	bySpelling
	unread
)

// reading is one drug or class that a name was read as.
type reading struct {
	drug, class string // one of them
	how         certainty
	via         string // as HazardMatch.Via
	meant       string // bySpelling: the name that it is near to
	misspelt    bool   // bySpelling: a class was meant, not a drug
	asClass     bool   // it stands in the class, not in the name
}

// mostSpellings is how many unknown words of a case are compared with every
// name in the lists; known names are found however long the text is.
const mostSpellings = 32

// readDrug reads the drug and the class of a case. Unread are the parts of the
// drug's name of which nothing was read, but for a near spelling.
func readDrug(drug, class string) (out []reading, unread []string) {
	spellings := mostSpellings
	for i, text := range []string{drug, class} {
		tokens := fold.Tokens(text)
		for len(tokens) > 0 {
			part := tokens
			if end := slices.Index(tokens, fold.Boundary); end >= 0 {
				part, tokens = tokens[:end], tokens[end+1:]
			} else {
				tokens = nil
			}
			from := len(out)
			out = readPart(out, part, &spellings)
			for k := from; k < len(out); k++ {
				out[k].asClass = i == 1
			}
			read := slices.ContainsFunc(out[from:], func(r reading) bool { return r.how < bySpelling })
			if i == 0 && !read && slices.ContainsFunc(part, otherDrug) {
				unread = append(unread, strings.Join(part, " "))
			}
		}
	}
	return out, unread
}

// readPart reads one half of a combination. The longest run of words that is
// a known name is taken first, so that "sodium phosphate" in "dexamethasone
// sodium phosphate" is no drug and "benzyl alcohol" no alcohol.
func readPart(out []reading, words []string, spellings *int) []reading {
	var unknown []int // places of words
	for i := 0; i < len(words); {
		n := min(5, len(words)-i)
		for ; n > 0; n-- {
			key := strings.Join(words[i:i+n], "")
			if l, ok := lookUp(drugsIndex, key); ok {
				e := parseDrug(l)
				if e.whole && (slices.ContainsFunc(words[:i], otherDrug) || slices.ContainsFunc(words[i+n:], otherDrug)) {
					continue
				}
				out = e.readings(out, key)
				// A word may be the name of a class as well ("penicillin").
				if l, ok := lookUp(drugClassesIndex, key); ok {
					out = classReadings(out, l)
				}
				break
			}
			if l, ok := lookUp(drugClassesIndex, key); ok {
				out = classReadings(out, l)
				break
			}
		}
		if n > 0 {
			i += n
			continue
		}
		if words[i] == "non" { // "non-opioid" is no opioid
			i += 1 + longestName(words[i+1:])
			continue
		}
		if w := words[i]; otherDrug(w) {
			out = stemReadings(out, w)
			unknown = append(unknown, i)
		}
		i++
	}
	near := func(from, to int) {
		if *spellings > 0 {
			*spellings--
			alone := !slices.ContainsFunc(words[:from], otherDrug) && !slices.ContainsFunc(words[to:], otherDrug)
			out = nearReadings(out, strings.Join(words[from:to], ""), alone)
		}
	}
	for _, i := range unknown {
		near(i, i+1)
	}
	for _, i := range unknown { // a name of two words ("acetylsalicylic acid"), or fallen apart
		if i > 0 {
			near(i-1, i+1)
		}
		if i+1 < len(words) {
			near(i, i+2)
		}
	}
	if n := len(unknown); n == 3 && unknown[2]-unknown[0] == 2 {
		near(unknown[0], unknown[2]+1)
	}
	return out
}

// longestName is how many of the words, from the first on, are the name of a
// class; 0 if none are.
func longestName(words []string) int {
	for n := min(5, len(words)); n > 0; n-- {
		if _, ok := lookUp(drugClassesIndex, strings.Join(words[:n], "")); ok {
			return n
		}
	}
	return 0
}

// otherDrug reports whether a word is more than a form or salt.
func otherDrug(w string) bool { return !preparation[w] && !salt[w] && !isNumber(w) }

// lookUp finds a key, a plural s or a strength that is run together with it
// ("ivermectin1%") let off.
func lookUp(index, key string) (string, bool) {
	l, ok := line(index, key)
	if !ok && len(key) > 4 && strings.HasSuffix(key, "s") {
		l, ok = line(index, key[:len(key)-1])
	}
	if bare := strings.TrimRight(key, "0123456789"); !ok && len(bare) > 4 && len(bare) < len(key) {
		l, ok = line(index, bare)
	}
	return l, ok
}

type drugLine struct {
	key, written string
	whole        bool
	yields       bool
	drugs        []string
	classes      []string
	hazard       bool
}

func parseDrug(l string) drugLine {
	c := strings.Split(l, "\t")
	return drugLine{key: c[0], written: c[1], whole: c[2] == "whole", yields: c[2] == "yields", drugs: strings.Split(c[3], ";"), classes: strings.Split(c[4], ";"), hazard: c[5] != ""}
}

func (e drugLine) readings(out []reading, key string) []reading {
	for _, d := range e.drugs {
		r := reading{drug: d, how: byName, via: "drug name"}
		switch {
		case d == e.written:
		case e.yields:
			r.how, r.via = bySynonym, e.written+", which yields "+d
		case len(e.drugs) == 1:
			r.how, r.via = bySynonym, "synonym "+e.written
		}
		out = append(out, r)
	}
	for _, c := range e.classes {
		out = append(out, reading{class: c, how: byClass, via: "class " + c})
	}
	return out
}

func classReadings(out []reading, l string) []reading {
	c := strings.Split(l, "\t")
	for _, class := range strings.Split(c[2], ";") {
		out = append(out, reading{class: class, how: byClass, via: "class " + class})
	}
	return out
}

// stemReadings reads the class from the stem that such a class's international
// nonproprietary names share, at their end or their beginning.
func stemReadings(out []reading, word string) []reading {
	for r := range records(drugStemsTable) {
		at, stem, class := r[0], r[1], r[2]
		if len(word) < len(stem)+2 {
			continue
		}
		switch {
		case at == "end" && strings.HasSuffix(word, stem):
			out = append(out, reading{class: class, how: byEnding, via: "class " + class + ", by the ending -" + stem})
		case at == "start" && strings.HasPrefix(word, stem):
			out = append(out, reading{class: class, how: byEnding, via: "class " + class + ", by the beginning " + stem + "-"})
		}
	}
	return out
}

// nearName is a name that a slip of the pen may have meant.
type nearName struct {
	key     string
	letters uint32 // one bit a letter
	line    string
	class   bool
}

// nearNames are the names of drugs and classes to which a near spelling is
// looked for, but for the shortest, which too many words are near to: those
// that the hazard table is about, and those that only have a trait.
var nearNames = sync.OnceValue(func() (out struct{ hazard, trait []nearName }) {
	for i, index := range []string{drugsIndex, drugClassesIndex} {
		for l := range lines(index) {
			key, _, _ := strings.Cut(l, "\t")
			if len(key) < 6 {
				continue
			}
			n := nearName{key, letters(key), l, i == 1}
			switch {
			case strings.HasSuffix(l, "\thazard"):
				out.hazard = append(out.hazard, n)
			case strings.HasSuffix(l, "\ttrait"):
				out.trait = append(out.trait, n)
			}
		}
	}
	return out
})

// nearReadings adds what a word is near to: within one slip (under eight
// letters) or two, written by ear, or run together with another word. Names
// that count only where they stand alone are left out where it does not.
func nearReadings(out []reading, word string, alone bool) []reading {
	if len(word) < 5 || len(word) > fold.MaxBytes {
		return out
	}
	for _, names := range [][]nearName{nearNames().hazard, nearNames().trait} {
		for _, n := range nearest(word, names) {
			var read []reading
			var written string
			if n.class {
				read = classReadings(nil, n.line)
				written = strings.Split(n.line, "\t")[1]
			} else {
				e := parseDrug(n.line)
				if e.whole && !alone {
					continue
				}
				read, written = e.readings(nil, n.key), e.written
			}
			for _, r := range read {
				r.how, r.via, r.meant, r.misspelt = bySpelling, "near spelling", written, n.class
				out = append(out, r)
			}
		}
	}
	return out
}

// nearest are the names that a word is nearest to, within one slip or two;
// where there are none, those that sound like it or stand in it.
func nearest(word string, names []nearName) []nearName {
	limit := 1
	if len(word) >= 8 {
		limit = 2
	}
	var hits []nearName
	mask := letters(word)
	for _, n := range names {
		// A slip changes two letters of the alphabet at most.
		if bits.OnesCount32(mask^n.letters) > 2*limit {
			continue
		}
		switch d := editDistance(word, n.key, limit); {
		case d < limit:
			limit, hits = d, append(hits[:0], n)
		case d == limit:
			hits = append(hits, n)
		}
	}
	if len(hits) > 0 || len(word) < soundLetters {
		return hits
	}
	sound := soundOf(word)
	for _, n := range names {
		// A name inside a longer word is two names run together, or the name
		// of a derivative.
		if len(n.key) < soundLetters {
			continue
		}
		if strings.Contains(word, n.key) || abs(len(n.key)-len(word)) <= soundSlack && soundOf(n.key) == sound {
			hits = append(hits, n)
		}
	}
	slices.SortStableFunc(hits, func(a, b nearName) int { return len(b.key) - len(a.key) })
	return hits
}

// soundSlack is how far apart in length two spellings of one sound may be: a
// bound that spares most names the comparison.
const soundSlack = 6

func abs(n int) int {
	if n < 0 {
		return -n
	}
	return n
}

// letters has a bit for each letter of the alphabet in a word, and one for
// the digits.
func letters(word string) uint32 {
	var mask uint32
	for i := 0; i < len(word); i++ {
		if c := word[i]; c >= 'a' {
			mask |= 1 << (c - 'a')
		} else {
			mask |= 1 << 26
		}
	}
	return mask
}

func isNumber(w string) bool { return w[0] >= '0' && w[0] <= '9' }

func setOf(words string) map[string]bool {
	out := make(map[string]bool)
	for _, w := range strings.Fields(words) {
		out[w] = true
	}
	return out
}

// salt and preparation are words that stand beside a drug's name and are not
// themselves looked for: counter-ions and esters, and forms of preparation.
var (
	salt = setOf(`sodium potassium calcium magnesium zinc ammonium lithium disodium dipotassium
		hydrochloride dihydrochloride hcl hydrobromide hbr hydriodide hydrate monohydrate dihydrate trihydrate hemihydrate
		pentahydrate hyclate anhydrous acetate diacetate phosphate diphosphate succinate hemisuccinate tartrate bitartrate
		citrate lactate maleate fumarate malate oxalate mesylate mesilate besylate besilate tosylate tosilate edisylate
		esylate napsylate meglumine lysine lysinate arginine benzathine axetil pivoxil proxetil palmitate stearate estolate
		ethylsuccinate sulfate sulphate bisulfate nitrate mononitrate gluconate digluconate glucuronate lactobionate pamoate
		embonate decanoate propionate dipropionate valerate acetonide furoate cypionate cipionate enanthate isethionate
		isonicotinate trometamol tromethamine bromide chloride iodide benzoate salicylate base salt ester acid hydroxide
		oxide carbonate monobasic dibasic heptahydrate undecylenate phenylpropionate methylsulfate metilsulfate aceponate pivalate caproate`)
	preparation = setOf(`injection injectable inj solution sol suspension susp tablet tablets tab tabs capsule capsules cap caps
		oral paste gel cream ointment powder feed premix medicated pour spot spoton on drops drop spray liquid syrup elixir bolus
		la long acting longacting depot slow sustained extended release sr er xr xl concentrate generic compounded human
		veterinary vet for in of the a an use mg ml g kg mcg iu units percent per dose strength drug agent enema hypertonic sterile
		aqueous water soluble topical ophthalmic otic eye ear intramammary implant granules chewable chew collar dip shampoo
		wormer drench invented sample test animal horse horses cattle dog dogs cat cats`)
)

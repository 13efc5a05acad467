package reports

import (
	"bytes"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"reflect"
	"slices"
	"sort"
	"strings"
	"testing"

	"github.com/goccy/go-yaml"
	"github.com/santhosh-tekuri/jsonschema/v6"

	"tayra/dose"
	"tayra/metabolic"
)

func compiled(t testing.TB, source []byte) *jsonschema.Schema {
	t.Helper()
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(source))
	if err != nil {
		t.Fatal(err)
	}
	c := jsonschema.NewCompiler()
	id := doc.(map[string]any)["$id"].(string)
	if err := c.AddResource(id, doc); err != nil {
		t.Fatal(err)
	}
	s, err := c.Compile(id)
	if err != nil {
		t.Fatal(err)
	}
	if s.DraftVersion != 2020 {
		t.Errorf("draft %d", s.DraftVersion)
	}
	return s
}

// plainYAML decodes a case file as any YAML library would.
func plainYAML(t testing.TB, data []byte) any {
	t.Helper()
	var v any
	if err := yaml.Unmarshal(bytes.TrimPrefix(data, []byte("\ufeff")), &v); err != nil {
		t.Fatal(err)
	}
	b, err := json.Marshal(v)
	if err != nil {
		t.Fatal(err)
	}
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(b))
	if err != nil {
		t.Fatal(err)
	}
	return doc
}

func TestCaseSchemaTakesEveryExample(t *testing.T) {
	s := compiled(t, CaseSchema())
	for _, e := range examples(t) {
		if err := s.Validate(plainYAML(t, e.data)); err != nil {
			t.Errorf("%s: %v", e.name, err)
		}
	}
}

// Where the reader and Check take a case, the schema takes it too: the files
// that the reader must not stumble over, and spellings that are in use.
func TestCaseSchemaTakesWhatIsRead(t *testing.T) {
	s := compiled(t, CaseSchema())
	files, err := filepath.Glob("../testdata/hostile/accepted-*.yaml")
	if err != nil || len(files) == 0 {
		t.Fatalf("%d files, %v", len(files), err)
	}
	taken := 0
	for _, f := range files {
		data, err := os.ReadFile(f)
		if err != nil {
			t.Fatal(err)
		}
		in, _, err := dose.ReadCase(f, data)
		if err != nil {
			t.Errorf("%s: %v", f, err)
			continue
		}
		if _, err := in.Check(); err != nil {
			continue // read, but no whole case
		}
		taken++
		if err := s.Validate(plainYAML(t, data)); err != nil {
			t.Errorf("%s: %v", f, err)
		}
	}
	if taken == 0 {
		t.Log("none of these files is a whole case")
	}
	for _, line := range []string{
		"patient.mass: 41kg", "patient.mass: 90 lb", "patient.mass: 36-46 kg", "patient.mass: 41 kg ± 10 %", "patient.temperature: 98 °F", "patient.food_producing: no",
		"models.dose: 10-15 mg/kg", "models.dose: 22000 IU/kg", "models.dose: 300 mg/m²", "models.dose: 100 mg", "models.dose: 20 mg/kg/day", "models.dose: 10 mg per kg",
		"models.interval: 12 h", "models.interval: every 12 hours", "models.interval: q3d", "models.interval: ONCE", "models.interval: Once",
		"models.half_life: 20 min", "models.volume: 300 mL/kg", "models.bioavailability: 80%", "drug.controlled: true", "drug.name: \"7\"", "case: 0412", "case: true",
		"method.q10: 3", "method.q10: \"3\"", "method.intervals: 12 h", "method.intervals: [8 h, 12 h]", "method.thresholds: {peak: 1.2, mass-ratio: \"10\"}",
		"product.strength: 5 %", "product.days: 7 days", "product.days: 0.5", "patient.condition: obese", "patient.condition: [obese, gravid]",
	} {
		c := baseCase()
		c.set(line)
		data := c.yaml()
		in, _, err := dose.ReadCase("case.yaml", data)
		if err != nil {
			t.Errorf("%s: %v", line, err)
			continue
		}
		if _, err := in.Check(); err != nil {
			t.Errorf("%s: %v", line, err)
		}
		if err := s.Validate(plainYAML(t, data)); err != nil {
			t.Errorf("%s: %v", line, err)
		}
	}
}

// What is wrong by its form the schema refuses; the program refuses it too.
func TestCaseSchemaRefuses(t *testing.T) {
	s := compiled(t, CaseSchema())
	if err := s.Validate(plainYAML(t, baseCase().yaml())); err != nil {
		t.Fatal(err)
	}
	for _, line := range []string{
		"patient.mass: 41", "patient.mass: heavy", "patient.weight: 41 kg", "patient.temperature: 33", "patient.stage: old", "patient.condition: [tired]",
		"patient.food_producing: 1", "models.dose: 10", "models.interval: bid", "models.interval: 12", "models.tolerated: 40 mg/kg",
		"models.tolerated: {dose: 40 mg/kg}", "models.bioavailability: 0.8", "models.volume: 0.3", "drug.margin: slim", "drug.elimination: sweat",
		"method.basis: kleiber", "method.plan: mine", "method.q10: 9", "method.q10: warm", "method.thresholds: {peeks: 2}", "method.intervals: [12]",
		"product.step: 0.1", "product.days: 0", "product.days: seven", "product.divisible: thirds", "target.concentration: 2 mg/L", "proposed.dose: 8 mg/kg",
		"date: tomorrow", "date: 30/11/2026", "date: null", "overrides: {narrow-margin: ok}", "overrides: [narrow-margin]", "notes: none", "models: []", "patient: null",
	} {
		c := baseCase()
		c.set(line)
		data := c.yaml()
		if err := s.Validate(plainYAML(t, data)); err == nil {
			t.Errorf("%s: the schema takes it", line)
		}
		if in, _, err := dose.ReadCase("case.yaml", data); err == nil {
			if c, err := in.Check(); err == nil {
				if _, err := dose.Draft(c); err == nil {
					t.Errorf("%s: the program takes it", line)
				}
			}
		}
	}
	for _, missing := range []string{"date", "patient", "patient.species", "patient.mass", "drug", "drug.name", "models", "models.species", "models.mass", "models.dose", "models.interval", "models.source"} {
		c := baseCase()
		c.drop(missing)
		if err := s.Validate(plainYAML(t, c.yaml())); err == nil {
			t.Errorf("without %s the schema takes it", missing)
		}
	}
}

// caseTree is a case file as maps, to be spoiled one key at a time. "models" is
// the first of the models.
type caseTree map[string]any

func baseCase() caseTree {
	return caseTree{
		"date":    "2026-11-30",
		"patient": map[string]any{"species": "giant anteater", "mass": "41 kg"},
		"drug":    map[string]any{"name": "examplicillin"},
		"models": []any{map[string]any{"species": "dog", "mass": "18 kg", "dose": "10 mg/kg", "interval": "q12h", "source": "invented for this test",
			"half_life": "1.3 h"}},
	}
}

func (c caseTree) section(name string) map[string]any {
	if name == "models" {
		return c["models"].([]any)[0].(map[string]any)
	}
	if _, ok := c[name]; !ok {
		c[name] = map[string]any{}
		if name == "product" {
			c[name] = map[string]any{"strength": "50 mg/mL", "step": "0.1 mL"}
		}
	}
	return c[name].(map[string]any)
}

// set takes "patient.mass: 41 kg", the value as YAML.
func (c caseTree) set(line string) {
	key, value, _ := strings.Cut(line, ": ")
	var v any
	if err := yaml.Unmarshal([]byte(value), &v); err != nil {
		panic(err)
	}
	at := map[string]any(c)
	if section, rest, ok := strings.Cut(key, "."); ok {
		at, key = c.section(section), rest
	}
	at[key] = v
}

func (c caseTree) drop(key string) {
	if section, rest, ok := strings.Cut(key, "."); ok {
		delete(c.section(section), rest)
		return
	}
	delete(c, key)
}

func (c caseTree) yaml() []byte {
	b, err := json.MarshalIndent(c, "", " ")
	if err != nil {
		panic(err)
	}
	return b
}

func TestRecordSchemaTakesEveryRecord(t *testing.T) {
	s := compiled(t, RecordSchema())
	for _, e := range examples(t) {
		doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(recordOf(t, e.ws)))
		if err != nil {
			t.Fatal(err)
		}
		if err := s.Validate(doc); err != nil {
			t.Errorf("%s: %v", e.name, err)
		}
	}
}

func TestRecordSchemaRefuses(t *testing.T) {
	s := compiled(t, RecordSchema())
	for _, k := range []struct {
		what string
		do   func(m map[string]any)
	}{
		{"another format", func(m map[string]any) { m["format"] = "tayra-worksheet/2" }},
		{"no drafted", func(m map[string]any) { delete(m, "drafted") }},
		{"no patient", func(m map[string]any) { delete(m, "patient") }},
		{"a mass as text", func(m map[string]any) { m["patient"].(map[string]any)["mass_kg"] = "41 kg" }},
		{"three ends of a dose", func(m map[string]any) { m["drafted"].(map[string]any)["dose_per_kg"] = []any{1, 2, 3} }},
		{"another unit", func(m map[string]any) { m["drafted"].(map[string]any)["unit"] = "mg" }},
		{"another level", func(m map[string]any) { m["cautions"].([]any)[0].(map[string]any)["level"] = "info" }},
		{"an override that is no text", func(m map[string]any) { m["overrides"] = map[string]any{"peak": true} }},
		{"a plan of its own", func(m map[string]any) { m["drafted"].(map[string]any)["plan"] = "guess" }},
	} {
		var m map[string]any
		if err := json.Unmarshal(recordOf(t, exampleNamed(t, "anteater")), &m); err != nil {
			t.Fatal(err)
		}
		if err := s.Validate(m); err != nil {
			t.Fatal(err)
		}
		k.do(m)
		if err := s.Validate(m); err == nil {
			t.Errorf("%s: the schema takes it", k.what)
		}
	}
}

// schemaDoc is a schema as a tree, with its references followed.
type schemaDoc struct{ root map[string]any }

func parsedSchema(t testing.TB, source []byte) schemaDoc {
	t.Helper()
	var root map[string]any
	if err := json.Unmarshal(source, &root); err != nil {
		t.Fatal(err)
	}
	return schemaDoc{root}
}

func (d schemaDoc) follow(node map[string]any) map[string]any {
	if list, ok := node["anyOf"].([]any); ok && len(list) == 2 && list[1].(map[string]any)["type"] == "null" {
		node = list[0].(map[string]any) // one that may be null
	}
	if ref, ok := node["$ref"].(string); ok {
		return d.follow(d.root["$defs"].(map[string]any)[strings.TrimPrefix(ref, "#/$defs/")].(map[string]any))
	}
	return node
}

// tags are the keys of a struct in JSON, and those that are always there.
func tags(t reflect.Type) (all map[string]reflect.StructField, always []string) {
	all = map[string]reflect.StructField{}
	for i := 0; i < t.NumField(); i++ {
		f := t.Field(i)
		tag, ok := f.Tag.Lookup("json")
		name, options, _ := strings.Cut(tag, ",")
		if !f.IsExported() || name == "-" {
			continue
		}
		if !ok || name == "" {
			panic(fmt.Sprintf("%s.%s has no json tag", t, f.Name))
		}
		all[name] = f
		if !strings.Contains(options, "omitempty") && !strings.Contains(options, "omitzero") {
			always = append(always, name)
		}
	}
	return all, always
}

// TestSchemasFollowTheTypes holds every key of both schemas against the json
// tags of the types, in both directions and all the way down, with the kind of
// every value and whether it may be missing or null. A key that is added to a
// type, or renamed, fails here until the schema says so too.
func TestSchemasFollowTheTypes(t *testing.T) {
	record := parsedSchema(t, RecordSchema())
	w := walker{t: t, doc: record, seen: map[reflect.Type]bool{}}
	w.check("record", record.root, reflect.TypeFor[dose.Worksheet]())
	if len(w.seen) < 35 {
		t.Errorf("only %d types were visited", len(w.seen))
	}
	// In a case file overrides and thresholds are keys of the user's own, a
	// value may be more than a text, and fit does not occur.
	file := parsedSchema(t, CaseSchema())
	w = walker{t: t, doc: file, seen: map[reflect.Type]bool{}, file: true}
	w.check("case", file.root, reflect.TypeFor[dose.CaseInput]())
	if len(w.seen) < 8 {
		t.Errorf("only %d types were visited", len(w.seen))
	}
}

type walker struct {
	t    *testing.T
	doc  schemaDoc
	seen map[reflect.Type]bool
	file bool
}

func (w walker) check(path string, node map[string]any, t reflect.Type) {
	if node == nil {
		w.t.Errorf("%s: not in the schema", path)
		return
	}
	nullable := w.nullable(node)
	node = w.doc.follow(node)
	nullable = nullable || w.nullable(node)
	if t.Kind() == reflect.Pointer {
		if !nullable && !w.file {
			w.t.Errorf("%s: may be null, and the schema does not say so", path)
		}
		t = t.Elem()
	}
	switch {
	case t == reflect.TypeFor[dose.Entry]():
		if !w.file && node["type"] != "string" {
			w.t.Errorf("%s: an entry is a text, the schema has %v", path, node["type"])
		}
	case t == reflect.TypeFor[[]dose.NamedEntry]() && w.file:
		w.kind(path, node, "object")
	case t.Kind() == reflect.Struct:
		w.kind(path, node, "object")
		if w.seen[t] {
			return
		}
		w.seen[t] = true
		properties, _ := node["properties"].(map[string]any)
		fields, always := tags(t)
		if w.file {
			delete(fields, "fit")
		}
		for name, f := range fields {
			sub, _ := properties[name].(map[string]any)
			w.check(path+"."+name, sub, f.Type)
		}
		for name := range properties {
			if _, ok := fields[name]; !ok {
				w.t.Errorf("%s.%s: in the schema, and no key of %s", path, name, t)
			}
		}
		if w.file {
			if node["additionalProperties"] != false {
				w.t.Errorf("%s: unknown keys are errors in a case file", path)
			}
			return
		}
		var required []string
		list, _ := node["required"].([]any)
		for _, r := range list {
			required = append(required, r.(string))
		}
		sort.Strings(required)
		// An entry that was not typed is left out whatever its tag says.
		always = slices.DeleteFunc(always, func(n string) bool {
			return fields[n].Type == reflect.TypeFor[dose.Entry]() && !slices.Contains(required, n)
		})
		sort.Strings(always)
		if !slices.Equal(required, always) {
			w.t.Errorf("%s: required %v, always written %v", path, required, always)
		}
	case t.Kind() == reflect.Slice || t.Kind() == reflect.Array:
		w.kind(path, node, "array")
		items, _ := node["items"].(map[string]any)
		if w.file && items == nil { // a list, or one value alone
			for _, n := range node["anyOf"].([]any) {
				if m := n.(map[string]any); m["items"] != nil {
					items = m["items"].(map[string]any)
				}
			}
		}
		w.check(path+"[]", items, t.Elem())
	case t.Kind() == reflect.Map:
		w.kind(path, node, "object")
		sub, _ := node["additionalProperties"].(map[string]any)
		w.check(path+".*", sub, t.Elem())
	case t.Kind() == reflect.String:
		if node["enum"] == nil && node["const"] == nil {
			w.kind(path, node, "string")
		}
	case t.Kind() == reflect.Bool:
		w.kind(path, node, "boolean")
	case t.Kind() == reflect.Int:
		w.kind(path, node, "integer")
	case t.Kind() == reflect.Float64:
		w.kind(path, node, "number")
	default:
		w.t.Errorf("%s: nothing is known of %s", path, t)
	}
}

func (w walker) nullable(node map[string]any) bool {
	if list, ok := node["type"].([]any); ok {
		return slices.Contains(list, any("null"))
	}
	list, _ := node["anyOf"].([]any)
	for _, n := range list {
		if n.(map[string]any)["type"] == "null" {
			return true
		}
	}
	return false
}

func (w walker) kind(path string, node map[string]any, want string) {
	if w.file && want == "array" && node["anyOf"] != nil {
		return
	}
	if list, ok := node["type"].([]any); ok {
		if slices.Contains(list, any(want)) {
			return
		}
	} else if node["type"] == want {
		return
	}
	w.t.Errorf("%s: the schema has %v, the type is %s", path, node["type"], want)
}

// The words that the schema lists are those that the program reads: each is
// tried, and a word between them is refused.
func TestSchemaWords(t *testing.T) {
	file := parsedSchema(t, CaseSchema())
	defs := file.root["$defs"].(map[string]any)
	property := func(section, key string) map[string]any {
		return file.follow(defs[section].(map[string]any)["properties"].(map[string]any)[key].(map[string]any))
	}
	faults := func(c caseTree, field string) (problems []string) {
		in, _, err := dose.ReadCase("case.yaml", c.yaml())
		if err != nil {
			return []string{err.Error()}
		}
		_, err = in.Check()
		es, _ := err.(dose.InputErrors)
		for _, e := range es {
			if strings.HasPrefix(e.Field, field) {
				problems = append(problems, e.Remedy)
			}
		}
		return problems
	}
	for section, keys := range map[string][]string{
		"patient": {"stage", "food_producing"},
		"drug":    {"elimination", "extraction", "activity", "formulation", "margin", "controlled", "active_secretion", "enterohepatic_recycling", "saturable_kinetics"},
		"method":  {"basis", "plan"},
		"product": {"divisible"},
	} {
		for _, key := range keys {
			words := map[string]bool{}
			for _, w := range property(section, key)["enum"].([]any) {
				words[fmt.Sprint(w)] = true
				c := baseCase()
				if key == "divisible" {
					c["product"] = map[string]any{"strength": "250 mg per tablet"}
				}
				c.section(section)[key] = w
				if f := faults(c, section+"."+key); len(f) > 0 && fmt.Sprint(w) != "false" {
					t.Errorf("%s.%s: %v is refused: %s", section, key, w, f)
				}
			}
			// The message for a wrong word lists all the right ones.
			c := baseCase()
			if key == "divisible" {
				c["product"] = map[string]any{"strength": "250 mg per tablet"}
			}
			c.section(section)[key] = "nonsense"
			f := faults(c, section+"."+key)
			if len(f) != 1 {
				t.Errorf("%s.%s: nonsense gives %d faults", section, key, len(f))
				continue
			}
			for _, w := range strings.FieldsFunc(strings.NewReplacer("write ", "", " or ", ", ").Replace(f[0]), func(r rune) bool { return r == ',' || r == ' ' }) {
				if !words[w] {
					t.Errorf("%s.%s: the program reads %q, the schema does not", section, key, w)
				}
			}
		}
	}
	for _, w := range defs["condition"].(map[string]any)["enum"].([]any) {
		c := baseCase()
		c.section("patient")["condition"] = []any{w}
		if f := faults(c, "patient.condition"); len(f) > 0 {
			t.Errorf("condition %v: %s", w, f)
		}
	}
	thresholds := property("method", "thresholds")["properties"].(map[string]any)
	c := baseCase()
	c.section("method")["thresholds"] = map[string]any{"nonsense": 1}
	f := faults(c, "method.thresholds")
	if len(f) != 1 {
		t.Fatalf("a threshold of no name gives %d faults", len(f))
	}
	listed := strings.FieldsFunc(strings.NewReplacer("write ", "", " or ", ", ").Replace(f[0]), func(r rune) bool { return r == ',' || r == ' ' })
	if len(listed) != len(thresholds) {
		t.Errorf("%d thresholds in the program, %d in the schema", len(listed), len(thresholds))
	}
	for _, name := range listed {
		if thresholds[name] == nil {
			t.Errorf("the schema has no threshold %s", name)
		}
	}
}

// The equations that examples name exist.
func TestSchemaExamples(t *testing.T) {
	s := parsedSchema(t, CaseSchema())
	for name, def := range s.root["$defs"].(map[string]any) {
		m := def.(map[string]any)
		for _, e := range examplesOf(m) {
			text := e.(string)
			var err error
			switch name {
			case "mass":
				_, err = metabolic.ParseBodyMass(text)
			case "dose":
				_, err = metabolic.ParseDose(text)
			case "interval":
				_, err = metabolic.ParseInterval(text)
			case "duration":
				_, err = metabolic.ParseDuration(text)
			case "temperature":
				_, err = metabolic.ParseTemperature(text)
			case "percent":
				_, err = metabolic.ParseFraction(text)
			case "liquid":
				_, err = metabolic.ParseLiquid(text)
			}
			if err != nil {
				t.Errorf("%s: %v", name, err)
			}
		}
	}
	method := s.root["$defs"].(map[string]any)["method"].(map[string]any)["properties"].(map[string]any)
	for _, e := range examplesOf(method["equation"].(map[string]any)) {
		if _, ok := metabolic.FindEquation(e.(string)); !ok {
			t.Errorf("no equation %v", e)
		}
	}
}

func examplesOf(m map[string]any) []any { list, _ := m["examples"].([]any); return list }

// What the caller does to the bytes stays with the caller.
func TestSchemasAreCopies(t *testing.T) {
	for _, f := range []func() []byte{CaseSchema, RecordSchema} {
		f()[0] = 'x'
		if f()[0] != '{' {
			t.Error("the schema was changed")
		}
	}
}

package page

import (
	"errors"
	"fmt"
	"reflect"
	"strconv"
	"strings"

	"tayra/dose"
)

// A pair is one field of the form: its path in the case file and what is typed
// there, such as models[0].dose and "10 mg/kg".
type pair [2]string

// maxItems bounds the index of a list in a path. It is above the limit of the
// case file, whose own words then refuse the list.
const maxItems = 60

// listOnOneLine is the list that is typed on one line, with commas; the words of
// any other are ticked one by one.
const listOnOneLine = "intervals"

var (
	entryType  = reflect.TypeFor[dose.Entry]()
	listType   = reflect.TypeFor[[]dose.Entry]()
	namedType  = reflect.TypeFor[[]dose.NamedEntry]()
	errUnknown = errors.New("no such field in a case")
)

// caseOf fills a case with what was typed. Blank fields are left out; blanks
// around a text are not part of it, as in a case file.
func caseOf(pairs []pair) (*dose.CaseInput, error) {
	in := new(dose.CaseInput)
	for _, p := range pairs {
		text := strings.TrimSpace(strings.ReplaceAll(p[1], "\r\n", "\n"))
		if err := put(reflect.ValueOf(in).Elem(), p[0], text); err != nil {
			return nil, fmt.Errorf("%q: %w", p[0], err)
		}
	}
	return in, nil
}

// put sets one entry below v by its path.
func put(v reflect.Value, path, text string) error {
	key, rest := path, ""
	if i := strings.IndexAny(path, ".["); i >= 0 {
		key, rest = path[:i], path[i:]
	}
	f := fieldOf(v, key)
	if !f.IsValid() {
		return errUnknown
	}
	switch {
	case f.Type() == entryType:
		if rest != "" {
			return errUnknown
		}
		if text != "" {
			f.Set(reflect.ValueOf(dose.E(text)))
		}
		return nil
	case f.Type() == listType:
		if rest != "" {
			return errUnknown
		}
		items := []string{text}
		if key == listOnOneLine {
			items = strings.Split(text, ",")
		}
		if text != "" {
			for _, item := range items {
				f.Set(reflect.Append(f, reflect.ValueOf(dose.E(strings.TrimSpace(item)))))
			}
		}
		return nil
	case f.Type() == namedType:
		name, ok := strings.CutPrefix(rest, ".")
		if !ok || name == "" {
			return errUnknown
		}
		if text != "" {
			f.Set(reflect.Append(f, reflect.ValueOf(dose.NamedEntry{Name: dose.E(name), Value: dose.E(text)})))
		}
		return nil
	case f.Kind() == reflect.Struct:
		below, ok := strings.CutPrefix(rest, ".")
		if !ok {
			return errUnknown
		}
		return put(f, below, text)
	case f.Kind() == reflect.Slice && f.Type().Elem().Kind() == reflect.Struct:
		number, below, ok := strings.Cut(strings.TrimPrefix(rest, "["), "].")
		i, err := strconv.Atoi(number)
		if !ok || err != nil || i < 0 || i >= maxItems {
			return errUnknown
		}
		for f.Len() <= i {
			f.Set(reflect.Append(f, reflect.Zero(f.Type().Elem())))
		}
		return put(f.Index(i), below, text)
	}
	return errUnknown
}

// fieldOf is the field of a struct by its key in the case file.
func fieldOf(v reflect.Value, key string) reflect.Value {
	for i := range v.NumField() {
		if k := keyOf(v.Type().Field(i)); k == key && k != "" {
			return v.Field(i)
		}
	}
	return reflect.Value{}
}

// keyOf is the key of a field in the case file, which is also its key in the
// record; "" for what is no part of a case file.
func keyOf(f reflect.StructField) string {
	key, _, _ := strings.Cut(f.Tag.Get("json"), ",")
	if key == "-" || f.Type.Kind() == reflect.Pointer {
		return ""
	}
	return key
}

// pairsOf is the other way: what a case holds, as fields of the form.
func pairsOf(in *dose.CaseInput) []pair { return appendPairs([]pair{}, "", reflect.ValueOf(in).Elem()) }

func appendPairs(out []pair, path string, v reflect.Value) []pair {
	for i := range v.NumField() {
		key := keyOf(v.Type().Field(i))
		if key == "" {
			continue
		}
		f, at := v.Field(i), path+key
		switch {
		case f.Type() == entryType:
			if e := f.Interface().(dose.Entry); e.Given() {
				out = append(out, pair{at, e.Text})
			}
		case f.Type() == listType:
			var items []string
			for _, e := range f.Interface().([]dose.Entry) {
				items = append(items, e.Text)
			}
			if key == listOnOneLine && len(items) > 0 {
				items = []string{strings.Join(items, ", ")}
			}
			for _, item := range items {
				out = append(out, pair{at, item})
			}
		case f.Type() == namedType:
			for _, e := range f.Interface().([]dose.NamedEntry) {
				out = append(out, pair{at + "." + e.Name.Text, e.Value.Text})
			}
		case f.Kind() == reflect.Struct:
			out = appendPairs(out, at+".", f)
		case f.Kind() == reflect.Slice:
			for k := range f.Len() {
				out = appendPairs(out, fmt.Sprintf("%s[%d].", at, k), f.Index(k))
			}
		}
	}
	return out
}

package reports

import (
	"errors"
	"fmt"
	"reflect"
	"strings"

	"tayra/dose"
)

// checkInput holds every text of a case as typed against what can be printed,
// so that an error names the key of the case file and its place in it, and not
// the part of the page where the text would have stood.
func checkInput(in *dose.CaseInput) error {
	if in == nil {
		return nil
	}
	err := checkTexts("", reflect.ValueOf(in).Elem())
	var letter *LetterError
	if errors.As(err, &letter) {
		letter.File = in.File
	}
	return err
}

// checkTexts walks the parts of a case by the names of their keys.
func checkTexts(path string, v reflect.Value) error {
	switch x := v.Interface().(type) {
	case dose.Entry:
		return checkEntry(path, x)
	case dose.NamedEntry:
		if err := checkEntry(path, x.Name); err != nil {
			return err
		}
		return checkEntry(path+"."+x.Name.Text, x.Value)
	}
	switch v.Kind() {
	case reflect.Pointer:
		if !v.IsNil() {
			return checkTexts(path, v.Elem())
		}
	case reflect.Slice:
		for i := range v.Len() {
			at := fmt.Sprintf("%s[%d]", path, i)
			if v.Type().Elem() == reflect.TypeFor[dose.NamedEntry]() {
				at = path // its own name says which
			}
			if err := checkTexts(at, v.Index(i)); err != nil {
				return err
			}
		}
	case reflect.Struct:
		for i := range v.NumField() {
			key, _, _ := strings.Cut(v.Type().Field(i).Tag.Get("json"), ",")
			if key == "-" {
				continue
			}
			at := key
			if path != "" {
				at = path + "." + key
			}
			if err := checkTexts(at, v.Field(i)); err != nil {
				return err
			}
		}
	case reflect.String:
		_, err := CheckText(path, onOneLine(v.String()))
		return err
	}
	return nil
}

func checkEntry(path string, e dose.Entry) error {
	_, err := CheckText(path, onOneLine(e.Text))
	var letter *LetterError
	if errors.As(err, &letter) {
		letter.Line, letter.Column = e.Line, e.Column
	}
	return err
}

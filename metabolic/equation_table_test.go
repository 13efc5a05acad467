package metabolic

import (
	"maps"
	"reflect"
	"testing"
)

// The ids of the defaults, which are looked up without reading the table, are
// those of its column default_for; and a row read alone is the row of the
// table.
func TestDefaultEquationsFollowTheTable(t *testing.T) {
	table := map[string]string{}
	for _, e := range Equations() {
		for _, group := range e.DefaultFor {
			table[group] = e.ID
		}
		alone, ok := FindEquation(e.ID)
		if !ok || !reflect.DeepEqual(alone, e) {
			t.Errorf("%s read alone: %+v, want %+v", e.ID, alone, e)
		}
	}
	if !maps.Equal(table, defaultEquations) {
		t.Errorf("defaults %v, the table has %v", defaultEquations, table)
	}
	for _, id := range []string{"", "id", "kleiber1947,", "kleiber", "Kleiber M 1947"} {
		if e, ok := FindEquation(id); ok {
			t.Errorf("%q found %s", id, e.ID)
		}
	}
}

package species

import _ "embed"

//go:embed data/animal-sources.csv
var animalSourcesTable string

//go:embed data/measured-sources.csv
var measuredSourcesTable string

// Sources returns the citation of a source id of the animal table or of the
// measured rates, such as "GenoIsle2018" or "memory".
func Sources(id string) (citation string, ok bool) {
	// The measured rates' text is the fuller one where both tables have an id.
	for _, table := range []string{measuredSourcesTable, animalSourcesTable} {
		for r := range records(table) {
			if r[0] == id {
				return r[1], true
			}
		}
	}
	return "", false
}

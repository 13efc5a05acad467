package reports

import (
	"bytes"
	_ "embed"
)

//go:embed schema/case.schema.json
var caseSchema []byte

//go:embed schema/record.schema.json
var recordSchema []byte

// CaseSchema is the JSON Schema (draft 2020-12) of the case file, for editors
// and for programs that write cases. It knows the keys, the words and roughly
// the spelling of quantities, in small letters; what a quantity means, whether
// an animal is known and what belongs together only the program says. The
// caller may change the bytes.
func CaseSchema() []byte { return bytes.Clone(caseSchema) }

// RecordSchema is the JSON Schema (draft 2020-12) of the record that [JSON]
// writes. It is open: a later version of the program may add keys, and a reader
// passes over those that it does not know.
func RecordSchema() []byte { return bytes.Clone(recordSchema) }

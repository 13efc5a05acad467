package dose

// TablesDigest names the version of the embedded tables: the first 12 hex
// digits of the SHA-256 over every file of metabolic/data and species/data, in
// order of path. Two worksheets of one digest read the same figures. It is a
// constant, held by a test against the files, so that no start pays for it.
const TablesDigest = "af5db54f4402"

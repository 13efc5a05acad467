// Package species holds the animals: their names and kinship, adult masses
// and measured metabolic rates, what relatives say about the rate of an
// animal that nobody measured, and the drug hazards known for some of them.
//
// The tables are in data, every row with a source; "memory" marks a figure
// that was not read from a source.
package species

// Package dose drafts a starting dose and interval for one animal from a known
// regimen in another, by the scaling of metabolic rate with body mass.
//
// The way of the data: a [CaseInput] holds what was typed, each entry with its
// place; [CaseInput.Check] turns it into a [Case] of typed quantities or into
// [InputErrors]; [Draft] computes a [Worksheet]. A worksheet is data only: the
// package reports draws it and computes nothing.
//
// The package has two layers. compute gives numbers and the slugs of cautions,
// no strings, and is what a batch row pays for; Draft is compute plus the
// steps, texts and sources that stand on paper.
package dose

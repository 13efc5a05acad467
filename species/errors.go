package species

import (
	"fmt"
	"strconv"
	"strings"
)

// NotFoundError says that no row of the animal table has the name.
type NotFoundError struct {
	Words string
	Near  []string // the nearest names, at most five, each one that Find takes
}

func (e *NotFoundError) Error() string {
	if len(e.Near) == 0 {
		return fmt.Sprintf("no animal %s in the table, and no name near it; search by family or order, or give the scientific name",
			strconv.Quote(e.Words))
	}
	return fmt.Sprintf("no animal %s in the table; nearest: %s", strconv.Quote(e.Words), strings.Join(e.Near, ", "))
}

// AmbiguousError says that the words fit several animals, between which
// nothing but the user can choose.
type AmbiguousError struct {
	Words string
	Names []string // all of them, each one that Find takes
}

func (e *AmbiguousError) Error() string {
	const most = 8
	names, more := e.Names, ""
	if len(names) > most {
		names, more = names[:most], fmt.Sprintf(" and %d more", len(e.Names)-most)
	}
	return fmt.Sprintf("%s may be any of %d animals: %s%s; write which", strconv.Quote(e.Words), len(e.Names),
		strings.Join(names, ", "), more)
}

// NameError says that the words hold something that no name has: a control
// or bidirectional character, a letter of another script.
type NameError struct {
	Words   string
	Problem string
}

func (e *NameError) Error() string {
	words := e.Words
	if len(words) > 60 {
		words = words[:60]
	}
	return fmt.Sprintf("%s: %s", strconv.QuoteToASCII(words), e.Problem)
}

// UnavailableError says that an animal has no such basis of metabolic rate.
type UnavailableError struct {
	Basis string // "relatives"
	Why   string // completes the sentence "not available: ..."
}

func (e *UnavailableError) Error() string {
	return fmt.Sprintf("basis %s is not available: %s", e.Basis, e.Why)
}

package species_test

import (
	"errors"
	"fmt"

	"tayra/species"
)

func ExampleFind() {
	a, err := species.Find("Giant Anteater")
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%s, %s, %s\n", a.Name, a.Family, a.Order)
	if m, ok := species.MeasuredRate(a); ok {
		fmt.Printf("measured: %.3g W at %.3g kg (%s)\n", float64(m.Rate), float64(m.Mass), m.Source)
	}

	_, err = species.Find("giant antaeter")
	var missing *species.NotFoundError
	if errors.As(err, &missing) {
		fmt.Println("nearest:", missing.Near[0])
	}
	// Output:
	// Myrmecophaga tridactyla, Myrmecophagidae, Pilosa
	// measured: 14.5 W at 30.6 kg (GenoIsle2018)
	// nearest: giant anteater
}

func ExampleMatchHazards() {
	cat, err := species.Find("cat")
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, m := range species.MatchHazards("acetaminophen tablets", "", cat, "PO") {
		fmt.Printf("%s %s: %s in %s %s, by %s\n", m.ID, m.Severity, m.Drug, m.Rank, m.Taxon, m.Via)
	}
	// Output:
	// h033 contraindicated: paracetamol in family Felidae, by synonym acetaminophen
	// h034 caution: paracetamol in family Otariidae, by synonym acetaminophen
}

func ExampleRelatives() {
	kakapo, err := species.Find("kakapo")
	if err != nil {
		fmt.Println(err)
		return
	}
	p, err := species.Relatives(kakapo, 2, 0)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.3g W, sd of ln %.2f, from %v (%d of %d species)\n", float64(p.Rate), p.SDln, p.Levels, p.N, p.ClassN)
	// Output:
	// 6.24 W, sd of ln 0.25, from [order Psittaciformes] (22 of 1006 species)
}

package metabolic_test

import (
	"fmt"

	"tayra/metabolic"
)

// A quantity is read with its unit, and printed by the rules for paper.
func ExampleParseBodyMass() {
	for _, s := range []string{"41 kg", "350 g", "36-46 kg", "4,2 kg", "41"} {
		mass, err := metabolic.ParseBodyMass(s)
		if err != nil {
			fmt.Println(err)
			continue
		}
		fmt.Println(metabolic.FormatBodyMass(mass))
	}
	// Output:
	// 41 kg
	// 350 g
	// 40.7 kg (estimated, 36 to 46 kg)
	// "4,2 kg" has a comma, which is a decimal mark to some and a mark of thousands to others; write "4.2 kg" or "42 kg", whichever is meant
	// "41" has no unit; write the number with its unit, like "41 kg"
}

func ExampleParseDose() {
	dose, err := metabolic.ParseDose("85 mcg/kg")
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(dose.Low, dose.Unit)
	fmt.Println(metabolic.FormatDosePerKg(dose.Low, dose.Unit, false))
	fmt.Println(metabolic.FormatAmount(dose.Low*4, dose.Unit))
	// Output:
	// 0.085 mg
	// 0.085 mg/kg
	// 340 mcg
}

func ExampleParseInterval() {
	for _, s := range []string{"q12h", "every 3 days", "BID"} {
		interval, err := metabolic.ParseInterval(s)
		if err != nil {
			fmt.Println(err)
			continue
		}
		fmt.Println(metabolic.FormatInterval(interval))
	}
	// Output:
	// every 12 hours
	// every 72 hours (3 days)
	// "BID" is shorthand that is often misread; write q12h if that is meant
}

// What a giant anteater of 41 kg would burn as a placental mammal like any
// other.
func ExampleGroupConstant() {
	line, _ := metabolic.GroupConstant("placental mammal")
	rate, err := line.Rate(41, 0, 0)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(line.Formula())
	fmt.Println(metabolic.FormatPower(rate))
	// Output:
	// B = 70·W^0.75 kcal/day, W in kg
	// 1,130 kcal/day (54.9 W)
}

// A coefficient changes its units together with the exponent of the mass.
func ExampleEquation_Convert() {
	line, _ := metabolic.FindEquation("common_636")
	a, b, err := line.Convert("kg", "kcal/day")
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(line.Formula())
	fmt.Printf("B = %s·W^%s kcal/day, W in kg\n", metabolic.Significant(a, 3), metabolic.Significant(b, 3))
	// Output:
	// B = 63.6·W^0.76 J/h, W in g
	// B = 69.5·W^0.76 kcal/day, W in kg
}

// A bearded dragon at 30 °C, by the constant of reptiles at 37 °C and a Q10 of
// 2.5.
func ExampleEquation_Rate() {
	line, _ := metabolic.GroupConstant("squamate")
	rate, err := line.Rate(0.4, 30, metabolic.Q10Default)
	fmt.Println(metabolic.FormatPower(rate), err)
	_, err = line.Rate(0.4, 45, metabolic.Q10Default)
	fmt.Println(err)
	// Output:
	// 2.65 kcal/day (0.128 W) <nil>
	// equation group_reptile37: a body temperature of 45 °C is outside 10 to 40 °C
}

func ExampleSignificant() {
	fmt.Println(metabolic.Significant(8.1396, 3), metabolic.Significant(1234567, 3), metabolic.Significant(0.50001, 3), metabolic.Significant(2.675, 3))
	// Output: 8.14 1,230,000 0.5 2.68
}

package dose

import "testing"

var (
	benchKinetics = Kinetics{HalfLifeH: 1.3, VolumeLPerKg: 0.3, Bioavailability: 0.8, AbsorptionHalfLifeH: 1. / 3}
	benchDosing   = Dosing{DosePerKg: 8.14, IntervalH: 12}
)

// A curve of 500 even points over five intervals, dose times and peaks added.
func BenchmarkCheckCurve(b *testing.B) {
	for b.Loop() {
		Sample(benchKinetics, benchDosing, 0, 60, 500)
	}
}

// One profile with the time above a target, which is solved by bisection.
func BenchmarkSteadyState(b *testing.B) {
	for b.Loop() {
		if _, err := SteadyState(benchKinetics, benchDosing, 2); err != nil {
			b.Fatal(err)
		}
	}
}

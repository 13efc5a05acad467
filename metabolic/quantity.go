package metabolic

// The physical constants by which units are converted.
const (
	// JoulePerMLO2 is the energy released per millilitre of oxygen used,
	// 20.1 J: the usual oxycalorific equivalent of a mixed diet.
	JoulePerMLO2 = 20.1
	// JoulePerCalorie is the thermochemical calorie, 4.184 J, by definition.
	JoulePerCalorie = 4.184
	// KilogramPerPound is the international avoirdupois pound,
	// 0.45359237 kg, by definition.
	KilogramPerPound = 0.45359237
)

const (
	secondsPerDay  = 86400
	secondsPerHour = 3600
)

// Mass is a body mass in kilograms.
type Mass float64

// Grams gives the mass in grams: 1000·kg.
func (m Mass) Grams() float64 { return float64(m) * 1000 }

// Power is a metabolic rate in watts.
type Power float64

// KcalPerDay gives the rate in kilocalories a day: W·86400/4184.
func (p Power) KcalPerDay() float64 { return float64(p) * secondsPerDay / (1000 * JoulePerCalorie) }

// KJPerDay gives the rate in kilojoules a day: W·86.4.
func (p Power) KJPerDay() float64 { return float64(p) * secondsPerDay / 1000 }

// MLO2PerHour gives the rate in millilitres of oxygen an hour:
// W·3600/20.1, by [JoulePerMLO2].
func (p Power) MLO2PerHour() float64 { return float64(p) * secondsPerHour / JoulePerMLO2 }

// Celsius is a body temperature in degrees Celsius.
type Celsius float64

// Kelvin gives the absolute temperature: °C + 273.15.
func (c Celsius) Kelvin() float64 { return float64(c) + 273.15 }

// Hours is a span of time in hours.
type Hours float64

// AmountUnit says in what an amount of drug is counted.
type AmountUnit uint8

// The two ways of counting a drug. They are never converted into each other.
const (
	Milligram AmountUnit = iota
	InternationalUnit
)

// String gives "mg" or "IU".
func (u AmountUnit) String() string {
	if u == InternationalUnit {
		return "IU"
	}
	return "mg"
}

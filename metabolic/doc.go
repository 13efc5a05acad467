// Package metabolic holds what dose scaling rests on: quantities with their
// units, published equations of metabolic rate, and temperature.
package metabolic

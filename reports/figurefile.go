package reports

import (
	"fmt"
	"math"
	"path/filepath"
	"strings"
	"time"

	"gonum.org/v1/plot"

	"tayra/dose"
	"tayra/metabolic"
	"tayra/species"
)

// Size of a figure in a file of its own, in points.
const (
	figureWidth  = 480
	figureHeight = 320
)

// FigureFormat is the format of a figure by the ending of its file's name:
// svg, png or pdf. Any other ending is an error that says which there are.
func FigureFormat(file string) (string, error) {
	switch f := strings.ToLower(strings.TrimPrefix(filepath.Ext(file), ".")); f {
	case "svg", "png", "pdf":
		return f, nil
	}
	return "", fmt.Errorf("%q does not say the format of a figure; end the name in .svg, .png or .pdf", file)
}

// figureDate is the date in a figure's PDF: a figure has no date of its own,
// and the same figure must have the same bytes.
var figureDate = time.Date(2000, 1, 1, 0, 0, 0, 0, time.UTC)

func figureBytes(p *plot.Plot, title, format string) ([]byte, error) {
	if p == nil {
		return nil, fmt.Errorf("nothing to draw")
	}
	return plotFile(p, figureWidth, figureHeight, format, properties{title: title, producer: producer(), date: figureDate})
}

func producer() string { return "tayra " + dose.Version }

// CurvesFigure is the concentrations of a worksheet as a figure of its own. It
// is an error where the worksheet has none: no half-life, or a stop.
func CurvesFigure(w *dose.Worksheet, format string) ([]byte, error) {
	p := curvesPlot(w)
	if p == nil {
		return nil, fmt.Errorf("no concentration to draw: %s", orDefault(w.CurvesNote, "the worksheet has no draft"))
	}
	return figureBytes(p, "Concentrations", format)
}

// FitFigure is a fitted line as a figure of its own.
func FitFigure(f *dose.FitRecord, format string) ([]byte, error) {
	return figureBytes(fitPlot(f), "Fitted line", format)
}

// RateFigure is the measured animals of an animal's class, the lines used, and
// the animal itself at a mass (and, for an ectotherm, at a temperature).
func RateFigure(a *species.Animal, m metabolic.Mass, t metabolic.Celsius, q10 float64, format string) ([]byte, error) {
	lines := linesOfAnimal(a, t, q10)
	var marks []rateMark
	for _, l := range lines {
		if b := l.at(float64(m)); b > 0 && !math.IsInf(b, 0) {
			marks = append(marks, rateMark{name: animalName(a), mass: float64(m), watt: b, bold: true})
			break
		}
	}
	if x, ok := species.MeasuredRate(a); ok {
		marks = append(marks, rateMark{name: "measured", mass: float64(x.Mass), watt: float64(x.Rate)})
	}
	return figureBytes(ratePlot(a.Class, lines, marks), "Metabolic rates", format)
}

func animalName(a *species.Animal) string {
	if n := a.CommonName(); n != "" {
		return n
	}
	return a.Name
}

func orDefault(s, otherwise string) string {
	if s == "" {
		return otherwise
	}
	return s
}

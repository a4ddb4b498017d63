package main

import (
	"errors"
	"math"
	"strings"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/units"
)

// quantity reads a flag's number and unit, of one of the dimensions, in SI.
func quantity(flag, text, example string, dims ...units.Dimension) (float64, units.Unit, error) {
	v, u, err := units.Parse(text)
	if err != nil {
		return 0, u, numberFault(flag, err)
	}
	for _, d := range dims {
		if u.Dimension == d {
			return v, u, nil
		}
	}
	return 0, u, usageError{flag, text, "is " + article(string(u.Dimension)) + "; write " + article(joinOr(dims)) + ", such as " + example}
}

func article(noun string) string {
	if strings.ContainsRune("aeiou", rune(noun[0])) {
		return "an " + noun
	}
	return "a " + noun
}

func joinOr(dims []units.Dimension) string {
	words := make([]string, len(dims))
	for i, d := range dims {
		words[i] = string(d)
	}
	if len(words) == 1 {
		return words[0]
	}
	return strings.Join(words[:len(words)-1], ", ") + " or " + words[len(words)-1]
}

func numberFault(flag string, err error) error {
	var n *units.NumberError
	if errors.As(err, &n) {
		return usageError{flag, n.Text, n.Reason + "; " + n.Hint}
	}
	return usageError{flag, "", err.Error()}
}

// numbers reads a flag's list of exactly n plain numbers.
func numbers(flag, text string, n int, want string) ([]float64, error) {
	parts := strings.Split(text, ",")
	if len(parts) != n {
		return nil, usageError{flag, text, "is not " + want}
	}
	out := make([]float64, n)
	for i, p := range parts {
		v, err := units.ParseNumber(p, false)
		if err != nil {
			return nil, usageError{flag, text, "is not " + want}
		}
		out[i] = v
	}
	return out, nil
}

// point reads --at.
func point(flag, text string) (exposure.Point, error) {
	v, err := numbers(flag, text, 3, "a point; write X,Y,Z in metres, such as 12,-4.5,10.2")
	if err != nil {
		return exposure.Point{}, err
	}
	return exposure.Point{X: v[0], Y: v[1], Z: v[2]}, nil
}

// direction reads --direction.
func direction(flag, text string) (*exposure.RayDirection, error) {
	const want = "a direction; write AZIMUTH,ELEVATION in degrees, such as 120,-5"
	v, err := numbers(flag, text, 2, want)
	if err != nil {
		return nil, err
	}
	if v[0] < -360 || v[0] > 360 || v[1] < -90 || v[1] > 90 {
		return nil, usageError{flag, text, "is not " + want + " (azimuth -360 to 360, elevation -90 to 90)"}
	}
	return &exposure.RayDirection{AzimuthRad: v[0] * math.Pi / 180, ElevationRad: v[1] * math.Pi / 180}, nil
}

// positive reads a flag's number above zero, as such or with a unit of one of
// the dimensions.
func positive(flag, text, example string, d units.Dimension) (float64, error) {
	v, err := units.ParseNumber(text, false)
	if err != nil {
		q, _, qerr := quantity(flag, text, example, d)
		if qerr != nil {
			return 0, qerr
		}
		v = q
	}
	if v <= 0 {
		return 0, usageError{flag, text, "is not above 0; write one such as " + example}
	}
	return v, nil
}

// ground reads --ground; nil leaves the site table's own.
func ground(flag, text string) (*exposure.Ground, error) {
	method, figure, hasFigure := strings.Cut(text, "=")
	switch {
	case text == "":
		return nil, nil
	case text == "none":
		return &exposure.Ground{Method: exposure.GroundNone, Factor: 1}, nil
	case text == "fresnel":
		return &exposure.Ground{Method: exposure.GroundFresnel, Factor: 1}, nil
	case method == "factor" && hasFigure:
		v, err := units.ParseNumber(figure, false)
		if err != nil || v < 1 || v > 2 {
			return nil, usageError{flag, text, "has no field factor from 1 to 2; write factor=1.6 (typical worst case) or factor=2 (full reflection)"}
		}
		return &exposure.Ground{Method: exposure.GroundFactor, Factor: v}, nil
	case method == "factor":
		return nil, usageError{flag, text, "has no figure; write factor=1.6 or factor=2"}
	}
	return nil, usageError{flag, text, "is not a ground; write none, factor=1.6 or fresnel"}
}

package spec

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// A dimension says in which units a limit may be written. Numbers without a unit are SI
// units and plain ratios.
type dimension int

const (
	plain dimension = iota // in the unit of the signal, whatever that is
	fraction
	ratio
	seconds
	secondsSquared
	radians
	frequency
)

// unit returns the unit in which numbers of the dimension stand without one.
func (d dimension) unit() string {
	return [...]string{"", "", "", "s", "s²", "rad", "rad/s"}[d]
}

// units lists what may follow a number, with the factor to the SI unit.
var units = map[dimension]map[string]float64{
	plain:          {"": 1},
	fraction:       {"": 1, "%": 0.01},
	ratio:          {"": 1},
	seconds:        {"": 1, "s": 1, "ms": 1e-3, "us": 1e-6, "µs": 1e-6, "ns": 1e-9, "min": 60, "h": 3600},
	secondsSquared: {"": 1, "s²": 1, "s^2": 1},
	radians:        {"": 1, "rad": 1, "deg": math.Pi / 180, "°": math.Pi / 180},
	frequency:      {"": 1, "rad/s": 1, "Hz": 2 * math.Pi},
}

// parseQuantity reads "15 %", "2 s", "6 dB" into the SI unit of the dimension. Where the
// factor is a power of ten the digits move, so that "15 %" is exactly the number 0.15.
func parseQuantity(text string, d dimension) (float64, error) {
	text = strings.TrimSpace(text)
	end := len(text)
	for end > 0 {
		if _, err := strconv.ParseFloat(text[:end], 64); err == nil || isRange(err) {
			break
		}
		end--
	}
	digits, unit := text[:end], strings.TrimSpace(text[end:])
	if digits == "" {
		return 0, fmt.Errorf("%q does not start with a number", text)
	}
	x, err := strconv.ParseFloat(digits, 64)
	if err != nil || math.IsNaN(x) || math.IsInf(x, 0) {
		return 0, fmt.Errorf("%q is not a finite number", digits)
	}
	if d == ratio && unit == "dB" {
		return math.Pow(10, x/20), nil
	}
	factor, ok := units[d][unit]
	if !ok {
		return 0, fmt.Errorf("unit %q does not fit; expected %s", unit, unitList(d))
	}
	if factor < 1 {
		if e := math.Round(math.Log10(factor)); math.Abs(math.Log10(factor)-e) < 1e-12 && !strings.ContainsAny(digits, "eExXpP_") {
			return strconv.ParseFloat(digits+"e"+strconv.Itoa(int(e)), 64)
		}
	}
	return x * factor, nil
}

func isRange(err error) bool {
	e, ok := err.(*strconv.NumError)
	return ok && e.Err == strconv.ErrRange
}

func unitList(d dimension) string {
	switch d {
	case fraction:
		return "a fraction or %"
	case ratio:
		return "a ratio or dB"
	case seconds:
		return "s, ms, µs, ns, min or h"
	case secondsSquared:
		return "s²"
	case radians:
		return "rad or deg"
	case frequency:
		return "rad/s or Hz"
	}
	return "a number without a unit"
}

// formatNumber writes x so that it reads back as the same float64.
func formatNumber(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }

// withUnit appends the unit, if there is one.
func withUnit(number, unit string) string {
	if unit == "" {
		return number
	}
	return number + " " + unit
}

package report

import (
	"math"
	"strconv"
	"strings"

	"strainledger/energy"
)

// missing stands for a number that does not exist; missingMeans explains it.
const (
	missing      = "–"
	missingMeans = "– not available"
)

// text returns the number as people are shown it, without its unit: counts in full with
// grouped digits, shares in percent, everything else with five significant digits.
func (k unitKind) text(n energy.Number) string {
	if !n.Exists() {
		return missing
	}
	switch k {
	case inWords:
		return strconv.FormatFloat(float64(n), 'f', -1, 64)
	case inCounts:
		return grouped(n)
	case inShares:
		return percent(n)
	case inRatios:
		return ratio(n)
	}
	return significant(n)
}

// significant returns five significant digits, and all digits before the point
// where these are six: 0.0012346, 182.30, 123457, 1.2346e6, 1.2346e-9.
func significant(n energy.Number) string {
	const digits = 5
	if n == 0 {
		return "0"
	}
	text := strconv.FormatFloat(float64(n), 'e', digits-1, 64)
	mark := strings.IndexByte(text, 'e')
	if mark < 0 {
		return text // not finite
	}
	exponent, _ := strconv.Atoi(text[mark+1:])
	if exponent >= -3 && exponent < 6 {
		return strconv.FormatFloat(float64(n), 'f', max(0, digits-1-exponent), 64)
	}
	return text[:mark+1] + strconv.Itoa(exponent)
}

// plain returns the shortest text that reads back, for numbers that somebody has stated.
func plain(n energy.Number) string {
	if !n.Exists() {
		return missing
	}
	if size := math.Abs(float64(n)); n == 0 || size >= 1e-3 && size < 1e7 {
		return strconv.FormatFloat(float64(n)+0, 'f', -1, 64)
	}
	mantissa, exponent, isPower := strings.Cut(strconv.FormatFloat(float64(n), 'e', -1, 64), "e")
	if !isPower {
		return mantissa // not finite
	}
	power, _ := strconv.Atoi(exponent)
	return mantissa + "e" + strconv.Itoa(power)
}

// brief returns the shortest text where it is no longer than five significant digits.
func brief(n energy.Number) string {
	if !n.Exists() {
		return missing
	}
	if text := plain(n); len(text) <= len(significant(n)) {
		return text
	}
	return significant(n)
}

// grouped returns a whole number with its digits in groups of three: 1,234,567.
func grouped(n energy.Number) string {
	text := strconv.FormatFloat(math.Abs(float64(n)), 'f', -1, 64)
	for at := len(text) - 3; at > 0; at -= 3 {
		text = text[:at] + "," + text[at:]
	}
	if n < 0 {
		return "-" + text
	}
	return text
}

// percent returns a share in percent with two decimals. What is little but not 0, or
// nearly but not all, does not round to 0 or 100.
func percent(n energy.Number) string {
	text := strconv.FormatFloat(100*float64(n), 'f', 2, 64)
	switch {
	case math.Abs(float64(n)) >= 1000:
		return significant(100 * n) // parts of other signs nearly cancel in the whole
	case n == 0:
		return "0"
	case text == "0.00":
		return "<0.01"
	case text == "-0.00":
		return ">-0.01"
	case text == "100.00" && n < 1:
		return ">99.99"
	}
	return text
}

// ratio returns five significant digits; a number that is not 1 does not round to it.
func ratio(n energy.Number) string {
	text := significant(n)
	switch {
	case text != "1.0000" || n == 1:
		return text
	case n > 1:
		return ">1.0000"
	}
	return "<1.0000"
}

// coordinates returns a function that prints the coordinates of the given places alike,
// with the decimals that give the largest of them five significant digits.
func coordinates(places []*energy.Vector) func(float64) string {
	var largest float64
	for _, place := range places {
		if place != nil {
			largest = max(largest, math.Abs(place[0]), math.Abs(place[1]), math.Abs(place[2]))
		}
	}
	exponent := 0
	if largest > 0 {
		exponent = int(math.Floor(math.Log10(largest)))
	}
	if exponent < -3 || exponent > 8 {
		return func(x float64) string { return significant(energy.Number(x)) }
	}
	return func(x float64) string {
		text := strconv.FormatFloat(x, 'f', max(0, 4-exponent), 64)
		if strings.Trim(text, "-0.") == "" {
			return strings.TrimPrefix(text, "-")
		}
		return text
	}
}

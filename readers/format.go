package readers

import (
	"errors"
	"strconv"
	"strings"
)

// formatCount writes a whole number.
func formatCount(n int64) string { return strconv.FormatInt(n, 10) }

// counted writes a number of things.
func counted(n int, thing string) string {
	if n == 1 {
		return "1 " + thing
	}
	return strconv.Itoa(n) + " " + thing + "s"
}

// formatNumber writes the shortest text that reads back to the number.
func formatNumber(value float64) string { return strconv.FormatFloat(value, 'g', -1, 64) }

// formatNumbers lists numbers, of many the first and the last ones.
func formatNumbers(values []float64) string {
	const most = 12
	words := make([]string, 0, most+1)
	for i, value := range values {
		switch {
		case len(values) > most && i == most/2:
			words = append(words, "...")
		case len(values) > most && i > most/2 && i < len(values)-most/2:
		default:
			words = append(words, formatNumber(value))
		}
	}
	if len(words) == 0 {
		return "none: the files state no time"
	}
	return strings.Join(words, ", ")
}

// kindOf returns which of the reasons stands behind an error.
func kindOf(err error) error {
	for _, kind := range []error{ErrTruncated, ErrUnsupported, ErrLimit, ErrReference} {
		if errors.Is(err, kind) {
			return kind
		}
	}
	return ErrMalformed
}

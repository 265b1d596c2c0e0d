package report

import (
	"math"
	"testing"

	"strainledger/energy"
)

func TestNumbersForPeople(t *testing.T) {
	none := energy.None
	for _, test := range []struct {
		kind unitKind
		n    energy.Number
		want string
	}{
		{inEnergy, none, "–"},
		{inEnergy, 0, "0"},
		{inEnergy, energy.Number(math.Copysign(0, -1)), "0"},
		{inEnergy, 201.16420518, "201.16"},
		{inEnergy, -201.16420518, "-201.16"},
		{inEnergy, 1, "1.0000"},
		{inEnergy, 9.99996, "10.000"},
		{inEnergy, 99999.6, "100000"},
		{inEnergy, 123456.7, "123457"},
		{inEnergy, 999949, "999949"},
		{inEnergy, 999999.4, "1.0000e6"},
		{inEnergy, 999999.6, "1.0000e6"},
		{inEnergy, 1234567, "1.2346e6"},
		{inEnergy, 0.00123456, "0.0012346"},
		{inEnergy, 0.000999999, "0.0010000"},
		{inEnergy, 0.00099994, "9.9994e-4"},
		{inEnergy, 1.25e-300, "1.2500e-300"},
		{inEnergy, energy.Number(math.Inf(1)), "+Inf"},

		{inCounts, 0, "0"},
		{inCounts, 999, "999"},
		{inCounts, 1000, "1,000"},
		{inCounts, 1234567, "1,234,567"},
		{inCounts, -1234, "-1,234"},
		{inCounts, 9007199254740991, "9,007,199,254,740,991"},
		{inCounts, none, "–"},

		{inShares, 0, "0"},
		{inShares, 0.49182, "49.18"},
		{inShares, 1, "100.00"},
		{inShares, 0.999999, ">99.99"},
		{inShares, 0.00001, "<0.01"},
		{inShares, -0.00001, ">-0.01"},
		{inShares, 0.00005, "0.01"},
		{inShares, 1.00001, "100.00"},
		{inShares, 999.99, "99999.00"},
		{inShares, 12345.678, "1.2346e6"},
		{inShares, -12345.678, "-1.2346e6"},

		{inRatios, 1, "1.0000"},
		{inRatios, 1.0000033, ">1.0000"},
		{inRatios, 0.9999999, "<1.0000"},
		{inRatios, 1.0001, "1.0001"},
		{inRatios, 0.99994, "0.99994"},

		{inWords, 9007199254740991, "9007199254740991"},
		{inWords, 0, "0"},
	} {
		if got := test.kind.text(test.n); got != test.want {
			t.Errorf("kind %d: %v is shown as %q, want %q", test.kind, float64(test.n), got, test.want)
		}
	}
}

func TestPlainReadsBack(t *testing.T) {
	for _, test := range []struct {
		n    energy.Number
		want string
	}{
		{70000, "70000"}, {0.33, "0.33"}, {2.1e11, "2.1e11"}, {7.85e-6, "7.85e-6"}, {0, "0"}, {-0.001, "-0.001"},
		{9999999, "9999999"}, {1e7, "1e7"}, {0.000999, "9.99e-4"}, {energy.None, "–"}, {energy.Number(math.Inf(-1)), "-Inf"},
	} {
		if got := plain(test.n); got != test.want {
			t.Errorf("%v is shown as %q, want %q", float64(test.n), got, test.want)
		}
	}
}

func TestCoordinatesShareDecimals(t *testing.T) {
	for _, test := range []struct {
		places []*energy.Vector
		x      float64
		want   string
	}{
		{[]*energy.Vector{{8.5125, 0, 0}, nil, {0, -123.4, 0}}, 8.5125, "8.51"},
		{[]*energy.Vector{{8.5125, 0, 0}}, 8.5125, "8.5125"},
		{[]*energy.Vector{{8.5125, 0, 0}}, -1e-12, "0.0000"},
		{[]*energy.Vector{{99999, 0, 0}}, -2.4, "-2"},
		{[]*energy.Vector{{0, 0, 123456789}}, 123456789, "123456789"},
		{[]*energy.Vector{{0, 0, 1e12}}, 1e12, "1.0000e12"},
		{[]*energy.Vector{{0, 0, 1e-6}}, 1e-6, "1.0000e-6"},
		{[]*energy.Vector{{0.0025, 0, 0}}, 0.0025, "0.0025000"},
		{[]*energy.Vector{{0, 0, 0}}, 0, "0.0000"},
	} {
		if got := coordinates(test.places)(test.x); got != test.want {
			t.Errorf("%v beside %v is shown as %q, want %q", test.x, test.places, got, test.want)
		}
	}
}

func TestBriefIsNeverLonger(t *testing.T) {
	for _, test := range []struct {
		n    energy.Number
		want string
	}{
		{20, "20"}, {-0.125, "-0.125"}, {1.0 / 3, "0.33333"}, {1e-12, "1e-12"}, {17943.437251509775, "17943"}, {energy.None, "–"},
	} {
		if got := brief(test.n); got != test.want {
			t.Errorf("%v is shown as %q, want %q", float64(test.n), got, test.want)
		}
	}
}

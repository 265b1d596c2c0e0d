package readers

import (
	"math"
	"slices"
	"strconv"
	"strings"
)

// A Choice is a way to pick one state of several.
type Choice uint8

// The choices of a state.
const (
	Last Choice = iota
	First
	AtNumber
)

// A Time says which state is read. The zero value is the last.
type Time struct {
	Choice Choice
	Number float64 // for AtNumber; must agree with a state's time to 1e-9 of it
}

// pick returns the index of the state among the times, which rise.
func (t Time) pick(times []float64) (int, error) {
	switch {
	case t.Choice == First:
		return 0, nil
	case t.Choice == Last:
		return len(times) - 1, nil
	}
	for i, time := range times {
		if math.Abs(time-t.Number) <= 1e-9*math.Abs(t.Number) {
			return i, nil
		}
	}
	return 0, &reason{ErrTime, "found no state at time " + formatNumber(t.Number) + ", need one of " + formatNumbers(times)}
}

// pickStep chooses the state of a file that holds several: arrays carry TimeStep, and
// the data set lists the times in the order of the steps. It returns the times in
// rising order and the time that was chosen, NaN without steps.
func (x *xmlFile) pickStep(t Time) (times []float64, chosen float64, err error) {
	text, ok := x.data.get("TimeValues")
	if !ok {
		return nil, math.NaN(), nil
	}
	steps := map[float64]int{}
	for step, word := range strings.Fields(text) {
		time, err := parseFloat(word)
		if err != nil || math.IsNaN(time) {
			return nil, 0, attributeError(x.data, "TimeValues", text, "numbers")
		}
		if _, isKnown := steps[time]; !isKnown {
			times = append(times, time)
		}
		steps[time] = step // of one time twice the later counts, as after a restart
	}
	if len(times) == 0 {
		return nil, math.NaN(), nil
	}
	slices.Sort(times)
	i, err := t.pick(times)
	if err != nil {
		return nil, 0, err
	}
	x.step = strconv.Itoa(steps[times[i]])
	return times, times[i], nil
}

package energy

// A shortSum adds doubles as exactly as a [Sum] does, in 48 bytes instead of 1 KiB, where
// the terms are of about one size: it holds the two of a Sum's digits that come first,
// and the others in a Sum that exists only where there are any. The zero value is an
// empty sum.
type shortSum struct {
	digit  [2]digit
	number [2]int8 // of the digits, from 1; 0: not used yet
	rest   *Sum
}

// add adds one finite value.
func (s *shortSum) add(value float64) {
	t := termOf(value)
	number := int8(t.number() + 1)
	if number == s.number[0] {
		s.digit[0].add(t.digit())
		return
	}
	s.addDigit(number, t.digit())
}

// addDigit adds to the digit of a number from 1.
func (s *shortSum) addDigit(number int8, term digit) {
	for i := range s.number {
		if s.number[i] == 0 {
			s.number[i] = number
		}
		if s.number[i] == number {
			s.digit[i].add(term)
			return
		}
	}
	if s.rest == nil {
		s.rest = new(Sum)
	}
	s.rest.digit[number-1].add(term)
}

// join adds another sum.
func (s *shortSum) join(other *shortSum) {
	for i, number := range other.number {
		if number != 0 {
			s.addDigit(number, other.digit[i])
		}
	}
	if other.rest == nil {
		return
	}
	if s.rest == nil {
		s.rest = new(Sum)
	}
	s.rest.Join(other.rest)
}

// addTo adds the sum to a long one.
func (s *shortSum) addTo(whole *Sum) {
	for i, number := range s.number {
		if number != 0 {
			whole.digit[number-1].add(s.digit[i])
		}
	}
	if s.rest != nil {
		whole.Join(s.rest)
	}
}

// float64 returns the sum, rounded once to the nearest double.
func (s *shortSum) float64() float64 {
	var whole Sum
	s.addTo(&whole)
	return whole.Float64()
}

package energy

import (
	"math"
	"math/big"
	"math/bits"
)

// A Sum adds doubles exactly, so that neither the order of the terms nor the way they
// were shared among workers can be seen in the result. It is a superaccumulator: 64
// overlapping two's-complement digits of 128 bits, digit i in units of 2^(32i-1075),
// 1 KiB in all. A digit takes 2^43 terms before it could overflow. The zero value is
// an empty sum.
//
// Kulisch 2013, Computer Arithmetic and Validity, ch. 8 (long accumulator); the
// overlapping digits are our own choice, so that no carry has to run.
type Sum struct {
	digit [64]digit
}

// A digit is 128 bits in two's complement.
type digit struct{ low, high uint64 }

// add adds another digit.
func (d *digit) add(term digit) {
	var carry uint64
	d.low, carry = bits.Add64(d.low, term.low, 0)
	d.high, _ = bits.Add64(d.high, term.high, carry)
}

// A term is one double: ±mantissa × 2^(exponent-1075).
type term struct {
	mantissa uint64
	exponent int    // from 1
	sign     uint64 // all bits set: negative
}

// termOf takes a finite value apart.
func termOf(value float64) term {
	bits64 := math.Float64bits(value)
	exponent, mantissa := int(bits64>>52)&0x7ff, bits64&(1<<52-1)
	if exponent == 0 {
		exponent = 1 // subnormal: same unit, no hidden bit
	} else {
		mantissa |= 1 << 52
	}
	return term{mantissa, exponent, uint64(int64(bits64) >> 63)}
}

// number returns which digit takes the term.
func (t term) number() int { return t.exponent >> 5 & 63 }

// digit returns the term in two's complement, in units of its digit.
func (t term) digit() digit {
	shift := uint(t.exponent & 31)
	low, carry := bits.Add64(t.mantissa<<shift^t.sign, t.sign&1, 0)
	return digit{low, (t.mantissa>>(64-shift) ^ t.sign) + carry}
}

// Add adds one finite value.
func (s *Sum) Add(value float64) {
	t := termOf(value)
	s.digit[t.number()].add(t.digit())
}

// AddAll adds finite values.
func (s *Sum) AddAll(values []float64) {
	for _, value := range values {
		s.Add(value)
	}
}

// Join adds another sum.
func (s *Sum) Join(other *Sum) {
	for i := range s.digit {
		s.digit[i].add(other.digit[i])
	}
}

// Subtract takes another sum away.
func (s *Sum) Subtract(other *Sum) {
	for i := range s.digit {
		d, o := &s.digit[i], &other.digit[i]
		var borrow uint64
		d.low, borrow = bits.Sub64(d.low, o.low, 0)
		d.high, _ = bits.Sub64(d.high, o.high, borrow)
	}
}

// Float64 returns the sum, rounded once to the nearest double, ties to even.
func (s *Sum) Float64() float64 {
	value, _ := s.exact().Float64()
	return value
}

// exact returns the sum without rounding.
func (s *Sum) exact() *big.Float {
	var total, term big.Int
	for i := len(s.digit) - 1; i >= 0; i-- {
		total.Lsh(&total, 32)
		d := &s.digit[i]
		if d.low|d.high == 0 {
			continue
		}
		term.SetInt64(int64(d.high))
		term.Lsh(&term, 64)
		total.Add(&total, &term)
		total.Add(&total, term.SetUint64(d.low))
	}
	// A precision of all its bits makes the conversion exact.
	exact := new(big.Float).SetPrec(uint(max(total.BitLen(), 1))).SetInt(&total)
	return exact.SetMantExp(exact, -1075)
}

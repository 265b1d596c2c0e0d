package readers

import (
	"bytes"
	"math/rand/v2"
	"regexp"
	"testing"
)

// hostileNumbers are put in place of numbers of a header.
var hostileNumbers = []string{"0", "1", "-1", "2", "3", "5", "1000", "65536", "2147483647", "2147483648", "4294967295",
	"9223372036854775807", "18446744073709551616", "-9223372036854775808", "1e3", "nan", "", "x"}

var numberWord = regexp.MustCompile(`-?[0-9]+`)

// Every sample of one folder after the other is damaged: a number replaced, a piece cut
// out or doubled, bits turned, the end cut off. No result may break a promise.
func TestDamagedSamples(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	damages := 25
	if testing.Short() {
		damages = 5
	}
	for _, pattern := range []string{
		"vtu-encodings/bar-*.vtu", "vtu-encodings/blocks-*.vtu", "special/*.vtu", "types/*", "cells/poly*", "cells/linear*",
		"cells/type72*", "cells/type79*", "cells/bezier*", "cells/lagrange*", "xml-structured/*", "legacy/*",
	} {
		t.Run(pattern, func(t *testing.T) {
			for _, seed := range samplesOf(t, pattern) {
				for range damages {
					checkPromises(t, damage(seed, random))
				}
			}
		})
	}
}

// damage returns a damaged copy.
func damage(seed []byte, random *rand.Rand) []byte {
	data := bytes.Clone(seed)
	for range 1 + random.IntN(2) {
		at := random.IntN(len(data) + 1)
		switch random.IntN(6) {
		case 0, 1, 2: // another number
			words := numberWord.FindAllIndex(data, -1)
			if len(words) > 0 {
				word := words[random.IntN(len(words))]
				number := hostileNumbers[random.IntN(len(hostileNumbers))]
				data = append(append(bytes.Clone(data[:word[0]]), number...), data[word[1]:]...)
			}
		case 3: // a stretch less
			behind := min(len(data), at+random.IntN(40))
			data = append(bytes.Clone(data[:at]), data[behind:]...)
		case 4: // a stretch twice
			behind := min(len(data), at+random.IntN(40))
			data = append(bytes.Clone(data[:behind]), data[at:]...)
		case 5: // another byte
			if at < len(data) {
				data[at] ^= byte(1 << random.IntN(8))
			}
		}
	}
	if random.IntN(8) == 0 {
		data = data[:random.IntN(len(data)+1)]
	}
	return data
}

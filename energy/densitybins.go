package energy

import "math"

// binsPerOctave is the number of bins of density between one and twice as much.
const binsPerOctave = 32

// binWidth is the width of a bin, as a share of the densities in it: 2.2 %.
var binWidth = math.Exp2(1./binsPerOctave) - 1

// binStarts holds the mantissas (the 52 bits) at which the bins of an octave begin,
// and behind them one that no mantissa reaches. binOf holds for each first eight bits
// of a mantissa the bin of the least such; a bin is wider than that, so that the right
// one is it or the next.
var binStarts, binOf = func() (starts [binsPerOctave + 1]uint64, of [256]uint8) {
	for i := range binsPerOctave {
		starts[i] = math.Float64bits(math.Exp2(float64(i)/binsPerOctave)) & (1<<52 - 1)
	}
	starts[binsPerOctave] = 1 << 52
	bin := uint8(0)
	for i := range of {
		for starts[bin+1] <= uint64(i)<<44 {
			bin++
		}
		of[i] = bin
	}
	return starts, of
}()

// densityBins gathers volume and energy by density, in logarithmic bins that are the
// same for every model, so that those of parts join exactly. Bins take room only in
// octaves in which there is a density.
type densityBins struct {
	first   int       // binary exponent of octaves[0], as a double stores it
	octaves []*octave // nil where there is no density
	rest    bin       // densities of 0 and below
}

type octave [binsPerOctave]bin

type bin struct{ volume, energy shortSum }

// addAll adds cells.
func (b *densityBins) addAll(densities, volumes, energies []float64) {
	for i, density := range densities {
		into := b.binOf(density)
		into.volume.add(volumes[i])
		into.energy.add(energies[i])
	}
}

// binOf returns the bin of a density. One that is too small for a double of full
// precision counts as 0.
func (b *densityBins) binOf(density float64) *bin {
	bits := math.Float64bits(density)
	exponent, mantissa := int(bits>>52), bits&(1<<52-1)
	if exponent == 0 || exponent >= 0x7ff { // the sign is the bit above the exponent
		return &b.rest
	}
	number := binOf[mantissa>>44]
	if binStarts[number+1] <= mantissa {
		number++
	}
	if at := exponent - b.first; uint(at) < uint(len(b.octaves)) && b.octaves[at] != nil {
		return &b.octaves[at][number]
	}
	return &b.newOctave(exponent)[number]
}

// newOctave returns the bins of one binary exponent, and makes them where there are
// none.
func (b *densityBins) newOctave(exponent int) *octave {
	at := exponent - b.first
	switch {
	case len(b.octaves) == 0:
		b.first, at = exponent, 0
		b.octaves = []*octave{nil}
	case at < 0:
		b.octaves = append(make([]*octave, -at), b.octaves...)
		b.first, at = exponent, 0
	case at >= len(b.octaves):
		b.octaves = append(b.octaves, make([]*octave, at+1-len(b.octaves))...)
	}
	if b.octaves[at] == nil {
		b.octaves[at] = new(octave)
	}
	return b.octaves[at]
}

// join adds the bins of other cells.
func (b *densityBins) join(other *densityBins) {
	b.rest.join(&other.rest)
	for i, from := range other.octaves {
		if from == nil {
			continue
		}
		to := b.newOctave(other.first + i)
		for k := range from {
			to[k].join(&from[k])
		}
	}
}

func (b *bin) join(other *bin) {
	b.volume.join(&other.volume)
	b.energy.join(&other.energy)
}

// falling returns the bins of the octaves there are, the densest first.
func (b *densityBins) falling() []*bin {
	var list []*bin
	for i := len(b.octaves) - 1; i >= 0; i-- {
		if b.octaves[i] == nil {
			continue
		}
		for k := binsPerOctave - 1; k >= 0; k-- {
			list = append(list, &b.octaves[i][k])
		}
	}
	return append(list, &b.rest)
}

// sums returns the volume and the energy of all bins.
func (b *densityBins) sums() (volume, energy Sum) {
	for _, bin := range b.falling() {
		bin.volume.addTo(&volume)
		bin.energy.addTo(&energy)
	}
	return volume, energy
}

package energy

import "math"

// A Concentration says how unevenly the energy lies in the volume, from the curve of
// energy over volume, the densest first. Densities are told apart by bins: BinWidth is
// the error that this leaves in each density, as a share of it; that of the other
// numbers is of second order, since within a bin the curve is taken for straight.
//
//	Top1 …           share of the energy in the densest 1, 5, 10, 25 % of the volume
//	Gini             0: the same density everywhere, to 1: all in one point
//	EffectiveVolume  (Σ wV)² / (ΣV · Σ w²V), the share of the volume that would hold the
//	                 energy at one density; 1: the same density everywhere. It falls
//	                 without end as a mesh is refined at a crack
//	Curve            [volume share, energy share] from [0, 0] to [1, 1]
//
// Sources: Lorenz 1905, Gini 1912; the participation ratio of Bell and Dean 1970 (from
// memory).
type Concentration struct {
	Top1            Number       `json:"top_1"`
	Top5            Number       `json:"top_5"`
	Top10           Number       `json:"top_10"`
	Top25           Number       `json:"top_25"`
	Gini            Number       `json:"gini"`
	EffectiveVolume Number       `json:"effective_volume"`
	Curve           [][2]float64 `json:"curve"`
	BinWidth        Number       `json:"bin_width"`
}

// curveTolerance is how far a point of the curve may lie beside the line between its
// neighbours to be left out of the ledger: far less than bins leave in doubt.
const curveTolerance = 1e-5

// concentration returns the measures of an account's bins, nil where there is no energy
// to be concentrated.
func (b *densityBins) concentration() *Concentration {
	var volume, energy, squares float64
	curve := [][2]float64{{}}
	for _, bin := range b.falling() {
		binVolume, binEnergy := bin.volume.float64(), bin.energy.float64()
		if binVolume == 0 {
			continue
		}
		volume += binVolume
		energy += binEnergy
		squares += float64(binEnergy*binEnergy) / binVolume
		curve = append(curve, [2]float64{volume, energy})
	}
	if !(volume > 0 && energy > 0) {
		return nil
	}
	for i := range curve {
		curve[i][0] /= volume
		curve[i][1] /= energy
	}
	area := 0.0
	for i := 1; i < len(curve); i++ {
		area += float64((curve[i][0] - curve[i-1][0]) * (curve[i][1] + curve[i-1][1]) / 2)
	}
	return &Concentration{
		Top1: topShare(curve, 0.01), Top5: topShare(curve, 0.05), Top10: topShare(curve, 0.1), Top25: topShare(curve, 0.25),
		// The curve of rising density has the area 1 - area below it.
		Gini:            Number(2*area - 1),
		EffectiveVolume: Number(float64(energy*energy) / float64(volume*squares)),
		Curve:           thinned(curve, curveTolerance),
		BinWidth:        Number(binWidth),
	}
}

// topShare returns the energy share of a volume share on the curve.
func topShare(curve [][2]float64, volume float64) Number {
	for i := 1; i < len(curve); i++ {
		if low, high := curve[i-1], curve[i]; volume <= high[0] {
			return Number(between(low, high, volume))
		}
	}
	return 1
}

// between returns the height of the line between two points of the curve.
func between(low, high [2]float64, volume float64) float64 {
	return low[1] + float64((high[1]-low[1])*((volume-low[0])/(high[0]-low[0])))
}

// thinned leaves out points of the curve that lie within the tolerance of the line
// between those that stay.
func thinned(curve [][2]float64, tolerance float64) [][2]float64 {
	kept := curve[:1:1]
	for last := 0; last < len(curve)-1; {
		next := last + 1
		for next+1 < len(curve) && isStraight(curve[last:next+2], tolerance) {
			next++
		}
		kept = append(kept, curve[next])
		last = next
	}
	return kept
}

// isStraight reports whether all points lie within the tolerance of the line from the
// first to the last.
func isStraight(points [][2]float64, tolerance float64) bool {
	first, last := points[0], points[len(points)-1]
	for _, p := range points[1 : len(points)-1] {
		if math.Abs(p[1]-between(first, last, p[0])) > tolerance {
			return false
		}
	}
	return true
}

package energy

import (
	"cmp"
	"math"
	"slices"
)

// The states of a hotspot against the baseline.
const (
	Kept  = "kept"  // matched within a quarter of the tolerance
	Moved = "moved" // matched within the tolerance
	New   = "new"   // in the run alone
	Gone  = "gone"  // in the baseline alone
)

// A HotspotMatch is a hotspot of the baseline, one of a run, or both where they are one
// and the same. Ranks and Distance, which is between the peaks, are None where there is
// no such hotspot.
type HotspotMatch struct {
	BaselineRank Number `json:"baseline_rank"`
	Run          int    `json:"run"` // number of the run, from 1
	Rank         Number `json:"rank"`
	State        string `json:"state"`
	Distance     Number `json:"distance"`
}

// matchHotspots pairs hotspots of a run with those of the baseline, one region at a time
// and so that the sum of the distances is least, where a pair that does not match costs
// the tolerance (methods: optimal assignment; C-06). Without a place there is no match.
// The list goes by the rank in the baseline; then come those that the run alone has.
func matchHotspots(baseline, run []Hotspot, number int, tolerance float64) []HotspotMatch {
	var matches []HotspotMatch
	ofBaseline, ofRun := hotspotsByRegion(baseline), hotspotsByRegion(run)
	for region, old := range ofBaseline {
		matches = append(matches, matchRegion(old, ofRun[region], tolerance)...)
	}
	for region, fresh := range ofRun {
		if len(ofBaseline[region]) == 0 {
			matches = append(matches, matchRegion(nil, fresh, tolerance)...)
		}
	}
	for i := range matches {
		matches[i].Run = number
	}
	slices.SortFunc(matches, func(a, b HotspotMatch) int {
		return cmp.Or(compareRanks(a.BaselineRank, b.BaselineRank), compareRanks(a.Rank, b.Rank))
	})
	return matches
}

func hotspotsByRegion(hotspots []Hotspot) map[string][]*Hotspot {
	regions := map[string][]*Hotspot{}
	for i := range hotspots {
		region := hotspots[i].Region
		regions[region] = append(regions[region], &hotspots[i])
	}
	return regions
}

// compareRanks orders ranks, None last.
func compareRanks(a, b Number) int {
	switch {
	case a.Exists() && b.Exists():
		return cmp.Compare(a, b)
	case a.Exists():
		return -1
	case b.Exists():
		return 1
	}
	return 0
}

// matchRegion pairs the hotspots of one region.
func matchRegion(old, fresh []*Hotspot, tolerance float64) []HotspotMatch {
	partner := partners(old, fresh, tolerance)
	var matches []HotspotMatch
	isTaken := make([]bool, len(fresh))
	for i, hotspot := range old {
		match := HotspotMatch{BaselineRank: Number(hotspot.Rank), Rank: None, State: Gone, Distance: None}
		if j := partner[i]; j >= 0 {
			isTaken[j] = true
			match.Rank, match.Distance, match.State = Number(fresh[j].Rank), Number(distanceBetween(hotspot, fresh[j])), Moved
			if float64(match.Distance) <= tolerance/4 {
				match.State = Kept
			}
		}
		matches = append(matches, match)
	}
	for j, hotspot := range fresh {
		if !isTaken[j] {
			matches = append(matches, HotspotMatch{BaselineRank: None, Rank: Number(hotspot.Rank), State: New, Distance: None})
		}
	}
	return matches
}

// partners returns for each old hotspot the fresh one that it is matched with, -1 for
// none. Pairs that are further apart than the tolerance, or of which one stays alone,
// cost the tolerance; where there are more of one kind, that adds the same to every
// assignment.
func partners(old, fresh []*Hotspot, tolerance float64) []int {
	rows, columns := old, fresh
	if len(old) > len(fresh) {
		rows, columns = fresh, old
	}
	costs := make([][]float64, len(rows))
	for i := range rows {
		costs[i] = make([]float64, len(columns))
		for j := range columns {
			costs[i][j] = tolerance
			if distance := distanceBetween(rows[i], columns[j]); distance < tolerance {
				costs[i][j] = distance
			}
		}
	}
	partner := make([]int, len(old))
	for i := range partner {
		partner[i] = -1
	}
	for i, j := range assign(costs) {
		switch {
		case !(distanceBetween(rows[i], columns[j]) <= tolerance):
		case len(old) > len(fresh):
			partner[j] = i
		default:
			partner[i] = j
		}
	}
	return partner
}

// distanceBetween returns how far apart the peaks of two hotspots are; NaN where the
// place of one is not known.
func distanceBetween(a, b *Hotspot) float64 {
	if a.At == nil || b.At == nil {
		return math.NaN()
	}
	x, y, z := a.At[0]-b.At[0], a.At[1]-b.At[1], a.At[2]-b.At[2]
	return math.Sqrt(float64(x*x) + float64(y*y) + float64(z*z))
}

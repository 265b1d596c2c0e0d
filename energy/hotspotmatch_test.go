package energy

import (
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

// sameNumbers holds missing numbers for equal, and those that rounding alone parts.
var sameNumbers = cmp.Comparer(func(a, b Number) bool {
	return a == b || !a.Exists() && !b.Exists() || within(float64(a), float64(b), 1e-14)
})

// alongX lists hotspots of a region at places on a line, ranked in this order.
func alongX(region string, places ...float64) []Hotspot {
	var hotspots []Hotspot
	for i, x := range places {
		hotspots = append(hotspots, Hotspot{Rank: i + 1, Region: region, At: &Vector{x, 0, 0}})
	}
	return hotspots
}

func TestMatchHotspots(t *testing.T) {
	none := None
	for name, c := range map[string]struct {
		old, fresh []Hotspot
		tolerance  float64
		want       []HotspotMatch
	}{
		// C-06 (derived): 0.1 + 2 = 2.1, against 0.9 + 1.5 = 2.4.
		"C-06": {alongX("a", 0, 1), alongX("a", 0.9, 2.5), 2, []HotspotMatch{
			{1, 3, none, Gone, none}, {2, 3, 1, Kept, 0.1}, {none, 3, 2, New, none}}},
		// With a tolerance of 3 the sums are 0.1 + 2.5 = 2.6 and 2.4.
		"a wider tolerance": {alongX("a", 0, 1), alongX("a", 0.9, 2.5), 3, []HotspotMatch{
			{1, 3, 1, Moved, 0.9}, {2, 3, 2, Moved, 1.5}}},
		"a quarter of the tolerance is kept": {alongX("a", 0), alongX("a", 0.5), 2, []HotspotMatch{{1, 3, 1, Kept, 0.5}}},
		"more has moved":                     {alongX("a", 0), alongX("a", 0.500001), 2, []HotspotMatch{{1, 3, 1, Moved, 0.500001}}},
		"the tolerance itself matches":       {alongX("a", 0), alongX("a", 2), 2, []HotspotMatch{{1, 3, 1, Moved, 2}}},
		"more does not":                      {alongX("a", 0), alongX("a", 2.000001), 2, []HotspotMatch{{1, 3, none, Gone, none}, {none, 3, 1, New, none}}},
		"regions keep apart": {append(alongX("a", 0), alongX("b", 10)...), alongX("b", 0), 2, []HotspotMatch{
			{1, 3, none, Gone, none}, {1, 3, none, Gone, none}, {none, 3, 1, New, none}}},
		"more in the baseline": {alongX("a", 0, 5, 10), alongX("a", 5.1), 1, []HotspotMatch{
			{1, 3, none, Gone, none}, {2, 3, 1, Kept, 0.1}, {3, 3, none, Gone, none}}},
		"more in the run": {alongX("a", 5), alongX("a", 0, 5.1, 10), 1, []HotspotMatch{
			{1, 3, 2, Kept, 0.1}, {none, 3, 1, New, none}, {none, 3, 3, New, none}}},
		"none in the baseline": {nil, alongX("a", 1), 1, []HotspotMatch{{none, 3, 1, New, none}}},
		"none in the run":      {alongX("a", 1), nil, 1, []HotspotMatch{{1, 3, none, Gone, none}}},
		"no place, no match": {[]Hotspot{{Rank: 1, Region: "a"}}, alongX("a", 1), 1, []HotspotMatch{
			{1, 3, none, Gone, none}, {none, 3, 1, New, none}}},
		"distance in space": {
			[]Hotspot{{Rank: 1, Region: "a", At: &Vector{1, 2, 3}}}, []Hotspot{{Rank: 1, Region: "a", At: &Vector{3, -1, 9}}}, 28,
			[]HotspotMatch{{1, 3, 1, Kept, 7}}}, // 2² + 3² + 6² = 7²
	} {
		t.Run(name, func(t *testing.T) {
			got := matchHotspots(c.old, c.fresh, 3, c.tolerance)
			if difference := cmp.Diff(c.want, got, sameNumbers); difference != "" {
				t.Errorf("want -, got +\n%s", difference)
			}
		})
	}
}

// leastMatching returns the least sum of distances and of the tolerance for each pair
// that is not made, over every way to pair.
func leastMatching(old, fresh []*Hotspot, taken []bool, tolerance float64) float64 {
	if len(old) == 0 {
		return 0
	}
	least := tolerance + leastMatching(old[1:], fresh, taken, tolerance) // stays alone
	for j := range fresh {
		if distance := distanceBetween(old[0], fresh[j]); !taken[j] && distance <= tolerance {
			taken[j] = true
			least = min(least, distance+leastMatching(old[1:], fresh, taken, tolerance))
			taken[j] = false
		}
	}
	return least
}

// Against every matching, in whole numbers: the sum is the least, nobody has two
// partners, everybody is listed once, and the states keep what they promise.
func TestMatchingAgainstAllMatchings(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		draw := func(name string) []Hotspot {
			var places []float64
			for range rapid.IntRange(0, 5).Draw(t, name) {
				places = append(places, float64(rapid.IntRange(-30, 30).Draw(t, "x")))
			}
			return alongX("a", places...)
		}
		old, fresh := draw("old"), draw("fresh")
		tolerance := float64(rapid.IntRange(1, 20).Draw(t, "tolerance"))
		sum := 0.0
		var ofBaseline, ofRun int
		ranks := map[[2]Number]int{}
		for _, match := range matchHotspots(old, fresh, 2, tolerance) {
			isOld, isFresh := match.BaselineRank.Exists(), match.Rank.Exists()
			if isOld {
				ofBaseline++
				ranks[[2]Number{0, match.BaselineRank}]++
				sum += tolerance
			}
			if isFresh {
				ofRun++
				ranks[[2]Number{1, match.Rank}]++
			}
			switch {
			case isOld && isFresh:
				distance := distanceBetween(&old[int(match.BaselineRank)-1], &fresh[int(match.Rank)-1])
				want := Moved
				if distance <= tolerance/4 {
					want = Kept
				}
				if match.State != want || float64(match.Distance) != distance || distance > tolerance {
					t.Fatalf("%+v of distance %g, tolerance %g", match, distance, tolerance)
				}
				sum += distance - tolerance
			case match.Distance.Exists() || match.State != map[bool]string{true: Gone, false: New}[isOld]:
				t.Fatalf("%+v", match)
			}
		}
		if ofBaseline != len(old) || ofRun != len(fresh) || len(ranks) != ofBaseline+ofRun {
			t.Fatalf("%d and %d hotspots listed of %d and %d", ofBaseline, ofRun, len(old), len(fresh))
		}
		one, other := hotspotsByRegion(old)["a"], hotspotsByRegion(fresh)["a"]
		if want := leastMatching(one, other, make([]bool, len(fresh)), tolerance); sum != want {
			t.Fatalf("sum %g, want %g", sum, want)
		}
	})
}

package mesh

import (
	"math/rand/v2"
	"testing"
)

// What boxes share agrees with counting point by point.
func TestGridShared(t *testing.T) {
	random := rand.New(rand.NewPCG(11, 12))
	extent := func() (e Extent) {
		for axis := range 3 {
			e[2*axis] = int64(random.IntN(6)) - 2
			e[2*axis+1] = e[2*axis] + int64(random.IntN(5))
		}
		return e
	}
	for range 300 {
		g := &Grid{Extent: extent()}
		for range random.IntN(6) {
			g.Earlier = append(g.Earlier, extent())
		}
		want := int64(0)
		for point := range g.Extent.Count() {
			x := g.Extent[0] + point%g.Extent.Size(0)
			y := g.Extent[2] + point/g.Extent.Size(0)%g.Extent.Size(1)
			z := g.Extent[4] + point/(g.Extent.Size(0)*g.Extent.Size(1))
			isShared := false
			for _, e := range g.Earlier {
				isShared = isShared || e[0] <= x && x <= e[1] && e[2] <= y && y <= e[3] && e[4] <= z && z <= e[5]
			}
			if isShared {
				want++
			}
			if g.IsShared(point) != isShared {
				t.Fatalf("point %d of %v is shared with %v: %v", point, g.Extent, g.Earlier, !isShared)
			}
		}
		if got := g.SharedCount(); got != want {
			t.Fatalf("%v shares %d points with %v, want %d", g.Extent, got, g.Earlier, want)
		}
	}
	var none *Grid
	if none.IsShared(0) || none.SharedCount() != 0 {
		t.Error("a piece without a grid shares points")
	}
}

package energy

import (
	"context"
	"sync/atomic"

	"strainledger/mesh"
)

// A pointSet is a set of points of a model, by piece.
type pointSet [][]uint64

func (s pointSet) has(piece int, point int32) bool {
	return s != nil && s[piece][point>>6]>>(point&63)&1 != 0
}

func (s pointSet) add(piece int, point int32) { s[piece][point>>6] |= 1 << (point & 63) }

// noRegionYet and severalRegions are states of a point beside the region's number.
const (
	noRegionYet    = -1
	severalRegions = -2
)

// findBorder finds the points that cells of several regions share, and how many there
// are. It is asked for where fields are on points: there such a point has one value for
// both sides. The result does not depend on the order of cells.
func (p *plan) findBorder(ctx context.Context, walk *mesh.Walk) (pointSet, int64, error) {
	regionOf := make([][]atomic.Int32, len(p.model.Pieces))
	for i := range regionOf {
		regionOf[i] = make([]atomic.Int32, p.model.Pieces[i].PointCount)
		for k := range regionOf[i] {
			regionOf[i][k].Store(noRegionYet)
		}
	}
	want := p.inputs.want
	want.CellValues = nil
	err := walk.Each(ctx, &want, nil, func(int) mesh.Visitor {
		var regions []int32
		return func(chunk *mesh.Chunk) error {
			if len(regions) < chunk.Count {
				regions = make([]int32, chunk.Count)
			}
			p.regions.assign(chunk, regions)
			points := regionOf[chunk.Piece]
			for i, region := range regions[:chunk.Count] {
				if region < 0 || chunk.Shapes[i].Dimension != p.dimension {
					continue
				}
				for _, node := range chunk.Nodes[chunk.Start[i]:chunk.Start[i+1]] {
					claim(&points[node], region)
				}
			}
			return nil
		}
	})
	if err != nil {
		return nil, 0, err
	}
	set := make(pointSet, len(regionOf))
	var count int64
	for piece, points := range regionOf {
		set[piece] = make([]uint64, (len(points)+63)/64)
		for k := range points {
			if points[k].Load() == severalRegions {
				set.add(piece, int32(k))
				count++
			}
		}
	}
	return set, count, nil
}

// claim notes that a cell of the region has the point.
func claim(point *atomic.Int32, region int32) {
	for {
		was := point.Load()
		now := region
		if was != noRegionYet && was != region {
			now = severalRegions
		}
		if was == now || point.CompareAndSwap(was, now) {
			return
		}
	}
}

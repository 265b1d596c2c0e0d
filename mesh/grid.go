package mesh

// A Grid is the place of a structured piece in the lattice that it shares with the
// other pieces of its data set.
type Grid struct {
	Extent  Extent
	Earlier []Extent // of the pieces before it that hold some of its points too
}

// An Extent holds the lowest and the highest index of the points along x, y and z:
// x0 x1 y0 y1 z0 z1.
type Extent [6]int64

// Size returns the number of points along an axis.
func (e Extent) Size(axis int) int64 { return e[2*axis+1] - e[2*axis] + 1 }

// Count returns the number of points.
func (e Extent) Count() int64 { return e.Size(0) * e.Size(1) * e.Size(2) }

// Meet returns the points that both extents hold and whether there are any.
func (e Extent) Meet(other Extent) (Extent, bool) {
	for axis := range 3 {
		e[2*axis] = max(e[2*axis], other[2*axis])
		e[2*axis+1] = min(e[2*axis+1], other[2*axis+1])
		if e[2*axis] > e[2*axis+1] {
			return Extent{}, false
		}
	}
	return e, true
}

// holds reports whether a point lies in the extent.
func (e Extent) holds(x, y, z int64) bool {
	return e[0] <= x && x <= e[1] && e[2] <= y && y <= e[3] && e[4] <= z && z <= e[5]
}

// IsShared reports whether an earlier piece holds a point of this one too. Sums and
// counts over points leave it out here.
func (g *Grid) IsShared(point int64) bool {
	if g == nil || len(g.Earlier) == 0 {
		return false
	}
	row, layer := g.Extent.Size(0), g.Extent.Size(0)*g.Extent.Size(1)
	x, y, z := g.Extent[0]+point%row, g.Extent[2]+point%layer/row, g.Extent[4]+point/layer
	for _, earlier := range g.Earlier {
		if earlier.holds(x, y, z) {
			return true
		}
	}
	return false
}

// SharedCount returns the number of points that earlier pieces hold too.
func (g *Grid) SharedCount() int64 {
	if g == nil || len(g.Earlier) == 0 {
		return 0
	}
	return g.Extent.Count() - uncovered(g.Extent, g.Earlier)
}

// uncovered returns how many points of the extent none of the others hold. What the
// first of them leaves over is cut into at most six extents.
func uncovered(e Extent, others []Extent) int64 {
	for i, other := range others {
		common, ok := e.Meet(other)
		if !ok {
			continue
		}
		var count int64
		for axis := range 3 {
			low, high := 2*axis, 2*axis+1
			if e[low] < common[low] {
				rest := e
				rest[high] = common[low] - 1
				count += uncovered(rest, others[i+1:])
			}
			if e[high] > common[high] {
				rest := e
				rest[low] = common[high] + 1
				count += uncovered(rest, others[i+1:])
			}
			e[low], e[high] = common[low], common[high]
		}
		return count
	}
	return e.Count()
}

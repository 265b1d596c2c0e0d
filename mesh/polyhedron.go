package mesh

import (
	"cmp"
	"math"
	"slices"
)

// Polyhedra and prisms are integrated over their faces: each is divided into triangles
// about the mean of its nodes, and with the cell's middle these make tetrahedra. Two
// cells that share a face divide it in the same way, so that their volumes add up to
// that of both, warped or not.
//
// A polyhedron's faces may be listed in either direction. They are turned alike where
// two share an edge, and together so that the volume is positive. Where edges do not
// pair off (a face may list a node within its neighbour's edge), each face is turned
// away from the middle instead. The faces must close: their area vectors add up to
// nothing.

// maxGap is the largest sum of the area vectors of a closed polyhedron, in units of the
// sum of its faces' areas. Coordinates stored in single precision leave about 1e-7.
const maxGap = 1e-6

// maxWarp is the largest distance of a node from its face's mean plane, in units of the
// distance of the farthest node from the mean, at which the face counts as flat. Up to
// there other divisions into triangles give the same volume to about that fraction.
const maxWarp = 1e-4

// faceList is the working memory for the faces of one polyhedron or prism.
type faceList struct {
	list   []int32 // as Cell.Faces
	start  []int   // position of each face's node count in the list
	parent []int32 // faces that are turned alike make a tree
	turned []bool  // against the parent
	edges  []faceEdge
	prism  []int32 // room for the list of a prism
}

// A faceEdge is an edge of a face, from its node with the lower number to the higher.
type faceEdge struct {
	low, high int32
	face      int32
	backward  bool // as the face lists it
}

// findFaces sets the list to the cell's faces. It reports whether the list is complete.
func (c *Cell) findFaces() bool {
	f := &c.faces
	f.list = c.Faces
	if c.Shape.row.family == prism {
		faces := c.Shape.faceCorners()
		f.prism = append(f.prism[:0], int32(len(faces)))
		for _, corners := range faces {
			f.prism = append(f.prism, int32(len(corners)))
			for _, corner := range corners {
				f.prism = append(f.prism, c.Nodes[corner])
			}
		}
		f.list = f.prism
	}
	f.start = f.start[:0]
	if len(f.list) == 0 {
		return false
	}
	at := 1
	for range f.list[0] {
		if at >= len(f.list) || f.list[at] < 3 || int(f.list[at]) > len(f.list)-at-1 {
			return false
		}
		f.start = append(f.start, at)
		at += 1 + int(f.list[at])
	}
	return len(f.start) >= 4
}

// nodes returns the nodes of face i.
func (f *faceList) nodes(i int) []int32 {
	at := f.start[i]
	return f.list[at+1 : at+1+int(f.list[at])]
}

// root returns the tree of a face and whether the face is turned against it.
func (f *faceList) root(face int32) (root int32, turned bool) {
	for f.parent[face] != face {
		above := f.parent[face]
		if f.parent[above] != above { // halve the way for the next time
			f.turned[face] = f.turned[face] != f.turned[above]
			f.parent[face] = f.parent[above]
		}
		turned = turned != f.turned[face]
		face = f.parent[face]
	}
	return face, turned
}

// turnAlike makes neighbours list their common edges in opposite directions. It reports
// whether every edge has two faces, and whether that can be done to all faces at once.
func (f *faceList) turnAlike() (paired, orientable bool) {
	f.parent, f.turned, f.edges = f.parent[:0], f.turned[:0], f.edges[:0]
	for i := range f.start {
		f.parent = append(f.parent, int32(i))
		f.turned = append(f.turned, false)
		nodes := f.nodes(i)
		for k, node := range nodes {
			next := nodes[(k+1)%len(nodes)]
			if node != next {
				f.edges = append(f.edges, faceEdge{min(node, next), max(node, next), int32(i), node > next})
			}
		}
	}
	slices.SortFunc(f.edges, func(a, b faceEdge) int {
		return cmp.Or(cmp.Compare(a.low, b.low), cmp.Compare(a.high, b.high), cmp.Compare(a.face, b.face))
	})
	if len(f.edges)%2 == 1 {
		return false, true
	}
	trees := len(f.start)
	for i := 0; i < len(f.edges); i += 2 {
		a, b := f.edges[i], f.edges[i+1]
		third := i+2 < len(f.edges) && f.edges[i+2].low == a.low && f.edges[i+2].high == a.high
		if a.low != b.low || a.high != b.high || third {
			return false, true
		}
		rootA, turnedA := f.root(a.face)
		rootB, turnedB := f.root(b.face)
		against := (a.backward == b.backward) != (turnedA != turnedB)
		if rootA == rootB {
			if against {
				return true, false
			}
			continue
		}
		f.parent[rootB], f.turned[rootB] = rootA, against
		trees--
	}
	return true, trees == 1
}

// faceMoments returns the volume of a polyhedron or prism and its first moments about
// the cell's middle. A prism's volume has the sign of its numbering; a polyhedron's is
// NaN where its faces do not close.
func (c *Cell) faceMoments() (volume float64, first [3]float64) {
	f := &c.faces
	if !c.findFaces() {
		return math.NaN(), first
	}
	isPrism := c.Shape.row.family == prism
	paired, orientable := false, true
	if !isPrism {
		paired, orientable = f.turnAlike()
	}
	middle := c.Middle()
	gap, area := [3]float64{}, 0.0
	for i := range f.start {
		part, moments, across := c.coneMoments(f.nodes(i), middle)
		turned := !isPrism && part < 0
		if paired {
			_, turned = f.root(int32(i))
		}
		sign := 1.0
		if turned {
			sign = -1
		}
		volume += sign * part
		add(&first, sign, moments)
		add(&gap, sign, across)
		area += norm(across)
	}
	switch {
	case !orientable || norm(gap) > maxGap*area:
		return math.NaN(), first
	case volume < 0 && !isPrism:
		return -volume, scaled(first, -1)
	}
	return volume, first
}

// prismOrientation judges the corners of a prism.
func (c *Cell) prismOrientation() Orientation {
	n := c.Shape.CornerCount / 2
	least, greatest := math.Inf(1), math.Inf(-1)
	for i := range n {
		next, last := (i+1)%n, (i+n-1)%n
		bottom := c.cornerDeterminant(i, next, last, i+n)
		top := c.cornerDeterminant(i+n, last+n, next+n, i)
		least, greatest = min(least, bottom, top), max(greatest, bottom, top)
	}
	return orientationOf(least, greatest)
}

// coneMoments returns the signed volume between an apex and a face, its first moments
// about the apex, and the area vector of the face.
func (c *Cell) coneMoments(nodes []int32, apex [3]float64) (volume float64, first, vector [3]float64) {
	mean := c.faceMean(nodes)
	add(&mean, -1, apex)
	from := c.from(apex, nodes[len(nodes)-1])
	for _, node := range nodes {
		to := c.from(apex, node)
		// The tetrahedron of the apex, the mean and the edge: its centroid is a
		// quarter of the sum of its corners.
		part := dot(mean, cross(from, to)) / 6
		volume += part
		for axis := range first {
			first[axis] += float64(part * (mean[axis] + from[axis] + to[axis]) / 4)
		}
		add(&vector, 0.5, cross(from, to))
		from = to
	}
	return volume, first, vector
}

// faceMean returns the mean of the nodes of a face.
func (c *Cell) faceMean(nodes []int32) (mean [3]float64) {
	for _, node := range nodes {
		add(&mean, 1, c.from([3]float64{}, node))
	}
	return scaled(mean, 1/float64(len(nodes)))
}

// from returns the vector from an origin to a point of the piece.
func (c *Cell) from(origin [3]float64, point int32) [3]float64 {
	return minus([3]float64(c.Points[3*int(point):][:3]), origin)
}

// HasWarpedFaces reports whether a face of a polyhedron or a prism does not lie in a
// plane. The cell's volume then follows from the division into triangles about the mean
// of the face's nodes. Other cells have maps for their faces, and none is warped.
func (c *Cell) HasWarpedFaces() bool {
	if family := c.Shape.row.family; family != polyhedral && family != prism {
		return false
	}
	c.findFaces()
	for i := range c.faces.start {
		if c.isWarped(c.faces.nodes(i)) {
			return true
		}
	}
	return false
}

// isWarped reports whether a node of the face lies off its mean plane.
func (c *Cell) isWarped(nodes []int32) bool {
	mean := c.faceMean(nodes)
	_, _, normal := c.coneMoments(nodes, mean)
	size, off := 0.0, 0.0
	for _, node := range nodes {
		away := c.from(mean, node)
		size = max(size, norm(away))
		off = max(off, math.Abs(dot(away, normal)))
	}
	return off > maxWarp*size*norm(normal)
}

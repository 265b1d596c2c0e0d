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
// away from the middle instead, and the faces must close: their area vectors add up to
// nothing.

// maxGap is the largest sum of the area vectors of a closed polyhedron, in units of the
// sum of its faces' areas. Coordinates stored in single precision leave about 1e-7.
const maxGap = 1e-6

// maxWarp is the largest distance of a node from its face's mean plane, in units of the
// distance of the farthest node from the mean, at which the face counts as flat. Up to
// there other divisions into triangles give the same volume to about that fraction.
const maxWarp = 1e-4

// polyhedronFaces is the working memory for the faces of one polyhedron.
type polyhedronFaces struct {
	start  []int   // position of each face's node count in Cell.Faces
	parent []int32 // faces that are turned alike make a tree
	turned []bool  // against the parent
	edges  []faceEdge
}

// A faceEdge is an edge of a face, from its node with the lower number to the higher.
type faceEdge struct {
	low, high int32
	face      int32
	backward  bool // as the face lists it
}

// face returns the nodes of face i.
func (p *polyhedronFaces) face(c *Cell, i int) []int32 {
	at := p.start[i]
	return c.Faces[at+1 : at+1+int(c.Faces[at])]
}

// find sets the starts of the faces. It reports whether the list is complete.
func (p *polyhedronFaces) find(faces []int32) bool {
	p.start = p.start[:0]
	if len(faces) == 0 {
		return false
	}
	at := 1
	for range faces[0] {
		if at >= len(faces) || faces[at] < 3 || int(faces[at]) > len(faces)-at-1 {
			return false
		}
		p.start = append(p.start, at)
		at += 1 + int(faces[at])
	}
	return len(p.start) >= 4
}

// root returns the tree of a face and whether the face is turned against it.
func (p *polyhedronFaces) root(face int32) (root int32, turned bool) {
	for p.parent[face] != face {
		above := p.parent[face]
		if p.parent[above] != above { // halve the way for the next time
			p.turned[face] = p.turned[face] != p.turned[above]
			p.parent[face] = p.parent[above]
		}
		turned = turned != p.turned[face]
		face = p.parent[face]
	}
	return face, turned
}

// turnAlike makes neighbours list their common edges in opposite directions. It reports
// whether every edge has two faces, and whether that can be done to all faces at once.
func (p *polyhedronFaces) turnAlike(c *Cell) (paired, orientable bool) {
	p.parent, p.turned, p.edges = p.parent[:0], p.turned[:0], p.edges[:0]
	for i := range p.start {
		p.parent = append(p.parent, int32(i))
		p.turned = append(p.turned, false)
		nodes := p.face(c, i)
		for k, node := range nodes {
			next := nodes[(k+1)%len(nodes)]
			if node != next {
				p.edges = append(p.edges, faceEdge{min(node, next), max(node, next), int32(i), node > next})
			}
		}
	}
	slices.SortFunc(p.edges, func(a, b faceEdge) int {
		return cmp.Or(cmp.Compare(a.low, b.low), cmp.Compare(a.high, b.high), cmp.Compare(a.face, b.face))
	})
	if len(p.edges)%2 == 1 {
		return false, false
	}
	trees := len(p.start)
	for i := 0; i < len(p.edges); i += 2 {
		a, b := p.edges[i], p.edges[i+1]
		third := i+2 < len(p.edges) && p.edges[i+2].low == a.low && p.edges[i+2].high == a.high
		if a.low != b.low || a.high != b.high || third {
			return false, false
		}
		rootA, turnedA := p.root(a.face)
		rootB, turnedB := p.root(b.face)
		against := (a.backward == b.backward) != (turnedA != turnedB)
		if rootA == rootB {
			if against {
				return true, false
			}
			continue
		}
		p.parent[rootB], p.turned[rootB] = rootA, against
		trees--
	}
	return true, trees == 1
}

// polyhedronMoments returns the volume and its first moments about the cell's middle;
// NaN where the faces do not close.
func (c *Cell) polyhedronMoments() (volume float64, first [3]float64) {
	p := &c.scratch
	if !p.find(c.Faces) {
		return math.NaN(), first
	}
	middle := c.Middle()
	paired, orientable := p.turnAlike(c)
	gap, area := [3]float64{}, 0.0
	for i := range p.start {
		part, moments, vector := c.coneMoments(p.face(c, i), middle)
		sign := 1.0
		if paired {
			if _, turned := p.root(int32(i)); turned {
				sign = -1
			}
		} else if part < 0 {
			sign = -1
		}
		volume += sign * part
		add(&first, sign, moments)
		add(&gap, sign, vector)
		area += length(vector[0], vector[1], vector[2])
	}
	if paired && !orientable || length(gap[0], gap[1], gap[2]) > maxGap*area {
		return math.NaN(), first
	}
	if volume < 0 {
		volume, first = -volume, scaled(first, -1)
	}
	return volume, first
}

// prismMoments returns the signed volume of a prism and its first moments about the
// cell's middle.
func (c *Cell) prismMoments() (volume float64, first [3]float64) {
	middle := c.Middle()
	var nodes [6]int32
	for _, corners := range c.Shape.faceCorners() {
		for i, corner := range corners {
			nodes[i] = c.Nodes[corner]
		}
		part, moments, _ := c.coneMoments(nodes[:len(corners)], middle)
		volume += part
		add(&first, 1, moments)
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

// from returns the vector from an origin to a point of the piece.
func (c *Cell) from(origin [3]float64, point int32) [3]float64 {
	p := c.Points[3*int(point):][:3]
	return [3]float64{p[0] - origin[0], p[1] - origin[1], p[2] - origin[2]}
}

// faceMean returns the mean of the nodes of a face.
func (c *Cell) faceMean(nodes []int32) (mean [3]float64) {
	for _, node := range nodes {
		add(&mean, 1, c.from([3]float64{}, node))
	}
	return scaled(mean, 1/float64(len(nodes)))
}

// HasWarpedFaces reports whether a face of a polyhedron or a prism does not lie in a
// plane. The cell's volume then follows from the division into triangles about the mean
// of the face's nodes. Other cells have maps for their faces, and none is warped.
func (c *Cell) HasWarpedFaces() bool {
	switch c.Shape.row.family {
	case prism:
		var nodes [6]int32
		for _, corners := range c.Shape.faceCorners() {
			for i, corner := range corners {
				nodes[i] = c.Nodes[corner]
			}
			if c.isWarped(nodes[:len(corners)]) {
				return true
			}
		}
	case polyhedral:
		p := &c.scratch
		p.find(c.Faces)
		for i := range p.start {
			if c.isWarped(p.face(c, i)) {
				return true
			}
		}
	}
	return false
}

// isWarped reports whether a node of the face lies off its mean plane.
func (c *Cell) isWarped(nodes []int32) bool {
	mean := c.faceMean(nodes)
	_, _, normal := c.coneMoments(nodes, mean)
	area := length(normal[0], normal[1], normal[2])
	size, off := 0.0, 0.0
	for _, node := range nodes {
		away := c.from(mean, node)
		size = max(size, length(away[0], away[1], away[2]))
		off = max(off, math.Abs(dot(away, normal)))
	}
	return off > maxWarp*size*area
}

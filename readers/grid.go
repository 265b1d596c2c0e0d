package readers

import (
	"slices"
	"sync"

	"strainledger/mesh"
)

// A grid is the lattice of a structured piece. Cells, and the points of images and
// rectilinear grids, are arithmetic on their numbers and take no memory.
type grid struct {
	mesh.Grid
	points   [3]int64 // along x, y and z
	cells    [3]int64 // the same; 1 along an axis with one point
	cellType mesh.CellType
	corners  []int64 // node numbers of cell 0

	spacing   [3]float64 // of an image
	origin    [3]float64 // place of index 0
	direction [9]float64 // row by row

	coordinates [3]*column // of a rectilinear grid
	lock        sync.Mutex
	loaded      *[3][]float64 // their values, read when first needed

	hiddenPoints *column // vtkGhostType of points, or
	hasVisible   bool    // numbers that are 0 where a point is hidden
}

// hiddenPoint is the bit of vtkGhostType that blanks a point and all cells at it.
const hiddenPoint = 2

// newGrid makes the lattice of an extent. Curvilinear grids have hexahedra and
// quadrilaterals, the others voxels and pixels, whose nodes run x fastest.
func newGrid(extent mesh.Extent, isCurvilinear bool, limits Limits) (*grid, error) {
	g := &grid{Grid: mesh.Grid{Extent: extent}, direction: [9]float64{1, 0, 0, 0, 1, 0, 0, 0, 1}}
	total := int64(1)
	for axis := range g.points {
		low, high := extent[2*axis], extent[2*axis+1]
		if low < -1<<40 || high > 1<<40 || high < low-1 {
			return nil, malformed("found the extent %d to %d, need a lowest and a highest index", low, high)
		}
		g.points[axis] = high - low + 1
		g.cells[axis] = max(1, g.points[axis]-1)
		if g.points[axis] > 0 && total > limits.Points/g.points[axis] {
			return nil, overLimit("found a grid of %d × %d × %d points; need at most the limit of %d",
				extent.Size(0), extent.Size(1), extent.Size(2), limits.Points)
		}
		total *= g.points[axis]
	}
	if total == 0 {
		g.cells = [3]int64{}
	}
	g.setCorners(isCurvilinear)
	return g, nil
}

// setCorners lists the nodes of the first cell: two for each axis that has cells, in
// the order of the axes.
func (g *grid) setCorners(isCurvilinear bool) {
	types := [4]mesh.CellType{mesh.Vertex, mesh.Line, mesh.Pixel, mesh.Voxel}
	if isCurvilinear {
		types = [4]mesh.CellType{mesh.Vertex, mesh.Line, mesh.Quad, mesh.Hexahedron}
	}
	dimension, step := 0, int64(1)
	g.corners = []int64{0}
	for axis := range g.points {
		if g.points[axis] > 1 {
			dimension++
			for _, corner := range slices.Clone(g.corners) {
				g.corners = append(g.corners, corner+step)
			}
		}
		step *= g.points[axis]
	}
	g.cellType = types[dimension]
	if isCurvilinear && dimension >= 2 {
		for first := 2; first < len(g.corners); first += 4 { // 0 1 2 3 to 0 1 3 2
			g.corners[first], g.corners[first+1] = g.corners[first+1], g.corners[first]
		}
	}
}

func (g *grid) pointCount() int64 { return g.points[0] * g.points[1] * g.points[2] }
func (g *grid) cellCount() int64  { return g.cells[0] * g.cells[1] * g.cells[2] }

// columns returns the columns that the grid reads itself.
func (g *grid) columns() []*column {
	var columns []*column
	if g.hasVisible { // the other kind is an array of the piece
		columns = append(columns, g.hiddenPoints)
	}
	for _, a := range g.coordinates {
		if a != nil {
			columns = append(columns, a)
		}
	}
	return columns
}

// read appends the cells [low, high) to the cursor's buffers.
func (g *grid) read(c *cursor, low, high int64, noNodes bool) {
	for range high - low {
		c.types = append(c.types, g.cellType)
	}
	if noNodes {
		return
	}
	c.nodes = extended(c.nodes[:0], int(high-low)*len(g.corners))
	at := 0
	for cell := low; cell < high; cell++ {
		first := g.firstNode(cell)
		for _, corner := range g.corners {
			c.nodes[at] = int32(first + corner)
			at++
		}
		c.start = append(c.start, int32(at))
	}
}

// place returns the indices of a cell along x, y and z, from 0 in the piece.
func (g *grid) place(cell int64) (i, j, k int64) {
	return cell % g.cells[0], cell / g.cells[0] % g.cells[1], cell / (g.cells[0] * g.cells[1])
}

// firstNode returns the number of the node of a cell with the lowest indices.
func (g *grid) firstNode(cell int64) int64 {
	i, j, k := g.place(cell)
	return (k*g.points[1]+j)*g.points[0] + i
}

// hide marks the cells [low, high) that are not to be counted: those with a hidden
// point, and those that an earlier piece of the data set holds too.
func (g *grid) hide(c *cursor, low, high int64, marks []uint8) ([]uint8, error) {
	if g.hiddenPoints == nil && len(g.Earlier) == 0 || low == high {
		return marks, nil
	}
	if marks == nil {
		c.hidden = append(c.hidden[:0], make([]uint8, high-low)...)
		marks = c.hidden
	}
	var points []int64
	first := g.firstNode(low)
	if g.hiddenPoints != nil {
		last := g.firstNode(high-1) + g.corners[len(g.corners)-1]
		for _, corner := range g.corners {
			last = max(last, g.firstNode(high-1)+corner)
		}
		var err error
		if points, err = g.hiddenPoints.labels(c, first, last+1); err != nil {
			return nil, err
		}
	}
	for cell := low; cell < high; cell++ {
		node := g.firstNode(cell) - first
		for _, corner := range g.corners {
			if points != nil && g.isHidden(points[node+corner]) {
				marks[cell-low] |= mesh.HiddenCell
			}
		}
		if g.isInEarlier(cell) {
			marks[cell-low] |= mesh.DuplicateCell
		}
	}
	return marks, nil
}

// isHidden reports whether a point's mark hides it.
func (g *grid) isHidden(mark int64) bool {
	if g.hasVisible {
		return mark == 0
	}
	return mark != mesh.NoLabel && mark&hiddenPoint != 0
}

// isInEarlier reports whether an earlier piece holds the cell too.
func (g *grid) isInEarlier(cell int64) bool {
	i, j, k := g.place(cell)
	low := [3]int64{i + g.Extent[0], j + g.Extent[2], k + g.Extent[4]}
	for _, other := range g.Earlier {
		isInside := true
		for axis := range low {
			high := low[axis]
			if g.points[axis] > 1 {
				high++
			}
			isInside = isInside && other[2*axis] <= low[axis] && high <= other[2*axis+1]
		}
		if isInside {
			return true
		}
	}
	return false
}

// pointsTo writes the coordinates of the points [low, high).
func (g *grid) pointsTo(c *cursor, low, high int64, to []float64) error {
	if g.coordinates[0] != nil {
		return g.rectilinearTo(c, low, high, to)
	}
	row, layer := g.points[0], g.points[0]*g.points[1]
	d := &g.direction
	for point := low; point < high; point++ {
		x := float64(g.Extent[0]+point%row) * g.spacing[0]
		y := float64(g.Extent[2]+point%layer/row) * g.spacing[1]
		z := float64(g.Extent[4]+point/layer) * g.spacing[2]
		at := to[3*(point-low):][:3]
		at[0] = g.origin[0] + float64(d[0]*x) + float64(d[1]*y) + float64(d[2]*z)
		at[1] = g.origin[1] + float64(d[3]*x) + float64(d[4]*y) + float64(d[5]*z)
		at[2] = g.origin[2] + float64(d[6]*x) + float64(d[7]*y) + float64(d[8]*z)
	}
	return nil
}

func (g *grid) rectilinearTo(c *cursor, low, high int64, to []float64) error {
	axes, err := g.load(c)
	if err != nil {
		return err
	}
	row, layer := g.points[0], g.points[0]*g.points[1]
	for point := low; point < high; point++ {
		at := to[3*(point-low):][:3]
		at[0], at[1], at[2] = axes[0][point%row], axes[1][point%layer/row], axes[2][point/layer]
	}
	return nil
}

// load reads the coordinates along the three axes.
func (g *grid) load(c *cursor) (*[3][]float64, error) {
	g.lock.Lock()
	defer g.lock.Unlock()
	if g.loaded != nil {
		return g.loaded, nil
	}
	var axes [3][]float64
	for axis, a := range g.coordinates {
		const step = 32 << 10 // memory grows with what is really there
		for low := int64(0); low < g.points[axis]; low += step {
			values, err := a.values(c, low, min(low+step, g.points[axis]))
			if err != nil {
				return nil, err
			}
			axes[axis] = append(axes[axis], values...)
		}
	}
	g.loaded = &axes
	return g.loaded, nil
}

// checkArithmetic refuses a grid whose points would take far more memory than its
// file has bytes: a few words of text may claim any number of them.
func (g *grid) checkArithmetic(f *file, limits Limits) error {
	const perByte = 64
	if limit := limits.GridPoints + perByte*f.size; g.pointCount() > limit {
		return overLimit("found a grid of %d points without coordinates of their own in a file of %d bytes; need at most the limit of %d and %d for each byte",
			g.pointCount(), f.size, limits.GridPoints, perByte)
	}
	return nil
}

// lattice gathers the extents of the pieces of one structured data set.
type lattice struct{ extents []mesh.Extent }

// The most pieces of a structured data set, and the most that may meet one piece:
// each has 26 neighbours where they are laid like bricks.
const (
	latticePieces = 1 << 15
	latticeMeets  = 64
)

// add notes the earlier extents that share points with the grid.
func (l *lattice) add(g *grid) error {
	if g.pointCount() == 0 {
		return nil
	}
	if len(l.extents) >= latticePieces {
		return overLimit("found more than %d pieces of one structured data set", latticePieces)
	}
	for _, earlier := range l.extents {
		if _, ok := earlier.Meet(g.Extent); ok {
			g.Earlier = append(g.Earlier, earlier)
		}
	}
	if len(g.Earlier) > latticeMeets {
		return malformed("found a piece that shares points with %d others before it, need at most %d", len(g.Earlier), latticeMeets)
	}
	l.extents = append(l.extents, g.Extent)
	return nil
}

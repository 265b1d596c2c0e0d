package energy

import (
	"context"
	"math"
	"slices"
	"sync"

	"strainledger/mesh"
)

// A ball is the space within a radius of a place: in a plane model a disc, in an
// axisymmetric one the ring whose section is a disc. Cells count that are of its
// material, each by the quadrature points that lie inside.
type ball struct {
	centre   Vector
	radius   float64
	material *Material // nil with isAll
	isAll    bool      // cells of every material count

	lock           sync.Mutex
	cells          int64 // that have a share in it
	volume, energy Sum
	near           *nearCells // nil where no profile is wanted
}

// density returns the mean density, NaN where no quadrature point is inside.
func (b *ball) density() float64 { return b.energy.Float64() / b.volume.Float64() }

// mostNear is how many cells about a place are kept for its profile: half a ball of
// 12 cells' radius, where 8 are looked at.
const mostNear = 4096

// nearCells keeps the cells whose centroids are nearest to the centre of a ball, within
// it, and the frame of the nearest.
type nearCells struct {
	list    []nearCell
	isCut   bool // there were more than mostNear
	nearest nearCell
	frame   cellFrame
}

// A nearCell is one of them. Distance is that of its centroid, squared.
type nearCell struct {
	place            place
	region           int32
	at               Vector
	distance         float64
	density, measure float64
}

func compareNear(a, b nearCell) int {
	switch {
	case a.distance < b.distance, a.distance == b.distance && a.place.before(b.place):
		return -1
	case a.place == b.place:
		return 0
	}
	return 1
}

// add adds a cell.
func (n *nearCells) add(c nearCell, cell *mesh.Cell) {
	if len(n.list) == 0 || compareNear(c, n.nearest) < 0 {
		n.nearest, n.frame = c, newCellFrame(cell)
	}
	if n.list = append(n.list, c); len(n.list) >= 2*mostNear {
		n.trim()
	}
}

// trim sorts the cells and drops those that are too many.
func (n *nearCells) trim() {
	slices.SortFunc(n.list, compareNear)
	if len(n.list) > mostNear {
		n.list, n.isCut = n.list[:mostNear], true
	}
}

// reach returns how far from the centre all cells are known, at most the radius.
func (n *nearCells) reach(radius float64) float64 {
	if n.isCut {
		return math.Sqrt(n.list[len(n.list)-1].distance)
	}
	return radius
}

// A cellFrame is a cell's corners and the edges between them.
type cellFrame struct {
	corners []Vector
	edges   [][2]int
}

func newCellFrame(cell *mesh.Cell) cellFrame {
	var f cellFrame
	for i := range cell.Shape.CornerCount {
		node := int(cell.Nodes[i])
		f.corners = append(f.corners, Vector(cell.Points[3*node:][:3]))
	}
	for _, face := range cell.Shape.FaceCorners() {
		for i, from := range face {
			to := face[(i+1)%len(face)]
			edge := [2]int{min(from, to), max(from, to)}
			if from != to && !slices.Contains(f.edges, edge) {
				f.edges = append(f.edges, edge)
			}
		}
	}
	return f
}

// views returns the ways to look at the cell's surroundings: from each corner and, in a
// plane model, the middle of each edge; or from the tip alone, where one is stated. In
// space every edge that meets the corner is taken for the front.
func (f *cellFrame) views(dimension int, tip *Vector) []view {
	var list []view
	for number, corner := range f.corners {
		if tip != nil {
			if number != f.nearestCorner(tip) {
				continue
			}
			corner = *tip
		}
		if dimension == 2 {
			list = append(list, planeView(corner, f.size(func(edge [2]int) bool { return slices.Contains(edge[:], number) })))
			continue
		}
		for _, front := range f.edges {
			if slices.Contains(front[:], number) {
				size := f.size(func(edge [2]int) bool { return edge != front && slices.Contains(edge[:], number) })
				list = append(list, frontView(corner, f.vector(front), size))
			}
		}
	}
	if dimension == 2 && tip == nil {
		for _, edge := range f.edges {
			half := f.vector(edge)
			middle := f.corners[edge[0]]
			for axis := range middle {
				middle[axis] += half[axis] / 2
			}
			list = append(list, planeView(middle, f.size(func([2]int) bool { return true })))
		}
	}
	return slices.DeleteFunc(list, func(v view) bool { return !(v.size > 0) })
}

func (f *cellFrame) nearestCorner(place *Vector) int {
	nearest, least := 0, infinity
	for i := range f.corners {
		offset := f.corners[i].minus(place)
		if distance := offset.length(); distance < least {
			nearest, least = i, distance
		}
	}
	return nearest
}

// vector returns the vector along an edge.
func (f *cellFrame) vector(edge [2]int) Vector { return f.corners[edge[1]].minus(&f.corners[edge[0]]) }

// size returns the geometric mean of the lengths of some edges, NaN of none.
func (f *cellFrame) size(isOne func(edge [2]int) bool) float64 {
	sum, count := 0.0, 0.0
	for _, edge := range f.edges {
		if isOne(edge) {
			along := f.vector(edge)
			sum += math.Log(along.length())
			count++
		}
	}
	return math.Exp(sum / count)
}

// planeView looks at the plane x-y.
func planeView(origin Vector, size float64) view {
	return view{origin: origin, across: Vector{1}, along: Vector{0, 1}, front: Vector{0, 0, 1}, size: size}
}

// frontView looks along a front, at the cells of four edges' length to either side: over
// less, density may hardly change along what is no front.
func frontView(origin, edge Vector, size float64) view {
	length := edge.length()
	v := view{origin: origin, size: size, thickness: 4 * length}
	least := 0
	for axis := range edge {
		v.front[axis] = edge[axis] / length
		if math.Abs(edge[axis]) < math.Abs(edge[least]) {
			least = axis
		}
	}
	var off Vector
	off[least] = 1
	v.across = cross(v.front, off)
	length = v.across.length()
	for axis := range v.across {
		v.across[axis] /= length
	}
	v.along = cross(v.front, v.across)
	return v
}

// A chunkBox is where the cells of a chunk are.
type chunkBox struct {
	span   mesh.Span
	bounds mesh.Bounds
}

// fillBalls adds to the balls the cells that lie in them. Only the chunks whose boxes meet
// a ball are read again.
func (p *plan) fillBalls(ctx context.Context, walk *mesh.Walk, total *part, balls []*ball) error {
	slices.SortFunc(total.boxes, func(a, b chunkBox) int {
		if a.span.Piece != b.span.Piece {
			return a.span.Piece - b.span.Piece
		}
		return int(a.span.Low - b.span.Low)
	})
	var spans []mesh.Span
	for i := range total.boxes {
		box := &total.boxes[i]
		if slices.ContainsFunc(balls, func(b *ball) bool { return box.bounds.Distance(b.centre) <= b.radius }) {
			spans = append(spans, box.span)
		}
	}
	err := walk.Some(ctx, spans, &p.inputs.want, func(int) mesh.Visitor {
		w := &ballWorker{worker: newWorker(p, total.pool), balls: balls}
		return w.visit
	})
	for _, b := range balls {
		if b.near != nil {
			b.near.trim()
		}
	}
	return err
}

// A ballWorker adds cells to balls. What its worker gathers beside the columns is not
// used.
type ballWorker struct {
	*worker
	balls []*ball
	met   []*ball // by the current cell
}

func (w *ballWorker) visit(chunk *mesh.Chunk) error {
	w.grow(chunk.Count)
	w.regions.assign(chunk, w.region)
	for i := range chunk.Count {
		chunk.Cell(i, &w.cell)
		if w.region[i] < 0 || w.cell.Shape.Dimension != w.dimension {
			continue
		}
		w.meet(w.regions.regions[w.region[i]].material)
		if len(w.met) == 0 {
			continue
		}
		reason, err := w.evaluate(chunk, i)
		if err != nil {
			return err
		}
		if reason == notExcluded {
			w.add(chunk, i)
		}
	}
	return nil
}

// meet finds the balls that the cell may lie in, and whose material it is of.
func (w *ballWorker) meet(material *Material) {
	w.met = w.met[:0]
	bounds := w.cell.Bounds()
	for _, b := range w.balls {
		if (b.isAll || b.material == material) && bounds.Distance(b.centre) <= b.radius {
			w.met = append(w.met, b)
		}
	}
}

// add adds the cell to the balls that it meets.
func (w *ballWorker) add(chunk *mesh.Chunk, i int) {
	p := place{source: chunk.Source, cell: chunk.First + int64(i)}
	at := centroid(&w.cell, w.options)
	for _, b := range w.met {
		offset := at.minus(&b.centre)
		distance := dot(offset, offset)
		volume, energy := w.share(chunk, i, b, distance)
		b.lock.Lock()
		if volume != 0 {
			b.cells++
			b.volume.Add(volume)
			b.energy.Add(energy)
		}
		if b.near != nil && distance <= b.radius*b.radius {
			b.near.add(nearCell{p, w.region[i], at, distance, w.density[i], w.measure[i]}, &w.cell)
		}
		b.lock.Unlock()
	}
}

// share returns the volume and the energy of the cell's part in a ball. A cell without
// shape functions lies in it as a whole when its centroid does.
func (w *ballWorker) share(chunk *mesh.Chunk, i int, b *ball, distance float64) (volume, energy float64) {
	isWhole := distance <= b.radius*b.radius
	if w.cell.Shape.Interpolates() {
		isWhole = w.hasAllNodes(b)
	}
	switch {
	case isWhole:
		return w.measure[i], w.energy[i]
	case !w.cell.Shape.Interpolates():
		return 0, 0
	}
	rule := w.cutRule()
	elements, factor := w.elementsOf(rule, chunk, i, &w.regions.regions[w.region[i]], w.orientation)
	for q, element := range elements {
		place := Vector(w.cell.Place(rule, q))
		offset := place.minus(&b.centre)
		if dot(offset, offset) <= b.radius*b.radius {
			volume += element
			energy += float64(w.densityAt(chunk, i, rule, q) * element)
		}
	}
	return volume * factor, energy * factor
}

// hasAllNodes reports whether all nodes of the cell lie in the ball.
func (w *ballWorker) hasAllNodes(b *ball) bool {
	for _, node := range w.cell.Nodes {
		at := Vector(w.cell.Points[3*int(node):][:3])
		offset := at.minus(&b.centre)
		if dot(offset, offset) > b.radius*b.radius {
			return false
		}
	}
	return true
}

// cutRule returns the points by which a cell is divided that lies partly in a ball: its
// integration points where the results are there; else, in a plane model, 12 in each
// direction, and in space those of its product rule, of which a ball meets many cells.
func (w *ballWorker) cutRule() *mesh.Tabulation {
	switch {
	case w.inputs.rule != nil:
		return w.rule // evaluate has set it
	case w.dimension == 2:
		return w.cell.Shape.FineRule()
	}
	return w.productRule()
}

// densityAt returns the density at a point of the rule of the cell that was evaluated
// last.
func (w *ballWorker) densityAt(chunk *mesh.Chunk, i int, rule *mesh.Tabulation, q int) float64 {
	var stress, strain mesh.SymmetricTensor
	values := w.cell.Values(rule, q, w.rational)
	switch {
	case w.from == FromDisplacement:
		strain = w.strainAt(rule, q, values)
		stress = w.stressOf(&strain)
	case w.isPerCell:
		return w.density[i]
	case w.inputs.rule != nil:
		w.placeValues = values
		w.at(chunk, i, int32(q), &w.regions.regions[w.region[i]], &stress, &strain)
		w.placeValues = nil
	default:
		w.interpolate(values, &stress, &strain)
	}
	return Density(&stress, &strain)
}

package energy

import (
	"context"
	"fmt"
	"slices"
	"strings"
	"sync/atomic"

	"strainledger/mesh"
)

// Lower cells are lines and surfaces among solid cells, and lines among plane ones. They
// are in no account. Where they are faces or edges of cells that are, nothing is
// missing; else they stand for bolts, springs or shells, whose energy is.

// A lowerCell is one of them, as the tally meets it.
type lowerCell struct {
	piece     int
	first     int // position of its corners in lowerCells.nodes
	corners   int
	dimension int
	each      int  // corners of each of its parts: of a line of a poly-line 2
	hasStress bool // some component is not 0, where fields are not on points
}

// lowerCells holds lower cells and nothing of other cells.
type lowerCells struct {
	cells  []lowerCell
	nodes  []int32  // the corners of all, numbers in their piece
	places []Vector // of the corners, in a model of several pieces
	loaded []bool   // whether there is stress at the corner, where fields are on points
}

// keepLower keeps cell i of the chunk, the worker's current one.
func (w *worker) keepLower(chunk *mesh.Chunk, i int) {
	shape := w.cell.Shape
	if shape.Dimension == 0 || shape.Dimension >= w.dimension {
		return
	}
	l := &w.part.lower
	cell := lowerCell{piece: chunk.Piece, first: len(l.nodes), corners: shape.CornerCount, dimension: shape.Dimension, each: shape.CornerCount}
	switch shape.Type {
	case mesh.PolyLine:
		cell.each = 2
	case mesh.TriangleStrip:
		cell.each = 3
	}
	field := &w.inputs.stress
	if !field.exists() {
		field = &w.inputs.strain
	}
	isAt := func(node int32) bool {
		tensor := field.at(chunk, i, node)
		return tensor.IsFinite() && tensor != mesh.SymmetricTensor{}
	}
	if field.exists() && field.on != mesh.OnPoint {
		for q := range int32(max(1, field.points)) { // the cell, or its integration points
			cell.hasStress = cell.hasStress || isAt(q)
		}
	}
	for _, node := range w.cell.Nodes[:shape.CornerCount] {
		l.nodes = append(l.nodes, node)
		if len(w.model.Pieces) > 1 {
			l.places = append(l.places, Vector(chunk.Points[3*node:3*node+3]))
		}
		if field.on == mesh.OnPoint {
			l.loaded = append(l.loaded, isAt(node))
		}
	}
	l.cells = append(l.cells, cell)
}

// join adds the lower cells of another part.
func (l *lowerCells) join(other *lowerCells) {
	for _, cell := range other.cells {
		cell.first += len(l.nodes)
		l.cells = append(l.cells, cell)
	}
	l.nodes = append(l.nodes, other.nodes...)
	l.places = append(l.places, other.places...)
	l.loaded = append(l.loaded, other.loaded...)
}

// A lowerPart is a lower cell, or one line or triangle of those that are several in a
// row. It is accounted for when one cell of the accounts has all its corners on as many
// faces as the dimensions differ by: on one for a surface of a solid, on two, which
// meet in an edge, for a line.
type lowerPart struct {
	cell    int     // position in lowerCells.cells
	faces   int     // needed
	corners []int32 // points of the piece, or places
}

// parts lists the parts of every lower cell, whose corners are given.
func (l *lowerCells) parts(dimension int, nodes []int32) []lowerPart {
	var list []lowerPart
	for number, cell := range l.cells {
		corners := nodes[cell.first : cell.first+cell.corners]
		for low := 0; low+cell.each <= len(corners); low++ {
			list = append(list, lowerPart{cell: number, faces: dimension - cell.dimension, corners: corners[low : low+cell.each]})
		}
	}
	return list
}

// unaccounted says which lower cells are no faces or edges.
type unaccounted struct {
	count, lines, surfaces, stressed int64
	isSolid                          bool
}

// words names them: "2 lines that are no edges of solid cells".
func (u *unaccounted) words() string {
	var words []string
	of := "plane cells"
	if u.isSolid {
		of = "solid cells"
	}
	if u.lines > 0 {
		words = append(words, fmt.Sprintf("%d lines that are no edges of %s", u.lines, of))
	}
	if u.surfaces > 0 {
		words = append(words, fmt.Sprintf("%d surfaces that are no faces of %s", u.surfaces, of))
	}
	return strings.Join(words, " and ")
}

// findUnaccounted looks which lower cells are faces or edges of cells of the model's
// dimension, in a pass of its own that only models with lower cells need. Corners are
// compared by number within a piece and by their exact place between pieces.
func (p *plan) findUnaccounted(ctx context.Context, walk *mesh.Walk, total *part) error {
	lower := &total.lower
	if len(lower.cells) == 0 {
		return nil
	}
	search, err := p.newFaceSearch(ctx, walk, lower)
	if err != nil {
		return err
	}
	err = walk.Each(ctx, &mesh.Want{}, nil, func(int) mesh.Visitor {
		v := faceVisitor{faceSearch: search}
		return v.visit
	})
	if err != nil {
		return err
	}
	p.lower = search.result()
	if n := p.lower.count; n > 0 {
		text := p.lower.words() + ": bolts, springs or shells, whose energy is in no account"
		if p.lower.stressed > 0 {
			text += fmt.Sprintf(" although %d of them carry stress", p.lower.stressed)
		}
		p.findings.addGraded(p.lower.stressed > 0, "parts-not-accounted", n, "%s: state it in [[elsewhere]], or account for those parts on their own", text)
	}
	return nil
}

// A faceSearch knows where the parts are that are looked for. Only the marks of what is
// found change while cells are visited.
type faceSearch struct {
	dimension int
	lower     *lowerCells
	marked    pointSet                 // points at which there are corners
	own       []partsByCorner          // of each piece
	placed    partsByCorner            // corners are places; empty in a model of one piece
	placeOf   []map[int32]int32        // of each piece: point → place
	isFound   []atomic.Bool            // of each part
	loose     []map[int32]*atomic.Bool // of each piece: corners that may be of lower cells alone
}

// partsByCorner finds parts by their lowest corner.
type partsByCorner struct {
	parts []lowerPart
	at    map[int32][]int // positions in parts
}

// add files a part.
func (b *partsByCorner) add(number int) {
	if b.at == nil {
		b.at = map[int32][]int{}
	}
	lowest := slices.Min(b.parts[number].corners)
	b.at[lowest] = append(b.at[lowest], number)
}

func (p *plan) newFaceSearch(ctx context.Context, walk *mesh.Walk, lower *lowerCells) (*faceSearch, error) {
	pieces := len(p.model.Pieces)
	parts := lower.parts(p.dimension, lower.nodes)
	s := &faceSearch{
		dimension: p.dimension, lower: lower, marked: make(pointSet, pieces), own: make([]partsByCorner, pieces),
		placeOf: make([]map[int32]int32, pieces), isFound: make([]atomic.Bool, len(parts)), loose: make([]map[int32]*atomic.Bool, pieces),
	}
	for i := range pieces {
		s.marked[i] = make([]uint64, (p.model.Pieces[i].PointCount+63)/64)
		s.own[i].parts, s.loose[i] = parts, map[int32]*atomic.Bool{}
	}
	for number, part := range parts {
		piece := lower.cells[part.cell].piece
		s.own[piece].add(number)
		for _, node := range part.corners {
			s.marked.add(piece, node)
			if len(lower.loaded) > 0 && s.loose[piece][node] == nil {
				s.loose[piece][node] = new(atomic.Bool)
				s.loose[piece][node].Store(true)
			}
		}
	}
	if pieces == 1 {
		return s, nil
	}
	return s, s.findPlaces(ctx, walk, p.model)
}

// findPlaces numbers the places of the corners and finds the points of every piece that
// are at one.
func (s *faceSearch) findPlaces(ctx context.Context, walk *mesh.Walk, model *mesh.Model) error {
	places := map[Vector]int32{}
	corners := make([]int32, len(s.lower.places)) // place of each
	for i, at := range s.lower.places {
		number, isKnown := places[at]
		if !isKnown {
			number = int32(len(places))
			places[at] = number
		}
		corners[i] = number
	}
	s.placed.parts = s.lower.parts(s.dimension, corners)
	for number := range s.placed.parts {
		s.placed.add(number)
	}
	for piece := range model.Pieces {
		found := make([]map[int32]int32, walk.Workers())
		err := walk.EachPoint(ctx, piece, nil, func(worker int) mesh.PointVisitor {
			found[worker] = map[int32]int32{}
			return func(span *mesh.PointSpan) error {
				for i := range span.Count {
					if place, isOne := places[Vector(span.Points[3*i:3*i+3])]; isOne {
						found[worker][int32(span.First)+int32(i)] = place
					}
				}
				return nil
			}
		})
		if err != nil {
			return err
		}
		s.placeOf[piece] = map[int32]int32{}
		for _, list := range found {
			for point, place := range list {
				s.placeOf[piece][point] = place
				s.marked.add(piece, point)
			}
		}
	}
	return nil
}

// A faceVisitor looks at the faces of cells for one worker.
type faceVisitor struct {
	*faceSearch
	cell  mesh.Cell
	faces [][]int32 // of the current cell: the points on each
	moved [][]int32 // the same as places
}

func (v *faceVisitor) visit(chunk *mesh.Chunk) error {
	for i := range chunk.Count {
		if chunk.Shapes[i].Dimension != v.dimension || isHidden(chunk, i) {
			continue
		}
		nodes := chunk.Nodes[chunk.Start[i]:chunk.Start[i+1]]
		if !slices.ContainsFunc(nodes, func(node int32) bool { return v.marked.has(chunk.Piece, node) }) {
			continue
		}
		chunk.Cell(i, &v.cell)
		v.look(chunk.Piece)
	}
	return nil
}

// look marks the parts that are faces or edges of the current cell.
func (v *faceVisitor) look(piece int) {
	v.faces = facesOf(&v.cell, v.faces[:0])
	placeOf := v.placeOf[piece]
	v.moved = v.moved[:0]
	for _, face := range v.faces {
		moved := make([]int32, len(face))
		for i, node := range face {
			moved[i] = noPlace
			if place, isOne := placeOf[node]; isOne {
				moved[i] = place
			}
		}
		v.moved = append(v.moved, moved)
	}
	for _, node := range v.cell.Nodes {
		if !v.marked.has(piece, node) {
			continue
		}
		if isLoose := v.loose[piece][node]; isLoose != nil {
			isLoose.Store(false)
		}
		for _, number := range v.own[piece].at[node] {
			v.mark(number, &v.own[piece].parts[number], v.faces)
		}
		place, isOne := placeOf[node]
		if !isOne {
			continue
		}
		for _, number := range v.placed.at[place] {
			if part := &v.placed.parts[number]; v.lower.cells[part.cell].piece != piece {
				v.mark(number, part, v.moved)
			}
		}
	}
}

// noPlace stands for a point at which there is no corner.
const noPlace = -1

// mark marks the part when enough faces have all its corners.
func (v *faceVisitor) mark(number int, part *lowerPart, faces [][]int32) {
	count := 0
	for _, face := range faces {
		if !slices.ContainsFunc(part.corners, func(corner int32) bool { return !slices.Contains(face, corner) }) {
			count++
		}
	}
	if count >= part.faces {
		v.isFound[number].Store(true)
	}
}

// facesOf appends the points on each face of a solid or edge of a plane cell.
func facesOf(cell *mesh.Cell, to [][]int32) [][]int32 {
	if len(cell.Faces) > 0 {
		rest := cell.Faces[1:]
		for len(rest) > 0 {
			count := rest[0]
			to = append(to, rest[1:1+count])
			rest = rest[1+count:]
		}
		return to
	}
	for _, face := range cell.Shape.Faces() {
		points := make([]int32, len(face))
		for i, node := range face {
			points[i] = cell.Nodes[node]
		}
		to = append(to, points)
	}
	return to
}

// result counts the cells of which a part was not found.
func (s *faceSearch) result() unaccounted {
	u := unaccounted{isSolid: s.dimension == 3}
	isMissing := make([]bool, len(s.lower.cells))
	parts := s.lower.parts(s.dimension, s.lower.nodes)
	for number := range parts {
		if !s.isFound[number].Load() {
			isMissing[parts[number].cell] = true
		}
	}
	for number, cell := range s.lower.cells {
		if !isMissing[number] {
			continue
		}
		u.count++
		if cell.dimension == 1 {
			u.lines++
		} else {
			u.surfaces++
		}
		if cell.hasStress || s.isLoadedAlone(&cell) {
			u.stressed++
		}
	}
	return u
}

// isLoadedAlone reports whether there is stress at a corner that no cell of the accounts
// has, where fields are on points.
func (s *faceSearch) isLoadedAlone(cell *lowerCell) bool {
	for i := cell.first; i < cell.first+cell.corners && len(s.lower.loaded) > 0; i++ {
		if s.lower.loaded[i] && s.loose[cell.piece][s.lower.nodes[i]].Load() {
			return true
		}
	}
	return false
}

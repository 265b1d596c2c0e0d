package mesh

import (
	"context"
	"slices"
)

const (
	// fewReads bounds the reads of points for one span of Few: each may decode a block of
	// a compressed file.
	fewReads = 8
	// fewGap is how many points that nobody asked for are read along rather than
	// in two reads: less than a block of 32 KiB holds.
	fewGap = 1024
)

// Few hands the first cells of the given spans to the visitors, in no order, and reads
// only the points that these cells have: a look at a few cells then does not cost the
// points of the whole model. Nodes are positions among the points of the chunk, and
// polyhedra come without their faces.
//
// Of a span whose nodes are scattered over the piece only so many cells are taken, one at
// least, as [fewReads] reads of points give. Spans are short, some tens of cells.
func (w *Walk) Few(ctx context.Context, spans []Span, want *Want, visitor func(worker int) Visitor) error {
	visitors := make([]Visitor, w.workers)
	chunks := make([]Chunk, w.workers)
	for i := range visitors {
		visitors[i] = visitor(i)
	}
	return w.inOrder(ctx, len(spans), func(worker, task int) error {
		span := spans[task]
		chunk := &chunks[worker]
		if err := w.cursors[worker].Cells(ctx, span, want, chunk); err != nil {
			return err
		}
		few := *chunk // the chunk's slices stay the cursor's
		piece := &w.model.Pieces[span.Piece]
		few.Piece, few.Source, few.Block, few.First = span.Piece, piece.Source, piece.Block, piece.FirstCell+span.Low
		few.Faces, few.FaceStart = nil, nil
		points := few.keepFew()
		if err := few.readFew(ctx, w.cursors[worker], piece, points, want); err != nil {
			return err
		}
		return visitors[worker](&few)
	})
}

// keepFew drops the cells at the chunk's end that would take too many reads, numbers the
// nodes of the others anew, and returns the piece's numbers of their points, rising.
func (c *Chunk) keepFew() []int32 {
	var points []int32
	for {
		points = slices.Clone(c.Nodes[:c.Start[c.Count]])
		slices.Sort(points)
		points = slices.Compact(points)
		if c.Count == 1 || len(clusters(points)) <= fewReads {
			break
		}
		c.Count--
	}
	nodes := make([]int32, c.Start[c.Count])
	for i := range nodes {
		at, _ := slices.BinarySearch(points, c.Nodes[i])
		nodes[i] = int32(at)
	}
	c.Nodes = nodes
	return points
}

// clusters cuts rising point numbers where a gap is worth another read.
func clusters(points []int32) [][]int32 {
	var list [][]int32
	begin := 0
	for i := 1; i <= len(points); i++ {
		if i == len(points) || points[i]-points[i-1] > fewGap {
			list = append(list, points[begin:i])
			begin = i
		}
	}
	return list
}

// readFew reads the points of those numbers and their values.
func (c *Chunk) readFew(ctx context.Context, cursor Cursor, piece *Piece, points []int32, want *Want) error {
	read := func(components int, from func(low, high int64, to []float64) error) ([]float64, error) {
		values := make([]float64, 0, components*len(points))
		var kept []float64
		for _, cluster := range clusters(points) {
			low, high := int64(cluster[0]), int64(cluster[len(cluster)-1])+1
			kept = room(kept, int64(components)*(high-low))
			if err := from(low, high, kept); err != nil {
				return nil, err
			}
			for _, point := range cluster {
				at := components * int(int64(point)-low)
				values = append(values, kept[at:at+components]...)
			}
		}
		return values, nil
	}
	valuesOf := func(name string, components int) ([]float64, error) {
		return read(components, func(low, high int64, to []float64) error {
			return cursor.PointValues(ctx, c.Piece, name, low, high, to)
		})
	}
	var err error
	c.Points, err = read(3, func(low, high int64, to []float64) error { return cursor.Points(ctx, c.Piece, low, high, to) })
	if err != nil {
		return err
	}
	c.RationalWeights = nil
	if piece.RationalWeights != "" {
		if c.RationalWeights, err = valuesOf(piece.RationalWeights, 1); err != nil {
			return err
		}
	}
	c.PointValues = make([][]float64, len(want.PointValues))
	for i, name := range want.PointValues {
		if c.PointValues[i], err = valuesOf(name, piece.Find(OnPoint, name).Components); err != nil {
			return err
		}
	}
	return nil
}

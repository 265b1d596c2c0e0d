package mesh

import "context"

// A PointSpan is a run of points of one piece in memory, with the values of some arrays.
type PointSpan struct {
	Piece  int
	First  int64       // number of its first point in the piece
	Count  int         // of its points
	Points []float64   // x y z of each
	Values [][]float64 // Count tuples of each array that was asked for, in that order
}

// A PointVisitor takes one run of points after the other. The run is valid until it
// returns.
type PointVisitor func(span *PointSpan) error

// EachPoint hands every point of one piece to the visitors, one visitor for each worker,
// with the values of the named point arrays, which the piece has. It reads some thousand
// points at a time and keeps none. Errors come as those of [Walk.Each] do.
func (w *Walk) EachPoint(ctx context.Context, piece int, names []string, visitor func(worker int) PointVisitor) error {
	visitors := make([]PointVisitor, w.workers)
	for i := range visitors {
		visitors[i] = visitor(i)
	}
	described := &w.model.Pieces[piece]
	spans := make([]PointSpan, w.workers)
	for i := range spans {
		spans[i] = PointSpan{Piece: piece, Values: make([][]float64, len(names))}
	}
	steps := int((described.PointCount + pointStep - 1) / pointStep)
	return w.inOrder(ctx, steps, func(worker, task int) error {
		if err := ctx.Err(); err != nil {
			return err
		}
		span := &spans[worker]
		low := int64(task) * pointStep
		high := min(low+pointStep, described.PointCount)
		span.First, span.Count = low, int(high-low)
		span.Points = room(span.Points, 3*(high-low))
		if err := w.cursors[worker].Points(ctx, piece, low, high, span.Points); err != nil {
			return err
		}
		for i, name := range names {
			components := described.Find(OnPoint, name).Components
			span.Values[i] = room(span.Values[i], int64(components)*(high-low))
			if err := w.cursors[worker].PointValues(ctx, piece, name, low, high, span.Values[i]); err != nil {
				return err
			}
		}
		return visitors[worker](span)
	})
}

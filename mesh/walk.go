package mesh

import (
	"context"
	"math"
	"runtime"
	"sync"
	"sync/atomic"
)

const (
	// defaultChunkCells makes a chunk of a six-component Float64 array twelve
	// blocks of 32 KiB, the usual block size, so that hardly any block crosses a
	// chunk (measured: 2,048 and 8,192 cells take the same time, 32,768 more).
	defaultChunkCells = 8192
	// defaultRunChunks is the length of a run when the reader has no preference:
	// long enough that what the edges of runs decode twice does not matter.
	defaultRunChunks = 4
	// batchBytes bounds the points and point arrays of several small pieces that
	// are held together. One larger piece is a batch of its own.
	batchBytes = 64 << 20
	// pointStep is how many points one task loads: 24 blocks of 32 KiB.
	pointStep = 1 << 15
)

// A Walk goes over the cells of a model with several workers, as often as needed. It
// keeps the workers' cursors and the points of the batch it read last, so that
// a second pass over a model of one batch does not read its points again.
//
// Nothing may depend on which worker sees which chunk, nor on the order: visitors
// keep exact sums, counts, and bests under a total order.
type Walk struct {
	model      *Model
	workers    int
	chunkCells int
	cursors    []Cursor
	chunks     []Chunk
	batch      batch // the batch whose points are loaded
}

// NewWalk returns a walk over the model. workers 0 means all processors, chunkCells 0
// the default of 8,192. Close it after use.
func NewWalk(model *Model, workers, chunkCells int) *Walk {
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	if chunkCells <= 0 {
		chunkCells = defaultChunkCells
	}
	walk := &Walk{model: model, workers: workers, chunkCells: chunkCells, chunks: make([]Chunk, workers)}
	for range workers {
		walk.cursors = append(walk.cursors, model.Open())
	}
	return walk
}

// Workers returns the number of workers of the walk.
func (w *Walk) Workers() int { return w.workers }

// Close closes the cursors and returns their first error.
func (w *Walk) Close() error {
	var first error
	for _, cursor := range w.cursors {
		if err := cursor.Close(); err != nil && first == nil {
			first = err
		}
	}
	return first
}

// A batch is a run of pieces whose points are in memory together.
type batch struct {
	low, high  int       // pieces [low, high)
	points     []float64 // x y z of all points, piece after piece
	firstPoint []int64   // of each piece, in points
	names      []string  // the point arrays loaded
	values     [][]float64
	components [][]int // of each array by piece
	firstValue [][]int64
	weights    []float64 // rational weights of all points, or nil
	bounds     Bounds
	isLoaded   bool
}

// Bounds is the box that holds a model's points. Points that are not finite are left
// out; Low is above High when there are none.
type Bounds struct{ Low, High [3]float64 }

// emptyBounds holds no point.
func emptyBounds() Bounds {
	infinity := math.Inf(1)
	return Bounds{
		Low:  [3]float64{infinity, infinity, infinity},
		High: [3]float64{-infinity, -infinity, -infinity},
	}
}

// IsEmpty reports whether no point is in the box.
func (b *Bounds) IsEmpty() bool { return b.Low[0] > b.High[0] }

// Diagonal returns the length of the box's diagonal, 0 when it is empty.
func (b *Bounds) Diagonal() float64 {
	if b.IsEmpty() {
		return 0
	}
	x, y, z := b.High[0]-b.Low[0], b.High[1]-b.Low[1], b.High[2]-b.Low[2]
	return math.Sqrt(float64(x*x) + float64(y*y) + float64(z*z))
}

// Distance returns how far a place is from the box, 0 within it; infinite where the box is
// empty.
func (b *Bounds) Distance(place [3]float64) float64 {
	var square float64
	for axis, x := range place {
		outside := max(b.Low[axis]-x, x-b.High[axis], 0)
		square += float64(outside * outside)
	}
	return math.Sqrt(square)
}

// add widens the box by points x y z x y z ...
func (b *Bounds) add(points []float64) {
	for i := 0; i+2 < len(points); i += 3 {
		x, y, z := points[i], points[i+1], points[i+2]
		if (x-x)+(y-y)+(z-z) != 0 { // NaN or infinite
			continue
		}
		b.Low[0], b.High[0] = min(b.Low[0], x), max(b.High[0], x)
		b.Low[1], b.High[1] = min(b.Low[1], y), max(b.High[1], y)
		b.Low[2], b.High[2] = min(b.Low[2], z), max(b.High[2], z)
	}
}

// join widens the box by another one.
func (b *Bounds) join(other *Bounds) {
	for i := range b.Low {
		b.Low[i], b.High[i] = min(b.Low[i], other.Low[i]), max(b.High[i], other.High[i])
	}
}

// Bounds returns the box of all points of the model. A model of one batch keeps its
// points for the passes that follow; want names the point arrays that those will
// need, so that the points are not loaded twice.
func (w *Walk) Bounds(ctx context.Context, want *Want) (Bounds, error) {
	bounds := emptyBounds()
	for low := 0; low < len(w.model.Pieces); low = w.batch.high {
		if err := w.load(ctx, low, want); err != nil {
			return bounds, err
		}
		bounds.join(&w.batch.bounds)
	}
	return bounds, nil
}

// A Visitor takes one chunk after the other. The chunk is valid until it returns.
type Visitor func(chunk *Chunk) error

// Each hands every cell of the model to the visitors, one visitor for each worker.
// done, if not nil, counts the cells as they are finished. The error is the same for
// any number of workers: that of the first cells in the order of the model.
func (w *Walk) Each(ctx context.Context, want *Want, done *atomic.Int64, visitor func(worker int) Visitor) error {
	visitors := make([]Visitor, w.workers)
	for i := range visitors {
		visitors[i] = visitor(i)
	}
	for low, high := 0, 0; low < len(w.model.Pieces); low = high {
		if want.NoNodes {
			high = len(w.model.Pieces)
		} else {
			if err := w.load(ctx, low, want); err != nil {
				return err
			}
			high = w.batch.high
		}
		runs := w.runs(low, high)
		err := w.inOrder(ctx, len(runs), func(worker, task int) error {
			return w.visit(ctx, runs[task], want, worker, visitors[worker], done)
		})
		if err != nil {
			return err
		}
	}
	return nil
}

// Some hands the cells of the given spans to the visitors, in no order. Spans are at
// most a chunk long and belong to the model of the walk.
func (w *Walk) Some(ctx context.Context, spans []Span, want *Want, visitor func(worker int) Visitor) error {
	visitors := make([]Visitor, w.workers)
	for i := range visitors {
		visitors[i] = visitor(i)
	}
	for low := 0; low < len(spans); {
		first := spans[low].Piece
		high := len(spans)
		if !want.NoNodes {
			if err := w.load(ctx, first, want); err != nil {
				return err
			}
			high = low
			for high < len(spans) && spans[high].Piece >= w.batch.low && spans[high].Piece < w.batch.high {
				high++
			}
		}
		part := spans[low:high]
		err := w.inOrder(ctx, len(part), func(worker, task int) error {
			return w.visit(ctx, part[task], want, worker, visitors[worker], nil)
		})
		if err != nil {
			return err
		}
		low = high
	}
	return nil
}

// Spans cuts one piece into spans of a chunk each.
func (w *Walk) Spans(piece int) []Span {
	var spans []Span
	cells := w.model.Pieces[piece].CellCount
	for low := int64(0); low < cells; low += int64(w.chunkCells) {
		spans = append(spans, Span{piece, low, min(low+int64(w.chunkCells), cells)})
	}
	return spans
}

// runs cuts the pieces [low, high) into spans of some chunks each.
func (w *Walk) runs(low, high int) []Span {
	var runs []Span
	for piece := low; piece < high; piece++ {
		cells := w.model.Pieces[piece].CellCount
		step := int64(max(w.model.Pieces[piece].RunCells, defaultRunChunks*w.chunkCells))
		for first := int64(0); first < cells; first += step {
			runs = append(runs, Span{piece, first, min(first+step, cells)})
		}
	}
	return runs
}

// visit reads one run chunk by chunk and hands the chunks to the visitor.
func (w *Walk) visit(ctx context.Context, run Span, want *Want, worker int, visitor Visitor, done *atomic.Int64) error {
	chunk := &w.chunks[worker]
	for low := run.Low; low < run.High; low += int64(w.chunkCells) {
		if err := ctx.Err(); err != nil {
			return err
		}
		span := Span{run.Piece, low, min(low+int64(w.chunkCells), run.High)}
		if err := w.cursors[worker].Cells(ctx, span, want, chunk); err != nil {
			return err
		}
		piece := &w.model.Pieces[run.Piece]
		chunk.Piece, chunk.Source, chunk.Block, chunk.First = run.Piece, piece.Source, piece.Block, piece.FirstCell+low
		if !want.NoNodes {
			w.batch.attach(chunk, run.Piece)
		}
		if err := visitor(chunk); err != nil {
			return err
		}
		if done != nil {
			done.Add(span.High - span.Low)
		}
	}
	return nil
}

// attach gives the chunk the points of its piece.
func (b *batch) attach(chunk *Chunk, piece int) {
	at := piece - b.low
	first, end := b.firstPoint[at], b.firstPoint[at+1]
	chunk.Points = b.points[3*first : 3*end]
	chunk.RationalWeights = nil
	if b.weights != nil {
		chunk.RationalWeights = b.weights[first:end]
	}
	chunk.PointValues = chunk.PointValues[:0]
	for i := range b.values {
		chunk.PointValues = append(chunk.PointValues, b.values[i][b.firstValue[i][at]:b.firstValue[i][at+1]])
	}
}

// inOrder runs the tasks 0 … count-1 on the workers, handed out in rising order. After
// an error no further task is begun; since all lower tasks have been taken by then,
// the error kept is that of the lowest task that fails, whatever the schedule.
func (w *Walk) inOrder(ctx context.Context, count int, task func(worker, task int) error) error {
	var (
		next   atomic.Int64
		failed atomic.Bool
		lock   sync.Mutex
		lowest = count
		first  error
		group  sync.WaitGroup
	)
	work := func(worker int) {
		for !failed.Load() {
			number := int(next.Add(1) - 1)
			if number >= count {
				return
			}
			if err := task(worker, number); err != nil {
				failed.Store(true)
				lock.Lock()
				if number < lowest {
					lowest, first = number, err
				}
				lock.Unlock()
			}
		}
	}
	for worker := range min(w.workers, count) {
		group.Go(func() { work(worker) })
	}
	group.Wait()
	if first == nil {
		first = ctx.Err()
	}
	return first
}

// load brings the points and the wanted point arrays of the batch that begins with
// piece low into memory, unless they are there.
func (w *Walk) load(ctx context.Context, low int, want *Want) error {
	b := &w.batch
	if b.isLoaded && b.low <= low && low < b.high && b.holds(want) {
		return nil
	}
	b.isLoaded = false
	if err := b.plan(w.model, low, want); err != nil {
		return err
	}
	type step struct {
		piece     int
		low, high int64
	}
	var steps []step
	for piece := b.low; piece < b.high; piece++ {
		count := w.model.Pieces[piece].PointCount
		for first := int64(0); first < count; first += pointStep {
			steps = append(steps, step{piece, first, min(first+pointStep, count)})
		}
	}
	found := make([]Bounds, w.workers)
	for i := range found {
		found[i] = emptyBounds()
	}
	err := w.inOrder(ctx, len(steps), func(worker, task int) error {
		s := steps[task]
		if err := ctx.Err(); err != nil {
			return err
		}
		return b.read(ctx, w.model, w.cursors[worker], s.piece, s.low, s.high, &found[worker])
	})
	if err != nil {
		return err
	}
	b.bounds = emptyBounds()
	for i := range found {
		b.bounds.join(&found[i])
	}
	b.isLoaded = true
	return nil
}

// holds reports whether the batch has the point arrays that are wanted, in order.
func (b *batch) holds(want *Want) bool {
	if len(b.names) != len(want.PointValues) {
		return false
	}
	for i, name := range want.PointValues {
		if b.names[i] != name {
			return false
		}
	}
	return true
}

// plan chooses the pieces of the batch that begins with piece low, and makes room.
func (b *batch) plan(model *Model, low int, want *Want) error {
	b.low, b.high = low, low
	b.names = append(b.names[:0], want.PointValues...)
	arrays := len(b.names)
	b.firstPoint = append(b.firstPoint[:0], 0)
	b.firstValue = make([][]int64, arrays)
	b.components = make([][]int, arrays)
	for i := range b.firstValue {
		b.firstValue[i] = []int64{0}
	}
	hasWeights := false
	var bytes int64
	for b.high < len(model.Pieces) {
		piece := &model.Pieces[b.high]
		perPoint := int64(3)
		components := make([]int, arrays)
		for i, name := range b.names {
			if array := piece.Find(OnPoint, name); array != nil {
				components[i] = array.Components
			}
			perPoint += int64(components[i])
		}
		if bytes += 8 * perPoint * piece.PointCount; b.high > low && bytes > batchBytes {
			break
		}
		hasWeights = hasWeights || piece.RationalWeights != ""
		last := len(b.firstPoint) - 1
		b.firstPoint = append(b.firstPoint, b.firstPoint[last]+piece.PointCount)
		for i := range b.names {
			b.components[i] = append(b.components[i], components[i])
			b.firstValue[i] = append(b.firstValue[i], b.firstValue[i][last]+int64(components[i])*piece.PointCount)
		}
		b.high++
	}
	last := len(b.firstPoint) - 1
	b.points = room(b.points, 3*b.firstPoint[last])
	for len(b.values) < arrays {
		b.values = append(b.values, nil)
	}
	b.values = b.values[:arrays]
	for i := range b.values {
		b.values[i] = room(b.values[i], b.firstValue[i][last])
	}
	if hasWeights {
		b.weights = room(b.weights, b.firstPoint[last])
	} else {
		b.weights = nil
	}
	return nil
}

// room returns a slice of so many numbers, the given one where it is long enough.
func room(kept []float64, count int64) []float64 {
	if int64(cap(kept)) >= count {
		return kept[:count]
	}
	return makeLarge(int(count))
}

// read loads the points [low, high) of one piece and their values.
func (b *batch) read(ctx context.Context, model *Model, cursor Cursor, piece int, low, high int64, bounds *Bounds) error {
	at := piece - b.low
	first := b.firstPoint[at]
	points := b.points[3*(first+low) : 3*(first+high)]
	if err := cursor.Points(ctx, piece, low, high, points); err != nil {
		return err
	}
	bounds.add(points)
	for i, name := range b.names {
		count := int64(b.components[i][at])
		if count == 0 {
			continue
		}
		start := b.firstValue[i][at]
		if err := cursor.PointValues(ctx, piece, name, low, high, b.values[i][start+count*low:start+count*high]); err != nil {
			return err
		}
	}
	if b.weights == nil {
		return nil
	}
	weights := b.weights[first+low : first+high]
	if name := model.Pieces[piece].RationalWeights; name != "" {
		return cursor.PointValues(ctx, piece, name, low, high, weights)
	}
	for i := range weights {
		weights[i] = 1
	}
	return nil
}

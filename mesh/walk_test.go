package mesh

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"sync"
	"sync/atomic"
	"testing"
	"time"
)

// A lineCursor serves pieces of unit lines along x: piece p has points at
// x = 1000 p + i, and a point array "twice" with 2x and a component that is p.
type lineCursor struct {
	model  *Model
	faults map[Span]error // by the chunk that meets it
	loads  *atomic.Int64  // calls of Points
	closed *atomic.Int64
}

func (c *lineCursor) Close() error { c.closed.Add(1); return nil }

func (c *lineCursor) ReadArray(context.Context, *Array, int64, []byte) error {
	panic("no test reads arrays whole")
}

func (c *lineCursor) Points(_ context.Context, piece int, low, high int64, to []float64) error {
	c.loads.Add(1)
	if len(to) != int(3*(high-low)) {
		return fmt.Errorf("room for %d numbers, want %d", len(to), 3*(high-low))
	}
	for i := low; i < high; i++ {
		copy(to[3*(i-low):], []float64{float64(1000*piece) + float64(i), 0, 0})
	}
	return nil
}

func (c *lineCursor) PointValues(_ context.Context, piece int, name string, low, high int64, to []float64) error {
	for i := low; i < high; i++ {
		x := float64(1000*piece) + float64(i)
		if name == "weight" {
			to[i-low] = -x
			continue
		}
		to[2*(i-low)], to[2*(i-low)+1] = 2*x, float64(piece)
	}
	return nil
}

func (c *lineCursor) Cells(_ context.Context, span Span, _ *Want, to *Chunk) error {
	for fault, err := range c.faults {
		if fault.Piece == span.Piece && fault.Low >= span.Low && fault.Low < span.High {
			return err
		}
	}
	*to = Chunk{Count: int(span.High - span.Low), PointValues: to.PointValues, Start: []int32{0}}
	for i := span.Low; i < span.High; i++ {
		to.Nodes = append(to.Nodes, int32(i), int32(i+1))
		to.Start = append(to.Start, int32(len(to.Nodes)))
	}
	return nil
}

// lines returns a model of pieces with so many cells.
func lines(counts ...int64) (*Model, *lineCursor) {
	model := &Model{Sources: []Source{{}, {}}}
	for i, count := range counts {
		model.Pieces = append(model.Pieces, Piece{
			Source: i % 2, Block: i, FirstCell: int64(100 * i), CellCount: count, PointCount: count + 1,
			Arrays: []Array{{Name: "twice", On: OnPoint, Components: 2}},
		})
	}
	cursor := &lineCursor{model: model, loads: new(atomic.Int64), closed: new(atomic.Int64)}
	model.Open = func() Cursor { return cursor }
	return model, cursor
}

func TestWalkVisitsEveryCellOnce(t *testing.T) {
	for _, workers := range []int{1, 2, 8} {
		for _, chunk := range []int{1, 7, 8192} {
			model, cursor := lines(10, 0, 33, 1)
			model.Pieces[2].RationalWeights = "weight"
			walk := NewWalk(model, workers, chunk)
			var lock sync.Mutex
			var done atomic.Int64
			var places []int64
			err := walk.Each(context.Background(), &Want{PointValues: []string{"twice"}}, &done, func(int) Visitor {
				return func(c *Chunk) error {
					lock.Lock()
					defer lock.Unlock()
					for i := range c.Count {
						places = append(places, c.First+int64(i))
						for _, node := range c.Nodes[c.Start[i]:c.Start[i+1]] {
							x := c.Points[3*node]
							if want := float64(1000*c.Piece) + float64(node); x != want || c.PointValues[0][2*node] != 2*x || c.PointValues[0][2*node+1] != float64(c.Piece) {
								t.Errorf("piece %d node %d: x %g, want %g; values %v", c.Piece, node, x, want, c.PointValues[0][2*node:2*node+2])
							}
							if weight := c.RationalWeights[node]; c.Piece == 2 && weight != -x || c.Piece != 2 && weight != 1 {
								t.Errorf("piece %d node %d: weight %g", c.Piece, node, weight)
							}
						}
					}
					if c.Block != c.Piece || c.Source != c.Piece%2 || len(c.Points) != 3*int(model.Pieces[c.Piece].PointCount) {
						t.Errorf("piece %d: block %d, source %d, %d coordinates", c.Piece, c.Block, c.Source, len(c.Points))
					}
					return nil
				}
			})
			if err != nil {
				t.Fatal(err)
			}
			slices.Sort(places)
			var want []int64
			for i, count := range []int64{10, 0, 33, 1} {
				for j := range count {
					want = append(want, int64(100*i)+j)
				}
			}
			if !slices.Equal(places, want) || done.Load() != 44 {
				t.Errorf("%d workers, chunks of %d: cells %v, done %d", workers, chunk, places, done.Load())
			}
			if err := walk.Close(); err != nil || cursor.closed.Load() != int64(workers) {
				t.Errorf("closed %d of %d cursors, %v", cursor.closed.Load(), workers, err)
			}
		}
	}
}

// A model of one batch keeps its points from the bounds to the pass and from pass to
// pass; models of several batches are read batch by batch.
func TestWalkKeepsPoints(t *testing.T) {
	model, cursor := lines(10, 20)
	walk := NewWalk(model, 2, 0)
	defer walk.Close()
	bounds, err := walk.Bounds(context.Background(), &Want{})
	if err != nil || bounds.Low != [3]float64{0, 0, 0} || bounds.High != [3]float64{1020, 0, 0} || bounds.Diagonal() != 1020 {
		t.Errorf("bounds %+v, %v", bounds, err)
	}
	count := 0
	for range 2 {
		err = walk.Each(context.Background(), &Want{}, nil, func(int) Visitor { return func(*Chunk) error { return nil } })
		if err != nil {
			t.Fatal(err)
		}
	}
	if cursor.loads.Load() != 2 {
		t.Errorf("points were read %d times, want once for each of 2 pieces", cursor.loads.Load())
	}
	large, cursor := lines(3<<20, 10, 3<<20)
	walk = NewWalk(large, 1, 0)
	defer walk.Close()
	bounds, err = walk.Bounds(context.Background(), &Want{})
	if err != nil || bounds.High[0] != 2000+3<<20 {
		t.Errorf("bounds %+v, %v", bounds, err)
	}
	err = walk.Each(context.Background(), &Want{}, nil, func(int) Visitor {
		return func(c *Chunk) error {
			count += c.Count
			if x := c.Points[3*c.Nodes[0]]; x != float64(1000*c.Piece)+float64(c.First-int64(100*c.Piece)) {
				t.Errorf("piece %d, cell %d begins at x %g", c.Piece, c.First, x)
			}
			return nil
		}
	})
	if err != nil || count != 6<<20+10 {
		t.Errorf("%d cells, %v", count, err)
	}
	if steps := int64(2 * (96 + 1 + 1 + 96 + 1)); cursor.loads.Load() < steps-2 || cursor.loads.Load() > steps {
		t.Errorf("points were read in %d steps, want each twice: %d", cursor.loads.Load(), steps)
	}
}

func TestBoundsLeaveOutWhatIsNotFinite(t *testing.T) {
	b := emptyBounds()
	if !b.IsEmpty() || b.Diagonal() != 0 {
		t.Error("the empty box holds something")
	}
	nan, infinity := math.NaN(), math.Inf(1)
	b.add([]float64{1, 2, 3, nan, 9, 9, 9, infinity, 9, 9, 9, -infinity, -1, 4, 3})
	if b.Low != [3]float64{-1, 2, 3} || b.High != [3]float64{1, 4, 3} || b.Diagonal() != math.Sqrt(8) {
		t.Errorf("box %+v", b)
	}
}

// The error is that of the first cells in the order of the model, for any number of
// workers and in every repeat.
func TestWalkReturnsTheFirstError(t *testing.T) {
	first := errors.New("first")
	for _, workers := range []int{1, 2, 8} {
		for range 20 {
			model, cursor := lines(1000, 1000)
			cursor.faults = map[Span]error{{Piece: 0, Low: 301}: first, {Piece: 0, Low: 700}: errors.New("second"), {Piece: 1, Low: 5}: errors.New("third")}
			walk := NewWalk(model, workers, 10)
			err := walk.Each(context.Background(), &Want{}, nil, func(int) Visitor { return func(*Chunk) error { return nil } })
			if err != first {
				t.Fatalf("%d workers: error %v, want the first", workers, err)
			}
			walk.Close()
		}
	}
}

func TestWalkStopsWhenCancelled(t *testing.T) {
	model, _ := lines(100000)
	ctx, cancel := context.WithCancel(context.Background())
	walk := NewWalk(model, 2, 10)
	defer walk.Close()
	var visited atomic.Int64
	began := time.Now()
	err := walk.Each(ctx, &Want{}, nil, func(int) Visitor {
		return func(*Chunk) error {
			if visited.Add(1) == 5 {
				cancel()
			}
			return nil
		}
	})
	if !errors.Is(err, context.Canceled) || visited.Load() > 10 || time.Since(began) > 10*time.Second {
		t.Errorf("error %v after %d chunks", err, visited.Load())
	}
}

// Some visits single spans, in several batches, with their points.
func TestWalkVisitsSpans(t *testing.T) {
	model, _ := lines(3<<20, 10, 3<<20)
	walk := NewWalk(model, 2, 0)
	defer walk.Close()
	spans := []Span{{0, 5, 8}, {0, 100, 101}, {1, 0, 10}, {2, 7, 9}}
	var lock sync.Mutex
	seen := map[Span]bool{}
	err := walk.Some(context.Background(), spans, &Want{}, func(int) Visitor {
		return func(c *Chunk) error {
			lock.Lock()
			defer lock.Unlock()
			low := c.First - int64(100*c.Piece)
			seen[Span{c.Piece, low, low + int64(c.Count)}] = true
			if x := c.Points[3*c.Nodes[0]]; x != float64(1000*c.Piece)+float64(c.First-int64(100*c.Piece)) {
				t.Errorf("piece %d, cell %d begins at x %g", c.Piece, c.First, x)
			}
			return nil
		}
	})
	if err != nil || len(seen) != len(spans) {
		t.Errorf("spans seen %v, %v", seen, err)
	}
	for _, span := range spans {
		if !seen[span] {
			t.Errorf("span %v was not seen", span)
		}
	}
}

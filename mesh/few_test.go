package mesh

import (
	"context"
	"errors"
	"slices"
	"sync"
	"testing"
)

// A scatteredCursor serves one piece of lines from point i·stride to (i+1)·stride, with
// point x = 2·number and an array of 3·number, and counts what is read.
type scatteredCursor struct {
	stride int32
	lock   sync.Mutex
	reads  [][2]int64
}

func (c *scatteredCursor) ReadArray(context.Context, *Array, int64, []byte) error {
	panic("no test reads arrays whole")
}

func (c *scatteredCursor) Close() error { return nil }

func (c *scatteredCursor) Points(_ context.Context, _ int, low, high int64, to []float64) error {
	c.lock.Lock()
	defer c.lock.Unlock()
	c.reads = append(c.reads, [2]int64{low, high})
	for i := low; i < high; i++ {
		copy(to[3*(i-low):], []float64{float64(2 * i), -float64(i), 7})
	}
	return nil
}

func (c *scatteredCursor) PointValues(_ context.Context, _ int, name string, low, high int64, to []float64) error {
	if name == "lost" {
		return errors.New("lost")
	}
	for i := low; i < high; i++ {
		if name == "weight" {
			to[i-low] = float64(i)
			continue
		}
		to[2*(i-low)], to[2*(i-low)+1] = float64(3*i), float64(i)
	}
	return nil
}

func (c *scatteredCursor) Cells(_ context.Context, span Span, _ *Want, to *Chunk) error {
	line, err := ShapeOf(Line, 2, [3]int{})
	if err != nil {
		return err
	}
	*to = Chunk{Count: int(span.High - span.Low), Start: []int32{0}, Faces: []int32{1}, FaceStart: []int32{0, 1}}
	for i := int32(span.Low); i < int32(span.High); i++ {
		to.Types, to.Shapes = append(to.Types, Line), append(to.Shapes, line)
		to.Nodes = append(to.Nodes, (i+1)*c.stride, i*c.stride)
		to.Start = append(to.Start, int32(len(to.Nodes)))
	}
	return nil
}

// Few reads the points of its cells and hardly any other.
func TestFewReadsFew(t *testing.T) {
	const points = 1 << 20
	for _, c := range []struct {
		stride int32
		cells  int // that are taken of ten
		reads  int
	}{{1, 10, 1}, {fewGap, 10, 1}, {fewGap + 1, 7, 8}, {100000, 7, 8}} {
		model := &Model{Sources: []Source{{}, {}}, Pieces: []Piece{{}, {
			Source: 1, Block: 4, FirstCell: 30, CellCount: 1000, PointCount: points, RationalWeights: "weight",
			Arrays: []Array{{Name: "two", On: OnPoint, Components: 2}, {Name: "lost", On: OnPoint, Components: 1}},
		}}}
		cursor := &scatteredCursor{stride: c.stride}
		model.Open = func() Cursor { return cursor }
		walk := NewWalk(model, 2, 0)
		var cells []int64
		want := &Want{PointValues: []string{"two"}}
		err := walk.Few(context.Background(), []Span{{1, 0, 10}}, want, func(int) Visitor {
			return func(chunk *Chunk) error {
				if chunk.Piece != 1 || chunk.Source != 1 || chunk.Block != 4 || chunk.First != 30 || chunk.Faces != nil || chunk.FaceStart != nil {
					t.Errorf("chunk %+v", chunk)
				}
				if len(chunk.Points) != 3*(chunk.Count+1) {
					t.Errorf("%d coordinates of %d cells", len(chunk.Points), chunk.Count)
				}
				for i := range chunk.Count {
					cells = append(cells, chunk.First+int64(i))
					var cell Cell
					chunk.Cell(i, &cell)
					for k, node := range cell.Nodes {
						number := float64(int32(i+1-k) * c.stride)
						got := append(slices.Clone(chunk.Points[3*node:3*node+3]), chunk.PointValues[0][2*node], chunk.PointValues[0][2*node+1], chunk.RationalWeights[node])
						if !slices.Equal(got, []float64{2 * number, -number, 7, 3 * number, number, number}) {
							t.Errorf("stride %d, cell %d, node %d: %v, want those of point %g", c.stride, i, k, got, number)
						}
					}
				}
				return nil
			}
		})
		if err != nil {
			t.Fatal(err)
		}
		if len(cells) != c.cells || len(cursor.reads) != c.reads {
			t.Errorf("stride %d: cells %v in %d reads, want %d in %d", c.stride, cells, len(cursor.reads), c.cells, c.reads)
		}
		var read int64
		for _, r := range cursor.reads {
			read += r[1] - r[0]
		}
		if c.stride > fewGap && read != int64(c.cells+1) {
			t.Errorf("stride %d: %d points were read, want %d", c.stride, read, c.cells+1)
		}
		err = walk.Few(context.Background(), []Span{{1, 3, 4}}, want, func(int) Visitor {
			return func(chunk *Chunk) error {
				if x := float64(6 * c.stride); chunk.First != 33 || chunk.Count != 1 || chunk.Points[0] != x {
					t.Errorf("stride %d: first cell %d, %d cells, x %g, want %g", c.stride, chunk.First, chunk.Count, chunk.Points[0], x)
				}
				return nil
			}
		})
		if err != nil {
			t.Fatal(err)
		}
		want.PointValues = []string{"lost"}
		if err := walk.Few(context.Background(), []Span{{1, 0, 10}}, want, func(int) Visitor { return func(*Chunk) error { return nil } }); err == nil {
			t.Error("no error of an array that is lost")
		}
	}
}

// A cell is taken however far its nodes are apart.
func TestFewTakesOneCell(t *testing.T) {
	chunk := Chunk{Count: 2, Start: []int32{0, 10, 12}}
	for i := range int32(12) {
		chunk.Nodes = append(chunk.Nodes, 50000*(11-i))
	}
	points := chunk.keepFew()
	if chunk.Count != 1 || len(points) != 10 || points[0] != 100000 || points[9] != 550000 || chunk.Nodes[0] != 9 || chunk.Nodes[9] != 0 {
		t.Errorf("%d cells, points %v, nodes %v", chunk.Count, points, chunk.Nodes)
	}
}

// Every point is handed over once, with its values, whatever the number of workers; and
// errors come.
func TestEachPoint(t *testing.T) {
	const count = 2*pointStep + 5
	model := &Model{Sources: []Source{{}}, Pieces: []Piece{{}, {PointCount: count, Arrays: []Array{
		{Name: "two", On: OnPoint, Components: 2}, {Name: "lost", On: OnPoint, Components: 1},
	}}}}
	model.Open = func() Cursor { return &scatteredCursor{} }
	for _, workers := range []int{1, 2, 5} {
		walk := NewWalk(model, workers, 0)
		var lock sync.Mutex
		seen := make([]int, count)
		err := walk.EachPoint(context.Background(), 1, []string{"two"}, func(int) PointVisitor {
			return func(span *PointSpan) error {
				lock.Lock()
				defer lock.Unlock()
				if span.Piece != 1 || span.Count > pointStep || len(span.Points) != 3*span.Count || len(span.Values) != 1 {
					t.Errorf("span %+v", span)
				}
				for i := range span.Count {
					number := span.First + int64(i)
					seen[number]++
					if x := float64(number); span.Points[3*i] != 2*x || span.Points[3*i+1] != -x || span.Values[0][2*i] != 3*x || span.Values[0][2*i+1] != x {
						t.Fatalf("point %d: %v %v", number, span.Points[3*i:3*i+3], span.Values[0][2*i:2*i+2])
					}
				}
				return nil
			}
		})
		if err != nil {
			t.Fatal(err)
		}
		if slices.ContainsFunc(seen, func(times int) bool { return times != 1 }) {
			t.Errorf("%d workers: not every point once", workers)
		}
		nothing := func(int) PointVisitor { return func(*PointSpan) error { return nil } }
		if walk.EachPoint(context.Background(), 1, []string{"lost"}, nothing) == nil {
			t.Error("no error of an array that is lost")
		}
		if err := walk.EachPoint(context.Background(), 0, nil, nothing); err != nil {
			t.Errorf("a piece without points: %v", err)
		}
		ctx, cancel := context.WithCancel(context.Background())
		cancel()
		if err := walk.EachPoint(ctx, 1, nil, nothing); !errors.Is(err, context.Canceled) {
			t.Errorf("cancelled: %v", err)
		}
		fault := errors.New("visitor")
		if err := walk.EachPoint(context.Background(), 1, nil, func(int) PointVisitor { return func(*PointSpan) error { return fault } }); err != fault {
			t.Errorf("error of the visitor: %v", err)
		}
	}
}

package energy

import (
	"context"

	"strainledger/mesh"
)

// nodeNumbers gives the points of all pieces one number for each place, so that a smooth
// stress goes on from one piece to the next. Points of one piece count as written: what
// stands twice there is a crack, or parts that only touch.
type nodeNumbers struct {
	number [][]int32 // by piece and point, where they may
	count  int
}

// at returns the number of a point of a piece.
func (n *nodeNumbers) at(piece int, point int32) int {
	if n.number != nil {
		return int(n.number[piece][point])
	}
	return int(point)
}

// numberNodes numbers the points. A model of several pieces needs about 60 bytes a point
// for it while it is made, and 4 after.
func numberNodes(ctx context.Context, walk *mesh.Walk, model *mesh.Model) (*nodeNumbers, error) {
	n := &nodeNumbers{}
	if len(model.Pieces) == 1 {
		n.count = int(model.Pieces[0].PointCount)
		return n, nil
	}
	n.number = make([][]int32, len(model.Pieces))
	known := map[[3]float64]int32{}
	for piece := range model.Pieces {
		places := make([][3]float64, model.Pieces[piece].PointCount)
		err := walk.EachPoint(ctx, piece, nil, func(int) mesh.PointVisitor {
			return func(span *mesh.PointSpan) error {
				for i := range span.Count {
					for axis := range 3 {
						places[span.First+int64(i)][axis] = span.Points[3*i+axis] + 0 // -0 is 0
					}
				}
				return nil
			}
		})
		if err != nil {
			return nil, err
		}
		n.number[piece] = make([]int32, len(places))
		earlier := int32(n.count)
		for i, place := range places {
			number, isKnown := known[place]
			if !isKnown || number >= earlier { // of this piece
				number = int32(n.count)
				n.count++
				if !isKnown {
					known[place] = number
				}
			}
			n.number[piece][i] = number
		}
	}
	return n, nil
}

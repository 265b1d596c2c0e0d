package energy

import (
	"encoding/binary"
	"io"
	"math"

	"strainledger/mesh"
)

// Columns is where a tally writes what it has computed for each cell: one number at
// the cell's place, which counts the cells of all pieces in the order of the model.
// Numbers are Float64, NaN for cells that are in no account and for what does not
// exist; regions are Int32. The low byte stands first. Several workers write at once.
type Columns struct {
	Density          io.WriterAt // strain energy per volume
	Energy           io.WriterAt
	EquivalentStress io.WriterAt
	Utilisation      io.WriterAt
	Region           io.WriterAt // index into Ledger.Regions, -1 for cells in no account
}

// A ColumnError says that a column could not be written.
type ColumnError struct{ Err error }

func (e *ColumnError) Error() string { return e.Err.Error() }

// Unwrap returns the reason.
func (e *ColumnError) Unwrap() error { return e.Err }

// firstPlaces returns the place of the first cell of each piece.
func firstPlaces(model *mesh.Model) []int64 {
	places := make([]int64, len(model.Pieces))
	for i := 1; i < len(places); i++ {
		places[i] = places[i-1] + model.Pieces[i-1].CellCount
	}
	return places
}

// writeColumns writes the columns of a chunk. piece is where its piece begins.
func (w *worker) writeColumns(chunk *mesh.Chunk) error {
	to := w.options.Columns
	place := w.places[chunk.Piece] + chunk.First - w.model.Pieces[chunk.Piece].FirstCell
	for _, column := range []struct {
		to       io.WriterAt
		values   []float64
		isEnergy bool
	}{
		{to.Density, w.density, true}, {to.Energy, w.energy, true},
		{to.EquivalentStress, w.equivalent, false}, {to.Utilisation, w.utilisation, false},
	} {
		w.bytes = w.bytes[:0]
		for i, value := range column.values[:chunk.Count] {
			if w.region[i] < 0 || column.isEnergy && w.isUnknown || !isFinite(value) {
				value = math.NaN()
			}
			w.bytes = binary.LittleEndian.AppendUint64(w.bytes, math.Float64bits(value))
		}
		if _, err := column.to.WriteAt(w.bytes, 8*place); err != nil {
			return &ColumnError{err}
		}
	}
	w.bytes = w.bytes[:0]
	for _, region := range w.region[:chunk.Count] {
		w.bytes = binary.LittleEndian.AppendUint32(w.bytes, uint32(region))
	}
	if _, err := to.Region.WriteAt(w.bytes, 4*place); err != nil {
		return &ColumnError{err}
	}
	return nil
}

package readers

import (
	"context"
	"fmt"
	"math"

	"strainledger/mesh"
)

// attributes are the marks that VTK's files put on arrays of point and cell data.
var attributes = []string{"Scalars", "Vectors", "Normals", "Tensors", "TCoords", "GlobalIds", "PedigreeIds",
	"EdgeFlag", "Tangents", "RationalWeights", "HigherOrderDegrees", "ProcessIds"}

// list gives an array its number among those that cursors hand out whole, and returns
// its description.
func (o *opener) list(a *column) mesh.Array {
	a.ID, a.Bytes, a.Coding = len(o.listed), a.describedBytes(), a.coding()
	o.listed = append(o.listed, a)
	return a.Array
}

// describedBytes returns the length of the values in the form that [cursor.ReadArray]
// gives them.
func (a *column) describedBytes() int64 {
	count := a.Tuples * int64(a.Components)
	switch a.number {
	case bitNumber:
		return (count + 7) / 8
	case stringNumber:
		if a.content == nil {
			return 0
		}
		return a.content.Tuples
	}
	return count * numberNamed(a.Type).size()
}

// ReadArray fills to with the bytes of an array from byte at on.
func (c *cursor) ReadArray(ctx context.Context, array *mesh.Array, at int64, to []byte) error {
	if at < 0 || at%8 != 0 || at+int64(len(to)) > array.Bytes {
		panic(fmt.Sprintf("bytes [%d, %d) asked of an array with %d", at, at+int64(len(to)), array.Bytes))
	}
	if err := ctx.Err(); err != nil || len(to) == 0 {
		return err
	}
	return c.hand.located(c.listed[array.ID].bytesTo(c, at, to))
}

// bytesTo writes bytes of the array as its description says that they are.
func (a *column) bytesTo(c *cursor, at int64, to []byte) error {
	switch {
	case a.number == bitNumber:
		return a.bitsTo(c, at, to)
	case a.number == stringNumber:
		a = a.content
	case a.isLevel || a.isColour || a.Type != a.number.String():
		return a.convertedTo(c, at, to)
	}
	data, err := a.bytes(c, at, at+int64(len(to)))
	copy(to, data)
	return err
}

// bitsTo packs bits, which as text are numbers.
func (a *column) bitsTo(c *cursor, at int64, to []byte) error {
	if a.content == nil {
		return a.fail(truncated("%d bits needed, found none", a.Tuples*int64(a.Components)))
	}
	if a.content.form != textForm {
		data, err := a.content.bytes(c, at, at+int64(len(to)))
		copy(to, data)
		return err
	}
	count := a.Tuples * int64(a.Components)
	data, err := a.content.bytes(c, 8*at, min(8*(at+int64(len(to))), count))
	if err != nil {
		return err
	}
	clear(to)
	for i, bit := range data {
		if bit != 0 {
			to[i/8] |= 0x80 >> (i % 8)
		}
	}
	return nil
}

// convertedTo writes numbers that the description calls by another type than that in
// which they are stored, and ghost levels as marks.
func (a *column) convertedTo(c *cursor, at int64, to []byte) error {
	as := numberNamed(a.Type)
	first, count := at/as.size(), len(to)/int(as.size())
	size := a.number.size()
	data, err := a.bytes(c, first*size, (first+int64(count))*size)
	if err != nil {
		return err
	}
	if a.isColour { // the only ones that are not whole
		values := make([]float64, count)
		a.widen(values, data)
		for i, value := range values {
			to[i] = uint8(min(max(value, 0), math.MaxUint8))
		}
		return nil
	}
	values := make([]int64, count)
	a.number.integers(values, data)
	if a.isLevel {
		for i, level := range values {
			values[i] = min(level, mesh.DuplicateCell)
		}
	}
	for i, value := range values {
		as.put(to[int64(i)*as.size():], value)
	}
	return nil
}

package readers

import "math"

// Limits is what files may claim. Each zero value stands for the default.
type Limits struct {
	Decoded    int64 // bytes that compressed content may decode to, over all files; default 2⁴⁰ (1 TiB)
	Block      int64 // bytes of one LZ4 block, which is decoded as a whole; default 2³⁰ (1 GiB)
	Points     int64 // points of one piece, which are held in memory; default 2²⁸, at most 2³¹-1
	GridPoints int64 // points of a grid whose coordinates are not stored; default 2²² and 64 for each byte of its file
	Pieces     int64 // pieces of all files; default 100,000
	Nesting    int   // elements inside elements of one file; default 32
	Depth      int   // files that refer to files that refer to files ...; default 8
	Markup     int64 // bytes of one file outside its arrays; default 2²⁶ (64 MiB)
	Text       int64 // bytes of one name, attribute or line; default 2²⁰ (1 MiB)
}

// withDefaults fills in what is zero.
func (l Limits) withDefaults() Limits {
	for _, limit := range []struct {
		field   *int64
		initial int64
	}{
		{&l.Decoded, 1 << 40}, {&l.Block, 1 << 30}, {&l.Points, 1 << 28}, {&l.GridPoints, 1 << 22},
		{&l.Pieces, 100_000}, {&l.Markup, 1 << 26}, {&l.Text, 1 << 20},
	} {
		if *limit.field == 0 {
			*limit.field = limit.initial
		}
	}
	l.Points = min(l.Points, math.MaxInt32) // node numbers are int32
	if l.Nesting == 0 {
		l.Nesting = 32
	}
	if l.Depth == 0 {
		l.Depth = 8
	}
	return l
}

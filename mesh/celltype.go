package mesh

// A CellType is VTK's number of a cell type.
type CellType uint8

// A Shape is a cell type with its node count.
type Shape struct{}

// A Cell is a view of one cell of a chunk.
type Cell struct {
	Shape           *Shape
	Points          []float64
	Nodes           []int32
	Faces           []int32
	RationalWeights []float64
}

package mesh

import "fmt"

func ShapeOf(t CellType, nodeCount int, degrees [3]int) (*Shape, error) {
	if t > 81 || t == 10 && nodeCount != 4 {
		return nil, fmt.Errorf("cell type %d with %d nodes", t, nodeCount)
	}
	return &Shape{}, nil
}

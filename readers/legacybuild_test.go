package readers

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"math"
	"strconv"
	"testing"
)

// legacyNumbers writes numbers of a legacy type.
func (g *testGrid) legacyValues(to *bytes.Buffer, isBinary bool, word string, values []float64) {
	for i, value := range values {
		switch {
		case !isBinary && (word == "float" || word == "double"):
			to.WriteString(strconv.FormatFloat(value, 'g', -1, 64) + " ")
		case !isBinary:
			to.WriteString(strconv.FormatInt(int64(value), 10) + " ")
		case word == "double":
			binary.Write(to, binary.BigEndian, value)
		case word == "float":
			binary.Write(to, binary.BigEndian, float32(value))
		case word == "int" || word == "vtkIdType":
			binary.Write(to, binary.BigEndian, int32(value))
		case word == "short":
			binary.Write(to, binary.BigEndian, int16(value))
		case word == "vtktypeint64":
			binary.Write(to, binary.BigEndian, int64(value))
		default:
			panic(word)
		}
		if !isBinary && i%9 == 8 {
			to.WriteByte('\n')
		}
	}
	to.WriteByte('\n')
}

// legacy writes the grid as a legacy file of a version.
func (g *testGrid) legacy(t *testing.T, isBinary bool, version string) []byte {
	t.Helper()
	var to bytes.Buffer
	coding := map[bool]string{true: "BINARY", false: "ASCII"}[isBinary]
	fmt.Fprintf(&to, "# vtk DataFile Version %s\ntitle\n%s\nDATASET UNSTRUCTURED_GRID\nPOINTS %d double\n", version, coding, len(g.points)/3)
	g.legacyValues(&to, isBinary, "double", g.points)
	major, err := strconv.ParseFloat(version, 64)
	if err != nil {
		t.Fatal(err)
	}
	if cells := len(g.types); major < 5 {
		fmt.Fprintf(&to, "CELLS %d %d\n", cells, cells+len(g.connectivity))
		var list []float64
		start := 0.0
		for _, end := range g.offsets {
			list = append(append(list, end-start), g.connectivity[int(start):int(end)]...)
			start = end
		}
		g.legacyValues(&to, isBinary, "int", list)
	} else {
		fmt.Fprintf(&to, "CELLS %d %d\nOFFSETS vtktypeint64\n", cells+1, len(g.connectivity))
		g.legacyValues(&to, isBinary, "vtktypeint64", append([]float64{0}, g.offsets...))
		fmt.Fprintf(&to, "CONNECTIVITY vtktypeint64\n")
		g.legacyValues(&to, isBinary, "vtktypeint64", g.connectivity)
	}
	fmt.Fprintf(&to, "CELL_TYPES %d\n", len(g.types))
	g.legacyValues(&to, isBinary, "int", g.types)
	fmt.Fprintf(&to, "CELL_DATA %d\nTENSORS6 stress double\n", len(g.types))
	g.legacyValues(&to, isBinary, "double", g.stress)
	fmt.Fprintf(&to, "SCALARS region short 1\nLOOKUP_TABLE default\n")
	g.legacyValues(&to, isBinary, "short", g.region)
	fmt.Fprintf(&to, "POINT_DATA %d\nFIELD fields 1\ntemperature 1 %d float\n", len(g.temperature), len(g.temperature))
	g.legacyValues(&to, isBinary, "float", g.temperature)
	return to.Bytes()
}

func TestLegacyCodingsGiveTheSameBits(t *testing.T) {
	grid := newTestGrid(20_000) // more than one index page and more than two marks of a list
	for _, isBinary := range []bool{true, false} {
		for _, version := range []string{"2.0", "4.2", "5.0", "5.1"} {
			t.Run(fmt.Sprint(isBinary, version), func(t *testing.T) {
				model, err := openBytes(grid.legacy(t, isBinary, version), Options{})
				if err != nil {
					t.Fatal(err)
				}
				for _, chunk := range []int64{8192, 1001} {
					got, err := gather(model, -1, chunk)
					if err != nil {
						t.Fatal(err)
					}
					grid.check(t, got)
				}
				if source := model.Sources[0]; source.Cells != 20_000 || source.Points != 100_008 || !math.IsNaN(source.Time) {
					t.Errorf("source %+v", source)
				}
			})
		}
	}
}

package mesh

import (
	"math"
	"math/rand/v2"
	"testing"
)

// polyhedronOf returns a cell of the points and faces.
func polyhedronOf(points [][3]float64, faces [][]int32) *Cell {
	s, err := ShapeOf(Polyhedron, len(points), [3]int{})
	if err != nil {
		panic(err)
	}
	c := &Cell{Shape: s, Faces: []int32{int32(len(faces))}}
	for i, p := range points {
		c.Points = append(c.Points, p[:]...)
		c.Nodes = append(c.Nodes, int32(i))
	}
	for _, face := range faces {
		c.Faces = append(append(c.Faces, int32(len(face))), face...)
	}
	return c
}

// shuffledPoints returns the points in another order, and the faces with their numbers.
func shuffledPoints(points [][3]float64, faces [][]int32, random *rand.Rand) (moved [][3]float64, renamed [][]int32) {
	moved = make([][3]float64, len(points))
	order := random.Perm(len(points))
	for i, to := range order {
		moved[to] = points[i]
	}
	for _, face := range faces {
		var other []int32
		for _, node := range face {
			other = append(other, int32(order[node]))
		}
		renamed = append(renamed, other)
	}
	return moved, renamed
}

// shuffled returns the faces in another order, each begun elsewhere and half of them
// backwards.
func shuffled(faces [][]int32, random *rand.Rand) (other [][]int32) {
	for _, i := range random.Perm(len(faces)) {
		face := faces[i]
		start := random.IntN(len(face))
		step := 1
		if random.IntN(2) == 0 {
			step = len(face) - 1
		}
		var turned []int32
		for k := range face {
			turned = append(turned, face[(start+k*step)%len(face)])
		}
		other = append(other, turned)
	}
	return other
}

var cubeFaces = [][]int32{{0, 4, 7, 3}, {1, 2, 6, 5}, {0, 1, 5, 4}, {3, 7, 6, 2}, {0, 3, 2, 1}, {4, 5, 6, 7}}

// cubeOfFaces returns the unit cube, its faces in the order of the random numbers.
func cubeOfFaces(random *rand.Rand) *Cell {
	faces := cubeFaces
	if random != nil {
		faces = shuffled(faces, random)
	}
	return polyhedronOf([][3]float64{{0, 0, 0}, {1, 0, 0}, {1, 1, 0}, {0, 1, 0}, {0, 0, 1}, {1, 0, 1}, {1, 1, 1}, {0, 1, 1}}, faces)
}

// extruded returns a prism over a polygon, of height 1, as points and faces.
func extruded(outline [][2]float64) (points [][3]float64, faces [][]int32) {
	n := len(outline)
	bottom, top := make([]int32, n), make([]int32, n)
	for level := range 2 {
		for _, p := range outline {
			points = append(points, [3]float64{p[0], p[1], float64(level)})
		}
	}
	for i := range n {
		bottom[n-1-i], top[i] = int32(i), int32(n+i)
		next := (i + 1) % n
		faces = append(faces, []int32{int32(i), int32(next), int32(n + next), int32(n + i)})
	}
	return points, append(faces, bottom, top)
}

// Volumes and centroids in closed form, whichever way the faces are listed.
func TestPolyhedra(t *testing.T) {
	channel, channelFaces := extruded([][2]float64{{0, 0}, {3, 0}, {3, 2}, {2, 2}, {2, 1}, {1, 1}, {1, 2}, {0, 2}})
	angle, angleFaces := extruded([][2]float64{{0, 0}, {4, 0}, {4, 1}, {1, 1}, {1, 3}, {0, 3}})
	cube := cubeOfFaces(nil)
	var cubePoints [][3]float64
	for i := range cube.Nodes {
		cubePoints = append(cubePoints, cube.node(i))
	}
	// The cube whose face r = 1 is divided in two, with nodes in the middle of two of
	// its edges that the neighbouring faces do not list.
	hanging := append(append([][3]float64{}, cubePoints...), [3]float64{1, 0.5, 0}, [3]float64{1, 0.5, 1})
	hangingFaces := append([][]int32{{1, 8, 9, 5}, {8, 2, 6, 9}}, cubeFaces[0], cubeFaces[2], cubeFaces[3], cubeFaces[4], cubeFaces[5])
	random := rand.New(rand.NewPCG(23, 24))
	for _, test := range []struct {
		name     string
		points   [][3]float64
		faces    [][]int32
		volume   float64
		centroid [3]float64
	}{
		{"cube", cubePoints, cubeFaces, 1, [3]float64{0.5, 0.5, 0.5}},
		{"pyramid", [][3]float64{{0, 0, 0}, {1, 0, 0}, {1, 1, 0}, {0, 1, 0}, {0.5, 0.5, -1.5}},
			[][]int32{{0, 1, 2, 3}, {0, 1, 4}, {1, 2, 4}, {2, 3, 4}, {3, 0, 4}}, 0.5, [3]float64{0.5, 0.5, -0.375}},
		{"channel", channel, channelFaces, 5, [3]float64{1.5, 0.9, 0.5}}, // (3×1 at 0.5, 2 of 1×1 at 1.5) / 5
		{"angle", angle, angleFaces, 6, [3]float64{9. / 6, 1, 0.5}},      // 4 at (2, 0.5), 2 at (0.5, 2)
		// Edges that do not pair off: a neighbour lists a node less, a face of no area.
		{"hanging nodes", hanging, hangingFaces, 1, [3]float64{0.5, 0.5, 0.5}},
		{"folded face", cubePoints, append([][]int32{{0, 0, 1, 1}}, cubeFaces...), 1, [3]float64{0.5, 0.5, 0.5}},
	} {
		for range 50 {
			points, faces := shuffledPoints(test.points, shuffled(test.faces, random), random)
			c := polyhedronOf(points, faces)
			volume, orientation := c.Volume()
			if !near(volume, test.volume, 1e-14) || orientation != Regular || c.Measure() != volume {
				t.Errorf("%s: volume %.17g (orientation %d), want %g", test.name, volume, orientation, test.volume)
			}
			centroid := c.Centroid()
			add(&centroid, -1, test.centroid)
			if math.Sqrt(dot(centroid, centroid)) > 1e-14 {
				t.Errorf("%s: centroid is off by %v", test.name, centroid)
			}
			if c.HasWarpedFaces() {
				t.Errorf("%s: a face is warped", test.name)
			}
		}
	}
}

// What does not close has no volume; and no list of numbers makes the methods fail.
func TestPolyhedraThatDoNotClose(t *testing.T) {
	cube := cubeOfFaces(nil)
	var points [][3]float64
	for i := range cube.Nodes {
		points = append(points, cube.node(i))
	}
	inner := append([][3]float64{}, points...)
	for _, p := range points {
		inner = append(inner, [3]float64{0.25 + p[0]/2, 0.25 + p[1]/2, 0.25 + p[2]/2})
	}
	var innerFaces [][]int32
	for _, face := range cubeFaces {
		var other []int32
		for _, node := range face {
			other = append(other, node+8)
		}
		innerFaces = append(innerFaces, other)
	}
	for _, test := range []struct {
		name  string
		cell  *Cell
		faces []int32 // instead of the cell's
	}{
		{"a face is missing", polyhedronOf(points, cubeFaces[1:]), nil},
		{"a face twice", polyhedronOf(points, append([][]int32{cubeFaces[0], cubeFaces[1]}, cubeFaces[1:5]...)), nil},
		{"two bodies", polyhedronOf(inner, append(innerFaces, cubeFaces...)), nil},
		{"Möbius strip", polyhedronOf(points[:6], [][]int32{{0, 1, 2}, {1, 2, 3}, {2, 3, 4}, {3, 4, 0}, {4, 0, 1}}), nil},
		// The projective plane in six points and ten triangles: every edge has two
		// faces, and they cannot be turned alike.
		{"projective plane", polyhedronOf(points[:6], [][]int32{{0, 1, 2}, {0, 2, 3}, {0, 3, 4}, {0, 4, 5}, {0, 5, 1},
			{1, 2, 4}, {2, 3, 5}, {3, 4, 1}, {4, 5, 2}, {5, 1, 3}}), nil},
		{"no faces", cube, []int32{}},
		{"no list", cube, nil},
		{"fewer faces than said", cube, []int32{6, 4, 0, 4, 7, 3, 3, 1, 2, 6}},
		{"more faces said than listed", polyhedronOf(points, cubeFaces), append([]int32{7}, cube.Faces[1:]...)},
		{"a closed body and a face of two nodes", polyhedronOf(points, append([][]int32{{0, 1}}, cubeFaces...)), nil},
		{"a face of two nodes", cube, []int32{4, 2, 0, 1, 3, 0, 1, 2, 3, 0, 1, 2, 3, 0, 1, 2}},
		{"a face that ends behind the list", cube, []int32{4, 3, 0, 1, 2, 2000000000, 0, 1, 2}},
		{"a negative count of faces", cube, []int32{-3, 3, 0, 1, 2}},
		{"a negative count of nodes", cube, []int32{4, -3, 0, 1, 2}},
	} {
		c := *test.cell
		if test.cell == cube || test.faces != nil {
			c.Faces = test.faces
		}
		volume, orientation := c.Volume()
		if !math.IsNaN(volume) || orientation != Regular || !math.IsNaN(c.Measure()) {
			t.Errorf("%s: volume %g (orientation %d), want NaN", test.name, volume, orientation)
		}
		if c.Centroid() != c.Middle() {
			t.Errorf("%s: centroid %v, want the mean of the points", test.name, c.Centroid())
		}
		c.HasWarpedFaces()
	}
}

// Two cells on either side of a warped face fill their hull, with the face as the one
// shares it with the other.
func TestWarpedFacesAddUp(t *testing.T) {
	points := [][3]float64{
		{0, 0, 0}, {1, 0, 0}, {1, 1, 0}, {0, 1, 0},
		{0, 0, 1}, {1, 0, 1.3}, {1, 1, 0.8}, {0, 1, 1.1},
		{0, 0, 2}, {1, 0, 2}, {1, 1, 2}, {0, 1, 2},
	}
	var upper [][]int32
	for _, face := range cubeFaces {
		var other []int32
		for _, node := range face {
			other = append(other, node+4)
		}
		upper = append(upper, other)
	}
	below, above := polyhedronOf(points[:8], cubeFaces), polyhedronOf(points, upper)
	above.Nodes = above.Nodes[4:]
	one, _ := below.Volume()
	two, _ := above.Volume()
	// The triangles about the mean of the face leave below it the mean of its heights.
	if mean := (1 + 1.3 + 0.8 + 1.1) / 4; !near(one, mean, 1e-14) || !near(one+two, 2, 1e-14) {
		t.Errorf("volumes %.17g and %.17g, want %.17g and the rest of 2", one, two, mean)
	}
	if !below.HasWarpedFaces() || !above.HasWarpedFaces() {
		t.Error("the faces are not warped")
	}
	for _, test := range []struct {
		by   float64
		want bool
	}{{1e-5, false}, {1e-3, true}} {
		c := cubeOfFaces(nil)
		c.Points[3*6+2] += test.by
		if got := c.HasWarpedFaces(); got != test.want {
			t.Errorf("a node %g off: warped %v", test.by, got)
		}
		p := prismCell(t, PentagonalPrism)
		p.Points[3*6+2] += test.by
		if got := p.HasWarpedFaces(); got != test.want {
			t.Errorf("a prism's node %g off: warped %v", test.by, got)
		}
	}
	if h := testCell(t, Hexahedron, [3]int{}, points[:8]); h.HasWarpedFaces() {
		t.Error("a hexahedron maps its faces, none is warped")
	}
}

// prismCell returns a regular prism of radius 1 and height 1.
func prismCell(t testing.TB, cellType CellType) *Cell {
	t.Helper()
	count := map[CellType]int{PentagonalPrism: 10, HexagonalPrism: 12}[cellType]
	s, err := ShapeOf(cellType, count, [3]int{})
	if err != nil {
		t.Fatal(err)
	}
	return testCell(t, cellType, [3]int{}, straightNodes(s))
}

// A regular n-gon of radius 1 has the area n/2 sin(2π/n).
func TestPrisms(t *testing.T) {
	for cellType, n := range map[CellType]float64{PentagonalPrism: 5, HexagonalPrism: 6} {
		c := prismCell(t, cellType)
		want := n / 2 * math.Sin(2*math.Pi/n)
		volume, orientation := c.Volume()
		if !near(volume, want, 1e-14) || orientation != Regular {
			t.Errorf("%v: volume %.17g (orientation %d), want %.17g", cellType, volume, orientation, want)
		}
		centroid := c.Centroid()
		add(&centroid, -1, [3]float64{0, 0, 0.5})
		if math.Sqrt(dot(centroid, centroid)) > 1e-14 || c.HasWarpedFaces() {
			t.Errorf("%v: centroid is off by %v, warped %v", cellType, centroid, c.HasWarpedFaces())
		}
		for i := 2; i < len(c.Points); i += 3 {
			c.Points[i] *= -1
		}
		if volume, orientation := c.Volume(); !near(volume, -want, 1e-14) || orientation != Mirrored || !near(c.Measure(), want, 1e-14) {
			t.Errorf("%v mirrored: volume %.17g (orientation %d), measure %.17g", cellType, volume, orientation, c.Measure())
		}
		c.Points[2] = -3
		if _, orientation := c.Volume(); orientation != Tangled {
			t.Errorf("%v with a node pulled through the other end: orientation %d", cellType, orientation)
		}
	}
}

// Any list of faces gives a volume or NaN, and never a panic. All numbers of the list are
// numbers of points, as the readers see to.
func FuzzPolyhedron(f *testing.F) {
	f.Add([]byte{6, 4, 0, 4, 7, 3, 4, 1, 2, 6, 5, 4, 0, 1, 5, 4, 4, 3, 7, 6, 2, 4, 0, 3, 2, 1, 4, 4, 5, 6, 7})
	f.Add([]byte{4, 3, 0, 1, 2, 3, 1, 2, 3, 3, 2, 3, 0, 3, 3, 0, 1})
	random := rand.New(rand.NewPCG(25, 26))
	points := make([][3]float64, 256)
	for i := range points {
		points[i] = [3]float64{random.Float64(), random.Float64(), random.Float64()}
	}
	c := polyhedronOf(points, nil)
	f.Fuzz(func(t *testing.T, data []byte) {
		c.Faces = c.Faces[:0]
		for _, b := range data {
			c.Faces = append(c.Faces, int32(b))
		}
		if volume, _ := c.Volume(); volume < 0 {
			t.Errorf("volume %g of faces %v", volume, c.Faces)
		}
		c.HasWarpedFaces()
		c.Centroid()
	})
}

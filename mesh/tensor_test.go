package mesh

import (
	"math"
	"strings"
	"testing"
)

// The state of check T-02 (derived), as six places and as nine rows.
var (
	stressT02 = SymmetricTensor{120, 60, -80, -30, 25, 45}
	strainT02 = SymmetricTensor{1.8085714285714285e-3, 6.685714285714286e-4, -1.9914285714285714e-3, -5.70e-4, 4.75e-4, 8.55e-4}
)

// T-16 (derived): the double contraction counts every off-diagonal entry twice.
func TestProductOfTensors(t *testing.T) {
	rows := func(t *SymmetricTensor) [9]float64 {
		return [9]float64{t[0], t[3], t[5], t[3], t[1], t[4], t[5], t[4], t[2]}
	}
	var want float64
	for i, a := range rows(&stressT02) {
		want += a * rows(&strainT02)[i]
	}
	if got := Product(&stressT02, &strainT02); math.Abs(got-want) > 1e-15 || math.Abs(got/2-0.27567857) > 1e-8 {
		t.Errorf("product %.12g, want %.12g = 2 × 0.27567857", got, want)
	}
	for i, factor := range [6]float64{1, 1, 1, 2, 2, 2} {
		var a, b SymmetricTensor
		a[i], b[i] = 3, 5
		if got := Product(&a, &b); got != 15*factor {
			t.Errorf("component %d alone: %g, want %g", i, got, 15*factor)
		}
	}
}

func TestLayout(t *testing.T) {
	const root = math.Sqrt2
	for _, c := range []struct {
		name, order string
		shear       Shear
		sign        float64
		tuple       []float64
		want        SymmetricTensor
		missing     string
	}{
		{"VTK's own", "xx yy zz xy yz xz", TensorShear, 1, []float64{1, 2, 3, 4, 5, 6}, SymmetricTensor{1, 2, 3, 4, 5, 6}, ""},
		{"Voigt", "xx yy zz yz xz xy", TensorShear, 1, []float64{1, 2, 3, 5, 6, 4}, SymmetricTensor{1, 2, 3, 4, 5, 6}, ""},
		{"upper triangle", "xx xy xz yy yz zz", TensorShear, 1, []float64{1, 4, 6, 2, 5, 3}, SymmetricTensor{1, 2, 3, 4, 5, 6}, ""},
		{"engineering", "xx yy zz xy yz xz", EngineeringShear, 1, []float64{1, 2, 3, 8, 10, 12}, SymmetricTensor{1, 2, 3, 4, 5, 6}, ""},
		{"Mandel", "xx yy zz xy yz xz", MandelShear, 1, []float64{1, 2, 3, 4 * root, 5 * root, 6 * root}, SymmetricTensor{1, 2, 3, 4, 5, 6}, ""},
		{"compression", "xx yy zz xy yz xz", TensorShear, -1, []float64{1, 2, 3, 4, 5, 6}, SymmetricTensor{-1, -2, -3, -4, -5, -6}, ""},
		{"nine", "xx xy xz yx yy yz zx zy zz", TensorShear, 1, []float64{1, 3, 5.5, 5, 2, 4, 6.5, 6, 3}, SymmetricTensor{1, 2, 3, 4, 5, 6}, ""},
		{"nine, engineering", "xx xy xz yx yy yz zx zy zz", EngineeringShear, 1, []float64{1, 8, 12, 8, 2, 10, 12, 10, 3}, SymmetricTensor{1, 2, 3, 4, 5, 6}, ""},
		{"two by two", "xx xy yx yy", TensorShear, 1, []float64{1, 3, 5, 2}, SymmetricTensor{1, 2, 0, 4}, "zz yz xz"},
		{"plane", "xx yy xy", EngineeringShear, 1, []float64{1, 2, 8}, SymmetricTensor{1, 2, 0, 4}, "zz yz xz"},
		{"lower names", "xx yy zz yx zy zx", TensorShear, 1, []float64{1, 2, 3, 4, 5, 6}, SymmetricTensor{1, 2, 3, 4, 5, 6}, ""},
	} {
		order, err := ParseOrder(c.order, false)
		if err != nil {
			t.Fatalf("%s: %v", c.name, err)
		}
		layout, err := NewLayout(order, len(c.tuple), c.shear, c.sign)
		if err != nil {
			t.Fatalf("%s: %v", c.name, err)
		}
		got := layout.At(c.tuple)
		for i := range got {
			if math.Abs(got[i]-c.want[i]) > 1e-15*10 {
				t.Errorf("%s: component %d is %g, want %g", c.name, i, got[i], c.want[i])
			}
			if lacks := strings.Contains(c.missing, componentNames[i]); layout.Has(i) == lacks {
				t.Errorf("%s: Has(%s) = %v", c.name, componentNames[i], !lacks)
			}
		}
	}
}

func TestParseOrder(t *testing.T) {
	for _, c := range []struct {
		text  string
		axisX bool
		want  string
	}{
		{"rr zz tt rz", false, "xx yy zz xy"},
		{"rr zz tt rz", true, "yy xx zz xy"},
		{"RR tt ZZ rz", false, "xx zz yy xy"},
		{"rr tt zz rt tz rz", false, "xx zz yy xz yz xy"},
		{"xx yy zz xy", false, "xx yy zz xy"},
		{"XX YY ZZ XY YZ XZ", true, "xx yy zz xy yz xz"},
	} {
		got, err := ParseOrder(c.text, c.axisX)
		if err != nil || got.String() != c.want {
			t.Errorf("ParseOrder(%q, %v) = %q, %v, want %q", c.text, c.axisX, got, err, c.want)
		}
	}
	for text, part := range map[string]string{
		"":            "empty",
		"xx yy xx":    "twice",
		"xx yy ww":    `"ww"`,
		"rr zz tt qz": `"qz"`,
		"rr zz tt xx": "twice",
	} {
		if _, err := ParseOrder(text, false); err == nil || !strings.Contains(err.Error(), part) {
			t.Errorf("ParseOrder(%q): error %v, want one with %q", text, err, part)
		}
	}
	if _, err := NewLayout(OrderOf6, 4, TensorShear, 1); err == nil {
		t.Error("an order of six components was taken for an array of four")
	}
	for components, want := range map[int]string{3: "xx yy xy", 4: "xx yy zz xy", 6: "xx yy zz xy yz xz", 9: "xx xy xz yx yy yz zx zy zz", 5: "", 1: ""} {
		if got := DefaultOrder(components).String(); got != want {
			t.Errorf("DefaultOrder(%d) = %q, want %q", components, got, want)
		}
	}
}

func TestTensorIsFinite(t *testing.T) {
	if !stressT02.IsFinite() {
		t.Error("a finite tensor is called not finite")
	}
	for i := range 6 {
		for _, bad := range []float64{math.NaN(), math.Inf(1), math.Inf(-1)} {
			tensor := stressT02
			if tensor[i] = bad; tensor.IsFinite() {
				t.Errorf("%g in component %d is called finite", bad, i)
			}
		}
	}
	opposite := SymmetricTensor{math.Inf(1), math.Inf(-1)}
	if opposite.IsFinite() {
		t.Error("two opposite infinities are called finite")
	}
}

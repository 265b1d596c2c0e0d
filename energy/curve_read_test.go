package energy

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"
	"testing/iotest"
)

// One curve in every way of writing it.
func TestReadCurveInEveryForm(t *testing.T) {
	want := readCurve(t, "m05-aluminium.csv", CurveReading{}).Points
	for _, c := range []struct {
		name                     string
		reading                  CurveReading
		strainColumn             int
		strainUnit, stressUnit   string
		strainBy, stressBy       string
		strainHeading, resultsIn string
		first                    int // line of the first point
	}{
		{"m05-aluminium.csv", CurveReading{}, 1, "ratio", "MPa", "default", "file", "strain", "MPa", 2},
		{"m05-aluminium.csv", CurveReading{StrainColumn: "1", StressColumn: "2"}, 1, "ratio", "MPa", "default", "file", "strain", "MPa", 2},
		{"m05-aluminium.csv", CurveReading{StrainColumn: "Strain", StressColumn: "stress (mpa)", StrainUnit: "ratio"}, 1, "ratio", "MPa", "call", "file", "strain", "MPa", 2},
		{"decimal-comma-percent.csv", CurveReading{}, 1, "percent", "MPa", "file", "file", "Dehnung", "MPa", 4},
		{"decimal-comma-percent.csv", CurveReading{StrainColumn: "Dehnung", StressColumn: "Spannung"}, 1, "percent", "MPa", "file", "file", "Dehnung", "MPa", 4},
		{"decimal-comma-percent.csv", CurveReading{StrainColumn: "1", StressColumn: "2"}, 1, "percent", "MPa", "file", "file", "Dehnung", "MPa", 4},
		{"tabs-microstrain-ksi.txt", CurveReading{Stress: "MPa"}, 4, "microstrain", "ksi", "file", "file", "Strain (µε)", "MPa", 4},
		{"tabs-microstrain-ksi.txt", CurveReading{Stress: "MPa", StressColumn: "3"}, 4, "microstrain", "ksi", "file", "file", "Strain (µε)", "MPa", 4},
		{"tabs-microstrain-ksi.txt", CurveReading{Stress: "MPa", StrainColumn: "4", StressColumn: "3"}, 4, "microstrain", "ksi", "file", "file", "Strain (µε)", "MPa", 4},
		{"latin-1.csv", CurveReading{}, 1, "microstrain", "MPa", "file", "file", "strain [µm/m]", "MPa", 2},
	} {
		test := readCurve(t, c.name, c.reading)
		if test.Strain.Column != c.strainColumn || string(test.Strain.Unit) != c.strainUnit || string(test.Stress.Unit) != c.stressUnit ||
			test.Strain.DecidedBy != c.strainBy || test.Stress.DecidedBy != c.stressBy || string(test.Strain.Heading) != c.strainHeading {
			t.Errorf("%s, %+v: strain %+v, stress %+v", c.name, c.reading, test.Strain, test.Stress)
		}
		if test.StressUnit != c.resultsIn || test.Lines[0] != c.first || test.Lines[len(test.Lines)-1] != c.first+len(want)-1 || test.IsTrue || test.Path != c.name {
			t.Errorf("%s: in %s, lines %d to %d, true %v", c.name, test.StressUnit, test.Lines[0], test.Lines[len(test.Lines)-1], test.IsTrue)
		}
		samePoints(t, c.name, test.Points, want)
	}
}

// samePoints demands points that agree to twelve digits.
func samePoints(t *testing.T, name string, got, want []CurvePoint) {
	t.Helper()
	if len(got) != len(want) {
		t.Errorf("%s: %d points, want %d", name, len(got), len(want))
		return
	}
	for i := range want {
		if !within(got[i].Strain, want[i].Strain, 1e-12) || !within(got[i].Stress, want[i].Stress, 1e-12) {
			t.Errorf("%s: point %d is %v, want %v", name, i, got[i], want[i])
		}
	}
}

// A true curve comes back as the engineering one, without what follows the ultimate
// stress.
func TestReadTrueCurve(t *testing.T) {
	want := readCurve(t, "m05-aluminium.csv", CurveReading{}).Points
	test := readCurve(t, "true-stress.csv", CurveReading{})
	samePoints(t, "by its headings", test.Points, want)
	if !test.IsTrue || test.Omitted != 2 || len(test.Lines) != len(want) {
		t.Errorf("true %v, %d left out, %d lines", test.IsTrue, test.Omitted, len(test.Lines))
	}
	var text strings.Builder
	for _, p := range want {
		p = p.True()
		fmt.Fprintf(&text, "%v %v\n", p.Strain, p.Stress)
	}
	stated, err := ReadCurve(strings.NewReader(text.String()), "", CurveReading{True: true})
	if err != nil || !stated.IsTrue || stated.Omitted != 0 {
		t.Fatalf("%+v, %v", stated, err)
	}
	samePoints(t, "by the call", stated.Points, want)
}

// Small tables, and what they are taken for.
func TestReadCurveTables(t *testing.T) {
	for _, c := range []struct {
		name, text string
		reading    CurveReading
		want       []CurvePoint
	}{
		{"blanks", "0 0\n0.001   70\n", CurveReading{}, []CurvePoint{{0, 0}, {0.001, 70}}},
		{"blanks, headings with units apart", "strain (%)  stress (MPa)\n0 0\n1 70\n", CurveReading{}, []CurvePoint{{0, 0}, {0.01, 70}}},
		{"blanks and decimal commas", "0 0\n0,001 70,5\n", CurveReading{}, []CurvePoint{{0, 0}, {0.001, 70.5}}},
		{"commas and blanks", "0, 0\n1e-3, 70\n", CurveReading{}, []CurvePoint{{0, 0}, {0.001, 70}}},
		{"quoted decimal commas", "strain,stress\n\"0,0\",\"1,5\"\n\"0,001\",\"70,5\"\n", CurveReading{}, []CurvePoint{{0, 1.5}, {0.001, 70.5}}},
		{"byte order mark", "\ufeffstrain,stress\n0,0\n1,2\n", CurveReading{}, []CurvePoint{{0, 0}, {1, 2}}},
		{"empty lines and columns, comments", "\n;;\nstrain;stress;;\n\n0;0;;\n# reloaded\n!\n// and on\n;;;\n1;2;;\n\n", CurveReading{}, []CurvePoint{{0, 0}, {1, 2}}},
		{"headings in a comment", "# strain [%], stress [ksi]\n0,0\n1,2\n", CurveReading{Stress: "psi"}, []CurvePoint{{0, 0}, {0.01, 2000}}},
		{"units below the headings", "strain,stress\n(%),(GPa)\n0,0\n1,2\n", CurveReading{Stress: "MPa"}, []CurvePoint{{0, 0}, {0.01, 2000}}},
		{"unit after a stroke", "Strain/%;Stress_kPa\n0;0\n1;2\n", CurveReading{Stress: "Pa"}, []CurvePoint{{0, 0}, {0.01, 2000}}},
		{"percent sign", "Strain%,%Stress (Pa)\n0,0\n1,2000\n", CurveReading{Stress: "kPa"}, []CurvePoint{{0, 0}, {0.01, 2}}},
		{"units in brackets within", "Strain (%) gauge 1;Stress [kPa], mean\n0;0\n1;2000\n", CurveReading{Stress: "MPa"}, []CurvePoint{{0, 0}, {0.01, 2}}},
		{"brackets of no unit within", "Strain (gauge 1) %;Stress (mean) kPa\n0;0\n1;2000\n", CurveReading{Stress: "MPa"}, []CurvePoint{{0, 0}, {0.01, 2}}},
		{"percent before", "% strain;psi stress\n0;0\n1;2000\n", CurveReading{Stress: "ksi"}, []CurvePoint{{0, 0}, {0.01, 2}}},
		{"percent in words", "Percent strain;stress, MPa\n0;0\n1;2\n", CurveReading{}, []CurvePoint{{0, 0}, {0.01, 2}}},
		{"microstrain as a name", "Microstrain;MPa stress\n0;0\n1;2\n", CurveReading{}, []CurvePoint{{0, 0}, {1e-6, 2}}},
		{"microstrain as a sign", "με;σ\n0;0\n1;2\n", CurveReading{}, []CurvePoint{{0, 0}, {1e-6, 2}}},
		{"unit after a comma", "\"Strain, %\",\"Stress, N/mm^2\"\n0,0\n1,2\n", CurveReading{Stress: "kPa"}, []CurvePoint{{0, 0}, {0.01, 2000}}},
		{"per unit length", "Strain mm/mm;Stress Pa\n0;0\n1;2000\n", CurveReading{Stress: "kPa"}, []CurvePoint{{0, 0}, {1, 2}}},
		{"symbols", "σ [MPa]\tε [µε]\n0\t0\n70\t1000\n", CurveReading{}, []CurvePoint{{0, 0}, {0.001, 70}}},
		{"the call's units win", "strain (%),stress (psi)\n0,0\n1,2\n", CurveReading{StrainUnit: "microstrain", StressUnit: "GPa", Stress: "MPa"}, []CurvePoint{{0, 0}, {1e-6, 2000}}},
		{"no unit of stress: as wanted", "0,0\n1,2\n", CurveReading{Stress: "psi"}, []CurvePoint{{0, 0}, {1, 2}}},
		{"engineering chosen beside true", "true strain,true stress,engineering strain,engineering stress\n0,0,0,0\n9,9,1,2\n", CurveReading{}, []CurvePoint{{0, 0}, {1, 2}}},
		{"rates and parts passed over", "strain rate,plastic strain,strain,lateral strain,stress,shear stress\n1,2,0,4,0,6\n1,2,1,4,2,6\n", CurveReading{}, []CurvePoint{{0, 0}, {1, 2}}},
		{"title of one word for both", "Stress-strain curve of plate 5, batch 7\nstrain,stress\n0,0\n1,2\n", CurveReading{}, []CurvePoint{{0, 0}, {1, 2}}},
		{"columns by number, without headings", "0 9 0\n70 9 0.001\n", CurveReading{StrainColumn: "3", StressColumn: "1"}, []CurvePoint{{0, 0}, {0.001, 70}}},
		{"one by number, one by name", "n,load stress,x\n0,0,0\n1,70,0.001\n", CurveReading{StrainColumn: "3", StressColumn: "load stress"}, []CurvePoint{{0, 0}, {0.001, 70}}},
		{"text beside", "strain,stress,remark\n0,0,\n1,2,\"broke, at last\"\n", CurveReading{}, []CurvePoint{{0, 0}, {1, 2}}},
		{"not from zero, CR LF", "strain,stress\r\n-1e-5,-0.5\r\n1E-3,+70.\r\n", CurveReading{}, []CurvePoint{{-1e-5, -0.5}, {0.001, 70}}},
	} {
		test, err := ReadCurve(strings.NewReader(c.text), c.name, c.reading)
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		samePoints(t, c.name, test.Points, c.want)
	}
}

// What cannot be used, by line, with the mend.
func TestReadCurveRefuses(t *testing.T) {
	for _, c := range []struct {
		text    string
		reading CurveReading
		want    string
	}{
		{"", CurveReading{}, "x: no table of strain and stress: want headings that name them, or two columns of numbers"},
		{"strain,stress\n", CurveReading{}, "x: a curve needs at least 2 points, found 0"},
		{"strain,stress\n0,0\n", CurveReading{}, "x: a curve needs at least 2 points, found 1"},
		{"words\nand more\n", CurveReading{}, "x: no table"},
		{"strain,stress\n0,0\n1,abc\n", CurveReading{}, `x:3: stress in column 2: "abc" is no number`},
		{"strain,stress\n0,0\n1e999,1\n", CurveReading{}, `x:3: strain in column 1: "1e999" is no number`},
		{"strain,stress\n0,0\n1,-2e100\n", CurveReading{}, `x:3: stress in column 2: "-2e100" is too large`},
		{"strain,stress\n0,0\n1,NaN\n", CurveReading{}, `x:3: stress in column 2: "NaN" is no number`},
		{"strain,stress\n0,0\nInf,1\n", CurveReading{}, `x:3: strain in column 1: "Inf" is no number`},
		{"strain,stress\n0,0\n0x1p2,1\n", CurveReading{}, `x:3: strain in column 1: "0x1p2" is no number`},
		{"strain;stress\n0;0\n1;1.234,5\n", CurveReading{}, `x:3: stress in column 2: "1.234,5" is no number`},
		{"strain;stress\n0;0.5\n\n1;70,5\n", CurveReading{}, "x:4: a decimal point in line 2 and a decimal comma in line 4"},
		{"strain,stress\n0,0\n1\n", CurveReading{}, "x:3: column 2, the stress, is empty"},
		{"strain,stress\n0,0\n,1\n", CurveReading{}, "x:3: column 1, the strain, is empty"},
		{"strain,stress\n0,0\n0,001,70,5\n", CurveReading{}, "x:3: 4 fields in a table of 2 columns (decimal commas need semicolons, tabs or quotes)"},
		{"0,0\n0,001,70,5\n", CurveReading{}, "x:2: 4 fields in a table of 2 columns"},
		{"0,1,2\n1,2,3\n", CurveReading{}, "x:1: 3 columns, and no headings that name strain and stress: state the numbers of the two columns"},
		{"strain,stress\n0,0\n1,2\n1,3\n", CurveReading{}, "x:4: strain 1 repeats that of line 3"},
		{"strain,stress\n0,0\n2,2\n\n1,1\n", CurveReading{}, "x:5: strain falls from 2 in line 3 to 1: strain must rise; leave out the unloading loop"},
		{"strain,stress\n0,0\n-1,-2\n", CurveReading{}, "x:3: strain falls from 0 to -1: a compression test is to be given with positive strain and stress"},
		{"strain (in),stress\n0,0\n1,2\n", CurveReading{}, `x:1: column "strain (in)": the unit "in" is not known: state the unit of the strain`},
		{"\nstrain,stress [kgf/mm2]\n0,0\n1,2\n", CurveReading{}, `x:2: column "stress [kgf/mm2]": the unit "kgf/mm2" is not known: state the unit of the stress`},
		{"strain,stress,stress 2\n0,0,0\n1,2,3\n", CurveReading{}, `x:1: "stress" and "stress 2" could both be the stress: state the heading or the number of one`},
		{"true strain,stress\n0,0\n1,2\n", CurveReading{}, `x:1: "true strain" and "stress" do not go together`},
		{"strain,stress\n0,0\n1,2\n", CurveReading{StressColumn: "force"}, `x:2: the numbers begin, and no line above has a column "force"`},
		{"0 0\n1 2\n", CurveReading{StrainColumn: "3", StressColumn: "1"}, "x: no table"},
		{"strain,stress\n0,0\n1,2\n", CurveReading{StrainColumn: "3"}, "x:2: column 3, the strain, is empty"},
		{"\xff\xfes\x00", CurveReading{}, "x:1: the text is UTF-16; save it as UTF-8"},
		{"\xfe\xff\x00s", CurveReading{}, "x:1: the text is UTF-16"},
		{"0,0\n1,\x002\n", CurveReading{}, "x:2: a zero byte: this is no text file"},
		{"0,0\n" + strings.Repeat("1", maxCurveLine+1), CurveReading{}, "x:2: longer than 1048576 bytes"},
		{"true strain,true stress\n0,0\n1e5,1\n", CurveReading{}, "x:3: strain +Inf"},
		{"true strain,true stress\n0,1\n1,1\n2,1\n", CurveReading{}, "x: a curve needs at least 2 points, found 1"},
	} {
		test, err := ReadCurve(strings.NewReader(c.text), "x", c.reading)
		var place *CurveError
		if !errors.As(err, &place) || !strings.HasPrefix(err.Error(), c.want) {
			t.Errorf("%.60q: %+v, error %v, want %q", c.text, test, err, c.want)
		}
	}
	for _, c := range []struct {
		reading CurveReading
		want    string
	}{
		{CurveReading{StrainUnit: "%"}, `strain unit "%": want one of microstrain, percent, ratio`},
		{CurveReading{StressUnit: "bar"}, `stress unit "bar": want MPa, Pa`},
		{CurveReading{Stress: "Mpa"}, `stress unit "Mpa": want MPa, Pa`},
		{CurveReading{StrainColumn: "0"}, "column 0: columns are counted from 1"},
		{CurveReading{StressColumn: "-1"}, "column -1: columns are counted from 1"},
		{CurveReading{StrainColumn: "2", StressColumn: "2"}, "column 2 is to be both strain and stress"},
	} {
		_, err := ReadCurve(strings.NewReader("0,0\n1,2\n"), "x", c.reading)
		var study *StudyError
		if !errors.As(err, &study) || !strings.HasPrefix(err.Error(), c.want) {
			t.Errorf("%+v: error %v, want %q", c.reading, err, c.want)
		}
	}
	fault := errors.New("the disk is gone")
	var place *CurveError
	if _, err := ReadCurve(iotest.ErrReader(fault), "x", CurveReading{}); !errors.Is(err, fault) || !errors.As(err, &place) {
		t.Errorf("error %v, want the reader's own, with the path", err)
	}
	if _, err := ReadCurve(iotest.ErrReader(&fs.PathError{Op: "read", Path: "x", Err: fault}), "x", CurveReading{}); err.Error() != "x: the disk is gone" {
		t.Errorf("error %q, want the path once", err)
	}
}

// Whatever the bytes: an error with a place, or a record that keeps its promises, does
// not depend on how the bytes arrive, and reads back from its own points.
func FuzzReadCurve(f *testing.F) {
	paths, err := filepath.Glob(filepath.Join("..", "testdata", "curves", "*.[ct][sx][vt]"))
	if err != nil || len(paths) < 10 {
		f.Fatalf("%d curves, %v", len(paths), err)
	}
	for _, path := range paths {
		data, err := os.ReadFile(path)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(data)
		f.Add(data[:len(data)/2])
	}
	f.Add([]byte("0,0\n0x1p2,1\n"))
	f.Add([]byte("\"\n0;\"1\";\n"))
	f.Add([]byte("0 0\n1 1e300\n2 1.5e308\n3 1.7e308\n"))
	f.Add([]byte("0 0\n1e-320 1e-310\n2e-320 2e-310\n1e-315 3e-310\n"))
	f.Add([]byte("0 0\n1e99 1e-99\n2e99 2e-99\n"))
	f.Add([]byte("0 0\n1e-99 1e99\n2e-99 2e99\n1 3e99\n"))
	f.Fuzz(func(t *testing.T, data []byte) {
		test, err := ReadCurve(bytes.NewReader(data), "fuzz", CurveReading{Stress: "MPa"})
		if err != nil {
			var place *CurveError
			if !errors.As(err, &place) || place.Path != "fuzz" || place.Line < 0 || place.Line > bytes.Count(data, []byte("\n"))+1 {
				t.Fatalf("error without a place: %v", err)
			}
			return
		}
		if len(test.Points) != len(test.Lines) || test.StressUnit != "MPa" {
			t.Fatalf("%d points, %d lines, in %s", len(test.Points), len(test.Lines), test.StressUnit)
		}
		if _, err := NewCurve(test.Points); err != nil {
			t.Fatalf("accepted points that make no curve: %v", err)
		}
		again, err := ReadCurve(iotest.OneByteReader(bytes.NewReader(data)), "fuzz", CurveReading{Stress: "MPa"})
		if err != nil || !reflect.DeepEqual(test, again) {
			t.Fatalf("the record depends on how the bytes arrive (%v)", err)
		}
		var text bytes.Buffer
		for _, p := range test.Points {
			fmt.Fprintf(&text, "%v;%v\n", p.Strain, p.Stress)
		}
		back, err := ReadCurve(&text, "back", CurveReading{Stress: "MPa"})
		if err != nil || !reflect.DeepEqual(back.Points, test.Points) {
			t.Fatalf("the points read back as %v (%v)", back, err)
		}
		// The analysis may refuse a curve; otherwise its numbers can be written.
		analysis, err := AnalyseCurve(test, CurveOptions{})
		if err != nil {
			return
		}
		if _, err := json.Marshal(analysis); err != nil || !(analysis.Modulus.YoungsModulus > 0) {
			t.Fatalf("modulus %g, %v", float64(analysis.Modulus.YoungsModulus), err)
		}
	})
}

func BenchmarkReadCurve(b *testing.B) {
	var text bytes.Buffer
	for _, p := range sample(lawM03, 400, 100000) {
		fmt.Fprintf(&text, "%.9g;%.9g\n", p.Strain, p.Stress)
	}
	b.SetBytes(int64(text.Len()))
	for b.Loop() {
		if _, err := ReadCurve(bytes.NewReader(text.Bytes()), "", CurveReading{}); err != nil {
			b.Fatal(err)
		}
	}
}

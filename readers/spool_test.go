package readers

import (
	"bytes"
	"compress/gzip"
	"context"
	"encoding/base64"
	"errors"
	"io"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/klauspost/compress/zstd"
)

// tetrahedronXZ is legacyTetrahedron in an .xz file (xz 5.4).
const tetrahedronXZ = `/Td6WFoAAATm1rRGAgAhARYAAAB0L+Wj4ACLAHVdABGIC0eRr4+jaSYywFGwh67Z6ByrLFaNZq1JTLbfjP+ma6kUPkQXhsO6OVxu
xcKBfU6apnjf2410bdTLmGtdtNcNkN1XYo7Rl03nwUqohAEhbq/uka3rW6ZdmhGqkVWOqotE7ZCOFEewXZ5O0mBXXX57PbRX/AAA
AAAfke3R6KChGwABkQGMAQAAP1tCjrHEZ/sCAAAAAARZWg==`

func packed(t *testing.T, form, text string) string {
	t.Helper()
	var to bytes.Buffer
	var w io.WriteCloser
	switch form {
	case "gz":
		w = gzip.NewWriter(&to)
	case "zst":
		var err error
		if w, err = zstd.NewWriter(&to); err != nil {
			t.Fatal(err)
		}
	}
	if _, err := io.WriteString(w, text); err != nil {
		t.Fatal(err)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return to.String()
}

// useTempDir makes a folder of its own the place of temporary files.
func useTempDir(t *testing.T) string {
	t.Helper()
	folder := t.TempDir()
	t.Setenv("TMPDIR", folder)
	return folder
}

func left(t *testing.T, folder string) int {
	t.Helper()
	entries, err := os.ReadDir(folder)
	if err != nil {
		t.Fatal(err)
	}
	return len(entries)
}

func TestPackedFiles(t *testing.T) {
	temporary := useTempDir(t)
	grid := tetrahedron("", cellData("s=1"))
	folder := writeFiles(t, map[string]string{
		"one.vtu.gz": packed(t, "gz", grid), "two.vtu.zst": packed(t, "zst", grid), "three.vtk": packed(t, "gz", legacyTetrahedron),
		"all.pvtu": packed(t, "gz", parallel("PUnstructuredGrid", "one.vtu.gz", "two.vtu.zst")),
	})
	for name, cells := range map[string]int64{"one.vtu.gz": 1, "two.vtu.zst": 1, "three.vtk": 1, "all.pvtu": 2} {
		model, err := Open(context.Background(), []string{filepath.Join(folder, name)}, Options{})
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		got, err := gather(model, -1, 8192)
		if err != nil || got.cells != cells || model.Blocks[0] != name {
			t.Errorf("%s: %+v, %v", name, got, err)
		}
		info, err := os.Stat(filepath.Join(folder, name))
		if err != nil || model.Sources[0].Bytes != info.Size() {
			t.Errorf("%s: %d bytes, %v", name, model.Sources[0].Bytes, err)
		}
		if err := model.Close(); err != nil {
			t.Errorf("%s: %v", name, err)
		}
		if err := model.Close(); err != nil {
			t.Errorf("%s closed twice: %v", name, err)
		}
	}
	if n := left(t, temporary); n != 0 {
		t.Errorf("%d temporary files left", n)
	}
}

func unpackedXZ(t testing.TB) []byte {
	t.Helper()
	data, err := base64.StdEncoding.DecodeString(tetrahedronXZ)
	if err != nil {
		t.Fatal(err)
	}
	return data
}

func TestXZ(t *testing.T) {
	data := unpackedXZ(t)
	_, got := read(t, string(data))
	if got.cells != 1 || math.Abs(got.measure["3"]-1./6) > 1e-15 {
		t.Errorf("%+v", got)
	}
	damaged := bytes.Clone(data)
	damaged[40] ^= 1
	for _, bad := range [][]byte{data[:len(data)-20], damaged} {
		if _, err := openBytes(bad, Options{}); !errors.Is(err, ErrMalformed) || !strings.Contains(err.Error(), "xz") {
			t.Errorf("%v", err)
		}
	}
}

func TestPackedErrors(t *testing.T) {
	temporary := useTempDir(t)
	grid := tetrahedron("", "") + strings.Repeat(" ", 1<<20)
	gz, zst := packed(t, "gz", grid), packed(t, "zst", grid)
	for _, test := range []struct {
		text   string
		limits Limits
		kind   error
	}{
		{gz[:len(gz)-10], Limits{}, ErrMalformed}, {zst[:len(zst)-10], Limits{}, ErrMalformed}, {gz[:5], Limits{}, ErrMalformed},
		{gz, Limits{Decoded: 1 << 19}, ErrLimit}, {zst, Limits{Decoded: 1 << 19}, ErrLimit}, {packed(t, "gz", ""), Limits{}, ErrTruncated},
		{packed(t, "gz", gz), Limits{}, ErrUnsupported},
	} {
		_, err := openBytes([]byte(test.text), Options{Limits: test.limits})
		place := new(Error)
		if !errors.As(err, &place) || !errors.Is(err, test.kind) {
			t.Errorf("%d bytes: %v, want %v", len(test.text), err, test.kind)
		}
	}
	if n := left(t, temporary); n != 0 {
		t.Errorf("%d temporary files left", n)
	}
}

func TestStandardInput(t *testing.T) {
	temporary := useTempDir(t)
	for _, text := range []string{tetrahedron("", ""), packed(t, "gz", legacyTetrahedron)} {
		model, err := Open(context.Background(), []string{"-"}, Options{Stdin: strings.NewReader(text)})
		if err != nil {
			t.Fatal(err)
		}
		got, err := gather(model, -1, 8192)
		if err != nil || got.cells != 1 || model.Sources[0].Path != "-" || model.Blocks[0] != "-" {
			t.Errorf("%+v, %v", model, err)
		}
		if err := model.Close(); err != nil {
			t.Error(err)
		}
	}
	_, err := Open(context.Background(), []string{"-"}, Options{Stdin: io.MultiReader(strings.NewReader("<VTK"), failingReader{})})
	if place := new(Error); !errors.As(err, &place) || place.Path != "-" {
		t.Errorf("%v", err)
	}
	if n := left(t, temporary); n != 0 {
		t.Errorf("%d temporary files left", n)
	}
}

// A call does not wait for input that nobody wants any more.
func TestStandardInputThatNeverComes(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	never, _ := io.Pipe()
	time.AfterFunc(10*time.Millisecond, cancel)
	if err := justError(Open(ctx, []string{"-"}, Options{Stdin: never})); !errors.Is(err, context.Canceled) {
		t.Errorf("%v", err)
	}
}

type failingReader struct{}

func (failingReader) Read([]byte) (int, error) { return 0, errors.New("the pipe broke") }

func FuzzPacked(f *testing.F) {
	f.Add(unpackedXZ(f))
	for _, form := range []string{"gz", "zst"} {
		f.Add([]byte(packed(new(testing.T), form, tetrahedron("", ""))))
	}
	f.Fuzz(checkPromises)
}

// A call that is cancelled ends with the context's error, wherever it is.
func TestCancellation(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	model, err := openBytes([]byte(legacyTetrahedron), Options{})
	if err != nil {
		t.Fatal(err)
	}
	cursor := newTestCursor(t, model)
	cancel()
	folder := writeFiles(t, map[string]string{"x.vtk": legacyTetrahedron, "x.gz": packed(t, "gz", legacyTetrahedron)})
	for name, err := range map[string]error{
		"points": cursor.Points(ctx, 0, 0, 4, make([]float64, 12)),
		"cells":  cursor.Cells(ctx, spanOf(0, 1), nil, nil),
		"open":   justError(Open(ctx, []string{filepath.Join(folder, "x.vtk")}, Options{})),
		"spool":  justError(Open(ctx, []string{filepath.Join(folder, "x.gz")}, Options{})),
	} {
		if !errors.Is(err, context.Canceled) {
			t.Errorf("%s: %v", name, err)
		}
	}
}

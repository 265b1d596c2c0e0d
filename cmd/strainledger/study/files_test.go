package study

import (
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"strings"
	"testing"
)

func TestFiles(t *testing.T) {
	folder := filepath.Join(t.TempDir(), "run [1]*") // characters of a pattern in the folder's name
	for _, name := range []string{"r10.vtu", "r9.vtu", "r2.vtu", "R3.vtu", "a[1].vtu", "a1.vtu", "sub/x.vtu", "größe 1.vtu"} {
		write(t, folder, name, "")
	}
	if err := os.Mkdir(filepath.Join(folder, "r1.vtu"), 0o755); err != nil {
		t.Fatal(err)
	}
	absolute := filepath.Join(folder, "sub", "x.vtu")
	for name, c := range map[string]struct {
		files string // of the study
		want  []string
		fault string
	}{
		"none":                {``, nil, ""},
		"in the order given":  {`["r9.vtu", "größe 1.vtu", "r2.vtu"]`, []string{"r9.vtu", "größe 1.vtu", "r2.vtu"}, ""},
		"below and beside":    {`["./sub/../r2.vtu", "sub/x.vtu"]`, []string{"r2.vtu", "sub/x.vtu"}, ""},
		"natural order":       {`["r*.vtu"]`, []string{"r2.vtu", "r9.vtu", "r10.vtu"}, ""},
		"pattern in a folder": {`["s*/?.vtu"]`, []string{"sub/x.vtu"}, ""},
		"name, no pattern":    {`["a[1].vtu"]`, []string{"a[1].vtu"}, ""},
		"pattern, no name":    {`["a[0-9].vtu"]`, []string{"a1.vtu"}, ""},
		"not there":           {`["no.vtu"]`, []string{"no.vtu"}, ""}, // for the reader to say
		"absolute":            {`['` + absolute + `']`, []string{"sub/x.vtu"}, ""},
		"matches nothing":     {`["b*.vtu"]`, nil, `s.toml:1:16: no file matches "b*.vtu"; mend the pattern or export the files first`},
		"bad pattern":         {`["b[.vtu"]`, nil, `s.toml:1:16: "b[.vtu" is no pattern for file names: syntax error in pattern; close its brackets`},
		"twice":               {`["r2.vtu", "./r2.vtu"]`, nil, `s.toml:1:26: the file "FOLDER/r2.vtu" is named twice; name it once`},
		"twice, by a pattern": {`["r2.vtu", "r*.vtu"]`, nil, `s.toml:1:26: the file "FOLDER/r2.vtu" is named twice; name it once`},
		"twice, not there":    {`["no.vtu", "no.vtu"]`, nil, `s.toml:1:26: the file "FOLDER/no.vtu" is named twice; name it once`},
		"a folder":            {`["sub"]`, nil, `s.toml:1:16: "sub" is a folder; name the files in it, such as "sub/*.vtu"`},
	} {
		t.Run(name, func(t *testing.T) {
			text := ""
			if c.files != "" {
				text = "input.files = " + c.files
			}
			path := write(t, folder, "s.toml", text)
			got, err := Read(path, Flags{}, nil)
			if c.fault != "" {
				want := strings.ReplaceAll(filepath.Join(folder, c.fault), "FOLDER", folder)
				if err == nil || err.Error() != want {
					t.Errorf("got  %v\nwant %s", err, want)
				}
				return
			}
			if err != nil {
				t.Fatal(err)
			}
			for i := range c.want {
				c.want[i] = filepath.Join(folder, c.want[i])
			}
			if !slices.Equal(got.Files, c.want) {
				t.Errorf("got  %q\nwant %q", got.Files, c.want)
			}
		})
	}
}

// Files of the command line take the place of the study's, which need not be there,
// and are not looked for beside it.
func TestFilesOfTheCommandLine(t *testing.T) {
	folder := t.TempDir()
	t.Chdir(folder)
	write(t, folder, "study/s.toml", `input.files = ["none*.vtu"]`)
	write(t, folder, "b10.vtu", "")
	write(t, folder, "b9.vtu", "")
	got, err := Read("study/s.toml", Flags{}, []string{"b*.vtu", Stdin, "../x.vtu"})
	if err != nil {
		t.Fatal(err)
	}
	if want := []string{"b9.vtu", "b10.vtu", "-", "../x.vtu"}; !slices.Equal(got.Files, want) {
		t.Errorf("got %q, want %q", got.Files, want)
	}
	for want, files := range map[string][]string{
		`the file "b9.vtu" is named twice; name it once`:                                               {"b9.vtu", "b9.vtu"},
		`the file "-" is named twice; name it once`:                                                    {"-", "-"},
		`no file matches "c*"; mend the pattern or export the files first`:                             {"c*"},
		`"study" is a folder; name the files in it, such as "` + filepath.Join("study", "*.vtu") + `"`: {"study"},
	} {
		if _, err := Read("", Flags{}, files); err == nil || err.Error() != want {
			t.Errorf("%q: got %v, want %s", files, err, want)
		}
	}
}

// One file by two names counts once, so its energy is not booked twice.
func TestFileNamedByALink(t *testing.T) {
	if runtime.GOOS == "windows" {
		t.Skip("links need a privilege on Windows")
	}
	folder := t.TempDir()
	file := write(t, folder, "a.vtu", "")
	link := filepath.Join(folder, "b.vtu")
	if err := os.Symlink(file, link); err != nil {
		t.Fatal(err)
	}
	want := `the file "` + link + `" is named twice; name it once`
	if _, err := Read("", Flags{}, []string{file, link}); err == nil || err.Error() != want {
		t.Errorf("got %v, want %s", err, want)
	}
}

func TestNaturalOrder(t *testing.T) {
	rising := []string{"", "01", "1", "2", "10", "a", "a0", "a00", "a1", "a1b", "a2", "a02b", "a10", "b", "step 9.vtu", "step 10.vtu", "ä"}
	for i, a := range rising {
		for j, b := range rising {
			if got := naturally(a, b); sign(got) != sign(i-j) {
				t.Errorf("naturally(%q, %q) = %d", a, b, got)
			}
		}
	}
}

func sign(n int) int { return max(-1, min(1, n)) }

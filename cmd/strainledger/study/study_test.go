package study

import (
	"errors"
	"math"
	"os"
	"path/filepath"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"strainledger/energy"
	"strainledger/mesh"
)

// whole uses every key that is built.
const whole = `title = "Mooring bracket, fillet R5"
[units]
length = "mm"
stress = "MPa"
mass = "kg"
[input]
files = ["bracket-r5.vtu"]
time = 2.5
[model]
idealisation = "axisymmetric"
axis = "x"
points = "deformed"
repeats = 4
[energy]
from = "stress-strain"
[fields]
stress = { arrays = ["srr", "szz", "stt", "srz"], order = "rr zz tt rz", on = "cell", shear = "mandel", sign = "compression" }
strain = { array = "strain", on = "point", order = "xx yy zz xy", shear = "engineering", kind = "elastic" }
thermal_strain = "eth"
plastic_strain = false
equivalent_plastic_strain = { array = "peeq", on = "cell" }
displacement = { arrays = ["ux", "uy"] }
temperature = "T"
nodal_force = { array = "f", on = "point" }
element_id = { array = "id" }
[[material]]
name = "S355"
youngs_modulus = 210_000
poissons_ratio = 0.3
proportional_limit = 330.0
source = "EN 10025-2, minimum"
yield_stress = 355
hardening_exponent = 12.5
control_radius = 0.28
critical_density = 0.105
fracture_toughness = 2500
tensile_strength = 510
density = 7.85e-6
thermal_expansion = 1.2e-5
reference_temperature = -20
[[material]]
name = "rubber"
proportional_limit = 1.5
proportional_limit_compression = 4
[[region]]
name = "web"
select = { array = "part", values = [1, 2.5, -3] }
material = "S355"
criterion = "tresca"
[[region]]
name = "Steg, größer"
select = { block = "hull/*" }
optional = true
[[region]]
name = "corner"
select = { box = [[0, 0, -1.5], [10, 20, 1.5]] }
material = "rubber"
criterion = "max-principal"
[[region]]
name = "others"
[region.select]
rest = true
[limit]
criterion = "distortion-energy"
list = 7
[hotspots]
count = 3
by = "energy"
prominence = 0.15
pool = 4096
radius = 2.5
centre = [1, 2.5, -3]
[error]
estimate = true
target = 0.1
recovery = "patches"
[balance]
external_work = 12.5
[[elsewhere]]
name = "bolts"
energy = 0.8
source = "hand calculation 7"
[[elsewhere]]
name = "spring"
energy = 2
[loading]
control = "mixed"
scale = 1.25
[compare]
tolerance = 7.5
[[require]]
name = "web stores little"
quantity = "energy"
region = "web"
at_most = 120.0
[[require]]
quantity = "max_utilisation"
at_least = 0.25
at_most = 1
[[require]]
name = "first hotspot"
quantity = "hotspot.1.density"
at_most = 0.5
[[require]]
name = "balanced"
quantity = "balance.gap"
at_most = 0.02
[[accept]]
code = "large-strain"
reason = "rubber pad, not judged"
[review]
document = "MB-7"
revision = "C"
prepared_by = "A. N."
checked_by = ""
`

// wholeOptions is what whole says, written by hand.
func wholeOptions() energy.Options {
	work := 12.5
	steel, rubber := energy.NewMaterial("S355"), energy.NewMaterial("rubber")
	steel.YoungsModulus, steel.PoissonsRatio, steel.ProportionalLimit = 210000, 0.3, 330
	steel.Source, steel.Density = "EN 10025-2, minimum", 7.85e-6
	steel.YieldStress, steel.HardeningExponent = 355, 12.5
	steel.ControlRadius, steel.CriticalDensity, steel.FractureToughness, steel.TensileStrength = 0.28, 0.105, 2500, 510
	rubber.ProportionalLimit, rubber.ProportionalLimitCompression = 1.5, 4
	steel.ThermalExpansion, steel.ReferenceTemperature = 1.2e-5, -20
	return energy.Options{
		Title: "Mooring bracket, fillet R5", Length: "mm", Stress: "MPa", Mass: "kg",
		Idealisation: energy.Axisymmetric, AxisX: true, Deformed: true, Repeats: 4,
		From: energy.FromStressStrain,
		Fields: energy.Fields{
			// With the axis along x the radius is y: rr is yy, zz is xx, tt is zz, rz is xy.
			Stress: energy.Field{Arrays: []string{"srr", "szz", "stt", "srz"}, Order: mesh.Order{"yy", "xx", "zz", "xy"},
				On: mesh.OnCell, Shear: "mandel", Compression: true},
			Strain: energy.Field{Arrays: []string{"strain"}, Order: mesh.Order{"xx", "yy", "zz", "xy"},
				On: mesh.OnPoint, Shear: "engineering", Kind: "elastic"},
			ThermalStrain:           energy.Field{Arrays: []string{"eth"}},
			PlasticStrain:           energy.Field{Off: true},
			EquivalentPlasticStrain: energy.Field{Arrays: []string{"peeq"}, On: mesh.OnCell},
			Displacement:            energy.Field{Arrays: []string{"ux", "uy"}},
			Temperature:             energy.Field{Arrays: []string{"T"}},
			NodalForce:              energy.Field{Arrays: []string{"f"}, On: mesh.OnPoint},
			ElementID:               energy.Field{Arrays: []string{"id"}},
		},
		Materials: []energy.Material{steel, rubber},
		Regions: []energy.Region{
			{Name: "web", Array: "part", Values: []float64{1, 2.5, -3}, Material: "S355", Criterion: energy.Tresca},
			{Name: "Steg, größer", Block: "hull/*", Optional: true},
			{Name: "corner", Box: &energy.Box{Low: energy.Vector{0, 0, -1.5}, High: energy.Vector{10, 20, 1.5}}, Material: "rubber", Criterion: energy.MaxPrincipal},
			{Name: "others", Rest: true},
		},
		Limit:    energy.LimitOptions{Criterion: energy.DistortionEnergy, List: 7},
		Hotspots: energy.HotspotOptions{Count: 3, By: "energy", Prominence: 0.15, Pool: 4096, Radius: 2.5, Centre: &energy.Vector{1, 2.5, -3}},
		Error:    energy.ErrorOptions{Estimate: true, Target: 0.1, Recovery: energy.ByPatches},
		Balance:  energy.BalanceOptions{ExternalWork: &work},
		Elsewhere: []energy.Elsewhere{
			{Name: "bolts", Energy: 0.8, Source: "hand calculation 7"},
			{Name: "spring", Energy: 2},
		},
		Requirements: []energy.Requirement{
			{Name: "web stores little", Quantity: "energy", Region: "web", AtMost: 120, AtLeast: energy.None},
			{Name: "max_utilisation >= 0.25 and <= 1", Quantity: "max_utilisation", AtMost: 1, AtLeast: 0.25},
			{Name: "first hotspot", Quantity: "hotspot.1.density", AtMost: 0.5, AtLeast: energy.None},
			{Name: "balanced", Quantity: "balance.gap", AtMost: 0.02, AtLeast: energy.None},
		},
		Acceptances: []energy.Acceptance{{Code: "large-strain", Reason: "rubber pad, not judged"}},
		Review:      energy.Review{Document: "MB-7", Revision: "C", PreparedBy: "A. N."},

		Loading: &energy.Loading{Control: "mixed", Scale: 1.25}, HotspotTolerance: 7.5,
	}
}

// sameNumbers holds missing numbers for equal.
var sameNumbers = cmp.Options{cmpopts.EquateNaNs(), cmp.Comparer(func(a, b energy.Number) bool {
	return a == b || !a.Exists() && !b.Exists()
})}

// write puts a file into a temporary folder and returns its path.
func write(t *testing.T, folder, name, text string) string {
	t.Helper()
	path := filepath.Join(folder, name)
	if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	return path
}

func TestReadWhole(t *testing.T) {
	folder := t.TempDir()
	path := write(t, folder, "study.toml", whole)
	got, err := Read(path, Flags{}, nil)
	if err != nil {
		t.Fatal(err)
	}
	time := 2.5
	want := &Study{
		Path: path,
		// sha256sum of the text above
		SHA256:  "c3c657319f0bea90a81ca8fb26e79b2b56f6e7f10fd1b8f7a897c18ea3c8f1ab",
		Options: wholeOptions(),
		Files:   []string{filepath.Join(folder, "bracket-r5.vtu")},
		Time:    Time{Value: &time},
	}
	if difference := cmp.Diff(want, got, sameNumbers); difference != "" {
		t.Errorf("want -, got +\n%s", difference)
	}
}

// Loads with the displacement along them give the external work in its place.
func TestLoads(t *testing.T) {
	to := &faults{}
	study, _ := parseStudy("s.toml", []byte(`
[[balance.load]]
name = "line pull"
force = [1000, -2.5, 0]
displacement = [0.5, 0, 3]
[[balance.load]]
force = [0, 7]
displacement = [1, 2]
`), Flags{}, to)
	if err := to.err(); err != nil {
		t.Fatal(err)
	}
	want := energy.BalanceOptions{Loads: []energy.Load{
		{Name: "line pull", Force: energy.Vector{1000, -2.5, 0}, Displacement: energy.Vector{0.5, 0, 3}},
		{Force: energy.Vector{0, 7, 0}, Displacement: energy.Vector{1, 2, 0}},
	}}
	if difference := cmp.Diff(want, study.Options.Balance); difference != "" {
		t.Errorf("want -, got +\n%s", difference)
	}
}

// The forms of one study that mean the same.
func TestFormsThatMeanTheSame(t *testing.T) {
	for name, text := range map[string]string{
		"windows line ends": "title = \"t\"\r\n[units]\r\nlength = \"mm\"\r\n",
		"byte order mark":   "\ufefftitle = \"t\"\nunits.length = \"mm\"",
		"dotted":            "title = 't'\nunits.length = 'mm'",
		"inline":            "title = \"\"\"t\"\"\"\nunits = { length = \"mm\" }",
		"quoted keys":       "\"title\" = \"\\u0074\"\n['units']\n\"length\" = 'mm' # millimetres",
	} {
		t.Run(name, func(t *testing.T) {
			to := &faults{path: "s.toml"}
			study, _ := parseStudy("s.toml", []byte(text), Flags{}, to)
			if err := to.err(); err != nil {
				t.Fatal(err)
			}
			if want := (energy.Options{Title: "t", Length: "mm", Idealisation: energy.Solid}); !cmp.Equal(study.Options, want) {
				t.Errorf("got %+v", study.Options)
			}
		})
	}
}

func TestEmptyStudyIsSolidAndNothingElse(t *testing.T) {
	got, err := Read("", Flags{}, nil)
	if err != nil {
		t.Fatal(err)
	}
	if want := (&Study{Options: energy.Options{Idealisation: energy.Solid}}); !cmp.Equal(got, want) {
		t.Errorf("got %+v", got)
	}
}

// Materials of which nothing is given hold NaN and never 0.
func TestMissingNumbersAreNaN(t *testing.T) {
	got, err := Read("", Flags{Materials: []string{"name=S"}}, nil)
	if err != nil {
		t.Fatal(err)
	}
	material := got.Options.Materials[0]
	for name, value := range map[string]float64{
		"youngs_modulus": material.YoungsModulus, "poissons_ratio": material.PoissonsRatio,
		"proportional_limit": material.ProportionalLimit, "proportional_limit_compression": material.ProportionalLimitCompression,
		"yield_stress": material.YieldStress, "hardening_exponent": material.HardeningExponent, "density": material.Density,
		"control_radius": material.ControlRadius, "critical_density": material.CriticalDensity,
		"fracture_toughness": material.FractureToughness, "tensile_strength": material.TensileStrength,
		"thermal_expansion": material.ThermalExpansion, "reference_temperature": material.ReferenceTemperature,
	} {
		if !math.IsNaN(value) {
			t.Errorf("%s = %v, want NaN", name, value)
		}
	}
}

// Values at the edge of what may be, and numbers as TOML writes them.
func TestValuesThatMayJustBe(t *testing.T) {
	to := &faults{}
	study, _ := parseStudy("s.toml", []byte(`
model.repeats = 1
hotspots.count = 1
hotspots.pool = 1
hotspots.prominence = 0
limit.list = 0x01
[[material]]
name = "m"
youngs_modulus = 2_100.5e+0_2
poissons_ratio = -0.999
reference_temperature = 0
[[region]]
name = "face"
select = { box = [[0, 0, 5], [1, 1, 5]] }
[[region]]
name = "largest exact number"
select = { array = "a", values = [-9007199254740992] }
[[require]]
quantity = "cells"
at_least = 7
at_most = 7
`), Flags{}, to)
	if err := to.err(); err != nil {
		t.Fatal(err)
	}
	o := study.Options
	if o.Repeats != 1 || o.Hotspots.Count != 1 || o.Hotspots.Pool != 1 || o.Limit.List != 1 {
		t.Errorf("counts %d, %d, %d, %d", o.Repeats, o.Hotspots.Count, o.Hotspots.Pool, o.Limit.List)
	}
	if !o.Hotspots.SingleCells || o.Hotspots.Prominence != 0 {
		t.Errorf("without a prominence hotspots are single cells: %+v", o.Hotspots)
	}
	if m := o.Materials[0]; m.YoungsModulus != 210050 || m.PoissonsRatio != -0.999 || m.ReferenceTemperature != 0 {
		t.Errorf("material %+v", m)
	}
	if box := o.Regions[0].Box; box.Low[2] != 5 || box.High[2] != 5 || o.Regions[1].Values[0] != -9007199254740992 {
		t.Errorf("regions %+v", o.Regions)
	}
	if r := o.Requirements[0]; r.AtLeast != 7 || r.AtMost != 7 {
		t.Errorf("requirement %+v", r)
	}
}

func TestTime(t *testing.T) {
	seconds := 3.0
	for text, want := range map[string]Time{
		"":        {},
		`"last"`:  {},
		`"first"`: {First: true},
		"3":       {Value: &seconds},
		"3.0":     {Value: &seconds},
	} {
		to := &faults{}
		source := ""
		if text != "" {
			source = "input.time = " + text
		}
		study, _ := parseStudy("s.toml", []byte(source), Flags{}, to)
		if err := to.err(); err != nil || !cmp.Equal(study.Time, want) {
			t.Errorf("time = %s: %+v, %v", text, study.Time, err)
		}
	}
}

func TestReadReportsUnreadableStudies(t *testing.T) {
	folder := t.TempDir()
	large := write(t, folder, "large.toml", "# "+string(make([]byte, maxStudyBytes)))
	for path, want := range map[string]string{
		filepath.Join(folder, "no.toml"): filepath.Join(folder, "no.toml") +
			": cannot read the study file: no such file or directory; give the path of a file that exists and can be read",
		folder: folder + ": cannot read the study file: is a directory; give the path of a file that exists and can be read",
		large:  large + ": larger than 1 MiB, so no study file; give a text of a few hundred lines",
	} {
		_, err := Read(path, Flags{}, nil)
		if found := (Faults{}); !errors.As(err, &found) || err.Error() != want {
			t.Errorf("got %v\nwant %s", err, want)
		}
	}
}

// A limit in compression has a use wherever one region of its material is judged by
// principal stresses.
func TestLimitInCompression(t *testing.T) {
	const rest = "[[region]]\nname = \"a\"\nselect.rest = true\n"
	for name, text := range map[string]string{
		"no regions":             "limit.criterion = \"max-principal\"",
		"by the study":           "limit.criterion = \"max-principal\"\n" + rest,
		"by the region":          rest + "criterion = \"max-principal\"",
		"by one region of two":   "[[region]]\nname = \"b\"\nselect.block = \"b\"\ncriterion = \"tresca\"\n" + rest + "criterion = \"max-principal\"\nmaterial = \"S\"",
		"material by its name":   "limit.criterion = \"max-principal\"\n" + rest + "material = \"S\"",
		"several materials, one": "limit.criterion = \"max-principal\"\n[[material]]\nname = \"T\"\n" + rest + "material = \"S\"",
	} {
		to := &faults{}
		got, _ := parseStudy("s.toml", []byte(text+"\n[[material]]\nname = \"S\"\nproportional_limit = 1\nproportional_limit_compression = 2"), Flags{}, to)
		if len(to.found) > 0 {
			t.Errorf("%s: %v", name, to.found)
			continue
		}
		for _, material := range got.Options.Materials {
			if material.Name == "S" && material.ProportionalLimitCompression != 2 {
				t.Errorf("%s: %+v", name, material)
			}
		}
	}
}

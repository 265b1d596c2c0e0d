package study

import (
	"testing"

	"github.com/google/go-cmp/cmp"

	"strainledger/energy"
)

// The flags mean what a study file means that says the same.
func TestFlagsMeanWhatAStudyMeans(t *testing.T) {
	for name, c := range map[string]struct {
		flags Flags
		text  string
	}{
		"units":            {Flags{Units: "mm MPa"}, "[units]\nlength = \"mm\"\nstress = \"MPa\""},
		"units, any order": {Flags{Units: " lb  ksi in "}, "[units]\nlength = \"in\"\nstress = \"ksi\"\nmass = \"lb\""},
		"one unit":         {Flags{Units: "Pa"}, "units.stress = \"Pa\""},
		"idealisation":     {Flags{Idealisation: "plane-strain"}, "model.idealisation = \"plane-strain\""},
		"thickness": {Flags{Idealisation: "plane-stress", Thickness: "8.5"},
			"model.idealisation = \"plane-stress\"\nmodel.thickness = 8.5"},
		"thickness array": {Flags{Idealisation: "plane-stress", Thickness: "shell thickness"},
			"model.idealisation = \"plane-stress\"\nmodel.thickness = \"shell thickness\""},
		"material": {Flags{Materials: []string{"name=S355 youngs_modulus=210000 poissons_ratio=0.3 proportional_limit=330"}},
			"[[material]]\nname = \"S355\"\nyoungs_modulus = 210000\npoissons_ratio = 0.3\nproportional_limit = 330"},
		"materials, quoted": {Flags{Materials: []string{"name=\"S355 J2\"  source='EN 10025-2, \"minimum\"'", "\tname=355\tdensity=7.85e-6 "}},
			"[[material]]\nname = \"S355 J2\"\nsource = 'EN 10025-2, \"minimum\"'\n[[material]]\nname = \"355\"\ndensity = 7.85e-6"},
		"requirement": {Flags{Requirements: []string{"energy of web <= 120"}},
			"[[require]]\nname = \"energy of web <= 120\"\nquantity = \"energy\"\nregion = \"web\"\nat_most = 120"},
		"requirements": {Flags{Requirements: []string{"max_utilisation<=1", "volume of a part of <= the web >=-2.5e3", "energy of a <= b<=3"}},
			"[[require]]\nname = \"max_utilisation <= 1\"\nquantity = \"max_utilisation\"\nat_most = 1\n" +
				"[[require]]\nname = \"volume of a part of <= the web >= -2500\"\nquantity = \"volume\"\nregion = \"a part of <= the web\"\nat_least = -2500\n" +
				"[[require]]\nname = \"energy of a <= b <= 3\"\nquantity = \"energy\"\nregion = \"a <= b\"\nat_most = 3"},
	} {
		t.Run(name, func(t *testing.T) {
			got, err := Read("", c.flags, nil)
			if err != nil {
				t.Fatal(err)
			}
			to := &faults{}
			want, _ := parseStudy("", []byte(c.text), Flags{}, to)
			if err := to.err(); err != nil {
				t.Fatal(err)
			}
			if difference := cmp.Diff(want.Options, got.Options, sameNumbers); difference != "" {
				t.Errorf("study file -, flags +\n%s", difference)
			}
		})
	}
}

// Flags win over the study file; what they do not say stays.
func TestFlagsOverAStudy(t *testing.T) {
	path := write(t, t.TempDir(), "s.toml", "[units]\nlength = \"mm\"\nmass = \"kg\"\n[model]\nthickness = 3\nidealisation = \"plane-stress\"\n"+
		"[[material]]\nname = \"a\"\ndensity = 1\n[[material]]\nname = \"b\"\n[[require]]\nname = \"r\"\nquantity = \"energy\"\nat_most = 1\n")
	got, err := Read(path, Flags{
		Units: "m Pa", Thickness: "4", Materials: []string{"name=a youngs_modulus=2", "name=c"}, Requirements: []string{"volume >= 5"},
	}, nil)
	if err != nil {
		t.Fatal(err)
	}
	a, b, c := energy.NewMaterial("a"), energy.NewMaterial("b"), energy.NewMaterial("c")
	a.YoungsModulus = 2
	want := energy.Options{
		Length: "m", Stress: "Pa", Mass: "kg", Idealisation: energy.PlaneStress, Thickness: 4,
		Materials: []energy.Material{a, b, c},
		Requirements: []energy.Requirement{
			{Name: "r", Quantity: "energy", AtMost: 1, AtLeast: energy.None},
			{Name: "volume >= 5", Quantity: "volume", AtLeast: 5, AtMost: energy.None},
		},
	}
	if difference := cmp.Diff(want, got.Options, sameNumbers); difference != "" {
		t.Errorf("want -, got +\n%s", difference)
	}
}

// Faults of flags name the flag as it was given, through the same checks.
func TestFlagFaults(t *testing.T) {
	for name, c := range map[string]struct {
		flags Flags
		want  string
	}{
		"unit":       {Flags{Units: "mm Mpa"}, `--units "mm Mpa": "Mpa" is no unit of length, stress or mass; the nearest is "MPa"`},
		"two units":  {Flags{Units: "mm m"}, `--units "mm m": names two units of length; keep one`},
		"model":      {Flags{Idealisation: "shell"}, `--idealisation "shell": model.idealisation is "shell"; write "solid", "plane-stress", "plane-strain" or "axisymmetric"`},
		"thickness":  {Flags{Idealisation: "plane-stress", Thickness: "-3"}, `--thickness "-3": model.thickness is -3; it must be above 0`},
		"no use":     {Flags{Thickness: "3"}, `--thickness "3": model.thickness has no meaning in a solid model; remove it or write idealisation = "plane-stress" or "plane-strain"`},
		"missing":    {Flags{Idealisation: "plane-stress"}, `--idealisation "plane-stress": a plane-stress model needs a thickness; add thickness to [model], as a number or the name of a cell array`},
		"no key":     {Flags{Materials: []string{"S355"}}, `--material "S355": "S355" is not KEY=VALUE; write "name=S355 youngs_modulus=210000", a value with blanks in quotes`},
		"blank":      {Flags{Materials: []string{"name=S 355 density=1"}}, `--material "name=S 355 density=1": "355 density=1" is not KEY=VALUE; write "name=S355 youngs_modulus=210000", a value with blanks in quotes`},
		"empty":      {Flags{Materials: []string{" "}}, `--material " ": nothing in it; write "name=S355 youngs_modulus=210000"`},
		"no value":   {Flags{Materials: []string{"name= "}}, `--material "name= ": name: no value; write KEY=VALUE`},
		"open":       {Flags{Materials: []string{"name='S"}}, `--material "name='S": name: the quotes are not closed; add '`},
		"glued":      {Flags{Materials: []string{"name='S'x"}}, `--material "name='S'x": name: no blank after the closing quotes; add one`},
		"key twice":  {Flags{Materials: []string{"name=S name=T"}}, `--material "name=S name=T": gives "name" twice; keep one`},
		"key":        {Flags{Materials: []string{"name=S youngs=2"}}, `--material "name=S youngs=2": unknown key "youngs" in [[material]]; the nearest known key is "source"`},
		"number":     {Flags{Materials: []string{"name=S density=heavy"}}, `--material "name=S density=heavy": material.density is the text "heavy"; write a number`},
		"bound":      {Flags{Materials: []string{"name=S poissons_ratio=0.5"}}, `--material "name=S poissons_ratio=0.5": material.poissons_ratio is 0.5; it must be above -1 and below 0.5`},
		"not finite": {Flags{Materials: []string{"name=S density=nan"}}, `--material "name=S density=nan": material.density is nan; it must be finite`},
		"not built":  {Flags{Materials: []string{"name=S hardening_isotropic=1"}}, `--material "name=S hardening_isotropic=1": material.hardening_isotropic is not built yet; remove it`},
		"nameless":   {Flags{Materials: []string{"density=1"}}, `--material "density=1": [[material]] without name; add name = "..."`},
		"same name":  {Flags{Materials: []string{"name=S", "name=S density=1"}}, `--material "name=S density=1": material.name "S" was given before (--material "name=S"); use another or remove one of the two`},
		"sign":       {Flags{Requirements: []string{"energy < 3"}}, `--require "energy < 3": no <= or >= in it; write "energy of web <= 120"`},
		"bound text": {Flags{Requirements: []string{"energy <= low"}}, `--require "energy <= low": "low" is no number; write "energy of web <= 120"`},
		"quantity":   {Flags{Requirements: []string{"enery of web <= 3"}}, `--require "enery of web <= 3": require.quantity is "enery", which is no number of an account; the nearest is "energy"`},
		"no subject": {Flags{Requirements: []string{"<= 3"}}, `--require "<= 3": require.quantity is empty; write a text in quotes or remove it`},
		"infinite":   {Flags{Requirements: []string{"energy <= inf"}}, `--require "energy <= inf": require.at_most is inf; it must be finite`},
	} {
		t.Run(name, func(t *testing.T) {
			if _, err := Read("", c.flags, nil); err == nil || err.Error() != c.want {
				t.Errorf("got  %v\nwant %s", err, c.want)
			}
		})
	}
}

// A study file that uses a name for something else is refused, whatever the flags add.
func TestFlagsOverAFaultyStudy(t *testing.T) {
	to := &faults{path: "s.toml"}
	parseStudy("s.toml", []byte("units = 3\nmaterial = 4\n[region]\n"), Flags{Units: "mm MPa", Materials: []string{"name=S"}, Requirements: []string{"energy of x <= 1"}}, to)
	want := "s.toml:1:1: units is the number 3; write a table [units]\n" +
		"s.toml:2:1: material is the number 4; write [[material]] above its keys\n" +
		"s.toml:3:2: region is a table; write [[region]] above its keys"
	if err := to.err(); err == nil || err.Error() != want {
		t.Errorf("got\n%v\nwant\n%s", err, want)
	}
}

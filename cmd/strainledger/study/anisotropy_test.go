package study

import (
	"strings"
	"testing"

	"strainledger/energy"
)

const soundStiffness = "[[4, 1, 1, 0, 0, 0], [1, 4, 1, 0, 0, 0], [1, 1, 4, 0, 0, 0], [0, 0, 0, 1, 0, 0], [0, 0, 0, 0, 2, 0], [0, 0, 0, 0, 0, 3]]"

func TestAnisotropicMaterials(t *testing.T) {
	read := func(text string) (energy.Options, *faults) {
		to := &faults{path: "s.toml"}
		study, _ := parseStudy("s.toml", []byte("[[material]]\nname = \"m\"\n"+text), Flags{}, to)
		if study == nil {
			return energy.Options{}, to
		}
		return study.Options, to
	}
	o, to := read("youngs_moduli = [181000, 10300, 10300]\nshear_moduli = [7170, 4000, 7170]\npoissons_ratios = [0.28, 0.3, 0.28]\naxes = [[0, 1, 0], [-1, 0, 0], [0, 0, 1]]\n")
	if len(to.found) > 0 {
		t.Fatal(to.found)
	}
	m := o.Materials[0]
	if *m.YoungsModuli != [3]float64{181000, 10300, 10300} || *m.ShearModuli != [3]float64{7170, 4000, 7170} ||
		*m.PoissonsRatios != [3]float64{0.28, 0.3, 0.28} || *m.Axes != [3]energy.Vector{{0, 1, 0}, {-1, 0, 0}, {0, 0, 1}} {
		t.Errorf("material %+v", m)
	}
	o, to = read("stiffness = " + soundStiffness + "\nstiffness_order = \"xx yy zz yz xz xy\"\n")
	if len(to.found) > 0 {
		t.Fatal(to.found)
	}
	if m := o.Materials[0]; m.Stiffness[4][4] != 2 || m.Stiffness[0][1] != 1 || m.StiffnessOrder.String() != "xx yy zz yz xz xy" {
		t.Errorf("stiffness %v in %v", m.Stiffness, m.StiffnessOrder)
	}
	for text, want := range map[string]string{
		"youngs_moduli = [1, 2, 3]": "no shear_moduli",
		"youngs_moduli = [1, 2]\nshear_moduli = [1, 1, 1]\npoissons_ratios = [0, 0, 0]": "needs 3",
		"axes = [[1, 0, 0], [0, 1, 0]]":                                           "3 rows of 3",
		"axes = [[1, 0, 0], [0, 2, 0], [0, 0, 1]]\nstiffness = " + soundStiffness: "length 2",
		"stiffness = [[1]]": "6 rows of 6",
		"stiffness = " + strings.Replace(soundStiffness, "[[4, 1,", "[[4, 2,", 1):                                         "symmetr",
		"stiffness = " + strings.Replace(soundStiffness, "3]]", "-3]]", 1):                                                "diagonal term of xz",
		"stiffness = " + soundStiffness + "\nstiffness_order = \"xx yy\"":                                                 "must name 6",
		"stiffness = " + soundStiffness + "\nyoungs_modulus = 3":                                                          "state one law",
		"stiffness = " + strings.Replace(soundStiffness, "[[4", "[[\"a\"", 1):                                             "number",
		"youngs_moduli = [1, 1, 1]\nshear_moduli = [1, 1, 1]\npoissons_ratios = [2, 0, 0]":                                "ν_xy",
		"youngs_moduli = [1, 1, 1]\nshear_moduli = [1, 1, 1]\npoissons_ratios = [0, 0, 0]\nstiffness = " + soundStiffness: "state one law",
	} {
		if _, to := read(text); len(to.found) == 0 || !strings.Contains(Faults(to.found).Error(), want) {
			t.Errorf("%s:\n%v\nwant a fault with %q", text, to.found, want)
		}
	}
}

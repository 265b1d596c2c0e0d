package energy_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"strainledger/energy"
	"strainledger/mesh"
	"strainledger/readers"
)

// The open results of testdata/tunnel (see testdata/README.md): values computed with
// numpy from the arrays, per metre of thickness, in joules. 1e-9 is asked for; the
// arithmetic leaves 1e-15.
func TestTunnel(t *testing.T) {
	rock := energy.NewMaterial("rock")
	rock.YoungsModulus, rock.PoissonsRatio = 2e9, 0.3
	for _, c := range []struct {
		time   float64
		from   energy.EnergySource
		on     string
		energy float64
	}{
		{9856003, energy.FromStressStrain, "point", 363018.8246437831},
		{9856003, energy.FromStressStrain, "integration", 367863.9123162743},
		{9856003, energy.FromStress, "point", 283882.01069153566},
		{9856003, energy.FromStress, "integration", 288590.7076183139},
		{10000000, energy.FromStressStrain, "point", 373298.8970406092},
		{10000000, energy.FromStressStrain, "integration", 378214.8123153265},
		{10000000, energy.FromStress, "point", 291823.17893345444},
		{10000000, energy.FromStress, "integration", 296612.838677381},
	} {
		model := openTunnel(t, c.time)
		field := func(name string) energy.Field {
			f := energy.Field{Arrays: []string{name}, On: mesh.OnPoint, Order: mesh.OrderOf4, Shear: "tensor"}
			if c.on == "integration" {
				f.Arrays, f.On, f.Integration = []string{name + "_ip"}, 0, true
			}
			return f
		}
		options := energy.Options{
			Length: "m", Stress: "Pa", Idealisation: energy.PlaneStrain, From: c.from, Materials: []energy.Material{rock},
			Fields: energy.Fields{Stress: field("sigma"), Strain: field("epsilon")},
		}
		ledger, err := energy.Tally(context.Background(), model, &options, nil)
		if err != nil {
			t.Fatal(err)
		}
		if got := float64(ledger.Total.Energy); math.Abs(got-c.energy) > 1e-12*c.energy {
			t.Errorf("t %g, from %s on %s: %.16g, want %.16g", c.time, c.from, c.on, got, c.energy)
		}
		if got := float64(ledger.Total.Volume); math.Abs(got-39980.38740544957) > 1e-12*got {
			t.Errorf("area %.16g", got)
		}
		if ledger.Fields.Stress.On != c.on {
			t.Errorf("stress on %s, want %s", ledger.Fields.Stress.On, c.on)
		}
	}
}

func openTunnel(t *testing.T, time float64) *mesh.Model {
	t.Helper()
	model, err := readers.Open(context.Background(), []string{"../testdata/tunnel/tunnel_heat_tunnel_restart.pvd"}, readers.Options{Time: readers.Time{Choice: readers.AtNumber, Number: time}})
	if err != nil {
		t.Fatal(err)
	}
	return model
}

// Without names the results at integration points come first, by the file's own
// description of their rule; heat and water make the strain one that is not elastic.
func TestTunnelWithoutNames(t *testing.T) {
	rock := energy.NewMaterial("rock")
	rock.YoungsModulus, rock.PoissonsRatio = 2e9, 0.3
	options := energy.Options{Length: "m", Stress: "Pa", Idealisation: energy.PlaneStrain, Materials: []energy.Material{rock}}
	ledger, err := energy.Tally(context.Background(), openTunnel(t, 10000000), &options, nil)
	if err != nil {
		t.Fatal(err)
	}
	codes := ""
	for _, finding := range ledger.Findings {
		codes += finding.Code + " "
	}
	if ledger.Fields.Stress.Array != "sigma_ip" || ledger.Fields.Strain.Array != "epsilon_ip" || ledger.Model.EnergyFrom != "stress" ||
		!strings.Contains(codes, "total-strain-used") || !strings.Contains(codes, "several-locations") {
		t.Errorf("stress %+v, strain %+v, from %s; %s", ledger.Fields.Stress, ledger.Fields.Strain, ledger.Model.EnergyFrom, codes)
	}
	if got := float64(ledger.Total.Energy); math.Abs(got-296612.838677381) > 1e-12*got {
		t.Errorf("energy %.16g, want 296612.838677381", got)
	}
}

// A rule that the study states must be the right one: the same numbers with the first
// direction varying fastest are another energy, and another count is refused.
func TestTunnelWithOtherRules(t *testing.T) {
	for rule, want := range map[string]string{"gauss 3x3 slow": "", "gauss 3x3": "", "gauss 2x2": "27360 tuples", "gauss 3x3x3": "27360 tuples"} {
		field := func(name string) energy.Field {
			return energy.Field{Arrays: []string{name}, Integration: true, Rule: rule, Order: mesh.OrderOf4, Shear: "tensor"}
		}
		options := energy.Options{Idealisation: energy.PlaneStrain, From: energy.FromStressStrain, Fields: energy.Fields{Stress: field("sigma_ip"), Strain: field("epsilon_ip")}}
		ledger, err := energy.Tally(context.Background(), openTunnel(t, 10000000), &options, nil)
		if want != "" {
			var input *energy.InputError
			if !errors.As(err, &input) || !strings.Contains(err.Error(), want) {
				t.Errorf("%s: %v, want an input error with %q", rule, err, want)
			}
			continue
		}
		if err != nil {
			t.Fatal(err)
		}
		if isRight := math.Abs(float64(ledger.Total.Energy)-378214.8123153265) < 1e-6; isRight != (rule == "gauss 3x3 slow") {
			t.Errorf("%s: energy %.12g", rule, ledger.Total.Energy)
		}
	}
}

func TestParseRule(t *testing.T) {
	for text, want := range map[string]mesh.GaussRule{
		"gauss 3x3": {Counts: []int{3, 3}}, "Gauss 2x2x2": {Counts: []int{2, 2, 2}}, "gauss 2 slow": {Counts: []int{2}, FirstIsSlowest: true},
		"gauss 2x3 slow": {Counts: []int{2, 3}, FirstIsSlowest: true},
	} {
		rule, err := energy.ParseRule(text)
		if err != nil || len(rule.Counts) != len(want.Counts) || rule.Counts[0] != want.Counts[0] || rule.FirstIsSlowest != want.FirstIsSlowest {
			t.Errorf("%s: %+v, %v", text, rule, err)
		}
	}
	for _, text := range []string{"", "gauss", "gauss 0x3", "gauss 3x", "simpson 3x3", "gauss 3x3 quick", "gauss 17", "gauss 2x2x2x2"} {
		if rule, err := energy.ParseRule(text); err == nil {
			t.Errorf("%q was taken for %+v", text, rule)
		}
	}
}

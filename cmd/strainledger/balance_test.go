package main

import (
	"math"
	"path/filepath"
	"strings"
	"testing"

	"strainledger/energy"
)

// Bars of a solver with the forces at their ends (testdata/balance/README.md): the work of
// the loads is half of end force times end displacement while they are elastic, and is
// not to be had from one state when they are not.
func TestBalanceOfSolvedBars(t *testing.T) {
	for name, c := range map[string]struct {
		work, stored float64 // work 0: none
		force, move  float64
	}{
		"bar-step-1":   {195.3125, 195.3125, 12500, 0.03125},
		"taper-step-1": {77.2398465184438, 77.23984651844535, 6179.187721475504, 0.025},
		"bar-step-3":   {0, 789.0042949220664, 25123.762376237624, 0.09375},
	} {
		t.Run(name, func(t *testing.T) {
			path := filepath.Join("..", "..", "testdata", "balance", name+".vtu")
			code, stdout, stderr := call("tally", path, "--json", "--units", "mm MPa", "--material", "name=steel youngs_modulus=200000 poissons_ratio=0.3")
			if code != 0 {
				t.Fatalf("exit code %d: %s", code, stderr)
			}
			ledger := readLedger(t, stdout)
			b := ledger.Balance
			if b == nil || ledger.Fields.NodalForce == nil || ledger.Fields.NodalForce.Array != "ReactionForce" {
				t.Fatalf("balance %+v of %+v", b, ledger.Fields.NodalForce)
			}
			// The file's numbers are doubles; sums of them lose few digits.
			near := func(got energy.Number, want float64) bool { return math.Abs(float64(got)-want) <= 1e-12*want }
			if !near(b.Stored, c.stored) || b.Elsewhere != 0 {
				t.Errorf("balance %+v", b)
			}
			if c.work == 0 {
				if b.ExternalWork.Exists() || b.Gap.Exists() || len(b.Reasons) != 2 || !strings.HasPrefix(b.Reasons[0], "plastic strain") {
					t.Errorf("balance %+v", b)
				}
				return
			}
			if !near(b.ExternalWork, c.work) || !near(b.ExternalWork, c.force*c.move/2) || math.Abs(float64(b.Gap)) > 1e-12 || len(b.Reasons) != 0 {
				t.Errorf("balance %+v, want the work %.15g", b, c.work)
			}
		})
	}
}

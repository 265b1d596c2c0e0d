package energy

import "math"

// A conversion puts a ledger into other units, and its energies and densities at another
// load: in a linear run they grow with its square. What does not follow the load that
// simply stays as it is: equivalent stress, utilisation, which cells are past their
// limit, and the energy by a curve.
type conversion struct {
	length, stress, mass Number // by which numbers are multiplied
	load                 Number // by which energies are divided
}

func (c *conversion) volume() Number  { return c.length * c.length * c.length }
func (c *conversion) density() Number { return c.stress / c.load }
func (c *conversion) energy() Number  { return c.stress * c.volume() / c.load }

// conversionTo returns the conversion of a ledger to units at the load that its scale
// refers to. Factors are 1 where units are not stated on both sides, and the reasons say
// what cannot be compared because of that: everything, or masses.
func conversionTo(units *UnitLabels, ledger *Ledger, scale Number) (c conversion, everything, masses string) {
	c = conversion{length: 1, stress: 1, mass: 1, load: scale * scale}
	from := &ledger.Units
	for _, unit := range []struct {
		name     string
		table    map[string]float64
		from, to Text
		factor   *Number
		reason   *string
	}{
		{"length", lengthInMetres, from.Length, units.Length, &c.length, &everything},
		{"stress", stressInPascals, from.Stress, units.Stress, &c.stress, &everything},
		{"mass", massInKilograms, from.Mass, units.Mass, &c.mass, &masses},
	} {
		factor := factorBetween(unit.table, string(unit.from), string(unit.to))
		if math.IsNaN(factor) {
			*unit.reason = "the unit of " + unit.name + " is " + statedUnit(unit.from) + ", in the baseline " + statedUnit(unit.to)
			continue
		}
		*unit.factor = Number(factor)
	}
	return c, everything, masses
}

func statedUnit(unit Text) string {
	if unit == "" {
		return "not stated"
	}
	return string(unit)
}

// apply returns the converted ledger: model, materials, accounts, hotspots and balance,
// which are what a comparison reads. The ledger itself stays as it is, and so do lists of cells.
func (c *conversion) apply(ledger *Ledger, units UnitLabels) *Ledger {
	converted := *ledger
	converted.Units = units
	converted.Model.Diagonal *= c.length
	converted.Model.HotspotTolerance *= c.length
	converted.Materials = make([]MaterialUsed, len(ledger.Materials))
	for i := range ledger.Materials {
		converted.Materials[i] = c.material(&ledger.Materials[i])
	}
	converted.Total = c.account(&ledger.Total)
	converted.Regions = make([]RegionAccount, len(ledger.Regions))
	for i := range ledger.Regions {
		converted.Regions[i] = ledger.Regions[i]
		converted.Regions[i].Account = c.account(&ledger.Regions[i].Account)
	}
	converted.Hotspots = make([]Hotspot, len(ledger.Hotspots))
	for i := range ledger.Hotspots {
		converted.Hotspots[i] = c.hotspot(&ledger.Hotspots[i])
	}
	if centre := ledger.AtCentre; centre != nil {
		converted.AtCentre = &AtCentre{*c.place(&centre.At), centre.Singular, c.surroundings(&centre.Surroundings)}
	}
	converted.Balance = c.balance(ledger.Balance)
	return &converted
}

func (c *conversion) balance(balance *Balance) *Balance {
	if balance == nil {
		return nil
	}
	converted := *balance
	converted.ExternalWork *= c.energy()
	converted.Stored *= c.energy()
	converted.Elsewhere *= c.energy()
	converted.Parts = make([]Elsewhere, len(balance.Parts))
	for i, part := range balance.Parts {
		part.Energy *= c.energy()
		converted.Parts[i] = part
	}
	return &converted
}

func (c *conversion) material(material *MaterialUsed) MaterialUsed {
	converted := *material
	converted.YoungsModulus *= c.stress
	converted.ProportionalLimit *= c.stress
	converted.ProportionalLimitCompression *= c.stress
	converted.Density *= c.mass / c.volume()
	converted.YoungsModuli = c.moduli(material.YoungsModuli)
	converted.ShearModuli = c.moduli(material.ShearModuli)
	if material.Stiffness != nil {
		converted.Stiffness = new([6][6]float64)
		for i, row := range material.Stiffness {
			for j, value := range row {
				converted.Stiffness[i][j] = value * float64(c.stress)
			}
		}
	}
	converted.YieldStress *= c.stress
	converted.ControlRadius *= c.length
	converted.CriticalDensity *= c.stress // the material's, whatever the load
	converted.FractureToughness *= c.stress * Number(math.Sqrt(float64(c.length)))
	converted.TensileStrength *= c.stress
	return converted
}

func (c *conversion) moduli(moduli *[3]float64) *[3]float64 {
	if moduli == nil {
		return nil
	}
	factor := float64(c.stress)
	return &[3]float64{moduli[0] * factor, moduli[1] * factor, moduli[2] * factor}
}

func (c *conversion) account(account *Account) Account {
	converted := *account
	converted.Volume *= c.volume()
	converted.VolumePastLimit *= c.volume()
	converted.VolumeWithoutLimit *= c.volume()
	converted.Mass *= c.mass
	converted.Energy *= c.energy()
	converted.EnergyVolumetric *= c.energy()
	converted.EnergyDistortional *= c.energy()
	converted.EnergyPastLimit *= c.energy()
	converted.EnergyError *= c.energy()
	converted.CurveEnergy *= c.stress * c.volume()
	converted.MeanDensity *= c.density()
	converted.MaxDensity *= c.density()
	converted.PeakDensity *= c.density()
	converted.MaxEquivalentStress *= c.stress
	converted.MaxDensityAt = c.place(account.MaxDensityAt)
	converted.PeakDensityAt = c.place(account.PeakDensityAt)
	converted.MaxUtilisationAt = c.place(account.MaxUtilisationAt)
	return converted
}

func (c *conversion) hotspot(hotspot *Hotspot) Hotspot {
	converted := *hotspot
	converted.At = c.place(hotspot.At)
	converted.Density *= c.density()
	converted.PeakDensity *= c.density()
	converted.Energy *= c.energy()
	converted.Volume *= c.volume()
	converted.EquivalentStress *= c.stress
	converted.MeanDensity *= c.density()
	converted.EnergyAt = c.place(hotspot.EnergyAt)
	converted.Principal1 *= c.stress
	converted.Principal2 *= c.stress
	converted.Principal3 *= c.stress
	converted.Surroundings = c.surroundings(&hotspot.Surroundings)
	if hotspot.LocalEstimate != nil {
		estimate := *hotspot.LocalEstimate
		estimate.Neuber.Stress *= c.stress
		estimate.EnergyDensity.Stress *= c.stress
		converted.LocalEstimate = &estimate
	}
	return converted
}

func (c *conversion) surroundings(s *Surroundings) Surroundings {
	converted := *s
	converted.BallRadius *= c.length
	converted.BallVolume *= c.volume()
	converted.AveragedDensity *= c.density()
	converted.ControlRadius *= c.length
	converted.ControlVolume *= c.volume()
	converted.ControlDensity *= c.density()
	converted.AveragedDensityRatio /= c.load
	return converted
}

func (c *conversion) place(at *Vector) *Vector {
	if at == nil {
		return nil
	}
	factor := float64(c.length)
	return &Vector{at[0] * factor, at[1] * factor, at[2] * factor}
}

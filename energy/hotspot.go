package energy

import (
	"cmp"
	"math"
	"slices"

	"strainledger/mesh"
)

// defaultProminence is the share by which density has to fall around a peak (common
// practice, no source).
const defaultProminence = 0.2

// defaultPool is the number of densest cells in which hotspots are looked for. Four
// times as many cost twice the time.
const defaultPool = 16384

// newPool returns the pool for the plan's hotspots.
func (p *plan) newPool() *pool {
	count := cmp.Or(p.options.Hotspots.Pool, defaultPool)
	if p.options.Hotspots.SingleCells {
		count = p.hotspotCount
	}
	return newPool(count, p.model.CellCount(), len(p.regions.regions), p.by != "density")
}

// chooseHotspots finds the hotspots of the list and orders them.
func (p *plan) chooseHotspots(total *part) {
	pool := total.pool
	pool.trim()
	peaks := p.findPeaks(total)
	ranked := make([]rankedIndex, len(peaks))
	for i := range peaks {
		c := &pool.cells[peaks[i].cell]
		key := c.key
		if p.by == "energy" {
			key = pool.energyOf(peaks[i].members)
		}
		if math.IsNaN(key) {
			key = math.Inf(-1)
		}
		ranked[i] = rankedIndex{key, c.place, int32(i)}
	}
	slices.SortFunc(ranked, compareRanked)
	for _, entry := range ranked[:min(len(ranked), p.hotspotCount)] {
		total.hotspots = append(total.hotspots, peaks[entry.index])
	}
}

// fillHotspots lays out the list of hotspots.
func (p *plan) fillHotspots(ledger *Ledger, total *part) {
	ledger.Hotspots = []Hotspot{}
	for i := range total.hotspots {
		ledger.Hotspots = append(ledger.Hotspots, p.hotspot(ledger, total.pool, &total.hotspots[i], i+1))
	}
	if total.centre != nil {
		ledger.AtCentre = &AtCentre{At: *p.options.Hotspots.Centre, Singular: Text(total.centre.tag), Surroundings: total.centre.lay()}
	}
}

// findPeaks returns the peaks of the pool, or each cell as one where hotspots are single
// cells, and reports when peaks may be missing.
func (p *plan) findPeaks(total *part) []peak {
	pool := total.pool
	var peaks []peak
	if p.options.Hotspots.SingleCells {
		for i := range pool.cells {
			if key := pool.keys[i]; !math.IsNaN(key) {
				peaks = append(peaks, peak{cell: int32(i), prominence: math.NaN(), members: []int32{int32(i)}})
			}
		}
		return peaks
	}
	for i := range pool.outside {
		pool.leave(int32(i), total.accounts[i].outside)
	}
	share := cmp.Or(p.options.Hotspots.Prominence, defaultProminence)
	peaks = pool.peaks(p.dimension, share, func(c *poolCell) bool {
		return c.place == total.accounts[c.region].maxDensity.place
	})
	certain := 0
	for i := range peaks {
		if peaks[i].members != nil {
			certain++
		}
	}
	if outside := slices.Max(pool.outside); certain < p.hotspotCount && outside > 0 {
		p.findings.add("hotspot-pool", 0, "only %d of the %d hotspots asked for are certain: hotspots are looked for among the %d densest cells, and others may have their peaks, or the density that parts them, among the cells of less than %.4g; state a larger [hotspots] pool, or a smaller count",
			certain, p.hotspotCount, pool.count, outside)
	}
	return peaks
}

// hotspot lays out one entry of the list.
func (p *plan) hotspot(ledger *Ledger, pool *pool, found *peak, rank int) Hotspot {
	c := &pool.cells[found.cell]
	at := pool.centroid(found.cell, p.options)
	entry := Hotspot{
		Rank: rank, Region: p.regions.regions[c.region].name, Cell: c.place.cell, Source: c.place.source, ElementID: elementID(&c.record),
		At: &at, Density: Number(c.density), PeakDensity: Number(c.peak), Energy: None, EnergyShare: None, Volume: None, Cells: None,
		Prominence: Number(found.prominence), EquivalentStress: Number(c.equivalent), Utilisation: Number(c.limitShare),
		RegionShare: None, MeanDensity: None, ErrorToTarget: None,
		Singular: Text(found.around.tag), Surroundings: found.around.lay(),
	}
	entry.LoadFactor = LoadFactor(p.regions.regions[c.region].limit.criterion, entry.Utilisation)
	entry.StressMargin = entry.LoadFactor - 1
	if !math.IsNaN(c.limitShare) {
		isPast := c.limitShare > 1
		entry.PastLimit = &isPast
	}
	values, directions := c.stress.PrincipalDirections()
	for i, principal := range []*Number{&entry.Principal1, &entry.Principal2, &entry.Principal3} {
		*principal = Number(values[i])
	}
	for i, direction := range []**Vector{&entry.Principal1Direction, &entry.Principal2Direction, &entry.Principal3Direction} {
		*direction = (*Vector)(&directions[i])
	}
	if found.members != nil {
		p.fillMembers(ledger, &entry, pool, found.members)
	}
	entry.LocalEstimate = p.regions.regions[c.region].localEstimate(&ledger.Regions[c.region].Account, &entry)
	return entry
}

// fillMembers lays out what the cells of a hotspot hold together.
func (p *plan) fillMembers(ledger *Ledger, entry *Hotspot, pool *pool, members []int32) {
	var energy, volume Sum
	var moment [3]Sum
	for _, i := range members {
		c := &pool.cells[i]
		energy.Add(c.energy)
		volume.Add(c.measure)
		at := pool.centroid(i, p.options)
		for axis := range moment {
			moment[axis].Add(c.energy * at[axis])
		}
		ledger.HotspotCells = append(ledger.HotspotCells, HotspotCell{Source: c.place.source, Cell: c.place.cell, Rank: entry.Rank})
	}
	entry.Energy, entry.Volume, entry.Cells = Number(energy.Float64()), Number(volume.Float64()), Number(len(members))
	if entry.Volume != 0 {
		entry.MeanDensity = entry.Energy / entry.Volume
	}
	if entry.Energy != 0 {
		entry.EnergyAt = new(Vector)
		for axis := range moment {
			entry.EnergyAt[axis] = moment[axis].Float64() / float64(entry.Energy)
		}
	}
	if ledger.Total.Energy != 0 {
		entry.EnergyShare = entry.Energy / ledger.Total.Energy
	}
	if region := regionOf(ledger, entry.Region); region.Energy != 0 {
		entry.RegionShare = entry.Energy / region.Energy
	}
}

// energyOf returns the energy of some cells, NaN of none.
func (p *pool) energyOf(cells []int32) float64 {
	if cells == nil {
		return math.NaN()
	}
	var energy Sum
	for _, i := range cells {
		energy.Add(p.cells[i].energy)
	}
	return energy.Float64()
}

// centroid returns the centroid of the measure of cell i.
func (p *pool) centroid(i int32, options *Options) Vector {
	var cell mesh.Cell
	p.cells[i].view(&cell)
	return centroid(&cell, options)
}

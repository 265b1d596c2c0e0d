package study

import "strainledger/energy"

// balance reads what is stated of the work of the loads, and of energy that the file has
// no cells for.
func (r *reading) balance() {
	work := r.root.get("balance", "external_work")
	if work != nil {
		r.to.Balance.ExternalWork = &work.number
	}
	loads := r.root.itemsOf("balance", "load")
	if work != nil && len(loads) > 0 {
		r.faults.add(work.place, "balance.external_work beside [[balance.load]], which gives the work too; keep one of them")
	}
	for _, stated := range loads {
		r.to.Balance.Loads = append(r.to.Balance.Loads, energy.Load{
			Name: stated.textOf("name"), Force: r.vector(stated.get("force"), "balance.load.force"),
			Displacement: r.vector(stated.get("displacement"), "balance.load.displacement"),
		})
	}
	r.refuseSameNames("elsewhere", "name")
	for _, stated := range r.root.itemsOf("elsewhere") {
		r.to.Elsewhere = append(r.to.Elsewhere, energy.Elsewhere{
			Name: stated.textOf("name"), Energy: energy.Number(stated.numberOf(0, "energy")), Source: energy.Text(stated.textOf("source")),
		})
	}
}

// vector reads two or three components along x, y and z.
func (r *reading) vector(stated *node, path string) (v energy.Vector) {
	if stated == nil {
		return v
	}
	if n := len(stated.items); n != 2 && n != 3 {
		r.faults.add(stated.place, "%s must have two or three numbers; write [x, y, z], in a plane model [x, y]", path)
		return v
	}
	for i, item := range stated.items {
		v[i] = item.number
	}
	return v
}

package study

import (
	"strainledger/energy"
	"strainledger/mesh"
)

// anisotropy reads what a material has instead of one modulus and one ratio, and lets
// the law check it, so that every fault stands with its key.
func (r *reading) anisotropy(stated *node, to *energy.Material) {
	to.YoungsModuli = r.three(stated, "youngs_moduli")
	to.ShearModuli = r.three(stated, "shear_moduli")
	to.PoissonsRatios = r.three(stated, "poissons_ratios")
	orthotropic := []string{"youngs_moduli", "shear_moduli", "poissons_ratios"}
	given := 0
	for _, key := range orthotropic {
		if stated.has(key) {
			given++
		}
	}
	if given > 0 && given < len(orthotropic) {
		for _, key := range orthotropic {
			if !stated.has(key) {
				r.faults.add(stated.place, "the material has no %s; an orthotropic one needs youngs_moduli, shear_moduli and poissons_ratios", key)
			}
		}
		return
	}
	if rows := r.rows(stated, "axes", 3); rows != nil {
		to.Axes = &[3]energy.Vector{energy.Vector(rows[0]), energy.Vector(rows[1]), energy.Vector(rows[2])}
	}
	if rows := r.rows(stated, "stiffness", 6); rows != nil {
		to.Stiffness = new([6][6]float64)
		for i := range rows {
			copy(to.Stiffness[i][:], rows[i])
		}
	}
	if order := stated.get("stiffness_order"); order != nil {
		parsed, err := mesh.ParseOrder(order.text, false)
		if err != nil {
			r.faults.add(order.place, "material.stiffness_order: %v", err)
			return
		}
		to.StiffnessOrder = parsed
	}
	r.refuseLaws(stated, to)
}

// refuseLaws reports materials with several laws, and a law that is none of a stable
// solid.
func (r *reading) refuseLaws(stated *node, to *energy.Material) {
	var laws []string
	for _, key := range []string{"youngs_modulus", "youngs_moduli", "stiffness"} {
		if stated.has(key) {
			laws = append(laws, key)
		}
	}
	if len(laws) > 1 {
		r.faults.add(stated.get(laws[1]).orElse(stated).place, "the material has %s and %s; state one law", laws[0], laws[1])
		return
	}
	if to.YoungsModuli == nil && to.Stiffness == nil && to.Axes == nil {
		return // an isotropic law's numbers are bounded by themselves
	}
	if _, err := to.Law(); err != nil {
		r.faults.add(stated.get("stiffness").orElse(stated.get("youngs_moduli")).orElse(stated).place, "material %s: %v", quote(to.Name), err)
	}
}

// orElse returns the node, or another one where there is none.
func (n *node) orElse(other *node) *node {
	if n == nil {
		return other
	}
	return n
}

// three reads a list of three numbers.
func (r *reading) three(stated *node, key string) *[3]float64 {
	list := stated.get(key)
	if list == nil {
		return nil
	}
	if len(list.items) != 3 {
		r.faults.add(list.place, "material.%s has %d numbers, needs 3", key, len(list.items))
		return nil
	}
	return &[3]float64{list.items[0].number, list.items[1].number, list.items[2].number}
}

// rows reads a square matrix.
func (r *reading) rows(stated *node, key string, size int) [][]float64 {
	list := stated.get(key)
	if list == nil {
		return nil
	}
	rows := make([][]float64, 0, size)
	for _, item := range list.items {
		row := make([]float64, 0, size)
		for _, entry := range item.items {
			row = append(row, entry.number)
		}
		if len(row) == size {
			rows = append(rows, row)
		}
	}
	if len(rows) != size || len(list.items) != size {
		r.faults.add(list.place, "material.%s must have %d rows of %d numbers", key, size, size)
		return nil
	}
	return rows
}

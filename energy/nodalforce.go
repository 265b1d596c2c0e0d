package energy

import (
	"context"
	"fmt"
	"math"
	"strings"

	"strainledger/mesh"
)

const (
	// outOfBalance is the resultant of nodal forces, as a share of the sum of their sizes,
	// from which on they are not taken for all forces on the body: solvers leave less
	// (common practice, no source). For moments sizes are multiplied by the model's
	// diagonal.
	outOfBalance = 1e-3
	// idleForces is the work of nodal forces, as a share of Σ|F||u|, up to which it is none:
	// reactions at supports that do not move.
	idleForces = 1e-9
)

// nodalForces are fields of forces on points; what they hold at a point is added up.
type nodalForces struct {
	fields  []vectorInput
	areOnly bool   // by their names they are loads without the reactions
	problem string // why the file's forces are not used, "" where it has none
}

// names lists the arrays for messages.
func (n *nodalForces) names() string {
	var names []string
	for i := range n.fields {
		names = append(names, n.fields[i].names...)
	}
	return quoted(names)
}

// findNodalForce resolves the nodal forces: what the study names, else one array by its
// name, or one of loads and one of reactions. Several vectors are added up.
func (f *fieldFinder) findNodalForce() error {
	field, balance := &f.options.Fields.NodalForce, &f.options.Balance
	isNeeded := balance.ExternalWork == nil && len(balance.Loads) == 0
	var err error
	switch {
	case field.Off:
		return nil
	case field.IsStated():
		err = f.stateNodalForce(field)
	case isNeeded:
		err = f.searchNodalForce()
	}
	forces := &f.in.nodalForce
	if err != nil || len(forces.fields) == 0 {
		return err
	}
	used := f.in.used.NodalForce
	switch {
	case !isNeeded:
		used.Why += "; not used: the study states the work of the loads"
		forces.fields = nil
	case !f.in.displacement.exists():
		forces.problem = fmt.Sprintf("the file has the nodal forces %s and no displacement to work along", forces.names())
		forces.fields = nil
	}
	return nil
}

// stateNodalForce takes the arrays that the study names.
func (f *fieldFinder) stateNodalForce(field *Field) error {
	first := f.stated(field)
	if first == nil {
		return f.missing("nodal_force", field)
	}
	in := &f.in.nodalForce
	in.areOnly = true
	if len(field.Arrays) > 1 && first.Components > 1 {
		for _, name := range field.Arrays {
			one := &Field{Arrays: []string{name}, On: field.On}
			array := f.stated(one)
			if array == nil {
				return f.missing("nodal_force", one)
			}
			if err := f.addNodalForce(one, array); err != nil {
				return err
			}
		}
	} else if err := f.addNodalForce(field, first); err != nil {
		return err
	}
	f.recordNodalForce(byStudy, "the study names it")
	return nil
}

// searchNodalForce looks for the forces by their names.
func (f *fieldFinder) searchNodalForce() error {
	in := &f.in.nodalForce
	all := f.candidates(mesh.OnPoint, isVector, nodalForceRole)
	loads := f.candidates(mesh.OnPoint, isVector, loadRole)
	reactions := f.candidates(mesh.OnPoint, isVector, reactionRole)
	taken := all
	if len(all) == 0 {
		taken = append(loads, reactions...)
	}
	if len(all) > 1 || len(all) == 0 && (len(loads) > 1 || len(reactions) > 1) {
		var names []string
		for _, array := range taken {
			names = append(names, array.Name)
		}
		in.problem = fmt.Sprintf("the nodal forces could be any of %s; name what belongs together in [fields] nodal_force", quoted(names))
		return nil
	}
	if len(taken) == 0 {
		return nil
	}
	in.areOnly = true
	for i := range taken {
		if err := f.addNodalForce(&Field{}, &taken[i]); err != nil {
			return err
		}
	}
	says := map[role]string{nodalForceRole: "nodal force", loadRole: "load", reactionRole: "reaction"}[roleOf(taken[0].Name)]
	why := fmt.Sprintf("its name says %s and it has %d components", says, taken[0].Components)
	if len(taken) > 1 {
		why = "by their names a load and a reaction; added up"
	}
	f.recordNodalForce(byDefault, why)
	return nil
}

// addNodalForce takes one array, or the component arrays of one field.
func (f *fieldFinder) addNodalForce(field *Field, array *mesh.Array) error {
	vector, err := f.vector("nodal_force", field, array)
	if err != nil {
		return err
	}
	in := &f.in.nodalForce
	in.fields = append(in.fields, vector)
	in.areOnly = in.areOnly && roleOf(array.Name) == loadRole
	return nil
}

func (f *fieldFinder) recordNodalForce(by decider, why string) {
	var names []string
	for _, field := range f.in.nodalForce.fields {
		names = append(names, field.names...)
	}
	f.in.used.NodalForce = &FieldUsed{Array: strings.Join(names, " "), On: mesh.OnPoint.String(), DecidedBy: string(by), Why: why}
}

// forceSums are the sums over the points of a model, exact, so that no order shows.
type forceSums struct {
	force, moment [3]Sum // moment about the origin
	size          Sum    // of |F|
	work          Sum    // of F·u
	reach         Sum    // of |F||u|
	lostPoints    int64  // whose force or displacement is not finite
}

// join adds the sums over other points.
func (s *forceSums) join(other *forceSums) {
	for i := range s.force {
		s.force[i].Join(&other.force[i])
		s.moment[i].Join(&other.moment[i])
	}
	s.size.Join(&other.size)
	s.work.Join(&other.work)
	s.reach.Join(&other.reach)
	s.lostPoints += other.lostPoints
}

// add adds one node.
func (s *forceSums) add(node *loadedNode) {
	at, u, f := &node.at, &node.displacement, &node.force
	for i := range 3 {
		j, k := (i+1)%3, (i+2)%3
		s.force[i].Add(f[i])
		s.moment[i].Add(at[j] * f[k])
		s.moment[i].Add(-(at[k] * f[j]))
		s.work.Add(f[i] * u[i])
	}
	size := f.length()
	s.size.Add(size)
	s.reach.Add(size * u.length())
}

// length returns the Euclidean length of the vector.
func (v *Vector) length() float64 {
	return math.Sqrt(float64(v[0]*v[0]) + float64(v[1]*v[1]) + float64(v[2]*v[2]))
}

// A loadedNode is a point on which a force acts.
type loadedNode struct{ at, displacement, force Vector }

// isFinite reports whether everything that is added up of the node is finite.
func (n *loadedNode) isFinite() bool {
	size := n.force.length()
	return isFinite(size*n.displacement.length(), size*n.at.length())
}

// hasNodalForces reports whether the external work comes from forces of the file.
func (p *plan) hasNodalForces() bool { return len(p.inputs.nodalForce.fields) > 0 }

// sumForces adds up the nodal forces and their work over all points, without those that
// the file marks as duplicates or hidden, and with border points of structured pieces in
// one of them.
//
// What else stands in several pieces with the same place, displacement and force to the
// last bit is one node that is written several times, or one whose equal shares are:
// once counts it once, written as often as it stands there. The forces that are in
// equilibrium tell which it is. Points of one piece count as written.
func (p *plan) sumForces(ctx context.Context, walk *mesh.Walk) (once, written *forceSums, err error) {
	summers := make([]forceSummer, walk.Workers())
	counted := map[loadedNode]bool{} // of the pieces before
	for piece := range p.model.Pieces {
		if p.model.Pieces[piece].CellCount == 0 {
			continue
		}
		reading := p.forceReading(piece)
		err := walk.EachPoint(ctx, piece, reading.names, func(number int) mesh.PointVisitor {
			s := &summers[number]
			s.forceReading, s.counted, s.keepsNodes = reading, counted, len(p.model.Pieces) > 1
			return s.visit
		})
		if err != nil {
			return nil, nil, err
		}
		for i := range summers {
			for _, node := range summers[i].nodes {
				counted[node] = true
			}
			summers[i].nodes = summers[i].nodes[:0]
		}
	}
	once, written = &summers[0].once, &summers[0].written
	for i := range summers[1:] {
		once.join(&summers[i+1].once)
		written.join(&summers[i+1].written)
	}
	return once, written, nil
}

// A forceReading says where the forces of one piece's points stand in what is read.
type forceReading struct {
	names        []string
	displacement vectorInput
	forces       []vectorInput
	ghosts       int // position of the marks, -1 without
	grid         *mesh.Grid
}

// ghostPoints is the name of the marks of points that VTK's format sets: 1 duplicate,
// 2 hidden.
const ghostPoints = "vtkGhostType"

func (p *plan) forceReading(piece int) *forceReading {
	r := &forceReading{ghosts: -1, grid: p.model.Pieces[piece].Grid}
	r.displacement = p.inputs.displacement.wantIn(&r.names)
	for _, field := range p.inputs.nodalForce.fields {
		r.forces = append(r.forces, field.wantIn(&r.names))
	}
	if marks := p.model.Pieces[piece].Find(mesh.OnPoint, ghostPoints); marks != nil && marks.Components == 1 && marks.IsInteger() {
		r.ghosts = wantColumn(&r.names, ghostPoints)
	}
	return r
}

// A forceSummer adds up what one worker sees.
type forceSummer struct {
	*forceReading
	counted    map[loadedNode]bool // read only
	keepsNodes bool
	once       forceSums
	written    forceSums
	nodes      []loadedNode // of this piece
}

func (s *forceSummer) visit(span *mesh.PointSpan) error {
	for i := range span.Count {
		if s.grid.IsShared(span.First+int64(i)) || s.ghosts >= 0 && span.Values[s.ghosts][i] != 0 {
			continue
		}
		node := loadedNode{at: Vector(span.Points[3*i : 3*i+3]), displacement: s.displacement.at(span.Values, i)}
		for k := range s.forces {
			part := s.forces[k].at(span.Values, i)
			for c := range part {
				node.force[c] += part[c]
			}
		}
		switch {
		case node.force == Vector{}:
		case !node.isFinite():
			s.written.lostPoints++
			s.once.lostPoints++
		default:
			s.written.add(&node)
			if !s.counted[node] {
				s.once.add(&node)
			}
			if s.keepsNodes {
				s.nodes = append(s.nodes, node)
			}
		}
	}
	return nil
}

// imbalance returns the resultant force as a share of the sum of sizes, or the resultant
// moment about the model's middle as a share of that times the diagonal, whichever is
// larger. Of a ring only the force along the axis counts: the others are in balance
// around it.
func (s *forceSums) imbalance(p *plan) float64 {
	var force, moment, middle Vector
	for i := range 3 {
		force[i], moment[i] = s.force[i].Float64(), s.moment[i].Float64()
		middle[i] = (p.bounds.Low[i] + p.bounds.High[i]) / 2
	}
	size := s.size.Float64()
	if p.options.Idealisation == Axisymmetric {
		axis := 1
		if p.options.AxisX {
			axis = 0
		}
		return math.Abs(force[axis]) / size
	}
	for i := range 3 {
		j, k := (i+1)%3, (i+2)%3
		moment[i] -= float64(middle[j]*force[k]) - float64(middle[k]*force[j])
	}
	return max(force.length()/size, moment.length()/(size*p.bounds.Diagonal()))
}

// chooseForces takes the sums that are in equilibrium, where points stand in several
// pieces.
func (p *plan) chooseForces(once, written *forceSums) *forceSums {
	if once.imbalance(p) > outOfBalance && written.imbalance(p) <= outOfBalance {
		p.inputs.used.NodalForce.Why += "; points in several pieces hold shares of their force, which are added up"
		return written
	}
	return once
}

// workOf judges the sums: whether the forces are all that act on the body, and what their
// work ½ Σ F·u is; None and why where they do not tell. A linear body stores what the
// forces on it have done, which is above 0, so that a negative sum is of forces with the
// opposite sign.
func (p *plan) workOf(sums *forceSums, stored Number) (work Number, reasons []string) {
	forces := &p.inputs.nodalForce
	say := func(format string, arguments ...any) { reasons = append(reasons, fmt.Sprintf(format, arguments...)) }
	if sums.lostPoints > 0 {
		say("%d points have a nodal force or displacement that is not finite and are left out of the external work", sums.lostPoints)
	}
	if sums.size.Float64() == 0 {
		if stored == 0 {
			return 0, reasons
		}
		say("every nodal force of %s is 0, although energy is stored; state [balance] external_work", forces.names())
		return None, reasons
	}
	work = Number(sums.work.Float64() / 2)
	imbalance := sums.imbalance(p)
	isBalanced := imbalance <= outOfBalance
	switch {
	case !isBalanced && !forces.areOnly:
		say("the nodal forces of %s are not in equilibrium (their resultant is %.2g of their sizes): loads or reactions are missing, and with them their work; state [balance] external_work", forces.names(), imbalance)
		return None, reasons
	case stored != 0 && math.Abs(2*float64(work)) <= idleForces*sums.reach.Float64():
		say("the nodal forces of %s do no work, although energy is stored: they are reactions at supports that do not move, and the loads are missing; state [balance] external_work", forces.names())
		return None, reasons
	case !isBalanced:
		say("the nodal forces of %s are the loads by their name, without reactions: the external work holds if no support is moved", forces.names())
	}
	if work < 0 {
		p.inputs.used.NodalForce.Why += "; Σ F·u is negative, as it is for the forces of the body on its surroundings: taken with the opposite sign"
		work = -work
	}
	return work, reasons
}

package study

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"strainledger/energy"
	"strainledger/mesh"
)

// A reading turns a checked tree into options. What one entry says about another is
// checked here: names that have to exist, and keys that go together.
type reading struct {
	root   *node
	folder string // what paths in the study are relative to
	faults *faults
	to     energy.Options

	isComparison bool // the study is one of a comparison, not of a run
}

// options reads the options from a tree that has been checked.
func options(root *node, folder string, to *faults) energy.Options {
	r := reading{root: root, folder: folder, faults: to}
	r.units()
	r.model()
	r.fields()
	r.materials()
	r.regions()
	r.balance()
	r.loading()
	r.judgement()
	r.compressionLimits()
	return r.to
}

func (r *reading) units() {
	r.to.Title = r.root.textOf("title")
	r.to.Length = r.root.textOf("units", "length")
	r.to.Stress = r.root.textOf("units", "stress")
	r.to.Mass = r.root.textOf("units", "mass")
	r.to.Review = energy.Review{
		Document:   r.root.textOf("review", "document"),
		Revision:   r.root.textOf("review", "revision"),
		PreparedBy: r.root.textOf("review", "prepared_by"),
		CheckedBy:  r.root.textOf("review", "checked_by"),
	}
}

func (r *reading) model() {
	model := r.root.get("model")
	r.to.Idealisation = energy.Solid
	if stated := model.textOf("idealisation"); stated != "" {
		r.to.Idealisation = energy.Idealisation(stated)
	}
	r.to.Thickness = model.numberOf(0, "thickness")
	r.to.ThicknessArray = model.textOf("thickness")
	r.to.AxisX = model.textOf("axis") == "x"
	r.to.Deformed = model.textOf("points") == "deformed"
	r.to.Repeats = int(model.numberOf(0, "repeats"))
	r.to.From = energy.EnergySource(r.root.textOf("energy", "from"))
	if !r.isIdealisationSound() {
		return
	}
	if axis := model.get("axis"); axis != nil && r.to.Idealisation != energy.Axisymmetric {
		r.faults.add(axis.place, `model.axis has no meaning in a %s model; remove it or write idealisation = "axisymmetric"`, r.to.Idealisation)
	}
	r.refuseThickness(model.get("thickness"), "model.thickness")
	if r.to.Idealisation == energy.PlaneStress && !model.has("thickness") && !r.everyRegionIsThick() {
		r.faults.add(model.get("idealisation").place,
			"a plane-stress model needs a thickness; add thickness to [model], as a number or the name of a cell array")
	}
}

// isIdealisationSound reports whether what goes with the idealisation can be judged:
// it is stated as it should be, or not at all.
func (r *reading) isIdealisationSound() bool {
	model := r.root.get("model")
	return model.get("idealisation") != nil || !model.has("idealisation")
}

// isPlane reports whether cells have a thickness.
func (r *reading) isPlane() bool {
	return r.to.Idealisation == energy.PlaneStress || r.to.Idealisation == energy.PlaneStrain
}

// refuseThickness reports a thickness that the idealisation has no use for.
func (r *reading) refuseThickness(stated *node, name string) {
	if stated != nil && r.isIdealisationSound() && !r.isPlane() {
		r.faults.add(stated.place, `%s has no meaning in a %s model; remove it or write idealisation = "plane-stress" or "plane-strain"`,
			name, r.to.Idealisation)
	}
}

// everyRegionIsThick reports whether there are regions and each states a thickness.
func (r *reading) everyRegionIsThick() bool {
	regions := r.root.itemsOf("region")
	return len(regions) > 0 && !slices.ContainsFunc(regions, func(region *node) bool { return !region.has("thickness") })
}

func (r *reading) fields() {
	for _, field := range []struct {
		name string
		to   *energy.Field
	}{
		{"stress", &r.to.Fields.Stress},
		{"strain", &r.to.Fields.Strain},
		{"thermal_strain", &r.to.Fields.ThermalStrain},
		{"plastic_strain", &r.to.Fields.PlasticStrain},
		{"equivalent_plastic_strain", &r.to.Fields.EquivalentPlasticStrain},
		{"displacement", &r.to.Fields.Displacement},
		{"nodal_force", &r.to.Fields.NodalForce},
		{"temperature", &r.to.Fields.Temperature},
		{"element_id", &r.to.Fields.ElementID},
	} {
		if stated := r.root.get("fields", field.name); stated != nil {
			*field.to = r.field(stated)
		}
	}
}

// field reads what is stated of one field.
func (r *reading) field(stated *node) energy.Field {
	switch stated.shape {
	case isTruth:
		return energy.Field{Off: true}
	case isText:
		return energy.Field{Arrays: []string{stated.text}}
	}
	field := energy.Field{
		Shear:       stated.textOf("shear"),
		Kind:        stated.textOf("kind"),
		Compression: stated.textOf("sign") == "compression",
	}
	switch stated.textOf("on") {
	case "cell":
		field.On = mesh.OnCell
	case "point":
		field.On = mesh.OnPoint
	case "integration":
		field.Integration = true
	}
	field.Rule = stated.textOf("rule")
	for _, item := range stated.itemsOf("arrays") {
		field.Arrays = append(field.Arrays, item.text)
	}
	if array := stated.textOf("array"); array != "" {
		field.Arrays = []string{array}
	}
	r.fieldParts(stated, &field)
	return field
}

// fieldParts checks what the keys of one field say of each other.
func (r *reading) fieldParts(stated *node, field *energy.Field) {
	path := "fields." + stated.name
	one, several, order := stated.child("array"), stated.get("arrays"), stated.get("order")
	switch {
	case len(stated.keys) == 0:
		r.faults.add(stated.place, `%s is an empty table; write array = "..." in it or remove it`, path)
	case one != nil && several != nil:
		r.faults.add(several.place, "%s has both array and arrays; keep one of them", path)
	}
	if order != nil {
		parsed, err := mesh.ParseOrder(order.text, r.to.AxisX)
		switch {
		case err != nil:
			r.faults.add(order.place, "%s.order: %v", path, err)
		case isCylindrical(order.text) && r.to.Idealisation != energy.Axisymmetric:
			r.faults.add(order.place, `%s.order names rr or tt, which belong to an axisymmetric model; write xx yy zz or idealisation = "axisymmetric"`, path)
		default:
			field.Order = parsed
		}
	}
	if rule := stated.get("rule"); rule != nil {
		switch _, err := energy.ParseRule(rule.text); {
		case !field.Integration:
			r.faults.add(rule.place, `%s.rule is for values at integration points; add on = "integration" or remove it`, path)
		case err != nil:
			r.faults.add(rule.place, "%s.rule: %v", path, err)
		}
	}
	if several == nil {
		return
	}
	seen := map[string]bool{}
	for _, item := range several.items {
		if seen[item.text] {
			r.faults.add(item.place, "%s.arrays names %s twice; name one array for each component", path, quote(item.text))
		}
		seen[item.text] = true
	}
	switch isTensor := findKey(path+".order") != nil; {
	case isTensor && !stated.has("order"):
		r.faults.add(several.place, `%s.arrays without order; add order = "..." with one component for each array`, path)
	case isTensor && field.Order != nil && len(field.Order) != len(several.items):
		r.faults.add(order.place, "%s.order names %d components for %d arrays; name one component for each array", path, len(field.Order), len(several.items))
	case !isTensor && len(several.items) > 3:
		r.faults.add(several.place, "%s.arrays names %d arrays; name at most three, for x, y and z", path, len(several.items))
	}
}

// isCylindrical reports whether a component order uses names that occur in
// cylindrical orders alone.
func isCylindrical(order string) bool {
	words := strings.Fields(strings.ToLower(order))
	return slices.Contains(words, "rr") || slices.Contains(words, "tt")
}

func (r *reading) materials() {
	r.refuseSameNames("material", "name")
	for _, stated := range r.root.itemsOf("material") {
		material := energy.NewMaterial(stated.textOf("name"))
		none := float64(energy.None)
		material.YoungsModulus = stated.numberOf(none, "youngs_modulus")
		material.PoissonsRatio = stated.numberOf(none, "poissons_ratio")
		material.ProportionalLimit = stated.numberOf(none, "proportional_limit")
		material.ProportionalLimitCompression = stated.numberOf(none, "proportional_limit_compression")
		material.YieldStress = stated.numberOf(none, "yield_stress")
		material.HardeningExponent = stated.numberOf(none, "hardening_exponent")
		if exponent := stated.get("hardening_exponent"); exponent != nil && !stated.has("yield_stress") {
			r.faults.add(exponent.place, "material.hardening_exponent without yield_stress; add yield_stress, the stress at 0.2 %% plastic strain")
		}
		material.Source = stated.textOf("source")
		material.Density = stated.numberOf(none, "density")
		material.ThermalExpansion = stated.numberOf(none, "thermal_expansion")
		material.ReferenceTemperature = stated.numberOf(none, "reference_temperature")
		r.brittleness(stated, &material)
		r.anisotropy(stated, &material)
		r.curve(stated, &material)
		r.to.Materials = append(r.to.Materials, material)
	}
}

// namesOf returns the names of the entries of a list of tables.
func (r *reading) namesOf(list string) []string {
	var names []string
	for _, item := range r.root.itemsOf(list) {
		if name := item.textOf("name"); name != "" {
			names = append(names, name)
		}
	}
	return names
}

// refuseSameNames reports entries of a list of tables that share a key's text.
func (r *reading) refuseSameNames(list, key string) {
	first := map[string]place{}
	for _, item := range r.root.itemsOf(list) {
		stated := item.get(key)
		if stated == nil {
			continue
		}
		if at, again := first[stated.text]; again {
			where := at.flag
			if where == "" {
				where = fmt.Sprintf("line %d", at.line)
			}
			r.faults.add(stated.place, "%s.%s %s was given before (%s); use another or remove one of the two", list, key, quote(stated.text), where)
			continue
		}
		first[stated.text] = stated.place
	}
}

// refuseUnknown reports a name that no entry of a list of tables has.
func (r *reading) refuseUnknown(stated *node, path, list string) {
	names := r.namesOf(list)
	switch {
	case stated == nil || slices.Contains(names, stated.text):
	case len(names) == 0 && r.root.has(list): // refused already
	case len(names) == 0:
		r.faults.add(stated.place, "%s is %s, but the study has no %s; add [[%s]]", path, quote(stated.text), list, list)
	default:
		r.faults.add(stated.place, "%s is %s, and no %s has that name; the nearest is %s", path, quote(stated.text), list,
			quote(nearest(stated.text, names)))
	}
}

func (r *reading) regions() {
	r.refuseSameNames("region", "name")
	var rest *node
	for _, stated := range r.root.itemsOf("region") {
		region := energy.Region{
			Name:      stated.textOf("name"),
			Material:  stated.textOf("material"),
			Thickness: stated.numberOf(0, "thickness"),
			Criterion: energy.Criterion(stated.textOf("criterion")),
		}
		if optional := stated.get("optional"); optional != nil {
			region.Optional = optional.truth
		}
		r.refuseUnknown(stated.get("material"), "region.material", "material")
		r.refuseThickness(stated.get("thickness"), "region.thickness")
		r.selection(stated.get("select"), &region)
		if region.Rest && rest != nil {
			r.faults.add(stated.get("select").place, "the region on line %d takes the rest already; select by array, block or box", rest.place.line)
		}
		if region.Rest {
			rest = stated
		}
		r.to.Regions = append(r.to.Regions, region)
	}
}

// selection reads how a region chooses its cells: by one way exactly.
func (r *reading) selection(stated *node, to *energy.Region) {
	if stated == nil {
		return
	}
	ways := 0
	for _, way := range []string{"array", "block", "box", "rest"} {
		if stated.has(way) {
			ways++
		}
	}
	rest := stated.get("rest")
	switch array, values := stated.child("array"), stated.child("values"); {
	case array != nil && !stated.has("values"):
		r.faults.add(array.place, "region.select.array without values; add values = [...] with the numbers that belong to the region")
	case values != nil && !stated.has("array"):
		r.faults.add(values.place, `region.select.values without array; add array = "..." with the name of the cell array`)
	case ways != 1:
		r.faults.add(stated.place, "region.select names %d ways to choose cells; use one of array with values, block, box or rest", ways)
	case rest != nil && !rest.truth:
		r.faults.add(rest.place, "region.select.rest is false, which selects nothing; write true or choose cells by array, block or box")
	}
	to.Array = stated.textOf("array")
	to.Block = stated.textOf("block")
	to.Rest = rest != nil && rest.truth
	for _, value := range stated.itemsOf("values") {
		if math.Abs(value.number) > maxExact {
			r.faults.add(value.place, "region.select.values holds %s; whole numbers are exact up to 2^53 only, use smaller ones", value.text)
		}
		to.Values = append(to.Values, value.number)
	}
	if box := stated.get("box"); box != nil {
		to.Box = r.box(box)
	}
}

// maxExact is the largest number up to which a float64 holds every whole number.
const maxExact = 1 << 53

// box reads the two corners of a box, the lower coordinates first.
func (r *reading) box(stated *node) *energy.Box {
	if len(stated.items) != 2 || len(stated.items[0].items) != 3 || len(stated.items[1].items) != 3 {
		r.faults.add(stated.place, "region.select.box must have two corners of three coordinates; write [[x, y, z], [x, y, z]]")
		return nil
	}
	var box energy.Box
	for axis := range 3 {
		low, high := stated.items[0].items[axis], stated.items[1].items[axis]
		if low.number > high.number {
			r.faults.add(stated.place, "region.select.box has the corners %s and %s in %s; write the lower one first", low.text, high.text, "xyz"[axis:axis+1])
		}
		box.Low[axis], box.High[axis] = low.number, high.number
	}
	return &box
}

// loading reads what a comparison needs to know.
func (r *reading) loading() {
	if stated := r.root.get("loading"); stated != nil && len(stated.keys) > 0 {
		r.to.Loading = &energy.Loading{
			Control: energy.Text(stated.textOf("control")),
			Scale:   energy.Number(stated.numberOf(float64(energy.None), "scale")),
		}
	}
	r.to.HotspotTolerance = r.root.numberOf(0, "compare", "tolerance")
}

// judgement reads what is listed, demanded and accepted.
func (r *reading) judgement() {
	r.to.Limit.Criterion = energy.Criterion(r.root.textOf("limit", "criterion"))
	r.to.Limit.List = int(r.root.numberOf(0, "limit", "list"))
	r.hotspots()
	r.estimate()
	r.verdict()
}

// hotspots reads which hotspots are listed, and what is looked at about them. Without a
// prominence they are single cells.
func (r *reading) hotspots() {
	stated := r.root.get("hotspots")
	prominence := stated.get("prominence")
	r.to.Hotspots = energy.HotspotOptions{
		Count:       int(stated.numberOf(0, "count")),
		By:          stated.textOf("by"),
		Prominence:  stated.numberOf(0, "prominence"),
		SingleCells: prominence != nil && prominence.number == 0,
		Pool:        int(stated.numberOf(0, "pool")),
		Radius:      stated.numberOf(0, "radius"),
	}
	centre := stated.get("centre")
	switch {
	case centre == nil:
	case len(centre.items) != 3:
		r.faults.add(centre.place, "hotspots.centre must have three coordinates; write [x, y, z]")
	case !stated.has("radius"):
		r.faults.add(centre.place, "hotspots.centre without hotspots.radius, within which density is averaged about it; add radius")
	default:
		r.to.Hotspots.Centre = &energy.Vector{centre.items[0].number, centre.items[1].number, centre.items[2].number}
	}
}

// brittleness reads the numbers by which averaged density is held against what a brittle
// material bears.
func (r *reading) brittleness(stated *node, material *energy.Material) {
	none := float64(energy.None)
	material.ControlRadius = stated.numberOf(none, "control_radius")
	material.CriticalDensity = stated.numberOf(none, "critical_density")
	material.FractureToughness = stated.numberOf(none, "fracture_toughness")
	material.TensileStrength = stated.numberOf(none, "tensile_strength")
	if toughness := stated.get("fracture_toughness"); toughness != nil && !stated.has("control_radius") {
		for _, partner := range []string{"tensile_strength", "poissons_ratio"} {
			if !stated.has(partner) {
				r.faults.add(toughness.place, "material.fracture_toughness without %s; the control radius comes from both: add %s, or state control_radius instead", partner, partner)
			}
		}
	}
	if critical := stated.get("critical_density"); critical != nil && !stated.has("control_radius") && !stated.has("fracture_toughness") {
		r.faults.add(critical.place, "material.critical_density without a control radius, within which density is averaged; add control_radius, or fracture_toughness and tensile_strength")
	}
}

// estimate reads how the error of the mesh is estimated.
func (r *reading) estimate() {
	asked := r.root.get("error", "estimate")
	for _, name := range []string{"target", "recovery"} {
		if stated := r.root.get("error", name); stated != nil && asked == nil {
			r.faults.add(stated.place, "error.%s without error.estimate, which asks for the estimate; add estimate = true", name)
		}
	}
	r.to.Error = energy.ErrorOptions{
		Estimate: asked != nil && asked.truth,
		Target:   r.root.numberOf(0, "error", "target"),
		Recovery: energy.Recovery(r.root.textOf("error", "recovery")),
	}
}

// verdict reads what is demanded and accepted.
func (r *reading) verdict() {
	for _, stated := range r.root.itemsOf("require") {
		r.to.Requirements = append(r.to.Requirements, r.requirement(stated))
	}
	r.refuseSameNames("accept", "code")
	for _, stated := range r.root.itemsOf("accept") {
		r.to.Acceptances = append(r.to.Acceptances, energy.Acceptance{Code: stated.textOf("code"), Reason: stated.textOf("reason")})
	}
}

// compressionLimits refuses limits in compression that nothing would be held against.
func (r *reading) compressionLimits() {
	for _, material := range r.root.itemsOf("material") {
		stated := material.get("proportional_limit_compression")
		switch {
		case stated == nil:
		case !material.has("proportional_limit"):
			r.faults.add(stated.place, "material.proportional_limit_compression without proportional_limit; add proportional_limit, the one in tension")
		case !r.isJudgedByPrincipal(material.textOf("name")):
			r.faults.add(stated.place, `material.proportional_limit_compression has a meaning by criterion max-principal alone; remove it or write criterion = "max-principal" in [limit] or in a region of the material`)
		}
	}
}

// isJudgedByPrincipal reports whether cells of a material may be judged by their
// principal stresses. What is stated wrongly may mean anything.
func (r *reading) isJudgedByPrincipal(material string) bool {
	principal := func(criterion energy.Criterion, table *node) bool {
		return criterion == energy.MaxPrincipal || criterion == "" && table.has("criterion")
	}
	byStudy := principal(r.to.Limit.Criterion, r.root.child("limit"))
	regions := r.root.itemsOf("region")
	for i, stated := range regions {
		region := &r.to.Regions[i]
		isItsOwn := region.Material == material || region.Material == "" // there is only one then
		if isItsOwn && (principal(region.Criterion, stated) || byStudy && !stated.has("criterion")) {
			return true
		}
	}
	return len(regions) == 0 && (byStudy || r.root.has("region"))
}

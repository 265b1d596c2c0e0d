package energy

import (
	"encoding/json"
	"reflect"
	"slices"
	"strconv"
	"strings"

	"strainledger/mesh"
)

// descriptionName is the field array that describes integration-point arrays beside
// them, a JSON text: {"integration_point_arrays": [{"name", "integration_order",
// "number_of_components"}]}. The order is the number of Gauss points along each
// parametric direction, the first of which varies slowest.
const descriptionName = "IntegrationPointMetaData"

// An integrationRule gives points and weights in the cells of a shape: a
// [mesh.GaussRule], or the [mesh.Schemes] of the file.
type integrationRule interface {
	Points() int // in a cell
	Tabulate(*mesh.Shape) (*mesh.Tabulation, error)
}

// describedPoints returns the number of Gauss points along each direction of the
// integration-point arrays that the file describes, by name.
func describedPoints(model *mesh.Model) map[string]int {
	var description struct {
		Arrays []struct {
			Name  string `json:"name"`
			Order int    `json:"integration_order"`
		} `json:"integration_point_arrays"`
	}
	counts := map[string]int{}
	text := model.Text(descriptionName)
	if text == "" || json.Unmarshal([]byte(text), &description) != nil {
		return counts // not a description that is known here
	}
	for _, array := range description.Arrays {
		if array.Order >= 1 && array.Order <= maxGaussPoints {
			counts[array.Name] = array.Order
		}
	}
	return counts
}

// maxGaussPoints bounds the points along one direction.
const maxGaussPoints = 16

// ParseRule reads the name of an integration rule: "gauss 3x3" with the points along
// each parametric direction, the first varying fastest, or "gauss 3x3 slow" with the
// first varying slowest.
func ParseRule(text string) (*mesh.GaussRule, error) {
	words := strings.Fields(strings.ToLower(text))
	rule := &mesh.GaussRule{}
	if len(words) == 3 && words[2] == "slow" {
		rule.FirstIsSlowest = true
		words = words[:2]
	}
	if len(words) != 2 || words[0] != "gauss" {
		return nil, studyError("integration rule %q: want \"gauss 3x3\", or \"gauss 3x3 slow\" where the first parametric direction varies slowest", text)
	}
	for _, word := range strings.Split(words[1], "x") {
		count, err := strconv.Atoi(word)
		if err != nil || count < 1 || count > maxGaussPoints || len(rule.Counts) == 3 {
			return nil, studyError("integration rule %q: want 1 to %d points along one to three directions, such as 3x3", text, maxGaussPoints)
		}
		rule.Counts = append(rule.Counts, count)
	}
	return rule, nil
}

// findIntegrationArrays adds the field arrays that hold results at integration points
// to the arrays that can be taken: those that the file describes, and those that the
// study names.
func (f *fieldFinder) findIntegrationArrays(model *mesh.Model) {
	described := describedPoints(model)
	cells := model.CellCount()
	for _, array := range model.Fields {
		_, isDescribed := described[array.Name]
		isDescribed = isDescribed || array.Offsets != "" && len(model.Schemes) > 0
		if cells > 0 && array.Tuples >= cells && array.Tuples%cells == 0 && isNumeric(array) && (isDescribed || f.isStatedAtIntegration(array.Name)) {
			f.arrays = append(f.arrays, array)
			f.hasIntegration = true
		}
	}
	f.described, f.schemes, f.cells = described, model.Schemes, cells
	// A cell array may hold the points of each cell in one long tuple.
	f.hasIntegration = f.hasIntegration || f.options.Fields.Stress.Integration || f.options.Fields.Strain.Integration
}

// isStatedAtIntegration reports whether the study names the array as one at
// integration points.
func (f *fieldFinder) isStatedAtIntegration(name string) bool {
	fields := &f.options.Fields
	for _, field := range []*Field{&fields.Stress, &fields.Strain, &fields.ThermalStrain, &fields.PlasticStrain, &fields.EquivalentPlasticStrain, &fields.Temperature} {
		if field.Integration && slices.Contains(field.Arrays, name) {
			return true
		}
	}
	return false
}

// locations are tried in this order where the study does not say: integration points,
// then cells, then points.
func (f *fieldFinder) locations() []mesh.Location {
	if f.hasIntegration {
		return []mesh.Location{mesh.OnField, mesh.OnCell, mesh.OnPoint}
	}
	return []mesh.Location{mesh.OnCell, mesh.OnPoint}
}

// placeName names a location as the ledger does.
func placeName(on mesh.Location) string {
	if on == mesh.OnField {
		return "integration"
	}
	return on.String()
}

// placesName names the places of a location in a sentence.
func placesName(on mesh.Location) string {
	if on == mesh.OnField {
		return "integration points"
	}
	return on.String() + "s"
}

// settleRule finds the rule of an integration-point array: the study's, or the file's
// description. It returns the number of points in a cell and the number of components
// at each.
func (f *fieldFinder) settleRule(key string, field *Field, array *mesh.Array) (points, components int, err error) {
	var rule integrationRule
	switch order := f.described[array.Name]; {
	case field.Rule != "":
		if rule, err = ParseRule(field.Rule); err != nil {
			return 0, 0, err
		}
	case order > 0:
		dimension := 2
		if f.options.Idealisation == Solid {
			dimension = 3
		}
		rule = &mesh.GaussRule{Counts: slices.Repeat([]int{order}, dimension), FirstIsSlowest: true}
	case array.Offsets != "" && f.schemes.Points() > 0:
		rule = f.schemes
	default:
		return 0, 0, inputError("[fields] %s: array %q holds integration points, but the file does not describe their rule; state rule = \"gauss 3x3\"", key, array.Name)
	}
	points = rule.Points()
	if f.in.rule != nil && !reflect.DeepEqual(f.in.rule, rule) {
		return 0, 0, inputError("[fields] %s: array %q has another integration rule than the field before it", key, array.Name)
	}
	f.in.rule = rule
	if array.On == mesh.OnCell {
		if array.Components%points != 0 {
			return 0, 0, inputError("[fields] %s: cell array %q has %d components, the rule has %d points", key, array.Name, array.Components, points)
		}
		return points, array.Components / points, nil
	}
	if array.Tuples != f.cells*int64(points) {
		return 0, 0, inputError("[fields] %s: array %q has %d tuples for %d cells, the rule has %d points in a cell", key, array.Name, array.Tuples, f.cells, points)
	}
	return points, array.Components, nil
}

// evaluatePoints fills the columns of a cell whose stress and strain are at its
// integration points: the density at each point, with the rule's weights.
func (w *worker) evaluatePoints(chunk *mesh.Chunk, i int, r *region, orientation mesh.Orientation) (exclusionReason, error) {
	rule, err := w.integrationRule(w.cell.Shape)
	if err != nil {
		return 0, inputError("%s: cell %d: %w", w.model.Sources[chunk.Source].Path, chunk.First+int64(i), err)
	}
	w.growNodes(w.cell.Shape.NodeCount)
	elements, factor := w.elementsOf(rule, chunk, i, r, orientation)
	w.isYielded[i], w.peak[i] = false, -infinity
	largest, least := -infinity, infinity
	var energy, volumetric, curve float64
	for q, element := range elements {
		w.placeValues = w.cell.Values(rule, q, w.rational)
		var stress, strain mesh.SymmetricTensor
		if w.at(chunk, i, int32(q), r, &stress, &strain) {
			w.isYielded[i] = true
		}
		if !stress.IsFinite() || !strain.IsFinite() {
			return notFinite, nil
		}
		density := Density(&stress, &strain)
		if density > w.peak[i] {
			w.peak[i], w.peakNode[i], w.tensor[i] = density, int32(q), stress
		}
		equivalent := r.limit.equivalent(&stress)
		largest, least = max(largest, equivalent), min(least, equivalent)
		energy += float64(density * element)
		volumetric += float64(VolumetricDensity(&stress, &strain) * element)
		if r.hencky != nil {
			reached := sum(&strain, w.plasticAt(chunk, i, int32(q)))
			curve += float64(r.hencky.Density(&reached) * element)
		}
	}
	w.placeValues = nil
	w.equivalent[i] = r.limit.governing(largest, least)
	w.utilisation[i] = r.limit.utilisation(w.equivalent[i])
	w.energy[i], w.volumetric[i], w.curve[i] = energy*factor, 0, curve*factor
	if w.law.IsIsotropic() {
		w.volumetric[i] = volumetric * factor
	}
	w.density[i] = w.energy[i] / w.measure[i]
	if !isFinite(w.energy[i], w.volumetric[i], w.equivalent[i], w.density[i]) {
		return notFinite, nil
	}
	return notExcluded, nil
}

// integrationRule returns the rule of the integration points over the cells of a shape.
func (w *worker) integrationRule(shape *mesh.Shape) (*mesh.Tabulation, error) {
	if shape != w.ruleShape {
		rule, err := w.inputs.rule.Tabulate(shape)
		if err != nil {
			return nil, err
		}
		w.rule, w.ruleShape = rule, shape
	}
	return w.rule, nil
}

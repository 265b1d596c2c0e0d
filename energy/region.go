package energy

import (
	"context"
	"fmt"
	"math"
	"path"
	"slices"
	"strconv"
	"strings"

	"strainledger/mesh"
)

// A region is one region of the study with all that its cells need.
type region struct {
	name      string
	material  *Material  // nil: none
	law       *Law       // nil: none
	hencky    *HenckyLaw // nil: no curve
	limit     limit
	thickness float64
	optional  bool
}

// A selector decides which cells a region takes. One of its kinds is set.
type selector struct {
	label  int // column of Chunk.Labels, or -1
	values map[int64]bool
	blocks []bool // by block of the model; nil: not by block
	box    *Box
	rest   bool
}

// regionMap assigns cells to regions.
type regionMap struct {
	regions   []region
	selectors []selector
	labels    []int // the label columns that selectors use
	hasBox    bool
}

// maxDistinctLabels is the number of distinct values up to which an integer cell
// array is taken for one that names regions. More are numbers of cells, not of parts.
const maxDistinctLabels = 1000

// newRegionMap resolves the study's regions, or makes those of the file where the
// study has none: one for each block where there are several, else one for each value
// of an integer cell array whose name says material, part or region, else one.
func newRegionMap(ctx context.Context, walk *mesh.Walk, model *mesh.Model, options *Options, in *inputs) (*regionMap, error) {
	m := &regionMap{}
	list := options.Regions
	if len(list) == 0 {
		var err error
		if list, err = regionsOfFile(ctx, walk, model, options); err != nil {
			return nil, err
		}
	}
	for i := range list {
		if err := m.add(&list[i], model, options, in); err != nil {
			return nil, err
		}
	}
	return m, nil
}

// add resolves one region.
func (m *regionMap) add(rule *Region, model *mesh.Model, options *Options, in *inputs) error {
	r := region{name: rule.Name, thickness: rule.Thickness, optional: rule.Optional}
	if r.thickness == 0 {
		r.thickness = options.Thickness
	}
	if err := r.setMaterial(rule, options); err != nil {
		return err
	}
	if err := r.setLimit(rule, options); err != nil {
		return err
	}
	s := selector{label: -1, box: rule.Box, rest: rule.Rest}
	switch {
	case rule.Array != "":
		if err := s.byLabel(rule, model, in); err != nil {
			return err
		}
		if !slices.Contains(m.labels, s.label) {
			m.labels = append(m.labels, s.label)
		}
	case rule.Block != "":
		if err := s.byBlock(rule, model); err != nil {
			return err
		}
	}
	m.hasBox = m.hasBox || rule.Box != nil
	m.regions = append(m.regions, r)
	m.selectors = append(m.selectors, s)
	return nil
}

// setMaterial finds the region's material: the named one, or the only one there is.
func (r *region) setMaterial(rule *Region, options *Options) error {
	name := rule.Material
	if name == "" {
		switch len(options.Materials) {
		case 0:
			return nil
		case 1:
			name = options.Materials[0].Name
		default:
			return studyError("region %q has no material, and the study has %d: state one", rule.Name, len(options.Materials))
		}
	}
	i := slices.IndexFunc(options.Materials, func(m Material) bool { return m.Name == name })
	if i < 0 {
		return studyError("region %q: no material %q", rule.Name, name)
	}
	r.material = &options.Materials[i]
	law, err := r.material.Law()
	if err != nil {
		return studyError("material %q: %w", name, err)
	}
	r.law = law
	if r.hencky, err = r.material.henckyLaw(law); err != nil {
		return studyError("material %q: %w", name, err)
	}
	return nil
}

// byLabel selects by the values of a cell array.
func (s *selector) byLabel(rule *Region, model *mesh.Model, in *inputs) error {
	for i := range model.Pieces {
		piece := &model.Pieces[i]
		if piece.CellCount == 0 {
			continue
		}
		array := piece.Find(mesh.OnCell, rule.Array)
		if array == nil || array.Components != 1 {
			return studyError("region %q: %s has no cell array %q with one component", rule.Name, model.Sources[piece.Source].Path, rule.Array)
		}
	}
	s.label = wantColumn(&in.want.Labels, rule.Array)
	s.values = map[int64]bool{}
	for _, value := range rule.Values {
		if value != math.Trunc(value) || math.Abs(value) > 1<<53 {
			return studyError("region %q: values select whole numbers, not %g", rule.Name, value)
		}
		s.values[int64(value)] = true
	}
	return nil
}

// byBlock selects by the block's name: a slash path in which * matches within one
// element.
func (s *selector) byBlock(rule *Region, model *mesh.Model) error {
	s.blocks = make([]bool, len(model.Blocks))
	for i, name := range model.Blocks {
		match, err := path.Match(escapeBrackets(rule.Block), name)
		if err != nil {
			return studyError("region %q: block pattern %q: %w", rule.Name, rule.Block, err)
		}
		s.blocks[i] = match || name == rule.Block
	}
	if !slices.Contains(s.blocks, true) && !rule.Optional {
		return studyError("region %q: no block %q; there are: %s", rule.Name, rule.Block, quoted(model.Blocks))
	}
	return nil
}

// escapeBrackets leaves * as the only sign with a meaning in a block pattern.
func escapeBrackets(pattern string) string {
	return strings.NewReplacer(`\`, `\\`, `[`, `\[`, `?`, `\?`).Replace(pattern)
}

// quoted lists names for a message.
func quoted(names []string) string {
	list := make([]string, len(names))
	for i, name := range names {
		list[i] = strconv.Quote(name)
	}
	return strings.Join(list, ", ")
}

// regionsOfFile makes the regions of a study that states none.
func regionsOfFile(ctx context.Context, walk *mesh.Walk, model *mesh.Model, options *Options) ([]Region, error) {
	var list []Region
	if blocks := blocksWithCells(model); len(blocks) > 1 {
		for _, block := range blocks {
			list = append(list, Region{Name: model.Blocks[block], Block: model.Blocks[block], Optional: true})
		}
	} else {
		array, values, err := regionArray(ctx, walk, model)
		if err != nil {
			return nil, err
		}
		for _, value := range values {
			list = append(list, Region{Name: fmt.Sprintf("%s %d", array, value), Array: array, Values: []float64{float64(value)}, Optional: true})
		}
	}
	if len(list) == 0 {
		list = []Region{{Name: "all", Rest: true}}
	}
	if len(options.Materials) > 1 {
		return nil, studyError("the study has %d materials and no [[region]] that assigns them", len(options.Materials))
	}
	return list, nil
}

// blocksWithCells returns the blocks of the model that hold cells, in order.
func blocksWithCells(model *mesh.Model) []int {
	var blocks []int
	for i := range model.Pieces {
		if piece := &model.Pieces[i]; piece.CellCount > 0 && !slices.Contains(blocks, piece.Block) {
			blocks = append(blocks, piece.Block)
		}
	}
	slices.Sort(blocks)
	return blocks
}

// regionWords are looked for in this order.
var regionWords = []string{"material", "part", "region"}

// namesRegions reports whether an array's name says that it holds the word's numbers:
// a word that begins with it, or mat for material, in any case.
func namesRegions(name, word string) bool {
	return slices.ContainsFunc(words(name), func(w string) bool {
		return strings.HasPrefix(w, word) && !strings.HasPrefix(w, "partial") && !strings.HasPrefix(w, "partic") &&
			!strings.HasPrefix(w, "partition") || word == "material" && (w == "mat" || w == "matid" || w == "matno")
	})
}

// regionArray finds the integer cell array that tells the regions apart, and its
// distinct values in rising order.
func regionArray(ctx context.Context, walk *mesh.Walk, model *mesh.Model) (string, []int64, error) {
	for _, word := range regionWords {
		for _, array := range commonArrays(model) {
			if array.On != mesh.OnCell || array.Components != 1 || !array.IsInteger() || !namesRegions(array.Name, word) {
				continue
			}
			values, err := distinctLabels(ctx, walk, array.Name)
			if err != nil {
				return "", nil, err
			}
			if len(values) > 0 && len(values) <= maxDistinctLabels {
				return array.Name, values, nil
			}
		}
	}
	return "", nil, nil
}

// distinctLabels returns the distinct values of a cell array, rising; of too many, as
// many as show that they are too many.
func distinctLabels(ctx context.Context, walk *mesh.Walk, name string) ([]int64, error) {
	seen := make([]map[int64]bool, walk.Workers())
	err := walk.Each(ctx, &mesh.Want{Labels: []string{name}, NoNodes: true}, nil, func(worker int) mesh.Visitor {
		mine := map[int64]bool{}
		seen[worker] = mine
		return func(chunk *mesh.Chunk) error {
			last, isSet := int64(0), false
			for _, label := range chunk.Labels[0] {
				if isSet && label == last {
					continue
				}
				if last, isSet = label, true; len(mine) <= maxDistinctLabels {
					mine[label] = true
				}
			}
			return nil
		}
	})
	if err != nil {
		return nil, err
	}
	all := map[int64]bool{}
	for _, mine := range seen {
		for label := range mine {
			all[label] = true
		}
	}
	values := make([]int64, 0, len(all))
	for label := range all {
		values = append(values, label)
	}
	slices.Sort(values)
	return values, nil
}

// assign writes the region of every cell of the chunk to the slice, -1 for none, and
// returns how many cells more than one region claims.
func (m *regionMap) assign(chunk *mesh.Chunk, to []int32) (overlaps int64) {
	var cell mesh.Cell
	kept, keptOverlap := int32(-1), false
	for i := range to[:chunk.Count] {
		if i == 0 || m.hasBox || m.labelsChange(chunk, i) {
			var middle Vector
			if m.hasBox {
				chunk.Cell(i, &cell)
				middle = cell.Middle()
			}
			kept, keptOverlap = m.regionOf(chunk, i, middle)
		}
		to[i] = kept
		if keptOverlap {
			overlaps++
		}
	}
	return overlaps
}

// labelsChange reports whether cell i differs from the one before in any label that
// regions go by.
func (m *regionMap) labelsChange(chunk *mesh.Chunk, i int) bool {
	for _, column := range m.labels {
		if labels := chunk.Labels[column]; labels[i] != labels[i-1] {
			return true
		}
	}
	return false
}

// regionOf returns the first region that selects the cell, -1 for none, and whether
// a later one claims it too. The rest takes what no other region claims, wherever it
// stands.
func (m *regionMap) regionOf(chunk *mesh.Chunk, i int, middle Vector) (first int32, isClaimedAgain bool) {
	first, rest := -1, int32(-1)
	for number := range m.selectors {
		s := &m.selectors[number]
		switch {
		case s.rest:
			if rest < 0 {
				rest = int32(number)
			}
		case !s.selects(chunk, i, middle):
		case first < 0:
			first = int32(number)
		default:
			isClaimedAgain = true
		}
	}
	if first < 0 {
		first = rest
	}
	return first, isClaimedAgain
}

// selects reports whether the selector takes the cell.
func (s *selector) selects(chunk *mesh.Chunk, i int, middle Vector) bool {
	switch {
	case s.label >= 0:
		return s.values[chunk.Labels[s.label][i]]
	case s.blocks != nil:
		return s.blocks[chunk.Block]
	case s.box != nil:
		for axis := range middle {
			if !(middle[axis] >= s.box.Low[axis] && middle[axis] <= s.box.High[axis]) {
				return false
			}
		}
		return true
	}
	return false
}

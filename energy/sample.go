package energy

import (
	"context"
	"math"
	"slices"
	"sync"

	"strainledger/mesh"
)

const (
	// samplePlaces bounds the places at which the audit looks: with stress and strain
	// of six components, 50,000 values.
	samplePlaces = 4096
	// sampleSpan is the length of a span of cells in the sample: short spans would
	// decode whole blocks of a compressed file for a few cells.
	sampleSpan = 256
	// spansOfRegion is how many spans a region gets at least, where it has as many.
	spansOfRegion = 4
)

// A samplePlace is what the file says at one place of one cell: the stored tuples, as
// they are, and what single numbers add to the strain.
type samplePlace struct {
	position sampleKey
	region   int32
	law      *Law // in model axes; nil: none

	stress, strain, thermal, plastic [9]float64 // as stored
	expansion                        float64    // thermal strain from temperature
	isPlastic                        bool       // the equivalent plastic strain is not 0
	gradient                         mesh.SymmetricTensor
}

// A sampleKey orders the places of a sample as the model does.
type sampleKey struct {
	piece int
	cell  int64
	node  int
}

func (k sampleKey) compare(other sampleKey) int {
	switch {
	case k.piece != other.piece:
		return k.piece - other.piece
	case k.cell != other.cell:
		return int(max(-1, min(1, k.cell-other.cell)))
	}
	return k.node - other.node
}

// takeSample reads some spans of cells, spread evenly over the model and over every
// region that labels tell, always the same ones.
//
// A place is a cell, or a node of a cell where fields are on points; with gradients it
// is always a cell, with the mean of its nodes' values and the mean strain by the
// gradients of the displacement. Nodes that cells of several regions share are left
// out: what was averaged across a border obeys no law.
func (p *plan) takeSample(ctx context.Context, walk *mesh.Walk, gradients *vectorInput) ([]samplePlace, error) {
	spans, err := p.sampleSpans(ctx, walk)
	if err != nil {
		return nil, err
	}
	var lock sync.Mutex
	var sample []samplePlace
	err = walk.Some(ctx, spans, p.sampleWant(gradients), func(int) mesh.Visitor {
		s := &sampler{plan: p, displacement: gradients}
		return func(chunk *mesh.Chunk) error {
			places := s.read(chunk)
			if s.fault != nil {
				return inputError("%s: %w", p.model.Sources[chunk.Source].Path, s.fault)
			}
			lock.Lock()
			defer lock.Unlock()
			sample = append(sample, places...)
			return nil
		}
	})
	slices.SortFunc(sample, func(a, b samplePlace) int { return a.position.compare(b.position) })
	return slices.DeleteFunc(sample, func(place samplePlace) bool { return !place.isUsable() }), err
}

// isUsable reports whether the numbers of a place are finite and their squares, too.
func (s *samplePlace) isUsable() bool {
	const largest = 1e100
	isUsable := math.Abs(s.expansion) < largest
	for c := range s.stress {
		isUsable = isUsable && math.Abs(s.stress[c]) < largest && math.Abs(s.strain[c]) < largest &&
			math.Abs(s.thermal[c]) < largest && math.Abs(s.plastic[c]) < largest
	}
	return isUsable && s.gradient.IsFinite()
}

// sampleWant is what the sample reads: the tally's arrays, without nodes where they
// are not needed, and the displacement where its gradients are.
func (p *plan) sampleWant(gradients *vectorInput) *mesh.Want {
	want := p.inputs.want
	if gradients != nil {
		want.PointValues = slices.Clone(want.PointValues)
		*gradients = gradients.wantIn(&want.PointValues)
		return &want
	}
	want.NoNodes = p.inputs.isPerCell() && !p.regions.hasBox
	return &want
}

// sampleSpans chooses the spans of the sample.
func (p *plan) sampleSpans(ctx context.Context, walk *mesh.Walk) ([]mesh.Span, error) {
	places := int64(samplePlaces)
	if !p.inputs.isPerCell() {
		places /= 8 // nodes of a usual cell
	}
	spans := p.evenSpans(places)
	if len(p.regions.labels) > 0 && p.model.CellCount() > places {
		more, err := p.regionSpans(ctx, walk)
		if err != nil {
			return nil, err
		}
		spans = append(spans, more...)
	}
	slices.SortFunc(spans, func(a, b mesh.Span) int {
		return sampleKey{a.Piece, a.Low, 0}.compare(sampleKey{b.Piece, b.Low, 0})
	})
	return disjoint(spans), nil
}

// evenSpans spreads spans evenly over the cells of the model; a small model is taken
// whole.
func (p *plan) evenSpans(places int64) []mesh.Span {
	cells := p.model.CellCount()
	length := int64(sampleSpan)
	stride := length
	if cells > places {
		length = min(length, places)
		stride = cells / (places / length)
	}
	var spans []mesh.Span
	next := int64(0) // cell of the model at which the next span begins
	first := int64(0)
	for piece := range p.model.Pieces {
		count := p.model.Pieces[piece].CellCount
		for ; next < first+count; next += stride {
			low := next - first
			spans = append(spans, mesh.Span{Piece: piece, Low: low, High: min(low+length, count)})
		}
		first += count
	}
	return spans
}

// regionSpans finds some spans for each region by its labels.
func (p *plan) regionSpans(ctx context.Context, walk *mesh.Walk) ([]mesh.Span, error) {
	var lock sync.Mutex
	begins := make([][]mesh.Span, len(p.regions.regions))
	want := &mesh.Want{Labels: p.inputs.want.Labels, NoNodes: true}
	if p.regions.hasBox {
		return nil, nil // boxes need points; the even spans have to do
	}
	err := walk.Each(ctx, want, nil, func(int) mesh.Visitor {
		var regions []int32
		return func(chunk *mesh.Chunk) error {
			regions = slices.Grow(regions[:0], chunk.Count)[:chunk.Count]
			p.regions.assign(chunk, regions)
			low := chunk.First - p.model.Pieces[chunk.Piece].FirstCell
			seen := map[int32]bool{}
			for i, region := range regions {
				if region < 0 || i > 0 && region == regions[i-1] || seen[region] {
					continue
				}
				seen[region] = true
				begin := low + int64(i)
				high := min(begin+sampleSpan/4, p.model.Pieces[chunk.Piece].CellCount)
				lock.Lock()
				begins[region] = append(begins[region], mesh.Span{Piece: chunk.Piece, Low: begin, High: high})
				lock.Unlock()
			}
			return nil
		}
	})
	var spans []mesh.Span
	for _, list := range begins {
		slices.SortFunc(list, func(a, b mesh.Span) int {
			return sampleKey{a.Piece, a.Low, 0}.compare(sampleKey{b.Piece, b.Low, 0})
		})
		for k := range min(spansOfRegion, len(list)) {
			spans = append(spans, list[k*len(list)/min(spansOfRegion, len(list))])
		}
	}
	return spans, err
}

// disjoint cuts what sorted spans have in common from the later ones.
func disjoint(spans []mesh.Span) []mesh.Span {
	var list []mesh.Span
	for _, span := range spans {
		if n := len(list); n > 0 && list[n-1].Piece == span.Piece {
			span.Low = max(span.Low, list[n-1].High)
		}
		if span.Low < span.High {
			list = append(list, span)
		}
	}
	return list
}

// A sampler turns chunks into places.
type sampler struct {
	*plan
	displacement *vectorInput // nil: no gradients
	regions      []int32
	cell         mesh.Cell
	moves        []Vector
	slopes       [][3]float64
	fault        error // the first material axes that are none
}

// read returns the places of the chunk's cells that will be in an account.
func (s *sampler) read(chunk *mesh.Chunk) []samplePlace {
	s.regions = slices.Grow(s.regions[:0], chunk.Count)[:chunk.Count]
	s.plan.regions.assign(chunk, s.regions)
	var places []samplePlace
	for i := range chunk.Count {
		if s.regions[i] < 0 || isHidden(chunk, i) {
			continue
		}
		if chunk.Shapes == nil { // cell data alone: the dimension shows in the type
			if chunk.Types[i].Dimension() == s.dimension {
				places = append(places, s.place(chunk, i, 0, 0))
			}
			continue
		}
		chunk.Cell(i, &s.cell)
		switch {
		case s.cell.Shape.Dimension != s.dimension:
		case s.displacement != nil:
			places = s.appendMean(places, chunk, i)
		case s.inputs.isPerCell():
			places = append(places, s.place(chunk, i, 0, 0))
		case s.inputs.rule != nil:
			for q := range s.inputs.rule.Points() {
				places = append(places, s.place(chunk, i, q, int32(q)))
			}
		default:
			for k, node := range s.cell.Nodes {
				if !s.border.has(chunk.Piece, node) {
					places = append(places, s.place(chunk, i, k, node))
				}
			}
		}
	}
	return places
}

// place returns what the file says at one cell, or at its node k.
func (s *sampler) place(chunk *mesh.Chunk, i, k int, node int32) samplePlace {
	in := s.inputs
	region := &s.plan.regions.regions[s.regions[i]]
	place := samplePlace{position: sampleKey{chunk.Piece, chunk.First + int64(i), k}, region: s.regions[i]}
	var err error
	if place.law, err = region.lawAt(chunk, i); err != nil && s.fault == nil {
		s.fault = err
	}
	for _, field := range []struct {
		input *tensorInput
		to    *[9]float64
	}{{&in.stress, &place.stress}, {&in.strain, &place.strain}, {&in.thermalStrain, &place.thermal}, {&in.plasticStrain, &place.plastic}} {
		if field.input.exists() {
			*field.to = field.input.stored(chunk, i, node)
		}
	}
	if in.equivalentPlasticStrain.exists() {
		place.isPlastic = in.equivalentPlasticStrain.at(chunk, i, node) != 0
	}
	if in.temperature.exists() && region.material != nil {
		place.expansion = region.material.ThermalExpansion * (s.temperature(chunk, i, node) - region.material.ReferenceTemperature)
		if place.expansion != place.expansion {
			place.expansion = 0 // this material does not expand
		}
	}
	return place
}

// temperature returns that of a place; for integration points the mean of the nodes.
func (s *sampler) temperature(chunk *mesh.Chunk, i int, node int32) float64 {
	in := &s.inputs.temperature
	if s.inputs.rule == nil || in.on != mesh.OnPoint {
		return in.at(chunk, i, node)
	}
	nodes := chunk.Nodes[chunk.Start[i]:chunk.Start[i+1]]
	var mean float64
	for _, node := range nodes {
		mean += in.at(chunk, i, node) / float64(len(nodes))
	}
	return mean
}

// appendMean adds a cell with the mean of its nodes' values and the mean strain by the
// gradients of its displacement.
func (s *sampler) appendMean(places []samplePlace, chunk *mesh.Chunk, i int) []samplePlace {
	shape := s.cell.Shape
	if !shape.Interpolates() {
		return places
	}
	mean := s.place(chunk, i, 0, s.cell.Nodes[0])
	for _, node := range s.cell.Nodes[1:] {
		next := s.place(chunk, i, 0, node)
		for c := range mean.strain {
			mean.stress[c] += next.stress[c]
			mean.strain[c] += next.strain[c]
			mean.thermal[c] += next.thermal[c]
			mean.plastic[c] += next.plastic[c]
		}
		mean.expansion += next.expansion
	}
	count := float64(len(s.cell.Nodes))
	for c := range mean.strain {
		mean.stress[c] /= count
		mean.strain[c] /= count
		mean.thermal[c] /= count
		mean.plastic[c] /= count
	}
	mean.expansion /= count
	mean.gradient = s.meanStrain(chunk)
	return append(places, mean)
}

// meanStrain returns the mean of the symmetric displacement gradient over the current
// cell, without the hoop term of rings.
func (s *sampler) meanStrain(chunk *mesh.Chunk) (mean mesh.SymmetricTensor) {
	shape := s.cell.Shape
	rule := shape.MeasureRule()
	if len(s.slopes) < shape.NodeCount {
		s.moves, s.slopes = make([]Vector, shape.NodeCount), make([][3]float64, shape.NodeCount)
	}
	for k, node := range s.cell.Nodes {
		s.moves[k] = s.displacement.at(chunk.PointValues, int(node))
	}
	var whole float64
	for q, weight := range rule.Weights {
		element := weight * s.cell.Gradients(rule, q, s.slopes[:shape.NodeCount])
		strain := symmetricGradient(s.moves[:shape.NodeCount], s.slopes)
		for c := range mean {
			mean[c] += float64(strain[c] * element)
		}
		whole += element
	}
	for c := range mean {
		mean[c] /= whole
	}
	return mean
}

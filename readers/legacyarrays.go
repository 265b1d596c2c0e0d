package readers

import (
	"strconv"
	"strings"

	"strainledger/mesh"
)

// attributes reads the sections of point and cell data.
func (l *legacyFile) attributes(keyword string) error {
	on := mesh.OnPoint
	tuples := l.piece.pointCount
	for {
		var err error
		l.keywordOfData = keyword
		switch keyword {
		case "POINT_DATA", "CELL_DATA":
			on, tuples = mesh.OnPoint, l.piece.pointCount
			if keyword == "CELL_DATA" {
				on, tuples = mesh.OnCell, l.piece.cellCount
			}
			var count int64
			if count, err = l.count("tuples"); err == nil && count != tuples {
				err = l.window.fail(malformed("found %s of %d %ss, need %d", keyword, count, on, tuples))
			}
		case "SCALARS":
			err = l.scalars(on, tuples)
		case "VECTORS", "NORMALS":
			err = l.named(on, 3, tuples)
		case "TENSORS":
			err = l.named(on, 9, tuples)
		case "TENSORS6":
			err = l.named(on, 6, tuples)
		case "GLOBAL_IDS", "PEDIGREE_IDS", "EDGE_FLAGS":
			err = l.named(on, 1, tuples)
		case "TEXTURE_COORDINATES", "COLOR_SCALARS":
			err = l.sized(keyword, on, tuples)
		case "LOOKUP_TABLE":
			err = l.table()
		case "FIELD":
			err = l.field(on, tuples)
		case "METADATA":
			err = l.metadata(nil)
		default:
			err = l.window.fail(malformed("found %.40q, need a keyword of point or cell data", keyword))
		}
		if err != nil {
			return err
		}
		if keyword, err = l.keyword(); err != nil || l.ends {
			return err
		}
	}
}

// keep takes a point or cell array.
func (l *legacyFile) keep(a *column) {
	p := l.piece
	if !p.keep(a, l.version < 400) {
		return
	}
	if a.On == mesh.OnCell && a.Name == "HigherOrderDegrees" && a.Components == 3 {
		p.degrees = a
		l.mark(a, "HigherOrderDegrees")
	}
	if a.On == mesh.OnPoint && a.Name == "RationalWeights" && a.Components == 1 {
		p.weights = a.Name
		l.mark(a, "RationalWeights")
	}
	l.mark(a, keywordAttributes[l.keywordOfData])
}

// keywordAttributes are the attributes that keywords of point and cell data give.
var keywordAttributes = map[string]string{
	"SCALARS": "Scalars", "COLOR_SCALARS": "Scalars", "VECTORS": "Vectors", "NORMALS": "Normals", "TENSORS": "Tensors",
	"TENSORS6": "Tensors", "TEXTURE_COORDINATES": "TCoords", "GLOBAL_IDS": "GlobalIds", "PEDIGREE_IDS": "PedigreeIds",
	"EDGE_FLAGS": "EdgeFlag",
}

// mark gives an array an attribute, which only the first one of points or cells has.
func (l *legacyFile) mark(a *column, attribute string) {
	key := arrayName{a.On, attribute}
	if attribute != "" && !l.marked[key] {
		l.marked[key] = true
		a.Attributes = append(a.Attributes, attribute)
	}
}

// scalars reads SCALARS name type [components], which may be followed by the name
// of a table.
func (l *legacyFile) scalars(on mesh.Location, tuples int64) error {
	name, err := l.name()
	if err != nil {
		return err
	}
	n, err := l.numberType()
	if err != nil {
		return err
	}
	components := int64(1)
	next, err := l.peek()
	if err != nil {
		return err
	}
	if count, ok := digits(next); ok && l.sameLine() {
		components = count
		if _, err := l.word(); err != nil {
			return err
		}
	}
	if next, err = l.peek(); err != nil {
		return err
	}
	if strings.EqualFold(next, "LOOKUP_TABLE") {
		for range 2 {
			if _, err := l.word(); err != nil {
				return err
			}
		}
	}
	return l.kept(name, on, n, components, tuples)
}

// named reads a keyword's name and type.
func (l *legacyFile) named(on mesh.Location, components, tuples int64) error {
	name, err := l.name()
	if err != nil {
		return err
	}
	n, err := l.numberType()
	if err != nil {
		return err
	}
	return l.kept(name, on, n, components, tuples)
}

// sized reads the keywords that state their component count.
func (l *legacyFile) sized(keyword string, on mesh.Location, tuples int64) error {
	name, err := l.name()
	if err != nil {
		return err
	}
	components, err := l.count("components")
	if err != nil {
		return err
	}
	n := legacyNumber{number: uint8Number}
	if keyword == "TEXTURE_COORDINATES" {
		if n, err = l.numberType(); err != nil {
			return err
		}
	} else if !l.isBinary {
		n.number = float32Number
	}
	a, err := l.typed(name, on, n, components, tuples)
	if err != nil {
		return err
	}
	if keyword == "COLOR_SCALARS" && !l.isBinary {
		a.Type, a.isColour = uint8Number.String(), true
	}
	l.keep(a)
	return l.trailing(a)
}

func (l *legacyFile) kept(name string, on mesh.Location, n legacyNumber, components, tuples int64) error {
	a, err := l.typed(name, on, n, components, tuples)
	if err != nil {
		return err
	}
	l.keep(a)
	return l.trailing(a)
}

// table passes over LOOKUP_TABLE name size.
func (l *legacyFile) table() error {
	name, err := l.name()
	if err != nil {
		return err
	}
	rows, err := l.count("rows")
	if err != nil {
		return err
	}
	n := float32Number
	if l.isBinary {
		n = uint8Number
	}
	_, err = l.values(name, mesh.OnField, n, 4, rows)
	return err
}

// field reads FIELD name count and its arrays; with tuples below 0 they may have any
// number of tuples.
func (l *legacyFile) field(on mesh.Location, tuples int64) error {
	if _, err := l.word(); err != nil {
		return err
	}
	arrays, err := l.count("arrays")
	if err != nil {
		return err
	}
	for range arrays {
		name, err := l.name()
		if err != nil {
			return err
		}
		if name == "NULL_ARRAY" {
			continue
		}
		components, err := l.count("components")
		if err != nil {
			return err
		}
		count, err := l.count("tuples")
		if err != nil {
			return err
		}
		if tuples >= 0 && count != tuples {
			return l.window.fail(malformed("array %.40q: found %d tuples, need %d", name, count, tuples))
		}
		n, err := l.numberType()
		if err != nil {
			return err
		}
		a, err := l.typed(name, on, n, components, count)
		if err != nil {
			return err
		}
		if on == mesh.OnField {
			l.fields = append(l.fields, a)
		} else {
			l.keep(a)
		}
		if err := l.trailing(a); err != nil {
			return err
		}
	}
	return nil
}

// trailing reads the METADATA that may follow an array.
func (l *legacyFile) trailing(a *column) error {
	next, err := l.peek()
	if err != nil || !strings.EqualFold(next, "METADATA") {
		return err
	}
	if _, err := l.word(); err != nil {
		return err
	}
	return l.metadata(a)
}

// metadata reads to the next blank line and takes the names of components.
func (l *legacyFile) metadata(a *column) error {
	if _, err := l.line(); err != nil {
		return err
	}
	for {
		line, err := l.line()
		if err != nil || strings.TrimSpace(line) == "" {
			return err
		}
		if !strings.HasPrefix(line, "COMPONENT_NAMES") || a == nil {
			continue
		}
		for range a.Components {
			if line, err = l.line(); err != nil || strings.TrimSpace(line) == "" {
				return err
			}
			a.ComponentNames = append(a.ComponentNames, decodePercent(strings.TrimSpace(line)))
		}
	}
}

// decodePercent resolves %XX; a percent sign without two hex digits stays.
func decodePercent(text string) string {
	if !strings.Contains(text, "%") {
		return text
	}
	var plain strings.Builder
	for i := 0; i < len(text); i++ {
		if text[i] == '%' && i+2 < len(text) {
			if value, err := strconv.ParseUint(text[i+1:i+3], 16, 8); err == nil {
				plain.WriteByte(byte(value))
				i += 2
				continue
			}
		}
		plain.WriteByte(text[i])
	}
	return plain.String()
}

func digits(word string) (int64, bool) {
	value, err := strconv.ParseInt(word, 10, 64)
	return value, err == nil && value >= 0
}

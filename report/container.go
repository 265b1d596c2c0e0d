package report

import (
	"context"
	"encoding/base64"
	"encoding/binary"
	"fmt"
	"io"
	"slices"
	"strings"

	"strainledger/mesh"
)

// writeParallel writes the file that lists the parts of one block. What it declares are
// the arrays that all parts have alike: readers that believe it find them everywhere.
func (a *addedCells) writeParallel(ctx context.Context, to io.Writer, files []*vtuFile) error {
	version := plainVersion
	for _, file := range files {
		version = max(version, file.version)
	}
	fmt.Fprint(to, vtkFile("PUnstructuredGrid", version, ""), "<PUnstructuredGrid GhostLevel=\"0\">\n")
	if err := a.writeFields(ctx, to); err != nil {
		return err
	}
	declare := func(name string, arrays func(*vtuPiece) []vtuArray) {
		list := common(files, arrays)
		fmt.Fprintf(to, "<P%s%s>\n", name, marks(list))
		for i := range list {
			element := "PDataArray"
			if list[i].Type == "String" {
				element = "PArray"
			}
			fmt.Fprintf(to, "<%s%s/>\n", element, describe(&list[i].Array))
		}
		fmt.Fprintf(to, "</P%s>\n", name)
	}
	declare("PointData", func(p *vtuPiece) []vtuArray { return p.pointData })
	declare("CellData", func(p *vtuPiece) []vtuArray { return p.cellData })
	declare("Points", func(p *vtuPiece) []vtuArray { return []vtuArray{p.points} })
	for number := range files {
		fmt.Fprintf(to, "<Piece Source=\"%s\"/>\n", partName(number))
	}
	_, err := io.WriteString(to, "</PUnstructuredGrid>\n</VTKFile>\n")
	return err
}

// common lists the arrays that all pieces have with one number type.
func common(files []*vtuFile, arrays func(*vtuPiece) []vtuArray) []vtuArray {
	var list []vtuArray
	isFirst := true
	for _, file := range files {
		for i := range file.pieces {
			mine := arrays(&file.pieces[i])
			if isFirst {
				list, isFirst = slices.Clone(mine), false
				continue
			}
			list = slices.DeleteFunc(list, func(a vtuArray) bool {
				return !slices.ContainsFunc(mine, func(b vtuArray) bool {
					return a.Name == b.Name && a.Type == b.Type
				})
			})
		}
	}
	return list
}

// A blockNode is a part of the tree of blocks: a group, or a leaf with its files.
type blockNode struct {
	name     string
	files    []int // numbers of parts
	children []*blockNode
}

// child returns the group or leaf of a name below the node.
func (n *blockNode) child(name string, isLeaf bool) *blockNode {
	for _, child := range n.children {
		if child.name == name && (len(child.files) > 0) == isLeaf {
			return child
		}
	}
	child := &blockNode{name: name}
	n.children = append(n.children, child)
	return child
}

// writeBlocks writes the tree of blocks. Several files of one block are its pieces.
func (a *addedCells) writeBlocks(ctx context.Context, to io.Writer, list []part) error {
	root := &blockNode{}
	for number, part := range list {
		path := strings.Split(a.model.Blocks[part.block], "/")
		node := root
		for i, name := range path {
			node = node.child(name, i == len(path)-1)
		}
		node.files = append(node.files, number)
	}
	fmt.Fprint(to, vtkFile("vtkMultiBlockDataSet", plainVersion, ""), "<vtkMultiBlockDataSet>\n")
	root.write(to)
	fmt.Fprint(to, "</vtkMultiBlockDataSet>\n")
	if err := a.writeFields(ctx, to); err != nil {
		return err
	}
	_, err := io.WriteString(to, "</VTKFile>\n")
	return err
}

// write writes what is below the node.
func (n *blockNode) write(to io.Writer) {
	for index, child := range n.children {
		head := fmt.Sprintf(" index=\"%d\" name=\"%s\"", index, escape(child.name))
		switch {
		case len(child.files) == 1:
			fmt.Fprintf(to, "<DataSet%s file=\"%s\"/>\n", head, partName(child.files[0]))
		case len(child.files) > 1:
			fmt.Fprintf(to, "<Piece%s>\n", head)
			for i, number := range child.files {
				fmt.Fprintf(to, "<DataSet index=\"%d\" file=\"%s\"/>\n", i, partName(number))
			}
			fmt.Fprint(to, "</Piece>\n")
		default:
			fmt.Fprintf(to, "<Block%s>\n", head)
			child.write(to)
			fmt.Fprint(to, "</Block>\n")
		}
	}
}

// writeFields writes the field arrays of a container, which stand in its text.
func (a *addedCells) writeFields(ctx context.Context, to io.Writer) error {
	fields := a.containerFields()
	if len(fields) == 0 {
		return nil
	}
	cursor := a.model.Open()
	defer cursor.Close()
	fmt.Fprint(to, "<FieldData>\n")
	for i := range fields {
		if err := writeInline(ctx, to, &fields[i], cursor); err != nil {
			return err
		}
	}
	_, err := fmt.Fprint(to, "</FieldData>\n")
	return err
}

// writeInline writes an array with its values in base64 behind their length.
func writeInline(ctx context.Context, to io.Writer, a *vtuArray, cursor mesh.Cursor) error {
	name := "DataArray"
	if a.Type == "String" {
		name = "Array"
	}
	fmt.Fprintf(to, "<%s%s NumberOfTuples=\"%d\" format=\"binary\">\n", name, describe(&a.Array), a.Tuples)
	encoder := base64.NewEncoder(base64.StdEncoding, to)
	if err := binary.Write(encoder, binary.LittleEndian, a.Bytes); err != nil {
		return err
	}
	buffer := make([]byte, min(blockBytes, a.Bytes))
	for at := int64(0); at < a.Bytes; at += blockBytes {
		part := buffer[:min(blockBytes, a.Bytes-at)]
		if err := a.read(ctx, cursor, at, part); err != nil {
			return err
		}
		if _, err := encoder.Write(part); err != nil {
			return err
		}
	}
	if err := encoder.Close(); err != nil {
		return err
	}
	_, err := fmt.Fprintf(to, "\n%s</%s>\n", a.Information, name)
	return err
}

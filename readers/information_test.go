package readers

import (
	"strings"
	"testing"

	"strainledger/mesh"
)

// Information keys come out as elements of their own, in UTF-8; what cannot be copied
// leaves none.
func TestInformation(t *testing.T) {
	file := func(declaration, keys string) string {
		return declaration + `<VTKFile type="UnstructuredGrid"><UnstructuredGrid><Piece NumberOfPoints="1" NumberOfCells="0">
<PointData><DataArray type="Int8" Name="v" format="ascii">1` + keys + `</DataArray></PointData>
<Points><DataArray type="Int8" NumberOfComponents="3" format="ascii">0 0 0</DataArray></Points></Piece></UnstructuredGrid></VTKFile>`
	}
	for name, c := range map[string]struct{ text, want string }{
		"none":       {file("", ""), ""},
		"others":     {file("", `<Other/>`), ""},
		"two":        {file("", ` <InformationKey name='A' location="b" /> <InformationKey name="C">d &amp; e</InformationKey> `), "<InformationKey name=\"A\" location=\"b\"></InformationKey>\n<InformationKey name=\"C\">d &amp; e</InformationKey>\n"},
		"nested":     {file("", `<InformationKey name="D"><Value index="1"> 2 </Value><Value/></InformationKey>`), "<InformationKey name=\"D\"><Value index=\"1\"> 2 </Value>\n<Value></Value>\n</InformationKey>\n"},
		"quotes":     {file("", `<InformationKey name='"&lt;'/>`), "<InformationKey name=\"&#34;&lt;\"></InformationKey>\n"},
		"Latin-1":    {file(`<?xml version="1.0" encoding="ISO-8859-1"?>`, "<InformationKey name=\"\xe9\">\xb5m</InformationKey>"), "<InformationKey name=\"é\">µm</InformationKey>\n"},
		"comment":    {file("", `<InformationKey name="A">1 <!-- 2 --> 3</InformationKey>`), ""},
		"long text":  {file("", `<InformationKey name="A">`+strings.Repeat("x", 2000)+`</InformationKey>`), ""},
		"many texts": {file("", strings.Repeat(`<InformationKey name="A">0123456789</InformationKey>`, 30)), ""},
	} {
		model, err := openBytes([]byte(c.text), Options{Limits: Limits{Text: 1000}})
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if got := model.Pieces[0].Find(mesh.OnPoint, "v").Information; got != c.want {
			t.Errorf("%s: %q, want %q", name, got, c.want)
		}
	}
}

#!/usr/bin/python3
"""Reads annotated results with VTK's own reader and with meshio, and compares them with
the files that they were written from: points, cells, every array, its type, components,
names and marks, bit for bit.

Needs Go, and of Debian the packages python3-vtk9 and python3-meshio; without them it
says so and does nothing.
"""
import json
import pathlib
import subprocess
import sys
import tempfile
import xml.etree.ElementTree as ElementTree

try:
    import numpy
    import vtk
    from vtk.util.numpy_support import vtk_to_numpy
except ImportError:
    print("roundtrip.py: skipped, VTK for Python is missing: apt-get install python3-vtk9 python3-meshio")
    sys.exit(0)
try:
    import meshio
except ImportError:
    print("roundtrip.py: skipped, meshio is missing: apt-get install python3-vtk9 python3-meshio")
    sys.exit(0)

ROOT = pathlib.Path(__file__).resolve().parent.parent
SAMPLES = ROOT / "testdata" / "vtk-samples"
ADDED = {
    "strain_energy_density": vtk.VTK_DOUBLE,
    "strain_energy": vtk.VTK_DOUBLE,
    "equivalent_stress": vtk.VTK_DOUBLE,
    "utilisation": vtk.VTK_DOUBLE,
    "hotspot": vtk.VTK_INT,
    "region": vtk.VTK_INT,
}
# meshio 5.0 has these in one of its tables and lacks them in another.
UNKNOWN_TO_MESHIO = {8, 26, 27, 30, 33, 34, *range(75, 82)}

# Samples that VTK 9.1 reads in another way than they are meant, so that its reading is no
# measure of what is written. The program's own tests compare these too.
NOT_BY_VTK = {
    "cells/polyhedra-new-2.3.vtu": "VTK 9.1 does not know this layout of faces and loses them",
    "xml-structured/image-two-pieces.vti": "VTK joins the points on the border of two pieces",
    "parallel/missing-array.pvtu": "arrays that not all parts have are left out of the whole",
    "special/nan-inf.vtu": "a text does not tell the bits of a NaN",
    "special/nan-inf-as-vtk-writes.vtu": "VTK 9.1 does not read the infinities that it writes as text",
    "special/minus-inf.vtu": "VTK 9.1 reads -inf as +inf",
    "special/base64-wrapped.vtu": "VTK 9.1 reads base64 with line breaks as garbage",
    "special/timesteps.vtu": "VTK reads the first of several states, the program the last",
}

problems = []
warnings = []


def report(text):
    problems.append(text)
    print("roundtrip.py:", text)


def read(path):
    """Returns the data set of one serial file."""
    with open(path, "rb") as file:
        head = file.read(2000)
    if head.startswith(b"# vtk"):
        reader = vtk.vtkDataSetReader()
        for what in ("Scalars", "Vectors", "Normals", "Tensors", "TCoords", "Fields", "ColorScalars"):
            getattr(reader, "ReadAll" + what + "On")()
    else:
        kind = head.split(b"type=", 1)[1][1:].split(head.split(b"type=", 1)[1][:1])[0].decode()
        reader = getattr(vtk, "vtkXML" + kind + "Reader")()
    reader.SetFileName(str(path))
    del warnings[:]
    reader.AddObserver("ErrorEvent", lambda *_: warnings.append("error"))
    reader.Update()
    return reader.GetOutput()


def values(array):
    """Returns the values of an array in a form that compares bit for bit."""
    if isinstance(array, vtk.vtkStringArray):
        return [array.GetValue(i) for i in range(array.GetNumberOfValues())]
    if isinstance(array, vtk.vtkBitArray):
        return [array.GetValue(i) for i in range(array.GetNumberOfValues())]
    return vtk_to_numpy(array).tobytes()


def kind(array):
    """Returns the number type of an array. VTK has several names for one type."""
    if isinstance(array, (vtk.vtkStringArray, vtk.vtkBitArray)):
        return array.GetClassName()
    return str(vtk_to_numpy(array).dtype)


def compare_array(where, given, written):
    if written is None:
        report(f"{where}: array is missing")
        return
    if given.GetNumberOfTuples() == written.GetNumberOfTuples() == 0:
        return
    for what, one, other in (
        ("type", kind(given), kind(written)),
        ("components", given.GetNumberOfComponents(), written.GetNumberOfComponents()),
        ("tuples", given.GetNumberOfTuples(), written.GetNumberOfTuples()),
        ("component names", *[[a.GetComponentName(i) for i in range(a.GetNumberOfComponents())] for a in (given, written)]),
        ("values", values(given), values(written)),
    ):
        if one != other:
            report(f"{where}: {what} {other!r:.200}, want {one!r:.200}")


def compare_data(where, owner, given, written, added=()):
    names = [given.GetAbstractArray(i).GetName() for i in range(given.GetNumberOfArrays())]
    for i, name in enumerate(names):
        if name == "vtkGhostType" and isinstance(owner, vtk.vtkStructuredGrid) and isinstance(given, vtk.vtkCellData):
            # cells with hidden points are marked themselves
            one, other = vtk_to_numpy(given.GetArray(i)), vtk_to_numpy(written.GetArray(name))
            if (one & other != one).any():
                report(f"{where}: marks {other}, want {one} and more")
            continue
        compare_array(f"{where} {name!r}", given.GetAbstractArray(i), written.GetAbstractArray(name))
    extra = {written.GetAbstractArray(i).GetName() for i in range(written.GetNumberOfArrays())} - set(names)
    if extra - {"TimeValue"} != set(added) - {"TimeValue"}:
        report(f"{where}: arrays {sorted(extra)} beside those of the input, want {sorted(added)}")
    if isinstance(given, vtk.vtkDataSetAttributes):
        for kind in range(vtk.vtkDataSetAttributes.NUM_ATTRIBUTES):
            one, other = given.GetAbstractAttribute(kind), written.GetAbstractAttribute(kind)
            if one is not None and (other is None or one.GetName() != other.GetName()):
                report(f"{where}: {written.GetAttributeTypeAsString(kind)} are {other and other.GetName()}, want {one.GetName()}")


def compare_cells(where, given, written):
    ids, others = vtk.vtkIdList(), vtk.vtkIdList()
    for cell in range(given.GetNumberOfCells()):
        kind, other = given.GetCellType(cell), written.GetCellType(cell)
        if kind == vtk.VTK_EMPTY_CELL and other in (vtk.VTK_QUAD, vtk.VTK_HEXAHEDRON):
            if not written.GetCellGhostArray().GetValue(cell) & 32:
                report(f"{where}: cell {cell} is hidden and not marked")
            continue
        given.GetCellPoints(cell, ids)
        written.GetCellPoints(cell, others)
        one = [ids.GetId(i) for i in range(ids.GetNumberOfIds())]
        two = [others.GetId(i) for i in range(others.GetNumberOfIds())]
        if kind == vtk.VTK_POLYHEDRON == other:
            given.GetFaceStream(cell, ids)
            written.GetFaceStream(cell, others)
            one = [ids.GetId(i) for i in range(ids.GetNumberOfIds())]
            two = [others.GetId(i) for i in range(others.GetNumberOfIds())]
        if kind != other or one != two:
            report(f"{where}: cell {cell} is of type {other} with {two}, want {kind} with {one}")
            return


def compare(where, given, written):
    """Compares one data set with what was written for it."""
    if (given.GetNumberOfPoints(), given.GetNumberOfCells()) != (written.GetNumberOfPoints(), written.GetNumberOfCells()):
        report(f"{where}: {written.GetNumberOfPoints()} points and {written.GetNumberOfCells()} cells, "
               f"want {given.GetNumberOfPoints()} and {given.GetNumberOfCells()}")
        return
    if isinstance(given, vtk.vtkPointSet) and given.GetPoints() is not None and given.GetNumberOfPoints() > 0:
        one, other = given.GetPoints().GetData(), written.GetPoints().GetData()
        if one.GetDataType() != other.GetDataType() or values(one) != values(other):
            report(f"{where}: points of type {other.GetDataTypeAsString()} differ")
    else:
        for i in range(given.GetNumberOfPoints()):
            # grids compute their points, in one order of operations or another
            if not numpy.allclose(given.GetPoint(i), written.GetPoint(i), rtol=1e-15, atol=1e-15):
                report(f"{where}: point {i} is {written.GetPoint(i)}, want {given.GetPoint(i)}")
                break
    compare_cells(where, given, written)
    compare_data(f"{where}: point array", given, given.GetPointData(), written.GetPointData())
    compare_data(f"{where}: cell array", given, given.GetCellData(), written.GetCellData(), ADDED)
    compare_data(f"{where}: field array", given, given.GetFieldData(), written.GetFieldData())
    for name, kind in ADDED.items():
        array = written.GetCellData().GetArray(name)
        if array is not None and array.GetDataType() != kind:
            report(f"{where}: {name} is of type {array.GetDataTypeAsString()}")


def confuses_meshio(path):
    """Tells whether meshio 5.0 exchanges arrays of a file: it gives them new offsets one after
    the other, finds the next one by its old offset, and takes one whose new offset is the same."""
    header, data = path.read_bytes().split(b'<AppendedData encoding="raw">', 1)
    data = data.split(b"_", 1)[1]
    old = [int(a.get("offset")) for a in ElementTree.fromstring(header + b"</VTKFile>").iter() if a.get("offset")]
    new, end = set(), 0
    for offset in sorted(old):
        if offset in new:
            return True
        new.add(end)
        blocks, size, last = numpy.frombuffer(data[offset:offset + 24], "<u8").tolist()
        length = 8 + blocks * size - (size - last if last else 0)
        end += (length + 2) // 3 * 4
    return False


def compare_meshio(where, path, written):
    """Compares what meshio reads with what VTK reads. Returns why meshio cannot read the file."""
    known = set(meshio._vtk_common.meshio_to_vtk_type.values())
    kinds = [written.GetCellType(i) for i in range(written.GetNumberOfCells())]
    arrays = [data.GetAbstractArray(i) for data in (written.GetPointData(), written.GetCellData(), written.GetFieldData())
              for i in range(data.GetNumberOfArrays())]
    content = path.read_bytes()
    if not written.GetNumberOfCells():
        return "no cells"
    if b' version="2.2"' in content:
        return "a later version of the format, as higher-order hexahedra and ghost marks need it"
    if any(isinstance(array, (vtk.vtkStringArray, vtk.vtkBitArray)) for array in arrays):
        return "strings or bits"
    if not known.issuperset(kinds) or set(kinds) & UNKNOWN_TO_MESHIO or vtk.VTK_POLYHEDRON in kinds:
        return "cell types"
    if content.count(b"<Piece ") > 1:
        return "several pieces"
    if content.count(b"</AppendedData>") > 1 or confuses_meshio(path):
        return "its search through raw data goes astray"
    try:
        mesh = meshio.read(path)
    except (Exception, SystemExit) as error:
        report(f"{where}: meshio cannot read it: {type(error).__name__} {error}")
        return ""
    points = written.GetPoints()
    if mesh.points.tobytes() != vtk_to_numpy(points.GetData()).tobytes():
        report(f"{where}: meshio reads other points")
    if kinds != [meshio._vtk_common.meshio_to_vtk_type[block.type] for block in mesh.cells for _ in block.data]:
        report(f"{where}: meshio reads other cells")
        return ""
    ids = vtk.vtkIdList()
    nodes = [(block.type, row) for block in mesh.cells for row in block.data]
    for cell, (name, row) in enumerate(nodes):
        order = meshio._vtk_common.meshio_to_vtk_order(name)
        written.GetCellPoints(cell, ids)
        if (row if order is None else row[order]).tolist() != [ids.GetId(i) for i in range(ids.GetNumberOfIds())]:
            report(f"{where}: meshio reads other nodes of cell {cell}")
            break
    for data, attributes in ((mesh.point_data, written.GetPointData()), (mesh.cell_data, written.GetCellData()),
                             (mesh.field_data, written.GetFieldData())):
        if len(data) != attributes.GetNumberOfArrays():
            report(f"{where}: meshio reads the arrays {sorted(data)}")
        for name, array in data.items():
            if isinstance(array, list):
                array = numpy.concatenate(array)
            if array.tobytes() != vtk_to_numpy(attributes.GetArray(name)).tobytes():
                report(f"{where}: meshio reads another {name!r}")
    return ""


def leaves(path):
    """Returns the serial files behind a file, in order; of a collection those of the last time."""
    if path.read_bytes().startswith(b"# vtk"):
        return [path]
    try:
        root = ElementTree.parse(path).getroot()
    except ElementTree.ParseError:
        return [path]
    kind = root.get("type")
    if kind == "Collection":
        sets = list(root.iter("DataSet"))
        last = max(float(s.get("timestep", 0)) for s in sets)
        return [path.parent / s.get("file") for s in sets if float(s.get("timestep", 0)) == last]
    if kind.startswith("vtk"):
        return [path.parent / s.get("file") for s in root.iter("DataSet") if s.get("file")]
    if kind.startswith("P") and kind != "PolyData":
        return [path.parent / p.get("Source") for p in root.iter("Piece") if p.get("Source")]
    return [path]


def compare_whole(where, path, parts):
    """Reads the container by VTK's reader and compares it with its parts."""
    sums = [read(part).GetCellData().GetArray("region").GetNumberOfTuples() for part in parts]
    if path.suffix == ".pvtu":
        reader = vtk.vtkXMLPUnstructuredGridReader()
    else:
        reader = vtk.vtkXMLMultiBlockDataReader()
    reader.SetFileName(str(path))
    reader.AddObserver("ErrorEvent", lambda *_: report(f"{where}: VTK cannot read the whole"))
    reader.Update()
    output = reader.GetOutput()
    if path.suffix == ".pvtu":
        blocks = [output]
    else:
        iterator = output.NewIterator()
        iterator.InitTraversal()
        blocks = []
        while not iterator.IsDoneWithTraversal():
            blocks.append(iterator.GetCurrentDataObject())
            iterator.GoToNextItem()
        if len(blocks) != len(parts):
            report(f"{where}: VTK reads {len(blocks)} blocks, want {len(parts)}")
    for name in ADDED:
        arrays = [block.GetCellData().GetArray(name) for block in blocks]
        if None in arrays or sum(array.GetNumberOfTuples() for array in arrays) != sum(sums):
            report(f"{where}: VTK reads no whole {name}")
            continue
        one = b"".join(values(array) for array in arrays)
        if one != b"".join(values(read(part).GetCellData().GetArray(name)) for part in parts):
            report(f"{where}: VTK reads another {name} in the whole")


def annotated(folder):
    """Returns the annotated file of a folder, and its parts."""
    path = next(folder.glob("annotated.*"))
    if path.suffix == ".vtu":
        return path, [path]
    count = len(list((folder / "annotated").glob("annotated_*.vtu")))
    return path, [folder / "annotated" / f"annotated_{i}.vtu" for i in range(count)]


def check(where, path, folder, unread):
    whole, parts = annotated(folder)
    given = leaves(path)
    if len(given) != len(parts):
        report(f"{where}: {len(parts)} files, want {len(given)}")
        return
    if len(parts) > 1:
        compare_whole(where, whole, parts)
    for one, other in zip(given, parts):
        written = read(other)
        if warnings:
            report(f"{where}: VTK cannot read {other.name}")
        if where not in NOT_BY_VTK:
            compare(f"{where}, {other.name}", read(one), written)
        reason = compare_meshio(f"{where}, {other.name}", other, written)
        unread.setdefault(reason, []).append(where)


def check_energies(where, folder):
    """Compares the added arrays with the ledger beside them."""
    grid = read(folder / "annotated.vtu")
    ledger = json.loads((folder / "ledger.json").read_text())
    column = {name: vtk_to_numpy(grid.GetCellData().GetArray(name)) for name in ADDED}
    sizes = vtk.vtkCellSizeFilter()
    sizes.SetInputData(grid)
    sizes.Update()
    volume = vtk_to_numpy(sizes.GetOutput().GetCellData().GetArray("Volume"))
    if not numpy.allclose(column["strain_energy"], column["strain_energy_density"] * abs(volume), rtol=1e-9):
        report(f"{where}: energy is not density times volume")
    for number, region in enumerate(ledger["regions"]):
        mine = column["region"] == number
        for key, value in (
            ("cells", mine.sum()), ("energy", column["strain_energy"][mine].sum()),
            ("max_density", column["strain_energy_density"][mine].max()),
            ("max_equivalent_stress", column["equivalent_stress"][mine].max()),
            ("max_utilisation", column["utilisation"][mine].max()),
        ):
            if not numpy.isclose(value, region[key], rtol=1e-12):
                report(f"{where}: {key} of region {region['name']} is {value} by cells and {region[key]} in the ledger")
    for hotspot in ledger["hotspots"]:
        if column["hotspot"][hotspot["cell"]] != hotspot["rank"]:
            report(f"{where}: cell {hotspot['cell']} has rank {column['hotspot'][hotspot['cell']]}, want {hotspot['rank']}")
    if (column["region"] < 0).sum() != sum(excluded["cells"] for excluded in ledger["excluded"]):
        report(f"{where}: other cells are in no region than the excluded ones")


def main():
    vtk.vtkLogger.SetStderrVerbosity(vtk.vtkLogger.VERBOSITY_OFF)  # errors that matter are counted
    unread = {}
    with tempfile.TemporaryDirectory() as scratch:
        scratch = pathlib.Path(scratch)
        subprocess.run(["go", "test", "./report", "-run", "^TestAnnotatedSamples$", "-count=1", "-args", "-keep", str(scratch / "samples")],
                       cwd=ROOT, check=True)
        subprocess.run(["go", "run", "./cmd/strainledger", "demo", str(scratch / "demo"), "--quiet"], cwd=ROOT, check=True)
        files = [entry["file"] for entry in json.loads((SAMPLES / "index.json").read_text())["files"]]
        for file in files:
            check(file, SAMPLES / file, scratch / "samples" / file, unread)
        studies = sorted((scratch / "demo").glob("*.toml"))
        for study in studies:
            check(study.stem, study.with_suffix(".vtu"), study.with_suffix(""), unread)
            check_energies(study.stem, study.with_suffix(""))
    for file, reason in NOT_BY_VTK.items():
        print(f"roundtrip.py: {file}: not compared with VTK's reading: {reason}")
    by_meshio = len(unread.pop("", []))
    for reason, where in sorted(unread.items()):
        print(f"roundtrip.py: meshio does not read {len(where)} files: {reason}")
    if len(files) < 200 or len(studies) != 3 or by_meshio < 100:
        report("too few files were compared")
    print(f"roundtrip.py: {len(files)} samples and {len(studies)} demo results compared, {by_meshio} files by meshio too; {len(problems)} problems")
    return 1 if problems else 0


if __name__ == "__main__":
    sys.exit(main())

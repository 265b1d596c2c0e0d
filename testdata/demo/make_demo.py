#!/usr/bin/env python3
"""Makes the result files of the built-in demo from full finite-element results.

    python3 make_demo.py RESULTS DEMO

RESULTS holds r2_bracket.vtu, r5_bracket.vtu and r9_bracket.vtu: the mooring bracket
of a small floating pontoon with fillet radii of 2, 5 and 9 mm under the same line
pull, solved on 10-node tetrahedra and exported on 4-node ones with cell averages
(dolfinx 0.5.2, mesh by gmsh 4.8.0). DEMO, the folder cmd/strainledger/demo, receives
bracket-r2.vtu, bracket-r5.vtu and bracket-r9.vtu: points, cells, Stress, Strain and
Zone alone, in Float32 and zlib, so that they can be embedded in the program. The
stored energy, sum of 1/2 stress:strain times volume, is printed before and after.
Needs VTK's Python module (Debian: python3-vtk9) and numpy.
"""
import os, sys
import numpy as np
from vtkmodules.vtkCommonCore import vtkPoints
from vtkmodules.vtkCommonDataModel import vtkUnstructuredGrid
from vtkmodules.vtkIOXML import vtkXMLUnstructuredGridReader, vtkXMLUnstructuredGridWriter
from vtkmodules.util.numpy_support import numpy_to_vtk, vtk_to_numpy


def read(path):
    reader = vtkXMLUnstructuredGridReader()
    reader.SetFileName(path)
    reader.Update()
    return reader.GetOutput()


def energy(grid):
    """Sum of 1/2 stress:strain times volume over 4-node tetrahedra, in double precision."""
    points = vtk_to_numpy(grid.GetPoints().GetData()).astype(float)
    cells = points[vtk_to_numpy(grid.GetCells().GetConnectivityArray()).reshape(-1, 4)]
    edges = cells[:, 1:] - cells[:, :1]
    volume = np.abs(np.linalg.det(edges)) / 6
    stress, strain = (vtk_to_numpy(grid.GetCellData().GetArray(name)).astype(float) for name in ("Stress", "Strain"))
    weights = np.array([1, 1, 1, 2, 2, 2])  # each shear term stands for two entries of the tensor
    return float(np.sum(0.5 * np.sum(weights * stress * strain, axis=1) * volume))


def compact(grid):
    """The same grid with points, Stress and Strain in Float32 and Zone in UInt8."""
    small = vtkUnstructuredGrid()
    points = vtkPoints()
    points.SetData(numpy_to_vtk(vtk_to_numpy(grid.GetPoints().GetData()).astype(np.float32), deep=True))
    small.SetPoints(points)
    small.SetCells(grid.GetCellTypesArray(), grid.GetCells())
    for name, kind in (("Stress", np.float32), ("Strain", np.float32), ("Zone", np.uint8)):
        array = numpy_to_vtk(vtk_to_numpy(grid.GetCellData().GetArray(name)).astype(kind), deep=True)
        array.SetName(name)
        small.GetCellData().AddArray(array)
    return small


def write(grid, path):
    writer = vtkXMLUnstructuredGridWriter()
    writer.SetFileName(path)
    writer.SetInputData(grid)
    writer.SetDataModeToAppended()
    writer.EncodeAppendedDataOff()
    writer.SetCompressorTypeToZLib()
    writer.SetCompressionLevel(9)
    writer.SetHeaderTypeToUInt32()
    writer.SetIdTypeToInt32()
    writer.Write()


def main(results, demo):
    for radius in (2, 5, 9):
        full = read(os.path.join(results, f"r{radius}_bracket.vtu"))
        target = os.path.join(demo, f"bracket-r{radius}.vtu")
        write(compact(full), target)
        before, after = energy(full), energy(read(target))
        print(f"{target}: {full.GetNumberOfCells()} cells, {os.path.getsize(target)} bytes, "
              f"energy {before!r} in Float64, {after!r} in Float32 (relative difference {after / before - 1:.1e})")


if __name__ == "__main__":
    main(*sys.argv[1:])

package study

import (
	"errors"
	"os"
	"path/filepath"

	"strainledger/energy"
)

// curve reads the stress-strain curve of a material. Modulus and proportional limit
// come from it where the material does not give them.
func (r *reading) curve(stated *node, to *energy.Material) {
	limitBy := stated.get("proportional_limit_by")
	file := stated.get("curve")
	if file == nil {
		if limitBy != nil && !stated.has("curve") {
			r.faults.add(limitBy.place, "material.proportional_limit_by says how to read the limit off a curve; add curve = \"FILE.csv\"")
		}
		return
	}
	options := energy.CurveOptions{Limit: stated.textOf("proportional_limit_by")}
	if limitBy != nil {
		if _, err := energy.ParseLimit(options.Limit); err != nil {
			r.faults.add(limitBy.place, "material.proportional_limit_by: %v", err)
			return
		}
	}
	if modulus := energy.Number(to.YoungsModulus); modulus.Exists() {
		options.YoungsModulus = to.YoungsModulus
	}
	path := file.text
	if !filepath.IsAbs(path) {
		path = filepath.Join(r.folder, path)
	}
	analysis, err := readCurve(path, r.to.Stress, options)
	if err != nil {
		r.faults.add(file.place, "material.curve: %v", err)
		return
	}
	to.SetCurve(&energy.MaterialCurve{Path: file.text, Analysis: analysis})
}

// readCurve reads and analyses the file of a curve, in the study's unit of stress.
func readCurve(path, stress string, options energy.CurveOptions) (*energy.CurveAnalysis, error) {
	file, err := os.Open(path)
	if err != nil {
		if cause := new(os.PathError); errors.As(err, &cause) {
			return nil, errors.New(printable(path) + ": " + cause.Err.Error())
		}
		return nil, err
	}
	defer file.Close()
	record, err := energy.ReadCurve(file, path, energy.CurveReading{Stress: stress})
	if err != nil {
		return nil, err
	}
	return energy.AnalyseCurve(record, options)
}

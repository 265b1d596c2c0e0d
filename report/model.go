package report

import (
	"cmp"
	"fmt"
	"strings"

	"strainledger/energy"
)

// filesShown is the number of source files that a terminal lists.
const filesShown = 8

// sourcesSection lists the study and the files of the model.
func sourcesSection(ledger *energy.Ledger) section {
	t := &table{terminalRows: filesShown, columns: []column{
		{kind: word, heading: "source"},
		{kind: name, heading: "file"},
		numbers("points", &ledger.Units),
		numbers("cells", &ledger.Units),
		{kind: number, heading: "time"},
		{kind: number, heading: "bytes", filesOnly: true},
		{kind: word, heading: "SHA-256", filesOnly: true},
	}}
	if study := ledger.Study; study != nil {
		t.add("study", study.Path, "", "", "", "", checksum(study.SHA256))
	}
	for i, source := range ledger.Sources {
		t.add(
			fmt.Sprint(i),
			source.Path,
			inCounts.text(energy.Number(source.Points)),
			inCounts.text(energy.Number(source.Cells)),
			plain(source.Time),
			inCounts.text(energy.Number(source.Bytes)),
			checksum(source.SHA256),
		)
	}
	t.dropIdle()
	return newSection("Files read", t)
}

func checksum(sha256 energy.Text) string {
	if sha256 == "" {
		return "not taken"
	}
	return string(sha256)
}

// modelSection says how the files were understood: one line for each decision and field.
func modelSection(ledger *energy.Ledger) section {
	t := &table{columns: []column{{kind: word}, {kind: prose}}}
	t.add("idealisation", idealisationWords(&ledger.Model, &ledger.Units))
	t.add("energy", energyWords(&ledger.Model))
	t.add("criterion", inPlainWords(ledger.Model.Criterion))
	t.add("units", unitWords(&ledger.Units))
	if words := loadingWords(ledger.Model.Loading); words != "" {
		t.add("loading", words)
	}
	for _, field := range ledger.Fields.Taken() {
		t.add(field.Name, fieldWords(field.FieldUsed))
	}
	return newSection("How they were read", t)
}

func idealisationWords(model *energy.ModelSummary, units *energy.UnitLabels) string {
	words := inPlainWords(model.Idealisation)
	switch thickness := model.Thickness.(type) {
	case string:
		words += ", thickness by cell array " + quoted(thickness)
	case energy.Number:
		words += ", thickness " + withUnit(plain(thickness), inLength, units)
		if thickness == 1 {
			words += " (numbers are per unit thickness)"
		}
	}
	if model.Axis != "" {
		words += ", about the axis " + string(model.Axis)
	}
	if model.Points != "" {
		words += "; points in their " + model.Points + " position"
	}
	return words
}

// loadingWords says how the structure is loaded; "" where nothing is stated.
func loadingWords(loading *energy.Loading) string {
	var parts []string
	if loading != nil && loading.Control != "" {
		parts = append(parts, controlWords(loading.Control))
	}
	if loading != nil && loading.Scale.Exists() {
		parts = append(parts, plain(loading.Scale)+" times the load that runs are compared at")
	}
	return strings.Join(parts, ", ")
}

func controlWords(control energy.Text) string {
	switch control {
	case "force":
		return "by given forces"
	case "displacement":
		return "by given displacements"
	case "mixed":
		return "by forces and displacements together"
	}
	return string(control)
}

func energyWords(model *energy.ModelSummary) string {
	switch energy.EnergySource(model.EnergyFrom) {
	case energy.FromStressStrain:
		return "½ σ:ε from the stress and the strain of the file"
	case energy.FromStress:
		return "½ σ:ε from the stress of the file, strain by the material's law"
	case energy.FromStrain:
		return "½ σ:ε from the strain of the file, stress by the material's law"
	case energy.FromDisplacement:
		return "½ σ:ε from the displacement of the file, strain by its gradients, stress by the material's law"
	}
	return model.EnergyFrom
}

func unitWords(units *energy.UnitLabels) string {
	var named, unnamed []string
	for _, label := range []struct {
		of   string
		text energy.Text
	}{
		{"length", units.Length}, {"stress", units.Stress}, {"energy", units.Energy},
		{"energy density", units.EnergyDensity}, {"mass", units.Mass},
	} {
		if label.text == "" {
			unnamed = append(unnamed, label.of)
		} else {
			named = append(named, label.of+" "+unitSigns.Replace(string(label.text)))
		}
	}
	switch {
	case len(named) == 0:
		return "not stated: all numbers are in the consistent units of the files"
	case len(unnamed) == 0:
		return strings.Join(named, ", ")
	}
	return strings.Join(named, ", ") + "; not stated: " + strings.Join(unnamed, ", ")
}

// fieldWords says in one line what an array was taken for and how that was decided.
func fieldWords(field *energy.FieldUsed) string {
	parts := []string{"array " + quoted(field.Array), placeWords(field.On)}
	if field.Order != "" {
		parts = append(parts, string(field.Order))
	}
	if field.Shear != "" {
		parts = append(parts, string(field.Shear)+" shear")
	}
	if field.Kind != "" {
		parts = append(parts, string(field.Kind)+" strain")
	}
	if field.Sign == "compression" {
		parts = append(parts, "compression positive")
	}
	words := strings.Join(parts, ", ") + "; " + decisionWords(field.DecidedBy)
	if field.Why != "" {
		words += " (" + field.Why + ")"
	}
	return words
}

func quoted(name string) string { return `"` + name + `"` }

func placeWords(on string) string {
	switch on {
	case "cell":
		return "per cell"
	case "point":
		return "at points"
	case "integration":
		return "at integration points"
	}
	return on
}

func decisionWords(decidedBy string) string {
	switch decidedBy {
	case "study":
		return "named in the study"
	case "audit":
		return "decided from the numbers"
	case "file":
		return "found in the file"
	case "default":
		return "assumed"
	}
	return "decided by " + decidedBy
}

// materialsSection gives the values that were used.
func materialsSection(ledger *energy.Ledger) section {
	if len(ledger.Materials) == 0 {
		return section{}
	}
	const compression, critical = 5, 7
	t := &table{columns: []column{
		{kind: name, heading: "material"},
		{kind: word, heading: "law"},
		numbers("youngs_modulus", &ledger.Units),
		numbers("poissons_ratio", &ledger.Units),
		numbers("proportional_limit", &ledger.Units),
		compression: numbers("proportional_limit_compression", &ledger.Units),
		numbers("control_radius", &ledger.Units),
		critical: numbers("critical_density", &ledger.Units),
		{kind: prose, heading: "source of the limit"},
	}}
	for _, material := range ledger.Materials {
		t.add(
			material.Name,
			material.Law,
			plain(material.YoungsModulus),
			plain(material.PoissonsRatio),
			plain(material.ProportionalLimit),
			plain(material.ProportionalLimitCompression),
			brief(material.ControlRadius),
			brief(material.CriticalDensity),
			limitSource(&material),
		)
	}
	for optional := critical; optional >= compression; optional-- {
		if t.isIdle(optional) {
			t.drop(optional)
		}
	}
	return newSection("Materials", t)
}

// limitSource returns where the material's limit comes from.
func limitSource(material *energy.MaterialUsed) string {
	if !material.ProportionalLimit.Exists() {
		return missing
	}
	return cmp.Or(string(material.Source), "source not stated")
}

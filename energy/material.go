package energy

import (
	"fmt"

	"strainledger/mesh"
)

// A Material is one entry of the study's table of materials. Numbers that are not
// given are NaN, tables nil; see NewMaterial.
type Material struct {
	Name                         string
	YoungsModulus                float64
	PoissonsRatio                float64
	ProportionalLimit            float64
	ProportionalLimitCompression float64 // for MaxPrincipal; absent: as in tension
	YieldStress                  float64 // with HardeningExponent at 0.2 % plastic strain; alone that of a perfectly plastic material
	HardeningExponent            float64 // n of Ramberg and Osgood
	ControlRadius                float64 // of the ball over which the density of a brittle material is averaged,
	CriticalDensity              float64 // and the density there at which it breaks; absent: from the next two
	FractureToughness            float64 // K_c, in units of stress times the root of the model's length
	TensileStrength              float64
	Source                       string // where the limit comes from
	Density                      float64
	ThermalExpansion             float64
	ReferenceTemperature         float64

	YoungsModuli   *[3]float64    // orthotropic: E_x E_y E_z in material axes,
	ShearModuli    *[3]float64    // G_xy G_yz G_xz
	PoissonsRatios *[3]float64    // and ν_xy ν_yz ν_xz
	Stiffness      *[6][6]float64 // or any stiffness, engineering shear, in
	StiffnessOrder mesh.Order     // this order; nil: xx yy zz xy yz xz
	Axes           *[3]Vector     // rows: directions of the material axes; nil: the model's,
	AxesArray      string         // or a cell array of nine components that holds such rows

	Curve *MaterialCurve // nil: none
}

// A MaterialCurve is the stress-strain curve of a material, from a test.
type MaterialCurve struct {
	Path     string
	Analysis *CurveAnalysis // in the study's unit of stress
}

// SetCurve gives the material a curve. Modulus and proportional limit come from it where
// they are not given; the limit's source names the curve and the limit's definition.
func (m *Material) SetCurve(curve *MaterialCurve) {
	m.Curve = curve
	a := curve.Analysis
	if !Number(m.YoungsModulus).Exists() && m.YoungsModuli == nil && m.Stiffness == nil {
		m.YoungsModulus = float64(a.Modulus.YoungsModulus)
	}
	if !Number(m.ProportionalLimit).Exists() && a.ProportionalLimit.Stress.Exists() {
		m.ProportionalLimit = float64(a.ProportionalLimit.Stress)
		if m.Source == "" {
			m.Source = fmt.Sprintf("%s, %s", curve.Path, a.ProportionalLimit.By)
		}
	}
}

// henckyLaw returns the energy under the material's curve, nil where there is none or
// the law is not isotropic.
func (m *Material) henckyLaw(law *Law) (*HenckyLaw, error) {
	if m.Curve == nil || law == nil || law.general != nil {
		return nil, nil
	}
	curve, err := m.Curve.Analysis.LawCurve()
	if err != nil {
		return nil, err
	}
	return NewHenckyLaw(curve, m.YoungsModulus, m.PoissonsRatio)
}

// NewMaterial returns a material of which nothing but the name is given.
func NewMaterial(name string) Material {
	none := float64(None)
	return Material{
		Name: name, YoungsModulus: none, PoissonsRatio: none, ProportionalLimit: none,
		ProportionalLimitCompression: none, YieldStress: none, HardeningExponent: none,
		ControlRadius: none, CriticalDensity: none, FractureToughness: none, TensileStrength: none, Density: none, ThermalExpansion: none, ReferenceTemperature: none,
	}
}

// Law returns the material's law in model axes, nil where its constants are not given.
// Errors name what is wrong with them.
func (m *Material) Law() (*Law, error) {
	law, err := m.lawInMaterialAxes()
	if err != nil || law == nil || m.Axes == nil {
		return law, err
	}
	axes, err := NewAxes(*m.Axes)
	if err != nil {
		return nil, err
	}
	return law.InModelAxes(&axes), nil
}

func (m *Material) lawInMaterialAxes() (*Law, error) {
	switch {
	case m.Stiffness != nil:
		order := m.StiffnessOrder
		if order == nil {
			order = mesh.OrderOf6
		}
		return NewStiffnessLaw(*m.Stiffness, order)
	case m.YoungsModuli != nil && m.ShearModuli != nil && m.PoissonsRatios != nil:
		return NewOrthotropicLaw(*m.YoungsModuli, *m.ShearModuli, *m.PoissonsRatios)
	case Number(m.YoungsModulus).Exists() && Number(m.PoissonsRatio).Exists():
		return NewIsotropicLaw(m.YoungsModulus, m.PoissonsRatio)
	}
	return nil, nil
}

// lawName names the kind of law that the material's constants make.
func (m *Material) lawName() string {
	switch {
	case m.Stiffness != nil:
		return "stiffness"
	case m.YoungsModuli != nil:
		return "orthotropic"
	case Number(m.YoungsModulus).Exists() && Number(m.PoissonsRatio).Exists():
		return "isotropic"
	}
	return "none"
}

// used returns the values of the material as the ledger gives them.
func (m *Material) used(idealisation Idealisation) MaterialUsed {
	used := MaterialUsed{
		Name: m.Name, Law: m.lawName(), YoungsModulus: Number(m.YoungsModulus), PoissonsRatio: Number(m.PoissonsRatio),
		ProportionalLimit: Number(m.ProportionalLimit), ProportionalLimitCompression: Number(m.ProportionalLimitCompression),
		Density: Number(m.Density), ThermalExpansion: Number(m.ThermalExpansion),
		ReferenceTemperature: Number(m.ReferenceTemperature), Source: Text(m.Source),
		YoungsModuli: m.YoungsModuli, ShearModuli: m.ShearModuli, PoissonsRatios: m.PoissonsRatios,
		Stiffness: m.Stiffness, YieldStress: Number(m.YieldStress), HardeningExponent: Number(m.HardeningExponent),
		ControlRadius: Number(m.controlRadius(idealisation)), CriticalDensity: Number(m.criticalDensity()),
		FractureToughness: Number(m.FractureToughness), TensileStrength: Number(m.TensileStrength),
	}
	switch {
	case m.AxesArray != "":
		used.Axes = m.AxesArray
	case m.Axes != nil:
		used.Axes = *m.Axes
	}
	if m.Curve != nil {
		used.Curve, used.ProportionalLimitBy = Text(m.Curve.Path), Text(m.Curve.Analysis.ProportionalLimit.By)
	}
	if m.Stiffness != nil {
		used.StiffnessOrder = Text(mesh.OrderOf6.String())
		if m.StiffnessOrder != nil {
			used.StiffnessOrder = Text(m.StiffnessOrder.String())
		}
	}
	return used
}

package energy

import (
	"testing"

	"strainledger/mesh"
)

func TestRoleOf(t *testing.T) {
	for name, want := range map[string]role{
		"stress": stressRole, "Stress": stressRole, "STRESS_0": stressRole, "cauchy_stress": stressRole, "CauchyStress": stressRole,
		"sigma": stressRole, "Sigma (MPa)": stressRole, "S": stressRole, "sig": stressRole, "signal": noRole, "stress tensor": stressRole,
		"strain": strainRole, "TotalStrain": strainRole, "totalstrain": strainRole, "Epsilon": strainRole, "eps": strainRole, "E": strainRole,
		"cauchy_strain": strainRole, "steps": noRole, "elastic strain": elasticStrainRole, "ElasticStrain": elasticStrainRole,
		"ThermalStrain": thermalStrainRole, "thermal_strain": thermalStrainRole, "PlasticStrain": plasticStrainRole, "eps_plastic": plasticStrainRole,
		"EquivalentPlasticStrain": equivalentPlasticStrainRole, "eq_plastic_strain": equivalentPlasticStrainRole,
		"accumulated plastic strain": equivalentPlasticStrainRole,
		"von Mises stress":           noRole, "vonMisesStress": noRole, "stress_vm": noRole, "max principal stress": noRole, "equivalent strain": noRole,
		"strain energy density": noRole, "StrainRate": noRole, "residual stress": noRole, "stress_max": noRole, "maxwell stress": stressRole,
		"stress_strain": noRole, "pressure": noRole,
		"displacement": displacementRole, "Displacements": displacementRole, "U": displacementRole, "disp": displacementRole, "display": noRole,
		"reaction": reactionRole, "ReactionForce": reactionRole, "reaction_forces": reactionRole, "ReactionMoment": noRole,
		"NodalForce": nodalForceRole, "nodal_forces": nodalForceRole, "Force": nodalForceRole, "forces": nodalForceRole, "internal force": nodalForceRole,
		"ExternalForce": loadRole, "applied_force": loadRole, "nodal load": loadRole, "load": noRole, "workforce": noRole, "force_x": noRole,
		"contact force": noRole, "BodyForce": noRole, "residual force": noRole, "reaction force magnitude": noRole, "nodal force error": noRole,
		"section force": noRole, "body temperature": temperatureRole, "contact element id": elementIDRole,
		"temperature": temperatureRole, "TemperatureRise": temperatureRole, "temp": temperatureRole,
		"element_id": elementIDRole, "ElementID": elementIDRole, "GlobalElementId": elementIDRole, "GlobalCellIds": elementIDRole,
		"cell number": elementIDRole, "identity": noRole, "": noRole,
	} {
		if got := roleOf(name); got != want {
			t.Errorf("roleOf(%q) = %d, want %d", name, got, want)
		}
	}
}

// Forces and displacements serve on points only.
func TestTakenFor(t *testing.T) {
	for _, c := range []struct {
		array mesh.Array
		want  Text
	}{
		{mesh.Array{Name: "ReactionForce", On: mesh.OnPoint, Components: 3}, "nodal_force"},
		{mesh.Array{Name: "nodal force", On: mesh.OnPoint, Components: 2}, "nodal_force"},
		{mesh.Array{Name: "applied force", On: mesh.OnPoint, Components: 3}, "nodal_force"},
		{mesh.Array{Name: "ReactionForce", On: mesh.OnPoint, Components: 1}, ""},
		{mesh.Array{Name: "ReactionForce", On: mesh.OnCell, Components: 3}, ""},
		{mesh.Array{Name: "displacement", On: mesh.OnPoint, Components: 3}, "displacement"},
		{mesh.Array{Name: "displacement", On: mesh.OnCell, Components: 3}, ""},
		{mesh.Array{Name: "stress", On: mesh.OnCell, Components: 6}, "stress"},
		{mesh.Array{Name: "stress", On: mesh.OnField, Components: 6}, ""},
	} {
		if got, why := takenFor(c.array); got != c.want || (why == "") != (got == "") {
			t.Errorf("%+v: %q, %q", c.array, got, why)
		}
	}
}

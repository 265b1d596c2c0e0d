package energy

import "testing"

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
		"temperature": temperatureRole, "TemperatureRise": temperatureRole, "temp": temperatureRole,
		"element_id": elementIDRole, "ElementID": elementIDRole, "GlobalElementId": elementIDRole, "GlobalCellIds": elementIDRole,
		"cell number": elementIDRole, "identity": noRole, "": noRole,
	} {
		if got := roleOf(name); got != want {
			t.Errorf("roleOf(%q) = %d, want %d", name, got, want)
		}
	}
}

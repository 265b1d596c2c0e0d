package study

import (
	"strings"
	"testing"
)

// Each case is a study with one fault or several; § stands where each fault has to
// be placed, in the order of the messages.
func TestFaults(t *testing.T) {
	const (
		steel         = "[[material]]\nname = \"S355\"\n"
		twoLimits     = steel + "proportional_limit = 1\n§proportional_limit_compression = 2\n"
		noCompression = `material.proportional_limit_compression has a meaning by criterion max-principal alone; remove it or write criterion = "max-principal" in [limit] or in a region of the material`
	)
	for name, c := range map[string]struct {
		text string
		want []string
	}{
		"not TOML": {"title = \"t\"\nlength §mm",
			[]string{"this is not TOML: expected '=' after key; mend the line, texts stand in quotes"}},
		"not TOML after letters beyond ASCII": {"title = \"größer\" §x",
			[]string{"this is not TOML: expected newline but got U+0078 'x'; mend the line, texts stand in quotes"}},
		"text that ends in the middle of a character": {"x = \"a§ಲ", []string{"this is not TOML: unterminated basic string; mend the line, texts stand in quotes"}},
		"number that TOML cannot hold": {"[model]\nrepeats = §99999999999999999999",
			[]string{"this is not TOML: decimal number is too large to fit in a 64-bit signed integer; mend the line, texts stand in quotes"}},
		"not UTF-8": {"title = \"§\xff\"", []string{"not UTF-8; save the study file as UTF-8 text"}},

		"unknown key":           {"§titel = \"t\"", []string{`unknown key "titel"; the nearest known key is "title"`}},
		"unknown key, accented": {"[units]\n§\"länge\" = \"t\"", []string{`unknown key "länge" in [units]; the nearest known key is "length"`}},
		"unknown key in an inline table": {"fields.strain = { array = \"e\", §onn = \"cell\" }",
			[]string{`unknown key "onn" in [fields.strain]; the nearest known key is "on"`}},
		"unknown key in a table of a list": {steel + "§youngs_moduls = 1",
			[]string{`unknown key "youngs_moduls" in [[material]]; the nearest known key is "youngs_modulus"`}},
		"unknown key in a nested table": {"[[region]]\nname = \"r\"\nselect = { array = \"a\", §valuess = [1] }",
			[]string{`unknown key "valuess" in [region.select]; the nearest known key is "values"`}},
		"unknown key that has its place elsewhere": {"§thickness = 3", []string{`unknown key "thickness"; the nearest known key is "model.thickness"`}},
		"unknown table":          {"[§unit]\nlength = \"mm\"", []string{`unknown key "unit"; the nearest known key is "units"`}},
		"unknown dotted key":     {"units.§lenght = \"mm\"", []string{`unknown key "lenght" in [units]; the nearest known key is "length"`}},
		"key with a point in it": {"§\"units.length\" = \"mm\"", []string{`unknown key "units.length"; the nearest known key is "units"`}},
		"long unknown key": {"§" + strings.Repeat("x", 70) + " = 1",
			[]string{`unknown key "` + strings.Repeat("x", 57) + `..."; the nearest known key is "title"`}},

		"key given twice": {"[units]\nlength = \"mm\"\n§length = \"m\"", []string{`"length" was given before, on line 2; remove one of the two`}},
		"table given twice, both looked at": {"[units]\nlength = \"mm\"\n[§units]\n§mas = \"kg\"",
			[]string{`"units" was given before, on line 1; remove one of the two`, `unknown key "mas" in [units]; the nearest known key is "mass"`}},
		"table and list of tables": {"[[accept]]\ncode = \"all-zero\"\nreason = \"r\"\n[§accept]\ncode = \"x\"",
			[]string{`"accept" was given before, on line 1; remove one of the two`}},
		"list of tables after a table": {"[units]\n[[§units]]", []string{`"units" was given before, on line 1; remove one of the two`}},
		"table below a value": {"title = \"t\"\n[§title.sub]\nx = 1",
			[]string{`"title" is the text "t" on line 1 and cannot hold other keys; rename one of the two`}},
		"header that adds to an inline table": {"units = { length = \"mm\" }\n[§units.more]",
			[]string{`this is not TOML: key units already exists as a value; mend the line, texts stand in quotes`}},

		"text for a number":      {steel + "§density = \"7.8\"", []string{`material.density is the text "7.8"; write a number`}},
		"number for a text":      {"§title = 3", []string{"title is the number 3; write a text in quotes"}},
		"number for a choice":    {"[units]\n§length = 3", []string{`units.length is the number 3; write "mm", "m", "cm", "in" or "ft"`}},
		"fraction for a count":   {"[model]\n§repeats = 1.5", []string{"model.repeats is the number 1.5; write a whole number"}},
		"truth for a number":     {"[limit]\n§list = true", []string{"limit.list is true; write a whole number"}},
		"date for a text":        {"§title = 2026-01-02", []string{"title is the date or time 2026-01-02; write a text in quotes"}},
		"text for a list":        {"[input]\n§files = \"a.vtu\"", []string{`input.files is the text "a.vtu"; write a list of texts such as ["a", "b"]`}},
		"list for a text":        {"§title = [1]", []string{"title is a list; write a text in quotes"}},
		"table for a text":       {"§title = { a = 1 }", []string{"title is a table; write a text in quotes"}},
		"text for a table":       {"§units = \"mm\"", []string{`units is the text "mm"; write a table [units]`}},
		"one bracket for two":    {"[§region]\nname = \"r\"", []string{"region is a table; write [[region]] above its keys"}},
		"two brackets for one":   {"[[§units]]\nlength = \"mm\"", []string{"units is a table with two brackets; write a table [units]"}},
		"list of other things":   {"§region = [1]", []string{"region is a list; write [[region]] above its keys"}},
		"text for a truth":       {"[[region]]\nname = \"r\"\nselect.rest = true\n§optional = \"yes\"", []string{`region.optional is the text "yes"; write true or false`}},
		"true for a field":       {"[fields]\n§strain = true", []string{"fields.strain is true; write false, a text in quotes or a table [fields.strain]"}},
		"values in a list":       {"[input]\nfiles = [\"a\", §3,\n  §\"\"]", []string{"input.files is the number 3; write a text in quotes", "input.files is empty; write a text in quotes or remove it"}},
		"empty list":             {"[input]\n§files = []", []string{`input.files is an empty list; write a list of texts such as ["a", "b"]`}},
		"empty name":             {"[[material]]\n§name = \"\"", []string{"material.name is empty; write a text in quotes or remove it"}},
		"several forms, neither": {"[model]\nidealisation = \"plane-strain\"\n§thickness = true", []string{"model.thickness is true; write a text in quotes or a number"}},

		"unit":              {"[units]\n§length = \"MPa\"", []string{`units.length is "MPa"; write "mm", "m", "cm", "in" or "ft"`}},
		"idealisation":      {"[model]\n§idealisation = \"3d\"", []string{`model.idealisation is "3d"; write "solid", "plane-stress", "plane-strain" or "axisymmetric"`}},
		"criterion":         {"[limit]\n§criterion = \"mises\"", []string{`limit.criterion is "mises"; write "von-mises", "tresca", "max-principal", "distortion-energy" or "total-energy"`}},
		"order of the list": {"[hotspots]\n§by = \"utilization\"", []string{`hotspots.by is "utilization"; write "utilisation", "density" or "energy"`}},
		"stress has no engineering shear": {"[fields]\nstress = { §shear = \"engineering\" }",
			[]string{`fields.stress.shear is "engineering"; write "tensor" or "mandel"`}},
		"code of no finding": {"[[accept]]\n§code = \"tangled-cell\"\nreason = \"r\"",
			[]string{`accept.code is "tangled-cell"; the nearest known one is "tangled-cells"`}},

		"modulus":             {steel + "§youngs_modulus = 0", []string{"material.youngs_modulus is 0; it must be above 0"}},
		"Poisson's ratio":     {steel + "§poissons_ratio = 0.5", []string{"material.poissons_ratio is 0.5; it must be above -1 and below 0.5"}},
		"Poisson's ratio low": {steel + "§poissons_ratio = -1", []string{"material.poissons_ratio is -1; it must be above -1 and below 0.5"}},
		"limit":               {steel + "§proportional_limit = -3.0", []string{"material.proportional_limit is -3.0; it must be above 0"}},
		"exponent":            {steel + "yield_stress = 345\n§hardening_exponent = 1", []string{"material.hardening_exponent is 1; it must be above 1"}},
		"yield stress":        {steel + "§yield_stress = 0", []string{"material.yield_stress is 0; it must be above 0"}},
		"density":             {steel + "§density = 0.0", []string{"material.density is 0.0; it must be above 0"}},
		"NaN":                 {steel + "§youngs_modulus = nan", []string{"material.youngs_modulus is nan; it must be finite"}},
		"signed NaN":          {steel + "§reference_temperature = -nan", []string{"material.reference_temperature is -nan; it must be finite"}},
		"too large":           {steel + "reference_temperature = §1e999", []string{`this is not TOML: unable to parse float: strconv.ParseFloat: parsing "1e999": value out of range; mend the line, texts stand in quotes`}},
		"infinite":            {steel + "§reference_temperature = -inf", []string{"material.reference_temperature is -inf; it must be finite"}},
		"infinite bound":      {"[[require]]\nquantity = \"energy\"\n§at_most = +inf", []string{"require.at_most is +inf; it must be finite"}},
		"infinite time":       {"input.§time = inf", []string{"input.time is inf; it must be finite"}},
		"exponent alone": {steel + "§hardening_exponent = 12",
			[]string{"material.hardening_exponent without yield_stress; add yield_stress, the stress at 0.2 % plastic strain"}},
		"compression":              {steel + "proportional_limit = 1\n§proportional_limit_compression = 0\n[limit]\ncriterion = \"max-principal\"", []string{"material.proportional_limit_compression is 0; it must be above 0"}},
		"compression alone":        {steel + "§proportional_limit_compression = 2\n[limit]\ncriterion = \"max-principal\"", []string{"material.proportional_limit_compression without proportional_limit; add proportional_limit, the one in tension"}},
		"compression by von Mises": {twoLimits, []string{noCompression}},
		"compression, the region goes by another criterion": {twoLimits + "[limit]\ncriterion = \"max-principal\"\n[[region]]\nname = \"a\"\nselect.rest = true\ncriterion = \"tresca\"",
			[]string{noCompression}},
		"compression, the region is of another material": {twoLimits + "[[material]]\nname = \"T\"\n[[region]]\nname = \"a\"\nselect.rest = true\nmaterial = \"T\"\ncriterion = \"max-principal\"",
			[]string{noCompression}},
		"compression, the criterion is misspelt": {steel + "proportional_limit = 1\nproportional_limit_compression = 2\n[limit]\n§criterion = \"principal\"",
			[]string{`limit.criterion is "principal"; write "von-mises", "tresca", "max-principal", "distortion-energy" or "total-energy"`}},
		"thickness":          {"[model]\nidealisation = \"plane-stress\"\n§thickness = -1", []string{"model.thickness is -1; it must be above 0"}},
		"repeats":            {"[model]\n§repeats = 0", []string{"model.repeats is 0; it must be 1 or more"}},
		"prominence":         {"[hotspots]\n§prominence = -0.1", []string{"hotspots.prominence is -0.1; it must be 0 or above, and below 1"}},
		"whole prominence":   {"[hotspots]\n§prominence = 1", []string{"hotspots.prominence is 1; it must be 0 or above, and below 1"}},
		"radius":             {"[hotspots]\n§radius = 0", []string{"hotspots.radius is 0; it must be above 0"}},
		"pool":               {"[hotspots]\n§pool = 0", []string{"hotspots.pool is 0; it must be 1 or more"}},
		"centre of two":      {"[hotspots]\nradius = 1\n§centre = [1, 2]", []string{"hotspots.centre must have three coordinates; write [x, y, z]"}},
		"centre of texts":    {"[hotspots]\nradius = 1\ncentre = [1, §\"2\", 3]", []string{`hotspots.centre is the text "2"; write a number`}},
		"centre alone":       {"[hotspots]\n§centre = [1, 2, 3]", []string{"hotspots.centre without hotspots.radius, within which density is averaged about it; add radius"}},
		"control radius":     {steel + "§control_radius = 0", []string{"material.control_radius is 0; it must be above 0"}},
		"critical density":   {steel + "control_radius = 1\n§critical_density = 0", []string{"material.critical_density is 0; it must be above 0"}},
		"critical alone":     {steel + "§critical_density = 1", []string{"material.critical_density without a control radius, within which density is averaged; add control_radius, or fracture_toughness and tensile_strength"}},
		"fracture toughness": {steel + "tensile_strength = 1\npoissons_ratio = 0.3\n§fracture_toughness = 0", []string{"material.fracture_toughness is 0; it must be above 0"}},
		"toughness alone": {steel + "§fracture_toughness = 1", []string{
			"material.fracture_toughness without tensile_strength; the control radius comes from both: add tensile_strength, or state control_radius instead",
			"material.fracture_toughness without poissons_ratio; the control radius comes from both: add poissons_ratio, or state control_radius instead"}},
		"tensile strength": {steel + "§tensile_strength = -1", []string{"material.tensile_strength is -1; it must be above 0"}},
		"count":            {"[hotspots]\n§count = 0", []string{"hotspots.count is 0; it must be 1 or more"}},
		"list":             {"[limit]\n§list = -1", []string{"limit.list is -1; it must be 1 or more"}},
		"NaN among values": {"[[region]]\nname = \"r\"\nselect = { array = \"a\", values = [1, §nan] }",
			[]string{"region.select.values is nan; it must be finite"}},
		"value too large to be exact": {"[[region]]\nname = \"r\"\nselect = { array = \"a\", values = [9007199254740992, §9007199254740994] }",
			[]string{"region.select.values holds 9007199254740994; whole numbers are exact up to 2^53 only, use smaller ones"}},

		"plane stress without thickness": {"[model]\n§idealisation = \"plane-stress\"",
			[]string{"a plane-stress model needs a thickness; add thickness to [model], as a number or the name of a cell array"}},
		"plane stress, one region without thickness": {"model.§idealisation = \"plane-stress\"\n[[region]]\nname = \"a\"\nthickness = 1\nselect.block = \"a\"\n[[region]]\nname = \"b\"\nselect.rest = true",
			[]string{"a plane-stress model needs a thickness; add thickness to [model], as a number or the name of a cell array"}},
		"thickness of a solid": {"[model]\n§thickness = 3",
			[]string{`model.thickness has no meaning in a solid model; remove it or write idealisation = "plane-stress" or "plane-strain"`}},
		"thickness of a region of a solid": {"[[region]]\nname = \"a\"\nselect.rest = true\n§thickness = 3",
			[]string{`region.thickness has no meaning in a solid model; remove it or write idealisation = "plane-stress" or "plane-strain"`}},
		"axis of a solid": {"[model]\n§axis = \"x\"",
			[]string{`model.axis has no meaning in a solid model; remove it or write idealisation = "axisymmetric"`}},
		"what goes with a wrong idealisation is not judged": {"[model]\n§idealisation = \"shell\"\nthickness = 3\naxis = \"x\"\n[[region]]\nname = \"a\"\nselect.rest = true\nthickness = 3",
			[]string{`model.idealisation is "shell"; write "solid", "plane-stress", "plane-strain" or "axisymmetric"`}},

		"nor with a misspelt one": {"[model]\n§idealization = \"plane-stress\"\nthickness = 3",
			[]string{`unknown key "idealization" in [model]; the nearest known key is "idealisation"`}},
		"nor are names of misspelt lists": {"[[§materials]]\nname = \"S\"\n[[region]]\nname = \"a\"\nselect.rest = true\nmaterial = \"S\"",
			[]string{`unknown key "materials"; the nearest known key is "material"`}},

		"order": {"[fields]\nstress = { §order = \"xx yy qq\" }",
			[]string{`fields.stress.order: component order "xx yy qq": "qq" is no component (want xx yy zz xy yz xz, or rr zz tt rz)`}},
		"cylindrical order in a solid": {"[fields]\nstress = { §order = \"rr zz tt rz\" }",
			[]string{`fields.stress.order names rr or tt, which belong to an axisymmetric model; write xx yy zz or idealisation = "axisymmetric"`}},
		"array and arrays":     {"[fields]\nstrain = { array = \"e\", §arrays = [\"a\", \"b\"], order = \"xx yy\" }", []string{"fields.strain has both array and arrays; keep one of them"}},
		"arrays without order": {"[fields]\nstrain = { §arrays = [\"a\", \"b\"] }", []string{`fields.strain.arrays without order; add order = "..." with one component for each array`}},
		"arrays and order differ": {"[fields]\nstrain = { arrays = [\"a\", \"b\"], §order = \"xx yy xy\" }",
			[]string{"fields.strain.order names 3 components for 2 arrays; name one component for each array"}},
		"array twice":        {"[fields]\nstrain = { arrays = [\"a\", §\"a\"], order = \"xx yy\" }", []string{`fields.strain.arrays names "a" twice; name one array for each component`}},
		"four displacements": {"[fields]\ndisplacement = { §arrays = [\"a\", \"b\", \"c\", \"d\"] }", []string{"fields.displacement.arrays names 4 arrays; name at most three, for x, y and z"}},
		"arrays of a scalar": {"[fields]\ntemperature = { §arrays = [\"a\"] }", []string{`unknown key "arrays" in [fields.temperature]; the nearest known key is "array"`}},
		"empty field":        {"[fields]\n§strain = {}", []string{`fields.strain is an empty table; write array = "..." in it or remove it`}},

		"material without a name": {"[[§material]]\ndensity = 1.0", []string{`[[material]] without name; add name = "..."`}},
		"region with nothing": {"[[§region]]\noptional = true",
			[]string{`[[region]] without name; add name = "..."`, "[[region]] without select; add select = { rest = true } or another choice of cells"}},
		"accept without a reason":    {"[[§accept]]\ncode = \"all-zero\"", []string{`[[accept]] without reason; add reason = "..."`}},
		"require without a quantity": {"[[§require]]\nat_most = 1", []string{`[[require]] without quantity; add quantity = "..."`}},
		"material twice":             {steel + "[[material]]\n§name = \"S355\"", []string{`material.name "S355" was given before (line 2); use another or remove one of the two`}},
		"region twice": {"[[region]]\nname = \"a\"\nselect.rest = true\n[[region]]\n§name = \"a\"\nselect.block = \"b\"",
			[]string{`region.name "a" was given before (line 2); use another or remove one of the two`}},
		"accepted twice": {"[[accept]]\ncode = \"all-zero\"\nreason = \"r\"\n[[accept]]\n§code = \"all-zero\"\nreason = \"r\"",
			[]string{`accept.code "all-zero" was given before (line 2); use another or remove one of the two`}},
		"unknown material": {steel + "[[region]]\nname = \"a\"\nselect.rest = true\n§material = \"S335\"",
			[]string{`region.material is "S335", and no material has that name; the nearest is "S355"`}},
		"no materials": {"[[region]]\nname = \"a\"\nselect.rest = true\n§material = \"S355\"",
			[]string{`region.material is "S355", but the study has no material; add [[material]]`}},
		"unknown region": {"[[region]]\nname = \"web\"\nselect.rest = true\n[[require]]\nquantity = \"energy\"\n§region = \"weg\"\nat_most = 1",
			[]string{`require.region is "weg", and no region has that name; the nearest is "web"`}},

		"array without values": {"[[region]]\nname = \"a\"\nselect = { §array = \"p\" }",
			[]string{"region.select.array without values; add values = [...] with the numbers that belong to the region"}},
		"values without array": {"[[region]]\nname = \"a\"\nselect = { §values = [1] }",
			[]string{`region.select.values without array; add array = "..." with the name of the cell array`}},
		"two ways to select": {"[[region]]\nname = \"a\"\n§select = { block = \"p\", rest = true }",
			[]string{"region.select names 2 ways to choose cells; use one of array with values, block, box or rest"}},
		"no way to select": {"[[region]]\nname = \"a\"\n§select = {}",
			[]string{"region.select names 0 ways to choose cells; use one of array with values, block, box or rest"}},
		"rest of nothing": {"[[region]]\nname = \"a\"\nselect = { §rest = false }",
			[]string{"region.select.rest is false, which selects nothing; write true or choose cells by array, block or box"}},
		"two rests": {"[[region]]\nname = \"a\"\nselect.rest = true\n[[region]]\nname = \"b\"\n§select.rest = true",
			[]string{"the region on line 1 takes the rest already; select by array, block or box"}},
		"box of one corner": {"[[region]]\nname = \"a\"\nselect = { §box = [[0, 0, 0]] }",
			[]string{"region.select.box must have two corners of three coordinates; write [[x, y, z], [x, y, z]]"}},
		"a rule without points": {"[fields]\nstress = { array = \"s\", §rule = \"gauss 3x3\" }",
			[]string{`fields.stress.rule is for values at integration points; add on = "integration" or remove it`}},
		"an unknown rule": {"[fields]\nstress = { array = \"s\", on = \"integration\", §rule = \"gauss three\" }",
			[]string{"fields.stress.rule: integration rule \"gauss three\": want 1 to 16 points along one to three directions, such as 3x3"}},
		"box of plane corners": {"[[region]]\nname = \"a\"\nselect = { §box = [[0, 0, 0], [1, 1]] }",
			[]string{"region.select.box must have two corners of three coordinates; write [[x, y, z], [x, y, z]]"}},
		"box inside out": {"[[region]]\nname = \"a\"\nselect = { §box = [[0, 0, 0], [1, -1, 1]] }",
			[]string{"region.select.box has the corners 0 and -1 in y; write the lower one first"}},
		"box of texts": {"[[region]]\nname = \"a\"\nselect = { box = [[0, §\"0\", 0], [1, 1, 1]] }",
			[]string{`region.select.box is the text "0"; write a number`}},

		"quantity of nothing": {"[[require]]\n§quantity = \"enrgy\"\nat_most = 1",
			[]string{`require.quantity is "enrgy", which is no number of an account; the nearest is "energy"`}},
		"quantity that is a place": {"[[require]]\n§quantity = \"max_density_at\"\nat_most = 1",
			[]string{`require.quantity is "max_density_at", which is no number of an account; the nearest is "max_density"`}},
		"quantity of no hotspot": {"[[require]]\n§quantity = \"hotspot.0.density\"\nat_most = 1\n[[require]]\n§quantity = \"hotspot.1.colour\"\nat_most = 1",
			[]string{`require.quantity is "hotspot.0.density", which is no number of a hotspot; write hotspot.RANK.KEY, such as "hotspot.1.density"`,
				`require.quantity is "hotspot.1.colour", which is no number of a hotspot; write hotspot.RANK.KEY, such as "hotspot.1.density"`}},
		"quantity of no balance": {"[[require]]\n§quantity = \"balance.reasons\"\nat_most = 1",
			[]string{`require.quantity is "balance.reasons", which is no number of the balance; write balance.gap`}},
		"balance of a region": {"[[region]]\nname = \"a\"\nselect.rest = true\n[[require]]\nquantity = \"balance.gap\"\nat_most = 1\n§region = \"a\"",
			[]string{`require.region is "a", but the balance is that of the whole model; remove region`}},
		"work twice": {"[balance]\n§external_work = 1\n[[balance.load]]\nforce = [1, 0, 0]\ndisplacement = [1, 0, 0]",
			[]string{"balance.external_work beside [[balance.load]], which gives the work too; keep one of them"}},
		"load of one component": {"[[balance.load]]\n§force = [1]\n§displacement = [1, 0, 0, 0]",
			[]string{"balance.load.force must have two or three numbers; write [x, y, z], in a plane model [x, y]",
				"balance.load.displacement must have two or three numbers; write [x, y, z], in a plane model [x, y]"}},
		"load without displacement": {"[[balance.§load]]\nforce = [1, 0]", []string{"[[balance.load]] without displacement; add displacement"}},
		"target without estimate": {"[error]\n§target = 0.1\n§recovery = \"averaging\"", []string{
			"error.target without error.estimate, which asks for the estimate; add estimate = true",
			"error.recovery without error.estimate, which asks for the estimate; add estimate = true"}},
		"target of everything": {"[error]\nestimate = true\n§target = 1\n§recovery = \"patch\"", []string{
			"error.target is 1; it must be above 0 and below 1", `error.recovery is "patch"; write "averaging" or "patches"`}},
		"load of texts":            {"[[balance.load]]\nforce = [§\"1\", 0]\ndisplacement = [1, 0]", []string{`balance.load.force is the text "1"; write a number`}},
		"elsewhere without energy": {"[[§elsewhere]]\nname = \"bolts\"", []string{"[[elsewhere]] without energy; add energy"}},
		"elsewhere twice": {"[[elsewhere]]\nname = \"bolts\"\nenergy = 1\n[[elsewhere]]\n§name = \"bolts\"\nenergy = 2",
			[]string{`elsewhere.name "bolts" was given before (line 2); use another or remove one of the two`}},
		"force on cells": {"fields.nodal_force = { array = \"f\", §on = \"cell\" }", []string{`fields.nodal_force.on is "cell"; write "point"`}},
		"four arrays of force": {"fields.nodal_force = { §arrays = [\"a\", \"b\", \"c\", \"d\"] }",
			[]string{"fields.nodal_force.arrays names 4 arrays; name at most three, for x, y and z"}},

		"quantity of a comparison": {"[[require]]\n§quantity = \"change.energy\"\nat_most = 0",
			[]string{`require.quantity "change.energy" is a number of a comparison; write it into the study that compare --study names`}},
		"loading": {"[loading]\n§control = \"forces\"\n§scale = 0\n§factor = 2\n[compare]\n§tolerance = -1", []string{
			`loading.control is "forces"; write "force", "displacement" or "mixed"`, "loading.scale is 0; it must be above 0",
			`unknown key "factor" in [loading]; the nearest known key is "case.factor"`, "compare.tolerance is -1; it must be above 0"}},
		"requirement without a bound": {"[[§require]]\nquantity = \"energy\"", []string{"[[require]] without a bound; add at_most or at_least"}},
		"requirement that nothing meets": {"[[require]]\nquantity = \"energy\"\nat_most = 1\n§at_least = 2",
			[]string{"require.at_least is 2 and at_most is 1, which nothing can meet; exchange them"}},

		"all at once, in the order of lines": {"§title = 1\n[units]\n§mas = \"kg\"\n[[region]]\nname = \"a\"\nselect.rest = true\n§material = \"x\"\n[[§case]]\nwhatever = 1\n[limit]\n§list = 0",
			[]string{
				"title is the number 1; write a text in quotes",
				`unknown key "mas" in [units]; the nearest known key is "mass"`,
				`region.material is "x", but the study has no material; add [[material]]`,
				"case is not built yet; remove it",
				"limit.list is 0; it must be 1 or more",
			}},
	} {
		t.Run(name, func(t *testing.T) { wantFaults(t, c.text, c.want) })
	}
}

// What the fixed form has and the program has not yet is refused, never ignored.
func TestNotBuiltYet(t *testing.T) {
	for _, marked := range []string{
		"input.§steps = [\"a\"]", "input.§start = \"as-given\"", "input.§time = \"all\"",
		"[[§case]]\nname = \"pull\"",
	} {
		t.Run(marked, func(t *testing.T) { wantNotBuilt(t, marked) })
	}
	for _, key := range []string{"hardening_isotropic = 1", "hardening_kinematic = 1"} {
		t.Run(key, func(t *testing.T) { wantNotBuilt(t, "[[material]]\nname = \"m\"\n§"+key) })
	}
}

// wantNotBuilt demands one fault at the mark that says so.
func wantNotBuilt(t *testing.T, marked string) {
	t.Helper()
	to := &faults{path: "s.toml"}
	parseStudy("s.toml", []byte(strings.ReplaceAll(marked, "§", "")), Flags{}, to)
	before, _, _ := strings.Cut(marked, "§")
	line := 1 + strings.Count(before, "\n")
	column := 1 + len(before) - (strings.LastIndex(before, "\n") + 1)
	if len(to.found) != 1 || !strings.Contains(to.found[0].Message, "not built yet; ") {
		t.Fatalf("got %v", to.found)
	}
	if to.found[0].Line != line || to.found[0].Column != column {
		t.Errorf("%v: want line %d, column %d", to.found[0], line, column)
	}
}

// wantFaults demands these messages, each at its mark.
func wantFaults(t *testing.T, marked string, want []string) {
	t.Helper()
	places := marks(marked)
	to := &faults{path: "s.toml"}
	parseStudy("s.toml", []byte(strings.ReplaceAll(marked, "§", "")), Flags{}, to)
	to.err() // puts them in order
	for len(places) == 1 && len(want) > 1 && len(places) < len(want) {
		places = append(places, places[0]) // several faults of one place
	}
	if len(to.found) != len(want) || len(places) != len(want) {
		t.Fatalf("%d faults for %d messages and %d marks:\n%v", len(to.found), len(want), len(places), to.found)
	}
	for i, fault := range to.found {
		if fault.Message != want[i] {
			t.Errorf("got  %s\nwant %s", fault.Message, want[i])
		}
		if (place{line: fault.Line, column: fault.Column}) != places[i] || fault.Path != "s.toml" {
			t.Errorf("%v: want line %d, column %d", fault, places[i].line, places[i].column)
		}
	}
}

// marks returns the places of the marks in a text, as they are without them.
func marks(marked string) []place {
	var places []place
	for number, line := range strings.Split(marked, "\n") {
		for {
			before, after, found := strings.Cut(line, "§")
			if !found {
				break
			}
			places = append(places, place{line: number + 1, column: len([]rune(before)) + 1})
			line = before + after
		}
	}
	return places
}

func TestFaultError(t *testing.T) {
	for want, fault := range map[string]Fault{
		"a b.toml:3:7: m":    {Path: "a b.toml", Line: 3, Column: 7, Message: "m"},
		"s.toml: m":          {Path: "s.toml", Message: "m"},
		`--units "mm": m`:    {Flag: `--units "mm"`, Message: "m"},
		"m":                  {Message: "m"},
		`"a\nb.toml":1:1: m`: {Path: "a\nb.toml", Line: 1, Column: 1, Message: "m"},
		`C:\a\s.toml:1:2: m`: {Path: `C:\a\s.toml`, Line: 1, Column: 2, Message: "m"},
		"größer.toml:1:1: m": {Path: "größer.toml", Line: 1, Column: 1, Message: "m"},
	} {
		if got := fault.Error(); got != want {
			t.Errorf("got %s, want %s", got, want)
		}
	}
	if got := (Faults{{Message: "a"}, {Message: "b"}}).Error(); got != "a\nb" {
		t.Errorf("got %q", got)
	}
}

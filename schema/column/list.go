package column

import (
	"strings"

	"betaloom/schema"
)

func pointColumn() Column {
	return Column{"point", "", "index of the grid point; the last axis varies fastest", Int64}
}

// parameters lists the columns that say where a point is.
func parameters(p *schema.Physics) []Column {
	var list []Column
	for _, q := range p.Parameters {
		if q.Name == schema.Wavelength || q.Name == schema.Frequency {
			continue
		}
		c, _ := Parameter(q)
		list = append(list, c)
	}
	return append(list,
		Column{"wavelength_m", "m", "wavelength in vacuum", Float64},
		Column{"frequency_hz", "Hz", "frequency", Float64})
}

// answer lists the columns that say what became of a point.
func answer() []Column {
	return []Column{
		{"guided_count", "", "number of guided modes, however many were asked for", Int32},
		{"state", "", "solved, no-mode, failed or excluded", String},
		{"reason", "", "why there is no mode, or why the point failed or is excluded", String},
	}
}

// mode lists the columns of one mode.
func mode(p *schema.Physics) []Column {
	return join(label(), dispersion(), bounds(), sensitivities(p), field(p), line(), []Column{
		{"origin", "", "solved or reduced", String},
		{"flag", "", "null or, separated by semicolons: near-cutoff, below-cutoff, avoided-crossing, cut, approximate, accuracy", String},
	})
}

func label() []Column {
	return []Column{
		{"mode", "", "index of the mode at its point; 0 has the highest effective index", Int32},
		{"family", "", "the followed mode; of layers with strips the name at this point alone, from the field: TE or TM, changes of sign across, up", String},
		{"mode_type", "", "TEM, quasi-TEM, TE, TM, LSE, LSM, HE, EH, quasi-TE, quasi-TM or hybrid", String},
		{"symmetry", "", "exact symmetry label, where the section has mirror planes; x-even, y-odd: the parity of Ex in x, in y", String},
	}
}

func dispersion() []Column {
	return []Column{
		{"neff", "", "real part n of the effective index n - j kappa", Float64},
		{"kappa_eff", "", "kappa of the effective index n - j kappa; above 0 is loss", Float64},
		{"loss_db_per_m", "dB/m", "power loss along the guide", Float64},
		{"ng", "", "group index", Float64},
		{"gvd_ps2_per_km", "ps^2/km", "group-velocity dispersion, the second derivative of beta", Float64},
		{"d_ps_per_nm_km", "ps/(nm km)", "dispersion parameter D = -(2 pi c/wavelength^2) GVD", Float64},
		{"beta3_ps3_per_km", "ps^3/km", "third derivative of beta", Float64},
	}
}

func bounds() []Column {
	return []Column{
		{"neff_err", "", "bound on the numerical error of neff", Float64},
		{"ng_err", "", "bound on the numerical error of ng", Float64},
		{"gvd_err_ps2_per_km", "ps^2/km", "bound on the numerical error of gvd_ps2_per_km", Float64},
		{"beta3_err_ps3_per_km", "ps^3/km", "bound on the numerical error of beta3_ps3_per_km", Float64},
		{"kappa_err", "", "bound on the numerical error of kappa_eff", Float64},
	}
}

// sensitivities lists those of neff to every base parameter, then those of ng.
func sensitivities(p *schema.Physics) []Column {
	var list []Column
	for _, of := range []string{"neff", "ng"} {
		for _, name := range p.Base() {
			q, _ := p.Parameter(name)
			list = append(list, sensitivity(of, q))
		}
	}
	return list
}

func sensitivity(of string, q schema.Parameter) Column {
	c, _ := Parameter(q)
	name := "d" + of + "_d" + q.Name
	if suffix := strings.TrimPrefix(c.Name, q.Name); suffix != "" {
		name += "_per" + suffix
	}
	return Column{name, inverse(c.Unit), "total derivative of " + of + " with respect to " + q.Name, Float64}
}

// inverse writes one over a unit.
func inverse(unit string) string {
	if rest, ok := strings.CutPrefix(unit, "1/"); ok && !strings.ContainsAny(rest, "/*") {
		return rest
	}
	switch {
	case unit == "":
		return ""
	case strings.ContainsAny(unit, "/ *"):
		return "1/(" + unit + ")"
	}
	return "1/" + unit
}

func field(p *schema.Physics) []Column {
	list := []Column{
		{"ex_share", "", "integral of |Ex|^2 over that of |Ex|^2 + |Ey|^2", Float64},
		{"aeff_m2", "m^2", "effective area (int S)^2 / int S^2 of the axial power flow", Float64},
		{"weff_m", "m", "effective width (int S)^2 / int S^2 of the axial power flow, in one dimension", Float64},
	}
	for _, name := range Confinements(p) {
		list = append(list, Column{"confinement_" + name, "", "share of the axial power in " + confined(p, name), Float64})
	}
	return list
}

// confined says what bears a name, of a layer of strips which part.
func confined(p *schema.Physics, name string) string {
	if p.Section.Layers != nil {
		for _, l := range p.Section.Layers.Layers {
			if l.Name == name && len(l.Strips) > 0 {
				return "the strips of " + name + ", without what fills it beside them"
			}
		}
	}
	return name
}

func line() []Column {
	return []Column{
		{"z_ohm", "ohm", "real part of the characteristic or wave impedance", Float64},
		{"z_imag_ohm", "ohm", "imaginary part of the characteristic or wave impedance", Float64},
		{"z_definition", "", "which impedance: wave, line, power-voltage or power-current", String},
		{"cutoff_hz", "Hz", "cut-off frequency, where it does not depend on frequency", Float64},
		{"c_f_per_m", "F/m", "capacitance per length of the mode", Float64},
		{"l_h_per_m", "H/m", "external inductance per length of the mode", Float64},
	}
}

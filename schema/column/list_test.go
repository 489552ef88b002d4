package column_test

import (
	"slices"
	"strings"
	"testing"

	"betaloom/schema"
	"betaloom/schema/column"
	"betaloom/schema/part/parttest"
)

func names(columns []column.Column) []string {
	var list []string
	for _, c := range columns {
		list = append(list, c.Name)
	}
	return list
}

// The names and their order are those of the contract of modes.parquet.
func TestColumns(t *testing.T) {
	p := parttest.Physics()
	where := "height_m index_shift temperature_K wall_deg gap_m wavelength_m frequency_hz "
	mode := "mode family mode_type symmetry neff kappa_eff loss_db_per_m ng gvd_ps2_per_km d_ps_per_nm_km beta3_ps3_per_km " +
		"neff_err ng_err gvd_err_ps2_per_km beta3_err_ps3_per_km kappa_err " +
		"dneff_dheight_per_m dneff_dindex_shift dneff_dtemperature_per_K dneff_dwall_per_deg " +
		"dng_dheight_per_m dng_dindex_shift dng_dtemperature_per_K dng_dwall_per_deg " +
		"ex_share aeff_m2 weff_m confinement_core z_ohm z_imag_ohm z_definition cutoff_hz c_f_per_m l_h_per_m origin flag"
	for _, c := range []struct {
		name string
		got  []column.Column
		want string
	}{
		{"points", column.Points(&p), "point " + where + "guided_count state reason"},
		{"modes", column.Modes(&p), "point " + where + mode},
		{"part", column.Part(&p), "local " + where + "guided_count state reason " + mode + " signature"},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got, want := names(c.got), strings.Fields(c.want); !slices.Equal(got, want) {
				t.Errorf("found\n%s, expected\n%s", got, want)
			}
			for _, col := range c.got {
				if col.Description == "" {
					t.Errorf("%s: no description", col.Name)
				}
			}
		})
	}
}

func TestSensitivityUnits(t *testing.T) {
	p := schema.Physics{Parameters: []schema.Parameter{
		{Name: "a", Kind: schema.Axis, Dimension: schema.Dimension{Temperature: -1}},
		{Name: "b", Kind: schema.Fixed, Dimension: schema.Dimension{Length: 2, Temperature: -1}},
		{Name: "c", Kind: schema.Fixed},
		{Name: "d", Kind: schema.Derived, Dimension: schema.Dimension{Length: 1}},
		{Name: "frequency", Kind: schema.Axis, Dimension: schema.Dimension{Time: -1}},
	}}
	got := map[string]string{}
	for _, c := range column.Modes(&p) {
		if strings.HasPrefix(c.Name, "dneff_") {
			got[c.Name] = c.Unit
		}
	}
	want := map[string]string{"dneff_da_per_per_K": "K", "dneff_db_per_m2_per_K": "1/(m^2/K)", "dneff_dc": ""}
	if len(got) != len(want) {
		t.Errorf("found %v, expected %v", got, want)
	}
	for name, unit := range want {
		if found, ok := got[name]; !ok || found != unit {
			t.Errorf("%s: found the unit %q, expected %q; columns are %v", name, found, unit, got)
		}
	}
}

func TestCheckFindsTwoColumnsOfOneName(t *testing.T) {
	length := schema.Dimension{Length: 1}
	for _, c := range []struct {
		name       string
		parameters []schema.Parameter
		wrong      string
	}{
		{"distinct", []schema.Parameter{{Name: "a", Kind: schema.Axis, Dimension: length}, {Name: "b", Kind: schema.Axis}}, ""},
		{"suffix", []schema.Parameter{{Name: "a", Kind: schema.Axis, Dimension: length}, {Name: "a_m", Kind: schema.Axis}}, "column a_m"},
		{"contract", []schema.Parameter{{Name: "weff", Kind: schema.Axis, Dimension: length}}, "column weff_m"},
		{"point", []schema.Parameter{{Name: "point", Kind: schema.Axis}}, "column point"},
	} {
		t.Run(c.name, func(t *testing.T) {
			err := column.Check(&schema.Physics{Parameters: c.parameters})
			switch {
			case c.wrong == "" && err != nil:
				t.Errorf("found %v, expected none", err)
			case c.wrong != "" && (err == nil || !strings.Contains(err.Error(), c.wrong)):
				t.Errorf("found %v, expected an error of %s", err, c.wrong)
			}
		})
	}
}

func TestConfinements(t *testing.T) {
	for _, c := range []struct {
		name    string
		section schema.Section
		want    []string
	}{
		{"layers", schema.Section{Layers: &schema.Layers{Layers: []schema.Layer{{Name: "foot"}, {}, {Name: "core",
			Strips: []schema.Strip{{Name: "left"}, {}, {Name: "right"}}}, {Name: "lid"}}}}, []string{"foot", "core", "left", "right", "lid"}},
		{"circular", schema.Section{Circular: &schema.Circular{Layers: []schema.Ring{{Name: "core"}, {}, {Name: "ring"}}}}, []string{"core", "ring"}},
		{"pipe", schema.Section{Pipe: &schema.Pipe{FillLayers: []schema.Layer{{Name: "slab"}, {}}}}, []string{"slab"}},
		{"nothing", schema.Section{}, nil},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := column.Confinements(&schema.Physics{Section: c.section}); !slices.Equal(got, c.want) {
				t.Errorf("found %q, expected %q", got, c.want)
			}
		})
	}
}

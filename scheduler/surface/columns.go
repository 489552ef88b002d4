package surface

import (
	"fmt"
	"slices"
	"strings"

	"github.com/apache/arrow/go/v17/arrow"

	"betaloom/schema"
	"betaloom/schema/column"
)

// core are the value columns that every file begins with, after family and
// point; interpolation refers to them by index.
var core = [...]string{
	"neff", "ng", "gvd_ps2_per_km", "beta3_ps3_per_km", "kappa_eff",
	"neff_err", "ng_err", "gvd_err_ps2_per_km", "beta3_err_ps3_per_km", "kappa_err",
}

const (
	fNeff = iota
	fNg
	fGVD
	fBeta3
	fKappa
	fErr         // the first of the five _err columns, in the same order
	fSensitivity = len(core)
)

// further are the columns that may follow the sensitivities. What can be had
// from the others (loss, D) and what belongs to lines is left out.
func further(name string) bool {
	switch name {
	case "ex_share", "aeff_m2", "weff_m":
		return true
	}
	return strings.HasPrefix(name, "confinement_")
}

// valueColumns lists the file's value columns: core, dneff_*, dng_*, further.
func valueColumns(p *schema.Physics) ([]column.Column, error) {
	modes := column.Modes(p)
	at := column.Index(modes)
	var list []column.Column
	for _, name := range core {
		i, ok := at[name]
		if !ok {
			return nil, fmt.Errorf("surface: column %s: expected it in modes.parquet", name)
		}
		list = append(list, modes[i])
	}
	for _, s := range sensitivities(p) {
		list = append(list, modes[at[s.Neff]])
	}
	for _, s := range sensitivities(p) {
		list = append(list, modes[at[s.Ng]])
	}
	for _, c := range modes {
		if further(c.Name) {
			list = append(list, c)
		}
	}
	return list, nil
}

// sensitivities pairs the base parameters with their columns.
func sensitivities(p *schema.Physics) []MetaSensitivity {
	var neff, ng []string
	modes := column.Modes(p)
	first := slices.IndexFunc(modes, func(c column.Column) bool { return c.Name == "kappa_err" })
	for _, c := range modes[first+1:] {
		switch {
		case strings.HasPrefix(c.Name, "dneff_d"):
			neff = append(neff, c.Name)
		case strings.HasPrefix(c.Name, "dng_d"):
			ng = append(ng, c.Name)
		}
	}
	list := []MetaSensitivity{}
	for k, name := range p.Base() {
		q, _ := p.Parameter(name)
		_, scale := column.Parameter(q)
		list = append(list, MetaSensitivity{Parameter: name, Neff: neff[k], Ng: ng[k], PerSI: scale})
	}
	return list
}

// siUnit names the unit in which an axis' values stand: that of the
// parameter's column, but radians for angles.
func siUnit(p schema.Parameter) string {
	c, _ := column.Parameter(p)
	return strings.ReplaceAll(c.Unit, "deg", "rad")
}

func fileSchema(columns []column.Column, meta string) *arrow.Schema {
	fields := []arrow.Field{
		{Name: "family", Type: arrow.BinaryTypes.String, Metadata: describe("", "the followed mode")},
		{Name: "point", Type: arrow.PrimitiveTypes.Int64, Metadata: describe("", "index of the grid point; the last axis varies fastest")},
	}
	for _, c := range columns {
		fields = append(fields, arrow.Field{
			Name: c.Name, Type: arrow.PrimitiveTypes.Float64, Nullable: true, Metadata: describe(c.Unit, c.Description),
		})
	}
	md := arrow.NewMetadata([]string{metaKey}, []string{meta})
	return arrow.NewSchema(fields, &md)
}

func describe(unit, description string) arrow.Metadata {
	return arrow.NewMetadata([]string{"unit", "description"}, []string{unit, description})
}

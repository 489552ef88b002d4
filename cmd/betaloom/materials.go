package main

import (
	"encoding/json"
	"fmt"
	"math"
	"strings"

	"betaloom/solvers/material"
)

type materialsCommand struct {
	Name string `arg:"" optional:"" help:"Only those whose name holds this text."`
	JSON bool   `help:"Write JSON."`
}

// Help shows the command by example.
func (materialsCommand) Help() string {
	return `Examples:

  betaloom materials            all of them
  betaloom materials nitride    those with nitride in their name

A name stands in a sweep file as   film: {named: silicon-nitride}`
}

// listed is a material as JSON shows it; a range without an end has none.
type listed struct {
	Name        string   `json:"name"`
	Formula     string   `json:"formula"`
	FromM       *float64 `json:"from_m"`
	ToM         *float64 `json:"to_m"`
	Temperature string   `json:"temperature,omitempty"`
	Source      string   `json:"source"`
	Note        string   `json:"note,omitempty"`
}

// Run lists the built-in materials.
func (c *materialsCommand) Run(con *console) error {
	var found []material.Listing
	for _, m := range material.Named() {
		if strings.Contains(m.Name, c.Name) {
			found = append(found, m)
		}
	}
	if len(found) == 0 {
		return usage("materials: found no built-in material with %q in its name; 'betaloom materials' lists them all", c.Name)
	}
	if c.JSON {
		return c.writeJSON(con, found)
	}
	for _, m := range found {
		fmt.Fprintf(con.out, "%s\n  %s\n", m.Name, bandText(m.RangeM))
		if m.Temperature != "" {
			fmt.Fprintf(con.out, "  at %s\n", m.Temperature)
		}
		fmt.Fprintf(con.out, "  %s, L in um\n  %s\n", m.Formula, m.Source)
		if m.Note != "" {
			fmt.Fprintf(con.out, "  %s\n", m.Note)
		}
	}
	return nil
}

func (c *materialsCommand) writeJSON(con *console, found []material.Listing) error {
	list := make([]listed, len(found))
	for i, m := range found {
		list[i] = listed{Name: m.Name, Formula: m.Formula, Temperature: m.Temperature, Source: m.Source, Note: m.Note}
		if m.RangeM[0] > 0 {
			list[i].FromM = &m.RangeM[0]
		}
		if !math.IsInf(m.RangeM[1], 1) {
			list[i].ToM = &m.RangeM[1]
		}
	}
	e := json.NewEncoder(con.out)
	e.SetIndent("", "  ")
	return e.Encode(list)
}

func bandText(r [2]float64) string {
	if math.IsInf(r[1], 1) {
		return "any wavelength"
	}
	return fmt.Sprintf("%g to %g um", r[0]*1e6, r[1]*1e6)
}

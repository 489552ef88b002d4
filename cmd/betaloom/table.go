package main

import (
	"errors"
	"path/filepath"

	"betaloom/scheduler/table"
)

type tableCommand struct {
	Dir     string   `arg:"" help:"The run's folder."`
	Columns []string `help:"Only these columns, in this order." placeholder:"NAME,..."`
	Where   string   `help:"Only rows that meet this condition over columns." placeholder:"CONDITION"`
	Format  string   `help:"csv, or jsonl: a JSON object a line." enum:"csv,jsonl" default:"csv"`
	Points  bool     `help:"The table of points rather than that of modes."`
}

// Help shows the command by example.
func (tableCommand) Help() string {
	return `Examples:

  betaloom table runs/nitride-film --columns wavelength_m,height_m,neff,neff_err --where 'family == "TE0"'
  betaloom table runs/nitride-film --where 'abs(gvd_ps2_per_km) < 1 and index_shift == 0'
  betaloom table runs/nitride-film --points --where 'state == "failed"' --format jsonl

A number in a condition is in its column's unit. A missing value is an empty
field in CSV and null in JSON. A condition on a missing number, or one that has
no value, is not met; a missing text compares as the empty text.`
}

// Run writes rows to standard output.
func (c *tableCommand) Run(con *console) error {
	name := "modes.parquet"
	if c.Points {
		name = "points.parquet"
	}
	_, err := table.Write(con.ctx, filepath.Join(c.Dir, name), con.out, table.Options{
		Columns: c.Columns, Where: c.Where, Format: c.Format,
	})
	var wrong *table.InputError
	if errors.As(err, &wrong) {
		return &usageError{err}
	}
	return folderError(c.Dir, err)
}

package main

import (
	"fmt"
	"path/filepath"

	"betaloom/scheduler/report"
)

type reportCommand struct {
	Dir string `arg:"" help:"The run's folder."`
}

// Help shows the command by example.
func (reportCommand) Help() string {
	return `Examples:

  betaloom report runs/nitride-film

The page stands in the folder as report.html and needs nothing beside it.
A run writes it at its end; this writes it anew from the tables.`
}

// Run writes the page of a run.
func (c *reportCommand) Run(con *console) error {
	if err := report.Write(con.ctx, c.Dir); err != nil {
		return folderError(c.Dir, err)
	}
	fmt.Fprintln(con.out, filepath.Join(c.Dir, "report.html"))
	return nil
}

package main

import (
	"betaloom/scheduler"
)

type collateCommand struct {
	Dir     string `arg:"" help:"The run's folder."`
	Partial bool   `help:"Join what there is, although tiles are missing."`
	JSON    bool   `help:"Write the run's record as JSON."`
}

// Help shows the command by example.
func (collateCommand) Help() string {
	return `Examples:

  betaloom collate runs/nitride-film             a run does this at its end
  betaloom collate runs/nitride-film --partial   tables of an interrupted run

Points that are not solved yet stand as failed in partial tables, with that
reason, and the tables' metadata say partial=true.`
}

// Run joins the parts of a run.
func (c *collateCommand) Run(con *console) error {
	out, err := scheduler.Collate(con.ctx, scheduler.CollateOptions{Dir: c.Dir, Partial: c.Partial, Version: version()})
	if err != nil {
		return folderError(c.Dir, err)
	}
	return conclude(con, "betaloom collate "+c.Dir, c.Dir, out, c.JSON)
}

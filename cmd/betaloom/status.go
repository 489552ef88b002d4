package main

import (
	"encoding/json"
	"fmt"

	"betaloom/scheduler"
)

type statusCommand struct {
	Dir  string `arg:"" help:"The run's folder."`
	JSON bool   `help:"Write JSON."`
}

// Help shows the command by example.
func (statusCommand) Help() string {
	return `Examples:

  betaloom status runs/nitride-film          also while the run is under way
  betaloom status runs/nitride-film --json   for a program`
}

// Run says where a run stands.
func (c *statusCommand) Run(con *console) error {
	s, err := scheduler.ReadStatus(con.ctx, c.Dir)
	if err != nil {
		return folderError(c.Dir, err)
	}
	if c.JSON {
		e := json.NewEncoder(con.out)
		e.SetIndent("", "  ")
		return e.Encode(s)
	}
	p := s.Progress
	fmt.Fprintf(con.out, "sweep   %s, run %s\n", s.Record.Sweep, s.Record.ID)
	fmt.Fprintf(con.out, "state   %s\n", stateText(s))
	fmt.Fprintf(con.out, "points  %d of %d\n", p.PointsDone, p.Points)
	fmt.Fprintf(con.out, "tiles   %d of %d done, %d in hand, %d set aside\n", p.TilesDone, p.Tiles, p.InHand, len(s.Aside))
	if s.Running && p.Rate > 0 {
		fmt.Fprintf(con.out, "pace   %s\n", pace(p))
	}
	for _, a := range s.Aside {
		fmt.Fprintf(con.out, "aside   tile %.12s: %s\n", a.Tile, a.Reason)
	}
	return nil
}

func stateText(s *scheduler.Status) string {
	switch {
	case s.Running:
		return string(s.Progress.Phase)
	case s.Record.State == scheduler.Running:
		return "ended without a word (killed, or the machine went down); run the sweep again to go on"
	case s.Record.Error != "":
		return fmt.Sprintf("%s: %s", s.Record.State, s.Record.Error)
	}
	return string(s.Record.State)
}

package report

import (
	"context"
	"fmt"
	"path/filepath"

	"betaloom/schema/store"
)

// Name is the page's file in the run's folder.
const Name = "report.html"

// Write makes DIR/report.html from grid.json, run.json, points.parquet and
// modes.parquet of a run's folder. The file is replaced as a whole.
func Write(ctx context.Context, dir string) error {
	d, err := Load(ctx, dir)
	if err != nil {
		return fmt.Errorf("report: %w", err)
	}
	b, err := Render(d)
	if err != nil {
		return fmt.Errorf("report: %w", err)
	}
	if err := store.WriteFile(filepath.Join(dir, Name), b); err != nil {
		return fmt.Errorf("report: %s: %w", Name, err)
	}
	return nil
}

package main

import (
	"fmt"
	"io"
	"os"
	"time"

	"github.com/schollz/progressbar/v3"
	"golang.org/x/term"

	"betaloom/scheduler"
)

// meter shows how far a run is: a bar on a terminal, elsewhere a line at the
// start of each phase and every lineInterval.
type meter struct {
	w     io.Writer
	bar   *progressbar.ProgressBar // nil where there is no terminal
	phase scheduler.Phase
	said  time.Time
}

const lineInterval = 10 * time.Second

func newMeter(w io.Writer) *meter {
	m := &meter{w: w}
	if f, ok := w.(*os.File); ok && term.IsTerminal(int(f.Fd())) {
		m.bar = progressbar.NewOptions(-1,
			progressbar.OptionSetWriter(w),
			progressbar.OptionThrottle(100*time.Millisecond),
			progressbar.OptionSetPredictTime(false),
			progressbar.OptionClearOnFinish(),
			progressbar.OptionSetWidth(24),
		)
	}
	return m
}

// show takes the latest progress.
func (m *meter) show(p scheduler.Progress) {
	if m.bar != nil {
		m.showBar(p)
		return
	}
	if p.Phase == m.phase && time.Since(m.said) < lineInterval {
		return
	}
	if m.phase == scheduler.Solving && p.Phase == scheduler.Collating {
		solved := p
		solved.Phase = scheduler.Solving
		fmt.Fprintln(m.w, progressLine(solved))
	}
	m.phase, m.said = p.Phase, time.Now()
	fmt.Fprintln(m.w, progressLine(p))
}

func (m *meter) showBar(p scheduler.Progress) {
	if p.Points > 0 {
		m.bar.ChangeMax(p.Points)
	}
	m.bar.Describe(fmt.Sprintf("%-10s%s", p.Phase, pace(p)))
	// The bar only draws; what it cannot draw is no fault of the run.
	_ = m.bar.Set(p.PointsDone)
}

// finish takes the bar away, so that the result stands on a clean line.
func (m *meter) finish() {
	if m.bar != nil {
		_ = m.bar.Clear()
	}
}

func progressLine(p scheduler.Progress) string {
	switch p.Phase {
	case scheduler.Solving:
		return fmt.Sprintf("%s: %d of %d points, %d of %d tiles%s", p.Phase, p.PointsDone, p.Points, p.TilesDone, p.Tiles, pace(p))
	default:
		return string(p.Phase)
	}
}

// pace is the rate and the time left, where they are known.
func pace(p scheduler.Progress) string {
	if p.Phase != scheduler.Solving || p.Rate == 0 {
		return ""
	}
	left := time.Duration(p.Left * float64(time.Second)).Round(time.Second)
	return fmt.Sprintf(" %s points/s, %s left", compact(p.Rate), left)
}

// compact writes a count in three digits.
func compact(v float64) string {
	switch {
	case v >= 1e6:
		return fmt.Sprintf("%.3gM", v/1e6)
	case v >= 1e3:
		return fmt.Sprintf("%.3gk", v/1e3)
	}
	return fmt.Sprintf("%.3g", v)
}

// Package report writes report.html: one page, without scripts and without
// anything beside it, that shows what a run has found.
//
// # What it reads
//
// Of a run's folder: grid.json (physics and points), run.json (name, reasons
// for the equation, times), points.parquet and modes.parquet. The same
// folder gives the same bytes. The tables are read once, in order; what stays in memory is what is
// drawn, at most about seventy thousand slots a family.
//
// # Words
//
// A slot is a point of the sweep that is drawn. A View lays slots out: which axis runs across a
// picture, which up, and at which values of the further axes there is a panel. A frame
// is one picture with its axes; a figure is frames with one heading, one legend and one caption.
//
// # What it shows
//
// The question, the section as a drawing, the parameters; the number of
// guided modes; for each family effective index, group index and dispersion; where dispersion vanishes;
// the accuracy reached; what failed or was left out, and why; the cost. With no axis the
// pictures give way to a table, with one they are lines, with two maps; further
// axes become panels at their first, middle and last values. An axis of fewer than five values
// is never a side of a map. A points file gives dots over each of its columns.
//
// # What it promises
//
// The page stays below 8 MB; where pictures use fewer points than the sweep has, it says
// how many. Numbers have no more digits than the bound on their error supports. Every text of the
// sweep and the tables is escaped. Colours are even in lightness (Oklab) and differ
// for colour-blind readers; families differ by their dashes too. The file is replaced as a whole.
package report

// Command betaloom turns a sweep file into tables and surfaces of the guided
// modes of a wave guide. This package holds flags, wiring and exit statuses;
// what it calls is in the packages below.
//
// Results go to standard output, progress and messages to standard error.
// The exit status is 0 when all was solved as asked, 1 when the program
// failed, 2 when the sweep file or the flags are wrong, 3 when the run ended
// with points unsolved or less accurate than asked, and 4 when it was
// interrupted and can go on.
package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"syscall"

	"github.com/alecthomas/kong"
)

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	status := run(&console{ctx: ctx, out: os.Stdout, err: os.Stderr}, os.Args[1:])
	stop()
	os.Exit(int(status))
}

// console is what a command writes to and how it is told to stop.
type console struct {
	ctx      context.Context
	out, err io.Writer
	hook     func(point string) // hears of the points that a run passes; nil in the program itself
}

// commands is the command line.
type commands struct {
	Check     checkCommand     `cmd:"" help:"Read a sweep file and say what a run of it would do."`
	Run       runCommand       `cmd:"" help:"Solve a whole sweep on this machine."`
	Status    statusCommand    `cmd:"" help:"Say what of a run is done, in hand and failed."`
	Collate   collateCommand   `cmd:"" help:"Join the parts of a run into its tables and surfaces."`
	Table     tableCommand     `cmd:"" help:"Write rows of a run's tables to standard output."`
	At        atCommand        `cmd:"" help:"Evaluate a run's surfaces at any point of its box."`
	Fields    fieldsCommand    `cmd:"" help:"Draw the fields of one mode, or write them as a table."`
	Report    reportCommand    `cmd:"" help:"Write a run's page, report.html."`
	Materials materialsCommand `cmd:"" help:"List the built-in materials with their source and range."`
	Schema    schemaCommand    `cmd:"" help:"Print the JSON Schema of the sweep file, for editors."`
}

const description = `Solve the guided modes of a wave guide over a box of parameters.

  betaloom check film.yaml               what would a run do, and how long
  betaloom run film.yaml                 solve it; again: only what is missing
  betaloom at runs/film height=0.83um wavelength=1.5481um
  betaloom table runs/film --where 'family == "TE0"' --columns wavelength_m,neff

Each command has its own --help with examples.`

// leave is how the flag parser says that there is nothing more to do.
type leave int

// run parses the arguments and runs the command they name.
func run(con *console, args []string) (status exit) {
	defer func() {
		switch v := recover().(type) {
		case nil:
		case leave:
			status = exit(v)
		default:
			panic(v)
		}
	}()
	var c commands
	parser, err := kong.New(&c,
		kong.Name("betaloom"),
		kong.Description(description),
		kong.Writers(con.out, con.err),
		kong.Exit(func(code int) { panic(leave(code)) }),
		kong.ConfigureHelp(kong.HelpOptions{Compact: true, NoExpandSubcommands: true}),
	)
	if err != nil {
		return conclusion(con.err, err)
	}
	parsed, err := parser.Parse(args)
	if err != nil {
		return conclusion(con.err, &usageError{err})
	}
	out := &checked{w: con.out}
	con.out = out
	return conclusion(con.err, errors.Join(parsed.Run(con), out.err))
}

// checked keeps the first error of writing results, so that one which were
// lost never passes for one that was given.
type checked struct {
	w   io.Writer
	err error
}

func (c *checked) Write(p []byte) (int, error) {
	n, err := c.w.Write(p)
	if err != nil && c.err == nil {
		c.err = fmt.Errorf("results: %w", err)
	}
	return n, err
}

package main

import (
	"errors"
	"fmt"
	"io"

	"betaloom/scheduler"
	"betaloom/scheduler/collate"
	"betaloom/schema/store"
	"betaloom/schema/sweep"
	"betaloom/solvers"
)

// exit is the status that the program ends with.
type exit int

// The exit statuses.
const (
	exitDone        exit = 0
	exitFailed      exit = 1
	exitInput       exit = 2
	exitUnsolved    exit = 3
	exitInterrupted exit = 4
)

// usageError is a fault of the command line.
type usageError struct{ error }

func (e *usageError) Unwrap() error { return e.error }

// usage makes a usageError.
func usage(format string, args ...any) error {
	return &usageError{fmt.Errorf(format, args...)}
}

// endError says with which status a command that worked ends all the same.
type endError struct {
	status exit
	text   string
}

func (e *endError) Error() string { return e.text }

// conclusion writes the error, if any, and gives the status that it means.
func conclusion(w io.Writer, err error) exit {
	if err == nil {
		return exitDone
	}
	var (
		end         *endError
		wrong       *usageError
		diagnostics sweep.Diagnostics
		input       *solvers.InputError
		scope       *solvers.ScopeError
		folder      *scheduler.FolderError
		missing     *collate.MissingError
		corrupt     *collate.CorruptError
	)
	switch {
	case errors.As(err, &end):
		fmt.Fprintln(w, end.text)
		return end.status
	case errors.As(err, &wrong):
		fmt.Fprintf(w, "betaloom: %v\n'betaloom --help' and 'betaloom COMMAND --help' show how it is used.\n", err)
		return exitInput
	case errors.As(err, &diagnostics):
		for _, d := range diagnostics {
			fmt.Fprintln(w, d.String())
		}
		return exitInput
	case errors.As(err, &missing):
		fmt.Fprintf(w, "betaloom: %v; run the sweep again, or collate what is there with --partial\n", err)
		return exitUnsolved
	case errors.As(err, &corrupt):
		fmt.Fprintf(w, "betaloom: %v; run the sweep again: it solves them anew\n", err)
		return exitUnsolved
	case errors.As(err, &input), errors.As(err, &scope), errors.As(err, &folder), errors.Is(err, store.ErrLocked):
		fmt.Fprintf(w, "betaloom: %v\n", err)
		return exitInput
	}
	fmt.Fprintf(w, "betaloom: %v\n", err)
	return exitFailed
}

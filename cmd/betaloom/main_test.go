package main

import (
	"context"
	"errors"
	"fmt"
	"os"
	"os/exec"
	"os/signal"
	"path/filepath"
	"strconv"
	"strings"
	"sync/atomic"
	"syscall"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
)

// TestMain lets the test binary stand in for the program: tests run it as
// the command betaloom.
func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"betaloom": program})
}

// program is main, but that it kills itself where the variable CRASH says.
func program() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	status := run(&console{ctx: ctx, out: os.Stdout, err: os.Stderr, hook: crashAt(os.Getenv("CRASH"))}, os.Args[1:])
	os.Exit(int(status))
}

// crashAt gives a hook that ends the process as kill -9 does when it passes
// a point for the n-th time; the place is written point:n.
func crashAt(place string) func(string) {
	if place == "" {
		return nil
	}
	name, count, _ := strings.Cut(place, ":")
	n, err := strconv.ParseInt(count, 10, 64)
	if err != nil {
		fmt.Fprintln(os.Stderr, "CRASH:", err)
		os.Exit(1)
	}
	var passed atomic.Int64
	return func(point string) {
		if point == name && passed.Add(1) == n {
			syscall.Kill(os.Getpid(), syscall.SIGKILL)
			select {} // until the signal arrives
		}
	}
}

// TestScripts runs the commands as a person would.
func TestScripts(t *testing.T) {
	sweeps, err := filepath.Abs(filepath.Join(root, "testdata", "sweeps"))
	if err != nil {
		t.Fatal(err)
	}
	testscript.Run(t, testscript.Params{
		Dir: filepath.Join("testdata", "scripts"),
		Setup: func(e *testscript.Env) error {
			e.Setenv("SWEEPS", sweeps)
			return nil
		},
		Cmds: map[string]func(*testscript.TestScript, bool, []string){"status": checkStatus},
	})
}

// checkStatus is the script command `status N COMMAND ...`: it runs the command
// and holds its exit status to N.
func checkStatus(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: status N COMMAND ...")
	}
	want, err := strconv.Atoi(args[0])
	ts.Check(err)
	got := 0
	if err := ts.Exec(args[1], args[2:]...); err != nil {
		var ended *exec.ExitError
		if !errors.As(err, &ended) {
			ts.Fatalf("%v", err)
		}
		got = ended.ExitCode()
	}
	if got != want {
		ts.Fatalf("%s ended with status %d, expected %d", strings.Join(args[1:], " "), got, want)
	}
}

package main

import (
	"bufio"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
)

// TestReadmeCommands runs each command that README shows, in its order, on the
// main example, so that none of them rots.
func TestReadmeCommands(t *testing.T) {
	sweep, err := filepath.Abs(filepath.Join(root, "testdata", "sweeps", "nitride-film.yaml"))
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	for _, line := range readmeCommands(t) {
		line = strings.NewReplacer("SWEEP", sweep, "DIR", filepath.Join("runs", "nitride-film")).Replace(line)
		c := exec.CommandContext(t.Context(), "sh", "-c", line)
		c.Dir = dir
		if said, err := c.CombinedOutput(); err != nil {
			t.Fatalf("%s: %v\n%s", line, err, said)
		}
	}
}

var remark = regexp.MustCompile(`\s{2,}[a-z].*$`)

// readmeCommands are the indented lines of README that begin with the
// program's name, without the remark behind two or more spaces.
func readmeCommands(t *testing.T) []string {
	t.Helper()
	f, err := os.Open(filepath.Join(root, "README.md"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	var list []string
	for s := bufio.NewScanner(f); s.Scan(); {
		if line, ok := strings.CutPrefix(s.Text(), "    betaloom "); ok {
			list = append(list, "betaloom "+remark.ReplaceAllString(line, ""))
		}
	}
	if len(list) < 5 {
		t.Fatalf("README shows %d commands, expected 5 or more", len(list))
	}
	return list
}

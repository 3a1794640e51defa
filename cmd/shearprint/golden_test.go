package main

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

// goldenEnv, set to "update", accepts what the commands print now. Read the difference before committing it.
const goldenEnv = "SHEARPRINT_GOLDEN"

// golden lists commands whose whole output is kept beside this test. Words are separated by blanks.
var golden = []struct{ name, args string }{
	{"help", "--help"},
	{"help-topology", "topology --help"},
	{"ledger-on-wall", "ledger --nodes 8 --saddles 8 --body on-wall"},
	{"ledger-isolated", "ledger --nodes 8 --saddles 8 --body isolated"},
	{"ledger-section", "ledger --half-nodes 1 --half-saddles 3 --body isolated --section"},
	{"ledger-patch", "ledger --nodes 1 --saddles 2 --body patch --exterior 4 --json"},
	{"inspect-radome", "inspect ../../testdata/runs/radome.ply"},
	{"inspect-hut", "inspect ../../testdata/runs/hut.ply --json"},
	{"topology-radome", "topology ../../testdata/runs/radome.ply"},
	{"topology-pod", "topology ../../testdata/runs/pod.ply"},
	{"probe-pod", "probe ../../testdata/runs/pod.ply --at 0,0,0.3"},
	{"region-radome", "loop ../../testdata/runs/radome.ply --box -1,-1,0.05:1,1,1"},
	{"loop-radome", "loop ../../testdata/runs/radome.ply --through 1.2,-0.4,0;1.2,0.6,0;0.8,0.6,0;0.8,-0.4,0"},
	{"error-missing", "topology missing.ply"},
	{"error-far", "probe ../../testdata/runs/pod.ply --at 9,9,9"},
	{"error-word", "topology ../../testdata/runs/pod.ply --unit furlong"},
}

func goldenPath(name string) string { return filepath.Join("testdata", "golden", name+".txt") }

func TestGolden(t *testing.T) {
	update := os.Getenv(goldenEnv) == "update"
	for _, g := range golden {
		t.Run(g.name, func(t *testing.T) {
			status, out, errOut := shearprint(strings.Fields(g.args)...)
			got := fmt.Sprintf("$ shearprint %s\n%s", g.args, out)
			if errOut != "" {
				got += "-- standard error --\n" + errOut
			}
			got += fmt.Sprintf("-- exit status %d --\n", status)
			if update {
				if err := os.WriteFile(goldenPath(g.name), []byte(got), 0o644); err != nil {
					t.Fatal(err)
				}
				return
			}
			want, err := os.ReadFile(goldenPath(g.name))
			if err != nil {
				t.Fatal(err)
			}
			if d := cmp.Diff(string(want), got); d != "" {
				t.Errorf("the output has changed (%s=update accepts it): -want +got\n%s", goldenEnv, d)
			}
		})
	}
}

// A kept output without its command is a test that no longer runs.
func TestNoOrphanedGolden(t *testing.T) {
	files, err := filepath.Glob(goldenPath("*"))
	if err != nil {
		t.Fatal(err)
	}
	var want []string
	for _, g := range golden {
		want = append(want, goldenPath(g.name))
	}
	slices.Sort(want)
	if d := cmp.Diff(want, files); d != "" {
		t.Errorf("kept outputs: -want +got\n%s", d)
	}
}

package main

import (
	"bytes"
	"context"
	"encoding/json"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"shearprint/field/exact"
	"shearprint/field/format"
	"shearprint/field/r3"
)

// shearprint runs the command line and returns what it gives back.
func shearprint(args ...string) (status int, out, errOut string) {
	var o, e bytes.Buffer
	status = run(context.Background(), args, &o, &e)
	return status, o.String(), e.String()
}

// radome is a real run: a dome on a roof, solved for this project.
const radome = "../../testdata/runs/radome.ply"

// saddleRun writes the plane flow (x, -y) on a disk: one saddle, and the rim demands it.
func saddleRun(t *testing.T) string {
	t.Helper()
	raw := exact.Disk(1, 600)
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i] = r3.Vec{X: p.X - 0.05, Y: -p.Y + 0.02}
	}
	path := filepath.Join(t.TempDir(), "saddle.ply")
	if err := writeFile(path, func(w io.Writer) error { return format.WriteRawPLY(w, raw) }); err != nil {
		t.Fatal(err)
	}
	return path
}

func textFile(t *testing.T, name, text string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), name)
	if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	return path
}

const triangleSTL = `solid s
facet normal 0 0 1
outer loop
vertex 0 0 0
vertex 1 0 0
vertex 0 1 0
endloop
endfacet
endsolid s
`

// The exit statuses are those of the contract: 1 for files, 2 for words.
func TestExitStatus(t *testing.T) {
	saddle := saddleRun(t)
	stl := textFile(t, "body.stl", triangleSTL)
	table := textFile(t, "table.csv", "x,y,z,tau_x,tau_y,tau_z\n0,0,0,1,0,0\n1,0,0,1,0,0\n0,1,0,1,0,0\n0,0,1,1,0,0\n")
	garbage := textFile(t, "garbage.ply", "ply\nformat ascii 1.0\nelement vertex 9999999999\nend_header\n")
	empty := textFile(t, "empty.csv", "")
	out := filepath.Join(t.TempDir(), "out")
	for _, c := range []struct {
		args string // words with | between them
		want int
	}{
		{"inspect|" + saddle, done},
		{"topology|" + saddle, done},
		{"topology|" + saddle + "|--json", done},
		{"topology|" + saddle + "|--csv", done},
		{"topology|" + saddle + "|--min-robustness|1%", done},
		{"probe|" + saddle + "|--at|0.2,0.1,0", done},
		{"loop|" + saddle + "|--parts|0", done},
		{"loop|" + saddle + "|--box|-0.5,-0.5,-1:0.5,0.5,1|--json", done},
		{"loop|" + saddle + "|--parts|9", badUsage},
		{"loop|" + saddle + "|--parts|x", badUsage},
		{"loop|" + saddle + "|--box|0,0,0", badUsage},
		{"loop|" + saddle + "|--box|5,5,5:6,6,6", badUsage},
		{"loop|" + saddle + "|--parts|0|--box|0,0,0:1,1,1", badUsage},
		{"loop|" + saddle, badUsage},
		{"probe|" + saddle + "|--at|-0.2,0.1,0|--json", done},
		{"trace|" + saddle + "|--at|0.2,0.1,0", done},
		{"convert|" + saddle + "|-o|" + out + ".glb", done},
		{"convert|" + saddle + "|-o|" + out + ".ply|--quiet", done},
		{"picture|" + saddle + "|-o|" + out + ".png|--size|64x48", done},
		{"picture|" + saddle + "|-o|" + out + "2.png|--size|64x48|--look|1,1,3:0,0,0|--hide|lines,legend|--theme|print", done},
		{"--help", done},
		{"topology|--help", done},
		{"help|trace", done},

		{"inspect|" + filepath.Join(t.TempDir(), "missing.ply"), badInput},
		{"topology|" + t.TempDir(), badInput},
		{"topology|" + stl, badInput},
		{"topology|" + table, badInput},
		{"topology|" + garbage, badInput},
		{"topology|" + empty, badInput},
		{"topology|" + table + "|--surface|" + filepath.Join(t.TempDir(), "missing.stl"), badInput},

		{"nonsense", badUsage},
		{saddle, badUsage},
		{"topology", badUsage},
		{"topology|" + saddle + "|" + saddle, badUsage},
		{"topology|" + saddle + "|--nonsense", badUsage},
		{"topology|" + saddle + "|--json|--csv", badUsage},
		{"topology|" + saddle + "|--unit|furlong", badUsage},
		{"topology|" + saddle + "|--mirror|w", badUsage},
		{"topology|" + saddle + "|--mirror|y=here", badUsage},
		{"topology|" + saddle + "|--min-robustness|-1", badUsage},
		{"topology|" + saddle + "|--min-robustness|much", badUsage},
		{"probe|" + saddle, badUsage},
		{"probe|" + saddle + "|--at|1,2", badUsage},
		{"probe|" + saddle + "|--at|1,2,NaN", badUsage},
		{"probe|" + saddle + "|--at|50,0,0", badUsage},
		{"trace|" + saddle + "|--at|here", badUsage},
		{"convert|" + saddle, badUsage},
		{"convert|" + saddle + "|-o|" + out + ".obj", badUsage},
		{"convert|" + saddle + "|-o|" + out + ".glb", badUsage}, // it exists by now
		{"convert|" + saddle + "|-o|" + out + ".glb|--force", done},
		{"convert|" + saddle + "|-o|" + filepath.Join(out, "no", "folder.glb"), badUsage},
		{"picture|" + saddle + "|-o|" + out + "4.png|--size|64x48|--samples|2|--view|#eye=0,0,3&target=0,0,0&up=0,1,0", done},
		{"picture|" + saddle + "|-o|" + out + "5.png|--view|#eye=0,0", badUsage},
		{"picture|" + saddle + "|-o|" + out + "5.png|--samples|5", badUsage},
		{"picture|" + saddle, badUsage},
		{"picture|" + saddle + "|-o|" + out + ".jpg", badUsage},
		{"picture|" + saddle + "|-o|" + out + "3.png|--view|behind", badUsage},
		{"picture|" + saddle + "|-o|" + out + "3.png|--size|0x9", badUsage},
		{"picture|" + saddle + "|-o|" + out + "3.png|--size|99999x99999", badUsage},
		{"picture|" + saddle + "|-o|" + out + "3.png|--look|1,2,3", badUsage},
		{"picture|" + saddle + "|-o|" + out + "3.png|--colour|mauve", badUsage},
		{"picture|" + saddle + "|-o|" + out + "3.png|--hide|everything", badUsage},
		{"picture|" + saddle + "|-o|" + out + "3.png|--min-robustness|x", badUsage},
		{"open|" + filepath.Join(t.TempDir(), "missing.ply"), badInput},
		{"open|--port|99999", badUsage},
		{"ledger|--nodes|2|--body|isolated", done},
		{"ledger|--nodes|2|--saddles|1|--body|isolated", unbalanced},
		{"ledger|--nodes|-2|--body|isolated", badUsage},
		{"ledger|--nodes|2", badUsage},
		{"ledger|--nodes|2|--body|cube", badUsage},
		{"help|nonsense", badUsage},
		{"share|" + saddle, badUsage},
	} {
		status, stdout, stderr := shearprint(strings.Split(c.args, "|")...)
		if status != c.want {
			t.Errorf("%s: exit status %d, want %d; it says %s", c.args, status, c.want, stderr)
		}
		if (status == badInput || status == badUsage) && (stdout != "" || !oneMessage(stderr)) {
			t.Errorf("%s: on standard output %q, on standard error %q; want one line of error", c.args, stdout, stderr)
		}
	}
}

// oneMessage tells whether s is one line that begins with the program's name.
func oneMessage(s string) bool {
	return strings.HasPrefix(s, "shearprint: ") && strings.Count(s, "\n") == 1 && strings.HasSuffix(s, "\n")
}

func TestResultsAndMessagesKeepApart(t *testing.T) {
	_, out, errOut := shearprint("topology", radome, "--json")
	if !json.Valid([]byte(out)) {
		t.Errorf("standard output is no JSON: %.200s", out)
	}
	for line := range strings.Lines(errOut) {
		if !strings.HasPrefix(line, "shearprint: "+radome+": ") {
			t.Errorf("standard error: %q names neither program nor file", line)
		}
	}
	if _, _, quiet := shearprint("topology", radome, "--json", "--quiet"); quiet != "" {
		t.Errorf("--quiet: standard error has %q", quiet)
	}
	if _, again, _ := shearprint("topology", radome, "--json"); again != out {
		t.Error("two runs of a command differ")
	}
}

func TestCancelledWorkStops(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	var out, errOut bytes.Buffer
	if status := run(ctx, []string{"topology", radome}, &out, &errOut); status != interrupted || out.Len() > 0 {
		t.Errorf("status %d, standard output %q; want %d and nothing", status, out.String(), interrupted)
	}
}

// Nothing of the user's is lost: a file is written whole or not at all, and never over another.
func TestFilesAreKept(t *testing.T) {
	keep := textFile(t, "keep.glb", "mine")
	shearprint("convert", radome, "-o", keep)
	if b, _ := os.ReadFile(keep); string(b) != "mine" {
		t.Errorf("the file was written over: %.20q", b)
	}
	shearprint("convert", textFile(t, "bad.ply", "ply\n"), "-o", keep, "--force")
	if b, _ := os.ReadFile(keep); string(b) != "mine" {
		t.Errorf("a failed command has spoilt the file: %.20q", b)
	}
	left, err := filepath.Glob(filepath.Join(filepath.Dir(keep), "*"))
	if err != nil || len(left) != 1 {
		t.Errorf("left over: %v (%v)", left, err)
	}
}

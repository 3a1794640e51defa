package format_test

import (
	"testing"

	"shearprint/field/format"
)

func TestSolverTablesMatchTheirSurface(t *testing.T) {
	for _, name := range runs {
		f := load(t, name+"_faces.csv.gz", runFile(t, name+"_faces.csv.gz"),
			format.Options{Surface: runFile(t, name+".ply"), SurfaceName: name + ".ply", Flip: true})
		t.Log(f.Name, len(f.Points), len(f.Tris), f.Euler(), f.Units, f.MaxTau)
		for _, x := range f.Findings {
			t.Log(x)
		}
		f = load(t, name+".ply", runFile(t, name+".ply"), format.Options{})
		for _, x := range f.Findings {
			t.Log(x)
		}
	}
}

package format_test

import (
	"bytes"
	"context"
	"fmt"
	"testing"

	"shearprint/field"
	"shearprint/field/format"
	"shearprint/field/topology"
)

// Every real run, through each format that can hold it, has the same points, types and ledger: from its own PLY to PLY,
// GLB, both gzipped, and a table of its points on its surface.
func TestRoundTripsKeepTopology(t *testing.T) {
	for _, name := range runs {
		data := runFile(t, name+".ply")
		raw, err := format.Prepare(name+".ply", data, format.Options{})
		if err != nil {
			t.Fatal(err)
		}
		want := pointsOf(t, load(t, name+".ply", data, format.Options{}))
		ply := plyOf(t, raw)
		var glb, table bytes.Buffer
		if err := format.WriteRawGLB(&glb, raw); err != nil {
			t.Fatal(err)
		}
		table.WriteString("x\ty\tz\ttau_x\ttau_y\ttau_z\tp\tcp\n")
		for i, p := range raw.Points {
			v := raw.Tau[i]
			fmt.Fprintf(&table, "%.9g\t%.9g\t%.9g\t%.9g\t%.9g\t%.9g\t%.9g\t%.9g\n", p.X, p.Y, p.Z, v.X, v.Y, v.Z, raw.P[i],
				raw.Cp[i])
		}
		for what, c := range map[string]struct {
			data []byte
			opt  format.Options
		}{
			"PLY": {ply, format.Options{}}, "GLB": {glb.Bytes(), format.Options{}}, "gzipped GLB": {packed(t, glb.Bytes()),
				format.Options{}},
			"gzipped PLY": {packed(t, ply), format.Options{}}, "table": {packed(t, table.Bytes()),
				format.Options{Surface: data}},
		} {
			got := pointsOf(t, load(t, what, c.data, c.opt))
			if got != want {
				t.Errorf("%s through %s:\n%s\nwant\n%s", name, what, got, want)
			}
		}
	}
}

// pointsOf lists the points with their types, senses and places to a thousandth of the size, and the ledger. Weaker
// points than a thousandth of the largest tau may come and go with the last digit of single precision.
func pointsOf(t *testing.T, f *field.Field) string {
	t.Helper()
	s, err := topology.Find(context.Background(), f, topology.Options{MinRobustness: 1e-3, Relative: true})
	if err != nil {
		t.Fatal(err)
	}
	var b bytes.Buffer
	step := f.Diagonal() / 1000
	for _, p := range s.Points {
		fmt.Fprintf(&b, "%s %v %v at %.0f %.0f %.0f\n", p.ID, p.Type, p.Sense, p.Position.X/step, p.Position.Y/step,
			p.Position.Z/step)
	}
	fmt.Fprintf(&b, "%+v, %s", s.Ledger.Count, s.Ledger.Rule)
	return b.String()
}

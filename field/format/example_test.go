package format_test

import (
	"bytes"
	"fmt"

	"shearprint/field/format"
)

// A table with units in its header, rows in the order of a grid: what was understood comes as findings.
func ExampleLoad() {
	table := []byte(`x [mm];y [mm];wss[i] (kPa);wss[j] (kPa);p (bar)
0;0;0,001;0;1,01
500;0;0,002;0;1,01
1000;0;0,003;0;1,01
0;500;0,001;0,001;1,02
500;500;0,002;0,001;1,02
1000;500;0,003;0,001;1,02
`)
	f, err := format.Load("plate.csv", table, format.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%s: %d triangles of %g m2, tau up to %.3g %s\n", f.Name, len(f.Tris), f.Parts[0].Area, f.MaxTau,
		f.Units.Tau)
	for _, x := range f.Findings {
		fmt.Printf("%s: %s\n", x.Level, x.Text)
	}
	// Output:
	// plate: 4 triangles of 0.5 m2, tau up to 3.16 Pa
	// note: a table of 6 rows, separated by semicolons and decimal commas
	// note: names were matched: position from x [mm], y [mm]; tau from wss[i] (kPa), wss[j] (kPa); p from p (bar)
	// doubtful: the table has no z; it was taken as zero
	// doubtful: the table has no tau_z; it was taken as zero
	// note: tau was converted from kPa to Pa
	// note: p was converted from bar to Pa
	// note: the rows form a grid of 3 by 2 points; its cells are the faces
	// note: lengths were converted from mm to m
	// note: nothing in the run tells the sign of tau
}

// Converting writes the run as it was before repair, so that nothing is lost at sharp edges.
func ExampleWriteRawGLB() {
	ply := []byte(`ply
format ascii 1.0
comment name step
comment units x y z [m], tau [Pa]
element vertex 4
property float x
property float y
property float z
property float tau_x
property float tau_y
property float tau_z
element face 1
property list uchar int vertex_indices
end_header
0 0 0 1 0 0
1 0 0 1 0 0
1 1 0 1 0 0
0 1 0 1 0 0
4 0 1 2 3
`)
	raw, err := format.Prepare("step.ply", ply, format.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	var glb bytes.Buffer
	if err := format.WriteRawGLB(&glb, raw); err != nil {
		fmt.Println(err)
		return
	}
	again, err := format.Load("any name", glb.Bytes(), format.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(again.Name, len(again.Points), len(again.Tris), again.Units.Length, again.Units.Tau)
	// Output: step 4 2 m Pa
}

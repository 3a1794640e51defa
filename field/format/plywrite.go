package format

import (
	"bufio"
	"fmt"
	"io"
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// WritePLY writes the field as binary little-endian PLY: positions in double precision, values in single precision.
func WritePLY(w io.Writer, f *field.Field) error { return WriteRawPLY(w, rawOf(f)) }

// rawOf returns the field as a raw run with values at the points.
func rawOf(f *field.Field) field.Raw {
	return field.Raw{Name: f.Name, Points: f.Points, Tris: f.Tris, Tau: f.Tau3, P: f.P, Cp: f.Cp, Units: f.Units}
}

// WriteRawPLY writes a run that was not yet built, with its point and face values, and the polygons of its file as
// polygons where their triangles are fans.
func WriteRawPLY(w io.Writer, raw field.Raw) error {
	b := bufio.NewWriter(w)
	faces := polygons(&raw)
	writePLYHeader(b, &raw, faces)
	buf := make([]byte, 0, 64)
	for i, p := range raw.Points {
		buf = buf[:0]
		for _, x := range [3]float64{p.X, p.Y, p.Z} {
			buf = little.AppendUint64(buf, math.Float64bits(x))
		}
		b.Write(appendValues(buf, i, raw.Tau, raw.P, raw.Cp))
	}
	for i, first := range faces {
		next := len(raw.Tris)
		if i+1 < len(faces) {
			next = faces[i+1]
		}
		t := raw.Tris[first]
		buf = append(buf[:0], byte(next-first+2))
		for _, v := range t {
			buf = little.AppendUint32(buf, uint32(v))
		}
		for k := first + 1; k < next; k++ {
			buf = little.AppendUint32(buf, uint32(raw.Tris[k][2]))
		}
		b.Write(appendValues(buf, first, raw.FaceTau, raw.FaceP, raw.FaceCp))
	}
	return b.Flush()
}

// polygons returns the first triangle of each polygon: consecutive triangles with one face number that form a fan.
func polygons(raw *field.Raw) []int {
	const most = 255 // corners of a polygon, counted in a byte
	var first []int
	for t, tri := range raw.Tris {
		if t > 0 && raw.Face != nil && raw.Face[t] == raw.Face[t-1] && t-first[len(first)-1] < most-2 {
			before := raw.Tris[t-1]
			if tri[0] == before[0] && tri[1] == before[2] {
				continue
			}
		}
		first = append(first, t)
	}
	return first
}

func writePLYHeader(b *bufio.Writer, raw *field.Raw, faces []int) {
	fmt.Fprintf(b, "ply\nformat binary_little_endian 1.0\n")
	if raw.Name != "" {
		fmt.Fprintf(b, "comment name %s\n", oneLine(raw.Name))
	}
	u := raw.Units
	for _, c := range []struct{ what, unit string }{{"x y z", u.Length}, {"tau", u.Tau}, {"p", u.P}} {
		if c.unit != "" {
			fmt.Fprintf(b, "comment units %s [%s]\n", c.what, c.unit)
		}
	}
	base := "tau"
	if u.Tau == "1" {
		base = "cf"
	}
	properties := func(tau []r3.Vec, p, cp []float64) {
		if tau != nil {
			fmt.Fprintf(b, "property float %s_x\nproperty float %s_y\nproperty float %s_z\n", base, base, base)
		}
		if p != nil {
			fmt.Fprintf(b, "property float p\n")
		}
		if cp != nil {
			fmt.Fprintf(b, "property float cp\n")
		}
	}
	fmt.Fprintf(b, "element vertex %d\nproperty double x\nproperty double y\nproperty double z\n", len(raw.Points))
	properties(raw.Tau, raw.P, raw.Cp)
	fmt.Fprintf(b, "element face %d\nproperty list uchar int vertex_indices\n", len(faces))
	properties(raw.FaceTau, raw.FaceP, raw.FaceCp)
	fmt.Fprintf(b, "end_header\n")
}

func appendValues(buf []byte, i int, tau []r3.Vec, p, cp []float64) []byte {
	add := func(x float64) { buf = little.AppendUint32(buf, math.Float32bits(float32(x))) }
	if tau != nil {
		add(tau[i].X)
		add(tau[i].Y)
		add(tau[i].Z)
	}
	if p != nil {
		add(p[i])
	}
	if cp != nil {
		add(cp[i])
	}
	return buf
}

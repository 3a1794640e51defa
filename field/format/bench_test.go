package format_test

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"sync"
	"testing"

	"shearprint/field"
	"shearprint/field/format"
	"shearprint/field/r3"
)

// million returns a sphere of about a million triangles: rings of 1000 points, as solvers' tables come, with values of
// seven digits.
var million = sync.OnceValue(func() field.Raw {
	const n, rows = 1000, 501
	raw := field.Raw{Name: "million", Units: field.Units{Length: "m", Tau: "Pa", P: "Pa"}}
	for j := range rows {
		for i := range n {
			a, b := 2*math.Pi*float64(i)/n, math.Pi*(float64(j)+0.5)/rows
			p := r3.Vec{X: math.Sin(b) * math.Cos(a), Y: math.Sin(b) * math.Sin(a), Z: math.Cos(b)}
			raw.Points = append(raw.Points, p)
			raw.Tau = append(raw.Tau, r3.Vec{X: 1}.Reject(p))
			raw.P = append(raw.P, 101.325*p.X)
		}
	}
	for j := range int32(rows - 1) {
		for i := range int32(n) {
			a, b, c, d := j*n+i, j*n+(i+1)%n, (j+1)*n+i, (j+1)*n+(i+1)%n
			raw.Tris = append(raw.Tris, [3]int32{a, c, b}, [3]int32{b, c, d})
		}
	}
	return raw
})

func millionPLY() []byte {
	var b bytes.Buffer
	_ = format.WriteRawPLY(&b, million())
	return b.Bytes()
}

func millionGLB() []byte {
	var b bytes.Buffer
	_ = format.WriteRawGLB(&b, million())
	return b.Bytes()
}

func millionCSV() []byte {
	var b bytes.Buffer
	fmt.Fprintln(&b, "i,j,x,y,z,tau_x,tau_y,tau_z,p")
	raw := million()
	for k, p := range raw.Points {
		t := raw.Tau[k]
		fmt.Fprintf(&b, "%d,%d,%.7g,%.7g,%.7g,%.7g,%.7g,%.7g,%.7g\n", k%1000, k/1000, p.X, p.Y, p.Z, t.X, t.Y, t.Z, raw.P[k])
	}
	return b.Bytes()
}

// BenchmarkLoad reads a million triangles from each kind of file, and beside it the same bytes from disk without
// looking at them.
func BenchmarkLoad(b *testing.B) {
	for _, c := range []struct {
		name string
		data func() []byte
	}{{"ply", millionPLY}, {"glb", millionGLB}, {"csv", millionCSV}} {
		file := filepath.Join(b.TempDir(), "run."+c.name)
		if err := os.WriteFile(file, c.data(), 0o600); err != nil {
			b.Fatal(err)
		}
		open := func(b *testing.B) []byte {
			f, err := os.Open(file)
			if err != nil {
				b.Fatal(err)
			}
			defer f.Close()
			data, err := io.ReadAll(f)
			if err != nil {
				b.Fatal(err)
			}
			b.SetBytes(int64(len(data)))
			return data
		}
		b.Run(c.name+"/plain", func(b *testing.B) {
			for b.Loop() {
				open(b)
			}
		})
		data := open(b)
		b.Run(c.name+"/read", func(b *testing.B) {
			b.SetBytes(int64(len(data)))
			b.ReportAllocs()
			for b.Loop() {
				if _, err := format.Read(file, data, format.Options{}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

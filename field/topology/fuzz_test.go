package topology_test

import (
	"context"
	"encoding/binary"
	"math"
	"testing"

	"shearprint/field"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

// FuzzFind takes any bytes for a surface and a field: whatever Build accepts has a balanced ledger at every floor,
// finite numbers, and lines that begin and end where they say, with any floor.
func FuzzFind(f *testing.F) {
	f.Add([]byte{4, 0, 1, 2, 0, 3, 1, 0, 2, 3, 1, 3, 2, 10, 20, 30, 40, 50, 60, 70, 80, 90, 15, 25, 35, 1, 2, 3, 4, 5, 6})
	f.Add([]byte{9, 0, 1, 3, 1, 4, 3, 1, 2, 4, 2, 5, 4, 3, 4, 6, 4, 7, 6, 4, 5, 7, 5, 8, 7, 0, 0, 0, 0, 0, 0, 0, 0, 0, 255,
		128})
	f.Fuzz(func(t *testing.T, data []byte) {
		raw, ok := decode(data)
		if !ok {
			return
		}
		fld, err := field.Build(raw)
		if err != nil {
			return
		}
		s, err := topology.Find(context.Background(), fld, topology.Options{})
		if err != nil {
			t.Fatal(err)
		}
		checkLedger(t, s)
		for _, share := range []float64{1e-12, 0.3, 1} {
			if l := s.LedgerAt(share * fld.MaxTau); !l.Balanced {
				t.Fatalf("floor %g: %+v", share, l)
			}
			opt := topology.Options{Lines: true, MinRobustness: share, Relative: true}
			s, err := topology.Find(context.Background(), fld, opt)
			if err != nil {
				t.Fatal(err)
			}
			checkLines(t, s)
		}
		for i := 0; i+2 < len(raw.Points); i++ {
			l, err := s.Loop(raw.Points[i : i+3])
			if err == nil && (l.Index != l.Index || l.Turn != l.Turn) {
				t.Fatalf("loop: %+v", l)
			}
		}
	})
}

// decode makes a surface of up to 40 points and 80 triangles. Coordinates and vectors are small whole numbers, so that
// coincidences of all kinds occur, but every ninth vector is any float at all.
func decode(data []byte) (field.Raw, bool) {
	if len(data) < 10 {
		return field.Raw{}, false
	}
	points := int(data[0])%40 + 3
	data = data[1:]
	next := func() byte {
		if len(data) == 0 {
			return 0
		}
		b := data[0]
		data = data[1:]
		return b
	}
	var raw field.Raw
	vertex := func() int32 { return int32(int(next()) % points) }
	for len(raw.Tris) < min(80, len(data)/4) {
		raw.Tris = append(raw.Tris, [3]int32{vertex(), vertex(), vertex()})
	}
	number := func() float64 { return float64(int8(next())) / 8 }
	for i := range points {
		raw.Points = append(raw.Points, r3.Vec{X: number() + float64(i%7), Y: number() + float64(i/7), Z: number() / 4})
		v := r3.Vec{X: number(), Y: number(), Z: number()}
		if i%9 == 8 && len(data) >= 8 {
			if x := math.Float64frombits(binary.LittleEndian.Uint64(data)); math.Abs(x) < 1e99 {
				v.X = x
			}
			data = data[8:]
		}
		raw.Tau = append(raw.Tau, v)
	}
	return raw, true
}

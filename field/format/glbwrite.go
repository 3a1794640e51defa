package format

import (
	"bufio"
	"encoding/json"
	"errors"
	"io"
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// WriteGLB writes the field as one GLB file: positions, _TAU, _P and _CP in single precision, triangles with 32-bit
// indices, name and units in asset.extras, which tell whether _TAU is a stress or a coefficient. Single-precision
// numbers survive a round trip to the last bit.
func WriteGLB(w io.Writer, f *field.Field) error { return WriteRawGLB(w, rawOf(f)) }

// WriteRawGLB writes a run that was not yet built. Face values go to triangles with points of their own, which
// asset.extras tells, so that reading gives face values again. Missing values stay NaN, so that they are holes again
// when read here, though the format wants finite numbers.
func WriteRawGLB(w io.Writer, raw field.Raw) error {
	ownPoints := raw.FaceTau != nil
	if ownPoints {
		raw = separateFaces(raw)
	}
	for _, s := range []struct{ face, point *[]float64 }{{&raw.FaceP, &raw.P}, {&raw.FaceCp, &raw.Cp}} {
		if *s.face != nil && *s.point == nil {
			*s.point = pointMeans(&raw, *s.face)
		}
	}
	g := glbWriter{raw: &raw, center: farCenter(raw.Points)}
	if err := g.describe(ownPoints); err != nil {
		return err
	}
	return g.write(w)
}

// separateFaces gives every triangle three points of its own with its values.
func separateFaces(raw field.Raw) field.Raw {
	n := 3 * len(raw.Tris)
	out := field.Raw{Name: raw.Name, Units: raw.Units, Points: make([]r3.Vec, n), Tris: make([][3]int32, len(raw.Tris)),
		Tau: make([]r3.Vec, n)}
	pick := func(face, point []float64) []float64 {
		if face == nil && point == nil {
			return nil
		}
		x := make([]float64, n)
		for t, tri := range raw.Tris {
			for k := range tri {
				if face != nil {
					x[3*t+k] = face[t]
				} else {
					x[3*t+k] = (point[tri[0]] + point[tri[1]] + point[tri[2]]) / 3
				}
			}
		}
		return x
	}
	for t, tri := range raw.Tris {
		for k, v := range tri {
			i := 3*t + k
			out.Points[i], out.Tau[i], out.Tris[t][k] = raw.Points[v], raw.FaceTau[t], int32(i)
		}
	}
	out.P, out.Cp = pick(raw.FaceP, raw.P), pick(raw.FaceCp, raw.Cp)
	return out
}

// pointMeans takes a face quantity to the points, for runs that have it at faces and tau at points.
func pointMeans(raw *field.Raw, face []float64) []float64 {
	sum, n := make([]float64, len(raw.Points)), make([]float64, len(raw.Points))
	for t, tri := range raw.Tris {
		for _, v := range tri {
			sum[v] += face[t]
			n[v]++
		}
	}
	for v := range sum {
		sum[v] /= n[v] // NaN at an unused point
	}
	return sum
}

// farRatio is the distance from the origin over the size beyond which single precision would show: positions are then
// written from the middle of the box, which the node's translation holds in double precision.
const farRatio = 8

func farCenter(points []r3.Vec) r3.Vec {
	box := boxOf(points)
	if box.Empty() || !(box.Center().Norm() > farRatio*box.Diagonal()) {
		return r3.Vec{}
	}
	return box.Center()
}

// glbWriter holds the layout of one file: the buffer is the arrays one after the other, each a multiple of four bytes.
type glbWriter struct {
	raw    *field.Raw
	center r3.Vec
	text   []byte
	bytes  int
}

type glbView struct {
	Buffer     int `json:"buffer"`
	ByteOffset int `json:"byteOffset"`
	ByteLength int `json:"byteLength"`
	Target     int `json:"target"`
}

type glbAccessor struct {
	BufferView    int       `json:"bufferView"`
	ComponentType int       `json:"componentType"`
	Count         int       `json:"count"`
	Type          string    `json:"type"`
	Min           []float64 `json:"min,omitempty"`
	Max           []float64 `json:"max,omitempty"`
}

type glbNode struct {
	Mesh        int       `json:"mesh"`
	Translation []float64 `json:"translation,omitempty"`
}

// describe makes the JSON chunk.
func (g *glbWriter) describe(ownPoints bool) error {
	raw := g.raw
	if len(raw.Points) == 0 || len(raw.Tris) == 0 {
		return errors.New("format: a GLB file needs points and triangles")
	}
	var views []glbView
	var accessors []glbAccessor
	add := func(count, width, componentType, target int, typ string) int {
		views = append(views, glbView{0, g.bytes, 4 * count * width, target})
		accessors = append(accessors, glbAccessor{BufferView: len(views) - 1, ComponentType: componentType, Count: count,
			Type: typ})
		g.bytes += 4 * count * width
		return len(accessors) - 1
	}
	const float, unsigned, vertices, corners = 5126, 5125, 34962, 34963
	n := len(raw.Points)
	index := map[string]int{"POSITION": add(n, 3, float, vertices, "VEC3")}
	accessors[0].Min, accessors[0].Max = g.bounds()
	if raw.Tau != nil {
		index["_TAU"] = add(n, 3, float, vertices, "VEC3")
	}
	if raw.P != nil {
		index["_P"] = add(n, 1, float, vertices, "SCALAR")
	}
	if raw.Cp != nil {
		index["_CP"] = add(n, 1, float, vertices, "SCALAR")
	}
	if g.bytes/4 > math.MaxInt32/2 || len(raw.Tris) > math.MaxInt32/4 {
		return errors.New("format: the run is too large for a GLB file, whose lengths have 32 bits")
	}
	indices := add(3*len(raw.Tris), 1, unsigned, corners, "SCALAR")
	own := extras{Name: raw.Name, Length: known(raw.Units.Length), Tau: known(raw.Units.Tau), P: known(raw.Units.P)}
	if ownPoints {
		own.Values = "face"
	}
	node := glbNode{}
	if g.center != (r3.Vec{}) {
		node.Translation = []float64{g.center.X, g.center.Y, g.center.Z}
	}
	type list = []map[string]any
	var err error
	g.text, err = json.Marshal(map[string]any{ // keys come out sorted
		"asset":       map[string]any{"version": "2.0", "generator": "Shearprint", "extras": map[string]any{extrasKey: own}},
		"scene":       0,
		"scenes":      list{{"nodes": []int{0}}},
		"nodes":       []glbNode{node},
		"meshes":      list{{"primitives": list{{"attributes": index, "indices": indices, "mode": 4}}}},
		"accessors":   accessors,
		"bufferViews": views,
		"buffers":     list{{"byteLength": g.bytes}},
	})
	for len(g.text)%4 != 0 {
		g.text = append(g.text, ' ')
	}
	return err
}

func known(unit string) *string {
	if unit == "" {
		return nil
	}
	return &unit
}

// single returns the position as it is written.
func (g *glbWriter) single(p r3.Vec) [3]float32 {
	p = p.Sub(g.center)
	return [3]float32{float32(p.X), float32(p.Y), float32(p.Z)}
}

// bounds returns the least and greatest finite coordinates as they are written, which the format wants beside the
// positions.
func (g *glbWriter) bounds() (lo, hi []float64) {
	box := r3.EmptyBox()
	for _, p := range g.raw.Points {
		s := g.single(p)
		if q := (r3.Vec{X: float64(s[0]), Y: float64(s[1]), Z: float64(s[2])}); q.Finite() {
			box = box.Include(q)
		}
	}
	if box.Empty() {
		return nil, nil
	}
	return []float64{box.Min.X, box.Min.Y, box.Min.Z}, []float64{box.Max.X, box.Max.Y, box.Max.Z}
}

func (g *glbWriter) write(w io.Writer) error {
	const header, chunk = 12, 8
	b := bufio.NewWriterSize(w, 1<<16)
	word := func(x uint32) {
		var buf [4]byte
		little.PutUint32(buf[:], x)
		b.Write(buf[:])
	}
	b.WriteString("glTF")
	word(2)
	word(uint32(header + chunk + len(g.text) + chunk + g.bytes))
	word(uint32(len(g.text)))
	b.WriteString("JSON")
	b.Write(g.text)
	word(uint32(g.bytes))
	b.WriteString("BIN\x00")
	for _, p := range g.raw.Points {
		for _, x := range g.single(p) {
			word(math.Float32bits(x))
		}
	}
	for _, v := range g.raw.Tau {
		word(math.Float32bits(float32(v.X)))
		word(math.Float32bits(float32(v.Y)))
		word(math.Float32bits(float32(v.Z)))
	}
	for _, list := range [][]float64{g.raw.P, g.raw.Cp} {
		for _, x := range list {
			word(math.Float32bits(float32(x)))
		}
	}
	for _, t := range g.raw.Tris {
		for _, v := range t {
			word(uint32(v))
		}
	}
	return b.Flush()
}

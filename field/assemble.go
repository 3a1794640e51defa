package field

import (
	"fmt"

	"shearprint/field/r3"
)

// newMesh makes the mesh of a repaired surface: adjacency, parts and rims, normals, charts.
func newMesh(r *repair) *Mesh {
	m := &Mesh{Points: make([]r3.Vec, len(r.point)), Tris: r.tris, Twin: r.twin}
	for v := range r.point {
		m.Points[v] = r.pos(int32(v))
	}
	m.findOut()
	m.findParts()
	m.findRims()
	m.makeCharts()
	m.makeNormals()
	return m
}

func (m *Mesh) findOut() {
	m.Out = make([]int32, len(m.Points))
	for v := range m.Out {
		m.Out[v] = -1
	}
	for h := range int32(len(m.Twin)) {
		if v := m.Tail(h); m.Out[v] < 0 || m.Twin[h] < 0 {
			m.Out[v] = h
		}
	}
}

func (m *Mesh) findParts() {
	m.Part = make([]int32, len(m.Tris))
	for t := range m.Part {
		m.Part[t] = -1
	}
	var stack []int32
	for seed := range m.Tris {
		if m.Part[seed] >= 0 {
			continue
		}
		id := int32(len(m.Parts))
		m.Part[seed] = id
		stack = append(stack[:0], int32(seed))
		part := Part{}
		edges := 0 // counted twice inside, once on rims
		for len(stack) > 0 {
			t := stack[len(stack)-1]
			stack = stack[:len(stack)-1]
			part.Triangles++
			part.Area += m.Area(t)
			for h := 3 * t; h < 3*t+3; h++ {
				g := m.Twin[h]
				if g < 0 {
					edges += 2
					continue
				}
				edges++
				if m.Part[g/3] < 0 {
					m.Part[g/3] = id
					stack = append(stack, g/3)
				}
			}
		}
		part.Euler = part.Triangles - edges/2 // vertices are added below
		m.Parts = append(m.Parts, part)
	}
	for _, h := range m.Out {
		if h >= 0 {
			m.Parts[m.Part[h/3]].Vertices++
			m.Parts[m.Part[h/3]].Euler++
		}
	}
}

func (m *Mesh) findRims() {
	done := map[int32]bool{}
	for h0 := range int32(len(m.Twin)) {
		if m.Twin[h0] >= 0 || done[h0] {
			continue
		}
		rim := Rim{Part: m.Part[h0/3]}
		for h := h0; !done[h]; h = m.Out[m.Tip(h)] {
			done[h] = true
			rim.Edges = append(rim.Edges, h)
		}
		m.Rims = append(m.Rims, rim)
		m.Parts[rim.Part].Rims++
	}
	for i := range m.Parts {
		p := &m.Parts[i]
		p.Genus = (2 - p.Rims - p.Euler) / 2
	}
}

func (m *Mesh) makeNormals() {
	m.Normals = make([]r3.Vec, len(m.Points))
	for t := range int32(len(m.Tris)) {
		n := m.Corner(t).Normal().Unit()
		for k := range int32(3) {
			v := m.Tris[t][k]
			m.Normals[v] = m.Normals[v].AddScaled(m.CornerAngle(3*t+k), n)
		}
	}
	for v, n := range m.Normals {
		m.Normals[v] = n.Unit()
		if m.Normals[v] == (r3.Vec{}) && m.Out[v] >= 0 { // faces that cancel: a blade's edge; one of them must do
			m.Normals[v] = m.Corner(m.Out[v] / 3).Normal().Unit()
		}
	}
}

// turnInsideOut turns closed parts that enclose a negative volume, so that normals point from the wall into the fluid
// around the body.
func (r *repair) turnInsideOut(m *Mesh) {
	volume := make([]float64, len(m.Parts))
	origin := r3.BoxOf(m.Points).Center()
	for t := range int32(len(m.Tris)) {
		c := m.Corner(t)
		for k := range c {
			c[k] = c[k].Sub(origin)
		}
		volume[m.Part[t]] += c[0].Dot(c[1].Cross(c[2]))
	}
	turned := 0
	for i, p := range m.Parts {
		if p.Rims > 0 || volume[i] >= 0 {
			volume[i] = 0
			continue
		}
		turned++
		r.find(Repaired, "turned-part", p.Triangles, fmt.Sprintf("part %d", i),
			"part %d is closed and was wound inside out; it was turned so that its normals point outward", i)
	}
	if turned == 0 {
		return
	}
	for t := range int32(len(m.Tris)) {
		if volume[m.Part[t]] < 0 {
			r.turn(t)
		}
	}
	m.findOut()
	m.makeCharts()
	m.makeNormals()
}

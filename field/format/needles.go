package format

// needle is the height over the rim below which a triangle at the hull comes from rounding: points along a straight rim
// are off it by a step of the grid, or by the last digit of the file.
const needle = 1e-4

// peeled collects the triangles, but takes needles off the hull, one after the other, as long as the rim has one.
func (d *divided) peeled() [][3]int32 {
	tris, face := d.triangles()
	gone := make([]bool, len(tris))
	var rim []int32 // directed edges whose left side may be peeled
	for e, f := range face {
		if f < 0 && d.org[e] >= 0 {
			rim = append(rim, int32(e)^1)
		}
	}
	for len(rim) > 0 {
		e := rim[len(rim)-1]
		rim = rim[:len(rim)-1]
		f := face[e]
		if f < 0 || gone[f] {
			continue
		}
		a, b := d.p[d.org[e]], d.p[d.dest(e)]
		x, y := float64(b.x-a.x), float64(b.y-a.y)
		if float64(d.turn(tris[f][0], tris[f][1], tris[f][2])) > needle*(float64(x*x)+float64(y*y)) {
			continue
		}
		gone[f] = true
		for g := d.lnext(e); g != e; g = d.lnext(g) {
			rim = append(rim, g^1)
		}
	}
	n := 0
	for t, tri := range tris {
		if !gone[t] {
			tris[n] = tri
			n++
		}
	}
	return tris[:n]
}

// triangles collects the faces of three edges that run counter-clockwise; face holds, per directed edge, the one on its
// left, or -1.
func (d *divided) triangles() (tris [][3]int32, face []int32) {
	tris = make([][3]int32, 0, 2*len(d.p))
	face = make([]int32, len(d.org))
	for e := range face {
		face[e] = -1
	}
	for e := range int32(len(d.org)) {
		if d.org[e] < 0 {
			continue
		}
		f := d.lnext(e)
		g := d.lnext(f)
		if e < f && e < g && d.lnext(g) == e && d.turn(d.org[e], d.org[f], d.org[g]) > 0 {
			face[e], face[f], face[g] = int32(len(tris)), int32(len(tris)), int32(len(tris))
			tris = append(tris, [3]int32{d.org[e], d.org[f], d.org[g]})
		}
	}
	return tris, face
}

package exact

import (
	"math"
	"math/rand/v2"

	"shearprint/field"
	"shearprint/field/r3"
)

// Sphere returns a sphere of the given radius around the origin: an icosahedron whose faces are divided evenly.
func Sphere(radius float64, triangles int) field.Raw {
	n := max(1, int(math.Round(math.Sqrt(float64(triangles)/20))))
	g := (1 + math.Sqrt(5)) / 2
	corner := []r3.Vec{
		{X: -1, Y: g}, {X: 1, Y: g}, {X: -1, Y: -g}, {X: 1, Y: -g},
		{Y: -1, Z: g}, {Y: 1, Z: g}, {Y: -1, Z: -g}, {Y: 1, Z: -g},
		{X: g, Z: -1}, {X: g, Z: 1}, {X: -g, Z: -1}, {X: -g, Z: 1},
	}
	faces := [][3]int{
		{0, 11, 5}, {0, 5, 1}, {0, 1, 7}, {0, 7, 10}, {0, 10, 11}, {1, 5, 9}, {5, 11, 4}, {11, 10, 2}, {10, 7, 6}, {7, 1, 8},
		{3, 9, 4}, {3, 4, 2}, {3, 2, 6}, {3, 6, 8}, {3, 8, 9}, {4, 9, 5}, {2, 4, 11}, {6, 2, 10}, {8, 6, 7}, {9, 8, 1},
	}
	w := welder{number: map[[3]int64]int32{}}
	for _, f := range faces {
		a, b, c := corner[f[0]], corner[f[1]], corner[f[2]]
		at := func(i, j int) int32 {
			p := a.Scale(float64(n-i-j)).AddScaled(float64(i), b).AddScaled(float64(j), c)
			return w.add(p.Unit().Scale(radius))
		}
		for i := range n {
			for j := range n - i {
				w.tri(at(i, j), at(i+1, j), at(i, j+1))
				if i+j < n-1 {
					w.tri(at(i+1, j), at(i+1, j+1), at(i, j+1))
				}
			}
		}
	}
	return w.raw
}

// welder collects triangles and gives equal positions (to 1e-9) one number.
type welder struct {
	raw    field.Raw
	number map[[3]int64]int32
}

func (w *welder) add(p r3.Vec) int32 {
	key := [3]int64{int64(math.Round(p.X * 1e9)), int64(math.Round(p.Y * 1e9)), int64(math.Round(p.Z * 1e9))}
	if i, ok := w.number[key]; ok {
		return i
	}
	i := int32(len(w.raw.Points))
	w.number[key] = i
	w.raw.Points = append(w.raw.Points, p)
	return i
}

func (w *welder) tri(a, b, c int32) { w.raw.Tris = append(w.raw.Tris, [3]int32{a, b, c}) }

// Torus returns a torus around the y axis with the radii big (to the tube's centre) and small (of the tube).
func Torus(big, small float64, triangles int) field.Raw {
	n := max(4, int(math.Sqrt(float64(triangles)/2*small/big)))
	m := max(4, triangles/2/n)
	return grid(m, n, true, true, func(u, v float64) r3.Vec {
		sp, cp := math.Sincos(2 * math.Pi * u)
		st, ct := math.Sincos(2 * math.Pi * v)
		r := big + small*ct
		return r3.Vec{X: r * cp, Y: small * st, Z: -r * sp}
	})
}

// Disk returns a flat disk in the plane z = 0, normals along +z: rings around a centre point.
func Disk(radius float64, triangles int) field.Raw {
	rings := max(2, int(math.Round(math.Sqrt(float64(triangles)/6))))
	raw := field.Raw{Points: []r3.Vec{{}}}
	first := func(k int) int32 { return int32(1 + 3*k*(k-1)) } // ring k holds 6k points
	for k := 1; k <= rings; k++ {
		for i := range 6 * k {
			s, c := math.Sincos(2 * math.Pi * float64(i) / float64(6*k))
			r := radius * float64(k) / float64(rings)
			raw.Points = append(raw.Points, r3.Vec{X: r * c, Y: r * s})
		}
	}
	inner := func(k, i int) int32 {
		if k == 0 {
			return 0
		}
		return first(k) + int32(i%(6*k))
	}
	for k := 1; k <= rings; k++ {
		for side := range 6 {
			for i := range k {
				o, n := side*k+i, side*(k-1)+i
				raw.Tris = append(raw.Tris, [3]int32{inner(k-1, n), inner(k, o), inner(k, o+1)})
				if i < k-1 {
					raw.Tris = append(raw.Tris, [3]int32{inner(k-1, n), inner(k, o+1), inner(k-1, n+1)})
				}
			}
		}
	}
	return raw
}

// Annulus returns the flat ring inner < r < outer in the plane z = 0, normals along +z.
func Annulus(inner, outer float64, triangles int) field.Raw {
	n := max(3, int(math.Sqrt(float64(triangles)/2*(outer-inner)/(math.Pi*(outer+inner)))))
	m := max(6, triangles/2/n)
	return grid(m, n, true, false, func(u, v float64) r3.Vec {
		s, c := math.Sincos(2 * math.Pi * u)
		r := outer + (inner-outer)*v
		return r3.Vec{X: r * c, Y: r * s}
	})
}

// Plate returns the flat rectangle of the given half sizes around the origin in the plane z = 0, normals along +z.
func Plate(halfX, halfY float64, triangles int) field.Raw {
	m := max(2, int(math.Sqrt(float64(triangles)/2*halfX/halfY)))
	n := max(2, triangles/2/m)
	return grid(m, n, false, false, func(u, v float64) r3.Vec {
		return r3.Vec{X: halfX * (2*u - 1), Y: halfY * (2*v - 1)}
	})
}

// grid returns the image of the unit square under at, divided into m by n cells of two triangles, closed in u or v.
func grid(m, n int, closedU, closedV bool, at func(u, v float64) r3.Vec) field.Raw {
	var raw field.Raw
	nu, nv := m+1, n+1
	if closedU {
		nu = m
	}
	if closedV {
		nv = n
	}
	for j := range nv {
		for i := range nu {
			raw.Points = append(raw.Points, at(float64(i)/float64(m), float64(j)/float64(n)))
		}
	}
	id := func(i, j int) int32 { return int32((j%nv)*nu + i%nu) }
	for j := range n {
		for i := range m {
			a, b, c, d := id(i, j), id(i+1, j), id(i+1, j+1), id(i, j+1)
			if (i+j)%2 == 0 {
				raw.Tris = append(raw.Tris, [3]int32{a, b, c}, [3]int32{a, c, d})
			} else {
				raw.Tris = append(raw.Tris, [3]int32{a, b, d}, [3]int32{b, c, d})
			}
		}
	}
	return raw
}

// Blocks returns the outer surface of unit cubes at the given cells: sharp edges and corners of every kind, and with a
// suitable choice of cells any genus. Each square is divided into 2 n^2 triangles. Cells must not meet in an edge or a
// corner only.
func Blocks(n int, cells ...[3]int) field.Raw {
	full := map[[3]int]bool{}
	for _, c := range cells {
		full[c] = true
	}
	axes := [3][3]int{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}
	w := welder{number: map[[3]int64]int32{}}
	vec := func(c [3]int) r3.Vec { return r3.Vec{X: float64(c[0]), Y: float64(c[1]), Z: float64(c[2])} }
	for _, c := range cells {
		for k := range 3 {
			for _, side := range [2]int{0, 1} {
				next := c
				next[k] += 2*side - 1
				if full[next] {
					continue
				}
				o := vec(c).AddScaled(float64(side), vec(axes[k]))
				u, v := vec(axes[(k+1)%3]), vec(axes[(k+2)%3])
				if side == 0 {
					u, v = v, u
				}
				at := func(i, j int) int32 {
					return w.add(o.AddScaled(float64(i)/float64(n), u).AddScaled(float64(j)/float64(n), v))
				}
				for i := range n {
					for j := range n {
						w.tri(at(i, j), at(i+1, j), at(i+1, j+1))
						w.tri(at(i, j), at(i+1, j+1), at(i, j+1))
					}
				}
			}
		}
	}
	return w.raw
}

// Ring returns blocks in a ring (genus 1), Eight in two rings that share a side (genus 2).
func Ring(n int) field.Raw { return Blocks(n, pattern("111", "101", "111")...) }

// Eight returns a block with two holes: genus 2.
func Eight(n int) field.Raw { return Blocks(n, pattern("11111", "10101", "11111")...) }

func pattern(rows ...string) [][3]int {
	var cells [][3]int
	for y, row := range rows {
		for x, c := range row {
			if c == '1' {
				cells = append(cells, [3]int{x, y, 0})
			}
		}
	}
	return cells
}

// Shake moves the points along the surface at random by up to the given share of the shortest edge around each, and
// numbers points and triangles anew: an irregular mesh of the same surface. Points on rims stay; project brings a moved
// point back to the surface.
func Shake(raw field.Raw, share float64, seed uint64, project func(r3.Vec) r3.Vec) field.Raw {
	rng := rand.New(rand.NewPCG(seed, 1))
	short := make([]float64, len(raw.Points))
	edges := map[[2]int32]int{}
	for _, t := range raw.Tris {
		for k := range 3 {
			a, b := t[k], t[(k+1)%3]
			e := raw.Points[a].Sub(raw.Points[b]).Norm()
			for _, v := range [2]int32{a, b} {
				if short[v] == 0 || e < short[v] {
					short[v] = e
				}
			}
			edges[[2]int32{min(a, b), max(a, b)}]++
		}
	}
	fixed := make([]bool, len(raw.Points))
	for e, n := range edges {
		if n == 1 {
			fixed[e[0]], fixed[e[1]] = true, true
		}
	}
	to := rng.Perm(len(raw.Points))
	out := field.Raw{Points: make([]r3.Vec, len(raw.Points)), Tris: make([][3]int32, len(raw.Tris))}
	for i, p := range raw.Points {
		d := r3.Vec{X: rng.Float64() - 0.5, Y: rng.Float64() - 0.5, Z: rng.Float64() - 0.5}.Scale(2 * share * short[i])
		if !fixed[i] {
			p = project(p.Add(d))
		}
		out.Points[to[i]] = p
	}
	for i, j := range rng.Perm(len(raw.Tris)) {
		t, r := raw.Tris[j], rng.IntN(3)
		out.Tris[i] = [3]int32{int32(to[t[r]]), int32(to[t[(r+1)%3]]), int32(to[t[(r+2)%3]])}
	}
	return out
}

// OntoSphere returns the projection onto the sphere of the given radius, for Shake.
func OntoSphere(radius float64) func(r3.Vec) r3.Vec {
	return func(p r3.Vec) r3.Vec { return p.Unit().Scale(radius) }
}

// OntoPlane projects onto the plane z = 0, for Shake.
func OntoPlane(p r3.Vec) r3.Vec { return r3.Vec{X: p.X, Y: p.Y} }

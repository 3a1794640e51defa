package topology

import "math"

// Reach is a part of a line on which it has one kind.
type Reach struct {
	First, Last int // numbers in Line.Locs of the places where it begins and ends
	Kind        Kind
	Strength    float64 // natural logarithm of the factor by which neighbours close in, or part, on it
}

// reachGap is how many mean edges of a line on which its neighbours do otherwise do not end a reach: rates of computed data are
// rough on the scale of an edge or two.
const reachGap = 3

// reaches cuts the line into parts on which neighbours close in, or part, by a factor of e or more, and the rest. Near critical
// points, where all lines converge, there is no kind.
func (b *builder) reaches(l *Line) []Reach {
	n := len(l.Locs)
	if n < 2 {
		return nil
	}
	e := b.rates.exponents(l.Locs)
	kinds, at := make([]Kind, n), make([]float64, n) // of the piece that ends at each place; arc length
	for i := 1; i < n; i++ {
		p := b.f.Position(l.Locs[i])
		at[i] = at[i-1] + p.Sub(b.f.Position(l.Locs[i-1])).Norm()
		across, along := b.rates.at(b.rates.across, l.Locs[i]), b.rates.at(b.rates.along, l.Locs[i])
		switch {
		case b.close(p, l.From) || b.close(p, l.To):
		case across > math.Max(0, along):
			kinds[i] = AttachmentLine
		case across < math.Min(0, along):
			kinds[i] = SeparationLine
		}
	}
	var out []Reach
	add := func(first, last int, kind Kind, strength float64) {
		if k := len(out) - 1; k >= 0 && out[k].Kind == kind {
			out[k].Last = last
			out[k].Strength += strength
			return
		}
		out = append(out, Reach{first, last, kind, strength})
	}
	for i := 1; i < n; {
		last := i
		for k := i + 1; kinds[i] != NoKind && k < n && at[k-1]-at[last] <= float64(reachGap*b.edge); k++ {
			if kinds[k] == kinds[i] {
				last = k
			}
		}
		strength := e[last] - e[i-1]
		if kinds[i] == SeparationLine {
			strength = -strength
		}
		if kinds[i] != NoKind && strength >= clearExponent {
			add(i-1, last, kinds[i], strength)
		} else {
			add(i-1, last, NoKind, 0)
		}
		i = last + 1
	}
	for i := range out {
		out[i].Strength = math.Min(out[i].Strength, mostExponent)
	}
	return out
}

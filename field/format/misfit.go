package format

import (
	"shearprint/field/r3"
)

// misfit looks for the usual reason why a table does not fit a surface, and words the remedy.
func misfit(rows, surface []r3.Vec) string {
	a, b := boxOf(rows).Diagonal(), boxOf(surface).Diagonal()
	for _, u := range []struct {
		factor float64
		say    string
	}{
		{1000, "the table looks 1000 times larger, as millimetres against metres: give --unit, or bring both to one unit"},
		{1e-3, "the table looks 1000 times smaller, as metres against millimetres: give --unit, or bring both to one unit"},
		{1 / 0.0254, "the table looks 39.37 times larger, as inches against metres: give --unit, or bring both to one unit"},
		{0.0254, "the table looks 39.37 times smaller, as metres against inches: give --unit, or bring both to one unit"},
	} {
		if r := a / b / u.factor; r > 0.9 && r < 1.1 {
			return u.say
		}
	}
	return "check that both are of one run and in one frame"
}

package format

import (
	"fmt"
	"strings"

	"shearprint/field"
)

// tell says how the columns were understood, where their names are not the contract's own.
func (c *columns) tell(raw *field.Raw) {
	var say []string
	add := func(what string, own []string, cols ...int) {
		var names []string
		same := true
		for k, col := range cols {
			if col >= 0 {
				names = append(names, c.labels[col].name)
				same = same && c.labels[col].name == own[k]
			}
		}
		if len(names) > 0 && !same {
			say = append(say, fmt.Sprintf("%s from %s", what, strings.Join(names, ", ")))
		}
	}
	add("position", []string{"x", "y", "z"}, c.x[:]...)
	if c.coefficient {
		add("skin-friction coefficient", []string{"cf_x", "cf_y", "cf_z"}, c.tau[:]...)
	} else {
		add("tau", []string{"tau_x", "tau_y", "tau_z"}, c.tau[:]...)
	}
	if c.velocity && plainUnit(c.tUnit) != "m/s" { // the unit is told elsewhere
		tellVelocity(raw)
	}
	add("p", []string{"p"}, c.p)
	add("cp", []string{"cp"}, c.cp)
	if len(say) > 0 {
		note(raw, field.Note, "matched-names", len(say), "", "names were matched: %s", strings.Join(say, "; "))
	}
}

func tellVelocity(raw *field.Raw) {
	note(raw, field.Doubtful, "velocity-tau", 0, "",
		"the vector is a velocity, not a stress: its direction near the wall and its critical points hold, its size does not")
}

// velocityHint is a remedy for files without a known tau that have a velocity.
func (c *columns) velocityHint() string {
	if v, base := c.vector(velocityNames, 3); v[0] >= 0 {
		return "name the vector with --tau; the velocity will do if it is that of the cells at the wall: --tau " + base
	}
	return "name the columns of the vector with --tau"
}

// tellUnused says which columns of a table nothing was taken from.
func (c *columns) tellUnused(raw *field.Raw) {
	used := make([]bool, len(c.labels))
	for _, col := range [...]int{c.x[0], c.x[1], c.x[2], c.tau[0], c.tau[1], c.tau[2], c.p, c.cp, c.i, c.j, c.k} {
		if col >= 0 {
			used[col] = true
		}
	}
	var names []string
	for col, l := range c.labels {
		if !used[col] {
			names = append(names, l.name)
		}
	}
	if len(names) > 0 {
		note(raw, field.Note, "unused-columns", len(names), "", "not used: %s", strings.Join(names, ", "))
	}
}

package format

import (
	"slices"
	"strings"
)

// The trade's spellings per quantity, reduced by normal, the preferred first. A user's own names win over all of them.
var (
	positionNames = []string{"", "coordinate", "coordinates", "coord", "coords", "points", "point", "position", "pos",
		"node", "vertex", "location", "centroid", "center", "centre", "facecentre", "facecenter", "facecentroid",
		"cellcentre", "cellcenter", "cellcentroid", "c"}
	tauNames = []string{"tau", "tauw", "tauwall", "walltau", "wallshearstress", "wallshear", "wss", "skinfriction",
		"shearstress", "wallshearstressmean", "meanwallshearstress", "taumean", "tauwmean", "wallshearstressvector", "shear",
		"t"}
	cfNames = []string{"cf", "coefskinfriction", "skinfrictioncoefficient", "skinfrictioncoef", "skinfrictioncoeff",
		"frictioncoefficient", "frictioncoeff", "cfmean", "meancf"}
	velocityNames = []string{"velocity", "u", "vel", "v", "velocityvector", "wallvelocity", "nearwallvelocity"}
	pNames        = []string{"p", "pressure", "staticpressure", "pstatic", "prel", "pgauge", "pressuregauge",
		"gaugepressure", "relativepressure", "wallpressure", "surfacepressure", "pwall", "pmean", "meanpressure",
		"pressuremean", "absolutepressure", "pabs"}
	cpNames = []string{"cp", "coefpressure", "pressurecoefficient", "pressurecoef", "pressurecoeff",
		"coefficientofpressure", "cpmean", "meancp"}
)

// columns says which column holds what; -1 where none does.
type columns struct {
	labels           []label
	x, tau           [3]int
	p, cp            int
	i, j, k          int    // structured grid
	tauName          string // base name of tau, as found
	coefficient      bool   // tau is a skin-friction coefficient
	contractTau      bool   // tau has the contract's own name, which means Pa
	velocity         bool   // tau is a velocity, as the user's name tells
	xUnit, tUnit, pU string // bracketed units, "" where not told

	missing [3]error // names that the user gave for tau, p and cp and that are not among these
}

// maxColumns bounds the names of a file: solvers export dozens.
const maxColumns = 4096

// matchColumns finds the quantities among the names. Whether what is missing matters is for the caller to say.
func matchColumns(src source, names []string, opt Options) columns {
	none := [3]int{-1, -1, -1}
	c := columns{x: none, tau: none, p: -1, cp: -1, i: -1, j: -1, k: -1}
	c.labels = make([]label, len(names))
	for i, n := range names {
		c.labels[i] = parseLabel(n)
	}
	c.x, _ = c.vector(positionNames, 2)
	c.i, c.j = c.scalar([]string{"i", "iindex", "indexi"}), c.scalar([]string{"j", "jindex", "indexj"})
	c.k = c.scalar([]string{"k", "kindex", "indexk"})
	c.missing[0] = c.findTau(src, opt.Tau)
	c.p, c.missing[1] = c.userScalar(src, "--p", opt.P, pNames)
	c.cp, c.missing[2] = c.userScalar(src, "--cp", opt.Cp, cpNames)
	c.xUnit, c.tUnit, c.pU = c.unitOf(c.x[0]), c.unitOf(c.tau[0]), c.unitOf(c.p)
	return c
}

// missingNames returns the error of the first name that the user gave and that none of the places has.
func missingNames(places ...columns) error {
	for k := range places[0].missing {
		var err error
		for _, c := range places {
			if c.missing[k] == nil {
				err = nil
				break
			}
			err = c.missing[k]
		}
		if err != nil {
			return err
		}
	}
	return nil
}

// name returns the column's name in the file.
func (c *columns) name(col int) string { return c.labels[col].name }

func (c *columns) unitOf(col int) string {
	if col < 0 {
		return ""
	}
	return c.labels[col].unit
}

func (c *columns) findTau(src source, name string) error {
	if name == "" {
		c.tau, c.tauName = c.vector(tauNames, 2)
		c.contractTau = c.tauName == "tau"
		if c.tau[0] < 0 {
			c.tau, c.tauName = c.vector(cfNames, 2)
			c.coefficient = c.tau[0] >= 0
		}
		return nil
	}
	c.tauName = name
	if parts := strings.Split(name, ","); len(parts) == 3 {
		for k, part := range parts {
			if c.tau[k] = c.byName(part); c.tau[k] < 0 {
				return c.unknown(src, "--tau", part)
			}
		}
	} else if c.tau, _ = c.vector([]string{normal(name)}, 2); c.tau[0] < 0 {
		return c.unknown(src, "--tau", name)
	}
	for _, s := range c.labels[c.tau[0]].splits {
		c.coefficient = c.coefficient || slices.Contains(cfNames, s.base)
		c.velocity = c.velocity || slices.Contains(velocityNames, s.base)
	}
	return nil
}

func (c *columns) unknown(src source, option, name string) error {
	var have []string
	for _, l := range c.labels {
		have = append(have, l.name)
	}
	return src.fail("", "names there: "+strings.Join(have, " "), "nothing is called %s (%s)", quote(name), option)
}

// vector returns the columns of the first base name that has at least the first `need` components.
func (c *columns) vector(bases []string, need int) (cols [3]int, base string) {
	for _, base := range bases {
		cols, ok := c.components(base, need)
		if ok {
			return cols, base
		}
	}
	return [3]int{-1, -1, -1}, ""
}

func (c *columns) components(base string, need int) (cols [3]int, ok bool) {
	slot := [4]int{-1, -1, -1, -1} // components 0 to 3: numbers may count from one
	for col, l := range c.labels {
		for _, s := range l.splits {
			if s.base == base && slot[s.comp] < 0 && (base != "" || isAxis(l.plain)) {
				slot[s.comp] = col
				break
			}
		}
	}
	from := 0
	if slot[0] < 0 && slot[3] >= 0 {
		from = 1
	}
	copy(cols[:], slot[from:from+3])
	for k := range need {
		if cols[k] < 0 {
			return cols, false
		}
	}
	return cols, true
}

// isAxis tells x, y and z, which alone name a coordinate; i, j and k are numbers of a grid.
func isAxis(name string) bool {
	return len(name) == 1 && strings.ContainsAny(name, "xyzXYZ")
}

// scalar returns the first column that has one of the names.
func (c *columns) scalar(names []string) int {
	for _, n := range names {
		for col, l := range c.labels {
			if normal(l.plain) == n {
				return col
			}
		}
	}
	return -1
}

// byName returns the column that the user means: by its exact name, without unit, or spelled otherwise.
func (c *columns) byName(name string) int {
	name = strings.TrimSpace(name)
	for _, same := range []func(label) bool{
		func(l label) bool { return l.name == name },
		func(l label) bool { return l.bare == name },
		func(l label) bool { return l.plain == name },
		func(l label) bool { return normal(l.bare) == normal(name) || normal(l.name) == normal(name) },
	} {
		for col, l := range c.labels {
			if same(l) {
				return col
			}
		}
	}
	return -1
}

func (c *columns) userScalar(src source, option, name string, names []string) (int, error) {
	if name == "" {
		return c.scalar(names), nil
	}
	col := c.byName(name)
	if col < 0 {
		return -1, c.unknown(src, option, name)
	}
	return col, nil
}

package format

import (
	"bytes"
	"fmt"

	"shearprint/field"
	"shearprint/field/r3"
)

// readTable reads a table of points with values. Its triangles come from the surface, from the order of its rows, or
// from its points; see connect.
func readTable(name string, data []byte, opt Options) (field.Raw, error) {
	t := tableReader{source: source{name}, data: data}
	if err := t.open(opt); err != nil {
		return field.Raw{}, err
	}
	if err := t.rows(); err != nil {
		return field.Raw{}, err
	}
	raw := &t.raw
	if len(raw.Points) == 0 {
		return *raw, t.fail("", "check the export", "the table has no rows")
	}
	note(raw, field.Note, "table", len(raw.Points), "", "a table of %d rows, separated by %s", len(raw.Points),
		t.dialect.String())
	t.columns.tell(raw)
	t.columns.tellUnused(raw)
	c := &t.columns
	for k, axis := range "xyz" {
		if c.x[k] < 0 {
			note(raw, field.Doubtful, "no-"+string(axis), 0, "", "the table has no %c; it was taken as zero", axis)
		}
		if c.tau[0] >= 0 && c.tau[k] < 0 {
			note(raw, field.Doubtful, "no-tau-"+string(axis), 0, "", "the table has no tau_%c; it was taken as zero", axis)
		}
	}
	applyUnits(raw, c.xUnit, c.tUnit, c.pU, c.coefficient, c.contractTau)
	if raw.P != nil && c.pU == "" && normal(c.name(c.p)) == "p" && raw.Units.Tau == "Pa" {
		raw.Units.P = "Pa"
	}
	return t.connect(opt)
}

// tableReader reads the rows of a table into columns.
type tableReader struct {
	source
	dialect
	columns
	data []byte
	raw  field.Raw
	grid [3][]float64 // the numbers i, j and k of a structured grid, per row; nil where there are none

	action []action // per column
	line   int
}

// action says where a column's numbers go; both nil for a column that is not read.
type action struct {
	three *[]r3.Vec // component k of a vector
	k     int
	one   *[]float64
}

func (t *tableReader) open(opt Options) error {
	t.data = bytes.TrimPrefix(t.data, []byte("\xef\xbb\xbf"))
	if bytes.HasPrefix(t.data, []byte{0xff, 0xfe}) || bytes.HasPrefix(t.data, []byte{0xfe, 0xff}) {
		return t.fail("", "save it as UTF-8 or ASCII", "the text is in UTF-16")
	}
	if i := bytes.IndexByte(t.data[:min(len(t.data), 1<<16)], 0); i >= 0 {
		return t.fail(fmt.Sprintf("byte %d", i), "PLY, glTF, STL, OBJ, CGNS and tables can be read",
			"the kind of file is not known: it is no text")
	}
	var err error
	if t.dialect, err = tellDialect(t.source, t.data); err != nil {
		return err
	}
	t.columns = matchColumns(t.source, t.header, opt)
	if err := missingNames(t.columns); err != nil {
		return err
	}
	if t.x[0] < 0 {
		return t.fail(fmt.Sprintf("line %d", t.dialect.line), "name them x y z in the header", "no columns are positions")
	}
	if t.tau[0] < 0 && t.p < 0 && t.cp < 0 {
		return t.fail("header", t.velocityHint(),
			"no column is known as wall shear stress or pressure; there are: %s", quoteList(t.header))
	}
	return nil
}

func quoteList(names []string) string {
	var b bytes.Buffer
	for i, n := range names {
		if i > 0 {
			b.WriteString(", ")
		}
		b.WriteString(n)
	}
	return b.String()
}

// plan allocates the columns and says where each goes. Rows cannot be more than lines, nor than the bytes hold cells.
func (t *tableReader) plan() {
	body := t.data[t.body:]
	lines := bytes.Count(body, []byte{'\n'}) + bytes.Count(body, []byte{'\r'}) - bytes.Count(body, []byte("\r\n")) + 1
	n := min(maxRows, lines, len(body)/len(t.header)+1)
	t.action = make([]action, len(t.header))
	vector := func(cols [3]int, v *[]r3.Vec) {
		if cols[0] < 0 {
			return
		}
		*v = make([]r3.Vec, n)
		for k, c := range cols {
			if c >= 0 {
				t.action[c] = action{three: v, k: k}
			}
		}
	}
	number := func(c int, x *[]float64) {
		if c >= 0 {
			*x = make([]float64, n)
			t.action[c] = action{one: x}
		}
	}
	vector(t.x, &t.raw.Points)
	vector(t.tau, &t.raw.Tau)
	number(t.p, &t.raw.P)
	number(t.cp, &t.raw.Cp)
	if t.i >= 0 && t.j >= 0 {
		number(t.i, &t.grid[0])
		number(t.j, &t.grid[1])
		number(t.k, &t.grid[2])
	}
}

// cut shortens the columns to the rows that there were.
func (t *tableReader) cut(n int) {
	short := func(x *[]float64) {
		if *x != nil {
			*x = (*x)[:n]
		}
	}
	t.raw.Points = t.raw.Points[:n]
	if t.raw.Tau != nil {
		t.raw.Tau = t.raw.Tau[:n]
	}
	short(&t.raw.P)
	short(&t.raw.Cp)
	short(&t.grid[0])
	short(&t.grid[1])
	short(&t.grid[2])
}

package format_test

import (
	"bytes"
	"compress/gzip"
	"fmt"
	"math"
	"strings"
	"testing"

	"shearprint/field"
	"shearprint/field/format"
	"shearprint/field/r3"
)

// gridTable writes a table of the 4 by 3 points of a plate, with the given header and separators.
func gridTable(header, sep, comma, end string) string {
	var b strings.Builder
	b.WriteString(header + end)
	for k := range 12 {
		row := fmt.Sprintf("%g~%g~%g~%g~%g~%g~%g", 0.5*float64(k%4), 0.5*float64(k/4), 0.0, 1.5+float64(k), -2.0, 0.0, 100.25)
		row = strings.ReplaceAll(strings.ReplaceAll(row, ".", comma), "~", sep)
		b.WriteString(row + end)
	}
	return b.String()
}

// Every dialect reads as the same plate.
func TestTableDialects(t *testing.T) {
	plain := "x,y,z,tau_x,tau_y,tau_z,p"
	with := func(sep string) string { return strings.ReplaceAll(plain, ",", sep) }
	for name, text := range map[string]string{
		"commas":                  gridTable(plain, ",", ".", "\n"),
		"commas and blanks":       gridTable(with(" , "), ", ", ".", "\n"),
		"tabs":                    gridTable(with("\t"), "\t", ".", "\n"),
		"tabs, decimal commas":    gridTable(with("\t"), "\t", ",", "\n"),
		"semicolons":              gridTable(with(";"), ";", ".", "\n"),
		"semicolons, commas":      gridTable(with(";"), ";", ",", "\r\n"),
		"blanks":                  gridTable(with("  "), "   ", ".", "\n"),
		"blanks, decimal commas":  gridTable(with(" "), " ", ",", "\n"),
		"old line ends":           gridTable(plain, ",", ".", "\r"),
		"byte order mark":         "\xef\xbb\xbf" + gridTable(plain, ",", ".", "\r\n"),
		"comment header":          gridTable("# run 7\n# x y z tau_x tau_y tau_z p", " ", ".", "\n"),
		"percent header":          gridTable("%x\ty\tz\ttau_x\ttau_y\ttau_z\tp", "\t", ".", "\n"),
		"preamble":                "[Name]\nwall\n\n[Data]\n" + gridTable(plain, ",", ".", "\n"),
		"quoted header":           gridTable(`"x","y","z","tau_x","tau_y","tau_z","p"`, ",", ".", "\n"),
		"quoted cells":            gridTable(plain, `","`, ".", "\n")[len(plain)+1:],
		"quoted decimal commas":   gridTable(plain, `","`, ",", "\n")[len(plain)+1:],
		"separators at line ends": gridTable(plain, ",", ".", ",\n"),
		"blank and comment lines": strings.ReplaceAll(gridTable(plain, ",", ".", "\n"), "2.5,", "2.5,") + "\n# end\n\n",
		"leading blanks":          strings.ReplaceAll(gridTable(with(" "), " ", ".", "\n"), "\n", "\n  "),
		"no end of line":          strings.TrimRight(gridTable(plain, ",", ".", "\n"), "\n"),
		"exponents":               strings.ReplaceAll(gridTable(plain, ",", ".", "\n"), "100.25", "+1.0025E+02"),
		"Fortran exponents":       strings.ReplaceAll(gridTable(plain, ",", ".", "\n"), "100.25", "0.10025D+03"),
		"units in a line":         gridTable(plain+"\n[-],[-],[-],[Pa],[Pa],[Pa],[Pa]", ",", ".", "\n"),
		"an empty row":            gridTable(plain, ",", ".", "\n") + ",,,,,,\n",
	} {
		if strings.HasPrefix(name, "quoted") && name != "quoted header" {
			rows := strings.Split(strings.TrimSpace(text), "\n")
			text = plain + "\n\"" + strings.Join(rows, "\"\n\"") + "\"\n"
		}
		raw, err := format.Read("t.csv", []byte(text), format.Options{})
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if len(raw.Points) != 12 || len(raw.Tris) != 12 || raw.Points[7] != (r3.Vec{X: 1.5, Y: 0.5}) ||
			raw.Tau[7] != (r3.Vec{X: 8.5, Y: -2}) || raw.P[11] != 100.25 {
			t.Errorf("%s: %d points, %d triangles, %v %v %v", name, len(raw.Points), len(raw.Tris), raw.Points, raw.Tau, raw.P)
		}
	}
}

// A first row without values is a row, not a header; it is a hole of the run.
func TestTableBeginsWithAGap(t *testing.T) {
	text := strings.Replace(gridTable("x,y,z,tau_x,tau_y,tau_z,p", ",", ".", "\n"), "1.5,-2,0,100.25",
		"nan,,NaN,-1.#IND", 1)
	f := load(t, "t.csv", []byte(text), format.Options{})
	if len(f.Tris) != 12-2 || !hasFinding(f.Findings, "holes", 2) {
		t.Errorf("%d triangles, %+v", len(f.Tris), f.Findings)
	}
}

// The trade's spellings, with units, are matched; the match is told.
func TestTableSpellings(t *testing.T) {
	for _, c := range []struct {
		header string
		units  field.Units
		scale  float64 // of tau
	}{
		{"x,y,z,tau_x,tau_y,tau_z,p", field.Units{Tau: "Pa", P: "Pa"}, 1},
		{`"X (mm)","Y (mm)","Z (mm)","Wall Shear Stress[i] (Pa)","Wall Shear Stress[j] (Pa)",` +
			`"Wall Shear Stress[k] (Pa)","Pressure (Pa)"`,
			field.Units{Length: "mm", Tau: "Pa", P: "Pa"}, 1},
		{"x [m],y [m],z [m],tau_x [kPa],tau_y [kPa],tau_z [kPa],p [Pa]", field.Units{Length: "m", Tau: "Pa", P: "Pa"}, 1000},
		{"Points:0,Points:1,Points:2,wallShearStress:0,wallShearStress:1,wallShearStress:2,p", field.Units{}, 1},
		{"CoordinateX,CoordinateY,CoordinateZ,SkinFrictionX,SkinFrictionY,SkinFrictionZ,Pressure", field.Units{}, 1},
		{"x-coordinate,y-coordinate,z-coordinate,x-wall-shear,y-wall-shear,z-wall-shear,pressure", field.Units{}, 1},
		{"X,Y,Z,TAUX,TAUY,TAUZ,P", field.Units{Tau: "Pa", P: "Pa"}, 1},
		{"x,y,z,wss_1,wss_2,wss_3,static-pressure", field.Units{}, 1},
		{"Centroid[X] (ft),Centroid[Y] (ft),Centroid[Z] (ft),tau.x (N/m^2),tau.y (N/m^2),tau.z (N/m^2),p (N m^-2)",
			field.Units{Length: "ft", Tau: "Pa", P: "Pa"}, 1},
		{"x,y,z,wallShearStress_x [m^2/s^2],wallShearStress_y [m^2/s^2],wallShearStress_z [m^2/s^2],p [m2/s2]",
			field.Units{Tau: "m2/s2", P: "m2/s2"}, 1},
		{"x [m],y [m],z [m],wss_x [m\xb2/s\xb2],wss_y [m\xb2/s\xb2],wss_z [m\xb2/s\xb2],p [m²/s²]",
			field.Units{Length: "m", Tau: "m2/s2", P: "m2/s2"}, 1},
		{"x,y,z,cf_x,cf_y,cf_z,p", field.Units{Tau: "1"}, 1},
		{"x [m],y [m],z [m],cf_x [1],cf_y [1],cf_z [1],p [Pa]", field.Units{Length: "m", Tau: "1", P: "Pa"}, 1},
		{"x,y,z,CoefSkinFrictionX,CoefSkinFrictionY,CoefSkinFrictionZ,p", field.Units{Tau: "1"}, 1},
		{"x,y,z,Skin Friction Coefficient X,Skin Friction Coefficient Y,Skin Friction Coefficient Z,p (kg/(m s^2))",
			field.Units{Tau: "1", P: "Pa"}, 1},
	} {
		raw, err := format.Read("t.csv", []byte(gridTable(c.header, ",", ".", "\n")), format.Options{})
		if err != nil {
			t.Errorf("%s: %v", c.header, err)
			continue
		}
		if raw.Units != c.units || raw.Tau[7].Sub(r3.Vec{X: 8.5 * c.scale, Y: -2 * c.scale}).Norm() > 1e-9 || raw.P == nil {
			t.Errorf("%s: units %+v, tau %v; want %+v; %+v", c.header, raw.Units, raw.Tau[7], c.units, raw.Findings)
		}
		_, told := finding(raw.Findings, "matched-names")
		own := strings.HasPrefix(c.header, "x,y,z,tau_x,tau_y,tau_z,p") || c.header == "x,y,z,cf_x,cf_y,cf_z,p"
		if told == own {
			t.Errorf("%s: matched-names is told: %v", c.header, told)
		}
	}
}

func finding(list []field.Finding, code string) (field.Finding, bool) {
	for _, f := range list {
		if f.Code == code {
			return f, true
		}
	}
	return field.Finding{}, false
}

// --tau, --p and --cp override; a table without a known name asks for them.
func TestTableNamesByTheUser(t *testing.T) {
	text := gridTable("x,y,z,a [1],b [1],c [1],q", ",", ".", "\n")
	if _, err := format.Read("t.csv", []byte(text), format.Options{}); err == nil || !strings.Contains(err.Error(),
		"--tau") {
		t.Errorf("unknown names: %v", err)
	}
	flow := gridTable("x,y,z,U:0,U:1,U:2,q", ",", ".", "\n")
	if _, err := format.Read("t.csv", []byte(flow), format.Options{}); err == nil || !strings.Contains(err.Error(),
		"--tau u") {
		t.Errorf("a velocity: %v", err)
	}
	raw, err := format.Read("t.csv", []byte(text), format.Options{Tau: "a,b,c", P: "q"})
	if err != nil || raw.Tau[7] != (r3.Vec{X: 8.5, Y: -2}) || raw.P[0] != 100.25 {
		t.Errorf("%v, %v", raw.Tau, err)
	}
	text = gridTable(`x,y,z,"A[i] (Pa)","A[j] (Pa)","A[k] (Pa)",q (Pa)`, ",", ".", "\n")
	for _, name := range []string{"A", "A[i],A[j],A[k]", "A[i] (Pa), A[j] (Pa), A[k] (Pa)", "a(i),a(j),a(k)"} {
		raw, err := format.Read("t.csv", []byte(text), format.Options{Tau: name, P: "q"})
		if err != nil || raw.Tau[7] != (r3.Vec{X: 8.5, Y: -2}) || raw.Units != (field.Units{Tau: "Pa", P: "Pa"}) {
			t.Errorf("--tau %s: %v, %+v", name, err, raw.Units)
		}
	}
	for header, name := range map[string]string{
		"x,y,z,U_x,U_y,U_z,p": "U", "x,y,z,UX,UY,UZ,p": "U",
		"x,y,z,Velocity[i] (m/s),Velocity[j] (m/s),Velocity[k] (m/s),p": "velocity",
		"x,y,z,U:0,U:1,U:2,p": "U", "x,y,z,U1,U2,U3,p": "U",
	} {
		raw, err := format.Read("t.csv", []byte(gridTable(header, ",", ".", "\n")), format.Options{Tau: name})
		if err != nil || raw.Tau[7] != (r3.Vec{X: 8.5, Y: -2}) {
			t.Errorf("%s --tau %s: %v", header, name, err)
		}
		if _, told := finding(raw.Findings, "velocity-tau"); !told {
			t.Errorf("%s: the velocity is not told: %+v", header, raw.Findings)
		}
	}
}

// Columns i and j order a grid whatever the order of the rows; a missing row is a hole.
func TestTableGridByIndices(t *testing.T) {
	var b strings.Builder
	b.WriteString("i;j;x;y;z;tau_x;tau_y;tau_z\n")
	for k := range 49 {
		k = (5 * k) % 49
		i, j := k%7, k/7
		if i == 3 && j == 3 {
			continue
		}
		fmt.Fprintf(&b, "%d;%d;%d;%d;0;1;0;0\n", i+1, j+1, i, j)
	}
	f := load(t, "g.csv", []byte(b.String()), format.Options{})
	if len(f.Points) != 48 || len(f.Tris) != 2*(36-4) || f.Euler() != 0 || len(f.Rims) != 2 {
		t.Errorf("%d points, %d triangles, chi %d, %d rims", len(f.Points), len(f.Tris), f.Euler(), len(f.Rims))
	}
	// A surface of a volume's grid carries one constant number; a column k of something else is none.
	for header, row := range map[string]string{"i,j,k": "%d,7,%d", "i,k,j": "7,%d,%d", "j,i,k": "%d,%d,0.25"} {
		text := header + ",x,y,z,tau_x,tau_y,tau_z\n"
		for k := range 12 {
			text += fmt.Sprintf(row+",%d,%d,0,1,0,0\n", k%4, k/4, k%4, k/4)
		}
		if f := load(t, "g.csv", []byte(text), format.Options{}); len(f.Tris) != 12 || f.Euler() != 1 {
			t.Errorf("%s: %d triangles: %+v", header, len(f.Tris), f.Findings)
		}
	}
	for _, c := range []struct{ rows, want string }{
		{"1;1;0;0;0;1;0;0\n1;1;1;0;0;1;0;0\n2;2;1;1;0;1;0;0\n", "repeat"},
		{"1;1;0;0;0;1;0;0\n1e9;1e9;1;0;0;1;0;0\n", "would make a grid"},
		{"1.5;1;0;0;0;1;0;0\n2;2;1;0;0;1;0;0\n", "row 1 has 1.5"},
		{"NaN;1;0;0;0;1;0;0\n2;2;1;0;0;1;0;0\n", "row 1 has NaN"},
	} {
		_, err := format.Read("g.csv", []byte("i;j;x;y;z;tau_x;tau_y;tau_z\n"+c.rows), format.Options{})
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%q: %v, want %q", c.rows, err, c.want)
		}
	}
}

// The length of a row is found where steps jump back: on graded and on curved grids; scattered points have none.
func TestTableGridByRowLength(t *testing.T) {
	for name, at := range map[string]func(i, j int) r3.Vec{
		"even":   func(i, j int) r3.Vec { return r3.Vec{X: float64(i), Y: float64(j)} },
		"graded": func(i, j int) r3.Vec { return r3.Vec{X: math.Pow(1.2, float64(i)), Y: math.Pow(1.1, float64(j))} },
		"bent": func(i, j int) r3.Vec {
			return r3.Vec{X: math.Cos(0.1 * float64(i)), Y: float64(j), Z: math.Sin(0.1 * float64(i))}
		},
	} {
		var b strings.Builder
		b.WriteString("x y z tau_x tau_y tau_z\n")
		for j := range 9 {
			for i := range 14 {
				p := at(i, j)
				fmt.Fprintf(&b, "%.9g %.9g %.9g 0 1 0\n", p.X, p.Y, p.Z)
			}
		}
		f := load(t, "g.txt", []byte(b.String()), format.Options{})
		if len(f.Tris) != 2*13*8 || f.Euler() != 1 {
			t.Errorf("%s: %d triangles, chi %d: %+v", name, len(f.Tris), f.Euler(), f.Findings)
		}
		if _, ok := finding(f.Findings, "structured"); !ok {
			t.Errorf("%s: the grid was not found: %+v", name, f.Findings)
		}
	}
}

// A table that only lists a body's points is refused with the remedy.
func TestTableWithoutGeometryIsRefused(t *testing.T) {
	var zip bytes.Buffer
	z := gzip.NewWriter(&zip)
	if _, err := z.Write(scatterTable(sphereRaw(400), false, 1)); err != nil {
		t.Fatal(err)
	}
	z.Close()
	_, err := format.Load("points.csv.gz", zip.Bytes(), format.Options{})
	if err == nil || !strings.Contains(err.Error(), "--surface") || !strings.HasPrefix(err.Error(), "points.csv.gz: ") {
		t.Errorf("error %v", err)
	}
}

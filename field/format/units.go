package format

import (
	"strings"
	"unicode/utf8"

	"shearprint/field"
)

// lengths holds the metres per unit of length.
var lengths = map[string]float64{
	"m": 1, "metre": 1, "metres": 1, "meter": 1, "meters": 1,
	"mm": 1e-3, "millimetre": 1e-3, "millimetres": 1e-3, "millimeter": 1e-3, "millimeters": 1e-3,
	"cm": 1e-2, "centimetre": 1e-2, "centimeter": 1e-2,
	"in": 0.0254, "inch": 0.0254, "inches": 0.0254,
	"ft": 0.3048, "foot": 0.3048, "feet": 0.3048,
	"km": 1e3,
}

// stresses holds the pascals per unit of pressure and stress.
var stresses = map[string]float64{
	"pa": 1, "pascal": 1, "n/m2": 1, "nm-2": 1, "n/m/m": 1, "kg/ms2": 1, "kgm-1s-2": 1, "kg/m/s2": 1,
	"hpa": 100, "mbar": 100, "kpa": 1e3, "mpa": 1e6, "bar": 1e5,
	"psi": 6894.757293168361, "lbf/in2": 6894.757293168361, "psf": 47.88025898033584, "lbf/ft2": 47.88025898033584,
}

// kinematic lists spellings of stress over density.
var kinematic = map[string]bool{"m2/s2": true, "m2s-2": true, "(m/s)2": true, "m/s2m": true}

// plainUnit reduces the spellings of a unit: "N/m^2" and "N m**-2" have no hats, blanks and dots; a raised two may come
// as UTF-8 or as Latin-1.
func plainUnit(s string) string {
	if !utf8.ValidString(s) {
		s = strings.ReplaceAll(s, "\xb2", "2")
	}
	s = strings.ToLower(s)
	for _, r := range []struct{ old, new string }{
		{"²", "2"}, {"**", ""}, {"^", ""}, {"·", ""}, {"*", ""}, {".", ""}, {"(", ""}, {")", ""},
		{"gauge", ""}, {"abs", ""}, {"_", ""}, {" ", ""},
	} {
		s = strings.ReplaceAll(s, r.old, r.new)
	}
	return s
}

// lengthUnit returns the metres per unit and the unit's short name.
func lengthUnit(s string) (metres float64, ok bool) {
	metres, ok = lengths[plainUnit(s)]
	return metres, ok
}

// applyUnits takes the bracketed units of lengths, tau and pressure into the run: stresses are brought to pascals and
// told, lengths keep the file's numbers until toMetres.
func applyUnits(raw *field.Raw, length, tau, p string, coefficient, contract bool) {
	if length != "" {
		if _, ok := lengthUnit(length); ok {
			raw.Units.Length = plainUnit(length)
		} else {
			note(raw, field.Doubtful, "unknown-unit", 0, "", "the unit of length %s is not known; give --unit", quote(length))
		}
	}
	raw.Units.Tau = tauUnit(raw, tau, coefficient, contract)
	if raw.P != nil || raw.FaceP != nil {
		raw.Units.P = pressureUnit(raw, p, contract)
	}
}

func tauUnit(raw *field.Raw, unit string, coefficient, contract bool) string {
	plain := plainUnit(unit)
	factor, known := stresses[plain]
	switch {
	case raw.Tau == nil && raw.FaceTau == nil:
		return ""
	case coefficient && (unit == "" || plain == "-" || plain == "1"):
		return "1"
	case unit == "" && contract:
		note(raw, field.Note, "assumed-tau-unit", 0, "", "the file does not tell the unit of tau; Pa is assumed")
		return "Pa"
	case unit == "":
		note(raw, field.Note, "no-tau-unit", 0, "", "the file does not tell the unit of tau; its numbers are kept")
		return ""
	case kinematic[plain]:
		note(raw, field.Doubtful, "kinematic-tau", 0, "",
			"tau is kinematic (%s): stress over density; its numbers are kept, multiply by the density for Pa", unit)
		return "m2/s2"
	case plain == "-" || plain == "1":
		return "1"
	case plain == "m/s":
		tellVelocity(raw)
		return "m/s"
	case !known:
		note(raw, field.Doubtful, "unknown-unit", 0, "", "the unit of tau %s is not known; its numbers are kept", quote(unit))
		return ""
	}
	if factor != 1 {
		for i, v := range raw.Tau {
			raw.Tau[i] = v.Scale(factor)
		}
		for i, v := range raw.FaceTau {
			raw.FaceTau[i] = v.Scale(factor)
		}
		note(raw, field.Note, "converted-units", 0, "", "tau was converted from %s to Pa", unit)
	}
	return "Pa"
}

func pressureUnit(raw *field.Raw, unit string, contract bool) string {
	plain := plainUnit(unit)
	factor, known := stresses[plain]
	switch {
	case unit == "" && contract:
		return "Pa"
	case unit == "":
		return ""
	case kinematic[plain]:
		note(raw, field.Doubtful, "kinematic-p", 0, "", "p is kinematic (%s): pressure over density; its numbers are kept",
			unit)
		return "m2/s2"
	case !known:
		note(raw, field.Doubtful, "unknown-unit", 0, "", "the unit of p %s is not known; its numbers are kept", quote(unit))
		return ""
	}
	if factor != 1 {
		for i := range raw.P {
			raw.P[i] *= factor
		}
		for i := range raw.FaceP {
			raw.FaceP[i] *= factor
		}
		note(raw, field.Note, "converted-units", 0, "", "p was converted from %s to Pa", unit)
	}
	return "Pa"
}

// Sizes beyond which a body is likelier to be given in millimetres: wind-tunnel models and aircraft are between
// centimetres and a hundred metres.
const suspiciousSize = 150

// toMetres converts lengths where their unit is known: by --unit, else by what the file tells.
func toMetres(src source, raw *field.Raw, opt Options) error {
	unit := raw.Units.Length
	if opt.Unit != "" {
		if _, ok := lengthUnit(opt.Unit); !ok {
			return src.fail("", "known are m, mm, cm, in, ft", "there is no unit of length %s (--unit)", quote(opt.Unit))
		}
		if want := plainUnit(opt.Unit); unit != "" && lengths[unit] != lengths[want] {
			note(raw, field.Doubtful, "unit-overruled", 0, "", "the file says lengths are in %s; --unit %s was used", unit, want)
		}
		unit = plainUnit(opt.Unit)
	}
	box := boxOf(raw.Points)
	if unit == "" {
		if d := box.Diagonal(); d > suspiciousSize {
			note(raw, field.Doubtful, "unit-of-length", 0, "", "nobody tells the unit of length and the body is %.4g long: if "+
				"these are millimetres, give --unit mm; nothing was converted", d)
		} else {
			note(raw, field.Note, "unit-of-length", 0, "", "nobody tells the unit of length; the file's numbers are kept")
		}
		return nil
	}
	raw.Units.Length = "m"
	factor := lengths[unit]
	if factor == 1 {
		return nil
	}
	for i, p := range raw.Points {
		raw.Points[i] = p.Scale(factor)
	}
	note(raw, field.Note, "converted-units", 0, "", "lengths were converted from %s to m", unit)
	return nil
}

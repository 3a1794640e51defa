package format

import (
	"errors"
	"path"
	"slices"
	"strings"

	"shearprint/field"
	"shearprint/field/r3"
)

// Read reads the file in its own unit and as its own connectivity has it. The kind is told from the content; a gzipped
// file is unpacked. Values without triangles are matched to opt.Surface. The error is a *SyntaxError.
func Read(name string, data []byte, opt Options) (field.Raw, error) {
	raw, _, err := readRun(name, data, &opt)
	return raw, err
}

// readRun also returns what the file and its surface say about the flow. It clears the unit in opt where it was used
// up: a matched run has the surface's positions.
func readRun(name string, data []byte, opt *Options) (field.Raw, hints, error) {
	data, err := unpack(name, data)
	if err != nil {
		return field.Raw{}, hints{}, err
	}
	raw, err := read(name, data, *opt)
	if err != nil {
		return field.Raw{}, hints{}, err
	}
	h := hintsOf(data)
	switch {
	case opt.Surface == nil:
	case len(raw.Tris) > 0:
		note(&raw, field.Note, "surface-unused", 0, "", "the run has triangles of its own; the surface %s was not used",
			baseName(opt.SurfaceName))
	default:
		if h, err = attach(source{name}, &raw, h, *opt); err != nil {
			return field.Raw{}, hints{}, err
		}
		opt.Unit = ""
	}
	if raw.Name == "" {
		raw.Name = shortName(name)
	}
	return raw, h, nil
}

// Prepare reads the file and does all that comes before repair: mirroring, units, welding, sign. Its result can be
// built or, without loss at sharp edges, written.
func Prepare(name string, data []byte, opt Options) (field.Raw, error) {
	raw, h, err := readRun(name, data, &opt)
	if err != nil {
		return field.Raw{}, err
	}
	src := source{name}
	switch {
	case raw.Tau == nil && raw.FaceTau == nil:
		return field.Raw{}, src.fail("", "name the column or array with --tau, or use the file as --surface",
			"there is no wall shear stress in it")
	case len(raw.Tris) == 0:
		return field.Raw{}, src.fail("", "give the geometry with --surface", "there are no triangles in it")
	}
	for _, step := range []func(source, *field.Raw, Options) error{mirror, toMetres, weld, flip, normalContent} {
		if err := step(src, &raw, opt); err != nil {
			return field.Raw{}, err
		}
	}
	if len(raw.Tris) > maxTriangles {
		return field.Raw{}, src.fail("", "export the part of interest, or a coarser surface",
			"%d triangles are more than the %d that can be held", len(raw.Tris), maxTriangles)
	}
	tellSign(&raw, h.stream)
	return raw, nil
}

// Load reads the file and builds the field: Prepare and field.Build.
func Load(name string, data []byte, opt Options) (*field.Field, error) {
	raw, err := Prepare(name, data, opt)
	if err != nil {
		return nil, err
	}
	f, err := field.Build(raw)
	var se *SyntaxError
	if err != nil && !errors.As(err, &se) {
		err = source{name}.fail("", "check the export", "%v", err)
	}
	return f, err
}

// baseName returns the file's name without folder: findings do not depend on where a file lies.
func baseName(name string) string { return oneLine(path.Base(strings.ReplaceAll(name, `\`, "/"))) }

// shortName returns the file's name without folder and endings.
func shortName(name string) string {
	name = baseName(name)
	if s := strings.TrimSuffix(name, ".gz"); s != "" {
		name = s
	}
	if i := strings.LastIndexByte(name, '.'); i > 0 {
		name = name[:i]
	}
	return name
}

// flip turns tau where the user says that the file holds the stress on the fluid.
func flip(_ source, raw *field.Raw, opt Options) error {
	if !opt.Flip {
		return nil
	}
	for i, v := range raw.Tau {
		raw.Tau[i] = r3.Vec{}.Sub(v) // not Scale(-1): zeros stay positive
	}
	for i, v := range raw.FaceTau {
		raw.FaceTau[i] = r3.Vec{}.Sub(v)
	}
	raw.Findings = slices.DeleteFunc(raw.Findings, func(f field.Finding) bool { return f.Code == "opposite-surface" })
	note(raw, field.Note, "flipped-tau", 0, "", "the sign of tau was turned, as --flip asks")
	return nil
}

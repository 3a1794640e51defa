package render

import (
	"shearprint/field"
)

// Scene says what a picture shows. Only Field is needed; the zero value of everything else is a good default.
type Scene struct {
	Field *field.Field
	Flow  Flow // how the direction of tau is shown

	Quantity Quantity // which scalar colours the surface
	Range    Range    // of the colours
	Bands    int      // number of steps of colour; 0 for continuous colour
	Isobars  int      // about so many lines of equal value, with labels; 0 for none
	// Regions numbers the basin of each triangle, from 0, -1 for none (topology.Skeleton.Basins): what Quantity Basins
	// colours.
	Regions []int32
	Theme   Theme

	// Floor is the |tau| [unit of tau] below which direction is not to be relied on: the texture fades out there.
	Floor float64

	Marks []Mark
	Lines []Line
	// Streamlines are drawn with comet-like ends: Streamlines(...) makes an evenly spaced set for FlowLines; chosen ones
	// may be drawn above a texture too.
	Streamlines [][]field.Loc

	Scale       float64 // pixels per point of type and line: 1 for an ordinary screen, 2 for a dense one; 0 for 1
	Bare        bool    // no legend, scale bar or axes
	Transparent bool    // no background
	Title       string  // above the legend; "" for none
	// Animate asks a still frame for the layers Cos and Sin too (see Layers).
	Animate bool
	// Phase [turns] moves the pattern along the flow if Animate is set.
	Phase float64
}

// Flow is a way to show direction.
type Flow uint8

// The ways to show direction.
const (
	Texture   Flow = iota // line integral convolution
	FlowLines             // Scene.Streamlines only
	NoFlow
)

// Mark is a critical point, or any other place to be marked.
type Mark struct {
	Loc    field.Loc
	Shape  Shape
	Sense  Sense
	Label  string // drawn beside the mark; "" for none
	Half   bool   // on a symmetry rim: only the upper half of the mark is drawn
	Weak   bool   // not resolved, or below the noise floor: drawn smaller and paler
	Chosen bool   // drawn with a ring around it
}

// Shape is the form of a mark and tells the type of a critical point.
type Shape uint8

// The shapes: a disc for a node, a disc with a curl for a focus, a four-pointed star for a saddle, a square for a
// degenerate point, a small ring for a probe.
const (
	NodeMark Shape = iota
	FocusMark
	SaddleMark
	DegenerateMark
	ProbeMark
)

// Sense is what the fluid does at a mark or beside a line. A mark of separation is filled, one of attachment hollow, a
// neutral one half filled.
type Sense uint8

// The senses.
const (
	NeutralSense Sense = iota
	AttachmentSense
	SeparationSense
)

// Form is what a line is part of.
type Form uint8

// The forms. Lines that are neither of attachment nor of separation are drawn without.
const (
	ClosedForm Form = iota // between points and rims
	HornForm               // from or to a focus: with bars across
	OpenForm               // begins or ends at no critical point: with dots
	CycleForm              // a closed orbit: with rings
)

// Line is a separatrix, a separation or attachment line, or any other curve on the surface.
type Line struct {
	Locs   []field.Loc
	Sense  Sense // separation is drawn unbroken, attachment in dashes, neutral thin
	Form   Form
	Chosen bool
	Label  string
}

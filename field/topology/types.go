package topology

import (
	"fmt"

	"shearprint/field"
	"shearprint/field/r3"
)

// Options say what Find computes; the zero value finds all points and no lines.
type Options struct {
	// MinRobustness cancels the points that are weaker, in balanced groups. In the unit of tau, or, with Relative, as a
	// fraction of the largest |tau|.
	MinRobustness float64
	Relative      bool
	// Lines asks for separatrices, cycles, open lines and basins too.
	Lines bool
	// Progress, if not nil, is called now and then with the share of the work that is done, from 0 to 1.
	Progress func(share float64)
}

// Skeleton is what Find returns.
type Skeleton struct {
	Field *field.Field
	// Points are in the order of their ids: nodes, foci, saddles, degenerate points, each by falling robustness.
	Points []Point
	Lines  []Line
	Ledger Ledger
	// Floor is the robustness [unit of tau] below which points were cancelled; 0 if none were.
	Floor float64
	// Cancelled is the number of points below Floor.
	Cancelled int
	// Basins holds, per triangle, the number of its basin in Regions, or -1; nil without lines.
	Basins []int32
	// Regions describes the basins.
	Regions []Basin
	// Findings tells what is doubtful about points and lines.
	Findings []field.Finding

	count *count // how tau turns, for loops and regions
}

// Type is the kind of a critical point.
type Type uint8

// The types of critical points.
const (
	Node       Type = iota // both eigenvalues real and of one sign
	Focus                  // complex eigenvalues
	Saddle                 // real eigenvalues of opposite sign
	Degenerate             // what the linear part cannot decide: centres, zero regions, indices other than +1 and -1
)

// Sense tells whether the fluid near the wall comes down to it or leaves it.
type Sense uint8

// The senses. The divergence of tau is positive at an attachment point and negative at a separation point.
const (
	Neutral Sense = iota
	Attachment
	Separation
)

// Kind is what a line does to the fluid beside it.
type Kind uint8

// The kinds of lines.
const (
	NoKind         Kind = iota // neither converges nor diverges clearly
	AttachmentLine             // near-wall fluid comes down to the wall along it
	SeparationLine             // near-wall fluid leaves the wall along it
)

// LineType is the place of a line in the skeleton.
type LineType uint8

// The types of lines; the package comment names their sources.
const (
	Closed LineType = iota // born at a saddle, ends at a node, a saddle or a rim
	Horn                   // ends in or starts from a focus
	Open                   // no critical point at its start
	Cycle                  // a closed orbit
)

var (
	typeWords     = words{"type", []string{"node", "focus", "saddle", "degenerate"}}
	senseWords    = words{"sense", []string{"neutral", "attachment", "separation"}}
	kindWords     = words{"kind", []string{"neither", "attachment", "separation"}}
	lineTypeWords = words{"line type", []string{"closed", "horn", "open", "cycle"}}
)

// words are the names of an enumeration's values in results.
type words struct {
	what string
	list []string
}

func (w words) name(i uint8) string {
	if int(i) < len(w.list) {
		return w.list[i]
	}
	return fmt.Sprintf("%s %d", w.what, i)
}

func (w words) find(text []byte) (uint8, error) {
	for i, s := range w.list {
		if s == string(text) {
			return uint8(i), nil
		}
	}
	return 0, fmt.Errorf("unknown %s %q", w.what, text)
}

// String returns the word used in results.
func (t Type) String() string { return typeWords.name(uint8(t)) }

// MarshalText returns the word used in results.
func (t Type) MarshalText() ([]byte, error) { return []byte(t.String()), nil }

// UnmarshalText reads the word used in results.
func (t *Type) UnmarshalText(text []byte) error {
	i, err := typeWords.find(text)
	*t = Type(i)
	return err
}

// String returns the word used in results.
func (s Sense) String() string { return senseWords.name(uint8(s)) }

// MarshalText returns the word used in results.
func (s Sense) MarshalText() ([]byte, error) { return []byte(s.String()), nil }

// UnmarshalText reads the word used in results.
func (s *Sense) UnmarshalText(text []byte) error {
	i, err := senseWords.find(text)
	*s = Sense(i)
	return err
}

// String returns the word used in results.
func (k Kind) String() string { return kindWords.name(uint8(k)) }

// MarshalText returns the word used in results.
func (k Kind) MarshalText() ([]byte, error) { return []byte(k.String()), nil }

// UnmarshalText reads the word used in results.
func (k *Kind) UnmarshalText(text []byte) error {
	i, err := kindWords.find(text)
	*k = Kind(i)
	return err
}

// String returns the word used in results.
func (t LineType) String() string { return lineTypeWords.name(uint8(t)) }

// MarshalText returns the word used in results.
func (t LineType) MarshalText() ([]byte, error) { return []byte(t.String()), nil }

// UnmarshalText reads the word used in results.
func (t *LineType) UnmarshalText(text []byte) error {
	i, err := lineTypeWords.find(text)
	*t = LineType(i)
	return err
}

// Point is a critical point: a place, or a patch of triangles, where tau vanishes.
type Point struct {
	ID    string // "N1", "F2", "S3", "D1"
	Type  Type
	Sense Sense
	// Index is +1, -1, or any integer for a degenerate point. For a half point it is the index in the doubled surface,
	// and counts one half.
	Index int
	Half  bool  // on the symmetry rim of a half model
	Part  int32 // of the mesh

	Loc      field.Loc
	Position r3.Vec
	// Normal points into the fluid; Frame holds two unit tangent vectors with Frame[0] x Frame[1] = Normal.
	Normal r3.Vec
	Frame  [2]r3.Vec
	// Jacobian is d(tau)/d(s) in Frame [unit of tau per unit of length]: row i holds the derivatives of component i.
	Jacobian    [2][2]float64
	Eigenvalues [2][2]float64 // real and imaginary part; the larger real part first, then the positive imaginary part
	Trace       float64
	Determinant float64

	// Robustness is the least change of tau that cancels the point [unit of tau]; +Inf if none below the largest |tau|
	// of the part can.
	Robustness float64
	// Confidence is the share of the Jacobian's error distribution that keeps the type, from 0 to 1.
	Confidence float64
	Resolved   bool    // false where the mesh is too coarse, or creased, for place and type to be trusted
	Note       string  // why, if not Resolved; or what is special about the point
	Size       float64 // mean length of the edges around the point: the scale of resolution
	Patch      []int32 // the triangles that share the point's index, ascending; one for an ordinary point

	group int32 // of the points that cancel together; -1 for none
}

// Line is a separatrix, a closed orbit or an open separation or attachment line.
type Line struct {
	ID   string // "L1"
	Kind Kind
	Type LineType
	// From and To are the numbers in Skeleton.Points of the points where the line begins and ends, along the flow; -1 at
	// a rim, for an open end and for cycles.
	From, To int
	Locs     []field.Loc // along the flow
	Length   float64
	Strength float64 // natural logarithm of the factor by which neighbouring streamlines close in on the line, or part from it
	Reason   string  // of type and kind, in words
	Reaches  []Reach // the line in parts of one kind, from its beginning to its end; Kind is what rules on the whole
	// Angle is the angle between separation surface and wall at each of Locs [rad]; nil where pressure is unknown or the
	// line is no separation line.
	Angle []float64
	// Stable tells of a cycle whether its neighbours approach it along the flow.
	Stable bool
}

// Ledger is the balance of the critical points against what the topology of the surface demands.
type Ledger struct {
	Count
	// Rule says in words what the surface demands and why.
	Rule  string
	Parts []PartLedger
}

// PartLedger is the balance of one part.
type PartLedger struct {
	Count
	Part  int32
	Euler int
	Rule  string
	Rims  []RimLedger
}

// Count holds the numbers of a balance.
type Count struct {
	Nodes, Foci, Saddles, Degenerate int // without half points
	HalfNodes, HalfSaddles           int
	HalfDegenerate                   int
	IndexSum                         float64 // half points count one half
	BoundaryTerm                     float64 // (interior - exterior tangencies)/2 over the rims
	Expected                         float64 // Euler characteristic + BoundaryTerm
	Balanced                         bool    // IndexSum = Expected, in every part
}

// RimLedger tells how tau meets one rim.
type RimLedger struct {
	Rim int // number in Mesh.Rims
	// Interior and Exterior count the places where tau is tangent to the rim and the streamline through it stays inside
	// or outside the surface. A convex corner that the flow passes outside of counts as exterior.
	Interior, Exterior int
	// Term is (Interior - Exterior)/2, from the rotation of tau against the rim: exact, whatever the counting of
	// tangencies takes for one.
	Term float64
	// Reversals is the number of half points on the rim.
	Reversals int
	// Streamline tells that tau runs along the whole rim, Symmetric the share of its length along which it does in a
	// plane.
	Streamline bool
	Symmetric  float64
}

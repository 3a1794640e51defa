package field

import "shearprint/field/r3"

// Raw is a surface with its data as a file gives it, before any repair. Package format fills it; Build turns it into a
// Field. A slice of values is nil where the file has none of that kind; where it is not nil, its length is that of
// Points (for point values) or of Tris (for face values).
type Raw struct {
	Name   string   // short name of the run, for titles
	Points []r3.Vec // positions, in Units.Length
	Tris   [][3]int32
	// Face numbers the file's own polygon of each triangle, ascending; nil where every triangle is a face of its own.
	Face []int32

	Tau     []r3.Vec  // wall shear stress (or skin-friction coefficient) per point
	FaceTau []r3.Vec  // the same per triangle
	P       []float64 // pressure per point
	FaceP   []float64
	Cp      []float64 // pressure coefficient per point
	FaceCp  []float64

	Units    Units
	Findings []Finding // what the reader matched, converted or doubts
}

// Units names the units of a run's numbers. An empty string means that nobody told.
type Units struct {
	Length string // "m" once known; the file's own numbers are kept where it is ""
	Tau    string // "Pa", or "1" for a coefficient
	P      string // "Pa"
}

// Level says how much a finding matters.
type Level string

// The levels of a Finding.
const (
	Note     Level = "note"     // how the file was understood
	Repaired Level = "repaired" // something was wrong and has been mended
	Doubtful Level = "doubtful" // results that touch this deserve a second look
)

// Finding is one thing that was noticed about a run: stable code, plain words, how often, and where first.
type Finding struct {
	Level Level  `json:"level"`
	Code  string `json:"code"`  // stable, for scripts: "welded", "flipped-faces", ...
	Text  string `json:"text"`  // one sentence for the reader
	Count int    `json:"count"` // how many elements it concerns; 0 where counting makes no sense
	Where string `json:"where"` // the first place, in words; "" where there is none
}

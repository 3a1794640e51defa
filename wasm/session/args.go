package session

import (
	"encoding/json"
	"fmt"
)

// Open asks to open a run; the file's bytes lie beside the request.
type Open struct {
	Name string `json:"name"` // of the file
	Run  string `json:"run"`  // how links name it
	Link string `json:"link"` // the view to begin with, or ""
}

// Check implements the check of Read.
func (o Open) Check() error {
	if o.Name == "" {
		return fmt.Errorf("the run has no name")
	}
	return nil
}

// Call asks a question of the study.
type Call struct {
	Name string          `json:"name"`
	Args json.RawMessage `json:"args"`
}

// Check implements the check of Read.
func (c Call) Check() error { return nil }

// Cancel ends the work on a request, or, with ID 0, on all.
type Cancel struct {
	ID int64 `json:"id"`
}

// Check implements the check of Read.
func (c Cancel) Check() error { return nil }

// largestSide bounds the sides of a frame [pixels]: an 8K screen.
const largestSide = 8192

// Size tells the size of the stage.
type Size struct {
	Width  float64 `json:"width"` // [CSS pixels]
	Height float64 `json:"height"`
	Ratio  float64 `json:"ratio"` // screen pixels per CSS pixel
	// Left, Top, Right and Bottom are what the instruments cover [CSS pixels].
	Left   float64 `json:"left"`
	Top    float64 `json:"top"`
	Right  float64 `json:"right"`
	Bottom float64 `json:"bottom"`
	// Layers asks for what a picture is mixed from instead of the picture (see Pack).
	Layers bool `json:"layers"`
}

// Check implements the check of Read.
func (s Size) Check() error {
	if !finite(s.Width, s.Height, s.Ratio, s.Left, s.Top, s.Right, s.Bottom) || !(s.Ratio >= 0.25 && s.Ratio <= 8) ||
		s.Width*s.Ratio > largestSide || s.Height*s.Ratio > largestSide {
		return fmt.Errorf("a stage of %g x %g at %g cannot be", s.Width, s.Height, s.Ratio)
	}
	return nil
}

// Pixels returns the size of a full frame.
func (s Size) Pixels() (w, h int) {
	return max(1, int(s.Width*s.Ratio+0.5)), max(1, int(s.Height*s.Ratio+0.5))
}

// Place is a place on the stage [CSS pixels], with a reach around it.
type Place struct {
	X     float64 `json:"x"`
	Y     float64 `json:"y"`
	Reach float64 `json:"reach"`
}

// Check implements the check of Read.
func (p Place) Check() error {
	if !finite(p.X, p.Y, p.Reach) || p.Reach < 0 {
		return fmt.Errorf("no place")
	}
	return nil
}

// Spot is a place on the surface with its normal; Size is the side of a picture of it [pixels].
type Spot struct {
	At     [3]float64 `json:"at"`
	Normal [3]float64 `json:"normal"`
	Size   int        `json:"size"`
}

// Check implements the check of Read.
func (s Spot) Check() error {
	if !finite(s.At[:]...) || !finite(s.Normal[:]...) || s.Size < 0 || s.Size > 1024 {
		return fmt.Errorf("no place on a surface")
	}
	return nil
}

// Look asks for a view by its name.
type Look struct {
	Name string `json:"name"`
}

// Check implements the check of Read.
func (l Look) Check() error { return nil }

// Picture asks for a finished picture as PNG.
type Picture struct {
	Width  int `json:"width"` // [pixels]
	Height int `json:"height"`
}

// Check implements the check of Read.
func (p Picture) Check() error {
	if p.Width < 1 || p.Height < 1 || p.Width > largestSide || p.Height > largestSide {
		return fmt.Errorf("a picture has 1 to %d pixels each way, not %d x %d", largestSide, p.Width, p.Height)
	}
	return nil
}

// Floor asks what a noise floor cancels.
type Floor struct {
	Robustness float64 `json:"robustness"` // [unit of tau]
}

// Check implements the check of Read.
func (f Floor) Check() error {
	if !finite(f.Robustness) || f.Robustness < 0 {
		return fmt.Errorf("a noise floor is a number from 0")
	}
	return nil
}

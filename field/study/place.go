package study

import (
	"fmt"

	"shearprint/field"
	"shearprint/field/r3"
)

// farShare is the share of the run's size by which a given point may miss the surface: points read off a picture or a
// drawing miss it by less, points in another unit or frame by much more.
const farShare = 0.1

// PlaceError says that a given point lies too far from the surface to be meant.
type PlaceError struct {
	At       r3.Vec  // the point
	Nearest  r3.Vec  // the surface point nearest to it
	Distance float64 // between them
	Size     float64 // of the run: the diagonal of its box
	Unit     Word    // of all lengths
}

// Error returns one line.
func (e *PlaceError) Error() string {
	return fmt.Sprintf("point %s: it lies %s off the surface, more than %g %% of the run's size of %s; the nearest surface "+
		"point is %s: check frame and unit", place(vecOf(e.At)), with(e.Distance, e.Unit), 100*farShare,
		with(e.Size, e.Unit), place(vecOf(e.Nearest)))
}

// nearest returns the surface point nearest to p, if it is near enough to be meant.
func (s *Study) nearest(p r3.Vec) (field.Loc, float64, error) {
	loc, distance := s.f.Nearest(p)
	size := s.f.Diagonal()
	if !(distance <= farShare*size) {
		return loc, distance, &PlaceError{p, s.f.Position(loc), distance, size, Word(s.f.Units.Length)}
	}
	return loc, distance, nil
}

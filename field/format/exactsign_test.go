package format_test

import (
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/format"
)

// No exact field with a pressure is told to be of the wrong sign, and turned it is never told to be right.
func TestSignOfExactFields(t *testing.T) {
	told := 0
	for _, c := range exact.Cases() {
		if c.P == nil {
			continue
		}
		data := plyOf(t, c.Raw(3000))
		for _, flip := range []bool{false, true} {
			f := load(t, c.Name, data, format.Options{Flip: flip})
			s, ok := finding(f.Findings, "sign")
			if !ok {
				continue
			}
			told++
			if (s.Level == field.Doubtful) != flip {
				t.Errorf("%s, flipped %v: %s", c.Name, flip, s.Text)
			}
		}
	}
	if told < 6 {
		t.Errorf("the sign was told only %d times", told)
	}
}

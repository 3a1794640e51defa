package main

import (
	"shearprint/field/r3"
	"shearprint/field/study"
)

// point reads the option of that name as a point.
func point(option, s string) (r3.Vec, error) {
	p, err := study.ParsePoint(s)
	return p, inOption(option, err)
}

// inOption names the option in whose words the error is.
func inOption(option string, err error) error {
	if err == nil {
		return nil
	}
	return usagef("%s %w", option, err)
}

package format

import (
	"fmt"

	"shearprint/field"
	"shearprint/field/r3"
)

// note adds a finding to the run.
func note(raw *field.Raw, level field.Level, code string, count int, where, text string, args ...any) {
	raw.Findings = append(raw.Findings, field.Finding{
		Level: level, Code: code, Text: oneLine(fmt.Sprintf(text, args...)), Count: count, Where: oneLine(where),
	})
}

func pointPlace(p r3.Vec) string { return fmt.Sprintf("near (%.6g, %.6g, %.6g)", p.X, p.Y, p.Z) }

// Package demo holds the run that opens where no other is named: the radome, a weather-radar dome on a roof, computed for
// this project (Reynolds number 400, laminar) and written by `shearprint convert`.
package demo

import _ "embed" // for the run

// Name is the run's name in the page's address.
const Name = "radome.glb"

// Radome is the run as GLB.
//
//go:embed radome.glb
var Radome []byte

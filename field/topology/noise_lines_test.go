package topology_test

import (
	"context"
	"math/rand/v2"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

// White noise has a saddle for every few triangles. The lines of the strongest are found, the rest are told to be left
// out, and the ledger still counts every point.
func TestLinesOfNoiseAreBounded(t *testing.T) {
	raw := exact.Sphere(1, 60_000)
	rng := rand.New(rand.NewPCG(3, 9))
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i := range raw.Tau {
		raw.Tau[i] = r3.Vec{X: rng.NormFloat64(), Y: rng.NormFloat64(), Z: rng.NormFloat64()}
	}
	f, err := field.Build(raw)
	if err != nil {
		t.Fatal(err)
	}
	sk, err := topology.Find(context.Background(), f, topology.Options{Lines: true})
	if err != nil {
		t.Fatal(err)
	}
	told := false
	for _, x := range sk.Findings {
		told = told || x.Code == "separatrices-left-out" && x.Count > 0
	}
	if !told || len(sk.Lines) > 9000 || !sk.Ledger.Balanced || sk.Ledger.IndexSum != 2 {
		t.Errorf("told %v, %d lines, ledger %+v", told, len(sk.Lines), sk.Ledger.Count)
	}
}

package format

// Bounds that keep any input, with all that is made from it, within 1 GiB and 20 seconds. Headers are checked against
// the bytes that exist besides; these bounds are for files that are what they say.
const (
	// maxTriangles of a run: reading and building take about 170 bytes for each.
	maxTriangles = 5_500_000
	// maxRows of a table: two triangles for each, or fewer on a surface; position, vector and pressure take 56 bytes.
	maxRows = 8_000_000
	// maxTriangulated points: Delaunay's triangles with their edges take 250 bytes for each.
	maxTriangulated = 3_000_000
	// maxPoints is what 32-bit numbers can count with room for the half-edges around them.
	maxPoints = 1 << 28
)

// Package topology reads the surface pattern of wall shear: its critical points, the lines that separate and attach,
// and the ledger that balances the points against what the topology of the surface demands.
//
// # Counting
//
// Along every edge tau turns by an angle, measured against the parallel transport between the charts of the edge's
// ends. The three angles of a triangle and the triangle's curvature add up to 2 pi times an integer, the triangle's
// index; over a closed part the indices add up to the Euler characteristic, for any field on any mesh. Triangles
// around exact zeros are merged and share one index. On a surface with rims the sum is the Euler characteristic plus
// what tau turns against the rims, which is half of (interior - exterior tangencies).
//
// # Half models
//
// Where a rim lies in a plane and tau runs along it, the rim is taken for the symmetry plane of a half model. A zero on
// it is a half point: it has the index that it would have in the doubled surface, and enters the sum with one half.
//
// # Place and kind
//
// The index says that there is a point. A quadratic least-squares fit around it says where, gives the Jacobian, and the
// errors of both; where a fit is impossible or contradicts the index, the linear triangle has to do, and the point says
// so.
package topology

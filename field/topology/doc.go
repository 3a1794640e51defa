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
//
// # What is weak, and what is doubtful
//
// Robustness says by how much tau would have to change for a point to vanish: points cancel in groups whose indices sum
// to zero, so a noise floor never upsets the ledger. Confidence says how sure the type is, from the scatter of the fit.
// A point that another one is nearer to than three edges, or whose type the triangle contradicts, is not resolved by the
// mesh; several points that a zero of second order (a monkey saddle, a dipole) is taken apart into are put together.
//
// # Lines
//
// Separatrices leave saddles along the eigenvectors of their Jacobians; cycles are closed streamlines that their neighbours
// approach or leave; open lines are where streamlines converge, or part, without a saddle. Whether a line separates or
// attaches is told by its neighbours, on the whole and by reaches. The types closed, horn and open are the three simple
// types of primary separation of Chapman and Yates (Applied Mechanics Reviews 44, 1991; Types I, II and III by our
// memory of the paper: only its abstract was seen), of which the first two are the global and the last the local
// separation of Tobak and Peake (Annual Review of Fluid Mechanics 14, 1982). A cycle that attracts is the one that Surana,
// Grunberg and Haller (Journal of Fluid Mechanics 564, 2006) add.
//
// Below a noise floor lines are traced on a field from which the cancelled points are taken out, within the regions that
// their robustness names.
//
// # Loops and regions
//
// Along a closed way on the surface tau turns by what the points inside and the curvature inside account for; Loop reads
// it, RegionOf does the same for any set of triangles, and Decide for a reading made by eye.
package topology

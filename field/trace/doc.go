// Package trace integrates limiting streamlines: curves on the surface that follow the wall shear stress.
//
// # Method
//
// Inside a triangle tau is linear in the triangle's flat frame (field.Field.CornerTau). The curve follows the unit vector
// along tau, so that its parameter is arc length, by the embedded Runge-Kutta pair of Bogacki and Shampine, order 3(2)
// (Applied Mathematics Letters 2(4), 1989, from memory), with steps chosen so that the estimated error of each stays below
// a tolerance. Where a step leaves the triangle, the crossing is found on the step's cubic interpolant, and the curve goes
// on in the neighbour at the same point of the common edge. Where both neighbours flow into their common edge, as along a
// crease that collects the flow, the curve slides along the edge.
//
// Every curve ends for a reason, and the reason is part of the answer. The number of steps is bounded.
package trace

// Package correct puts the points of a shallow-water cloud back where they are:
// it takes columns of apparent points, ray origins, water surface and indices,
// and fills columns of true points with the outcome of each.
//
// # Model
//
// An apparent point lies on the straight prolongation of the ray that saw it; the true
// point lies where the ray went after it bent at the water surface. Near a point
// the surface is a plane, given by its elevation at the point's raw plan position and
// two slopes. Air and water are homogeneous along one ray.
//
//   - Vertical: depth times the ratio of the phase indices, plan position kept. For
//     imagery without camera data, exact only straight down.
//   - Pulse: a laser pulse, straight to its entry, bent there with the phase indices at the
//     local normal, then scaled in range by the group index.
//   - MultiviewSolver: a point that was intersected from images taken through the surface,
//     by cameras in the air or, looking up, in the water.
//
// # Use
//
// Every point starts as Corrected, the zero Outcome. The Mark functions and the kernels
// run in order of precedence, and each looks only at points that are still
// Corrected, so the first test a point fails names its outcome:
//
//	MarkInvalid, MarkNoSurface, MarkDry, MarkNoOrigin, then Vertical or Pulse
//	MarkInvalid, MarkNoSurface, MarkDry or MarkWet, MarkNoCameras, then MultiviewSolver.Solve
//
// The kernels rely on the first three. A point they should have taken is never
// corrected: it comes out Unsolved.
//
// # Axes, units, shapes
//
// Metres, radians, z up, right-handed. All columns of a call have the length of
// out, one value per point, those of rays one value per ray; other lengths are a
// caller's bug and panic. dst.XYZ may be the raw columns themselves; no other columns
// may overlap. What was not computed is NaN. Nothing is allocated, but for a
// MultiviewSolver's room for the rays of one point. The package keeps no state: calls on
// separate columns may run at once.
//
// # Range
//
// Any depth, any finite slope, any incidence up to the caller's limit. Coordinates may be
// millions of metres: all geometry is relative to the point. Results
// beyond the largest float64 give Unsolved.
//
// # Accuracy
//
// Against an independent simulation (optical path made stationary by bisection,
// on level and tilted planes) Pulse returns the true point within 1e-8 m at depths to 30 m, also
// 7 million metres north (TestPulseReturnsTruth). Invert returns it within 1e-6 m
// for all three residuals, to 12 m deep and 45 degrees off nadir
// (TestInvertReturnsTruth). The last bits may differ between
// processor architectures that fuse multiplication and addition and those that do not.
//
// # Sources
//
// Vertical: Tewinkel (1963); Westaway et al. (2001), Earth Surface Processes and
// Landforms; Woodget et al. (2015), Earth Surface Processes and Landforms 40:47-64.
// Pulse: Guenther (1985, 2000); Parrish et al. (2019), Remote Sensing 11:1634, bend with
// the phase index and scale the range under water; Schwarz et al. (2020), IEEE
// Geoscience and Remote Sensing Letters, doi 10.1109/LGRS.2020.3003088, why that scale
// takes the group index. Average: Dietrich (2017), Earth Surface Processes and Landforms
// 42:355-364.
package correct

// Version of the calculation: raised whenever any written number changes.
const Version = 3

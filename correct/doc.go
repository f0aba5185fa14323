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
//     by cameras in the air or, looking up, in the water; or by cameras in the water behind a Port.
//   - Sounding: sound from a head in the water, traced for its travel time through the layers of
//     a sound-speed profile. Its depths count from the level of the plane over the head.
//
// # Flat port
//
// Light goes from the point through water, the panes of glass and the gas of the housing to the
// entrance pupil, bent at each face. Behind a port with the gap d from pupil to glass,
// panes of thickness t and index n, light near the normal, with the small tangent u in the
// gas, is at the distance
//
//	u nGas (d/nGas + sum(t/n) + z/nWater)
//
// from the normal when it is z beyond the outer face. That is a straight line for any z: a pinhole
// with the principal distance enlarged by nWater/nGas, and its centre behind the outer face
// by nWater (d/nGas + sum(t/n)), images all points near the normal right. The entrance pupil is
// in front of that centre by
//
//	d (nWater/nGas - 1) + sum(t (nWater/n - 1)).
//
// Farther out the light is no such line, and a calibration in water takes what is left as radial
// distortion. It can do so for one distance only. A pinhole that absorbs the port at
// Port.CalibrationM is the one of that centre, whose distortion lets every image point
// look exactly to where its light meets the plane at that distance in front of the outer face
// and parallel to it. At other distances z it misses the light by some multiple of z/CalibrationM - 1: by
// 1.9 mm at 2 m and 40 degrees for a gap of 20 mm and 1 m (TestPortWaterCalibration). With a tilted
// port all of this is about its normal, not the camera's axis. The water of the calibration
// is taken to have the index of the point's own.
//
// # Use
//
// Every point starts as Corrected, the zero Outcome. The Mark functions and the kernels
// run in order of precedence, and each looks only at points that are still
// Corrected, so the first test a point fails names its outcome:
//
//	MarkInvalid, MarkNoSurface, MarkDry, MarkNoOrigin, then Vertical or Pulse
//	MarkInvalid, MarkNoSurface, MarkDry or MarkWet, MarkNoCameras, then MultiviewSolver.Solve
//	MarkInvalid, MarkNoCameras, then MultiviewSolver.Solve with a Port
//	MarkInvalid, MarkNoSurface, MarkDry, MarkNoHead, then Sounding
//
// The kernels rely on the marks before MarkNoOrigin and MarkNoCameras. A point they should have taken is never
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
// (TestInvertReturnsTruth), and so behind ports of any kind, tilted too, 0.6 to 4 m away
// (TestPortReturnsTruth). Where raw rays miss the raw point by many degrees, as those of cameras calibrated
// in air may that look from all sides, several points may have the same raw point, and
// points may be Unsolved that have a solution.
// Sounding returns it within 1e-5 m, to 45 m deep and 70 degrees
// off nadir, which is the error of the sampled water in the test (TestSoundingReturnsTruth);
// where what was assumed is true it moves nothing, within 2e-9 m (TestSoundingMovesNothing).
// The last bits may differ between
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
// 42:355-364. Port: Treibitz et al. (2012) and Jordt-Sedlazeck and Koch (2013), that no pinhole holds
// for all distances (from memory); the light's path as Agrawal et al. (2012) have it for
// flat layers, solved by the slope instead of a polynomial.
package correct

// Version of the calculation: raised whenever any written number changes.
const Version = 3

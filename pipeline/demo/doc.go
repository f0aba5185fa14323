// Package demo writes a small made-up survey with known truth, and compares
// what a run made of it with that truth and with doing nothing.
//
// # The survey
//
// A green laser flies over Lantern Cove, a place that does not exist: a cove
// that deepens to some 12 m behind a sand bar, with a rock that stands out of the
// water. Five flight lines of 40 000 pulses give 200 000 points in five CSV tiles.
// Some of them lie on the shore, outside the water polygon, on the rock, in a
// gap of the trajectory, or have no coordinates, so that a run shows how it
// names each. Equal programs write equal bytes.
//
// # The simulation
//
// The bed, the origin of each pulse and the level of the water are given. Light
// takes the path whose optical length is stationary (Fermat), found as a root of
// its derivative, and the cloud has the point straight on behind the entry, as
// far as the pulse's travel time would reach in air. Nothing of it is shared with
// the correction but the indices of package medium; the position between two
// records of the trajectory, whether a point lies in the polygon, and the
// outcome that each point should have are all computed here as well. Agreement is
// therefore a check of the program, but not of the indices: those have
// published values of their own. The water is flat and still, rays are not
// blocked by land, and nothing is noisy but the aim of the pulses, which does
// not matter: their points are exact.
//
// # Accuracy
//
// Tiles hold millimetres, as clouds often do. That rounding, half a millimetre a
// coordinate, is all that a right correction leaves; TestEntryIsOfLeastPath and
// TestApparentPoint hold the simulation itself to 1e-9 m, far below it.
//
// The rooms: scene.go has the bed and the polygon, flight.go the trajectory,
// simulate.go the light, shot.go the pulses, write.go and rows.go the files,
// compare.go and errors.go the comparison.
package demo

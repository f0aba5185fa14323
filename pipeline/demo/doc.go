// Package demo writes three small made-up surveys with known truth, and compares
// what a run made of them with that truth and with doing nothing.
//
// # The surveys
//
// A green laser flies over Lantern Cove, a place that does not exist: a cove
// that deepens to some 12 m behind a sand bar, with a rock that stands out of the
// water. Five flight lines of 40 000 pulses give 200 000 points in five tiles, three
// of them CSV and two Parquet.
// Some of them lie on the shore, outside the water polygon, on the rock, in a
// gap of the trajectory, or have no coordinates, so that a run shows how it
// names each.
//
// Then it flies over Otterlode reach, which does not exist either: a river that falls
// by 0.6 m in a kilometre and rises by 0.3 m during the flight, with a warm side
// channel of its own level and a brackish lower end. Its surface is known from a
// waterline on both banks with 4 mm of noise and 12 % of blunders, and from a gauge
// that is silent for a while. Three lines give some 60 000 points in two tiles.
//
// Tansy Pool, as made up, is a reach of 4 m at its deepest between two gravel bars that lie
// dry. A drone takes 60 images of it, straight down and obliquely from both sides, and
// survey software finds some 32 000 points in three or more of them each; a few are filled
// in from one. The usual remedies have jobs of their own, for comparison. Equal programs
// write equal bytes.
//
// # The simulation
//
// The bed, the origin of each pulse and the level of the water are given. Light
// takes the path whose optical length is stationary (Fermat), found as a root of
// its derivative, and the cloud has the point straight on behind the entry, as
// far as the pulse's travel time would reach in air. Of the images it has the point whose
// projections miss least, by squared distances in the images, the places where the rays
// that enter the water are seen. Nothing of it is shared with
// the correction but the indices of package medium; the position between two
// records of the trajectory, whether a point lies in the polygon, and the
// outcome that each point should have are all computed here as well. Agreement is
// therefore a check of the program, but not of the indices: those have
// published values of their own. The water is plane and still, rays are not
// blocked by land, and nothing is noisy but the waterline, and the aim of pulses and images,
// which does not matter: their points are exact. Pulses that would hit within 2 cm of
// the river's edge, or enter the salt water where its zone begins, give no point.
//
// # Accuracy
//
// Tiles hold millimetres, as clouds often do. That rounding, half a millimetre a
// coordinate, is all that a right correction leaves in the cove; in the river the
// fitted level adds some tenths of a millimetre, and in the pool depths have a third more of
// it than the cloud, as the index wants. TestEntryIsOfLeastPath and TestApparentPoint hold
// the simulation itself to 1e-9 m, far below it; TestFindsByMinimisation that of the images
// to 1e-5 m.
//
// The rooms: scene.go has the cove's bed and polygon, river.go and gauge.go the
// river, pool.go the pool, flight.go the trajectory, poolcameras.go the images, simulate.go
// the light, shot.go and rivershot.go the pulses, poolsight.go and triangulate.go the points
// of the images, write.go, riverwrite.go, poolwrite.go, rows.go and parquet.go the files,
// compare.go and errors.go the comparison.
package demo

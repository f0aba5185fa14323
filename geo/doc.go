// Package geo answers where and when for the points of a cloud: the water
// surface at a plan position, the polygon that holds it, the sensor's place and
// the level of the tide at a time, the temperature and salinity of the water there,
// and what a time or a length of a file means.
//
// # Model
//
// Everything is plane geometry in a projected system: x east, y north, z up,
// right-handed, metres. The package takes slices and bytes, never paths. The
// functions for clouds take one chunk as columns of equal length, fill the
// destination columns given first, and panic when lengths differ. They allocate
// nothing per point, and indices and trajectories may be read from several
// goroutines at once.
//
// # Range and special cases
//
// Polygon coordinates reach 1e12 at most. A point with a NaN or infinite
// coordinate lies in no polygon, a time that is NaN or outside the records has no
// position, and a GPS time before 1980-01-06 has no UTC: nothing is ever replaced
// by the nearest known value. A gauge has no level outside its records or in a gap,
// a separation none outside the cells that have their four nodes; added to a
// surface they leave NaN, no surface. Only stations hold their first and last record,
// for the time that is asked for.
//
// # Accuracy
//
// Planes and trajectories are computed from differences, so with coordinates near
// 7e6 m they hold to the rounding of the result, 1e-9 m (TestPlaneFarFromOrigin,
// TestTrajectoryPrecision). Polygons are tested with the coordinates as they stand;
// the index gives the answer of the plain test over all edges
// (TestFindAgainstPlainTest). UTC holds to the rounding of a time near 1.5e9 s,
// 0.12 microseconds (TestPublishedPairs, TestTimeScaleRoundTrip). Gauges hold to the
// rounding of their levels (TestGaugePrecision, TestGaugeAgainstCloudTimes), a
// separation to 1e-12 m of a bilinear one (TestSeparationBilinear). Stations give the
// water of the plain computation over all stations within 1e-10 (TestStationsPlain),
// and the same to the bit whatever points came before (TestStationsChunk).
//
// # Sources
//
//   - Butler, H. and others, 2016. The GeoJSON Format. RFC 7946, sections 3.1 and 4.
//   - IERS Earth Orientation Centre. Bulletin C, numbers to 2017-01-01: the leap
//     seconds.
//   - Shepard, D., 1968. A two-dimensional interpolation function for irregularly-spaced
//     data. Proceedings of the 23rd ACM National Conference, 517-524: weights by
//     inverse distance.
//   - Shimrat, M., 1962. Algorithm 112: position of point relative to polygon.
//     Communications of the ACM 5(8), 434: the even-odd rule.
//   - NIST Special Publication 811 (2008), appendix B.6: the foot and the US
//     survey foot.
package geo

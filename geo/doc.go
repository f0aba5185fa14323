// Package geo answers where and when for the points of a cloud: the water
// surface at a plan position, the polygon that holds it, the sensor's place and
// the level of the tide at a time, the temperature and salinity of the water there,
// the cameras that saw it, and what a time or a length of a file means.
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
// Three surfaces are fitted to surveyed points: a plane to waterline points (FitPlane),
// a profile along a river (NewProfile), a grid of local fits to surface points that
// may move with time (NewGrid). All hold with single points wrong to one side. Each
// gives a chunk its levels and slopes, so that a ray can take the plane at its entry
// anew, and the 1-sigma of the level.
//
// Cameras are pinholes (see Cameras for their axes and rotations). Which of them saw a
// point is told by the ids of a column (AppendViews) or, without, by what their images
// show or by the angle from the vertical (Visibility).
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
// A surface has no level (NaN) beyond its reach or window. A point that is not finite
// or beyond 1e100 m is seen by no camera.
//
// # Accuracy
//
// Planes and trajectories are computed from differences, so with coordinates near
// 7e6 m they hold to the rounding of the result, 1e-9 m (TestPlaneFarFromOrigin,
// TestTrajectoryPrecision). Polygons are tested with the coordinates as they stand;
// the index gives the answer of the plain test over all edges
// (TestFindAgainstPlainTest). Zones overlap from a tenth of a micrometre near 7e6 m
// (TestOverlapsOfTriangles, TestOverlapsOfCells). UTC holds to the rounding of a time
// near 1.5e9 s, 0.12 microseconds (TestPublishedPairs, TestTimeScaleRoundTrip). Gauges
// hold to the rounding of their levels (TestGaugePrecision, TestGaugeAgainstCloudTimes), a
// separation to 1e-12 m of a bilinear one (TestSeparationBilinear). Stations give the
// water of the plain computation over all stations within 1e-10 (TestStationsPlain),
// and the same to the bit whatever points came before (TestStationsChunk).
//
// The rotation of a camera holds to 1e-14 (TestFromAngles, TestNearestRotation). Who sees
// a point is what the plain equations of the pinhole and of the angle say of each camera,
// but within 1e-5 pixels of a border (TestImagePlainly, TestAnglePlainly), and to the
// bit the same without the index (TestTreeChangesNothing).
//
// Against simulated truth: the plane through 400 waterline points with 4 mm noise and
// 12 % wrong by 0 to 2 m upwards holds to 2 mm (TestFitPlaneWithBlunders); a profile
// through such points along a river holds to 4 mm rms (TestProfileRiver), over weirs,
// stairs and rapids to a few times the error of a pool's mean (TestProfileCourses); a
// grid over swell of 0.25 m and 60 m, from one point a square metre with 2 cm noise and 2 %
// blunders, puts a bed 10 m down to 1.5 mm rms in height and 5 mm in the plan at 20
// degrees off nadir (TestGridSwell). The stated sigmas are those found over many
// simulations (TestFitPlaneErrors, TestProfileSigma, TestGridSigma); where a river's fall
// changes steadily, the straight reaches of a profile are off by up to twice theirs.
//
// # Sources
//
//   - Ayer, M. and others, 1955. An empirical distribution function for sampling with
//     incomplete information. Annals of Mathematical Statistics 26(4), 641-647:
//     pooling adjacent violators.
//   - Beaton, A. E. and Tukey, J. W., 1974. The fitting of power series, meaning
//     polynomials, illustrated on band-spectroscopic data. Technometrics 16(2),
//     147-185: the biweight.
//   - Björck, Å. and Bowie, C., 1971. An iterative algorithm for computing the best
//     estimate of an orthogonal matrix. SIAM Journal on Numerical Analysis 8(2),
//     358-364.
//   - Chan, T. F., Golub, G. H. and LeVeque, R. J., 1983. Algorithms for computing the
//     sample variance. American Statistician 37(3), 242-247: sums of squares of
//     joined samples.
//   - Hoare, C. A. R., 1961. Algorithm 65: find. Communications of the ACM 4(7), 321.
//   - Holland, P. W. and Welsch, R. E., 1977. Robust regression using iteratively
//     reweighted least-squares. Communications in Statistics A6(9), 813-827: the
//     constant 4.685.
//   - Huber, P. J., 1981. Robust Statistics. Wiley, section 7.6: the covariance of
//     M-estimates.
//   - Robertson, T. and Wright, F. T., 1973. Multiple isotonic median regression.
//     Annals of Statistics 1(3), 422-432.
//   - Rousseeuw, P. J., 1984. Least median of squares regression. Journal of the
//     American Statistical Association 79(388), 871-880.
//   - Schwarz, G., 1978. Estimating the dimension of a model. Annals of Statistics
//     6(2), 461-464: the Bayesian information criterion.
//   - Torr, P. H. S. and Zisserman, A., 2000. MLESAC: a new robust estimator with
//     application to estimating image geometry. Computer Vision and Image
//     Understanding 78(1), 138-156: the bounded sum of squares.
//   - Von Neumann, J., 1941. Distribution of the ratio of the mean square successive
//     difference to the variance. Annals of Mathematical Statistics 12(4), 367-395.
//   - Airy, G. B., 1845. Tides and waves. Encyclopaedia Metropolitana: deep-water
//     waves, in the tests.
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

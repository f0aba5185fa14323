// Package acoustics follows sound through water whose speed of sound changes with depth: profiles
// from casts, the ray of a given launch and travel time, and the path between two points.
//
// # Model
//
// Ray acoustics in level layers: the speed depends on depth alone, so that a ray keeps its
// vertical plane and Snell's p = sin(th) / c. In a layer of constant gradient it is an arc of a
// circle of radius 1 / (p |g|), in one of constant speed straight. A ray turns where the
// speed reaches 1/p, also by total reflection at a step of the speed. It is not
// reflected otherwise, nor at the surface or the bed; currents and losses are not
// modelled.
//
// # Axes, units, shapes
//
// Depths are metres below the water level, positive down; runs are horizontal distances, metres. An
// angle is from the downward vertical, radians, given by its sine and cosine: straight
// down is (0, 1), straight up (0, -1). Times are one way, seconds; speeds m/s. Samples
// are in order of depth.
//
// # Range
//
// Depths 0 to 12000 m, speeds 1000 to 2000 m/s, samples a micrometre apart or more; any angle and
// time. Above the first sample the speed is that of the first, below the last that of the
// last: see Arrival.Beyond.
//
// # Accuracy
//
//   - traces meet reference values of an independent solution in 40 digits within 1e-6 m, the
//     paths between their ends within 1e-9 s: TestSoundPaths, TestSoundPathsBetween
//   - they agree with a numerical integration of the ray equations in random profiles within
//     3e-6 m, which is the integration's error: TestTraceAgainstIntegration
//   - constant speed is a straight line within 1e-9 m: TestTraceStraight; 1, 10 and 1000 layers
//     of one gradient give one arc within 1e-9 m: TestTraceLayersOfOneGradient; gradients down to
//     1e-16 1/s lose nothing: TestTraceSmallGradients
//   - a path reversed returns to its start within 1e-8 m: TestTraceReversed; a path between two
//     points ends at the second within 1e-9 m: TestBetween
//   - the rays of a thinned profile end within 1 mm of those of the whole: TestThin
//
// Near the horizontal, where a ray grazes a maximum of the speed, its way hangs on the last digits
// of the profile.
//
// # Cost
//
// A crossed layer takes a square root and a division: some 8 ns. A path takes three passes over
// its layers as a rule. Nothing is allocated.
//
// # Sources
//
//   - Hovem 2013, Ray Trace Modeling of Underwater Sound Propagation, doi 10.5772/55935: run and
//     time of a layer of constant gradient
//   - Ramezani & Leus 2012, Sensors 12(3), 2996-3017, doi 10.3390/s120302996: the same, and
//     the time between two points
//   - Slotnick 1959, Lessons in Seismic Computing: circular rays; Medwin & Clay 1998,
//     Fundamentals of Acoustical Oceanography, chapter 3 (both from memory)
package acoustics

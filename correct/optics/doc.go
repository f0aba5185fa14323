// Package optics follows single light rays through plane boundaries between
// transparent media: Snell's law in vector form, the critical angle, the
// plane-parallel plate, and Fermat's path between two points through a plane or
// a stack of parallel layers.
//
// # Model
//
// Geometrical optics: rays are straight within a medium and bend at the
// boundary by Snell's law, nFrom sin(incidence) = nTo sin(refraction), in the
// plane of the ray and the normal. Media are homogeneous and isotropic.
// Polarisation, reflection losses and absorption are not modelled.
//
// # Axes, units, shapes
//
// Vectors are right-handed Cartesian, in metres where they are positions and
// without unit where they are directions. Angles are radians. Indices are PHASE
// indices, at one wavelength, all referred to the same medium (vacuum, in this
// module); the group index of a pulse has no place here.
//
// # Range
//
// Any incidence from 0 to 90 degrees and any positive indices, in both directions of
// travel (air to water, water to air). Total reflection is reported, not
// computed. NaN in gives NaN out. Squared lengths must not overflow: keep
// components below 1e154.
//
// # Accuracy
//
// A refracted direction obeys Snell's law and has unit length within 2e-15, also
// where the indices are nearly equal and near the critical angle
// (TestRefractSnell). Equal indices return the direction bit for bit
// (TestRefractEqualIndices). Fermat's path obeys Snell's law within 4e-15 and ends where
// it should within 1e-14 of its run, for distances a million million times apart
// (TestFermatSnell); through up to four layers between, Snell's law within 1e-13
// (TestStackRayParameter).
//
// # Sources
//
// Rinner, K. (1969), Problems of two-medium photogrammetry, Photogrammetric
// Engineering 35(3): the refracted direction as incident direction plus a
// multiple of the normal (title and issue from memory). Born, M. and Wolf, E.
// (1999), Principles of Optics, 7th ed., section 1.5, laws of refraction and
// total reflection (from memory).
package optics

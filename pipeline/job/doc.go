// Package job reads the job file: one TOML file that says what to correct, with
// which water, surface and rays.
//
// The file is strict. An unknown key or table, a wrong type, a number that is
// not finite, a value out of range, a missing value and a key that would have
// no effect are faults, and all of them are reported at once, each with its
// line and what was wanted. Integers stand for floats; the reverse does not
// hold. Only a fault of TOML itself ends the reading at once.
//
// Values keep the job's own units: angles in degrees, temperatures in degrees
// Celsius (ITS-90), practical salinity, air pressure in hPa (at the water, not
// reduced to sea level), water pressure in dbar gauge, humidity in percent,
// vacuum wavelengths in nm, times in seconds, lengths in the job's unit.
// Conversion is the caller's. A time is a number of UTC seconds since 1970, or
// has its offset, as text by RFC 3339 or as TOML's own date and time.
//
// The ranges of water, air and light are those that package medium computes;
// everything else is checked here. No file but the job is opened: patterns and
// auxiliary files stay as written.
package job

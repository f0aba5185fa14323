// Package medium computes what light and sound meet on their way: the phase
// and group index of water and of air, the density of fresh water, and the
// speed of sound in sea water.
//
// # Model
//
// Every index that leaves the package is referred to vacuum. The phase index
// bends a ray (Snell's law). The group index n_g = n - lambda dn/dlambda is
// the one of a pulse's travel time. All derivatives are analytic, and the
// vacuum wavelength enters every formula as it stands.
//
// Quan & Fry and Millard & Seaver give the index of water relative to air that
// is as warm as the water, so that, with n_a of dry air at the water's
// temperature, 1013.25 hPa and 450 ppm CO2,
//
//	n   = n_rel n_a
//	n_g = n_rel n_ga - lambda n_a dn_rel/dlambda
//
// Taken as absolute these formulas would be 3.4e-4 to 4.1e-4 too low.
//
// # Units
//
// Temperature in degrees C (ITS-90), practical salinity, water pressure in
// dbar above the atmosphere (gauge), air pressure in hPa (at the place, not
// reduced to sea level), relative humidity in percent, CO2 in ppm by volume,
// vacuum wavelength in nm, speed of sound in m/s. The formulas for the index of
// sea water rest on data in IPTS-68 degrees; the difference (below 0.009 degrees
// C) is worth less than 1.5e-6 of the index and is left out. The formulas for sound
// convert: it is worth up to 0.017 m/s.
//
// # Ranges
//
// A formula is published for one range and computed over another, wider or the
// same. Outside the computed range Index and Speed return a [RangeError] and NaN, never
// an extrapolated number; between the two, Published is false.
//
//	formula         range      temperature  salinity  pressure, dbar  wavelength, nm
//	quan-fry        published  0 to 30      0 to 35   atmospheric     400 to 700
//	                computed   -2 to 35     0 to 45   0 to 100 (*)    400 to 700
//	millard-seaver  published  0 to 30      0 to 40   0 to 11000      500 to 700
//	                computed   -2 to 35     0 to 45   0 to 11000      400 to 700
//	iapws           published  -12 to 110   0         atmospheric     200 to 1100
//	                computed   -12 to 110   0 to 0.5  0 to 100 (*)    200 to 1100
//
//	formula         range      temperature  pressure, hPa  humidity, %  CO2, ppm  wavelength, nm
//	ciddor          published  -40 to 100   800 to 1200    0 to 100     -         300 to 1690
//	                computed   -40 to 60    500 to 1200    0 to 100     0 to 2000 300 to 1700
//
//	formula         range      temperature  salinity  pressure, dbar  depth, m
//	chen-millero    published  0 to 40      0 to 40   0 to 10000      -
//	                computed   -2 to 40     0 to 45   0 to 10000      -
//	del-grosso      published  0 to 30      30 to 40  0 to 9806.65    -
//	                computed   -2 to 35     20 to 45  0 to 9806.65    -
//	mackenzie       published  2 to 30      25 to 40  -               0 to 8000
//	                computed   -2 to 35     20 to 45  -               0 to 8000
//
// (*) Pressure does not enter these two: their index is that at the surface,
// and a pressure that is given is not applied. It costs 1.3e-6 to 1.7e-6 of the
// index per dbar, 1.7e-4 at the limit; see [WaterFormula.UsesPressure]. Salt
// does not enter iapws either, 1.0e-4 at its limit.
//
// Brackish and fresh water is chen-millero's alone: at salinity 0 del-grosso would be
// 3.4 m/s away from it. Stated errors are 0.05 m/s for del-grosso, 0.07 for
// mackenzie and, from memory, 0.19 for chen-millero.
//
// Air stops at 60 degrees C, so that saturated vapour is always a part of the
// gas; down to 500 hPa lies the air over high mountain lakes.
//
// # Accuracy
//
//   - each formula meets its published check values to the printed digit, and
//     measurements and other formulas within the spread seen between them:
//     TestPublishedIndex, TestPublishedSoundSpeed
//   - the three water formulas agree within 5.3e-5 in phase and 2.9e-4 in
//     group for 0 to 30 degrees C, salinity up to 40, 450 to 650 nm:
//     TestFormulasAgree
//   - over the whole computed range of temperature and salinity quan-fry and
//     millard-seaver agree within 7.5e-5 in phase at 532 nm, 1.0e-4 from 450 to
//     700 nm and 1.5e-4 from 400 nm: TestExtendedRange
//   - the pressure that quan-fry and iapws leave out: TestPressureLeftOut
//   - the analytic group indices equal a numerical derivative within 1e-11:
//     TestGroupIndexIsDerivative
//   - over their computed ranges down to 200 dbar the three formulas for sound agree within
//     0.79 m/s, over their published ranges within 0.43: TestSoundFormulasAgree
//   - the group index of air agrees within 0.25e-6 with the closed formula
//     of the International Association of Geodesy: TestAirGroupAgainstIAG1999
//
// # Sources
//
//   - Quan & Fry 1995, Empirical equation for the index of refraction of
//     seawater, Applied Optics 34(18), 3477-3480
//   - Millard & Seaver 1990, An index of refraction algorithm for seawater over
//     temperature, pressure, salinity, density, and wavelength, Deep-Sea
//     Research 37(12), 1909-1926
//   - IAPWS R9-97, Release on the Refractive Index of Ordinary Water Substance
//     as a Function of Wavelength, Temperature and Pressure, 1997; Harvey,
//     Gallagher & Levelt Sengers 1998, J. Phys. Chem. Ref. Data 27(4), 761-774
//   - IAPWS SR6-08(2011), Revised Supplementary Release on Properties of Liquid
//     Water at 0.1 MPa; Patek, Hruby, Klomfar, Souckova & Harvey 2009, J. Phys.
//     Chem. Ref. Data 38(1), 21-29
//   - Ciddor 1996, Refractive index of air: new equations for the visible and
//     near infrared, Applied Optics 35(9), 1566-1573
//   - Chen & Millero 1977, Speed of sound in seawater at high pressures, J.
//     Acoust. Soc. Am. 62, 1129-1135; Fofonoff & Millard 1983, UNESCO Technical
//     Papers in Marine Science 44
//   - Del Grosso 1974, New equation for the speed of sound in natural waters, J.
//     Acoust. Soc. Am. 56(4), 1084-1091; Wong & Zhu 1995, Speed of sound in seawater
//     as a function of salinity, temperature, and pressure, J. Acoust. Soc. Am. 97(3),
//     1732-1736, its refit to ITS-90
//   - Mackenzie 1981, Nine-term equation for sound speed in the oceans, J. Acoust. Soc.
//     Am. 70(3), 807-812
//   - Saunders 1981, Practical conversion of pressure to depth, J. Phys. Oceanogr. 11,
//     573-574
//   - Saunders 1990, The International Temperature Scale of 1990, WOCE
//     Newsletter 10 (T68 = 1.00024 T90)
package medium

package medium

import "math"

// t68 takes a temperature from ITS-90 to IPTS-68, degrees C: T68 = 1.00024 T90
// (Saunders 1990).
func t68(t90 float64) float64 { return 1.00024 * t90 }

// Coefficients of Chen & Millero 1977 as adopted in EOS-80 (Fofonoff & Millard
// 1983, UNESCO Technical Papers in Marine Science 44, section 9): the row is
// the power of the pressure in bar, the column that of the temperature in
// degrees C of IPTS-68. The names are those of the publication.
var (
	chenMilleroC = [][]float64{
		{1402.388, 5.03711, -5.80852e-2, 3.3420e-4, -1.47800e-6, 3.1464e-9},
		{0.153563, 6.8982e-4, -8.1788e-6, 1.3621e-7, -6.1185e-10},
		{3.1260e-5, -1.7107e-6, 2.5974e-8, -2.5335e-10, 1.0405e-12},
		{-9.7729e-9, 3.8504e-10, -2.3643e-12},
	}
	chenMilleroA = [][]float64{
		{1.389, -1.262e-2, 7.164e-5, 2.006e-6, -3.21e-8},
		{9.4742e-5, -1.2580e-5, -6.4885e-8, 1.0507e-8, -2.0122e-10},
		{-3.9064e-7, 9.1041e-9, -1.6002e-10, 7.988e-12},
		{1.100e-10, 6.649e-12, -3.389e-13},
	}
	chenMilleroB = [][]float64{
		{-1.922e-2, -4.42e-5},
		{7.3637e-5, 1.7945e-7},
	}
	chenMilleroD = [][]float64{
		{1.727e-3},
		{-7.9836e-6},
	}
)

// chenMillero returns the speed of sound in sea water in m/s by Chen & Millero 1977,
// the formula of EOS-80. A negative salinity gives NaN.
func chenMillero(w Water) float64 {
	t, bar, s := t68(w.TemperatureC), w.PressureDbar/10, w.Salinity
	return polynomial(bar, t, chenMilleroC) +
		s*(polynomial(bar, t, chenMilleroA)+math.Sqrt(s)*polynomial(bar, t, chenMilleroB)+s*polynomial(bar, t, chenMilleroD))
}

// polynomial returns the sum over i and j of rows[i][j] x^i y^j.
func polynomial(x, y float64, rows [][]float64) float64 {
	sum := 0.0
	for i := len(rows) - 1; i >= 0; i-- {
		row := 0.0
		for j := len(rows[i]) - 1; j >= 0; j-- {
			row = row*y + rows[i][j]
		}
		sum = sum*x + row
	}
	return sum
}

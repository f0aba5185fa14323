package geo

import (
	"fmt"
	"math"
)

// maxSkew is by how much the products of a matrix' columns may miss those of a
// rotation. A matrix printed with 4 decimals misses by up to 2e-4 (columns of length
// 1, so a product of two is wrong by up to 2 x 0.5e-4 x sqrt 3); what misses by more than
// five times that is not rounded but wrong.
const maxSkew = 1e-3

// rotation returns the rotation of a row, from its angles or its matrix.
func (r *CameraRecords) rotation(row int) ([9]float64, error) {
	if r.Omega != nil {
		for _, c := range r.angles() {
			if math.Abs(c.values[row]) > 360 {
				return [9]float64{}, fmt.Errorf("%s is %v, want degrees from -360 to 360", c.name, c.values[row])
			}
		}
		return fromAngles(radians(r.Omega[row]), radians(r.Phi[row]), radians(r.Kappa[row])), nil
	}
	var m [9]float64
	for k := range m {
		m[k] = r.R[k][row]
	}
	return nearestRotation(m)
}

// radians returns an angle given in degrees.
func radians(degrees float64) float64 { return degrees * (math.Pi / 180) }

// fromAngles returns Rx(omega) Ry(phi) Rz(kappa), row by row, of angles in radians.
func fromAngles(omegaRad, phiRad, kappaRad float64) [9]float64 {
	so, co := math.Sincos(omegaRad)
	sp, cp := math.Sincos(phiRad)
	sk, ck := math.Sincos(kappaRad)
	return [9]float64{
		cp * ck, -cp * sk, sp,
		co*sk + so*sp*ck, co*ck - so*sp*sk, -so * cp,
		so*sk - co*sp*ck, so*ck + co*sp*sk, co * cp,
	}
}

// nearestRotation returns the rotation with the smallest sum of squared differences
// from a matrix, which is its orthogonal polar factor (Björck & Bowie, 1971). Their
// iteration R (3 I - R'R)/2 takes a skew e to 3/4 e squared, so three steps take 1e-3
// below the rounding. It is an error if the matrix is too skew or mirrors.
func nearestRotation(m [9]float64) ([9]float64, error) {
	if s := skew(&m); !(s <= maxSkew) {
		return m, fmt.Errorf("r11 to r33 are no rotation: a product of two columns, or the square of one, misses by %.2g, want less than %v; take the matrix with more decimals, unscaled", s, maxSkew)
	}
	if det(&m) < 0 {
		return m, fmt.Errorf("r11 to r33 mirror (their determinant is -1), want a rotation from a right-handed camera frame: x to the right, y to the image's top, z backwards")
	}
	for range 3 {
		p := columnProducts(&m)
		next := m
		for k := range m {
			row, col := k/3*3, k%3
			next[k] = 1.5*m[k] - (m[row]*p[col]+m[row+1]*p[3+col]+m[row+2]*p[6+col])/2
		}
		m = next
	}
	return m, nil
}

// columnProducts returns R'R, the products of every two columns.
func columnProducts(m *[9]float64) (p [9]float64) {
	for k := range p {
		i, j := k/3, k%3
		p[k] = m[i]*m[j] + m[3+i]*m[3+j] + m[6+i]*m[6+j]
	}
	return p
}

// skew returns the largest difference of R'R from the unit matrix.
func skew(m *[9]float64) (most float64) {
	for k, v := range columnProducts(m) {
		if k%4 == 0 {
			v--
		}
		most = max(most, math.Abs(v))
	}
	return most
}

// det returns the determinant.
func det(m *[9]float64) float64 {
	return m[0]*(m[4]*m[8]-m[5]*m[7]) - m[1]*(m[3]*m[8]-m[5]*m[6]) + m[2]*(m[3]*m[7]-m[4]*m[6])
}

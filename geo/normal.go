package geo

import "math"

// maxTerms is the number of coefficients of a quadratic in two variables.
const maxTerms = 6

// normal holds the normal equations of a weighted least-squares fit of n
// coefficients, at most maxTerms. The constant is the last coefficient: so its
// variance is read off the last pivot.
type normal struct {
	n int
	a [maxTerms][maxTerms]float64 // lower triangle; its Cholesky factor after factor
	b [maxTerms]float64
}

// reset empties the equations for a fit of n coefficients.
func (m *normal) reset(n int) { *m = normal{n: n} }

// add adds one observation z with its row of n factors and its weight.
func (m *normal) add(row []float64, z, weight float64) {
	for i, v := range row[:m.n] {
		v *= weight
		m.b[i] += v * z
		a := &m.a[i]
		for j := 0; j <= i; j++ {
			a[j] += v * row[j]
		}
	}
}

// value returns the sum of a row's factors times coefficients.
func (m *normal) value(row []float64, b *[maxTerms]float64) float64 {
	sum := 0.0
	for i, v := range row[:m.n] {
		sum += v * b[i]
	}
	return sum
}

// factor turns the matrix into its Cholesky factor. It returns false where a
// coefficient is not determined: where its pivot loses all but 1e-10 of its size.
func (m *normal) factor() bool {
	for j := range m.n {
		for k := range j {
			for i := j; i < m.n; i++ {
				m.a[i][j] -= m.a[i][k] * m.a[j][k]
			}
		}
		if !(m.a[j][j] > 1e-10*m.diagonal(j)) {
			return false
		}
		root := math.Sqrt(m.a[j][j])
		for i := j; i < m.n; i++ {
			m.a[i][j] /= root
		}
	}
	return true
}

// diagonal returns the diagonal element j as it was before columns 0 to j-1 were
// taken off it.
func (m *normal) diagonal(j int) float64 {
	sum := m.a[j][j]
	for k := range j {
		sum += m.a[j][k] * m.a[j][k]
	}
	return sum
}

// solve replaces b by the solution, after factor.
func (m *normal) solve(b *[maxTerms]float64) {
	for i := range m.n {
		for k := range i {
			b[i] -= m.a[i][k] * b[k]
		}
		b[i] /= m.a[i][i]
	}
	for i := m.n - 1; i >= 0; i-- {
		for k := i + 1; k < m.n; k++ {
			b[i] -= m.a[k][i] * b[k]
		}
		b[i] /= m.a[i][i]
	}
}

// constantVariance returns the variance of the constant for observations of unit
// variance at weight 1, after factor.
func (m *normal) constantVariance() float64 {
	last := m.a[m.n-1][m.n-1]
	return 1 / (last * last)
}

package geo

import "testing"

// mustCameras returns the cameras of right records.
func mustCameras(t testing.TB, r CameraRecords) *Cameras {
	t.Helper()
	c, err := NewCameras(r)
	if err != nil {
		t.Fatal(err)
	}
	return c
}

// equal returns a column of n equal numbers.
func equal(n int, v float64) []float64 {
	column := make([]float64, n)
	for i := range column {
		column[i] = v
	}
	return column
}

package medium

import (
	"math"
	"testing"
)

// TestSoundSpeedSurface: at 0 degrees C, salinity 0 and the surface the formula
// is its first coefficient, 1402.388 m/s (Chen & Millero 1977), and the scale of
// temperature does not matter.
func TestSoundSpeedSurface(t *testing.T) {
	if got := SoundSpeedChenMillero(Water{}); got != 1402.388 {
		t.Errorf("got %.6f m/s, want 1402.388", got)
	}
}

// TestSoundSpeedITS90 compares with the same data refitted to ITS-90: Wong & Zhu
// 1995, J. Acoust. Soc. Am. 97(3), 1732-1736, Table III (found in a copy of
// the printed page). The refit lies within 0.0095 m/s; without the step from
// ITS-90 to IPTS-68 the rows at 20 to 40 degrees C would miss by 0.015 to 0.023.
func TestSoundSpeedITS90(t *testing.T) {
	for _, row := range []struct {
		water Water
		want  float64 // m/s
	}{
		{Water{30, 30, 0}, 1540.416},
		{Water{0, 30, 2000}, 1475.448},
		{Water{20, 30, 6000}, 1615.686},
		{Water{10, 30, 10000}, 1653.261},
		{Water{30, 35, 3000}, 1595.909},
		{Water{20, 35, 5000}, 1604.492},
		{Water{0, 35, 10000}, 1623.150},
		{Water{40, 40, 0}, 1568.141},
		{Water{20, 40, 10000}, 1692.195},
	} {
		if got := SoundSpeedChenMillero(row.water); math.Abs(got-row.want) > 0.0095 {
			t.Errorf("WongZhu1995/%+v: got %.4f m/s, want %.3f", row.water, got, row.want)
		}
	}
}

func TestSoundSpeedLimits(t *testing.T) {
	nan := math.NaN()
	for _, row := range []struct {
		water     Water
		published bool
		number    bool
	}{
		{Water{0, 0, 0}, true, true},
		{Water{40, 40, 10000}, true, true},
		{Water{-1, 35, 0}, false, true},
		{Water{10, 41, 0}, false, true},
		{Water{10, 35, 10001}, false, true},
		{Water{10, -1, 0}, false, false},
		{Water{nan, 35, 0}, false, false},
		{Water{10, nan, 0}, false, false},
		{Water{10, 35, nan}, false, false},
	} {
		if got := ChenMilleroPublished(row.water); got != row.published {
			t.Errorf("%+v: ChenMilleroPublished is %v", row.water, got)
		}
		if got := SoundSpeedChenMillero(row.water); math.IsNaN(got) == row.number {
			t.Errorf("%+v: %v m/s", row.water, got)
		}
	}
}

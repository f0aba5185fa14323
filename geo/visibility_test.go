package geo

import (
	"math"
	"slices"
	"testing"
)

// TestImageByHand puts one camera at 7, 8, 100 with an image of 2000 by 1000 pixels, a focal
// length of 1000 and the principal point at 500, 100, and works out by hand which way
// its image lies: 0.5 to the left of the axis and 1.5 to the right, 0.1 to the top
// and 0.9 to the bottom, at a distance of 1.
func TestImageByHand(t *testing.T) {
	const none = 0.0
	for _, tc := range []struct {
		name              string
		omega, phi, kappa float64
		left, right       [3]float64 // the borders at a distance of 40 along the axis, as differences
		top, bottom       [3]float64 // from the axis' point
		ahead             [3]float64 // the axis' point
	}{
		{"zero: looks down, top to the north", 0, 0, 0, [3]float64{-20}, [3]float64{60}, [3]float64{0, 4}, [3]float64{0, -36}, [3]float64{0, 0, -40}},
		{"kappa 90: right to the north, top to the west", 0, 0, 90, [3]float64{0, -20}, [3]float64{0, 60}, [3]float64{-4}, [3]float64{36}, [3]float64{0, 0, -40}},
		{"omega 90: looks north to the horizon, top up", 90, 0, 0, [3]float64{-20}, [3]float64{60}, [3]float64{0, 0, 4}, [3]float64{0, 0, -36}, [3]float64{0, 40}},
		{"phi 90: looks west to the horizon, right down", 0, 90, 0, [3]float64{0, 0, 20}, [3]float64{0, 0, -60}, [3]float64{0, 4}, [3]float64{0, -36}, [3]float64{-40}},
		{"omega 180: looks up, top to the south", 180, 0, 0, [3]float64{-20}, [3]float64{60}, [3]float64{0, -4}, [3]float64{0, 36}, [3]float64{0, 0, 40}},
		{"omega 90, kappa 90: looks north, top to the west", 90, 0, 90, [3]float64{0, 0, -20}, [3]float64{0, 0, 60}, [3]float64{-4}, [3]float64{36}, [3]float64{0, 40}},
	} {
		v := mustByImage(t, mustCameras(t, CameraRecords{
			ID: []string{"a"}, X: []float64{7}, Y: []float64{8}, Z: []float64{100},
			Omega: []float64{tc.omega}, Phi: []float64{tc.phi}, Kappa: []float64{tc.kappa},
			FocalPx: []float64{1000}, WidthPx: []float64{2000}, HeightPx: []float64{1000}, CxPx: []float64{500}, CyPx: []float64{100},
		}))
		for _, border := range []struct {
			name string
			to   [3]float64
		}{{"left", tc.left}, {"right", tc.right}, {"top", tc.top}, {"bottom", tc.bottom}} {
			for _, part := range []struct {
				of   float64
				side float64
				want int
			}{{none, 1, 1}, {0.999, 1, 1}, {1.001, 1, 0}, {none, -1, 0}, {0.999, -1, 0}} { // side -1: behind the camera
				p := [3]float64{7, 8, 100}
				for axis := range p {
					p[axis] += part.side * (tc.ahead[axis] + part.of*border.to[axis])
				}
				if got := v.AppendSeeing(nil, p[0], p[1], p[2]); len(got) != part.want {
					t.Errorf("%s: %v of the way to the %s border, side %v: seen by %v, want %d", tc.name, part.of, border.name, part.side, got, part.want)
				}
			}
		}
	}
}

// TestImageBorders asks for points on the borders, which belong to the image, and
// for the camera's own place, which does not.
func TestImageBorders(t *testing.T) {
	v := mustByImage(t, mustCameras(t, CameraRecords{ // the principal point is the middle: 100 m by 50 m to each side at z = 0
		ID: []string{"a"}, X: []float64{0}, Y: []float64{0}, Z: []float64{100}, Omega: []float64{0}, Phi: []float64{0}, Kappa: []float64{0},
		FocalPx: []float64{1000}, WidthPx: []float64{2000}, HeightPx: []float64{1000},
	}))
	nan, inf := math.NaN(), math.Inf(1)
	for _, tc := range []struct {
		x, y, z float64
		want    int
	}{
		{100, 50, 0, 1},
		{-100, 50, 0, 1},
		{100, -50, 0, 1},
		{-100, -50, 0, 1},
		{math.Nextafter(100, 101), 0, 0, 0},
		{0, math.Nextafter(50, 51), 0, 0},
		{0, -50.001, 0, 0},
		{-100.001, 0, 0, 0},
		{0, 0, 100, 0},
		{0, 0, math.Nextafter(100, 0), 1},
		{0, 0, math.Nextafter(100, 101), 0},
		{1, 0, 100, 0},
		{0, 0, -1e5, 1},
		{1e30, 0, 0, 0},
		{0, 0, -1e30, 1},
		{0, 0, -1e100, 1},
		{0, 0, -2e100, 0},
		{nan, 0, 0, 0},
		{0, nan, 0, 0},
		{0, 0, nan, 0},
		{0, 0, -inf, 0},
		{inf, 0, 0, 0},
	} {
		if got := v.AppendSeeing(nil, tc.x, tc.y, tc.z); len(got) != tc.want {
			t.Errorf("%v %v %v: seen by %v, want %d", tc.x, tc.y, tc.z, got, tc.want)
		}
	}
}

// TestAngleByHand uses the triangle 3, 4, 5: at 40 m below, 30 m aside is 36.87 degrees.
func TestAngleByHand(t *testing.T) {
	c := mustCameras(t, CameraRecords{ID: []string{"a", "b"}, X: []float64{0, 1000}, Y: []float64{0, 0}, Z: []float64{100, 100}})
	limit := math.Asin(3.0 / 5)
	for _, tc := range []struct {
		name      string
		fromWater bool
		x, y, z   float64
		want      []int32
	}{
		{"below", false, 0, 0, 60, []int32{0}},
		{"just within", false, 17.999, 23.999, 60, []int32{0}},
		{"just outside", false, 18.001, 24.001, 60, nil},
		{"the other", false, 1000, -29.99, 60, []int32{1}},
		{"between both, deep", false, 500, 0, 100 - 500/0.7499, []int32{0, 1}},
		{"at its height", false, 0, 0, 100, nil},
		{"above", false, 0, 0, 140, nil},
		{"above, looking up", true, 0, 0, 140, []int32{0}},
		{"aside, looking up", true, -29.99, 0, 140, []int32{0}},
		{"outside, looking up", true, -30.01, 0, 140, nil},
		{"below, looking up", true, 0, 0, 60, nil},
		{"endless depth", false, 0, 0, -1e30, []int32{0, 1}},
		{"no number", false, 0, 0, math.NaN(), nil},
	} {
		v := mustByAngle(t, c, limit, tc.fromWater)
		if got := v.AppendSeeing(nil, tc.x, tc.y, tc.z); !slices.Equal(got, tc.want) {
			t.Errorf("%s: seen by %v, want %v", tc.name, got, tc.want)
		}
	}
}

// TestConeBorder asks the rule itself for points on the border, which belong to it.
func TestConeBorder(t *testing.T) {
	c := cones{tangent: 0.75} // 30 and 40 are sides of a right-angled triangle of which 50 is the third
	if !c.holds(30, 0, 40) || !c.holds(0, -30, 40) || !c.holds(18, 24, 40) || c.holds(18, math.Nextafter(24, 25), 40) {
		t.Error("a cone holds not just what is within its border or on it")
	}
}

// places are where the random networks lie.
var places = [][3]float64{{0, 0, 0}, {512000, 7012000, 31}}

// TestImagePlainly compares the image rule with the pinhole's equations for all cameras.
func TestImagePlainly(t *testing.T) {
	rng := newRand(t, 81)
	for _, network := range networks {
		seen := 0
		for _, at := range places {
			var r CameraRecords
			network.add(&r, rng, at[0], at[1], at[2])
			v := mustByImage(t, mustCameras(t, r))
			for range 800 {
				x, y, z := somePoint(rng, at[0], at[1], at[2])
				got := v.AppendSeeing(nil, x, y, z)
				seen += len(got)
				checkRising(t, got)
				for k := range r.ID {
					pixels := plainly(&r, k, x, y, z)
					if math.Abs(pixels) < 1e-5 {
						continue // so near a border that the rounding of millions of metres decides
					}
					if _, found := slices.BinarySearch(got, int32(k)); found != (pixels > 0) {
						t.Fatalf("%s: %v %v %v: camera %d: seen %v, though %v pixels from the border", network.name, x, y, z, k, found, pixels)
					}
				}
			}
		}
		if seen < 30 {
			t.Errorf("%s: only %d views", network.name, seen)
		}
	}
}

// checkRising checks that numbers rise.
func checkRising(t *testing.T, numbers []int32) {
	t.Helper()
	for i := 1; i < len(numbers); i++ {
		if numbers[i] <= numbers[i-1] {
			t.Fatalf("%v do not rise", numbers)
		}
	}
}

// TestAnglePlainly compares the angle rule with the angle from the vertical for all
// cameras.
func TestAnglePlainly(t *testing.T) {
	rng := newRand(t, 82)
	for _, network := range networks {
		for _, at := range places {
			var r CameraRecords
			network.add(&r, rng, at[0], at[1], at[2])
			limit := radians(20 + 60*rng.Float64())
			for _, up := range []float64{1, -1} {
				v := mustByAngle(t, mustCameras(t, r), limit, up < 0)
				for range 500 {
					x, y, z := somePoint(rng, at[0], at[1], at[2])
					got := v.AppendSeeing(nil, x, y, z)
					checkRising(t, got)
					for k := range r.ID {
						off := math.Atan2(math.Hypot(x-r.X[k], y-r.Y[k]), up*(r.Z[k]-z))
						if math.Abs(off-limit) < 1e-9 {
							continue
						}
						if _, found := slices.BinarySearch(got, int32(k)); found != (off < limit) {
							t.Fatalf("%s: %v %v %v: camera %d: seen %v at %v, limit %v", network.name, x, y, z, k, found, off, limit)
						}
					}
				}
			}
		}
	}
}

// TestAppendSeeingAppends keeps what dst has, and allocates nothing in known boxes.
func TestAppendSeeingAppends(t *testing.T) {
	var r CameraRecords
	networks[1].add(&r, nil, 0, 0, 0)
	c := mustCameras(t, r)
	for _, v := range []*Visibility{mustByImage(t, c), mustByAngle(t, c, radians(45), false)} {
		alone := v.AppendSeeing(nil, 3, 4, 0)
		if len(alone) < 2 {
			t.Fatalf("seen by %v, want several", alone)
		}
		if got := v.AppendSeeing([]int32{-1, -2}, 3, 4, 0); !slices.Equal(got, append([]int32{-1, -2}, alone...)) {
			t.Errorf("got %v, want -1, -2 and %v", got, alone)
		}
		dst := make([]int32, 0, c.Len())
		if n := testing.AllocsPerRun(100, func() { dst = v.AppendSeeing(dst[:0], 3, 4, 0) }); n != 0 {
			t.Errorf("%v allocations a point", n)
		}
	}
}

func TestVisibilityRefuses(t *testing.T) {
	bare := CameraRecords{ID: []string{"a"}, X: []float64{0}, Y: []float64{0}, Z: []float64{9}}
	_, err := mustCameras(t, bare).ByImage()
	wantError(t, err, "no rotations", "omega, phi, kappa")
	bare.Omega, bare.Phi, bare.Kappa = []float64{0}, []float64{0}, []float64{0}
	_, err = mustCameras(t, bare).ByImage()
	wantError(t, err, "no image sizes", "focal_px, width_px, height_px")
	for _, degrees := range []float64{0, -1, 90, 120, math.NaN()} {
		_, err = mustCameras(t, bare).ByAngle(radians(degrees), false)
		wantError(t, err, "degrees, want more than 0 and less than 90")
	}
}

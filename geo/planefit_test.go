package geo

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"
)

// riverPlane is the truth of the plane's tests: a river far from the origin.
var riverPlane = Plane{Level: 31.257, AtX: 512000, AtY: 7012000, SlopeX: -0.0009, SlopeY: 0.0004}

// levelOf is the plane by its definition.
func levelOf(p Plane, x, y float64) float64 {
	return p.Level + p.SlopeX*(x-p.AtX) + p.SlopeY*(y-p.AtY)
}

// banks returns n waterline points on both banks of a winding river, 600 m long and
// 40 m wide, with noise (m), the share wrong by 0 to 2 m upwards.
func banks(rng *rand.Rand, n int, noise, wrong float64) (x, y, z []float64) {
	return banksOf(rng, n, noise, wrong, 0.5, 25)
}

// banksOf returns such points, the given share of them on the southern bank of a
// river that winds by so much (m).
func banksOf(rng *rand.Rand, n int, noise, wrong, south, winding float64) (x, y, z []float64) {
	for range n {
		along, side := 600*rng.Float64()-300, 20.0
		if rng.Float64() < south {
			side = -20
		}
		px, py := riverPlane.AtX+along, riverPlane.AtY+winding*math.Sin(along/70)+side
		pz := levelOf(riverPlane, px, py) + noise*rng.NormFloat64()
		if rng.Float64() < wrong {
			pz += 2 * rng.Float64()
		}
		x, y, z = append(x, px), append(y, py), append(z, pz)
	}
	return x, y, z
}

// worst returns the greatest error of a plane over the river's banks.
func worst(p Plane) float64 {
	e := 0.0
	for along := -300.0; along <= 300; along += 10 {
		for _, side := range []float64{-20, 20} {
			x, y := riverPlane.AtX+along, riverPlane.AtY+25*math.Sin(along/70)+side
			e = max(e, math.Abs(levelOf(p, x, y)-levelOf(riverPlane, x, y)))
		}
	}
	return e
}

// farOff counts the points farther above the river's plane than a limit (m).
func farOff(x, y, z []float64, limit float64) int {
	n := 0
	for i := range x {
		if z[i]-levelOf(riverPlane, x[i], y[i]) > limit {
			n++
		}
	}
	return n
}

func TestFitPlaneWithBlunders(t *testing.T) {
	for _, tc := range []struct {
		name                 string
		n, runs              int
		noise, wrong, within float64
	}{
		{"4 mm and 12 %", 400, 30, 0.004, 0.12, 0.002},
		{"4 mm and 15 %", 400, 30, 0.004, 0.15, 0.002},
		{"4 mm and a third", 400, 30, 0.004, 0.33, 0.003},
		{"1 cm and 15 %, 100 points", 100, 30, 0.01, 0.15, 0.008},
		{"more points than judge the start", 6000, 2, 0.01, 0.15, 0.002},
	} {
		t.Run(tc.name, func(t *testing.T) {
			rng := newRand(t, 81)
			for run := range tc.runs {
				x, y, z := banks(rng, tc.n, tc.noise, tc.wrong)
				fit, err := FitPlane(x, y, z)
				if err != nil {
					t.Fatal(err)
				}
				if e := worst(fit.Plane); e > tc.within {
					t.Errorf("run %d: %.4f m off, want within %v", run, e, tc.within)
				}
				low, high := farOff(x, y, z, 12*tc.noise), farOff(x, y, z, 3*tc.noise)
				if fit.SetAside < low || fit.SetAside > high {
					t.Errorf("run %d: %d set aside, want %d to %d", run, fit.SetAside, low, high)
				}
			}
		})
	}
}

// TestFitPlaneLeverage has all wrong points together at one end of one bank, where a
// fit without a robust start follows them.
func TestFitPlaneLeverage(t *testing.T) {
	rng := newRand(t, 82)
	x, y, z := banks(rng, 400, 0.004, 0)
	wrong := 0
	for i := range x {
		if x[i] > riverPlane.AtX+170 && wrong < 60 {
			z[i] += 0.5 + rng.Float64()
			wrong++
		}
	}
	fit, err := FitPlane(x, y, z)
	if err != nil {
		t.Fatal(err)
	}
	if e := worst(fit.Plane); e > 0.002 || wrong != 60 || fit.SetAside < 60 {
		t.Errorf("%.4f m off, %d of %d wrong points set aside, want within 2 mm and all", e, fit.SetAside, wrong)
	}
}

// TestFitPlaneUneven has few points on one bank of a straight river, so that any plane
// through the other bank fits most points.
func TestFitPlaneUneven(t *testing.T) {
	rng := newRand(t, 87)
	for run := range 20 {
		x, y, z := banksOf(rng, 400, 0.004, 0.15, 0.88, 0.1)
		fit, err := FitPlane(x, y, z)
		if err != nil {
			t.Fatal(err)
		}
		if e, high := worst(fit.Plane), farOff(x, y, z, 0.012); e > 0.004 || fit.SetAside > high {
			t.Errorf("run %d: %.4f m off, %d set aside, want within 4 mm and at most %d", run, e, fit.SetAside, high)
		}
	}
}

// TestFitPlaneErrors compares the stated errors with those found over many surveys.
func TestFitPlaneErrors(t *testing.T) {
	rng := newRand(t, 83)
	const runs = 300
	var level, slopeX, slopeY, corner float64
	for range runs {
		x, y, z := banks(rng, 60, 0.01, 0.1)
		fit, err := FitPlane(x, y, z)
		if err != nil {
			t.Fatal(err)
		}
		square := func(e float64) float64 { return e * e / runs }
		level += square((fit.Level - levelOf(riverPlane, fit.AtX, fit.AtY)) / fit.LevelSigma)
		slopeX += square((fit.SlopeX - riverPlane.SlopeX) / fit.SlopeXSigma)
		slopeY += square((fit.SlopeY - riverPlane.SlopeY) / fit.SlopeYSigma)
		at := [2]float64{riverPlane.AtX + 250, riverPlane.AtY - 30}
		var sigma [1]float64
		fit.FillSigma(sigma[:], at[:1], at[1:])
		corner += square((levelOf(fit.Plane, at[0], at[1]) - levelOf(riverPlane, at[0], at[1])) / sigma[0])
	}
	for name, v := range map[string]float64{"level": level, "slope x": slopeX, "slope y": slopeY, "corner": corner} {
		if r := math.Sqrt(v); r < 0.85 || r > 1.2 { // 4 % by chance
			t.Errorf("%s: rms error is %.2f of its sigma, want about 1", name, r)
		}
	}
}

func TestFitPlaneExact(t *testing.T) {
	rng := newRand(t, 84)
	for _, n := range []int{3, 4, 5, 31, 1025} {
		x, y, z := banks(rng, n, 0, 0)
		x[0], y[0] = riverPlane.AtX, riverPlane.AtY+80
		z[0] = levelOf(riverPlane, x[0], y[0])
		fit, err := FitPlane(x, y, z)
		if err != nil {
			t.Fatal(n, err)
		}
		if e := worst(fit.Plane); e > 1e-11*float64(1+600/n) || fit.SetAside != 0 || len(fit.Residuals) != n {
			t.Errorf("%d points: %g m off, %d set aside", n, e, fit.SetAside)
		}
		if (n == 3) != math.IsNaN(fit.LevelSigma) {
			t.Errorf("%d points: sigma of the level %v", n, fit.LevelSigma)
		}
	}
}

func TestFitPlaneRefuses(t *testing.T) {
	rng := newRand(t, 85)
	line := func(across, noise float64) (x, y, z []float64) {
		for range 400 {
			along := 200 * rng.Float64()
			px, py := riverPlane.AtX+along, riverPlane.AtY+along/2+across*rng.NormFloat64()
			x, y, z = append(x, px), append(y, py), append(z, levelOf(riverPlane, px, py)+noise*rng.NormFloat64())
		}
		return x, y, z
	}
	for _, tc := range []struct {
		name          string
		across, noise float64
		words         []string
	}{
		{"exactly straight", 0, 0, []string{"one line", "both banks"}},
		{"straight with noise", 0, 0.004, []string{"one line", "both banks"}},
		{"2 cm of plan noise", 0.02, 0, []string{"across", "both banks"}},
		{"10 cm of plan noise, 4 mm in height", 0.1, 0.004, []string{"across", "both banks"}},
	} {
		x, y, z := line(tc.across, tc.noise)
		_, err := FitPlane(x, y, z)
		if err == nil {
			t.Errorf("%s: no error", tc.name)
			continue
		}
		wantError(t, err, tc.words...)
	}
	x, y, z := line(5, 0.004) // a bank that winds enough
	if _, err := FitPlane(x, y, z); err != nil {
		t.Errorf("winding bank: %v", err)
	}
	_, err := FitPlane(x[:2], y[:2], z[:2])
	wantError(t, err, "2 waterline points", "at least 3")
	_, err = FitPlane(nil, nil, nil)
	wantError(t, err, "0 waterline points")
	same := []float64{5, 5, 5, 5}
	_, err = FitPlane(same, same, same)
	wantError(t, err, "one line")
	y[7] = math.NaN()
	_, err = FitPlane(x, y, z)
	var fault *RecordError
	if !errors.As(err, &fault) || fault.Index != 7 {
		t.Errorf("error %v, want record 8 named", err)
	}
	mustPanic(t, func() { _, _ = FitPlane(x, y, z[:1]) })
	mustPanic(t, func() { new(PlaneFit).FillSigma(x, y, z[:1]) })
}

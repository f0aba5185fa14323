package main

import (
	"math"
	"testing"
)

// Fermat's principle and the light's travel time say where an apparent point
// lies; neither uses the generator's Snell step.
func TestSurveyObeysFermatAndTravelTime(t *testing.T) {
	s := newSurvey()
	for i := range 2000 {
		p := s.next()
		s.fired += 12345 // on, along the flight line
		toPoint := p.apparent.plus(-1, p.origin)
		along := length(toPoint)
		dir := vec{toPoint.x / along, toPoint.y / along, toPoint.z / along}
		apparent, bed := shoot(p.origin, dir)
		if d := length(apparent.plus(-1, p.apparent)); d > 1e-8 {
			t.Fatalf("seed 20, 532: pulse %d: its own direction hits %g m beside the apparent point", i, d)
		}
		entry := p.origin.plus((levelM-p.origin.z)/dir.z, dir)
		checkPulse(t, i, p, entry, bed)
	}
}

// checkPulse holds one pulse with its entry and bed point to the setting.
func checkPulse(t *testing.T, i int, p pulse, entry, bed vec) {
	t.Helper()
	plan := math.Hypot(entry.x-p.origin.x, entry.y-p.origin.y)
	if off := math.Atan2(plan, p.origin.z-entry.z); off > maxOffNadir+1e-9 {
		t.Errorf("pulse %d: %g rad off nadir, want at most 20 degrees", i, off)
	}
	if depth := levelM - bed.z; depth < 0.5-1e-9 || depth > 15+1e-9 {
		t.Errorf("pulse %d: depth %g, want 0.5 to 15", i, depth)
	}
	if want := leastTimeRun(p.origin, bed); math.Abs(plan-want) > 1e-7 {
		t.Errorf("pulse %d: enters %.9f m from the origin's foot, least time asks for %.9f", i, plan, want)
	}
	inAir := length(p.apparent.plus(-1, entry)) * ngAir
	inWater := length(bed.plus(-1, entry)) * ngWater
	if math.Abs(inAir-inWater) > 1e-8 {
		t.Errorf("pulse %d: optical length %.9f m to the apparent point, %.9f in the water", i, inAir, inWater)
	}
}

// leastTimeRun is the plan distance from the origin at which the optical path
// to the bed is shortest: the root of its derivative, by bisection.
func leastTimeRun(origin, bed vec) float64 {
	whole := math.Hypot(bed.x-origin.x, bed.y-origin.y)
	up, down := origin.z-levelM, levelM-bed.z
	low, high := 0.0, whole
	for range 100 {
		run := (low + high) / 2
		slope := nAir*run/math.Hypot(run, up) - nWater*(whole-run)/math.Hypot(whole-run, down)
		if slope < 0 {
			low = run
		} else {
			high = run
		}
	}
	return low
}

func length(v vec) float64 { return math.Sqrt(v.x*v.x + v.y*v.y + v.z*v.z) }

// The formulas as printed, with the derivative for the group index taken
// numerically.
func TestIndicesAreThePublishedFormulas(t *testing.T) {
	const nm, step = 532.0, 0.01
	group := func(n func(float64) float64) float64 {
		return n(nm) - nm*(n(nm+step)-n(nm-step))/(2*step)
	}
	surveyAir := func(nm float64) float64 { return dryAir(nm, 15) }
	water := func(nm float64) float64 { return quanFry(nm) * dryAir(nm, temperatureC) }
	for _, c := range []struct {
		name, source string
		got, want    float64
	}{
		{"n_air", "Ciddor 1996", nAir, surveyAir(nm)},
		{"ng_air", "Ciddor 1996", ngAir, group(surveyAir)},
		{"n_water", "Quan & Fry 1995", nWater, water(nm)},
		{"ng_water", "Quan & Fry 1995", ngWater, group(water)},
	} {
		if math.Abs(c.got-c.want) > 2e-9 {
			t.Errorf("%s is %.9f, %s gives %.9f", c.name, c.got, c.source, c.want)
		}
	}
}

// quanFry is the index of the survey's water relative to air (Quan & Fry 1995,
// Applied Optics 34(18), 3477-3480).
func quanFry(nm float64) float64 {
	const t, s = temperatureC, salinityPSU
	return 1.31405 + (1.779e-4-1.05e-6*t+1.6e-8*t*t)*s - 2.02e-6*t*t +
		(15.868+0.01155*s-0.00423*t)/nm - 4382/(nm*nm) + 1.1455e6/(nm*nm*nm)
}

// dryAir is the index of dry air with 450 ppm CO2 at 101325 Pa and t degrees C
// (Ciddor 1996, Applied Optics 35(9), 1566-1573).
func dryAir(nm, t float64) float64 {
	s2 := 1e6 / (nm * nm)
	standard := 1e-8 * (5792105/(238.0185-s2) + 167917/(57.362-s2))
	return 1 + standard*density(t)/density(15)
}

// density of dry air at 101325 Pa, up to a constant factor (Ciddor 1996).
func density(t float64) float64 {
	kelvin := t + 273.15
	a := 101325 / kelvin
	z := 1 - a*(1.58123e-6-2.9331e-8*t+1.1043e-10*t*t) + a*a*1.83e-11
	return a / z
}

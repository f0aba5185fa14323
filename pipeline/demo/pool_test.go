package demo

import (
	"math"
	"testing"

	"bentray/geo"
)

// The pool as its doc says: 4 m deep in the middle, shallow riffles, bars that lie dry.
func TestPoolBed(t *testing.T) {
	for _, c := range []struct {
		name                  string
		u, off, depth, within float64
	}{
		{"deepest place", poolMidM, 0, poolDeepestM, 0.05},
		{"riffle in the west", 0, 0, 0.419, 0.031},
		{"riffle in the east, at the foot of a bar", 120, 0, 0.28, 0.035},
		{"northern bank of the pool", poolMidM, poolHalfM, 0, 0.05},
		{"southern bank of the pool", poolMidM, -poolHalfM, 0, 0.05},
		{"land", poolMidM, -30, -bankM, 1e-9},
	} {
		t.Run(c.name, func(t *testing.T) {
			x, y := poolX+c.u, poolY+poolAxisV(c.u)+c.off
			near(t, "depth", poolSurface.z(x, y)-poolBedZ(x, y), c.depth, c.within)
		})
	}
	for _, b := range bars {
		x, y := poolX+b.u, poolY+poolAxisV(b.u)+b.off
		if above := poolBedZ(x, y) - poolSurface.z(x, y); !(above > 0.2 && above < 1.5) {
			t.Errorf("the bar at %g m rises %g m above the water, want some decimetres", b.u, above)
		}
	}
}

// The cameras as a job reads them: package geo makes rotations of their angles by the
// closed form of the product, the simulation by one turn after the other.
func TestCamerasAsAJobHasThem(t *testing.T) {
	cameras := poolCameras()
	var r geo.CameraRecords
	for i := range cameras {
		c := &cameras[i]
		r.ID = append(r.ID, c.id)
		r.X, r.Y, r.Z = append(r.X, c.centre.x), append(r.Y, c.centre.y), append(r.Z, c.centre.z)
		r.Omega, r.Phi, r.Kappa = append(r.Omega, c.omega), append(r.Phi, c.phi), append(r.Kappa, c.kappa)
	}
	list, err := geo.NewCameras(r) // refuses an id that is there twice
	if err != nil || list.Len() != 60 {
		t.Fatalf("%d cameras with error %v, want 60", len(cameras), err)
	}
	for i, m := range list.Rotations() {
		c := &cameras[i]
		for k, axis := range []vec{c.right, c.top, c.back} {
			near(t, c.id+"'s axis", axis.minus(vec{m[k], m[3+k], m[6+k]}).length(), 0, 1e-14)
		}
		if height := c.centre.z - poolSurface.at.z; height < 39 || height > 61 {
			t.Errorf("%s is %g m above the water, want 40 to 60 m and a little sway", c.id, height)
		}
	}
}

// By hand: a camera with no angles sees north at the top, one with omega 30 looks to the
// north, 30 degrees off nadir, and one with kappa 90 has its right in the north.
func TestCameraProjects(t *testing.T) {
	for _, c := range []struct {
		name              string
		omega, phi, kappa float64
		p                 vec
		x, y, away        float64
	}{
		{"straight down", 0, 0, 0, vec{3, 4, -10}, 0.3, 0.4, 10},
		{"to the north", 30, 0, 0, vec{0, 10 * math.Tan(math.Pi/6), -10}, 0, 0, 10 / math.Cos(math.Pi/6)},
		{"to the west", 0, 45, 0, vec{-10, 0, -10}, 0, 0, 10 * math.Sqrt2},
		{"turned to the west", 0, 0, 90, vec{3, 4, -10}, 0.4, -0.3, 10},
	} {
		t.Run(c.name, func(t *testing.T) {
			k := camera{omega: c.omega, phi: c.phi, kappa: c.kappa}
			k.right, k.top, k.back = k.turn(vec{x: 1}), k.turn(vec{y: 1}), k.turn(vec{z: 1})
			x, y, away := k.project(c.p)
			near(t, "x", x, c.x, 1e-12)
			near(t, "y", y, c.y, 1e-12)
			near(t, "distance before the camera", away, c.away, 1e-12)
		})
	}
}

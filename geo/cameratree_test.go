package geo

import (
	"math"
	"slices"
	"sync"
	"testing"
)

// TestTreeChangesNothing asks the rules about all cameras, without the tree, also for
// points on borders of images, on planes of the tree, and at cameras.
func TestTreeChangesNothing(t *testing.T) {
	rng := newRand(t, 83)
	for _, network := range networks {
		for _, at := range places {
			var r CameraRecords
			network.add(&r, rng, at[0], at[1], at[2])
			c := mustCameras(t, r)
			all := make([]int32, c.Len())
			for k := range all {
				all[k] = int32(k)
			}
			rules := []*Visibility{mustByImage(t, c), mustByAngle(t, c, radians(45), false), mustByAngle(t, c, radians(70), true)}
			for i := range 1000 {
				x, y, z := somePoint(rng, at[0], at[1], at[2])
				k := rng.IntN(c.Len())
				switch i % 4 {
				case 0:
					x, y, z = r.X[k], r.Y[k], r.Z[k]-math.Abs(z-at[2])
				case 1:
					x, y, z = r.X[k]+30*590/800.0, math.Round(y), r.Z[k]-30 // right border of an image that looks down
				case 2:
					x, y, z = math.Round(x), math.Round(y), math.Round(z)
				}
				for _, v := range rules {
					if got, want := v.AppendSeeing(nil, x, y, z), v.rule.appendSeeing(nil, all, x, y, z); !slices.Equal(got, want) {
						t.Fatalf("%s: %v %v %v: %v, without the tree %v", network.name, x, y, z, got, want)
					}
				}
			}
		}
	}
}

// TestTreeBeginsAnew takes a tree for one that has grown to its limit but for a little.
// It must grow beyond it by the boxes around one point at most, then begin anew, and the
// answers stay.
func TestTreeBeginsAnew(t *testing.T) {
	rng := newRand(t, 84)
	var r CameraRecords
	networks[1].add(&r, rng, 0, 0, 0)
	networks[2].add(&r, rng, 0, 0, 0)
	c := mustCameras(t, r)
	v := mustByImage(t, c)
	all := v.tree.Load().root.cameras
	onePoint := int64(maxDepth * 8 * (boxSize + 2*c.Len()))
	for range 5 {
		grown := v.tree.Load()
		grown.size.Add(maxTreeSize - 20000)
		for i := 0; v.tree.Load() == grown; i++ {
			if size := grown.size.Load(); i == 2000 || size > maxTreeSize+onePoint {
				t.Fatalf("after %d points the tree has grown to %d, limit %d", i, size, maxTreeSize)
			}
			x, y, z := somePoint(rng, 0, 0, 0)
			if got, want := v.AppendSeeing(nil, x, y, z), v.rule.appendSeeing(nil, all, x, y, z); !slices.Equal(got, want) {
				t.Fatalf("%v %v %v: %v, without the tree %v", x, y, z, got, want)
			}
		}
		if size := v.tree.Load().size.Load(); size > onePoint {
			t.Errorf("the new tree begins with %d", size)
		}
	}
}

// TestVisibilityShared asks from several goroutines at once while the tree grows.
func TestVisibilityShared(t *testing.T) {
	rng := newRand(t, 85)
	var r CameraRecords
	networks[0].add(&r, rng, 0, 0, 0)
	c := mustCameras(t, r)
	alone, shared := mustByImage(t, c), mustByImage(t, c)
	const n = 2000
	var p [n][3]float64
	var want [n][]int32
	for i := range p {
		p[i][0], p[i][1], p[i][2] = somePoint(rng, 0, 0, 0)
		want[i] = alone.AppendSeeing(nil, p[i][0], p[i][1], p[i][2])
	}
	var wg sync.WaitGroup
	for g := range 4 {
		wg.Go(func() {
			for i := range n {
				i = (i + g) % n
				if got := shared.AppendSeeing(nil, p[i][0], p[i][1], p[i][2]); !slices.Equal(got, want[i]) {
					t.Errorf("%v: %v, want %v", p[i], got, want[i])
					return
				}
			}
		})
	}
	wg.Wait()
}

// TestTreeSparesCameras wants the rule to decide on few cameras that do not see a point,
// near the survey and farther off, also where cameras from all of it see a point.
func TestTreeSparesCameras(t *testing.T) {
	rng := newRand(t, 89)
	var r CameraRecords
	networks[0].add(&r, rng, 512000, 7012000, 0)
	c := mustCameras(t, r)
	for k, v := range []*Visibility{mustByImage(t, c), mustByAngle(t, c, radians(30), false)} {
		for _, reach := range []float64{50, 300, 2000, 20000} {
			listed, seen := 0, 0
			const n = 300
			for range n {
				x, y, z := 512000+reach*rng.NormFloat64(), 7012000+reach*rng.NormFloat64(), -reach*rng.Float64()
				seen += len(v.AppendSeeing(nil, x, y, z))
				listed += len(v.tree.Load().cameras(v.rule, x, y, z))
			}
			if listed > 2*seen+fewInDoubt*n {
				t.Errorf("rule %d, within %v m: %d cameras listed, %d see, want at most twice as many and %d a point", k, reach, listed, seen, fewInDoubt)
			}
		}
	}
}

package demo

import (
	"path/filepath"
	"reflect"
	"testing"

	"bentray/pipeline/job"
)

// The remedies' jobs differ from the pool's in their rays and in what they write alone,
// so that the comparison is of the rays.
func TestRemediesAreThePoolsJob(t *testing.T) {
	pool := newPool(t.TempDir())
	if err := pool.writePool(); err != nil {
		t.Fatal(err)
	}
	own, err := job.Load(pool.Job)
	if err != nil {
		t.Fatal(err)
	}
	if r := own.Sensors[0].Rays; r.Solve != job.Invert || r.Residual != job.Image {
		t.Errorf("the pool's rays are %+v, want invert and image", r)
	}
	if len(pool.Remedies) != 3 {
		t.Fatalf("%d remedies, want 3", len(pool.Remedies))
	}
	for _, remedy := range pool.Remedies {
		j, err := job.Load(remedy.Job)
		if err != nil {
			t.Fatal(err)
		}
		rays := j.Sensors[0].Rays
		if rays.Solve != remedy.Name && rays.Model != remedy.Name {
			t.Errorf("%s has the rays %+v", remedy.Name, rays)
		}
		if filepath.Base(j.Output.Folder) != remedy.Name {
			t.Errorf("%s writes to %s", remedy.Name, j.Output.Folder)
		}
		for name, same := range map[string][2]any{
			"input": {j.Input, own.Input}, "water": {j.Water, own.Water}, "air": {j.Air, own.Air}, "light": {j.Light, own.Light},
			"surface": {j.Surface, own.Surface}, "limits": {j.Limits, own.Limits},
		} {
			if !reflect.DeepEqual(same[0], same[1]) {
				t.Errorf("%s: %s is %+v, want %+v", remedy.Name, name, same[0], same[1])
			}
		}
	}
}

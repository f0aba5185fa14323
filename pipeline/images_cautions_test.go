package pipeline

import (
	"context"
	"slices"
	"strings"
	"testing"
)

// Each row is a job of two cameras 50 m up with a mistake, and a piece of the caution
// that a plan must give; the first has none.
func TestImageCautions(t *testing.T) {
	const (
		head    = "camera,x,y,z,omega,phi,kappa,focal_px,width_px,height_px\n"
		cameras = head + "a,0,0,50,0,0,0,3000,4000,3000\nb,10,0,50,0,0,0,3000,4000,3000\n"
		job     = "[input]\nfiles = [\"raw/*.csv\"]\n[output]\nfolder = \"true\"\n[water]\ntemperature = 15\nsalinity = 0\n[surface]\nlevel = 0\n[rays]\nmodel = \"multiview\"\ncameras = \"cameras.csv\"\n"
	)
	told := []string{"images do not show", "the cameras all lie far", "seconds of a GPS week"}
	for _, c := range []struct{ name, cameras, job, want string }{
		{"sound", cameras, job, ""},
		{"looking up", strings.ReplaceAll(cameras, "50,0,0,0", "50,180,0,0"), job, told[0]},
		{"another system", strings.NewReplacer("a,0", "a,500000", "b,10", "b,500010").Replace(cameras), job, told[1]},
		{"week seconds", cameras, strings.Replace(job, "level = 0\n", "[surface.gauge]\nfile = \"gauge.csv\"\n", 1), told[2]},
	} {
		folder := t.TempDir()
		files{
			"raw/a.csv": "x,y,z,views,gps_time\n5,2,-1,a b,345600\n6,1,-2,a;b,345601\n", "cameras.csv": c.cameras,
			"gauge.csv": "time,level\n2026-05-01T10:00:00Z,0\n2026-05-01T11:00:00Z,0\n",
		}.write(t, folder)
		p, err := MakePlan(context.Background(), loadJob(t, folder, c.job), nil)
		if err != nil {
			t.Fatal(err)
		}
		for _, text := range told {
			if got := slices.ContainsFunc(p.Cautions, func(s string) bool { return strings.Contains(s, text) }); got != (text == c.want) && c.name != "another system" || !got && text == c.want {
				t.Errorf("%s: cautions are %q, want %q among them: %t", c.name, p.Cautions, text, text == c.want)
			}
		}
	}
}

package demo

import (
	"errors"
	"fmt"
	"path/filepath"

	"bentray/io/atomicfile"
	"bentray/pipeline/job"
)

// The files of the pool's folder, which lies below the cove's. Each remedy has a job
// file and an output folder of its name.
const (
	poolFolder  = "pool"
	poolJobFile = "pool.toml"
	cameraFile  = "cameras.csv"
)

// Remedy is a usual way to correct the points of images, for comparison: a job of the
// same survey with other rays.
type Remedy struct {
	Name      string // Vertical, Average or Intersect
	Job       string // the job file
	Corrected string // the folder that the job writes to
}

// With returns a survey as its remedy corrects it.
func (s *Survey) With(r Remedy) *Survey {
	other := *s
	other.Job, other.Corrected, other.Remedies = r.Job, r.Corrected, nil
	return &other
}

func newPool(folder string) *Survey {
	in := func(name string) string { return filepath.Join(folder, name) }
	s := &Survey{
		Title: PoolTitle, Job: in(poolJobFile), Cameras: in(cameraFile),
		Raw: in(rawFolder), Corrected: in(outputFolder), Truth: in(truthFolder), LimitM: RoundingM, bandM: 1,
	}
	for _, name := range []string{job.Vertical, job.Average, job.Intersect} {
		s.Remedies = append(s.Remedies, Remedy{Name: name, Job: in(name + ".toml"), Corrected: in(name)})
	}
	return s
}

func (s *Survey) writePool() error {
	tiles, cameras, err := fillPool()
	if err != nil {
		return err
	}
	if err := s.makeFolders(tiles); err != nil {
		return err
	}
	err = atomicfile.Write(s.Job, poolJobText()) // first, as the cove's
	for _, r := range s.Remedies {
		err = errors.Join(err, atomicfile.Write(r.Job, remedyJobText(r.Name)))
	}
	return errors.Join(err, atomicfile.Write(s.Cameras, cameraText(cameras)), s.writeTiles(tiles))
}

// fillPool finds all points and returns the tiles.
func fillPool() ([]*tile, []camera, error) {
	m, err := newMatcher()
	if err != nil {
		return nil, nil, err
	}
	var tiles []*tile
	for _, name := range []string{"head.csv", "tail.csv"} {
		tiles = append(tiles, &tile{name: name, header: imageColumns, truth: []byte(truthColumns)})
	}
	columns, rows := int(poolLengthM/spacingM), int(poolWidthM/spacingM)
	for i := range columns {
		for k := range rows {
			if f, found := m.match(float64(i)*spacingM, float64(k)*spacingM); found {
				tiles[2*i/columns].addFind(&f)
			}
		}
	}
	return tiles, m.cameras, nil
}

// poolJobText is the job, with a word on each line for those who see one for the first time.
func poolJobText() []byte {
	return imageJobText(`# A drone took images of the bed through the water, and the survey software intersected
# their rays as if there were none. This job finds where each point is instead.
`, PoolTitle, outputFolder, "full", multiviewText(job.Invert, "the point that the software would have put where the cloud has it"))
}

// remedyJobText is the job of a remedy: the pool's with another folder and other rays.
func remedyJobText(name string) []byte {
	rays := "model = \"vertical\" # depth times the ratio of indices\n"
	if name != job.Vertical {
		rays = multiviewText(name, "a usual remedy")
	}
	return imageJobText("# A usual remedy, to compare with "+poolJobFile+".\n", PoolTitle+": "+name, name, "lean", rays)
}

func multiviewText(solve, remark string) string {
	return fmt.Sprintf(`model    = "multiview"
cameras  = %q # where each image was taken from, its angles and its size
solve    = %q # %s
residual = "image" # what the software made least: distances in the images
`, cameraFile, solve, remark)
}

// imageJobText is a job for the pool: a remark, the title, the output's folder and
// provenance, and what stands below [rays].
func imageJobText(remark, title, folder, provenance, rays string) []byte {
	return fmt.Appendf(nil, `%stitle = %q

[input]
files = ["%s/*.csv"] # x y z in metres, and views: the images that a point was seen in

[output]
folder     = %q # same file names
provenance = %q # how much is added to tell how each point came about: full or lean

[water]
temperature = %.1f # degrees C, of the water on that day
salinity    = %.1f # practical salinity: fresh water

[air]
temperature = %.1f # degrees C
humidity    = %.0f # percent

[surface.plane] # of the water; it falls to the east
level   = %.2f # m, in the heights of the cloud, at this place:
at      = [%.1f, %.1f]
slope_x = %g # metres up on a metre to the east
slope_y = %g # and on a metre to the north

[rays]
%s`, remark, title, rawFolder, folder, provenance, poolTemperatureC, poolSalinity, airTemperatureC, humidityPercent,
		poolSurface.at.z, poolSurface.at.x, poolSurface.at.y, poolSurface.slopeX, poolSurface.slopeY, rays)
}

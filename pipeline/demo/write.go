package demo

import (
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"

	"bentray/io/atomicfile"
	"bentray/pipeline"
	"bentray/pipeline/job"
)

// Titles of the surveys' jobs, which their folders are known by.
const (
	Title      = "Lantern Cove, a made-up survey"
	RiverTitle = "Otterlode reach, a made-up river"
	PoolTitle  = "Tansy Pool, a made-up reach in 60 images"
)

// The files of a survey's folder.
const (
	jobFile        = "survey.toml"
	trajectoryFile = "flight.csv"
	polygonFile    = "water.geojson"
	rawFolder      = "raw"
	outputFolder   = "corrected"
	truthFolder    = "truth"
)

// Survey is a survey that was written.
type Survey struct {
	Title      string
	Job        string   // the job file
	Trajectory string   // the positions of the laser, else empty
	Polygons   string   // the extent of the water, or the zones of the river, else empty
	Waterline  string   // of the river, else empty
	Gauge      string   // of the river, else empty
	Cameras    string   // of the pool, else empty
	Remedies   []Remedy // of the pool, else none
	Raw        string   // the folder of the raw tiles
	Corrected  string   // the folder that the job writes to
	Truth      string   // the folder of the truth, row by row as the tiles
	Tiles      []string // names below Raw and Corrected, with slashes; below Truth all end in .csv
	Points     int64    // rows of all tiles
	LimitM     float64  // the most that a right correction leaves of an error, m
	bandM      float64  // thickness of a band of depths, m
}

// Write writes the surveys into a folder, which it makes where it is not there:
// the cove, and in folders of their own below it the river and the pool. It does not run
// their jobs.
//
// Errors: a *pipeline.CallError where the folder, or that of the river or the pool, holds
// anything but these surveys, which are written again, and nothing was touched; else
// those of the file system.
func Write(folder string) (cove, river, pool *Survey, err error) {
	cove, river, pool = newSurvey(folder), newRiver(filepath.Join(folder, riverFolder)), newPool(filepath.Join(folder, poolFolder))
	for _, s := range []*Survey{cove, river, pool} {
		if err := checkFolder(s); err != nil {
			return nil, nil, nil, &pipeline.CallError{Err: err}
		}
	}
	for _, write := range []func() error{cove.writeCove, river.writeRiver, pool.writePool} {
		if err := write(); err != nil {
			return nil, nil, nil, err
		}
	}
	return cove, river, pool, nil
}

func (s *Survey) writeCove() error {
	lines := flightLines()
	tiles, err := fill(lines)
	if err != nil {
		return err
	}
	if err := s.makeFolders(tiles); err != nil {
		return err
	}
	// The job file comes first: a folder with it can be written again.
	return errors.Join(
		atomicfile.Write(s.Job, jobText()),
		atomicfile.Write(s.Polygons, polygonText()),
		atomicfile.Write(s.Trajectory, trajectoryText(lines)),
		s.writeTiles(tiles),
	)
}

// writeTiles writes clouds and truth, and takes their names.
func (s *Survey) writeTiles(tiles []*tile) (err error) {
	for _, t := range tiles {
		s.Tiles = append(s.Tiles, t.name)
		s.Points += int64(t.rows)
		err = errors.Join(err, t.write(below(s.Raw, t.name)), atomicfile.Write(below(s.Truth, truthName(t.name)), t.truth))
	}
	return err
}

func newSurvey(folder string) *Survey {
	in := func(name string) string { return filepath.Join(folder, name) }
	return &Survey{
		Title: Title, Job: in(jobFile), Trajectory: in(trajectoryFile), Polygons: in(polygonFile),
		Raw: in(rawFolder), Corrected: in(outputFolder), Truth: in(truthFolder), LimitM: RoundingM,
		bandM: 2,
	}
}

// below is a file named with slashes below a folder.
func below(folder, name string) string { return filepath.Join(folder, filepath.FromSlash(name)) }

// checkFolder refuses a folder that is something else's.
func checkFolder(s *Survey) error {
	folder := filepath.Dir(s.Job)
	entries, err := os.ReadDir(folder)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return nil
	case err != nil:
		return fmt.Errorf("%s: not a folder that can be read, want a new or an empty one: %w", folder, err)
	case len(entries) == 0:
		return nil
	}
	j, err := job.Load(s.Job)
	if err != nil || j.Title != s.Title {
		return fmt.Errorf("%s: the folder is not empty and holds no survey of this demo, want a new or an empty one; nothing was written", folder)
	}
	return nil
}

// fill fires all pulses and returns the tiles.
func fill(lines []*flightLine) ([]*tile, error) {
	shooter, err := newShooter()
	if err != nil {
		return nil, err
	}
	tiles := newTiles()
	for _, l := range lines {
		for pulse := range lineS * pulsesPerS {
			shot := shooter.fire(l, pulse)
			tiles[tileOf(l, &shot)].add(&shot)
		}
	}
	return tiles, nil
}

func (s *Survey) makeFolders(tiles []*tile) error {
	for _, t := range tiles {
		for _, folder := range []string{s.Raw, s.Truth} {
			if err := os.MkdirAll(filepath.Dir(below(folder, t.name)), 0o777); err != nil {
				return err
			}
		}
	}
	return nil
}

func trajectoryText(lines []*flightLine) []byte {
	text := []byte(trajectoryColumns)
	for _, l := range lines {
		text = l.appendTrajectory(text)
	}
	return text
}

// polygonText is the extent of the water as GeoJSON (RFC 7946).
func polygonText() []byte {
	outline, hole := waterPolygon()
	text, err := json.Marshal(map[string]any{
		"type":       "Feature",
		"properties": map[string]string{"name": "Lantern Cove"},
		"geometry":   map[string]any{"type": "Polygon", "coordinates": []ring{outline, hole}},
	})
	if err != nil {
		panic("demo: " + err.Error()) // finite numbers have JSON
	}
	return append(text, '\n')
}

func jobText() []byte {
	return fmt.Appendf(nil, `title = %q

[input]
files = ["%s/**/*.csv", "%[2]s/**/*.parquet"]

[output]
folder = %[3]q

[water]
temperature = %.1f # degrees C
salinity    = %.1f

[air]
temperature = %.1f # degrees C
humidity    = %.0f   # percent

[surface]
level = %.2f # m, in the heights of the cloud

[extent]
polygons = %q

[rays]
model      = "pulse"
trajectory = %q # times are adjusted standard GPS times
max_gap    = %.0f # s
`, Title, rawFolder, outputFolder, waterTemperatureC, salinity, airTemperatureC, humidityPercent, levelM, polygonFile, trajectoryFile, maxGapS)
}

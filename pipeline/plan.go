package pipeline

import (
	"context"
	"io"
	"slices"
	"time"

	"bentray/io/cloud"
	"bentray/pipeline/job"
)

// Plan is what a run of a job would do, as far as the job, the files beside it
// and the head of every cloud tell. Lengths are in the job's units.
type Plan struct {
	Run      string // fingerprint
	Files    []PlannedFile
	LeftOut  int // matches that are outputs of earlier runs
	Roles    []RoleColumn
	Heads    Heads
	Sensors  []PlannedSensor
	Zones    *ZonesReport    // nil without
	Stations *StationsReport // nil without
	Gauge    *GaugeReport    // nil without
	Corners  [4]Corner       // of the heads' bounds; NaN where there is no surface, or the cloud alone knows it
	At       *Moment         // of the corners, where they depend on time
	Cautions []string
}

// PlannedFile is one file of a plan.
type PlannedFile struct {
	Input, Output string
	Points        int64 // estimated from the head where Exact is false
	Exact         bool
	Fresh         bool  // done already
	Err           error // why it would fail
}

// RoleColumn says which column of the first readable file plays a role.
type RoleColumn struct{ Role, Column string }

// Heads sums up the first rows of all files.
type Heads struct {
	Points   int64
	Low      [3]float64 // least x, y, z
	High     [3]float64
	Times    [2]time.Time // first and last, UTC; zero where there are none
	Outcomes map[string]int64
	Images   *ImageHeads // nil where no image made a point
}

// PlannedSensor is one sensor of a plan; indices are phase and group, referred to
// vacuum.
type PlannedSensor struct {
	Name, Model string
	Wavelength  float64 // nm
	Air         [2]float64
	Water       [2]float64      // of the job's own water; NaN where it has none
	Points      int64           // of the heads' points, those it made
	Trajectory  *TrajectoryInfo // nil where the job names none
	Cameras     *CameraInfo     // nil unless it is multiview
}

func (s *survey) planSensor(sn *sensor) PlannedSensor {
	p := PlannedSensor{Name: sn.Name, Model: sn.Rays.Model, Wavelength: sn.wavelength, Air: [2]float64{sn.airPhase, sn.airGroup}, Trajectory: sn.info}
	p.Water[0], p.Water[1] = s.constantIndex(sn)
	p.Cameras = s.planCameras(sn)
	return p
}

// TrajectoryInfo sums up the trajectory.
type TrajectoryInfo struct {
	Records int
	Times   [2]time.Time // first and last, UTC
	Low     [3]float64   // least x, y, z
	High    [3]float64
	Gap     float64 // longest time between records, s
}

// MakePlan looks ahead. It writes nothing, and tells the watcher (nil: nobody) of
// surface points that it reads. Errors are *CallErrors; files that cannot be read are
// in the plan with their error.
func MakePlan(ctx context.Context, j *job.Job, watch Watcher) (*Plan, error) {
	inputs, leftOut, err := findInputs(j)
	if err != nil {
		return nil, err
	}
	s, err := readSurvey(ctx, j, inputs, Options{Watch: watch})
	if err != nil {
		return nil, err
	}
	p := &planner{survey: s, known: readHistory(j.Resolve(j.Output.Folder)), tally: newTally()}
	p.plan = Plan{Run: s.run, LeftOut: leftOut, Zones: s.describeZones(), Stations: s.describeStations(), Gauge: s.describeGauge()}
	for _, sn := range s.sensors {
		p.plan.Sensors = append(p.plan.Sensors, s.planSensor(sn))
	}
	for _, in := range inputs {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		p.file(ctx, in)
	}
	p.finish()
	return &p.plan, nil
}

// planner gathers a plan.
type planner struct {
	*survey
	plan    Plan
	slot    slot
	tally   *tally
	known   history
	ofFiles []string // cautions of the files themselves
}

func (p *planner) file(ctx context.Context, in input) {
	f := PlannedFile{Input: in.name, Output: in.target}
	if done, err := p.fresh(ctx, in, p.known); err == nil && done != nil {
		f.Fresh = true
	}
	f.Err = inFile(in.path, p.head(in, &f))
	p.plan.Files = append(p.plan.Files, f)
}

// head corrects a file's first rows as a run would.
func (p *planner) head(in input, f *PlannedFile) error {
	file, err := p.openCloud(in, "")
	if err != nil {
		return err
	}
	defer file.Close()
	r, err := newReading(p.survey, file.Columns())
	if err != nil {
		return err
	}
	l, err := newLayout(p.survey, file.Columns(), r)
	if err != nil {
		return err
	}
	if p.plan.Roles == nil {
		p.plan.Roles = p.roles(file.Columns(), r)
	}
	if err := file.Begin(r.request, l.Layout, nil); err != nil {
		return err
	}
	for _, text := range p.cautionsOf(file, r) {
		if !slices.Contains(p.ofFiles, text) {
			p.ofFiles = append(p.ofFiles, text)
		}
	}
	c := &p.slot.chunk
	if err := file.Next(c); err == io.EOF {
		f.Exact = true
		return nil
	} else if err != nil {
		return err
	}
	if err := file.Decode(c); err != nil {
		return err
	}
	if err := p.correctChunk(c, r, l, &p.slot.work, p.tally); err != nil {
		return err
	}
	return f.count(c, file, in.bytes)
}

// count takes the points of a file's first chunk, and where that was not all
// estimates from them how many the file has.
func (f *PlannedFile) count(c *cloud.Chunk, file cloud.Rewriter, bytes int64) error {
	if f.Points, f.Exact = rowsOf(file); f.Exact {
		return nil
	}
	f.Points = int64(c.Rows)
	share := float64(c.Consumed) / float64(max(bytes, 1))
	err := file.Next(c)
	switch {
	case err == io.EOF:
		f.Exact = true
		return nil
	case err == nil && share > 0:
		f.Points = int64(float64(f.Points) / share)
	}
	return err
}

func (p *planner) roles(columns []cloud.Column, r *reading) []RoleColumn {
	var roles []RoleColumn
	add := func(role string, number int) {
		if number >= 0 {
			roles = append(roles, RoleColumn{role, columns[r.request.Numbers[number]].Name})
		}
	}
	add("x", 0)
	add("y", 1)
	add("z", 2)
	add("gps_time", r.time)
	add("origin_x", r.origin[0])
	add("origin_y", r.origin[1])
	add("origin_z", r.origin[2])
	add("surface", r.level)
	if r.views >= 0 {
		roles = append(roles, RoleColumn{"views", columns[r.request.Texts[r.views]].Name})
	}
	return roles
}

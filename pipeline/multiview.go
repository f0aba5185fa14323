package pipeline

import (
	"fmt"
	"math"

	"bentray/correct"
	"bentray/io/cloud"
)

// batchRays is about how many rays are in work at once, so that memory does not grow
// with the number of cameras that see a point.
const batchRays = 64 << 10

// batch is a run of a sensor's points with their rays.
type batch struct {
	part   *part
	from   int // row of its first point
	out    []correct.Outcome
	raw    correct.XYZ
	planes correct.Planes // at the points
	result correct.Result
	bundle correct.Bundle
	rays   *rays
}

// rays is what the rays of a batch need, one value per ray. It is reused from batch
// to batch.
type rays struct {
	solver       correct.MultiviewSolver
	start        []int32
	camera       []int32
	planes       correct.Planes
	x, y         []float64 // entries
	lastX, lastY []float64 // where the planes were taken
	moving, done []int32   // points whose entries still move, and those that have come to rest
	few          fewRays
	widest       float64 // squared tangent from the vertical of the chunk's straight rays
	images       imageCheck
	seeing       []int32

	slopeX, slopeY []float64 // of the planes at all points of a part
}

// fewRays are the rays whose planes are taken anew, side by side.
type fewRays struct {
	index  []int32
	x, y   []float64
	planes correct.Planes
	moments
	zone   []int32
	column []float64
}

// throughCameras corrects the points of a multiview sensor.
func (s *survey) throughCameras(p *part, sn *sensor, w *workspace, c *cloud.Chunk, r *reading) {
	if !s.isConstantWater() { // a ray origin comes before water in the order of outcomes
		s.eachBatch(p, sn, w, c, r, func(b *batch) { correct.MarkNoCameras(b.out, b.raw, &b.bundle) })
	}
	y := &w.rays
	y.slopeX, y.slopeY = append(y.slopeX[:0], p.planes.SlopeX...), append(y.slopeY[:0], p.planes.SlopeY...)
	s.throughWater(p, sn, w, func() { // with casts more than once, always from the same planes
		copy(p.planes.SlopeX, y.slopeX)
		copy(p.planes.SlopeY, y.slopeY)
		s.eachBatch(p, sn, w, c, r, func(b *batch) { s.solve(b, sn, w) })
		if s.hasRayPlanes(sn) {
			s.takeTrueLevels(p, w)
		}
	})
}

// eachBatch finds the rays of a part's points and hands them over, batch by batch.
func (s *survey) eachBatch(p *part, sn *sensor, w *workspace, c *cloud.Chunk, r *reading, do func(*batch)) {
	y := &w.rays
	for from, to := 0, 0; from < len(p.out); from = to {
		y.start, y.camera = append(y.start[:0], 0), y.camera[:0]
		for to = from; to < len(p.out) && len(y.camera) < batchRays; to++ {
			if p.out[to] == correct.Corrected {
				y.appendViews(sn, w, c, r, to)
			}
			y.start = append(y.start, int32(len(y.camera)))
		}
		b := p.batch(from, to, sn, w)
		b.spreadPlanes()
		do(&b)
	}
}

// appendViews appends the cameras of a point and notes how many there are.
func (y *rays) appendViews(sn *sensor, w *workspace, c *cloud.Chunk, r *reading, i int) {
	before := len(y.camera)
	var err error
	if y.camera, err = sn.appendViews(y.camera, w, c, r, i); err != nil && w.fault == nil {
		w.fault = fmt.Errorf("views of the point at %.3f, %.3f, which is of sensor %q: %w; another sensor's cameras have the id", c.Numbers[0][i], c.Numbers[1][i], sn.Name, err)
	}
	if isFirst := w.rayCount[i] != w.rayCount[i]; isFirst && r.views >= 0 && i%imageCheckStep == 0 {
		y.checkImages(sn, w, y.camera[before:], i)
	}
	w.rayCount[i] = float64(len(y.camera) - before)
	at := &sn.cameras.centres
	for _, k := range y.camera[before:] {
		dx, dy, dz := at.X[k]-w.raw.X[i], at.Y[k]-w.raw.Y[i], at.Z[k]-w.raw.Z[i]
		y.widest = max(y.widest, (dx*dx+dy*dy)/(dz*dz))
	}
}

// batch returns the points from..to with the rays found for them.
func (p *part) batch(from, to int, sn *sensor, w *workspace) batch {
	y := &w.rays
	n := len(y.camera)
	growAll(n, &y.planes.Level, &y.planes.SlopeX, &y.planes.SlopeY)
	b := batch{
		part: p, from: from, out: p.out[from:to], raw: cutXYZ(w.raw, from, to), planes: cutPlanes(p.planes, from, to), rays: y,
		result: correct.Result{
			XYZ:   cutXYZ(p.result.XYZ, from, to),
			Depth: p.result.Depth[from:to], WaterLevel: p.result.WaterLevel[from:to], EntryLevel: p.result.EntryLevel[from:to],
			IncidenceRad: p.result.IncidenceRad[from:to], RefractionRad: p.result.RefractionRad[from:to],
		},
		bundle: sn.cameras.bundle,
	}
	b.bundle.Views = correct.Views{Start: y.start, Camera: y.camera}
	b.bundle.Cameras, b.bundle.Planes = &sn.cameras.centres, y.planes
	b.bundle.Light = correct.Light{Air: sn.airPhase, Water: w.light.Water[from:to]}
	return b
}

func cutXYZ(p correct.XYZ, from, to int) correct.XYZ {
	return correct.XYZ{X: p.X[from:to], Y: p.Y[from:to], Z: p.Z[from:to]}
}

func cutPlanes(s correct.Planes, from, to int) correct.Planes {
	return correct.Planes{Level: s.Level[from:to], SlopeX: s.SlopeX[from:to], SlopeY: s.SlopeY[from:to]}
}

// spreadPlanes gives each ray the plane at its point.
func (b *batch) spreadPlanes() {
	for i := range b.out {
		for k := b.rays.start[i]; k < b.rays.start[i+1]; k++ {
			b.bundle.Planes.Level[k] = b.planes.Level[i]
			b.bundle.Planes.SlopeX[k], b.bundle.Planes.SlopeY[k] = b.planes.SlopeX[i], b.planes.SlopeY[i]
		}
	}
}

// solve corrects a batch. Where rays have planes of their own, by place or by their
// cameras' times, these are taken at the entries of the straight rays first and, under a
// curved surface, anew at those of the bent rays until no entry moves. A point
// whose entries have come to rest stays, so its result does not depend on its neighbours.
func (s *survey) solve(b *batch, sn *sensor, w *workspace) {
	y, limit := b.rays, s.job.Limits.MaxIncidence*radiansPerDegree
	b.bundle.MaxIncidenceRad = limit
	if !s.hasRayPlanes(sn) {
		y.solver.Solve(&b.result, b.out, nil, b.raw, &b.bundle)
		return
	}
	correct.Keep(&b.result, b.out, b.raw) // the solver is told of the others alone
	y.list(b.out, correct.Corrected)
	s.takeFirstPlanes(b, sn, w)
	if s.surface.curved {
		s.followEntries(b, sn, w)
	} else {
		y.solver.Solve(&b.result, b.out, nil, b.raw, &b.bundle)
	}
	b.bundle.MeanSlopes(b.planes.SlopeX, b.planes.SlopeY, b.bundle.Planes)
}

// list makes the points with an outcome those that are to be solved.
func (y *rays) list(out []correct.Outcome, of correct.Outcome) {
	y.moving, y.done = y.moving[:0], y.done[:0]
	for i, o := range out {
		if o == of {
			y.moving = append(y.moving, int32(i))
			out[i] = correct.Corrected
		}
	}
}

// takeFirstPlanes takes the planes of the moving points' rays where these are straight.
func (s *survey) takeFirstPlanes(b *batch, sn *sensor, w *workspace) {
	y, straight := b.rays, b.bundle
	growAll(len(y.camera), &y.x, &y.y, &y.lastX, &y.lastY)
	b.bundle.EntryX, b.bundle.EntryY = y.x, y.y
	straight.Solve = correct.Intersect
	y.solver.EntryPlan(y.lastX, y.lastY, b.out, y.moving, b.raw, b.raw, &straight)
	s.takeRayPlanes(b, sn, w)
}

// followEntries solves the moving points under planes that come to rest. Incidence is to be
// judged at rest: points that graze, perhaps on the way only, are followed once more with
// any incidence.
func (s *survey) followEntries(b *batch, sn *sensor, w *workspace) {
	y, limit := b.rays, b.bundle.MaxIncidenceRad
	s.bringToRest(b, sn, w)
	if y.list(b.out, correct.Grazing); len(y.moving) == 0 {
		return
	}
	b.bundle.MaxIncidenceRad, b.bundle.Warm = math.Pi/2, false
	s.takeFirstPlanes(b, sn, w)
	s.bringToRest(b, sn, w)
	b.bundle.MaxIncidenceRad = limit
	y.solver.Solve(&b.result, b.out, y.done, b.raw, &b.bundle)
}

// bringToRest solves the moving points and takes the planes of their rays anew, in turns.
func (s *survey) bringToRest(b *batch, sn *sensor, w *workspace) {
	y := b.rays
	for range meetTries {
		y.solver.Solve(&b.result, b.out, y.moving, b.raw, &b.bundle)
		b.bundle.Warm = true
		if y.settle(b); len(y.moving) == 0 {
			break
		}
		s.takeRayPlanes(b, sn, w)
	}
	for _, i := range y.moving {
		b.part.fail(b.from+int(i), correct.Unsolved)
	}
}

// settle moves points none of whose entries has moved from the moving ones to those
// that are done, and drops those that are not Corrected.
func (y *rays) settle(b *batch) {
	still := y.moving[:0]
	for _, i := range y.moving {
		switch {
		case b.out[i] != correct.Corrected:
		case y.hasMoved(i):
			first, end := y.start[i], y.start[i+1]
			copy(y.lastX[first:end], y.x[first:end])
			copy(y.lastY[first:end], y.y[first:end])
			still = append(still, i)
		default:
			y.done = append(y.done, i)
		}
	}
	y.moving = still
}

// hasMoved tells whether an entry of a point lies elsewhere than its plane was taken.
func (y *rays) hasMoved(i int32) bool {
	for k := y.start[i]; k < y.start[i+1]; k++ {
		if !(math.Hypot(y.x[k]-y.lastX[k], y.y[k]-y.lastY[k]) < meetM) {
			return true
		}
	}
	return false
}

// takeRayPlanes takes the planes of the moving points' rays at lastX, lastY.
func (s *survey) takeRayPlanes(b *batch, sn *sensor, w *workspace) {
	f := &b.rays.few
	f.gather(b, w, sn.cameras.UTC())
	s.surface.fill(f.planes, f.x, f.y, f.moments, f.zone, f.column)
	p := b.bundle.Planes
	for n, k := range f.index {
		p.Level[k], p.SlopeX[k], p.SlopeY[k] = f.planes.Level[n], f.planes.SlopeX[n], f.planes.SlopeY[n]
	}
	b.bundle.CarryToRaw(p, b.rays.moving, b.raw, b.rays.lastX, b.rays.lastY)
}

// gather lists the moving points' rays, with the places where their planes are taken and
// the times of their cameras, where they have any, or else of their points.
func (f *fewRays) gather(b *batch, w *workspace, utc []float64) {
	y := b.rays
	f.index, f.zone = f.index[:0], f.zone[:0]
	f.x, f.y, f.own, f.utc, f.column = f.x[:0], f.y[:0], f.own[:0], f.utc[:0], f.column[:0]
	for _, i := range y.moving {
		row := b.from + int(i)
		own, at := w.own[row], w.utc[row]
		for k := y.start[i]; k < y.start[i+1]; k++ {
			if utc != nil {
				own = utc[y.camera[k]]
				at = own
			}
			f.index, f.zone, f.column = append(f.index, k), append(f.zone, w.zone[row]), append(f.column, w.column[row])
			f.x, f.y = append(f.x, y.lastX[k]), append(f.y, y.lastY[k])
			f.own, f.utc = append(f.own, own), append(f.utc, at)
		}
	}
	growAll(len(f.index), &f.planes.Level, &f.planes.SlopeX, &f.planes.SlopeY)
}

// hasRayPlanes tells whether the rays of a point can have planes that differ.
func (s *survey) hasRayPlanes(sn *sensor) bool { return s.surface.curved || s.hasOwnTimes(sn) }

// hasOwnTimes tells whether a sensor's cameras have times that its surface depends on.
func (s *survey) hasOwnTimes(sn *sensor) bool {
	return sn.isMultiview() && sn.cameras.UTC() != nil && (s.surface.timed || s.surface.grid != nil)
}

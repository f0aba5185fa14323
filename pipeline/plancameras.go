package pipeline

import (
	"math"
	"slices"
	"time"

	"bentray/pipeline/job"
)

// CameraInfo sums up the cameras of a sensor, in the job's units.
type CameraInfo struct {
	Count     int
	Low, High [3]float64 // of the centres
	Rule      string     // who sees a point that names no cameras: image or angle
	Solve     string
	Residual  string
	Medium    string       // that the cameras are in: air or water
	Times     [2]time.Time // first and last, UTC; zero where they have none
}

// ImageHeads sums up the points made from images among the first rows.
type ImageHeads struct {
	Points         int64
	Views          [2]int // least and greatest number of cameras of a point
	MeanViews      float64
	Source         string     // what named the cameras: column, image or angle, or several of them
	MaxOffVertical float64    // of a straight ray from a camera to a raw point, degrees
	Lift           [2]float64 // least and greatest change of z, in the job's unit of heights; NaN where none was corrected
	MaxDrift       float64    // greatest move in plan, in the job's unit
}

func (s *survey) planCameras(sn *sensor) *CameraInfo {
	if sn.cameras == nil {
		return nil
	}
	c := &CameraInfo{
		Count: sn.cameras.Len(), Rule: sn.cameras.rule, Solve: sn.Rays.Solve, Residual: sn.residualName(), Medium: sn.Rays.CameraMedium,
	}
	if utc := sn.cameras.UTC(); utc != nil {
		c.Times = [2]time.Time{utcTime(slices.Min(utc)), utcTime(slices.Max(utc))}
	}
	c.Low, c.High = sn.cameras.Bounds()
	for _, b := range []*[3]float64{&c.Low, &c.High} {
		b[0], b[1], b[2] = b[0]/s.plan, b[1]/s.plan, b[2]/s.height
	}
	return c
}

// source says what named the cameras of points.
func (t *viewTally) source(s *survey) string {
	switch t.assumed {
	case 0:
		return "column"
	case t.points:
		return s.viewRules()
	}
	return "column and " + s.viewRules()
}

// heads sums up what a tally has of images.
func (t *viewTally) heads(s *survey) *ImageHeads {
	if t.points == 0 {
		return nil
	}
	return &ImageHeads{
		Points: t.points, Views: [2]int{int(t.views.low), int(t.views.high)}, MeanViews: float64(t.rays) / float64(t.points),
		Source: t.source(s), MaxOffVertical: math.Atan(math.Sqrt(t.widest)) / radiansPerDegree,
		Lift: [2]float64{t.lift.low / s.height, t.lift.high / s.height}, MaxDrift: t.drift.high / s.plan,
	}
}

// imageCautions says what no correction of refraction mends in points made from images.
func (s *survey) imageCautions() (cautions []string) {
	if !s.hasMultiview() {
		return nil
	}
	cautions = append(cautions, "camera poses that were adjusted through the water by software which knows of one medium only can be wrong by far more than refraction: adjust them with points on land, or check the land points of this cloud")
	inAir := func(sn *sensor) bool { return sn.isMultiview() && sn.Rays.CameraMedium == job.InAir }
	if s.surface.grid == nil && slices.ContainsFunc(s.sensors, inAir) {
		cautions = append(cautions, "waves: each image saw another surface than the smooth one of this job, and only many images of a point even that out")
	}
	return cautions
}

package pipeline

import (
	"math"

	"bentray/geo"
)

// FitReport says how points agree with the surface that was fitted to them. What
// it says of residuals, z minus the surface, is of the points that count.
type FitReport struct {
	Points   []FittedPoint // as the file has them
	Used     int           // points that count
	SetAside int           // points so far off that they do not
	RMS      float64
	Largest  float64 // magnitude
	Farthest float64 // magnitude, of the points set aside; 0 without
	Sigma    float64 // of one point, from the median; NaN where the points leave no redundancy
}

// FittedPoint is a point that a surface was fitted to. Chainage is along a profile's
// centreline, else NaN; Chainage and Residual are NaN beyond a profile's reach.
type FittedPoint struct {
	X, Y, Z, Chainage, Residual float64
	Aside                       bool
}

// describeFit reports on the points of the surface's source.
func (s *survey) describeFit(chainage, residuals []float64, aside []bool, sigma float64) FitReport {
	source := &s.surface.source
	r := FitReport{Points: make([]FittedPoint, len(residuals)), Sigma: sigma / s.height}
	square := 0.0
	for i, residual := range residuals {
		residual /= s.height
		r.Points[i] = FittedPoint{source.x[i] / s.plan, source.y[i] / s.plan, source.z[i] / s.height, math.NaN(), residual, aside[i]}
		if chainage != nil {
			r.Points[i].Chainage = chainage[i] / s.plan
		}
		switch {
		case math.IsNaN(residual):
		case aside[i]:
			r.SetAside++
			r.Farthest = max(r.Farthest, math.Abs(residual))
		default:
			r.Used++
			square += residual * residual
			r.Largest = max(r.Largest, math.Abs(residual))
		}
	}
	r.RMS = math.Sqrt(square / float64(r.Used))
	return r
}

func (s *survey) describePlane() *PlaneReport {
	p, nan := s.surface.plane, math.NaN()
	if p == nil {
		return nil
	}
	r := &PlaneReport{p.Level / s.height, p.AtX / s.plan, p.AtY / s.plan, p.SlopeX, p.SlopeY, nil, nan, nan, nan}
	if f := s.surface.fit; f != nil {
		fit := s.describeFit(nil, f.Residuals, f.IsAside, f.Sigma)
		r.Fit = &fit
		r.LevelSigma, r.SlopeXSigma, r.SlopeYSigma = f.LevelSigma/s.height, f.SlopeXSigma, f.SlopeYSigma
	}
	return r
}

// curvePoints is how many levels describe a profile.
const curvePoints = 401

func (s *survey) describeProfile() *ProfileReport {
	p := s.surface.profile
	if p == nil {
		return nil
	}
	f := p.Fit()
	r := &ProfileReport{
		Fit: s.describeFit(f.Chainage, f.Residuals, f.IsAside, f.Sigma), Beyond: f.Beyond, Falling: f.Falling, Knots: f.Knots,
		Reach: s.job.Surface.Profile.Reach, Gap: s.drop(f.Gap), Curve: s.curve(p, f.First, f.Last),
	}
	for _, step := range f.Steps {
		r.Steps = append(r.Steps, s.drop(step))
	}
	r.First, r.Last = r.Curve[0], r.Curve[len(r.Curve)-1]
	along := chainages(s.surface.source.lineX, s.surface.source.lineY)
	r.Length = along[len(along)-1] / s.plan
	return r
}

// drop returns what the level does between two points in the job's units.
func (s *survey) drop(d geo.Drop) Drop {
	return Drop{d.From / s.plan, d.To / s.plan, d.Fall / s.height}
}

// curve samples a profile from the first to the last chainage (m).
func (s *survey) curve(p *geo.Profile, first, last float64) []CurvePoint {
	at, x, y := make([]float64, curvePoints), make([]float64, curvePoints), make([]float64, curvePoints)
	for i := range at {
		at[i] = first + (last-first)*float64(i)/(curvePoints-1)
	}
	alongLine(x, y, s.surface.source.lineX, s.surface.source.lineY, at)
	level, sigma, rest := make([]float64, curvePoints), make([]float64, curvePoints), make([]float64, curvePoints)
	p.Fill(level, rest, rest, x, y)
	p.FillSigma(sigma, x, y)
	curve := make([]CurvePoint, curvePoints)
	for i := range curve {
		curve[i] = CurvePoint{at[i] / s.plan, level[i] / s.height, sigma[i] / s.height}
	}
	return curve
}

// chainages returns how far along a line its vertices lie.
func chainages(lineX, lineY []float64) []float64 {
	along := make([]float64, len(lineX))
	for i := 1; i < len(along); i++ {
		along[i] = along[i-1] + math.Hypot(lineX[i]-lineX[i-1], lineY[i]-lineY[i-1])
	}
	return along
}

// alongLine fills x and y with the positions at rising chainages of a line.
func alongLine(x, y, lineX, lineY, at []float64) {
	along := chainages(lineX, lineY)
	k := 0
	for i, s := range at {
		for k < len(along)-2 && along[k+1] < s {
			k++
		}
		share := min(max((s-along[k])/(along[k+1]-along[k]), 0), 1)
		if along[k+1] == along[k] {
			share = 0
		}
		x[i], y[i] = lineX[k]+share*(lineX[k+1]-lineX[k]), lineY[k]+share*(lineY[k+1]-lineY[k])
	}
}

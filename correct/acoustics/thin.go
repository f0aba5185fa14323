package acoustics

import "math"

// Reach is what a job asks of a profile: from where rays set out, how steeply, and how deep
// they end.
type Reach struct {
	HeadMinM, HeadMaxM       float64 // depths of the heads below the water level, metres
	AngleMinRad, AngleMaxRad float64 // launch angles from the downward vertical
	DepthM                   float64 // of the deepest point, metres
}

// Tolerance of a thinned profile, metres: the end of no ray moves by more. Thin asks half of it of
// a fan of rays, so that those between them keep the whole.
const (
	ThinnedM = 1e-3
	fanM     = ThinnedM / 2
)

// Limits of the area, metres times m/s: one to begin with at least, and one that moves nothing.
const (
	coarsest = 1e-3
	finest   = 1e-9
)

// The rays of the fan: head depths, launch angles and travel times.
const (
	fanHeads  = 3
	fanAngles = 17
	fanTimes  = 8
)

// Thin returns a profile of fewer samples whose rays end within ThinnedM of those of p, for
// the same launch and travel time, over a reach; Samples tells how many are left. It returns p
// itself where every sample is needed, and where a ray turns: what becomes of such a ray can hang on
// a single sample.
//
// A stretch of samples is replaced by the chord of its ends (Linear) or by its mean (Steps), if
// the area between the two, metres times m/s, is below a limit; else it is cut where it deviates most,
// and so on (the area is what a vertical ray's travel time feels). The limit is lowered
// until each ray of a fan over the reach (3 head depths, 17 angles, 8 times) ends within half
// of ThinnedM of where it ended. Samples among the heads and next to them all stay: the
// speed at the head sets the angles of all the ray.
func (p *Profile) Thin(r Reach) *Profile {
	f, ok := p.fan(r)
	if !ok {
		return p
	}
	heads := p.around(r.HeadMinM, r.HeadMaxM)
	for limit := max(p.roughness(), coarsest); limit > finest; limit *= 0.7 {
		kept := []int{0}
		for _, end := range append(heads, len(p.samples)-1) {
			kept = p.cut(kept, end, limit)
		}
		if len(kept) == len(p.samples) {
			return p
		}
		if q := p.through(kept); f.holds(q) {
			return q
		}
	}
	return p
}

// around returns the samples from the last one above the depths to the first one below them.
func (p *Profile) around(from, to float64) []int {
	var rows []int
	for i := range p.samples {
		isAbove := i+1 < len(p.samples) && p.samples[i+1].depth <= from
		isBelow := i > 0 && p.samples[i-1].depth >= to
		if !isAbove && !isBelow {
			rows = append(rows, i)
		}
	}
	return rows
}

// cut appends to kept the samples after its last one that stay, end included.
func (p *Profile) cut(kept []int, end int, limit float64) []int {
	start := kept[len(kept)-1]
	if end <= start {
		return kept
	}
	area, worst := p.deviation(start, end)
	if end == start+1 || area <= limit {
		return append(kept, end)
	}
	return p.cut(p.cut(kept, worst, limit), end, limit)
}

// through returns the profile with the given samples alone.
func (p *Profile) through(rows []int) *Profile {
	samples := make([]sample, len(rows))
	for k, row := range rows {
		samples[k] = p.samples[row]
		if p.kind == Steps && k+1 < len(rows) {
			samples[k].speed = p.mean(row, rows[k+1])
		}
	}
	return newProfile(samples, p.kind)
}

// mean returns the mean speed of constant layers from sample start down to sample end.
func (p *Profile) mean(start, end int) float64 {
	sum := 0.0
	for i := start; i < end; i++ {
		sum += (p.samples[i+1].depth - p.samples[i].depth) * p.samples[i].speed
	}
	return sum / (p.samples[end].depth - p.samples[start].depth)
}

// roughness returns the area between the profile and its simplest replacement, or 0 for one
// sample.
func (p *Profile) roughness() float64 {
	area, _ := p.deviation(0, len(p.samples)-1)
	return area
}

// deviation returns the area between the profile and its replacement from sample start to sample
// end, and the sample between them where they are furthest apart, or for steps the one where
// their travel times are.
func (p *Profile) deviation(start, end int) (area float64, worst int) {
	if p.kind == Steps {
		return p.stepDeviation(start, end)
	}
	a, b := p.samples[start], p.samples[end]
	last, most := 0.0, -1.0
	for i := start + 1; i <= end; i++ {
		s := p.samples[i]
		off := math.Abs(s.speed - a.speed - (b.speed-a.speed)*((s.depth-a.depth)/(b.depth-a.depth)))
		area += (last + off) / 2 * (s.depth - p.samples[i-1].depth)
		if off > most && i < end {
			most, worst = off, i
		}
		last = off
	}
	return area, worst
}

func (p *Profile) stepDeviation(start, end int) (area float64, worst int) {
	mean, sum, most := 0.0, 0.0, -1.0
	if end > start {
		mean = p.mean(start, end)
	}
	for i := start; i < end; i++ {
		part := (p.samples[i].speed - mean) * (p.samples[i+1].depth - p.samples[i].depth)
		area += math.Abs(part)
		if sum += part; math.Abs(sum) > most && i+1 < end {
			most, worst = math.Abs(sum), i+1
		}
	}
	return area, worst
}

// fan is a set of rays with their ends.
type fan []fanRay

type fanRay struct {
	depth, sin, cos, time float64
	end                   Arrival
}

// fan returns rays over a reach, the flattest last as a rule. It is false where one turns or
// does not exist.
func (p *Profile) fan(r Reach) (f fan, ok bool) {
	for a := range fanAngles {
		sin, cos := math.Sincos(r.AngleMinRad + (r.AngleMaxRad-r.AngleMinRad)*float64(a)/(fanAngles-1))
		for h := range fanHeads {
			head := r.HeadMinM + (r.HeadMaxM-r.HeadMinM)*float64(h)/(fanHeads-1)
			extent := r.DepthM - head
			if cos < 0 {
				extent = head
			}
			length := max(0, extent) / max(0.1, math.Abs(cos))
			for t := range fanTimes {
				time := length * float64(t+1) / fanTimes / p.Speed(head)
				end := p.Trace(head, sin, cos, time)
				if end.Turned || end.Fate == NoRay {
					return nil, false
				}
				f = append(f, fanRay{head, sin, cos, time, end})
			}
		}
	}
	return f, true
}

// holds reports whether all rays end near where they ended, through another profile.
func (f fan) holds(p *Profile) bool {
	for i := len(f) - 1; i >= 0; i-- {
		ray := &f[i]
		got := p.Trace(ray.depth, ray.sin, ray.cos, ray.time)
		if got.Fate != ray.end.Fate {
			return false
		}
		if got.Fate == Arrived && !(math.Hypot(got.RunM-ray.end.RunM, got.DepthM-ray.end.DepthM) <= fanM) {
			return false
		}
	}
	return true
}

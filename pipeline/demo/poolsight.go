package demo

import (
	"math"
	"math/rand/v2"
	"strconv"
)

// The matching of the images.
const (
	spacingM       = 0.4  // of the points, in plan
	maxOffNadirDeg = 50.0 // of the rays that it takes
	matchShare     = 0.4  // of the images that show a point, and in which it is found
	leastViews     = 3    // or there is no point
	loneEvery      = 1000 // points under water of which one is filled in from a single image
	shoreM         = 5.0  // so much of the land belongs to the survey
)

// find is one row of the cloud of the images, and the truth of it.
type find struct {
	bed      vec
	apparent vec // in millimetres, as the file has it
	views    []*camera
	colour   [3]int
	outcome  string  // what the correction should say
	depth    float64 // of the bed, m; below 0 on land
}

// matcher finds the points of the pool in its images. Equal seeds give equal points.
type matcher struct {
	light      light
	cameras    []camera
	random     *rand.Rand
	sightings  []sighting // of the present point
	underWater int
}

func newMatcher() (*matcher, error) {
	l, err := newLight(poolTemperatureC, poolSalinity, imageNM)
	return &matcher{light: l, cameras: poolCameras(), random: rand.New(rand.NewPCG(4, 550))}, err
}

// match looks for the point of the bed near a place some way from the corner; false
// where it is in too few images, at the water's edge or beyond the survey.
func (m *matcher) match(u, v float64) (f find, found bool) {
	x, y := poolX+u+spacingM*m.random.Float64(), poolY+v+spacingM*m.random.Float64()
	f.bed = vec{x, y, poolBedZ(x, y)}
	f.depth = poolSurface.z(x, y) - f.bed.z
	m.look(&f)
	if len(f.views) < leastViews || math.Abs(f.depth) < edgeM || math.Abs(v-poolAxisV(u)) > poolHalfM+shoreM {
		return f, false
	}
	f.apparent = triangulate(m.sightings, f.bed).round(1e3)
	f.colour = m.colour(f.depth)
	m.name(&f)
	return f, true
}

// look takes the point's sightings. Each is on the straight way from the camera to where
// the ray enters the water, or to the point itself on land.
func (m *matcher) look(f *find) {
	m.sightings = m.sightings[:0]
	for i := range m.cameras {
		c, at := &m.cameras[i], f.bed
		if f.depth > 0 {
			at = m.light.entry(poolSurface, c.centre, f.bed)
		}
		if c.shows(at) && m.random.Float64() < matchShare {
			m.sightings = append(m.sightings, c.see(at))
			f.views = append(f.views, c)
		}
	}
}

// name says what the correction should. A few points under water are filled in from a
// single image, which the cloud says by naming no other.
func (m *matcher) name(f *find) {
	f.outcome = "dry"
	if f.depth > 0 {
		f.outcome = "corrected"
		if m.underWater++; m.underWater%loneEvery == 0 {
			f.outcome, f.views = "few_rays", f.views[:1]
		}
	}
}

// colour is gravel, from which water takes the red first.
func (m *matcher) colour(depth float64) (c [3]int) {
	shade := m.random.IntN(40)
	for i, band := range [3]struct{ gravel, fade float64 }{{150, 0.6}, {140, 0.2}, {120, 0.25}} {
		c[i] = int(band.gravel*math.Exp(-band.fade*max(depth, 0))) + shade
	}
	return c
}

const imageColumns = "x,y,z,red,green,blue,views\n"

// addFind appends a point of the images.
func (t *tile) addFind(f *find) {
	t.cloud = f.appendRow(t.cloud)
	t.truth = appendTruth(t.truth, f.bed, f.depth, f.outcome)
	t.rows++
}

// appendRow appends the row of the cloud.
func (f *find) appendRow(b []byte) []byte {
	b = append(appendVec(b, f.apparent, 3), ',')
	for _, c := range f.colour {
		b = append(strconv.AppendInt(b, int64(c), 10), ',')
	}
	for i, c := range f.views {
		if i > 0 {
			b = append(b, ' ')
		}
		b = append(b, c.id...)
	}
	return append(b, '\n')
}

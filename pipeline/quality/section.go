package quality

import (
	"cmp"
	"math"
	"slices"
)

const (
	sectionPoints = 2000 // of one section, at most
	enoughPoints  = 400  // for which a section need not be widened
	widestShare   = 0.05 // of the cloud's length, the greatest half width
)

// frame is a plan frame on the main axis of some points: u along it, v to its left.
type frame struct{ x, y, cos, sin float64 }

// mainAxis returns the frame at the mean place whose axis has the greatest spread.
func mainAxis(points []sampled) frame {
	var f frame
	n := float64(len(points))
	for i := range points {
		f.x += (points[i].x - points[0].x) / n
		f.y += (points[i].y - points[0].y) / n
	}
	f.x += points[0].x
	f.y += points[0].y
	var xx, xy, yy float64
	for i := range points {
		dx, dy := points[i].x-f.x, points[i].y-f.y
		xx, xy, yy = xx+dx*dx, xy+dx*dy, yy+dy*dy
	}
	f.sin, f.cos = math.Sincos(math.Atan2(2*xy, xx-yy) / 2)
	return f
}

func (f frame) u(x, y float64) float64 { return (x-f.x)*f.cos + (y-f.y)*f.sin }
func (f frame) v(x, y float64) float64 { return (y-f.y)*f.cos - (x-f.x)*f.sin }

// turned is the frame at a place along the axis, turned to the left.
func (f frame) turned(u float64) frame {
	return frame{f.x + u*f.cos, f.y + u*f.sin, -f.sin, f.cos}
}

// sections cuts the cloud along its main axis and twice across it, at a third and
// two thirds of its points.
func (s *sample) sections() []Section {
	if len(s.list) == 0 {
		return nil
	}
	axis := mainAxis(s.list)
	along := make([]float64, len(s.list))
	for i, p := range s.list {
		along[i] = axis.u(p.x, p.y)
	}
	slices.Sort(along)
	length := along[len(along)-1] - along[0]
	var list []Section
	for _, cut := range []struct {
		name string
		frame
	}{
		{"along", axis},
		{"across, at a third", axis.turned(along[len(along)/3])},
		{"across, at two thirds", axis.turned(along[2*len(along)/3])},
	} {
		if c := s.cut(cut.frame, length); len(c.Points) > 1 {
			c.Name = cut.name
			list = append(list, c)
		}
	}
	return list
}

// cut takes the points near the axis of a frame; the strip widens until they are
// enough.
func (s *sample) cut(f frame, length float64) Section {
	half := length * widestShare / 16
	for half < length*widestShare && s.near(f, half) < enoughPoints {
		half *= 2
	}
	var points []SectionPoint
	for _, p := range s.list {
		if math.Abs(f.v(p.x, p.y)) <= half {
			points = append(points, SectionPoint{
				At: f.u(p.x, p.y), Corrected: p.z, RawAt: f.u(p.rawX, p.rawY), Raw: p.rawZ, Level: p.level,
			})
		}
	}
	slices.SortFunc(points, func(a, b SectionPoint) int {
		return cmp.Or(cmp.Compare(a.At, b.At), cmp.Compare(a.Corrected, b.Corrected))
	})
	c := Section{Halfwidth: half, SampledShare: s.share()}
	every := (len(points) + sectionPoints - 1) / sectionPoints
	for i := 0; i < len(points); i += every {
		c.Points = append(c.Points, points[i])
	}
	if every > 1 {
		c.SampledShare /= float64(every)
	}
	c.place(f)
	return c
}

func (s *sample) near(f frame, half float64) (n int) {
	for _, p := range s.list {
		if math.Abs(f.v(p.x, p.y)) <= half {
			n++
		}
	}
	return n
}

// place sets the ends, from which At counts.
func (c *Section) place(f frame) {
	if len(c.Points) == 0 {
		return
	}
	from, to := c.Points[0].At, c.Points[len(c.Points)-1].At
	c.X0, c.Y0 = f.x+from*f.cos, f.y+from*f.sin
	c.X1, c.Y1 = f.x+to*f.cos, f.y+to*f.sin
	for i := range c.Points {
		c.Points[i].At -= from
		c.Points[i].RawAt -= from
	}
}

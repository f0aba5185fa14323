package job

import (
	"cmp"
	"slices"
	"strconv"
	"strings"
)

// bases are the keys that a water surface may stand on.
var bases = []string{"level", "column", "plane", "profile", "grid"}

func (s *Surface) check(f *faults) {
	f.notBlank("surface.column", s.Column, "a column's name")
	if s.Plane != nil {
		s.Plane.check(f)
	}
	if s.Profile != nil {
		s.Profile.check(f)
	}
	if s.Grid != nil {
		s.Grid.check(f)
	}
	if s.Gauge != nil {
		s.Gauge.check(f)
	}
	if s.Separation != nil {
		f.requireText("surface.separation.file", s.Separation.File, "a file of nodes x, y, z")
	}
	s.checkBase(f)
}

// checkBase reports more than one base of the surface, and none where neither a
// gauge nor zones stand in.
func (s *Surface) checkBase(f *faults) {
	given := slices.DeleteFunc(slices.Clone(bases), func(key string) bool { return !f.has("surface." + key) })
	meant := slices.ContainsFunc(append([]string{"gauge"}, bases...), func(key string) bool { return f.meant("surface." + key) })
	switch {
	case len(given) > 1:
		f.tooMany(given)
	case !meant && !f.meant("water.zones"):
		f.addTable("surface", "has no water surface, want level, column, [surface.plane], [surface.profile], [surface.grid] or [surface.gauge], or [water] zones with levels")
	}
}

// tooMany reports water surfaces beside each other, at the last one's line.
func (f *faults) tooMany(given []string) {
	slices.SortStableFunc(given, func(a, b string) int { return cmp.Compare(f.line("surface."+a), f.line("surface."+b)) })
	where := each(given, func(key string) string {
		return key + " (line " + strconv.Itoa(f.line("surface."+key)) + ")"
	})
	f.addAt(f.line("surface."+given[len(given)-1]),
		"[surface] has "+strings.Join(where, " and ")+", want one of level, column, [surface.plane], [surface.profile] and [surface.grid]")
}

func (p *Plane) check(f *faults) {
	const table = "surface.plane."
	if f.meant(table + "waterline") {
		f.notBlank(table+"waterline", p.Waterline, "a file of points x, y, z")
		for _, key := range []string{"level", "at", "slope_x", "slope_y"} {
			f.noEffect(table+key, "with waterline", "remove waterline")
		}
		return
	}
	if !f.meant(table+"level") && !f.meant(table+"at") {
		f.addTable("surface.plane", "is not given, want level and at, or waterline")
		return
	}
	f.require(table+"level", "the elevation at the place named by at")
	f.require(table+"at", "a place [x, y]")
}

func (p *Profile) check(f *faults) {
	f.requireText("surface.profile.centreline", p.Centreline, "a GeoJSON file with one line")
	f.requireText("surface.profile.levels", p.Levels, "a file of points x, y, z")
	f.require("surface.profile.reach", "the length off the line that the surface reaches")
	f.above0("surface.profile.reach", p.Reach, "")
}

func (g *Grid) check(f *faults) {
	const points, classes, reach = "surface.grid.points", "surface.grid.classes", "surface.grid.reach"
	f.notBlank(points, g.Points, "a file of points x, y, z")
	switch {
	case f.has(points) && f.has(classes):
		f.addAt(max(f.line(points), f.line(classes)), "[surface.grid] has points (line "+strconv.Itoa(f.line(points))+
			") and classes (line "+strconv.Itoa(f.line(classes))+"), want one of them")
	case !f.meant(points) && !f.meant(classes):
		f.addTable("surface.grid", "has no surface points, want points = a file, or classes such as [41]")
	}
	g.checkClasses(f, classes)
	if g.Cell != nil {
		f.above0("surface.grid.cell", *g.Cell, "")
	}
	if !(g.Reach > 0 && g.Reach <= 50) {
		f.add(reach, "is %s, want above 0 and at most 50 cells; below 1 fills no gap", format(g.Reach))
	}
	f.above0("surface.grid.window", g.Window, " seconds")
}

// checkClasses reports classes that no point has, and sorts them.
func (g *Grid) checkClasses(f *faults, key string) {
	if f.has(key) && len(g.Classes) == 0 {
		f.add(key, "is empty, want a list of classes, such as [41]")
	}
	for i, class := range g.Classes {
		if class < 0 || class > 255 {
			f.add(key, "item %d is %d, want 0 to 255", i+1, class)
		}
	}
	slices.Sort(g.Classes)
	g.Classes = slices.Compact(g.Classes)
}

func (g *Gauge) check(f *faults) {
	f.requireText("surface.gauge.file", g.File, "a file of time and level")
	f.above0("surface.gauge.max_gap", g.MaxGap, " seconds")
}

package job

// Surface is the water surface. It stands on one of Level, Column, Plane, Profile
// and Grid. With a gauge it may have none of them: the gauge then stands on 0. With
// zones alone there is a surface where zones give levels.
type Surface struct {
	Level   *float64 `toml:"level" json:"level,omitempty"`   // one elevation
	Column  string   `toml:"column" json:"column,omitempty"` // the cloud's column that holds it
	Plane   *Plane   `toml:"plane" json:"plane,omitempty"`
	Profile *Profile `toml:"profile" json:"profile,omitempty"`
	Grid    *Grid    `toml:"grid" json:"grid,omitempty"`

	Gauge      *Gauge      `toml:"gauge" json:"gauge,omitempty"`           // added; nil: none
	Separation *Separation `toml:"separation" json:"separation,omitempty"` // added; nil: none
}

// Plane is a sloping water surface, given or fitted to a waterline: either
// Waterline is set, or all the others are.
type Plane struct {
	Level     *float64    `toml:"level" json:"level,omitempty"`         // elevation at At
	At        *[2]float64 `toml:"at" json:"at,omitempty"`               // plan position x, y
	SlopeX    *float64    `toml:"slope_x" json:"slope_x,omitempty"`     // rise over run along x, both in one unit; default 0
	SlopeY    *float64    `toml:"slope_y" json:"slope_y,omitempty"`     // the same along y
	Waterline string      `toml:"waterline" json:"waterline,omitempty"` // a file of points x, y, z at the water's edge
}

// Profile is a water surface by levels along a centreline.
type Profile struct {
	Centreline string  `toml:"centreline" json:"centreline"` // a GeoJSON file with one line
	Levels     string  `toml:"levels" json:"levels"`         // a file of points x, y, z on the water
	Reach      float64 `toml:"reach" json:"reach"`           // length, above 0: how far off the line and beyond its ends there is a surface
}

// Grid is a water surface by points on it: either Points or Classes is set.
type Grid struct {
	Points  string   `toml:"points" json:"points,omitempty"`   // a file of points x, y, z and optionally time
	Classes []int    `toml:"classes" json:"classes,omitempty"` // classifications, 0 to 255, of the clouds' own points; ascending, without repeats
	Cell    *float64 `toml:"cell" json:"cell,omitempty"`       // side of a cell, length, above 0; nil: as the points' density wants
	Reach   float64  `toml:"reach" json:"reach"`               // cells, above 0 and at most 50, that gaps are filled from; default 5
	Window  float64  `toml:"window" json:"window"`             // s, above 0, between a point and the surface points it meets; default 2
	Offset  float64  `toml:"offset" json:"offset"`             // added to every level, length; default 0
}

// Gauge is the level of the water over time.
type Gauge struct {
	File   string   `toml:"file" json:"file"`                   // a file of time and level, and of name, x, y where there are several
	Zero   float64  `toml:"zero" json:"zero"`                   // height of the gauge's zero in the cloud's heights; default 0
	MaxGap float64  `toml:"max_gap" json:"max_gap"`             // s, above 0, between its records at most; default 3600
	At     *float64 `toml:"at" form:"time" json:"at,omitempty"` // UTC seconds since 1970: the time of clouds without times; nil: none
}

// Separation takes levels to the cloud's vertical reference.
type Separation struct {
	File string `toml:"file" json:"file"` // a file of nodes x, y, z of a regular grid; z is added
}

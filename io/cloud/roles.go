package cloud

import (
	"fmt"
	"slices"
	"strings"
)

// Roles that columns play: the point record's fields of LAS 1.4 in lower snake
// case, the position a ray started from, and the cameras that saw a point.
var Roles = []string{
	"x", "y", "z", "gps_time", "intensity", "return_number", "number_of_returns", "classification",
	"scan_angle", "point_source_id", "red", "green", "blue",
	"origin_x", "origin_y", "origin_z", "views",
}

// geographic names a column of degrees, whatever its letter case.
var geographic = []string{"lon", "long", "longitude", "lat", "latitude"}

// IsGeographic tells whether a column of this name holds degrees by custom.
func IsGeographic(name string) bool {
	return slices.Contains(geographic, strings.ToLower(name))
}

// Find returns the position of the column that is called name: as written, or
// else the only one that differs from it in letter case alone. It returns -1
// where there is none, and an error where two columns answer to the name.
func Find(columns []Column, name string) (int, error) {
	exact, folded := -1, -1
	var clash string
	for i, c := range columns {
		switch {
		case c.Name == name && exact >= 0:
			return -1, fmt.Errorf("columns %d and %d are both called %q, want one", exact+1, i+1, name)
		case c.Name == name:
			exact = i
		case strings.EqualFold(c.Name, name) && folded >= 0:
			clash = c.Name
		case strings.EqualFold(c.Name, name):
			folded = i
		}
	}
	if exact >= 0 {
		return exact, nil
	}
	if clash != "" {
		return -1, fmt.Errorf("columns %q and %q both answer to %q, want one; name it in [input.columns]", columns[folded].Name, clash, name)
	}
	return folded, nil
}

// FindRole returns the position of the column that plays a role, or -1. Names
// maps roles to other column names; a mapped column must be there.
func FindRole(columns []Column, role string, names map[string]string) (int, error) {
	name, mapped := names[role]
	if !mapped {
		return Find(columns, role)
	}
	i, err := Find(columns, name)
	if err == nil && i < 0 {
		err = fmt.Errorf("no column %q, which [input.columns] names for %s; the columns are %s", name, role, Names(columns))
	}
	return i, err
}

// Coordinates returns the positions of the columns x, y and z. They must be
// there, be three, and not be degrees.
func Coordinates(columns []Column, names map[string]string) (xyz [3]int, err error) {
	for k, role := range Roles[:3] {
		i, err := FindRole(columns, role, names)
		if err != nil {
			return xyz, err
		}
		if i < 0 {
			return xyz, missingCoordinate(columns, role)
		}
		if role != "z" && IsGeographic(columns[i].Name) {
			return xyz, fmt.Errorf("column %q holds degrees, want projected coordinates for %s; project the cloud first", columns[i].Name, role)
		}
		xyz[k] = i
	}
	if xyz[0] == xyz[1] || xyz[0] == xyz[2] || xyz[1] == xyz[2] {
		return xyz, fmt.Errorf("x, y and z are columns %d, %d and %d, want three different ones", xyz[0]+1, xyz[1]+1, xyz[2]+1)
	}
	return xyz, nil
}

func missingCoordinate(columns []Column, role string) error {
	if i := slices.IndexFunc(columns, func(c Column) bool { return IsGeographic(c.Name) }); i >= 0 && role != "z" {
		return fmt.Errorf("no column for %s, and %q holds degrees; project the cloud first, its coordinates must be lengths", role, columns[i].Name)
	}
	return fmt.Errorf("no column for %s; the columns are %s; name it in [input.columns]", role, Names(columns))
}

// Names lists column names for a message, the first twenty of them.
func Names(columns []Column) string {
	const most = 20
	var b strings.Builder
	for i, c := range columns[:min(len(columns), most)] {
		if i > 0 {
			b.WriteString(", ")
		}
		b.WriteString(c.Name)
	}
	if more := len(columns) - most; more > 0 {
		fmt.Fprintf(&b, " and %d more", more)
	}
	return b.String()
}

package pipeline

import (
	"fmt"
	"io"
	"path/filepath"
	"slices"
	"strings"

	"bentray/io/cloud"
)

// StartJob looks at a cloud and writes a job file to start from: its columns and
// the roles they play stand in comments, what only the analyst knows is left to
// fill in.
func StartJob(w io.Writer, path string) error {
	f, err := openTable(path)
	if err != nil {
		return err
	}
	defer f.Close()
	columns := f.Columns()
	roles, err := playedRoles(columns)
	if err != nil {
		return inFile(path, err)
	}
	var b strings.Builder
	fmt.Fprintf(&b, "# A job to start from: fill in what stands behind # and take the # away.\n")
	fmt.Fprintf(&b, "# %s has %d columns; those with a role are marked:\n", filepath.Base(path), len(columns))
	for i, c := range columns {
		name := strings.Join(strings.Fields(c.Name), " ") // it may have line breaks
		b.WriteString(strings.TrimRight(fmt.Sprintf("#   %-20s %s", name, roles[i]), " ") + "\n")
	}
	if i := slices.IndexFunc(columns, func(c cloud.Column) bool { return cloud.IsGeographic(c.Name) }); i >= 0 {
		fmt.Fprintf(&b, "# Column %q holds degrees: project the cloud first, its coordinates must be lengths.\n", columns[i].Name)
	}
	fmt.Fprintf(&b, "\ntitle = %q\n\n[input]\nfiles = [%q]\n", "untitled survey", escapePattern(filepath.ToSlash(path)))
	b.WriteString(starterInput)
	writeMissing(&b, roles)
	b.WriteString(starterRest)
	switch {
	case hasViews(roles):
		b.WriteString(starterImages)
	case hasOrigins(roles):
		b.WriteString(starterPulse + "# ray origins come from the cloud's origin columns\n")
	default:
		b.WriteString(starterPulse + "# trajectory = \"flight.csv\"   # gps_time,x,y,z of the optical centre\n")
	}
	_, err = io.WriteString(w, b.String())
	return err
}

const starterInput = `# Set unit here where lengths are not in "m" but in "ft" or "us-ft", and time where gps_time
# is not "gps-adjusted" but "gps-week" (with week) or "utc".
`

const starterRest = `
[output]
folder = "corrected"
# decimals = 4                 # of lengths in CSV

[water]
# temperature = 17.5           # degrees C, of the day
# salinity = 34.9              # practical salinity: 0 fresh, about 35 ocean

[surface]
# level = 0.42                 # of the water, in the cloud's own heights

# A table [extent] with polygons, a GeoJSON file, limits the correction to water.

[rays]
`

const starterPulse = `model = "pulse"                # airborne laser; for images "multiview" with cameras, or "vertical" without
`

const starterImages = `model = "multiview"            # the column views names the cameras that saw each point
# cameras = "cameras.csv"      # camera,x,y,z and, where known, omega,phi,kappa
# The key residual says what the cloud's software minimised, where that is known: "image", "angle" or "equal".
`

// writeMissing offers the roles that a job needs and no column plays by its name.
func writeMissing(b *strings.Builder, roles []string) {
	needed := cloud.Roles[:3:3]
	if !hasOrigins(roles) && !hasViews(roles) {
		needed = append(needed, "gps_time")
	}
	missing := slices.DeleteFunc(slices.Clone(needed), func(role string) bool { return slices.Contains(roles, role) })
	if len(missing) == 0 {
		return
	}
	b.WriteString("[input.columns]\n")
	for _, role := range missing {
		fmt.Fprintf(b, "# %s = \"\"   # the column that holds it\n", role)
	}
}

// escapePattern writes a path as a pattern that names it alone.
func escapePattern(path string) string {
	return strings.NewReplacer(`\`, `\\`, "*", `\*`, "?", `\?`, "[", `\[`, "]", `\]`, "{", `\{`, "}", `\}`).Replace(path)
}

// playedRoles returns each column's role, or "".
func playedRoles(columns []cloud.Column) ([]string, error) {
	roles := make([]string, len(columns))
	for _, role := range cloud.Roles {
		i, err := cloud.Find(columns, role)
		if err != nil {
			return nil, err
		}
		if i >= 0 {
			roles[i] = role
		}
	}
	return roles, nil
}

func hasViews(roles []string) bool { return slices.Contains(roles, "views") }

func hasOrigins(roles []string) bool {
	return slices.Contains(roles, "origin_x") && slices.Contains(roles, "origin_y") && slices.Contains(roles, "origin_z")
}

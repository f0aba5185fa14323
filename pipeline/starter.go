package pipeline

import (
	"fmt"
	"io"
	"path/filepath"
	"slices"
	"strings"

	"bentray/io/cloud"
	"bentray/io/csvfile"
)

// IsCloud tells whether a name is that of a cloud, not of a job.
func IsCloud(path string) bool { return csvfile.IsName(path) }

// StartJob looks at a cloud and writes a job file to start from: its columns and
// the roles they play stand in comments, what only the analyst knows is left to
// fill in.
func StartJob(w io.Writer, path string) error {
	f, err := csvfile.Open(path, csvfile.Options{})
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
	fmt.Fprintf(&b, "# %s has %d columns; those with a role are marked:\n", filepath.Base(path), len(columns))
	for i, c := range columns {
		name := strings.Join(strings.Fields(c.Name), " ") // it may have line breaks
		b.WriteString(strings.TrimRight(fmt.Sprintf("#   %-20s %s", name, roles[i]), " ") + "\n")
	}
	fmt.Fprintf(&b, "\ntitle = %q\n\n[input]\nfiles = [%q]\n", "untitled survey", filepath.ToSlash(path))
	if missing := missingRoles(roles); len(missing) > 0 {
		b.WriteString("[input.columns]\n")
		for _, role := range missing {
			fmt.Fprintf(&b, "# %s = \"\"   # the column that holds it\n", role)
		}
	}
	b.WriteString(starterRest)
	if hasOrigins(roles) {
		b.WriteString("# ray origins come from the cloud's origin columns\n")
	} else {
		b.WriteString("# trajectory = \"flight.csv\"   # gps_time,x,y,z of the optical centre\n")
	}
	_, err = io.WriteString(w, b.String())
	return err
}

const starterRest = `
# Fill in what is marked with # and take the mark away.

[output]
folder = "true"

[water]
# temperature = 17.5   # degrees C, of the day
# salinity = 34.9      # practical salinity: 0 fresh, about 35 ocean

[surface]
# level = 0.42         # of the water, in the cloud's own heights

[rays]
model = "pulse"        # airborne laser; "vertical" for images without camera data
`

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

func missingRoles(roles []string) []string {
	var missing []string
	for _, need := range cloud.Roles[:3] {
		if !slices.Contains(roles, need) {
			missing = append(missing, need)
		}
	}
	return missing
}

func hasOrigins(roles []string) bool {
	return slices.Contains(roles, "origin_x") && slices.Contains(roles, "origin_y") && slices.Contains(roles, "origin_z")
}

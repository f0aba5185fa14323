package job

import "encoding/json"

// Settings returns what of the job takes part in the result, as JSON: all but
// title, files and folder, under the job file's keys. Defaults are written out,
// so that leaving a default out equals writing it; the order of keys and of the
// values of a selection, number notation and comments do not matter. Equal
// settings give equal bytes. Paths of auxiliary files are as written in the
// job, while the files' content is the caller's to add. Optional keys that have
// no constant default (range_index, say) are left out where the job has none.
//
// An error is a fault of the program: every job from Load or Parse has JSON.
func (j *Job) Settings() ([]byte, error) {
	return json.Marshal(j)
}

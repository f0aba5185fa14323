package geo

import (
	"errors"
	"fmt"
)

// atPlace (m) is the distance below which a point is at a gauge or a station and
// takes what was measured there.
const atPlace = 1e-3

// site is a named or unnamed place with the rows of a file that belong to it, in
// their order. Where the file has no places, x and y are 0.
type site struct {
	name string
	x, y float64
	rows []int
}

// label says which site it is, as a message begins.
func (s *site) label(kind string) string {
	if s.name != "" {
		return fmt.Sprintf("%s %q", kind, s.name)
	}
	return kind
}

// groupSites puts n rows together by name or, without names, by position or,
// without either, all as one. Sites come in the order of their first rows.
//
// Errors, as *RecordError: a name that is empty; a coordinate that is not finite; a
// name at two places; a place with two names.
func groupSites(kind string, n int, name []string, x, y []float64) ([]site, error) {
	var sites []site
	byName, byPlace := map[string]int{}, map[[2]float64]int{}
	for row := range n {
		s := site{}
		if x != nil {
			s.x, s.y = x[row], y[row]
		}
		place := [2]float64{s.x, s.y}
		k, known := byPlace[place]
		if name != nil {
			s.name = name[row]
			k, known = byName[s.name]
		}
		if !known {
			k = len(sites)
			sites = append(sites, s)
		}
		if err := s.check(kind, name != nil, &sites[k]); err != nil {
			return nil, &RecordError{Index: row, Err: err}
		}
		if other, taken := byPlace[place]; x != nil && taken && other != k {
			err := fmt.Errorf("%s is where %s is, want one name for one place", s.label(kind), sites[other].label(kind))
			return nil, &RecordError{Index: row, Err: err}
		}
		byName[s.name], byPlace[place] = k, k
		sites[k].rows = append(sites[k].rows, row)
	}
	return sites, nil
}

// check returns what is wrong with a row's site, given the site as its first row
// has it.
func (s *site) check(kind string, named bool, first *site) error {
	switch {
	case named && s.name == "":
		return fmt.Errorf("name of the %s is empty, want a name in every record or no names", kind)
	case !isFinite(s.x) || !isFinite(s.y):
		return errors.New("a coordinate is not finite, want x and y")
	case s.x != first.x || s.y != first.y:
		return fmt.Errorf("%s is at %s %s, before at %s %s, want one place for one name",
			s.label(kind), decimal(s.x), decimal(s.y), decimal(first.x), decimal(first.y))
	}
	return nil
}

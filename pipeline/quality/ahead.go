package quality

import "fmt"

const (
	// window is how many rows are looked ahead to tell what happened to a row.
	window = 512
	// farWindow is how many are looked ahead where the rows do not meet within the window,
	// as where a row group was lost; it bounds memory.
	farWindow = 1 << 18
	// maxFar is how many such looks at one file may be in vain.
	maxFar = 5
	// agreeing rows behind a place where two files meet again confirm it.
	agreeing = 3
	// maxSearches bounds the time spent in looking ahead in one file: later rows that
	// differ are told as changed.
	maxSearches = 5_000
)

// search looks for what happened: the next row swapped with one behind it, rows that
// one of the files lacks, or else a row that changed.
func (c *comparison) search() error {
	inPlace, err := c.meet(1, 1, agreeing)
	if err != nil {
		return err
	}
	for k := 1; k <= window; k++ {
		swapped, err := c.swapped(k)
		if err != nil {
			return err
		}
		if swapped {
			c.swap(k)
			return nil
		}
		if inPlace {
			continue
		}
		told, err := c.shifted(k)
		if told || err != nil {
			return err
		}
	}
	if !inPlace && c.far < maxFar {
		told, err := c.searchFar()
		if told || err != nil {
			return err
		}
	}
	c.changed()
	return nil
}

// searchFar looks beyond the window for rows that one file lacks. It holds no more
// chunks than the window has rows.
func (c *comparison) searchFar() (told bool, err error) {
	for k := window + 1; k <= farWindow && max(len(c.a.queue), len(c.b.queue)) <= window; k++ {
		if told, err := c.shifted(k); told || err != nil {
			return told, err
		}
	}
	c.far++
	return false, nil
}

// shifted tells of k rows that one file lacks.
func (c *comparison) shifted(k int) (told bool, err error) {
	dropped, err := c.meet(k, 0, agreeing)
	if err != nil {
		return false, err
	}
	if dropped {
		c.dropped(k)
		return true, nil
	}
	extra, err := c.meet(0, k, agreeing)
	if extra {
		c.extra(k)
	}
	return extra, err
}

// meet tells whether so many rows, from so far ahead on, have equal coordinates in
// turn, or both files end there.
func (c *comparison) meet(aheadA, aheadB, rows int) (bool, error) {
	for i := range rows {
		a, inA, err := c.key(c.a, aheadA+i)
		if err != nil {
			return false, err
		}
		b, inB, err := c.key(c.b, aheadB+i)
		if err != nil {
			return false, err
		}
		if inA != inB || a != b {
			return false, nil
		}
		if !inA {
			return true, nil
		}
	}
	return true, nil
}

func (c *comparison) key(s *side, ahead int) (uint64, bool, error) {
	chunk, at, ok, err := s.row(ahead)
	if !ok {
		return 0, false, err
	}
	return keyOf(chunk, at, c.coordinates), true, nil
}

// swapped tells whether the next row and that k behind it took each other's place.
func (c *comparison) swapped(k int) (bool, error) {
	var keys [4]uint64
	for i, at := range []struct {
		s     *side
		ahead int
	}{{c.a, 0}, {c.b, k}, {c.a, k}, {c.b, 0}} {
		key, ok, err := c.key(at.s, at.ahead)
		if !ok || err != nil {
			return false, err
		}
		keys[i] = key
	}
	return keys[0] == keys[1] && keys[2] == keys[3], nil
}

func (c *comparison) swap(k int) {
	rowA, row := c.a.done+1, c.b.done+1
	c.f.add(Finding{Kind: KindSwapped, RawRow: rowA, Row: row, Text: fmt.Sprintf("rows %d and %d are swapped", row, row+int64(k))})
	c.partners[c.b.done+int64(k)] = true
	c.skip()
}

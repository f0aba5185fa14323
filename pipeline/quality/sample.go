package quality

// sample keeps points by chance, the same ones whatever the order in which files are
// compared: those whose number hashes to a share, which halves where they are many.
type sample struct {
	mask uint64 // a point is kept where its hash has none of these bits
	list []sampled
}

// sampled is one corrected point.
type sampled struct {
	hash             uint64
	x, y, z          float64
	rawX, rawY, rawZ float64
	level            float64 // NaN where it is not known
}

// maxSample is the greatest number of points that are kept.
const maxSample = 1 << 16

// mix is the finaliser of SplitMix64 (Steele, Lea and Flood 2014, Fast splittable
// pseudorandom number generators, figure 16).
func mix(v uint64) uint64 {
	v = (v ^ v>>30) * 0xbf58476d1ce4e5b9
	v = (v ^ v>>27) * 0x94d049bb133111eb
	return v ^ v>>31
}

// takes tells whether the point with a hash is kept.
func (s *sample) takes(hash uint64) bool { return hash&s.mask == 0 }

func (s *sample) add(p sampled) {
	s.list = append(s.list, p)
	s.thin()
}

// thin halves the share until the points are few enough.
func (s *sample) thin() {
	for len(s.list) > maxSample {
		s.setMask(s.mask<<1 | 1)
	}
}

func (s *sample) setMask(mask uint64) {
	s.mask = mask
	kept := s.list[:0]
	for _, p := range s.list {
		if s.takes(p.hash) {
			kept = append(kept, p)
		}
	}
	s.list = kept
}

// join adds the points of another sample.
func (s *sample) join(o *sample) {
	mask := max(s.mask, o.mask)
	s.setMask(mask)
	o.setMask(mask)
	s.list = append(s.list, o.list...)
	s.thin()
}

// share is the part of all points that is kept.
func (s *sample) share() float64 { return 1 / (float64(s.mask) + 1) }

package parquetfile

// splitNumbers are stored as BYTE_STREAM_SPLIT: the first bytes of all values,
// then the second bytes, and so on.
type splitNumbers struct {
	kind   kind
	data   []byte
	count  int // values in the page
	at     int // the next of them
	buffer [8 * block]byte
}

func (s *splitNumbers) next(dst []float64) error {
	if len(dst) > s.count-s.at {
		return errShort
	}
	size := s.kind.size()
	for len(dst) > 0 {
		n := min(len(dst), block)
		for b := range size {
			gather(s.buffer[b:], s.data[b*s.count+s.at:][:n], size)
		}
		convert(dst[:n], s.buffer[:], s.kind)
		s.at += n
		dst = dst[n:]
	}
	return nil
}

// gather puts the bytes of src at every step-th place of dst.
func gather(dst, src []byte, step int) {
	for i, v := range src {
		dst[i*step] = v
	}
}

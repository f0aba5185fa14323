package csvfile

// candidates are the separators that are looked for, in order of preference.
var candidates = [...]separator{',', ';', '\t', blanks}

// samples are the first rows of a file as each candidate parts them, since
// where a row ends depends on where a quoted field may begin.
type samples [len(candidates)][][]byte

// detect finds the separator from the first rows of a file, as the package
// comment says; names is the known number of fields, or 0. It returns -1 where
// nothing parts the first row in two, else the candidate's index.
func detect(rows *samples, names int) int {
	if names >= 2 {
		if k := bestCandidate(rows, func(fields int) bool { return fields == names }); k >= 0 {
			return k
		}
	}
	return bestCandidate(rows, func(fields int) bool { return fields >= 2 })
}

// bestCandidate chooses among the separators that give the first row a fitting
// number of fields.
func bestCandidate(rows *samples, fits func(fields int) bool) int {
	best, score, agreeing := -1, -1, 0
	for k, s := range candidates {
		if s == blanks && best >= 0 && 2*agreeing > len(rows[best]) {
			break
		}
		if len(rows[k]) == 0 {
			continue
		}
		fields, n := agreement(rows[k], s)
		if fits(fields) && n*fields > score {
			best, score, agreeing = k, n*fields, n
		}
	}
	return best
}

// agreement returns the number of fields of the first row, and how many rows
// have as many and no quote within a field.
func agreement(rows [][]byte, s separator) (fields, agreeing int) {
	fields, _ = s.split(rows[0], nil)
	for _, row := range rows {
		if n, stray := s.split(row, nil); n == fields && stray < 0 {
			agreeing++
		}
	}
	return fields, agreeing
}

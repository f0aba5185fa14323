package csvfile

// detect finds the separator from the first rows of a file, as the package
// comment says; names is the known number of fields, or 0. It returns 0 where
// nothing parts the first row in two.
func detect(rows [][]byte, names int) separator {
	if names >= 2 {
		if s := bestSeparator(rows, func(fields int) bool { return fields == names }); s != 0 {
			return s
		}
	}
	return bestSeparator(rows, func(fields int) bool { return fields >= 2 })
}

// bestSeparator chooses among the separators that give the first row a fitting
// number of fields.
func bestSeparator(rows [][]byte, fits func(fields int) bool) separator {
	var best separator
	score, agreeing := 0, 0
	for _, s := range []separator{',', ';', '\t', blanks} {
		if s == blanks && 2*agreeing > len(rows) {
			break
		}
		fields, n := agreement(rows, s)
		if fits(fields) && n*fields > score {
			best, score, agreeing = s, n*fields, n
		}
	}
	return best
}

// agreement returns the number of fields of the first row, and how many rows
// have as many.
func agreement(rows [][]byte, s separator) (fields, agreeing int) {
	fields = s.split(rows[0], nil)
	for _, row := range rows {
		if s.split(row, nil) == fields {
			agreeing++
		}
	}
	return fields, agreeing
}

package parquetfile

import "fmt"

// FormCautions returns what File.Cautions may say of a column, each of which depends on
// the form of its file alone: whether coordinates are FLOAT, or a type is unknown.
func FormCautions(column string) []string {
	return []string{coarseCaution(column), unknownCaution(column)}
}

func coarseCaution(column string) string {
	return fmt.Sprintf("coordinates in column %q are FLOAT, of some 7 digits; take the cloud with DOUBLE ones if there is one", column)
}

func unknownCaution(column string) string {
	return fmt.Sprintf("column %q is %s; it is copied without that type's name", column, unknownType)
}

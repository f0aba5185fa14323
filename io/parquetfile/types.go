package parquetfile

import (
	"fmt"

	"github.com/xitongsys/parquet-go/parquet"
)

// unknownType is the annotation of a type younger than the structures used
// here: it is read as a union with nothing in it.
const unknownType = "of an unknown logical type"

// typeName says how a column is stored, for people: the physical type and what
// the values stand for, as in "INT64 TIMESTAMP_MICROS".
func typeName(e *parquet.SchemaElement) string {
	name := e.GetType().String()
	if a := annotation(e); a != "" {
		name += " " + a
	}
	return name
}

// annotation names the logical type by the older converted types, which have a
// short name each.
func annotation(e *parquet.SchemaElement) string {
	l := e.LogicalType
	switch {
	case l == nil && e.ConvertedType == nil:
		return ""
	case l == nil && e.GetConvertedType() == parquet.ConvertedType_DECIMAL:
		return decimalName(e.GetPrecision(), e.GetScale())
	case l == nil:
		return e.ConvertedType.String()
	case l.STRING != nil:
		return "UTF8"
	case l.INTEGER != nil:
		return integerName(l.INTEGER)
	case l.TIMESTAMP != nil:
		return timestampName(l.TIMESTAMP)
	case l.TIME != nil:
		return "TIME_" + unitName(l.TIME.Unit)
	}
	return otherAnnotation(l)
}

func otherAnnotation(l *parquet.LogicalType) string {
	switch {
	case l.MAP != nil:
		return "MAP"
	case l.LIST != nil:
		return "LIST"
	case l.ENUM != nil:
		return "ENUM"
	case l.DECIMAL != nil:
		return decimalName(l.DECIMAL.Precision, l.DECIMAL.Scale)
	case l.DATE != nil:
		return "DATE"
	case l.UNKNOWN != nil:
		return "NULL"
	case l.JSON != nil:
		return "JSON"
	case l.BSON != nil:
		return "BSON"
	case l.UUID != nil:
		return "UUID"
	}
	return unknownType
}

// timestampName ends in "local" where the times are those of no zone in particular.
func timestampName(t *parquet.TimestampType) string {
	name := "TIMESTAMP_" + unitName(t.Unit)
	if !t.IsAdjustedToUTC {
		name += " local"
	}
	return name
}

// decimalName tells the digits in all and those behind the point, which are part of what
// the stored integers are worth.
func decimalName(precision, scale int32) string {
	return fmt.Sprintf("DECIMAL(%d,%d)", precision, scale)
}

func integerName(t *parquet.IntType) string {
	if t.IsSigned {
		return fmt.Sprintf("INT_%d", t.BitWidth)
	}
	return fmt.Sprintf("UINT_%d", t.BitWidth)
}

func unitName(u *parquet.TimeUnit) string {
	switch {
	case u == nil:
		return "UNKNOWN"
	case u.MILLIS != nil:
		return "MILLIS"
	case u.MICROS != nil:
		return "MICROS"
	case u.NANOS != nil:
		return "NANOS"
	}
	return "UNKNOWN"
}

// dropUnknown takes annotations away that cannot be written again, and says so,
// one caution a column.
func dropUnknown(elements []*parquet.SchemaElement) []string {
	var cautions []string
	for _, e := range elements {
		if l := e.LogicalType; l != nil && unwritable(l) {
			e.LogicalType = nil
			cautions = append(cautions, unknownCaution(e.Name))
		}
	}
	return cautions
}

// unwritable tells whether writing the annotation is an error: a union in it
// has nothing set.
func unwritable(l *parquet.LogicalType) bool {
	switch {
	case l.CountSetFieldsLogicalType() != 1:
		return true
	case l.TIMESTAMP != nil:
		return l.TIMESTAMP.Unit == nil || l.TIMESTAMP.Unit.CountSetFieldsTimeUnit() != 1
	case l.TIME != nil:
		return l.TIME.Unit == nil || l.TIME.Unit.CountSetFieldsTimeUnit() != 1
	}
	return false
}

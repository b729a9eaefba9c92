package table

import (
	"fmt"
	"math"
	"math/big"
	"strconv"
	"time"
	"unicode/utf8"

	"github.com/parquet-go/parquet-go"
	"github.com/parquet-go/parquet-go/deprecated"
	parquetformat "github.com/parquet-go/parquet-go/format"
)

// meaning is what the values of a column stand for.
type meaning int

const (
	meansNothing meaning = iota // lists, bytes, and what is not known
	meansNumber
	meansWhole
	meansUnsigned
	meansHalf
	meansTruth
	meansText
	meansDate
	meansTime
	meansClock
)

// parquetColumn is how the values of a column are read.
type parquetColumn struct {
	meaning meaning
	scale   int           // of decimals
	unit    time.Duration // of times
	zoned   bool          // times are in UTC
	bits    int64         // of a plain value, at least
	what    string        // of values that mean nothing
}

// parquetColumnOf reads the type, in its present and its older form.
func parquetColumnOf(leaf *parquet.Column) parquetColumn {
	c := parquetColumn{what: "bytes"}
	if leaf.MaxRepetitionLevel() > 0 {
		c.what = "lists"
		return c
	}
	t := leaf.Type()
	c.bits = int64(t.Length())
	if t.Kind() == parquet.FixedLenByteArray {
		c.bits *= 8
	} else if t.Kind() == parquet.ByteArray {
		c.bits = 32 // its length
	}
	switch t.Kind() {
	case parquet.Boolean:
		c.meaning = meansTruth
	case parquet.Int32, parquet.Int64:
		c.meaning = meansWhole
	case parquet.Int96:
		c.meaning, c.unit = meansTime, time.Nanosecond
	case parquet.Float, parquet.Double:
		c.meaning = meansNumber
	}
	if logical := t.LogicalType(); logical != nil {
		switch l := logical.Value.(type) {
		case *parquetformat.StringType, *parquetformat.EnumType, *parquetformat.JsonType:
			c.meaning = meansText
		case *parquetformat.DecimalType:
			c.meaning, c.scale = meansNumber, int(l.Scale)
		case *parquetformat.DateType:
			c.meaning = meansDate
		case *parquetformat.TimestampType:
			c.meaning, c.zoned, c.unit = meansTime, l.IsAdjustedToUTC, unitOf(l.Unit)
		case *parquetformat.TimeType:
			c.meaning, c.unit = meansClock, unitOf(l.Unit)
		case *parquetformat.IntType:
			if !l.IsSigned {
				c.meaning = meansUnsigned
			}
		case *parquetformat.Float16Type:
			c.meaning = meansHalf
		}
		return c
	}
	if older := t.ConvertedType(); older != nil {
		switch *older {
		case deprecated.UTF8, deprecated.Enum, deprecated.Json:
			c.meaning = meansText
		case deprecated.Decimal:
			c.meaning = meansNumber
		case deprecated.Date:
			c.meaning = meansDate
		case deprecated.TimestampMillis, deprecated.TimestampMicros:
			c.meaning, c.zoned, c.unit = meansTime, true, time.Millisecond
			if *older == deprecated.TimestampMicros {
				c.unit = time.Microsecond
			}
		case deprecated.TimeMillis, deprecated.TimeMicros:
			c.meaning, c.unit = meansClock, time.Millisecond
			if *older == deprecated.TimeMicros {
				c.unit = time.Microsecond
			}
		case deprecated.Uint8, deprecated.Uint16, deprecated.Uint32, deprecated.Uint64:
			c.meaning = meansUnsigned
		case deprecated.Interval:
			c.meaning, c.what = meansNothing, "lengths of time"
		}
	}
	return c
}

func unitOf(u parquetformat.TimeUnit) time.Duration {
	if u.Value == nil {
		return time.Nanosecond
	}
	return u.Value.Duration()
}

// sample says what the column is, from its type alone.
func (c *parquetColumn) sample() sampleColumn {
	switch c.meaning {
	case meansNothing:
		return sampleColumn{declared: c.what}
	case meansText:
		return sampleColumn{declared: "text"}
	case meansDate, meansTime, meansClock:
		return sampleColumn{declared: "times"}
	case meansTruth:
		return sampleColumn{filled: 1, numbers: 1, truths: 1}
	}
	return sampleColumn{filled: 1, numbers: 1}
}

// number reads a value of a column of numbers; rounded tells of a whole number that no
// double holds.
func (c *parquetColumn) number(v *parquet.Value) (x float64, rounded bool) {
	switch v.Kind() {
	case parquet.Boolean:
		if v.Boolean() {
			return 1, false
		}
		return 0, false
	case parquet.Int32, parquet.Int64:
		n := int64(v.Int32())
		if v.Kind() == parquet.Int64 {
			n = v.Int64()
		} else if c.meaning == meansUnsigned {
			n = int64(uint32(n))
		}
		switch {
		case c.scale != 0:
			return decimal(big.NewInt(n), c.scale), false
		case c.meaning == meansUnsigned && n < 0:
			x = float64(uint64(n))
			return x, x >= 1<<64 || uint64(x) != uint64(n)
		}
		x = float64(n)
		return x, x >= 1<<63 || int64(x) != n
	case parquet.Float:
		return float64(v.Float()), false
	case parquet.Double:
		return v.Double(), false
	}
	b := v.ByteArray()
	if c.meaning == meansHalf && len(b) == 2 {
		return half(uint16(b[0]) | uint16(b[1])<<8), false
	}
	n := new(big.Int).SetBytes(b) // big-endian, two's complement
	if len(b) > 0 && b[0] >= 0x80 {
		n.Sub(n, new(big.Int).Lsh(big.NewInt(1), uint(8*len(b))))
	}
	return decimal(n, c.scale), false
}

// decimal is n·10^-scale, correctly rounded.
func decimal(n *big.Int, scale int) float64 {
	if n.IsInt64() && scale >= 0 && scale < len(powersOfTen) {
		if v := n.Int64(); v > -1<<53 && v < 1<<53 {
			return float64(v) / powersOfTen[scale]
		}
	}
	v, _ := strconv.ParseFloat(n.String()+"e"+strconv.Itoa(-scale), 64)
	return v
}

// half reads a number of 16 bits (IEEE 754 binary16).
func half(b uint16) float64 {
	sign, exponent, fraction := 1.0, int(b>>10&31), float64(b&1023)
	if b&0x8000 != 0 {
		sign = -1
	}
	switch exponent {
	case 0:
		return sign * math.Ldexp(fraction, -24)
	case 31:
		if fraction != 0 {
			return math.NaN()
		}
		return sign * math.Inf(1)
	}
	return sign * math.Ldexp(1024+fraction, exponent-25)
}

// appendText appends a value as text, for columns that are carried through.
func (c *parquetColumn) appendText(to []byte, v *parquet.Value) []byte {
	switch c.meaning {
	case meansDate:
		return time.Unix(0, 0).UTC().AddDate(0, 0, int(v.Int32())).AppendFormat(to, time.DateOnly)
	case meansTime:
		var t time.Time
		if v.Kind() == parquet.Int96 {
			// A day of the Julian count after nanoseconds of the day, as older writers had it.
			d := v.Int96()
			t = time.Unix((int64(d[2])-2440588)*86400, int64(uint64(d[1])<<32|uint64(d[0]))).UTC()
		} else {
			per := int64(time.Second / c.unit)
			n := v.Int64()
			whole := n / per
			if n%per < 0 {
				whole--
			}
			t = time.Unix(whole, (n-whole*per)*int64(c.unit)).UTC()
		}
		layout := "2006-01-02T15:04:05.999999999"
		if c.zoned {
			layout = time.RFC3339Nano
		}
		return t.AppendFormat(to, layout)
	case meansClock:
		n := int64(v.Int32())
		if v.Kind() == parquet.Int64 {
			n = v.Int64()
		}
		return time.Time{}.Add(time.Duration(n)*c.unit).AppendFormat(to, "15:04:05.999999999")
	case meansTruth:
		return strconv.AppendBool(to, v.Boolean())
	case meansWhole:
		if v.Kind() == parquet.Int64 {
			return strconv.AppendInt(to, v.Int64(), 10)
		}
		return strconv.AppendInt(to, int64(v.Int32()), 10)
	case meansUnsigned:
		if v.Kind() == parquet.Int64 {
			return strconv.AppendUint(to, v.Uint64(), 10)
		}
		return strconv.AppendUint(to, uint64(v.Uint32()), 10)
	case meansNumber, meansHalf:
		x, _ := c.number(v)
		return appendNumber(to, x)
	}
	if b := v.ByteArray(); utf8.Valid(b) {
		return append(to, b...)
	}
	return fmt.Appendf(to, "%x", v.ByteArray())
}

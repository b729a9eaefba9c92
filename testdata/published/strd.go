package published

import (
	"math"
	"strconv"
	"strings"
	"testing"
)

// Regression is a linear regression data set of the NIST Statistical Reference Datasets.
type Regression struct {
	Name     string
	Y        []float64
	X        Table // the regressors: those of the file, or the powers of its one column
	Origin   bool  // certified without intercept
	Estimate []float64
	Error    []float64
	Residual float64 // certified residual standard deviation
	R2       float64
}

// StRDRegression reads a linear regression file. Powers of x are multiplied out in double
// precision, lowest first.
func StRDRegression(t testing.TB, name string) Regression {
	t.Helper()
	r := Regression{Name: name}
	lines := Lines(t, "reference/nist_strd/"+name+".dat")
	data := 0
	for i, line := range lines {
		f := strings.Fields(line)
		if len(f) == 0 {
			continue
		}
		switch {
		case f[0] == "Data:":
			data = i + 1
		case f[0][0] == 'B' && len(f) == 3 && isNumber(f[0][1:]):
			if len(r.Estimate) == 0 && f[0] == "B1" {
				r.Origin = true
			}
			r.Estimate = append(r.Estimate, number(t, f[1]))
			r.Error = append(r.Error, number(t, f[2]))
		case f[0] == "Standard" && len(f) == 3 && f[1] == "Deviation":
			r.Residual = number(t, f[2])
		case f[0] == "R-Squared":
			r.R2 = number(t, f[1])
		}
	}
	slopes := len(r.Estimate)
	if !r.Origin {
		slopes--
	}
	for j := range slopes {
		r.X.Names = append(r.X.Names, "x"+strconv.Itoa(j+1))
	}
	for _, line := range lines[data:] {
		f := strings.Fields(line)
		if len(f) == 0 {
			continue
		}
		r.Y = append(r.Y, number(t, f[0]))
		if len(f) == slopes+1 {
			for _, s := range f[1:] {
				r.X.Data = append(r.X.Data, number(t, s))
			}
		} else {
			x := number(t, f[1])
			power := x
			for range slopes {
				r.X.Data = append(r.X.Data, power)
				power *= x
			}
		}
		r.X.Rows++
	}
	if r.X.Rows == 0 || slopes < 1 {
		t.Fatalf("%s: read %d rows, %d slopes", name, r.X.Rows, slopes)
	}
	return r
}

// Joint returns the regressors followed by the response, Rows×(p+1) row-major.
func (r Regression) Joint() []float64 {
	p := len(r.X.Names)
	out := make([]float64, 0, r.X.Rows*(p+1))
	for i := range r.X.Rows {
		out = append(out, r.X.Data[i*p:i*p+p]...)
		out = append(out, r.Y[i])
	}
	return out
}

// Univariate is a summary-statistics data set of the same collection.
type Univariate struct {
	Y               []float64
	Mean, Deviation float64
}

// StRDUnivariate reads a univariate file.
func StRDUnivariate(t testing.TB, name string) Univariate {
	t.Helper()
	var u Univariate
	reading := false
	for _, line := range Lines(t, "reference/nist_strd/"+name+".dat") {
		f := strings.Fields(line)
		switch {
		case len(f) == 0:
		case reading:
			for _, s := range f {
				u.Y = append(u.Y, number(t, s))
			}
		case strings.HasPrefix(f[0], "-----"):
			reading = true
		case strings.HasPrefix(line, "Sample Mean"):
			u.Mean = number(t, afterLastColon(line))
		case strings.HasPrefix(line, "Sample Standard Deviation"):
			u.Deviation = number(t, afterLastColon(line))
		}
	}
	if len(u.Y) < 3 || math.IsNaN(u.Mean) || u.Deviation == 0 {
		t.Fatalf("%s: read %d values, mean %g, deviation %g", name, len(u.Y), u.Mean, u.Deviation)
	}
	return u
}

func afterLastColon(line string) string {
	return strings.Fields(line[strings.LastIndex(line, ":")+1:])[0]
}

func isNumber(s string) bool {
	_, err := strconv.ParseFloat(s, 64)
	return err == nil
}

func number(t testing.TB, s string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

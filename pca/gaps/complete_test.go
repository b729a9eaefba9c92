package gaps_test

import (
	"math"
	"slices"
	"testing"

	"axisfold/pca/gaps"
)

func TestComplete(t *testing.T) {
	nan := math.NaN()
	x := []float64{
		1, nan, 3,
		4, 5, nan,
		nan, 8, nan,
		10, nan, 12,
	}
	missing := make([]int64, 2)
	kept := gaps.Complete(x, 4, 3, []int{0, 2}, missing, []int32{99})
	if !slices.Equal(kept, []int32{0, 3}) || !slices.Equal(missing, []int64{1, 2}) {
		t.Errorf("kept %v, missing %v", kept, missing)
	}
}

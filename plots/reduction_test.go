package plots

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"axisfold/pca"
)

// The points of a rebuilt channel have the R² that the reduction reports for it: here the
// sample holds all rows.
func TestRebuiltPointsHaveTheirR2(t *testing.T) {
	m := material(t, 8, 2, pca.Correlation, plainName)
	worst := worstRebuilt(m)
	for i, j := range worst {
		measured, made := asMade(m, j)
		mean := 0.0
		for _, v := range measured {
			mean += v / float64(len(measured))
		}
		off, all := 0.0, 0.0
		for r, v := range measured {
			off += (v - made[r]) * (v - made[r])
			all += (v - mean) * (v - mean)
		}
		if got, want := 1-off/all, m.Reduction.Channels[j].R2FromKept; math.Abs(got-want) > 1e-9 {
			t.Errorf("channel %d: R² of the points %.12f, reported %.12f", j, got, want)
		}
		if i > 0 && m.Reduction.Channels[j].R2FromKept < m.Reduction.Channels[worst[i-1]].R2FromKept {
			t.Errorf("channel %d is worse than the one before", j)
		}
	}
}

// The title tells how well the worst dropped channel is rebuilt.
func TestTradeoffTitle(t *testing.T) {
	m := material(t, 8, 2, pca.Correlation, plainName)
	worst := m.Reduction.Channels[worstRebuilt(m)[0]].R2FromKept
	title, _ := tradeoff.words(m, 0)
	if want := fmt.Sprintf("%d of 8 channels kept: they rebuild each of the others to R² %.3f or better", len(m.Reduction.Kept), worst); title != want {
		t.Errorf("%q, want %q", title, want)
	}
}

// The rule that decided stands out, those that abstain stand back.
func TestRetentionNames(t *testing.T) {
	m := material(t, 8, 2, pca.Correlation, plainName)
	if r := ruleMark(0, m.Overview[0]); !r.strong || r.faint || r.label != "parallel, percentile 95" {
		t.Errorf("%+v", r)
	}
	if r := ruleMark(2, m.Overview[2]); r.strong || !r.faint {
		t.Errorf("%+v", r)
	}
	title, subtitle := retention.words(m, 0)
	if title != "2 components kept; 1 of 2 rules say the same" || !strings.HasSuffix(subtitle, "; 1 in grey abstain") {
		t.Errorf("%q, %q", title, subtitle)
	}
}

// Intervals of loadings are to be seen.
func TestLoadingsIntervals(t *testing.T) {
	m := material(t, 8, 1, pca.Correlation, plainName)
	with := pixels(pngOf(t, m, "loadings"), ink)
	m.LoadingIntervals = nil
	if without := pixels(pngOf(t, m, "loadings"), ink); with < without+80 {
		t.Errorf("%d dark pixels with intervals, %d without", with, without)
	}
}

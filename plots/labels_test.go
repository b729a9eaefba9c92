package plots

import (
	"math/rand/v2"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"
)

// Placed labels touch neither one another nor a leader nor a point nor an edge.
func TestLabelsDoNotCollide(t *testing.T) {
	area := vg.Rectangle{Max: vg.Point{X: 400, Y: 400}}
	for _, c := range []struct{ points, spread, atLeast int }{{1, 1, 1}, {4, 150, 4}, {30, 150, 30}, {60, 150, 50}, {100, 180, 60}, {25, 12, 9}, {500, 190, 40}} {
		rng := rand.New(rand.NewPCG(uint64(c.points), 1))
		points, names := make([]vg.Point, c.points), make([]string, c.points)
		for i := range points {
			points[i] = vg.Point{X: vg.Length(200 + float64(c.spread)*(2*rng.Float64()-1)), Y: vg.Length(200 + float64(c.spread)*(2*rng.Float64()-1))}
			names[i] = plainName(i) + strings.Repeat("_x", i%5)
		}
		placed := placeLabels(area, vg.Point{X: 200, Y: 200}, names, points)
		if len(placed) < c.atLeast {
			t.Errorf("%d points within %d: %d labels, want at least %d", c.points, c.spread, len(placed), c.atLeast)
		}
		for i, a := range placed {
			if a.box.Min.X < 0 || a.box.Min.Y < 0 || a.box.Max.X > 400 || a.box.Max.Y > 400 {
				t.Errorf("%q leaves the frame", a.text)
			}
			for _, b := range placed[:i] {
				if overlap(a.box, b.box) || crosses(a.point, a.end, b.box) || crosses(b.point, b.end, a.box) || meet(a.point, a.end, b.point, b.end) {
					t.Errorf("%d points: %q and %q collide", c.points, a.text, b.text)
				}
			}
			for _, p := range points {
				if inside(a.box, p) {
					t.Errorf("%d points: %q covers a point", c.points, a.text)
				}
			}
		}
	}
}

func TestGeometry(t *testing.T) {
	at := func(x, y vg.Length) vg.Point { return vg.Point{X: x, Y: y} }
	box := vg.Rectangle{Min: at(2, 2), Max: at(4, 3)}
	for _, c := range []struct {
		a, b vg.Point
		want bool
	}{{at(0, 0), at(6, 5), true}, {at(0, 2.5), at(6, 2.5), true}, {at(3, 2.5), at(9, 9), true}, {at(0, 0), at(1, 9), false},
		{at(2.2, 0), at(2.2, 9), true}, {at(0, 3.5), at(9, 3.5), false}} {
		if got := crosses(c.a, c.b, box); got != c.want {
			t.Errorf("%v to %v: %v", c.a, c.b, got)
		}
	}
	if d := fromSegment(at(3, 4), at(0, 0), at(6, 0)); d != 4 {
		t.Errorf("beside: %v", d)
	}
	if d := fromSegment(at(9, 4), at(0, 0), at(6, 0)); d != 5 {
		t.Errorf("beyond the end: %v", d)
	}
	if d := fromSegment(at(3, 4), at(0, 0), at(0, 0)); d != 5 {
		t.Errorf("from a point: %v", d)
	}
	if meet(at(0, 0), at(1, 1), at(2, 0), at(0, 4)) || !meet(at(0, 0), at(2, 2), at(2, 0), at(0, 2)) {
		t.Error("crossing segments mistaken")
	}
}

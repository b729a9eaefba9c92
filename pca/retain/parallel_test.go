package retain

import "testing"

// As many replicates as time allows: a thousand for usual tables, fewer for large ones.
func TestUsualReplicates(t *testing.T) {
	for _, c := range []struct{ rows, p, want int }{{100, 4, 1000}, {1000, 200, 1000}, {1000000, 600, 1000}, {2001, 2000, 100}, {200, 20000, 823}} {
		if got := usualReplicates(c.p, c.rows); got != c.want {
			t.Errorf("%d rows of %d channels: %d, expected %d", c.rows, c.p, got, c.want)
		}
	}
}

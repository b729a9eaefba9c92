// Demo makes the invented tables of the demonstration: a pump hall that never stood. Run
// it from the project's folder:
//
//	go run ./testdata/demo -table pump-hall > testdata/demo/pump-hall.csv
//	go run ./testdata/demo -table bearing-temperatures > testdata/demo/bearing-temperatures.csv
//
// Nothing random but a seeded stream, numbers rounded to fixed decimals: the same bytes
// every time.
package main

import (
	"bufio"
	"flag"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"strconv"
	"time"
)

func main() {
	name := flag.String("table", "pump-hall", "pump-hall or bearing-temperatures")
	flag.Parse()
	out := bufio.NewWriter(os.Stdout)
	switch *name {
	case "pump-hall":
		pumpHall(out)
	case "bearing-temperatures":
		bearingTemperatures(out)
	default:
		fmt.Fprintf(os.Stderr, "unknown table %q\n", *name)
		os.Exit(2)
	}
	if err := out.Flush(); err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
}

// drifter is a first-order autoregressive series of unit variance.
type drifter struct {
	keep, value float64
}

func (d *drifter) next(rng *rand.Rand) float64 {
	d.value = d.keep*d.value + math.Sqrt(1-d.keep*d.keep)*rng.NormFloat64()
	return d.value
}

// channel is base + Σ weight·driver + noise, written with fixed decimals.
type channel struct {
	name, unit                string
	base                      float64
	demand, temperature, wear float64 // weights, in the channel's unit
	noise                     float64
	decimals                  int
	twin                      int // index of the channel it copies but for noise; 0 for none
}

// The hall: three stories, told by 27 channels, and one that tells nothing.
var hall = []channel{
	{"flow_main", "m3/h", 420, 95, 0, -12, 9, 1, 0},
	{"flow_count", "m3/h", 0, 0, 0, 0, 2.5, 1, 1},
	{"pressure_a", "bar", 5.20, -.52, 0, -.21, .05, 3, 0},
	{"pressure_b", "bar", .02, 0, 0, 0, .012, 3, 3},
	{"pressure_inlet", "bar", 1.42, -.13, .02, 0, .03, 3, 0},
	{"pressure_ring", "bar", 4.61, -.44, 0, -.1, .09, 3, 0},
	{"speed_1", "1/min", 1452, 61, 0, 26, 11, 0, 0},
	{"speed_2", "1/min", 1448, 58, 0, 24, 13, 0, 0},
	{"current_1", "A", 212, 31, 2, 11, 3.2, 1, 0},
	{"power_1", "kW", 118, 18.6, .8, 6.4, 1.5, 2, 0},
	{"current_2", "A", 208, 30, 2, 10, 3.6, 1, 0},
	{"power_2", "kW", 115, 17.9, .7, 6.1, 1.6, 2, 0},
	{"torque_1", "N.m", 776, 92, 4, 24, 16, 0, 0},
	{"vibration_drive", "mm/s", 1.85, .16, 0, .62, .14, 3, 0},
	{"vibration_free", "mm/s", 1.52, .12, 0, .55, .15, 3, 0},
	{"bearing_drive", "degC", 51.5, 1.9, 2.6, 4.1, .9, 2, 0},
	{"bearing_free", "degC", 48.2, 1.6, 2.7, 3.6, .9, 2, 0},
	{"winding_1", "degC", 71, 4.4, 4.9, 2.2, 1.4, 1, 0},
	{"winding_2", "degC", 70, 4.2, 5.1, 1.9, 1.5, 1, 0},
	{"water_in", "degC", 9.4, 0, 2.3, 0, .25, 2, 0},
	{"water_out", "degC", 9.9, .1, 2.2, .08, .28, 2, 0},
	{"oil", "degC", 44, 1.2, 3.4, 1.8, 1, 2, 0},
	{"room", "degC", 17.5, .3, 2.6, 0, .9, 1, 0},
	{"seal_leak", "l/h", 2.4, .1, 0, .81, .28, 2, 0},
	{"valve", "%", 61, 11.5, 0, 3.1, 1.9, 1, 0},
	{"sump_level", "m", 2.15, -.21, .03, 0, .07, 3, 0},
	{"light", "lx", 320, 0, 0, 0, 45, 0, 0},
}

const (
	rows  = 2400
	step  = 5 * time.Minute
	daily = 24 * 12 // steps in a day
)

func pumpHall(out *bufio.Writer) {
	rng := rand.New(rand.NewPCG(20, 26))
	out.WriteString("stamp,campaign,operator")
	for _, c := range hall {
		out.WriteString("," + c.name)
	}
	out.WriteString(",head_loss\n,,")
	for _, c := range hall {
		out.WriteString("," + c.unit)
	}
	out.WriteString(",m\n")
	demand, temperature, wear := drifter{keep: .97}, drifter{keep: .995}, drifter{keep: .95}
	start := time.Date(2031, 3, 3, 0, 0, 0, 0, time.UTC)
	campaigns := []string{"march-a", "march-b", "april-a", "april-b"}
	for i := range rows {
		// Four campaigns of 600 rows; wear grows within each and is put right after it.
		campaign := i / 600
		within := float64(i%600) / 600
		day := 2 * math.Pi * float64(i) / daily
		q := .8*math.Sin(day-1.9) + .25*math.Sin(2*day) + .55*demand.next(rng)
		w := .35*math.Sin(day-2.6) + .85*temperature.next(rng) + .4*(float64(campaign)-1.5)
		f := 3*(within-.5) + .35*wear.next(rng)
		if campaign > 0 && i%600 == 0 {
			start = start.Add(4 * 24 * time.Hour) // the hall stands still between campaigns
		}
		stamp := start.Add(time.Duration(i) * step)
		out.WriteString(stamp.Format("2006-01-02T15:04:05") + "," + campaigns[campaign] + "," + string("ABC"[stamp.Hour()/8]))
		values := make([]float64, len(hall))
		for j, c := range hall {
			values[j] = c.base + c.demand*q + c.temperature*w + c.wear*f
			if c.twin > 0 {
				values[j] = values[c.twin-1] + c.base
			}
			values[j] += c.noise * rng.NormFloat64()
		}
		for j, c := range hall {
			out.WriteByte(',')
			// One cell in three hundred is missing: not sent, or sent as -999.
			switch rng.IntN(600) {
			case 0:
			case 1:
				out.WriteString("-999")
			default:
				out.WriteString(fixed(values[j], c.decimals))
			}
		}
		loss := 6.2 + 1.35*q + .95*f - .22*w + .55*rng.NormFloat64()
		out.WriteString("," + fixed(loss, 3) + "\n")
	}
}

// bearingTemperatures: eight thermocouples along a housing, all in degrees Celsius, that
// follow load and surroundings; those near the shaft follow load more.
func bearingTemperatures(out *bufio.Writer) {
	rng := rand.New(rand.NewPCG(8, 31))
	load, around := drifter{keep: .9}, drifter{keep: .98}
	for j := range 8 {
		if j > 0 {
			out.WriteByte(',')
		}
		fmt.Fprintf(out, "housing_%d", j+1)
	}
	out.WriteByte('\n')
	for range 600 {
		l, a := load.next(rng), around.next(rng)
		for j := range 8 {
			if j > 0 {
				out.WriteByte(',')
			}
			near := math.Exp(-float64(j) / 3)
			out.WriteString(fixed(38+22*near+6.5*near*l+2.1*(1-.5*near)*a+(.25+.05*float64(j))*rng.NormFloat64(), 2))
		}
		out.WriteByte('\n')
	}
}

func fixed(v float64, decimals int) string { return strconv.FormatFloat(v, 'f', decimals, 64) }

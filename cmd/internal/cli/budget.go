package cli

import (
	"fmt"
	"strconv"
	"strings"

	"axisfold/cmd/internal/run"
	"axisfold/configs"
)

// budget is what --budget asks for: a number of channels to keep, or a range of numbers
// to compare.
type budget struct{ from, to int }

// parseBudget reads "8" or "4..12".
func parseBudget(text string) (budget, bool) {
	low, high, ranged := strings.Cut(text, "..")
	if !ranged {
		high = low
	}
	from, err1 := strconv.Atoi(low)
	to, err2 := strconv.Atoi(high)
	return budget{from, to}, err1 == nil && err2 == nil && from >= 1 && to >= from && (!ranged || to > from)
}

// load reads the run file with the budget: one number is reduce.size; a range is shown in
// the summary. A run file without the section gets it.
func (b budget) load(path string, o *run.Options) (*configs.File, error) {
	cfg, err := configs.Load(path, o.Set)
	if err != nil || b.from == 0 {
		return cfg, err
	}
	if cfg.Reduce == nil {
		o.Set = append(o.Set, "reduce={}")
	}
	if b.from == b.to {
		o.Set = append(o.Set, fmt.Sprintf("reduce.size=%d", b.from))
	} else {
		o.Sweep = [2]int{b.from, b.to}
	}
	return configs.Load(path, o.Set)
}

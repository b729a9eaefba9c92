package pcr

import (
	"math"

	"axisfold/pca"
)

// Press is what a pass over the rows needs to sum the squares of leave-one-out errors with
// directions fixed, Σ(e/(1-h))², for every number of components: e the residual of the
// fit and h = 1/n + Σt_a²/d_a² the leverage (no 1/n through the origin). Taking one row out
// refits the mean and the slopes on the components; directions, scaling, and order of entry stay
// those of all rows, so that the sum is smaller or larger than one where they are made anew
// (equal with all components). A pass costs rows·channels·components.
type Press struct {
	d         *pca.Decomposition
	mean      float64 // 1/n, or 0 through the origin
	most      int
	offset    []float64 // scores of the mean row
	centers   []float64 // of the responses
	entering  [][]int
	slopes    [][]float64 // by response and component
	scorer    func() *pca.Scorer
	responses int
}

// NewPress prepares the pass. joint, x, y and o are those of [Fit].
func NewPress(joint *pca.Summary, x, y []int, o Options) (*Press, error) {
	if o.ThroughOrigin {
		joint = joint.AboutOrigin()
	}
	d, projections, err := pca.DecomposeJoint(joint, x, y, o.Predictors)
	if err != nil {
		return nil, err
	}
	if err := o.checkWhich(d.Rank); err != nil {
		return nil, err
	}
	p := &Press{d: d, most: d.Rank, responses: len(y), offset: make([]float64, d.Rank)}
	if o.Most > 0 {
		p.most = min(p.most, o.Most)
	}
	if !o.ThroughOrigin {
		p.mean = 1 / float64(joint.Count())
	}
	for a := range p.offset {
		for j, v := range d.Offset {
			p.offset[a] += v * d.Vector(j, a)
		}
	}
	for i, j := range y {
		along := projections[i].Along[:d.Rank]
		slopes := make([]float64, d.Rank)
		for a, v := range along {
			slopes[a] = v / d.Length(a)
		}
		p.centers = append(p.centers, joint.Mean(j))
		order := o.enter(along)
		p.entering = append(p.entering, order[:min(len(order), p.most)])
		p.slopes = append(p.slopes, slopes)
	}
	all := pca.FirstComponents(d.Rank)
	p.scorer = func() *pca.Scorer { return d.NewScorer(all) }
	return p, nil
}

// PressSums are sums of squared leave-one-out errors by response and number of components.
// NaN stands where a row alone determines a slope, so that nothing is left to predict it.
type PressSums [][]float64

// Sums returns sums of nothing.
func (p *Press) Sums() PressSums {
	s := make(PressSums, p.responses)
	for i := range s {
		s[i] = make([]float64, p.most+1)
	}
	return s
}

// Merge adds the sums of other rows.
func (s PressSums) Merge(o PressSums) {
	for i := range s {
		for k := range s[i] {
			s[i][k] += o[i][k]
		}
	}
}

// PressRows adds rows to sums. It holds scratch space: one per goroutine.
type PressRows struct {
	p               *Press
	scorer          *pca.Scorer
	scores, t2, spe []float64
}

// Rows makes a PressRows.
func (p *Press) Rows() *PressRows { return &PressRows{p: p, scorer: p.scorer()} }

// Add adds n rows of predictors x (n×p, original units) with responses y(row, response).
func (w *PressRows) Add(to PressSums, x []float64, y func(row, response int) float64, n int) {
	p, rank := w.p, w.p.d.Rank
	if len(w.t2) < n {
		w.scores, w.t2, w.spe = make([]float64, n*rank), make([]float64, n), make([]float64, n)
	}
	w.scorer.Scores(w.scores, w.t2, w.spe, x, n)
	for r := range n {
		scores := w.scores[r*rank : (r+1)*rank]
		for i, sums := range to {
			e, left := y(r, i)-p.centers[i], 1-p.mean
			sums[0] += square(e / left)
			for k, a := range p.entering[i] {
				t := scores[a] - p.offset[a]
				e -= p.slopes[i][a] * t
				left -= square(t / p.d.Length(a))
				if left <= determined {
					for ; k < p.most; k++ {
						sums[k+1] = math.NaN()
					}
					break
				}
				sums[k+1] += square(e / left)
			}
		}
	}
}

// determined is what 1 - h falls short of, to rounding, where a row has a slope to itself.
const determined = 1e-10

func square(v float64) float64 { return v * v }

// addPress gives the steps their leave-one-out sums; NaN where no pass was made.
func (m *Model) addPress(sums []float64) {
	for k := range m.Path {
		m.Path[k].Press = math.NaN()
		if k < len(sums) {
			m.Path[k].Press = sums[k]
		}
	}
}

// press is the sums of a response, nil without a pass.
func (o *Options) press(response int) []float64 {
	if o.Press == nil {
		return nil
	}
	return o.Press[response]
}

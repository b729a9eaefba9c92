package run

import (
	"context"
	"io"
	"math"
	"slices"
	"sync"

	"axisfold/cmd/internal/report"
	"axisfold/configs"
	"axisfold/pca"
	"axisfold/pca/table"
	"axisfold/pcr"
)

// sampleRows is about how many rows the pictures of rows show.
const sampleRows = 4000

// sample is a regular sample of the complete rows, every stride-th, for pictures.
type sample struct {
	stride    int64
	scores    []float64 // rows × min(k, 2)
	width     int
	groups    []int
	names     []string
	observed  [][]float64
	predicted [][]float64
	// channels are rows × p in original units, kept for pictures of rebuilt channels.
	channels []float64
}

// rows goes through the rows once more and writes what belongs to rows: scores,
// distances, predictions and residuals.
func (w *work) rows(ctx context.Context) error {
	k := w.study.Retained()
	layout := reportLayout(w.cfg)
	models := 0
	if w.study.Regression != nil {
		models = len(w.study.Regression.Result.Models)
	}
	w.sample = sample{stride: max(1, (w.reading.complete+sampleRows-1)/sampleRows), width: min(k, 2),
		observed: make([][]float64, models), predicted: make([][]float64, models)}

	var scores, predictions, diagnostics *output
	var err error
	if w.cfg.Write.Scores {
		if scores, err = w.folder.create("tables/scores.csv"); err != nil {
			return err
		}
		defer scores.abandon()
		scores.Write(layout.ScoresHeader(k, w.rotated()))
	}
	if models > 0 && w.cfg.Write.Predictions {
		if predictions, err = w.folder.create("tables/predictions.csv"); err != nil {
			return err
		}
		defer predictions.abandon()
		predictions.Write(layout.PredictionsHeader(w.study.Regression.Smearing != nil))
	}
	if models > 0 && w.cfg.Write.Diagnostics {
		if diagnostics, err = w.folder.create("tables/diagnostics.csv"); err != nil {
			return err
		}
		defer diagnostics.abandon()
		diagnostics.Write(layout.DiagnosticsHeader())
	}
	gathered := w.newInference()
	threads := w.options.threads()
	follow := newLag(min(k, 1) + models)
	values := make([]float64, min(k, 1)+models)
	base := 0.0 // score of the mean row on C1, where a scaling does not centre at the mean
	if k > 0 {
		for j, v := range w.study.Decomposition.Offset {
			base += v * w.study.Decomposition.Vector(j, 0)
		}
	}
	makers := make([]*lineMaker, threads)
	spare := sync.Pool{New: func() any { return new(blockLines) }}
	done := int64(0)
	err = w.reading.source.each(ctx, threads, func(worker int, b *table.Block) error {
		if makers[worker] == nil {
			makers[worker] = w.newLineMaker(layout, k)
		}
		lines := spare.Get().(*blockLines)
		makers[worker].fill(lines, b, scores != nil, predictions != nil, diagnostics != nil)
		b.Result = lines
		return nil
	}, func(b *table.Block) error {
		lines := b.Result.(*blockLines)
		defer spare.Put(lines)
		w.sample.take(b, lines, done, layout.Group, w.sampled())
		for r := range b.Rows {
			at := 0
			if k > 0 {
				values[0], at = lines.scores[r*k]-base, 1
			}
			for i := range models {
				values[at+i] = lines.observed[i][r] - lines.predicted[i][r]
			}
			gathered.add(b, r, lines, follow.add(b, r, layout.Group, values))
		}
		done += int64(b.Rows)
		if err := writeLines(scores, lines.scoreText.Bytes()); err != nil {
			return err
		}
		if err := writeLines(diagnostics, lines.diagnosticText.Bytes()); err != nil {
			return err
		}
		return writeLines(predictions, lines.predictionText.Bytes())
	})
	if err != nil {
		return err
	}
	w.reading.source.close()
	w.warnOfFollowing(follow, min(k, 1))
	w.conclude(gathered)
	for _, o := range []*output{scores, predictions, diagnostics} {
		if o != nil {
			if err := o.Close(); err != nil {
				return err
			}
		}
	}
	return nil
}

func reportLayout(cfg *configs.File) report.RowLayout {
	return report.RowLayout{Time: cfg.Read.Time != "", Group: cfg.Read.Groups != ""}
}

// warnOfFollowing says where rows are not independent of the rows before them. The first
// series, if there is one, is that of C1; the rest are residuals.
func (w *work) warnOfFollowing(l *lag, scores int) {
	if scores == 1 && l.notable(0) {
		w.warn("autocorrelated-rows", "rows follow one another: C1 has an autocorrelation of %.2f at lag one, so that the %d rows say about as much as %.0f independent ones; what takes rows as independent (standard errors, rules other than parallel and parallel-shifts) is too sure of itself",
			l.correlation(0), l.rows, l.effective(0))
	}
	if w.study.Regression == nil {
		return
	}
	for i, m := range w.study.Regression.Result.Models {
		if s := scores + i; l.notable(s) {
			r := l.correlation(s)
			w.warn("autocorrelated-residuals", "%s: residuals have an autocorrelation of %.2f at lag one; the standard errors take them as independent and may be too small by a factor of about %.1f",
				m.Response, r, math.Sqrt((1+r)/(1-math.Min(r, .9999))))
		}
	}
}

func writeLines(o *output, text []byte) error {
	if o == nil {
		return nil
	}
	if _, err := o.Write(text); err != nil {
		return o.to.writeError(o.name, err)
	}
	return nil
}

// blockLines is what the rows of one block become. It is used again for later blocks:
// a large table would otherwise keep the collector of garbage busy.
type blockLines struct {
	scores                    []float64   // rows × k
	predicted                 [][]float64 // by model
	observed                  [][]float64
	basis                     [][]float64 // by model, rows × parameters
	influence                 [][]pcr.Influence
	scoreText, predictionText report.RowWriter
	diagnosticText            report.RowWriter
}

// lineMaker scores and predicts the rows of blocks and writes their lines. One per worker.
type lineMaker struct {
	w          *work
	layout     report.RowLayout
	k          int
	scorer     *pca.Scorer
	predictors []*pcr.Predictor
	x          []float64
	t2, spe    []float64
	half       [][]float64
	turned     []float64 // rotated scores of a row
}

func (w *work) newLineMaker(layout report.RowLayout, k int) *lineMaker {
	m := &lineMaker{w: w, layout: layout, k: k, turned: make([]float64, w.rotated()), scorer: w.study.Decomposition.NewScorer(pca.FirstComponents(k))}
	if r := w.study.Regression; r != nil {
		for i := range r.Result.Models {
			m.predictors = append(m.predictors, r.Result.NewPredictor(i, r.Confidence, r.Origin))
		}
	}
	m.half = make([][]float64, len(m.predictors))
	return m
}

// sized returns a slice of n numbers, the old one where it is long enough.
func sized(old []float64, n int) []float64 { return slices.Grow(old[:0], n)[:n] }

// gather returns the channels that take part of the rows of a block, row-major; into is
// used again where it is long enough.
func (w *work) gather(into []float64, b *table.Block) []float64 {
	p := len(w.active)
	into = sized(into, b.Rows*p)
	for r := range b.Rows {
		row := b.Data[r*b.Width : r*b.Width+b.Width]
		for j, i := range w.active {
			into[r*p+j] = row[i]
		}
	}
	return into
}

func (m *lineMaker) fill(out *blockLines, b *table.Block, wantScores, wantPredictions, wantDiagnostics bool) {
	n := b.Rows
	m.t2, m.spe = sized(m.t2, n), sized(m.spe, n)
	m.x = m.w.gather(m.x, b)
	out.scores = sized(out.scores, n*m.k)
	m.scorer.Scores(out.scores, m.t2, m.spe, m.x, n)
	out.scoreText.Reset()
	if wantScores {
		for r := range n {
			scores := out.scores[r*m.k : (r+1)*m.k]
			m.turn(scores)
			out.scoreText.Scores(m.layout, m.key(b, r), scores, m.t2[r], m.spe[r], m.turned)
		}
	}
	if out.predicted == nil {
		out.predicted, out.observed = make([][]float64, len(m.predictors)), make([][]float64, len(m.predictors))
		out.basis, out.influence = make([][]float64, len(m.predictors)), make([][]pcr.Influence, len(m.predictors))
	}
	for i, predictor := range m.predictors {
		out.predicted[i], out.observed[i], m.half[i] = sized(out.predicted[i], n), sized(out.observed[i], n), sized(m.half[i], n)
		predictor.Predict(out.predicted[i], m.half[i], m.x, n)
		for r := range n {
			out.observed[i][r] = b.Data[r*b.Width+m.w.roles.channels+i]
		}
		m.weigh(out, i, n)
	}
	out.diagnosticText.Reset()
	if wantDiagnostics {
		m.diagnose(out, b)
	}
	out.predictionText.Reset()
	if wantPredictions {
		for r := range n {
			for i, response := range m.w.study.Regression.Result.Models {
				var back *pcr.Smearing
				if s := m.w.study.Regression.Smearing; s != nil {
					back = &s[i]
				}
				out.predictionText.Prediction(m.layout, m.key(b, r), response.Response, out.observed[i][r], out.predicted[i][r], m.half[i][r], back, m.predictors[i].MeanHalfAt(out.influence[i][r].Leverage))
			}
		}
	}
}

func (m *lineMaker) key(b *table.Block, r int) report.RowKey {
	k := report.RowKey{Row: b.Row + int64(b.Offset[r]) + 1}
	if m.layout.Time {
		k.Time = b.Time(r)
	}
	if m.layout.Group {
		k.Group = b.Group(r)
	}
	return k
}

// sampled are the channels whose values pictures need: all when some were dropped.
func (w *work) sampled() []int {
	if w.study.Reduction == nil || w.cfg.Draw == nil {
		return nil
	}
	return w.active
}

// take adds every stride-th row of the block, whose first row is number first among the
// complete ones.
func (s *sample) take(b *table.Block, lines *blockLines, first int64, grouped bool, active []int) {
	k := 0
	if b.Rows > 0 {
		k = len(lines.scores) / b.Rows
	}
	for r := range b.Rows {
		if (first+int64(r))%s.stride != 0 {
			continue
		}
		s.scores = append(s.scores, lines.scores[r*k:r*k+s.width]...)
		if grouped {
			name := string(b.Group(r))
			at := slices.Index(s.names, name)
			if at < 0 {
				at = len(s.names)
				s.names = append(s.names, name)
			}
			s.groups = append(s.groups, at)
		}
		for _, j := range active {
			s.channels = append(s.channels, b.Data[r*b.Width+j])
		}
		for i := range lines.predicted {
			s.observed[i] = append(s.observed[i], lines.observed[i][r])
			s.predicted[i] = append(s.predicted[i], lines.predicted[i][r])
		}
	}
}

// abandon closes a file that is not going to be finished; after Close it does nothing.
func (o *output) abandon() { o.file.Close() }

var _ io.WriteCloser = (*output)(nil)

package plots

import (
	"io"
	"math"
	"strings"
	"testing"

	"axisfold/pca"
)

// What cannot be drawn is refused by picture and number before any file is opened.
func TestRefusals(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for _, c := range []struct {
		spoil func(m *Material)
		want  string
	}{
		{func(m *Material) { m.Decomposition = nil }, "pictures: nothing was decomposed"},
		{func(m *Material) { *m = Material{Decomposition: &pca.Decomposition{}} }, "pictures: nothing was decomposed"},
		{func(m *Material) { m.Decomposition.Values[1] = nan }, "pictures: eigenvalue 2 is NaN, want a number that can be drawn"},
		{func(m *Material) { m.Decomposition.Values[0] = inf }, "pictures: eigenvalue 1 is +Inf"},
		{func(m *Material) { m.Decomposition.Total = 0 }, "pictures: all variances add up to 0"},
		{func(m *Material) { m.Decomposition.Vectors = m.Decomposition.Vectors[1:] }, "pictures: 8 entries of eigenvectors, want 9"},
		{func(m *Material) { m.Verdict.Components = 4 }, "pictures: 4 components kept of 3"},
		{func(m *Material) { m.SimilarOrder = []int{0, 1, 1} }, "pictures: the order of the channels does not hold each of the 3 once"},
		{func(m *Material) { m.SimilarOrder = []int{0, 1} }, "pictures: the order of the channels does not hold each of the 3 once"},
		{func(m *Material) { m.Verdict.Reference[2] = nan }, "picture scree: reference 3 is NaN"},
		{func(m *Material) { m.Decomposition.Vectors[3] = nan }, `picture loadings: channel "channel_2" on C1: loading is NaN`},
		{func(m *Material) { m.LoadingIntervals[3].Upper = inf }, `picture loadings: channel "channel_2" on C2: upper limit is +Inf`},
		{func(m *Material) { m.LoadingIntervals = m.LoadingIntervals[1:] }, "picture loadings: 5 intervals of loadings, want 6"},
		{func(m *Material) { m.Rotation.Loadings[2] = nan }, "picture rotated-loadings: rotated loading 3 is NaN"},
		{func(m *Material) { m.Overview[1].Components = -1 }, `picture retention: rule "share" keeps -1 components`},
		{func(m *Material) { m.Reduction.Curve[0].MeanR2 = nan }, "picture tradeoff: with 1 kept: mean R² is NaN"},
		{func(m *Material) { m.ChannelSample[2] = nan }, "picture rebuilt: measured value 3 is NaN"},
		{func(m *Material) { m.ChannelSample = m.ChannelSample[1:] }, "picture rebuilt: 899 measured values, want 900"},
		{func(m *Material) { m.Reduction.Channels[m.Reduction.Dropped[0]].Intercept = inf }, "picture rebuilt: channel "},
		{func(m *Material) { m.Scores[3] = -inf }, "picture scores-plane: score 4 is -Inf"},
		{func(m *Material) { m.Scores = m.Scores[2:] }, "picture scores-plane: 598 scores, want 600"},
		{func(m *Material) { m.Groups = m.Groups[1:] }, "picture scores-plane: 299 group codes, want 300"},
		{func(m *Material) { m.Groups[4] = 7 }, "picture scores-plane: row 5 is of group 7, but 3 groups have names"},
		{func(m *Material) { m.Correlations[1] = nan }, "picture correlation-map: correlation 2 is NaN"},
		{func(m *Material) { m.Correlations = m.Correlations[1:] }, "picture correlation-map: 8 correlations, want 9"},
		{func(m *Material) { m.Tree.Joins[1].Distance = nan }, "picture dendrogram: distance of a join is NaN"},
		{func(m *Material) { m.Tree.Joins[0].B = 3 }, "picture dendrogram: join 1 puts together what comes after it"},
		{func(m *Material) { m.Tree.Joins = m.Tree.Joins[1:] }, "picture dendrogram: 1 joins of channels, want 2"},
		{func(m *Material) { m.Regression.Models[0].Path[1].RootMean = nan }, "picture validation: outcome on 1 component: error of the fit is NaN"},
		{func(m *Material) { m.Regression.Models[0].Path[1].CV = inf }, "picture validation: outcome on 1 component: error of held-out rows is +Inf"},
		{func(m *Material) { m.Regression.Models[0].Components = 9 }, "picture validation: outcome: a model on 9 components, but errors of only 3"},
		{func(m *Material) { m.Regression.Models[0].Terms[2].Standardized = inf }, `picture coefficients: outcome, channel "channel_3": standardized coefficient is +Inf`},
		{func(m *Material) { m.Regression.Models[0].Terms = nil }, "picture coefficients: outcome: no coefficients"},
		{func(m *Material) { m.Observed[0][0] = 1e200 }, "picture predictions: outcome: observed value 1 is 1e+200"},
		{func(m *Material) { m.Predicted[0] = m.Predicted[0][1:] }, "picture predictions: outcome: want as many predicted as observed rows"},
	} {
		m := material(t, 3, 2, pca.Correlation, plainName)
		c.spoil(m)
		err := Draw(m, Formats, func(name string) (io.WriteCloser, error) {
			t.Errorf("%s: opened %s", c.want, name)
			return nil, io.ErrClosedPipe
		})
		if err == nil || !strings.HasPrefix(err.Error(), c.want) {
			t.Errorf("%v, want %s", err, c.want)
		}
	}
}

func TestUnknownFormat(t *testing.T) {
	err := Draw(material(t, 3, 2, pca.Correlation, plainName), []string{"svg", "gif"}, func(string) (io.WriteCloser, error) {
		t.Error("opened a file")
		return nil, io.ErrClosedPipe
	})
	if err == nil || err.Error() != `pictures: unknown format "gif"; known: svg, png, pdf` {
		t.Error(err)
	}
}

// failing fails at its n-th write or on closing.
type failing struct{ atClose bool }

func (f failing) Write(b []byte) (int, error) {
	if f.atClose {
		return len(b), nil
	}
	return 0, io.ErrShortWrite
}

func (failing) Close() error { return io.ErrClosedPipe }

// A disk that fails is told of, with the picture.
func TestFailingFiles(t *testing.T) {
	m := material(t, 3, 2, pca.Correlation, plainName)
	for _, c := range []struct {
		open func(string) (io.WriteCloser, error)
		want error
	}{
		{func(string) (io.WriteCloser, error) { return nil, io.ErrNoProgress }, io.ErrNoProgress},
		{func(string) (io.WriteCloser, error) { return failing{}, nil }, io.ErrShortWrite},
		{func(string) (io.WriteCloser, error) { return failing{atClose: true}, nil }, io.ErrClosedPipe},
	} {
		if err := Draw(m, []string{"svg"}, c.open); err == nil || err.Error() != "picture scree: "+c.want.Error() {
			t.Errorf("%v, want %v", err, c.want)
		}
	}
}

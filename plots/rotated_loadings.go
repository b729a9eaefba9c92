package plots

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"axisfold/pca"
)

var rotatedLoadings = Picture{Name: "rotated-loadings",
	Caption: "Loadings of the channels on the rotated components, like channels beside one another. The components span what the kept ones span, turned so that each is carried by few channels.",
	ready:   func(m *Material) bool { return m.Rotation != nil },
	check: func(m *Material, _ int) error {
		p := len(m.Decomposition.Channels)
		if err := counts("rotated loadings", len(m.Rotation.Loadings), p*m.Rotation.Components()); err != nil {
			return err
		}
		return allFinite("rotated loading", m.Rotation.Loadings)
	},
	words: func(m *Material, _ int) (title, subtitle string) {
		r, p := m.Rotation, len(m.Decomposition.Channels)
		k := r.Components()
		subtitle = string(r.Method)
		if m.Decomposition.Matrix == pca.Correlation {
			subtitle += "; loading: deviations of a channel for one deviation of the component"
		}
		if k > mostPanels {
			subtitle += fmt.Sprintf("; the first %d of %d", mostPanels, k)
		}
		if p > mostRows {
			subtitle += fmt.Sprintf("; the %d channels of %d with the largest loadings", mostRows, p)
		}
		return fmt.Sprintf("What the %d components are made of once rotated", k), subtitle
	},
	height: func(m *Material, _ int) vg.Length {
		p := min(len(m.Decomposition.Channels), mostRows)
		return rowHeight(p)*vg.Length(p) + panelHead + rowStep
	},
	draw: func(m *Material, _ int, c draw.Canvas) {
		r := m.Rotation
		k := min(r.Components(), mostPanels)
		top := func(j int) float64 {
			most := 0.0
			for a := range k {
				most = math.Max(most, math.Abs(r.Loading(j, a)))
			}
			return most
		}
		order := largest(channelOrder(m), mostRows, top)
		limit := 0.0
		if m.Decomposition.Matrix == pca.Correlation {
			limit = 1
		}
		for _, j := range order {
			limit = math.Max(limit, top(j)) // of promax above 1, where components correlate
		}
		if limit == 0 {
			limit = 1
		}
		none := func(int, int) (low, high float64, ok bool) { return 0, 0, false }
		drawPanels(c, m, order, limit, panelSet{k, func(a int) string { return fmt.Sprintf("R%d", a+1) },
			func(a int) float64 { return r.Variances[a] / m.Decomposition.Total }, r.Loading, none})
	}}

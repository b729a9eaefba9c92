package pca

// DataError says that the data cannot carry what was asked. Error has the form
// `channel "flow_3": problem`.
type DataError struct {
	Channel string // name; empty when the whole table is meant
	Problem string
	Hint    string
}

func (e *DataError) Error() string {
	if e.Channel == "" {
		return e.Problem
	}
	return `channel "` + e.Channel + `": ` + e.Problem
}

// HintText is what would mend it, empty where nothing is obvious.
func (e *DataError) HintText() string { return e.Hint }

package configs

import "path/filepath"

// File is a run file with every default filled in. The tag of a field is its key.
type File struct {
	Path        string       // of the run file, as given
	Version     int          `key:"axisfold"`
	Title       string       `key:"title"`
	Seed        uint64       `key:"seed"`
	Read        Read         `key:"read"`
	Standardize Standardize  `key:"standardize"`
	Decompose   Decompose    `key:"decompose"`
	Retain      Rule         `key:"retain"`
	Rotate      *Rotate      `key:"rotate"`      // nil when not named
	Uncertainty *Uncertainty `key:"uncertainty"` // nil when not named
	Reduce      *Reduce      `key:"reduce"`      // nil when not named
	Regress     *Regress     `key:"regress"`     // nil when not named
	Draw        *Draw        `key:"draw"`        // nil when not named
	Write       Write        `key:"write"`

	// given holds the path of every key that the file or an override names.
	given map[string]bool
}

// Read says which table to read and how.
type Read struct {
	Files       []string `key:"files"`      // paths and globs, relative to Dir
	Format      string   `key:"format"`     // empty: from first bytes and extension
	Sheet       string   `key:"sheet"`      // empty: the only one that holds a table
	Query       string   `key:"query"`      // empty: all of the only table
	Connection  string   `key:"connection"` // name of an environment variable; empty: the standard ones
	Encoding    string   `key:"encoding"`   // empty: looked up
	Orientation string   `key:"orientation"`
	Separator   string   `key:"separator"` // one byte; empty: looked up in the header
	Decimal     string   `key:"decimal"`
	Thousands   string   `key:"thousands"` // empty: none
	Comment     string   `key:"comment"`   // empty: none
	Missing     []string `key:"missing"`   // as written
	Header      string   `key:"header"`
	UnitsRow    bool     `key:"units_row"`
	ShortRows   string   `key:"short_rows"`
	Time        string   `key:"time"`      // empty: none
	Groups      string   `key:"groups"`    // empty: none
	LeaveOut    []string `key:"leave_out"` // names and globs
	Gaps        string   `key:"gaps"`
	Spill       float64  `key:"spill"` // gigabytes; 0: none
}

// Standardize says how channels are centred and scaled.
type Standardize struct {
	Scaling  string    `key:"scaling"`
	Constant string    `key:"constant"`
	Channels []Channel `key:"channels"` // in the order written; a later one wins
}

// Channel is what differs for one channel or for those that match a glob. Empty settings
// leave things as they are.
type Channel struct {
	Name      string
	Scaling   string `key:"scaling"`
	Transform string `key:"transform"`
}

// Decompose says of which matrix the components are, and by which route.
type Decompose struct {
	Matrix string `key:"matrix"`
	Route  string `key:"route"`
}

// Rule is a rule for the number of components and its parameters. Parameters that do not
// belong to the rule are zero.
type Rule struct {
	Rule           string   `key:"rule"`
	Components     int      `key:"components"`
	AtLeast        float64  `key:"at_least"`
	Value          float64  `key:"value"`
	Reference      string   `key:"reference"`
	Percentile     float64  `key:"percentile"`
	Rows           string   `key:"rows"`
	Replicates     int      `key:"replicates"`
	Power          int      `key:"power"`
	Alpha          float64  `key:"alpha"`
	Noise          float64  `key:"noise"`
	Limit          float64  `key:"limit"`
	Folds          int      `key:"folds"`
	Arrangement    string   `key:"arrangement"`
	Order          string   `key:"order"`
	Gap            int      `key:"gap"`
	Which          []string `key:"which"` // C1, C2 and so on
	Repeats        int      `key:"repeats"`
	MostComponents int      `key:"most_components"` // 0: as many as the data carry
}

// Rotate asks for the kept components turned so that each is carried by few channels.
type Rotate struct {
	Method    string  `key:"method"`
	Normalize bool    `key:"normalize"`
	Power     float64 `key:"power"`
	Starts    int     `key:"starts"`
}

// Uncertainty asks how sure the components are.
type Uncertainty struct {
	Replicates int     `key:"replicates"`
	Stretches  int     `key:"stretches"` // 0: about the root of the number of rows
	Confidence float64 `key:"confidence"`
}

// Reduce says which channels may be dropped and how well they must be rebuilt. It is
// judged on the folds of regress.retain, or on ten stretches of rows without them.
type Reduce struct {
	Rebuild   float64       `key:"rebuild"`
	Size      int           `key:"size"` // 0: the fewest that rebuild the others
	Criterion string        `key:"criterion"`
	Protect   []string      `key:"protect"`
	Prefer    []string      `key:"prefer"`
	Together  []string      `key:"together"`
	Channels  []KeptChannel `key:"channels"` // in the order written; a later one wins
	ExactUpTo int           `key:"exact_up_to"`
}

// KeptChannel is what differs for one channel or for those that match a glob; 0 leaves
// things as they are.
type KeptChannel struct {
	Name      string
	Cost      float64 `key:"cost"`
	Tolerance float64 `key:"tolerance"`
}

// Regress says what is regressed on the components.
type Regress struct {
	Response   []string `key:"response"`
	Predictors []string `key:"predictors"` // names and globs; empty: all other channels
	Intercept  bool     `key:"intercept"`
	Retain     Rule     `key:"retain"`
	Confidence float64  `key:"confidence"`
	Nested     string   `key:"nested"`
}

// Draw says what is drawn.
type Draw struct {
	Formats []string `key:"formats"`
}

// Write says where the run folder goes and what is in it.
type Write struct {
	Folder      string `key:"folder"` // relative to Dir
	Scores      bool   `key:"scores"`
	Predictions bool   `key:"predictions"`
	Diagnostics bool   `key:"diagnostics"`
}

// Dir is the folder that relative paths in the run file are relative to.
func (f *File) Dir() string { return filepath.Dir(f.Path) }

// Resolve turns a path or glob of the run file into one that can be opened from here.
func (f *File) Resolve(path string) string {
	if filepath.IsAbs(path) {
		return path
	}
	return filepath.Join(f.Dir(), filepath.FromSlash(path))
}

package configs

import (
	"path/filepath"
	"slices"
	"strings"
)

var (
	scalings   = []string{"unit-normal", "unit-length", "center", "pareto", "range", "median-mad", "none"}
	criteria   = []string{"worst-r2", "rm", "rv", "gcd", "mccabe-det", "mccabe-trace", "mccabe-frobenius", "mccabe-canonical"}
	transforms = []string{"none", "log", "log10", "square-root"}
)

// sections is the run file, in the order in which it is written. Sections are stages and
// stand in the order in which data flow.
var sections = []Key{
	{Name: "axisfold", Kind: Whole, Required: true, Range: from(1, 1), Doc: "version of the run file's language, 1"},
	{Name: "title", Kind: Text, Doc: "stands above summary and report"},
	{Name: "seed", Kind: Whole, Range: atLeast(0), Default: 1, Doc: "starts every random draw: the same seed gives the same results"},
	{Name: "read", Kind: Section, Doc: "which table to read and how", Keys: []Key{
		{Name: "files", Kind: Names, needed: readsFiles, Filled: true, Doc: "paths and globs, relative to the run file; several files are one table"},
		{Name: "format", Kind: Word, Allowed: []string{"csv", "tsv", "parquet", "xlsx", "sqlite", "postgres"}, Blank: "auto", Doc: "of the files; auto takes it from their first bytes and the extension; postgres asks a server"},
		{Name: "sheet", Kind: Text, Doc: "of a spreadsheet; empty for the only one that holds a table"},
		{Name: "query", Kind: Text, Doc: "that a database answers, one select; empty for all of the only table of an SQLite file"},
		{Name: "connection", Kind: Text, Doc: "name of the environment variable that holds the connection string of a server; empty for PGHOST, PGUSER, PGPASSWORD and the others of its standard"},
		{Name: "encoding", Kind: Word, Allowed: []string{"utf-8", "utf-16", "latin-1"}, Blank: "auto", Doc: "of text; latin-1 is Windows-1252 too; auto looks at the beginning, and a note says what was assumed"},
		{Name: "orientation", Kind: Word, Allowed: []string{"rows", "channels-in-rows"}, Default: "rows", Doc: "channels-in-rows is a text stored transposed, each line a channel, its name first if there is a header; it is held in memory, up to 1 GiB"},
		{Name: "separator", Kind: Character, Blank: "auto", Doc: "between cells: comma, semicolon, tab, bar or one character; blanks for runs of blanks; auto looks at the first lines"},
		{Name: "decimal", Kind: Word, Allowed: []string{"point", "comma"}, Default: "point", Doc: "decimal sign of numbers in cells"},
		{Name: "thousands", Kind: Word, Allowed: []string{"comma", "point", "space", "apostrophe"}, Blank: "none", Doc: "mark between groups of three digits; never guessed"},
		{Name: "comment", Kind: Text, Doc: "lines that begin with it are passed over; empty for none"},
		{Name: "missing", Kind: Codes, Default: []string{"", "NA", "NaN", "nan", "null"}, Doc: "cells that mean a missing value"},
		{Name: "header", Kind: Word, Allowed: []string{"true", "false", "auto", "double"}, Default: "true", Doc: "the first row holds the names of the columns; of text also auto, which looks, and double, for names in two rows"},
		{Name: "units_row", Kind: Switch, Default: false, Doc: "the next row holds units"},
		{Name: "short_rows", Kind: Word, Allowed: []string{"error", "missing"}, Default: "error", Doc: "rows of text that end before the last column: an error, or what they lack is missing, and counted"},
		{Name: "time", Kind: Text, Doc: "column of times, carried through to tables of rows; empty for none"},
		{Name: "groups", Kind: Text, Doc: "column of groups, carried through and used by folds; empty for none"},
		{Name: "leave_out", Kind: Names, Doc: "columns that take no part; names and globs"},
		{Name: "gaps", Kind: Word, Allowed: []string{"complete-rows"}, Default: "complete-rows", Doc: "what happens to rows with missing values: complete-rows leaves them out"},
		{Name: "spill", Kind: Number, Range: atLeast(0), Default: 8.0, Doc: "gigabytes of disk beside the run folder, while it runs, for rows that are slow to read again (compressed files, spreadsheets, databases) and too many to hold; 0 for none"},
	}},
	{Name: "standardize", Kind: Section, Doc: "how channels are centred and scaled", Keys: []Key{
		{Name: "scaling", Kind: Word, Allowed: scalings, Default: "unit-normal", Doc: "of every channel"},
		{Name: "constant", Kind: Word, Allowed: []string{"error", "drop"}, Default: "error", Doc: "what a channel that holds one value is: an error, or dropped"},
		{Name: "channels", Kind: Channels, Doc: "what differs by channel; names and globs, a later one wins", Keys: []Key{
			{Name: "scaling", Kind: Word, Allowed: scalings, Doc: "of these channels"},
			{Name: "transform", Kind: Word, Allowed: transforms, Doc: "applied to every value before anything else"},
		}},
	}},
	{Name: "decompose", Kind: Section, Doc: "of which matrix the components are", Keys: []Key{
		{Name: "matrix", Kind: Word, Allowed: []string{"correlation", "covariance"}, follow: defaultMatrix, Doc: "by default correlation with unit-normal or unit-length scaling, covariance with any other"},
		{Name: "route", Kind: Word, Allowed: []string{"auto", "eigen", "svd"}, Default: "auto", Doc: "through cross-products or through a factor of the rows; auto looks at shape and condition"},
	}},
	{Name: "retain", Kind: Choice, Rules: rulesFor(components), Default: "parallel", Doc: "how many components to keep"},
	{Name: "rotate", Kind: Section, Named: true, Doc: "the kept components turned so that each is carried by few channels", Keys: []Key{
		{Name: "method", Kind: Word, Allowed: []string{"varimax", "quartimax", "promax"}, Default: "varimax", Doc: "promax lets the rotated components correlate"},
		{Name: "normalize", Kind: Switch, Default: true, Doc: "weigh all channels alike, whatever share of their variance the components hold (Kaiser)"},
		{Name: "power", Kind: Number, Range: above(1), Default: 4.0, Doc: "of the target of promax"},
		{Name: "starts", Kind: Whole, Range: from(1, 10000), Default: 20, Doc: "from the components as they are, and from random ones; the best counts"},
	}},
	{Name: "uncertainty", Kind: Section, Named: true, Doc: "how sure roots, loadings and components are, by resampling stretches of rows", Keys: []Key{
		{Name: "replicates", Kind: Whole, Range: from(50, 100000), Default: 1000, Doc: "resampled tables"},
		{Name: "stretches", Kind: Whole, Range: from(2, 100000), Blank: "auto", Doc: "that the rows are cut into and drawn from; auto takes the root of the number of rows, 100 at most; as many as there are rows draws single rows, which suits rows that do not follow one another"},
		{Name: "confidence", Kind: Number, Range: below(1), Default: 0.95, Doc: "of the intervals"},
	}},
	{Name: "reduce", Kind: Section, Named: true, Doc: "which channels to keep, and how the others are rebuilt from them", Keys: []Key{
		{Name: "rebuild", Kind: Number, Range: upTo(1), Default: 0.95, Doc: "R-squared with which every dropped channel must be rebuilt; not used when size is given"},
		{Name: "size", Kind: Whole, Range: atLeast(1), Blank: "any", Doc: "how many channels to keep; any takes the fewest that rebuild the others"},
		{Name: "criterion", Kind: Word, Allowed: criteria, Default: "worst-r2", Doc: "what makes one set of channels better than another of its size"},
		{Name: "protect", Kind: Names, Doc: "channels never dropped; names and globs"},
		{Name: "prefer", Kind: Names, Doc: "channels kept rather than their twins; names and globs"},
		{Name: "together", Kind: Names, Doc: "globs: the channels that one of them matches are kept or dropped together"},
		{Name: "channels", Kind: Channels, Doc: "what differs by channel; names and globs, a later one wins", Keys: []Key{
			{Name: "cost", Kind: Number, Range: atLeast(0), Doc: "of keeping a channel, 1 when left out or 0"},
			{Name: "tolerance", Kind: Number, Range: atLeast(0), Doc: "largest residual standard deviation of the rebuilt channel in its unit, in place of rebuild; 0 is none"},
		}},
		{Name: "exact_up_to", Kind: Whole, Range: from(1, 40), Default: 30, Doc: "channels up to which the best set is searched for and proved best"},
	}},
	{Name: "regress", Kind: Section, Named: true, Doc: "regression on the components", Keys: []Key{
		{Name: "response", Kind: Names, Required: true, Filled: true, Doc: "one column or several"},
		{Name: "predictors", Kind: Names, Doc: "names and globs; empty for all other channels"},
		{Name: "intercept", Kind: Switch, Default: true, Doc: "false fits through the origin, which needs scaling: none"},
		{Name: "retain", Kind: Choice, Rules: rulesFor(regressors), Default: "one-standard-error", Doc: "how many components enter the regression"},
		{Name: "confidence", Kind: Number, Range: below(1), Default: 0.95, Doc: "of intervals for coefficients and predictions"},
		{Name: "nested", Kind: Word, Allowed: []string{"auto", "always", "never"}, Default: "auto", Doc: "judge the whole procedure, the choice of components made anew in every fold; auto does where that takes seconds"},
	}},
	{Name: "draw", Kind: Section, Named: true, Doc: "pictures of the results", Keys: []Key{
		{Name: "formats", Kind: Words, Filled: true, Allowed: []string{"svg", "png", "pdf"}, Default: []string{"svg"}, Doc: "each picture once in each format"},
	}},
	{Name: "write", Kind: Section, Doc: "where the run folder goes and what is in it", Keys: []Key{
		{Name: "folder", Kind: Text, Filled: true, follow: defaultFolder, Doc: "relative to the run file; by default runs/ and the name of the run file"},
		{Name: "scores", Kind: Switch, Default: true, Doc: "write the table of scores"},
		{Name: "predictions", Kind: Switch, Default: true, Doc: "write the table of predictions"},
		{Name: "diagnostics", Kind: Switch, Default: true, Doc: "write the table of leverages, residuals and distances of a regression's rows"},
	}},
}

// Keys describes the whole run file, in the order in which it is written. It is there to
// be read: sections share their keys with the loader.
func Keys() []Key { return slices.Clone(sections) }

// readsFiles tells whether the table comes from files, not from a server.
func readsFiles(f *File) bool { return f.Read.Format != "postgres" }

func defaultMatrix(f *File) any {
	switch f.Standardize.Scaling {
	case "unit-normal", "unit-length":
		return "correlation"
	}
	return "covariance"
}

func defaultFolder(f *File) any {
	base := filepath.Base(f.Path)
	if name := strings.TrimSuffix(base, filepath.Ext(base)); name != "" {
		base = name
	}
	// A file may have a name that no text can hold.
	return "runs/" + strings.ToValidUTF8(base, "_")
}

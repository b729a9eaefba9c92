package configs

import "slices"

// target is what a rule decides on.
type target string

const (
	components target = "components" // of the table
	regressors target = "regressors" // components that enter a regression
)

// listed is a rule and where it may stand.
type listed struct {
	targets []target
	RuleDescription
}

var (
	either = []target{components, regressors}
	first  = []target{components}
	second = []target{regressors}
)

// rules is the list of all rules. fixed stands in it twice: a regression may use no
// component at all and takes them in an order.
var rules = []listed{
	{first, RuleDescription{"fixed", "the number given", []Key{
		{Name: "components", Kind: Whole, Required: true, Range: atLeast(1), Doc: "how many to keep"}}}},
	{second, RuleDescription{"fixed", "the number given", []Key{
		{Name: "components", Kind: Whole, Required: true, Range: atLeast(0), Doc: "how many enter"}}}},
	{second, RuleDescription{"subset", "the components named", []Key{
		{Name: "which", Kind: Names, Required: true, Filled: true, Doc: "components as the tables name them, C1 the first"}}}},
	{either, RuleDescription{"share", "the fewest that hold a share of the total variance", []Key{
		{Name: "at_least", Kind: Number, Range: upTo(1), Default: 0.9, Doc: "share of the total variance"}}}},
	{either, RuleDescription{"eigenvalue-above", "eigenvalues above a multiple of their mean", []Key{
		{Name: "value", Kind: Number, Range: above(0), Default: 1.0, Doc: "multiple of the mean eigenvalue"}}}},
	{either, RuleDescription{"broken-stick", "shares above those of a stick broken at random", nil}},
	{either, RuleDescription{"parallel", "eigenvalues above those of independent channels of the same shape", []Key{
		{Name: "reference", Kind: Word, Allowed: []string{"percentile", "mean"}, Default: "percentile", Doc: "what of the replicates an eigenvalue must exceed"},
		{Name: "percentile", Kind: Number, Range: below(100), Default: 95.0, Doc: "with reference: percentile"},
		{Name: "rows", Kind: Word, Allowed: []string{"effective", "counted"}, Default: "effective", Doc: "effective takes rows that follow one another for as many independent ones as they are worth; counted takes each for one"},
		{Name: "replicates", Kind: Whole, Range: from(10, 1000000), Blank: "auto", Doc: "tables of independent channels to draw; auto takes 1000, on large tables fewer, whose roots vary less"}}}},
	{either, RuleDescription{"minimum-average-partial", "the number after which channels are least correlated with one another", []Key{
		{Name: "power", Kind: Whole, Range: from(2, 4), Default: 4, Doc: "of the partial correlations; 2 is the first form, 4 the revised one"}}}},
	{either, RuleDescription{"equal-roots", "up to where the remaining eigenvalues may be equal", []Key{alpha}}},
	{either, RuleDescription{"tracy-widom", "eigenvalues above the largest of noise, tested one after another", []Key{alpha}}},
	{either, RuleDescription{"hard-threshold", "singular values above the best threshold for white noise", []Key{
		{Name: "noise", Kind: Number, Range: atLeast(0), Default: 0.0, Doc: "standard deviation of the noise in the scaled channels; 0 takes it from the median"}}}},
	{either, RuleDescription{"evidence", "the largest evidence for components plus equal noise", nil}},
	{first, RuleDescription{"bic", "the Bayesian information criterion of components plus equal noise", nil}},
	{either, RuleDescription{"parallel-shifts", "eigenvalues above those of the channels shifted in time against one another", []Key{
		{Name: "percentile", Kind: Number, Range: below(100), Default: 95.0, Doc: "of the replicates"},
		{Name: "replicates", Kind: Whole, Range: from(10, 1000000), Blank: "auto", Doc: "shifted tables to make; auto takes 1000, on large tables fewer"}}}},
	{either, RuleDescription{"bi-cross-validation", "the number that best predicts hidden blocks of rows and channels", nil}},
	{either, RuleDescription{"element-cross-validation", "the number that best predicts hidden cells", nil}},
	{either, RuleDescription{"knee", "eigenvalues before the sharpest bend, a heuristic", nil}},
	{either, RuleDescription{"agreement", "the number that most rules with a model of noise name", nil}},
	{second, RuleDescription{"cross-validation", "the smallest error on held-out rows", heldOut}},
	{second, RuleDescription{"aicc", "the smallest corrected Akaike criterion of the fit", nil}},
	{second, RuleDescription{"bic", "the smallest Bayesian information criterion of the fit", nil}},
	{second, RuleDescription{"cp", "the smallest of Mallows' Cp", nil}},
	{second, RuleDescription{"t-threshold", "the components whose slope has a large t value, strongest first", []Key{
		{Name: "limit", Kind: Number, Range: above(0), Default: 2.0, Doc: "of the squared t value; 2 gives the smallest Cp"}}}},
	{second, RuleDescription{"condition-limit", "components while the condition index stays below a limit", []Key{
		{Name: "limit", Kind: Number, Range: above(1), Default: 30.0, Doc: "of the condition index: the root of the largest over the last eigenvalue"}}}},
	{second, RuleDescription{"randomisation-test", "the fewest whose error on held-out rows exceeds the smallest by chance only", slices.Concat([]Key{alpha}, heldOut)}},
	{second, RuleDescription{"press", "the smallest sum of squared leave-one-out errors, directions fixed", heldOut}},
	{second, RuleDescription{"one-standard-error", "the fewest within one standard error of the smallest error on held-out rows", heldOut}},
}

var alpha = Key{Name: "alpha", Kind: Number, Range: below(1), Default: 0.05, Doc: "probability of error of each test"}

var order = Key{Name: "order", Kind: Word, Allowed: []string{"variance", "correlation"}, Default: "variance",
	Doc: "in which components enter: by their variance, or by their correlation with the response"}

// judged are parameters of every rule in a regression: whatever decides, the error of the
// fit is judged on held-out rows.
var judged = []Key{
	{Name: "folds", Kind: Whole, Range: from(2, 100000), Default: 10, Doc: "parts, each held out once"},
	{Name: "arrangement", Kind: Word, Allowed: []string{"random", "blocks", "groups", "forward"}, Default: "blocks",
		Doc: "of rows into folds: dealt at random, in stretches, by read.groups, or in stretches learnt from what lies before them"},
	order,
	{Name: "gap", Kind: Whole, Range: atLeast(0), Default: 0, Doc: "rows left out between a stretch held out and those learnt from; with arrangement: blocks or forward"},
	{Name: "repeats", Kind: Whole, Range: from(1, 1000), Default: 1, Doc: "deals of the rows to folds, each anew; with arrangement: random"},
}

// heldOut are the parameters of rules that decide by held-out rows.
var heldOut = append(slices.Clone(judged), Key{Name: "most_components", Kind: Whole, Range: atLeast(1), Blank: "all",
	Doc: "how many to consider; all takes as many as the data carry"})

func rulesFor(t target) []RuleDescription {
	var out []RuleDescription
	for _, r := range rules {
		for _, have := range r.targets {
			if have != t {
				continue
			}
			d := r.RuleDescription
			if t == regressors && !slices.ContainsFunc(d.Parameters, func(k Key) bool { return k.Name == "folds" }) {
				d.Parameters = slices.Concat(d.Parameters, judged)
			}
			out = append(out, d)
		}
	}
	return out
}

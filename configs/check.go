package configs

import (
	"fmt"
	"path"
	"regexp"
	"slices"
)

// check looks at settings that depend on each other. It is passed over while one of its
// paths has a problem of its own.
type check struct {
	paths []string
	check func(*loader)
}

var checks = []check{
	{[]string{"read.separator", "read.decimal"}, func(l *loader) {
		if r := l.file.Read; r.Separator == "," && r.Decimal == "comma" {
			l.conflict("read.separator", "", "a comma cannot both separate cells and be the decimal sign")
		}
	}},
	{[]string{"read.separator", "read.comment"}, func(l *loader) {
		if r := l.file.Read; r.Separator != "" && r.Separator == r.Comment {
			l.conflict("read.comment", "", "%q cannot both separate cells and begin a comment", r.Comment)
		}
	}},
	{[]string{"read.files", "read.format", "read.query", "read.connection"}, server},
	{[]string{"read.groups", "regress.retain.arrangement"}, func(l *loader) {
		if g := l.file.Regress; g != nil && g.Retain.Arrangement == "groups" && l.file.Read.Groups == "" {
			l.conflict("regress.retain.arrangement", "", "groups needs the name of their column in read.groups")
		}
	}},
	{[]string{"regress.retain.arrangement", "regress.retain.gap", "regress.retain.repeats"}, arrangement},
	{[]string{"regress.retain.which"}, whichComponents},
	{[]string{"regress.intercept", "standardize.scaling", "standardize.channels"}, throughOrigin},
	{[]string{"regress.response", "read.leave_out"}, func(l *loader) {
		l.eachResponse(func(name string) {
			for _, pattern := range l.file.Read.LeaveOut {
				if matches(pattern, name) {
					l.conflict("regress.response", name, "%q is left out by %q in read.leave_out", clip(name), clip(pattern))
					return
				}
			}
		})
	}},
	{[]string{"regress.response", "read.time"}, func(l *loader) {
		l.eachResponse(func(name string) {
			if name == l.file.Read.Time {
				l.conflict("regress.response", name, "%q is the column of times, see read.time", clip(name))
			}
		})
	}},
	{[]string{"regress.response", "read.groups"}, func(l *loader) {
		l.eachResponse(func(name string) {
			if name == l.file.Read.Groups {
				l.conflict("regress.response", name, "%q is the column of groups, see read.groups", clip(name))
			}
		})
	}},
	{[]string{"regress.response", "regress.predictors"}, func(l *loader) {
		l.eachResponse(func(name string) {
			if slices.Contains(l.file.Regress.Predictors, name) {
				l.conflict("regress.predictors", name, "%q is the response; a response is never a predictor", clip(name))
			}
		})
	}},
}

// server: a server is asked by a query and reads no file.
func server(l *loader) {
	r := l.file.Read
	switch {
	case r.Format == "postgres" && len(r.Files) > 0:
		l.conflict("read.files", "", "format: postgres asks a server and reads no file")
	case r.Format == "postgres" && r.Query == "":
		l.conflict("read.format", "", "postgres needs read.query")
	case r.Format != "postgres" && r.Connection != "":
		l.conflict("read.connection", "", "only format: postgres connects to a server")
	case r.Connection != "" && !variableName.MatchString(r.Connection):
		// Not quoted: it may be the connection string itself, with a password.
		l.conflict("read.connection", "", "expected the name of an environment variable; the connection string stands in the variable, never in a run file")
	}
}

var variableName = regexp.MustCompile(`^[A-Za-z_][A-Za-z0-9_]*$`)

// arrangement: a gap has a place only between rows in their order, and only random deals differ.
func arrangement(l *loader) {
	if l.file.Regress == nil {
		return
	}
	r := l.file.Regress.Retain
	if r.Gap > 0 && r.Arrangement != "blocks" && r.Arrangement != "forward" {
		l.conflict("regress.retain.gap", "", "a gap needs arrangement: blocks or forward, found %s", r.Arrangement)
	}
	if r.Repeats > 1 && r.Arrangement != "random" {
		l.conflict("regress.retain.repeats", "", "only arrangement: random can be repeated, found %s", r.Arrangement)
	}
}

// whichComponents: names like C1.
func whichComponents(l *loader) {
	if l.file.Regress == nil {
		return
	}
	for _, name := range l.file.Regress.Retain.Which {
		if !componentName.MatchString(name) {
			l.conflict("regress.retain.which", name, "expected a component such as C1, found %q", clip(name))
		}
	}
}

var componentName = regexp.MustCompile(`^C[1-9][0-9]{0,5}$`)

// throughOrigin: without an intercept the model goes through zero, so zero must stay zero.
func throughOrigin(l *loader) {
	g, s := l.file.Regress, l.file.Standardize
	if g == nil || g.Intercept {
		return
	}
	if s.Scaling != "none" {
		l.conflict("regress.intercept", "", "false needs scaling: none in standardize, found %s", s.Scaling)
	}
	for _, c := range s.Channels {
		if c.Scaling != "" && c.Scaling != "none" {
			setting := join(join("standardize.channels", c.Name), "scaling")
			l.conflict(setting, "", "intercept: false in regress needs none, found %s", c.Scaling)
		}
	}
}

func (l *loader) eachResponse(f func(name string)) {
	if l.file.Regress != nil {
		for _, name := range l.file.Regress.Response {
			f(name)
		}
	}
}

// conflict reports a problem of a setting, at its value or at an item of it.
func (l *loader) conflict(setting, text, problem string, args ...any) {
	place := l.places[setting]
	if text != "" {
		place = l.places[item(setting, text)]
	}
	l.report(place, "", "%s%s", prefix(setting), fmt.Sprintf(problem, args...))
}

// trusted tells whether all paths, and the sections around them, are without problems.
func (l *loader) trusted(paths []string) bool {
	for _, p := range paths {
		for _, part := range parents(p) {
			if l.bad[part] {
				return false
			}
		}
	}
	return true
}

// matches tells whether a name is, or matches, a pattern.
func matches(pattern, name string) bool {
	hit, err := path.Match(pattern, name)
	return pattern == name || err == nil && hit
}

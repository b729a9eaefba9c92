// Package pcr regresses responses on principal components and maps the coefficients back
// to the original channels, in original units.
//
// [Fit] does all of it from summaries: the components of the predictors, the regression
// at every number of components, its error on held-out folds, the choice, coefficients
// with standard errors, and ordinary least squares beside them. [NewPredictor] brings a
// fitted model to rows.
//
// # Notation
//
// y = b₀ + x'b. With the predictors scaled to Z = U·diag(d)·V', γ_a = u_a'y/d_a, the
// standardized slope is Σγ_a·v_a over the components kept, and b divides it by each
// channel's scale. Errors of fit divide as stated at each field.
//
// # What the standard errors cover
//
// They treat directions and number of components as given, as if chosen without these
// rows, and the components left out as having no effect. They do not cover the choice of
// k, the estimation of the directions, or the bias of leaving components out.
package pcr

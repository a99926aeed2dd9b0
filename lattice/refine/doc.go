// Package refine tells lattice artefact from physics: it runs any measurement
// on a block at the steps h, h/2, h/4, … and returns, for every named quantity,
// the observed order of convergence, the value extrapolated to h → 0 and an
// error bar, or the reason why there is none.
//
// # What is computed
//
// A quantity f measured at the steps h, h/r, h/r², … behaves like
// f(h) = f₀ + A·h^p once the steps are small enough: in the asymptotic range.
// With the values f₁, f₂, f₃ of the last three levels, coarse to fine, and
// Δ₁ = f₂ − f₁, Δ₂ = f₃ − f₂,
//
//	p  = ln(Δ₁/Δ₂) / ln r                 observed order
//	f₀ = f₃ + Δ₂ / (r^p − 1)              Richardson's extrapolation
//
// [Richardson 1911, Phil. Trans. R. Soc. A 210, 307]. If the order q of the
// scheme is given and p agrees with it, to within ½ or q/4 whichever is larger,
// q takes the place of p in f₀.
//
// # The error bar
//
// The bar is [Safety] = 1.25 times the largest of
//
//	|f₃ − f₀|        with p, and with q if it is given
//	|f₀ − f₀′|       the change from the value f₀′ that the triple of levels
//	                 before gives, if there are four levels or more; if that
//	                 triple cannot be extrapolated, |Δ₂| takes its place
//	noise            [Noise] times the largest |f|
//
// so that it is never smaller than the distance from the finest value to the
// extrapolated one. The factor is that of the grid convergence index for three
// or more grids [Roache 1994, J. Fluids Eng. 116, 405].
//
// # When there is none
//
// The estimate's [Status] is then one of [TooFewLevels], [NotFinite],
// [AtRounding], [ChangingSign], [NotShrinking] and [UnexpectedOrder], its Reason
// says in words and numbers what was seen, its Value is that of the finest
// level and its Error is NaN. More levels, or finer ones, may help; so may a
// quantity that is smooth in h, such as an interpolated crossing time in place
// of the nearest slice.
//
// No such test proves that the levels are in the asymptotic range. Three
// levels with a plausible order have been wrong before; a fourth level and the
// order of the scheme, given, make it harder.
package refine

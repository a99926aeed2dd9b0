// Package figure draws fields: space-time maps, profiles and time series, ready
// for print.
//
// # Three figures
//
//	Map      a history as colours over the block, x to the right and t upwards,
//	         with pins, light cones and trajectories drawn over it
//	Profile  slices of a history, or any curves, over x
//	Series   sites of a history, or any curves, over t
//
// Each is a struct whose zero value, given something to draw, makes a complete
// figure. Save writes it as PNG, PDF or SVG by the extension of the path; Encode
// writes it to an io.Writer.
//
// # Text
//
// Labels are plain Unicode: "φ (rad)", "x (λ_J)", "∂φ/∂t", "c²". There is no
// markup. A character that the font (Liberation Sans, which comes with the
// plotting library) lacks is an error that names it, never an empty box. Text is
// 11 points or larger, whatever the size of the [Page]; text that does not fit is
// an error, and what does not fit in one line of a title or legend is wrapped.
// PDF and SVG files hold text as outlines, so that they need no fonts and look the
// same everywhere.
//
// # Colours
//
// A map whose values have a meaningful centre (set Diverging and Centre) uses the
// smooth diverging blue–red map of [Moreland 2009, Diverging Color Maps for
// Scientific Visualization, ISVC 2009], with equal contrast on both sides of the
// centre. Otherwise it uses Moreland's extended black-body map, whose luminance
// is linear in the value, so that it survives grey-scale print. Curves take the
// eight colours of [Okabe & Ito 2002, Color Universal Design], yellow left out,
// each with a dash pattern of its own. Values that are NaN or infinite are drawn
// in a green that neither colour map contains, and the legend says so.
//
// # Large histories
//
// A map is rasterised at the resolution of the page. Where a pixel covers several
// events it shows their mean; where one of these is not finite, the pixel is
// marked as not finite.
package figure

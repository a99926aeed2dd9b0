// Package figure draws fields: space-time maps, profiles and time series, ready
// for print, and animations of them for the screen.
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
// # Two animations
//
//	Animation  histories on one block, such as the steps of a relaxation, as maps
//	           with the same colours, each with a caption
//	Motion     a history slice by slice: the curve φ(x) and its time
//
// They are written as animated GIF, of 630 × 433 pixels unless the [Page] says
// otherwise. The page with its axes, legend and colour bar is drawn once, and a
// frame holds only the rectangle that changes, so that nothing else can flicker.
// One palette serves all frames: 127 levels of a map, or tints of the lines, and
// greys; there is no dithering. A hundred maps of a relaxation make a file of about
// 2 MB, waves all over the block up to four times as much, and a hundred curves
// 0.3 MB.
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
// in a green that neither colour map contains, and the legend says so. What is not
// in the Region of a map is left blank.
//
// # Large histories
//
// A map is rasterised at the resolution of the page. Where a pixel covers several
// events it shows their mean; where one of these is not finite, the pixel is
// marked as not finite.
package figure

// Package raster paints a Picture into an RGBA image.
//
// Units: a Picture is in points, the image in pixels; scale is pixels per point. The image's top left pixel is the
// picture's origin.
//
// How: every shape adds its signed area, pixel by pixel, to one buffer of the image's size, and a sweep along the rows
// sums it up to coverage (exact area coverage for simple shapes; the idea is that of FreeType's smooth rasteriser in the
// accumulating form of R. Levien, font-rs, 2016). Only blocks of 16 pixels that an edge touched are looked at; what lies
// between them is painted or skipped as a run. So the cost goes with the length of the outlines and the area painted,
// never with the size of the panel, and a stroke that crosses itself is blended once. Letters come from a cache of masks
// for each size and quarter-pixel place; their x-height and capitals are fitted to whole pixels. Single upright or level
// lines and rectangles are moved onto whole pixels, and so is every path whose style says Crisp.
//
// Memory: a Rasteriser keeps its buffers and masks; one Draw at a time. Draw, the function, may be called by any number
// of goroutines. The image is written only within its bounds, and what is behind the picture stays.
//
// Panics: never on any picture; a scale that is not a positive number draws nothing.
package raster

// Package separation finds how retention depends on the composition of the mobile phase, from scouting runs of one mixture, and
// what that means for the separation: predicted chromatograms, the resolution of the critical pair against the composition, the
// composition that separates best within a time, and how far it may drift.
//
// Isocratic runs are described by the linear solvent strength model log10 k = log10 kw − S·φ, or by a parabola where three or more runs
// ask for it; gradients of different slope by the same model in a linear gradient. φ is the volume fraction of the stronger solvent, 0 to
// 1; times are in minutes. Nothing is read or written here.
//
// Sources: L. R. Snyder, J. J. Kirkland, J. W. Dolan, Introduction to Modern Liquid Chromatography, 3rd ed., Wiley 2010, equations 2.26 and
// 9.2 to 9.9; P. J. Schoenmakers, H. A. H. Billiet, R. Tijssen, L. de Galan, J. Chromatogr. 149 (1978) 519 (the parabola); USP <621> for
// resolution and plate number (all from memory).
package separation

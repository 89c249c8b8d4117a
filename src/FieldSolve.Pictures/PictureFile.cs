namespace FieldSolve.Pictures;

/// <summary>A picture that was written, as PNG and as SVG.</summary>
/// <param name="Kind">"device", "potential", "field", "sections", "curves", "even", "polar", "angles", "ratios", "mesh" or "convergence".</param>
/// <param name="Wiring">Name of the wiring it shows; null when it shows all.</param>
/// <param name="Caption">What is seen, one or two sentences.</param>
/// <param name="PngPath">Path of the PNG.</param>
/// <param name="SvgPath">Path of the SVG.</param>
/// <param name="Width">Natural width in CSS pixels (1/96 inch); the PNG has 1.75 pixels for each.</param>
/// <param name="Height">Natural height likewise.</param>
public sealed record PictureFile(string Kind, string? Wiring, string Caption, string PngPath, string SvgPath, int Width, int Height);

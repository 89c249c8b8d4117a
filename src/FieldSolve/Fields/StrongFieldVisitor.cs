namespace FieldSolve.Fields;

/// <summary>Receives one quadrature point.</summary>
/// <param name="triangle">Triangle of the mesh.</param>
/// <param name="point">Point of the rule, 0 to 5.</param>
/// <param name="ex">E along lab x, V/m.</param>
/// <param name="ey">E along lab y, V/m.</param>
/// <param name="area">Area the point stands for, m².</param>
internal delegate void StrongFieldVisitor(int triangle, int point, double ex, double ey, double area);

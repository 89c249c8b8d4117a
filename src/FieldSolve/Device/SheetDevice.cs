using FieldSolve.Geometry;
using FieldSolve.Laws;

namespace FieldSolve.Device;

/// <summary>A validated device: geometry resolved, names turned into indices, every quantity in SI.</summary>
public sealed record SheetDevice
{
    private readonly SheetLayout? layout;

    /// <summary>Title from the file; never empty (the file's name if none was given).</summary>
    public required string Title { get; init; }

    /// <summary>Path of the device file as the user gave it.</summary>
    public required string Path { get; init; }

    /// <summary>SHA-256 of the device file's bytes, lower-case hexadecimal.</summary>
    public required string Sha256 { get; init; }

    /// <summary>The live sheet as the mesher needs it.</summary>
    public required Domain Domain { get; init; }

    /// <summary>What <see cref="Domain"/> was made from; causes of error change it.</summary>
    /// <exception cref="InvalidOperationException">The device was made from a bare domain.</exception>
    public SheetLayout Layout
    {
        get => layout ?? throw new InvalidOperationException("The device was made from a bare domain, without a layout to change.");
        init => layout = value;
    }

    /// <summary>Name of the sheet's shape in the file: disc, bar, hall_bar, ring, outline.</summary>
    public required string Shape { get; init; }

    /// <summary>The rim as drawn, before any dead edge was taken off; loops with the sheet to the left, the outer one first.</summary>
    public required IReadOnlyList<IReadOnlyList<Curve>> Drawn { get; init; }

    /// <summary>The sheet law in the crystal frame.</summary>
    public required ISheetLaw Law { get; init; }

    /// <summary>Angle from lab x to crystal a, radians.</summary>
    public required double Axis { get; init; }

    /// <summary>Contacts in the order of the file; rings expanded.</summary>
    public required IReadOnlyList<Contact> Contacts { get; init; }

    /// <summary>Point tips in the order of the file; <see cref="Domain.Tips"/> runs in parallel.</summary>
    public required IReadOnlyList<Tip> Tips { get; init; }

    /// <summary>Wirings in the order of the file.</summary>
    public required IReadOnlyList<Wiring> Wirings { get; init; }

    /// <summary>The drive; null when the file has none (only <c>check</c> works then).</summary>
    public DriveSpec? Drive { get; init; }

    /// <summary>How the directions of a turn come about; null when the file does not say.</summary>
    public TurnSpec? Turn { get; init; }

    /// <summary>Causes of error and their sizes; null when the file has no [tolerance].</summary>
    public ToleranceSpec? Tolerance { get; init; }

    /// <summary>What a fit may change; null when the file has no [fit].</summary>
    public FitSpec? Fit { get; init; }

    /// <summary>Wanted accuracy.</summary>
    public MeshSpec Mesh { get; init; } = new();

    /// <summary>Limits behind the cautions.</summary>
    public CautionSpec Caution { get; init; } = new();

    /// <summary>Thickness of the sheet in metres, if given.</summary>
    public double? Thickness { get; init; }

    /// <summary>Mean free path in metres, if given.</summary>
    public double? MeanFreePath { get; init; }

    /// <summary>Gate capacitance in F/m², if given (used by the AC drive).</summary>
    public double? GateCapacitance { get; init; }

    /// <summary>Width of the dead edge in metres.</summary>
    public double DeadEdge { get; init; }
}

/// <summary>How a contact touches the sheet.</summary>
public enum ContactKind
{
    /// <summary>Metal along a stretch of the rim.</summary>
    Edge,

    /// <summary>A polygon of metal over or under the sheet.</summary>
    Pad,
}

/// <summary>A metal contact.</summary>
/// <param name="Name">Unique among contacts and tips.</param>
/// <param name="Kind">Edge or pad.</param>
/// <param name="LineResistance">Contact resistance times length, ohm metre; 0 for an ideal contact.</param>
/// <param name="Resistivity">Specific contact resistivity of a pad, ohm square metre; 0 for an ideal pad.</param>
/// <param name="Shape">Where the metal touches: stretches of the live rim (edge) or the pad's polygon, closed.</param>
/// <param name="Width">Length of rim covered (edge) or square root of the pad's area, metres.</param>
public sealed record Contact(
    string Name, ContactKind Kind, double LineResistance, double Resistivity, IReadOnlyList<Curve> Shape, double Width)
{
    /// <summary>A point to write the name at and to measure the current's direction from: middle of the edge or of the pad.</summary>
    public required Point2 Middle { get; init; }
}

/// <summary>An ideal voltage tip that draws no current.</summary>
/// <param name="Name">Unique among contacts and tips.</param>
/// <param name="At">Metres.</param>
public sealed record Tip(string Name, Point2 At);

/// <summary>One side of a voltage pair: a contact's metal or a tip.</summary>
/// <param name="IsTip">True: index into the tips; false: into the contacts.</param>
/// <param name="Index">Index in the device's list.</param>
public readonly record struct Terminal(bool IsTip, int Index);

/// <summary>A voltage pair; reads phi(Plus) - phi(Minus).</summary>
/// <param name="Name">"along", "across" or the extra pair's own name.</param>
/// <param name="Plus">First terminal.</param>
/// <param name="Minus">Second terminal.</param>
public sealed record Pair(string Name, Terminal Plus, Terminal Minus);

/// <summary>Where the current goes in and out, and what is read.</summary>
/// <param name="Name">Unique.</param>
/// <param name="Source">Contact index; a positive current enters the sheet here.</param>
/// <param name="Drain">Contact index; its metal is at 0 V.</param>
/// <param name="Along">Longitudinal pair or null.</param>
/// <param name="Across">Transverse pair or null.</param>
/// <param name="Extra">Further pairs in the order of the file.</param>
public sealed record Wiring(string Name, int Source, int Drain, Pair? Along, Pair? Across, IReadOnlyList<Pair> Extra)
{
    /// <summary>Along, across and the extra pairs that exist, in this order.</summary>
    public IEnumerable<Pair> Pairs
    {
        get
        {
            if (Along is not null)
            {
                yield return Along;
            }

            if (Across is not null)
            {
                yield return Across;
            }

            foreach (Pair p in Extra)
            {
                yield return p;
            }
        }
    }
}

/// <summary>The currents to solve at.</summary>
/// <param name="From">First current, A.</param>
/// <param name="To">Last current, A.</param>
/// <param name="Steps">Number of values, both ends included; at least 1.</param>
/// <param name="BothSigns">Also solve at -I for the odd and even parts.</param>
/// <param name="Frequencies">Hz; empty for DC.</param>
/// <param name="Offset">DC part of an AC drive, A.</param>
public sealed record DriveSpec(double From, double To, int Steps, bool BothSigns, IReadOnlyList<double> Frequencies, double Offset)
{
    /// <summary>Where [drive] stands in the device file: line and column, 1-based.</summary>
    public (int Line, int Column) At { get; init; } = (1, 1);

    /// <summary>The list of currents, A.</summary>
    public IReadOnlyList<double> Currents { get; } = Steps == 1
        ? [From]
        : [.. Enumerable.Range(0, Steps).Select(k => k == 0 ? From : k == Steps - 1 ? To : Between(From, To, k, Steps - 1))];

    // In decimals where they reach, so that 25 uA is written 2.5E-05 and not 2.5000000000000005E-05.
    private static double Between(double from, double to, int k, int n)
    {
        double largest = Math.Max(Math.Abs(from), Math.Abs(to));
        return largest is > 1e-12 and < 1e12
            ? (double)((((decimal)from * (n - k)) + ((decimal)to * k)) / n)
            : ((from * (n - k)) + (to * k)) / n;
    }
}

/// <summary>Wanted numerical accuracy.</summary>
public sealed record MeshSpec
{
    /// <summary>Wanted error of each read voltage relative to the largest along voltage. Default 1e-4.</summary>
    public double Error { get; init; } = 1e-4;

    /// <summary>Wanted error of each even part relative to itself (or a tenth of the row's largest). Default 1e-3.</summary>
    public double EvenError { get; init; } = 1e-3;

    /// <summary>Most unknowns of the finest mesh. Default 400,000.</summary>
    public int MaxUnknowns { get; init; } = 400_000;
}

/// <summary>Limits behind the cautions; the defaults are common practice, no source.</summary>
public sealed record CautionSpec
{
    /// <summary>Peak sheet current density in A/m above which thin flakes commonly fail. Default 1000 A/m (1 mA per µm of width).</summary>
    public double SheetCurrentDensity { get; init; } = 1000;

    /// <summary>Power density in the sheet in W/m² above which thin flakes commonly burn. Default 1e9 W/m² (1 mW per µm²).</summary>
    public double PowerDensity { get; init; } = 1e9;
}

using FieldSolve.Geometry;
using FieldSolve.Laws;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>What a cause of error belongs to.</summary>
public enum CauseScope
{
    /// <summary>The sheet or its law; the key stands in [tolerance] itself.</summary>
    Sheet,

    /// <summary>One contact; the key stands in [tolerance.contacts] or [[tolerance.contact]].</summary>
    Contact,

    /// <summary>A lithography layer: contacts that move together; the key stands in [[tolerance.layer]].</summary>
    Layer,
}

/// <summary>How a reading's derivative with respect to a cause is found.</summary>
public enum CauseEffect
{
    /// <summary>Places of contacts, pads or the rim.</summary>
    Motion,

    /// <summary>A parameter of the law.</summary>
    Law,

    /// <summary>The crystal axis.</summary>
    Axis,

    /// <summary>The line resistance or resistivity of a contact.</summary>
    Resistance,
}

/// <summary>
/// A kind of cause of error: its key in the device file, whom it can befall and what it does to a device. A new kind is one file and one line in
/// <see cref="CauseCatalogue"/>.
/// </summary>
public abstract class CauseKind
{
    /// <summary>Its key in the device file and its name in tables.</summary>
    public abstract string Key { get; }

    /// <summary>What it belongs to.</summary>
    public abstract CauseScope Scope { get; }

    /// <summary>What its size measures.</summary>
    public abstract Dimension Dimension { get; }

    /// <summary>A few words for help and reports, for example "position along the edge".</summary>
    public abstract string Meaning { get; }

    /// <summary>How derivatives are found.</summary>
    public virtual CauseEffect Effect => CauseEffect.Motion;

    /// <summary>Whether the kind can befall a target at all, whatever the device; decides which keys a table knows.</summary>
    /// <param name="contact">The contact.</param>
    public virtual bool Fits(ContactKind contact) => true;

    /// <summary>Why it cannot befall this target of this device, as the end of a sentence; null when it can.</summary>
    /// <param name="device">The device as designed.</param>
    /// <param name="target">Contacts concerned; none for the sheet.</param>
    public virtual string? Refuse(SheetDevice device, CauseTarget target) => null;

    /// <summary>Changes a device.</summary>
    /// <param name="draft">The device under change.</param>
    /// <param name="target">Contacts concerned.</param>
    /// <param name="by">SI.</param>
    /// <exception cref="LayoutException">The change cannot be made.</exception>
    public abstract void Apply(DeviceDraft draft, CauseTarget target, double by);

    /// <summary>A change that moves things by about the size of the sheet; only for <see cref="CauseEffect.Motion"/>.</summary>
    public virtual double LargeChange(SheetDevice device) =>
        Dimension == Dimension.Angle ? 1 : (device ?? throw new ArgumentNullException(nameof(device))).Domain.Size;
}

/// <summary>Whom a cause befalls.</summary>
/// <param name="Name">For tables: the contact, the layer, or empty for the sheet.</param>
/// <param name="Contacts">Indices of the contacts concerned.</param>
/// <param name="About">What a layer turns about, metres.</param>
public sealed record CauseTarget(string Name, IReadOnlyList<int> Contacts, Point2 About)
{
    /// <summary>The sheet itself.</summary>
    public static CauseTarget Sheet { get; } = new("", [], default);

    /// <summary>One contact.</summary>
    public static CauseTarget One(SheetDevice device, int contact) =>
        new((device ?? throw new ArgumentNullException(nameof(device))).Contacts[contact].Name, [contact], device.Contacts[contact].Middle);
}

/// <summary>How a cause scatters.</summary>
public enum CauseShape
{
    /// <summary>Normal distribution.</summary>
    Normal,

    /// <summary>Uniform distribution; half its width is sqrt(3) standard deviations.</summary>
    Uniform,
}

/// <summary>A cause of error of a device, with its size.</summary>
/// <param name="Kind">What it does.</param>
/// <param name="Target">To whom.</param>
/// <param name="Sigma">Standard deviation, SI.</param>
/// <param name="Shape">Distribution.</param>
public sealed record SheetCause(CauseKind Kind, CauseTarget Target, double Sigma, CauseShape Shape)
{
    /// <summary>Unit of tables: SI, angles in degrees.</summary>
    public string Unit => CauseUnits.Of(Kind.Dimension);

    /// <summary>SI per unit of tables.</summary>
    public double UnitSize => Kind.Dimension == Dimension.Angle ? Math.PI / 180 : 1;

    /// <summary>"position of c4", "axis", "layer_x of gold".</summary>
    public string Label => Target.Name.Length == 0 ? Kind.Key : $"{Kind.Key} of {Target.Name}";

    /// <summary>The device with this cause at some value.</summary>
    /// <param name="device">As designed.</param>
    /// <param name="by">SI.</param>
    /// <exception cref="LayoutException">The change cannot be made.</exception>
    /// <exception cref="LawException">A parameter of the law is out of range.</exception>
    public SheetDevice Applied(SheetDevice device, double by)
    {
        var draft = new DeviceDraft(device);
        Kind.Apply(draft, Target, by);
        return draft.Build();
    }
}

/// <summary>Units of causes in tables.</summary>
internal static class CauseUnits
{
    private static readonly (Dimension Dimension, string Unit)[] Known =
    [
        (Dimension.Length, "m"), (Dimension.Angle, "deg"), (Dimension.SheetConductance, "S"), (Dimension.QuadraticConductance, "A m/V^2"),
        (Dimension.CubicConductance, "A m^2/V^3"), (Dimension.Field, "V/m"), (Dimension.LineResistance, "ohm m"),
        (Dimension.ContactResistivity, "ohm m^2"), (Dimension.None, "1"),
    ];

    public static string Of(Dimension dimension) => Known.First(k => k.Dimension == dimension).Unit;
}

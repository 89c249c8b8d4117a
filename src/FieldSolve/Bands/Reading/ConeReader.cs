using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Quantities;
using Range = FieldSolve.Device.Range;

namespace FieldSolve.Bands;

/// <summary>Reads [[cone]].</summary>
/// <param name="faults">Where to report.</param>
/// <param name="isFilm">The file gives a thickness: cones have a third direction.</param>
/// <param name="hasCutOff">The file gives a cut-off.</param>
internal sealed class ConeReader(FaultList faults, bool isFilm, bool hasCutOff)
{
    private const double SpeedOfLight = 299_792_458;

    private static readonly Range Velocity = new(1, SpeedOfLight, "from 1 m/s to the speed of light");

    private static readonly Range Gap = new(0, 1e3 * SiConstants.Charge, "zero or greater (to 1 keV)");

    private static readonly Range TiltVelocity = new(-SpeedOfLight, SpeedOfLight, "below the speed of light");

    private static readonly Range TiltRatio = new(-1e3, 1e3, "at most 1000 either way");

    private readonly List<string> names = [];
    private int count;

    /// <summary>The cone; null, with faults, if it is no good.</summary>
    public Cone? Read(TomlTable table)
    {
        count++;
        int before = faults.Count;
        Section section = new(table, "[[cone]]", faults);
        TomlText? given = section.Text("name", "K", required: false);
        string name = given?.Value ?? string.Create(CultureInfo.InvariantCulture, $"cone {count}");
        if (given is not null && Values.IsName(name, given.At, "'name'", faults) && names.Contains(name))
        {
            faults.Add(given.At, $"there are two cones '{Values.Short(name)}'; names must differ");
        }

        names.Add(name);
        double? va = section.Quantity("v_a", Dimension.Velocity, Velocity, required: true);
        double? vb = section.Quantity("v_b", Dimension.Velocity, Velocity, required: true);
        double? vc = isFilm ? section.Quantity("v_c", Dimension.Velocity, Velocity, required: true) : NotInPlane(section, "v_c");
        double ta = Tilt(section, "tilt_a", va), tb = Tilt(section, "tilt_b", vb);
        double tc = isFilm ? Tilt(section, "tilt_c", vc) : NotInPlane(section, "tilt_c") ?? 0;
        double offset = section.Quantity("offset", Dimension.Energy, BandFile.Energy) ?? 0;
        double gap = section.Quantity("gap", Dimension.Energy, Gap) ?? 0;
        double degeneracy = section.Number("degeneracy", new(1e-6, 1e6, "greater than zero (1e-6 to 1e6)")) ?? 1;
        double angle = section.Quantity("angle", Dimension.Angle, Range.Angle) ?? 0;
        int chirality = Chirality(section);
        section.Finish();
        if (faults.Count > before || va is not { } a || vb is not { } b)
        {
            return null;
        }

        Cone cone = new()
        {
            Name = name,
            VelocityA = a,
            VelocityB = b,
            VelocityC = vc ?? 0,
            TiltA = ta,
            TiltB = tb,
            TiltC = tc,
            Offset = offset,
            Gap = gap,
            Degeneracy = degeneracy,
            Chirality = chirality,
            Angle = angle,
        };
        if (BandException.Wrong(cone, hasCutOff) is { } wrong)
        {
            faults.Add(table.At, $"[[cone]] '{Values.Short(name)}': {wrong}");
            return null;
        }

        return cone;
    }

    /// <summary>A velocity, or a plain number that is a share of the cone's velocity in that direction.</summary>
    private double Tilt(Section section, string key, double? velocity)
    {
        TomlEntry? entry = section.Take(key);
        return entry?.Value switch
        {
            null => 0,
            TomlNumber => (Values.Number(entry.Value, $"'{key}'", TiltRatio, integer: false, faults) ?? 0) * (velocity ?? 0),
            _ => Values.Quantity(entry.Value, $"'{key}'", Dimension.Velocity, TiltVelocity, faults, "1e5 m/s") ?? 0,
        };
    }

    private int Chirality(Section section)
    {
        TomlEntry? entry = section.Take("chirality");
        double value = section.Number("chirality", Range.Any, integer: true) ?? 1;
        if (entry is not null && value is not (1 or -1))
        {
            faults.Add(entry.Value.At, "'chirality' must be 1 or -1");
        }

        return value < 0 ? -1 : 1;
    }

    private double? NotInPlane(Section section, string key)
    {
        if (section.Take(key) is { } entry)
        {
            faults.Add(entry.At, $"'{key}' belongs to a three-dimensional cone; give the file a 'thickness', or leave it out");
        }

        return null;
    }
}

using FieldSolve.Device;
using FieldSolve.Quantities;
using Range = FieldSolve.Device.Range;

namespace FieldSolve.Bands;

/// <summary>Reads a bands file (TOML) into a valid input, or into all that is wrong with it.</summary>
public static class BandFile
{
    private const int FewestDirections = 8, MostDirections = 3600, MostCones = 100;

    /// <summary>Energies beyond this are slips; squares of far larger ones would overflow.</summary>
    internal static readonly Range Energy = new(-1e3 * SiConstants.Charge, 1e3 * SiConstants.Charge, "at most 1 keV either way");

    private static readonly Range Temperature = new(0, 1e5, "from 0 K to 100000 K");

    private static readonly Range Time = new(1e-18, 1, "from 1e-18 s to 1 s");

    private static readonly Range WaveNumber = new(1, 1e12, "from 1 1/m to 1e12 1/m");

    private static readonly InputWords Words = new(
        "a bands file",
        "a bands file has at least a [[cone]], 'chemical_potential' and 'relaxation_time', or a [profile]",
        "a measured profile belongs into a CSV file that [profile] names");

    /// <summary>Reads a bands file. A file it names is looked for from its folder.</summary>
    /// <param name="path">As the user gave it.</param>
    /// <exception cref="ArgumentNullException"><paramref name="path"/> is null.</exception>
    public static BandReading Read(string path)
    {
        ArgumentNullException.ThrowIfNull(path);
        return Parse(InputFile.Read(path, Words), path, Path.GetDirectoryName(path) ?? "");
    }

    /// <summary>Reads the text of a bands file.</summary>
    /// <param name="text">TOML.</param>
    /// <param name="path">What faults call the file.</param>
    /// <param name="folder">Folder that a file it names is looked for from; empty for the current one.</param>
    /// <exception cref="ArgumentNullException">An argument is null.</exception>
    public static BandReading Parse(string text, string path, string folder)
    {
        ArgumentNullException.ThrowIfNull(text);
        ArgumentNullException.ThrowIfNull(path);
        ArgumentNullException.ThrowIfNull(folder);
        return Parse(InputFile.Of(text, path, Words), path, folder);
    }

    private static BandReading Parse(InputFile input, string path, string folder)
    {
        if (input.Fault is { } unreadable)
        {
            return new BandReading(null, [unreadable]);
        }

        FaultList faults = new(path);
        Section root = new(TomlDocument.Parse(input.Text, input.HasBadBytes, faults), "the bands file", faults);
        TomlText? title = root.Text("title", "Tilted cones", required: false);
        double axis = root.Quantity("axis", Dimension.Angle, Range.Angle) ?? 0;
        bool hasProfile = root.Table.Find("profile") is not null, hasCones = root.Table.Find("cone") is not null;
        BandModel? model = null;
        MeasuredProfile? profile = null;
        if (hasProfile && !hasCones)
        {
            profile = Profile(root, new FileSource(folder, faults));
        }
        else
        {
            model = Model(root, title?.Value ?? Path.GetFileName(path), axis);
            if (root.Take("profile") is { } both)
            {
                faults.Add(both.At, "a bands file has either cones or a measured [profile]; write the profile into a file of its own");
            }
        }

        root.Finish();
        return faults.Count > 0
            ? new BandReading(null, faults.InOrder())
            : new BandReading(
                new BandInput
                {
                    Title = title?.Value ?? Path.GetFileName(path),
                    Path = path,
                    Sha256 = input.Sha256,
                    Axis = axis,
                    Model = model,
                    Profile = profile,
                },
                []);
    }

    private static MeasuredProfile? Profile(Section root, FileSource files)
    {
        if (root.Header("profile") is not { } section)
        {
            return null;
        }

        TomlText? name = section.Text("file", "profile.csv", required: true);
        section.Finish();
        return name is not null && files.Read(name) is { } text
            ? ProfileReader.Read(text, files.Shown(name.Value), (file, line, column, message) => root.Faults.AddElsewhere(name.At, file, line, column, message))
            : null;
    }

    private static BandModel? Model(Section root, string title, double axis)
    {
        double? thickness = root.Quantity("thickness", Dimension.Length, Range.Extent);
        double? cutOff = root.Quantity("cut_off", Dimension.WaveNumber, WaveNumber);
        IReadOnlyList<TomlTable> tables = root.Tables("cone");
        if (tables.Count > MostCones)
        {
            root.Faults.Add(tables[MostCones].At, "a bands file has at most 100 cones; equal ones are written once, with 'degeneracy'");
            tables = [.. tables.Take(MostCones)];
        }

        if (root.Take("cone") is null)
        {
            root.MissingUnlessMisspelt("the file has no [[cone]], for example v_a = \"5e5 m/s\", v_b = \"3e5 m/s\", tilt_a = 0.4; or give a measured [profile]", "cone", "profile");
        }

        ConeReader reader = new(root.Faults, thickness is not null || root.Take("thickness") is not null, cutOff is not null || root.Take("cut_off") is not null);
        Cone?[] cones = [.. tables.Select(reader.Read)];
        TomlEntry? levelEntry = root.Take("chemical_potential");
        double? level = root.Quantity("chemical_potential", Dimension.Energy, Energy, required: true);
        double? tau = root.Quantity("relaxation_time", Dimension.Time, Time, required: true, "0.2 ps");
        double temperature = root.Quantity("temperature", Dimension.Temperature, Temperature) ?? 0;
        double shift = root.Number("shift", new(1e-6, 1, "between 1e-6 and 1")) ?? 0.1;
        double error = root.Number("error", new(1e-12, 1e-2, "between 1e-12 and 1e-2")) ?? (cutOff is null ? 1e-8 : thickness is null ? 1e-6 : 1e-3);
        TomlEntry? directionsEntry = root.Take("directions");
        double directions = root.Number("directions", new(FewestDirections, MostDirections, "from 8 to 3600"), integer: true) ?? 72;
        if (directions % 2 != 0)
        {
            root.Faults.Add(directionsEntry!.Value.At, "'directions' must be even, so that each direction has its opposite");
        }

        Cone[] good = [.. cones.OfType<Cone>()];
        if (level is not { } mu || tau is not { } time || good.Length == 0 || good.Length < cones.Length)
        {
            return null;
        }

        double reach = ConeIntegrals.Tail * SiConstants.Boltzmann * temperature;
        if (good.All(c => c.Tilt < 1 && Math.Abs(mu - c.Offset) + reach <= c.BandEdge))
        {
            root.Faults.Add(
                levelEntry!.Value.At,
                "'chemical_potential' lies where no cone has states, so that nothing conducts; move it out of the gaps, or raise 'temperature'");
        }

        return new BandModel
        {
            Title = title,
            Cones = good,
            ChemicalPotential = mu,
            RelaxationTime = time,
            Temperature = temperature,
            Thickness = thickness,
            CutOff = cutOff,
            Axis = axis,
            Shift = shift,
            Error = error,
            Directions = (int)directions,
        };
    }
}

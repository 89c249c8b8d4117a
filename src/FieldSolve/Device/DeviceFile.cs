using FieldSolve.Geometry;
using FieldSolve.Laws;

namespace FieldSolve.Device;

/// <summary>Reads a device file (TOML) into a validated device, or into all that is wrong with it.</summary>
public static class DeviceFile
{
    private static readonly InputWords Words = new(
        "a device file",
        "a device file has at least [sheet], [law], two contacts and a [[wiring]]",
        "long outlines and pads belong into a GeoJSON file that it names");

    /// <summary>Reads a device file. Files it names are looked for from its folder.</summary>
    /// <param name="path">As the user gave it.</param>
    /// <returns>The device, or the faults; a file that cannot be read is a fault, not an exception.</returns>
    /// <exception cref="ArgumentNullException"><paramref name="path"/> is null.</exception>
    public static DeviceReading Read(string path)
    {
        ArgumentNullException.ThrowIfNull(path);
        return Parse(InputFile.Read(path, Words), path, Path.GetDirectoryName(path) ?? "");
    }

    /// <summary>Reads the text of a device file.</summary>
    /// <param name="text">TOML; a byte order mark in front is passed over.</param>
    /// <param name="path">What faults and the device call the file.</param>
    /// <param name="folder">Folder that the files it names are looked for from; empty for the current one.</param>
    /// <returns>The device, or the faults.</returns>
    /// <exception cref="ArgumentNullException">An argument is null.</exception>
    public static DeviceReading Parse(string text, string path, string folder)
    {
        ArgumentNullException.ThrowIfNull(text);
        ArgumentNullException.ThrowIfNull(path);
        ArgumentNullException.ThrowIfNull(folder);
        return Parse(InputFile.Of(text, path, Words), path, folder);
    }

    private static DeviceReading Parse(InputFile input, string path, string folder)
    {
        if (input.Fault is { } unreadable)
        {
            return new DeviceReading(null, [unreadable]);
        }

        FaultList faults = new(path);
        Section root = new(TomlDocument.Parse(input.Text, input.HasBadBytes, faults), "the device file", faults);
        FileSource files = new(folder, faults);

        TomlText? title = root.Text("title", "Disc with twelve arms", required: false);
        SheetReading sheet = SheetReader.Read(root, files);
        (ISheetLaw? law, double axis) = LawReader.Read(root, files);
        ContactReader contacts = new(root, sheet, files);
        contacts.Read();
        IReadOnlyList<Wiring> wirings = new WiringReader(root, contacts).Read();
        DriveSpec? drive = RunReader.Drive(root);
        TurnSpec? turn = RunReader.Turn(root, contacts, wirings);
        MeshSpec mesh = RunReader.Mesh(root);
        CautionSpec caution = RunReader.Caution(root);
        ToleranceReader tolerance = new(root, contacts);
        tolerance.Read();
        FitReader fit = new(root, contacts);
        fit.Read();
        NeedTwo(root, contacts);
        root.Finish();
        PlacementReport.Check(sheet, contacts, faults);
        if (faults.Count > 0)
        {
            return new DeviceReading(null, faults.InOrder());
        }

        Outline live = sheet.Live!;
        var device = new SheetDevice
        {
            Title = title?.Value ?? Path.GetFileName(path),
            Path = path,
            Sha256 = input.Sha256,
            Layout = new(live, [.. contacts.Contacts.Select(c => c.Placement!)]),
            Domain = DomainBuilder.Build(live, [.. contacts.Contacts.Select(c => c.Placement!)], [.. contacts.Tips.Select(t => t.At!.Value)]),
            Shape = sheet.Plan!.Shape,
            Drawn = sheet.Plan.Drawn.Loops,
            Law = law!,
            Axis = axis,
            Contacts = [.. contacts.Contacts.Select(c => c.Build(live))],
            Tips = [.. contacts.Tips.Select(t => new Tip(t.Name!, t.At!.Value))],
            Wirings = wirings,
            Drive = drive,
            Turn = turn,
            Mesh = mesh,
            Caution = caution,
            Thickness = sheet.Thickness,
            MeanFreePath = sheet.MeanFreePath,
            GateCapacitance = sheet.GateCapacitance,
            DeadEdge = sheet.DeadEdge,
        };
        device = device with { Tolerance = tolerance.Resolve(device), Fit = fit.Resolve(device) };
        return faults.Count > 0 ? new DeviceReading(null, faults.InOrder()) : new DeviceReading(device, []);
    }

    private static void NeedTwo(Section root, ContactReader contacts)
    {
        if (contacts.Contacts.Count < 2 && contacts.NamesComplete)
        {
            string there = contacts.Contacts.Count == 0 ? "no contact" : "one contact";
            root.MissingUnlessMisspelt($"the file has {there}; a current needs two, each under [[contact]] or in a ring under [[contacts]]", "contact", "contacts");
        }
    }
}

using System.Globalization;
using System.Security;
using System.Security.Cryptography;
using System.Text;
using FieldSolve.Geometry;
using FieldSolve.Laws;

namespace FieldSolve.Device;

/// <summary>Reads a device file (TOML) into a validated device, or into all that is wrong with it.</summary>
public static class DeviceFile
{
    /// <summary>Device files are written by hand; far larger ones are something else, and take long to say so of.</summary>
    private const int LargestFile = 200_000;

    /// <summary>Control characters that make a file no text: more than one in this many.</summary>
    private const int TextPerControl = 100;

    private const char ByteOrderMark = '\uFEFF';

    /// <summary>Reads a device file. Files it names are looked for from its folder.</summary>
    /// <param name="path">As the user gave it.</param>
    /// <returns>The device, or the faults; a file that cannot be read is a fault, not an exception.</returns>
    /// <exception cref="ArgumentNullException"><paramref name="path"/> is null.</exception>
    public static DeviceReading Read(string path)
    {
        ArgumentNullException.ThrowIfNull(path);
        byte[] bytes;
        try
        {
            if (Directory.Exists(path))
            {
                return Unreadable(path, "this is a directory; name a device file (TOML)");
            }

            using FileStream stream = new(path, FileMode.Open, FileAccess.Read, FileShare.ReadWrite);
            if (stream.CanSeek && stream.Length > LargestFile)
            {
                return TooLarge(path);
            }

            bytes = ReadAtMost(stream, LargestFile + 1);
        }
        catch (Exception e) when (e is FileNotFoundException or DirectoryNotFoundException)
        {
            return Unreadable(path, "the file does not exist");
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException or SecurityException or ArgumentException or NotSupportedException)
        {
            return Unreadable(path, $"the file cannot be read: {e.Message}");
        }

        if (bytes.Length > LargestFile)
        {
            return TooLarge(path);
        }

        string text = Encoding.UTF8.GetString(bytes);
        bool hasBadBytes = text.Contains('\uFFFD', StringComparison.Ordinal) && !Encoding.UTF8.GetBytes(text).AsSpan().SequenceEqual(bytes);
        return Parse(text, hasBadBytes, path, Path.GetDirectoryName(path) ?? "", Convert.ToHexStringLower(SHA256.HashData(bytes)));
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
        return text.Length > LargestFile
            ? TooLarge(path)
            : Parse(text, false, path, folder, Convert.ToHexStringLower(SHA256.HashData(Encoding.UTF8.GetBytes(text))));
    }

    private static DeviceReading Parse(string text, bool hasBadBytes, string path, string folder, string sha256)
    {
        text = text.StartsWith(ByteOrderMark) ? text[1..] : text;
        if (string.IsNullOrWhiteSpace(text))
        {
            return Unreadable(path, "the file is empty; a device file has at least [sheet], [law], two contacts and a [[wiring]]");
        }

        if (text.Count(c => char.IsControl(c) && c is not ('\n' or '\r' or '\t')) > text.Length / TextPerControl)
        {
            return Unreadable(path, "this is not a text file; a device file is TOML text in UTF-8");
        }

        FaultList faults = new(path);
        Section root = new(TomlDocument.Parse(text, hasBadBytes, faults), "the device file", faults);
        FileSource files = new(folder, faults);

        TomlText? title = root.Text("title", "Disc with twelve arms", required: false);
        SheetReading sheet = SheetReader.Read(root, files);
        (ISheetLaw? law, double axis) = LawReader.Read(root, files);
        ContactReader contacts = new(root, sheet, files);
        contacts.Read();
        IReadOnlyList<Wiring> wirings = new WiringReader(root, contacts).Read();
        DriveSpec? drive = RunReader.Drive(root);
        TurnSpec? turn = RunReader.Turn(root, contacts);
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
            Sha256 = sha256,
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

    private static byte[] ReadAtMost(FileStream stream, int most)
    {
        byte[] buffer = new byte[most];
        int count = stream.ReadAtLeast(buffer, most, throwOnEndOfStream: false);
        return buffer[..count];
    }

    private static DeviceReading TooLarge(string path) => Unreadable(path, string.Create(
        CultureInfo.InvariantCulture,
        $"the file is larger than {LargestFile / 1000} kB, which no device file is; long outlines and pads belong into a GeoJSON file that it names"));

    private static DeviceReading Unreadable(string path, string message) => new(null, [new Fault(path, 1, 1, message)]);
}

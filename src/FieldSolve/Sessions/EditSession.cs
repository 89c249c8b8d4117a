using System.Security.Cryptography;
using System.Text;
using FieldSolve.Device;
using FieldSolve.Files;

namespace FieldSolve.Sessions;

/// <summary>Where an edited device file stands.</summary>
/// <param name="Version">Grows with every change of the text.</param>
/// <param name="Path">Path of the file.</param>
/// <param name="Text">The text as edited.</param>
/// <param name="Device">What it says.</param>
/// <param name="CanUndo">There is something to undo.</param>
/// <param name="CanRedo">There is something to redo.</param>
/// <param name="IsSaved">The file holds this text.</param>
/// <param name="ChangedOnDisk">Somebody else changed the file since it was read or saved.</param>
public sealed record SessionState(
    int Version, string Path, EditableToml Text, SheetDevice Device, bool CanUndo, bool CanRedo, bool IsSaved, bool ChangedOnDisk);

/// <summary>What came of a save.</summary>
public enum SaveOutcome
{
    /// <summary>The file holds the text.</summary>
    Saved,

    /// <summary>Not written: the file was changed by somebody else meanwhile.</summary>
    ChangedOnDisk,

    /// <summary>Not written: a file of that name exists.</summary>
    Exists,
}

/// <summary>
/// A device file while it is edited: its text, what it says, and the texts before. A change that would make a faulty device is refused and nothing
/// moves. Nothing is written except by a save. Safe for several threads.
/// </summary>
public sealed class EditSession
{
    private const int MostUndo = 1000;

    private readonly Lock gate = new();
    private readonly List<string> undo = [];
    private readonly List<string> redo = [];
    private string path;
    private EditableToml text;
    private SheetDevice device;
    private string savedText;
    private string diskHash;
    private bool changedOnDisk;
    private string? lastGesture;
    private int version = 1;

    private EditSession(string path, EditableToml text, SheetDevice device, string diskHash)
    {
        (this.path, this.text, this.device, this.diskHash) = (path, text, device, diskHash);
        savedText = text.Text;
    }

    /// <summary>Called after every change of <see cref="State"/>, not under a lock.</summary>
    public event EventHandler? Changed;

    /// <summary>Where the session stands.</summary>
    public SessionState State
    {
        get
        {
            lock (gate)
            {
                return new(version, path, text, device, undo.Count > 0, redo.Count > 0, text.Text == savedText, changedOnDisk);
            }
        }
    }

    /// <summary>Opens a device file.</summary>
    /// <param name="path">As the user gave it.</param>
    /// <returns>The session, or the faults that forbid it.</returns>
    public static (EditSession? Session, IReadOnlyList<Fault> Faults) Open(string path)
    {
        DeviceReading reading = DeviceFile.Read(path);
        if (reading.Device is null)
        {
            return (null, reading.Faults);
        }

        if (reading.Device.Drive is null)
        {
            return (null, [new(path, 1, 1, "the file has no [drive]; add one, for example: current = { from = \"0 uA\", to = \"100 uA\", steps = 11 }")]);
        }

        (string text, string hash) = ReadDisk(path);
        DeviceReading again = Parse(text, path);
        return again.Device is { } device ? (new(path, new(text), device, hash), []) : (null, again.Faults);
    }

    /// <summary>Makes a change.</summary>
    /// <param name="change">Gets the text and the device, gives the new text.</param>
    /// <param name="gesture">Changes that follow one another under the same name are undone together; null for a change of its own.</param>
    /// <returns>Empty, or the faults that the new text would have; the session then stays as it was.</returns>
    /// <exception cref="LayoutEditException">The change itself cannot be made.</exception>
    public IReadOnlyList<Fault> Apply(Func<EditableToml, SheetDevice, EditableToml> change, string? gesture)
    {
        ArgumentNullException.ThrowIfNull(change);
        lock (gate)
        {
            EditableToml next = change(text, device);
            if (next.Text == text.Text)
            {
                return [];
            }

            IReadOnlyList<Fault> faults = Take(next.Text);
            if (faults.Count > 0)
            {
                return faults;
            }

            if (gesture is null || gesture != lastGesture)
            {
                undo.Add(text.Text);
                if (undo.Count > MostUndo)
                {
                    undo.RemoveAt(0);
                }
            }

            redo.Clear();
            text = next;
            lastGesture = gesture;
            version++;
        }

        Changed?.Invoke(this, EventArgs.Empty);
        return [];
    }

    /// <summary>Goes back to the text before the last change; false when there is none.</summary>
    public bool Undo() => Step(undo, redo);

    /// <summary>Takes an undo back; false when there is none.</summary>
    public bool Redo() => Step(redo, undo);

    /// <summary>Writes the text into its file.</summary>
    /// <param name="overwrite">Also when somebody else changed the file meanwhile.</param>
    /// <exception cref="IOException">The file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The file may not be written.</exception>
    public SaveOutcome Save(bool overwrite)
    {
        SaveOutcome outcome;
        lock (gate)
        {
            changedOnDisk = HashOf(path) != diskHash;
            outcome = changedOnDisk && !overwrite ? SaveOutcome.ChangedOnDisk : Write(path);
        }

        Changed?.Invoke(this, EventArgs.Empty);
        return outcome;
    }

    /// <summary>Writes the text into another file beside the present one and goes on with that.</summary>
    /// <param name="name">A plain name that ends in .toml.</param>
    /// <param name="overwrite">Also when a file of that name exists.</param>
    /// <exception cref="LayoutEditException">The name is no plain name of a device file.</exception>
    /// <exception cref="IOException">The file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">The file may not be written.</exception>
    public SaveOutcome SaveAs(string name, bool overwrite)
    {
        ArgumentNullException.ThrowIfNull(name);
        PlainName.Check(name, ".toml", "variant.toml");
        SaveOutcome outcome;
        lock (gate)
        {
            string target = Path.Combine(Path.GetDirectoryName(path) ?? "", name);
            if (!PlainName.IsFree(target, overwrite))
            {
                return SaveOutcome.Exists;
            }

            outcome = Write(target);
            path = target;
            Take(text.Text);
            version++;
        }

        Changed?.Invoke(this, EventArgs.Empty);
        return outcome;
    }

    /// <summary>Takes the text that is on the disk now, as a change that can be undone.</summary>
    /// <returns>Empty, or the faults of the file; the session then stays as it was.</returns>
    /// <exception cref="IOException">The file cannot be read.</exception>
    public IReadOnlyList<Fault> Reload()
    {
        lock (gate)
        {
            (string disk, string hash) = ReadDisk(path);
            string before = text.Text;
            IReadOnlyList<Fault> faults = Take(disk);
            if (faults.Count > 0)
            {
                return faults;
            }

            if (disk != before)
            {
                undo.Add(before);
                redo.Clear();
                text = new(disk);
                version++;
            }

            (diskHash, savedText, changedOnDisk, lastGesture) = (hash, disk, false, null);
        }

        Changed?.Invoke(this, EventArgs.Empty);
        return [];
    }

    /// <summary>Reads the files anew that the device names, after one of them was written.</summary>
    /// <returns>Empty, or the faults they now have; the session then stays as it was.</returns>
    public IReadOnlyList<Fault> ReadFiles()
    {
        lock (gate)
        {
            if (Take(text.Text) is { Count: > 0 } faults)
            {
                return faults;
            }

            version++;
        }

        Changed?.Invoke(this, EventArgs.Empty);
        return [];
    }

    /// <summary>Looks whether somebody else changed the file.</summary>
    public void CheckDisk()
    {
        bool told;
        lock (gate)
        {
            bool now = HashOf(path) != diskHash;
            told = now != changedOnDisk;
            changedOnDisk = now;
        }

        if (told)
        {
            Changed?.Invoke(this, EventArgs.Empty);
        }
    }

    private bool Step(List<string> from, List<string> onto)
    {
        lock (gate)
        {
            if (from.Count == 0 || Take(from[^1]) is { Count: > 0 })
            {
                return false;
            }

            onto.Add(text.Text);
            text = new(from[^1]);
            from.RemoveAt(from.Count - 1);
            lastGesture = null;
            version++;
        }

        Changed?.Invoke(this, EventArgs.Empty);
        return true;
    }

    // Sets the device when the text is good.
    private IReadOnlyList<Fault> Take(string next)
    {
        DeviceReading reading = Parse(next, path);
        if (reading.Device is not { } made)
        {
            return reading.Faults;
        }

        if (made.Drive is null)
        {
            return [new(path, 1, 1, "without a [drive] there is nothing to compute")];
        }

        device = made;
        return [];
    }

    private SaveOutcome Write(string target)
    {
        WholeFile.RemoveLeftovers(target);
        WholeFile.WriteText(target, text.Text);
        (savedText, diskHash, changedOnDisk) = (text.Text, HashOf(target), false);
        return SaveOutcome.Saved;
    }

    private static DeviceReading Parse(string text, string path) => DeviceFile.Parse(text, path, Path.GetDirectoryName(path) ?? "");

    private static (string Text, string Hash) ReadDisk(string path)
    {
        byte[] bytes = File.ReadAllBytes(path);
        return (Encoding.UTF8.GetString(bytes), Convert.ToHexString(SHA256.HashData(bytes)));
    }

    // Empty for a file that is gone.
    private static string HashOf(string path)
    {
        try
        {
            return Convert.ToHexString(SHA256.HashData(File.ReadAllBytes(path)));
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            return "";
        }
    }
}

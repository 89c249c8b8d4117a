namespace FieldSolve.Sessions;

/// <summary>Names of files that a page may ask to be written: plain names beside the device file.</summary>
internal static class PlainName
{
    private const string NotInNames = "/\\:*?\"<>|";

    /// <summary>Refuses every name that could lead elsewhere or is no name of its kind.</summary>
    /// <param name="name">As asked for.</param>
    /// <param name="ending">What it must end with, such as ".toml".</param>
    /// <param name="example">For the message.</param>
    /// <exception cref="LayoutEditException">It is no such name.</exception>
    public static void Check(string name, string ending, string example)
    {
        if (name.Length is 0 or > 200 || Path.GetFileName(name) != name || name.Any(c => char.IsControl(c) || NotInNames.Contains(c, StringComparison.Ordinal)) || name.StartsWith('.')
            || !name.EndsWith(ending, StringComparison.OrdinalIgnoreCase))
        {
            throw new LayoutEditException($"the name must be a plain file name that ends in {ending}, for example \"{example}\"; it is saved beside the device file");
        }
    }

    /// <summary>Whether a file of that name may be written: never a folder or a link, and one that exists only when asked.</summary>
    public static bool IsFree(string target, bool overwrite) =>
        !Directory.Exists(target) && (!File.Exists(target) || (File.ResolveLinkTarget(target, false) is null && overwrite));
}

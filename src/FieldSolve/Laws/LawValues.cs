namespace FieldSolve.Laws;

/// <summary>A file that a law names.</summary>
/// <param name="Path">As messages should show it.</param>
/// <param name="Text">Its whole text.</param>
public sealed record LawFile(string Path, string Text);

/// <summary>What the device file gives for the parameters of a law.</summary>
public sealed class LawValues
{
    private readonly Dictionary<string, double> numbers;
    private readonly IReadOnlyDictionary<string, LawFile> files;

    /// <summary>Keeps the values given; missing numbers take the parameter's default.</summary>
    /// <param name="kind">The law they are meant for.</param>
    /// <param name="numbers">SI value by key.</param>
    /// <param name="files">Files by key; null when the law has none.</param>
    /// <exception cref="LawException">A key is unknown, a required one is missing or a number lies outside its bound.</exception>
    public LawValues(
        LawKind kind, IReadOnlyDictionary<string, double> numbers, IReadOnlyDictionary<string, LawFile>? files = null)
    {
        ArgumentNullException.ThrowIfNull(kind);
        ArgumentNullException.ThrowIfNull(numbers);
        this.files = files ?? new Dictionary<string, LawFile>();
        foreach (string key in numbers.Keys.Concat(this.files.Keys).Order(StringComparer.Ordinal))
        {
            if (!kind.Parameters.Any(p => p.Key == key && p.IsFile == this.files.ContainsKey(key)))
            {
                throw new LawException($"The law '{kind.Name}' has no parameter '{key}'.");
            }
        }

        Dictionary<string, double> all = [];
        foreach (LawParameter p in kind.Parameters)
        {
            bool given = p.IsFile ? this.files.ContainsKey(p.Key) : numbers.ContainsKey(p.Key);
            if (p.Required && !given)
            {
                throw new LawException($"The law '{kind.Name}' needs '{p.Key}' ({p.Meaning}).");
            }

            if (p.IsFile)
            {
                continue;
            }

            double value = given ? numbers[p.Key] : p.Default;
            if (given && !p.Allows(value))
            {
                throw new LawException(string.Create(
                    System.Globalization.CultureInfo.InvariantCulture,
                    $"'{p.Key}' ({p.Meaning}) is {value:G6}; it must be {p.BoundText}."));
            }

            all[p.Key] = value;
        }

        this.numbers = all;
    }

    /// <summary>SI value of a numeric parameter: as given, or its default.</summary>
    /// <param name="key">Key of one of the kind's numeric parameters.</param>
    public double this[string key] => numbers[key];

    /// <summary>The file named by a parameter.</summary>
    /// <param name="key">Key of one of the kind's file parameters.</param>
    public LawFile File(string key) => files[key];
}

namespace FieldSolve.Runs;

/// <summary>How a sample was solved.</summary>
public enum SampleStatus
{
    /// <summary>On the moved mesh.</summary>
    Ok,

    /// <summary>On a mesh of its own, since the moved one would have lost its quality or the contacts pass a corner.</summary>
    Remeshed,

    /// <summary>The values make no device: contacts overlap, a width or a resistance is no longer positive.</summary>
    NoDevice,

    /// <summary>The sheet has no solution at the current, or one in which a ratio has no value.</summary>
    NotConverged,
}

/// <summary>One sample.</summary>
/// <param name="Index">Its number, from 0.</param>
/// <param name="Status">How it was solved.</param>
/// <param name="Values">One per quantity; empty when there is no solution.</param>
public sealed record SampleResult(int Index, SampleStatus Status, double[] Values);

/// <summary>Keeps finished samples, so that an interrupted run goes on where it was.</summary>
public interface ISampleStore
{
    /// <summary>Says which run the samples belong to, before the first <see cref="Known"/> or <see cref="Add"/>.</summary>
    /// <param name="design">A fingerprint of everything that decides the samples.</param>
    /// <param name="values">Number of values per sample.</param>
    void Open(string design, int values);

    /// <summary>Samples finished earlier, by number.</summary>
    IReadOnlyDictionary<int, SampleResult> Known { get; }

    /// <summary>Keeps one. Called from several threads, one at a time.</summary>
    void Add(SampleResult sample);
}

using System.Text;
using FieldSolve.Device;
using FsCheck;
using FsCheck.Fluent;
using FsCheck.Xunit;

namespace FieldSolve.Tests.DeviceTests;

/// <summary>Whatever a file holds, reading it ends, soon, with a device or with faults.</summary>
public class NoiseTests
{
    private static readonly string[] Splinters =
    [
        "[", "]", "{", "}", "\"", "'", "\"\"\"", "=", ",", ".", "\n", "#", "\\", " ", "\0", "\uFEFF", "\u00B5", "\uD83D\uDE00", "[[contact]]", "[sheet]",
        "0", "-1", "1e999", "nan", "true", "um", "\"5 um\"", "[\"1 um\", \"2 um\"]", "{ at = \"90 deg\", width = \"1 um\" }", "end = \"left\"", "pad = [", "1979-05-27",
    ];

    /// <summary>Random text made of characters and pieces of TOML.</summary>
    [Property(MaxTest = 300)]
    public Property Random_text_is_answered() => Prop.ForAll(
        Gen.Elements(Splinters).ArrayOf().Select(p => string.Concat(p)).ToArbitrary(), t => { AssertAnswered(t); });

    [Property(MaxTest = 200)]
    public Property Random_bytes_are_answered() => Prop.ForAll(
        ArbMap.Default.GeneratorFor<byte[]>().Select(b => Encoding.UTF8.GetString(b)).ToArbitrary(), t => { AssertAnswered(t); });

    /// <summary>A good file with a few pieces cut out, doubled or replaced.</summary>
    [Property(MaxTest = 400)]
    public Property A_mutated_file_is_answered()
    {
        var edit =
            from at in Gen.Choose(0, 10_000)
            from length in Gen.Choose(0, 12)
            from piece in Gen.Elements(Splinters)
            select (at, length, piece);
        var text =
            from good in Gen.Elements(DeviceTexts.Disc, DeviceTexts.Bar)
            from edits in Gen.Choose(1, 4).SelectMany(n => edit.ListOf(n))
            select edits.Aggregate(good, (t, e) => Edited(t, e.at, e.length, e.piece));
        return Prop.ForAll(text.ToArbitrary(), t => { AssertAnswered(t); });
    }

    // Texts that could cost more than their length; each is near the largest file taken.
    [Theory]
    [InlineData("a = [\n")]
    [InlineData("[a\nb = 1\n")]
    [InlineData("a = 1\n")]
    [InlineData("[[contact]]\n")]
    [InlineData("a = \"\"\"\n")]
    [InlineData("a.")]
    [InlineData("{")]
    [InlineData("a = \"x\n")]
    public void Repetition_is_answered_without_quadratic_cost(string piece)
    {
        DeviceReading reading = DeviceFile.Parse(string.Concat(Enumerable.Repeat(piece, 190_000 / piece.Length)), "d.toml", "");
        Assert.InRange(reading.Faults.Count, 1, 21);
    }

    private static string Edited(string text, int at, int length, string piece)
    {
        int start = at % (text.Length + 1), end = Math.Min(text.Length, start + length);
        return string.Concat(text.AsSpan(0, start), piece, text.AsSpan(end));
    }

    private static void AssertAnswered(string text)
    {
        DeviceReading reading = DeviceFile.Parse(text, "d.toml", "");
        Assert.Equal(reading.Device is null, reading.Faults.Count > 0);
        Assert.InRange(reading.Faults.Count, 0, 21);
        Assert.Equal(reading.Faults.OrderBy(f => f.Line).ThenBy(f => f.Column).Select(f => (f.Line, f.Column)), reading.Faults.Select(f => (f.Line, f.Column)));
        Assert.All(reading.Faults, f => Assert.DoesNotContain(f.Message, char.IsControl));
    }
}

using FieldSolve.Files;

namespace FieldSolve.Tests.FilesTests;

public sealed class WholeFileTests : IDisposable
{
    private readonly string folder = Directory.CreateTempSubdirectory("whole-file-").FullName;

    public void Dispose() => Directory.Delete(folder, recursive: true);

    [Fact]
    public void Makes_the_folder_and_writes_utf8_without_mark()
    {
        string path = Path.Combine(folder, "a", "b", "text.txt");
        WholeFile.WriteText(path, "5 µm\n");
        Assert.Equal([0x35, 0x20, 0xC2, 0xB5, 0x6D, 0x0A], File.ReadAllBytes(path));
    }

    [Fact]
    public void Replaces_an_old_file_and_leaves_nothing_beside_it()
    {
        string path = Path.Combine(folder, "x.csv");
        WholeFile.WriteText(path, "old, and longer");
        WholeFile.WriteText(path, "new");
        Assert.Equal("new", File.ReadAllText(path));
        Assert.Equal([path], Directory.GetFileSystemEntries(folder));
    }

    [Fact]
    public void A_failing_writer_leaves_the_old_file_and_no_temporary()
    {
        string path = Path.Combine(folder, "x.csv");
        WholeFile.WriteText(path, "old");
        Assert.Throws<InvalidOperationException>(() => WholeFile.Write(path, stream =>
        {
            stream.Write("half of the n"u8);
            throw new InvalidOperationException("broken off");
        }));
        Assert.Equal("old", File.ReadAllText(path));
        Assert.Equal([path], Directory.GetFileSystemEntries(folder));
    }

    [Fact]
    public void What_a_killed_writer_left_is_removed_and_nothing_else()
    {
        string path = Path.Combine(folder, "x.toml");
        string[] others = [".x.toml.7-2.part", ".x.toml.part", ".y.toml.7-1.part", ".x.toml.7-1.part.txt", ".x.toml.b-1.part"];
        string[] stay = [path, .. others.Select(n => Path.Combine(folder, n))];
        string left = Path.Combine(folder, ".x.toml.7-1.part");
        foreach (string file in stay.Append(left))
        {
            File.WriteAllText(file, "text");
            File.SetLastWriteTimeUtc(file, new DateTime(2020, 1, 1, 0, 0, 0, DateTimeKind.Utc));
        }

        File.SetLastWriteTimeUtc(stay[1], DateTime.UtcNow.AddMinutes(1)); // being written
        WholeFile.RemoveLeftovers(path);
        Assert.Equal(stay.Order(StringComparer.Ordinal), Directory.GetFileSystemEntries(folder).Order(StringComparer.Ordinal));
        WholeFile.RemoveLeftovers(Path.Combine(folder, "no", "such.toml"));
    }

    [Fact]
    public void A_folder_in_the_way_is_reported_and_nothing_is_left_behind()
    {
        string path = Path.Combine(folder, "taken");
        Directory.CreateDirectory(Path.Combine(path, "inside"));
        Assert.ThrowsAny<Exception>(() => WholeFile.WriteText(path, "text"));
        Assert.Equal([path], Directory.GetFileSystemEntries(folder));
    }
}

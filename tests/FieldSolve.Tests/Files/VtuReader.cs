using System.Buffers.Binary;
using System.Globalization;
using System.IO.Compression;
using System.Text;
using System.Xml.Linq;

namespace FieldSolve.Tests.FilesTests;

/// <summary>A reader of the .vtu files under test, written from the format's description and apart from the writer.</summary>
internal sealed class VtuReader
{
    private readonly byte[] data;
    private readonly bool compressed;

    public VtuReader(string path)
    {
        byte[] all = File.ReadAllBytes(path);
        int start = all.AsSpan().IndexOf("encoding=\"raw\">"u8) + "encoding=\"raw\">".Length;
        int end = all.AsSpan().LastIndexOf("</AppendedData>"u8);
        int mark = start + all.AsSpan(start).IndexOf((byte)'_');
        data = all[(mark + 1)..end];
        Xml = XDocument.Parse(Encoding.ASCII.GetString(all, 0, start) + Encoding.ASCII.GetString(all, end, all.Length - end));
        compressed = Xml.Root!.Attribute("compressor") is not null;
    }

    public XDocument Xml { get; }

    public string? Components(string name) => Find(name).Attribute("NumberOfComponents")?.Value;

    public double[] Doubles(string name) => Values(name, "Float64", 8, BinaryPrimitives.ReadDoubleLittleEndian);

    public int[] Ints(string name) => Values(name, "Int32", 4, BinaryPrimitives.ReadInt32LittleEndian);

    public long[] Longs(string name) => Values(name, "Int64", 8, BinaryPrimitives.ReadInt64LittleEndian);

    public byte[] Bytes(string name) => Values(name, "UInt8", 1, b => b[0]);

    private delegate T Read<T>(ReadOnlySpan<byte> bytes);

    private XElement Find(string name) => Xml.Descendants("DataArray").Single(a => a.Attribute("Name")!.Value == name);

    private T[] Values<T>(string name, string type, int size, Read<T> read)
    {
        XElement element = Find(name);
        Assert.Equal(type, element.Attribute("type")!.Value);
        byte[] bytes = Block(int.Parse(element.Attribute("offset")!.Value, CultureInfo.InvariantCulture));
        return [.. Enumerable.Range(0, bytes.Length / size).Select(k => read(bytes.AsSpan(k * size)))];
    }

    private byte[] Block(int offset)
    {
        int At(int k) => (int)BinaryPrimitives.ReadUInt64LittleEndian(data.AsSpan(offset + (8 * k)));
        if (!compressed)
        {
            return data[(offset + 8)..(offset + 8 + At(0))];
        }

        int blocks = At(0), place = offset + (8 * (3 + blocks));
        using MemoryStream whole = new();
        for (int k = 0; k < blocks; k++)
        {
            using ZLibStream zlib = new(new MemoryStream(data, place, At(3 + k)), CompressionMode.Decompress);
            zlib.CopyTo(whole);
            Assert.Equal(k < blocks - 1 || At(2) == 0 ? (long)(k + 1) * At(1) : ((long)k * At(1)) + At(2), whole.Length);
            place += At(3 + k);
        }

        return whole.ToArray();
    }
}

using System.Buffers.Binary;
using System.Globalization;
using System.IO.Compression;
using System.Runtime.InteropServices;
using System.Text;

namespace FieldSolve.Files;

/// <summary>
/// One unstructured grid on its way into a file. Every array becomes a block of the appended section: its length in bytes
/// (or, compressed, the table of its zlib blocks) as UInt64, then the data.
/// </summary>
internal sealed class VtuDocument(int points, int cells)
{
    private const int BlockSize = 1 << 20;

    private readonly List<DataArray> arrays = [];

    private sealed record DataArray(string Section, string Name, string Type, int Components, bool IsField, byte[] Bytes);

    /// <summary>Data of the whole grid, such as the current.</summary>
    public void Field(string name, double[] values) => arrays.Add(new("FieldData", name, "Float64", 1, true, Bytes<double>(values)));

    /// <summary>Values on the points, interleaved by component.</summary>
    public void PointData(string name, int components, double[] values) => Add("PointData", name, "Float64", components, points, Bytes<double>(values));

    /// <summary>One number per cell.</summary>
    public void CellData(string name, double[] values) => Add("CellData", name, "Float64", 1, cells, Bytes<double>(values));

    /// <summary>One whole number per cell.</summary>
    public void CellData(string name, int[] values) => Add("CellData", name, "Int32", 1, cells, Bytes<int>(values));

    /// <summary>Coordinates, three per point.</summary>
    public void Points(double[] coordinates) => Add("Points", "Points", "Float64", 3, points, Bytes<double>(coordinates));

    /// <summary>Cells that are all of one type.</summary>
    public void Cells(int[] nodes, int nodesPerCell, byte type)
    {
        long[] offsets = [.. Enumerable.Range(1, cells).Select(k => (long)k * nodesPerCell)];
        byte[] types = new byte[cells];
        Array.Fill(types, type);
        Add("Cells", "connectivity", "Int32", 1, cells * nodesPerCell, Bytes<int>(nodes));
        Add("Cells", "offsets", "Int64", 1, cells, Bytes<long>(offsets));
        Add("Cells", "types", "UInt8", 1, cells, types);
    }

    /// <summary>Writes the file.</summary>
    public void Save(Stream stream, bool compressed)
    {
        byte[][] blocks = [.. arrays.Select(a => compressed ? Compressed(a.Bytes) : Plain(a.Bytes))];
        StringBuilder xml = new();
        xml.Append("<?xml version=\"1.0\"?>\n<VTKFile type=\"UnstructuredGrid\" version=\"1.0\" byte_order=\"LittleEndian\" header_type=\"UInt64\"");
        xml.Append(compressed ? " compressor=\"vtkZLibDataCompressor\">\n" : ">\n");
        xml.Append("<UnstructuredGrid>\n");
        long offset = 0;
        List<long> offsets = [];
        foreach (byte[] block in blocks)
        {
            offsets.Add(offset);
            offset += block.Length;
        }

        AddSection(xml, "FieldData", offsets);
        xml.Append(CultureInfo.InvariantCulture, $"<Piece NumberOfPoints=\"{points}\" NumberOfCells=\"{cells}\">\n");
        AddSection(xml, "PointData", offsets);
        AddSection(xml, "CellData", offsets);
        AddSection(xml, "Points", offsets);
        AddSection(xml, "Cells", offsets);
        xml.Append("</Piece>\n</UnstructuredGrid>\n<AppendedData encoding=\"raw\">\n_");
        stream.Write(Encoding.ASCII.GetBytes(xml.ToString()));
        foreach (byte[] block in blocks)
        {
            stream.Write(block);
        }

        stream.Write("\n</AppendedData>\n</VTKFile>\n"u8);
    }

    private void Add(string section, string name, string type, int components, int tuples, byte[] bytes)
    {
        int size = type switch { "UInt8" => 1, "Int32" => 4, _ => 8 };
        if (bytes.LongLength != (long)size * components * tuples)
        {
            throw new ArgumentException($"The array '{name}' does not have {components} values for each of {tuples} items.", nameof(bytes));
        }

        arrays.Add(new(section, name, type, components, false, bytes));
    }

    private void AddSection(StringBuilder xml, string section, List<long> offsets)
    {
        if (!arrays.Any(a => a.Section == section))
        {
            return;
        }

        xml.Append(CultureInfo.InvariantCulture, $"<{section}>\n");
        for (int k = 0; k < arrays.Count; k++)
        {
            DataArray a = arrays[k];
            if (a.Section != section)
            {
                continue;
            }

            string tuples = a.IsField ? " NumberOfTuples=\"1\"" : "";
            string components = a.Components > 1 ? $" NumberOfComponents=\"{a.Components}\"" : "";
            xml.Append(
                CultureInfo.InvariantCulture,
                $"<DataArray type=\"{a.Type}\" Name=\"{a.Name}\"{components}{tuples} format=\"appended\" offset=\"{offsets[k]}\"/>\n");
        }

        xml.Append(CultureInfo.InvariantCulture, $"</{section}>\n");
    }

    private static byte[] Plain(byte[] bytes)
    {
        byte[] block = new byte[8 + bytes.Length];
        BinaryPrimitives.WriteUInt64LittleEndian(block, (ulong)bytes.LongLength);
        bytes.CopyTo(block, 8);
        return block;
    }

    private static byte[] Compressed(byte[] bytes)
    {
        int count = (bytes.Length + BlockSize - 1) / BlockSize;
        byte[][] parts = new byte[count][];
        for (int k = 0; k < count; k++)
        {
            using MemoryStream memory = new();
            using (ZLibStream zlib = new(memory, CompressionLevel.Fastest, leaveOpen: true))
            {
                zlib.Write(bytes, k * BlockSize, Math.Min(BlockSize, bytes.Length - (k * BlockSize)));
            }

            parts[k] = memory.ToArray();
        }

        // Table: number of blocks, size of a full block, size of the last block if it is partial (else 0), compressed sizes.
        using MemoryStream block = new();
        void Add(long value)
        {
            Span<byte> eight = stackalloc byte[8];
            BinaryPrimitives.WriteInt64LittleEndian(eight, value);
            block.Write(eight);
        }

        Add(count);
        Add(BlockSize);
        Add(bytes.Length % BlockSize);
        foreach (byte[] part in parts)
        {
            Add(part.Length);
        }

        foreach (byte[] part in parts)
        {
            block.Write(part);
        }

        return block.ToArray();
    }

    private static byte[] Bytes<T>(T[] values)
        where T : unmanaged
    {
        byte[] bytes = MemoryMarshal.AsBytes(values.AsSpan()).ToArray();
        if (!BitConverter.IsLittleEndian)
        {
            int size = Marshal.SizeOf<T>();
            for (int k = 0; k < bytes.Length; k += size)
            {
                bytes.AsSpan(k, size).Reverse();
            }
        }

        return bytes;
    }
}

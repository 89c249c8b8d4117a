using System.Buffers.Binary;
using System.Globalization;
using System.IO.Compression;
using System.Text;
using System.Xml;
using System.Xml.Linq;
using FieldSolve.Device;

namespace FieldSolve.Files;

/// <summary>
/// Reads the triangles of an unstructured grid in the open VTK XML format (.vtu): points and three-cornered cells of one piece; arrays as text, or appended
/// raw, plain or in zlib blocks, as <see cref="VtuFile"/> writes them. Layout as named there.
/// </summary>
public static class VtuTriangles
{
    private const int MostItems = 20_000_000;
    private const byte LinearTriangle = 5;

    /// <summary>Reads a file.</summary>
    /// <param name="path">The file.</param>
    /// <returns>Coordinates in metres and three vertex indices per triangle, or the fault with its place.</returns>
    public static (double[] X, double[] Y, int[] Corners, Fault? Fault) Read(string path)
    {
        try
        {
            if (PlainFile.HasNoLength(path))
            {
                return ([], [], [], new(path, 1, 1, "the mesh file is empty (or no plain file); name a .vtu file written by 'fieldsolve mesh'"));
            }

            (double[] x, double[] y, int[] corners) = new Grid(path, File.ReadAllBytes(path)).Triangles();
            return (x, y, corners, null);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            return ([], [], [], new(path, 1, 1, $"the mesh file cannot be read ({e.Message.ReplaceLineEndings(" ")}); name a .vtu file written by 'fieldsolve mesh'"));
        }
        catch (XmlException e)
        {
            return ([], [], [], new(path, Math.Max(1, e.LineNumber), Math.Max(1, e.LinePosition), "this is not well-formed XML; name a .vtu file written by 'fieldsolve mesh'"));
        }
        catch (VtuException e)
        {
            return ([], [], [], new(path, e.Line, e.Column, e.Message));
        }
    }

    private sealed class VtuException(XObject? at, string message) : Exception(message)
    {
        public int Line { get; } = at is IXmlLineInfo i && i.HasLineInfo() ? i.LineNumber : 1;

        public int Column { get; } = at is IXmlLineInfo i && i.HasLineInfo() ? i.LinePosition : 1;
    }

    private sealed class Grid
    {
        private readonly XElement root;
        private readonly byte[] bytes;
        private readonly int appended;
        private readonly int header;
        private readonly bool compressed;

        public Grid(string path, byte[] bytes)
        {
            this.bytes = bytes;

            // What follows the underscore of the appended section is no XML.
            int tag = bytes.AsSpan().IndexOf("<AppendedData"u8);
            appended = tag < 0 ? -1 : tag + bytes.AsSpan(tag).IndexOf((byte)'_') + 1;
            string text = tag < 0 ? Encoding.UTF8.GetString(bytes) : Encoding.UTF8.GetString(bytes.AsSpan(0, tag)) + "</VTKFile>";
            using var reader = XmlReader.Create(new StringReader(text), new XmlReaderSettings { DtdProcessing = DtdProcessing.Prohibit, XmlResolver = null });
            root = XDocument.Load(reader, LoadOptions.SetLineInfo).Root!;
            if (root.Name.LocalName != "VTKFile" || Text(root, "type") != "UnstructuredGrid")
            {
                throw new VtuException(root, $"'{Path.GetFileName(path)}' is not a VTK file of an unstructured grid; name a .vtu file written by 'fieldsolve mesh'");
            }

            if (Text(root, "byte_order") is "BigEndian")
            {
                throw new VtuException(root, "the byte order is big-endian; write the file with byte_order=\"LittleEndian\"");
            }

            header = Text(root, "header_type") is "UInt64" ? 8 : 4;
            compressed = Text(root, "compressor") is not "";
            if (compressed && Text(root, "compressor") != "vtkZLibDataCompressor")
            {
                throw new VtuException(root, $"the compressor '{Text(root, "compressor")}' is not known; write the file with zlib or without compression");
            }
        }

        public (double[] X, double[] Y, int[] Corners) Triangles()
        {
            XElement piece = root.Descendants("Piece").FirstOrDefault() ?? throw new VtuException(root, "the file has no <Piece>; it must hold one grid");
            int points = Count(piece, "NumberOfPoints"), cells = Count(piece, "NumberOfCells");
            XElement place = piece.Element("Points")?.Element("DataArray") ?? throw new VtuException(piece, "the piece has no <Points> with a <DataArray>");
            double[] p = Numbers(place, 3L * points);
            byte[] types = [.. Numbers(Array(piece, "types"), cells).Select(v => (byte)v)];
            if (types.Any(t => t != LinearTriangle))
            {
                throw new VtuException(Array(piece, "types"), "the grid has cells that are not triangles (type 5); save the mesh with 'fieldsolve mesh', not a map");
            }

            int[] corners = [.. Numbers(Array(piece, "connectivity"), 3L * cells).Select(v => v is >= 0 and < MostItems ? (int)v : -1)];
            double[] x = new double[points], y = new double[points];
            for (int i = 0; i < points; i++)
            {
                (x[i], y[i]) = (p[3 * i], p[(3 * i) + 1]);
            }

            return (x, y, corners);
        }

        private static string Text(XElement e, string name) => e.Attribute(name)?.Value ?? "";

        private static int Count(XElement piece, string name) =>
            int.TryParse(Text(piece, name), NumberStyles.None, CultureInfo.InvariantCulture, out int n) && n is > 0 and <= MostItems
                ? n
                : throw new VtuException(piece, $"{name} = '{Text(piece, name)}' is not a whole number from 1 to {MostItems}");

        private static XElement Array(XElement piece, string name) =>
            piece.Element("Cells")?.Elements("DataArray").FirstOrDefault(a => Text(a, "Name") == name)
            ?? throw new VtuException(piece, $"the piece has no <Cells> with a <DataArray> named '{name}'");

        private double[] Numbers(XElement array, long count)
        {
            double[] values = Text(array, "format") switch
            {
                "ascii" => Ascii(array),
                "appended" => Appended(array),
                var other => throw new VtuException(array, $"the format '{other}' is not known here; write the arrays appended (raw) or as ascii"),
            };
            return values.LongLength == count
                ? values
                : throw new VtuException(array, $"the array '{Text(array, "Name")}' has {values.LongLength} numbers; {count} are needed");
        }

        private static double[] Ascii(XElement array) =>
        [
            .. array.Value.Split((char[]?)null, StringSplitOptions.RemoveEmptyEntries).Select(w =>
                double.TryParse(w, NumberStyles.Float, CultureInfo.InvariantCulture, out double v)
                    ? v
                    : throw new VtuException(array, $"'{w[..Math.Min(20, w.Length)]}' in the array '{Text(array, "Name")}' is not a number")),
        ];

        private double[] Appended(XElement array)
        {
            if (appended <= 0 || !long.TryParse(Text(array, "offset"), NumberStyles.None, CultureInfo.InvariantCulture, out long offset))
            {
                throw new VtuException(array, $"the array '{Text(array, "Name")}' has no offset into an appended section");
            }

            byte[] data = compressed ? Inflated(array, appended + offset) : Block(array, appended + offset + header, Length(array, appended + offset));
            return Text(array, "type") switch
            {
                "Float64" => Values(data, 8, s => BinaryPrimitives.ReadDoubleLittleEndian(s)),
                "Float32" => Values(data, 4, s => BinaryPrimitives.ReadSingleLittleEndian(s)),
                "Int64" => Values(data, 8, s => BinaryPrimitives.ReadInt64LittleEndian(s)),
                "Int32" => Values(data, 4, s => BinaryPrimitives.ReadInt32LittleEndian(s)),
                "UInt8" or "Int8" => Values(data, 1, s => s[0]),
                var other => throw new VtuException(array, $"the type '{other}' is not known here; Float64, Float32, Int64, Int32 and UInt8 are"),
            };
        }

        private delegate double Reader(ReadOnlySpan<byte> at);

        private static double[] Values(byte[] data, int size, Reader read)
        {
            double[] values = new double[data.Length / size];
            for (int i = 0; i < values.Length; i++)
            {
                values[i] = read(data.AsSpan(i * size, size));
            }

            return values;
        }

        // A table (number of blocks, size of a block, size of a partial last block, compressed sizes), then the blocks.
        private byte[] Inflated(XElement array, long at)
        {
            long blocks = Length(array, at), size = Length(array, at + header), last = Length(array, at + (2 * header));
            if (blocks > MostItems || size > MostItems || blocks * size > 8L * MostItems)
            {
                throw new VtuException(array, $"the table of blocks of the array '{Text(array, "Name")}' makes no sense");
            }

            var sum = new MemoryStream();
            long data = at + ((3 + blocks) * header);
            for (long k = 0; k < blocks; k++)
            {
                long length = Length(array, at + ((3 + k) * header)), expected = k == blocks - 1 && last > 0 ? last : size;
                byte[] block = new byte[expected];
                try
                {
                    using var zlib = new ZLibStream(new MemoryStream(Block(array, data, length)), CompressionMode.Decompress);
                    zlib.ReadExactly(block);
                }
                catch (Exception e) when (e is InvalidDataException or EndOfStreamException)
                {
                    throw new VtuException(array, $"block {k} of the array '{Text(array, "Name")}' does not decompress");
                }

                sum.Write(block);
                data += length;
            }

            return sum.ToArray();
        }

        private long Length(XElement array, long at)
        {
            byte[] b = Block(array, at, header);
            long length = header == 8 ? BinaryPrimitives.ReadInt64LittleEndian(b) : BinaryPrimitives.ReadUInt32LittleEndian(b);
            return length >= 0 ? length : throw new VtuException(array, $"the length of the array '{Text(array, "Name")}' makes no sense");
        }

        private byte[] Block(XElement array, long at, long length) => at >= 0 && length >= 0 && at <= bytes.LongLength - length
            ? bytes.AsSpan((int)at, (int)length).ToArray()
            : throw new VtuException(array, $"the file ends within the array '{Text(array, "Name")}'");
    }
}

using System.Diagnostics;
using System.Globalization;
using System.Text;
using FieldSolve.Sparse;

namespace FieldSolve.Benchmarks.Native;

/// <summary>
/// Runs SuiteSparse in a process of its own, this program started anew, so that it gets the surroundings it is fastest in: one thread from the start,
/// its own choice of dense kernels, an allocator that keeps its pages (fresh pages cost it more than the arithmetic on some virtual machines), and
/// parallel regions that are plain calls (CHOLMOD of Debian starts a team of one for each, some 100 000 in one factorisation).
/// </summary>
internal static class PeerProcess
{
    private const string PlainRegions = "void GOMP_parallel(void (*body)(void *), void *data, unsigned threads, unsigned flags) { body(data); }";

    /// <summary>What the peers say about a matrix, by name; empty where the libraries are not installed.</summary>
    /// <param name="matrix">The non-symmetric matrix.</param>
    /// <param name="even">The symmetric one of the same pattern.</param>
    /// <param name="runs">Repetitions.</param>
    public static Dictionary<string, Peer> Ask(DiscMatrix matrix, DiscMatrix even, int runs)
    {
        var peers = new Dictionary<string, Peer>(StringComparer.Ordinal);
        string folder = Directory.CreateTempSubdirectory("peer").FullName;
        try
        {
            string file = Path.Combine(folder, "matrix");
            Write(file, matrix, even);
            string program = Environment.ProcessPath!;
            var start = new ProcessStartInfo(program) { RedirectStandardOutput = true };
            if (Path.GetFileNameWithoutExtension(program) == "dotnet")
            {
                start.ArgumentList.Add(typeof(PeerProcess).Assembly.Location);
            }

            start.ArgumentList.Add("peer");
            start.ArgumentList.Add(file);
            start.ArgumentList.Add(runs.ToString(CultureInfo.InvariantCulture));
            Surroundings(start.Environment, folder);
            using Process child = Process.Start(start)!;
            while (child.StandardOutput.ReadLine() is { } line)
            {
                string[] words = line.Split(' ');
                double[] n = [.. words.Skip(1).Select(w => double.Parse(w, CultureInfo.InvariantCulture))];
                peers[words[0]] = new(n[0], n[1], n[2], n[3], n[4], n[5]);
            }

            child.WaitForExit();
            return child.ExitCode == 0 ? peers : throw new InvalidOperationException("The peers' process failed.");
        }
        finally
        {
            Directory.Delete(folder, recursive: true);
        }
    }

    /// <summary>The other side: reads the matrices, runs the libraries, prints a line for each.</summary>
    public static void Serve(string file, int runs, TextWriter to)
    {
        (DiscMatrix matrix, DiscMatrix even) = Read(file);
        if (Umfpack.IsPresent)
        {
            Tell("umfpack-amd", Umfpack.Run(matrix, metis: false, runs));
            Tell("umfpack-metis", Umfpack.Run(matrix, metis: true, runs));
        }

        if (Cholmod.IsPresent)
        {
            Tell("cholmod-amd", Cholmod.Run(even, metis: false, runs, 1));
            Tell("cholmod-metis", Cholmod.Run(even, metis: true, 1, runs));
        }

        void Tell(string name, Peer p)
        {
            var line = new StringBuilder(name);
            foreach (double v in new[] { p.Analyse, p.Factor, p.Solve, p.NonZeros, p.Bytes, p.PeakBytes })
            {
                line.Append(' ').Append(v.ToString("R", CultureInfo.InvariantCulture));
            }

            to.WriteLine(line);
            to.Flush();
        }
    }

    private static void Surroundings(IDictionary<string, string?> environment, string folder)
    {
        environment.Remove("OPENBLAS_CORETYPE");
        environment.Remove("OPENBLAS_L2_SIZE");
        foreach (string name in new[] { "OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "OMP_THREAD_LIMIT" })
        {
            environment[name] = "1";
        }

        environment["MALLOC_MMAP_THRESHOLD_"] = "4294967296";
        environment["MALLOC_TRIM_THRESHOLD_"] = "17179869184";
        environment["MALLOC_TOP_PAD_"] = "268435456";
        string source = Path.Combine(folder, "plain.c"), library = Path.Combine(folder, "plain.so");
        File.WriteAllText(source, PlainRegions);
        try
        {
            using Process compiler = Process.Start("cc", ["-shared", "-fPIC", "-O2", "-o", library, source]);
            compiler.WaitForExit();
        }
        catch (System.ComponentModel.Win32Exception)
        {
            Console.Error.WriteLine("No C compiler: CHOLMOD pays for its parallel regions, compare with care.");
        }

        if (File.Exists(library))
        {
            environment["LD_PRELOAD"] = library;
        }
    }

    private static void Write(string file, DiscMatrix matrix, DiscMatrix even)
    {
        using var writer = new BinaryWriter(File.Create(file));
        writer.Write(matrix.Size);
        writer.Write(matrix.Pattern.Count);
        foreach (int[] part in new[] { matrix.Pattern.Start, matrix.Pattern.Column })
        {
            writer.Write(System.Runtime.InteropServices.MemoryMarshal.AsBytes<int>(part));
        }

        foreach (double[] part in new[] { matrix.Values, even.Values, matrix.B, even.B })
        {
            writer.Write(System.Runtime.InteropServices.MemoryMarshal.AsBytes<double>(part));
        }
    }

    private static (DiscMatrix Matrix, DiscMatrix Even) Read(string file)
    {
        using var reader = new BinaryReader(File.OpenRead(file));
        int size = reader.ReadInt32(), count = reader.ReadInt32();
        var pattern = new SymmetricPattern(Ints(size + 1), Ints(count));
        double[] values = Doubles(count), even = Doubles(count), b = Doubles(size), evenB = Doubles(size);
        return (new(pattern, values, [], [], b), new(pattern, even, [], [], evenB));

        int[] Ints(int length)
        {
            int[] part = new int[length];
            reader.BaseStream.ReadExactly(System.Runtime.InteropServices.MemoryMarshal.AsBytes(part.AsSpan()));
            return part;
        }

        double[] Doubles(int length)
        {
            double[] part = new double[length];
            reader.BaseStream.ReadExactly(System.Runtime.InteropServices.MemoryMarshal.AsBytes(part.AsSpan()));
            return part;
        }
    }
}

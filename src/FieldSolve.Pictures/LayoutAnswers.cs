using System.Text.Json;
using FieldSolve.Fields;
using FieldSolve.Files;
using FieldSolve.Readings;
using FieldSolve.Sessions;

namespace FieldSolve.Pictures;

/// <summary>
/// Answers as the layout page is told them. While a contact is dragged the triangles stay and only their corners move, so the triangles travel on their own and only
/// when there are others. Not for several threads.
/// </summary>
public sealed class LayoutAnswers
{
    private readonly Described[] known = [new("coarse"), new("accurate")];

    /// <summary>The triangles described last, coarse ones and those of accurate answers: a number that grows with every change, and JSON. Number 0 for none yet.</summary>
    public IReadOnlyList<(int Number, byte[] Json)> Triangles => [.. known.Select(k => (k.Number, k.Json))];

    /// <summary>An answer as JSON: rows as in curves.csv, the places of the nodes, and the potentials at the largest current.</summary>
    /// <param name="answer">The answer.</param>
    public byte[] Json(LayoutAnswer answer)
    {
        ArgumentNullException.ThrowIfNull(answer);
        return Bytes(w =>
        {
            w.WriteStartObject();
            w.WriteNumber("version", answer.Version);
            w.WriteBoolean("accurate", answer.IsAccurate);
            w.WriteBoolean("complete", answer.Drive is not null || (answer.IsAccurate && answer.Failure is not null));
            w.WriteNumber("milliseconds", Math.Round(answer.Milliseconds, 1));
            w.WriteString("failure", answer.Failure);
            w.WriteStartArray("rows");
            foreach (CurveRow row in answer.Rows)
            {
                Row(w, row);
            }

            w.WriteEndArray();
            w.WriteStartArray("cautions");
            foreach (string text in (answer.Drive?.Cautions ?? []).Concat(answer.Drive?.Warnings ?? []))
            {
                w.WriteStringValue(text);
            }

            w.WriteEndArray();
            if (answer.Frames.Count > 0)
            {
                Frames(w, answer);
            }

            w.WriteEndObject();
        });
    }

    private void Frames(Utf8JsonWriter w, LayoutAnswer answer)
    {
        PotentialFrame first = answer.Frames[0];
        Described described = known[answer.IsAccurate ? 1 : 0];
        LiveMesh mesh = described.Place(first);
        w.WriteStartObject("mesh");
        w.WriteString("kind", described.Kind);
        w.WriteNumber("number", described.Number);
        LiveData.WritePlaces(w, mesh);
        w.WriteEndObject();
        w.WriteStartArray("frames");
        foreach (PotentialFrame frame in answer.Frames.Where(f => ReferenceEquals(f.Nodes, first.Nodes)))
        {
            w.WriteStartObject();
            w.WriteString("wiring", frame.Wiring);
            w.WriteNumber("current", frame.Current);
            (byte[] bytes, double low, double high) = mesh.Pack(frame.Potential);
            w.WriteNumber("low", low);
            w.WriteNumber("high", high);
            if (high > low)
            {
                w.WriteBase64String("phi", bytes);
            }

            w.WriteEndObject();
        }

        w.WriteEndArray();
    }

    private static void Row(Utf8JsonWriter w, CurveRow row)
    {
        w.WriteStartObject();
        w.WriteString("wiring", row.Wiring);
        w.WriteNumber("current", row.Current);
        w.WriteString("status", CurvesCsv.StatusText(row.Status));
        w.WriteStartArray("readings");
        foreach (Reading r in row.Readings)
        {
            w.WriteStartObject();
            w.WriteString("pair", r.Pair);
            Number("value", r.Value);
            Number("error", r.Error);
            Number("odd", r.Odd);
            Number("even", r.Even);
            Number("evenError", r.EvenError);
            w.WriteEndObject();
        }

        w.WriteEndArray();
        w.WriteEndObject();

        void Number(string name, double? value)
        {
            if (value is { } v && double.IsFinite(v))
            {
                w.WriteNumber(name, v);
            }
        }
    }

    private static byte[] Bytes(Action<Utf8JsonWriter> write)
    {
        using MemoryStream memory = new();
        using (Utf8JsonWriter w = new(memory))
        {
            write(w);
        }

        return memory.ToArray();
    }

    private sealed class Described(string kind)
    {
        private LiveMesh? last;

        public string Kind => kind;

        public int Number { get; private set; }

        public byte[] Json { get; private set; } = [];

        public LiveMesh Place(PotentialFrame frame)
        {
            if (last is not null && ReferenceEquals(last.Nodes, frame.Nodes))
            {
                return last = last.Moved(frame.X, frame.Y);
            }

            LiveMesh mesh = last = new(frame.X, frame.Y, frame.Nodes);
            Number++;
            Json = Bytes(w =>
            {
                w.WriteStartObject();
                w.WriteString("kind", kind);
                w.WriteNumber("number", Number);
                LiveData.WriteTriangles(w, mesh);
                w.WriteEndObject();
            });
            return mesh;
        }
    }
}

using System.Globalization;
using System.Text;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>A reader of RFC 4180 tables that shares nothing with the program's writer.</summary>
internal sealed class CsvTable
{
    private readonly List<string[]> records;

    private CsvTable(List<string[]> records) => this.records = records;

    public string[] Header => records[0];

    public int Rows => records.Count - 1;

    public static CsvTable Read(string path)
    {
        string text = File.ReadAllText(path);
        var records = new List<string[]>();
        var record = new List<string>();
        var cell = new StringBuilder();
        bool quoted = false;
        for (int i = 0; i < text.Length; i++)
        {
            char c = text[i];
            if (quoted)
            {
                if (c != '"')
                {
                    cell.Append(c);
                }
                else if (i + 1 < text.Length && text[i + 1] == '"')
                {
                    cell.Append(text[++i]);
                }
                else
                {
                    quoted = false;
                }
            }
            else if (c == '"')
            {
                quoted = true;
            }
            else if (c is ',' or '\r')
            {
                record.Add(cell.ToString());
                cell.Clear();
            }
            else if (c == '\n')
            {
                records.Add([.. record]);
                record.Clear();
            }
            else
            {
                cell.Append(c);
            }
        }

        Assert.Empty(record);
        Assert.All(records, r => Assert.Equal(records[0].Length, r.Length));
        return new(records);
    }

    public string Text(int row, string column) => records[row + 1][Column(column)];

    /// <summary>A number; fails the test where the cell is empty or no finite number.</summary>
    public double Number(int row, string column)
    {
        double value = double.Parse(Text(row, column), NumberStyles.Float, CultureInfo.InvariantCulture);
        Assert.True(double.IsFinite(value));
        return value;
    }

    private int Column(string name)
    {
        int k = Array.IndexOf(Header, name);
        Assert.True(k >= 0, $"no column {name}");
        return k;
    }
}

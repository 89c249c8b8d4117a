using FieldSolve.Bands;
using FieldSolve.Device;
using FieldSolve.Tests.EndToEndTests;

namespace FieldSolve.Tests.BandsTests;

/// <summary>Bands files: good ones give what they say, bad ones all their faults with places and remedies.</summary>
public class BandFileTests
{
    private const string Good = """
        chemical_potential = "60 meV"
        relaxation_time = "0.2 ps"
        [[cone]]
        v_a = "5e5 m/s"
        v_b = "300 km/s"
        tilt_a = 0.4
        tilt_b = "-3e4 m/s"
        offset = "-0.01 eV"
        gap = "20 meV"
        """;

    [Fact]
    public void A_good_file()
    {
        BandModel m = Read("axis = \"30 deg\"\ntemperature = \"4.2 K\"\n" + Good).Model!;
        Cone c = Assert.Single(m.Cones);
        Assert.Equal("cone 1", c.Name);
        Assert.Equal((5e5, 3e5, 2e5, -3e4), (c.VelocityA, c.VelocityB, c.TiltA, c.TiltB));
        Assert.Equal(-0.01 * SiConstants.Charge, c.Offset, 1e-15 * SiConstants.Charge);
        Assert.Equal(0.06 * SiConstants.Charge, m.ChemicalPotential, 1e-15 * SiConstants.Charge);
        Assert.Equal(0.2e-12, m.RelaxationTime);
        Assert.Equal(4.2, m.Temperature);
        Assert.Equal(Math.PI / 6, m.Axis, 1e-15);
        Assert.Equal((1.0, 1, 72, 0.1), (c.Degeneracy, c.Chirality, m.Directions, m.Shift));
    }

    [Fact]
    public void A_film_and_an_open_cone()
    {
        BandModel m = Read(Good.Replace("tilt_a = 0.4", "tilt_a = 1.4\nv_c = \"1e5 m/s\"\ntilt_c = 0.1", StringComparison.Ordinal)
            .Insert(0, "thickness = \"40 nm\"\ncut_off = \"0.8 1/nm\"\n")).Model!;
        Assert.Equal(8e8, m.CutOff!.Value, 1e-3);
        Assert.Equal(40e-9, m.Thickness!.Value, 1e-20);
        Assert.True(m.Cones[0].Tilt > 1.4);
    }

    [Theory]
    [InlineData("chemical_potential = \"60 meV\"", "chemical_potential = 60", "BANDS:1:22: 'chemical_potential': 60 has no unit; an energy is wanted, for example \"25 meV\"")]
    [InlineData("chemical_potential", "chemical_potentail", "BANDS:1:1: unknown key 'chemical_potentail' in the bands file; did you mean 'chemical_potential'?")]
    [InlineData("v_b = \"300 km/s\"", "v_b = \"300 km\"", "BANDS:5:7: 'v_b': \"300 km\" is a length; a velocity is wanted, for example \"5e5 m/s\"")]
    [InlineData("v_b = \"300 km/s\"\n", "", "BANDS:3:1: [[cone]] needs 'v_b', for example v_b = \"5e5 m/s\"")]
    [InlineData("tilt_a = 0.4", "tilt_a = 1.2", "BANDS:3:1: [[cone]] 'cone 1': the tilt is 1.204 times the velocity, so that the contour is open; say how far the cone reaches, for example cut_off = \"0.5 1/nm\"")]
    [InlineData("tilt_a = 0.4", "tilt_a = 1\n#", "BANDS:3:1: [[cone]] 'cone 1': the tilt is")]
    [InlineData("tilt_b = \"-3e4 m/s\"", "v_c = \"1e5 m/s\"", "BANDS:7:1: 'v_c' belongs to a three-dimensional cone; give the file a 'thickness', or leave it out")]
    [InlineData("gap = \"20 meV\"", "gap = \"200 meV\"", "BANDS:1:22: 'chemical_potential' lies where no cone has states, so that nothing conducts; move it out of the gaps, or raise 'temperature'")]
    [InlineData("gap = \"20 meV\"", "chirality = 0", "BANDS:9:13: 'chirality' must be 1 or -1")]
    [InlineData("gap = \"20 meV\"", "gap = \"20 mEv\"", "BANDS:9:7: 'gap': \"20 mEv\": unknown unit 'mEv' (did you mean 'meV'?); an energy is wanted, for example \"25 meV\"")]
    public void One_fault(string old, string now, string expected)
    {
        string text = BandFile.Parse(Good.Replace(old, now, StringComparison.Ordinal), "BANDS", "").Faults[0].ToString();
        Assert.StartsWith(expected, text, StringComparison.Ordinal);
    }

    [Fact]
    public void All_faults_are_told_together()
    {
        IReadOnlyList<Fault> faults = BandFile.Parse(
            "relaxation_time = \"-1 ps\"\ndirections = 9\n[[cone]]\nv_a = \"5e5 m/s\"\nv_b = 3\ncolour = 1\n[profile]\nfile = \"x.csv\"\n", "BANDS", "").Faults;
        string text = string.Join('\n', faults);
        Assert.Contains("BANDS:1:19: 'relaxation_time'", text, StringComparison.Ordinal);
        Assert.Contains("BANDS:2:14: 'directions' must be even", text, StringComparison.Ordinal);
        Assert.Contains("BANDS:5:7: 'v_b': 3 has no unit", text, StringComparison.Ordinal);
        Assert.Contains("BANDS:6:1: unknown key 'colour' in [[cone]]", text, StringComparison.Ordinal);
        Assert.Contains("a bands file has either cones or a measured [profile]", text, StringComparison.Ordinal);
        Assert.Contains("the bands file needs 'chemical_potential'", text, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("", "the file is empty; a bands file has at least a [[cone]]")]
    [InlineData("title = \"x\"\n", "the file has no [[cone]], for example v_a")]
    public void Nothing_to_compute(string text, string expected) =>
        Assert.Contains(expected, string.Join('\n', BandFile.Parse(text, "BANDS", "").Faults), StringComparison.Ordinal);

    [Theory]
    [InlineData("direction_deg,conductance_S\n0,1\n30,2\n60,1\n90,x\n", "t.csv:5:4: 'x' is not a finite number (conductance_S)")]
    [InlineData("direction_deg,conductance_S\n0,1\n30,-2\n60,1\n90,1\n", "t.csv:3:4: conductance_S is -2; it must be greater than zero")]
    [InlineData("direction_deg,conductance_S\n0,1\n30\n60,1\n90,1\n", "t.csv:3:3: this row has no conductance_S")]
    [InlineData("angle,conductance_S\n0,1\n", "t.csv:1:1: the header must name direction_deg, and either conductance_S")]
    [InlineData("direction_deg,conductance_S\n0,1\n180,1\n90,2\n270,2\n", "t.csv:5:1: a tensor has three numbers")]
    [InlineData("\n", "t.csv:1:1: the table is empty")]
    public void Bad_tables(string table, string expected)
    {
        using var folder = new TempFolder();
        folder.Write("t.csv", table);
        BandReading reading = BandFile.Parse("[profile]\nfile = \"t.csv\"\n", "BANDS", folder.Path);
        Assert.Null(reading.Input);
        Assert.Contains(expected, string.Join('\n', reading.Faults), StringComparison.Ordinal);
    }

    [Fact]
    public void A_table_that_is_not_there() => Assert.Contains(
        "BANDS:2:8: the file 'nowhere.csv' does not exist", BandFile.Parse("[profile]\nfile = \"nowhere.csv\"\n", "BANDS", "").Faults[0].ToString(), StringComparison.Ordinal);

    private static BandInput Read(string text)
    {
        BandReading reading = BandFile.Parse(text, "BANDS", "");
        Assert.Empty(reading.Faults);
        return reading.Input!;
    }
}

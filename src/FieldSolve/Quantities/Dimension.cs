namespace FieldSolve.Quantities;

/// <summary>
/// What kind of quantity a number is: the exponents of the SI base units it is measured in. The radian counts as a
/// base unit of its own here, so that an angle cannot be mistaken for a plain number.
/// </summary>
/// <param name="Kilogram">Exponent of the kilogram.</param>
/// <param name="Metre">Exponent of the metre.</param>
/// <param name="Second">Exponent of the second.</param>
/// <param name="Ampere">Exponent of the ampere.</param>
/// <param name="Radian">Exponent of the radian.</param>
/// <param name="Kelvin">Exponent of the kelvin.</param>
public readonly record struct Dimension(int Kilogram, int Metre, int Second, int Ampere, int Radian = 0, int Kelvin = 0)
{
    /// <summary>A plain number.</summary>
    public static Dimension None => default;

    /// <summary>m.</summary>
    public static Dimension Length { get; } = new(0, 1, 0, 0);

    /// <summary>s.</summary>
    public static Dimension Time { get; } = new(0, 0, 1, 0);

    /// <summary>rad.</summary>
    public static Dimension Angle { get; } = new(0, 0, 0, 0, 1);

    /// <summary>A.</summary>
    public static Dimension Current { get; } = new(0, 0, 0, 1);

    /// <summary>Hz.</summary>
    public static Dimension Frequency { get; } = None / Time;

    /// <summary>V.</summary>
    public static Dimension Voltage { get; } = new(1, 2, -3, -1);

    /// <summary>W.</summary>
    public static Dimension Power { get; } = Voltage * Current;

    /// <summary>Ω; also the sheet resistance in ohms per square.</summary>
    public static Dimension Resistance { get; } = Voltage / Current;

    /// <summary>F.</summary>
    public static Dimension Capacitance { get; } = Current * Time / Voltage;

    /// <summary>T.</summary>
    public static Dimension FluxDensity { get; } = Voltage * Time / Length.ToPower(2);

    /// <summary>S per square.</summary>
    public static Dimension SheetConductance { get; } = Current / Voltage;

    /// <summary>A m/V²: K over the square of E.</summary>
    public static Dimension QuadraticConductance { get; } = Current * Length / Voltage.ToPower(2);

    /// <summary>A m²/V³: K over the cube of E.</summary>
    public static Dimension CubicConductance { get; } = Current * Length.ToPower(2) / Voltage.ToPower(3);

    /// <summary>V/m.</summary>
    public static Dimension Field { get; } = Voltage / Length;

    /// <summary>Ω m: contact resistance times contact length.</summary>
    public static Dimension LineResistance { get; } = Resistance * Length;

    /// <summary>Ω m²: specific contact resistivity.</summary>
    public static Dimension ContactResistivity { get; } = Resistance * Length.ToPower(2);

    /// <summary>F/m².</summary>
    public static Dimension CapacitancePerArea { get; } = Capacitance / Length.ToPower(2);

    /// <summary>A/m.</summary>
    public static Dimension SheetCurrent { get; } = Current / Length;

    /// <summary>W/m².</summary>
    public static Dimension PowerDensity { get; } = Power / Length.ToPower(2);

    /// <summary>J.</summary>
    public static Dimension Energy { get; } = Power * Time;

    /// <summary>K.</summary>
    public static Dimension Temperature { get; } = new(0, 0, 0, 0, 0, 1);

    /// <summary>m/s.</summary>
    public static Dimension Velocity { get; } = Length / Time;

    /// <summary>1/m.</summary>
    public static Dimension WaveNumber { get; } = None / Length;

    private static readonly (Dimension Dimension, string Name, string Example)[] Known =
    [
        (None, "plain number", "1"),
        (Length, "length", "5 um"),
        (Length.ToPower(2), "area", "5 um^2"),
        (Time, "time", "1 ms"),
        (Angle, "angle", "30 deg"),
        (Current, "current", "50 uA"),
        (Frequency, "frequency", "17.77 Hz"),
        (Voltage, "voltage", "1 mV"),
        (Power, "power", "1 mW"),
        (Resistance, "resistance", "100 ohm"),
        (Capacitance, "capacitance", "1 nF"),
        (FluxDensity, "magnetic flux density", "50 mT"),
        (SheetConductance, "sheet conductance", "4 mS"),
        (QuadraticConductance, "second-order sheet conductance", "2e-9 A m/V^2"),
        (CubicConductance, "third-order sheet conductance", "1e-15 A m^2/V^3"),
        (Field, "electric field", "10 kV/m"),
        (LineResistance, "line contact resistance", "120 ohm um"),
        (ContactResistivity, "specific contact resistivity", "1e-7 ohm cm^2"),
        (CapacitancePerArea, "capacitance per area", "12 nF/cm^2"),
        (SheetCurrent, "sheet current density", "1000 A/m"),
        (PowerDensity, "power density", "1 mW/um^2"),
        (Energy, "energy", "25 meV"),
        (Temperature, "temperature", "4.2 K"),
        (Velocity, "velocity", "5e5 m/s"),
        (WaveNumber, "wave number", "0.5 1/nm"),
    ];

    /// <summary>Trade name without an article, for example "sheet conductance"; the base units where it has no name here.</summary>
    public string Name
    {
        get
        {
            Dimension self = this;
            string? name = Array.Find(Known, k => k.Dimension == self).Name;
            return name ?? "quantity in " + BaseUnits;
        }
    }

    /// <summary>The name with its indefinite article, for example "a length", "an angle".</summary>
    public string NameWithArticle => ("aeiou".Contains(Name[0], StringComparison.Ordinal) ? "an " : "a ") + Name;

    /// <summary>How a value of this kind may be written in a device file, without quotes, for example "5 um".</summary>
    public string Example
    {
        get
        {
            Dimension self = this;
            string? example = Array.Find(Known, k => k.Dimension == self).Example;
            return example ?? "1 " + BaseUnits;
        }
    }

    /// <summary>Dimension of a product.</summary>
    public static Dimension operator *(Dimension a, Dimension b) => new(
        a.Kilogram + b.Kilogram, a.Metre + b.Metre, a.Second + b.Second, a.Ampere + b.Ampere, a.Radian + b.Radian, a.Kelvin + b.Kelvin);

    /// <summary>Dimension of a quotient.</summary>
    public static Dimension operator /(Dimension a, Dimension b) => new(
        a.Kilogram - b.Kilogram, a.Metre - b.Metre, a.Second - b.Second, a.Ampere - b.Ampere, a.Radian - b.Radian, a.Kelvin - b.Kelvin);

    /// <summary>Dimension of an integer power.</summary>
    public Dimension ToPower(int power) =>
        new(Kilogram * power, Metre * power, Second * power, Ampere * power, Radian * power, Kelvin * power);

    private string BaseUnits => string.Join(' ', new (int Power, string Unit)[]
        {
            (Kilogram, "kg"), (Metre, "m"), (Second, "s"), (Ampere, "A"), (Radian, "rad"), (Kelvin, "K"),
        }
        .Where(u => u.Power != 0)
        .Select(u => u.Power == 1 ? u.Unit : string.Create(System.Globalization.CultureInfo.InvariantCulture, $"{u.Unit}^{u.Power}")));
}

using FieldSolve.Lockin;
using FieldSolve.Readings;

namespace FieldSolve.Tests.LockinTests;

/// <summary>The rules that turn values at phases into harmonics.</summary>
public class PhaseNodesTests
{
    // Elementary trigonometric identities for V = a1 I + a2 I² + a3 I³ + a4 I⁴, I = I0 sin wt: DC a2 I0²/2 + 3 a4 I0⁴/8; sin wt: a1 I0 + 3 a3 I0³/4;
    // cos 2wt: -(a2 I0²/2 + a4 I0⁴/2); sin 3wt: -a3 I0³/4; cos 4wt: a4 I0⁴/8. The numbers were worked out from them by hand.
    [Theory]
    [InlineData(1000, 2e5, 3e7, 0, 0.001, 0.1, 1.0225, -0.1, -0.0075, 0)]
    [InlineData(1000, 2e5, 3e7, 4e9, 0.001, 0.1015, 1.0225, -0.102, -0.0075, 0.0005)]
    [InlineData(50, -3000, 0, 0, 0.002, -0.006, 0.1, 0.006, 0, 0)]
    public void Powers_of_the_current_give_their_harmonics(
        double a1, double a2, double a3, double a4, double peak, double dc, double first, double second, double third, double fourth)
    {
        foreach (PhaseNodes nodes in new[] { PhaseNodes.Base, PhaseNodes.Doubled })
        {
            double[] v = [.. nodes.Sine.Select(s => peak * s).Select(i => i * (a1 + (i * (a2 + (i * (a3 + (i * a4)))))))];
            double[] expected = [dc, first, second, third, fourth, 0];
            for (int h = 0; h <= 5; h++)
            {
                (int sine, int cosine) = PhaseNodes.Direction(h);
                Assert.Equal(expected[h], nodes.Amplitude(h, v) * (sine + cosine), 1e-14);
                Assert.Equal(h % 2 == 0 ? 0 : 1, Math.Abs(sine));
            }
        }
    }

    [Fact]
    public void The_fifth_power_is_exact_too_and_the_eighth_is_not_on_the_base_phases()
    {
        // sin⁵ = (10 sin - 5 sin 3 + sin 5)/16; cos 8 of sin⁸ (amplitude 1/128) folds onto cos 4 with twelve phases.
        double[] fifth = [.. PhaseNodes.Base.Sine.Select(s => Math.Pow(s, 5))], eighth = [.. PhaseNodes.Base.Sine.Select(s => Math.Pow(s, 8))];
        Assert.Equal(1.0 / 16, PhaseNodes.Base.Amplitude(5, fifth), 1e-15);
        Assert.Equal(5.0 / 16, PhaseNodes.Base.Amplitude(3, fifth) * PhaseNodes.Direction(3).Sine * -1, 1e-15);
        double exact = 28.0 / 64;   // 2 C(8,2) / 2⁸ = 56/256 times two
        Assert.Equal(exact / 2, PhaseNodes.Doubled.Amplitude(4, [.. PhaseNodes.Doubled.Sine.Select(s => Math.Pow(s, 8))]), 1e-15);
        Assert.Equal((exact / 2) + (1.0 / 128), PhaseNodes.Base.Amplitude(4, eighth), 1e-15);
    }

    [Fact]
    public void Every_phase_finds_the_node_with_its_sine()
    {
        foreach (PhaseNodes nodes in new[] { PhaseNodes.Base, PhaseNodes.Doubled, PhaseNodes.Doubled.Doubling() })
        {
            for (int m = 0; m < nodes.Phases; m++)
            {
                Assert.Equal(Math.Sin(2 * Math.PI * m / nodes.Phases), nodes.Sine[nodes.NodeAt(m)], 1e-15);
            }
        }
    }

    [Fact]
    public void The_derivative_and_the_interpolation_are_exact_for_harmonics_that_the_phases_resolve()
    {
        const int Phases = 12;
        double[,] d = CycleTransform.Derivative(Phases);
        for (int h = 0; h <= 5; h++)
        {
            double[] wave = [.. Enumerable.Range(0, Phases).Select(m => Math.Sin((h * 2 * Math.PI * m / Phases) + 0.7))];
            double[][] fine = ChargedCycle.Resampled([.. wave.Select(v => new[] { v })]);
            for (int m = 0; m < Phases; m++)
            {
                double slope = Enumerable.Range(0, Phases).Sum(l => d[m, l] * wave[l]);
                Assert.Equal(h * Math.Cos((h * 2 * Math.PI * m / Phases) + 0.7), slope, 1e-12);
            }

            for (int m = 0; m < 2 * Phases; m++)
            {
                Assert.Equal(Math.Sin((h * Math.PI * m / Phases) + 0.7), fine[m][0], 1e-13);
            }

            (double s, double c) = CycleTransform.Harmonic(wave, h);
            Assert.Equal(h == 0 ? 0 : Math.Cos(0.7), s, 1e-14);
            Assert.Equal(Math.Sin(0.7), c, 1e-14);
        }
    }
}

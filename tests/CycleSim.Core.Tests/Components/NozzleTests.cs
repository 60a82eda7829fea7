using CycleSim.Components;
using CycleSim.Gas;
using CycleSim.Scalars;
using CycleSim.Tests.Engine;

namespace CycleSim.Tests.Components;

public class NozzleTests
{
    // Burnt share 0: the air of the constant gas, gamma 1.4.
    private const double TotalPressure = 500e3,
        TotalTemperature = 800.0;

    // NACA Report 1135, tables I and II (air, gamma 1.4): Mach number, area over sonic area, static over total pressure and
    // temperature, pressure ratio across a normal shock, Mach number behind it.
    public static TheoryData<double, double, double, double, double, double> Naca1135 =>
        new()
        {
            { 1.5, 1.176, 0.2724, 0.6897, 2.458, 0.7011 },
            { 2.0, 1.687, 0.1278, 0.5556, 4.500, 0.5774 },
            { 2.5, 2.637, 0.05853, 0.4444, 7.125, 0.5130 },
        };

    [Theory]
    [MemberData(nameof(Naca1135))]
    public void Supersonic_exit_is_that_of_the_tables(
        double mach,
        double areaRatio,
        double pressure,
        double temperature,
        double shock,
        double behind
    )
    {
        var jet = Expand(TestEngines.Textbook, 5e3, areaRatio);
        Assert.True(jet.Choked);
        // The tables carry four digits, and the pressure moves about twice as fast as the area.
        Assert.Equal(pressure * TotalPressure, jet.ExitPressure.Value, 2e-3 * pressure * TotalPressure);
        Assert.Equal(temperature * TotalTemperature, jet.ExitTemperature.Value, 1e-3 * temperature * TotalTemperature);
        Assert.Equal(mach, Mach(jet), 1e-3 * mach);

        // The shock stands in the exit when the ambient pressure is that behind it.
        var standing = pressure * shock * TotalPressure;
        Assert.Equal(
            jet.ExitPressure.Value,
            Expand(TestEngines.Textbook, 0.99 * standing, areaRatio).ExitPressure.Value,
            1e-6
        );
        var inside = Expand(TestEngines.Textbook, 1.01 * standing, areaRatio);
        Assert.Equal(1.01 * standing, inside.ExitPressure.Value, 1e-6);
        // One per cent beyond, the Mach number is still near that behind the shock in the exit.
        Assert.Equal(behind, Mach(inside), 0.015 * behind);
    }

    // NACA Report 1135, table I: area ratio 1.687 is passed subsonically at Mach 0.372, where static over total pressure lies
    // between the rows of Mach 0.37 (0.9098) and 0.38 (0.9052).
    [Theory]
    [InlineData(0.9098, false)]
    [InlineData(0.9052, true)]
    public void The_throat_chokes_while_the_exit_is_subsonic(double pressure, bool choked)
    {
        var jet = Expand(TestEngines.Textbook, pressure * TotalPressure, 1.687);
        Assert.Equal(choked, jet.Choked);
        Assert.InRange(Mach(jet), 0.3, 0.5);
    }

    [Fact]
    public void Thrust_and_flow_have_no_step_over_the_whole_range_of_pressure_ratio()
    {
        const double ratio = 1.6;
        double last = double.NaN,
            lastFlux = double.NaN;
        for (var ambient = 0.99; ambient > 0.02; ambient -= 1e-4)
        {
            var jet = Expand(TestEngines.Kerosene, ambient * TotalPressure, ratio);
            var exitArea = ratio;
            var thrust =
                jet.Flux.Value * jet.Speed.Value + (jet.ExitPressure.Value - ambient * TotalPressure) * exitArea;
            // Near no flow the speed goes as the root of the pressure difference.
            if (!double.IsNaN(last) && ambient < 0.98)
            {
                Assert.InRange(Math.Abs(thrust - last), 0.0, 6e-3 * TotalPressure);
                Assert.InRange(Math.Abs(jet.Flux.Value - lastFlux), 0.0, 6e-3 * jet.Flux.Value);
            }

            (last, lastFlux) = (thrust, jet.Flux.Value);
        }
    }

    [Theory]
    [InlineData(0.97, 1.3)]
    [InlineData(0.75, 1.3)]
    [InlineData(0.40, 1.3)]
    [InlineData(0.05, 1.3)]
    [InlineData(0.75, 1.0)]
    [InlineData(0.30, 1.0)]
    public void Derivatives_are_those_of_central_differences(double ambient, double ratio)
    {
        var gas = TestEngines.Kerosene;
        var dual = Expand<Dual>(gas, ambient * TotalPressure, ratio, 0.0);
        // Total pressure is the variable; a step of 1e-5 of it.
        const double step = 1e-5 * TotalPressure;
        var up = Expand<Plain>(gas, ambient * TotalPressure, ratio, step);
        var down = Expand<Plain>(gas, ambient * TotalPressure, ratio, -step);
        void Check(Func<Nozzle.Jet<Dual>, Dual> exact, Func<Nozzle.Jet<Plain>, Plain> moved)
        {
            var difference = (moved(up).Value - moved(down).Value) / (2.0 * step);
            var scale = Math.Abs(moved(up).Value) / TotalPressure;
            Assert.Equal(difference, exact(dual).Partial(0), 1e-6 * scale);
        }

        Check(j => j.Speed, j => j.Speed);
        Check(j => j.Flux, j => j.Flux);
        Check(j => j.ExitFlux, j => j.ExitFlux);
        Check(j => j.ExitPressure, j => j.ExitPressure);
        Check(j => j.ExitTemperature, j => j.ExitTemperature);
    }

    [Fact]
    public void A_coefficient_curve_meets_its_points_and_is_level_beyond_them()
    {
        double[] at = [1.2, 1.6, 2.4],
            values = [0.94, 0.97, 0.985];
        var curve = new CoefficientCurve(at, values);
        for (var i = 0; i < at.Length; i++)
            Assert.Equal(values[i], curve.At(new Plain(at[i])).Value, 1e-15);
        Assert.Equal(0.94, curve.At(new Plain(1.05)).Value);
        Assert.Equal(0.985, curve.At(new Plain(5.0)).Value);
        var last = 0.0;
        for (var x = 1.0; x < 3.0; x += 0.003)
        {
            var here = curve.At(Dual.Variable(x, 0));
            Assert.True(here.Value >= last, $"falls at {x}");
            Assert.InRange(here.Value, 0.94, 0.985);
            var difference = (curve.At(new Plain(x + 1e-6)).Value - curve.At(new Plain(x - 1e-6)).Value) / 2e-6;
            Assert.Equal(difference, here.Partial(0), 1e-6);
            last = here.Value;
        }
    }

    [Theory]
    [InlineData(new[] { 1.2 }, new[] { 0.9 }, "two points")]
    [InlineData(new[] { 1.2, 1.1 }, new[] { 0.9, 0.9 }, "must rise")]
    [InlineData(new[] { 1.2, 1.4 }, new[] { 0.9, 1.1 }, "at most 1")]
    [InlineData(new[] { 1.2, 1.4 }, new[] { 0.9 }, "one for each")]
    public void A_curve_that_cannot_be_is_refused(double[] at, double[] values, string says) =>
        Assert.Contains(says, Assert.Throws<ArgumentException>(() => new CoefficientCurve(at, values)).Message);

    private static Nozzle.Jet<Plain> Expand(GasModel gas, double ambient, double areaRatio) =>
        Expand<Plain>(gas, ambient, areaRatio, 0.0);

    private static Nozzle.Jet<T> Expand<T>(GasModel model, double ambient, double areaRatio, double morePressure)
        where T : struct, IScalar<T>
    {
        var gas = new GasRelations<T>(model, T.Constant(0.0));
        var state = new FlowState<T>
        {
            W = T.Constant(1.0),
            P = T.Variable(TotalPressure + morePressure, 0),
            Tt = T.Constant(TotalTemperature),
            Y = T.Constant(0.0),
        };
        gas.CompleteFromTemperature(ref state);
        Nozzle.Expand(gas, state, T.Constant(ambient), 1.0, areaRatio, out var jet);
        return jet;
    }

    private static double Mach(in Nozzle.Jet<Plain> jet) =>
        jet.Speed.Value / Math.Sqrt(1.4 * TestEngines.Textbook.RAir * jet.ExitTemperature.Value);
}

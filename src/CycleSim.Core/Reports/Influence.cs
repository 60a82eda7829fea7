using System.Runtime.Intrinsics;
using CycleSim.Engine;
using CycleSim.Matching;
using CycleSim.Scalars;

namespace CycleSim.Reports;

/// <summary>
/// Influence coefficients of a solved point: the exact derivative of every output with respect to every input, with the
/// power setting (or whatever else closes the problem) held. From the converged Jacobian by the implicit-function theorem,
/// dy/dp = y_p - y_x R_x^-1 R_p; nothing is perturbed.
/// </summary>
public sealed class Influence
{
    private readonly double[,] _derivatives;

    private Influence(
        IReadOnlyList<string> inputs,
        IReadOnlyList<string> outputs,
        double[] values,
        double[,] derivatives,
        double[] bySetting
    ) => (Inputs, Outputs, OutputValues, _derivatives, BySetting) = (inputs, outputs, values, derivatives, bySetting);

    /// <summary>Names with units, in SI; see <see cref="InputLayout.Names"/>.</summary>
    public IReadOnlyList<string> Inputs { get; }

    /// <summary>Names with units, in SI.</summary>
    public IReadOnlyList<string> Outputs { get; }

    /// <summary>The outputs at the point.</summary>
    public IReadOnlyList<double> OutputValues { get; }

    /// <summary>Derivative of an output with respect to an input, SI over SI.</summary>
    public double this[int output, int input] => _derivatives[output, input];

    /// <summary>
    /// Derivative of each output with respect to the prescribed value that sets the power, inputs held, SI over SI; NaN where
    /// the power is not set by one value above zero.
    /// </summary>
    public IReadOnlyList<double> BySetting { get; }

    /// <summary>Derivative by names.</summary>
    /// <exception cref="ArgumentException">No such name.</exception>
    public double Of(string output, string input) => this[IndexOf(Outputs, output), IndexOf(Inputs, input)];

    /// <summary>The coefficients at the point that a matcher has just solved.</summary>
    /// <exception cref="NoSolutionException">The Jacobian is singular there.</exception>
    public static Influence At(Matcher matcher)
    {
        var engine = matcher.Engine;
        if (matcher.Problem.HeldSpeeds.Length > 0)
            throw new InvalidOperationException(
                "influence coefficients are those of settled points; here speeds are held"
            );
        var outputs = OutputsOf(engine);
        var names = engine.Layout.Names;
        var n = matcher.Solution.Length;
        var equations = matcher.DifferentiateByUnknowns();
        var jacobian = equations.Rows[..n].ToArray().Select(r => r.Partials).ToArray();
        var byUnknowns = outputs.Select(o => o.Value(equations.Path)).ToArray();

        var bySetting = MovedBySetting(matcher, jacobian, byUnknowns);
        var derivatives = new double[outputs.Count, names.Count];
        var freed = matcher.Problem.Freed;
        for (var first = 0; first < names.Count; first += Dual.Width)
        {
            equations = matcher.DifferentiateByInputs(first);
            var residuals = equations.Rows[..n].ToArray();
            var byInputs = outputs.Select(o => o.Value(equations.Path)).ToArray();
            for (var i = 0; i < Dual.Width && first + i < names.Count; i++)
            {
                // A freed input is an answer, not a question: nothing moves it from outside.
                if (freed.Contains(first + i))
                    continue;
                var rows = (Vector512<double>[])jacobian.Clone();
                var move = residuals.Select(r => -r.Partial(i)).ToArray();
                if (!LinearSystem.Solve(rows, move, n))
                    throw new NoSolutionException(
                        $"{engine.Definition.Name}: the equations are singular at this point."
                    );
                for (var o = 0; o < outputs.Count; o++)
                {
                    var sum = byInputs[o].Partial(i);
                    for (var k = 0; k < n; k++)
                        sum += byUnknowns[o].Partial(k) * move[k];
                    derivatives[o, first + i] = sum;
                }
            }
        }

        return new Influence(
            names,
            [.. outputs.Select(o => o.Name)],
            [.. byUnknowns.Select(o => o.Value)],
            derivatives,
            bySetting
        );
    }

    // The last row is output over value less one: a change of the value moves it by minus itself over the value.
    private static double[] MovedBySetting(Matcher matcher, Vector512<double>[] jacobian, Dual[] byUnknowns)
    {
        var problem = matcher.Problem;
        var n = jacobian.Length;
        var move = new double[n];
        if (
            problem.Prescribed is not [{ Value: not 0.0 } setting]
            || problem.FirstOf.Length > 0
            || problem.HeldSpeeds.Length > 0
        )
            return [.. byUnknowns.Select(_ => double.NaN)];
        move[n - 1] = 1.0 / setting.Value;
        if (!LinearSystem.Solve((Vector512<double>[])jacobian.Clone(), move, n))
            throw new NoSolutionException(
                $"{matcher.Engine.Definition.Name}: the equations are singular at this point."
            );
        return [.. byUnknowns.Select(output => Enumerable.Range(0, n).Sum(k => output.Partial(k) * move[k]))];
    }

    private static List<(string Name, Func<FlowPath<Dual>, Dual> Value)> OutputsOf(SizedEngine engine)
    {
        var list = new List<(string, Func<FlowPath<Dual>, Dual>)>
        {
            ("net_thrust_N", p => p.NetThrust),
            ("installed_thrust_N", p => p.InstalledThrust),
            ("fuel_flow_kg_per_s", p => p.FuelFlow),
            ("sfc_kg_per_N_s", p => p.FuelFlow / p.NetThrust),
            ("T3_K", p => p.Output(Quantity.T3)),
            ("T4_K", p => p.Output(Quantity.T4)),
            ("T41_K", p => p.Output(Quantity.T41)),
            ("T45_K", p => p.Output(Quantity.T45)),
            ("T5_K", p => p.Output(Quantity.T5)),
            ("P3_Pa", p => p.Output(Quantity.P3)),
            ("engine_pressure_ratio", p => p.Output(Quantity.Epr)),
            ("air_flow_kg_per_s", p => p.FanFace.W),
        };
        for (var k = 0; k < engine.Spools.Length; k++)
        {
            var spool = k;
            list.Add(($"N{k + 1}_relative_speed", p => p.Unknowns[spool]));
        }

        if (engine.Fan is not null)
        {
            list.Add(("bypass_ratio", p => p.FanTip.W / p.FanHub.W));
            list.Add(("surge_margin_fan", p => SurgeMargin.ConstantSpeed(engine, p, 0)));
        }

        for (var k = 0; k < engine.Compressors.Length; k++)
        {
            var index = k + 1;
            list.Add(($"surge_margin_{engine.Compressors[k].Name}", p => SurgeMargin.ConstantSpeed(engine, p, index)));
        }

        return list;
    }

    private static int IndexOf(IReadOnlyList<string> names, string name)
    {
        for (var i = 0; i < names.Count; i++)
            if (names[i] == name)
                return i;
        throw new ArgumentException($"There is no '{name}'; there are {string.Join(", ", names)}.");
    }
}

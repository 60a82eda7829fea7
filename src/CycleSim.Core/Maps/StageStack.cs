using CycleSim.Gas;

namespace CycleSim.Maps;

/// <summary>A stage at its design point, and how its characteristic bends away from it.</summary>
public sealed record StageDefinition
{
    /// <summary>Axial over blade speed at the mean line, and work over blade speed squared, at the design point.</summary>
    public required double FlowCoefficient { get; init; }

    public required double WorkCoefficient { get; init; }

    /// <summary>Mean blade speed at design speed for inlet air at 288.15 K, m/s.</summary>
    public required double BladeSpeed { get; init; }

    /// <summary>At the design point. Zero where <see cref="PressureRatio"/> is given instead.</summary>
    public double PolytropicEfficiency { get; init; }

    /// <summary>Stage pressure ratio at the design point, where it is known; the efficiency then follows from the work.</summary>
    public double PressureRatio { get; init; }

    /// <summary>
    /// Pressure coefficient at the vertex of the characteristic and flow coefficient at which the stage stalls, both over
    /// design; with <see cref="Shape"/> 0 the vertex lies there.
    /// </summary>
    public double PeakPressure { get; init; } = 1.12;

    public double PeakFlow { get; init; } = 0.80;

    /// <summary>
    /// How far the parabola's vertex lies beyond the stall point, over the way there from design; above -1. Positive values put
    /// it at a lower flow and make the characteristic flatter about the design point, negative ones steeper.
    /// </summary>
    public double Shape { get; init; }

    /// <summary>
    /// Variable stator: relative reduction of the design flow coefficient per unit of relative corrected speed below 1, 0 to
    /// 5; 0 for a fixed one. At and above design speed the stator stands as designed.
    /// </summary>
    public double StatorReset { get; init; }

    /// <summary>
    /// Share of the compressor's inlet flow bled behind this stage at the design point and at every other; the annulus behind
    /// is made for what is left. See <see cref="StageStack.WithBleed"/> for bleed that is opened off design.
    /// </summary>
    public double Bleed { get; init; }
}

/// <summary>A point of a stacked compressor.</summary>
/// <param name="PressureRatio">product of the stages'</param>
/// <param name="Efficiency">isentropic, of the whole</param>
/// <param name="LeastMargin">
/// smallest flow coefficient over that at which the stage stalls, over all stages; below 1 that stage is stalled
/// </param>
/// <param name="Critical">the stage that has it, 0 for the first</param>
/// <param name="ExitCorrectedFlow">W sqrt(T)/P at the exit over its value at the design point</param>
public readonly record struct StackPoint(
    double PressureRatio,
    double Efficiency,
    double LeastMargin,
    int Critical,
    double ExitCorrectedFlow
);

/// <summary>
/// Stage stacking: the stages' generalised characteristics in series, continuity from each to the next through annulus
/// areas that the design point fixes. The overall pressure ratio is the product of the stages'.
/// </summary>
/// <remarks>
/// Characteristics in the form used by Muir, Saravanamuttoo and Marshall (ASME J. Eng. Gas Turbines Power 111, 1989, from
/// memory): pressure coefficient psi* = peak - (peak - 1) ((x - phi*) / (x - 1))^2 with x the vertex, efficiency over
/// r = psi*/phi* with exponent 3.5 on the lightly loaded side and 2 on the heavily loaded one. Below the lightly loaded end
/// of that curve the efficiency goes to zero with the load (own continuation), so that the work of a stage near choke stays
/// about what it was there: zeta* = phi* r_L / eta_L, near the textbook line of constant outlet angles. A variable stator
/// shifts its stage's characteristic along the flow coefficient (own simplification). Air is thermally perfect and enters at 288.15 K and
/// one atmosphere; results are in corrected terms.
/// </remarks>
public sealed class StageStack
{
    private const double InletTemperature = 288.15,
        InletPressure = 101325.0;

    /// <summary>
    /// Least flow coefficient of any stage, over that at which it stalls, at which the whole still runs. Front stages of a
    /// multistage compressor run stalled at part speed without surge of the whole (common practice; the figure has no source).
    /// </summary>
    public const double ToleratedStall = 0.88;

    // Ends of the efficiency curve, from memory of the published form: what is left where a stage runs almost unloaded and
    // where it stalls.
    private const double LightLoad = 0.35,
        LightEfficiency = 0.55,
        StallEfficiency = 0.88;

    private static readonly ThermallyPerfectGas Air = ThermallyPerfectGas.For(Fuel.JetA1);

    private readonly StageDefinition[] _stages;
    private readonly double[] _bleed;
    private readonly double[] _area;
    private readonly double[] _pressureCoefficient;
    private readonly double _exitFlow;
    private readonly GasPoint _inlet;

    /// <exception cref="ArgumentException">No stages, or a stage that cannot be.</exception>
    public StageStack(IReadOnlyList<StageDefinition> stages)
    {
        if (stages.Count == 0)
            throw new ArgumentException("A stack needs at least one stage.", nameof(stages));
        for (var i = 0; i < stages.Count; i++)
            Check(stages[i], i);
        if (stages.Sum(s => s.Bleed) >= 1.0)
            throw new ArgumentException("The stages bleed more than comes in.", nameof(stages));
        _stages = [.. stages];
        _bleed = [.. stages.Select(s => s.Bleed)];
        _area = new double[_stages.Length];
        _pressureCoefficient = new double[_stages.Length];
        Air.AtTemperature(InletTemperature, 0.0, 0.0, out _inlet);

        double w = 1.0,
            p = InletPressure;
        var state = _inlet;
        for (var i = 0; i < _stages.Length; i++)
        {
            var stage = _stages[i];
            var u = stage.BladeSpeed;
            var axial = stage.FlowCoefficient * u;
            _area[i] = w / (Density(state, p, axial) * axial);
            Air.AtEnthalpy(state.H + stage.WorkCoefficient * u * u, 0.0, 0.0, out var outlet);
            var rise =
                stage.PressureRatio > 0.0
                    ? Air.RAir * Math.Log(stage.PressureRatio)
                    : stage.PolytropicEfficiency * (outlet.Phi - state.Phi);
            if (!(rise < outlet.Phi - state.Phi))
                throw new ArgumentException(
                    $"Stage {i + 1}: a pressure ratio of {stage.PressureRatio:F3} needs more work than its work coefficient "
                        + $"{stage.WorkCoefficient:F3} at {u:F0} m/s gives, even without losses."
                );
            Air.AtEntropy(state.Phi + rise, 0.0, 0.0, out var ideal);
            _pressureCoefficient[i] = (ideal.H - state.H) / (u * u);
            p *= Math.Exp(rise / Air.RAir);
            state = outlet;
            w -= stage.Bleed;
        }

        _exitFlow = w * Math.Sqrt(state.T) / p;
        Design =
            At(1.0, 1.0)
            ?? throw new ArgumentException("The stages do not pass their own design flow.", nameof(stages));
    }

    private StageStack(StageStack built, double[] bleed)
    {
        (_stages, _bleed, _area) = (built._stages, bleed, built._area);
        (_pressureCoefficient, _exitFlow, _inlet) = (built._pressureCoefficient, built._exitFlow, built._inlet);
        Design = built.Design;
    }

    /// <summary>
    /// The design point, as built: product of the stages' pressure ratios, isentropic efficiency of the air that goes all the way.
    /// </summary>
    public StackPoint Design { get; }

    /// <summary>
    /// The same compressor with a bleed port opened: a further share of the inlet flow leaves behind a stage, the annulus stays
    /// as built. It unloads the front stages at part speed.
    /// </summary>
    /// <param name="stage">1 for the first</param>
    /// <param name="share">of the inlet flow, 0 and above; all ports together below 1</param>
    /// <exception cref="ArgumentException">There is no such stage, or more is bled than comes in.</exception>
    public StageStack WithBleed(int stage, double share)
    {
        if (stage < 1 || stage > _stages.Length)
            throw new ArgumentException(
                $"Bleed behind stage {stage}: there is no such stage; expected 1 to {_stages.Length}.",
                nameof(stage)
            );
        if (!(share >= 0.0))
            throw new ArgumentException(
                $"Bleed behind stage {stage}: the share is {share}; expected 0 or more of the inlet flow.",
                nameof(share)
            );
        var bleed = (double[])_bleed.Clone();
        bleed[stage - 1] += share;
        if (!(bleed.Sum() < 1.0))
            throw new ArgumentException(
                $"Bleed behind stage {stage}: all ports together take {bleed.Sum():P0} of the inlet flow; expected less than all.",
                nameof(share)
            );
        return new StageStack(this, bleed);
    }

    public int StageCount => _stages.Length;

    /// <summary>Share of the whole enthalpy rise that is done behind each stage at design, the last 1.</summary>
    public IReadOnlyList<double> WorkShares()
    {
        var shares = new double[_stages.Length];
        var sum = 0.0;
        for (var i = 0; i < _stages.Length; i++)
            shares[i] = sum += _stages[i].WorkCoefficient * _stages[i].BladeSpeed * _stages[i].BladeSpeed;
        for (var i = 0; i < shares.Length; i++)
            shares[i] /= sum;
        return shares;
    }

    /// <summary>
    /// The stack at a relative corrected speed and inlet corrected flow (1 at design); null where a stage chokes or no longer
    /// compresses.
    /// </summary>
    /// <exception cref="ArgumentOutOfRangeException">Speed or flow is not above zero.</exception>
    public StackPoint? At(double speed, double flow)
    {
        if (!(speed > 0.0) || !double.IsFinite(speed))
            throw new ArgumentOutOfRangeException(nameof(speed), speed, "Expected a relative speed above zero.");
        if (!(flow > 0.0) || !double.IsFinite(flow))
            throw new ArgumentOutOfRangeException(nameof(flow), flow, "Expected a relative flow above zero.");
        double w = flow,
            p = InletPressure,
            least = double.PositiveInfinity;
        var critical = 0;
        var state = _inlet;
        for (var i = 0; i < _stages.Length; i++)
        {
            var stage = _stages[i];
            var u = stage.BladeSpeed * speed;
            if (AxialSpeed(state, p, w / _area[i]) is not { } axial)
                return null;
            var reset = Math.Max(0.2, 1.0 - stage.StatorReset * Math.Max(0.0, 1.0 - speed));
            var phi = axial / u / (stage.FlowCoefficient * reset);
            var margin = phi / stage.PeakFlow;
            if (margin < least)
                (least, critical) = (margin, i);
            var psi = Pressure(stage, phi);
            if (psi < 0.02)
                return null;
            var efficiency = Efficiency(stage, psi / phi);
            var ideal = psi * _pressureCoefficient[i] * u * u;
            Air.AtEnthalpy(state.H + ideal, 0.0, 0.0, out var compressed);
            p *= Math.Exp((compressed.Phi - state.Phi) / Air.RAir);
            // Isentropic efficiency at design from the polytropic one: ideal over real work there.
            var designEfficiency = _pressureCoefficient[i] / stage.WorkCoefficient;
            Air.AtEnthalpy(state.H + ideal / (efficiency * designEfficiency), 0.0, 0.0, out state);
            w -= _bleed[i] * flow;
        }

        var ratio = p / InletPressure;
        Air.AtEntropy(_inlet.Phi + Air.RAir * Math.Log(ratio), 0.0, 0.0, out var whole);
        return new StackPoint(
            ratio,
            (whole.H - _inlet.H) / (state.H - _inlet.H),
            least,
            critical,
            w * Math.Sqrt(state.T) / p / _exitFlow
        );
    }

    /// <summary>
    /// The speed line at a relative corrected speed from surge to choke: surge is where the pressure ratio stops rising with
    /// falling flow, or where the first stage is down to <see cref="ToleratedStall"/> of its stalling flow; empty where the stages
    /// do not go together.
    /// </summary>
    public IReadOnlyList<(double Flow, StackPoint Point)> SpeedLine(double speed, int points = 60)
    {
        var highest = 0.0;
        for (var flow = 1.6; flow > 0.02; flow -= 0.004)
            if (At(speed, flow) is { PressureRatio: > 1.0 })
            {
                highest = flow;
                break;
            }

        double low = highest,
            high = highest + 0.004;
        for (var i = 0; i < 40; i++)
        {
            var middle = 0.5 * (low + high);
            if (At(speed, middle) is { PressureRatio: > 1.0 })
                low = middle;
            else
                high = middle;
        }

        var step = low / (8.0 * points);
        var line = Walk(speed, low, step);
        // A steep line spans little flow: again in finer steps.
        while (line.Count < points / 2 && step > 1e-5 * low)
            line = Walk(speed, low, step *= 0.25);
        line.Reverse();
        return line;
    }

    private List<(double Flow, StackPoint Point)> Walk(double speed, double choke, double step)
    {
        var line = new List<(double, StackPoint)>();
        var peak = 0.0;
        for (var flow = choke; flow > 0.2 * choke; flow -= step)
        {
            if (At(speed, flow) is not { } point || point.LeastMargin < ToleratedStall || point.PressureRatio < peak)
                break;
            peak = point.PressureRatio;
            line.Add((flow, point));
        }

        return line;
    }

    private static double Pressure(StageDefinition stage, double phi)
    {
        var vertex = stage.PeakFlow + stage.Shape * (stage.PeakFlow - 1.0);
        var u = (vertex - phi) / (vertex - 1.0);
        return stage.PeakPressure - (stage.PeakPressure - 1.0) * u * u;
    }

    private static double Efficiency(StageDefinition stage, double load)
    {
        if (load <= 1.0)
            return load < LightLoad
                ? LightEfficiency * load / LightLoad
                : 1.0 - (1.0 - LightEfficiency) * Math.Pow((1.0 - load) / (1.0 - LightLoad), 3.5);
        var stall = stage.PeakPressure / stage.PeakFlow;
        var over = (load - 1.0) / (stall - 1.0);
        return Math.Max(0.2, 1.0 - (1.0 - StallEfficiency) * over * over);
    }

    private static double Density(in GasPoint total, double pressure, double axial)
    {
        Air.AtEnthalpy(total.H - 0.5 * axial * axial, 0.0, 0.0, out var s);
        return pressure * Math.Exp((s.Phi - total.Phi) / Air.RAir) / (Air.RAir * s.T);
    }

    /// <summary>Subsonic axial speed at a flow per area, kg/(s m2); null beyond what the annulus passes.</summary>
    private static double? AxialSpeed(in GasPoint total, double pressure, double flux)
    {
        double low = 0.0,
            high = Math.Sqrt(2.0 * 1.4 / 2.4 * Air.RAir * total.T);
        if (!(Density(total, pressure, high) * high > flux))
            return null;
        for (var i = 0; i < 50; i++)
        {
            var middle = 0.5 * (low + high);
            if (Density(total, pressure, middle) * middle < flux)
                low = middle;
            else
                high = middle;
        }

        return low;
    }

    private static void Check(StageDefinition stage, int index)
    {
        void Refuse(string what) => throw new ArgumentException($"Stage {index + 1}: {what}.", nameof(stage));
        if (stage.FlowCoefficient is not (> 0.1 and < 1.5))
            Refuse("the flow coefficient must lie between 0.1 and 1.5");
        if (stage.WorkCoefficient is not (> 0.02 and < 1.0))
            Refuse("the work coefficient must lie between 0.02 and 1");
        if (stage.BladeSpeed is not (> 50.0 and < 700.0))
            Refuse("the blade speed must lie between 50 and 700 m/s");
        if (!(stage.PressureRatio >= 0.0) || !(stage.PolytropicEfficiency >= 0.0))
            Refuse("a pressure ratio or an efficiency must be a number above zero");
        if (stage.PressureRatio > 0.0 == stage.PolytropicEfficiency > 0.0)
            Refuse("give either a pressure ratio or an efficiency");
        if (stage.PressureRatio > 0.0 && stage.PressureRatio is not (> 1.0 and < 4.0))
            Refuse("the pressure ratio must lie between 1 and 4");
        if (stage.PolytropicEfficiency > 0.0 && stage.PolytropicEfficiency is not (> 0.3 and <= 1.0))
            Refuse("the efficiency must lie between 0.3 and 1");
        if (stage.PeakFlow is not (> 0.3 and < 0.99) || stage.PeakPressure is not (> 1.0 and < 2.0))
            Refuse("the top of the characteristic must lie at a flow of 0.3 to 0.99 and a pressure of 1 to 2");
        if (stage.Bleed is not (>= 0.0 and < 1.0))
            Refuse("the bleed must lie between 0 and 1");
        if (stage.Shape is not (> -0.95 and < 5.0))
            Refuse("the shape must lie between -0.95 and 5; at -1 the vertex would lie on the design point");
        if (stage.StatorReset is not (>= 0.0 and <= 5.0))
            Refuse("the stator reset must lie between 0 and 5 per unit of speed");
    }
}

namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.Runtime.InteropServices
open System.Threading
open System.Threading.Tasks
open CycleSim.Air
open CycleSim.Engine
open CycleSim.Matching
open CycleSim.Reports
open CycleSim.Scalars
open MathNet.Numerics.Distributions

/// How an uncertain input is distributed about its nominal value.
type Spread =
    /// Size is the standard deviation.
    | Normal = 0
    /// Size is half the width: every value between is as likely.
    | Uniform = 1
    /// Size is half the width of the base; the nominal value is the likeliest.
    | Triangular = 2

/// An uncertain input.
type UncertainInput = {
    /// "temperature", "pressure", "mach", "setting", a worn part ("hpt efficiency"), an air port ("customer-bleed", its share) or
    /// a spool ("high power").
    Name: string
    Spread: Spread
    /// SI: K, Pa, Mach number, share, W; for the setting a share of its value.
    Size: float
} with

    /// Standard deviation, in the unit of the size.
    member input.StandardDeviation =
        match input.Spread with
        | Spread.Normal -> input.Size
        | Spread.Uniform -> input.Size / sqrt 3.0
        | _ -> input.Size / sqrt 6.0

/// Share of an input in the variance of an output, to first order.
type VarianceShare = { Input: string; Share: float }

/// An output with its uncertainty, both ways.
type UncertainOutput = {
    /// Name with SI unit.
    Name: string
    Nominal: float
    /// Standard deviation from the exact derivatives.
    FirstOrder: float
    /// Inputs by their share of that variance, the largest first.
    Shares: IReadOnlyList<VarianceShare>
    /// Of the drawn points: mean and standard deviation, each with its standard error.
    Mean: float
    MeanError: float
    StandardDeviation: float
    StandardDeviationError: float
    /// 2.5, 50 and 97.5 % of the drawn points lie below.
    Low: float
    Median: float
    High: float
}

/// What uncertain inputs make of the outputs.
type UncertaintyResult = {
    Engine: string
    Nominal: OperatingPoint
    Inputs: IReadOnlyList<UncertainInput>
    Outputs: IReadOnlyList<UncertainOutput>
    /// Draws asked for, and those that were finished: fewer where it was stopped.
    Draws: int
    Finished: int
    /// Finished draws without a point, counted by what stood in the way; in the words of the first of each kind.
    WithoutPoint: IReadOnlyList<KeyValuePair<string, int>>
    Seed: uint64
} with

    /// A row for each output.
    member result.Table(provenance: IReadOnlyList<KeyValuePair<string, string>>) : StudyTable =
        let outputs = Seq.toArray result.Outputs

        let numbers name value =
            TableColumn.Of(name, "", outputs |> Array.map value)

        StudyTable.Of(
            $"Uncertainty of {result.Engine}",
            [|
                yield! provenance
                KeyValuePair("draws", string result.Finished)
                KeyValuePair("seed", string result.Seed)
            |],
            [|
                TableColumn.OfText("output", outputs |> Array.map _.Name)
                numbers "nominal" _.Nominal
                numbers "standard_deviation_first_order" _.FirstOrder
                numbers "mean" _.Mean
                numbers "mean_error" _.MeanError
                numbers "standard_deviation" _.StandardDeviation
                numbers "standard_deviation_error" _.StandardDeviationError
                numbers "low_2.5_percent" _.Low
                numbers "median" _.Median
                numbers "high_97.5_percent" _.High
            |]
        )

/// A question about uncertainty that cannot be asked; the message says why and what was expected.
type UncertaintyException(message: string) =
    inherit QuestionException(message)

/// Where an uncertain input acts: on inputs of the layout, or on the power setting.
type private Lever =
    | Added of int
    | Setting

/// <summary>
/// Uncertainty of outputs from distributions of inputs: to first order from exact derivatives, and by drawing points (Monte
/// Carlo). The draws depend on seed and number alone, not on threads or their order.
/// </summary>
[<AbstractClass; Sealed>]
type Uncertainty private () =

    // SplitMix64 (Steele, Lea, Flood 2014), by counter: the k-th number of the n-th draw is a function of seed, n and k.
    static let mixed (seed: uint64) (draw: int) (index: int) =
        let mutable z =
            seed + 0x9E3779B97F4A7C15UL * (uint64 draw * 64UL + uint64 index + 1UL)

        z <- (z ^^^ (z >>> 30)) * 0xBF58476D1CE4E5B9UL
        z <- (z ^^^ (z >>> 27)) * 0x94D049BB133111EBUL
        z <- z ^^^ (z >>> 31)
        // Between 0 and 1, neither of them.
        (float (z >>> 11) + 0.5) / 9007199254740992.0

    static let drawn (input: UncertainInput) (u: float) =
        match input.Spread with
        | Spread.Normal -> input.Size * Normal.InvCDF(0.0, 1.0, u)
        | Spread.Uniform -> input.Size * (2.0 * u - 1.0)
        | _ ->
            // Inverse of the triangle's distribution.
            if u < 0.5 then
                input.Size * (sqrt (2.0 * u) - 1.0)
            else
                input.Size * (1.0 - sqrt (2.0 * (1.0 - u)))

    static let outputs (engine: SizedEngine) : (string * Func<FlowPath<Plain>, float>)[] = [|
        let quantity q =
            Func<FlowPath<Plain>, float>(fun p -> p.Output(q).Value)

        "net_thrust_N", quantity Quantity.NetThrust
        "fuel_flow_kg_per_s", quantity Quantity.FuelFlow
        "sfc_kg_per_N_s", Func<_, _>(fun (p: FlowPath<Plain>) -> p.FuelFlow.Value / p.NetThrust.Value)
        "T3_K", quantity Quantity.T3
        "T41_K", quantity Quantity.T41
        "T45_K", quantity Quantity.T45
        "P3_Pa", quantity Quantity.P3
        "engine_pressure_ratio", quantity Quantity.Epr

        for k in 0 .. engine.Spools.Length - 1 do
            $"N{k + 1}_relative_speed", quantity (enum<Quantity>(int Quantity.N1 + k))
    |]

    static member private LeverOf(engine: SizedEngine, input: UncertainInput) : Lever =
        let ports = engine.Ports |> Array.map _.Port.Name
        let spools = engine.Spools |> Array.map (fun s -> s.Name + " power")

        match input.Name with
        | "temperature" -> Added InputLayout.Temperature
        | "pressure" -> Added InputLayout.Pressure
        | "mach" -> Added InputLayout.Mach
        | "setting" -> Setting
        | name ->
            match Array.IndexOf(ports, name), Array.IndexOf(spools, name) with
            | port, _ when port >= 0 -> Added(engine.Layout.PortFraction port)
            | _, spool when spool >= 0 -> Added(engine.Layout.PowerOfftake spool)
            | _ ->
                let parts = Seq.toArray (Wear.Parts engine)

                if Array.contains name parts then
                    Added(Wear.Input(engine, name))
                else
                    let known =
                        [|
                            "temperature"
                            "pressure"
                            "mach"
                            "setting"
                            yield! ports
                            yield! spools
                            yield! parts
                        |]
                        |> String.concat ", "

                    raise (UncertaintyException $"'{name}' is no input that can be uncertain; there are {known}.")

    static member private Check(inputs: UncertainInput[], draws: int, threads: int) =
        if inputs.Length = 0 then
            raise (UncertaintyException "no input is uncertain; give at least one.")

        if threads < 0 then
            raise (UncertaintyException $"{threads} threads; expected 0 (one for each core) or more.")

        if inputs.Length > 64 then
            raise (UncertaintyException $"{inputs.Length} uncertain inputs; expected at most 64.")

        if draws < 2 || draws > 10000000 then
            raise (UncertaintyException $"{draws} draws; expected 2 to 10 000 000.")

        for input in inputs do
            if not (input.Size >= 0.0 && Double.IsFinite input.Size) then
                raise (UncertaintyException $"{input.Name}: a size of {input.Size}; expected 0 or more.")

        match inputs |> Seq.countBy _.Name |> Seq.tryFind (fun (_, n) -> n > 1) with
        | Some(name, _) -> raise (UncertaintyException $"'{name}' is given twice.")
        | None -> ()

    /// <summary>Uncertainty at a flight condition and power setting.</summary>
    /// <param name="setting">a quantity and its nominal value, SI</param>
    /// <param name="inputs">uncertain inputs, independent of one another</param>
    /// <param name="draws">2 to 10 000 000</param>
    /// <param name="seed">the same seed gives the same draws</param>
    /// <param name="loads">bleeds, offtakes and wear of the nominal point; nothing where null</param>
    /// <param name="progress">told the share of draws done, from any thread</param>
    /// <param name="cancellation">stops drawing; what has been drawn counts</param>
    /// <param name="threads">one for each core where 0; the numbers do not depend on it</param>
    /// <exception cref="T:CycleSim.Studies.UncertaintyException">No such input, one twice, a size below 0, draws out of range.</exception>
    /// <exception cref="T:CycleSim.Reports.NoSolutionException">The nominal point, or every drawn one, has no solution.</exception>
    static member Run
        (
            engine: SizedEngine,
            flight: FlightCondition,
            setting: Limit,
            inputs: IReadOnlyList<UncertainInput>,
            [<Optional; DefaultParameterValue(10000)>] draws: int,
            [<Optional; DefaultParameterValue(1UL)>] seed: uint64,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] loads: Action<float[]> | null,
            [<Optional; DefaultParameterValue(null: IProgress<float> | null)>] progress: IProgress<float> | null,
            [<Optional>] cancellation: CancellationToken,
            [<Optional; DefaultParameterValue(0)>] threads: int
        ) : UncertaintyResult =
        let uncertain = Seq.toArray inputs
        Uncertainty.Check(uncertain, draws, threads)

        let levers =
            uncertain |> Array.map (fun input -> Uncertainty.LeverOf(engine, input))

        let model = EngineModel engine
        let condition = flight
        let nominalInputs = StudyPoints.inputs model flight loads
        let nominal = model.At(&condition, setting.Quantity, setting.Value, nominalInputs)
        let influence = model.InfluenceOfLastPoint()
        let read = outputs engine
        let names = read |> Array.map fst

        let rows =
            names
            |> Array.map (fun name -> influence.Outputs |> Seq.findIndex (fun o -> o = name))

        let derivative row k =
            match levers[k] with
            | Added input -> influence[row, input]
            | Setting -> influence.BySetting[row] * setting.Value

        // Bleed and power are taken, not given, and an engine flies forwards; a draw below nothing is nothing.
        let neverBelowNothing = [|
            InputLayout.Mach

            for k in 0 .. engine.Ports.Length - 1 do
                engine.Layout.PortFraction k

            for k in 0 .. engine.Spools.Length - 1 do
                engine.Layout.PowerOfftake k
        |]

        // Each block of draws is one unit of work; where it goes in the results depends on its number alone.
        let block = 256
        let blocks = (draws + block - 1) / block
        let values = names |> Array.map (fun _ -> Array.create draws nan)
        let reasons = Array.create<string> draws ""
        let obstacles = Array.create draws (MatchStatus.Solved, -1)
        let finished = Array.create blocks false
        let mutable count = 0

        let work (matcher: Matcher, start: float[]) b =
            for draw in b * block .. min draws ((b + 1) * block) - 1 do
                nominalInputs.CopyTo(matcher.Inputs, 0)
                let mutable value = setting.Value

                for k in 0 .. uncertain.Length - 1 do
                    let change = drawn uncertain[k] (mixed seed draw k)

                    match levers[k] with
                    | Added input -> matcher.Inputs[input] <- matcher.Inputs[input] + change
                    | Setting -> value <- value * (1.0 + change)

                for at in neverBelowNothing do
                    matcher.Inputs[at] <- max 0.0 matcher.Inputs[at]

                let outcome =
                    matcher.Solve(MatchingProblem.For(setting.Quantity, value), ReadOnlySpan start)

                if outcome.Solved then
                    for o in 0 .. names.Length - 1 do
                        values[o][draw] <- (snd read[o]).Invoke matcher.Path
                else
                    reasons[draw] <- Diagnosis.Of(engine, matcher, outcome)
                    obstacles[draw] <- outcome.Status, outcome.Culprit

            finished[b] <- true
            let done' = Interlocked.Increment &count

            match progress with
            | null -> ()
            | told -> told.Report(float done' / float blocks)

        let starting () =
            let matcher = Matcher engine
            nominalInputs.CopyTo(matcher.Inputs, 0)
            matcher.Solve(MatchingProblem.For(setting.Quantity, setting.Value)) |> ignore
            matcher, matcher.Solution.Slice(0, engine.UnknownCount).ToArray()

        use workers = new ThreadLocal<Matcher * float[]>(starting)

        try
            let options =
                ParallelOptions(
                    CancellationToken = cancellation,
                    MaxDegreeOfParallelism = (if threads > 0 then threads else -1)
                )

            Parallel.For(0, blocks, options, (fun b -> work workers.Value b)) |> ignore
        with :? OperationCanceledException ->
            ()

        let done' = [|
            for b in 0 .. blocks - 1 do
                if finished[b] then
                    yield! [ b * block .. min draws ((b + 1) * block) - 1 ]
        |]

        let solved = done' |> Array.filter (fun draw -> reasons[draw] = "")

        if solved.Length < 2 then
            let why =
                done'
                |> Array.tryPick (fun d -> if reasons[d] <> "" then Some reasons[d] else None)
                |> Option.defaultValue "it was stopped before two draws were done"

            raise (NoSolutionException $"fewer than two of the drawn points can be had: {why}")

        let output o =
            let drawn = solved |> Array.map (fun d -> values[o][d])
            let n = float drawn.Length
            let mean = Array.average drawn

            let central power =
                drawn |> Array.averageBy (fun v -> Math.Pow(v - mean, power))

            let variance = (central 2.0) * n / (n - 1.0)
            let deviation = sqrt variance
            // Standard error of a standard deviation from the fourth moment, which holds for any distribution.
            let ofDeviation =
                if deviation = 0.0 then
                    0.0
                else
                    sqrt (max 0.0 (central 4.0 - variance * variance * (n - 3.0) / (n - 1.0)) / n)
                    / (2.0 * deviation)

            let parts =
                uncertain
                |> Array.mapi (fun k input ->
                    let moved = derivative rows[o] k * input.StandardDeviation
                    input.Name, moved * moved)

            let total = parts |> Array.sumBy snd
            let sorted = Array.sort drawn

            let quantile share =
                let at = share * float (sorted.Length - 1)
                let below = int (floor at)
                let above = min (sorted.Length - 1) (below + 1)
                sorted[below] + (at - float below) * (sorted[above] - sorted[below])

            {
                Name = names[o]
                Nominal = influence.OutputValues[rows[o]]
                FirstOrder = sqrt total
                Shares =
                    parts
                    |> Array.map (fun (name, part) -> {
                        Input = name
                        Share = if total > 0.0 then part / total else 0.0
                    })
                    |> Array.sortByDescending _.Share
                Mean = mean
                MeanError = deviation / sqrt n
                StandardDeviation = deviation
                StandardDeviationError = ofDeviation
                Low = quantile 0.025
                Median = quantile 0.5
                High = quantile 0.975
            }

        {
            Engine = engine.Definition.Name
            Nominal = nominal
            Inputs = uncertain
            Outputs = Array.init names.Length output
            Draws = draws
            Finished = done'.Length
            WithoutPoint =
                done'
                |> Array.filter (fun d -> reasons[d] <> "")
                |> Array.groupBy (fun d -> obstacles[d])
                |> Array.map (fun (_, kind) -> KeyValuePair(reasons[kind[0]], kind.Length))
                |> Array.sortByDescending _.Value
            Seed = seed
        }

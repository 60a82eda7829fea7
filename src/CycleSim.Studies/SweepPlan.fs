namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.Globalization
open System.Runtime.InteropServices
open System.Security.Cryptography
open System.Text
open CycleSim.Air
open CycleSim.Engine
open CycleSim.Matching
open CycleSim.Reports
open CycleSim.Scalars
open FSharp.Data.UnitSystems.SI.UnitSymbols

/// Bounds of flight; a point outside them is left out of a sweep. Infinite where there is no such bound.
[<Struct>]
type SweepCorridor = {
    /// Highest calibrated airspeed (Vmo).
    HighestAirspeed: float<m / s>
    /// Highest Mach number (Mmo).
    HighestMach: float
    /// Highest pressure altitude.
    Ceiling: float<m>
    /// Lowest calibrated airspeed.
    LowestAirspeed: float<m / s>
} with

    /// No bounds at all.
    static member Open = {
        HighestAirspeed = infinity * 1.0<m / s>
        HighestMach = infinity
        Ceiling = infinity * 1.0<m>
        LowestAirspeed = 0.0<m / s>
    }

/// What is read off a solved point.
type internal SweepReading = {
    Matcher: Matcher
    mutable Outcome: MatchOutcome
}

/// A column of outputs: name with the SI unit as suffix, as in the JSON documents.
[<Sealed>]
type SweepOutput internal (name: string, unit: string, read: Func<SweepReading, float>) =
    member _.Name = name
    member _.Unit = unit
    member internal _.Read = read

/// What can be asked of the points of a sweep.
[<AbstractClass; Sealed>]
type SweepOutputs private () =
    static member private Quantities(engine: SizedEngine) =
        let output name unit (read: FlowPath<Plain> -> float) =
            SweepOutput(name, unit, (fun r -> read r.Matcher.Path))

        [|
            output "net_thrust_N" "N" (fun p -> p.NetThrust.Value)
            output "fuel_flow_kg_per_s" "kg/s" (fun p -> p.FuelFlow.Value)
            output "sfc_kg_per_N_s" "kg/(N s)" (fun p -> p.FuelFlow.Value / p.NetThrust.Value)
            for k in 0 .. engine.Spools.Length - 1 do
                output $"N{k + 1}_relative_speed" "" (fun p -> p.Unknowns[k].Value)
            output "engine_pressure_ratio" "" (fun p -> p.Output(Quantity.Epr).Value)
            output "T3_K" "K" (fun p -> p.Output(Quantity.T3).Value)
            output "P3_Pa" "Pa" (fun p -> p.Output(Quantity.P3).Value)
            output "T4_K" "K" (fun p -> p.Output(Quantity.T4).Value)
            output "T41_K" "K" (fun p -> p.Output(Quantity.T41).Value)
            output "T45_K" "K" (fun p -> p.Output(Quantity.T45).Value)
            if engine.HasFan then
                output "bypass_ratio" "" (fun p -> p.FanTip.W.Value / p.FanHub.W.Value)
            output "overall_pressure_ratio" "" (fun p ->
                p.CompressorDelivery[p.CompressorDelivery.Length - 1].P.Value
                / p.FanFace.P.Value)
            output "air_flow_kg_per_s" "kg/s" (fun p -> p.FanFace.W.Value)
            output "lever_position" "" (fun p -> p.Output(Quantity.Lever).Value)
        |]

    static member private Others(engine: SizedEngine) =
        let output name unit (read: FlowPath<Plain> -> float) =
            SweepOutput(name, unit, (fun r -> read r.Matcher.Path))

        [|
            output "gross_thrust_N" "N" (fun p -> p.GrossThrustCore.Value + p.GrossThrustBypass.Value)
            output "ram_drag_N" "N" (fun p -> p.RamDrag.Value)
            output "true_airspeed_m_per_s" "m/s" (fun p -> p.Airspeed.Value)
            output "static_pressure_Pa" "Pa" (fun p -> p.Inputs[InputLayout.Pressure].Value)
            output "fuel_air_ratio" "" (fun p -> p.FuelFlow.Value / p.CombustorInlet.W.Value)
            output "corrected_N1_relative_speed" "" (fun p -> p.Output(Quantity.CorrectedN1).Value)
            for k in 0 .. engine.Spools.Length - 1 do
                let design = engine.Spools[k].Speed

                if design > 0.0 then
                    output $"N{k + 1}_rpm" "1/min" (fun p -> p.Unknowns[k].Value * design)
            for plane in StationNames.Planes engine do
                let number, state = plane.Number, plane.State
                output $"T{number}_K" "K" (fun p -> (state.Invoke p).Tt.Value)
                output $"P{number}_Pa" "Pa" (fun p -> (state.Invoke p).P.Value)
                output $"W{number}_kg_per_s" "kg/s" (fun p -> (state.Invoke p).W.Value)
        |]

    static member private Compressors(engine: SizedEngine) : struct (int * ScaledCompressor)[] = [|
        match engine.Fan with
        | null -> ()
        | fan -> struct (0, fan)
        for k in 0 .. engine.Compressors.Length - 1 do
            struct (k + 1, engine.Compressors[k])
    |]

    static member private Margins(engine: SizedEngine) = [|
        for struct (index, compressor) in SweepOutputs.Compressors engine do
            SweepOutput(
                $"surge_margin_constant_speed_{compressor.Name}",
                "",
                fun r -> SurgeMargin.ConstantSpeed(engine, r.Matcher.Path, index).Value
            )
    |]

    static member private FlowMargins(engine: SizedEngine) = [|
        for struct (index, compressor) in SweepOutputs.Compressors engine do
            let margin (r: SweepReading) =
                let path = r.Matcher.Path

                let struct (constantFlow, _) =
                    SurgeMargin.Of(compressor, path.CorrectedSpeed[index].Value, path.Position(index).Value)

                constantFlow

            SweepOutput($"surge_margin_constant_flow_{compressor.Name}", "", margin)

            SweepOutput(
                $"relative_corrected_speed_{compressor.Name}",
                "",
                fun r -> r.Matcher.Path.CorrectedSpeed[index].Value
            )
    |]

    static member private Limits(limits: IReadOnlyList<Limit>) = [|
        for limit in limits do
            // The name of the setting of the same quantity carries its unit: set_T41_K gives T41_K.
            let setting = SweepInput.Power limit.Quantity

            SweepOutput(
                "left_before_limit_" + setting.Name.Substring 4,
                setting.Unit,
                fun r -> limit.Value - r.Matcher.Path.Output(limit.Quantity).Value
            )
    |]

    static member private Residual = SweepOutput("residual", "", (fun r -> r.Outcome.Residual))

    /// Everything that can be asked of an engine; limits are those of a rating against which the points are held.
    static member Of(engine: SizedEngine, limits: IReadOnlyList<Limit>) : IReadOnlyList<SweepOutput> =
        let all = [|
            yield! SweepOutputs.Quantities engine
            yield! SweepOutputs.Margins engine
            yield! SweepOutputs.Limits limits
            SweepOutputs.Residual
            yield! SweepOutputs.Others engine
            yield! SweepOutputs.FlowMargins engine
        |]

        // Stations 3, 4 and 41 stand among the quantities too.
        (all |> Array.distinctBy _.Name) :> IReadOnlyList<SweepOutput>

    /// The outputs of a sweep that asks for none in particular.
    static member Usual(engine: SizedEngine, limits: IReadOnlyList<Limit>) : string[] = [|
        for output in SweepOutputs.Quantities engine do
            output.Name
        for output in SweepOutputs.Margins engine do
            output.Name
        for output in SweepOutputs.Limits limits do
            output.Name
        "residual"
    |]

/// A sweep laid out: what is varied in which order, what is held, what is asked, what is left out. Two plans with the same
/// `Hash` have the same rows.
[<Sealed>]
type SweepPlan
    private
    (
        engine: SizedEngine,
        levels: SweepLevel[],
        held: KeyValuePair<SweepInput, float>[],
        outputs: SweepOutput[],
        corridor: SweepCorridor,
        limits: string,
        baseInputs: float[],
        definition: string,
        rows: int64
    ) =

    /// Points of the grid that are worked out, written and kept together: the unit of resuming, of parts and of row groups.
    static member BlockSize = 1024

    member _.Engine = engine

    /// Outermost first; the last one runs fastest.
    member _.Levels: IReadOnlyList<SweepLevel> = levels

    /// Inputs that are the same at every point.
    member _.Held: IReadOnlyList<KeyValuePair<SweepInput, float>> = held
    member _.Outputs: IReadOnlyList<SweepOutput> = outputs
    member _.Corridor = corridor

    /// Rating whose limits the points are held against; empty without any.
    member _.LimitsOf = limits
    member internal _.BaseInputs = baseInputs

    /// The whole question in words, one thing a line; what `Hash` is taken of.
    member _.Definition = definition

    /// SHA-256 of `Definition`.
    member _.Hash =
        Convert.ToHexStringLower(SHA256.HashData(Encoding.UTF8.GetBytes definition))

    /// Points of the grid, those outside the corridor included.
    member _.GridPoints =
        levels |> Array.fold (fun n (level: SweepLevel) -> n * int64 level.Length) 1L

    /// Rows of the result: points of the grid inside the corridor.
    member _.Rows = rows

    member plan.Blocks =
        int ((plan.GridPoints + int64 SweepPlan.BlockSize - 1L) / int64 SweepPlan.BlockSize)

    member internal _.SetsRating =
        Seq.append (levels |> Seq.collect _.Inputs) (held |> Seq.map _.Key)
        |> Seq.exists (fun input ->
            match input.Kind with
            | Ratings _ -> true
            | _ -> false)

    /// Columns of numbers: the condition, whatever else is varied, the outputs. Names and units.
    member internal plan.NumberColumns: struct (string * string)[] =
        let condition = [| SweepInput.Altitude; SweepInput.Mach; SweepInput.OutsideTemperature |]

        [|
            for input in condition do
                struct (input.Name, input.Unit)
            for input in plan.OwnColumns do
                struct (input.Name, input.Unit)
            for output in outputs do
                struct (output.Name, output.Unit)
        |]

    /// Varied inputs that have a column of numbers of their own beside altitude, Mach number and outside temperature.
    member internal _.OwnColumns: SweepInput[] = [|
        for level in levels do
            for input in level.Inputs do
                match input.Kind with
                | Altitude
                | Mach
                | OutsideTemperature
                | Ratings _ -> ()
                | _ -> input
    |]

    /// Columns of texts: the rating and what governs it where ratings are set, how each point ended, why it has no solution.
    member internal plan.TextColumns: string[] = [|
        if plan.SetsRating then
            "rating"
            "governing"
        "outcome"
        "reason"
    |]

    static member private Number(value: float) =
        value.ToString("R", CultureInfo.InvariantCulture)

    static member private Refuse(message: string) : unit = raise (SweepException message)

    static member private CheckInputs(engine: SizedEngine, inputs: SweepInput[]) =
        let refuse = SweepPlan.Refuse

        match inputs |> Array.countBy _.Name |> Array.tryFind (fun (_, n) -> n > 1) with
        | Some(name, _) -> refuse $"{name} is given more than once."
        | None -> ()

        let has kind =
            inputs |> Array.exists (fun i -> i.Kind = kind)

        if has Mach && has CalibratedAirspeed then
            refuse "Mach number and calibrated airspeed both give the speed; use one of them."

        if has IsaOffset && has OutsideTemperature then
            refuse "ISA offset and outside temperature both give the temperature; use one of them."

        if not (has Altitude) then
            refuse "the pressure altitude is missing; vary or hold it."

        if has RelativeHumidity && not engine.Definition.Gas.CarriesHumidity then
            refuse $"{engine.Definition.Name} is defined with a constant-specific-heat gas, which carries no humidity."

        match inputs |> Array.filter _.SetsPower with
        | [| one |] ->
            match one.Kind with
            | Power Quantity.N2 when engine.Spools.Length < 2 -> refuse $"{engine.Definition.Name} has no spool for N2."
            | Power Quantity.N3 when engine.Spools.Length < 3 -> refuse $"{engine.Definition.Name} has no spool for N3."
            | _ -> ()
        | [||] ->
            refuse
                "nothing sets the power: vary or hold a rating, a lever position, a thrust, a temperature or a speed."
        | several ->
            let names = several |> Array.map _.Name |> String.concat " and "
            refuse $"{names} each set the power; use one of them."

    static member private RatingNames(inputs: SweepInput[]) =
        inputs
        |> Array.collect (fun i ->
            match i.Kind with
            | Ratings names -> names
            | ShareOf name -> [| name |]
            | _ -> [||])

    static member private CheckRating(engine: SizedEngine, name: string) : Rating =
        let ratings = engine.Definition.Ratings

        match
            ratings
            |> Seq.tryFind (fun r -> r.Name.Equals(name, StringComparison.OrdinalIgnoreCase))
        with
        | Some definition -> Rating(engine, definition)
        | None ->
            let known =
                if ratings.Count = 0 then
                    "none"
                else
                    ratings |> Seq.map (fun r -> $"'{r.Name}'") |> String.concat ", "

            raise (SweepException $"{engine.Definition.Name} has no rating '{name}'; it has {known}.")

    /// Calibrated airspeed and Mach number against the bounds: 0 inside, else which bound is broken.
    static member internal Outside(corridor: SweepCorridor, altitude: float, mach: float) : int =
        if altitude > float corridor.Ceiling then
            1
        elif
            mach > corridor.HighestMach
            || Double.IsNaN mach && corridor <> SweepCorridor.Open
        then
            2
        elif
            Double.IsInfinity(float corridor.HighestAirspeed)
            && corridor.LowestAirspeed <= 0.0<m / s>
        then
            0
        else
            let airspeed =
                Airspeed.CalibratedFromMach(mach, StandardAtmosphere.Pressure altitude)
                * 1.0<m / s>

            // A point asked for exactly on a bound is inside, whatever the last bit of the conversion says.
            if airspeed > corridor.HighestAirspeed * (1.0 + 1e-12) then
                3
            elif airspeed < corridor.LowestAirspeed * (1.0 - 1e-12) then
                4
            else
                0

    /// Mach number of a point; not a number where the airspeed means more than Mach 5.
    static member internal MachOf(altitude: float, mach: float, airspeed: float) =
        if Double.IsNaN airspeed then
            mach
        else
            try
                Airspeed.MachFromCalibrated(airspeed, StandardAtmosphere.Pressure altitude)
            with :? ArgumentOutOfRangeException ->
                nan

    /// Number of grid points inside the corridor and how many break each bound.
    static member private Count
        (levels: SweepLevel[], held: KeyValuePair<SweepInput, float>[], corridor: SweepCorridor)
        =
        let matters (input: SweepInput) =
            match input.Kind with
            | Altitude
            | Mach
            | CalibratedAirspeed -> true
            | _ -> false

        let broken = Array.zeroCreate<int64> 5

        let rec walk level altitude mach airspeed (weight: int64) =
            if level = levels.Length then
                let bound =
                    SweepPlan.Outside(corridor, altitude, SweepPlan.MachOf(altitude, mach, airspeed))

                broken[bound] <- broken[bound] + weight
            elif not (levels[level].Inputs |> Array.exists matters) then
                walk (level + 1) altitude mach airspeed (weight * int64 levels[level].Length)
            else
                for place in 0 .. levels[level].Length - 1 do
                    let pick kind otherwise =
                        match levels[level].Inputs |> Array.tryFindIndex (fun i -> i.Kind = kind) with
                        | Some k -> levels[level].Values[k][place]
                        | None -> otherwise

                    walk (level + 1) (pick Altitude altitude) (pick Mach mach) (pick CalibratedAirspeed airspeed) weight

        let heldValue kind otherwise =
            held
            |> Array.tryFind (fun h -> h.Key.Kind = kind)
            |> Option.map _.Value
            |> Option.defaultValue otherwise

        walk 0 (heldValue Altitude 0.0) (heldValue Mach 0.0) (heldValue CalibratedAirspeed nan) 1L
        broken

    static member private CheckCorridor(corridor: SweepCorridor, broken: int64[]) =
        if corridor.LowestAirspeed > corridor.HighestAirspeed then
            SweepPlan.Refuse "the corridor is empty: its lowest airspeed lies above its highest."

        if broken[0] = 0L then
            let reasons =
                [|
                    broken[1], "above the ceiling"
                    broken[2], "beyond the highest Mach number"
                    broken[3], "beyond the highest calibrated airspeed"
                    broken[4], "below the lowest calibrated airspeed"
                |]
                |> Array.filter (fun (n, _) -> n > 0L)
                |> Array.map (fun (n, text) -> $"{n} lie {text}")
                |> String.concat ", "

            SweepPlan.Refuse
                $"no point of the sweep lies inside the corridor: {reasons}. Widen the corridor or move the axes."

    /// <summary>
    /// Lays a sweep out. Altitude must be among the inputs, and exactly one setting of the power; without others Mach is 0,
    /// temperature standard, air dry, loads the definition's.
    /// </summary>
    /// <param name="identity">what stands for the definition, for instance the SHA-256 of its text</param>
    /// <param name="levels">nested loops, the last one fastest</param>
    /// <param name="held">inputs that are the same at every point</param>
    /// <param name="outputs">names of outputs; the usual ones where null</param>
    /// <param name="corridor">bounds of flight; none where null</param>
    /// <param name="limits">rating whose limits the points are held against; without it the one set, else the first</param>
    /// <param name="loads">changes bleeds, offtakes or health in the list of inputs; nothing where null</param>
    /// <exception cref="T:CycleSim.Studies.SweepException">What is asked does not make sense; the message says why.</exception>
    /// <exception cref="T:CycleSim.Matching.RatingException">A rating that cannot be worked out.</exception>
    static member Of
        (
            engine: SizedEngine,
            identity: string,
            levels: SweepLevel[],
            held: KeyValuePair<SweepInput, float>[],
            [<Optional; DefaultParameterValue(null: string[] | null)>] outputs: string[] | null,
            [<Optional; DefaultParameterValue(Nullable<SweepCorridor>())>] corridor: Nullable<SweepCorridor>,
            [<Optional; DefaultParameterValue("")>] limits: string,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] loads: Action<float[]> | null
        ) : SweepPlan =
        let corridor =
            if corridor.HasValue then
                corridor.Value
            else
                SweepCorridor.Open

        let inputs = [| yield! levels |> Seq.collect _.Inputs; yield! held |> Seq.map _.Key |]

        SweepPlan.CheckInputs(engine, inputs)

        for entry in held do
            entry.Key.Check entry.Value

        let ratings = SweepPlan.RatingNames inputs

        for name in ratings do
            SweepPlan.CheckRating(engine, name) |> ignore

        let limitsOf =
            if limits <> "" then
                limits
            elif ratings.Length > 0 then
                ratings[0]
            elif engine.Definition.Ratings.Count > 0 then
                engine.Definition.Ratings[0].Name
            else
                ""

        let known =
            if limitsOf = "" then
                [||] :> IReadOnlyList<Limit>
            else
                SweepPlan.CheckRating(engine, limitsOf).Limits

        let catalogue = SweepOutputs.Of(engine, known)

        let chosen =
            match outputs with
            | null -> SweepOutputs.Usual(engine, known)
            | [| "all" |] -> catalogue |> Seq.map _.Name |> Seq.toArray
            | names -> names
            |> Array.map (fun name ->
                match catalogue |> Seq.tryFind (fun o -> o.Name = name) with
                | Some output -> output
                | None ->
                    let names = catalogue |> Seq.map _.Name |> String.concat ", "
                    raise (SweepException $"there is no output '{name}'; there are {names}, or 'all'."))

        match chosen |> Array.countBy _.Name |> Array.tryFind (fun (_, n) -> n > 1) with
        | Some(name, _) -> SweepPlan.Refuse $"output {name} is asked for twice."
        | None -> ()

        let grid = levels |> Array.fold (fun n level -> n * float level.Length) 1.0

        if grid > 1e9 then
            SweepPlan.Refuse $"{grid:G3} points are more than a thousand million; take fewer."

        let broken = SweepPlan.Count(levels, held, corridor)
        SweepPlan.CheckCorridor(corridor, broken)

        let condition = engine.Definition.Design.Flight
        let baseInputs = engine.Layout.Defaults(engine.Definition, &condition)

        match loads with
        | null -> ()
        | act -> act.Invoke baseInputs

        let definition =
            SweepPlan.Describe(engine, identity, levels, held, chosen, corridor, limitsOf, baseInputs)

        SweepPlan(engine, levels, held, chosen, corridor, limitsOf, baseInputs, definition, broken[0])

    static member private Describe
        (
            engine: SizedEngine,
            identity: string,
            levels: SweepLevel[],
            held: KeyValuePair<SweepInput, float>[],
            outputs: SweepOutput[],
            corridor: SweepCorridor,
            limits: string,
            baseInputs: float[]
        ) =
        let number = SweepPlan.Number

        let value (input: SweepInput) (v: float) =
            match input.Kind with
            | Ratings names -> names[int v]
            | _ -> number v

        String.concat "\n" [|
            $"engine {engine.Definition.Name}"
            $"definition {identity}"
            for level in levels do
                "over "
                + (Array.map2
                    (fun (input: SweepInput) values ->
                        input.Name + " = " + (values |> Array.map (value input) |> String.concat ", "))
                    level.Inputs
                    level.Values
                   |> String.concat " & ")
            for entry in held do
                $"at {entry.Key.Name} = {value entry.Key entry.Value}"
            for index in 4 .. baseInputs.Length - 1 do
                $"input {engine.Layout.Names[index]} = {number baseInputs[index]}"
            if corridor <> SweepCorridor.Open then
                $"corridor calibrated_airspeed_m_per_s {number (float corridor.LowestAirspeed)} to {number (float corridor.HighestAirspeed)}, mach to {number corridor.HighestMach}, pressure_altitude_m to {number (float corridor.Ceiling)}"
            if limits <> "" then
                $"limits {limits}"
            "outputs " + (outputs |> Array.map _.Name |> String.concat ", ")
            $"blocks of {SweepPlan.BlockSize}"
        |]

namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.Threading
open CycleSim.Air
open CycleSim.Engine
open CycleSim.Matching
open CycleSim.Reports

/// Walks along lines of neighbouring points. Where a line begins does not depend on what was walked before the block, so a
/// block comes out the same whoever works it out.
[<Sealed>]
type internal LineWalker(engine: SizedEngine) =
    let matcher = Matcher engine
    let start = Array.zeroCreate<float> engine.UnknownCount
    let mutable started = false
    let mutable beginning = true

    member _.Matcher = matcher

    member _.NewBlock() =
        started <- false
        beginning <- true

    member _.NewLine() = beginning <- true

    /// The point of the matcher's inputs that meets a problem: warm along the line, from the head of the line before at a
    /// new line. What ends outside a map that way is tried from the design point before it counts as without solution.
    member _.Solve(problem: MatchingProblem) : MatchOutcome =
        let first =
            if not beginning then matcher.SolveNext problem
            elif started then matcher.Solve(problem, ReadOnlySpan start)
            else matcher.Solve problem

        let outcome =
            if first.Solved || first.Status = MatchStatus.NotConverged then
                first
            else
                matcher.Solve problem

        if beginning && outcome.Solved then
            matcher.Solution.Slice(0, start.Length).CopyTo(start.AsSpan())
            started <- true

        beginning <- false
        outcome

/// Works out blocks of a plan. One per thread.
[<Sealed>]
type internal SweepWalk(plan: SweepPlan) =
    let engine = plan.Engine
    let levels = plan.Levels |> Seq.toArray
    let walker = LineWalker engine
    let matcher = walker.Matcher
    let rated = lazy LineWalker engine

    let reading = {
        Matcher = matcher
        Outcome = MatchOutcome()
    }

    let readers = plan.Outputs |> Seq.map _.Read |> Seq.toArray
    let place = Array.zeroCreate<int> levels.Length

    // Every input with where its value comes from: a level and a row of it, or the value held.
    let inputs = [|
        for level in 0 .. levels.Length - 1 do
            for k in 0 .. levels[level].Inputs.Length - 1 do
                struct (levels[level].Inputs[k], level, levels[level].Values[k])
        for entry in plan.Held do
            struct (entry.Key, -1, [| entry.Value |])
    |]

    let current = Array.zeroCreate<float> inputs.Length

    let slot kind =
        inputs |> Array.tryFindIndex (fun (struct (input, _, _)) -> input.Kind = kind)

    let read kind otherwise : unit -> float =
        match slot kind with
        | Some k -> fun () -> current[k]
        | None -> fun () -> otherwise

    let altitude = read Altitude 0.0
    let mach = read Mach 0.0
    let airspeed = read CalibratedAirspeed nan
    let offset = read IsaOffset 0.0
    // Zero kelvin stands for a temperature that is not given.
    let temperature = read OutsideTemperature 0.0
    let humidity = read RelativeHumidity 0.0

    let loads = [|
        for k in 0 .. inputs.Length - 1 do
            let struct (input, _, _) = inputs[k]

            match input.Kind with
            | Load name -> struct (k, Seq.findIndex ((=) name) engine.Layout.Names)
            | _ -> ()
    |]

    let power =
        inputs |> Array.findIndex (fun (struct (input, _, _)) -> input.SetsPower)

    let powerKind = let struct (input, _, _) = inputs[power] in input.Kind

    let own =
        plan.OwnColumns
        |> Array.map (fun column ->
            inputs
            |> Array.findIndex (fun (struct (input, _, _)) -> input.Name = column.Name))

    let ratingNames =
        match powerKind with
        | Ratings names -> names
        | ShareOf name -> [| name |]
        | _ -> [||]

    let ratings =
        ratingNames
        |> Array.map (fun name ->
            engine.Definition.Ratings
            |> Seq.find (fun r -> r.Name.Equals(name, StringComparison.OrdinalIgnoreCase))
            |> fun definition -> Rating(engine, definition))

    // The flat thrust is worked out from the design point each time, so keeping it changes nothing but the time.
    let flat = Dictionary<struct (int * float * float), float>()
    let most = 20_000

    let flatThrust index altitude mach =
        let key = struct (index, altitude, mach)

        match flat.TryGetValue key with
        | true, known -> known
        | _ ->
            let thrust = ratings[index].FlatThrust(altitude, mach)

            if flat.Count >= most then
                flat.Clear()

            flat[key] <- thrust
            thrust

    let ratedProblem index altitude mach =
        MatchingProblem.FirstLimit(
            ReadOnlySpan [|
                yield! ratings[index].Limits
                Limit(Quantity.NetThrust, flatThrust index altitude mach)
            |]
        )

    let kept = Array.zeroCreate<float> engine.Layout.Count
    let mutable keptThrust = nan
    let mutable keptReason = ""
    let mutable keptKnown = false

    let compressorOf (outcome: MatchOutcome) =
        if outcome.Culprit = 0 && engine.HasFan then
            "the fan"
        elif outcome.Culprit > 0 && outcome.Culprit <= engine.Compressors.Length then
            "the " + engine.Compressors[outcome.Culprit - 1].Name
        else
            "a compressor"

    let ending (outcome: MatchOutcome) =
        match outcome.Status with
        | MatchStatus.Solved -> "solved"
        | MatchStatus.BeyondSurge -> $"beyond the surge line of {compressorOf outcome}"
        | MatchStatus.BeyondChoke -> $"beyond the choked end of {compressorOf outcome}"
        | MatchStatus.OutsideMapSpeed -> $"off the map of {compressorOf outcome}"
        | MatchStatus.NoThroughflow -> "too little power for the flight speed"
        | MatchStatus.NoCombustion -> "no possible combustion"
        | _ -> "not to be had"

    let unrated = "rating has no point"

    /// Solves the current point; how it ended, why, and what governs a rating.
    let solve altitude mach : struct (string * string * string) =
        let finish (outcome: MatchOutcome) governing : struct (string * string * string) =
            reading.Outcome <- outcome

            if outcome.Solved then
                struct ("solved", "", governing ())
            else
                struct (ending outcome, Diagnosis.Of(engine, matcher, outcome), "")

        let none () = ""

        match powerKind with
        | Power quantity -> finish (walker.Solve(MatchingProblem.For(quantity, current[power]))) none
        | Ratings _ ->
            let index = int current[power]

            let governing () =
                let limit = matcher.GoverningLimit()
                let limits = ratings[index].Limits

                if limit = limits.Count then
                    "flat"
                else
                    QuantityText.Name limits[limit].Quantity

            finish (walker.Solve(ratedProblem index altitude mach)) governing
        | _ ->
            // Along a line of shares the rated point stays the same.
            if not (keptKnown && kept.AsSpan().SequenceEqual(ReadOnlySpan matcher.Inputs)) then
                let other = rated.Value.Matcher
                matcher.Inputs.CopyTo(other.Inputs, 0)
                matcher.Inputs.CopyTo(kept, 0)
                keptKnown <- true
                keptThrust <- nan
                let outcome = rated.Value.Solve(ratedProblem 0 altitude mach)

                if outcome.Solved then
                    keptThrust <- other.Path.NetThrust.Value
                else
                    keptReason <- Diagnosis.Of(engine, other, outcome)

            if Double.IsNaN keptThrust then
                struct (unrated, keptReason, "")
            else
                finish (walker.Solve(MatchingProblem.For(Quantity.NetThrust, current[power] * keptThrust))) none

    let lineLength =
        // Levels of one value behind the last do not end a line.
        levels
        |> Array.tryFindBack (fun level -> level.Length > 1)
        |> Option.map (fun level -> level.Length)
        |> Option.defaultValue 1

    let numbers = plan.NumberColumns.Length
    let setsRating = plan.SetsRating
    let corridor = plan.Corridor
    let baseInputs = plan.BaseInputs
    let gridPoints = plan.GridPoints
    let texts = plan.TextColumns.Length

    let flight altitude mach =
        // An airspeed without a Mach number says why itself.
        if Double.IsNaN mach then
            Airspeed.MachFromCalibrated(airspeed (), StandardAtmosphere.Pressure altitude)
            |> ignore

        let outside =
            if temperature () = 0.0 then
                StandardAtmosphere.Temperature altitude + offset ()
            else
                temperature ()

        let dry = FlightCondition.AtTemperature(altitude, mach, outside)

        if humidity () > 0.0 then
            dry.WithRelativeHumidity(humidity ())
        else
            dry

    // Along a line of powers the condition stays the same: it is worked out again where one of the five has changed.
    let asked = Array.create 5 nan
    let mutable lastCondition = FlightCondition()

    let conditionOf altitude mach =
        let changed (k: int) (value: float) =
            let other = asked[k] <> value
            asked[k] <- value
            other

        let height = changed 0 altitude
        let speed = changed 1 mach
        let warmer = changed 2 (offset ())
        let warm = changed 3 (temperature ())
        let damp = changed 4 (humidity ())

        if height || speed || warmer || warm || damp then
            // A condition that cannot be leaves none behind.
            asked[0] <- nan
            lastCondition <- flight altitude mach
            asked[0] <- altitude

        lastCondition

    // Range errors of the core name a parameter of the code at their end, which says nothing to the reader of a table.
    let plainly (message: string) =
        match message.IndexOf " (Parameter" with
        | -1 -> message
        | at -> message.Substring(0, at)

    /// Puts the point at a place of the grid into the lists of a block.
    let row (columns: float[][]) (words: string[][]) at altitude mach =
        let mutable outside = nan

        let struct (outcome, reason, governing) =
            try
                let condition = conditionOf altitude mach
                outside <- condition.StaticTemperature
                baseInputs.CopyTo(matcher.Inputs, 0)
                InputLayout.SetFlight(matcher.Inputs.AsSpan(), &condition)

                for struct (k, input) in loads do
                    matcher.Inputs[input] <- current[k]

                solve altitude mach
            with
            | :? ArgumentOutOfRangeException as error ->
                struct ("outside the range of flight", plainly error.Message, "")
            | :? RatingException as error -> struct (unrated, error.Message, "")

        columns[0][at] <- altitude
        columns[1][at] <- mach
        columns[2][at] <- outside

        for k in 0 .. own.Length - 1 do
            columns[3 + k][at] <- current[own[k]]

        let solved = Object.ReferenceEquals(outcome, "solved")

        for k in 0 .. readers.Length - 1 do
            let value = if solved then readers[k].Invoke reading else nan
            columns[3 + own.Length + k][at] <- if Double.IsFinite value then value else nan

        if setsRating then
            words[0][at] <- ratingNames[int current[power]]
            words[1][at] <- governing

        words[texts - 2][at] <- outcome
        words[texts - 1][at] <- reason

    let setPlaces (grid: int64) =
        let mutable rest = grid

        for level in levels.Length - 1 .. -1 .. 0 do
            place[level] <- int (rest % int64 levels[level].Length)
            rest <- rest / int64 levels[level].Length

        for k in 0 .. inputs.Length - 1 do
            let struct (_, level, values) = inputs[k]
            current[k] <- if level < 0 then values[0] else values[place[level]]

    /// The rows of a block; ends between two points where it is told to.
    member _.Block(index: int, cancellation: CancellationToken) : SweepBlock =
        let first = int64 index * int64 SweepPlan.BlockSize
        let last = min gridPoints (first + int64 SweepPlan.BlockSize)
        let size = int (last - first)
        let columns = Array.init numbers (fun _ -> Array.zeroCreate<float> size)
        let words = Array.init texts (fun _ -> Array.zeroCreate<string> size)
        let mutable rows = 0
        walker.NewBlock()
        keptKnown <- false

        if rated.IsValueCreated then
            rated.Value.NewBlock()

        for grid in first .. last - 1L do
            cancellation.ThrowIfCancellationRequested()
            setPlaces grid

            if grid % int64 lineLength = 0L then
                walker.NewLine()

                if rated.IsValueCreated then
                    rated.Value.NewLine()

            let height = altitude ()
            let speed = SweepPlan.MachOf(height, mach (), airspeed ())

            if SweepPlan.Outside(corridor, height, speed) = 0 then
                row columns words rows height speed
                rows <- rows + 1

        {
            Index = index
            Rows = rows
            Numbers =
                (if rows = size then
                     columns
                 else
                     columns |> Array.map (Array.truncate rows))
            Texts =
                (if rows = size then
                     words
                 else
                     words |> Array.map (Array.truncate rows))
            Bytes = null
        }

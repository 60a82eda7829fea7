namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.Globalization
open System.Runtime.InteropServices
open CycleSim.Air
open CycleSim.Engine
open CycleSim.Matching
open CycleSim.Reports
open FSharp.Data.UnitSystems.SI.UnitSymbols

/// A solved point from which penalties are counted: what is held there, and the derivatives.
type private Reference(model: EngineModel, flight: FlightCondition, held: Limit, taken: Action<float[]> | null) =
    let inputsWith moves =
        let inputs = StudyPoints.inputs model flight taken
        Loads.add moves inputs
        inputs

    let solve moves =
        let condition = flight
        model.At(&condition, held.Quantity, held.Value, inputsWith moves)

    let point = solve [||]
    let influence = model.InfluenceOfLastPoint()

    member _.Held = held
    member _.Point = point
    member _.InputsWith(moves: (int * float)[]) = inputsWith moves

    /// Change of an output by its name in the influence coefficients: exact derivatives times what moves.
    member _.Change(output: string, moves: (int * float)[]) =
        let row = Seq.findIndex ((=) output) influence.Outputs
        moves |> Array.sumBy (fun (input, amount) -> influence[row, input] * amount)

    member reference.FirstOrder(moves: (int * float)[]) : PenaltyEffects =
        let change output = reference.Change(output, moves)

        {
            NetThrust = change "net_thrust_N" / point.NetThrust
            FuelFlow = change "fuel_flow_kg_per_s" / point.FuelFlow
            Sfc = change "sfc_kg_per_N_s" / point.Sfc
            T41 = change "T41_K" * 1.0<K>
            T45 = change "T45_K" * 1.0<K>
            Speeds = [| for k in 1 .. point.Spools.Count -> change $"N{k}_relative_speed" |]
            SurgeMargins = [| for c in point.Compressors -> change $"surge_margin_{c.Name}" |]
        }

    /// The point with something moved, or why there is none.
    member _.Solve(moves: (int * float)[]) : Result<OperatingPoint, string> =
        try
            Ok(solve moves)
        with :? NoSolutionException as none ->
            Error none.Message

    member reference.Answer(moves: (int * float)[], solved: Result<OperatingPoint, string>) : PenaltyAnswer = {
        FirstOrder = reference.FirstOrder moves
        Full =
            match solved with
            | Ok loaded -> PenaltyEffects.Between(point, loaded)
            | Error _ -> PenaltyEffects.None point
        Reason =
            match solved with
            | Ok _ -> ""
            | Error reason -> reason
    }

/// The points without loads that all penalties of a study are counted from.
type private PenaltyCase
    (model: EngineModel, flight: FlightCondition, rating: Rating, thrust: float<N>, taken: Action<float[]> | null) =
    let engine = model.Engine
    let flat = rating.FlatThrust(flight.PressureAltitude, flight.Mach)

    /// The break with something moved: its temperature and limit, or why there is none.
    let breakWith moves =
        let inputs = StudyPoints.inputs model flight taken
        Loads.add moves inputs
        let mutable temperature = 0.0
        let mutable governing = -1
        let outcome = rating.Break(inputs, flat, &temperature, &governing)

        if outcome.Solved then
            Ok(temperature, rating.Limits[governing])
        else
            Error(Diagnosis.Of(engine, rating.Matcher, outcome))

    let breakTemperature, breakLimit =
        match breakWith [||] with
        | Ok found -> found
        | Error reason ->
            raise (
                NoSolutionException
                    $"rating '{rating.Definition.Name}': flat thrust and limits meet at no outside temperature: {reason}"
            )

    let atBreak =
        Reference(model, StudyPoints.atTemperature flight breakTemperature, breakLimit, taken)

    let rated =
        let condition = flight
        model.AtRating(&condition, rating, StudyPoints.inputs model flight taken)

    let isFlat = rated.Setting.Quantity = Quantity.NetThrust

    let atLimit =
        if isFlat then
            atBreak
        else
            Reference(model, flight, rated.Setting, taken)

    let atThrust =
        let held = if thrust = 0.0<N> then rated.NetThrust else float thrust
        Reference(model, flight, Limit(Quantity.NetThrust, held), taken)

    /// What the moves take of the thrust at the limit, over what a kelvin takes of it.
    let breakFirstOrder moves =
        let perKelvin = atBreak.Change("net_thrust_N", [| InputLayout.Temperature, 1.0 |])
        -atBreak.Change("net_thrust_N", moves) / perKelvin * 1.0<K>

    let beyond (point: OperatingPoint) =
        LimitMargin.Of(point, rating)
        |> Seq.filter (fun m -> m.Limit <> atLimit.Held && m.Left < -1e-9 * m.Limit.Value)
        |> Seq.map _.Limit
        |> Seq.toArray

    member _.Engine = engine
    member _.AtThrust = atThrust
    member _.AtLimit = atLimit
    member _.IsFlat = isFlat
    member _.BreakTemperature = breakTemperature * 1.0<K>
    member _.BreakLimit = breakLimit

    member private _.Penalty(name: string, items: IReadOnlyList<LoadItem>, moves: (int * float)[]) : Penalty =
        let limited = atLimit.Solve moves

        let newBreak, newLimit =
            match breakWith moves with
            | Ok(temperature, limit) -> temperature - breakTemperature, QuantityText.Name limit.Quantity
            | Error _ -> nan, ""

        {
            Name = name
            Items = items
            AtThrust = atThrust.Answer(moves, atThrust.Solve moves)
            AtLimit = atLimit.Answer(moves, limited)
            Beyond =
                match limited with
                | Ok point -> beyond point
                | Error _ -> [||]
            BreakFirstOrder = breakFirstOrder moves
            Break = newBreak * 1.0<K>
            BreakLimit = newLimit
        }

    member case.OfLoad(load: NamedLoad) : Penalty =
        case.Penalty(load.Name, load.Items, Loads.moves engine load)

    member case.Together(loads: NamedLoad[]) : Penalty =
        let items = loads |> Array.collect (fun load -> Seq.toArray load.Items)
        case.Penalty("all together", items, loads |> Array.collect (Loads.moves engine))

    /// The air of a load, kg/s, at the thrust held: what its shares come to there, opening of the valves included.
    member _.AirOf(load: NamedLoad) : float =
        let moves = Loads.moves engine load
        let inputs = atThrust.InputsWith moves

        let flow (point: OperatingPoint) (item: LoadItem) =
            let port = Array.IndexOf(Loads.ports engine, item.Source)

            match item.Kind with
            | LoadKind.Flow -> item.Amount
            | LoadKind.Share ->
                let byShares = point.Air[port].MassFlow - inputs[engine.Layout.PortFlow port]
                byShares * item.Amount / inputs[engine.Layout.PortFraction port]
            | _ -> 0.0

        match atThrust.Solve moves with
        | Ok point -> load.Items |> Seq.sumBy (flow point)
        | Error _ -> nan

/// What bleed air and shaft power cost: at constant thrust, and at the limit of a rating.
[<AbstractClass; Sealed>]
type Penalties private () =

    /// <summary>
    /// Works out what loads cost at a flight condition. First order: the exact derivatives of
    /// <see cref="T:CycleSim.Reports.Influence"/> at the point without the loads; full: the point solved anew with them.
    /// The break moves, first order, by what the load takes of the thrust at the limit over what a kelvin takes, flat thrust
    /// and water in the air as they were.
    /// </summary>
    /// <param name="flight">any condition that the engine can be matched at</param>
    /// <param name="ratingName">rating whose limit is held in the second half of the answer</param>
    /// <param name="loads">the user's loads; none where null</param>
    /// <param name="thrust">net thrust held, N; that of the rating where zero</param>
    /// <param name="taken">changes bleeds, offtakes or health before any load is added; nothing where null</param>
    /// <param name="leastPressure">total pressure, Pa, that the air of a need must have at its port; 0 leaves it open</param>
    /// <exception cref="T:CycleSim.Studies.LoadException">A load of nothing, or from a port or spool that is not there.</exception>
    /// <exception cref="T:CycleSim.Matching.RatingException">No such rating, or one that cannot be worked out.</exception>
    /// <exception cref="T:CycleSim.Reports.NoSolutionException">No point without the loads.</exception>
    static member Run
        (
            model: EngineModel,
            flight: FlightCondition,
            ratingName: string,
            [<Optional; DefaultParameterValue(null: IReadOnlyList<NamedLoad> | null)>] loads:
                IReadOnlyList<NamedLoad> | null,
            [<Optional; DefaultParameterValue(0.0<N>)>] thrust: float<N>,
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] taken: Action<float[]> | null,
            [<Optional; DefaultParameterValue(0.0<Pa>)>] leastPressure: float<Pa>
        ) : PenaltiesResult =
        let loads =
            match loads with
            | null -> [||]
            | given -> Seq.toArray given

        Loads.checkNames loads
        let rating = model.Rating ratingName
        let case = PenaltyCase(model, flight, rating, thrust, taken)
        let perUnit = Penalties.PerUnit case
        let single = loads |> Array.map case.OfLoad

        let sum pick =
            single
            |> Array.map pick
            |> Array.fold
                (fun total effects -> PenaltyEffects.Combine((+), total, effects))
                (PenaltyEffects.Between(case.AtThrust.Point, case.AtThrust.Point))

        {
            Engine = model.Engine.Definition.Name
            Rating = rating.Definition.Name
            AtThrust = case.AtThrust.Point
            AtLimit = case.AtLimit.Point
            Limit = case.AtLimit.Held
            LimitHeldAtBreak = case.IsFlat
            BreakTemperature = case.BreakTemperature
            BreakLimit = case.BreakLimit
            PerUnit = perUnit
            Loads = single
            Together = case.Together loads
            SumAtThrust = sum _.AtThrust.Full
            SumAtLimit = sum _.AtLimit.Full
            SumBreak = single |> Array.sumBy _.Break
            Ranking = Penalties.Rank(case, perUnit, loads, float leastPressure)
        }

    static member private PerUnit(case: PenaltyCase) : Penalty[] =
        let unit name item =
            case.OfLoad { Name = name; Items = [| item |] }

        [|
            for port in Loads.ports case.Engine do
                unit $"{port} 1 %%" (LoadItem.AirShare(port, 0.01))
                unit $"{port} 1 kg/s" (LoadItem.Air(port, 1.0<kg / s>))
            for spool in Loads.spools case.Engine do
                unit $"{spool} 1 kW" (LoadItem.Shaft(spool, 1000.0<W>))
        |]

    /// Each need from every source that could serve it. Air that an aircraft uses goes overboard, and from ports that stand
    /// open: what a schedule shuts cannot be counted on.
    static member private Rank
        (case: PenaltyCase, perUnit: Penalty[], loads: NamedLoad[], leastPressure: float)
        : IReadOnlyList<Service> =
        let ports =
            case.Engine.Ports
            |> Array.filter (fun p -> p.Port.To = AirDestination.Overboard && not p.Port.Scheduled)
            |> Array.map _.Port.Name

        let supply (item: LoadItem) =
            if item.Kind = LoadKind.Power then
                nan, nan
            else
                let stream = case.AtThrust.Point.Air |> Seq.find (fun a -> a.Name = item.Source)
                stream.TotalPressure, stream.TotalTemperature

        let service need (item: LoadItem) (penalty: Penalty) sfc thrust breakChange reason : Service =
            let pressure, temperature = supply item

            {
                Need = need
                Source = item.Source
                Kind = item.Kind
                Amount = item.Amount
                Sfc = sfc penalty
                NetThrust = thrust penalty
                Break = breakChange penalty
                SupplyPressure = pressure * 1.0<Pa>
                SupplyTemperature = temperature * 1.0<K>
                Reason =
                    if pressure < leastPressure then
                        String.Format(
                            CultureInfo.InvariantCulture,
                            "air of {0:F1} kPa where {1:F1} kPa are needed",
                            pressure / 1000.0,
                            leastPressure / 1000.0
                        )
                    else
                        reason penalty
            }

        let cheapestFirst (services: Service[]) =
            services |> Array.sortBy (fun s -> (if s.Reason = "" then 0 else 1), s.Sfc)

        let units kind need = [|
            for p in perUnit do
                let item = p.Items[0]

                if item.Kind = kind && (kind = LoadKind.Power || Array.contains item.Source ports) then
                    service
                        need
                        item
                        p
                        _.AtThrust.FirstOrder.Sfc
                        _.AtLimit.FirstOrder.NetThrust
                        _.BreakFirstOrder
                        (fun _ -> "")
        |]

        let solved need (items: LoadItem[]) = [|
            for item in items do
                let penalty = case.OfLoad { Name = need; Items = [| item |] }
                service need item penalty _.AtThrust.Full.Sfc _.AtLimit.Full.NetThrust _.Break _.AtThrust.Reason
        |]

        [|
            yield! units LoadKind.Flow "1 kg/s" |> cheapestFirst
            yield! units LoadKind.Power "1 kW" |> cheapestFirst

            for load in loads do
                let flow = case.AirOf load

                if flow > 0.0 then
                    yield!
                        ports
                        |> Array.map (fun port -> LoadItem.Air(port, flow * 1.0<kg / s>))
                        |> solved load.Name
                        |> cheapestFirst

                let power =
                    load.Items
                    |> Seq.filter (fun i -> i.Kind = LoadKind.Power)
                    |> Seq.sumBy _.Amount

                if power > 0.0 then
                    yield!
                        Loads.spools case.Engine
                        |> Array.map (fun spool -> LoadItem.Shaft(spool, power * 1.0<W>))
                        |> solved load.Name
                        |> cheapestFirst
        |]

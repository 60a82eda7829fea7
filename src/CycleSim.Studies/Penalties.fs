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

/// Changes against the engine without the load; NaN where there is no point.
type PenaltyEffects = {
    /// Relative change of net thrust: 0.01 is one per cent more.
    NetThrust: float
    /// Relative change of fuel flow.
    FuelFlow: float
    /// Relative change of specific fuel consumption.
    Sfc: float
    /// Change of rotor inlet temperature.
    T41: float<K>
    /// Change of the gas temperature behind the first turbine.
    T45: float<K>
    /// Change of each spool's speed over its design speed, low-pressure first.
    Speeds: IReadOnlyList<float>
    /// Change of each compressor's surge margin at constant corrected speed, in the order of the points' compressors.
    SurgeMargins: IReadOnlyList<float>
} with

    static member internal Combine(f: float -> float -> float, a: PenaltyEffects, b: PenaltyEffects) : PenaltyEffects =
        let kelvin (x: float<K>) (y: float<K>) = f (float x) (float y) * 1.0<K>

        {
            NetThrust = f a.NetThrust b.NetThrust
            FuelFlow = f a.FuelFlow b.FuelFlow
            Sfc = f a.Sfc b.Sfc
            T41 = kelvin a.T41 b.T41
            T45 = kelvin a.T45 b.T45
            Speeds = Seq.map2 f a.Speeds b.Speeds |> Seq.toArray
            SurgeMargins = Seq.map2 f a.SurgeMargins b.SurgeMargins |> Seq.toArray
        }

    /// These changes less others.
    member effects.Less(other: PenaltyEffects) : PenaltyEffects =
        PenaltyEffects.Combine((-), effects, other)

/// The answer with one thing held: by the exact derivatives at the point without the load, and by solving anew with it.
type PenaltyAnswer = {
    FirstOrder: PenaltyEffects
    Full: PenaltyEffects
    /// Why there is no full answer; empty where there is one.
    Reason: string
} with

    /// Full less first order: what curvature adds.
    member answer.Difference = answer.Full.Less answer.FirstOrder

/// What a load costs.
type Penalty = {
    Name: string
    Items: IReadOnlyList<LoadItem>
    /// With net thrust held.
    AtThrust: PenaltyAnswer
    /// With the limit of the rating held.
    AtLimit: PenaltyAnswer
    /// Other limits of the rating that the full answer at the limit is beyond; empty where there are none.
    Beyond: IReadOnlyList<Limit>
    /// Change of the break temperature, flat thrust as it was: by derivatives.
    BreakFirstOrder: float<K>
    /// The same solved anew; NaN where flat thrust and limits meet at no temperature.
    Break: float<K>
    /// The limit that is reached first at the new break; "" without one.
    BreakLimit: string
}

/// One way of serving a need.
type Service = {
    /// Name of the load, or the unit of a need of one unit.
    Need: string
    /// Port or spool.
    Source: string
    Kind: LoadKind
    /// kg/s or W.
    Amount: float
    /// Relative change of SFC at constant thrust: the ranking goes by this.
    Sfc: float
    /// Relative change of thrust at the limit.
    NetThrust: float
    /// Change of the break temperature.
    Break: float<K>
    /// State of the air at the port at the thrust held, without the load; NaN for power.
    SupplyPressure: float<Pa>
    SupplyTemperature: float<K>
    /// Why this source cannot serve the need; empty where it can.
    Reason: string
}

/// What is taken from an engine, and what that costs.
type PenaltiesResult = {
    Engine: string
    Rating: string
    /// The point whose thrust is held, without the loads.
    AtThrust: OperatingPoint
    /// The point whose limit is held, without the loads.
    AtLimit: OperatingPoint
    /// The limit held.
    Limit: Limit
    /// Whether the rating is flat at the outside temperature asked for: the limit is then held at the break temperature.
    LimitHeldAtBreak: bool
    /// Break temperature without the loads, and the limit reached there.
    BreakTemperature: float<K>
    BreakLimit: Limit
    /// One per cent and one kg/s of every port, one kW of every spool.
    PerUnit: IReadOnlyList<Penalty>
    Loads: IReadOnlyList<Penalty>
    /// All loads at once.
    Together: Penalty
    /// The single loads added up: AtThrust and AtLimit, full answers.
    SumAtThrust: PenaltyEffects
    SumAtLimit: PenaltyEffects
    SumBreak: float<K>
    /// Each need from every source that could serve it, cheapest first.
    Ranking: IReadOnlyList<Service>
} with

    /// Two rows a penalty and thing held: first order and full. Changes of break temperature stand in the rows of the limit.
    member result.Table(provenance: IReadOnlyList<KeyValuePair<string, string>>) : StudyTable =
        let rows = [|
            for group, penalties in
                [
                    "per unit", result.PerUnit
                    "load", result.Loads
                    "all together", [| result.Together |]
                ] do
                for p in penalties do
                    yield group, p, "net thrust", "first order", p.AtThrust.FirstOrder, nan, ""
                    yield group, p, "net thrust", "full", p.AtThrust.Full, nan, p.AtThrust.Reason
                    let limit = QuantityText.Name result.Limit.Quantity
                    yield group, p, limit, "first order", p.AtLimit.FirstOrder, float p.BreakFirstOrder, ""
                    yield group, p, limit, "full", p.AtLimit.Full, float p.Break, p.AtLimit.Reason
        |]

        let text name value =
            TableColumn.OfText(name, rows |> Array.map value)

        let number name unit (value: PenaltyEffects -> float) =
            TableColumn.Of(name, unit, rows |> Array.map (fun (_, _, _, _, effects, _, _) -> value effects))

        let entry name (value: float) =
            KeyValuePair(name, value.ToString("R", CultureInfo.InvariantCulture))

        StudyTable.Of(
            $"Bleed and power penalties of {result.Engine}, rating {result.Rating}",
            [|
                yield! provenance
                entry "net_thrust_held_N" result.AtThrust.NetThrust
                entry "limit_held" result.Limit.Value
                entry "break_temperature_K" (float result.BreakTemperature)
            |],
            [|
                text "group" (fun (group, _, _, _, _, _, _) -> group)
                text "name" (fun (_, p, _, _, _, _, _) -> p.Name)
                text "held" (fun (_, _, held, _, _, _, _) -> held)
                text "answer" (fun (_, _, _, answer, _, _, _) -> answer)
                number "net_thrust_change" "" _.NetThrust
                number "fuel_flow_change" "" _.FuelFlow
                number "sfc_change" "" _.Sfc
                number "T41_change_K" "K" (fun e -> float e.T41)
                number "T45_change_K" "K" (fun e -> float e.T45)
                for spool in 0 .. result.AtThrust.Spools.Count - 1 do
                    number $"N{spool + 1}_change" "" (fun e -> e.Speeds[spool])
                for index in 0 .. result.AtThrust.Compressors.Count - 1 do
                    number $"surge_margin_{result.AtThrust.Compressors[index].Name}_change" "" (fun e ->
                        e.SurgeMargins[index])
                TableColumn.Of(
                    "break_change_K",
                    "K",
                    rows |> Array.map (fun (_, _, _, _, _, breakChange, _) -> breakChange)
                )
                text "reason" (fun (_, _, _, _, _, _, reason) -> reason)
            |]
        )

/// A solved point from which penalties are counted: what is held there, and the derivatives.
type private Reference = {
    Flight: FlightCondition
    Held: Limit
    Point: OperatingPoint
    Influence: Influence
}

/// What bleed air and shaft power cost: at constant thrust, and at the limit of a rating.
[<AbstractClass; Sealed>]
type Penalties private () =

    static member private Reference
        (model: EngineModel, flight: FlightCondition, held: Limit, inputsAt: FlightCondition -> float[])
        =
        let point = model.At(&flight, held.Quantity, held.Value, inputsAt flight)

        {
            Flight = flight
            Held = held
            Point = point
            Influence = model.InfluenceOfLastPoint()
        }

    static member private FirstOrder(reference: Reference, moves: (int * float)[]) : PenaltyEffects =
        let influence = reference.Influence
        let point = reference.Point

        let change output =
            let row = Seq.findIndex ((=) output) influence.Outputs
            moves |> Array.sumBy (fun (input, amount) -> influence[row, input] * amount)

        {
            NetThrust = change "net_thrust_N" / point.NetThrust
            FuelFlow = change "fuel_flow_kg_per_s" / point.FuelFlow
            Sfc = change "sfc_kg_per_N_s" / point.Sfc
            T41 = change "T41_K" * 1.0<K>
            T45 = change "T45_K" * 1.0<K>
            Speeds = [| for k in 1 .. point.Spools.Count -> change $"N{k}_relative_speed" |]
            SurgeMargins = [| for c in point.Compressors -> change $"surge_margin_{c.Name}" |]
        }

    static member private Between(before: OperatingPoint, after: OperatingPoint) : PenaltyEffects = {
        NetThrust = after.NetThrust / before.NetThrust - 1.0
        FuelFlow = after.FuelFlow / before.FuelFlow - 1.0
        Sfc = after.Sfc / before.Sfc - 1.0
        T41 = (after.T41 - before.T41) * 1.0<K>
        T45 = (after.T45 - before.T45) * 1.0<K>
        Speeds =
            Seq.map2
                (fun (a: SpoolReport) (b: SpoolReport) -> b.RelativeSpeed - a.RelativeSpeed)
                before.Spools
                after.Spools
            |> Seq.toArray
        SurgeMargins =
            Seq.map2
                (fun (a: CompressorReport) (b: CompressorReport) ->
                    b.SurgeMarginConstantSpeed - a.SurgeMarginConstantSpeed)
                before.Compressors
                after.Compressors
            |> Seq.toArray
    }

    static member private NoEffects(point: OperatingPoint) : PenaltyEffects = {
        NetThrust = nan
        FuelFlow = nan
        Sfc = nan
        T41 = nan * 1.0<K>
        T45 = nan * 1.0<K>
        Speeds = Array.create point.Spools.Count nan
        SurgeMargins = Array.create point.Compressors.Count nan
    }

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
            [<Optional; DefaultParameterValue(null: Action<float[]> | null)>] taken: Action<float[]> | null
        ) : PenaltiesResult =
        let engine = model.Engine

        let loads =
            match loads with
            | null -> [||]
            | given -> Seq.toArray given

        Loads.checkNames loads
        let rating = model.Rating ratingName

        let inputsAt (flight: FlightCondition) =
            let inputs = model.Inputs(&flight)

            match taken with
            | null -> ()
            | act -> act.Invoke inputs

            inputs

        let flat = rating.FlatThrust(flight.PressureAltitude, flight.Mach)

        // The break with some loads: its temperature and limit, or why there is none.
        let breakWith moves =
            let inputs = inputsAt flight
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
                        $"rating '{ratingName}': flat thrust and limits meet at no outside temperature: {reason}"
                )

        let atBreak =
            let corner =
                FlightCondition.AtTemperature(
                    flight.PressureAltitude,
                    flight.Mach,
                    breakTemperature,
                    flight.WaterAirRatio
                )

            Penalties.Reference(model, corner, breakLimit, inputsAt)

        let rated = model.AtRating(&flight, rating, inputsAt flight)
        let isFlat = rated.Setting.Quantity = Quantity.NetThrust

        let atLimit =
            if isFlat then
                atBreak
            else
                Penalties.Reference(model, flight, rated.Setting, inputsAt)

        let atThrust =
            let held = if thrust = 0.0<N> then rated.NetThrust else float thrust

            Penalties.Reference(model, flight, Limit(Quantity.NetThrust, held), inputsAt)

        let solve (reference: Reference) moves =
            let inputs = inputsAt reference.Flight
            Loads.add moves inputs
            let flight = reference.Flight

            try
                Ok(model.At(&flight, reference.Held.Quantity, reference.Held.Value, inputs))
            with :? NoSolutionException as none ->
                Error none.Message

        let answer reference moves solved = {
            FirstOrder = Penalties.FirstOrder(reference, moves)
            Full =
                match solved with
                | Ok point -> Penalties.Between(reference.Point, point)
                | Error _ -> Penalties.NoEffects reference.Point
            Reason =
                match solved with
                | Ok _ -> ""
                | Error reason -> reason
        }

        let breakFirstOrder moves =
            let row = Seq.findIndex ((=) "net_thrust_N") atBreak.Influence.Outputs

            let taken =
                moves |> Array.sumBy (fun (i, amount) -> atBreak.Influence[row, i] * amount)

            -taken / atBreak.Influence[row, InputLayout.Temperature] * 1.0<K>

        let penalty name (items: IReadOnlyList<LoadItem>) moves =
            let limited = solve atLimit moves

            let beyond =
                match limited with
                | Ok point ->
                    LimitMargin.Of(point, rating)
                    |> Seq.filter (fun m -> m.Limit <> atLimit.Held && m.Left < -1e-9 * m.Limit.Value)
                    |> Seq.map _.Limit
                    |> Seq.toArray
                | Error _ -> [||]

            let newBreak, newLimit =
                match breakWith moves with
                | Ok(temperature, limit) -> temperature - breakTemperature, QuantityText.Name limit.Quantity
                | Error _ -> nan, ""

            {
                Name = name
                Items = items
                AtThrust = answer atThrust moves (solve atThrust moves)
                AtLimit = answer atLimit moves limited
                Beyond = beyond
                BreakFirstOrder = breakFirstOrder moves
                Break = newBreak * 1.0<K>
                BreakLimit = newLimit
            }

        let ofLoad (load: NamedLoad) =
            penalty load.Name load.Items (Loads.moves engine load)

        let unit name item =
            ofLoad { Name = name; Items = [| item |] }

        let perUnit = [|
            for port in Loads.ports engine do
                unit $"{port} 1 %%" (LoadItem.AirShare(port, 0.01))
                unit $"{port} 1 kg/s" (LoadItem.Air(port, 1.0<kg / s>))
            for spool in Loads.spools engine do
                unit $"{spool} 1 kW" (LoadItem.Shaft(spool, 1000.0<W>))
        |]

        // The air of a load, kg/s, at the thrust held: what its shares come to there, opening of the valves included.
        let airOf (load: NamedLoad) =
            let moves = Loads.moves engine load
            let inputs = inputsAt flight
            Loads.add moves inputs

            let flow (point: OperatingPoint) (item: LoadItem) =
                let port = Array.IndexOf(Loads.ports engine, item.Source)

                match item.Kind with
                | LoadKind.Flow -> item.Amount
                | LoadKind.Share ->
                    let byShares = point.Air[port].MassFlow - inputs[engine.Layout.PortFlow port]
                    byShares * item.Amount / inputs[engine.Layout.PortFraction port]
                | _ -> 0.0

            match solve atThrust moves with
            | Ok point -> load.Items |> Seq.sumBy (flow point)
            | Error _ -> nan

        let single = loads |> Array.map ofLoad

        let together =
            penalty
                "all together"
                (loads |> Array.collect (fun l -> Seq.toArray l.Items))
                (loads |> Array.collect (Loads.moves engine))

        let sum pick =
            single
            |> Array.map pick
            |> Array.fold
                (fun total effects -> PenaltyEffects.Combine((+), total, effects))
                (Penalties.Between(atThrust.Point, atThrust.Point))

        {
            Engine = engine.Definition.Name
            Rating = rating.Definition.Name
            AtThrust = atThrust.Point
            AtLimit = atLimit.Point
            Limit = atLimit.Held
            LimitHeldAtBreak = isFlat
            BreakTemperature = breakTemperature * 1.0<K>
            BreakLimit = breakLimit
            PerUnit = perUnit
            Loads = single
            Together = together
            SumAtThrust = sum _.AtThrust.Full
            SumAtLimit = sum _.AtLimit.Full
            SumBreak = single |> Array.sumBy _.Break
            Ranking = Penalties.Rank(engine, atThrust, perUnit, loads, ofLoad, airOf)
        }

    /// Each need from every source that could serve it. Air that an aircraft uses goes overboard, and from ports that stand
    /// open: what a schedule shuts cannot be counted on.
    static member private Rank
        (
            engine: SizedEngine,
            reference: Reference,
            perUnit: Penalty[],
            loads: NamedLoad[],
            ofLoad: NamedLoad -> Penalty,
            airOf: NamedLoad -> float
        ) : IReadOnlyList<Service> =
        let ports =
            engine.Ports
            |> Array.filter (fun p -> p.Port.To = AirDestination.Overboard && not p.Port.Scheduled)
            |> Array.map _.Port.Name

        let supply (item: LoadItem) =
            if item.Kind = LoadKind.Power then
                nan, nan
            else
                let stream = reference.Point.Air |> Seq.find (fun a -> a.Name = item.Source)
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
                Reason = reason penalty
            }

        let cheapestFirst (services: Service[]) =
            services
            |> Array.sortBy (fun s -> if Double.IsNaN s.Sfc then infinity else s.Sfc)

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
                let penalty = ofLoad { Name = need; Items = [| item |] }
                service need item penalty _.AtThrust.Full.Sfc _.AtLimit.Full.NetThrust _.Break _.AtThrust.Reason
        |]

        [|
            yield! units LoadKind.Flow "1 kg/s" |> cheapestFirst
            yield! units LoadKind.Power "1 kW" |> cheapestFirst

            for load in loads do
                let flow = airOf load

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
                        Loads.spools engine
                        |> Array.map (fun spool -> LoadItem.Shaft(spool, power * 1.0<W>))
                        |> solved load.Name
                        |> cheapestFirst
        |]

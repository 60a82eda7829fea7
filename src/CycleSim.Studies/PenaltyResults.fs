namespace CycleSim.Studies

open System.Collections.Generic
open System.Globalization
open CycleSim.Engine
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

    static member internal Between(before: OperatingPoint, after: OperatingPoint) : PenaltyEffects = {
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

    static member internal None(point: OperatingPoint) : PenaltyEffects = {
        NetThrust = nan
        FuelFlow = nan
        Sfc = nan
        T41 = nan * 1.0<K>
        T45 = nan * 1.0<K>
        Speeds = Array.create point.Spools.Count nan
        SurgeMargins = Array.create point.Compressors.Count nan
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
    /// Each need from every source, cheapest first and those that cannot serve it last.
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


        StudyTable.Of(
            $"Bleed and power penalties of {result.Engine}, rating {result.Rating}",
            [|
                yield! provenance
                StudyTable.Entry("net_thrust_held_N", result.AtThrust.NetThrust)
                StudyTable.Entry("limit_held", result.Limit.Value)
                StudyTable.Entry("break_temperature_K", float result.BreakTemperature)
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

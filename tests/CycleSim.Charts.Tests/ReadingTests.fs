/// What a reader takes from the charts: lines inside the axes, words of a size that can be read, reasons, cautions.
module CycleSim.Charts.Tests.ReadingTests

open System
open System.Text.Json
open Expecto
open FSharp.Data.UnitSystems.SI.UnitSymbols
open Plotly.NET
open CycleSim.Air
open CycleSim.Charts
open CycleSim.Definitions
open CycleSim.Engine
open CycleSim.Reports
open CycleSim.Studies

let private model = lazy EngineModel((EngineLibrary.Load "velda-27").Engine)

let private figure (chart: GenericChart) =
    JsonDocument.Parse(GenericChart.toFigureJson chart).RootElement

let private traces (chart: GenericChart) =
    (figure chart).GetProperty("data").EnumerateArray() |> Seq.toArray

let private text (e: JsonElement) =
    match e.GetString() with
    | null -> ""
    | given -> given

let private nameOf (trace: JsonElement) =
    match trace.TryGetProperty "name" with
    | true, name -> text name
    | _ -> ""

let private named name chart =
    traces chart |> Array.find (fun t -> nameOf t = name)

let private numbers (field: string) (trace: JsonElement) =
    trace.GetProperty(field).EnumerateArray()
    |> Seq.map (fun e ->
        if e.ValueKind = JsonValueKind.Number then
            e.GetDouble()
        else
            nan)
    |> Seq.toArray

let private texts (field: string) (trace: JsonElement) =
    trace.GetProperty(field).EnumerateArray() |> Seq.map text |> Seq.toArray

let private annotations chart =
    (figure chart).GetProperty("layout").GetProperty("annotations").EnumerateArray()
    |> Seq.map (fun a -> text (a.GetProperty "text"))
    |> Seq.toArray

let private range (axis: string) chart =
    let ends =
        (figure chart).GetProperty("layout").GetProperty(axis).GetProperty("range").EnumerateArray()
        |> Seq.map _.GetDouble()
        |> Seq.toArray

    ends[0], ends[1]

let private rated altitude mach offset =
    let flight = FlightCondition.AtIsaOffset(altitude, mach, offset)
    model.Value.AtRating(&flight, model.Value.Rating "max-climb")

let private altitudes = [| 3000.0; 6000.0; 9000.0 |]
let private machs = [| 0.4; 0.8 |]

/// Flat at the left, held by a limit at the right, and one place without a point.
let private grid =
    lazy
        (Array2D.init 3 2 (fun i j ->
            if i = 2 && j = 1 then
                Unchecked.defaultof<OperatingPoint>
            else
                rated altitudes[i] machs[j] (if j = 0 then 0.0 else 20.0)))

let private reasons =
    Array2D.init 3 2 (fun i j -> if i = 2 && j = 1 then "the fan would surge" else "")

let private loops =
    lazy
        [|
            for altitude, mach in [ 0.0, 0.0; 10668.0, 0.8 ] do
                Throttle.Loop(model.Value, FlightCondition.AtIsaOffset(altitude, mach, 0.0), "max-climb", 0.2, 9)
        |]

let private table =
    lazy
        (PowerTables.Run(
            model.Value,
            [| "take-off" |],
            [| 0.0<m>; 2000.0<m> |],
            TemperatureAxis.Outside [| 280.0<K>; 310.0<K>; 323.15<K> |],
            FlightSpeed.Mach 0.0
        ))
            .Tables[0]

let private survey = lazy SurgeSurvey.Run(model.Value, "take-off")

let private penalties =
    lazy
        (Penalties.Run(
            model.Value,
            FlightCondition.AtIsaOffset(10668.0, 0.8, 0.0),
            "max-climb",
            [|
                {
                    Name = "cabin air"
                    Items = [| LoadItem.Air("customer-bleed", 0.5<kg / s>) |]
                }
                {
                    Name = "generator"
                    Items = [| LoadItem.Shaft("high", 90e3<W>) |]
                }
            |]
        ))

let private charts =
    lazy
        [
            "map", MapCharts.CompressorMap(model.Value.Engine, "fan", [| rated 3000.0 0.4 0.0 |])
            "flat rating", RatingCharts.FlatRating [| FlatRating.Run(model.Value, "take-off", 0.0<m>, 0.0) |]
            "N1", RatingCharts.PowerSettingN1 table.Value
            "EPR", RatingCharts.PowerSettingEpr table.Value
            "loops", EnvelopeCharts.ThrottleLoops loops.Value
            "carpet", EnvelopeCharts.Carpet("thrust", EnvelopeQuantity.NetThrust, altitudes, machs, grid.Value)
            "envelope", EnvelopeCharts.Map("margin", EnvelopeQuantity.SurgeMargin, altitudes, machs, grid.Value)
            "governing", EnvelopeCharts.Governing("power", altitudes, machs, grid.Value)
            "penalties", LossCharts.Penalties penalties.Value
            "budget", LossCharts.SurgeBudget survey.Value
        ]

/// Every "size" inside something whose name ends in "font".
let rec private fontSizes (inFont: bool) (e: JsonElement) : float list =
    match e.ValueKind with
    | JsonValueKind.Object -> [
        for p in e.EnumerateObject() do
            if inFont && p.Name = "size" && p.Value.ValueKind = JsonValueKind.Number then
                p.Value.GetDouble()
            else
                yield! fontSizes (p.Name.EndsWith "font") p.Value
      ]
    | JsonValueKind.Array -> [
        for item in e.EnumerateArray() do
            yield! fontSizes false item
      ]
    | _ -> []

[<Tests>]
let tests =
    testSequenced
    <| testList "reading" [
        testCase "every throttle loop lies within the axes, its bottom where the study found it" (fun () ->
            let chart = EnvelopeCharts.ThrottleLoops loops.Value
            let low, high = range "yaxis" chart
            let left, right = range "xaxis" chart

            let stars =
                traces chart |> Array.filter (fun t -> (nameOf t).EndsWith ", least SFC")

            Expect.equal stars.Length loops.Value.Length "a star a loop"

            for loop, star in Array.zip loops.Value stars do
                let x, y = (numbers "x" star)[0], (numbers "y" star)[0]
                Expect.floatClose Accuracy.high y (loop.Least.Point.Sfc * 1e6) "g/(kN s)"
                Expect.floatClose Accuracy.high x (loop.Least.Point.NetThrust / 1000.0) "kN"
                Expect.isTrue (y > low && y < high && x > left && x < right) $"{nameOf star} within the axes"
                let top = Seq.last loop.Rows

                match top.Point with
                | null -> failtest "no point at the rating"
                | point ->
                    Expect.isTrue (point.Sfc * 1e6 < high && point.NetThrust / 1000.0 < right) "the rating is shown")

        testCase "what governs is told apart, place by place" (fun () ->
            let chart =
                EnvelopeCharts.Governing("power", altitudes, machs, grid.Value, ChartUnits.SI, [||], reasons)

            let places name =
                let t = named name chart
                Array.zip (numbers "y" t) (numbers "x" t) |> Set.ofArray

            let expected wanted =
                set [
                    for i in 0..2 do
                        for j in 0..1 do
                            let kind =
                                match box grid.Value[i, j] with
                                | null -> "no point"
                                | _ when grid.Value[i, j].Setting.Quantity = Quantity.NetThrust -> "flat thrust"
                                | _ -> "T41 governs"

                            if kind = wanted then
                                altitudes[i], machs[j]
                ]

            for name in [ "flat thrust"; "T41 governs"; "no point" ] do
                Expect.isNonEmpty (expected name) $"the case has places of {name}"
                Expect.equal (places name) (expected name) name
                let shown = named name chart
                Expect.isTrue (shown.GetProperty("showlegend").GetBoolean()) "in the legend even where alone")

        testCase "a place without a point says why, in its note and below" (fun () ->
            let chart =
                EnvelopeCharts.Map(
                    "thrust",
                    EnvelopeQuantity.NetThrust,
                    altitudes,
                    machs,
                    grid.Value,
                    ChartUnits.SI,
                    [||],
                    reasons
                )

            let first = Array.head (traces chart)
            let notes = first.GetProperty("text").EnumerateArray() |> Seq.toArray
            let note = Seq.item 1 (notes[2].EnumerateArray())
            Expect.stringContains (text note) "the fan would surge" "in the note"
            let below = annotations chart |> String.concat " "
            Expect.stringContains below "Places left out: 1 (the fan would surge)" "below"

            let cells =
                RatingCharts.PowerSettingN1 table.Value |> annotations |> String.concat " "

            let without =
                table.Value.Cells |> Seq.filter (fun c -> isNull c.Point) |> Seq.toArray

            Expect.isGreaterThan without.Length 0 "the table has cells without a point"
            Expect.stringContains cells $"Cells left out: {without.Length} ({without[0].Reason})" "cells")

        testCase "notes give what governs and the room on the other limits" (fun () ->
            let limits = [|
                Limit(Quantity.T41, 1700.0)
                Limit(Quantity.T45, 1200.0)
                Limit(Quantity.N2, 1.1)
            |]

            let point = rated 3000.0 0.8 20.0
            let room = ChartUnits.SI.RoomText(limits, point)
            Expect.equal point.Setting.Quantity Quantity.T41 "held by T41"

            let kelvin = 1200.0 - point.T45
            let side = if kelvin < 0.0 then "beyond" else "left on"
            Expect.stringContains room $"{abs kelvin:F0} K {side} T45" "room on T45"
            Expect.stringContains room $"{110.0 - 100.0 * point.Spools[1].RelativeSpeed:F1} points left on N2" "N2"
            Expect.isFalse (room.Contains "T41") "not on the limit that governs"

            let chart =
                EnvelopeCharts.Map("t", EnvelopeQuantity.T45, altitudes, machs, grid.Value, ChartUnits.SI, limits)

            let first = Array.head (traces chart)
            let notes = first.GetProperty("text").EnumerateArray() |> Seq.toArray
            let note = text (Seq.item 1 (notes[0].EnumerateArray()))
            Expect.stringContains note "3 000 m, Mach 0.80:" "where"
            Expect.stringContains note "governs" "what governs"
            Expect.stringContains note room "room")

        testCase "surge margins reach from the working points to the surge line that is drawn" (fun () ->
            let points = [| for mach in [ 0.2; 0.5; 0.8 ] -> rated 6000.0 mach 0.0 |]
            let chart = MapCharts.CompressorMap(model.Value.Engine, "hpc", points)

            let surge, margins =
                named "surge line" chart, named "surge margin at constant flow" chart

            let xs, ys = numbers "x" surge, numbers "y" surge
            let at, ratio = numbers "x" margins, numbers "y" margins

            for k, point in Array.indexed points do
                let hpc = point.Compressors[2]
                Expect.floatClose Accuracy.high ratio[3 * k] hpc.PressureRatio "starts at the working point"
                let i = Array.FindIndex(xs, (fun x -> x > at[3 * k]))
                let share = (at[3 * k] - xs[i - 1]) / (xs[i] - xs[i - 1])
                let line = ys[i - 1] + share * (ys[i] - ys[i - 1])
                // The line is drawn straight between its points.
                Expect.floatClose { absolute = 0.0; relative = 2e-3 } ratio[3 * k + 1] line "ends on the surge line")

        testCase "a carpet's crossings are the points" (fun () ->
            let chart =
                EnvelopeCharts.Carpet("thrust", EnvelopeQuantity.NetThrust, altitudes, machs, grid.Value)

            let drawn = traces chart |> Array.map (numbers "y")

            let thrust i j =
                if isNull (box grid.Value[i, j]) then
                    nan
                else
                    grid.Value[i, j].NetThrust / 1000.0

            let heights = [| for i in 0..2 -> [| for j in 0..1 -> thrust i j |] |]
            let speeds = [| for j in 0..1 -> [| for i in 0..2 -> thrust i j |] |]

            for a, e in Array.zip (Array.concat drawn) (Array.concat (Array.append heights speeds)) do
                if Double.IsFinite e then
                    Expect.floatClose Accuracy.high a e "kN"
                else
                    Expect.isFalse (Double.IsFinite a) "left out"

            let words = annotations chart

            for word in [ "3 000 m"; "9 000 m"; "M 0.40"; "M 0.80" ] do
                Expect.contains words word "both families are named")

        testCase "penalties and budgets are the study's" (fun () ->
            let chart = LossCharts.Penalties penalties.Value
            let sfc = numbers "x" (named "SFC at constant thrust" chart)

            let all = [| yield! penalties.Value.Loads; penalties.Value.Together |]
            let expected = all |> Array.map (fun l -> 100.0 * l.AtThrust.Full.Sfc)
            Expect.equal sfc.Length expected.Length "two loads, and both together"

            for a, e in Seq.zip sfc expected do
                Expect.floatClose Accuracy.high a e "per cent"

            let alone = LossCharts.Penalties(penalties.Value, false)
            Expect.equal (numbers "x" (named "SFC at constant thrust" alone)).Length 2 "loads alone"

            // The bars of a compressor add up to what it needs.
            let budget = LossCharts.SurgeBudget survey.Value

            let bars =
                traces budget |> Array.filter (fun t -> text (t.GetProperty "type") = "bar")

            for k, b in Seq.indexed survey.Value.Budgets do
                let total = bars |> Seq.sumBy (fun t -> (numbers "x" t)[k])
                Expect.floatClose Accuracy.high total (100.0 * b.Required) b.Compressor)

        testCase "words can be read: 12 pixels at least" (fun () ->
            for name, chart in charts.Value do
                let sizes = fontSizes false (figure chart)
                Expect.isNonEmpty sizes name
                Expect.isGreaterThanOrEqual (List.min sizes) 12.0 name)

        testCase "charts of thrust, limits and margins carry the caution" (fun () ->
            for name, chart in charts.Value do
                Expect.exists
                    (annotations chart)
                    _.Contains("Engineering study; not for dispatch, flight or maintenance.")
                    name)

        testCase "no output of that name is said with those there are" (fun () ->
            rated 3000.0 0.4 0.0 |> ignore
            let influence = model.Value.InfluenceOfLastPoint()

            Expect.throwsT<ArgumentException>
                (fun () ->
                    LossCharts.Tornado(
                        "x",
                        influence,
                        "sfc",
                        [|
                            {
                                Name = "efficiency_factor_hpt"
                                Amount = 0.01
                            }
                        |]
                    )
                    |> ignore)
                "no such output")
    ]

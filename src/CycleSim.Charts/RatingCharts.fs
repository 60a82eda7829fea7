namespace CycleSim.Charts

open System
open System.Collections.Generic
open System.Runtime.InteropServices
open CycleSim.Reports
open CycleSim.Studies
open Plotly.NET

/// Ratings: thrust and power setting against outside temperature.
[<AbstractClass; Sealed>]
type RatingCharts private () =

    static let chosen (units: ChartUnits | null) =
        match units with
        | null -> ChartUnits.SI
        | given -> given

    static let markers (governing: string[]) (names: string[]) colour =
        let at (g: string) = max 0 (Array.IndexOf(names, g))

        box (
            ChartStyle.make [
                "size", box 8
                "color", box colour
                "symbol", box (governing |> Array.map (at >> ChartStyle.symbol))
            ]
        )

    // What each marker stands for, as traces without points.
    static let key (names: string[]) =
        names
        |> Array.mapi (fun k name ->
            ChartStyle.entry
                (if name = "flat" then "flat thrust" else $"{name} governs")
                (ChartStyle.symbol k)
                ChartStyle.ink)

    static let governingOf (rows: seq<string>) =
        rows
        |> Seq.filter (fun g -> g <> "")
        |> Seq.distinct
        |> Seq.sortBy (fun g -> g <> "flat", g)
        |> Seq.toArray

    /// <summary>
    /// Thrust of a rating against outside temperature, a line for each result (altitude and Mach number), the break marked and
    /// each point's marker saying what holds the thrust.
    /// </summary>
    /// <param name="results">flat ratings of one rating of one engine, at least one</param>
    /// <param name="units">units shown; SI where null</param>
    /// <exception cref="T:System.ArgumentException">No result.</exception>
    static member FlatRating
        (
            results: IReadOnlyList<FlatRatingResult>,
            [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null
        ) : GenericChart =
        if results.Count = 0 then
            invalidArg (nameof results) "a chart of no flat rating"

        let units = chosen units
        let names = results |> Seq.collect _.Rows |> Seq.map _.Governing |> governingOf

        let line index (result: FlatRatingResult) = [
            let solved =
                result.Rows
                |> Seq.choose (fun row ->
                    match row.Point with
                    | null -> None
                    | point -> Some(row, point))
                |> Seq.toArray

            let where =
                $"{units.AltitudeText(float result.PressureAltitude)}, Mach {result.Mach:F2}"

            // The break stands on the line, so that the flat part ends where it does.
            let at = float result.BreakTemperature

            let places = [|
                for row, point in solved do
                    float row.OutsideTemperature,
                    point.NetThrust,
                    row.Governing,
                    $"{where}, {units.TemperatureText(float row.OutsideTemperature)}:<br>{units.ThrustText point.NetThrust}, {100.0 * point.NetThrust / float result.FlatThrust:F1} %% of flat, "
                    + (if row.Governing = "flat" then
                           "flat"
                       else
                           $"{units.LimitText point.Setting} governs")
                    + (match units.RoomText(result.Limits, point) with
                       | "" -> ""
                       | room -> ", " + room)
                    + $"<br>N1 {100.0 * point.Spools[0].RelativeSpeed:F1} %%, EPR {point.EnginePressureRatio:F3}, T41 {units.TemperatureText point.T41}, EGT (T45) {units.TemperatureText point.T45}"
            |]

            let temperatures = places |> Array.map (fun (t, _, _, _) -> t)

            if solved.Length > 0 then
                let withBreak =
                    if at > Array.min temperatures && at < Array.max temperatures then
                        places
                        |> Array.append [|
                            at,
                            float result.FlatThrust,
                            "",
                            $"{where}: flat up to {units.TemperatureText at}, ISA {ChartUnits.Text(float result.BreakIsaOffset, 1)} K"
                        |]
                        |> Array.sortBy (fun (t, _, _, _) -> t)
                    else
                        places

                ChartStyle.series
                    where
                    (withBreak |> Array.map (fun (t, _, _, _) -> units.Temperature t))
                    (withBreak |> Array.map (fun (_, f, _, _) -> units.Thrust f))
                    (withBreak |> Array.map (fun (_, _, _, n) -> n))
                    index
                    [ "mode", box "lines" ]

                ChartStyle.trace "scatter" [
                    "name", box where
                    "showlegend", box false
                    "mode", box "markers"
                    "x", ChartStyle.numbers (places |> Array.map (fun (t, _, _, _) -> units.Temperature t))
                    "y", ChartStyle.numbers (places |> Array.map (fun (_, f, _, _) -> units.Thrust f))
                    "text", box (places |> Array.map (fun (_, _, _, n) -> n))
                    "hovertemplate", box "%{text}<extra></extra>"
                    "marker", markers (places |> Array.map (fun (_, _, g, _) -> g)) names (ChartStyle.colour index)
                ]
        ]

        let breaks =
            results
            |> Seq.map (fun result ->
                ChartStyle.label
                    (box (units.Temperature(float result.BreakTemperature)))
                    (box (units.Thrust(float result.FlatThrust)))
                    $"{units.TemperatureText(float result.BreakTemperature)}"
                    [
                        "xanchor", box "left"
                        "yanchor", box "bottom"
                        "xshift", box 6
                        "yshift", box 5
                        yield! ChartStyle.plate
                    ])

        let corners =
            ChartStyle.trace "scatter" [
                "name", box "break"
                "mode", box "markers"
                "x",
                results
                |> Seq.map (fun r -> units.Temperature(float r.BreakTemperature))
                |> ChartStyle.numbers
                "y",
                results
                |> Seq.map (fun r -> units.Thrust(float r.FlatThrust))
                |> ChartStyle.numbers
                "hoverinfo", box "skip"
                "marker",
                box (
                    ChartStyle.make [
                        "size", box 15
                        "symbol", box "circle-open"
                        "color", box ChartStyle.ink
                        "line", box (ChartStyle.make [ "width", box 1.5 ])
                    ]
                )
            ]

        let missing =
            results
            |> Seq.collect _.Rows
            |> Seq.filter (fun row -> isNull row.Point)
            |> Seq.map _.Reason
            |> ChartStyle.missing "Temperatures"

        ChartStyle.chart
            $"{results[0].Engine}, rating {results[0].Rating}: net thrust against outside temperature"
            [| yield! results |> Seq.mapi line |> Seq.concat; corners; yield! key names |]
            (ChartStyle.axis $"Outside air temperature, {units.TemperatureUnit}" [])
            (ChartStyle.axis $"Net thrust, {units.ThrustUnit}" []) [
                yield! breaks
                ChartStyle.cautioned $"The temperature at each corner is the break. {missing}"
            ] []

    static member private Setting
        (
            table: PowerTable,
            name: string,
            what: string,
            value: OperatingPoint -> float,
            text: float -> string,
            units: ChartUnits
        ) : GenericChart =
        let missing =
            table.Cells
            |> Seq.filter (fun c -> isNull c.Point)
            |> Seq.map _.Reason
            |> ChartStyle.missing "Cells"

        let names = table.Rows |> Seq.concat |> Seq.map _.Governing |> governingOf

        let column k = [
            let cells =
                table.Rows
                |> Seq.map (fun row -> row[k])
                |> Seq.choose (fun cell ->
                    match cell.Point with
                    | null -> None
                    | point -> Some(cell, point))
                |> Seq.toArray

            if cells.Length > 0 then
                let where = units.AltitudeText(float table.Altitudes[k])

                ChartStyle.series
                    where
                    (cells |> Array.map (fun (c, _) -> units.Temperature(float c.OutsideTemperature)))
                    (cells |> Array.map (fun (_, p) -> value p))
                    (cells
                     |> Array.map (fun (c, p) ->
                         $"{where}, {units.TemperatureText(float c.OutsideTemperature)}: {name} {text (value p)}, {units.ThrustText p.NetThrust}<br>"
                         + (if c.Governing = "flat" then
                                "flat thrust"
                            else
                                $"{units.LimitText p.Setting} governs")
                         + (match units.RoomText(table.Limits, p) with
                            | "" -> ""
                            | room -> ", " + room)))
                    k
                    [
                        "mode", box "lines+markers"
                        "marker", markers (cells |> Array.map (fun (c, _) -> c.Governing)) names (ChartStyle.colour k)
                    ]
        ]

        ChartStyle.chart
            $"Rating {table.Rating}: {name} to set against outside temperature"
            [|
                for k in 0 .. table.Altitudes.Count - 1 do
                    yield! column k
                yield! key names
            |]
            (ChartStyle.axis $"Outside air temperature, {units.TemperatureUnit}" [])
            (ChartStyle.axis what []) [
                ChartStyle.cautioned $"Lines join the cells of the table; the break lies between two of them. {missing}"
            ] []

    /// N1 (per cent of design) of a rating against outside temperature, a line for each pressure altitude.
    static member PowerSettingN1
        (table: PowerTable, [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null)
        : GenericChart =
        RatingCharts.Setting(
            table,
            "N1",
            "N1, % of design",
            (fun p -> 100.0 * p.Spools[0].RelativeSpeed),
            (fun v -> ChartUnits.Text(v, 1) + " %"),
            chosen units
        )

    /// EPR (P5/P2) of a rating against outside temperature, a line for each pressure altitude.
    static member PowerSettingEpr
        (table: PowerTable, [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null)
        : GenericChart =
        RatingCharts.Setting(
            table,
            "EPR",
            "EPR (P5/P2)",
            (fun p -> p.EnginePressureRatio),
            (fun v -> ChartUnits.Text(v, 3)),
            chosen units
        )

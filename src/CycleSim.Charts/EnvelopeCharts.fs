namespace CycleSim.Charts

open System
open System.Collections.Generic
open System.Runtime.InteropServices
open CycleSim.Reports
open Plotly.NET

/// A line of operating points with its name: a throttle line at one condition.
type NamedPoints = {
    Name: string
    Points: IReadOnlyList<OperatingPoint>
}

/// What is drawn over altitude and Mach number.
type EnvelopeQuantity =
    | NetThrust = 0
    | Sfc = 1
    | FuelFlow = 2
    /// Smallest surge margin of all compressors, per cent at constant flow.
    | SurgeMargin = 3
    | T41 = 4
    | T45 = 5

/// SFC loops, carpets and maps over altitude and Mach number.
[<AbstractClass; Sealed>]
type EnvelopeCharts private () =

    static let chosen (units: ChartUnits | null) =
        match units with
        | null -> ChartUnits.SI
        | given -> given

    static let name (units: ChartUnits) quantity =
        match quantity with
        | EnvelopeQuantity.NetThrust -> $"Net thrust, {units.ThrustUnit}"
        | EnvelopeQuantity.Sfc -> $"SFC, {units.SfcUnit}"
        | EnvelopeQuantity.FuelFlow -> $"Fuel flow, {units.FuelFlowUnit}"
        | EnvelopeQuantity.SurgeMargin -> "Smallest surge margin (constant flow), %"
        | EnvelopeQuantity.T41 -> $"T41, {units.TemperatureUnit}"
        | EnvelopeQuantity.T45 -> $"EGT (T45), {units.TemperatureUnit}"
        | other -> raise (ArgumentException $"a chart does not know {other}")

    static let value (units: ChartUnits) quantity (point: OperatingPoint | null) =
        match point with
        | null -> nan
        | p ->
            match quantity with
            | EnvelopeQuantity.NetThrust -> units.Thrust p.NetThrust
            | EnvelopeQuantity.Sfc -> units.Sfc p.Sfc
            | EnvelopeQuantity.FuelFlow -> units.FuelFlow p.FuelFlow
            | EnvelopeQuantity.SurgeMargin ->
                let margins =
                    p.Compressors
                    |> Seq.map _.SurgeMarginConstantFlow
                    |> Seq.filter Double.IsFinite
                    |> Seq.toArray

                if margins.Length = 0 then
                    nan
                else
                    100.0 * Array.min margins
            | EnvelopeQuantity.T41 -> units.Temperature p.T41
            | _ -> units.Temperature p.T45

    static let noteOf (units: ChartUnits) (altitude: float) (mach: float) (point: OperatingPoint | null) =
        match point with
        | null -> $"{units.AltitudeText altitude}, Mach {mach:F2}: no point"
        | p ->
            let thinnest =
                p.Compressors
                |> Seq.filter (fun c -> Double.IsFinite c.SurgeMarginConstantFlow)
                |> Seq.sortBy _.SurgeMarginConstantFlow
                |> Seq.tryHead

            let margin =
                match thinnest with
                | Some c -> $"<br>{c.Name} is nearest to surge, {100.0 * c.SurgeMarginConstantFlow:F1} %% left"
                | None -> ""

            $"{units.AltitudeText altitude}, Mach {mach:F2}: {units.ThrustText p.NetThrust}, SFC {units.SfcText p.Sfc}<br>{units.LimitText p.Setting} sets it; T41 {units.TemperatureText p.T41}, EGT {units.TemperatureText p.T45}{margin}"

    /// <summary>SFC against net thrust, a loop for each line of points, the least SFC of each marked.</summary>
    /// <param name="lines">each in the order of thrust; at least one point altogether</param>
    /// <exception cref="T:System.ArgumentException">No points.</exception>
    static member SfcLoops
        (
            title: string,
            lines: IReadOnlyList<NamedPoints>,
            [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null
        ) : GenericChart =
        let units = chosen units

        if lines |> Seq.forall (fun l -> l.Points.Count = 0) then
            invalidArg (nameof lines) "a chart of no points"

        let traces = [|
            for index, line in Seq.indexed lines do
                if line.Points.Count > 0 then
                    ChartStyle.series
                        line.Name
                        (line.Points |> Seq.map (fun p -> units.Thrust p.NetThrust))
                        (line.Points |> Seq.map (fun p -> units.Sfc p.Sfc))
                        (line.Points
                         |> Seq.map (fun p -> $"{line.Name}: " + noteOf units p.Flight.PressureAltitude p.Flight.Mach p))
                        index
                        []

                    let least = line.Points |> Seq.minBy _.Sfc

                    ChartStyle.trace "scatter" [
                        "name", box "least SFC of the points"
                        "legendgroup", box "least"
                        "showlegend", box (index = 0)
                        "mode", box "markers"
                        "x", ChartStyle.numbers [ units.Thrust least.NetThrust ]
                        "y", ChartStyle.numbers [ units.Sfc least.Sfc ]
                        "text",
                        box [|
                            $"{line.Name}: least SFC of the points, {units.SfcText least.Sfc} at {units.ThrustText least.NetThrust}"
                        |]
                        "hovertemplate", box "%{text}<extra></extra>"
                        "marker",
                        box (
                            ChartStyle.make [
                                "size", box 10
                                "symbol", box "star"
                                "color", box (ChartStyle.colour index)
                            ]
                        )
                    ]
        |]

        // Towards no thrust SFC grows without bound; the bucket is what is looked at.
        let least = lines |> Seq.collect _.Points |> Seq.map _.Sfc |> Seq.min |> units.Sfc

        ChartStyle.chart
            title
            traces
            (ChartStyle.axis $"Net thrust, {units.ThrustUnit}" [])
            (ChartStyle.axis $"SFC, {units.SfcUnit}" [ "range", box [| 0.97 * least; 1.6 * least |] ]) [
                ChartStyle.note "Shown up to 1.6 times the least SFC; stars mark the least of the points drawn."
            ] []

    static member private Check
        (altitudes: IReadOnlyList<float>, machs: IReadOnlyList<float>, points: OperatingPoint[,])
        =
        if
            altitudes.Count <> Array2D.length1 points
            || machs.Count <> Array2D.length2 points
        then
            raise (
                ArgumentException
                    $"{altitudes.Count} altitudes and {machs.Count} Mach numbers for {Array2D.length1 points} x {Array2D.length2 points} points"
            )

        if points |> Seq.cast<OperatingPoint | null> |> Seq.forall isNull then
            raise (ArgumentException "a chart of no points")

    /// <summary>
    /// A quantity over altitude and Mach number as a carpet: lines of equal altitude and of equal Mach number, each family named
    /// at its ends; the scale across has no meaning.
    /// </summary>
    /// <param name="altitudes">pressure altitudes, m</param>
    /// <param name="machs">Mach numbers</param>
    /// <param name="points">a point (or null) for each altitude (first) and Mach number (second)</param>
    static member Carpet
        (
            title: string,
            quantity: EnvelopeQuantity,
            altitudes: IReadOnlyList<float>,
            machs: IReadOnlyList<float>,
            points: OperatingPoint[,],
            [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null
        ) : GenericChart =
        EnvelopeCharts.Check(altitudes, machs, points)
        let units = chosen units
        let at i j = value units quantity points[i, j]
        // Mach number goes to the right and altitude to the left, so that the families cross.
        let across i j = float j - 1.3 * float i

        let family index name' count length (place: int -> int -> int * int) group =
            [|
                for k in 0 .. count - 1 do
                    let cells = [| for l in 0 .. length - 1 -> place k l |]

                    let trace =
                        ChartStyle.series
                            group
                            (cells |> Array.map (fun (i, j) -> across i j))
                            (cells |> Array.map (fun (i, j) -> at i j))
                            (cells
                             |> Array.map (fun (i, j) -> noteOf units altitudes[i] machs[j] points[i, j]))
                            index
                            [ "legendgroup", box group ]

                    if k > 0 then ChartStyle.hidden trace else trace
            |],
            [|
                for k in 0 .. count - 1 do
                    let found =
                        [| for l in length - 1 .. -1 .. 0 -> place k l |]
                        |> Array.tryFind (fun (i, j) -> Double.IsFinite(at i j))

                    match found with
                    | Some(i, j) ->
                        ChartStyle.label (box (across i j)) (box (at i j)) (name' k) [
                            "xanchor", box (if index = 0 then "left" else "center")
                            "yanchor", box (if index = 0 then "middle" else "top")
                            "xshift", box (if index = 0 then 6 else 0)
                            "yshift", box (if index = 0 then 0 else -6)
                        ]
                    | None -> ()
            |]

        let heights, heightLabels =
            family
                0
                (fun k -> units.AltitudeText altitudes[k])
                altitudes.Count
                machs.Count
                (fun k l -> k, l)
                "equal altitude"

        let speeds, speedLabels =
            family 1 (fun k -> $"M {machs[k]:F2}") machs.Count altitudes.Count (fun k l -> l, k) "equal Mach number"

        ChartStyle.chart
            title
            (Array.append heights speeds)
            (ChartStyle.axis "" [ "showticklabels", box false; "ticks", box ""; "showgrid", box false ])
            (ChartStyle.axis (name units quantity) []) [
                yield! heightLabels
                yield! speedLabels
                ChartStyle.note "Carpet: read the value at the crossing of two lines; the scale across has no meaning."
            ] []

    /// <summary>A quantity over Mach number and altitude as lines of equal value; places without a point stay empty.</summary>
    /// <param name="altitudes">pressure altitudes, m, rising</param>
    /// <param name="machs">Mach numbers, rising</param>
    /// <param name="points">a point (or null) for each altitude (first) and Mach number (second)</param>
    static member Map
        (
            title: string,
            quantity: EnvelopeQuantity,
            altitudes: IReadOnlyList<float>,
            machs: IReadOnlyList<float>,
            points: OperatingPoint[,],
            [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null
        ) : GenericChart =
        EnvelopeCharts.Check(altitudes, machs, points)
        let units = chosen units

        let rows (cell: int -> int -> 'a) = [|
            for i in 0 .. altitudes.Count - 1 -> [| for j in 0 .. machs.Count - 1 -> cell i j |]
        |]

        let contour =
            ChartStyle.trace "contour" [
                "x", box (Seq.toArray machs)
                "y", box (altitudes |> Seq.map units.Altitude |> Seq.toArray)
                "z",
                box (
                    rows (fun i j ->
                        let v = value units quantity points[i, j]
                        if Double.IsFinite v then box v else null)
                )
                "text", box (rows (fun i j -> noteOf units altitudes[i] machs[j] points[i, j]))
                "hovertemplate", box "%{text}<extra></extra>"
                "colorscale",
                box (
                    ChartStyle.scale
                    |> Array.mapi (fun k c -> [| box (float k / float (ChartStyle.scale.Length - 1)); box c |])
                )
                "contours",
                box (
                    ChartStyle.make [
                        "showlabels", box true
                        "labelfont", box (ChartStyle.make [ "size", box 12; "color", box ChartStyle.ink ])
                    ]
                )
                "line", box (ChartStyle.make [ "width", box 1.2; "color", box ChartStyle.ink ])
                "connectgaps", box false
                "colorbar",
                box (
                    ChartStyle.make [
                        "title", box (ChartStyle.make [ "text", box (name units quantity); "side", box "right" ])
                    ]
                )
            ]

        ChartStyle.chart
            title
            [| contour |]
            (ChartStyle.axis "Mach number" [])
            (ChartStyle.axis $"Pressure altitude, {units.AltitudeUnit}" []) [ ChartStyle.note ChartStyle.caution ] []

    /// <summary>What sets the power over Mach number and altitude: regions of one governing limit.</summary>
    /// <param name="altitudes">pressure altitudes, m, rising</param>
    /// <param name="machs">Mach numbers, rising</param>
    /// <param name="points">rated points (or null) for each altitude (first) and Mach number (second)</param>
    static member Governing
        (
            title: string,
            altitudes: IReadOnlyList<float>,
            machs: IReadOnlyList<float>,
            points: OperatingPoint[,],
            [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null
        ) : GenericChart =
        EnvelopeCharts.Check(altitudes, machs, points)
        let units = chosen units

        let word (point: OperatingPoint | null) =
            match point with
            | null -> "no point"
            | p when p.Setting.Quantity = CycleSim.Engine.Quantity.NetThrust -> "flat thrust"
            | p -> CycleSim.Engine.QuantityText.Name p.Setting.Quantity

        let words =
            points
            |> Seq.cast<OperatingPoint | null>
            |> Seq.map word
            |> Seq.distinct
            |> Seq.sort
            |> Seq.toArray

        let traces =
            words
            |> Array.mapi (fun k w ->
                let cells = [|
                    for i in 0 .. altitudes.Count - 1 do
                        for j in 0 .. machs.Count - 1 do
                            if word points[i, j] = w then
                                i, j
                |]

                ChartStyle.trace "scatter" [
                    "name", box w
                    "mode", box "markers"
                    "x", ChartStyle.numbers (cells |> Array.map (fun (_, j) -> machs[j]))
                    "y", ChartStyle.numbers (cells |> Array.map (fun (i, _) -> units.Altitude altitudes[i]))
                    "text",
                    box (
                        cells
                        |> Array.map (fun (i, j) -> noteOf units altitudes[i] machs[j] points[i, j])
                    )
                    "hovertemplate", box "%{text}<extra></extra>"
                    "marker",
                    box (
                        ChartStyle.make [
                            "size", box 12
                            "symbol", box (ChartStyle.symbol k)
                            "color", box (ChartStyle.colour k)
                        ]
                    )
                ])

        ChartStyle.chart
            title
            traces
            (ChartStyle.axis "Mach number" [])
            (ChartStyle.axis $"Pressure altitude, {units.AltitudeUnit}" []) [ ChartStyle.note ChartStyle.caution ] []

namespace CycleSim.Charts

open System
open System.Collections.Generic
open System.Runtime.InteropServices
open CycleSim.Engine
open CycleSim.Reports
open CycleSim.Studies
open FSharp.Data.UnitSystems.SI.UnitSymbols
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

    static let hypot (x: float) (y: float) = sqrt (x * x + y * y)

    static let noteOf (units: ChartUnits) (limits: Limit seq) (altitude: float) (mach: float) reason point =
        match (point: OperatingPoint | null) with
        | null ->
            $"{units.AltitudeText altitude}, Mach {mach:F2}: no point"
            + if reason = "" then "" else "<br>" + reason
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

            let governs (p: OperatingPoint) =
                if p.Setting.Quantity = Quantity.NetThrust then
                    "flat thrust"
                else
                    $"{units.LimitText p.Setting} governs"

            let room limits p =
                match units.RoomText(limits, p) with
                | "" -> ""
                | left -> ", " + left

            $"{units.AltitudeText altitude}, Mach {mach:F2}: {units.ThrustText p.NetThrust}, SFC {units.SfcText p.Sfc}<br>{governs p}{room limits p}<br>T41 {units.TemperatureText p.T41}, EGT {units.TemperatureText p.T45}{margin}"

    /// Loops with the point of least SFC of each.
    static member private Loops
        (title, lines: (NamedPoints * OperatingPoint)[], stars: string, missing, units: ChartUnits)
        =
        let sfc (p: OperatingPoint) = units.Sfc p.Sfc

        let loop index (line: NamedPoints, least: OperatingPoint) = [
            ChartStyle.series
                line.Name
                (line.Points |> Seq.map (fun p -> units.Thrust p.NetThrust))
                (line.Points |> Seq.map sfc)
                (line.Points
                 |> Seq.map (fun p -> $"{line.Name}: " + noteOf units [] p.Flight.PressureAltitude p.Flight.Mach "" p))
                index
                []

            ChartStyle.trace "scatter" [
                "name", box $"{line.Name}, {stars}"
                "showlegend", box false
                "mode", box "markers"
                "x", ChartStyle.numbers [ units.Thrust least.NetThrust ]
                "y", ChartStyle.numbers [ sfc least ]
                "text",
                box [|
                    $"{line.Name}: {stars}, {units.SfcText least.Sfc} at {units.ThrustText least.NetThrust}"
                |]
                "hovertemplate", box "%{text}<extra></extra>"
                "marker",
                box (ChartStyle.make [ "size", box 11; "symbol", box "star"; "color", box (ChartStyle.colour index) ])
            ]
        ]

        // Towards no thrust SFC grows without bound; every bucket is shown to half as much again as its bottom.
        let top =
            lines
            |> Seq.map (fun (line, least) -> min (line.Points |> Seq.map sfc |> Seq.max) (1.5 * sfc least))
            |> Seq.max

        let bottom = lines |> Seq.map (snd >> sfc) |> Seq.min

        let most =
            lines
            |> Seq.collect (fun (line, _) -> line.Points)
            |> Seq.map (fun p -> units.Thrust p.NetThrust)
            |> Seq.max

        let margin = 0.06 * (top - bottom)

        ChartStyle.chart
            title
            [|
                yield! lines |> Seq.mapi loop |> Seq.concat
                ChartStyle.entry stars "star" ChartStyle.ink
            |]
            (ChartStyle.axis $"Net thrust, {units.ThrustUnit}" [ "range", box [| 0.0; 1.04 * most |] ])
            (ChartStyle.axis $"SFC, {units.SfcUnit}" [ "range", box [| bottom - margin; top + margin |] ]) [
                ChartStyle.cautioned $"Shown up to 1.5 times the least SFC of the highest line. {missing}"
            ] []

    /// <summary>SFC against net thrust, a loop for each line of points, the least SFC of each marked.</summary>
    /// <param name="lines">each in the order of thrust; at least one point altogether</param>
    /// <exception cref="T:System.ArgumentException">No points.</exception>
    static member SfcLoops
        (
            title: string,
            lines: IReadOnlyList<NamedPoints>,
            [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null
        ) : GenericChart =
        let lines =
            lines
            |> Seq.filter (fun l -> l.Points.Count > 0)
            |> Seq.map (fun l -> l, l.Points |> Seq.minBy _.Sfc)
            |> Seq.toArray

        if lines.Length = 0 then
            invalidArg (nameof lines) "a chart of no points"

        EnvelopeCharts.Loops(title, lines, "least SFC of the points", "", chosen units)

    /// <summary>
    /// SFC against net thrust up to a rating's thrust, a line for each loop (altitude, Mach number, temperature), the bottom of
    /// each bucket marked where the study found it.
    /// </summary>
    /// <exception cref="T:System.ArgumentException">No loops.</exception>
    static member ThrottleLoops
        (
            loops: IReadOnlyList<ThrottleLoop>,
            [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null
        ) : GenericChart =
        if loops.Count = 0 then
            invalidArg (nameof loops) "a chart of no loops"

        let units = chosen units

        let name (loop: ThrottleLoop) =
            let isa =
                if loop.IsaOffset = 0.0<K> then
                    ""
                else
                    $", ISA {ChartUnits.Text(float loop.IsaOffset, 0)} K"

            $"{units.AltitudeText(float loop.PressureAltitude)}, Mach {loop.Mach:F2}{isa}"

        let points (loop: ThrottleLoop) = [|
            for row in loop.Rows do
                match row.Point with
                | null -> ()
                | point -> point
        |]

        let missing =
            loops
            |> Seq.collect _.Rows
            |> Seq.filter (fun row -> isNull row.Point)
            |> Seq.map _.Reason
            |> ChartStyle.missing "Thrusts"

        EnvelopeCharts.Loops(
            $"{loops[0].Engine}: SFC against thrust, up to rating {loops[0].Rating}",
            [|
                for loop in loops ->
                    {
                        Name = name loop
                        Points = points loop
                    },
                    loop.Least.Point
            |],
            "least SFC",
            missing,
            units
        )

    static member private Check
        (
            altitudes: IReadOnlyList<float>,
            machs: IReadOnlyList<float>,
            points: OperatingPoint[,],
            reasons: string[,] | null
        ) =
        let fits (cells: 'a[,]) =
            altitudes.Count = Array2D.length1 cells && machs.Count = Array2D.length2 cells

        if not (fits points) then
            raise (
                ArgumentException
                    $"{altitudes.Count} altitudes and {machs.Count} Mach numbers for {Array2D.length1 points} x {Array2D.length2 points} points"
            )

        match reasons with
        | null -> ()
        | given when not (fits given) ->
            raise (ArgumentException "the reasons must be as many as the points, altitude by Mach number")
        | _ -> ()

        if points |> Seq.cast<OperatingPoint | null> |> Seq.forall isNull then
            raise (ArgumentException "a chart of no points")

    // What the pointer shows at a place.
    static member private Notes
        (
            altitudes: IReadOnlyList<float>,
            machs: IReadOnlyList<float>,
            points: OperatingPoint[,],
            units: ChartUnits,
            limits: IReadOnlyList<Limit> | null,
            reasons: string[,] | null
        ) : int -> int -> string =
        let limits =
            match limits with
            | null -> Seq.empty
            | given -> given

        fun i j ->
            let reason =
                match reasons with
                | null -> ""
                | given -> given[i, j]

            noteOf units limits altitudes[i] machs[j] reason points[i, j]

    static member private Missing(points: OperatingPoint[,], reasons: string[,] | null) =
        seq {
            for i in 0 .. Array2D.length1 points - 1 do
                for j in 0 .. Array2D.length2 points - 1 do
                    if isNull (box points[i, j]) then
                        match reasons with
                        | null -> ""
                        | given -> given[i, j]
        }
        |> ChartStyle.missing "Places"

    /// <summary>
    /// A quantity over altitude and Mach number as a carpet: lines of equal altitude and of equal Mach number, each family named
    /// at its ends; the scale across has no meaning.
    /// </summary>
    /// <param name="altitudes">pressure altitudes, m</param>
    /// <param name="machs">Mach numbers</param>
    /// <param name="points">a point (or null) for each altitude (first) and Mach number (second)</param>
    /// <param name="units">units shown; SI where null</param>
    /// <param name="limits">limits whose room the notes give; none where null</param>
    /// <param name="reasons">why there is no point, as the points; unknown where null</param>
    /// <exception cref="T:System.ArgumentException">Sizes that do not fit, or no point at all.</exception>
    static member Carpet
        (
            title: string,
            quantity: EnvelopeQuantity,
            altitudes: IReadOnlyList<float>,
            machs: IReadOnlyList<float>,
            points: OperatingPoint[,],
            [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null,
            [<Optional; DefaultParameterValue(null: IReadOnlyList<Limit> | null)>] limits: IReadOnlyList<Limit> | null,
            [<Optional; DefaultParameterValue(null: string[,] | null)>] reasons: string[,] | null
        ) : GenericChart =
        EnvelopeCharts.Check(altitudes, machs, points, reasons)
        let units = chosen units
        let notes = EnvelopeCharts.Notes(altitudes, machs, points, units, limits, reasons)
        let at (i, j) = value units quantity points[i, j]
        // Mach number goes to the right and altitude to the left, so that the families cross.
        let across (i, j) = float j - 1.3 * float i

        let cells = [|
            for i in 0 .. altitudes.Count - 1 do
                for j in 0 .. machs.Count - 1 -> i, j
        |]

        let there = cells |> Array.filter (at >> Double.IsFinite)

        let room share (values: float[]) =
            let low, high = Array.min values, Array.max values
            let margin = share * max (high - low) (1e-6 * abs high)
            low - margin, high + margin

        let left, right = there |> Array.map across |> room 0.14
        let bottom, top = there |> Array.map at |> room 0.12
        // Where a cell stands in the drawing, in pixels of a usual width.
        let pixels cell =
            720.0 * (across cell - left) / (right - left), 340.0 * (at cell - bottom) / (top - bottom)

        // A name goes beyond the end of its line, clear of the line of the other family that ends there.
        let beside (halfWidth: float) ending before crossing =
            let (x, y), (x0, y0), (x1, y1) = pixels ending, pixels before, pixels crossing

            let ex, ey =
                (x - x0) / (hypot (x - x0) (y - y0)), (y - y0) / (hypot (x - x0) (y - y0))

            let nx, ny =
                (y1 - y) / (hypot (x1 - x) (y1 - y)), (x - x1) / (hypot (x1 - x) (y1 - y))

            let facing = ex * nx + ey * ny
            let clear = (halfWidth * abs nx + 9.0 * abs ny + 5.0) / max 0.3 (abs facing)
            ex * clear, ey * clear

        let family
            index
            (title: string)
            (names: string[])
            (lines: (int * int)[][])
            (neighbour: int * int -> int * int)
            =
            [|
                for k, line in Array.indexed lines do
                    let trace =
                        ChartStyle.series
                            title
                            (line |> Array.map across)
                            (line |> Array.map at)
                            (line |> Array.map (fun (i, j) -> notes i j))
                            index
                            [
                                "legendgroup", box title
                                "line",
                                box (
                                    ChartStyle.make [
                                        "color", box (ChartStyle.colour index)
                                        "width", box 2.0
                                        "dash", box (ChartStyle.dash index)
                                        "shape", box "spline"
                                    ]
                                )
                            ]

                    if k > 0 then ChartStyle.hidden trace else trace
            |],
            [|
                for k, line in Array.indexed lines do
                    let solved = line |> Array.filter (at >> Double.IsFinite)

                    if solved.Length > 0 then
                        let ending = solved[solved.Length - 1]
                        let next = neighbour ending

                        let dx, dy =
                            if solved.Length > 1 && Array.contains next there then
                                beside (3.6 * float names[k].Length) ending solved[solved.Length - 2] next
                            else
                                4.0 * float names[k].Length + 6.0, 0.0

                        ChartStyle.label (box (across ending)) (box (at ending)) names[k] [
                            "xshift", box (round dx)
                            "yshift", box (round dy)
                            yield! ChartStyle.plate
                        ]
            |]

        let last = altitudes.Count - 1
        let next limit k = if k < limit then k + 1 else k - 1

        let heights, heightNames =
            family
                0
                "equal altitude"
                (altitudes |> Seq.map units.AltitudeText |> Seq.toArray)
                [| for i in 0..last -> [| for j in 0 .. machs.Count - 1 -> i, j |] |]
                (fun (i, j) -> next last i, j)

        let speeds, speedNames =
            family
                1
                "equal Mach number"
                (machs |> Seq.map (fun m -> $"M {m:F2}") |> Seq.toArray)
                [| for j in 0 .. machs.Count - 1 -> [| for i in 0..last -> i, j |] |]
                (fun (i, j) -> i, next (machs.Count - 1) j)

        let missing = EnvelopeCharts.Missing(points, reasons)

        ChartStyle.chart
            title
            (Array.append heights speeds)
            (ChartStyle.axis "" [
                "showticklabels", box false
                "ticks", box ""
                "showgrid", box false
                "range", box [| left; right |]
            ])
            (ChartStyle.axis (name units quantity) [ "range", box [| bottom; top |] ]) [
                yield! heightNames
                yield! speedNames
                ChartStyle.cautioned
                    $"Carpet: read the value at the crossing of two lines; the scale across has no meaning. {missing}"
            ] []

    /// <summary>A quantity over Mach number and altitude as lines of equal value; places without a point stay empty.</summary>
    /// <param name="altitudes">pressure altitudes, m, rising</param>
    /// <param name="machs">Mach numbers, rising</param>
    /// <param name="points">a point (or null) for each altitude (first) and Mach number (second)</param>
    /// <param name="units">units shown; SI where null</param>
    /// <param name="limits">limits whose room the notes give; none where null</param>
    /// <param name="reasons">why there is no point, as the points; unknown where null</param>
    /// <exception cref="T:System.ArgumentException">Sizes that do not fit, or no point at all.</exception>
    static member Map
        (
            title: string,
            quantity: EnvelopeQuantity,
            altitudes: IReadOnlyList<float>,
            machs: IReadOnlyList<float>,
            points: OperatingPoint[,],
            [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null,
            [<Optional; DefaultParameterValue(null: IReadOnlyList<Limit> | null)>] limits: IReadOnlyList<Limit> | null,
            [<Optional; DefaultParameterValue(null: string[,] | null)>] reasons: string[,] | null
        ) : GenericChart =
        EnvelopeCharts.Check(altitudes, machs, points, reasons)
        let units = chosen units
        let notes = EnvelopeCharts.Notes(altitudes, machs, points, units, limits, reasons)

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
                "text", box (rows notes)
                "hovertemplate", box "%{text}<extra></extra>"
                "colorscale",
                box (
                    ChartStyle.scale
                    |> Array.mapi (fun k c -> [| box (float k / float (ChartStyle.scale.Length - 1)); box c |])
                )
                // The dark end is what deserves care: a high temperature, a thin margin.
                "reversescale", box (quantity = EnvelopeQuantity.SurgeMargin)
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

        let missing = EnvelopeCharts.Missing(points, reasons)

        ChartStyle.chart
            title
            [| contour |]
            (ChartStyle.axis "Mach number" [])
            (ChartStyle.axis $"Pressure altitude, {units.AltitudeUnit}" []) [ ChartStyle.cautioned missing ] []

    /// <summary>
    /// What sets the power over Mach number and altitude: regions of one governing limit, with a marker for each point.
    /// </summary>
    /// <param name="altitudes">pressure altitudes, m, rising</param>
    /// <param name="machs">Mach numbers, rising</param>
    /// <param name="points">rated points (or null) for each altitude (first) and Mach number (second)</param>
    /// <param name="units">units shown; SI where null</param>
    /// <param name="limits">limits whose room the notes give; none where null</param>
    /// <param name="reasons">why there is no point, as the points; unknown where null</param>
    /// <exception cref="T:System.ArgumentException">Sizes that do not fit, or no point at all.</exception>
    static member Governing
        (
            title: string,
            altitudes: IReadOnlyList<float>,
            machs: IReadOnlyList<float>,
            points: OperatingPoint[,],
            [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null,
            [<Optional; DefaultParameterValue(null: IReadOnlyList<Limit> | null)>] limits: IReadOnlyList<Limit> | null,
            [<Optional; DefaultParameterValue(null: string[,] | null)>] reasons: string[,] | null
        ) : GenericChart =
        EnvelopeCharts.Check(altitudes, machs, points, reasons)
        let units = chosen units
        let notes = EnvelopeCharts.Notes(altitudes, machs, points, units, limits, reasons)

        let word (point: OperatingPoint | null) =
            match point with
            | null -> "no point"
            | p when p.Setting.Quantity = Quantity.NetThrust -> "flat thrust"
            | p -> $"{QuantityText.Name p.Setting.Quantity} governs"

        let words =
            points
            |> Seq.cast<OperatingPoint | null>
            |> Seq.map word
            |> Seq.distinct
            |> Seq.sort
            |> Seq.toArray

        let kind i j = Array.IndexOf(words, word points[i, j])
        let heights = altitudes |> Seq.map units.Altitude |> Seq.toArray

        let ground =
            let steps = float words.Length

            ChartStyle.trace "heatmap" [
                "x", box (Seq.toArray machs)
                "y", box heights
                "z",
                box [|
                    for i in 0 .. altitudes.Count - 1 -> [| for j in 0 .. machs.Count - 1 -> kind i j |]
                |]
                "zmin", box -0.5
                "zmax", box (steps - 0.5)
                "colorscale",
                box [|
                    for k in 0 .. words.Length - 1 do
                        for at in [ float k / steps; float (k + 1) / steps ] ->
                            [| box at; box (ChartStyle.of' ChartStyle.tints k) |]
                |]
                "showscale", box false
                "hoverinfo", box "skip"
            ]

        let traces =
            words
            |> Array.mapi (fun k w ->
                let cells = [|
                    for i in 0 .. altitudes.Count - 1 do
                        for j in 0 .. machs.Count - 1 do
                            if kind i j = k then
                                i, j
                |]

                ChartStyle.trace "scatter" [
                    "name", box w
                    "showlegend", box true
                    "mode", box "markers"
                    "x", ChartStyle.numbers (cells |> Array.map (fun (_, j) -> machs[j]))
                    "y", ChartStyle.numbers (cells |> Array.map (fun (i, _) -> heights[i]))
                    "text", box (cells |> Array.map (fun (i, j) -> notes i j))
                    "hovertemplate", box "%{text}<extra></extra>"
                    "marker",
                    box (
                        ChartStyle.make [
                            "size", box 7
                            "symbol", box (ChartStyle.symbol k)
                            "color", box (ChartStyle.colour k)
                        ]
                    )
                ])

        let missing = EnvelopeCharts.Missing(points, reasons)

        ChartStyle.chart
            title
            [| ground; yield! traces |]
            (ChartStyle.axis "Mach number" [ "showgrid", box false ])
            (ChartStyle.axis $"Pressure altitude, {units.AltitudeUnit}" [ "showgrid", box false ]) [
                ChartStyle.cautioned $"The ground changes half way between points. {missing}"
            ] []

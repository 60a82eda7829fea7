namespace CycleSim.Charts

open System
open System.Collections.Generic
open System.Runtime.InteropServices
open CycleSim.Air
open CycleSim.Engine
open CycleSim.Maps
open CycleSim.Reports
open Plotly.NET

/// Compressors: map, working line, surge margins.
[<AbstractClass; Sealed>]
type MapCharts private () =

    // Corrected flow in kg/s at 288.15 K and 101.325 kPa of W sqrt(RT)/P in m2, dry air.
    static let standardFlow = 101325.0 / sqrt (StandardAtmosphere.GasConstant * 288.15)

    static let read (compressor: ScaledCompressor) speed beta =
        let mutable m = MapReading()
        compressor.Map.Read(speed, beta, &m)

        struct (compressor.FlowScale * m.Value[0] * standardFlow,
                1.0 + compressor.RiseScale * m.Value[1],
                compressor.EfficiencyScale * m.Value[2])

    static let component' (engine: SizedEngine) (name: string) =
        match engine.Fan with
        | null -> engine.Compressors |> Array.tryFind (fun c -> c.Name = name)
        | fan when name = fan.Name -> Some fan
        | _ -> engine.Compressors |> Array.tryFind (fun c -> c.Name = name)

    static let find (engine: SizedEngine) (name: string) =
        match component' engine name with
        | Some found -> found
        | None -> raise (ArgumentException $"{engine.Definition.Name} has no compressor '{name}'")

    // Lines of equal efficiency: where the sides of the small cells of the map are crossed, with a gap behind each piece.
    static let contour compressor (speeds: float[]) (betas: float[]) level =
        let x, y = List<float>(), List<float>()

        let crossing struct (x0, y0, e0) struct (x1, y1, e1) =
            let share = (level - e0) / (e1 - e0)
            struct (x0 + share * (x1 - x0), y0 + share * (y1 - y0))

        for i in 0 .. speeds.Length - 2 do
            for j in 0 .. betas.Length - 2 do
                let corner a b = read compressor speeds[a] betas[b]
                let corners = [| corner i j; corner (i + 1) j; corner (i + 1) (j + 1); corner i (j + 1) |]

                let met = [|
                    for k in 0..3 do
                        let struct (_, _, e0) = corners[k]
                        let struct (_, _, e1) = corners[(k + 1) % 4]

                        if (e0 < level) <> (e1 < level) then
                            crossing corners[k] corners[(k + 1) % 4]
                |]

                if met.Length = 2 then
                    for struct (px, py) in met do
                        x.Add px
                        y.Add py

                    x.Add nan
                    y.Add nan

        x, y

    /// <summary>
    /// A compressor's map with speed lines, surge line and lines of equal efficiency, and working points on it with their surge
    /// margins. Corrected flow is that of dry air at 288.15 K and 101.325 kPa.
    /// </summary>
    /// <param name="engine">a sized engine</param>
    /// <param name="compressor">"fan" or the name of a core compressor</param>
    /// <param name="points">points of this engine in the order in which the line joins them; may be empty</param>
    /// <param name="units">units shown; SI where null</param>
    /// <exception cref="T:System.ArgumentException">No such compressor.</exception>
    static member CompressorMap
        (
            engine: SizedEngine,
            compressor: string,
            points: IReadOnlyList<OperatingPoint>,
            [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null
        ) : GenericChart =
        let units =
            match units with
            | null -> ChartUnits.SI
            | given -> given

        let scaled = find engine compressor
        let map = scaled.Map

        let reports =
            points
            |> Seq.map (fun p -> p, p.Compressors |> Seq.find (fun c -> c.Name = compressor))
            |> Seq.toArray

        // No further up than what is of use: a little above the fastest working point.
        let highest =
            reports
            |> Seq.map (fun (_, c) -> c.RelativeCorrectedSpeed + 0.05)
            |> Seq.fold max 1.1
            |> min map.HighestSpeed

        let speeds = [|
            for step in 0..30 do
                let speed = 0.3 + 0.05 * float step

                if speed >= map.LowestSpeed && speed <= highest + 1e-9 then
                    speed
        |]

        let betas = [| for k in 0..40 -> float k / 40.0 |]

        let fine = [|
            for k in 0..60 -> map.LowestSpeed + (highest - map.LowestSpeed) * float k / 60.0
        |]

        let flow struct (w: float, _: float, _: float) = units.Flow w
        let ratio struct (_: float, p: float, _: float) = p
        let efficiency struct (_: float, _: float, e: float) = e

        let best =
            seq {
                for s in fine do
                    for b in betas do
                        efficiency (read scaled s b)
            }
            |> Seq.max

        let levels = [|
            for step in 0..8 do
                let level = floor (best * 50.0) / 50.0 - 0.02 * float step

                if level > 0.6 then
                    level
        |]

        let islands =
            levels
            |> Array.mapi (fun k level ->
                let x, y = contour scaled fine betas level

                let trace =
                    ChartStyle.guide "equal efficiency" (x |> Seq.map units.Flow) y "#8c8c8c" 1.0 "dot"

                trace.SetProperty("legendgroup", "efficiency")
                if k > 0 then ChartStyle.hidden trace else trace)

        let speedLines =
            speeds
            |> Array.mapi (fun k speed ->
                let line = betas |> Array.map (read scaled speed)

                let trace =
                    ChartStyle.series
                        "corrected speed"
                        (line |> Array.map flow)
                        (line |> Array.map ratio)
                        (line
                         |> Array.map (fun p ->
                             $"{100.0 * speed:F0} %% corrected speed: {ChartUnits.Text(flow p, 1)} {units.FlowUnit}, PR {ratio p:F2}, efficiency {efficiency p:F3}"))
                        0
                        [
                            "line", ChartStyle.line ChartStyle.colours[4] 1.2 "solid"
                            "legendgroup", box "speed"
                        ]

                if k > 0 then ChartStyle.hidden trace else trace)

        let surge = fine |> Array.map (fun s -> read scaled s 1.0)

        let surgeLine =
            ChartStyle.guide
                "surge line"
                (surge |> Array.map flow)
                (surge |> Array.map ratio)
                ChartStyle.warning
                2.5
                "solid"

        let working =
            ChartStyle.series
                "working points"
                (reports |> Array.map (fun (_, c) -> units.Flow c.CorrectedFlow))
                (reports |> Array.map (fun (_, c) -> c.PressureRatio))
                (reports
                 |> Array.map (fun (p, c) ->
                     $"{units.AltitudeText p.Flight.PressureAltitude}, Mach {p.Flight.Mach:F2}, {units.ThrustText p.NetThrust}:<br>{ChartUnits.Text(units.Flow c.CorrectedFlow, 1)} {units.FlowUnit} corrected, PR {c.PressureRatio:F2}, {100.0 * c.RelativeCorrectedSpeed:F1} %% speed, efficiency {c.IsentropicEfficiency:F3},<br>surge margin {ChartUnits.Text(100.0 * c.SurgeMarginConstantFlow, 1)} %% at constant flow, {ChartUnits.Text(100.0 * c.SurgeMarginConstantSpeed, 1)} %% at constant speed"))
                0
                [
                    "mode", box "lines+markers"
                    "marker", box (ChartStyle.make [ "size", box 8; "color", box ChartStyle.colours[0] ])
                ]

        // What is left at constant flow, from each working point up to the surge line.
        let margins =
            let known =
                reports
                |> Array.map snd
                |> Array.filter (fun c -> Double.IsFinite c.SurgeMarginConstantFlow)

            let line = [|
                for c in known do
                    let flow = units.Flow c.CorrectedFlow
                    flow, c.PressureRatio
                    flow, c.PressureRatio * (1.0 + c.SurgeMarginConstantFlow)
                    nan, nan
            |]

            let trace =
                ChartStyle.guide
                    "surge margin at constant flow"
                    (line |> Seq.map fst)
                    (line |> Seq.map snd)
                    ChartStyle.colours[3]
                    1.2
                    "solid"

            // The thinnest, and the two ends of the line, in words; the others in the notes.
            let told =
                if known.Length = 0 then
                    [||]
                else
                    let span =
                        (known |> Seq.map _.CorrectedFlow |> Seq.max)
                        - (known |> Seq.map _.CorrectedFlow |> Seq.min)

                    // The thinnest always, the ends where they stand clear of it.
                    [
                        known |> Array.minBy _.SurgeMarginConstantFlow
                        Array.head known
                        Array.last known
                    ]
                    |> List.fold
                        (fun (kept: CompressorReport list) c ->
                            let clear (k: CompressorReport) =
                                abs (k.CorrectedFlow - c.CorrectedFlow) > 0.2 * span

                            if List.forall clear kept then c :: kept else kept)
                        []
                    |> List.toArray

            let words =
                told
                |> Array.map (fun c ->
                    ChartStyle.label
                        (box (units.Flow c.CorrectedFlow))
                        (box c.PressureRatio)
                        (ChartUnits.Text(100.0 * c.SurgeMarginConstantFlow, 1) + " %")
                        [
                            "xanchor", box "left"
                            "yanchor", box "top"
                            "xshift", box 5
                            "yshift", box -5
                            yield! ChartStyle.plate
                        ])

            trace, words, known.Length

        let marginLines, marginWords, withMargin = margins

        let efficiencyNames = [|
            for level in levels do
                let x, y = contour scaled fine betas level

                if x.Count > 0 then
                    let furthest =
                        Seq.init x.Count id
                        |> Seq.filter (fun k -> Double.IsFinite x[k])
                        |> Seq.maxBy (fun k -> x[k])

                    ChartStyle.label (box (units.Flow x[furthest])) (box y[furthest]) $"{100.0 * level:F0} %%" [
                        "font", box (ChartStyle.make [ "size", box 12; "color", box "#6a6a6a" ])
                        "xanchor", box "left"
                        "xshift", box 2
                        yield! ChartStyle.plate
                    ]
        |]

        let labels = [
            yield! efficiencyNames
            yield! marginWords

            for speed in speeds do
                if abs (speed * 10.0 - round (speed * 10.0)) < 1e-9 then
                    let top = read scaled speed 1.0

                    ChartStyle.label (box (flow top)) (box (ratio top)) $"{100.0 * speed:F0}" [
                        "xanchor", box "right"
                        "yanchor", box "bottom"
                        "xshift", box -4
                    ]
        ]

        ChartStyle.chart
            $"{engine.Definition.Name}: map of {compressor}, corrected speed in %% of design"
            [|
                yield! islands
                yield! speedLines
                surgeLine
                if withMargin > 0 then
                    marginLines
                if reports.Length > 0 then
                    working
            |]
            (ChartStyle.axis $"Corrected flow, {units.FlowUnit}" [])
            (ChartStyle.axis "Total pressure ratio" []) [
                yield! labels
                ChartStyle.cautioned
                    $"Lines of equal isentropic efficiency in per cent, every 2 points. Per cent beside working points: surge margin at constant flow, as good as the map."
            ] []

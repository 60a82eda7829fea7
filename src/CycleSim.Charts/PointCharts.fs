namespace CycleSim.Charts

open System.Runtime.InteropServices
open CycleSim.Reports
open Plotly.NET

/// One operating point, station by station.
[<AbstractClass; Sealed>]
type PointCharts private () =

    static let chosen (units: ChartUnits | null) =
        match units with
        | null -> ChartUnits.SI
        | given -> given

    // Stations of the bypass stream begin with 1 (SAE AS755); the free stream, inlet and core have the others.
    static let isBypass (station: StationReport) =
        station.Number.Length > 1 && station.Number[0] = '1'

    static let titleOf (units: ChartUnits) (point: OperatingPoint) =
        $"{point.EngineName} at {units.AltitudeText point.Flight.PressureAltitude}, Mach {point.Flight.Mach:F2}, {units.LimitText point.Setting}"

    static let noteOf (units: ChartUnits) (s: StationReport) =
        $"station {s.Number}, {s.Plane}:<br>{units.TemperatureText s.TotalTemperature}, {ChartUnits.Text(units.Pressure s.TotalPressure, 1)} {units.PressureUnit}, {ChartUnits.Text(units.Flow s.MassFlow, 2)} {units.FlowUnit}"

    /// <summary>
    /// Total temperature over specific entropy along the core and the bypass stream, the numbers of the stations beside them.
    /// Entropy is counted from station 2, per kilogram of the stream as it is there.
    /// </summary>
    static member TemperatureEntropy
        (point: OperatingPoint, [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null)
        : GenericChart =
        let units = chosen units
        let origin = (point.Station "2").Entropy
        let x (s: StationReport) = (s.Entropy - origin) / 1000.0
        let y (s: StationReport) = units.Temperature s.TotalTemperature

        let stream name index stations =
            ChartStyle.series
                name
                (stations |> Array.map x)
                (stations |> Array.map y)
                (stations |> Array.map (noteOf units))
                index
                [
                    "mode", box "lines+markers"
                    "marker",
                    box (
                        ChartStyle.make [
                            "size", box 7
                            "color", box (ChartStyle.colour index)
                            "symbol", box (ChartStyle.symbol index)
                        ]
                    )
                ]

        let core = point.Stations |> Seq.filter (isBypass >> not) |> Seq.toArray
        let fanFace = point.Stations |> Seq.filter (fun s -> s.Number = "2")

        let bypass =
            Seq.append fanFace (point.Stations |> Seq.filter isBypass) |> Seq.toArray

        // Stations that all but coincide in the drawing share the first one's label.
        let width = (core |> Seq.map x |> Seq.max) - (core |> Seq.map x |> Seq.min)
        let height = (core |> Seq.map y |> Seq.max) - (core |> Seq.map y |> Seq.min)

        let apart (a: StationReport) (b: StationReport) =
            abs (x a - x b) > 0.02 * width || abs (y a - y b) > 0.04 * height

        let labelled =
            point.Stations
            |> Seq.fold (fun kept s -> if kept |> List.forall (apart s) then s :: kept else kept) []

        let labels =
            labelled
            |> Seq.map (fun s ->
                ChartStyle.label (box (x s)) (box (y s)) s.Number [
                    "xanchor", box (if isBypass s then "right" else "left")
                    "xshift", box (if isBypass s then -7 else 7)
                    "yshift", box 7
                ])

        ChartStyle.chart
            $"Temperature over entropy: {titleOf units point}"
            [|
                stream "core" 0 core
                if bypass.Length > 1 then
                    stream "bypass" 1 bypass
            |]
            (ChartStyle.axis "Specific entropy above station 2, kJ/(kg K)" [])
            (ChartStyle.axis $"Total temperature, {units.TemperatureUnit}" []) [
                yield! labels
                ChartStyle.note "Stations as in SAE AS755; total states."
            ] []

    /// <summary>Total pressure (logarithmic) and total temperature along the stations.</summary>
    static member StationProfile
        (point: OperatingPoint, [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null)
        : GenericChart =
        let units = chosen units
        let bypass, core = point.Stations |> Seq.toArray |> Array.partition isBypass

        // The two streams are two lines of one look; the names stand in the order core, bypass.
        let lines name (value: StationReport -> float) index axis = [|
            for stations in [ core; bypass ] do
                if stations.Length > 0 then
                    let trace =
                        ChartStyle.series
                            name
                            []
                            (stations |> Array.map value)
                            (stations |> Array.map (noteOf units))
                            index
                            [
                                "x", box (stations |> Array.map (fun s -> s.Number))
                                "yaxis", box axis
                                "mode", box "lines+markers"
                                "marker",
                                box (ChartStyle.make [ "size", box 7; "symbol", box (ChartStyle.symbol index) ])
                            ]

                    if obj.ReferenceEquals(stations, core) then
                        trace
                    else
                        ChartStyle.hidden trace
        |]

        ChartStyle.chart
            $"Stations: {titleOf units point}"
            [|
                yield! lines "total pressure" (fun s -> units.Pressure s.TotalPressure) 0 "y"
                yield! lines "total temperature" (fun s -> units.Temperature s.TotalTemperature) 1 "y2"
            |]
            (ChartStyle.axis "Station (SAE AS755)" [ "type", box "category" ])
            (ChartStyle.axis $"Total pressure, {units.PressureUnit}" [ "type", box "log"; "dtick", box "D1" ]) [] [
                "yaxis2",
                box (
                    ChartStyle.axis $"Total temperature, {units.TemperatureUnit}" [
                        "overlaying", box "y"
                        "side", box "right"
                        "showgrid", box false
                    ]
                )
                "legend", box (ChartStyle.make [ "x", box 0.02; "y", box 0.98 ])
                "margin", box (ChartStyle.make [ "l", box 80; "r", box 80; "t", box 70; "b", box 80 ])
            ]

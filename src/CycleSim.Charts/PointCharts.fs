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

        // Stations that all but coincide in the drawing share a label.
        let width = (core |> Seq.map x |> Seq.max) - (core |> Seq.map x |> Seq.min)
        let height = (core |> Seq.map y |> Seq.max) - (core |> Seq.map y |> Seq.min)

        let apart (a: StationReport) (b: StationReport) =
            abs (x a - x b) > 0.02 * width || abs (y a - y b) > 0.04 * height

        let groups (stations: StationReport[]) =
            stations
            |> Array.fold
                (fun (groups: StationReport list list) s ->
                    match groups |> List.tryFindIndex (fun g -> not (apart (List.last g) s)) with
                    | Some k -> groups |> List.mapi (fun i g -> if i = k then s :: g else g)
                    | None -> [ s ] :: groups)
                []

        // On the free side of the line: compression and expansion run up and down, combustion to the right.
        let side (first: StationReport) =
            if isBypass first then -9, 12
            elif first.Number = "3" then -12, 10
            elif first.Number = "4" then 10, 8
            elif first.Number.StartsWith '4' then -10, -9
            else 10, -9

        let labels =
            Seq.append (groups core) (bypass |> Array.filter isBypass |> groups)
            |> Seq.map (fun group ->
                let first = List.last group
                let right, up = side first

                ChartStyle.label
                    (box (x first))
                    (box (y first))
                    (group |> List.rev |> List.map _.Number |> String.concat ", ")
                    [
                        "xanchor", box (if right < 0 then "right" else "left")
                        "xshift", box right
                        "yshift", box up
                        yield! ChartStyle.plate
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
                ChartStyle.note
                    "Stations as in SAE AS755; total states. The lines join stations and are not the path within a component."
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

        // A digit a decade is not enough to read by: 1, 2 and 5 of each.
        let pressures = point.Stations |> Seq.map (fun s -> units.Pressure s.TotalPressure)
        let decade value = int (floor (log10 value))

        let ticks = [|
            for power in decade (Seq.min pressures) .. decade (Seq.max pressures) do
                for digit in [ 1.0; 2.0; 5.0 ] -> digit * 10.0 ** float power
        |]

        let tickText (value: float) =
            ChartUnits.Text(value, max 0 (-(decade (value * 1.0001))))

        ChartStyle.chart
            $"Stations: {titleOf units point}"
            [|
                yield! lines "total pressure" (fun s -> units.Pressure s.TotalPressure) 0 "y"
                yield! lines "total temperature" (fun s -> units.Temperature s.TotalTemperature) 1 "y2"
            |]
            (ChartStyle.axis "Station (SAE AS755)" [ "type", box "category" ])
            (ChartStyle.axis $"Total pressure, {units.PressureUnit}" [
                "type", box "log"
                "tickmode", box "array"
                "tickvals", box ticks
                "ticktext", box (ticks |> Array.map tickText)
            ]) [
                ChartStyle.note "Core stations first, then those of the bypass stream; total states."
            ] [
                "yaxis2",
                box (
                    ChartStyle.axis $"Total temperature, {units.TemperatureUnit}" [
                        "overlaying", box "y"
                        "side", box "right"
                        "showgrid", box false
                    ]
                )
                "legend",
                box (ChartStyle.make [ "orientation", box "h"; "x", box 0.0; "y", box 1.02; "yanchor", box "bottom" ])
                "margin", box (ChartStyle.make [ "l", box 80; "r", box 80; "t", box 90; "b", box 135 ])
            ]

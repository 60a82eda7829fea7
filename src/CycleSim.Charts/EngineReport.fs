namespace CycleSim.Charts

open System
open System.Collections.Generic
open System.Runtime.InteropServices
open CycleSim.Air
open CycleSim.Engine
open CycleSim.Reports
open CycleSim.Studies
open FSharp.Data.UnitSystems.SI.UnitSymbols

/// Where the engine of a report comes from.
type ReportSource = {
    /// Text of the definition.
    Text: string
    /// What it takes to find the numbers again: definition, its hash, program version, command line.
    Provenance: IReadOnlyList<KeyValuePair<string, string>>
    /// The caution that stands first and last.
    Caution: string
}

/// One file about an engine that is read with no network: definition, design point, ratings, envelope, margins, penalties.
[<AbstractClass; Sealed>]
type EngineReport private () =

    static let number digits (value: float) = ChartUnits.Text(value, digits)
    static let percent digits (value: float) = ChartUnits.Text(100.0 * value, digits)


    // "1.4e-16"; nothing at all is said so.
    static let power10 (value: float) =
        if value = 0.0 then
            "nothing"
        else
            value.ToString("0.0e0", Globalization.CultureInfo.InvariantCulture)

    static member private Definition(page: ReportPage, engine: SizedEngine, units: ChartUnits, source: ReportSource) =
        let d = engine.Definition
        page.Section "Definition"
        let flight = d.Design.Flight

        page.Facts [
            "design point",
            $"{units.AltitudeText flight.PressureAltitude}, Mach {flight.Mach:F2}, ISA {flight.IsaOffset:F0} K, {number 1 (units.Flow engine.DesignMassFlow)} {units.FlowUnit} of air, T4 {units.TemperatureText engine.DesignT4}"
            if engine.HasFan then
                "bypass ratio", number 2 d.Design.BypassRatio
            "net thrust there", units.ThrustText engine.DesignThrust
            "exhaust",
            (if not engine.HasFan then "one jet"
             elif isNull d.Mixer then "separate jets"
             else "mixed")
        ]

        page.Table(
            "Compressors at the design point",
            2,
            [ "name"; "spool"; "pressure ratio"; "map" ],
            [
                match d.Fan with
                | null -> ()
                | fan -> [ "fan"; fan.Spool; number 3 fan.PressureRatio; "general shape" ]

                for c in d.Compressors do
                    [
                        c.Name
                        c.Spool
                        number 3 c.PressureRatio
                        (if c.StageWork.Count > 0 then
                             $"{c.StageWork.Count} stages stacked"
                         elif isNull c.Map then
                             "general shape"
                         else
                             "own table")
                    ]
            ]
        )

        if d.AirPorts.Count > 0 then
            page.Table(
                "Air taken",
                3,
                [ "port"; "from"; "to"; "share %"; $"flow {units.FlowUnit}"; "normally" ],
                [
                    for p in d.AirPorts do
                        [
                            p.Name
                            p.From
                            (match p.To with
                             | AirDestination.Overboard -> "overboard"
                             | AirDestination.BypassDuct -> "bypass duct"
                             | AirDestination.Vane -> $"{p.Turbine} vane"
                             | _ -> $"{p.Turbine} rotor")
                            (if p.Fraction > 0.0 then percent 2 p.Fraction else "–")
                            (if p.Flow > 0.0 then number 2 (units.Flow p.Flow) else "–")
                            (if p.NormallyShut then
                                 "shut"
                             elif p.Scheduled then
                                 $"open below {percent 0 p.OpenBelow} %% speed"
                             else
                                 "open")
                        ]
                ]
            )

    static member private Components(page: ReportPage, p: OperatingPoint, units: ChartUnits) =
        page.Table(
            "Compressors",
            1,
            [
                "name"
                "pressure ratio"
                "isentropic efficiency %"
                "polytropic efficiency %"
                $"corrected flow {units.FlowUnit}"
                "power MW"
                "surge margin %"
                "at constant speed %"
            ],
            [
                for c in p.Compressors do
                    [
                        c.Name
                        number 3 c.PressureRatio
                        percent 1 c.IsentropicEfficiency
                        percent 1 c.PolytropicEfficiency
                        number 2 (units.Flow c.CorrectedFlow)
                        number 3 (c.Power / 1e6)
                        percent 1 c.SurgeMarginConstantFlow
                        percent 1 c.SurgeMarginConstantSpeed
                    ]
            ]
        )

        page.Table(
            "Turbines",
            1,
            [
                "name"
                "expansion ratio"
                "isentropic efficiency %"
                "work kJ/kg"
                "power MW"
                "choked"
            ],
            [
                for t in p.Turbines do
                    [
                        t.Name
                        number 3 t.ExpansionRatio
                        percent 1 t.IsentropicEfficiency
                        number 1 (t.SpecificWork / 1000.0)
                        number 3 (t.Power / 1e6)
                        (if t.Choked then "yes" else "no")
                    ]
            ]
        )

        page.Table(
            "Spools",
            1,
            [ "name"; "speed %"; "rpm"; "turbine power MW"; "taken off kW" ],
            [
                for s in p.Spools do
                    [
                        s.Name
                        percent 1 s.RelativeSpeed
                        number 0 s.Rpm
                        number 3 (s.TurbinePower / 1e6)
                        number 1 (s.Offtake / 1000.0)
                    ]
            ]
        )

        page.Table(
            "Nozzles",
            1,
            [
                "name"
                "pressure ratio"
                "exit speed m/s"
                "effective area m²"
                $"gross thrust {units.ThrustUnit}"
                "choked"
            ],
            [
                for n in p.Nozzles do
                    [
                        n.Name
                        number 3 n.PressureRatio
                        number 1 n.ExitSpeed
                        number 4 n.EffectiveArea
                        number units.ThrustDigits (units.Thrust n.GrossThrust)
                        (if n.Choked then "yes" else "no")
                    ]
            ]
        )

    static member private Design(page: ReportPage, model: EngineModel, units: ChartUnits) =
        page.Section "Design point"
        let p = model.DesignPoint()

        page.Facts [
            "net thrust", units.ThrustText p.NetThrust
            "installed thrust", units.ThrustText p.InstalledThrust
            "fuel flow", $"{number units.FuelFlowDigits (units.FuelFlow p.FuelFlow)} {units.FuelFlowUnit}"
            "SFC", units.SfcText p.Sfc
            "overall pressure ratio P3/P2", number 2 p.OverallPressureRatio
            "EPR P5/P2", number 4 p.EnginePressureRatio
            "thermal, propulsive, overall efficiency",
            $"{percent 1 p.ThermalEfficiency}, {percent 1 p.PropulsiveEfficiency}, {percent 1 p.OverallEfficiency} %%"
            "audit",
            $"mass and energy close to {power10 p.Audit.LargestImbalance}, equations to {power10 p.Outcome.Residual}"
        ]

        page.Table(
            "Stations (SAE AS755), total states",
            2,
            [
                "station"
                "plane"
                $"W {units.FlowUnit}"
                $"Tt {units.TemperatureUnit}"
                $"Pt {units.PressureUnit}"
                "fuel-air ratio"
            ],
            [
                for s in p.Stations do
                    [
                        s.Number
                        s.Plane
                        number 2 (units.Flow s.MassFlow)
                        number 1 (units.Temperature s.TotalTemperature)
                        number 2 (units.Pressure s.TotalPressure)
                        number 5 s.FuelAirRatio
                    ]
            ]
        )

        page.Chart(PointCharts.StationProfile(p, units))
        page.Chart(PointCharts.TemperatureEntropy(p, units))

        EngineReport.Components(page, p, units)

        // What is nothing is not drawn: no ram drag at rest, no nacelle drag where none is defined.
        let losses =
            [|
                {
                    Name = "ram drag"
                    Amount = -units.Thrust p.RamDrag
                }
                {
                    Name = "nacelle"
                    Amount = units.Thrust p.InstalledThrust - units.Thrust p.NetThrust
                }
            |]
            |> Array.filter (fun loss -> abs loss.Amount > 1e-9 * units.Thrust p.GrossThrust)

        if losses.Length > 0 then
            page.Chart(
                LossCharts.Waterfall(
                    "From gross to installed thrust",
                    {
                        Name = "gross thrust"
                        Amount = units.Thrust p.GrossThrust
                    },
                    losses,
                    "installed thrust",
                    units.ThrustUnit
                )
            )

    // A rating with a thrust of its own is one of the ground; the others are shown where the engine was designed to fly.
    static member private Places(model: EngineModel, rating: RatingDefinition) : struct (float * float)[] =
        let design = model.Engine.Definition.Design.Flight

        if rating.Thrust > 0.0 then
            [| for feet in [ 0.0; 2000.0; 5000.0; 8000.0 ] -> struct (feet * 0.3048, 0.0) |]
        else
            [|
                for feet in [ 10000.0; 5000.0; 0.0 ] ->
                    struct (max 0.0 (design.PressureAltitude - feet * 0.3048), design.Mach)
            |]

    static member private Rating(page: ReportPage, model: EngineModel, rating: RatingDefinition, units: ChartUnits) =
        page.Heading $"Rating {rating.Name}"

        page.Attempt(fun () ->
            let results = [|
                for struct (altitude, mach) in EngineReport.Places(model, rating) do
                    FlatRating.Run(model, rating.Name, altitude * 1.0<m>, mach)
            |]

            page.Words(
                "Limits: "
                + (results[0].Limits |> Seq.map units.LimitText |> String.concat "; ")
                + $". Flat to ISA {number 1 (float results[0].FlatTo)} K."
            )

            page.Chart(RatingCharts.FlatRating(results, units))

            page.Table(
                "",
                1,
                [
                    $"altitude {units.AltitudeUnit}"
                    "Mach"
                    $"flat thrust {units.ThrustUnit}"
                    $"break {units.TemperatureUnit}"
                    "ISA K"
                    "limit there"
                    "lapse %/K"
                ],
                [
                    for r in results do
                        [
                            number 0 (units.Altitude(float r.PressureAltitude))
                            number 2 r.Mach
                            number units.ThrustDigits (units.Thrust(float r.FlatThrust))
                            number 1 (units.Temperature(float r.BreakTemperature))
                            number 1 (float r.BreakIsaOffset)
                            QuantityText.Name r.BreakLimit.Quantity
                            percent 2 (float r.LapsePerKelvin)
                        ]
                ]
            ))

    static member private Envelope(page: ReportPage, model: EngineModel, rating: string, units: ChartUnits) =
        page.Section "Envelope"

        page.Attempt(fun () ->
            let design = model.Engine.Definition.Design.Flight
            let ceiling = max 12500.0 design.PressureAltitude
            let altitudes = [| for k in 0..20 -> ceiling * float k / 20.0 |]
            let machs = [| for k in 0..18 -> max 0.9 design.Mach * float k / 18.0 |]
            let known = model.Rating rating

            let at offset =
                let places =
                    Array2D.init altitudes.Length machs.Length (fun i j ->
                        let flight = FlightCondition.AtIsaOffset(altitudes[i], machs[j], offset)

                        try
                            model.AtRating(&flight, known), ""
                        with
                        | :? NoSolutionException
                        | :? CycleSim.Matching.RatingException as none ->
                            Unchecked.defaultof<OperatingPoint>, none.Message)

                Array2D.map fst places, Array2D.map snd places

            let points, reasons = at 0.0

            page.Words
                $"Rating {rating} at standard temperature over the whole range of altitude and Mach number, also where the aeroplane would not fly it."

            for quantity, name in
                [
                    EnvelopeQuantity.NetThrust, "net thrust"
                    EnvelopeQuantity.Sfc, "SFC"
                    EnvelopeQuantity.SurgeMargin, "smallest surge margin"
                ] do
                page.Chart(
                    EnvelopeCharts.Map(
                        $"Rating {rating}, ISA: {name}",
                        quantity,
                        altitudes,
                        machs,
                        points,
                        units,
                        known.Limits,
                        reasons
                    )
                )

            // On a standard day much of it is flat; on a hot one the limits speak.
            for offset in [ 0.0; 20.0 ] do
                let points, reasons = if offset = 0.0 then points, reasons else at offset
                let day = if offset = 0.0 then "ISA" else $"ISA +{offset:F0} K"

                page.Attempt(fun () ->
                    page.Chart(
                        EnvelopeCharts.Governing(
                            $"Rating {rating}, {day}: what sets the power",
                            altitudes,
                            machs,
                            points,
                            units,
                            known.Limits,
                            reasons
                        )
                    )))

    static member private Throttle(page: ReportPage, model: EngineModel, rating: string, units: ChartUnits) =
        page.Section "Throttle"

        page.Attempt(fun () ->
            let design = model.Engine.Definition.Design.Flight

            let loops = [|
                for share in [ 0.0; 0.5; 1.0 ] do
                    let flight =
                        FlightCondition.AtIsaOffset(share * design.PressureAltitude, share * design.Mach, 0.0)

                    if share = 1.0 || design.PressureAltitude > 0.0 || design.Mach > 0.0 then
                        Throttle.Loop(model, flight, rating, 0.1, 25)
            |]

            page.Chart(EnvelopeCharts.ThrottleLoops(loops, units)))

    static member private Compressors(page: ReportPage, model: EngineModel, rating: string, units: ChartUnits) =
        page.Section "Compressors and surge margins"
        let engine = model.Engine

        page.Attempt(fun () ->
            let loop =
                Throttle.Loop(model, FlightCondition.AtIsaOffset(0.0, 0.0, 0.0), rating, 0.05, 20)

            let points = [|
                for row in loop.Rows do
                    match row.Point with
                    | null -> ()
                    | point -> point
            |]

            let names = [
                if engine.HasFan then
                    "fan"
                for c in engine.Compressors do
                    c.Name
            ]

            page.Words
                $"Working lines static at sea level, ISA, from a twentieth of the thrust of rating {rating} up to it."

            for name in names do
                page.Chart(MapCharts.CompressorMap(engine, name, points, units)))

        page.Attempt(fun () ->
            let survey = SurgeSurvey.Run(model, rating)
            page.Chart(LossCharts.SurgeBudget(survey, units))

            page.Table(
                "Thinnest surge margin of each compressor",
                1,
                [
                    "compressor"
                    "margin %"
                    "needed %"
                    "slack points"
                    $"altitude {units.AltitudeUnit}"
                    "Mach"
                    "ISA K"
                    "thrust of rating %"
                ],
                [
                    for b in survey.Budgets do
                        [
                            b.Compressor
                            percent 1 b.Thinnest.MarginConstantFlow
                            percent 1 b.Required
                            percent 1 b.Slack
                            number 0 (units.Altitude(float b.Thinnest.PressureAltitude))
                            number 2 b.Thinnest.Mach
                            number 0 (float b.Thinnest.IsaOffset)
                            percent 0 b.Thinnest.ThrustShare
                        ]
                ]
            )

            page.Note
                "Needed: textbook allowances, from memory. Margins are steady state and as good as the compressor maps.")

    static member private Penalties(page: ReportPage, model: EngineModel, rating: string, units: ChartUnits) =
        page.Section "What bleed, power and wear cost"

        page.Attempt(fun () ->
            let flight = model.Engine.Definition.Design.Flight
            // A load that matters on an engine of this size.
            let power = if model.Engine.DesignThrust > 15e3 then 100.0 else 10.0

            let loads = [|
                // What a schedule opens costs nothing where it is shut.
                for port in model.Engine.Definition.AirPorts |> Seq.filter (_.Scheduled >> not) do
                    {
                        Name = $"1 %% from {port.Name}"
                        Items = [| LoadItem.AirShare(port.Name, 0.01) |]
                    }

                    {
                        Name = $"1 {units.FlowUnit} from {port.Name}"
                        Items = [| LoadItem.Air(port.Name, 1.0<kg / s> / units.Flow 1.0) |]
                    }
                for spool in model.DesignPoint().Spools do
                    {
                        Name = $"{number 0 power} kW from {spool.Name}"
                        Items = [| LoadItem.Shaft(spool.Name, power * 1000.0<W>) |]
                    }
            |]

            let result = Penalties.Run(model, flight, rating, loads)
            // Per cent and flow of one port are the same picture twice.
            let drawn =
                result.Loads
                |> Seq.filter (fun l -> l.Items[0].Kind <> LoadKind.Flow)
                |> Seq.toArray

            page.Chart(LossCharts.Penalties({ result with Loads = drawn }, false))

            page.Words
                $"At {units.AltitudeText flight.PressureAltitude}, Mach {flight.Mach:F2}, ISA {flight.IsaOffset:F0} K, on the thrust of rating {rating}; full solutions, one load at a time."

            page.Table(
                "",
                1,
                [
                    "load"
                    "SFC at constant thrust %"
                    "T41 K"
                    "EGT K"
                    "thrust at the limit %"
                    "break K"
                ],
                [
                    for p in result.Loads do
                        [
                            p.Name
                            percent 3 p.AtThrust.Full.Sfc
                            number 2 (float p.AtThrust.Full.T41)
                            number 2 (float p.AtThrust.Full.T45)
                            percent 3 p.AtLimit.Full.NetThrust
                            number 2 (float p.Break)
                        ]
                ]
            )

            model.At(&flight, Quantity.NetThrust, result.AtThrust.NetThrust) |> ignore
            let influence = model.InfluenceOfLastPoint()

            let steps = [|
                for name in influence.Inputs do
                    if name.Contains "factor" then
                        { Name = name; Amount = -0.01 }
                    elif name.EndsWith("_W", StringComparison.Ordinal) then
                        { Name = name; Amount = 1000.0 * power }
                    elif name.EndsWith("fraction", StringComparison.Ordinal) then
                        { Name = name; Amount = 0.01 }
            |]

            page.Chart(LossCharts.Tornado("What moves SFC at this thrust", influence, "sfc_kg_per_N_s", steps)))

    /// <summary>
    /// The report of an engine as one HTML page: nothing is fetched when it is read. The same engine and source give the same
    /// bytes; what has no point is left out with its reason.
    /// </summary>
    /// <param name="source">text of the definition, provenance and caution</param>
    /// <param name="units">units shown; SI with °C where null</param>
    /// <exception cref="T:CycleSim.Reports.NoSolutionException">The design point itself has no solution.</exception>
    static member Html
        (
            model: EngineModel,
            source: ReportSource,
            [<Optional; DefaultParameterValue(null: ChartUnits | null)>] units: ChartUnits | null
        ) : string =
        let units =
            match units with
            | null -> ChartUnits.SI
            | given -> given

        let definition = model.Engine.Definition
        let page = ReportPage $"{definition.Name}: engine report"
        page.Opening(definition.Name, definition.Description)
        page.Caution source.Caution
        page.Contents()
        EngineReport.Definition(page, model.Engine, units, source)
        EngineReport.Design(page, model, units)
        page.Section "Ratings"

        if definition.Ratings.Count = 0 then
            page.Note "The definition gives no rating."

        for rating in definition.Ratings do
            EngineReport.Rating(page, model, rating, units)

        // The envelope is that of a rating for flight where there is one.
        let inFlight =
            definition.Ratings
            |> Seq.tryFind (fun r -> r.Thrust = 0.0)
            |> Option.orElse (Seq.tryHead definition.Ratings)

        match inFlight with
        | None -> ()
        | Some rating ->
            EngineReport.Throttle(page, model, rating.Name, units)
            EngineReport.Envelope(page, model, rating.Name, units)
            EngineReport.Compressors(page, model, definition.Ratings[0].Name, units)
            EngineReport.Penalties(page, model, rating.Name, units)

        page.Section "The definition as it was read"
        page.Text source.Text
        page.Section "Provenance"
        page.Facts [ for entry in source.Provenance -> entry.Key.Replace('_', ' '), entry.Value ]
        page.Caution source.Caution
        page.Html

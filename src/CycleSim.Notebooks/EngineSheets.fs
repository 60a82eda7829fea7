namespace CycleSim.Notebooks

open CycleSim.Definitions
open CycleSim.Engine
open CycleSim.Reports

/// An engine: as defined, and as sized.
module internal EngineSheets =
    let private design (design: DesignPoint) = [
        let flight = design.Flight

        "design point",
        $"{Figures.decimals 0 flight.PressureAltitude} m, Mach {Figures.decimals 3 flight.Mach}, ISA {Figures.offset flight.IsaOffset} K"

        if design.MassFlow > 0.0 then
            "air flow", $"{Figures.flow design.MassFlow} kg/s"
        else
            "net thrust", $"{Figures.force design.NetThrust} kN"

        if design.BypassRatio > 0.0 then
            "bypass ratio", Figures.decimals 2 design.BypassRatio

        if design.CombustorExitTemperature > 0.0 then
            "T4", $"{Figures.temperature design.CombustorExitTemperature} K"
        else
            "T41", $"{Figures.temperature design.RotorInletTemperature} K"
    ]

    let private machines (engine: EngineDefinition) =
        let efficiency (e: DesignEfficiency) = [
            if e.Polytropic then "polytropic" else "isentropic"
            Figures.percent 2 e.Value
        ]

        let stages count =
            if count = 1 then "1 stage" else $"{count} stages"

        {
            Title = "Compressors and turbines at design"
            TextColumns = 4
            Columns = [
                "component"
                "spool"
                "map"
                "efficiency is"
                "efficiency %"
                "pressure ratio"
            ]
            Rows = [
                match engine.Fan with
                | null -> ()
                | fan -> [
                    "fan"
                    fan.Spool
                    "general shape"
                    yield! efficiency fan.Efficiency
                    Figures.decimals 3 fan.PressureRatio
                  ]
                for c in engine.Compressors do
                    [
                        c.Name
                        c.Spool
                        (if isNull c.Map then "general shape" else "its own")
                        yield! efficiency c.Efficiency
                        Figures.decimals 3 c.PressureRatio
                    ]
                for t in engine.Turbines do
                    [
                        t.Name
                        t.Spool
                        stages t.Stages
                        yield! efficiency t.Efficiency
                        Figures.none
                    ]
            ]
        }

    let private destination (port: AirPort) =
        match port.To with
        | AirDestination.BypassDuct -> "bypass duct"
        | AirDestination.Vane -> $"{port.Turbine} vane"
        | AirDestination.Rotor -> $"{port.Turbine} rotor"
        | _ -> "overboard"

    let private ports (engine: EngineDefinition) = {
        Title = "Air taken from compressors (share of the compressor's inlet flow)"
        TextColumns = 3
        Columns = [ "name"; "from"; "to"; "share %"; "flow kg/s" ]
        Rows = [
            for p in engine.AirPorts ->
                [
                    p.Name
                    p.From
                    destination p
                    Figures.percent 2 p.Fraction
                    Figures.flow p.Flow
                ]
        ]
    }

    let private ratings (engine: EngineDefinition) = {
        Title = "Ratings as defined (a dash follows from the rest)"
        TextColumns = 2
        Columns = [ "rating"; "limits"; "thrust kN"; "flat to ISA K" ]
        Rows = [
            for r in engine.Ratings ->
                [
                    r.Name
                    r.Limits |> Seq.map Figures.limit |> String.concat "; "
                    (if r.Thrust > 0.0 then
                         Figures.force r.Thrust
                     else
                         Figures.none)
                    Figures.offset r.FlatTo
                ]
        ]
    }

    let ofDefinition (engine: EngineDefinition) = {
        Title = engine.Name
        Parts = [
            Facts [
                if engine.Description <> "" then
                    "what it is", engine.Description
                yield! design engine.Design
            ]
            Grid(machines engine)
            Grid(ratings engine)
            FoldedGrid(ports engine)
        ]
    }

    let ofLoaded (loaded: LoadedDefinition) =
        let sheet = ofDefinition loaded.Engine

        {
            sheet with
                Parts =
                    sheet.Parts
                    @ [ Remark $"Definition {loaded.Source}, SHA-256 {loaded.Hash[..15]}." ]
        }

    let ofModel (model: EngineModel) =
        let engine = model.Engine

        {
            Title = $"{engine.Definition.Name}, sized"
            Parts = [
                Facts [
                    "net thrust at design", $"{Figures.force engine.DesignThrust} kN"
                    "air flow at design", $"{Figures.flow engine.DesignMassFlow} kg/s"
                    "T4 at design", $"{Figures.temperature engine.DesignT4} K"
                    "T41 at design", $"{Figures.temperature engine.DesignRotorInlet} K"
                    "core nozzle, effective throat", $"{Figures.decimals 4 engine.CoreNozzleArea} m2"
                    if engine.BypassNozzleArea > 0.0 then
                        "bypass nozzle, effective throat", $"{Figures.decimals 4 engine.BypassNozzleArea} m2"
                ]
                FoldedGrid {
                    Title = "Inputs of an operating point"
                    TextColumns = 1
                    Columns = [ "input"; "at design" ]
                    Rows = [
                        for name, value in Seq.zip engine.Layout.Names engine.DesignInputs ->
                            [ name; Figures.general value ]
                    ]
                }
            ]
        }
